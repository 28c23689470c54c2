//! How a table lies in a file: the words that reading a file and the study's settings share.

/// What separates the values of a delimited text.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Delimiter {
    /// `,`
    Comma,
    /// `;`
    Semicolon,
    /// The tabulator.
    Tab,
    /// `|`
    Bar,
    /// One or more blanks.
    Blanks,
}

/// What stands before the decimals of a number.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum DecimalMark {
    /// `3.14`
    Point,
    /// `3,14`
    Comma,
}

/// How bytes become letters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Encoding {
    /// UTF-8, with or without a byte-order mark.
    Utf8,
    /// UTF-16, low byte first.
    Utf16Le,
    /// UTF-16, high byte first.
    Utf16Be,
    /// Windows-1252, which also reads Latin-1.
    Windows1252,
}

/// Whether a sample is a row of the file, or a column.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Orientation {
    /// One row is one sample.
    SamplesInRows,
    /// One column is one sample, as wide tables are often delivered.
    SamplesInColumns,
}

/// What the lines between the header and the first sample hold.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum UnitsRow {
    /// There is none.
    Absent,
    /// The first row below the header holds the units.
    BelowHeader,
}

/// Marks between groups of three digits, as in 1,234,567.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Grouping {
    /// There are none; a value that has them is listed and counts as missing.
    Absent,
    /// Well-formed groups of three are read, whichever of comma, point, blank or apostrophe
    /// (but not the decimal mark) stands between them.
    Read,
}
