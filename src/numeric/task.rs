//! What is to be fitted: outcome on predictors, on which rows, under which weights.

use crate::numeric::error::{FitError, Ingredient};
use crate::numeric::matrix::Matrix;
use crate::numeric::predictors::Predictors;
use crate::numeric::response::Response;

/// How the predictors are brought to one scale before the penalty sees them. Means and standard
/// deviations are those of the training rows, under the sample weights.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Scaling {
    /// Centred and divided by √mean((x − mean)²), divisor n.
    UnitVariance,
    /// Centred only.
    AsGiven,
}

/// One fitting problem. Borrowed, so that parts and resamples share one copy of the data.
#[derive(Clone, Copy, Debug)]
pub struct Task<'a> {
    /// The predictors of all n samples.
    pub predictors: &'a Predictors,
    /// The outcome of all n samples; rows that are not in the task are ignored.
    pub response: &'a Response,
    /// The training rows, rising.
    pub rows: &'a [usize],
    /// Which of the p predictors may enter; `None` for all.
    pub columns: Option<&'a [bool]>,
    /// n × q covariates that are never penalised; q may be 0.
    pub covariates: &'a Matrix,
    /// A weight for each of the n samples, 0 or more; `None` for 1 each. A weight of 2 means the
    /// same as the sample twice.
    pub weights: Option<&'a [f64]>,
    /// The penalty weight of each of the p predictors, 0 (not penalised) or more.
    pub factors: Option<&'a [f64]>,
    /// How predictors are scaled.
    pub scaling: Scaling,
}

impl Task<'_> {
    /// The sample weight of a row.
    pub(crate) fn weight(&self, row: usize) -> f64 {
        self.weights.map_or(1.0, |weights| weights[row])
    }

    /// Checks shapes and numbers.
    ///
    /// # Errors
    /// The first thing that is wrong.
    pub(crate) fn check(&self) -> Result<(), FitError> {
        let n = self.predictors.n_samples();
        let p = self.predictors.n_predictors();
        let length = |what, found, expected| {
            if found == expected {
                Ok(())
            } else {
                Err(FitError::Shape {
                    what,
                    found,
                    expected,
                })
            }
        };
        if let Some(columns) = self.columns {
            length(Ingredient::Columns, columns.len(), p)?;
        }
        if let Some(factors) = self.factors {
            length(Ingredient::Factors, factors.len(), p)?;
            numbers(
                Ingredient::Factors,
                factors.iter().copied().enumerate(),
                0.0,
            )?;
        }
        if let Some(weights) = self.weights {
            length(Ingredient::Weights, weights.len(), n)?;
        }
        if self.covariates.ncols() > 0 {
            length(Ingredient::Covariates, self.covariates.nrows(), n)?;
        }
        let mut before = None;
        for &row in self.rows {
            if row >= n || before.is_some_and(|before| before >= row) {
                return Err(FitError::Rows { row });
            }
            before = Some(row);
        }
        if self.weights.is_some() {
            let weights = self.rows.iter().map(|&row| (row, self.weight(row)));
            numbers(Ingredient::Weights, weights, 0.0)?;
        }
        for covariate in self.covariates.column_iter() {
            let values = self.rows.iter().map(|&row| (row, covariate[row]));
            numbers(Ingredient::Covariates, values, f64::NEG_INFINITY)?;
        }
        self.response.check(n, self.rows)
    }
}

/// Checks that numbers are finite and not below `least`.
pub(crate) fn numbers(
    what: Ingredient,
    values: impl Iterator<Item = (usize, f64)>,
    least: f64,
) -> Result<(), FitError> {
    for (at, value) in values {
        if !value.is_finite() || value < least {
            return Err(FitError::Number { what, at });
        }
    }
    Ok(())
}
