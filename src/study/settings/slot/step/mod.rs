//! The numbers and choices within preparation steps.

mod choice;
mod lawful;

pub use lawful::lawful;

use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::study::settings::prepare::choice::{
    AbsorbanceSource, BaselineRule, DivisorRule, DriftRemoval, Interpolation, LimitRule, LogBase,
    NeighborWeights, PowerFamily, PowerSource, ReferenceSource, ScaleRule, Statistic, Treatment,
    TrendRule,
};
use crate::study::settings::prepare::{
    Baseline, Divisor, LimitValue, Reference, Region, Step, Trend,
};
use crate::study::settings::slot::{Bounds, Value, take};
use std::sync::Arc;

/// A number or choice of one step.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum StepSlot {
    /// The factor of a unit conversion.
    Factor,
    /// What is added: before a logarithm, or to convert a unit.
    Offset,
    /// The first position of a common axis.
    AxisFirst,
    /// The last position of a common axis.
    AxisLast,
    /// The distance of its positions.
    AxisDistance,
    /// How many neighbours on each side.
    Half,
    /// What makes a spike.
    Threshold,
    /// The share of the limit.
    ShareOfLimit,
    /// What a total becomes.
    Target,
    /// The degree of a polynomial along the whole axis.
    TrendDegree,
    /// The smoothness of a baseline.
    Smoothness,
    /// The weight of what lies above a baseline.
    Asymmetry,
    /// The number of neighbouring predictors.
    Window,
    /// The degree of a local polynomial.
    Degree,
    /// The scale of an inverse hyperbolic sine.
    HyperbolicScale,
    /// The exponent of a power.
    Exponent,
    /// The power of a power transform.
    PowerGiven,
    /// What is added to every value of a composition.
    PseudoCount,
    /// The share of quality-control samples in a local line.
    Span,
    /// The largest share that may be missing.
    MostMissing,
    /// The smallest share that must be called.
    LeastCalled,
    /// The smallest frequency of the rarer allele.
    LeastMinor,
    /// The smallest share that must differ.
    LeastDiffering,
    /// The largest relative standard deviation.
    MostSpread,
    /// How many predictors are kept.
    Keep,
    /// How many nearest samples fill a value.
    Neighbors,
    /// How many components fill a value.
    Rank,
    /// How many scores are taken.
    Components,
    /// The base of a logarithm.
    Base,
    /// Whether reflectance is measured against a reference.
    Shares,
    /// How values between predictors are found.
    Interpolation,
    /// What happens to regions.
    Treatment,
    /// What stands for a value below a limit.
    LimitRule,
    /// What a sample is divided by.
    DivisorRule,
    /// What the baseline of a sample is.
    BaselineRule,
    /// The family of a power transform.
    Family,
    /// Whether the power is fitted or given.
    PowerSource,
    /// The shape of a drift.
    TrendRule,
    /// How a drift is taken out.
    Removal,
    /// Where a reference comes from.
    ReferenceSource,
    /// What stands for a missing value.
    Statistic,
    /// How the nearest samples count.
    Weights,
    /// The scale of a predictor.
    ScaleRule,
    /// Smoothing, or which derivative.
    Derivative,
    /// The regions of an axis.
    Regions,
    /// The predictor that is an internal standard.
    Standard,
    /// The numbers of a given reference.
    Reference,
    /// The numbers of an interferent.
    Interferent,
}

const fn whole(least: u64, most: u64) -> Bounds {
    Bounds::Whole { least, most }
}

const fn any(least: f64, most: f64) -> Bounds {
    Bounds::Any { least, most }
}

