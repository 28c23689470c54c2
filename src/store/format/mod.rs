//! What is in a study file, version by version. Old versions are read for ever; the newest is
//! written.

pub mod place;
pub mod print;
pub mod v1;

use crate::base::problem::{Place, Problem};
use crate::study::Study;
use crate::study::ledger::Ledger;
use crate::study::source::SourceId;
use serde_json::Value;

/// The newest format.
pub const NEWEST: u64 = 1;

/// The program that writes.
pub const PROGRAM: &str = concat!("widefold ", env!("CARGO_PKG_VERSION"));

/// Finds a table: from the name and the hash in a file to its bytes' name and its file's name.
pub type FindTable<'a> = dyn Fn(&str, Option<SourceId>) -> (SourceId, String) + 'a;

/// A study as it was read, with what was found on the way.
#[derive(Debug)]
pub struct Read {
    /// The study.
    pub study: Study,
    /// What was counted.
    pub ledger: Ledger,
    /// What could not be read or is not known; it is kept.
    pub problems: Vec<Problem>,
}

/// What becomes of a study of a newer format.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Newer {
    /// It is not read: what is made from it would not be what was saved.
    Refused,
    /// As much of it is read as this version knows, and that is said.
    InPart,
}

/// Reads a study of any format. `table` gives the bytes and the file name of a table, from the
/// name and the hash in the file.
///
/// # Errors
/// A [`Problem`] when the bytes are no study, or one of a newer format that is refused or of
/// which nothing can be read.
pub fn read(
    bytes: &[u8],
    file: &str,
    table: &FindTable<'_>,
    newer: Newer,
) -> Result<Read, Problem> {
    let value = json(bytes, file)?;
    match (version(&value, file)?, newer) {
        (1, _) => v1::study::read(&value, file, table),
        (format, Newer::Refused) => Err(newer_format(format, file)),
        (format, Newer::InPart) => {
            let mut read =
                v1::study::read(&value, file, table).map_err(|_| newer_format(format, file))?;
            read.problems.insert(0, read_in_part(format, file));
            Ok(read)
        }
    }
}

/// Says that a file is from the future and that not all of it is shown.
fn read_in_part(format: u64, file: &str) -> Problem {
    Problem::new(
        NEWER,
        format!(
            "This study was saved by a newer version (format {format}); what this version knows \
             of it is shown."
        ),
    )
    .at(Place::file(file))
    .mend("Read it here, and change it with the newer version.")
    .mend(
        "What is saved from here keeps only what is shown: save it under another name, so that \
         the newer study stays as it is.",
    )
}

/// The code of the problem that a study is of a newer format.
pub const NEWER: &str = "newer-format";

/// The format that a file says it has; a file written by hand may leave it out.
///
/// # Errors
/// A [`Problem`] when it is not a number that can be a format.
pub fn version(value: &Value, file: &str) -> Result<u64, Problem> {
    let unclear = || {
        Problem::new(
            "format-unclear",
            "The field “format” does not hold the number of a format.",
        )
        .at(Place::file(file))
        .mend("Write 1 there.")
    };
    match value.get("format") {
        None => Ok(1),
        Some(format) => format.as_u64().filter(|n| *n > 0).ok_or_else(unclear),
    }
}

/// Says that a file is from the future.
#[must_use]
pub fn newer_format(format: u64, file: &str) -> Problem {
    Problem::new(
        NEWER,
        format!(
            "This study was saved by a newer version (format {format}). This version reads format \
             {NEWEST}."
        ),
    )
    .at(Place::file(file))
    .mend("Open it with the newer version, which can also hand over its workbook and write-up.")
}

/// Reads JSON, with or without a byte-order mark.
///
/// # Errors
/// A [`Problem`] that names the line.
pub fn json(bytes: &[u8], file: &str) -> Result<Value, Problem> {
    let bytes = bytes.strip_prefix(b"\xef\xbb\xbf").unwrap_or(bytes);
    serde_json::from_slice(bytes).map_err(|error| {
        let found = if error.is_eof() {
            format!("The text ends in line {} before it is complete.", error.line())
        } else {
            format!(
                "The text can be read as JSON only up to line {}, character {}.",
                error.line(),
                error.column()
            )
        };
        Problem::new("json-broken", found)
            .at(Place::file(file).with_row(error.line()))
            .mend("Look there for a missing comma, quotation mark or bracket, or take an earlier copy.")
            .details(error.to_string())
    })
}
