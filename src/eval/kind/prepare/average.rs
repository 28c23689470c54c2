//! The samples of a unit become one sample: the step that changes samples and not values.

use crate::base::problem::Problem;
use crate::base::work::Work;
use crate::eval::kind::Ended;
use crate::eval::kind::data::Dataset;
use crate::numeric::matrix::Matrix;
use crate::numeric::response::Response;
use crate::numeric::samples::{Companions, Limit, Samples};
use std::collections::BTreeMap;
use std::sync::Arc;

/// The samples of each unit as one, with what is known about them. A value is the mean of the
/// known ones; it is missing when all are. Quality-control samples stay as they are.
///
/// # Errors
/// When no column names the unit, when the samples of a unit differ in what a unit has one of, or
/// when a value is known for some of them and beyond a limit for others.
pub fn averaged(data: &Dataset, samples: &Samples, work: &Work<'_>) -> Result<Dataset, Ended> {
    if data.unit_column.is_none() {
        return Err(Problem::new(
            "no-unit-to-average",
            "The samples of a unit cannot be averaged: no column has the role of a unit.",
        )
        .mend("In the Data cell, name the column that says which samples belong together.")
        .mend("Or take the averaging off the list of steps.")
        .into());
    }
    let groups = Groups::of(data);
    let (x, limits) = values(data, samples, &groups, work)?;
    let batches = match &data.batches {
        None => None,
        Some(batches) => {
            Some(groups.same(data, batches, "batch", |at| data.batch_names[at].clone())?)
        }
    };
    let response = response(data, &groups)?;
    let mean = |values: &[f64]| -> Vec<f64> {
        groups
            .rows
            .iter()
            .map(|rows| mean_known(rows.iter().map(|&row| values[row])))
            .collect()
    };
    let order = data.order.as_deref().map(mean);
    let covariates = covariates(data, &groups)?;
    let first: Vec<usize> = groups.rows.iter().map(|rows| rows[0]).collect();
    let is_quality_control = samples
        .companions
        .is_quality_control
        .as_ref()
        .map(|flags| first.iter().map(|&row| flags[row]).collect());
    let places = |wanted: &[usize]| -> Vec<usize> {
        (0..first.len())
            .filter(|&at| wanted.binary_search(&first[at]).is_ok())
            .collect()
    };
    let averaged = Samples {
        x: Arc::new(x),
        limits,
        active: samples.active.clone(),
        axis: samples.axis.clone(),
        origins: samples.origins.clone(),
        companions: Companions {
            batch: batches.clone(),
            order: order.clone(),
            is_quality_control,
            covariates: (covariates.ncols() > 0).then(|| covariates.clone()),
        },
    };
    Ok(Dataset {
        table: Arc::clone(&data.table),
        table_rows: first.iter().map(|&row| data.table_rows[row]).collect(),
        names: groups.names.clone(),
        samples: averaged,
        predictor_names: data.predictor_names.clone(),
        axis_unit: data.axis_unit.clone(),
        response,
        outcome: data.outcome.clone(),
        covariates,
        covariate_names: data.covariate_names.clone(),
        weights: data.weights.as_deref().map(mean),
        units: (0..first.len()).collect(),
        unit_names: groups.names.clone(),
        unit_column: data.unit_column.clone(),
        batches,
        batch_names: data.batch_names.clone(),
        batch_column: data.batch_column.clone(),
        strata: data
            .strata
            .as_ref()
            .map(|strata| first.iter().map(|&row| strata[row]).collect()),
        order,
        analysed: places(&data.analysed),
        sealed: places(&data.sealed),
        subject: data.subject,
    })
}

/// Which samples become one.
struct Groups {
    /// The samples of each, rising; units in the order of their first sample.
    rows: Vec<Vec<usize>>,
    names: Vec<String>,
}

impl Groups {
    fn of(data: &Dataset) -> Self {
        let flags = data.samples.companions.is_quality_control.as_deref();
        let mut at_of: BTreeMap<usize, usize> = BTreeMap::new();
        let (mut rows, mut names): (Vec<Vec<usize>>, Vec<String>) = (Vec::new(), Vec::new());
        for row in 0..data.names.len() {
            let unit = data.units[row];
            if flags.is_some_and(|flags| flags[row]) {
                rows.push(vec![row]);
                names.push(data.names[row].clone());
            } else if let Some(&at) = at_of.get(&unit) {
                rows[at].push(row);
            } else {
                let _ = at_of.insert(unit, rows.len());
                rows.push(vec![row]);
                names.push(data.unit_names[unit].clone());
            }
        }
        Self { rows, names }
    }

    /// What all samples of each unit have in common.
    fn same<T: Copy + PartialEq>(
        &self,
        data: &Dataset,
        values: &[T],
        what: &str,
        shown: impl Fn(T) -> String,
    ) -> Result<Vec<T>, Problem> {
        let one = |(at, rows): (usize, &Vec<usize>)| {
            let first = values[rows[0]];
            match rows.iter().find(|&&row| values[row] != first) {
                None => Ok(first),
                Some(&row) => Err(Problem::new(
                    "unit-differs",
                    format!(
                        "The samples of “{}” cannot be averaged: the {what} of “{}” is “{}” and \
                         that of “{}” is “{}”.",
                        self.names[at],
                        data.names[rows[0]],
                        shown(first),
                        data.names[row],
                        shown(values[row])
                    ),
                )
                .mend(format!(
                    "Correct the {what} with a reason, or exclude one of the samples."
                ))
                .mend("Or keep the samples apart: take the averaging off the list of steps.")),
            }
        };
        self.rows.iter().enumerate().map(one).collect()
    }
}

