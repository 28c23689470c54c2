//! Preparation steps from settings to what is computed.

use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::eval::kind::step::step_name;
use crate::numeric::step as numeric;
use crate::numeric::step::{ParameterError, Step as NumericStep};
use crate::study::settings::prepare::choice::{
    DriftRemoval, Interpolation, LogBase, NeighborWeights, PowerFamily, ScaleRule, Statistic,
    Treatment,
};
use crate::study::settings::prepare::{Baseline, Divisor, LimitValue, Reference, Step, Trend};

/// The step as it is computed; `None` for averaging, which changes the samples and not their
/// values. `predictors` are the names of the columns that the step is given.
///
/// # Errors
/// When a setting is out of its range, or an internal standard is no predictor.
pub fn numeric_step(step: &Step, predictors: &[String]) -> Result<Option<NumericStep>, Problem> {
    if let Step::Normalisation {
        divisor: Divisor::Standard(name),
        ..
    } = step
    {
        // Found here, so that what follows needs no names.
        let _ = standard(name.as_deref(), predictors)?;
    }
    made(step, predictors)
        .map_err(|error| refused(step, &error))
        .map(|made| made.filter(|_| *step != Step::AverageUnits))
}

fn made(step: &Step, predictors: &[String]) -> Result<Option<NumericStep>, ParameterError> {
    let size = |count: u32| count as usize;
    Ok(Some(match step {
        Step::AverageUnits => return Ok(None),
        Step::UnitConversion { factor, offset } => {
            numeric::UnitConversion::new(factor.get(), offset.get())?.into()
        }
        Step::Absorbance { reference } => match reference {
            None => numeric::Absorbance::of_shares().into(),
            Some(values) => numeric::Absorbance::against(numbers(values))?.into(),
        },
        Step::CommonAxis {
            first,
            last,
            distance,
            between,
        } => numeric::CommonAxis::new(
            positions(first.get(), last.get(), distance.get()),
            match between {
                Interpolation::Linear => numeric::Interpolation::Linear,
                Interpolation::CubicSpline => numeric::Interpolation::CubicSpline,
            },
        )?
        .into(),
        Step::CutRegions { regions, treatment } => numeric::CutRegions::new(
            regions
                .iter()
                .map(|region| (region.from.get(), region.to.get()))
                .collect(),
            match treatment {
                Treatment::Cut => numeric::Regions::Cut,
                Treatment::Keep => numeric::Regions::Keep,
            },
        )?
        .into(),
        Step::SpikeRemoval { half, threshold } => {
            numeric::SpikeRemoval::new(size(*half), threshold.get())?.into()
        }
        Step::BelowLimit { value } => numeric::LimitFill::new(match value {
            LimitValue::Share(share) => numeric::LimitRule::Share(*share),
            LimitValue::OverRootTwo => numeric::LimitRule::OverRootTwo,
            LimitValue::Whole => numeric::LimitRule::Whole,
        })
        .into(),
        Step::Normalisation { divisor, target } => {
            numeric::Normalisation::new(by(divisor, predictors), target.get())?.into()
        }
        Step::StandardNormalVariate => numeric::StandardNormalVariate.into(),
        Step::Detrend { degree } => numeric::Detrend::new(size(*degree))?.into(),
        Step::Baseline { baseline } => numeric::Baseline::new(match baseline {
            Baseline::Offset => numeric::BaselineRule::Offset,
            Baseline::Line => numeric::BaselineRule::Line,
            Baseline::Asymmetric {
                smoothness,
                asymmetry,
            } => numeric::BaselineRule::Asymmetric {
                smoothness: smoothness.get(),
                asymmetry: asymmetry.get(),
            },
        })?
        .into(),
        Step::SavitzkyGolay {
            window,
            degree,
            derivative,
        } => numeric::SavitzkyGolay::new(size(*window), size(*degree), size(*derivative))?.into(),
        Step::Log { base, offset } => numeric::Logarithm::new(
            match base {
                LogBase::Natural => numeric::LogarithmBase::Natural,
                LogBase::Two => numeric::LogarithmBase::Two,
                LogBase::Ten => numeric::LogarithmBase::Ten,
            },
            offset.get(),
        )?
        .into(),
        Step::InverseHyperbolicSine { scale } => {
            numeric::InverseHyperbolicSine::new(scale.get())?.into()
        }
        Step::Power { exponent } => numeric::Power::new(exponent.get())?.into(),
        Step::PowerTransform { family, power } => numeric::PowerTransform::new(
            match family {
                PowerFamily::BoxCox => numeric::PowerFamily::BoxCox,
                PowerFamily::YeoJohnson => numeric::PowerFamily::YeoJohnson,
            },
            power.map_or(numeric::PowerChoice::Fitted, |power| {
                numeric::PowerChoice::Given(power.get())
            }),
        )?
        .into(),
        Step::CenteredLogRatio { pseudo_count } => {
            numeric::CenteredLogRatio::new(pseudo_count.get())?.into()
        }
        Step::QualityControlDrift { trend, removal } => numeric::QualityControlDrift::new(
            match trend {
                Trend::Line => numeric::DriftTrend::Line,
                Trend::Smooth { span } => numeric::DriftTrend::Smooth { span: span.get() },
            },
            match removal {
                DriftRemoval::Ratio => numeric::DriftRemoval::Ratio,
                DriftRemoval::Difference => numeric::DriftRemoval::Difference,
            },
        )?
        .into(),
        Step::ScatterCorrection { reference } => {
            numeric::ScatterCorrection::new(mean_or(reference)).into()
        }
        Step::ExtendedScatterCorrection {
            reference,
            degree,
            interferent,
        } => {
            let interferents = if interferent.is_empty() {
                Vec::new()
            } else {
                vec![numbers(interferent)]
            };
            numeric::ExtendedScatterCorrection::new(
                mean_or(reference),
                size(*degree),
                interferents,
            )?
            .into()
        }
        Step::ProbabilisticQuotient { reference } => {
            numeric::ProbabilisticQuotient::new(match reference {
                Reference::Training => numeric::QuotientReference::TrainingMedian,
                Reference::Given(values) => numeric::QuotientReference::Fixed(numbers(values)),
            })
            .into()
        }
        Step::QuantileNormalisation { reference } => match reference {
            Reference::Training => numeric::QuantileNormalisation::learned().into(),
            Reference::Given(values) => {
                numeric::QuantileNormalisation::fixed(numbers(values))?.into()
            }
        },
        Step::MissingShareFilter { most } => numeric::MissingShare::new(most.get())?.into(),
        Step::CallRateFilter { least } => {
            numeric::MissingShare::with_call_rate(least.get())?.into()
        }
        Step::MinorAlleleFilter { least } => numeric::MinorAllele::new(least.get())?.into(),
        Step::NearConstantFilter { least } => numeric::NearConstant::new(1.0 - least.get())?.into(),
        Step::QualityControlSpread { most } => {
            numeric::QualityControlSpread::new(most.get())?.into()
        }
        Step::OutcomeFilter { keep } => numeric::OutcomeFilter::new(size(*keep))?.into(),
        Step::ColumnImputation { statistic } => numeric::ColumnImputation::new(match statistic {
            Statistic::Median => numeric::ColumnStatistic::Median,
            Statistic::Mean => numeric::ColumnStatistic::Mean,
        })
        .into(),
        Step::NearestImputation { neighbors, weights } => numeric::NearestImputation::new(
            size(*neighbors),
            match weights {
                NeighborWeights::Equal => numeric::NeighborWeights::Equal,
                NeighborWeights::InverseDistance => numeric::NeighborWeights::InverseDistance,
            },
        )?
        .into(),
        Step::LowRankImputation { rank } => numeric::LowRankImputation::new(size(*rank))?.into(),
        Step::BatchCentering => numeric::BatchCentering.into(),
        Step::CovariateRemoval => numeric::CovariateRemoval.into(),
        Step::PrincipalScores { components } => {
            numeric::PrincipalScores::new(size(*components))?.into()
        }
        Step::Center => numeric::Centering.into(),
        Step::Scale { rule } => numeric::Scaling::new(match rule {
            ScaleRule::UnitVariance => numeric::ScalingRule::UnitVariance,
            ScaleRule::Pareto => numeric::ScalingRule::Pareto,
            ScaleRule::Range => numeric::ScalingRule::Range,
            ScaleRule::Level => numeric::ScalingRule::Level,
            ScaleRule::Robust => numeric::ScalingRule::Robust,
        })
        .into(),
    }))
}

