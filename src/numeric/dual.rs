//! Ridge coefficients that stay in the space of the samples.

use crate::numeric::ground::Ground;
use crate::numeric::lanes;
use crate::numeric::matrix::{self, Matrix};
use crate::numeric::predictors::Predictors;
use crate::numeric::ridge::BLOCK;

/// Ridge coefficients in the space of the samples: bⱼ = zⱼ'α/fⱼ.
#[derive(Clone, Debug)]
pub(crate) struct Dual {
    /// α, m × (strengths · classes).
    alpha: Matrix,
    rows: Vec<usize>,
    mean: Vec<f64>,
    inverse_scale: Vec<f64>,
    /// inverse scale / penalty weight; zero for what is not penalised or not in the fit.
    reach: Vec<f64>,
}

impl Dual {
    /// From α, not weighted: bⱼ = zⱼ'α/fⱼ.
    pub(crate) fn new(ground: &Ground<'_>, alpha: Matrix) -> Self {
        let p = ground.predictors.n_predictors();
        Self {
            alpha,
            rows: ground.rows.clone(),
            mean: ground.mean.clone(),
            inverse_scale: ground.inverse_scale.clone(),
            reach: (0..p).map(|j| ground.reach(j)).collect(),
        }
    }

    /// With the strengths put back to where they stood before they were sorted; those beyond the
    /// present ones (strength 0) get zeros.
    pub(crate) fn reordered(self, order: &[usize], n_linear: usize) -> Self {
        let mut alpha = Matrix::zeros(self.alpha.nrows(), order.len() * n_linear);
        for (from, &to) in order.iter().enumerate() {
            for class in 0..n_linear {
                if from * n_linear + class < self.alpha.ncols() {
                    alpha.set_column(
                        to * n_linear + class,
                        &self.alpha.column(from * n_linear + class),
                    );
                }
            }
        }
        Self { alpha, ..self }
    }

    /// Mean and inverse scale of a predictor.
    pub(crate) fn scale(&self, predictor: usize) -> (f64, f64) {
        (self.mean[predictor], self.inverse_scale[predictor])
    }

    /// The coefficients of all penalised predictors at a strength: one pass over the matrix.
    pub(crate) fn standardised(&self, predictors: &Predictors, at: usize) -> Vec<(usize, f64)> {
        let mut g = vec![0.0; predictors.n_samples()];
        for (&row, &a) in self.rows.iter().zip(self.alpha.column(at).iter()) {
            g[row] = a;
        }
        let mut all = Vec::new();
        for (j, &reach) in self.reach.iter().enumerate() {
            if reach > 0.0 {
                let (column, mean) = (predictors.column(j), self.mean[j]);
                let product = lanes::dispatch(
                    #[inline(always)]
                    || lanes::shifted_dot_body(column, mean, &g),
                );
                all.push((j, reach * product));
            }
        }
        all.retain(|(_, b)| *b != 0.0);
        all
    }

    /// Σⱼ zⱼbⱼ for some rows, rows × strengths, through the products between rows.
    pub(crate) fn predict(&self, predictors: &Predictors, rows: &[usize]) -> Matrix {
        let (m, k) = (self.rows.len(), rows.len());
        let penalised: Vec<usize> = (0..self.reach.len())
            .filter(|&j| self.reach[j] > 0.0)
            .collect();
        let mut cross = Matrix::zeros(k, m);
        let size = BLOCK.min(penalised.len());
        let (mut left, mut right) = (vec![0.0; k * size], vec![0.0; m * size]);
        for some in penalised.chunks(BLOCK) {
            for (at, &j) in some.iter().enumerate() {
                let column = predictors.column(j);
                let mean = self.mean[j];
                for (z, &row) in left[at * k..(at + 1) * k].iter_mut().zip(rows) {
                    *z = (column[row] - mean) * self.inverse_scale[j];
                }
                for (z, &row) in right[at * m..(at + 1) * m].iter_mut().zip(&self.rows) {
                    *z = (column[row] - mean) * self.reach[j];
                }
            }
            matrix::add_cross(
                &mut cross,
                &left[..k * some.len()],
                &right[..m * some.len()],
            );
        }
        matrix::product(&cross, &self.alpha)
    }
}
