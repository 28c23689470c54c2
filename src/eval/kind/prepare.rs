//! Evaluates a prepare cell.

/// What the cell gives to those that draw on it.
#[derive(Clone, Debug, Default)]
pub struct Prepared {}
