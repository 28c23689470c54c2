//! Preparation steps in words: names, settings, published sources.

mod computed;
mod source;
mod trouble;

pub use computed::numeric_step;
pub use source::{Source, source};
pub use trouble::step_problem;

use crate::base::number::{self, Precision};
use crate::base::real::Real;
use crate::numeric::step::Class;
use crate::study::settings::prepare::choice::{
    Interpolation, PowerFamily, ScaleRule, Statistic, Treatment,
};
use crate::study::settings::prepare::{
    Baseline, Divisor, LimitValue, Reference, Region, Step, Trend,
};

/// The step's name in running text.
#[must_use]
pub const fn step_name(step: &Step) -> &'static str {
    match step {
        Step::AverageUnits => "averaging of each unit’s samples",
        Step::UnitConversion { .. } => "unit conversion",
        Step::Absorbance { .. } => "absorbance",
        Step::CommonAxis { .. } => "common axis",
        Step::CutRegions {
            treatment: Treatment::Cut,
            ..
        } => "regions left out",
        Step::CutRegions {
            treatment: Treatment::Keep,
            ..
        } => "regions kept",
        Step::SpikeRemoval { .. } => "spike removal",
        Step::BelowLimit { .. } => "values for those below a limit",
        Step::Normalisation {
            divisor: Divisor::Sum,
            ..
        } => "total-sum normalisation",
        Step::Normalisation {
            divisor: Divisor::Area,
            ..
        } => "area normalisation",
        Step::Normalisation {
            divisor: Divisor::Peak,
            ..
        } => "peak normalisation",
        Step::Normalisation {
            divisor: Divisor::Length,
            ..
        } => "length normalisation",
        Step::Normalisation {
            divisor: Divisor::Standard(_),
            ..
        } => "internal-standard normalisation",
        Step::StandardNormalVariate => "standard normal variate",
        Step::Detrend { .. } => "detrending",
        Step::Baseline { .. } => "baseline removal",
        Step::SavitzkyGolay { derivative: 0, .. } => "Savitzky–Golay smoothing",
        Step::SavitzkyGolay { .. } => "Savitzky–Golay derivative",
        Step::Log { .. } => "logarithm",
        Step::InverseHyperbolicSine { .. } => "inverse hyperbolic sine",
        Step::Power { .. } => "power",
        Step::PowerTransform {
            family: PowerFamily::BoxCox,
            ..
        } => "Box–Cox transform",
        Step::PowerTransform {
            family: PowerFamily::YeoJohnson,
            ..
        } => "Yeo–Johnson transform",
        Step::CenteredLogRatio { .. } => "centred log-ratio",
        Step::QualityControlDrift { .. } => "quality-control drift correction",
        Step::ScatterCorrection {
            reference: Reference::Training,
        } => "mean-reference scatter correction",
        Step::ScatterCorrection {
            reference: Reference::Given(_),
        } => "scatter correction on a given reference",
        Step::ExtendedScatterCorrection { .. } => "extended scatter correction",
        Step::ProbabilisticQuotient { .. } => "probabilistic quotient normalisation",
        Step::QuantileNormalisation { .. } => "quantile normalisation",
        Step::MissingShareFilter { .. } => "missing-share filter",
        Step::CallRateFilter { .. } => "call-rate filter",
        Step::MinorAlleleFilter { .. } => "minor-allele filter",
        Step::NearConstantFilter { .. } => "near-constant filter",
        Step::QualityControlSpread { .. } => "quality-control spread filter",
        Step::OutcomeFilter { .. } => "outcome-driven filter",
        Step::ColumnImputation {
            statistic: Statistic::Median,
        } => "median imputation",
        Step::ColumnImputation {
            statistic: Statistic::Mean,
        } => "mean imputation",
        Step::NearestImputation { .. } => "nearest-sample imputation",
        Step::LowRankImputation { .. } => "low-rank imputation",
        Step::BatchCentering => "batch centring",
        Step::CovariateRemoval => "covariate removal",
        Step::PrincipalScores { .. } => "principal-component scores",
        Step::Center => "centring",
        Step::Scale { rule } => match rule {
            ScaleRule::UnitVariance => "unit-variance scaling",
            ScaleRule::Pareto => "Pareto scaling",
            ScaleRule::Range => "range scaling",
            ScaleRule::Level => "level scaling",
            ScaleRule::Robust => "robust scaling",
        },
    }
}

/// The class's name in running text.
#[must_use]
pub const fn class_name(class: Class) -> &'static str {
    match class {
        Class::RowByRow => "row-by-row",
        Class::FixedReference => "fixed reference",
        Class::Learned => "learned",
        Class::LearnedWithOutcome => "learned with the outcome",
    }
}

