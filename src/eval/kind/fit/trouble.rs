//! Why a procedure could not be carried out, in words.

use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::eval::kind::Ended;
use crate::eval::kind::prepare::Prepared;
use crate::eval::kind::step::step_problem;
use crate::eval::outcome::{Failure, Remedy};
use crate::numeric::error::FitError;
use crate::numeric::parts::PlanError;
use crate::numeric::procedure::{Halt, Level, ProcedureError};
use crate::study::settings::Settings;
use crate::study::settings::fit::{Fit, Judge, Strength};

/// The end of a fit whose procedure was halted.
#[must_use]
pub fn halted(halt: Halt, prepared: &Prepared, settings: &Fit) -> Ended {
    let error = match halt {
        Halt::Cancelled => return Ended::Cancelled,
        Halt::Failed(error) => error,
    };
    match error {
        ProcedureError::Step { step, error } => {
            step_problem(&prepared.steps[step], step, &error, &prepared.data).into()
        }
        ProcedureError::Plan { level, error } => {
            plan_failure(level, &error, prepared, settings).into()
        }
        ProcedureError::Missing { row, column, count } => Problem::new(
            "values-missing",
            format!(
                "{} values are missing or lie beyond a limit after preparation; the first is \
                 “{}” of “{}”.",
                count_of(count),
                prepared.column_name(&prepared.samples, column),
                prepared.data.names[row]
            ),
        )
        .mend("Add a step that puts a value in their place, such as median imputation.")
        .mend("Or leave out predictors of which too much is missing.")
        .into(),
        ProcedureError::NoPredictors => Problem::new(
            "no-predictors-left",
            "The preparation leaves out every predictor in at least one training part.",
        )
        .mend("Loosen the filters among the preparation steps.")
        .into(),
        ProcedureError::NoError => Problem::new(
            "no-error",
            "No penalty strength has an error that is a number.",
        )
        .mend("Look for predictors of enormous size, or scale them to unit variance.")
        .into(),
        ProcedureError::Leak => Problem::new(
            "leak",
            "A preparation step was learnt from a held-out sample, so no result is given out. \
             This is a fault of the program, not of your data.",
        )
        .mend("Send the study to the makers.")
        .into(),
        ProcedureError::Fit(error) => fit_problem(error).into(),
    }
}

fn count_of(count: usize) -> String {
    number::text(count as f64, Precision::Whole)
}

fn fit_problem(error: FitError) -> Problem {
    let found = match error {
        FitError::NoRows => "No sample with a weight above 0 is left to learn from.".to_owned(),
        FitError::OneClass => {
            "A training part holds a single class, so nothing can be told apart.".to_owned()
        }
        FitError::EmptyClass(_) => "A training part lacks one of the classes.".to_owned(),
        FitError::NoEvents => "A training part holds no event.".to_owned(),
        FitError::NoCounts => "All counts of a training part are 0.".to_owned(),
        FitError::Strength(strength) => format!(
            "The penalty strength must be 0 or more; “{}” was given.",
            number::text(strength, Precision::Full)
        ),
        FitError::Share(share) => format!(
            "The lasso share must be from 0 to 1; “{}” was given.",
            number::text(share, Precision::Full)
        ),
        FitError::Unbounded { strength } => format!(
            "At the penalty strength {} the coefficients grow without limit.",
            number::text(strength, Precision::Significant(3))
        ),
        FitError::Number { .. } => {
            "A number among the prepared predictors, covariates or weights is not finite, or is \
             negative where it must not be."
                .to_owned()
        }
        FitError::Shape { .. }
        | FitError::Rows { .. }
        | FitError::Factorisation
        | FitError::Unsupported(_) => "The fit could not be made.".to_owned(),
    };
    Problem::new("fit-impossible", found)
        .mend("Change the penalty, the preparation, or the samples.")
        .details(format!("{error:?}"))
}

fn plan_failure(level: Level, error: &PlanError, prepared: &Prepared, settings: &Fit) -> Failure {
    let word = prepared.data.unit_word();
    let what = match level {
        Level::Inner => "The parts that choose the strength cannot be drawn",
        Level::Outer => "The outer parts cannot be drawn",
    };
    let why = match error {
        PlanError::TooFewParts { parts, .. } => {
            format!("{parts} parts are asked for, and at least 2 are needed")
        }
        PlanError::NoRepeats => "0 repeats are asked for, and at least 1 is needed".to_owned(),
        PlanError::TooFewUnits { units: 1, parts } => format!(
            "{parts} parts are asked for, but there is only a single independent sample ({word})"
        ),
        PlanError::TooFewUnits { units, parts } => format!(
            "{parts} parts are asked for, but there are only {units} independent samples ({word})"
        ),
        PlanError::NoBatches => "no column has the role of a batch".to_owned(),
        PlanError::NoStrata => "the outcome has no classes or events to balance".to_owned(),
        PlanError::NoOrder => "no column has the role of an order".to_owned(),
        PlanError::OrderMissing { row } => {
            format!("the order of “{}” is missing", prepared.data.names[*row])
        }
        PlanError::TooFewBatches { batches, parts } => {
            format!("{parts} parts are asked for, but only {batches} batches can be told apart")
        }
        PlanError::OneStratum { .. } => "all samples are of one class".to_owned(),
        PlanError::RareStratum { units, parts, .. } => {
            format!("a class has only {units} independent samples for {parts} parts")
        }
        PlanError::TrainingLacksStratum { units, .. } => format!(
            "a training part would lack a class that occurs in only {units} independent samples"
        ),
        PlanError::UnitDivided { unit } => {
            format!(
                "“{}” would lie on both sides",
                prepared.data.unit_names[*unit]
            )
        }
    };
    let mut problem = Problem::new("plan-not-feasible", format!("{what}: {why}."));
    let mut remedies = Vec::new();
    match error.feasible_parts() {
        Some(parts) => {
            let most = *parts.end();
            problem = problem.mend(format!("Ask for 2 to {most} parts."));
            if let Some(changed) = with_parts(settings, level, most) {
                remedies.push(Remedy {
                    label: format!("Take {most} parts"),
                    settings: Settings::Fit(changed),
                });
            }
        }
        None => problem = problem.mend("Choose another plan of parts, or bring in more samples."),
    }
    Failure { problem, remedies }
}

fn with_parts(settings: &Fit, level: Level, parts: usize) -> Option<Fit> {
    let parts = u32::try_from(parts).ok()?;
    let mut changed = settings.clone();
    match level {
        Level::Inner => match &mut changed.strength {
            Strength::Chosen { inner, .. } => inner.parts = parts,
            Strength::ByHand(_) => return None,
        },
        Level::Outer => match &mut changed.judge {
            Judge::Nested(plan) => plan.parts = parts,
            Judge::Declined => return None,
        },
    }
    Some(changed)
}
