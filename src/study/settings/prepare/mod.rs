//! Settings of a Prepare cell: an ordered list of steps.

mod catalogue;
pub mod choice;

pub use catalogue::Shelf;

use crate::base::real::Real;
use crate::study::link::Link;
use crate::study::settings::prepare::choice::{
    DriftRemoval, Interpolation, LogBase, NeighborWeights, PowerFamily, ScaleRule, Statistic,
    Treatment,
};
use std::sync::Arc;

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
    /// The samples of a unit become one: the mean of their values.
    AverageUnits,
    /// Another unit: the value times a factor, plus an offset.
    UnitConversion {
        /// The factor; not 0.
        factor: Real,
        /// What is added.
        offset: Real,
    },
    /// Reflectance or transmittance to absorbance: minus the logarithm to base 10.
    Absorbance {
        /// What the values are divided by first, one number per predictor; `None` where they are
        /// shares already.
        reference: Option<Arc<Vec<Real>>>,
    },
    /// Every sample read off at evenly spaced positions of the axis.
    CommonAxis {
        /// The first position.
        first: Real,
        /// The last position, which is reached when the distance divides the range.
        last: Real,
        /// The distance between positions; above 0.
        distance: Real,
        /// How values between predictors are found.
        between: Interpolation,
    },
    /// Leaves out regions of the axis that were chosen beforehand, or all but these.
    CutRegions {
        /// The regions, at least one.
        regions: Vec<Region>,
        /// What happens to them.
        treatment: Treatment,
    },
    /// Puts the median of the neighbours in place of single values that stand out from them.
    SpikeRemoval {
        /// How many neighbours on each side.
        half: u32,
        /// How many robust standard deviations make a spike.
        threshold: Real,
    },
    /// Puts a value in place of one below a limit, and the limit in place of one above it.
    BelowLimit {
        /// What is put there.
        value: LimitValue,
    },
    /// Each sample over a quantity of its own.
    Normalisation {
        /// The quantity.
        divisor: Divisor,
        /// What the quantity becomes: 1 for shares, 1,000,000 for parts per million.
        target: Real,
    },
    /// Standard normal variate: each sample minus its mean, divided by its standard deviation.
    StandardNormalVariate,
    /// Takes a polynomial along the predictors away from each sample.
    Detrend {
        /// The degree of the polynomial.
        degree: u32,
    },
    /// Takes a baseline away from each sample.
    Baseline {
        /// What the baseline is.
        baseline: Baseline,
    },
    /// Savitzky–Golay smoothing or derivative along the predictors.
    SavitzkyGolay {
        /// The number of neighbouring predictors; odd, more than the degree.
        window: u32,
        /// The degree of the local polynomial.
        degree: u32,
        /// 0 smooths; 1 and 2 are derivatives.
        derivative: u32,
    },
    /// The logarithm of the value plus a constant.
    Log {
        /// The base.
        base: LogBase,
        /// What is added first; 0 or more.
        offset: Real,
    },
    /// The inverse hyperbolic sine of the value over a scale.
    InverseHyperbolicSine {
        /// The scale; above 0.
        scale: Real,
    },
    /// A power of the value.
    Power {
        /// The exponent, not 0.
        exponent: Real,
    },
    /// A power transform, one power for all predictors or a fitted one for each.
    PowerTransform {
        /// The family.
        family: PowerFamily,
        /// The power for all; `None` fits one for each predictor.
        power: Option<Real>,
    },
    /// The logarithm of each value minus the mean logarithm of its sample.
    CenteredLogRatio {
        /// What is added to every value first; 0 or more.
        pseudo_count: Real,
    },
    /// Takes out the drift that quality-control samples show along the order of measurement.
    QualityControlDrift {
        /// The shape of the drift.
        trend: Trend,
        /// How it is taken out.
        removal: DriftRemoval,
    },
    /// Scatter correction: each sample is regressed on a reference.
    ScatterCorrection {
        /// The reference.
        reference: Reference,
    },
    /// Extended scatter correction: each sample is regressed on a reference, a polynomial and,
    /// where one is given, an interferent.
    ExtendedScatterCorrection {
        /// The reference.
        reference: Reference,
        /// The degree of the polynomial.
        degree: u32,
        /// The spectrum of an interferent, one number per predictor; empty for none.
        interferent: Arc<Vec<Real>>,
    },
    /// Probabilistic quotient: each sample over the median of its quotients with a reference.
    ProbabilisticQuotient {
        /// The reference.
        reference: Reference,
    },
    /// Every sample gets the same distribution of values.
    QuantileNormalisation {
        /// The distribution; a given one rises.
        reference: Reference,
    },
    /// Leaves out predictors of which too much is missing.
    MissingShareFilter {
        /// The largest share that may be missing, from 0 to 1.
        most: Real,
    },
    /// Leaves out markers that were called in too few samples.
    CallRateFilter {
        /// The smallest share of samples that must be called, from 0 to 1.
        least: Real,
    },
    /// Leaves out markers of which the rarer allele is too rare.
    MinorAlleleFilter {
        /// The smallest frequency of the rarer allele, from 0 to 0.5.
        least: Real,
    },
    /// Leaves out predictors that hardly vary.
    NearConstantFilter {
        /// The smallest share of training samples that must differ from the commonest value.
        least: Real,
    },
    /// Leaves out predictors that are unsteady in quality-control samples.
    QualityControlSpread {
        /// The largest relative standard deviation.
        most: Real,
    },
    /// Keeps the predictors that go together with the outcome most closely.
    OutcomeFilter {
        /// How many are kept.
        keep: u32,
    },
    /// Puts a statistic of the training part in place of a missing value.
    ColumnImputation {
        /// The statistic.
        statistic: Statistic,
    },
    /// Fills a missing value from the nearest training samples.
    NearestImputation {
        /// How many.
        neighbors: u32,
        /// How they count.
        weights: NeighborWeights,
    },
    /// Fills missing values by the first principal components of the training part.
    LowRankImputation {
        /// How many components.
        rank: u32,
    },
    /// Takes the level of each batch away.
    BatchCentering,
    /// Takes the linear share of the covariates away.
    CovariateRemoval,
    /// Scores on principal components in place of the predictors.
    PrincipalScores {
        /// How many components.
        components: u32,
    },
    /// Takes the training part's mean away.
    Center,
    /// Takes the training part's mean (or median) away and divides by its scale.
    Scale {
        /// The scale.
        rule: ScaleRule,
    },
}

