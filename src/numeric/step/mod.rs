//! Preparation steps: learn from a training part, apply to any samples.
//!
//! A step whose class is row-by-row or fixed reference is *given* what it needs; every other
//! step must be learnt, and can be learnt from a [`TrainingPart`] only. What was learnt keeps
//! the rows that it was learnt from, so that [`crate::numeric::proof`] can compare them.
//!
//! Steps leave columns that are switched off alone: they neither learn from nor change them.

/// For the steps that need nothing but the sample, or bring what they need along.
macro_rules! knows_enough {
    ($class:expr) => {
        type Found = ();

        fn class(&self) -> Class {
            $class
        }

        fn given(&self) -> Option<()> {
            Some(())
        }
    };
}

/// For the steps that are learnt whatever their parameters.
macro_rules! must_learn {
    ($found:ty, $class:expr) => {
        type Found = $found;

        fn class(&self) -> Class {
            $class
        }

        fn given(&self) -> Option<$found> {
            None
        }
    };
}

mod axis;
mod baseline;
mod batch;
mod chain;
mod column;
mod covariate;
mod error;
mod extended;
mod filter;
mod impute;
mod limit;
mod local;
mod low_rank;
mod marker;
mod neighbor;
mod order;
mod pointwise;
mod power;
mod quality;
mod quantile;
mod quotient;
mod relevance;
mod row;
mod scale;
mod scatter;
mod scores;
mod span;
mod spike;

pub use axis::{CommonAxis, CutRegions, Interpolation, Regions};
pub use baseline::{Baseline, BaselineRule};
pub use batch::BatchCentering;
pub use chain::{
    Chain, ChainStop, LearnedChain, Prepared, Trailing, TrailingCenter, TrailingScale,
};
pub use covariate::CovariateRemoval;
pub use error::{ParameterError, StepError, StepStop};
pub use extended::ExtendedScatterCorrection;
pub use filter::{MissingShare, NearConstant};
pub use impute::{ColumnImputation, ColumnStatistic};
pub use limit::{LimitFill, LimitRule};
pub use local::{Detrend, SavitzkyGolay, local_polynomial_weights};
pub use low_rank::LowRankImputation;
pub use marker::MinorAllele;
pub use neighbor::{NearestImputation, NeighborWeights};
pub use order::{OrderRemark, OrderRule, batch_remarks, order_remarks};
pub use pointwise::{
    Absorbance, InverseHyperbolicSine, Logarithm, LogarithmBase, Power, UnitConversion,
};
pub use power::{PowerChoice, PowerFamily, PowerTransform};
pub use quality::{DriftRemoval, DriftTrend, QualityControlDrift, QualityControlSpread};
pub use quantile::QuantileNormalisation;
pub use quotient::{ProbabilisticQuotient, QuotientReference};
pub use relevance::OutcomeFilter;
pub use row::{CenteredLogRatio, Divisor, Normalisation, StandardNormalVariate};
pub use scale::{Centering, Scaling, ScalingRule};
pub use scatter::{Reference, ScatterCorrection};
pub use scores::PrincipalScores;
pub use spike::SpikeRemoval;

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use std::borrow::Cow;
use std::fmt::Debug;
use std::sync::Arc;

/// What a step needs to know, which decides where it may be fitted.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Class {
    /// Needs only the sample itself; safe anywhere.
    RowByRow,
    /// Needs a reference that was given and does not come from the samples; safe anywhere.
    FixedReference,
    /// Learnt from samples; learnt anew in every training part.
    Learned,
    /// Learnt from samples and their outcome; learnt anew in every training part.
    LearnedWithOutcome,
}

/// What every kind of step can do.
pub(crate) trait Preparation {
    /// What the step knows once it has been learnt or given.
    type Found: Clone + Debug + Send + Sync;

    /// The class of the step with these parameters.
    fn class(&self) -> Class;

    /// What a row-by-row or fixed-reference step knows without having seen a sample; `None` for
    /// a step that must be learnt.
    fn given(&self) -> Option<Self::Found>;

    /// Learns from a training part. Asked only when nothing is given.
    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Self::Found, StepStop> {
        let _ = (part, work);
        Ok(self
            .given()
            .expect("a step that is not given what it needs says how it learns"))
    }

    /// Applies what was found. Does not copy the samples when it changes nothing.
    fn apply<'s>(
        &self,
        found: &Self::Found,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop>;
}

