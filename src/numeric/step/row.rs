//! Steps that bring each row onto its own scale.

use crate::base::work::Work;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{change_rows, known};
use crate::numeric::step::local::positions;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Standard normal variate (Barnes, Dhanoa and Lister 1989): each row minus its mean, divided by
/// its standard deviation with divisor (number of active predictors − 1).
///
/// Missing values stay missing and count in neither.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct StandardNormalVariate;

impl Preparation for StandardNormalVariate {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let columns = samples.active_columns();
        change_rows(samples, &columns, work, |row, values| {
            let count = known(values.iter().copied()).count() as f64;
            let mean = known(values.iter().copied()).sum::<f64>() / count;
            let squares: f64 = known(values.iter().copied())
                .map(|x| (x - mean) * (x - mean))
                .sum();
            let sd = (squares / (count - 1.0)).sqrt();
            // A spread below the rounding error of the mean is no spread.
            let has_spread = sd > 1e-14 * mean.abs();
            if !has_spread {
                return Err(StepError::NoSpread { row });
            }
            for x in values {
                *x = (*x - mean) / sd;
            }
            Ok(())
        })
    }
}

/// Divides each row by a quantity of its own and multiplies by `target`.
#[derive(Clone, Debug, PartialEq)]
pub struct Normalisation {
    divisor: Divisor,
    target: f64,
}

/// The quantity of a row that it is divided by; it must be above 0. Missing values count in
/// none of them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Divisor {
    /// The sum of the active predictors (with target 1: shares; with 1,000,000: per million).
    Sum,
    /// The area under the active predictors along the axis, by the trapezoidal rule between
    /// neighbours that are known.
    Area,
    /// The largest active predictor.
    Peak,
    /// The root of the sum of squares of the active predictors.
    Length,
    /// One column: an internal standard. It may be switched off for the fit.
    Standard(usize),
}

impl Normalisation {
    /// Each row becomes target·row/divisor.
    ///
    /// # Errors
    /// [`ParameterError`] when the target is not a positive number.
    pub fn new(divisor: Divisor, target: f64) -> Result<Self, ParameterError> {
        let target = ParameterError::check("target", target, f64::MIN_POSITIVE, f64::MAX)?;
        Ok(Self { divisor, target })
    }

    /// The quantity by which the row is divided.
    #[must_use]
    pub fn divisor(&self) -> Divisor {
        self.divisor
    }
}

impl Preparation for Normalisation {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let columns = samples.active_columns();
        let axis = positions(&samples)?;
        let standard = match self.divisor {
            Divisor::Standard(column) if column >= samples.n_columns() => {
                return Err(StepError::WrongColumns {
                    expected: column + 1,
                    found: samples.n_columns(),
                }
                .into());
            }
            Divisor::Standard(column) => samples.column(column).to_vec(),
            Divisor::Sum | Divisor::Area | Divisor::Peak | Divisor::Length => Vec::new(),
        };
        change_rows(samples, &columns, work, |row, values| {
            let all = || known(values.iter().copied());
            let total = match self.divisor {
                Divisor::Sum => all().sum(),
                Divisor::Peak => all().fold(f64::NEG_INFINITY, f64::max),
                Divisor::Length => all().map(|x| x * x).sum::<f64>().sqrt(),
                Divisor::Standard(_) => standard[row],
                Divisor::Area => area(&axis, &columns, values),
            };
            let is_positive = total > 0.0 && total.is_finite();
            if !is_positive {
                return Err(StepError::NoTotal { row, total });
            }
            for x in values {
                *x = self.target * *x / total;
            }
            Ok(())
        })
    }
}

fn area(axis: &[f64], columns: &[usize], values: &[f64]) -> f64 {
    (1..values.len())
        .filter(|&at| columns[at] == columns[at - 1] + 1)
        .map(|at| {
            let width = (axis[columns[at]] - axis[columns[at - 1]]).abs();
            let strip = 0.5 * width * (values[at] + values[at - 1]);
            if strip.is_nan() { 0.0 } else { strip }
        })
        .sum()
}

/// Centred log-ratio (Aitchison 1982): log(x + c) minus its mean over the active predictors of
/// the row, with a constant c that is given (0 where no value is 0).
#[derive(Clone, Debug, PartialEq)]
pub struct CenteredLogRatio {
    pseudo_count: f64,
}

impl CenteredLogRatio {
    /// With this constant, 0 or more, added to every value.
    ///
    /// # Errors
    /// [`ParameterError`] when the constant is negative or not finite.
    pub fn new(pseudo_count: f64) -> Result<Self, ParameterError> {
        let pseudo_count = ParameterError::check("pseudo_count", pseudo_count, 0.0, f64::MAX)?;
        Ok(Self { pseudo_count })
    }
}

impl Preparation for CenteredLogRatio {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let columns = samples.active_columns();
        change_rows(samples, &columns, work, |row, values| {
            for (x, &column) in values.iter_mut().zip(&columns) {
                let shifted = *x + self.pseudo_count;
                if shifted <= 0.0 {
                    return Err(StepError::OutOfDomain {
                        row,
                        column,
                        value: *x,
                    });
                }
                *x = shifted.ln();
            }
            let count = known(values.iter().copied()).count();
            if count == 0 {
                return Err(StepError::NoSpread { row });
            }
            let mean = known(values.iter().copied()).sum::<f64>() / count as f64;
            values.iter_mut().for_each(|x| *x -= mean);
            Ok(())
        })
    }
}
