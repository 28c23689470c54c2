//! Scatter correction: each row brought onto a reference.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{change_rows, mean_known};
use crate::numeric::step::{Class, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Multiplicative scatter correction (Geladi, MacDougall and Martens 1985): each row is
/// regressed on a reference over the active predictors, x = a + b·reference + e, and becomes
/// (x − a)/b. With the training mean as reference it is learnt, with a fixed one it is not.
#[derive(Clone, Debug, PartialEq)]
pub struct ScatterCorrection {
    reference: Reference,
}

/// Where a reference row comes from.
#[derive(Clone, Debug, PartialEq)]
pub enum Reference {
    /// The mean of the training samples, predictor by predictor.
    TrainingMean,
    /// A row that does not come from the samples: one value for each column.
    Fixed(Vec<f64>),
}

impl ScatterCorrection {
    /// A correction against this reference.
    #[must_use]
    pub fn new(reference: Reference) -> Self {
        Self { reference }
    }
}

impl Reference {
    pub(super) fn class(&self) -> Class {
        match self {
            Self::TrainingMean => Class::Learned,
            Self::Fixed(_) => Class::FixedReference,
        }
    }

    pub(super) fn given(&self) -> Option<Vec<f64>> {
        match self {
            Self::TrainingMean => None,
            Self::Fixed(values) => Some(values.clone()),
        }
    }
}

/// The mean of each active column in a training part; 0 for the others.
pub(super) fn training_mean(
    part: &TrainingPart<'_>,
    work: &Work<'_>,
) -> Result<Vec<f64>, StepStop> {
    let mut means = vec![0.0; part.n_columns()];
    for column in part.active_columns() {
        if column % 4096 == 0 {
            work.check()?;
        }
        means[column] =
            mean_known(part.column(column)).ok_or(StepError::NothingKnown { column })?;
    }
    Ok(means)
}

/// A reference, read at some columns.
pub(super) fn reference_at(
    reference: &[f64],
    samples: &Samples,
    columns: &[usize],
) -> Result<Vec<f64>, StepError> {
    if reference.len() != samples.n_columns() {
        return Err(StepError::WrongColumns {
            expected: reference.len(),
            found: samples.n_columns(),
        });
    }
    Ok(columns.iter().map(|&column| reference[column]).collect())
}

impl Preparation for ScatterCorrection {
    type Found = Vec<f64>;

    fn class(&self) -> Class {
        self.reference.class()
    }

    fn given(&self) -> Option<Vec<f64>> {
        self.reference.given()
    }

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<f64>, StepStop> {
        training_mean(part, work)
    }

    fn apply<'s>(
        &self,
        reference: &Vec<f64>,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let columns = samples.active_columns();
        let reference = reference_at(reference, &samples, &columns)?;
        change_rows(samples, &columns, work, |row, values| {
            let (offset, slope) = line_on(&reference, values);
            // A falling row would be turned upside down, a flat one blown up without limit.
            let rises = slope > 0.0;
            if !rises {
                return Err(StepError::FlatAgainstReference { row, slope });
            }
            for x in values {
                *x = (*x - offset) / slope;
            }
            Ok(())
        })
    }
}

/// Offset and slope of the least-squares line of a row on a reference, over its known values.
fn line_on(reference: &[f64], values: &[f64]) -> (f64, f64) {
    let pairs = || reference.iter().zip(values).filter(|(_, x)| !x.is_nan());
    let count = pairs().count() as f64;
    let mean_r = pairs().map(|(r, _)| r).sum::<f64>() / count;
    let mean_x = pairs().map(|(_, x)| x).sum::<f64>() / count;
    let (mut rx, mut rr) = (0.0, 0.0);
    for (r, x) in pairs() {
        rx += (r - mean_r) * (x - mean_x);
        rr += (r - mean_r) * (r - mean_r);
    }
    let slope = rx / rr;
    (mean_x - slope * mean_r, slope)
}
