//! Columns get their roles: names, units, batches, predictors, covariates, the sealed set.

use crate::base::number::{self, Precision};
use crate::base::problem::{Place, Problem};
use crate::base::thread::Threads;
use crate::base::work::Work;
use crate::eval::kind::Ended;
use crate::eval::kind::data::Dataset;
use crate::eval::kind::data::marked::{Own, blank_is_mean, marked};
use crate::eval::kind::data::outcome::{self, Found};
use crate::eval::kind::data::tables::{Joined, SourceReport};
use crate::eval::outcome::{Failure, Remedy};
use crate::numeric::matrix::Matrix;
use crate::numeric::samples::{Companions, Limit, Samples, Side};
use crate::study::settings::Settings;
use crate::study::settings::data::{
    ColumnRange, Data, Exclusion, OutcomeSeen, Sealed, TableSource,
};
use crate::table::axis;
use crate::table::column::{Censored, Column, Numbers, Value, Values};
use crate::table::find::{self, Roles as FindRoles};
use crate::table::finding::Finding;
use crate::table::samples::JoinReport;
use crate::table::{Table, correct};
use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

/// Samples with roles, and all that was noticed on the way.
#[derive(Debug)]
pub struct Roles {
    /// The samples.
    pub dataset: Dataset,
    /// What was noticed in the tables and about the roles.
    pub findings: Vec<Finding>,
    /// What each table was read as.
    pub sources: Vec<SourceReport>,
    /// What each join found.
    pub joins: Vec<(TableSource, JoinReport)>,
    /// Columns that hold text and were therefore not taken as predictors.
    pub text_columns: Vec<String>,
    /// The predictors as ranges of columns.
    pub predictor_range: String,
}

/// The smallest number of analysed samples with which anything can be said at all: two for
/// training and one held out.
const LEAST_SAMPLES: usize = 3;

