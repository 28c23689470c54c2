//! Counts what is never undone: configurations held against the outcome, and opened seals.

use crate::eval::standing::{Standings, State};
use crate::store::record::fingerprint;
use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::ledger::{Ledger, Look, Opening};
use crate::study::link::Link;
use crate::study::settings::Settings;
use crate::study::settings::data::Sealed;
use crate::study::settings::question::{Ask, Question, Seal};

/// Counts the looks and openings that the standings show: a fit that is current has been held
/// against the outcome, a ladder that is current and asked for it has opened the sealed set.
/// `date` is the day, as year-month-day. The same configuration counts once.
pub fn note_acts(study: &Study, standings: &Standings, ledger: &mut Ledger, date: &str) {
    let current = |cell: &&Cell| standings.get(cell.id).state == State::Current;
    for cell in study.cells().iter().filter(current) {
        match &cell.settings {
            Settings::Fit(_) => ledger.look(Look {
                configuration: fingerprint(study, cell.id),
                cell: cell.title.clone(),
                date: date.to_owned(),
            }),
            Settings::Question(question) => {
                if let Some((data, fit)) = opened(study, question) {
                    ledger.open(Opening {
                        cell: data.title.clone(),
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

/// The data cell whose sealed set a question opens, and the fit that is judged on it.
fn opened<'a>(study: &'a Study, question: &Question) -> Option<(&'a Cell, CellId)> {
    match &question.ask {
        Ask::Ladder { seal: Seal::Opened } => {}
        Ask::Ladder { seal: Seal::Closed }
        | Ask::LeastSquares
        | Ask::ErrorCurve
        | Ask::CoefficientTrace
        | Ask::Agreement
        | Ask::ChosenAgain { .. }
        | Ask::StandIns { .. } => return None,
    }
    let fit = question.fit.0?;
    let mut link = Link::to(fit);
    // No way is longer than the study; a file written by hand can hold a circle.
    for _ in 0..=study.cells().len() {
        let cell = study.cell(link.0?)?;
        link = match &cell.settings {
            Settings::Data(data) => {
                return (data.sealed != Sealed::Nothing).then_some((cell, fit));
            }
            Settings::Prepare(prepare) => prepare.input,
            Settings::Fit(fit) => fit.input,
            Settings::Question(_)
            | Settings::Compare(_)
            | Settings::Score(_)
            | Settings::Prose(_) => return None,
        };
    }
    None
}