/// The step's settings in words; empty where it has none.
#[must_use]
pub fn parameters(step: &Step) -> String {
    match step {
        Step::UnitConversion { factor, offset } => {
            format!("times {}, plus {}", show(*factor), show(*offset))
        }
        Step::Absorbance { reference } => match reference {
            None => "of shares".to_owned(),
            Some(values) => format!("over a given reference of {} values", count(values.len())),
        },
        Step::CommonAxis {
            first,
            last,
            distance,
            between,
        } => format!(
            "from {} to {} by {}, on {}",
            show(*first),
            show(*last),
            show(*distance),
            match between {
                Interpolation::Linear => "straight lines",
                Interpolation::CubicSpline => "a natural cubic spline",
            }
        ),
        Step::CutRegions { regions, .. } => region_words(regions),
        Step::SpikeRemoval { half, threshold } => format!(
            "{half} neighbours on each side, {} robust standard deviations",
            show(*threshold)
        ),
        Step::BelowLimit { value } => match value {
            LimitValue::Share(share) => format!("{} times the limit", show(*share)),
            LimitValue::OverRootTwo => "the limit over √2".to_owned(),
            LimitValue::Whole => "the limit itself".to_owned(),
        },
        Step::Normalisation { divisor, target } => match divisor {
            Divisor::Standard(Some(name)) => format!("“{name}” to {}", show(*target)),
            Divisor::Standard(None) => format!("to {}", show(*target)),
            Divisor::Sum | Divisor::Area | Divisor::Peak | Divisor::Length => {
                format!("to {}", show(*target))
            }
        },
        Step::Detrend { degree } => format!("degree {degree}"),
        Step::Baseline { baseline } => match baseline {
            Baseline::Offset => "smallest value".to_owned(),
            Baseline::Line => "line through the ends".to_owned(),
            Baseline::Asymmetric {
                smoothness,
                asymmetry,
            } => format!(
                "asymmetric least squares, smoothness {}, asymmetry {}",
                show(*smoothness),
                show(*asymmetry)
            ),
        },
        Step::SavitzkyGolay {
            window,
            degree,
            derivative,
        } => format!("window {window}, degree {degree}, derivative {derivative}"),
        Step::Log { base, offset } => format!("{}, plus {}", base.words(), show(*offset)),
        Step::InverseHyperbolicSine { scale } => format!("scale {}", show(*scale)),
        Step::Power { exponent } => format!("exponent {}", show(*exponent)),
        Step::PowerTransform { power, .. } => match power {
            None => "power fitted for each predictor".to_owned(),
            Some(power) => format!("power {}", show(*power)),
        },
        Step::CenteredLogRatio { pseudo_count } => format!("plus {}", show(*pseudo_count)),
        Step::QualityControlDrift { trend, removal } => {
            let shape = match trend {
                Trend::Line => "straight line".to_owned(),
                Trend::Smooth { span } => format!("smooth curve of span {}", show(*span)),
            };
            format!("{shape}, {}", removal.words())
        }
        Step::ScatterCorrection { reference } => reference_words(reference, "mean"),
        Step::ExtendedScatterCorrection {
            reference,
            degree,
            interferent,
        } => {
            let mut said = format!("{}, degree {degree}", reference_words(reference, "mean"));
            if !interferent.is_empty() {
                said.push_str(", one interferent");
            }
            said
        }
        Step::ProbabilisticQuotient { reference } => reference_words(reference, "median"),
        Step::QuantileNormalisation { reference } => reference_words(reference, "distribution"),
        Step::MissingShareFilter { most } => format!("at most {} missing", percent(*most)),
        Step::CallRateFilter { least } => format!("called in at least {}", percent(*least)),
        Step::MinorAlleleFilter { least } => {
            format!("frequency of the rarer allele at least {}", show(*least))
        }
        Step::NearConstantFilter { least } => {
            format!("at least {} of samples differ", percent(*least))
        }
        Step::QualityControlSpread { most } => {
            format!("relative standard deviation at most {}", percent(*most))
        }
        Step::OutcomeFilter { keep } => format!("the closest {}", count(*keep as usize)),
        Step::NearestImputation { neighbors, weights } => {
            format!("{neighbors} nearest, {}", weights.words())
        }
        Step::LowRankImputation { rank } => format!("rank {rank}"),
        Step::PrincipalScores { components } => format!("{components} components"),
        Step::Scale {
            rule: ScaleRule::UnitVariance,
        } => "divisor n".to_owned(),
        Step::Scale {
            rule: ScaleRule::Pareto | ScaleRule::Range | ScaleRule::Level | ScaleRule::Robust,
        }
        | Step::AverageUnits
        | Step::StandardNormalVariate
        | Step::ColumnImputation { .. }
        | Step::BatchCentering
        | Step::CovariateRemoval
        | Step::Center => String::new(),
    }
}

/// Regions as they are read: `900–950, 1690–1700`.
#[must_use]
pub fn region_words(regions: &[Region]) -> String {
    let one = |region: &Region| format!("{}–{}", show(region.from), show(region.to));
    let all: Vec<String> = regions.iter().map(one).collect();
    all.join(", ")
}

fn reference_words(reference: &Reference, learnt: &str) -> String {
    match reference {
        Reference::Training => format!("{learnt} of the training samples"),
        Reference::Given(values) => {
            format!("a given reference of {} values", count(values.len()))
        }
    }
}

fn count(number: usize) -> String {
    number::text(number as f64, Precision::Whole)
}

fn show(value: Real) -> String {
    number::text(value.get(), Precision::Full)
}

fn percent(share: Real) -> String {
    // A share such as 0.975 keeps its digits.
    let whole = (share.get() * 100.0).fract() == 0.0;
    let precision = if whole {
        Precision::Percent(0)
    } else {
        Precision::Percent(1)
    };
    number::text(share.get(), precision)
}
