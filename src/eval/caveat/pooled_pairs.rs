//! Remark that pairs of different fits had to be compared.

use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::fact::Facts;

/// The remark when no held-out part holds a pair, so that predictions of different fits were
/// compared: that pushes the measure below one half when nothing is to be found (Airola and others
/// 2010; Austin and others 2025).
#[must_use]
pub fn check(facts: &Facts) -> Option<Caveat> {
    let words = facts.words("pairs compared")?;
    words.contains("pooled").then(|| {
        Caveat::new(
            "pooled-pairs",
            Severity::Caution,
            "Pairs of different fits",
            "No held-out part holds two samples that could be compared, so pairs of all parts were \
             pooled. Such a measure leans towards the wrong side of one half; hold out larger parts.",
        )
        .origin(Origin::Published)
    })
}
