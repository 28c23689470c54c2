//! Settings of a Compare cell: fits set side by side.

use crate::study::link::Link;

/// Settings of a Compare cell.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub struct Compare {
    /// The fits, in the order in which they are shown.
    pub fits: Vec<Link>,
}
