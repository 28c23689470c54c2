//! Remark that the solver did not reach its tolerance.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};

/// A remark when a solution did not reach the solver's tolerance; it is never passed off as a good
/// one.
#[must_use]
pub fn check(unsettled: usize, worst_gap: f64) -> Option<Caveat> {
    if unsettled == 0 {
        return None;
    }
    let text = format!(
        "{} fits had not settled when the solver stopped; numbers there may be off.",
        number::text(unsettled as f64, Precision::Whole)
    );
    Some(
        Caveat::new("not-settled", Severity::Caution, "Not settled", text)
            .because("fits not settled", unsettled as f64, Precision::Whole)
            .because("largest gap", worst_gap, Precision::Significant(2))
            .threshold("any")
            .origin(Origin::Published),
    )
}
