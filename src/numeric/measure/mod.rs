//! Measures of how good predictions are, each with its definition.
//!
//! A measure that is undefined for the given values (no variation, one class, ...) is `None`,
//! never a number that looks like one. None of them knows parts: whether predictions of all
//! parts are pooled or measures are averaged over parts is the caller's choice, to be said.

mod association;
mod binary;
mod careful;
mod classes;
mod counts;
mod distribution;
mod prediction_interval;
mod regression;
mod survival;

pub use association::{correlation_ratio, cramers_v};
pub use binary::{
    BinaryMeasures, Calibration, Confusion, area_under_curve, area_under_curve_counts, calibration,
};
pub use careful::{CarefulInterval, ErrorsOfPart, careful_interval};
pub use classes::{ClassMeasures, predicted_class};
pub use counts::{CountMeasures, poisson_deviance};
pub use distribution::{chi_squared_tail, normal_quantile, normal_tail};
pub use prediction_interval::{PartPrediction, prediction_interval, prediction_interval_guarantee};
pub use regression::{Agreement, Baseline, Line, quantile, quartiles, r_squared, spearman};
pub use survival::{
    Concordance, Curve, CurveStep, LogRank, brier_terms, concordance, kaplan_meier, log_rank,
    time_dependent_area, time_dependent_brier,
};