fn numbers(values: &[Real]) -> Vec<f64> {
    values.iter().map(|value| value.get()).collect()
}

fn mean_or(reference: &Reference) -> numeric::Reference {
    match reference {
        Reference::Training => numeric::Reference::TrainingMean,
        Reference::Given(values) => numeric::Reference::Fixed(numbers(values)),
    }
}

/// Evenly spaced positions from the first, up or down, as far as the last.
fn positions(first: f64, last: f64, distance: f64) -> Vec<f64> {
    let span = last - first;
    // Rounding must not lose a last position that the distance reaches.
    let count = (span.abs() / distance + 1e-9).floor() as usize;
    let step = distance.copysign(span);
    (0..=count).map(|at| first + step * at as f64).collect()
}

fn by(divisor: &Divisor, predictors: &[String]) -> numeric::Divisor {
    match divisor {
        Divisor::Sum => numeric::Divisor::Sum,
        Divisor::Area => numeric::Divisor::Area,
        Divisor::Peak => numeric::Divisor::Peak,
        Divisor::Length => numeric::Divisor::Length,
        Divisor::Standard(name) => numeric::Divisor::Standard(
            standard(name.as_deref(), predictors)
                .expect("the standard was found before the step was made"),
        ),
    }
}

fn standard(name: Option<&str>, predictors: &[String]) -> Result<usize, Problem> {
    let Some(name) = name else {
        return Err(Problem::new(
            "no-internal-standard",
            "It has not been said which predictor is the internal standard.",
        )
        .mend("Choose a predictor in the sentence of this step."));
    };
    predictors
        .iter()
        .position(|known| known == name)
        .ok_or_else(|| {
            Problem::new(
                "no-internal-standard",
                format!("The internal standard “{name}” is not among the predictors."),
            )
            .mend("Choose another predictor, or let the Data cell take this column as one.")
            .mend("Or place the step before those that make new predictors.")
        })
}

fn refused(step: &Step, error: &ParameterError) -> Problem {
    let show = |value: f64| number::text(value, Precision::Full);
    Problem::new(
        "step-parameter",
        format!(
            "In the step “{}” the {} must be from {} to {}; it is {}.",
            step_name(step),
            error.parameter.replace('_', " "),
            show(error.least),
            show(error.most),
            show(error.value)
        ),
    )
    .mend("Change it in the list of steps.")
}
