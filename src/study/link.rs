//! What a cell draws on.

use crate::study::cell::CellId;

/// A link to the cell that is drawn on, or to none yet.
///
/// A link may dangle: removing a cell does not touch others, they say what they miss, and undo
/// mends everything.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub struct Link(pub Option<CellId>);

impl Link {
    /// A link to a cell.
    #[must_use]
    pub const fn to(id: CellId) -> Self {
        Self(Some(id))
    }

    /// A link that has not been chosen yet.
    #[must_use]
    pub const fn open() -> Self {
        Self(None)
    }
}
