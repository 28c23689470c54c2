//! Numbers with known answers; see README.md in this folder.

/// Lasso and elastic net, measured outcome.
mod gaussian;
/// All other outcomes.
mod other;
/// Cross-validation and selection on halves with given parts.
mod procedure;
/// Ridge, measured outcome.
mod ridge;
/// Reading the tables and values, and comparing.
mod support;
