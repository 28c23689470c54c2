//! Samples: the measured values that preparation works on, with what is known about each value.

use crate::numeric::matrix::Matrix;
use std::sync::Arc;

/// n samples by p predictors, and what else preparation may look at.
///
/// A value that is not a number in `x` is missing, or only known to lie beyond a limit; then it
/// is listed in `limits`. A copy of samples shares the matrix until one of the two changes it.
#[derive(Clone, Debug, PartialEq)]
pub struct Samples {
    /// n × p values, one row per sample.
    pub x: Arc<Matrix>,
    /// Values known only to lie beyond a limit, each at most once.
    pub limits: Vec<Limit>,
    /// Whether each of the p predictors takes part. Filters switch predictors off; no filter
    /// removes a column, so that indices stay those of the predictors given.
    pub active: Vec<bool>,
    /// The wavelength, position, mass, ... of each of the p predictors, when they are ordered.
    pub axis: Option<Vec<f64>>,
    /// What each column is, when a step has made new columns; `None` while column j is the
    /// predictor j that was given.
    pub origins: Option<Vec<Origin>>,
    /// What is known about each sample beside its predictors.
    pub companions: Companions,
}

/// A value known only to lie beyond a limit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limit {
    /// The sample.
    pub row: usize,
    /// The predictor.
    pub column: usize,
    /// On which side of the limit the value lies.
    pub side: Side,
    /// The limit, in the unit of the values.
    pub limit: f64,
}

/// A side of a limit.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Side {
    /// The value is smaller than the limit.
    Below,
    /// The value is larger than the limit.
    Above,
}

/// What a column is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Origin {
    /// The predictor with this index among those given, perhaps transformed.
    Predictor(usize),
    /// A combination of many predictors: the score with this index, from 0.
    Score(usize),
    /// A value read off between the predictors, at this position on the axis.
    Position(f64),
}

/// Facts about samples that steps may use; each list has one entry per sample.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Companions {
    /// The batch of each sample.
    pub batch: Option<Vec<usize>>,
    /// The order value (time or position of measurement) of each sample.
    pub order: Option<Vec<f64>>,
    /// Whether each sample is a quality-control sample.
    pub is_quality_control: Option<Vec<bool>>,
    /// n × c covariates.
    pub covariates: Option<Matrix>,
}

impl Samples {
    /// Samples of which only the values are known: all predictors active, no axis, no limits.
    #[must_use]
    pub fn new(x: Matrix) -> Self {
        Self {
            active: vec![true; x.ncols()],
            x: Arc::new(x),
            limits: Vec::new(),
            axis: None,
            origins: None,
            companions: Companions::default(),
        }
    }

    /// These samples, with the position of each predictor.
    #[must_use]
    pub fn with_axis(mut self, axis: Vec<f64>) -> Self {
        self.axis = Some(axis);
        self
    }

    /// These samples, with values known to lie beyond limits.
    #[must_use]
    pub fn with_limits(mut self, limits: Vec<Limit>) -> Self {
        self.limits = limits;
        self
    }

    /// These samples, with what else is known about each.
    #[must_use]
    pub fn with_companions(mut self, companions: Companions) -> Self {
        self.companions = companions;
        self
    }

    /// How many samples.
    #[must_use]
    pub fn n_samples(&self) -> usize {
        self.x.nrows()
    }

    /// How many columns, active or not.
    #[must_use]
    pub fn n_columns(&self) -> usize {
        self.x.ncols()
    }

    /// The columns that take part, rising.
    #[must_use]
    pub fn active_columns(&self) -> Vec<usize> {
        (0..self.n_columns())
            .filter(|&column| self.active[column])
            .collect()
    }

    /// What a column is.
    #[must_use]
    pub fn origin(&self, column: usize) -> Origin {
        self.origins
            .as_ref()
            .map_or(Origin::Predictor(column), |origins| origins[column])
    }

