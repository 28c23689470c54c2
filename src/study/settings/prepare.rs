//! Settings of a Prepare cell: an ordered list of steps.

use crate::base::real::Real;
use crate::study::link::Link;

/// Settings of a Prepare cell.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub struct Prepare {
    /// The Data or Prepare cell that is prepared further.
    pub input: Link,
    /// The steps, in the order in which they are taken.
    pub steps: Vec<Step>,
}

/// One preparation step.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Step {
    /// The natural logarithm of the value plus a constant.
    Log {
        /// What is added first; 0 or more.
        offset: Real,
    },
    /// Standard normal variate: each sample minus its mean, divided by its standard deviation.
    StandardNormalVariate,
    /// Savitzky–Golay smoothing or derivative along the predictors.
    SavitzkyGolay {
        /// The number of neighbouring predictors; odd, more than the degree.
        window: u32,
        /// The degree of the local polynomial.
        degree: u32,
        /// 0 smooths; 1 and 2 are derivatives.
        derivative: u32,
    },
    /// Takes a polynomial along the predictors away from each sample.
    Detrend {
        /// The degree of the polynomial.
        degree: u32,
    },
    /// Mean-reference scatter correction: each sample is regressed on the mean sample of the
    /// training part.
    ScatterCorrection,
    /// Leaves out predictors of which too much is missing.
    MissingShareFilter {
        /// The largest share that may be missing, from 0 to 1.
        most: Real,
    },
    /// Leaves out predictors that hardly vary.
    NearConstantFilter {
        /// The smallest share of training samples that must differ from the commonest value.
        least: Real,
    },
    /// Puts the training part's median in place of a missing value.
    MedianImputation,
    /// Puts a share of the limit in place of a value below a limit.
    BelowLimit {
        /// The share of the limit, from 0 to 1; a half is usual.
        share: Real,
    },
    /// Takes the training part's mean away.
    Center,
    /// Divides by the training part's standard deviation (divisor n).
    UnitVariance,
}

/// What a step needs to know, which decides where it may be learnt.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum StepClass {
    /// The sample itself and nothing else.
    RowByRow,
    /// A reference that does not come from the study's samples.
    FixedReference,
    /// Samples: it is learnt in a training part and applied to any.
    Learned,
}

impl StepClass {
    /// The words for the class.
    #[must_use]
    pub const fn words(self) -> &'static str {
        match self {
            Self::RowByRow => "row-by-row",
            Self::FixedReference => "fixed reference",
            Self::Learned => "learned",
        }
    }
}

impl Step {
    /// What the step needs to know.
    #[must_use]
    pub const fn class(&self) -> StepClass {
        match self {
            Self::Log { .. }
            | Self::StandardNormalVariate
            | Self::SavitzkyGolay { .. }
            | Self::Detrend { .. } => StepClass::RowByRow,
            Self::BelowLimit { .. } => StepClass::FixedReference,
            Self::ScatterCorrection
            | Self::MissingShareFilter { .. }
            | Self::NearConstantFilter { .. }
            | Self::MedianImputation
            | Self::Center
            | Self::UnitVariance => StepClass::Learned,
        }
    }

    /// The steps that can be added, each with its usual settings, in the order of the catalogue.
    #[must_use]
    pub fn catalogue() -> Vec<Self> {
        vec![
            Self::BelowLimit {
                share: Real::constant(0.5),
            },
            Self::Log {
                offset: Real::constant(0.0),
            },
            Self::StandardNormalVariate,
            Self::SavitzkyGolay {
                window: 15,
                degree: 2,
                derivative: 1,
            },
            Self::Detrend { degree: 2 },
            Self::ScatterCorrection,
            Self::MissingShareFilter {
                most: Real::constant(0.2),
            },
            Self::NearConstantFilter {
                least: Real::constant(0.05),
            },
            Self::MedianImputation,
            Self::Center,
            Self::UnitVariance,
        ]
    }
}
