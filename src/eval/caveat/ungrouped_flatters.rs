//! Remark that splitting repeats of one unit flatters.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};

/// From which rise of R² on it is said; a convention.
const RISE: f64 = 0.05;

/// A remark when R² would be higher with repeats of one unit on both sides (record-wise splits
/// overestimate: Tougui et al. 2021).
#[must_use]
pub fn check(split: f64, nested: f64, word: &str) -> Option<Caveat> {
    let rise = split - nested;
    if rise.is_nan() || rise < RISE {
        return None;
    }
    let show = |value| number::text(value, Precision::Decimals(2));
    let text = format!(
        "Had repeats of one {word} stood on both sides, R² would have read {} and not {}. The \
         difference is knowing the {word} again, not predicting a new one.",
        show(split),
        show(nested)
    );
    Some(
        Caveat::new(
            "ungrouped-flatters",
            Severity::Note,
            "Repeats must stay together",
            text,
        )
        .because("R² with samples split", split, Precision::Decimals(3))
        .because("nested R²", nested, Precision::Decimals(3))
        .threshold("a rise of 0.05 or more")
        .origin(Origin::Convention),
    )
}
