//! A preparation step in format 1.

use crate::base::real::Real;
use crate::store::format::place::{At, Fault, Fields};
use crate::store::format::v1::Group;
use crate::study::settings::prepare::choice::{
    DriftRemoval, Interpolation, LogBase, NeighborWeights, PowerFamily, ScaleRule, Statistic,
    Treatment,
};
use crate::study::settings::prepare::{
    Baseline, Divisor, LimitValue, Reference, Region, Step, Trend,
};
use serde_json::Value;
use std::sync::Arc;

const NAMES: [&str; 38] = [
    "average-units",
    "unit-conversion",
    "absorbance",
    "common-axis",
    "cut-regions",
    "spike-removal",
    "below-limit",
    "normalisation",
    "standard-normal-variate",
    "detrend",
    "baseline",
    "savitzky-golay",
    "log",
    "inverse-hyperbolic-sine",
    "power",
    "power-transform",
    "centered-log-ratio",
    "quality-control-drift",
    "scatter-correction",
    "extended-scatter-correction",
    "probabilistic-quotient",
    "quantile-normalisation",
    "missing-share-filter",
    "call-rate-filter",
    "minor-allele-filter",
    "near-constant-filter",
    "quality-control-spread",
    "outcome-filter",
    "median-imputation",
    "mean-imputation",
    "nearest-imputation",
    "low-rank-imputation",
    "batch-centering",
    "covariate-removal",
    "principal-scores",
    "center",
    "unit-variance",
    "scale",
];

/// A step without numbers, by its name.
fn bare(name: &str) -> Option<Step> {
    let training = Reference::Training;
    Some(match name {
        "average-units" => Step::AverageUnits,
        "absorbance" => Step::Absorbance { reference: None },
        "standard-normal-variate" => Step::StandardNormalVariate,
        "scatter-correction" => Step::ScatterCorrection {
            reference: training,
        },
        "probabilistic-quotient" => Step::ProbabilisticQuotient {
            reference: training,
        },
        "quantile-normalisation" => Step::QuantileNormalisation {
            reference: training,
        },
        "median-imputation" => Step::ColumnImputation {
            statistic: Statistic::Median,
        },
        "mean-imputation" => Step::ColumnImputation {
            statistic: Statistic::Mean,
        },
        "batch-centering" => Step::BatchCentering,
        "covariate-removal" => Step::CovariateRemoval,
        "center" => Step::Center,
        "unit-variance" => Step::Scale {
            rule: ScaleRule::UnitVariance,
        },
        _ => return None,
    })
}

/// Reads a step. One without numbers may be written as its name alone.
///
/// # Errors
/// The first [`Fault`].
pub fn read(at: &At<'_>) -> Result<Step, Fault> {
    if at.value().is_string() {
        let name = at.text()?;
        return match bare(&name) {
            Some(step) => Ok(step),
            None if NAMES.contains(&name.as_str()) => Err(at.fault(
                &format!("The step “{name}” has numbers that are not given here."),
                &format!("Write it as a group of fields, beginning with \"step\": \"{name}\"."),
            )),
            None => Err(at.not_among(&NAMES)),
        };
    }
    let mut fields = at.fields()?;
    let name = fields.need("step")?;
    let step = read_fields(&name, &mut fields)?;
    fields.done();
    Ok(step)
}

