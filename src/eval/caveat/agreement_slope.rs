//! Remark on a slope of observed on predicted values away from 1.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};

/// The band outside which a slope is called a caution; a convention.
const BAND: (f64, f64) = (0.8, 1.25);

/// A remark when the interval of the slope excludes 1 (slope at internal validation as a check for
/// overfitting: Van Calster et al. 2019).
#[must_use]
pub fn check(slope: f64, low: f64, high: f64) -> Option<Caveat> {
    let excludes = low > 1.0 || high < 1.0;
    if !slope.is_finite() || !excludes {
        return None;
    }
    let severity = if slope < BAND.0 || slope > BAND.1 {
        Severity::Caution
    } else {
        Severity::Note
    };
    let text = if slope < 1.0 {
        "Held-out predictions are too extreme: they spread wider than the observations they stand \
         for, which is a sign of overfitting."
    } else {
        "Held-out predictions are too timid: they stay nearer to the mean than the observations, \
         as a penalty stronger than needed makes them."
    };
    Some(
        Caveat::new("agreement-slope", severity, "Slope away from one", text)
            .because("slope", slope, Precision::Decimals(2))
            .because("lower end", low, Precision::Decimals(2))
            .because("upper end", high, Precision::Decimals(2))
            .threshold("a 95 % interval that excludes 1; a caution below 0.8 or above 1.25")
            .origin(Origin::Convention),
    )
}
