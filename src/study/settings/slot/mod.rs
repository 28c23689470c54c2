//! The places of the settings, by name, and the values that go into them.
//!
//! Window and command line set settings through one door: [`Settings::with`]. What was typed goes
//! in as it was typed ([`Value::Text`]); the door reads it and says what may stand there.

pub mod compare;
pub mod data;
pub mod fit;
pub mod prepare;
pub mod prose;
pub mod question;
pub mod score;
pub mod step;
pub mod table;
pub(in crate::study::settings) mod take;
pub mod weights;

#[cfg(test)]
mod tests;

use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::study::cell::CellId;
use crate::study::prose::Prose;
use crate::study::settings::Settings;
use crate::study::settings::data::{ColumnRange, Correction, Exclusion};
use crate::study::settings::prepare::Step;
use crate::study::settings::slot::compare::CompareSlot;
use crate::study::settings::slot::data::DataSlot;
use crate::study::settings::slot::fit::FitSlot;
use crate::study::settings::slot::prepare::PrepareSlot;
use crate::study::settings::slot::prose::ProseSlot;
use crate::study::settings::slot::question::QuestionSlot;
use crate::study::settings::slot::score::ScoreSlot;
use crate::study::source::SourceId;
use std::sync::Arc;

/// A place in the settings of a cell: the thing that an editable word shows.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Slot {
    /// A setting of a Data cell.
    Data(DataSlot),
    /// A setting of a Prepare cell.
    Prepare(PrepareSlot),
    /// A setting of a Fit cell.
    Fit(FitSlot),
    /// A setting of a Question cell.
    Question(QuestionSlot),
    /// A setting of a Compare cell.
    Compare(CompareSlot),
    /// A setting of a Score cell.
    Score(ScoreSlot),
    /// The text of a Prose cell.
    Prose(ProseSlot),
}

/// What goes into a slot.
#[derive(Clone, Debug, PartialEq)]
pub enum Value {
    /// Nothing: leaves a choice to the program, or takes away what stands there.
    Nothing,
    /// A number.
    Number(Real),
    /// A whole number that is not negative.
    Whole(u64),
    /// One of the slot's choices, by its stable name.
    Choice(String),
    /// Words; or a number or choice as it was typed.
    Text(String),
    /// A column, or none.
    Column(Option<String>),
    /// Ranges of columns.
    Columns(Vec<ColumnRange>),
    /// A cell, or none.
    Cell(Option<CellId>),
    /// A file that has been put on the shelf.
    File {
        /// The bytes.
        source: SourceId,
        /// Its name.
        name: String,
    },
    /// Preparation steps.
    Steps(Vec<Step>),
    /// Texts.
    Texts(Vec<String>),
    /// Numbers.
    Numbers(Vec<Real>),
    /// Recorded changes of single values.
    Corrections(Arc<Vec<Correction>>),
    /// Recorded removals of samples.
    Exclusions(Arc<Vec<Exclusion>>),
    /// The text of a Prose cell, with its references found.
    Prose(Prose),
}

impl Value {
    /// A choice by its stable name.
    #[must_use]
    pub fn choice(name: &str) -> Self {
        Self::Choice(name.to_owned())
    }
}

impl Slot {
    /// What the setting is called in undo labels and problems: `lasso share`.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Data(slot) => slot.label(),
            Self::Prepare(slot) => slot.label(),
            Self::Fit(slot) => slot.label(),
            Self::Question(slot) => slot.label(),
            Self::Compare(slot) => slot.label(),
            Self::Score(slot) => slot.label(),
            Self::Prose(slot) => slot.label(),
        }
    }

    /// The stable names of the choices, in the order in which they are offered; empty when the
    /// slot takes something other than a choice.
    #[must_use]
    pub const fn choices(self) -> &'static [&'static str] {
        match self {
            Self::Data(slot) => slot.choices(),
            Self::Prepare(slot) => slot.choices(),
            Self::Fit(slot) => slot.choices(),
            Self::Question(slot) => slot.choices(),
            Self::Score(slot) => slot.choices(),
            Self::Compare(_) | Self::Prose(_) => &[],
        }
    }

    /// The numbers that may stand there, both ends included, and whether they are whole; `None`
    /// when the slot takes no number.
    #[must_use]
    pub const fn bounds(self) -> Option<Bounds> {
        match self {
            Self::Data(slot) => slot.bounds(),
            Self::Prepare(slot) => slot.bounds(),
            Self::Fit(slot) => slot.bounds(),
            Self::Question(slot) => slot.bounds(),
            Self::Score(slot) => slot.bounds(),
            Self::Compare(_) | Self::Prose(_) => None,
        }
    }
}