/// A region of the axis, both ends included.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Region {
    /// One end.
    pub from: Real,
    /// The other.
    pub to: Real,
}

/// What is put in place of a value below a limit.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum LimitValue {
    /// This share of the limit, from 0 to 1; a half is usual.
    Share(Real),
    /// The limit over the root of two.
    OverRootTwo,
    /// The limit itself.
    Whole,
}

/// The quantity that a sample is divided by.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Divisor {
    /// The sum over its predictors.
    Sum,
    /// The area along the axis.
    Area,
    /// Its largest value.
    Peak,
    /// The root of its sum of squares.
    Length,
    /// One predictor, an internal standard; `None` until it is named.
    Standard(Option<String>),
}

/// What the baseline of a sample is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Baseline {
    /// Its smallest value.
    Offset,
    /// The straight line through its ends.
    Line,
    /// A smooth curve by asymmetric least squares.
    Asymmetric {
        /// The weight of smoothness; above 0.
        smoothness: Real,
        /// The weight of what lies above the curve; between 0 and 1.
        asymmetry: Real,
    },
}

/// The shape of a drift along the order of measurement.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Trend {
    /// A straight line.
    Line,
    /// Local straight lines.
    Smooth {
        /// The share of the quality-control samples in each; above 0, at most 1.
        span: Real,
    },
}

/// Where a reference comes from.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Reference {
    /// The training part: learnt.
    Training,
    /// These numbers, one per predictor, which do not come from the samples: fixed.
    Given(Arc<Vec<Real>>),
}

/// What a step needs to know, which decides where it may be learnt.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum StepClass {
    /// The sample itself (or its unit) and nothing else.
    RowByRow,
    /// A reference that does not come from the study's samples.
    FixedReference,
    /// Samples: it is learnt in a training part and applied to any.
    Learned,
    /// Samples and their outcome: it is learnt in a training part and applied to any.
    LearnedWithOutcome,
}

impl StepClass {
    /// The words for the class.
    #[must_use]
    pub const fn words(self) -> &'static str {
        match self {
            Self::RowByRow => "row-by-row",
            Self::FixedReference => "fixed reference",
            Self::Learned => "learned",
            Self::LearnedWithOutcome => "learned with the outcome",
        }
    }
}

impl Reference {
    const fn class(&self) -> StepClass {
        match self {
            Self::Training => StepClass::Learned,
            Self::Given(_) => StepClass::FixedReference,
        }
    }
}

impl Step {
    /// What the step needs to know.
    #[must_use]
    pub const fn class(&self) -> StepClass {
        match self {
            Self::AverageUnits
            | Self::CommonAxis { .. }
            | Self::SpikeRemoval { .. }
            | Self::Normalisation { .. }
            | Self::StandardNormalVariate
            | Self::Detrend { .. }
            | Self::Baseline { .. }
            | Self::SavitzkyGolay { .. }
            | Self::Log { .. }
            | Self::InverseHyperbolicSine { .. }
            | Self::Power { .. }
            | Self::PowerTransform { power: Some(_), .. }
            | Self::CenteredLogRatio { .. }
            | Self::Absorbance { reference: None } => StepClass::RowByRow,
            Self::UnitConversion { .. }
            | Self::CutRegions { .. }
            | Self::BelowLimit { .. }
            | Self::Absorbance { reference: Some(_) } => StepClass::FixedReference,
            Self::ScatterCorrection { reference }
            | Self::ExtendedScatterCorrection { reference, .. }
            | Self::ProbabilisticQuotient { reference }
            | Self::QuantileNormalisation { reference } => reference.class(),
            Self::PowerTransform { power: None, .. }
            | Self::QualityControlDrift { .. }
            | Self::MissingShareFilter { .. }
            | Self::CallRateFilter { .. }
            | Self::MinorAlleleFilter { .. }
            | Self::NearConstantFilter { .. }
            | Self::QualityControlSpread { .. }
            | Self::ColumnImputation { .. }
            | Self::NearestImputation { .. }
            | Self::LowRankImputation { .. }
            | Self::BatchCentering
            | Self::CovariateRemoval
            | Self::PrincipalScores { .. }
            | Self::Center
            | Self::Scale { .. } => StepClass::Learned,
            Self::OutcomeFilter { .. } => StepClass::LearnedWithOutcome,
        }
    }
}