/// Gives columns their roles.
///
/// # Errors
/// When a column that has a role does not exist or cannot have it.
pub fn assign(
    settings: &Data,
    joined: Joined,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Roles, Ended> {
    let Joined {
        mut table,
        n_first,
        mut findings,
        sources,
        joins,
    } = joined;
    let file = sources[0].file.clone();
    let all_names = sample_names(settings, &table, &file)?;
    for correction in settings.corrections.iter() {
        let row = named(&all_names, &correction.sample, &file, "corrected")?;
        let column = position(&table, &correction.column, &file)?;
        correct::set(&mut table, row, column, &correction.from, &correction.to).map_err(
            |found| {
                Problem::new(
                "correction-does-not-fit",
                format!(
                    "The correction of “{}” for “{}” expects “{}”, but the table holds “{found}”.",
                    correction.column, correction.sample, correction.from
                ),
            )
            .at(Place::file(&file).with_column(&correction.column))
            .mend("Take the correction back, or record it anew for the value that is there.")
            },
        )?;
    }
    let mut excluded = BTreeSet::new();
    for exclusion in settings.exclusions.iter() {
        let _ = excluded.insert(named(&all_names, &exclusion.sample, &file, "excluded")?);
    }
    let table_rows: Vec<usize> = (0..table.n_rows())
        .filter(|row| !excluded.contains(row))
        .collect();
    let names: Vec<String> = table_rows
        .iter()
        .map(|&row| all_names[row].clone())
        .collect();
    let is_marked = marked(settings, &table, &table_rows, &file)?;
    let others: Vec<usize> = (0..names.len()).filter(|&at| !is_marked[at]).collect();
    let other_rows: Vec<usize> = others.iter().map(|&at| table_rows[at]).collect();
    let Found {
        response,
        info,
        strata,
        missing,
        outcome_columns,
    } = outcome::find(settings, &table, &other_rows, &file)?;
    let response = outcome::spread(response, &others, names.len());
    let strata = strata.map(|strata| outcome::spread_list(&strata, &others, names.len(), 0));
    if !missing.is_empty() {
        let missing: Vec<String> = missing
            .iter()
            .map(|&at| names[others[at]].clone())
            .collect();
        return Err(outcome_missing(settings, &info.name, &missing, &file).into());
    }
    let (units, unit_names) = match &settings.unit {
        Some(column) => {
            let own = Own::Always(&names, &is_marked);
            groups(&table, column, &table_rows, &file, "unit", own)?
        }
        None => ((0..names.len()).collect(), names.clone()),
    };
    let batches = match &settings.batch {
        Some(column) => {
            let own = Own::WhereBlank(&names, &is_marked);
            Some(groups(&table, column, &table_rows, &file, "batch", own)?)
        }
        None => None,
    };
    let order = match &settings.order {
        Some(column) => Some(numbers(&table, column, &table_rows, &file, "order")?),
        None => None,
    };
    let weights = match &settings.weight {
        Some(column) => {
            let names: Vec<String> = others.iter().map(|&at| names[at].clone()).collect();
            let of_others = weights(&table, column, &other_rows, &names, &file)?;
            Some(outcome::spread_list(
                &of_others,
                &others,
                table_rows.len(),
                0.0,
            ))
        }
        None => None,
    };
    let (covariates, covariate_names) =
        covariates(settings, &table, &table_rows, &names, &is_marked, &file)?;
    let sealed = sealed(
        settings,
        &table,
        &table_rows,
        &names,
        &units,
        &unit_names,
        &file,
    )?;
    let sealed: BTreeSet<usize> = sealed.into_iter().filter(|&at| !is_marked[at]).collect();
    let analysed: Vec<usize> = others
        .iter()
        .copied()
        .filter(|at| !sealed.contains(at))
        .collect();
    if analysed.len() < LEAST_SAMPLES {
        return Err(Problem::new(
            "too-few-samples",
            format!(
                "{} samples are left to analyse; a model needs some to learn from and some to be \
                 judged on.",
                number::text(analysed.len() as f64, Precision::Whole)
            ),
        )
        .at(Place::file(&file))
        .mend("Bring in more samples, exclude fewer, or seal fewer.")
        .into());
    }
    outcome::varies(&response, &info, &analysed, &file)?;
    let (columns, text_columns) =
        predictor_columns(settings, &table, n_first, &outcome_columns, &file)?;
    let predictor_names: Vec<String> = columns
        .iter()
        .map(|&at| table.columns()[at].name.clone())
        .collect();
    let refs: Vec<&str> = predictor_names.iter().map(String::as_str).collect();
    let found_axis = axis::of_names(&refs).filter(|axis| axis.is_monotone());
    let axis_unit = found_axis
        .as_ref()
        .and_then(|axis| axis.unit.clone())
        .unwrap_or_default();
    let mut samples = predictors(&table, &columns, &table_rows);
    samples.axis = found_axis.map(|axis| axis.positions);
    samples.companions = Companions {
        batch: batches.as_ref().map(|(batches, _)| batches.clone()),
        order: order.clone(),
        is_quality_control: settings
            .quality_control
            .is_some()
            .then(|| is_marked.clone()),
        covariates: (covariates.ncols() > 0).then(|| covariates.clone()),
    };
    let ranges = axis::ranges(&table, &columns);
    let predictor_range = ranges
        .iter()
        .map(ToString::to_string)
        .collect::<Vec<_>>()
        .join(", ");
    findings.extend(find::with_roles(
        &table,
        &FindRoles {
            rows: &other_rows,
            sample_name: settings.sample_name.as_deref(),
            unit: settings.unit.as_deref(),
            batch: settings.batch.as_deref(),
            order: settings.order.as_deref(),
            outcome: settings
                .outcome
                .as_ref()
                .map(|outcome| outcome.column.as_str()),
            predictors: &columns,
        },
        threads,
        work,
    )?);
    let (batches, batch_names) = batches.map_or((None, Vec::new()), |(batches, names)| {
        (Some(batches), names)
    });
    let dataset = Dataset {
        table: Arc::new(table),
        table_rows,
        names,
        samples,
        predictor_names,
        axis_unit,
        response,
        outcome: info,
        covariates,
        covariate_names,
        weights,
        units,
        unit_names,
        unit_column: settings.unit.clone(),
        batches,
        batch_names,
        batch_column: settings.batch.clone(),
        strata,
        order,
        analysed,
        sealed: sealed.into_iter().collect(),
        subject: settings.subject,
    };
    Ok(Roles {
        dataset,
        findings,
        sources,
        joins,
        text_columns,
        predictor_range,
    })
}

/// The position of a column, or the problem that it does not exist.
pub(super) fn position(table: &Table, name: &str, file: &str) -> Result<usize, Problem> {
    table.position(name).ok_or_else(|| {
        let alike = alike(table, name);
        let mut problem = Problem::new(
            "no-such-column",
            format!("There is no column “{name}” in the table."),
        )
        .at(Place::file(file));
        if let Some(alike) = alike {
            problem = problem.mend(format!(
                "Choose another column; “{alike}” is named most alike."
            ));
        } else {
            problem = problem.mend("Choose another column.");
        }
        problem
    })
}

/// The column that is named most alike: equal but for case, blanks and signs, or beginning alike.
fn alike(table: &Table, name: &str) -> Option<String> {
    let bare = |text: &str| {
        text.chars()
            .filter(|c| c.is_alphanumeric())
            .flat_map(char::to_lowercase)
            .collect::<String>()
    };
    let wanted = bare(name);
    let names = || table.columns().iter().map(|column| column.name.as_str());
    let equal = names().find(|other| bare(other) == wanted);
    let begins = || {
        names().find(|other| {
            let other = bare(other);
            !wanted.is_empty()
                && !other.is_empty()
                && (other.starts_with(&wanted) || wanted.starts_with(&other))
        })
    };
    equal.or_else(begins).map(str::to_owned)
}

fn sample_names(settings: &Data, table: &Table, file: &str) -> Result<Vec<String>, Ended> {
    let Some(name) = &settings.sample_name else {
        return Ok((0..table.n_rows())
            .map(|row| format!("sample {}", row + 1))
            .collect());
    };
    let column = &table.columns()[position(table, name, file)?];
    let mut names = Vec::with_capacity(column.len());
    let mut first: BTreeMap<String, usize> = BTreeMap::new();
    let mut repeated = BTreeSet::new();
    for row in 0..column.len() {
        let text = text_of(column, row).unwrap_or_else(|| format!("unnamed {}", row + 1));
        if first.insert(text.clone(), row).is_some() {
            let _ = repeated.insert(text.clone());
        }
        names.push(text);
    }
    if repeated.is_empty() {
        return Ok(names);
    }
    let some: Vec<&str> = repeated.iter().take(5).map(String::as_str).collect();
    let problem = Problem::new(
        "repeated-sample-names",
        format!(
            "The column “{name}” should name the samples, but {} more than once, such as “{}”.",
            match repeated.len() {
                1 => "one name stands there".to_owned(),
                count => {
                    let count = number::text(count as f64, Precision::Whole);
                    format!("{count} names stand there")
                }
            },
            some.join("”, “")
        ),
    )
    .at(Place::file(file).with_column(name))
    .mend("Choose a column in which every name stands once.")
    .mend("If these rows are repeats of one thing, let this column name the unit instead.");
    let mut as_unit = settings.clone();
    as_unit.sample_name = None;
    as_unit.unit = Some(name.clone());
    let remedies = vec![Remedy {
        label: format!("Let “{name}” name the unit"),
        settings: Settings::Data(as_unit),
    }];
    Err(Failure { problem, remedies }.into())
}

fn named(names: &[String], name: &str, file: &str, what: &str) -> Result<usize, Problem> {
    names.iter().position(|known| known == name).ok_or_else(|| {
        Problem::new(
            "no-such-sample",
            format!("The sample “{name}” should be {what}, but no sample has this name."),
        )
        .at(Place::file(file))
        .mend("Take the record back, or choose the column that names the samples.")
    })
}

fn outcome_missing(settings: &Data, outcome: &str, missing: &[String], file: &str) -> Failure {
    let shown = missing
        .iter()
        .take(8)
        .cloned()
        .collect::<Vec<_>>()
        .join(", ");
    let more = if missing.len() > 8 { ", …" } else { "" };
    let count = number::text(missing.len() as f64, Precision::Whole);
    let samples = if missing.len() == 1 {
        "sample"
    } else {
        "samples"
    };
    let problem = Problem::new(
        "outcome-missing",
        format!("The outcome “{outcome}” is missing for {count} {samples}: {shown}{more}."),
    )
    .at(Place::file(file).with_column(outcome))
    .mend("Exclude them with a reason, or choose another outcome.");
    let mut without = settings.clone();
    let mut exclusions = without.exclusions.as_ref().clone();
    exclusions.extend(missing.iter().map(|sample| Exclusion {
        sample: sample.clone(),
        reason: "The outcome is missing.".to_owned(),
        outcome: OutcomeSeen::Before,
    }));
    without.exclusions = Arc::new(exclusions);
    let remedies = vec![Remedy {
        label: format!("Exclude {count} {samples} without an outcome"),
        settings: Settings::Data(without),
    }];
    Failure { problem, remedies }
}

/// The text of a value, for names; a number is written with all its digits.
pub(super) fn text_of(column: &Column, row: usize) -> Option<String> {
    match column.value(row) {
        Value::Text(text) => Some(text.to_owned()),
        Value::Number(value) => Some(number::text(value, Precision::Full)),
        Value::BelowLimit(limit) => Some(format!("<{}", number::text(limit, Precision::Full))),
        Value::AboveLimit(limit) => Some(format!(">{}", number::text(limit, Precision::Full))),
        Value::Missing => None,
    }
}

/// Samples that share a text belong together: for each sample the number of its group, and the
/// groups' names in the order of their first sample.
fn groups(
    table: &Table,
    column: &str,
    rows: &[usize],
    file: &str,
    role: &str,
    own: Own<'_>,
) -> Result<(Vec<usize>, Vec<String>), Problem> {
    let values = &table.columns()[position(table, column, file)?];
    let mut known: BTreeMap<String, usize> = BTreeMap::new();
    let mut names = Vec::new();
    let mut members = Vec::with_capacity(rows.len());
    for (at, &row) in rows.iter().enumerate() {
        let text = text_of(values, row);
        if let Some(name) = own.name(at, text.as_deref()) {
            members.push(names.len());
            names.push(name.clone());
            continue;
        }
        let Some(text) = text else {
            let at = table.position(column).expect("the column was just found");
            return Err(Problem::new(
                "group-missing",
                format!("The {role} “{column}” is blank for a sample."),
            )
            .at(table.place(row, at))
            .mend("Correct the value with a reason, or exclude the sample."));
        };
        let next = names.len();
        let at = *known.entry(text.clone()).or_insert_with(|| {
            names.push(text);
            next
        });
        members.push(at);
    }
    Ok((members, names))
}

/// The numbers of a column; NaN where a value is missing.
pub(super) fn numbers(
    table: &Table,
    column: &str,
    rows: &[usize],
    file: &str,
    role: &str,
) -> Result<Vec<f64>, Problem> {
    let at = position(table, column, file)?;
    match &table.columns()[at].values {
        Values::Numbers(numbers) => Ok(rows.iter().map(|&row| numbers.values()[row]).collect()),
        Values::Texts(texts) => {
            let first = rows
                .iter()
                .copied()
                .find(|&row| texts[row].is_some())
                .unwrap_or(0);
            let found = texts[first].clone().unwrap_or_default();
            Err(Problem::new(
                "text-in-number-column",
                format!("The {role} “{column}” should hold numbers, but it holds text such as “{found}”."),
            )
            .at(table.place(first, at))
            .mend("Choose a column of numbers, or say how its numbers are written."))
        }
    }
}

fn weights(
    table: &Table,
    column: &str,
    rows: &[usize],
    names: &[String],
    file: &str,
) -> Result<Vec<f64>, Problem> {
    let weights = numbers(table, column, rows, file, "weight")?;
    match weights
        .iter()
        .position(|weight| !weight.is_finite() || *weight < 0.0)
    {
        None => Ok(weights),
        Some(at) => Err(Problem::new(
            "weight",
            format!(
                "The weight of “{}” is not a number of 0 or more.",
                names[at]
            ),
        )
        .at(Place::file(file).with_column(column))
        .mend("Correct the weight with a reason, or choose another column.")),
    }
}

/// Covariates as columns of numbers. A category becomes one column per level but the first in
/// alphabetical order, which is the reference.
fn covariates(
    settings: &Data,
    table: &Table,
    rows: &[usize],
    names: &[String],
    is_marked: &[bool],
    file: &str,
) -> Result<(Matrix, Vec<String>), Problem> {
    let mut columns: Vec<Vec<f64>> = Vec::new();
    let mut column_names = Vec::new();
    for name in &settings.covariates {
        let column = &table.columns()[position(table, name, file)?];
        let missing = |at: usize| {
            Problem::new(
                "covariate-missing",
                format!("The covariate “{name}” is missing for “{}”.", names[at]),
            )
            .at(Place::file(file).with_column(name))
            .mend(
                "Correct the value with a reason, exclude the sample, or leave the covariate out.",
            )
        };
        match &column.values {
            Values::Numbers(numbers) => {
                let mut values: Vec<f64> = rows.iter().map(|&row| numbers.values()[row]).collect();
                let gap = |at: &usize| values[*at].is_nan() && !is_marked[*at];
                if let Some(at) = (0..values.len()).find(gap) {
                    return Err(missing(at));
                }
                blank_is_mean(&mut values);
                columns.push(values);
                column_names.push(name.clone());
            }
            Values::Texts(texts) => {
                let texts: Vec<Option<&str>> =
                    rows.iter().map(|&row| texts[row].as_deref()).collect();
                let gap = |at: &usize| texts[*at].is_none() && !is_marked[*at];
                if let Some(at) = (0..texts.len()).find(gap) {
                    return Err(missing(at));
                }
                let levels: BTreeSet<&str> = texts.iter().copied().flatten().collect();
                for level in levels.iter().skip(1) {
                    columns.push(
                        texts
                            .iter()
                            .map(|text| f64::from(u8::from(*text == Some(*level))))
                            .collect(),
                    );
                    column_names.push(format!("{name}: {level}"));
                }
            }
        }
    }
    let matrix = Matrix::from_fn(rows.len(), columns.len(), |row, column| {
        columns[column][row]
    });
    Ok((matrix, column_names))
}

fn sealed(
    settings: &Data,
    table: &Table,
    rows: &[usize],
    names: &[String],
    units: &[usize],
    unit_names: &[String],
    file: &str,
) -> Result<BTreeSet<usize>, Problem> {
    let mut chosen: BTreeSet<usize> = BTreeSet::new();
    match &settings.sealed {
        Sealed::Nothing => return Ok(chosen),
        Sealed::Where { column, values } => {
            let texts = &table.columns()[position(table, column, file)?];
            for (at, &row) in rows.iter().enumerate() {
                if text_of(texts, row).is_some_and(|text| values.contains(&text)) {
                    let _ = chosen.insert(at);
                }
            }
            if chosen.is_empty() {
                return Err(Problem::new(
                    "nothing-sealed",
                    format!(
                        "No sample has “{}” in the column “{column}”.",
                        values.join("” or “")
                    ),
                )
                .at(Place::file(file).with_column(column))
                .mend("Choose another value, or seal nothing."));
            }
        }
        Sealed::Listed(listed) => {
            for name in listed {
                let members: Vec<usize> = (0..names.len())
                    .filter(|&at| unit_names[units[at]] == *name || names[at] == *name)
                    .collect();
                if members.is_empty() {
                    return Err(Problem::new(
                        "nothing-sealed",
                        format!("“{name}” should be sealed, but nothing has this name."),
                    )
                    .at(Place::file(file))
                    .mend("Take the name off the list."));
                }
                chosen.extend(members);
            }
        }
    }
    // A unit is sealed as a whole: one of its samples on the other side would give it away.
    let sealed_units: BTreeSet<usize> = chosen.iter().map(|&at| units[at]).collect();
    Ok((0..names.len())
        .filter(|&at| sealed_units.contains(&units[at]))
        .collect())
}

/// The positions of the predictor columns, and the columns that hold text and were passed over.
fn predictor_columns(
    settings: &Data,
    table: &Table,
    n_first: usize,
    outcome_columns: &[String],
    file: &str,
) -> Result<(Vec<usize>, Vec<String>), Problem> {
    let mut taken: BTreeSet<&str> = outcome_columns.iter().map(String::as_str).collect();
    taken.extend(settings.sample_name.as_deref());
    taken.extend(settings.unit.as_deref());
    taken.extend(settings.batch.as_deref());
    taken.extend(settings.order.as_deref());
    taken.extend(
        settings
            .quality_control
            .as_ref()
            .map(|marked| marked.column.as_str()),
    );
    taken.extend(settings.weight.as_deref());
    taken.extend(settings.covariates.iter().map(String::as_str));
    taken.extend(settings.ignored.iter().map(String::as_str));
    taken.extend(
        settings
            .tables
            .iter()
            .filter_map(|table| table.join.as_ref())
            .map(|join| join.left.as_str()),
    );
    if let Sealed::Where { column, .. } = &settings.sealed {
        let _ = taken.insert(column);
    }
    let mut columns = BTreeSet::new();
    let mut text_columns = Vec::new();
    let mut consider = |at: usize, columns: &mut BTreeSet<usize>| {
        let column = &table.columns()[at];
        if taken.contains(column.name.as_str()) {
            return;
        }
        match &column.values {
            Values::Numbers(_) => {
                let _ = columns.insert(at);
            }
            Values::Texts(_) => text_columns.push(column.name.clone()),
        }
    };
    if settings.predictors.is_empty() {
        // Joined tables bring the outcome and what belongs to it; predictors are asked for there.
        (0..n_first).for_each(|at| consider(at, &mut columns));
    }
    for ColumnRange { first, last } in &settings.predictors {
        let (from, to) = (position(table, first, file)?, position(table, last, file)?);
        (from.min(to)..=from.max(to)).for_each(|at| consider(at, &mut columns));
    }
    if columns.is_empty() {
        return Err(Problem::new(
            "no-predictors",
            "No column of numbers is left to be a predictor.",
        )
        .at(Place::file(file))
        .mend("Choose columns of numbers as predictors, or say how the numbers are written."));
    }
    Ok((columns.into_iter().collect(), text_columns))
}

fn predictors(table: &Table, columns: &[usize], rows: &[usize]) -> Samples {
    let empty = Numbers::new(Vec::new());
    let column = |at: usize| match &table.columns()[columns[at]].values {
        Values::Numbers(numbers) => numbers,
        Values::Texts(_) => &empty,
    };
    let mut values = Vec::with_capacity(rows.len() * columns.len());
    let mut limits = Vec::new();
    for at in 0..columns.len() {
        let numbers = column(at);
        values.extend(rows.iter().map(|&row| numbers.values()[row]));
        if numbers.censored().is_empty() {
            continue;
        }
        let known: BTreeMap<usize, Censored> = numbers
            .censored()
            .iter()
            .map(|(row, censored)| (*row as usize, *censored))
            .collect();
        for (to, row) in rows.iter().enumerate() {
            let Some(censored) = known.get(row) else {
                continue;
            };
            let (side, limit) = match censored {
                Censored::Below(limit) => (Side::Below, *limit),
                Censored::Above(limit) => (Side::Above, *limit),
            };
            limits.push(Limit {
                row: to,
                column: at,
                side,
                limit,
            });
        }
    }
    Samples::new(Matrix::from_vec(rows.len(), columns.len(), values)).with_limits(limits)
}
