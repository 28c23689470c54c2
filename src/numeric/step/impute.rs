//! Filling missing values, predictor by predictor.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{mean_known, median_known};
use crate::numeric::step::{Class, Preparation, StepError, StepStop};
use std::borrow::Cow;
use std::sync::Arc;

/// Fills missing values with a statistic of the predictor's known values in the training part.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ColumnImputation {
    statistic: ColumnStatistic,
}

/// A statistic of one predictor.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ColumnStatistic {
    /// The median; the mean of the middle two of an even number.
    Median,
    /// The mean. Of allele counts 0, 1, 2 it is twice the allele frequency.
    Mean,
}

impl ColumnImputation {
    /// Fills with this statistic.
    #[must_use]
    pub fn new(statistic: ColumnStatistic) -> Self {
        Self { statistic }
    }
}

impl Preparation for ColumnImputation {
    // The value for each column, none for a column without a known value.
    must_learn!(Vec<Option<f64>>, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Self::Found, StepStop> {
        let mut fills = vec![None; part.n_columns()];
        for column in part.active_columns() {
            if column % 1024 == 0 {
                work.check()?;
            }
            fills[column] = match self.statistic {
                ColumnStatistic::Median => median_known(part.column(column)),
                ColumnStatistic::Mean => mean_known(part.column(column)),
            };
        }
        Ok(fills)
    }

    fn apply<'s>(
        &self,
        fills: &Self::Found,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        fill_gaps(samples, work, |_, column| {
            fills[column].ok_or(StepError::NothingKnown { column })
        })
    }
}

/// Fills every missing value of an active column; does not copy when there is none.
pub(super) fn fill_gaps<'s>(
    mut samples: Cow<'s, Samples>,
    work: &Work<'_>,
    mut fill: impl FnMut(usize, usize) -> Result<f64, StepError>,
) -> Result<Cow<'s, Samples>, StepStop> {
    let gaps: Vec<(usize, usize)> = (0..samples.n_columns())
        .filter(|&column| samples.active[column])
        .flat_map(|column| {
            let values = samples.column(column).iter().enumerate();
            values
                .filter(|(_, x)| x.is_nan())
                .map(move |(row, _)| (row, column))
        })
        .collect();
    if gaps.is_empty() {
        return Ok(samples);
    }
    let changed = samples.to_mut();
    let active = &changed.active;
    changed.limits.retain(|limit| !active[limit.column]);
    let x = Arc::make_mut(&mut changed.x);
    for (at, (row, column)) in gaps.into_iter().enumerate() {
        if at % 4096 == 0 {
            work.check()?;
        }
        x[(row, column)] = fill(row, column)?;
    }
    Ok(samples)
}