fn mean_known(values: impl Iterator<Item = f64>) -> f64 {
    let (sum, count) = values
        .filter(|value| !value.is_nan())
        .fold((0.0, 0.0), |(sum, count), value| (sum + value, count + 1.0));
    // Without a known value this is 0/0: not a number, and so missing.
    sum / count
}

fn values(
    data: &Dataset,
    samples: &Samples,
    groups: &Groups,
    work: &Work<'_>,
) -> Result<(Matrix, Vec<Limit>), Ended> {
    let (n, p) = (groups.rows.len(), samples.n_columns());
    let mut beyond: BTreeMap<(usize, usize), Limit> = BTreeMap::new();
    for limit in &samples.limits {
        let _ = beyond.insert((limit.column, limit.row), *limit);
    }
    let mut values = Vec::with_capacity(n * p);
    let mut limits = Vec::new();
    for column in 0..p {
        if column % 256 == 0 {
            work.step(column, p)?;
        }
        let known = samples.column(column);
        for (at, rows) in groups.rows.iter().enumerate() {
            let here: Vec<&Limit> = if beyond.is_empty() {
                Vec::new()
            } else {
                rows.iter()
                    .filter_map(|&row| beyond.get(&(column, row)))
                    .collect()
            };
            if let Some(first) = here.first() {
                let is_known = rows.iter().any(|&row| !known[row].is_nan());
                let one_side = here.iter().all(|limit| limit.side == first.side);
                if is_known || !one_side {
                    return Err(partly_beyond(data, groups, at, column).into());
                }
                let mean = mean_known(here.iter().map(|limit| limit.limit));
                limits.push(Limit {
                    row: at,
                    column,
                    side: first.side,
                    limit: mean,
                });
                values.push(f64::NAN);
            } else {
                values.push(mean_known(rows.iter().map(|&row| known[row])));
            }
        }
    }
    Ok((Matrix::from_vec(n, p, values), limits))
}

fn partly_beyond(data: &Dataset, groups: &Groups, at: usize, column: usize) -> Problem {
    let predictor = data.predictor_names.get(column).map_or_else(
        || format!("column {}", column + 1),
        |name| format!("“{name}”"),
    );
    Problem::new(
        "average-beyond-limit",
        format!(
            "The samples of “{}” cannot be averaged: {predictor} is known for some of them and \
             beyond a limit for others, so that its mean is not known.",
            groups.names[at]
        ),
    )
    .mend("Put a step for values below a limit before the averaging.")
}

fn response(data: &Dataset, groups: &Groups) -> Result<Response, Problem> {
    let name = format!("outcome “{}”", data.outcome.name);
    let number =
        |value: f64| crate::base::number::text(value, crate::base::number::Precision::Full);
    let class = |at: usize| data.outcome.classes.get(at).cloned().unwrap_or_default();
    Ok(match &data.response {
        // Repeated measurements of the outcome are averaged as those of the predictors are.
        Response::Measured(values) => Response::Measured(
            groups
                .rows
                .iter()
                .map(|rows| mean_known(rows.iter().map(|&row| values[row])))
                .collect(),
        ),
        Response::YesNo(values) => {
            Response::YesNo(groups.same(data, values, &name, |event| class(usize::from(event)))?)
        }
        Response::Classes {
            class: values,
            n_classes,
        } => Response::Classes {
            class: groups.same(data, values, &name, class)?,
            n_classes: *n_classes,
        },
        Response::Count { count, offset } => Response::Count {
            count: groups.same(data, count, &name, number)?,
            offset: match offset {
                None => None,
                Some(offset) => {
                    Some(groups.same(data, offset, "exposure", |log: f64| number(log.exp()))?)
                }
            },
        },
        Response::Time {
            time,
            event,
            strata,
            ties,
        } => Response::Time {
            time: groups.same(data, time, &name, number)?,
            event: groups.same(data, event, "event", |event| {
                if event { "yes" } else { "no" }.to_owned()
            })?,
            strata: match strata {
                None => None,
                Some(strata) => Some(groups.same(data, strata, "stratum", |at| at.to_string())?),
            },
            ties: *ties,
        },
    })
}

/// Numbers are averaged; a category must be the same for all samples of a unit.
fn covariates(data: &Dataset, groups: &Groups) -> Result<Matrix, Problem> {
    let mut columns: Vec<Vec<f64>> = Vec::new();
    for (at, name) in data.covariate_names.iter().enumerate() {
        let values: Vec<f64> = data.covariates.column(at).iter().copied().collect();
        let is_level = data.table.position(name).is_none();
        columns.push(if is_level {
            let level = |value: f64| if value > 0.0 { "yes" } else { "no" }.to_owned();
            groups.same(data, &values, &format!("covariate “{name}”"), level)?
        } else {
            groups
                .rows
                .iter()
                .map(|rows| mean_known(rows.iter().map(|&row| values[row])))
                .collect()
        });
    }
    Ok(Matrix::from_fn(
        groups.rows.len(),
        columns.len(),
        |row, column| columns[column][row],
    ))
}
