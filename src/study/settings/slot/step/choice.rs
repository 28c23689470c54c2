//! The choices within preparation steps: which one stands, and putting another there.

use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::study::settings::prepare::choice::{
    AbsorbanceSource, BaselineRule, DivisorRule, DriftRemoval, Interpolation, LimitRule, LogBase,
    NeighborWeights, PowerFamily, PowerSource, ReferenceSource, ScaleRule, Statistic, Treatment,
    TrendRule,
};
use crate::study::settings::prepare::{Baseline, Divisor, LimitValue, Reference, Step, Trend};
use crate::study::settings::slot::step::StepSlot;
use crate::study::settings::slot::{Value, take};
use std::sync::Arc;

const DERIVATIVES: [(&str, u32); 3] = [
    ("smoothing", 0),
    ("first-derivative", 1),
    ("second-derivative", 2),
];
pub(super) const DERIVATIVE_NAMES: [&str; 3] = take::names(&DERIVATIVES);

const USUAL_SHARE: Real = Real::constant(0.5);
const USUAL_POWER: Real = Real::constant(0.5);
const USUAL_SPAN: Real = Real::constant(0.75);
const USUAL_BASELINE: Baseline = Baseline::Asymmetric {
    smoothness: Real::constant(100_000.0),
    asymmetry: Real::constant(0.01),
};

