//! Remark that whole batches held out are predicted worse.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::Measure;

/// From which fall on it is said: of measures from one half to one, and of others; conventions.
const FALLS: (f64, f64) = (0.1, 0.2);

/// A remark when the main measure falls with whole batches held out. Removing the batch effect first does not
/// cure it (Soneson, Gerster & Delorenzi 2014).
#[must_use]
pub fn check(measure: Measure, nested: f64, batch: f64, word: &str) -> Option<Caveat> {
    let fall = nested - batch;
    let ranks = [Measure::Area, Measure::Concordance, Measure::Accuracy].contains(&measure);
    let least = if ranks { FALLS.0 } else { FALLS.1 };
    if fall.is_nan() || fall < least {
        return None;
    }
    let show = |value| number::text(value, Precision::Decimals(2));
    let text = format!(
        "With whole {word}s held out the {} falls from {} to {}; quote the second for a new \
         {word}. Removing the batch effect first does not cure this.",
        measure.title(),
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
        .because(
            &format!("nested {}", measure.title()),
            nested,
            Precision::Decimals(3),
        )
        .because("with whole batches held out", batch, Precision::Decimals(3))
        .threshold("a fall of 0.2 or more; of 0.1 for AUC, concordance and the share called right")
        .origin(Origin::Convention),
    )
}
