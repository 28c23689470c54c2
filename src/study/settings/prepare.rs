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

impl Step {
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