fn read_fields(at: &At<'_>, fields: &mut Fields<'_>) -> Result<Step, Fault> {
    let name = at.text()?;
    Ok(match name.as_str() {
        "unit-conversion" => Step::UnitConversion {
            factor: fields.need("factor")?.real()?,
            offset: fields.need("offset")?.real()?,
        },
        "absorbance" => Step::Absorbance {
            reference: series(fields, "reference")?,
        },
        "common-axis" => Step::CommonAxis {
            first: fields.need("first")?.real()?,
            last: fields.need("last")?.real()?,
            distance: fields.need("distance")?.real()?,
            between: fields.need("between")?.one_of(Interpolation::TABLE)?,
        },
        "cut-regions" => Step::CutRegions {
            regions: fields
                .need("regions")?
                .each(|region| read_region(&region))?,
            treatment: fields.need("treatment")?.one_of(Treatment::TABLE)?,
        },
        "spike-removal" => Step::SpikeRemoval {
            half: fields.need("half")?.count()?,
            threshold: fields.need("threshold")?.real()?,
        },
        "below-limit" => Step::BelowLimit {
            value: match fields.read("share", |at| at.real())? {
                Some(share) => LimitValue::Share(share),
                None => fields.need("value")?.one_of(&LIMIT_VALUES)?,
            },
        },
        "normalisation" => Step::Normalisation {
            divisor: match fields.text("standard")? {
                Some(name) => Divisor::Standard(Some(name)),
                None => fields.need("divisor")?.one_of(&DIVISORS)?.divisor(),
            },
            target: fields.need("target")?.real()?,
        },
        "detrend" => Step::Detrend {
            degree: fields.need("degree")?.count()?,
        },
        "baseline" => Step::Baseline {
            baseline: match fields.read("smoothness", |at| at.real())? {
                Some(smoothness) => Baseline::Asymmetric {
                    smoothness,
                    asymmetry: fields.need("asymmetry")?.real()?,
                },
                None => fields.need("baseline")?.one_of(&BASELINES)?,
            },
        },
        "savitzky-golay" => Step::SavitzkyGolay {
            window: fields.need("window")?.count()?,
            degree: fields.need("degree")?.count()?,
            derivative: read_derivative(&fields.need("derivative")?)?,
        },
        "log" => Step::Log {
            base: fields
                .read("base", |at| at.one_of(LogBase::TABLE))?
                .unwrap_or(LogBase::Natural),
            offset: fields.need("offset")?.real()?,
        },
        "inverse-hyperbolic-sine" => Step::InverseHyperbolicSine {
            scale: fields.need("scale")?.real()?,
        },
        "power" => Step::Power {
            exponent: fields.need("exponent")?.real()?,
        },
        "power-transform" => Step::PowerTransform {
            family: fields.need("family")?.one_of(PowerFamily::TABLE)?,
            power: fields.read("power", |at| at.real())?,
        },
        "centered-log-ratio" => Step::CenteredLogRatio {
            pseudo_count: fields.need("pseudo-count")?.real()?,
        },
        "quality-control-drift" => Step::QualityControlDrift {
            trend: fields
                .read("span", |at| at.real())?
                .map_or(Trend::Line, |span| Trend::Smooth { span }),
            removal: fields.need("removal")?.one_of(DriftRemoval::TABLE)?,
        },
        "scatter-correction" => Step::ScatterCorrection {
            reference: reference(fields)?,
        },
        "extended-scatter-correction" => Step::ExtendedScatterCorrection {
            reference: reference(fields)?,
            degree: fields.need("degree")?.count()?,
            interferent: series(fields, "interferent")?.unwrap_or_default(),
        },
        "probabilistic-quotient" => Step::ProbabilisticQuotient {
            reference: reference(fields)?,
        },
        "quantile-normalisation" => Step::QuantileNormalisation {
            reference: reference(fields)?,
        },
        "missing-share-filter" => Step::MissingShareFilter {
            most: fields.need("most")?.real()?,
        },
        "call-rate-filter" => Step::CallRateFilter {
            least: fields.need("least")?.real()?,
        },
        "minor-allele-filter" => Step::MinorAlleleFilter {
            least: fields.need("least")?.real()?,
        },
        "near-constant-filter" => Step::NearConstantFilter {
            least: fields.need("least")?.real()?,
        },
        "quality-control-spread" => Step::QualityControlSpread {
            most: fields.need("most")?.real()?,
        },
        "outcome-filter" => Step::OutcomeFilter {
            keep: fields.need("keep")?.count()?,
        },
        "nearest-imputation" => Step::NearestImputation {
            neighbors: fields.need("neighbors")?.count()?,
            weights: fields.need("weights")?.one_of(NeighborWeights::TABLE)?,
        },
        "low-rank-imputation" => Step::LowRankImputation {
            rank: fields.need("rank")?.count()?,
        },
        "principal-scores" => Step::PrincipalScores {
            components: fields.need("components")?.count()?,
        },
        "scale" => Step::Scale {
            rule: fields.need("rule")?.one_of(ScaleRule::TABLE)?,
        },
        name => match bare(name) {
            Some(step) => step,
            None => return Err(at.not_among(&NAMES)),
        },
    })
}

const LIMIT_VALUES: [(&str, LimitValue); 2] = [
    ("over-root-two", LimitValue::OverRootTwo),
    ("whole", LimitValue::Whole),
];

const BASELINES: [(&str, Baseline); 2] = [("offset", Baseline::Offset), ("line", Baseline::Line)];

/// The divisors that need no name.
#[derive(Clone, Copy)]
enum Plain {
    Sum,
    Area,
    Peak,
    Length,
    Unnamed,
}

impl Plain {
    fn divisor(self) -> Divisor {
        match self {
            Self::Sum => Divisor::Sum,
            Self::Area => Divisor::Area,
            Self::Peak => Divisor::Peak,
            Self::Length => Divisor::Length,
            Self::Unnamed => Divisor::Standard(None),
        }
    }
}

