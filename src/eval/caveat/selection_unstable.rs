//! Remark that another sample would return another list.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Severity};
use crate::eval::fact::Facts;

/// The bands of the stability index, after Fleiss as used by its authors (Nogueira, Sechidis &
/// Brown 2018; the bands are from memory).
const POOR: f64 = 0.40;
const GOOD: f64 = 0.75;

/// Remarks on the facts of a “chosen again” question.
#[must_use]
pub fn check(facts: &Facts, index: Option<f64>) -> Vec<Caveat> {
    let mut caveats = Vec::new();
    let value = |name: &str| facts.value(name).unwrap_or(0.0);
    let shown = |name: &str| {
        facts
            .get(name)
            .map(crate::eval::fact::Fact::shown)
            .unwrap_or_default()
    };
    // The index is not defined when every half chose all predictors, or none.
    if let Some(index_value) = index
        && index_value < GOOD
        && value("chosen predictors") > 0.0
    {
        let (severity, heading) = if index_value < POOR {
            (Severity::Caution, "The list is not stable")
        } else {
            (Severity::Note, "The list is only partly stable")
        };
        let all_again = value("chosen again") >= value("chosen predictors");
        let text = if all_again {
            // The index asks whether lists agree more than lists of their length drawn at random:
            // where nearly every predictor is chosen every time, they hardly can.
            format!(
                "All {} chosen predictors come back most of the time, but the lists agree hardly \
                 more than lists of their length drawn at random would; being chosen says little \
                 where nearly everything is.",
                shown("chosen predictors")
            )
        } else {
            format!(
                "Repeating the study on half the samples returns a different list; of the {} chosen \
             predictors, {} come back most of the time and {} on fewer than half of the halves.",
                shown("chosen predictors"),
                shown("chosen again"),
                shown("chosen rarely")
            )
        };
        caveats.push(
            Caveat::new("selection-unstable", severity, heading, text)
                .because("stability index", index_value, Precision::Decimals(2))
                .threshold("0.75; a caution below 0.40")
                .origin(crate::eval::caveat::Origin::Published),
        );
    }
    let null = value("null highest frequency");
    if null >= value("threshold") && value("threshold") > 0.0 {
        caveats.push(
            Caveat::new(
                "null-chosen-as-often",
                Severity::Caution,
                "Shuffled outcomes do it too",
                "With the outcome shuffled, some predictor was chosen as often as the threshold \
                 asks; a high frequency alone proves little here.",
            )
            .because(
                "highest frequency on the shuffled outcome",
                null,
                Precision::Percent(0),
            )
            .threshold("the threshold of the question"),
        );
    }
    caveats
}
