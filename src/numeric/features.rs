//! The directions that the penalised predictors span in the space of the samples.

use crate::base::work::Work;
use crate::numeric::error::Stop;
use crate::numeric::ground::Ground;
use crate::numeric::matrix::{self, Matrix};
use crate::numeric::ridge::{EMPTY, NARROW, NO_DIRECTION, SMALL, block_size};

/// The directions that the penalised predictors span in the space of the samples: Z F^(−½) = E V'
/// with columns E, so that λ/2 Σ fⱼbⱼ² = λ/2 ‖β‖² for Zb = Eβ.
pub(crate) struct Features {
    /// E, m × r; not weighted.
    pub(crate) columns: Matrix,
    pub(crate) n_predictors: usize,
    back: Back,
}

/// From β to coefficients.
enum Back {
    /// b = F^(−½) V β, for the listed predictors.
    Right(Vec<usize>, Matrix),
    /// b = F⁻¹ Z'α with α = E D⁻¹ β: the eigenvalues D.
    Left(Vec<f64>),
}

impl Features {
    /// Decomposes the penalised predictors.
    ///
    /// # Errors
    /// When called off, or when a decomposition does not end.
    pub(crate) fn new(ground: &Ground<'_>, work: &Work<'_>) -> Result<Self, Stop> {
        let m = ground.n_rows();
        let penalised: Vec<usize> = (0..ground.predictors.n_predictors())
            .filter(|&j| ground.reach(j) > 0.0)
            .collect();
        let n_predictors = penalised.len();
        let scaled = |j: usize, column: &mut [f64]| {
            ground.standardised(j, column);
            let root = ground.factor(j).sqrt();
            for value in column {
                *value /= root;
            }
        };
        if n_predictors <= NARROW * m || n_predictors * m <= SMALL {
            let mut columns = Matrix::zeros(m, n_predictors);
            for (at, &j) in penalised.iter().enumerate() {
                scaled(j, &mut columns.as_mut_slice()[at * m..(at + 1) * m]);
            }
            let (left, values, right) = matrix::stoppable_svd(&columns, work)?;
            let least = NO_DIRECTION * values.first().copied().unwrap_or(0.0);
            let size = values.partition_point(|s| *s > least);
            let mut columns = left.columns(0, size).into_owned();
            for (mut column, s) in columns.column_iter_mut().zip(&values) {
                column *= *s;
            }
            let right = right.columns(0, size).into_owned();
            return Ok(Self {
                columns,
                n_predictors,
                back: Back::Right(penalised, right),
            });
        }
        let mut gram = Matrix::zeros(m, m);
        let mut block = vec![0.0; m * block_size(m).min(n_predictors)];
        for some in penalised.chunks(block_size(m)) {
            work.check()?;
            for (column, &j) in block.chunks_exact_mut(m).zip(some) {
                scaled(j, column);
            }
            matrix::add_outer(&mut gram, &block[..m * some.len()]);
        }
        let (values, vectors) = matrix::stoppable_eigen(gram, work)?;
        let least = EMPTY * values.last().copied().unwrap_or(0.0);
        let kept: Vec<usize> = (0..m).rev().filter(|&k| values[k] > least).collect();
        let columns: Vec<_> = kept
            .iter()
            .map(|&k| vectors.column(k) * values[k].sqrt())
            .collect();
        Ok(Self {
            columns: Matrix::from_columns(&columns),
            n_predictors,
            back: Back::Left(kept.iter().map(|&k| values[k]).collect()),
        })
    }

    /// The coefficients of β (r × classes): listed for each class; or, for wide data, α (m × classes).
    pub(crate) fn coefficients(
        &self,
        ground: &Ground<'_>,
        beta: &Matrix,
    ) -> Result<Vec<Vec<(usize, f64)>>, Matrix> {
        match &self.back {
            Back::Right(listed, right) => {
                let b = matrix::product(right, beta);
                let list = |class: usize| {
                    let scaled = listed.iter().enumerate();
                    let value = |k: usize, j: usize| b[(k, class)] / ground.factor(j).sqrt();
                    scaled.map(|(k, &j)| (j, value(k, j))).collect()
                };
                Ok((0..beta.ncols()).map(list).collect())
            }
            Back::Left(values) => {
                let scaled = Matrix::from_fn(beta.nrows(), beta.ncols(), |k, class| {
                    beta[(k, class)] / values[k]
                });
                Err(matrix::product(&self.columns, &scaled))
            }
        }
    }
}
