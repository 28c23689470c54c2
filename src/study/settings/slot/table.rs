//! The places of one imported table: the file, and how it is read.

use crate::base::layout::{DecimalMark, Delimiter, Encoding, Grouping, Orientation, UnitsRow};
use crate::base::problem::Problem;
use crate::study::settings::data::{Join, LeadingZeros, LetterCase, TableSource};
use crate::study::settings::slot::{Bounds, Value, take};

/// A place in the settings of one table.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum TableSlot {
    /// The file; nothing takes the table away.
    File,
    /// The sheet of a workbook; nothing leaves it to the reader.
    Sheet,
    /// Whether a sample is a row or a column.
    Orientation,
    /// How bytes become letters.
    Encoding,
    /// What separates values.
    Delimiter,
    /// What stands before decimals.
    Decimal,
    /// Whether marks between groups of digits are read.
    Grouping,
    /// The row with the column names, counted from 1; nothing leaves it to the reader.
    HeaderRow,
    /// Whether a row of units follows.
    UnitsRow,
    /// Texts that mean “missing”, beyond the blank.
    MissingCodes,
    /// The column of the tables before it by which it is joined.
    JoinLeft,
    /// Its own column by which it is joined.
    JoinRight,
    /// Whether upper and lower case are told apart.
    JoinCase,
    /// Whether zeros in front of a number count.
    JoinZeros,
}

const ORIENTATIONS: [(&str, Option<Orientation>); 3] = [
    ("rows", Some(Orientation::SamplesInRows)),
    ("columns", Some(Orientation::SamplesInColumns)),
    ("as-found", None),
];
const ORIENTATION_NAMES: [&str; 3] = take::names(&ORIENTATIONS);
const ENCODINGS: [(&str, Option<Encoding>); 5] = [
    ("as-found", None),
    ("utf-8", Some(Encoding::Utf8)),
    ("utf-16-le", Some(Encoding::Utf16Le)),
    ("utf-16-be", Some(Encoding::Utf16Be)),
    ("windows-1252", Some(Encoding::Windows1252)),
];
const ENCODING_NAMES: [&str; 5] = take::names(&ENCODINGS);
const DELIMITERS: [(&str, Option<Delimiter>); 6] = [
    ("as-found", None),
    ("comma", Some(Delimiter::Comma)),
    ("semicolon", Some(Delimiter::Semicolon)),
    ("tab", Some(Delimiter::Tab)),
    ("bar", Some(Delimiter::Bar)),
    ("blanks", Some(Delimiter::Blanks)),
];
const DELIMITER_NAMES: [&str; 6] = take::names(&DELIMITERS);
const DECIMALS: [(&str, Option<DecimalMark>); 3] = [
    ("as-found", None),
    ("point", Some(DecimalMark::Point)),
    ("comma", Some(DecimalMark::Comma)),
];
const DECIMAL_NAMES: [&str; 3] = take::names(&DECIMALS);
const GROUPINGS: [(&str, Option<Grouping>); 3] = [
    ("as-found", None),
    ("absent", Some(Grouping::Absent)),
    ("read", Some(Grouping::Read)),
];
const GROUPING_NAMES: [&str; 3] = take::names(&GROUPINGS);
const UNITS_ROWS: [(&str, Option<UnitsRow>); 3] = [
    ("as-found", None),
    ("absent", Some(UnitsRow::Absent)),
    ("below-header", Some(UnitsRow::BelowHeader)),
];
const UNITS_ROW_NAMES: [&str; 3] = take::names(&UNITS_ROWS);
const CASES: [(&str, LetterCase); 2] = [
    ("distinct", LetterCase::Distinct),
    ("folded", LetterCase::Folded),
];
const CASE_NAMES: [&str; 2] = take::names(&CASES);
const ZEROS: [(&str, LeadingZeros); 2] = [
    ("kept", LeadingZeros::Kept),
    ("ignored", LeadingZeros::Ignored),
];
const ZERO_NAMES: [&str; 2] = take::names(&ZEROS);

