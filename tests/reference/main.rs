//! Numbers with known answers; see README.md in this folder.

/// Lasso and elastic net, measured outcome.
mod gaussian;
/// Ridge, measured outcome.
mod ridge;
/// Reading the tables and values, and comparing.
mod support;
