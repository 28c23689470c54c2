//! Covariates: their linear share taken out of every predictor.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::change_columns;
use crate::numeric::step::span::Span;
use crate::numeric::step::{Class, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Takes from each predictor its least-squares share of the covariates, learnt in the training
/// part and applied to every sample: x − (c − c̄)·γ. The mean of the predictor stays. (Taken out
/// of all samples at once it biases the error downwards or upwards: Snoek et al. 2019.)
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct CovariateRemoval;

/// Means of the covariates, and for each column its slope on each.
#[derive(Clone, Debug)]
pub(crate) struct Shares {
    means: Vec<f64>,
    slopes: Vec<Vec<f64>>,
}

impl Preparation for CovariateRemoval {
    must_learn!(Shares, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Shares, StepStop> {
        let covariates = part.covariates().ok_or(StepError::NoCovariates)?;
        if covariates.iter().flatten().any(|c| !c.is_finite()) {
            return Err(StepError::NoCovariates.into());
        }
        let means: Vec<f64> = covariates
            .iter()
            .map(|c| c.iter().sum::<f64>() / c.len() as f64)
            .collect();
        let mut terms = vec![vec![1.0; part.n_rows()]];
        for (covariate, mean) in covariates.iter().zip(&means) {
            terms.push(covariate.iter().map(|c| c - mean).collect());
        }
        let whole = Span::new(&terms).ok_or(StepError::NotIndependent)?;
        let mut slopes = vec![Vec::new(); part.n_columns()];
        for column in part.active_columns() {
            if column % 256 == 0 {
                work.check()?;
            }
            let values: Vec<f64> = part.column(column).collect();
            let coefficients = if values.iter().any(|x| x.is_nan()) {
                let known: Vec<usize> = (0..values.len())
                    .filter(|&at| !values[at].is_nan())
                    .collect();
                let chosen = |of: &[f64]| -> Vec<f64> { known.iter().map(|&at| of[at]).collect() };
                let terms: Vec<Vec<f64>> = terms.iter().map(|term| chosen(term)).collect();
                let span = Span::new(&terms).ok_or(StepError::NotIndependent)?;
                span.coefficients(&chosen(&values))
            } else {
                whole.coefficients(&values)
            };
            slopes[column] = coefficients[1..].to_vec();
        }
        Ok(Shares { means, slopes })
    }

    fn apply<'s>(
        &self,
        shares: &Shares,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let covariates = samples
            .companions
            .covariates
            .clone()
            .filter(|c| c.ncols() == shares.means.len() && c.iter().all(|c| c.is_finite()))
            .ok_or(StepError::NoCovariates)?;
        change_columns(samples, work, |column, values| {
            let slopes = &shares.slopes[column];
            if slopes.len() != shares.means.len() {
                return Err(StepError::NothingKnown { column });
            }
            for (row, x) in values.iter_mut().enumerate() {
                for (at, (slope, mean)) in slopes.iter().zip(&shares.means).enumerate() {
                    *x -= (covariates[(row, at)] - mean) * slope;
                }
            }
            Ok(())
        })
    }
}
