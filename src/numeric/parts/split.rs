//! One split into training and held-out rows, and the only thing a step can be learnt from.

use crate::numeric::parts::{PlanError, Structure};
use crate::numeric::samples::{OutcomeValues, Samples};
use std::sync::Arc;

/// Training rows and held-out rows. They share no row and no unit.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Split {
    training: Arc<[usize]>,
    held_out: Arc<[usize]>,
    units: Arc<[usize]>,
}

impl Split {
    /// Only for plans, which never divide a unit.
    pub(super) fn new(
        mut training: Vec<usize>,
        mut held_out: Vec<usize>,
        units: &Arc<[usize]>,
    ) -> Self {
        training.sort_unstable();
        held_out.sort_unstable();
        Self {
            training: training.into(),
            held_out: held_out.into(),
            units: Arc::clone(units),
        }
    }

    /// The split of a final fit: all of `rows` for training, nothing held out.
    #[must_use]
    pub fn everything(rows: &[usize]) -> Self {
        Self::new(rows.to_vec(), Vec::new(), &Arc::from([]))
    }

    /// A split whose held-out rows are given, such as a sealed set.
    ///
    /// # Errors
    /// [`PlanError::UnitDivided`] when a unit has rows on both sides.
    ///
    /// # Panics
    /// When a row is beyond the units of `structure`.
    pub fn with_held_out(
        training: &[usize],
        held_out: &[usize],
        structure: &Structure<'_>,
    ) -> Result<Self, PlanError> {
        let units = structure.units;
        let mut held: Vec<usize> = held_out.iter().map(|&row| units[row]).collect();
        held.sort_unstable();
        for &row in training {
            if held.binary_search(&units[row]).is_ok() {
                return Err(PlanError::UnitDivided { unit: units[row] });
            }
        }
        Ok(Self::new(
            training.to_vec(),
            held_out.to_vec(),
            &units.into(),
        ))
    }

    /// The training rows, rising.
    #[must_use]
    pub fn training(&self) -> &[usize] {
        &self.training
    }

    /// The held-out rows, rising.
    #[must_use]
    pub fn held_out(&self) -> &[usize] {
        &self.held_out
    }

    /// The unit of a row, when the split knows units.
    #[must_use]
    pub fn unit(&self, row: usize) -> Option<usize> {
        self.units.get(row).copied()
    }

    /// The training part of some samples.
    ///
    /// # Panics
    /// When a training row is not among the samples.
    #[must_use]
    pub fn training_part<'a>(&self, samples: &'a Samples) -> TrainingPart<'a> {
        let flags = samples.companions.is_quality_control.as_deref();
        let quality_control: Vec<usize> = (0..samples.n_samples())
            .filter(|&row| flags.is_some_and(|flags| flags[row]))
            .filter(|row| self.held_out.binary_search(row).is_err())
            .collect();
        assert!(
            self.training
                .last()
                .is_none_or(|&row| row < samples.n_samples()),
            "a training row is beyond the samples"
        );
        TrainingPart {
            samples,
            rows: Arc::clone(&self.training),
            quality_control: quality_control.into(),
            outcome: None,
        }
    }
}

/// The only thing a step can be learnt from: the training rows of a split, and the
/// quality-control samples that are not held out. Nothing here shows a held-out sample.
#[derive(Clone, Debug)]
pub struct TrainingPart<'a> {
    samples: &'a Samples,
    rows: Arc<[usize]>,
    quality_control: Arc<[usize]>,
    outcome: Option<OutcomeValues<'a>>,
}

/// The outcome of the training rows only.
#[derive(Clone, Debug, PartialEq)]
pub enum PartOutcome {
    /// Measured quantities, counts, or 0 and 1.
    Numbers(Vec<f64>),
    /// Classes, from 0.
    Classes(Vec<usize>),
    /// Times and whether the event was observed.
    Times(Vec<f64>, Vec<bool>),
}

