//! Whether a procedure can be carried out on a plan at all, before any work is done.

use crate::numeric::choose::Rule;
use crate::numeric::error::FitError;
use crate::numeric::parts::{Assignment, Split, assign};
use crate::numeric::procedure::{
    ErrorMeasure, Level, Material, Procedure, ProcedureError, StrengthRule,
};
use crate::numeric::response::Response;

/// Draws every inner plan that carrying the procedure out on all of `rows` and on the outer
/// training parts of `outer` will need, and looks at every training part: nothing is fitted.
///
/// `purposes` are those of the final fit and of the outer fits.
///
/// # Errors
/// The first thing that cannot be done.
pub fn check_plans(
    material: &Material<'_>,
    procedure: &Procedure<'_>,
    rows: &[usize],
    outer: Option<&Assignment>,
    purposes: (&str, &str),
) -> Result<(), ProcedureError> {
    if let StrengthRule::Chosen { rule, .. } = &procedure.strength {
        check_rule(material.response, *rule, procedure.measure)?;
    }
    check_training(material.response, rows, Level::Inner)?;
    check_inner(material, procedure, rows, purposes.0)?;
    let Some(outer) = outer else {
        return Ok(());
    };
    for repeat in 0..outer.n_repeats() {
        for (part, split) in outer.splits(repeat).iter().enumerate() {
            check_training(material.response, split.training(), Level::Outer)?;
            let purpose = format!("{} {repeat} {part}", purposes.1);
            check_inner(material, procedure, split.training(), &purpose)?;
        }
    }
    Ok(())
}

fn check_rule(
    response: &Response,
    rule: Rule,
    measure: ErrorMeasure,
) -> Result<(), ProcedureError> {
    match rule {
        Rule::GeneralisedCrossValidation if !matches!(response, Response::Measured(_)) => {
            Err(ProcedureError::RuleForMeasured)
        }
        Rule::LowestError | Rule::OneStandardError | Rule::Given { .. }
            if !measure.applies_to(response) =>
        {
            Err(ProcedureError::Measure(measure))
        }
        Rule::LowestError
        | Rule::OneStandardError
        | Rule::GeneralisedCrossValidation
        | Rule::ExtendedBic { .. }
        | Rule::Given { .. } => Ok(()),
    }
}

fn check_inner(
    material: &Material<'_>,
    procedure: &Procedure<'_>,
    rows: &[usize],
    purpose: &str,
) -> Result<(), ProcedureError> {
    let StrengthRule::Chosen { rule, inner, .. } = &procedure.strength else {
        return Ok(());
    };
    if !rule.needs_parts() {
        return Ok(());
    }
    let level = Level::Inner;
    let plan = assign(
        inner,
        rows,
        &material.structure,
        &format!("inner {purpose}"),
    )
    .map_err(|error| ProcedureError::Plan { level, error })?;
    for repeat in 0..plan.n_repeats() {
        let splits = plan.splits(repeat);
        for split in &splits {
            check_training(material.response, split.training(), level)?;
        }
        let compares = |split: &Split| has_pairs(material.response, split.held_out());
        if procedure.measure.needs_pairs() && !splits.iter().any(compares) {
            return Err(ProcedureError::NoPairs(level));
        }
    }
    Ok(())
}

/// That some rows hold what the outcome needs to be fitted.
fn check_training(response: &Response, rows: &[usize], level: Level) -> Result<(), ProcedureError> {
    let failed = |error| Err(ProcedureError::Training { level, error });
    match response {
        Response::Measured(_) => Ok(()),
        Response::YesNo(yes) => {
            if rows.iter().all(|&row| yes[row]) || rows.iter().all(|&row| !yes[row]) {
                failed(FitError::OneClass)
            } else {
                Ok(())
            }
        }
        Response::Classes { class, n_classes } => {
            match (0..*n_classes).find(|k| rows.iter().all(|&row| class[row] != *k)) {
                Some(k) => failed(FitError::EmptyClass(k)),
                None => Ok(()),
            }
        }
        Response::Count { count, .. } => {
            if rows.iter().all(|&row| count[row] == 0.0) {
                failed(FitError::NoCounts)
            } else {
                Ok(())
            }
        }
        Response::Time { event, .. } => {
            if rows.iter().all(|&row| !event[row]) {
                failed(FitError::NoEvents)
            } else {
                Ok(())
            }
        }
    }
}

/// Whether some rows hold two samples whose order is known.
fn has_pairs(response: &Response, rows: &[usize]) -> bool {
    match response {
        Response::YesNo(yes) => {
            rows.iter().any(|&row| yes[row]) && rows.iter().any(|&row| !yes[row])
        }
        Response::Time {
            time,
            event,
            strata,
            ..
        } => rows.iter().any(|&first| {
            event[first]
                && rows.iter().any(|&later| {
                    let together = strata.as_ref().is_none_or(|s| s[first] == s[later]);
                    let is_later =
                        time[later] > time[first] || (time[later] == time[first] && !event[later]);
                    together && is_later
                })
        }),
        Response::Measured(_) | Response::Classes { .. } | Response::Count { .. } => false,
    }
}
