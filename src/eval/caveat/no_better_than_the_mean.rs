//! Remark that the wide data did not clearly improve on the mean.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};

/// A remark when the interval of the paired difference to the model without predictors includes
/// zero (Poldrack, Huckins & Varoquaux 2020).
#[must_use]
pub fn check(improvement: f64, low: f64) -> Option<Caveat> {
    if low > 0.0 {
        return None;
    }
    Some(
        Caveat::new(
            "no-better-than-the-mean",
            Severity::Caution,
            "No clear gain",
            "The wide data did not clearly improve on predicting the mean for every sample.",
        )
        .because(
            "improvement over the mean",
            improvement,
            Precision::Percent(0),
        )
        .because("lower end", low, Precision::Percent(0))
        .threshold("a 95 % interval that includes 0")
        .origin(Origin::Published),
    )
}
