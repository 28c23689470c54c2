//! What a study's file holds that this version does not know: kept, so that saving loses nothing.

use crate::study::cell::CellId;
use crate::study::settings::Settings;
use std::collections::BTreeMap;

/// What a study's file holds beyond what this version knows, in the file's own words.
///
/// No edit touches it: a cell that is removed and brought back finds it again.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Kept {
    /// Fields outside the cells.
    pub fields: Vec<KeptField>,
    /// What is kept of single cells.
    pub cells: BTreeMap<CellId, KeptCell>,
}

/// What is kept of one cell.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct KeptCell {
    /// The settings as they were read. When they have been changed since, a kept field inside a
    /// list is dropped, because nobody can tell which entry it belongs to.
    pub settings: Settings,
    /// The whole cell in the file's own words, when this version cannot read it; it is then
    /// shown as a prose cell that says so, and written back as it was until its text is changed.
    pub whole: Option<String>,
    /// Fields that are not known.
    pub fields: Vec<KeptField>,
}

/// A field that is not known.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct KeptField {
    /// The names and positions that lead to the thing that holds the field.
    pub path: Vec<Step>,
    /// The field's name.
    pub name: String,
    /// Its value in the file's own words.
    pub value: String,
}

/// One step of the way to a place in a file.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Step {
    /// Into the field with this name.
    Field(String),
    /// Into the entry at this position of a list.
    Entry(usize),
}

impl Kept {
    /// The cell in the file's own words, if this version could not read it and its stand-in is
    /// still as it was.
    #[must_use]
    pub fn whole(&self, id: CellId, settings: &Settings) -> Option<&str> {
        let kept = self.cells.get(&id)?;
        if kept.settings == *settings {
            kept.whole.as_deref()
        } else {
            None
        }
    }
}
