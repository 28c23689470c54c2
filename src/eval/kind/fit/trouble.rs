//! Why a procedure could not be carried out, in words.

use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::eval::kind::Ended;
use crate::eval::kind::fit::measures::Sort;
use crate::eval::kind::prepare::Prepared;
use crate::eval::outcome::{Failure, Remedy};
use crate::numeric::error::FitError;
use crate::numeric::parts::PlanError;
use crate::numeric::procedure::{ErrorMeasure, Halt, Level, ProcedureError};
use crate::numeric::response::Response;
use crate::study::settings::Settings;
use crate::study::settings::fit::{self as settings, Fit, Judge, Rule, Strength};

/// The end of a fit whose procedure was halted.
#[must_use]
pub fn halted(halt: Halt, prepared: &Prepared, settings: &Fit) -> Ended {
    let error = match halt {
        Halt::Cancelled => return Ended::Cancelled,
        Halt::Failed(error) => error,
    };
    match error {
        ProcedureError::Step { step, error } => prepared.step_problem(step, &error).into(),
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
        ProcedureError::Measure(measure) => measure_problem(measure, prepared, settings).into(),
        ProcedureError::NoPairs(_) => Problem::new(
            "no-pairs",
            "Ordering pairs needs held-out parts in which two samples can be compared, and these \
             parts hold single samples.",
        )
        .mend("Ask for fewer parts, so that each holds several samples.")
        .mend("Or choose another measure of the error.")
        .into(),
        ProcedureError::RuleForMeasured => gcv_failure(settings).into(),
        ProcedureError::Training { level, error } => {
            training_problem(level, error, prepared).into()
        }
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

/// Generalised cross-validation counts the residuals of a linear fit.
fn gcv_failure(settings: &Fit) -> Failure {
    let problem = Problem::new(
        "rule-for-measured",
        "Generalised cross-validation is defined for measured quantities only: it sets squared \
         residuals against degrees of freedom.",
    )
    .mend("Take the lowest error on held-out parts, or the extended Bayesian criterion.");
    let mut remedies = Vec::new();
    if let Strength::Chosen { range, inner, .. } = settings.strength {
        let mut changed = settings.clone();
        changed.strength = Strength::Chosen {
            rule: Rule::LowestError,
            range,
            inner,
        };
        remedies.push(Remedy {
            label: "Take the lowest error".to_owned(),
            settings: Settings::Fit(changed),
        });
    }
    Failure { problem, remedies }
}

fn measure_problem(measure: ErrorMeasure, prepared: &Prepared, settings: &Fit) -> Failure {
    let word = match measure {
        ErrorMeasure::SquaredError => "The mean squared error",
        ErrorMeasure::Deviance => "The deviance",
        ErrorMeasure::Misclassification => "The share called wrong",
        ErrorMeasure::PartialLikelihood => "The partial likelihood",
        ErrorMeasure::Concordance => "The share of pairs ordered wrongly",
    };
    let sort = Sort::of(&prepared.data.response).word();
    let problem = Problem::new(
        "measure-not-defined",
        format!("{word} is no measure of errors for this kind of outcome ({sort})."),
    )
    .mend("Choose a measure that belongs to the kind of outcome.");
    let changed = Fit {
        measure: settings::ErrorMeasure::Usual,
        ..settings.clone()
    };
    Failure {
        problem,
        remedies: vec![Remedy {
            label: "Take the usual measure".to_owned(),
            settings: Settings::Fit(changed),
        }],
    }
}

/// A training part that cannot be fitted, found before any work is done.
fn training_problem(level: Level, error: FitError, prepared: &Prepared) -> Problem {
    let word = prepared.data.unit_word();
    let part = match level {
        Level::Inner => "A training part in which strengths are compared",
        Level::Outer => "An outer training part",
    };
    let class = |at: usize| {
        let names = &prepared.data.outcome.classes;
        names
            .get(at)
            .cloned()
            .unwrap_or_else(|| "a class".to_owned())
    };
    let found = match error {
        FitError::OneClass => format!("{part} would hold a single class."),
        FitError::EmptyClass(at) => format!("{part} would hold no sample of “{}”.", class(at)),
        FitError::NoEvents => format!("{part} would hold no event."),
        FitError::NoCounts => format!("{part} would hold no count above 0."),
        other => return fit_problem(other),
    };
    Problem::new("plan-not-feasible", found)
        .mend("Ask for parts in which classes or events are spread evenly, or for fewer parts.")
        .mend(format!(
            "Or leave out a class that too few independent samples ({word}) are of."
        ))
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
    let is_time = matches!(prepared.data.response, Response::Time { .. });
    let occurs = |stratum: usize| match prepared.data.outcome.classes.get(stratum) {
        Some(class) => format!("“{class}” occurs"),
        None => "the event occurs".to_owned(),
    };
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
        PlanError::OneStratum { .. } if is_time => "no sample has the event".to_owned(),
        PlanError::OneStratum { .. } => "all samples are of one class".to_owned(),
        PlanError::RareStratum {
            stratum,
            units,
            parts,
        } => format!(
            "{} in only {} independent {} ({word}) for {parts} parts",
            occurs(*stratum),
            units,
            if *units == 1 { "sample" } else { "samples" }
        ),
        PlanError::TrainingLacksStratum { stratum, units, .. } => format!(
            "{} in only {} independent {} ({word}), and one held-out part would hold all of it",
            occurs(*stratum),
            units,
            if *units == 1 { "sample" } else { "samples" }
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
