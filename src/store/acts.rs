//! Counted acts: looks at the outcome, and openings of sealed sets.

use crate::eval::standing::{Standings, State};
use crate::store::record::fingerprint;
use crate::study::Study;
use crate::study::cell::CellId;
use crate::study::ledger::{Ledger, Look, Opening};
use crate::study::settings::Settings;
use crate::study::settings::question::{Ask, Seal};

/// Notes, after an evaluation, which configurations were evaluated against the outcome and which
/// sealed sets were opened. What was counted before is not counted again.
pub fn note_acts(study: &Study, standings: &Standings, ledger: &mut Ledger, date: &str) {
    for cell in study.cells() {
        if standings.get(cell.id).state != State::Current {
            continue;
        }
        match &cell.settings {
            Settings::Fit(_) => ledger.look(Look {
                configuration: fingerprint(study, cell.id),
                cell: cell.title.clone(),
                date: date.to_owned(),
            }),
            Settings::Question(question) => {
                if let (Ask::Ladder { seal: Seal::Opened }, Some(fit)) =
                    (&question.ask, question.fit.0)
                    && let Some(data) = data_below(study, fit)
                {
                    ledger.open(Opening {
                        cell: data,
                        configuration: fingerprint(study, fit),
                        date: date.to_owned(),
                    });
                }
            }
            Settings::Data(_)
            | Settings::Prepare(_)
            | Settings::Compare(_)
            | Settings::Score(_)
            | Settings::Prose(_) => {}
        }
    }
}

/// The title of the Data cell that a cell draws on in the end.
fn data_below(study: &Study, id: CellId) -> Option<String> {
    let mut at = study.cell(id)?;
    // A study has no circles but for files edited by hand; as many steps as cells are enough.
    for _ in study.cells() {
        if matches!(at.settings, Settings::Data(_)) {
            return Some(at.title.clone());
        }
        at = study.cell(*at.settings.draws_on().first()?)?;
    }
    None
}
