//! Remark that the wide data did not clearly improve on the mean.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::Sort;

/// A remark when the interval of the paired difference to the model without predictors includes
/// zero (Poldrack, Huckins & Varoquaux 2020).
#[must_use]
pub fn check(sort: Sort, improvement: f64, low: f64) -> Option<Caveat> {
    if low > 0.0 {
        return None;
    }
    let text = match sort {
        Sort::Measured => {
            "The wide data did not clearly improve on predicting the mean for every sample."
        }
        Sort::YesNo => {
            "The wide data did not clearly improve on giving every sample the same probability."
        }
        Sort::Classes => {
            "The wide data did not clearly improve on giving every sample the same probabilities."
        }
        Sort::Count => {
            "The wide data did not clearly improve on expecting the mean rate of every sample."
        }
        Sort::Time => {
            "The wide data did not clearly improve on one survival curve for every sample."
        }
    };
    let name = match sort {
        Sort::Measured => "improvement over the mean",
        Sort::YesNo | Sort::Classes | Sort::Count | Sort::Time => "improvement over the baseline",
    };
    Some(
        Caveat::new(
            "no-better-than-the-mean",
            Severity::Caution,
            "No clear gain",
            text,
        )
        .because(name, improvement, Precision::Percent(0))
        .because("lower end", low, Precision::Percent(0))
        .threshold("a 95 % interval that includes 0")
        .origin(Origin::Published),
    )
}
