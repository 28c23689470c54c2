//! Why there is no table at all, as facts; the sentences are made elsewhere.

/// Why a file gave no table.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum ReadError {
    /// The file has no bytes.
    Empty,
    /// The file holds only blanks.
    Blank,
    /// The file is no table.
    Binary {
        /// What it is, if its first bytes tell.
        what: Option<&'static str>,
    },
    /// A compressed file or workbook ends too early.
    TruncatedArchive {
        /// How many bytes could be unpacked.
        unpacked: usize,
    },
    /// A compressed file or workbook is damaged.
    DamagedArchive {
        /// What the unpacking said.
        details: String,
    },
    /// A zip archive that is no workbook.
    NotAWorkbook,
    /// The workbook is protected by a password.
    Encrypted,
    /// The workbook has no sheet of this name.
    NoSuchSheet {
        /// The name that was asked for.
        asked: String,
        /// The sheets there are.
        sheets: Vec<String>,
    },
    /// The workbook has no sheet with cells.
    NoSheet,
    /// The sheet has no filled cell.
    EmptySheet {
        /// The sheet.
        sheet: String,
    },
    /// The row that was named as the header does not exist.
    NoSuchRow {
        /// The row that was asked for, counted from 1.
        asked: usize,
        /// How many rows there are.
        rows: usize,
    },
    /// There are names of columns, but no samples.
    HeaderOnly {
        /// How many names.
        columns: usize,
    },
    /// The table is larger than can be held.
    TooLarge,
}
