//! Remark on leaving out one unit at a time.

use crate::eval::caveat::{Caveat, Origin, Severity};

/// A remark when a plan leaves out one unit at a time: each prediction is pushed away from the
/// truth (a mean-only model scores a correlation of exactly −1), and weaker penalties are favoured
/// (Austin et al. 2025; Airola et al. 2010).
#[must_use]
pub fn always() -> Caveat {
    Caveat::new(
        "leave-one-out",
        Severity::Caution,
        "One unit at a time",
        "Leaving out one unit at a time pushes each prediction away from the truth and favours \
         weaker penalties.",
    )
    .origin(Origin::Published)
}
