//! The effective degrees of freedom of elastic net fits.

use crate::numeric::basis::Basis;
use crate::numeric::ground::Ground;
use crate::numeric::matrix::{self, Matrix};
use crate::numeric::predictors::Predictors;
use std::collections::BTreeMap;

/// What the degrees of freedom of a path are computed from, when they are asked for.
#[derive(Clone, Debug)]
pub(crate) struct Freedom {
    basis: Basis,
    rows: Vec<usize>,
    root: Vec<f64>,
    share: f64,
    /// Penalty weights other than 1.
    factors: BTreeMap<usize, f64>,
}

impl Freedom {
    pub(crate) fn new(ground: &Ground<'_>, basis: Basis, share: f64) -> Self {
        let p = ground.predictors.n_predictors();
        Self {
            basis,
            rows: ground.rows.clone(),
            root: ground.root.clone(),
            share,
            factors: (0..p)
                .map(|j| (j, ground.factor(j)))
                .filter(|(_, factor)| *factor != 1.0)
                .collect(),
        }
    }

    /// The number of unpenalised columns plus the trace of Z_A (Z_A'Z_A + λ(1 − share)F)⁻¹ Z_A'
    /// over the chosen predictors A, given as index with mean and inverse scale.
    pub(crate) fn effective(
        &self,
        predictors: &Predictors,
        chosen: impl Iterator<Item = (usize, (f64, f64))>,
        strength: f64,
    ) -> f64 {
        let m = self.rows.len();
        let mut columns = Vec::new();
        for (j, (mean, inverse_scale)) in chosen {
            let factor = self.factors.get(&j).copied().unwrap_or(1.0);
            if factor == 0.0 {
                continue;
            }
            let values = predictors.column(j);
            let scale = inverse_scale / factor.sqrt();
            let from = columns.len();
            columns.extend(
                self.rows
                    .iter()
                    .zip(&self.root)
                    .map(|(&row, root)| (values[row] - mean) * scale * root),
            );
            self.basis.project(&mut columns[from..]);
        }
        let k = columns.len() / m;
        let columns = Matrix::from_vec(m, k, columns);
        // The smaller of the two Gram matrices; both have the same eigenvalues above zero.
        let mut gram = Matrix::zeros(m.min(k), m.min(k));
        if k <= m {
            matrix::add_outer(&mut gram, columns.transpose().as_slice());
        } else {
            matrix::add_outer(&mut gram, columns.as_slice());
        }
        let ridge = strength * (1.0 - self.share);
        let trace = match matrix::symmetric_eigen(&gram) {
            Ok((values, _)) => values
                .iter()
                .map(|d| d.max(0.0) / (d.max(0.0) + ridge))
                .sum(),
            Err(_) => f64::NAN,
        };
        self.basis.rank() as f64 + trace
    }
}