impl<'a> TrainingPart<'a> {
    /// This training part with the outcome, for steps that are learnt with it. `outcome` has an
    /// entry for each of all samples; only those of the training rows can be read.
    ///
    /// # Panics
    /// When the outcome has not as many entries as there are samples.
    #[must_use]
    pub fn with_outcome(mut self, outcome: Option<OutcomeValues<'a>>) -> Self {
        assert!(
            outcome.is_none_or(|outcome| outcome.len() == self.samples.n_samples()),
            "the outcome has one entry per sample"
        );
        self.outcome = outcome;
        self
    }

    /// The training rows, rising.
    #[must_use]
    pub fn rows(&self) -> &[usize] {
        &self.rows
    }

    /// How many training rows.
    #[must_use]
    pub fn n_rows(&self) -> usize {
        self.rows.len()
    }

    /// How many columns the samples have.
    #[must_use]
    pub fn n_columns(&self) -> usize {
        self.samples.n_columns()
    }

    /// Whether each column takes part.
    #[must_use]
    pub fn active(&self) -> &'a [bool] {
        &self.samples.active
    }

    /// The columns that take part, rising.
    #[must_use]
    pub fn active_columns(&self) -> Vec<usize> {
        self.samples.active_columns()
    }

    /// The axis of the columns.
    #[must_use]
    pub fn axis(&self) -> Option<&'a [f64]> {
        self.samples.axis.as_deref()
    }

    /// The values of one column in the training rows, in the order of the rows.
    pub fn column(&self, column: usize) -> impl Iterator<Item = f64> + Clone + '_ {
        let values = self.samples.column(column);
        self.rows.iter().map(move |&row| values[row])
    }

    /// The value of one column in the training row at place `at`.
    #[must_use]
    pub fn value(&self, at: usize, column: usize) -> f64 {
        self.samples.x[(self.rows[at], column)]
    }

    /// The batch of each training row.
    #[must_use]
    pub fn batches(&self) -> Option<Vec<usize>> {
        let batch = self.samples.companions.batch.as_ref()?;
        Some(self.rows.iter().map(|&row| batch[row]).collect())
    }

    /// The covariates of the training rows, one list per covariate.
    #[must_use]
    pub fn covariates(&self) -> Option<Vec<Vec<f64>>> {
        let covariates = self.samples.companions.covariates.as_ref()?;
        Some(
            (0..covariates.ncols())
                .map(|c| self.rows.iter().map(|&row| covariates[(row, c)]).collect())
                .collect(),
        )
    }

    /// The outcome of the training rows.
    #[must_use]
    pub fn outcome(&self) -> Option<PartOutcome> {
        fn chosen<T: Copy>(values: &[T], rows: &[usize]) -> Vec<T> {
            rows.iter().map(|&row| values[row]).collect()
        }
        Some(match self.outcome? {
            OutcomeValues::Numbers(values) => PartOutcome::Numbers(chosen(values, &self.rows)),
            OutcomeValues::Events(events) => PartOutcome::Numbers(
                self.rows
                    .iter()
                    .map(|&row| f64::from(u8::from(events[row])))
                    .collect(),
            ),
            OutcomeValues::Classes(classes) => PartOutcome::Classes(chosen(classes, &self.rows)),
            OutcomeValues::Times { time, event } => {
                PartOutcome::Times(chosen(time, &self.rows), chosen(event, &self.rows))
            }
        })
    }

    /// The quality-control samples that are not held out, rising. They may lie outside the plan.
    #[must_use]
    pub fn quality_control(&self) -> &[usize] {
        &self.quality_control
    }

    /// The values of one column in the quality-control samples.
    pub fn quality_control_column(&self, column: usize) -> impl Iterator<Item = f64> + Clone + '_ {
        let values = self.samples.column(column);
        self.quality_control.iter().map(move |&row| values[row])
    }

    /// The order values of the quality-control samples.
    #[must_use]
    pub fn quality_control_order(&self) -> Option<Vec<f64>> {
        let order = self.samples.companions.order.as_ref()?;
        Some(self.quality_control.iter().map(|&row| order[row]).collect())
    }

    pub(in crate::numeric) fn shared_rows(&self) -> Arc<[usize]> {
        Arc::clone(&self.rows)
    }

    pub(in crate::numeric) fn shared_quality_control(&self) -> Arc<[usize]> {
        Arc::clone(&self.quality_control)
    }
}
