//! Remark that whole batches held out are predicted worse.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};

/// From which fall of R² on it is said; a convention.
const FALL: f64 = 0.2;

/// A remark when R² falls with whole batches held out. Removing the batch effect first does not
/// cure it (Soneson, Gerster & Delorenzi 2014).
#[must_use]
pub fn check(nested: f64, batch: f64, word: &str) -> Option<Caveat> {
    let fall = nested - batch;
    if fall.is_nan() || fall < FALL {
        return None;
    }
    let show = |value| number::text(value, Precision::Decimals(2));
    let text = format!(
        "With whole {word}s held out R² falls from {} to {}; quote the second for a new {word}. \
         Removing the batch effect first does not cure this.",
        show(nested),
        show(batch)
    );
    Some(
        Caveat::new(
            "batches-are-harder",
            Severity::Caution,
            &format!("A new {word} is harder"),
            text,
        )
        .because("nested R²", nested, Precision::Decimals(3))
        .because(
            "R² with whole batches held out",
            batch,
            Precision::Decimals(3),
        )
        .threshold("a fall of 0.2 or more")
        .origin(Origin::Convention),
    )
}
