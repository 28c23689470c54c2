//! Filters: steps that only switch predictors off.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Switches off the columns that are not kept; copies nothing else, and nothing at all when
/// every active column is kept.
pub(super) fn keep_only<'s>(
    mut samples: Cow<'s, Samples>,
    is_kept: &[bool],
) -> Result<Cow<'s, Samples>, StepStop> {
    if is_kept.len() != samples.n_columns() {
        return Err(StepError::WrongColumns {
            expected: is_kept.len(),
            found: samples.n_columns(),
        }
        .into());
    }
    let changes = samples
        .active
        .iter()
        .zip(is_kept)
        .any(|(active, kept)| *active && !kept);
    if changes {
        for (active, kept) in samples.to_mut().active.iter_mut().zip(is_kept) {
            *active &= kept;
        }
    }
    Ok(samples)
}

/// Asks of every active column whether it is kept; a column that is off stays off.
pub(super) fn judge_columns(
    part: &TrainingPart<'_>,
    work: &Work<'_>,
    mut keeps: impl FnMut(usize) -> bool,
) -> Result<Vec<bool>, StepStop> {
    let mut is_kept = part.active().to_vec();
    for (column, kept) in is_kept.iter_mut().enumerate() {
        if column % 1024 == 0 {
            work.check()?;
        }
        *kept = *kept && keeps(column);
    }
    Ok(is_kept)
}

/// Keeps predictors whose share of missing values in the training part is at most a given one.
/// Values known only to lie beyond a limit count as missing while they have not been filled.
#[derive(Clone, Debug, PartialEq)]
pub struct MissingShare {
    most: f64,
}

impl MissingShare {
    /// Keeps predictors with at most this share missing, 0 to 1.
    ///
    /// # Errors
    /// [`ParameterError`] when the share is out of its range.
    pub fn new(most: f64) -> Result<Self, ParameterError> {
        let most = ParameterError::check("most", most, 0.0, 1.0)?;
        Ok(Self { most })
    }

    /// Keeps markers that were called in at least this share of the samples, 0 to 1.
    ///
    /// # Errors
    /// [`ParameterError`] when the share is out of its range.
    pub fn with_call_rate(least: f64) -> Result<Self, ParameterError> {
        let least = ParameterError::check("least", least, 0.0, 1.0)?;
        Self::new(1.0 - least)
    }
}

impl Preparation for MissingShare {
    must_learn!(Vec<bool>, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<bool>, StepStop> {
        // Counts are compared, with room for the rounding of a share such as 0.2 of 15.
        let most = self.most * part.n_rows() as f64 + 1e-9;
        judge_columns(part, work, |column| {
            part.column(column).filter(|x| x.is_nan()).count() as f64 <= most
        })
    }

    fn apply<'s>(
        &self,
        is_kept: &Vec<bool>,
        samples: Cow<'s, Samples>,
        _: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        keep_only(samples, is_kept)
    }
}

/// Keeps predictors whose most frequent value makes up less than a given share of their known
/// values in the training part. With a share of 1 only predictors of a single value go.
#[derive(Clone, Debug, PartialEq)]
pub struct NearConstant {
    share: f64,
}

impl NearConstant {
    /// Switches predictors off whose most frequent value has this share or more, above 0 to 1.
    ///
    /// # Errors
    /// [`ParameterError`] when the share is out of its range.
    pub fn new(share: f64) -> Result<Self, ParameterError> {
        let share = ParameterError::check("share", share, f64::MIN_POSITIVE, 1.0)?;
        Ok(Self { share })
    }
}

impl Preparation for NearConstant {
    must_learn!(Vec<bool>, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<bool>, StepStop> {
        let mut values = Vec::with_capacity(part.n_rows());
        judge_columns(part, work, |column| {
            values.clear();
            values.extend(part.column(column).filter(|x| !x.is_nan()));
            values.sort_by(f64::total_cmp);
            let most = values.chunk_by(|a, b| a == b).map(<[f64]>::len).max();
            // Without a known value there is nothing that varies.
            most.is_some_and(|most| {
                most < values.len() && (most as f64) < self.share * values.len() as f64 - 1e-9
            })
        })
    }

    fn apply<'s>(
        &self,
        is_kept: &Vec<bool>,
        samples: Cow<'s, Samples>,
        _: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        keep_only(samples, is_kept)
    }
}
