//! Coloured tiles with names along both sides.

use crate::figure::Tip;

/// Coloured tiles with names along both sides.
#[derive(Clone, Debug, PartialEq)]
pub struct Tiles {
    /// Names of the rows, from top to bottom.
    pub rows: Vec<String>,
    /// Names of the columns, from left to right.
    pub columns: Vec<String>,
    /// What the rows are.
    pub row_label: String,
    /// What the columns are.
    pub column_label: String,
    /// Row by row; what is not finite has no tile.
    pub values: Vec<f64>,
    /// One text for each tile, shown where all have room; or empty.
    pub texts: Vec<String>,
    /// The number at full colour; the opposite colour is at its negative.
    pub full: f64,
    /// Rows that begin a new block, so that a gap is left above them.
    pub breaks: Vec<usize>,
    /// The words at the ends of the colour key, from lowest to highest; empty for no key.
    pub key: Vec<String>,
    /// What the pointer is told; empty, or one for each tile.
    pub tips: Vec<Tip>,
}
