//! Remark that there are too few events for a curve of calibration.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};

/// Below so many events, or others, a curve of calibration is not to be trusted (from memory: Van
/// Calster and others 2016 ask for 200 of each).
const ENOUGH: usize = 200;

/// Below so many events an evaluation of risks is small (from memory: Vergouwe and others 2005).
const EVENTS: usize = 100;

/// A remark on the groups of probabilities beside observed shares.
#[must_use]
pub fn check(events: usize, others: usize) -> Option<Caveat> {
    if events.min(others) >= ENOUGH {
        return None;
    }
    Some(
        Caveat::new(
            "few-for-a-curve",
            Severity::Note,
            "Few for a calibration curve",
            "There are too few events or others to trust single points of the calibration figure; \
             the slope and the average say what can be said.",
        )
        .because("events", events as f64, Precision::Whole)
        .because("others", others as f64, Precision::Whole)
        .threshold("fewer than 200 of either")
        .origin(Origin::Published),
    )
}

/// The same for times, where only events count.
#[must_use]
pub fn check_times(events: usize) -> Option<Caveat> {
    (events < EVENTS).then(|| {
        Caveat::new(
            "few-for-a-curve",
            Severity::Note,
            "Few events to judge by",
            "With so few events the curves of the risk groups and the measures at stated times are \
             rough.",
        )
        .because("events", events as f64, Precision::Whole)
        .threshold("fewer than 100")
        .origin(Origin::Published)
    })
}
