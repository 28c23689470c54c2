//! Dilution: each row over its typical quotient with a reference.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{change_rows, median_known, median_of};
use crate::numeric::step::scatter::reference_at;
use crate::numeric::step::{Class, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Probabilistic quotient normalisation (Dieterle et al. 2006): each row is divided by the
/// median, over the active predictors whose reference is positive, of row/reference.
#[derive(Clone, Debug, PartialEq)]
pub struct ProbabilisticQuotient {
    reference: QuotientReference,
}

/// Where the reference row comes from.
#[derive(Clone, Debug, PartialEq)]
pub enum QuotientReference {
    /// The median of the training samples, predictor by predictor.
    TrainingMedian,
    /// A row that does not come from the samples: one value for each column.
    Fixed(Vec<f64>),
}

impl ProbabilisticQuotient {
    /// Quotients with this reference.
    #[must_use]
    pub fn new(reference: QuotientReference) -> Self {
        Self { reference }
    }
}

impl Preparation for ProbabilisticQuotient {
    type Found = Vec<f64>;

    fn class(&self) -> Class {
        match self.reference {
            QuotientReference::TrainingMedian => Class::Learned,
            QuotientReference::Fixed(_) => Class::FixedReference,
        }
    }

    fn given(&self) -> Option<Vec<f64>> {
        match &self.reference {
            QuotientReference::TrainingMedian => None,
            QuotientReference::Fixed(values) => Some(values.clone()),
        }
    }

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<f64>, StepStop> {
        let mut medians = vec![0.0; part.n_columns()];
        for column in part.active_columns() {
            if column % 1024 == 0 {
                work.check()?;
            }
            medians[column] =
                median_known(part.column(column)).ok_or(StepError::NothingKnown { column })?;
        }
        Ok(medians)
    }

    fn apply<'s>(
        &self,
        reference: &Vec<f64>,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let columns = samples.active_columns();
        let reference = reference_at(reference, &samples, &columns)?;
        let mut quotients = Vec::with_capacity(columns.len());
        change_rows(samples, &columns, work, |row, values| {
            quotients.clear();
            quotients.extend(
                values
                    .iter()
                    .zip(&reference)
                    .filter(|(x, r)| **r > 0.0 && !x.is_nan())
                    .map(|(x, r)| x / r),
            );
            let total = median_of(&mut quotients).unwrap_or(f64::NAN);
            let is_positive = total > 0.0;
            if !is_positive {
                return Err(StepError::NoTotal { row, total });
            }
            values.iter_mut().for_each(|x| *x /= total);
            Ok(())
        })
    }
}
