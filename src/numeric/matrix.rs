//! The one place that names the matrix crates: nalgebra in signatures, faer for heavy work.
//!
//! Every call says that it wants one thread: parallel work is done over parts and resamples, so
//! that results do not depend on the number of threads.

use crate::base::thread;
use crate::base::work::Work;
use crate::numeric::error::{FitError, Stop};
use faer::diag::Diag;
use faer::dyn_stack::{MemBuffer, MemStack};
use faer::linalg::cholesky::llt::factor as llt;
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

/// The lower triangle of `leftᵀ · right`, for two matrices with columns of one length; zeros above
/// it.
pub(crate) fn lower_product(left: &[f64], right: &[f64], length: usize) -> Matrix {
    let k = left.len() / length.max(1);
    let mut result = Matrix::zeros(k, k);
    if k > 0 {
        let left = MatRef::from_column_major_slice(left, length, k);
        let right = MatRef::from_column_major_slice(right, length, k);
        triangular::matmul(
            view_mut(&mut result),
            triangular::BlockStructure::TriangularLower,
            Accum::Replace,
            left.transpose(),
            triangular::BlockStructure::Rectangular,
            right,
            triangular::BlockStructure::Rectangular,
            1.0,
            Par::Seq,
        );
    }
    result
}

/// Replaces the lower triangle of a symmetric matrix by its Cholesky factor. Returns `false`, and
/// leaves nothing of use, when a pivot is not above zero.
pub(crate) fn cholesky(lower: &mut Matrix) -> bool {
    let n = lower.nrows();
    llt::cholesky_in_place(
        view_mut(lower),
        llt::LltRegularization::default(),
        Par::Seq,
        MemStack::new(&mut MemBuffer::new(llt::cholesky_in_place_scratch::<f64>(
            n,
            Par::Seq,
            Default::default(),
        ))),
        Default::default(),
    )
    .is_ok()
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

/// Decompositions of more multiplications than this run apart, so that a stop need not wait for
/// them: a few hundredths of a second.
const LONG: usize = 100_000_000;

/// [`symmetric_eigen`] that answers a stop at once; a large decomposition that is under way then
/// runs to its end in the background and is thrown away.
///
/// # Errors
/// When called off, or when the iteration does not end.
pub(crate) fn stoppable_eigen(lower: Matrix, work: &Work<'_>) -> Result<(Vec<f64>, Matrix), Stop> {
    work.check()?;
    if 9 * lower.nrows().pow(3) <= LONG {
        return Ok(symmetric_eigen(&lower)?);
    }
    Ok(thread::apart(work, move || symmetric_eigen(&lower))??)
}

/// U, the values and V of [`thin_svd`].
type Svd = (Matrix, Vec<f64>, Matrix);

/// [`thin_svd`] that answers a stop at once, as [`stoppable_eigen`] does.
///
/// # Errors
/// When called off, or when the iteration does not end.
pub(crate) fn stoppable_svd(matrix: &Matrix, work: &Work<'_>) -> Result<Svd, Stop> {
    work.check()?;
    let (rows, columns) = matrix.shape();
    let side = rows.min(columns);
    if 10 * side * side * rows.max(columns) <= LONG {
        return Ok(thin_svd(matrix)?);
    }
    let matrix = matrix.clone();
    Ok(thread::apart(work, move || thin_svd(&matrix))??)
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
