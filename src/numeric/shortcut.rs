//! Exact leave-one-out and generalised cross-validation of ridge fits, without refitting.

use crate::numeric::matrix::Matrix;

/// Leave-one-out and GCV of every strength of a ridge path, for a measured outcome.
///
/// *Which reading of leave-one-out.* `residual/(1 − hat)` is what n refits give when each of them
/// keeps the constant k = nλ that is added to Z'Z, and keeps the means-free scaling of all training
/// rows; the intercept and the covariates are fitted again. Refits that keep λ itself, or that scale
/// again, give slightly different numbers.
#[derive(Clone, Debug)]
pub struct Shortcuts {
    /// Leave-one-out residuals, training rows (with a weight above zero) × strengths. Infinite
    /// where a fit follows a sample whatever its outcome is.
    pub residuals: Matrix,
    /// The diagonal of the map from outcome to fit, the same shape; intercept included.
    pub hat: Matrix,
    /// The mean of the squared leave-one-out residuals at each strength, under the sample weights.
    pub leave_one_out: Vec<f64>,
    /// mean(residual²)/(1 − df/n)² at each strength, with df including the intercept (Golub, Heath
    /// & Wahba 1979). n counts rows, whatever their weights.
    pub gcv: Vec<f64>,
}

impl Shortcuts {
    /// From residuals (not weighted), 1 − hat, both rows × strengths, and weights of sum 1.
    pub(crate) fn new(residuals: &Matrix, slack: &Matrix, share: &[f64]) -> Self {
        let m = residuals.nrows() as f64;
        let mut left_out = residuals.clone();
        for (e, d) in left_out.iter_mut().zip(slack.iter()) {
            // Rounding can leave a trace where 1 − hat is zero in truth.
            *e = if *d > 1e-14 { *e / d } else { f64::INFINITY };
        }
        let mean_square = |matrix: &Matrix, at: usize| -> f64 {
            let column = matrix.column(at);
            column.iter().zip(share).map(|(e, v)| v * e * e).sum()
        };
        let n_strengths = residuals.ncols();
        let leave_one_out = (0..n_strengths)
            .map(|at| mean_square(&left_out, at))
            .collect();
        let gcv = (0..n_strengths)
            .map(|at| {
                let free = slack.column(at).sum() / m;
                if free > 1e-14 {
                    mean_square(residuals, at) / (free * free)
                } else {
                    f64::INFINITY
                }
            })
            .collect();
        Self {
            residuals: left_out,
            hat: slack.map(|d| 1.0 - d),
            leave_one_out,
            gcv,
        }
    }
}
