//! Remarks on the order of steps: what a later step can no longer do, or undoes.

use crate::numeric::parts::Scheme;
use crate::numeric::step::{Step, StepKind};

/// A remark on two steps of a list.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct OrderRemark {
    /// The place of the earlier step, from 0.
    pub first: usize,
    /// The place of the later step, which the remark is about.
    pub second: usize,
    /// What is the matter.
    pub rule: OrderRule,
}

/// What is the matter with the order of two steps, and why.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum OrderRule {
    /// Logarithm, power, log-ratio or absorbance after centring: about half the values are
    /// negative by then and have none.
    LogAfterCentering,
    /// A derivative or smoothing after scaling by predictor: neighbours are no longer on one
    /// scale, so differences between them mean nothing.
    DerivativeAfterScaling,
    /// A correction of each row (scatter, normalisation, baseline, trend, spikes) after scaling
    /// by predictor: the shape of the row that it works on is gone.
    RowCorrectionAfterScaling,
    /// Two steps of one family, such as two scatter corrections: the second finds nothing left
    /// or undoes what the first left.
    SameFamilyTwice,
    /// Limits filled after the values were changed: the limits are no longer on their scale, or
    /// have been forgotten.
    LimitsAfterChange,
    /// Missing values filled after scaling: location and scale were learnt without them, and
    /// the filled predictor no longer has them.
    ImputationAfterScaling,
    /// A filter on missing values after they were filled: it finds none.
    MissingFilterAfterImputation,
    /// Absorbance after a correction of each row: absorbance is physics and belongs to the
    /// values as measured.
    AbsorbanceAfterCorrection,
    /// Spikes sought after smoothing, a derivative or a correction: they have been spread over
    /// their neighbours.
    SpikesAfterSmoothing,
    /// A common axis after a derivative: the derivative was taken on different axes.
    AxisAfterDerivative,
    /// Values normalised by sum, area or peak after a logarithm: sums of logarithms are no
    /// totals.
    NormalisationAfterLog,
    /// Totals equalised after quotients: the quotients' dilution factors are undone.
    TotalAfterQuotient,
    /// A step along the axis after scores: scores have no axis.
    AlongAxisAfterScores,
    /// Drift or batch terms after scaling: they change the means and scales that were set.
    DriftAfterScaling,
    /// Regions cut after a correction of each row: what was cut has shaped the correction.
    CutAfterCorrection,
}

/// What the rules ask of a kind of step.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Family {
    Units,
    Absorbance,
    Axis,
    Cut,
    Spikes,
    Limits,
    Scatter,
    Trend,
    Total,
    Quotient,
    Distribution,
    Derivative,
    Log,
    Drift,
    Imputation,
    MissingFilter,
    Filter,
    Scores,
    Scaling,
}

fn family(kind: StepKind) -> Family {
    match kind {
        StepKind::UnitConversion => Family::Units,
        StepKind::Absorbance => Family::Absorbance,
        StepKind::CommonAxis => Family::Axis,
        StepKind::CutRegions => Family::Cut,
        StepKind::SpikeRemoval => Family::Spikes,
        StepKind::LimitFill => Family::Limits,
        StepKind::StandardNormalVariate
        | StepKind::ScatterCorrection
        | StepKind::ExtendedScatterCorrection => Family::Scatter,
        StepKind::Detrend | StepKind::Baseline => Family::Trend,
        StepKind::Normalisation => Family::Total,
        StepKind::ProbabilisticQuotient => Family::Quotient,
        StepKind::QuantileNormalisation => Family::Distribution,
        StepKind::SavitzkyGolay => Family::Derivative,
        StepKind::Logarithm
        | StepKind::Power
        | StepKind::InverseHyperbolicSine
        | StepKind::PowerTransform
        | StepKind::CenteredLogRatio => Family::Log,
        StepKind::QualityControlDrift | StepKind::BatchCentering | StepKind::CovariateRemoval => {
            Family::Drift
        }
        StepKind::ColumnImputation | StepKind::NearestImputation | StepKind::LowRankImputation => {
            Family::Imputation
        }
        StepKind::MissingShare => Family::MissingFilter,
        StepKind::NearConstant
        | StepKind::QualityControlSpread
        | StepKind::OutcomeFilter
        | StepKind::MinorAllele => Family::Filter,
        StepKind::PrincipalScores => Family::Scores,
        StepKind::Centering | StepKind::Scaling => Family::Scaling,
    }
}

