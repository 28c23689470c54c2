//! Remark on how many versions were scored against the outcome.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::study::ledger::Ledger;

/// From how many configurations on it is said; conventions. The best of 40 settings on data
/// without signal averaged an AUC of 0.61, up to 0.81 (computed for this program's design).
const NOTE: usize = 10;
const CAUTION: usize = 50;

/// A remark on the whole study: many looks, or a sealed set opened more than once
/// (Skocik et al. 2016).
#[must_use]
pub fn check(ledger: &Ledger) -> Option<Caveat> {
    let looks = ledger.looks().len();
    let openings = ledger.openings().len();
    let severity = if looks >= CAUTION || openings >= 2 {
        Severity::Caution
    } else if looks >= NOTE {
        Severity::Note
    } else {
        return None;
    };
    let count = |count: usize| number::text(count as f64, Precision::Whole);
    let text = format!(
        "{} versions were scored against the outcome, and the sealed set was opened {} times; the \
         best of many looks better than it is.",
        count(looks),
        count(openings)
    );
    Some(
        Caveat::new("many-looks", severity, "Many looks", text)
            .because("looks", looks as f64, Precision::Whole)
            .because(
                "openings of the sealed set",
                openings as f64,
                Precision::Whole,
            )
            .threshold("10 looks; a caution from 50 looks or 2 openings")
            .origin(Origin::Convention),
    )
}
