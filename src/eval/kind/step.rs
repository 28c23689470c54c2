//! Preparation steps: from settings to what is computed, and into words.

use crate::base::number::Precision;
use crate::base::problem::Problem;
use crate::eval::kind::data::Dataset;
use crate::numeric::step::{
    Centering, Class, ColumnImputation, ColumnStatistic, Detrend, LimitFill, LimitRule, Logarithm,
    LogarithmBase, MissingShare, NearConstant, ParameterError, Reference, SavitzkyGolay, Scaling,
    ScalingRule, ScatterCorrection, StandardNormalVariate, Step as NumericStep, StepError,
};
use crate::study::settings::prepare::Step;

/// The step's name in running text.
#[must_use]
pub const fn step_name(step: &Step) -> &'static str {
    match step {
        Step::Log { .. } => "logarithm",
        Step::StandardNormalVariate => "standard normal variate",
        Step::SavitzkyGolay { derivative: 0, .. } => "Savitzky–Golay smoothing",
        Step::SavitzkyGolay { .. } => "Savitzky–Golay derivative",
        Step::Detrend { .. } => "detrending",
        Step::ScatterCorrection => "mean-reference scatter correction",
        Step::MissingShareFilter { .. } => "missing-share filter",
        Step::NearConstantFilter { .. } => "near-constant filter",
        Step::MedianImputation => "median imputation",
        Step::BelowLimit { .. } => "share of the limit for values below a limit",
        Step::Center => "centring",
        Step::UnitVariance => "unit-variance scaling",
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

/// The step's settings in words.
#[must_use]
pub fn parameters(step: &Step) -> String {
    match step {
        Step::Log { offset } => format!("plus {}", show(offset.get())),
        Step::SavitzkyGolay {
            window,
            degree,
            derivative,
        } => {
            format!("window {window}, degree {degree}, derivative {derivative}")
        }
        Step::Detrend { degree } => format!("degree {degree}"),
        Step::MissingShareFilter { most } => {
            format!("at most {} missing", percent(most.get()))
        }
        Step::NearConstantFilter { least } => {
            format!("at least {} of samples differ", percent(least.get()))
        }
        Step::BelowLimit { share } => format!("{} of the limit", show(share.get())),
        Step::UnitVariance => "divisor n".to_owned(),
        Step::StandardNormalVariate
        | Step::ScatterCorrection
        | Step::MedianImputation
        | Step::Center => String::new(),
    }
}

fn show(value: f64) -> String {
    crate::base::number::text(value, Precision::Full)
}

fn percent(share: f64) -> String {
    crate::base::number::text(share, Precision::Percent(0))
}

/// The step as it is computed.
///
/// # Errors
/// When a parameter is out of its range.
pub fn numeric_step(step: &Step) -> Result<NumericStep, Problem> {
    let checked: Result<NumericStep, ParameterError> = match step {
        Step::Log { offset } => {
            Logarithm::new(LogarithmBase::Natural, offset.get()).map(NumericStep::from)
        }
        Step::StandardNormalVariate => Ok(StandardNormalVariate.into()),
        Step::SavitzkyGolay {
            window,
            degree,
            derivative,
        } => SavitzkyGolay::new(*window as usize, *degree as usize, *derivative as usize)
            .map(NumericStep::from),
        Step::Detrend { degree } => Detrend::new(*degree as usize).map(NumericStep::from),
        Step::ScatterCorrection => Ok(ScatterCorrection::new(Reference::TrainingMean).into()),
        Step::MissingShareFilter { most } => MissingShare::new(most.get()).map(NumericStep::from),
        Step::NearConstantFilter { least } => {
            NearConstant::new(1.0 - least.get()).map(NumericStep::from)
        }
        Step::MedianImputation => Ok(ColumnImputation::new(ColumnStatistic::Median).into()),
        Step::BelowLimit { share } => Ok(LimitFill::new(LimitRule::Share(*share)).into()),
        Step::Center => Ok(Centering.into()),
        Step::UnitVariance => Ok(Scaling::new(ScalingRule::UnitVariance).into()),
    };
    checked.map_err(|error| {
        Problem::new(
            "step-parameter",
            format!(
                "In the step “{}” the {} must be from {} to {}; it is {}.",
                step_name(step),
                error.parameter,
                show(error.least),
                show(error.most),
                show(error.value)
            ),
        )
        .mend("Change it in the list of steps.")
    })
}

/// A step that cannot be carried out, in words.
#[must_use]
pub fn step_problem(step: &Step, at: usize, error: &StepError, data: &Dataset) -> Problem {
    let found = format!(
        "Step {} ({}) cannot be carried out: {}.",
        at + 1,
        step_name(step),
        step_error(error, data)
    );
    Problem::new("step-impossible", found)
        .mend("Change the step, its place in the list, or the samples.")
}

/// Why, as the end of a sentence. Columns are named as they arrived where they still can be.
fn step_error(error: &StepError, data: &Dataset) -> String {
    let sample = |row: &usize| format!("sample “{}”", data.names[*row]);
    let column = |column: &usize| {
        data.predictor_names.get(*column).map_or_else(
            || format!("column {}", column + 1),
            |name| format!("“{name}”"),
        )
    };
    match error {
        StepError::WrongColumns { expected, found } => {
            format!("it was learnt from {expected} predictors and is given {found}")
        }
        StepError::NothingActive => "no predictor is left".to_owned(),
        StepError::OutOfDomain {
            row,
            column: at,
            value,
        } => format!(
            "the value {} of {} in {} is outside the range for which it is defined",
            show(*value),
            column(at),
            sample(row)
        ),
        StepError::NoSpread { row } => {
            format!(
                "all values of {} are the same, so that it has no scale",
                sample(row)
            )
        }
        StepError::NoTotal { row, total } => format!(
            "{} would be divided by {}, which is not positive",
            sample(row),
            show(*total)
        ),
        StepError::FlatAgainstReference { row, slope } => format!(
            "{} does not rise with the reference (slope {})",
            sample(row),
            show(*slope)
        ),
        StepError::WindowTooWide { window, run } => {
            format!("the window of {window} is wider than the {run} neighbouring predictors")
        }
        StepError::NoAxis => "the predictors have no numeric axis".to_owned(),
        StepError::AxisNotMonotone { column: at } => {
            format!(
                "the axis does not rise or fall throughout; it turns at {}",
                column(at)
            )
        }
        StepError::OutsideAxis {
            position,
            least,
            most,
        } => format!(
            "the position {} lies outside the axis, which runs from {} to {}",
            show(*position),
            show(*least),
            show(*most)
        ),
        StepError::Missing { row, column: at } => {
            format!("the value of {} in {} is missing", column(at), sample(row))
        }
        StepError::NothingKnown { column: at } => {
            format!(
                "{} has no known value among the training samples",
                column(at)
            )
        }
        StepError::TooFewSamples { needed, found } => {
            format!("it needs {needed} samples and has {found}")
        }
        StepError::NoBatches => "no column has the role of a batch".to_owned(),
        StepError::NoOrder => "no column has the role of an order".to_owned(),
        StepError::OrderMissing { row } => format!("the order of {} is missing", sample(row)),
        StepError::TooFewQualityControls { needed, found } => {
            format!("it needs {needed} quality-control samples and has {found}")
        }
        StepError::NoCovariates => "there are no covariates, or a sample lacks one".to_owned(),
        StepError::NoOutcome => "it is learnt with the outcome, and there is none".to_owned(),
        StepError::NotIndependent => "its terms cannot be told apart from each other".to_owned(),
        StepError::NotSettled { passes } => {
            format!("it had not settled after {passes} passes")
        }
    }
}
