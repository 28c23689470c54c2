//! The one place that names the matrix crate.

/// A dense matrix of `f64`, stored column by column: samples down, predictors across.
pub type Matrix = nalgebra::DMatrix<f64>;
