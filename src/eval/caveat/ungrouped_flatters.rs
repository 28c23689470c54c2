//! Remark that splitting repeats of one unit flatters.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::Measure;

/// From which rise on it is said; a convention.
const RISE: f64 = 0.05;

/// A remark when the main measure would be higher with repeats of one unit on both sides (record-wise splits
/// overestimate: Tougui et al. 2021).
#[must_use]
pub fn check(measure: Measure, split: f64, nested: f64, word: &str) -> Option<Caveat> {
    let rise = split - nested;
    if rise.is_nan() || rise < RISE {
        return None;
    }
    let show = |value| number::text(value, Precision::Decimals(2));
    let text = format!(
        "Had repeats of one {word} stood on both sides, the {} would have read {} and not {}. \
         The difference is knowing the {word} again, not predicting a new one.",
        measure.title(),
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
        .because("with samples split", split, Precision::Decimals(3))
        .because(
            &format!("nested {}", measure.title()),
            nested,
            Precision::Decimals(3),
        )
        .threshold("a rise of 0.05 or more")
        .origin(Origin::Convention),
    )
}
