//! The outcome of a Data cell: from a column to what is fitted.

use crate::base::number::{self, Precision};
use crate::base::problem::{Place, Problem};
use crate::eval::kind::data::OutcomeInfo;
use crate::eval::kind::data::roles::{numbers, position, text_of};
use crate::numeric::response::{Response, Ties};
use crate::study::settings::data::{Data, OutcomeKind};
use crate::table::Table;

/// An outcome as it was found.
#[derive(Debug)]
pub struct Found {
    /// The values, one per sample.
    pub response: Response,
    /// Its name, unit and classes.
    pub info: OutcomeInfo,
    /// The class or event of each sample, where there is one.
    pub strata: Option<Vec<usize>>,
    /// The samples without an outcome.
    pub missing: Vec<usize>,
    /// The columns that belong to the outcome and cannot be predictors.
    pub outcome_columns: Vec<String>,
}

/// Texts that mean “yes” where nobody said which text does, in lower case.
const YES: [&str; 9] = [
    "1", "yes", "y", "true", "t", "positive", "pos", "event", "present",
];

/// Finds the outcome of the given rows.
///
/// # Errors
/// When no outcome was chosen, its column does not exist, or it holds something else than its
/// kind says.
pub fn find(settings: &Data, table: &Table, rows: &[usize], file: &str) -> Result<Found, Problem> {
    let Some(outcome) = &settings.outcome else {
        return Err(
            Problem::new("no-outcome", "It has not been said yet what is predicted.")
                .at(Place::file(file))
                .mend("Choose the column with the outcome."),
        );
    };
    let name = &outcome.column;
    let at = table.position(name).ok_or_else(|| {
        let mut problem = position(table, name, file).expect_err("the column was not found");
        problem.code = crate::base::problem::Code("missing-outcome");
        problem.found = format!("There is no column “{name}” to be the outcome.");
        problem
    })?;
    let column = &table.columns()[at];
    let unit = outcome
        .unit
        .clone()
        .or_else(|| column.unit.clone())
        .unwrap_or_default();
    let mut info = OutcomeInfo {
        name: name.clone(),
        unit,
        reference_error: outcome.reference_error.map(crate::base::real::Real::get),
        classes: Vec::new(),
    };
    let mut columns = vec![name.clone()];
    let values = |column: &str| numbers(table, column, rows, file, "outcome");
    let texts =
        || -> Vec<Option<String>> { rows.iter().map(|&row| text_of(column, row)).collect() };
    let (response, strata, missing) = match &outcome.kind {
        OutcomeKind::Measured => {
            let values = values(name)?;
            let missing = places(&values, |value| value.is_nan());
            (Response::Measured(values), None, missing)
        }
        OutcomeKind::YesNo { event } => {
            let texts = texts();
            let levels = levels(&texts);
            let event = event_text(&levels, event.as_deref(), name, file)?;
            let other = levels.iter().find(|level| **level != event);
            info.classes = vec![
                other.cloned().unwrap_or_else(|| "no".to_owned()),
                event.clone(),
            ];
            let missing = places(&texts, Option::is_none);
            let is_event: Vec<bool> = texts
                .iter()
                .map(|text| text.as_deref() == Some(event.as_str()))
                .collect();
            let strata = is_event.iter().map(|event| usize::from(*event)).collect();
            (Response::YesNo(is_event), Some(strata), missing)
        }
        OutcomeKind::Classes => {
            let texts = texts();
            let levels = levels(&texts);
            let missing = places(&texts, Option::is_none);
            let class: Vec<usize> = texts
                .iter()
                .map(|text| {
                    levels
                        .iter()
                        .position(|level| Some(level) == text.as_ref())
                        .unwrap_or(0)
                })
                .collect();
            info.classes.clone_from(&levels);
            let response = Response::Classes {
                class: class.clone(),
                n_classes: levels.len(),
            };
            (response, Some(class), missing)
        }
        OutcomeKind::Count { exposure } => {
            let count = values(name)?;
            let missing = places(&count, |value| value.is_nan());
            if let Some(at) = count
                .iter()
                .position(|value| *value < 0.0 || value.fract() != 0.0 && !value.is_nan())
            {
                return Err(Problem::new(
                    "not-a-count",
                    format!(
                        "The outcome “{name}” should be a count, but {} is none.",
                        number::text(count[at], Precision::Full)
                    ),
                )
                .at(table.place(
                    rows[at],
                    table.position(name).expect("the column was found"),
                ))
                .mend(
                    "Correct the value with a reason, or treat the outcome as a measured quantity.",
                ));
            }
            let offset = match exposure {
                None => None,
                Some(exposure) => {
                    columns.push(exposure.clone());
                    let exposures = values(exposure)?;
                    if exposures
                        .iter()
                        .any(|value| value.is_nan() || *value <= 0.0)
                    {
                        return Err(Problem::new(
                            "exposure",
                            format!("The exposure “{exposure}” must be above 0 for every sample."),
                        )
                        .at(Place::file(file).with_column(exposure))
                        .mend("Correct the value with a reason, or choose another column."));
                    }
                    Some(exposures.iter().map(|value| value.ln()).collect())
                }
            };
            (Response::Count { count, offset }, None, missing)
        }
        OutcomeKind::Time { event } => {
            let time = values(name)?;
            columns.push(event.clone());
            let column = &table.columns()[position(table, event, file)?];
            let texts: Vec<Option<String>> = rows.iter().map(|&row| text_of(column, row)).collect();
            let mut missing = places(&time, |value| value.is_nan());
            missing.extend(places(&texts, Option::is_none));
            missing.sort_unstable();
            missing.dedup();
            let happened = event_text(&levels(&texts), None, event, file)?;
            let event: Vec<bool> = texts
                .iter()
                .map(|text| text.as_deref() == Some(happened.as_str()))
                .collect();
            let strata = event.iter().map(|event| usize::from(*event)).collect();
            let response = Response::Time {
                time,
                event,
                strata: None,
                ties: Ties::Efron,
            };
            (response, Some(strata), missing)
        }
    };
    Ok(Found {
        response,
        info,
        strata,
        missing,
        outcome_columns: columns,
    })
}

