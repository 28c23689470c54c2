//! Floor 4. Blocks into files.

pub mod chosen;
pub mod error;
pub mod fixed;
pub mod picture;
pub mod workbook;
pub mod write_up;

use crate::eval::caveat::{Caveat, Severity, looks};
use crate::report::Context;
use crate::study::cell::CellId;

/// What an export is told from outside: nothing below the rim knows the date.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Occasion {
    /// The day of the export, as year-month-day.
    pub date: String,
    /// Why standing stops are overridden, if they are; printed in the export.
    pub despite: Option<String>,
}

/// All caveats of a study with the cell that each concerns, the gravest first; a remark on the
/// study as a whole has no cell.
#[must_use]
pub fn caveats(context: &Context<'_>) -> Vec<(Option<CellId>, Caveat)> {
    let mut found: Vec<(Option<CellId>, Caveat)> = Vec::new();
    for cell in context.study.cells() {
        let Some(outcome) = context.outcome(cell.id) else {
            continue;
        };
        for caveat in &outcome.caveats {
            // The same remark from a fit and from a question about it is printed once.
            if !found
                .iter()
                .any(|(_, known)| known.id == caveat.id && known.text == caveat.text)
            {
                found.push((Some(cell.id), caveat.clone()));
            }
        }
    }
    found.extend(looks::check(context.ledger).map(|caveat| (None, caveat)));
    found.sort_by_key(|(_, caveat)| std::cmp::Reverse(caveat.severity));
    found
}

/// The stops that block an export, unless they are overridden with a reason.
#[must_use]
pub fn stops(context: &Context<'_>) -> Vec<Caveat> {
    caveats(context)
        .into_iter()
        .map(|(_, caveat)| caveat)
        .filter(|caveat| caveat.severity == Severity::Stop)
        .collect()
}
