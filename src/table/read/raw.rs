//! Columns as they were found, before it is settled what they hold.

use crate::table::finding::Finding;
use crate::table::read::cell::Sort;
use std::borrow::Cow;

/// How a workbook stores a value.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stored {
    /// As text; so does every delimited file.
    Text,
    /// As a number.
    Number,
    /// As a date.
    Date,
    /// As true or false.
    Truth,
    /// As an error value.
    Error,
}

/// A value that is no plain number.
#[derive(Clone, Debug)]
pub struct Odd<'a> {
    /// The sample.
    pub row: u32,
    /// What the text is, when numbers are expected.
    pub sort: Sort,
    /// How it is stored.
    pub stored: Stored,
    /// The text as written.
    pub text: Cow<'a, str>,
}

/// What is known of a column before it is read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Plan {
    /// Numbers, unless too many values are none.
    Numbers,
    /// Labels by its first values, unless too many are numbers.
    PerhapsLabels,
    /// Labels by its name, if the values allow.
    Names,
    /// Labels because that was asked for.
    Labels,
    /// Numbers because that was asked for.
    SurelyNumbers,
}

impl Plan {
    /// Whether every value is kept as text at first.
    pub fn keeps_text(self) -> bool {
        match self {
            Self::PerhapsLabels | Self::Names | Self::Labels => true,
            Self::Numbers | Self::SurelyNumbers => false,
        }
    }
}

/// A column as it was found.
#[derive(Clone, Debug)]
pub struct Raw<'a> {
    /// Its name, unlike every other.
    pub name: String,
    /// Whether the file gives it no name.
    pub is_unnamed: bool,
    /// Its unit.
    pub unit: Option<String>,
    /// Its row in a sideways file, else 0.
    pub line: u32,
    /// What it was taken for.
    pub plan: Plan,
    /// Numbers; NaN elsewhere. Empty if every value is kept as text.
    pub values: Vec<f64>,
    /// All other values that are not blank (or, kept as text, all that are not blank), by row.
    pub odd: Vec<Odd<'a>>,
}

/// Where the samples stand in the file.
#[derive(Clone, Debug)]
pub enum RawLines {
    /// The row of every sample.
    Rows(Vec<u32>),
    /// The head of every sample's column.
    Columns(Vec<String>),
}

/// A table as it was found.
#[derive(Clone, Debug)]
pub struct RawTable<'a> {
    /// The sheet, in a workbook.
    pub sheet: Option<String>,
    /// The columns.
    pub columns: Vec<Raw<'a>>,
    /// How many samples.
    pub n_rows: usize,
    /// Where they stand.
    pub lines: RawLines,
    /// Whether the file says of every value how it is stored.
    pub is_typed: bool,
    /// The row of the header; 0 if there is none.
    pub header_line: u32,
    /// What was noticed so far.
    pub findings: Vec<Finding>,
}