/// Declares the kinds of step, each named like its parameters, and hands every question on.
macro_rules! steps {
    ($($(#[$doc:meta])* $name:ident,)+) => {
        /// A preparation step with its parameters, which were checked when they were made.
        #[derive(Clone, Debug, PartialEq)]
        pub enum Step {
            $($(#[$doc])* $name($name),)+
        }

        /// A kind of step, without parameters.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
        pub enum StepKind {
            $($(#[$doc])* $name,)+
        }

        impl StepKind {
            /// Every kind there is.
            pub const ALL: &'static [Self] = &[$(Self::$name,)+];
        }

        /// What a step knows, beside the step itself.
        #[derive(Clone, Debug)]
        pub(crate) enum Knowledge {
            $($name($name, <$name as Preparation>::Found),)+
        }

        impl Step {
            /// The kind of this step.
            #[must_use]
            pub fn kind(&self) -> StepKind {
                match self {
                    $(Self::$name(_) => StepKind::$name,)+
                }
            }

            /// The class of this step with its parameters.
            #[must_use]
            pub fn class(&self) -> Class {
                match self {
                    $(Self::$name(step) => step.class(),)+
                }
            }

            fn given_knowledge(&self) -> Option<Knowledge> {
                match self {
                    $(Self::$name(step) => step
                        .given()
                        .map(|found| Knowledge::$name(step.clone(), found)),)+
                }
            }

            fn learn_knowledge(
                &self,
                part: &TrainingPart<'_>,
                work: &Work<'_>,
            ) -> Result<Knowledge, StepStop> {
                match self {
                    $(Self::$name(step) => step
                        .learn(part, work)
                        .map(|found| Knowledge::$name(step.clone(), found)),)+
                }
            }
        }

        impl Knowledge {
            fn apply<'s>(
                &self,
                samples: Cow<'s, Samples>,
                work: &Work<'_>,
            ) -> Result<Cow<'s, Samples>, StepStop> {
                match self {
                    $(Self::$name(step, found) => step.apply(found, samples, work),)+
                }
            }
        }

        $(impl From<$name> for Step {
            fn from(step: $name) -> Self {
                Self::$name(step)
            }
        })+
    };
}

steps! {
    /// Another unit: factor·x + offset.
    UnitConversion,
    /// Reflectance or transmittance to absorbance.
    Absorbance,
    /// Values read off at common positions.
    CommonAxis,
    /// Switches off regions of the axis.
    CutRegions,
    /// Replaces single values that stand out from their neighbours.
    SpikeRemoval,
    /// Fills values known to lie beyond a limit.
    LimitFill,
    /// Each row over its sum, area, peak, length or internal standard.
    Normalisation,
    /// Each row minus its mean, over its standard deviation.
    StandardNormalVariate,
    /// Each row minus its polynomial trend along the axis.
    Detrend,
    /// Each row minus a baseline.
    Baseline,
    /// Local polynomials: smoothing or derivatives.
    SavitzkyGolay,
    /// Logarithm of x plus a constant.
    Logarithm,
    /// Inverse hyperbolic sine.
    InverseHyperbolicSine,
    /// A power of x.
    Power,
    /// Box–Cox or Yeo–Johnson transform.
    PowerTransform,
    /// Logarithms minus their mean over the row.
    CenteredLogRatio,
    /// Drift along the order of measurement, taken out by quality-control samples.
    QualityControlDrift,
    /// Each row brought onto a reference by offset and slope.
    ScatterCorrection,
    /// Each row brought onto a reference beside a polynomial and interferents.
    ExtendedScatterCorrection,
    /// Each row over its typical quotient with a reference.
    ProbabilisticQuotient,
    /// Every row given the same distribution of values.
    QuantileNormalisation,
    /// Fills missing values with a statistic of the predictor.
    ColumnImputation,
    /// Fills missing values from the nearest samples.
    NearestImputation,
    /// Fills missing values by principal components.
    LowRankImputation,
    /// Switches off predictors with too many missing values.
    MissingShare,
    /// Switches off predictors with (nearly) one value only.
    NearConstant,
    /// Switches off predictors that are unsteady in quality-control samples.
    QualityControlSpread,
    /// Switches off markers with a rare allele.
    MinorAllele,
    /// Switches off predictors that do not go together with the outcome.
    OutcomeFilter,
    /// Takes the level of each batch out.
    BatchCentering,
    /// Takes the linear share of covariates out.
    CovariateRemoval,
    /// Replaces predictors by scores on principal components.
    PrincipalScores,
    /// Subtracts the mean of each predictor.
    Centering,
    /// Subtracts the mean (or median) of each predictor and divides by its scale.
    Scaling,
}

impl Step {
    /// What a row-by-row or fixed-reference step does, ready to be applied; `None` for a step
    /// that must be learnt.
    #[must_use]
    pub fn given(&self) -> Option<Learned> {
        let knowledge = self.given_knowledge()?;
        Some(Learned {
            knowledge,
            learned_from: None,
            quality_control: None,
            n_columns: None,
        })
    }

    /// Learns this step from a training part. A row-by-row or fixed-reference step learns
    /// nothing.
    ///
    /// # Errors
    /// [`StepError`] when the part does not hold what the step needs; or the work was called
    /// off.
    pub fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Learned, StepStop> {
        if let Some(given) = self.given() {
            return Ok(given);
        }
        if part.n_rows() == 0 {
            return Err(StepError::TooFewSamples {
                needed: 1,
                found: 0,
            }
            .into());
        }
        Ok(Learned {
            knowledge: self.learn_knowledge(part, work)?,
            learned_from: Some(part.shared_rows()),
            quality_control: Some(part.shared_quality_control()),
            n_columns: Some(part.n_columns()),
        })
    }
}

/// A step that knows what it needs, and which samples it knows it from.
#[derive(Clone, Debug)]
pub struct Learned {
    knowledge: Knowledge,
    learned_from: Option<Arc<[usize]>>,
    quality_control: Option<Arc<[usize]>>,
    n_columns: Option<usize>,
}

impl Learned {
    /// The training rows it was learnt from, rising; `None` for a step that learns nothing.
    #[must_use]
    pub fn learned_from(&self) -> Option<&[usize]> {
        self.learned_from.as_deref()
    }

    /// The quality-control samples that it could look at beside the training rows.
    #[must_use]
    pub fn quality_control(&self) -> &[usize] {
        self.quality_control.as_deref().unwrap_or(&[])
    }

    /// Applies the step. Does not copy the samples when it changes nothing; a filter only
    /// switches predictors off.
    ///
    /// # Errors
    /// [`StepError`] when the samples do not hold what the step needs; or the work was called
    /// off.
    pub fn apply<'s>(
        &self,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        match self.n_columns {
            Some(expected) if expected != samples.n_columns() => Err(StepError::WrongColumns {
                expected,
                found: samples.n_columns(),
            }
            .into()),
            Some(_) | None => self.knowledge.apply(samples, work),
        }
    }
}