/// The widest window and the highest degree that mean anything for a local polynomial.
const WINDOW: Bounds = whole(3, 501);
const DEGREE: Bounds = whole(0, 9);
const TREND_DEGREE: Bounds = whole(0, 6);
const HALF: Bounds = whole(3, 1_000);
const KEEP: Bounds = whole(1, 1_000_000);
const NEIGHBORS: Bounds = whole(1, 1_000);
const RANK: Bounds = whole(1, 100);
const COMPONENTS: Bounds = whole(1, 1_000);
const SHARE: Bounds = any(0.0, 1.0);
/// The rarer allele has at most half.
const FREQUENCY: Bounds = any(0.0, 0.5);
const NOT_NEGATIVE: Bounds = any(0.0, f64::INFINITY);
/// Above 0; what is smaller than this is no quantity that anything is divided by.
const POSITIVE: Bounds = any(1e-12, f64::INFINITY);
const SPAN: Bounds = any(0.01, 1.0);
const THRESHOLD: Bounds = any(1.0, 1_000.0);
const SMOOTHNESS: Bounds = any(1e-6, 1e12);
const ASYMMETRY: Bounds = any(1e-6, 0.999_999);
const EXPONENT: Bounds = any(-5.0, 5.0);
const ANY: Bounds = any(-1e300, 1e300);

