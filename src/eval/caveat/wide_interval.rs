//! Remark that the uncertainty is as large as the effect.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::Measure;

/// From which half-width of the interval on it is said: of measures from one half to one, and of
/// others; conventions.
const HALF_WIDTHS: (f64, f64) = (0.10, 0.20);

/// A remark when the interval of the main measure is wide (Bates, Hastie & Tibshirani; Varoquaux
/// 2018).
#[must_use]
pub fn check(measure: Measure, low: f64, high: f64) -> Option<Caveat> {
    let half = (high - low) / 2.0;
    let ranks = [Measure::Area, Measure::Concordance, Measure::Accuracy].contains(&measure);
    let least = if ranks { HALF_WIDTHS.0 } else { HALF_WIDTHS.1 };
    if half.is_nan() || half < least {
        return None;
    }
    Some(
        Caveat::new(
            "wide-interval",
            Severity::Caution,
            "Wide interval",
            "The uncertainty of the estimate is as large as the effect that one would want to claim.",
        )
        .because(
            &format!("half-width of the interval of {}", measure.title()),
            half,
            Precision::Decimals(2),
        )
        .threshold(if ranks { "0.10 or more" } else { "0.20 or more" })
        .origin(Origin::Convention),
    )
}