/// The numbers that may stand in a slot, both ends included.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Bounds {
    /// Whole numbers.
    Whole {
        /// The smallest.
        least: u64,
        /// The largest.
        most: u64,
    },
    /// Any numbers.
    Any {
        /// The smallest.
        least: f64,
        /// The largest; infinite where there is no limit.
        most: f64,
    },
}

impl Settings {
    /// The settings with one word changed. A choice that needs more settings fills in the usual
    /// ones; settings that both choices have are kept.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there and what was given.
    pub fn with(&self, slot: &Slot, value: Value) -> Result<Settings, Problem> {
        match (self, slot) {
            (Self::Data(data), Slot::Data(slot)) => slot.set(data, value).map(Self::Data),
            (Self::Prepare(prepare), Slot::Prepare(slot)) => {
                slot.set(prepare, value).map(Self::Prepare)
            }
            (Self::Fit(fit), Slot::Fit(slot)) => slot.set(fit, value).map(Self::Fit),
            (Self::Question(question), Slot::Question(slot)) => {
                slot.set(question, value).map(Self::Question)
            }
            (Self::Compare(compare), Slot::Compare(slot)) => {
                slot.set(compare, value).map(Self::Compare)
            }
            (Self::Score(score), Slot::Score(slot)) => slot.set(score, value).map(Self::Score),
            (Self::Prose(_), Slot::Prose(slot)) => slot.set(value).map(Self::Prose),
            (
                Self::Data(_)
                | Self::Prepare(_)
                | Self::Fit(_)
                | Self::Question(_)
                | Self::Compare(_)
                | Self::Score(_)
                | Self::Prose(_),
                _,
            ) => Err(Problem::new(
                "setting-of-another-kind",
                format!(
                    "A {} cell has no setting “{}”.",
                    self.kind().name(),
                    slot.label()
                ),
            )),
        }
    }

    /// What stands in a slot; `None` when the settings have no such place.
    #[must_use]
    pub fn value(&self, slot: &Slot) -> Option<Value> {
        match (self, slot) {
            (Self::Data(data), Slot::Data(slot)) => slot.get(data),
            (Self::Prepare(prepare), Slot::Prepare(slot)) => slot.get(prepare),
            (Self::Fit(fit), Slot::Fit(slot)) => slot.get(fit),
            (Self::Question(question), Slot::Question(slot)) => slot.get(question),
            (Self::Compare(compare), Slot::Compare(slot)) => slot.get(compare),
            (Self::Score(score), Slot::Score(slot)) => slot.get(score),
            (Self::Prose(prose), Slot::Prose(slot)) => Some(slot.get(prose)),
            (
                Self::Data(_)
                | Self::Prepare(_)
                | Self::Fit(_)
                | Self::Question(_)
                | Self::Compare(_)
                | Self::Score(_)
                | Self::Prose(_),
                _,
            ) => None,
        }
    }

    /// Every place that these settings have, in reading order.
    #[must_use]
    pub fn slots(&self) -> Vec<Slot> {
        match self {
            Self::Data(data) => DataSlot::of(data).into_iter().map(Slot::Data).collect(),
            Self::Prepare(prepare) => PrepareSlot::of(prepare)
                .into_iter()
                .map(Slot::Prepare)
                .collect(),
            Self::Fit(fit) => FitSlot::of(fit).into_iter().map(Slot::Fit).collect(),
            Self::Question(question) => QuestionSlot::of(question)
                .into_iter()
                .map(Slot::Question)
                .collect(),
            Self::Compare(compare) => CompareSlot::of(compare)
                .into_iter()
                .map(Slot::Compare)
                .collect(),
            Self::Score(score) => ScoreSlot::of(score).into_iter().map(Slot::Score).collect(),
            Self::Prose(_) => vec![Slot::Prose(ProseSlot::Text)],
        }
    }
}
