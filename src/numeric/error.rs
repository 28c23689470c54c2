//! Facts of failure in fitting; no sentences.

use crate::base::work::Cancelled;

/// Why a fit could not be made.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum FitError {
    /// There is no training row with a weight above zero.
    NoRows,
    /// The shapes of the parts of a task do not fit each other.
    Shape {
        /// What has the wrong length.
        what: Ingredient,
        /// The length that was given.
        found: usize,
        /// The length that is needed.
        expected: usize,
    },
    /// A training row does not exist or rows do not rise.
    Rows {
        /// The offending row.
        row: usize,
    },
    /// A number among the inputs is not finite, or negative where it must not be.
    Number {
        /// What holds the number.
        what: Ingredient,
        /// Where, counted from 0: the sample, or the predictor for penalty weights and columns.
        at: usize,
    },
    /// The lasso share is not between 0 and 1.
    Share(f64),
    /// A penalty strength is negative or not finite.
    Strength(f64),
    /// Only one class has training rows, so nothing can be told apart.
    OneClass,
    /// A class has no training rows.
    EmptyClass(usize),
    /// No training row has an event.
    NoEvents,
    /// All training counts are zero.
    NoCounts,
    /// At this strength the coefficients grow without limit.
    Unbounded {
        /// The strength.
        strength: f64,
    },
    /// A factorisation from the linear algebra did not end well.
    Factorisation,
    /// The combination of outcome, share and constraints has no method here.
    Unsupported(Unsupported),
}

/// An ingredient of a task, for [`FitError`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ingredient {
    /// The predictor matrix.
    Predictors,
    /// The outcome.
    Outcome,
    /// The covariates.
    Covariates,
    /// The sample weights.
    Weights,
    /// The penalty weights.
    Factors,
    /// The list of candidate predictors.
    Columns,
    /// The sign constraints.
    Signs,
    /// The strata of times.
    Strata,
    /// The offset of counts.
    Offset,
}

/// What has no method here, for [`FitError`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unsupported {
    /// Sign constraints with a lasso share of 0.
    SignsInRidge,
    /// Sign constraints on classes that are penalised together.
    SignsWithClasses,
}

/// Why a computation ended early: it was called off, or it could not be done.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Stop {
    /// Called off; not an error.
    Cancelled,
    /// It could not be done.
    Failed(FitError),
}

impl From<Cancelled> for Stop {
    fn from(Cancelled: Cancelled) -> Self {
        Self::Cancelled
    }
}

impl From<FitError> for Stop {
    fn from(error: FitError) -> Self {
        Self::Failed(error)
    }
}