impl Family {
    /// Whether the step works on the shape of a row.
    fn is_row_correction(self) -> bool {
        matches!(
            self,
            Self::Scatter
                | Self::Trend
                | Self::Total
                | Self::Quotient
                | Self::Distribution
                | Self::Spikes
        )
    }

    /// Whether the step changes values that are known.
    fn changes_values(self) -> bool {
        !matches!(
            self,
            Self::Cut | Self::Limits | Self::Imputation | Self::MissingFilter | Self::Filter
        )
    }

    /// Whether two steps of this family in one list are one too many. Transforms of values,
    /// derivatives, filters and terms for different nuisances can stand side by side.
    fn is_once(self) -> bool {
        matches!(
            self,
            Self::Scatter | Self::Total | Self::Quotient | Self::Distribution | Self::Absorbance
        )
    }
}

/// The remarks on a list of steps, in the order of the later step.
#[must_use]
pub fn order_remarks(steps: &[Step]) -> Vec<OrderRemark> {
    let mut remarks = Vec::new();
    for second in 0..steps.len() {
        for first in 0..second {
            let (before, after) = (steps[first].kind(), steps[second].kind());
            if let Some(rule) = rule_of(before, after) {
                remarks.push(OrderRemark {
                    first,
                    second,
                    rule,
                });
            }
        }
    }
    remarks
}

/// The first rule that the two kinds break.
fn rule_of(before: StepKind, after: StepKind) -> Option<OrderRule> {
    let (first, second) = (family(before), family(after));
    let is_scaled = first == Family::Scaling;
    let needs_positive = second == Family::Absorbance
        || (second == Family::Log && after != StepKind::InverseHyperbolicSine);
    let is_along_axis = matches!(
        second,
        Family::Derivative | Family::Trend | Family::Axis | Family::Cut | Family::Spikes
    );
    let spreads_spikes = matches!(first, Family::Derivative | Family::Scatter | Family::Trend);
    let changed_limits = first.changes_values() && first != Family::Units;
    let shaped = first.is_row_correction();
    let rules = [
        (OrderRule::LogAfterCentering, needs_positive && is_scaled),
        (
            OrderRule::DerivativeAfterScaling,
            second == Family::Derivative && is_scaled,
        ),
        (
            OrderRule::RowCorrectionAfterScaling,
            second.is_row_correction() && is_scaled,
        ),
        (
            OrderRule::SameFamilyTwice,
            first == second && second.is_once(),
        ),
        (
            OrderRule::LimitsAfterChange,
            second == Family::Limits && changed_limits,
        ),
        (
            OrderRule::ImputationAfterScaling,
            second == Family::Imputation && is_scaled,
        ),
        (
            OrderRule::MissingFilterAfterImputation,
            second == Family::MissingFilter && first == Family::Imputation,
        ),
        (
            OrderRule::AbsorbanceAfterCorrection,
            second == Family::Absorbance && (shaped || first == Family::Derivative),
        ),
        (
            OrderRule::SpikesAfterSmoothing,
            second == Family::Spikes && spreads_spikes,
        ),
        (
            OrderRule::AxisAfterDerivative,
            second == Family::Axis && first == Family::Derivative,
        ),
        (
            OrderRule::NormalisationAfterLog,
            second == Family::Total && first == Family::Log,
        ),
        (
            OrderRule::TotalAfterQuotient,
            second == Family::Total && first == Family::Quotient,
        ),
        (
            OrderRule::AlongAxisAfterScores,
            is_along_axis && first == Family::Scores,
        ),
        (
            OrderRule::DriftAfterScaling,
            second == Family::Drift && is_scaled,
        ),
        (
            OrderRule::CutAfterCorrection,
            second == Family::Cut && shaped,
        ),
    ];
    let broken = rules.into_iter().find(|&(_, is_broken)| is_broken);
    broken.map(|(rule, _)| rule)
}

/// The places of steps that take out the level of batches, when the plan holds out whole
/// batches: a batch that no training part has seen keeps its level.
#[must_use]
pub fn batch_remarks(steps: &[Step], scheme: Scheme) -> Vec<usize> {
    if scheme != Scheme::WholeBatches {
        return Vec::new();
    }
    (0..steps.len())
        .filter(|&at| steps[at].kind() == StepKind::BatchCentering)
        .collect()
}
