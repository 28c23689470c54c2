//! Rows with a name, a bar and columns of text.

use crate::figure::{Role, Scale, Tip};

/// Rows with a name, a bar and columns of text.
#[derive(Clone, Debug, PartialEq)]
pub struct Rows {
    /// The heading of the names; may be empty.
    pub names: String,
    /// The heading of the bars; may be empty.
    pub bars: String,
    /// How numbers become places along the bars; lengths are read in equal steps only.
    pub scale: Scale,
    /// The numbers at the two ends of the bars' axis; `None` takes them from the rows and zero.
    pub range: Option<(f64, f64)>,
    /// Whether the unused length of the axis is shown.
    pub track: Track,
    /// An upright line through all bars: position and what it is; the words may be empty.
    pub rule: Option<(f64, String)>,
    /// The columns of text to the right of the bars.
    pub columns: Vec<Column>,
    /// From top to bottom.
    pub rows: Vec<Row>,
    /// Said below when not all rows have room; `{}` stands for how many were left out.
    pub more: String,
}

/// Whether the unused length of a bar's axis is shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Track {
    /// As a pale bar: for shares of a whole.
    Shown,
    /// Not.
    Hidden,
}

/// A column of text beside bars.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Column {
    /// Its heading; may be empty. Units belong here.
    pub heading: String,
    /// How its texts are aligned.
    pub align: Align,
}

/// How the texts of a column are aligned.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Align {
    /// To the left.
    Start,
    /// To the right.
    End,
    /// With the decimal marks below each other.
    Decimal,
}

/// A row with a bar.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    /// Its name.
    pub name: String,
    /// The bar.
    pub bar: Bar,
    /// One text for each column.
    pub cells: Vec<String>,
    /// Whether it is the row that matters.
    pub stress: Stress,
    /// What the pointer is told.
    pub tip: Option<Tip>,
}

/// A bar in a row.
#[derive(Clone, Debug, PartialEq)]
pub enum Bar {
    /// From zero to a value, with a whisker where an interval is known.
    Value {
        /// What it is for.
        role: Role,
        /// The value; a number that is not finite gives no bar.
        value: f64,
        /// The ends of the whisker.
        interval: Option<(f64, f64)>,
    },
    /// Not known yet: a dashed box with a word in it.
    Closed(String),
    /// A dot on the axis for each value, with a stroke at the middle one.
    Dots {
        /// What they are for.
        role: Role,
        /// The values.
        values: Vec<f64>,
        /// A value that stands out, such as a mean.
        middle: Option<f64>,
    },
    /// None.
    Blank,
}

/// Whether a row is the one that matters.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stress {
    /// Like the others.
    Plain,
    /// Set in semi-bold.
    Strong,
}
