//! Quantile normalisation: every row gets the same distribution of values.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::change_rows;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Quantile normalisation (Bolstad et al. 2003) with a frozen reference: the value of rank r
/// among the m known values of a row becomes the reference at (r − 1)/(m − 1); equal values get
/// the mean of what their ranks would get. The reference is the mean, rank by rank, of the
/// sorted training rows, or a distribution that is given.
#[derive(Clone, Debug, PartialEq)]
pub struct QuantileNormalisation {
    reference: Option<Vec<f64>>,
}

impl QuantileNormalisation {
    /// With the mean distribution of the training rows as reference.
    #[must_use]
    pub fn learned() -> Self {
        Self { reference: None }
    }

    /// With this distribution, rising, as reference.
    ///
    /// # Errors
    /// [`ParameterError`] when it has fewer than two values, or one falls or is not a number.
    pub fn fixed(reference: Vec<f64>) -> Result<Self, ParameterError> {
        let _ = ParameterError::check_count("reference", reference.len(), 2, usize::MAX)?;
        for at in 0..reference.len() {
            let least = if at == 0 { f64::MIN } else { reference[at - 1] };
            let _ = ParameterError::check("reference", reference[at], least, f64::MAX)?;
        }
        Ok(Self {
            reference: Some(reference),
        })
    }
}

impl Preparation for QuantileNormalisation {
    type Found = Vec<f64>;

    fn class(&self) -> Class {
        match self.reference {
            None => Class::Learned,
            Some(_) => Class::FixedReference,
        }
    }

    fn given(&self) -> Option<Vec<f64>> {
        self.reference.clone()
    }

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<f64>, StepStop> {
        let columns = part.active_columns();
        if columns.len() < 2 {
            return Err(StepError::NothingActive.into());
        }
        let mut reference = vec![0.0; columns.len()];
        for at in 0..part.n_rows() {
            work.check()?;
            let mut values: Vec<f64> = columns
                .iter()
                .map(|&column| part.value(at, column))
                .filter(|x| !x.is_nan())
                .collect();
            if values.is_empty() {
                let row = part.rows()[at];
                return Err(StepError::NoSpread { row }.into());
            }
            values.sort_by(f64::total_cmp);
            let last = (columns.len() - 1) as f64;
            for (rank, sum) in reference.iter_mut().enumerate() {
                *sum += quantile_of_sorted(&values, rank as f64 / last);
            }
        }
        let n = part.n_rows() as f64;
        reference.iter_mut().for_each(|sum| *sum /= n);
        Ok(reference)
    }

    fn apply<'s>(
        &self,
        reference: &Vec<f64>,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let columns = samples.active_columns();
        change_rows(samples, &columns, work, |row, values| {
            let mut order: Vec<usize> = (0..values.len())
                .filter(|&at| !values[at].is_nan())
                .collect();
            if order.is_empty() {
                return Err(StepError::NoSpread { row });
            }
            order.sort_by(|&a, &b| values[a].total_cmp(&values[b]));
            let old = values.to_vec();
            let mut rank = 0;
            for group in order.chunk_by(|&a, &b| old[a] == old[b]) {
                let sum: f64 = (rank..rank + group.len())
                    .map(|r| {
                        let last = order.len() - 1;
                        let share = if last == 0 {
                            0.5
                        } else {
                            r as f64 / last as f64
                        };
                        quantile_of_sorted(reference, share)
                    })
                    .sum();
                for &at in group {
                    values[at] = sum / group.len() as f64;
                }
                rank += group.len();
            }
            Ok(())
        })
    }
}

/// The value at a share (0 to 1) of the way through sorted values, on straight lines between.
fn quantile_of_sorted(sorted: &[f64], share: f64) -> f64 {
    let place = share * (sorted.len() - 1) as f64;
    // Rounding must not lift the last place beyond the end.
    let below = (place.floor() as usize).min(sorted.len() - 1);
    let above = (below + 1).min(sorted.len() - 1);
    sorted[below] + (place - below as f64) * (sorted[above] - sorted[below])
}