    /// The values of one column, all samples.
    #[must_use]
    pub fn column(&self, column: usize) -> &[f64] {
        let n = self.n_samples();
        &self.x.as_slice()[column * n..(column + 1) * n]
    }

    /// Whether any value of an active column is missing or beyond a limit.
    #[must_use]
    pub fn has_gaps(&self) -> bool {
        (0..self.n_columns())
            .any(|column| self.active[column] && self.column(column).iter().any(|x| x.is_nan()))
    }

    /// Some of the samples, in the order of `rows`; a row may be named more than once.
    #[must_use]
    pub fn select(&self, rows: &[usize]) -> Self {
        let limits = rows
            .iter()
            .enumerate()
            .flat_map(|(at, &row)| {
                self.limits
                    .iter()
                    .filter(move |limit| limit.row == row)
                    .map(move |limit| Limit { row: at, ..*limit })
            })
            .collect();
        Self {
            x: Arc::new(self.x.select_rows(rows)),
            limits,
            active: self.active.clone(),
            axis: self.axis.clone(),
            origins: self.origins.clone(),
            companions: self.companions.select(rows),
        }
    }
}

impl Companions {
    fn select(&self, rows: &[usize]) -> Self {
        fn chosen<T: Copy>(list: Option<&Vec<T>>, rows: &[usize]) -> Option<Vec<T>> {
            list.map(|list| rows.iter().map(|&row| list[row]).collect())
        }
        Self {
            batch: chosen(self.batch.as_ref(), rows),
            order: chosen(self.order.as_ref(), rows),
            is_quality_control: chosen(self.is_quality_control.as_ref(), rows),
            covariates: self.covariates.as_ref().map(|c| c.select_rows(rows)),
        }
    }
}

/// The outcome of every sample, for the steps that are learnt with it.
#[derive(Clone, Copy, Debug)]
pub enum OutcomeValues<'a> {
    /// Measured quantities or counts.
    Numbers(&'a [f64]),
    /// No or yes; a training part sees 0 and 1.
    Events(&'a [bool]),
    /// The class of each sample, from 0.
    Classes(&'a [usize]),
    /// The time of each sample and whether the event happened then (1) or not yet (0).
    Times {
        /// Time to the event or to the end of observation.
        time: &'a [f64],
        /// Whether the event was observed.
        event: &'a [bool],
    },
}

impl OutcomeValues<'_> {
    /// How many samples have an outcome here.
    #[must_use]
    pub fn len(&self) -> usize {
        match self {
            Self::Numbers(values) => values.len(),
            Self::Events(events) => events.len(),
            Self::Classes(classes) => classes.len(),
            Self::Times { time, .. } => time.len(),
        }
    }

    /// Whether there is no outcome at all.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_copy_shares_the_values_until_it_changes_them() {
        let samples = Samples::new(Matrix::from_row_slice(2, 2, &[1.0, 2.0, 3.0, 4.0]));
        let mut copy = samples.clone();
        assert!(Arc::ptr_eq(&samples.x, &copy.x));
        Arc::make_mut(&mut copy.x)[(0, 0)] = 9.0;
        assert_eq!((samples.x[(0, 0)], copy.x[(0, 0)]), (1.0, 9.0));
    }

    #[test]
    fn chosen_samples_keep_their_limits_and_companions() {
        let limit = Limit {
            row: 2,
            column: 1,
            side: Side::Below,
            limit: 0.5,
        };
        let samples = Samples::new(Matrix::from_fn(3, 2, |i, j| (10 * i + j) as f64))
            .with_limits(vec![limit])
            .with_companions(Companions {
                batch: Some(vec![7, 8, 9]),
                ..Companions::default()
            });
        let chosen = samples.select(&[2, 0]);
        assert_eq!(chosen.column(1), [21.0, 1.0]);
        assert_eq!(chosen.limits, [Limit { row: 0, ..limit }]);
        assert_eq!(chosen.companions.batch, Some(vec![9, 7]));
    }
}
