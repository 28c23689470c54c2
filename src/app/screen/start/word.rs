//! What has been said so far, as sentences whose words can be changed.

use crate::app::screen::start::role::{Role, Roles};
use crate::app::screen::start::taken::Taken;
use crate::app::widget::sentence::{Piece, Role as Part};
use crate::base::layout::Orientation;
use crate::report::kind::data;

/// What a word of the sentences asks for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ask {
    /// The one column with a role.
    Column(Role),
    /// The columns with a role.
    Columns(Role),
    /// What sort of thing is predicted.
    Kind,
    /// Whether samples are rows or columns.
    Orientation,
    /// The sheet of a workbook.
    Sheet,
    /// The line with the names of the columns.
    Header,
}

/// A piece of a sentence, and what it asks for when it is a word that can be changed.
pub type Word = (Piece, Option<Ask>);

/// A sentence that is being put together.
struct Saying<'a> {
    words: Vec<Word>,
    open: Option<Ask>,
    roles: &'a Roles,
}

impl<'a> Saying<'a> {
    fn new(roles: &'a Roles, open: Option<Ask>) -> Self {
        Self {
            words: Vec::new(),
            open,
            roles,
        }
    }

    fn text(mut self, text: &str) -> Self {
        let piece = Piece {
            text: text.to_owned(),
            role: Part::Plain,
        };
        self.words.push((piece, None));
        self
    }

    fn word(mut self, ask: Ask, text: impl Into<String>) -> Self {
        let piece = Piece {
            text: text.into(),
            role: if self.open == Some(ask) {
                Part::Open
            } else {
                Part::Editable
            },
        };
        self.words.push((piece, Some(ask)));
        self
    }

    fn column(self, role: Role, otherwise: &str) -> Self {
        let text = self.roles.first(role).unwrap_or(otherwise).to_owned();
        self.word(Ask::Column(role), text)
    }

    fn columns(self, role: Role, otherwise: &str) -> Self {
        let all = self.roles.all(role);
        let text = if all.is_empty() {
            otherwise.to_owned()
        } else {
            all.join(", ")
        };
        self.word(Ask::Columns(role), text)
    }
}

/// The sentences: what is predicted, what belongs together, and how the table is read that is
/// shown. `kind` is the stable name of the kind of outcome, if one was chosen.
#[must_use]
pub fn sentences(
    roles: &Roles,
    kind: Option<&str>,
    shown: &Taken,
    open: Option<Ask>,
) -> [Vec<Word>; 3] {
    [
        predict(roles, kind, open),
        together(roles, open),
        reading(roles, shown, open),
    ]
}

fn predict(roles: &Roles, kind: Option<&str>, open: Option<Ask>) -> Vec<Word> {
    let saying = Saying::new(roles, open)
        .text("Predict ")
        .column(Role::Outcome, "a column still to be chosen");
    if roles.first(Role::Outcome).is_none() {
        return saying.text(".").words;
    }
    let label = kind.map(data::kind_in_words);
    match kind {
        None => saying
            .text(", of ")
            .word(Ask::Kind, "the kind that its values show"),
        Some("time") => saying
            .text(", the ")
            .word(Ask::Kind, label.unwrap_or_default())
            .text("; whether it happened is told by ")
            .column(Role::Event, "a column still to be chosen"),
        Some(_) => saying
            .text(", a ")
            .word(Ask::Kind, label.unwrap_or_default()),
    }
    .text(".")
    .words
}

fn together(roles: &Roles, open: Option<Ask>) -> Vec<Word> {
    let saying = Saying::new(roles, open)
        .text("Samples are named by ")
        .column(Role::SampleName, "the first column of unlike labels");
    let saying = match roles.first(Role::Unit) {
        Some(_) => saying
            .text("; samples of one ")
            .column(Role::Unit, "")
            .text(" are kept together"),
        None => saying
            .text("; each sample ")
            .word(Ask::Column(Role::Unit), "stands for itself"),
    };
    let saying = saying
        .text("; batch is ")
        .column(Role::Batch, "not known")
        .text(", order of measurement is ")
        .column(Role::Order, "not known")
        .text(", weight is ")
        .column(Role::Weight, "the same for all")
        .text(". Keep ")
        .columns(Role::Covariate, "no covariate")
        .text(" in the model whatever the penalty; leave out ")
        .columns(Role::Ignored, "nothing");
    saying.text(".").words
}

fn reading(roles: &Roles, taken: &Taken, open: Option<Ask>) -> Vec<Word> {
    let used = &taken.reading.used;
    let mut saying = Saying::new(roles, open).text(&format!("In {}", taken.name));
    if let Some(sheet) = &used.sheet {
        saying = saying
            .text(", sheet ")
            .word(Ask::Sheet, sheet.clone())
            .text(",");
    }
    let rows = match used.orientation {
        Some(Orientation::SamplesInColumns) => "columns",
        Some(Orientation::SamplesInRows) | None => "rows",
    };
    let line = match used.header_row {
        Some(0) => "no line".to_owned(),
        Some(line) => format!("line {line}"),
        None => "line 1".to_owned(),
    };
    saying
        .text(" samples stand in ")
        .word(Ask::Orientation, rows)
        .text(", and the names of the columns in ")
        .word(Ask::Header, line)
        .text(".")
        .words
}

#[cfg(test)]
mod tests {
    use super::*;

    fn plain(words: &[Word]) -> String {
        words.iter().map(|(piece, _)| piece.text.as_str()).collect()
    }

    #[test]
    fn a_time_asks_for_its_event_and_nothing_else_does() {
        let mut roles = Roles::default();
        assert_eq!(
            plain(&predict(&roles, None, None)),
            "Predict a column still to be chosen."
        );
        roles.give("days", Role::Outcome);
        let asks = |kind: Option<&str>| {
            let words = predict(&roles, kind, None);
            words
                .iter()
                .any(|(_, ask)| *ask == Some(Ask::Column(Role::Event)))
        };
        assert!(asks(Some("time")));
        assert!(!asks(Some("count")) && !asks(None));
    }

    #[test]
    fn every_kind_of_outcome_reads_as_a_sentence() {
        let mut roles = Roles::default();
        roles.give("y", Role::Outcome);
        for (name, label) in data::kinds() {
            let read = plain(&predict(&roles, Some(name), None));
            assert!(read.contains(label), "{read}");
            assert!(read.ends_with('.'), "{read}");
        }
    }
}
