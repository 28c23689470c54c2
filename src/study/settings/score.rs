//! Settings of a Score cell: a fit applied to samples of another table.

use crate::study::link::Link;
use crate::study::settings::data::TableSource;

/// Settings of a Score cell.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub struct Score {
    /// The fit that is applied.
    pub fit: Link,
    /// The table with the new samples.
    pub table: Option<TableSource>,
}
