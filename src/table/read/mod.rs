//! Bytes in; a table and what was noticed about it out.

mod assemble;
mod below;
mod cell;
mod decide;
mod dialect;
mod error;
mod labels;
mod layout;
mod letters;
mod names;
mod number;
mod raw;
mod split;
mod suspect;
mod text;
mod unpack;
mod workbook;

pub use crate::table::finding::{Finding, FindingKind, Treatment};
pub use error::ReadError;

use crate::base::layout::{DecimalMark, Delimiter, Encoding, Grouping, Orientation, UnitsRow};
use crate::base::thread::Threads;
use crate::base::work::{Cancelled, Work};
use crate::table::Table;
use std::borrow::Cow;

/// How a file is to be read. `None` is guessed, and said in [`Reading::used`].
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub struct Options {
    /// The sheet of a workbook.
    pub sheet: Option<String>,
    /// How bytes become letters.
    pub encoding: Option<Encoding>,
    /// What separates values.
    pub delimiter: Option<Delimiter>,
    /// What stands before decimals.
    pub decimal: Option<DecimalMark>,
    /// Whether marks between groups of digits are read.
    pub grouping: Option<Grouping>,
    /// The row of the header, counted from 1; 0 says that there is none.
    pub header_row: Option<usize>,
    /// Whether units stand below the header (sideways: beside the names).
    pub units_row: Option<UnitsRow>,
    /// Whether samples are rows.
    pub orientation: Option<Orientation>,
    /// Values that stand for “missing”, beyond blanks and the usual words.
    pub missing_codes: Vec<String>,
    /// Columns to keep as text, letter for letter.
    pub as_text: Vec<String>,
    /// Columns to read as numbers, even if most values are none.
    pub as_numbers: Vec<String>,
}

/// What else the file could be read as.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Choices {
    /// The sheets of a workbook.
    pub sheets: Vec<SheetChoice>,
}

/// A sheet of a workbook.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SheetChoice {
    /// Its name.
    pub name: String,
    /// Whether it can be seen.
    pub visibility: Visibility,
}

/// Whether a sheet can be seen in the workbook.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Visibility {
    /// It can.
    Visible,
    /// It is hidden.
    Hidden,
}

/// A table and what was noticed about it.
#[derive(Clone, Debug)]
pub struct Reading {
    /// The table.
    pub table: Table,
    /// What was noticed, in the order of the file, the layout, names, and values.
    pub findings: Vec<Finding>,
    /// Every interpretation made explicit: reading again with it gives the same table.
    pub used: Options,
    /// What else was possible.
    pub choices: Choices,
}

/// The outcome of reading, unless it was called off.
pub type Outcome = Result<Reading, ReadError>;

/// Reads a delimited text (plain or gzip) or a workbook, whichever the bytes are; the name of the
/// file is only used to say where things stand.
///
/// Damage is reported, never a reason to give up: there is a [`ReadError`] only when there is no
/// table at all. The result does not depend on the number of threads.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn read(
    bytes: &[u8],
    file_name: &str,
    options: &Options,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Outcome, Cancelled> {
    if bytes.is_empty() {
        return Ok(Err(ReadError::Empty));
    }
    let (bytes, work) = if unpack::is_gzip(bytes) {
        match unpack::gunzip(bytes, &work.part(0.0..0.3))? {
            Ok(content) if content.is_empty() => return Ok(Err(ReadError::Empty)),
            Ok(content) => (Cow::Owned(content), work.part(0.3..1.0)),
            Err(error) => return Ok(Err(error)),
        }
    } else {
        (Cow::Borrowed(bytes), work.clone())
    };
    if workbook::is_workbook(&bytes) {
        return workbook::read(&bytes, file_name, options, &work);
    }
    if let Some(what) = letters::known_binary(&bytes) {
        return Ok(Err(ReadError::Binary { what: Some(what) }));
    }
    let look = work.part(0.0..0.1);
    let letters = match options.encoding {
        Some(encoding) => letters::decode(&bytes, encoding, &look)?,
        None => letters::decode_as_found(&bytes, &look)?,
    };
    if letters::is_binary(&letters.text) {
        return Ok(Err(ReadError::Binary { what: None }));
    }
    let mut options = options.clone();
    let is_guessed = options.encoding.is_none();
    options.encoding = Some(letters.encoding);
    let work = work.part(0.1..1.0);
    let mut outcome = text::read(&letters.text, file_name, &options, threads, &work)?;
    if let Ok(reading) = &mut outcome
        && is_guessed
        && letters.encoding != Encoding::Utf8
    {
        let kind = FindingKind::OtherEncoding(letters.encoding);
        let finding = Finding::new(kind, Treatment::ReadAsSuch).counting(1);
        reading.findings.insert(0, finding);
    }
    Ok(outcome)
}

#[cfg(test)]
mod tests;
