//! The one place that names the matrix crates: nalgebra in signatures, faer for heavy work.
//!
//! Every call says that it wants one thread: parallel work is done over parts and resamples, so
//! that results do not depend on the number of threads.

use crate::numeric::error::FitError;
use faer::diag::Diag;
use faer::dyn_stack::{MemBuffer, MemStack};
use faer::linalg::matmul::{matmul, triangular};
use faer::linalg::{evd, svd};
use faer::{Accum, Mat, MatMut, MatRef, Par};

/// A matrix, stored by columns; samples go down the rows.
pub type Matrix = nalgebra::DMatrix<f64>;

fn view(matrix: &Matrix) -> MatRef<'_, f64> {
    MatRef::from_column_major_slice(matrix.as_slice(), matrix.nrows(), matrix.ncols())
}

fn view_mut(matrix: &mut Matrix) -> MatMut<'_, f64> {
    let (rows, columns) = matrix.shape();
    MatMut::from_column_major_slice_mut(matrix.as_mut_slice(), rows, columns)
}

fn owned(matrix: MatRef<'_, f64>) -> Matrix {
    Matrix::from_fn(matrix.nrows(), matrix.ncols(), |i, j| matrix[(i, j)])
}

/// Adds `block · blockᵀ` to the lower triangle of `sum` (m × m). `block` holds columns of length m.
pub(crate) fn add_outer(sum: &mut Matrix, block: &[f64]) {
    let m = sum.nrows();
    if m == 0 {
        return;
    }
    let block = MatRef::from_column_major_slice(block, m, block.len() / m);
    triangular::matmul(
        view_mut(sum),
        triangular::BlockStructure::TriangularLower,
        Accum::Add,
        block,
        triangular::BlockStructure::Rectangular,
        block.transpose(),
        triangular::BlockStructure::Rectangular,
        1.0,
        Par::Seq,
    );
}

/// Adds `left · rightᵀ` to `sum`; both are given by columns, with the lengths of `sum`'s sides.
pub(crate) fn add_cross(sum: &mut Matrix, left: &[f64], right: &[f64]) {
    let (rows, columns) = sum.shape();
    if rows == 0 || columns == 0 {
        return;
    }
    let left = MatRef::from_column_major_slice(left, rows, left.len() / rows);
    let right = MatRef::from_column_major_slice(right, columns, right.len() / columns);
    matmul(
        view_mut(sum),
        Accum::Add,
        left,
        right.transpose(),
        1.0,
        Par::Seq,
    );
}

/// The product of two matrices.
pub(crate) fn product(left: &Matrix, right: &Matrix) -> Matrix {
    let mut result = Matrix::zeros(left.nrows(), right.ncols());
    matmul(
        view_mut(&mut result),
        Accum::Replace,
        view(left),
        view(right),
        1.0,
        Par::Seq,
    );
    result
}

/// The product `leftᵀ · right`.
pub(crate) fn transposed_product(left: &Matrix, right: &Matrix) -> Matrix {
    let mut result = Matrix::zeros(left.ncols(), right.ncols());
    matmul(
        view_mut(&mut result),
        Accum::Replace,
        view(left).transpose(),
        view(right),
        1.0,
        Par::Seq,
    );
    result
}

/// Eigenvalues (rising) and eigenvectors (columns) of a symmetric matrix of which the lower
/// triangle is given.
///
/// # Errors
/// [`FitError::Factorisation`] when the iteration does not end, as with entries that are not finite.
pub(crate) fn symmetric_eigen(lower: &Matrix) -> Result<(Vec<f64>, Matrix), FitError> {
    let n = lower.nrows();
    if n <= 1 {
        return Ok((lower.as_slice().to_vec(), Matrix::identity(n, n)));
    }
    let mut values = Diag::<f64>::zeros(n);
    let mut vectors = Mat::<f64>::zeros(n, n);
    evd::self_adjoint_evd(
        view(lower),
        values.as_mut(),
        Some(vectors.as_mut()),
        Par::Seq,
        MemStack::new(&mut MemBuffer::new(evd::self_adjoint_evd_scratch::<f64>(
            n,
            evd::ComputeEigenvectors::Yes,
            Par::Seq,
            Default::default(),
        ))),
        Default::default(),
    )
    .map_err(|_| FitError::Factorisation)?;
    let values = (0..n).map(|at| values.column_vector()[at]).collect();
    Ok((values, owned(vectors.as_ref())))
}

/// The thin singular value decomposition: U (rows × r), the values (falling), V (columns × r).
///
/// # Errors
/// [`FitError::Factorisation`] when the iteration does not end, as with entries that are not finite.
pub fn thin_svd(matrix: &Matrix) -> Result<(Matrix, Vec<f64>, Matrix), FitError> {
    let (rows, columns) = matrix.shape();
    let size = rows.min(columns);
    if size == 0 {
        let empty = |side| Matrix::zeros(side, 0);
        return Ok((empty(rows), Vec::new(), empty(columns)));
    }
    let mut values = Diag::<f64>::zeros(size);
    let mut left = Mat::<f64>::zeros(rows, size);
    let mut right = Mat::<f64>::zeros(columns, size);
    let thin = svd::ComputeSvdVectors::Thin;
    svd::svd(
        view(matrix),
        values.as_mut(),
        Some(left.as_mut()),
        Some(right.as_mut()),
        Par::Seq,
        MemStack::new(&mut MemBuffer::new(svd::svd_scratch::<f64>(
            rows,
            columns,
            thin,
            thin,
            Par::Seq,
            Default::default(),
        ))),
        Default::default(),
    )
    .map_err(|_| FitError::Factorisation)?;
    let values = (0..size).map(|at| values.column_vector()[at]).collect();
    Ok((owned(left.as_ref()), values, owned(right.as_ref())))
}