/// The outcome of some samples among all: the others, which are not analysed, get one that means
/// nothing. `at` says which samples have it, `n` how many there are.
#[must_use]
pub fn spread(response: Response, at: &[usize], n: usize) -> Response {
    if at.len() == n {
        return response;
    }
    match response {
        Response::Measured(values) => Response::Measured(spread_list(&values, at, n, f64::NAN)),
        Response::YesNo(values) => Response::YesNo(spread_list(&values, at, n, false)),
        Response::Classes { class, n_classes } => Response::Classes {
            class: spread_list(&class, at, n, 0),
            n_classes,
        },
        Response::Count { count, offset } => Response::Count {
            count: spread_list(&count, at, n, f64::NAN),
            offset: offset.map(|offset| spread_list(&offset, at, n, f64::NAN)),
        },
        Response::Time {
            time,
            event,
            strata,
            ties,
        } => Response::Time {
            time: spread_list(&time, at, n, f64::NAN),
            event: spread_list(&event, at, n, false),
            strata: strata.map(|strata| spread_list(&strata, at, n, 0)),
            ties,
        },
    }
}

/// A list with one entry for each of some samples, spread over all of them.
#[must_use]
pub fn spread_list<T: Copy>(values: &[T], at: &[usize], n: usize, other: T) -> Vec<T> {
    let mut all = vec![other; n];
    for (&at, &value) in at.iter().zip(values) {
        all[at] = value;
    }
    all
}

fn places<T>(values: &[T], wanted: impl Fn(&T) -> bool) -> Vec<usize> {
    values
        .iter()
        .enumerate()
        .filter(|(_, value)| wanted(value))
        .map(|(at, _)| at)
        .collect()
}

fn levels(texts: &[Option<String>]) -> Vec<String> {
    let mut levels: Vec<String> = texts.iter().flatten().cloned().collect();
    levels.sort();
    levels.dedup();
    levels
}

/// The text that means “yes”.
fn event_text(
    levels: &[String],
    event: Option<&str>,
    column: &str,
    file: &str,
) -> Result<String, Problem> {
    let place = || Place::file(file).with_column(column);
    let shown = || {
        levels
            .iter()
            .take(6)
            .cloned()
            .collect::<Vec<_>>()
            .join("”, “")
    };
    if levels.len() > 2 {
        return Err(Problem::new(
            "not-yes-or-no",
            format!(
                "“{column}” should hold two values, but it holds {}: “{}”.",
                number::text(levels.len() as f64, Precision::Whole),
                shown()
            ),
        )
        .at(place())
        .mend("Choose another kind of outcome, or another column."));
    }
    if let Some(event) = event {
        return match levels.iter().find(|level| *level == event) {
            Some(level) => Ok(level.clone()),
            None => Err(Problem::new(
                "no-such-event",
                format!(
                    "“{event}” should mean “yes”, but “{column}” holds “{}”.",
                    shown()
                ),
            )
            .at(place())
            .mend("Choose one of these values.")),
        };
    }
    levels
        .iter()
        .find(|level| YES.contains(&level.to_lowercase().as_str()))
        .cloned()
        .ok_or_else(|| {
            Problem::new(
                "which-is-yes",
                format!(
                    "It is not clear which value of “{column}” means “yes”: “{}”.",
                    shown()
                ),
            )
            .at(place())
            .mend("Choose the value that means “yes”.")
        })
}

/// Checks that the outcome varies among the analysed samples, and is of a kind that can be fitted.
///
/// # Errors
/// When all analysed samples have the same outcome.
pub fn varies(
    response: &Response,
    info: &OutcomeInfo,
    analysed: &[usize],
    file: &str,
) -> Result<(), Problem> {
    let key = |at: usize| match response {
        Response::Measured(values) => values[at],
        Response::YesNo(events) => f64::from(u8::from(events[at])),
        Response::Classes { class, .. } => class[at] as f64,
        Response::Count { count, .. } => count[at],
        Response::Time { event, .. } => f64::from(u8::from(event[at])),
    };
    let first = key(analysed[0]);
    if analysed.iter().any(|&at| key(at) != first) {
        return Ok(());
    }
    if let Response::Time { event, .. } = response
        && event[analysed[0]]
    {
        // All samples with an event: nothing is censored, and times still differ.
        return Ok(());
    }
    Err(Problem::new(
        "constant-outcome",
        format!(
            "The outcome “{}” is the same for all {} analysed samples, so there is nothing to \
             predict.",
            info.name,
            number::text(analysed.len() as f64, Precision::Whole)
        ),
    )
    .at(Place::file(file).with_column(&info.name))
    .mend("Choose another outcome, or bring in samples that differ in it."))
}
