//! Where a grid takes what it shows, and what it tells.

use std::borrow::Cow;

/// The four states that a value can have.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Condition {
    /// A value.
    Known,
    /// None.
    Missing,
    /// Below the limit of what could be measured.
    BelowLimit,
    /// Above the limit of what could be measured.
    AboveLimit,
    /// A value that was corrected.
    Corrected,
}

/// A field of a grid.
#[derive(Clone, Debug, PartialEq)]
pub struct Field<'a> {
    /// How it reads.
    pub text: Cow<'a, str>,
    /// Its state.
    pub condition: Condition,
}

impl<'a> Field<'a> {
    /// A known value.
    pub fn known(text: impl Into<Cow<'a, str>>) -> Self {
        Self {
            text: text.into(),
            condition: Condition::Known,
        }
    }
}

/// How the fields of a column are aligned.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Align {
    /// Words.
    Start,
    /// Numbers: their decimal marks stand below each other.
    End,
}

/// Where a grid takes what it shows. It is asked for what can be seen, and for widths once.
pub trait Source {
    /// The number of rows.
    fn n_rows(&self) -> usize;
    /// The number of columns, without the names of the rows.
    fn n_columns(&self) -> usize;
    /// The heading of the names.
    fn corner(&self) -> Cow<'_, str>;
    /// The name of a row.
    fn row(&self, row: usize) -> Cow<'_, str>;
    /// The name of a column.
    fn column(&self, column: usize) -> Cow<'_, str>;
    /// What is said below the name of a column: its role, its unit.
    fn remark(&self, _column: usize) -> Option<Cow<'_, str>> {
        None
    }
    /// Whether any column has a remark.
    fn has_remarks(&self) -> bool {
        false
    }
    /// A field.
    fn field(&self, row: usize, column: usize) -> Field<'_>;
    /// How a column is aligned.
    fn align(&self, _column: usize) -> Align {
        Align::End
    }
    /// Changes when widths have to be taken again.
    fn version(&self) -> u64 {
        0
    }
}

/// What was done in a grid.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Did {
    /// The cursor was put on a field.
    At {
        /// The row.
        row: usize,
        /// The column.
        column: usize,
    },
    /// A field was opened, by two presses or Enter.
    Opened {
        /// The row.
        row: usize,
        /// The column.
        column: usize,
    },
    /// The head of a column was pressed.
    Head(usize),
    /// The name of a row was pressed.
    Row(usize),
}

/// A request to show a column, obeyed once.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Show {
    /// The column.
    pub column: usize,
    /// The row, where one is meant.
    pub row: Option<usize>,
    /// Counts the requests; 0 is none.
    pub serial: u64,
}

/// What of a grid stands out: the same thing was pressed there or somewhere else.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct StandsOut {
    /// A row.
    pub row: Option<usize>,
    /// A column.
    pub column: Option<usize>,
}