/// The usual column by which a table is joined where nothing better is known.
const USUAL_KEY: &str = "sample";

impl TableSlot {
    /// The places that a table has, in reading order.
    #[must_use]
    pub fn of(table: &TableSource) -> Vec<Self> {
        let mut slots = vec![Self::File];
        if table.is_workbook() {
            slots.push(Self::Sheet);
        }
        slots.push(Self::Orientation);
        if table.join.is_some() {
            slots.push(Self::JoinLeft);
        }
        slots.extend([Self::HeaderRow, Self::UnitsRow]);
        if !table.is_workbook() {
            slots.extend([Self::Delimiter, Self::Decimal, Self::Encoding]);
        }
        slots.extend([Self::Grouping, Self::MissingCodes]);
        if table.join.is_some() {
            slots.extend([Self::JoinRight, Self::JoinCase, Self::JoinZeros]);
        }
        slots
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::File => "file",
            Self::Sheet => "sheet",
            Self::Orientation => "place of the samples",
            Self::Encoding => "encoding",
            Self::Delimiter => "separator",
            Self::Decimal => "decimal mark",
            Self::Grouping => "groups of digits",
            Self::HeaderRow => "row of names",
            Self::UnitsRow => "row of units",
            Self::MissingCodes => "words for missing values",
            Self::JoinLeft => "column to join on",
            Self::JoinRight => "column that is matched",
            Self::JoinCase => "rule for upper and lower case",
            Self::JoinZeros => "rule for zeros in front",
        }
    }

    /// The stable names of the choices.
    #[must_use]
    pub const fn choices(self) -> &'static [&'static str] {
        match self {
            Self::Orientation => &ORIENTATION_NAMES,
            Self::Encoding => &ENCODING_NAMES,
            Self::Delimiter => &DELIMITER_NAMES,
            Self::Decimal => &DECIMAL_NAMES,
            Self::Grouping => &GROUPING_NAMES,
            Self::UnitsRow => &UNITS_ROW_NAMES,
            Self::JoinCase => &CASE_NAMES,
            Self::JoinZeros => &ZERO_NAMES,
            Self::File
            | Self::Sheet
            | Self::HeaderRow
            | Self::MissingCodes
            | Self::JoinLeft
            | Self::JoinRight => &[],
        }
    }

    /// The numbers that may stand there.
    #[must_use]
    pub const fn bounds(self) -> Option<Bounds> {
        match self {
            Self::HeaderRow => Some(Bounds::Whole {
                least: 1,
                most: 10_000,
            }),
            Self::File
            | Self::Sheet
            | Self::Orientation
            | Self::Encoding
            | Self::Delimiter
            | Self::Decimal
            | Self::Grouping
            | Self::UnitsRow
            | Self::MissingCodes
            | Self::JoinLeft
            | Self::JoinRight
            | Self::JoinCase
            | Self::JoinZeros => None,
        }
    }

    /// What stands there.
    #[must_use]
    pub fn get(self, table: &TableSource) -> Option<Value> {
        let join = table.join.as_ref();
        Some(match self {
            Self::File => Value::File {
                source: table.source.clone(),
                name: table.file.clone(),
            },
            Self::Sheet => table.sheet.clone().map_or(Value::Nothing, Value::Text),
            Self::Orientation => take::named(&ORIENTATIONS, table.orientation),
            Self::Encoding => take::named(&ENCODINGS, table.encoding),
            Self::Delimiter => take::named(&DELIMITERS, table.delimiter),
            Self::Decimal => take::named(&DECIMALS, table.decimal),
            Self::Grouping => take::named(&GROUPINGS, table.grouping),
            Self::HeaderRow => table
                .header_row
                .map_or(Value::Nothing, |row| Value::Whole(row as u64)),
            Self::UnitsRow => take::named(&UNITS_ROWS, table.units_row),
            Self::MissingCodes => Value::Texts(table.missing_codes.clone()),
            Self::JoinLeft => Value::Column(Some(join?.left.clone())),
            Self::JoinRight => Value::Column(Some(join?.right.clone())),
            Self::JoinCase => take::named(&CASES, join?.case),
            Self::JoinZeros => take::named(&ZEROS, join?.zeros),
        })
    }

    /// The table with another value there.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there.
    pub fn set(self, table: &TableSource, value: &Value) -> Result<TableSource, Problem> {
        let label = self.label();
        let mut table = table.clone();
        match self {
            Self::File => {
                let Value::File { source, name } = value else {
                    return Err(take::wrong_sort(label, "a file", value));
                };
                if is_workbook(name) != table.is_workbook() {
                    // The words of a workbook mean nothing in a text, and the other way round.
                    table.sheet = None;
                    table.encoding = None;
                    table.delimiter = None;
                    table.decimal = None;
                }
                if table.source != *source {
                    table.taken_on = None;
                }
                table.source = source.clone();
                table.file.clone_from(name);
            }
            Self::Sheet => table.sheet = take::optional_text(label, value)?,
            Self::Orientation => table.orientation = take::pick(label, &ORIENTATIONS, value)?,
            Self::Encoding => table.encoding = take::pick(label, &ENCODINGS, value)?,
            Self::Delimiter => table.delimiter = take::pick(label, &DELIMITERS, value)?,
            Self::Decimal => table.decimal = take::pick(label, &DECIMALS, value)?,
            Self::Grouping => table.grouping = take::pick(label, &GROUPINGS, value)?,
            Self::HeaderRow => {
                table.header_row = match self.bounds() {
                    Some(bounds) if !take::is_nothing(value) => {
                        Some(take::count(label, bounds, value)? as usize)
                    }
                    Some(_) | None => None,
                }
            }
            Self::UnitsRow => table.units_row = take::pick(label, &UNITS_ROWS, value)?,
            Self::MissingCodes => table.missing_codes = take::texts(label, value)?,
            Self::JoinLeft | Self::JoinRight | Self::JoinCase | Self::JoinZeros => {
                let join = table
                    .join
                    .as_mut()
                    .ok_or_else(|| take::absent(label, "the first table is joined to no other"))?;
                self.set_join(join, value)?;
            }
        }
        Ok(table)
    }

    fn set_join(self, join: &mut Join, value: &Value) -> Result<(), Problem> {
        let label = self.label();
        match self {
            Self::JoinLeft => {
                let column = take::column(label, value)?;
                // Columns that had one name keep having one.
                if join.left == join.right {
                    join.right.clone_from(&column);
                }
                join.left = column;
            }
            Self::JoinRight => join.right = take::column(label, value)?,
            Self::JoinCase => join.case = take::pick(label, &CASES, value)?,
            Self::JoinZeros => join.zeros = take::pick(label, &ZEROS, value)?,
            Self::File
            | Self::Sheet
            | Self::Orientation
            | Self::Encoding
            | Self::Delimiter
            | Self::Decimal
            | Self::Grouping
            | Self::HeaderRow
            | Self::UnitsRow
            | Self::MissingCodes => {}
        }
        Ok(())
    }
}

/// Whether a file of this name is a workbook.
fn is_workbook(file: &str) -> bool {
    let name = file.to_lowercase();
    [".xlsx", ".xlsm", ".xlsb", ".xls", ".ods"]
        .iter()
        .any(|ending| name.ends_with(ending))
}

impl TableSource {
    /// Whether the file is a workbook, which has sheets, and not a delimited text.
    #[must_use]
    pub fn is_workbook(&self) -> bool {
        is_workbook(&self.file)
    }
}

/// The usual join on a column that both tables have.
#[must_use]
pub fn usual_join(column: Option<&str>) -> Join {
    let column = column.unwrap_or(USUAL_KEY).to_owned();
    Join {
        left: column.clone(),
        right: column,
        case: LetterCase::Distinct,
        zeros: LeadingZeros::Kept,
    }
}