const DIVISORS: [(&str, Plain); 5] = [
    ("sum", Plain::Sum),
    ("area", Plain::Area),
    ("peak", Plain::Peak),
    ("length", Plain::Length),
    ("standard", Plain::Unnamed),
];

fn series(fields: &mut Fields<'_>, name: &'static str) -> Result<Option<Arc<Vec<Real>>>, Fault> {
    let numbers = fields.read(name, |at| at.each(|number| number.real()))?;
    Ok(numbers.map(Arc::new))
}

/// Without a field the reference is learnt in the training part.
fn reference(fields: &mut Fields<'_>) -> Result<Reference, Fault> {
    let given = series(fields, "reference")?;
    Ok(given.map_or(Reference::Training, Reference::Given))
}

fn read_derivative(at: &At<'_>) -> Result<u32, Fault> {
    match at.count()? {
        order @ 0..=2 => Ok(order),
        order => Err(at.fault(
            &format!("A derivative of order {order} cannot be taken."),
            "Write 0 to smooth, or 1 or 2.",
        )),
    }
}

fn read_region(at: &At<'_>) -> Result<Region, Fault> {
    let ends = at.each(|end| end.real())?;
    match ends[..] {
        [from, to] => Ok(Region { from, to }),
        _ => Err(at.fault(
            "A region has two ends.",
            "Write it as two numbers, such as [900, 950].",
        )),
    }
}

/// Writes a step.
pub fn write(step: &Step) -> Value {
    let name = name(step);
    // A step without numbers is written as its name alone.
    if bare(name).as_ref() == Some(step) {
        return name.into();
    }
    let mut group = Group::default();
    group.put("step", name);
    put(step, &mut group);
    group.value()
}

const fn name(step: &Step) -> &'static str {
    match step {
        Step::AverageUnits => "average-units",
        Step::UnitConversion { .. } => "unit-conversion",
        Step::Absorbance { .. } => "absorbance",
        Step::CommonAxis { .. } => "common-axis",
        Step::CutRegions { .. } => "cut-regions",
        Step::SpikeRemoval { .. } => "spike-removal",
        Step::BelowLimit { .. } => "below-limit",
        Step::Normalisation { .. } => "normalisation",
        Step::StandardNormalVariate => "standard-normal-variate",
        Step::Detrend { .. } => "detrend",
        Step::Baseline { .. } => "baseline",
        Step::SavitzkyGolay { .. } => "savitzky-golay",
        Step::Log { .. } => "log",
        Step::InverseHyperbolicSine { .. } => "inverse-hyperbolic-sine",
        Step::Power { .. } => "power",
        Step::PowerTransform { .. } => "power-transform",
        Step::CenteredLogRatio { .. } => "centered-log-ratio",
        Step::QualityControlDrift { .. } => "quality-control-drift",
        Step::ScatterCorrection { .. } => "scatter-correction",
        Step::ExtendedScatterCorrection { .. } => "extended-scatter-correction",
        Step::ProbabilisticQuotient { .. } => "probabilistic-quotient",
        Step::QuantileNormalisation { .. } => "quantile-normalisation",
        Step::MissingShareFilter { .. } => "missing-share-filter",
        Step::CallRateFilter { .. } => "call-rate-filter",
        Step::MinorAlleleFilter { .. } => "minor-allele-filter",
        Step::NearConstantFilter { .. } => "near-constant-filter",
        Step::QualityControlSpread { .. } => "quality-control-spread",
        Step::OutcomeFilter { .. } => "outcome-filter",
        Step::ColumnImputation {
            statistic: Statistic::Median,
        } => "median-imputation",
        Step::ColumnImputation {
            statistic: Statistic::Mean,
        } => "mean-imputation",
        Step::NearestImputation { .. } => "nearest-imputation",
        Step::LowRankImputation { .. } => "low-rank-imputation",
        Step::BatchCentering => "batch-centering",
        Step::CovariateRemoval => "covariate-removal",
        Step::PrincipalScores { .. } => "principal-scores",
        Step::Center => "center",
        Step::Scale {
            rule: ScaleRule::UnitVariance,
        } => "unit-variance",
        Step::Scale {
            rule: ScaleRule::Pareto | ScaleRule::Range | ScaleRule::Level | ScaleRule::Robust,
        } => "scale",
    }
}

fn numbers(values: &[Real]) -> Vec<f64> {
    values.iter().map(|value| value.get()).collect()
}

fn put_reference(reference: &Reference, group: &mut Group) {
    match reference {
        Reference::Training => {}
        Reference::Given(values) => group.put("reference", numbers(values)),
    }
}

