//! The whole procedure: preparation, choice of share and strength, fit; carried out as one on any
//! training rows, so that nothing about it is ever learnt from a held-out sample.

mod feasible;
mod hazard;
mod nested;
mod part;
mod part_error;
mod recalibration;
mod tally;
mod tune;
mod weighting;

pub use feasible::check_plans;
pub use hazard::Hazard;
pub use nested::{Hazards, HeldOut, OuterFit, PairFit, hazards, nested, one_split, without_pairs};
pub use part::{PartFit, chosen_predictors, fit_part, penalised_freedom};
pub use part_error::{ErrorMeasure, part_errors};
pub use recalibration::{count_calibration_slope, time_calibration_slope};
pub use tally::Tally;
pub use tune::{Cut, ENOUGH, Extended, Reach, Tuned, tune};
pub use weighting::{FirstStage, Weighting, first_stage};

use crate::base::work::Cancelled;
use crate::numeric::choose::Rule;
use crate::numeric::error::{FitError, Stop};
use crate::numeric::matrix::Matrix;
use crate::numeric::parts::{PartsParams, PlanError, Structure};
use crate::numeric::path::Grouping;
use crate::numeric::penalty::Sign;
use crate::numeric::predictors::Predictors;
use crate::numeric::response::Response;
use crate::numeric::samples::Samples;
use crate::numeric::step::{Chain, ChainStop, StepError};
use crate::numeric::task::Scaling;

/// What a procedure works on: all samples, those of held-out parts included. Shared by all parts.
#[derive(Clone, Copy, Debug)]
pub struct Material<'a> {
    /// The samples after the steps that learn nothing.
    pub samples: &'a Samples,
    /// Their predictor matrix, with what every fit on it shares.
    pub predictors: &'a Predictors,
    /// The outcome of each sample.
    pub response: &'a Response,
    /// n × q unpenalised covariates.
    pub covariates: &'a Matrix,
    /// Sample weights.
    pub weights: Option<&'a [f64]>,
    /// Units, batches, strata, order.
    pub structure: Structure<'a>,
}

impl Material<'_> {
    /// The sample weight of a row.
    #[must_use]
    pub fn weight(&self, row: usize) -> f64 {
        self.weights.map_or(1.0, |weights| weights[row])
    }
}

/// What is done with the training rows, whichever they are.
#[derive(Clone, Debug)]
pub struct Procedure<'a> {
    /// The preparation.
    pub chain: &'a Chain,
    /// Whether the penalty sees predictors of unit variance.
    pub scaling: Scaling,
    /// The lasso shares that are tried, 0 alone for ridge.
    pub shares: Vec<f64>,
    /// How the coefficients of a predictor in several classes are penalised.
    pub grouping: Grouping,
    /// The penalty weights of the predictors.
    pub weighting: Weighting,
    /// The sign rule of each predictor given; empty for none.
    pub signs: Vec<Sign>,
    /// What is made small when strengths are compared on held-out parts.
    pub measure: ErrorMeasure,
    /// How the strength comes about.
    pub strength: StrengthRule,
}

/// How the strength comes about.
#[derive(Clone, Debug)]
pub enum StrengthRule {
    /// It is given.
    Fixed(f64),
    /// It is chosen from a range.
    Chosen {
        /// The rule.
        rule: Rule,
        /// How many strengths are tried.
        count: usize,
        /// The smallest strength as a share of the largest; `None` takes [`usual_ratio`].
        ratio: Option<f64>,
        /// The inner parts, for the rules that need them.
        inner: PartsParams,
    },
}

/// The smallest strength as a share of the largest, where nobody said otherwise.
///
/// With fewer samples than predictors the fit interpolates long before the strength vanishes, so
/// a hundredth is far enough; common practice, not taken from a publication. Ridge needs more
/// room, because nothing is ever exactly zero.
#[must_use]
pub fn usual_ratio(share: f64, n: usize, p: usize) -> f64 {
    if share == 0.0 {
        1e-6
    } else if n < p {
        1e-2
    } else {
        1e-4
    }
}

/// Why a procedure could not be carried out.
#[derive(Clone, Debug, PartialEq)]
pub enum ProcedureError {
    /// A preparation step could not be learnt or applied.
    Step {
        /// The step's place in the chain, from 0.
        step: usize,
        /// Why.
        error: StepError,
    },
    /// The fit could not be made.
    Fit(FitError),
    /// The parts cannot be drawn.
    Plan {
        /// At which level.
        level: Level,
        /// Why.
        error: PlanError,
    },
    /// A value is still missing after preparation.
    Missing {
        /// The sample.
        row: usize,
        /// The predictor.
        column: usize,
        /// How many values are missing in all.
        count: usize,
    },
    /// No predictor is left after preparation.
    NoPredictors,
    /// No strength has an error that is a number.
    NoError,
    /// The measure of the error is not defined for this sort of outcome.
    Measure(ErrorMeasure),
    /// The held-out parts hold no two samples that the measure could compare.
    NoPairs(Level),
    /// Generalised cross-validation is for measured outcomes.
    RuleForMeasured,
    /// A training part lacks what the outcome needs: a second class, an event, a count above 0.
    Training {
        /// At which level.
        level: Level,
        /// What it lacks.
        error: FitError,
    },
    /// Something was learnt from a held-out sample. The types forbid it; the run-time proof found
    /// it all the same, and nothing is given out.
    Leak,
}

/// A level of the nesting.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Level {
    /// The parts that choose the strength.
    Inner,
    /// The parts that judge the procedure.
    Outer,
}

/// Why a computation ended early: it was called off, or it could not be done.
#[derive(Clone, Debug, PartialEq)]
pub enum Halt {
    /// Called off; not an error.
    Cancelled,
    /// It could not be done.
    Failed(ProcedureError),
}

impl From<Cancelled> for Halt {
    fn from(Cancelled: Cancelled) -> Self {
        Self::Cancelled
    }
}

impl From<ProcedureError> for Halt {
    fn from(error: ProcedureError) -> Self {
        Self::Failed(error)
    }
}

impl From<FitError> for Halt {
    fn from(error: FitError) -> Self {
        Self::Failed(ProcedureError::Fit(error))
    }
}

impl From<ChainStop> for Halt {
    fn from(stop: ChainStop) -> Self {
        match stop {
            ChainStop::Cancelled => Self::Cancelled,
            ChainStop::Step { step, error } => Self::Failed(ProcedureError::Step { step, error }),
        }
    }
}

impl From<Stop> for Halt {
    fn from(stop: Stop) -> Self {
        match stop {
            Stop::Cancelled => Self::Cancelled,
            Stop::Failed(error) => error.into(),
        }
    }
}
