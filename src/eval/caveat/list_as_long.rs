//! Note that the list is as long as the sample allows.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};

/// A note when a lasso chooses at least half as many predictors as there are samples; it cannot
/// choose more than there are (property of the lasso, from memory).
#[must_use]
pub fn check(share: f64, chosen: usize, samples: usize) -> Option<Caveat> {
    if share < 1.0 || 2 * chosen < samples {
        return None;
    }
    Some(
        Caveat::new(
            "list-as-long-as-the-sample",
            Severity::Note,
            "The list is saturated",
            "The lasso cannot choose more predictors than there are samples; this list comes close.",
        )
        .because("chosen predictors", chosen as f64, Precision::Whole)
        .because("samples", samples as f64, Precision::Whole)
        .threshold("half as many as samples")
        .origin(Origin::Published),
    )
}
