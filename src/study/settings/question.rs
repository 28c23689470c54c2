//! Settings of a Question cell: one thing asked of a fit.

use crate::base::real::Real;
use crate::study::link::Link;

/// Settings of a Question cell.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Question {
    /// The fit that is asked.
    pub fit: Link,
    /// What is asked.
    pub ask: Ask,
}

/// What can be asked.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Ask {
    /// Why can least squares not answer here?
    LeastSquares,
    /// How does the error change with the penalty, and how firmly is the strength chosen?
    ErrorCurve,
    /// How do the coefficients change with the penalty?
    CoefficientTrace,
    /// Do predictions match observations?
    Agreement,
    /// How honest is each number?
    Ladder {
        /// Whether the sealed set is opened for it. Each opening is counted.
        seal: Seal,
    },
    /// Would the same predictors be chosen again?
    ChosenAgain {
        /// How many complementary pairs of halves are drawn.
        pairs: u32,
        /// From which selection frequency on a predictor counts as chosen again.
        threshold: Real,
        /// The seed of the halves.
        seed: u64,
    },
    /// What could stand in for the chosen predictors?
    StandIns {
        /// From which absolute correlation on a predictor is a stand-in.
        correlation: Real,
    },
}

/// Whether a sealed set stays closed.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Seal {
    /// It stays closed.
    Closed,
    /// It is opened, which is counted and printed.
    Opened,
}

impl Ask {
    /// Everything that can be asked, each with its usual settings, in the order in which it is
    /// offered.
    #[must_use]
    pub fn catalogue() -> Vec<Self> {
        vec![
            Self::LeastSquares,
            Self::ErrorCurve,
            Self::CoefficientTrace,
            Self::Agreement,
            Self::Ladder { seal: Seal::Closed },
            Self::ChosenAgain {
                pairs: 50,
                threshold: Real::constant(0.75),
                seed: 20_260_302,
            },
            Self::StandIns {
                correlation: Real::constant(0.8),
            },
        ]
    }

    /// The question in words.
    #[must_use]
    pub const fn words(&self) -> &'static str {
        match self {
            Self::LeastSquares => "Why can least squares not answer here?",
            Self::ErrorCurve => {
                "How does the error change with the penalty, and how firmly is the strength chosen?"
            }
            Self::CoefficientTrace => "How do the coefficients change with the penalty?",
            Self::Agreement => "Do predictions match observations?",
            Self::Ladder { .. } => "How honest is each number?",
            Self::ChosenAgain { .. } => "Would the same predictors be chosen again?",
            Self::StandIns { .. } => "What could stand in for the chosen predictors?",
        }
    }

    /// A title for a new cell that asks this.
    #[must_use]
    pub const fn title(&self) -> &'static str {
        match self {
            Self::LeastSquares => "Why a penalty?",
            Self::ErrorCurve => "Error and strength",
            Self::CoefficientTrace => "Coefficient trace",
            Self::Agreement => "Predicted and observed",
            Self::Ladder { .. } => "How honest?",
            Self::ChosenAgain { .. } => "Chosen again?",
            Self::StandIns { .. } => "Stand-ins",
        }
    }
}
