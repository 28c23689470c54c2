//! A preparation step that cannot be carried out, in words: why, and what would mend it.

use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::eval::kind::data::Dataset;
use crate::eval::kind::step::step_name;
use crate::numeric::step::StepError;
use crate::study::settings::prepare::Step;

/// A step that cannot be carried out, in words. `at` is its place among `steps`, from 0.
#[must_use]
pub fn step_problem(steps: &[Step], at: usize, error: &StepError, data: &Dataset) -> Problem {
    let step = &steps[at];
    let found = format!(
        "Step {} ({}) cannot be carried out: {}.",
        at + 1,
        step_name(step),
        step_error(error, &Names::of(&steps[..at], data))
    );
    let problem = Problem::new("step-impossible", found);
    mends(step, error)
        .into_iter()
        .fold(problem, |problem, mend| problem.mend(mend))
}

/// What would mend it: the role that is missing, the setting, or the place.
fn mends(step: &Step, error: &StepError) -> Vec<String> {
    let said = |texts: &[&str]| texts.iter().map(|&text| text.to_owned()).collect();
    match error {
        StepError::NoBatches => said(&[
            "In the Data cell, name the column that says in which batch a sample was measured.",
            "Or take this step off the list.",
        ]),
        StepError::NoOrder => said(&[
            "In the Data cell, name the column with the order or time of measurement.",
            "Or take this step off the list.",
        ]),
        StepError::OrderMissing { .. } => {
            said(&["Correct the order of this sample with a reason, or exclude the sample."])
        }
        StepError::TooFewQualityControls { .. } => said(&[
            "In the Data cell, say by which column and text quality-control samples are known.",
            "Or bring in more of them, or take this step off the list.",
        ]),
        StepError::NoCovariates => said(&[
            "In the Data cell, name the columns that are covariates.",
            "Or take this step off the list.",
        ]),
        StepError::NoOutcome => said(&["In the Data cell, name the outcome."]),
        StepError::NoAxis | StepError::AxisNotMonotone { .. } => said(&[
            "Give the predictors numeric names that rise or fall, such as wavelengths, or choose \
             as predictors only columns that have them.",
            "Or take this step off the list.",
        ]),
        StepError::OutsideAxis { .. } => {
            said(&["Choose positions within the axis of the predictors."])
        }
        StepError::WindowTooWide { .. } => {
            said(&["Narrow the window, lower the degree, or leave out fewer regions."])
        }
        StepError::Missing { .. } => said(&[
            "Put a step before it that fills missing values, such as median imputation.",
            "Or leave out predictors of which too much is missing.",
        ]),
        StepError::NothingKnown { .. } => said(&[
            "Put a filter on missing values before it, so that empty predictors are left out.",
        ]),
        StepError::OutOfDomain { .. } => said(&match step {
            Step::Log { .. } | Step::CenteredLogRatio { .. } => [
                "Add a larger number first, or fill values below a limit before this step.",
                "Or place it before steps that make values negative.",
            ],
            Step::MinorAlleleFilter { .. } => [
                "Allele counts lie from 0 to 2; choose as predictors only markers that do.",
                "Or take this step off the list.",
            ],
            Step::AverageUnits
            | Step::UnitConversion { .. }
            | Step::Absorbance { .. }
            | Step::CommonAxis { .. }
            | Step::CutRegions { .. }
            | Step::SpikeRemoval { .. }
            | Step::BelowLimit { .. }
            | Step::Normalisation { .. }
            | Step::StandardNormalVariate
            | Step::Detrend { .. }
            | Step::Baseline { .. }
            | Step::SavitzkyGolay { .. }
            | Step::InverseHyperbolicSine { .. }
            | Step::Power { .. }
            | Step::PowerTransform { .. }
            | Step::QualityControlDrift { .. }
            | Step::ScatterCorrection { .. }
            | Step::ExtendedScatterCorrection { .. }
            | Step::ProbabilisticQuotient { .. }
            | Step::QuantileNormalisation { .. }
            | Step::MissingShareFilter { .. }
            | Step::CallRateFilter { .. }
            | Step::NearConstantFilter { .. }
            | Step::QualityControlSpread { .. }
            | Step::OutcomeFilter { .. }
            | Step::ColumnImputation { .. }
            | Step::NearestImputation { .. }
            | Step::LowRankImputation { .. }
            | Step::BatchCentering
            | Step::CovariateRemoval
            | Step::PrincipalScores { .. }
            | Step::Center
            | Step::Scale { .. } => [
                "Correct the value with a reason, or exclude the sample.",
                "Or place the step before those that change the range of values.",
            ],
        }),
        StepError::WrongColumns { .. } => {
            said(&["Give as many numbers as there are predictors at this place in the list."])
        }
        StepError::NothingActive => said(&["Loosen the filters before this step."]),
        StepError::NoSpread { .. }
        | StepError::NoTotal { .. }
        | StepError::FlatAgainstReference { .. } => {
            said(&["Look at this sample in the Data cell; exclude it with a reason if it is bad."])
        }
        StepError::TooFewSamples { .. } | StepError::NotIndependent => {
            said(&["Ask for fewer components or terms, or bring in more samples."])
        }
        StepError::NotSettled { .. } => {
            said(&["Change the settings of the step, or take it off the list."])
        }
    }
}

/// How samples and columns are called at a place in the list.
struct Names<'a> {
    data: &'a Dataset,
    /// Whether columns still are the predictors as they arrived.
    columns: Columns,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Columns {
    Predictors,
    Scores,
    Positions,
}

impl<'a> Names<'a> {
    fn of(before: &[Step], data: &'a Dataset) -> Self {
        let made = before.iter().rev().find_map(|step| {
            if matches!(step, Step::PrincipalScores { .. }) {
                Some(Columns::Scores)
            } else if matches!(step, Step::CommonAxis { .. }) {
                Some(Columns::Positions)
            } else {
                None
            }
        });
        Self {
            data,
            columns: made.unwrap_or(Columns::Predictors),
        }
    }

    fn sample(&self, row: usize) -> String {
        format!("sample “{}”", self.data.names[row])
    }

    fn column(&self, column: usize) -> String {
        match self.columns {
            Columns::Predictors => format!("“{}”", self.data.predictor_names[column]),
            Columns::Scores => format!("score {}", column + 1),
            Columns::Positions => format!("position {} of the common axis", column + 1),
        }
    }
}

fn show(value: f64) -> String {
    number::text(value, Precision::Full)
}

/// Why, as the end of a sentence.
fn step_error(error: &StepError, names: &Names<'_>) -> String {
    let sample = |row: &usize| names.sample(*row);
    let column = |at: &usize| names.column(*at);
    match error {
        StepError::WrongColumns { expected, found } => {
            format!("it knows {expected} predictors and is given {found}")
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
        StepError::NoCovariates => "no column has the role of a covariate".to_owned(),
        StepError::NoOutcome => "it is learnt with the outcome, and there is none".to_owned(),
        StepError::NotIndependent => "its terms cannot be told apart from each other".to_owned(),
        StepError::NotSettled { passes } => {
            format!("it had not settled after {passes} passes")
        }
    }
}
