//! The unpenalised columns inside a second-order model: their slopes, and what they leave of H.

use crate::numeric::factor::Factor;
use crate::numeric::lanes;
use crate::numeric::loss::Loss;

/// A free column whose curvature outside the others is below this share of its own is left out.
const FREE_SPANNED: f64 = 1e-12;

/// The largest slope of what is not penalised, over the sum of its terms.
pub(crate) fn free_slope(free: &[Vec<f64>], residual: &[f64]) -> f64 {
    let mut largest = 0.0_f64;
    for column in free {
        for residual in residual.chunks_exact(column.len()) {
            let slope = lanes::dot(column, residual).abs();
            let terms = column.iter().zip(residual);
            let size: f64 = terms.map(|(u, r)| (u * r).abs()).sum();
            // The absolute part is rounding, in a loss of size about 1.
            largest = largest.max(slope / (size + 1e-4));
        }
    }
    largest
}

/// The unpenalised columns of all classes under a general H.
pub(crate) struct FreePart {
    /// Columns of length N, those that are kept.
    u: Vec<Vec<f64>>,
    hu: Vec<Vec<f64>>,
    /// Of U'HU.
    factor: Factor,
    kept: Vec<usize>,
    n_columns: usize,
}

impl FreePart {
    pub(crate) fn new(loss: &dyn Loss, free: &[Vec<f64>], m: usize) -> Self {
        let n_linear = loss.n_linear();
        let mut part = Self {
            u: Vec::new(),
            hu: Vec::new(),
            factor: Factor::default(),
            kept: Vec::new(),
            n_columns: free.len() * n_linear,
        };
        for class in 0..n_linear {
            for (k, column) in free.iter().enumerate() {
                let mut u = vec![0.0; m * n_linear];
                u[class * m..(class + 1) * m].copy_from_slice(column);
                let mut hu = Vec::new();
                loss.product(&u, &mut hu);
                let mut cross: Vec<f64> = part.hu.iter().map(|h| lanes::dot(h, &u)).collect();
                let diagonal = lanes::dot(&u, &hu);
                let least = FREE_SPANNED * diagonal;
                if part.factor.append(&mut cross, diagonal, least) > least {
                    part.kept.push(class * free.len() + k);
                    part.u.push(u);
                    part.hu.push(hu);
                }
            }
        }
        part
    }

    /// U'x.
    pub(crate) fn products(&self, x: &[f64]) -> Vec<f64> {
        self.u.iter().map(|u| lanes::dot(u, x)).collect()
    }

    /// U'Hx.
    pub(crate) fn h_products(&self, x: &[f64]) -> Vec<f64> {
        self.hu.iter().map(|h| lanes::dot(h, x)).collect()
    }

    /// (U'HU)⁻¹ of a vector over the kept columns, spread over all columns.
    pub(crate) fn solve(&self, mut kept: Vec<f64>) -> Vec<f64> {
        self.factor.solve(&mut kept);
        let mut all = vec![0.0; self.n_columns];
        for (&at, value) in self.kept.iter().zip(kept) {
            all[at] = value;
        }
        all
    }

    /// hx ← hx − HU·coefficients.
    pub(crate) fn subtract(&self, coefficients: &[f64], hx: &mut [f64]) {
        for (&at, hu) in self.kept.iter().zip(&self.hu) {
            lanes::add_scaled(-coefficients[at], hu, hx);
        }
    }

    /// From Hx to (H − HU(U'HU)⁻¹U'H)x.
    pub(crate) fn reduce(&self, x: &[f64], hx: &mut [f64]) {
        let coefficients = self.solve(self.h_products(x));
        self.subtract(&coefficients, hx);
    }
}
