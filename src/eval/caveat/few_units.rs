//! Remark that there are few independent units.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};

/// Below this number of units it is a caution; a convention.
const CAUTION: usize = 40;

/// Below this number of units the usual error bars are said (±10 points at 100 samples:
/// Varoquaux 2018).
const NOTE: usize = 100;

/// A remark on the number of independent units.
#[must_use]
pub fn check(units: usize) -> Option<Caveat> {
    if units >= NOTE {
        return None;
    }
    let severity = if units < CAUTION {
        Severity::Caution
    } else {
        Severity::Note
    };
    let text = format!(
        "With {} independent units, error bars of about ±10 points are normal.",
        number::text(units as f64, Precision::Whole)
    );
    Some(
        Caveat::new("few-units", severity, "Few independent units", text)
            .because("units", units as f64, Precision::Whole)
            .threshold("fewer than 100; a caution below 40")
            .origin(Origin::Published),
    )
}
