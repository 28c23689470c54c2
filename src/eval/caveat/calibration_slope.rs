//! Remark on a calibration slope away from 1.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};

/// Outside of this band a slope is a caution, below the last a stop on using the predictions as
/// probabilities or expected counts; conventions.
const BAND: (f64, f64) = (0.8, 1.25);
const STOP: f64 = 0.5;

/// A remark when held-out predictions are too extreme or too timid (slope at internal validation as a
/// check for overfitting: Van Calster and others 2019). `error` is the slope's standard error, not a
/// number where none is known.
#[must_use]
pub fn check(slope: f64, error: f64) -> Option<Caveat> {
    let (low, high) = (slope - 1.96 * error, slope + 1.96 * error);
    let excludes = low > 1.0 || high < 1.0;
    let is_off = slope < BAND.0 || slope > BAND.1;
    // Without an interval only the size can speak.
    let speaks = excludes || (error.is_nan() && is_off);
    if !slope.is_finite() || !speaks {
        return None;
    }
    let severity = if is_off {
        Severity::Caution
    } else {
        Severity::Note
    };
    let text = if slope < STOP {
        "Held-out predictions are far too extreme, a sign of strong overfitting; do not read them as \
         probabilities, expected counts or shares. Their order can still be of use."
    } else if slope < 1.0 {
        "Held-out predictions are too extreme: high ones are too high and low ones too low, which is \
         a sign of overfitting."
    } else {
        "Held-out predictions are too timid: they stay nearer to the average than what happened, as \
         a penalty stronger than needed makes them."
    };
    Some(
        Caveat::new("calibration-slope", severity, "Slope away from one", text)
            .because("calibration slope", slope, Precision::Decimals(2))
            .because("its standard error", error, Precision::Decimals(2))
            .threshold("a 95 % interval that excludes 1; a caution below 0.8 or above 1.25")
            .origin(Origin::Convention),
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_slope_is_said_where_its_interval_leaves_one_and_by_size_where_there_is_none() {
        let severity = |slope, error| check(slope, error).map(|caveat| caveat.severity);
        assert_eq!(severity(0.9, 0.2), None);
        assert_eq!(severity(0.9, 0.04), Some(Severity::Note));
        assert_eq!(severity(0.7, 0.04), Some(Severity::Caution));
        assert_eq!(severity(1.5, f64::NAN), Some(Severity::Caution));
        assert_eq!(severity(1.1, f64::NAN), None);
        assert_eq!(severity(f64::NAN, f64::NAN), None);
    }
}
