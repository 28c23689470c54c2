//! Why a step cannot be made, learnt or applied: facts, no sentences.

use crate::base::work::Cancelled;
use std::fmt;

/// A parameter of a step that is out of its range.
#[derive(Clone, Debug, PartialEq)]
pub struct ParameterError {
    /// The parameter, as it is named in the step.
    pub parameter: &'static str,
    /// The value given.
    pub value: f64,
    /// The smallest value allowed.
    pub least: f64,
    /// The largest value allowed.
    pub most: f64,
}

impl ParameterError {
    /// `value` when it is a number from `least` to `most`.
    pub(super) fn check(
        parameter: &'static str,
        value: f64,
        least: f64,
        most: f64,
    ) -> Result<f64, Self> {
        if value >= least && value <= most && value.is_finite() {
            Ok(value)
        } else {
            Err(Self {
                parameter,
                value,
                least,
                most,
            })
        }
    }

    /// `value` when it is finite and not 0.
    pub(super) fn check_not_zero(parameter: &'static str, value: f64) -> Result<f64, Self> {
        let least = if value == 0.0 {
            f64::MIN_POSITIVE
        } else {
            f64::MIN
        };
        Self::check(parameter, value, least, f64::MAX)
    }

    /// `value` when it is from `least` to `most`.
    pub(super) fn check_count(
        parameter: &'static str,
        value: usize,
        least: usize,
        most: usize,
    ) -> Result<usize, Self> {
        let _ = Self::check(parameter, value as f64, least as f64, most as f64)?;
        Ok(value)
    }
}

/// Why a step cannot be learnt from, or applied to, these samples.
#[derive(Clone, Debug, PartialEq)]
pub enum StepError {
    /// The samples have not the columns that the step was learnt from or made for.
    WrongColumns {
        /// The number of columns it knows.
        expected: usize,
        /// The number of columns there are.
        found: usize,
    },
    /// No column is switched on.
    NothingActive,
    /// A value is outside the range for which the step is defined.
    OutOfDomain {
        /// The sample.
        row: usize,
        /// The column.
        column: usize,
        /// The value.
        value: f64,
    },
    /// All values of a sample are the same (or all are missing), so that it has no scale.
    NoSpread {
        /// The sample.
        row: usize,
    },
    /// The sum, peak or standard by which a sample would be divided is not positive.
    NoTotal {
        /// The sample.
        row: usize,
        /// The divisor.
        total: f64,
    },
    /// A sample does not rise with the reference, so that it cannot be brought onto it.
    FlatAgainstReference {
        /// The sample.
        row: usize,
        /// Its slope against the reference.
        slope: f64,
    },
    /// A window is wider than a run of neighbouring columns.
    WindowTooWide {
        /// The window.
        window: usize,
        /// The number of neighbouring columns.
        run: usize,
    },
    /// The columns have no axis.
    NoAxis,
    /// The axis does not rise or fall throughout.
    AxisNotMonotone {
        /// The first column that breaks the direction.
        column: usize,
    },
    /// A position asked for lies outside the axis.
    OutsideAxis {
        /// The position.
        position: f64,
        /// The smallest position there is.
        least: f64,
        /// The largest position there is.
        most: f64,
    },
    /// A value is missing where the step cannot do without.
    Missing {
        /// The sample.
        row: usize,
        /// The column.
        column: usize,
    },
    /// A column has no known value in the training part.
    NothingKnown {
        /// The column.
        column: usize,
    },
    /// The training part has too few samples (or quality-control samples).
    TooFewSamples {
        /// How many it needs.
        needed: usize,
        /// How many there are.
        found: usize,
    },
    /// The samples have no batches.
    NoBatches,
    /// The samples have no order values.
    NoOrder,
    /// The order value of a sample is missing.
    OrderMissing {
        /// The sample.
        row: usize,
    },
    /// There are too few quality-control samples.
    TooFewQualityControls {
        /// How many it needs.
        needed: usize,
        /// How many there are.
        found: usize,
    },
    /// The samples have no covariates, or a sample lacks one.
    NoCovariates,
    /// A step that is learnt with the outcome was given none.
    NoOutcome,
    /// The covariates, interferents or trends cannot be told apart.
    NotIndependent,
    /// An iteration did not settle.
    NotSettled {
        /// How many passes were made.
        passes: usize,
    },
}

/// Why a step ended early: called off, or not possible.
#[derive(Clone, Debug, PartialEq)]
pub enum StepStop {
    /// The work was called off.
    Cancelled,
    /// The step is not possible with these samples.
    Failed(StepError),
}

impl From<Cancelled> for StepStop {
    fn from(_: Cancelled) -> Self {
        Self::Cancelled
    }
}

impl From<StepError> for StepStop {
    fn from(error: StepError) -> Self {
        Self::Failed(error)
    }
}

impl fmt::Display for ParameterError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{self:?}")
    }
}

impl fmt::Display for StepStop {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{self:?}")
    }
}

impl std::error::Error for ParameterError {}
impl std::error::Error for StepStop {}
