//! Editable words: which editor opens on a slot, and how values read.

use crate::base::number::{self, Precision};
use crate::base::real::Real;
use crate::report::Context;
use crate::report::sentence::{Choice, Editor, Sentence, Wholeness};
use crate::study::cell::Kind;
use crate::study::link::Link;
use crate::study::settings::data::ColumnRange;
use crate::study::settings::slot::{Bounds, Slot, Value};

/// The cells that hold samples.
pub const SAMPLES: [Kind; 2] = [Kind::Data, Kind::Prepare];

/// How a cell that is drawn on reads.
#[must_use]
pub fn cell(context: &Context<'_>, link: Link, none: &str) -> String {
    link.0
        .map_or_else(|| none.to_owned(), |id| context.title(id))
}

/// How a number of a setting reads: with all its digits.
#[must_use]
pub fn real(value: Real) -> String {
    number::text(value.get(), Precision::Full)
}

/// How a whole number of a setting reads: without groups, so that it can be typed again.
#[must_use]
pub fn whole(value: u64) -> String {
    number::text(value as f64, Precision::Full)
}

/// How ranges of columns read: `900 nm … 1700 nm`.
#[must_use]
pub fn ranges(ranges: &[ColumnRange]) -> Vec<String> {
    let one = |range: &ColumnRange| {
        if range.first == range.last {
            range.first.clone()
        } else {
            format!("{} … {}", range.first, range.last)
        }
    };
    ranges.iter().map(one).collect()
}

/// The editor for a number in this slot.
#[must_use]
pub fn number_editor(slot: Slot) -> Editor {
    let (least, most, whole) = match slot.bounds() {
        Some(Bounds::Whole { least, most }) => (least as f64, most as f64, Wholeness::Whole),
        Some(Bounds::Any { least, most }) => (least, most, Wholeness::Any),
        None => (f64::NEG_INFINITY, f64::INFINITY, Wholeness::Any),
    };
    Editor::Number { least, most, whole }
}

/// The editor for a choice in this slot. A stable name without a label is not offered: it stands in
/// the slot's list for another kind of outcome.
#[must_use]
pub fn choice_editor(slot: Slot, labels: &[(&str, &str)]) -> Editor {
    let choice = |name: &&'static str| {
        let (_, label) = labels.iter().find(|(known, _)| known == name)?;
        Some(Choice {
            label: (*label).to_owned(),
            value: Value::choice(name),
        })
    };
    Editor::Choice(slot.choices().iter().filter_map(choice).collect())
}

impl Sentence {
    /// The same sentence with a whole number.
    #[must_use]
    pub fn whole(self, slot: Slot, value: u64) -> Self {
        self.word(slot, whole(value), number_editor(slot))
    }

    /// The same sentence with a number.
    #[must_use]
    pub fn real(self, slot: Slot, value: Real) -> Self {
        self.word(slot, real(value), number_editor(slot))
    }

    /// The same sentence with a number, or with words where there is none.
    #[must_use]
    pub fn optional_real(self, slot: Slot, value: Option<Real>, none: &str) -> Self {
        let text = value.map_or_else(|| none.to_owned(), real);
        self.word(slot, text, number_editor(slot))
    }

    /// The same sentence with a column, or with words where there is none.
    #[must_use]
    pub fn column(self, slot: Slot, column: Option<&String>, none: &str) -> Self {
        let text = column.map_or(none, String::as_str);
        self.word(slot, text, Editor::Column)
    }

    /// The same sentence with a choice that reads as `text`.
    #[must_use]
    pub fn choice(self, slot: Slot, text: &str, labels: &[(&str, &str)]) -> Self {
        self.word(slot, text, choice_editor(slot, labels))
    }

    /// The same sentence with a cell.
    #[must_use]
    pub fn cell(self, slot: Slot, text: String, kinds: &[Kind]) -> Self {
        self.word(slot, text, Editor::Cell(kinds.to_vec()))
    }
}