fn put(step: &Step, group: &mut Group) {
    match step {
        Step::UnitConversion { factor, offset } => {
            group.put("factor", factor.get());
            group.put("offset", offset.get());
        }
        Step::Absorbance { reference } => {
            if let Some(values) = reference {
                group.put("reference", numbers(values));
            }
        }
        Step::CommonAxis {
            first,
            last,
            distance,
            between,
        } => {
            group.put("first", first.get());
            group.put("last", last.get());
            group.put("distance", distance.get());
            group.put("between", between.name());
        }
        Step::CutRegions { regions, treatment } => {
            let ends = |region: &Region| Value::from(vec![region.from.get(), region.to.get()]);
            group.put("regions", Value::Array(regions.iter().map(ends).collect()));
            group.put("treatment", treatment.name());
        }
        Step::SpikeRemoval { half, threshold } => {
            group.put("half", *half);
            group.put("threshold", threshold.get());
        }
        Step::BelowLimit { value } => match value {
            LimitValue::Share(share) => group.put("share", share.get()),
            LimitValue::OverRootTwo => group.put("value", "over-root-two"),
            LimitValue::Whole => group.put("value", "whole"),
        },
        Step::Normalisation { divisor, target } => {
            match divisor {
                Divisor::Sum => group.put("divisor", "sum"),
                Divisor::Area => group.put("divisor", "area"),
                Divisor::Peak => group.put("divisor", "peak"),
                Divisor::Length => group.put("divisor", "length"),
                Divisor::Standard(None) => group.put("divisor", "standard"),
                Divisor::Standard(Some(name)) => group.put("standard", name.clone()),
            }
            group.put("target", target.get());
        }
        Step::Detrend { degree } => group.put("degree", *degree),
        Step::Baseline { baseline } => match baseline {
            Baseline::Offset => group.put("baseline", "offset"),
            Baseline::Line => group.put("baseline", "line"),
            Baseline::Asymmetric {
                smoothness,
                asymmetry,
            } => {
                group.put("smoothness", smoothness.get());
                group.put("asymmetry", asymmetry.get());
            }
        },
        Step::SavitzkyGolay {
            window,
            degree,
            derivative,
        } => {
            group.put("window", *window);
            group.put("degree", *degree);
            group.put("derivative", *derivative);
        }
        Step::Log { base, offset } => {
            // Written only where it is not the usual one: earlier files have none.
            if *base != LogBase::Natural {
                group.put("base", base.name());
            }
            group.put("offset", offset.get());
        }
        Step::InverseHyperbolicSine { scale } => group.put("scale", scale.get()),
        Step::Power { exponent } => group.put("exponent", exponent.get()),
        Step::PowerTransform { family, power } => {
            group.put("family", family.name());
            group.put_some("power", power.map(Real::get));
        }
        Step::CenteredLogRatio { pseudo_count } => group.put("pseudo-count", pseudo_count.get()),
        Step::QualityControlDrift { trend, removal } => {
            match trend {
                Trend::Line => {}
                Trend::Smooth { span } => group.put("span", span.get()),
            }
            group.put("removal", removal.name());
        }
        Step::ScatterCorrection { reference }
        | Step::ProbabilisticQuotient { reference }
        | Step::QuantileNormalisation { reference } => put_reference(reference, group),
        Step::ExtendedScatterCorrection {
            reference,
            degree,
            interferent,
        } => {
            put_reference(reference, group);
            group.put("degree", *degree);
            if !interferent.is_empty() {
                group.put("interferent", numbers(interferent));
            }
        }
        Step::MissingShareFilter { most } | Step::QualityControlSpread { most } => {
            group.put("most", most.get());
        }
        Step::CallRateFilter { least }
        | Step::MinorAlleleFilter { least }
        | Step::NearConstantFilter { least } => group.put("least", least.get()),
        Step::OutcomeFilter { keep } => group.put("keep", *keep),
        Step::NearestImputation { neighbors, weights } => {
            group.put("neighbors", *neighbors);
            group.put("weights", weights.name());
        }
        Step::LowRankImputation { rank } => group.put("rank", *rank),
        Step::PrincipalScores { components } => group.put("components", *components),
        Step::Scale { rule } => {
            if *rule != ScaleRule::UnitVariance {
                group.put("rule", rule.name());
            }
        }
        Step::AverageUnits
        | Step::StandardNormalVariate
        | Step::ColumnImputation { .. }
        | Step::BatchCentering
        | Step::CovariateRemoval
        | Step::Center => {}
    }
}