/// A number of a step, where it stands.
enum Field<'a> {
    Number(&'a mut Real),
    Count(&'a mut u32),
}

impl StepSlot {
    /// Every place that a step can have.
    const ALL: &'static [Self] = &[
        Self::Factor,
        Self::Shares,
        Self::Interpolation,
        Self::AxisFirst,
        Self::AxisLast,
        Self::AxisDistance,
        Self::Treatment,
        Self::Regions,
        Self::Half,
        Self::Threshold,
        Self::LimitRule,
        Self::ShareOfLimit,
        Self::DivisorRule,
        Self::Standard,
        Self::Target,
        Self::TrendDegree,
        Self::BaselineRule,
        Self::Smoothness,
        Self::Asymmetry,
        Self::Derivative,
        Self::Window,
        Self::Degree,
        Self::Offset,
        Self::Base,
        Self::HyperbolicScale,
        Self::Exponent,
        Self::Family,
        Self::PowerSource,
        Self::PowerGiven,
        Self::PseudoCount,
        Self::Removal,
        Self::TrendRule,
        Self::Span,
        Self::ReferenceSource,
        Self::Reference,
        Self::Interferent,
        Self::MostMissing,
        Self::LeastCalled,
        Self::LeastMinor,
        Self::LeastDiffering,
        Self::MostSpread,
        Self::Keep,
        Self::Statistic,
        Self::Neighbors,
        Self::Weights,
        Self::Rank,
        Self::Components,
        Self::ScaleRule,
    ];

    /// The places that a step has, in reading order.
    #[must_use]
    pub fn of(step: &Step) -> Vec<Self> {
        let has = |slot: &&Self| slot.get(step).is_some();
        Self::ALL.iter().filter(has).copied().collect()
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Factor => "factor",
            Self::Offset | Self::PseudoCount => "number added",
            Self::AxisFirst => "first position",
            Self::AxisLast => "last position",
            Self::AxisDistance => "distance of positions",
            Self::Half => "neighbours on each side",
            Self::Threshold => "threshold of spikes",
            Self::ShareOfLimit => "share of the limit",
            Self::Target => "total",
            Self::TrendDegree | Self::Degree => "degree",
            Self::Smoothness => "smoothness",
            Self::Asymmetry => "asymmetry",
            Self::Window => "window",
            Self::HyperbolicScale | Self::ScaleRule => "scale",
            Self::Exponent => "exponent",
            Self::PowerGiven => "power",
            Self::Span => "span",
            Self::MostMissing => "largest share missing",
            Self::LeastCalled => "smallest share called",
            Self::LeastMinor => "smallest frequency of the rarer allele",
            Self::LeastDiffering => "smallest share differing",
            Self::MostSpread => "largest relative standard deviation",
            Self::Keep => "number kept",
            Self::Neighbors => "number of nearest samples",
            Self::Rank => "number of components",
            Self::Components => "number of scores",
            Self::Base => "base",
            Self::Shares => "reference of absorbance",
            Self::Interpolation => "values between predictors",
            Self::Treatment => "treatment of regions",
            Self::LimitRule => "value below a limit",
            Self::DivisorRule => "divisor",
            Self::BaselineRule => "baseline",
            Self::Family => "family of transforms",
            Self::PowerSource => "choice of the power",
            Self::TrendRule => "shape of the drift",
            Self::Removal => "removal of the drift",
            Self::ReferenceSource => "source of the reference",
            Self::Statistic => "statistic",
            Self::Weights => "weights of the nearest samples",
            Self::Derivative => "derivative",
            Self::Regions => "regions",
            Self::Standard => "internal standard",
            Self::Reference => "reference",
            Self::Interferent => "interferent",
        }
    }

    /// The stable names of the choices.
    #[must_use]
    pub const fn choices(self) -> &'static [&'static str] {
        match self {
            Self::Derivative => &choice::DERIVATIVE_NAMES,
            Self::Base => LogBase::NAMES,
            Self::Shares => AbsorbanceSource::NAMES,
            Self::Interpolation => Interpolation::NAMES,
            Self::Treatment => Treatment::NAMES,
            Self::LimitRule => LimitRule::NAMES,
            Self::DivisorRule => DivisorRule::NAMES,
            Self::BaselineRule => BaselineRule::NAMES,
            Self::Family => PowerFamily::NAMES,
            Self::PowerSource => PowerSource::NAMES,
            Self::TrendRule => TrendRule::NAMES,
            Self::Removal => DriftRemoval::NAMES,
            Self::ReferenceSource => ReferenceSource::NAMES,
            Self::Statistic => Statistic::NAMES,
            Self::Weights => NeighborWeights::NAMES,
            Self::ScaleRule => ScaleRule::NAMES,
            Self::Factor
            | Self::Offset
            | Self::AxisFirst
            | Self::AxisLast
            | Self::AxisDistance
            | Self::Half
            | Self::Threshold
            | Self::ShareOfLimit
            | Self::Target
            | Self::TrendDegree
            | Self::Smoothness
            | Self::Asymmetry
            | Self::Window
            | Self::Degree
            | Self::HyperbolicScale
            | Self::Exponent
            | Self::PowerGiven
            | Self::PseudoCount
            | Self::Span
            | Self::MostMissing
            | Self::LeastCalled
            | Self::LeastMinor
            | Self::LeastDiffering
            | Self::MostSpread
            | Self::Keep
            | Self::Neighbors
            | Self::Rank
            | Self::Components
            | Self::Regions
            | Self::Standard
            | Self::Reference
            | Self::Interferent => &[],
        }
    }

    /// The numbers that may stand there.
    #[must_use]
    pub const fn bounds(self) -> Option<Bounds> {
        Some(match self {
            Self::Factor | Self::Offset | Self::AxisFirst | Self::AxisLast => ANY,
            Self::AxisDistance | Self::Target | Self::HyperbolicScale => POSITIVE,
            Self::Half => HALF,
            Self::Threshold => THRESHOLD,
            Self::ShareOfLimit | Self::MostMissing | Self::LeastCalled | Self::LeastDiffering => {
                SHARE
            }
            Self::TrendDegree => TREND_DEGREE,
            Self::Smoothness => SMOOTHNESS,
            Self::Asymmetry => ASYMMETRY,
            Self::Window => WINDOW,
            Self::Degree => DEGREE,
            Self::Exponent | Self::PowerGiven => EXPONENT,
            Self::PseudoCount | Self::MostSpread => NOT_NEGATIVE,
            Self::Span => SPAN,
            Self::LeastMinor => FREQUENCY,
            Self::Keep => KEEP,
            Self::Neighbors => NEIGHBORS,
            Self::Rank => RANK,
            Self::Components => COMPONENTS,
            Self::Base
            | Self::Shares
            | Self::Interpolation
            | Self::Treatment
            | Self::LimitRule
            | Self::DivisorRule
            | Self::BaselineRule
            | Self::Family
            | Self::PowerSource
            | Self::TrendRule
            | Self::Removal
            | Self::ReferenceSource
            | Self::Statistic
            | Self::Weights
            | Self::ScaleRule
            | Self::Derivative
            | Self::Regions
            | Self::Standard
            | Self::Reference
            | Self::Interferent => return None,
        })
    }

    /// The number that stands there, where a step has one.
    fn field(self, step: &mut Step) -> Option<Field<'_>> {
        Some(match (self, step) {
            (Self::Factor, Step::UnitConversion { factor: field, .. }) => Field::Number(field),
            (
                Self::Offset,
                Step::Log { offset: field, .. } | Step::UnitConversion { offset: field, .. },
            ) => Field::Number(field),
            (Self::AxisFirst, Step::CommonAxis { first: field, .. }) => Field::Number(field),
            (Self::AxisLast, Step::CommonAxis { last: field, .. }) => Field::Number(field),
            (
                Self::AxisDistance,
                Step::CommonAxis {
                    distance: field, ..
                },
            ) => Field::Number(field),
            (Self::Half, Step::SpikeRemoval { half: field, .. }) => Field::Count(field),
            (
                Self::Threshold,
                Step::SpikeRemoval {
                    threshold: field, ..
                },
            ) => Field::Number(field),
            (
                Self::ShareOfLimit,
                Step::BelowLimit {
                    value: LimitValue::Share(field),
                },
            ) => Field::Number(field),
            (Self::Target, Step::Normalisation { target: field, .. }) => Field::Number(field),
            (
                Self::TrendDegree,
                Step::Detrend { degree: field }
                | Step::ExtendedScatterCorrection { degree: field, .. },
            ) => Field::Count(field),
            (
                Self::Smoothness,
                Step::Baseline {
                    baseline:
                        Baseline::Asymmetric {
                            smoothness: field, ..
                        },
                },
            ) => Field::Number(field),
            (
                Self::Asymmetry,
                Step::Baseline {
                    baseline:
                        Baseline::Asymmetric {
                            asymmetry: field, ..
                        },
                },
            ) => Field::Number(field),
            (Self::Window, Step::SavitzkyGolay { window: field, .. }) => Field::Count(field),
            (Self::Degree, Step::SavitzkyGolay { degree: field, .. }) => Field::Count(field),
            (Self::HyperbolicScale, Step::InverseHyperbolicSine { scale: field }) => {
                Field::Number(field)
            }
            (Self::Exponent, Step::Power { exponent: field }) => Field::Number(field),
            (
                Self::PowerGiven,
                Step::PowerTransform {
                    power: Some(field), ..
                },
            ) => Field::Number(field),
            (
                Self::PseudoCount,
                Step::CenteredLogRatio {
                    pseudo_count: field,
                },
            ) => Field::Number(field),
            (
                Self::Span,
                Step::QualityControlDrift {
                    trend: Trend::Smooth { span: field },
                    ..
                },
            ) => Field::Number(field),
            (Self::MostMissing, Step::MissingShareFilter { most: field }) => Field::Number(field),
            (Self::LeastCalled, Step::CallRateFilter { least: field }) => Field::Number(field),
            (Self::LeastMinor, Step::MinorAlleleFilter { least: field }) => Field::Number(field),
            (Self::LeastDiffering, Step::NearConstantFilter { least: field }) => {
                Field::Number(field)
            }
            (Self::MostSpread, Step::QualityControlSpread { most: field }) => Field::Number(field),
            (Self::Keep, Step::OutcomeFilter { keep: field }) => Field::Count(field),
            (
                Self::Neighbors,
                Step::NearestImputation {
                    neighbors: field, ..
                },
            ) => Field::Count(field),
            (Self::Rank, Step::LowRankImputation { rank: field }) => Field::Count(field),
            (Self::Components, Step::PrincipalScores { components: field }) => Field::Count(field),
            (
                Self::Factor
                | Self::Offset
                | Self::AxisFirst
                | Self::AxisLast
                | Self::AxisDistance
                | Self::Half
                | Self::Threshold
                | Self::ShareOfLimit
                | Self::Target
                | Self::TrendDegree
                | Self::Smoothness
                | Self::Asymmetry
                | Self::Window
                | Self::Degree
                | Self::HyperbolicScale
                | Self::Exponent
                | Self::PowerGiven
                | Self::PseudoCount
                | Self::Span
                | Self::MostMissing
                | Self::LeastCalled
                | Self::LeastMinor
                | Self::LeastDiffering
                | Self::MostSpread
                | Self::Keep
                | Self::Neighbors
                | Self::Rank
                | Self::Components
                | Self::Base
                | Self::Shares
                | Self::Interpolation
                | Self::Treatment
                | Self::LimitRule
                | Self::DivisorRule
                | Self::BaselineRule
                | Self::Family
                | Self::PowerSource
                | Self::TrendRule
                | Self::Removal
                | Self::ReferenceSource
                | Self::Statistic
                | Self::Weights
                | Self::ScaleRule
                | Self::Derivative
                | Self::Regions
                | Self::Standard
                | Self::Reference
                | Self::Interferent,
                _,
            ) => return None,
        })
    }

    /// The numbers of a reference or an interferent, where a step has them.
    fn series(self, step: &mut Step) -> Option<&mut Arc<Vec<Real>>> {
        match (self, step) {
            (
                Self::Reference,
                Step::Absorbance {
                    reference: Some(values),
                }
                | Step::ScatterCorrection {
                    reference: Reference::Given(values),
                }
                | Step::ExtendedScatterCorrection {
                    reference: Reference::Given(values),
                    ..
                }
                | Step::ProbabilisticQuotient {
                    reference: Reference::Given(values),
                }
                | Step::QuantileNormalisation {
                    reference: Reference::Given(values),
                },
            )
            | (
                Self::Interferent,
                Step::ExtendedScatterCorrection {
                    interferent: values,
                    ..
                },
            ) => Some(values),
            (_, _) => None,
        }
    }

    /// What stands there; `None` when the step has no such place.
    #[must_use]
    pub fn get(self, step: &Step) -> Option<Value> {
        let mut step = step.clone();
        if let Some(field) = self.field(&mut step) {
            return Some(match field {
                Field::Number(number) => Value::Number(*number),
                Field::Count(count) => Value::Whole(u64::from(*count)),
            });
        }
        if let Some(values) = self.series(&mut step) {
            return Some(Value::Numbers(values.as_ref().clone()));
        }
        if let Some(name) = self.chosen(&step) {
            return Some(Value::choice(name));
        }
        match (self, step) {
            (Self::Regions, Step::CutRegions { regions, .. }) => {
                Some(Value::Numbers(ends_of(&regions)))
            }
            (
                Self::Standard,
                Step::Normalisation {
                    divisor: Divisor::Standard(name),
                    ..
                },
            ) => Some(Value::Column(name)),
            (_, _) => None,
        }
    }

    /// Puts a value there.
    ///
    /// # Errors
    /// When it may not stand there, or the step has no such place.
    pub fn set(self, step: &mut Step, value: &Value) -> Result<(), Problem> {
        let label = self.label();
        if let (Some(field), Some(bounds)) = (self.field(step), self.bounds()) {
            match field {
                Field::Number(number) => *number = take::number(label, bounds, value)?,
                Field::Count(count) => *count = take::count(label, bounds, value)?,
            }
            return Ok(());
        }
        if let Some(values) = self.series(step) {
            *values = Arc::new(take::series(label, value)?);
            return Ok(());
        }
        if self.choose(step, value)? {
            return Ok(());
        }
        match (self, step) {
            (Self::Regions, Step::CutRegions { regions, .. }) => {
                *regions = regions_of(label, value)?;
            }
            (
                Self::Standard,
                Step::Normalisation {
                    divisor: Divisor::Standard(name),
                    ..
                },
            ) => *name = take::optional_column(label, value)?,
            (_, _) => return Err(take::absent(label, "the step has no such setting")),
        }
        Ok(())
    }
}

fn ends_of(regions: &[Region]) -> Vec<Real> {
    regions
        .iter()
        .flat_map(|region| [region.from, region.to])
        .collect()
}

/// Regions from their ends, two by two.
fn regions_of(label: &str, value: &Value) -> Result<Vec<Region>, Problem> {
    let ends = take::series(label, value)?;
    if ends.is_empty() || ends.len() % 2 == 1 {
        return Err(Problem::new(
            "setting-of-another-sort",
            format!("The {label} must be pairs of positions, each from one end to the other."),
        )
        .mend("Write two numbers for each region, such as “900 950; 1690 1700”."));
    }
    Ok(ends
        .chunks(2)
        .map(|ends| Region {
            from: ends[0],
            to: ends[1],
        })
        .collect())
}
