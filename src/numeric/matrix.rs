//! The one place that names the matrix crate.

/// A dense matrix of `f64`, stored column by column: samples down, predictors across.
pub type Matrix = nalgebra::DMatrix<f64>;

/// A factorisation that did not end.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) struct NotFactorised;

/// The product of two matrices.
pub(crate) fn product(left: &Matrix, right: &Matrix) -> Matrix {
    left * right
}

/// Eigenvalues (rising) and eigenvectors (columns) of a symmetric matrix of which the lower
/// triangle is given.
///
/// # Errors
/// [`NotFactorised`] when the iteration does not end, as with entries that are not finite.
pub(crate) fn symmetric_eigen(lower: &Matrix) -> Result<(Vec<f64>, Matrix), NotFactorised> {
    let n = lower.nrows();
    let eigen = nalgebra::SymmetricEigen::try_new(lower.clone(), f64::EPSILON, 10_000)
        .ok_or(NotFactorised)?;
    let mut order: Vec<usize> = (0..n).collect();
    order.sort_by(|&a, &b| eigen.eigenvalues[a].total_cmp(&eigen.eigenvalues[b]));
    let values = order.iter().map(|&at| eigen.eigenvalues[at]).collect();
    Ok((values, eigen.eigenvectors.select_columns(&order)))
}