impl StepSlot {
    /// The stable name of the choice that stands there.
    pub(super) fn chosen(self, step: &Step) -> Option<&'static str> {
        Some(match (self, step) {
            (Self::Derivative, Step::SavitzkyGolay { derivative, .. }) => {
                return DERIVATIVES
                    .iter()
                    .find(|(_, order)| order == derivative)
                    .map(|(name, _)| *name);
            }
            (Self::Base, Step::Log { base, .. }) => base.name(),
            (Self::Shares, Step::Absorbance { reference }) => {
                let choice = if reference.is_some() {
                    AbsorbanceSource::Given
                } else {
                    AbsorbanceSource::Shares
                };
                choice.name()
            }
            (Self::Interpolation, Step::CommonAxis { between, .. }) => between.name(),
            (Self::Treatment, Step::CutRegions { treatment, .. }) => treatment.name(),
            (Self::LimitRule, Step::BelowLimit { value }) => {
                let choice = match value {
                    LimitValue::Share(_) => LimitRule::Share,
                    LimitValue::OverRootTwo => LimitRule::OverRootTwo,
                    LimitValue::Whole => LimitRule::Whole,
                };
                choice.name()
            }
            (Self::DivisorRule, Step::Normalisation { divisor, .. }) => {
                let choice = match divisor {
                    Divisor::Sum => DivisorRule::Sum,
                    Divisor::Area => DivisorRule::Area,
                    Divisor::Peak => DivisorRule::Peak,
                    Divisor::Length => DivisorRule::Length,
                    Divisor::Standard(_) => DivisorRule::Standard,
                };
                choice.name()
            }
            (Self::BaselineRule, Step::Baseline { baseline }) => {
                let choice = match baseline {
                    Baseline::Offset => BaselineRule::Offset,
                    Baseline::Line => BaselineRule::Line,
                    Baseline::Asymmetric { .. } => BaselineRule::Asymmetric,
                };
                choice.name()
            }
            (Self::Family, Step::PowerTransform { family, .. }) => family.name(),
            (Self::PowerSource, Step::PowerTransform { power, .. }) => {
                let choice = if power.is_some() {
                    PowerSource::Given
                } else {
                    PowerSource::Fitted
                };
                choice.name()
            }
            (Self::TrendRule, Step::QualityControlDrift { trend, .. }) => {
                let choice = match trend {
                    Trend::Line => TrendRule::Line,
                    Trend::Smooth { .. } => TrendRule::Smooth,
                };
                choice.name()
            }
            (Self::Removal, Step::QualityControlDrift { removal, .. }) => removal.name(),
            (
                Self::ReferenceSource,
                Step::ScatterCorrection { reference }
                | Step::ExtendedScatterCorrection { reference, .. }
                | Step::ProbabilisticQuotient { reference }
                | Step::QuantileNormalisation { reference },
            ) => {
                let choice = match reference {
                    Reference::Training => ReferenceSource::Training,
                    Reference::Given(_) => ReferenceSource::Given,
                };
                choice.name()
            }
            (Self::Statistic, Step::ColumnImputation { statistic }) => statistic.name(),
            (Self::Weights, Step::NearestImputation { weights, .. }) => weights.name(),
            (Self::ScaleRule, Step::Scale { rule }) => rule.name(),
            (_, _) => return None,
        })
    }

    /// Makes a choice. A choice that needs a number takes the usual one; false when the step has
    /// no such choice.
    pub(super) fn choose(self, step: &mut Step, value: &Value) -> Result<bool, Problem> {
        let label = self.label();
        match (self, step) {
            (Self::Derivative, Step::SavitzkyGolay { derivative, .. }) => {
                *derivative = take::pick(label, &DERIVATIVES, value)?;
            }
            (Self::Base, Step::Log { base, .. }) => {
                let chosen = take::pick(label, LogBase::TABLE, value)?;
                *base = chosen;
            }
            (Self::Shares, Step::Absorbance { reference }) => {
                let chosen = take::pick(label, AbsorbanceSource::TABLE, value)?;
                *reference = match chosen {
                    AbsorbanceSource::Shares => None,
                    AbsorbanceSource::Given => Some(reference.take().unwrap_or_default()),
                };
            }
            (Self::Interpolation, Step::CommonAxis { between, .. }) => {
                let chosen = take::pick(label, Interpolation::TABLE, value)?;
                *between = chosen;
            }
            (Self::Treatment, Step::CutRegions { treatment, .. }) => {
                let chosen = take::pick(label, Treatment::TABLE, value)?;
                *treatment = chosen;
            }
            (Self::LimitRule, Step::BelowLimit { value: limit }) => {
                let chosen = take::pick(label, LimitRule::TABLE, value)?;
                *limit = match (chosen, *limit) {
                    (LimitRule::Share, LimitValue::Share(share)) => LimitValue::Share(share),
                    (LimitRule::Share, LimitValue::OverRootTwo | LimitValue::Whole) => {
                        LimitValue::Share(USUAL_SHARE)
                    }
                    (LimitRule::OverRootTwo, _) => LimitValue::OverRootTwo,
                    (LimitRule::Whole, _) => LimitValue::Whole,
                };
            }
            (Self::DivisorRule, Step::Normalisation { divisor, .. }) => {
                let chosen = take::pick(label, DivisorRule::TABLE, value)?;
                *divisor = match chosen {
                    DivisorRule::Sum => Divisor::Sum,
                    DivisorRule::Area => Divisor::Area,
                    DivisorRule::Peak => Divisor::Peak,
                    DivisorRule::Length => Divisor::Length,
                    DivisorRule::Standard => match divisor {
                        Divisor::Standard(named) => Divisor::Standard(named.take()),
                        Divisor::Sum | Divisor::Area | Divisor::Peak | Divisor::Length => {
                            Divisor::Standard(None)
                        }
                    },
                };
            }
            (Self::BaselineRule, Step::Baseline { baseline }) => {
                let chosen = take::pick(label, BaselineRule::TABLE, value)?;
                *baseline = match (chosen, *baseline) {
                    (BaselineRule::Offset, _) => Baseline::Offset,
                    (BaselineRule::Line, _) => Baseline::Line,
                    (
                        BaselineRule::Asymmetric,
                        Baseline::Asymmetric {
                            smoothness,
                            asymmetry,
                        },
                    ) => Baseline::Asymmetric {
                        smoothness,
                        asymmetry,
                    },
                    (BaselineRule::Asymmetric, Baseline::Offset | Baseline::Line) => USUAL_BASELINE,
                };
            }
            (Self::Family, Step::PowerTransform { family, .. }) => {
                let chosen = take::pick(label, PowerFamily::TABLE, value)?;
                *family = chosen;
            }
            (Self::PowerSource, Step::PowerTransform { power, .. }) => {
                let chosen = take::pick(label, PowerSource::TABLE, value)?;
                *power = match chosen {
                    PowerSource::Fitted => None,
                    PowerSource::Given => Some(power.unwrap_or(USUAL_POWER)),
                };
            }
            (Self::TrendRule, Step::QualityControlDrift { trend, .. }) => {
                let chosen = take::pick(label, TrendRule::TABLE, value)?;
                *trend = match (chosen, *trend) {
                    (TrendRule::Line, _) => Trend::Line,
                    (TrendRule::Smooth, Trend::Smooth { span }) => Trend::Smooth { span },
                    (TrendRule::Smooth, Trend::Line) => Trend::Smooth { span: USUAL_SPAN },
                };
            }
            (Self::Removal, Step::QualityControlDrift { removal, .. }) => {
                let chosen = take::pick(label, DriftRemoval::TABLE, value)?;
                *removal = chosen;
            }
            (
                Self::ReferenceSource,
                Step::ScatterCorrection { reference }
                | Step::ExtendedScatterCorrection { reference, .. }
                | Step::ProbabilisticQuotient { reference }
                | Step::QuantileNormalisation { reference },
            ) => {
                let chosen = take::pick(label, ReferenceSource::TABLE, value)?;
                *reference = match (chosen, &*reference) {
                    (ReferenceSource::Training, _) => Reference::Training,
                    (ReferenceSource::Given, Reference::Given(values)) => {
                        Reference::Given(Arc::clone(values))
                    }
                    (ReferenceSource::Given, Reference::Training) => {
                        Reference::Given(Arc::default())
                    }
                };
            }
            (Self::Statistic, Step::ColumnImputation { statistic }) => {
                let chosen = take::pick(label, Statistic::TABLE, value)?;
                *statistic = chosen;
            }
            (Self::Weights, Step::NearestImputation { weights, .. }) => {
                let chosen = take::pick(label, NeighborWeights::TABLE, value)?;
                *weights = chosen;
            }
            (Self::ScaleRule, Step::Scale { rule }) => {
                let chosen = take::pick(label, ScaleRule::TABLE, value)?;
                *rule = chosen;
            }
            (_, _) => return Ok(false),
        }
        Ok(true)
    }
}
