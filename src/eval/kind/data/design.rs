//! The facts of a Data cell about its design, before any fit: the flow of samples from file to
//! fit, and the outcome by batch, unit and order.

use crate::base::number::{self, Precision};
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::data::Dataset;
use crate::eval::kind::data::facts::{counts, texts};
use crate::eval::kind::data::roles::Roles;
use crate::numeric::response::Response;
use crate::study::settings::data::Data;
use crate::table::axis;
use crate::table::find::design::{cramers_v, cross, eta_squared, rank_correlation};

/// Along the order of measurement the samples are told in this many stretches.
const STRETCHES: usize = 10;

/// Publishes the design.
pub fn publish(facts: &mut Facts, settings: &Data, roles: &Roles) {
    let data = &roles.dataset;
    flow(facts, settings, roles);
    by_batch(facts, data);
    by_unit(facts, data);
    by_order(facts, settings, data);
}

/// A step of the way from the file to the fit.
struct Stage {
    step: String,
    samples: usize,
    left: usize,
    units: Option<usize>,
}

fn flow(facts: &mut Facts, settings: &Data, roles: &Roles) {
    let data = &roles.dataset;
    let read = data.table.n_rows();
    let stage = |step: String, samples: usize, left: usize| Stage {
        step,
        samples,
        left,
        units: None,
    };
    let mut stages = vec![stage(
        format!("read from {}", roles.sources[0].file),
        read,
        read,
    )];
    for (source, report) in &roles.joins {
        let without = read - report.matched;
        if without == 0 {
            continue;
        }
        stages.push(stage(
            format!("found no row in {}, and stayed", source.file),
            without,
            read,
        ));
    }
    // Every reason once, in the order in which it was given first.
    let mut reasons: Vec<(&str, usize)> = Vec::new();
    for exclusion in settings.exclusions.iter() {
        match reasons
            .iter_mut()
            .find(|(reason, _)| *reason == exclusion.reason)
        {
            Some((_, count)) => *count += 1,
            None => reasons.push((&exclusion.reason, 1)),
        }
    }
    let mut left = read;
    for (reason, count) in reasons {
        left = left.saturating_sub(count);
        stages.push(stage(
            format!("excluded: {}", reason.trim_end_matches('.')),
            count,
            left,
        ));
    }
    if !data.sealed.is_empty() {
        left = data.analysed.len();
        stages.push(Stage {
            units: Some(data.count_units(&data.sealed)),
            ..stage("sealed".to_owned(), data.sealed.len(), left)
        });
    }
    stages.push(Stage {
        units: Some(data.count_units(&data.analysed)),
        ..stage("used".to_owned(), data.analysed.len(), data.analysed.len())
    });
    let units = stages
        .iter()
        .map(|stage| stage.units.map_or(f64::NAN, |units| units as f64))
        .collect();
    facts.push(Fact::table(
        "flow of samples",
        vec![
            FactColumn::texts("step", texts(&stages, |s| s.step.clone()), "What was done."),
            counts(&stages, "samples", "How many samples it concerns.", |s| {
                s.samples
            }),
            counts(
                &stages,
                "left",
                "How many samples are left after it.",
                |s| s.left,
            ),
            FactColumn::numbers(
                "units",
                units,
                "",
                Precision::Whole,
                "How many units it concerns, where that is known.",
            ),
        ],
        "The way of the samples from the file to the fit.",
    ));
}

/// What the outcome of a group of samples is like.
struct Group {
    name: String,
    members: Vec<usize>,
}

/// The columns that tell of the outcome in groups: of classes their counts and the share of the
/// last (of yes/no that is “yes”), of quantities mean, spread and ends.
fn outcome_columns(data: &Dataset, groups: &[Group]) -> Vec<FactColumn> {
    let of = |get: &dyn Fn(&[usize]) -> f64| groups.iter().map(|g| get(&g.members)).collect();
    match &data.response {
        Response::YesNo(_) | Response::Classes { .. } => {
            let class = |at: usize| data.strata.as_ref().map_or(0, |strata| strata[at]);
            let classes = &data.outcome.classes;
            let mut columns: Vec<FactColumn> = classes
                .iter()
                .enumerate()
                .map(|(nth, name)| {
                    FactColumn::numbers(
                        &format!("{}: {name}", data.outcome.name),
                        of(&|rows| rows.iter().filter(|&&at| class(at) == nth).count() as f64),
                        "",
                        Precision::Whole,
                        "How many of these samples are of this class.",
                    )
                })
                .collect();
            if let (Some(name), 2) = (classes.last(), classes.len()) {
                columns.push(FactColumn::numbers(
                    "share",
                    of(&|rows| {
                        rows.iter().filter(|&&at| class(at) == 1).count() as f64 / rows.len() as f64
                    }),
                    "",
                    Precision::Percent(0),
                    &format!("The share of these samples with “{name}”."),
                ));
            }
            columns
        }
        Response::Measured(values)
        | Response::Count { count: values, .. }
        | Response::Time { time: values, .. } => {
            let decimals = number::decimals_for(spread(values, &data.analysed), 3);
            let precision = Precision::Decimals(decimals);
            let unit = &data.outcome.unit;
            let least = |rows: &[usize]| {
                rows.iter()
                    .map(|&at| values[at])
                    .fold(f64::INFINITY, f64::min)
            };
            let most = |rows: &[usize]| {
                rows.iter()
                    .map(|&at| values[at])
                    .fold(f64::NEG_INFINITY, f64::max)
            };
            let mut columns = vec![
                FactColumn::numbers(
                    "mean",
                    of(&|rows| mean(values, rows)),
                    unit,
                    precision,
                    "The mean of the outcome.",
                ),
                FactColumn::numbers(
                    "standard deviation",
                    of(&|rows| spread(values, rows)),
                    unit,
                    precision,
                    "The standard deviation of the outcome (divisor n − 1).",
                ),
                FactColumn::numbers(
                    "least",
                    of(&least),
                    unit,
                    precision,
                    "The smallest outcome.",
                ),
                FactColumn::numbers("most", of(&most), unit, precision, "The largest outcome."),
            ];
            if let (Response::Time { .. }, Some(event)) = (&data.response, &data.strata) {
                columns.push(FactColumn::numbers(
                    "events",
                    of(&|rows| rows.iter().filter(|&&at| event[at] == 1).count() as f64),
                    "",
                    Precision::Whole,
                    "How many of these samples had the event.",
                ));
            }
            columns
        }
    }
}

fn mean(values: &[f64], rows: &[usize]) -> f64 {
    rows.iter().map(|&at| values[at]).sum::<f64>() / rows.len() as f64
}

/// The standard deviation; not known of fewer than two.
fn spread(values: &[f64], rows: &[usize]) -> f64 {
    if rows.len() < 2 {
        return f64::NAN;
    }
    let mean = mean(values, rows);
    let squares: f64 = rows.iter().map(|&at| (values[at] - mean).powi(2)).sum();
    (squares / (rows.len() - 1) as f64).sqrt()
}

/// The outcome as one number for each analysed sample: of yes/no 1 and 0; none for classes.
fn numbers(data: &Dataset) -> Option<Vec<f64>> {
    let pick = |values: &[f64]| data.analysed.iter().map(|&at| values[at]).collect();
    match &data.response {
        Response::Measured(values)
        | Response::Count { count: values, .. }
        | Response::Time { time: values, .. } => Some(pick(values)),
        Response::YesNo(events) => Some(
            data.analysed
                .iter()
                .map(|&at| f64::from(u8::from(events[at])))
                .collect(),
        ),
        Response::Classes { .. } => None,
    }
}

/// How strongly the outcome goes together with groups: its name, its value, and what it is.
fn association(data: &Dataset, group: &dyn Fn(usize) -> String) -> Option<(f64, &'static str)> {
    let groups: Vec<Option<String>> = data.analysed.iter().map(|&at| Some(group(at))).collect();
    match &data.response {
        Response::YesNo(_) | Response::Classes { .. } => {
            let strata = data.strata.as_ref()?;
            let classes: Vec<Option<String>> = data
                .analysed
                .iter()
                .map(|&at| data.outcome.classes.get(strata[at]).cloned())
                .collect();
            let (v, _) = cramers_v(&cross(&classes, &groups))?;
            Some((
                v,
                "Cramér’s V: 0 where they have nothing to do with each other, 1 where one tells the other.",
            ))
        }
        Response::Measured(_) | Response::Count { .. } | Response::Time { .. } => {
            let (eta, _, _) = eta_squared(&numbers(data)?, &groups)?;
            Some((
                eta,
                "η²: the share of the outcome's variance that lies between them.",
            ))
        }
    }
}

fn by_batch(facts: &mut Facts, data: &Dataset) {
    let Some(batches) = &data.batches else { return };
    let mut groups: Vec<Group> = data
        .batch_names
        .iter()
        .enumerate()
        .map(|(nth, name)| Group {
            name: name.clone(),
            members: data
                .analysed
                .iter()
                .copied()
                .filter(|&at| batches[at] == nth)
                .collect(),
        })
        .filter(|group| !group.members.is_empty())
        .collect();
    // “week 10” stands behind “week 9”.
    groups.sort_by(|a, b| {
        let key = |group: &Group| {
            axis::parts(&group.name).map_or((group.name.clone(), 0.0), |(before, number, _)| {
                (before.to_owned(), number)
            })
        };
        let (a_key, b_key) = (key(a), key(b));
        a_key
            .0
            .cmp(&b_key.0)
            .then(a_key.1.total_cmp(&b_key.1))
            .then(a.name.cmp(&b.name))
    });
    let mut columns = vec![
        FactColumn::texts("batch", texts(&groups, |g| g.name.clone()), "The batch."),
        counts(
            &groups,
            "samples",
            "How many analysed samples are of it.",
            |g| g.members.len(),
        ),
        counts(&groups, "units", "How many units they belong to.", |g| {
            data.count_units(&g.members)
        }),
    ];
    columns.extend(outcome_columns(data, &groups));
    facts.push(Fact::table(
        "outcome by batch",
        columns,
        "The outcome of the analysed samples in each batch.",
    ));
    if let Some((value, meaning)) = association(data, &|at| data.batch_names[batches[at]].clone()) {
        facts.push(Fact::number(
            "batch association",
            value,
            "",
            Precision::Decimals(2),
            &format!("How strongly batch and outcome go together, as {meaning}"),
        ));
    }
}

fn by_unit(facts: &mut Facts, data: &Dataset) {
    if data.unit_column.is_none() {
        return;
    }
    let mut members: Vec<Vec<usize>> = vec![Vec::new(); data.unit_names.len()];
    for &at in &data.analysed {
        members[data.units[at]].push(at);
    }
    let groups: Vec<Group> = data
        .unit_names
        .iter()
        .zip(members)
        .filter(|(_, members)| !members.is_empty())
        .map(|(name, members)| Group {
            name: name.clone(),
            members,
        })
        .collect();
    let mut columns = vec![
        FactColumn::texts("unit", texts(&groups, |g| g.name.clone()), "The unit."),
        counts(
            &groups,
            "samples",
            "How many analysed samples it has.",
            |g| g.members.len(),
        ),
    ];
    columns.extend(outcome_columns(data, &groups));
    facts.push(Fact::table(
        "outcome by unit",
        columns,
        "The outcome of the analysed samples of each unit.",
    ));
    let mut sizes: Vec<usize> = groups.iter().map(|group| group.members.len()).collect();
    sizes.sort_unstable();
    sizes.dedup();
    facts.push(Fact::table(
        "units by size",
        vec![
            counts(&sizes, "samples", "So many samples of one unit.", |size| {
                *size
            }),
            counts(&sizes, "units", "So many units have them.", |size| {
                groups.iter().filter(|g| g.members.len() == *size).count()
            }),
        ],
        "How many units have how many analysed samples.",
    ));
    if let Some(values) = numbers(data) {
        let units: Vec<Option<String>> = data
            .analysed
            .iter()
            .map(|&at| Some(data.unit_names[data.units[at]].clone()))
            .collect();
        if let Some((share, _, _)) = eta_squared(&values, &units) {
            facts.push(Fact::number(
                "outcome share between units",
                share,
                "",
                Precision::Percent(0),
                "The share of the outcome's variance that lies between units; the rest lies \
                 between the samples of one unit.",
            ));
        }
    }
}

fn by_order(facts: &mut Facts, settings: &Data, data: &Dataset) {
    let Some(order) = &data.order else { return };
    let mut sorted: Vec<usize> = data
        .analysed
        .iter()
        .copied()
        .filter(|&at| order[at].is_finite())
        .collect();
    sorted.sort_by(|&a, &b| order[a].total_cmp(&order[b]).then(a.cmp(&b)));
    if sorted.len() < 2 {
        return;
    }
    let stretches = STRETCHES.min(sorted.len() / 2).max(1);
    let groups: Vec<Group> = (0..stretches)
        .map(|nth| {
            let (from, to) = (
                nth * sorted.len() / stretches,
                (nth + 1) * sorted.len() / stretches,
            );
            Group {
                name: (nth + 1).to_string(),
                members: sorted[from..to].to_vec(),
            }
        })
        .collect();
    let end = |name: &str, meaning: &str, get: &dyn Fn(&[usize]) -> usize| {
        let values = groups.iter().map(|g| order[get(&g.members)]).collect();
        FactColumn::numbers(name, values, "", Precision::Full, meaning)
    };
    let mut columns = vec![
        FactColumn::texts(
            "stretch",
            texts(&groups, |g| g.name.clone()),
            "The stretch of the order; all hold about as many samples.",
        ),
        end("from", "The first place in the order.", &|m| m[0]),
        end("to", "The last place in the order.", &|m| m[m.len() - 1]),
        counts(
            &groups,
            "samples",
            "How many analysed samples it holds.",
            |g| g.members.len(),
        ),
    ];
    columns.extend(outcome_columns(data, &groups));
    facts.push(Fact::table(
        "outcome by order",
        columns,
        "The outcome of the analysed samples along the order of measurement.",
    ));
    facts.push(Fact::text(
        "order column",
        settings.order.clone().unwrap_or_default(),
        "The column with the order of measurement.",
    ));
    if let Some(values) = numbers(data) {
        let along: Vec<f64> = data.analysed.iter().map(|&at| order[at]).collect();
        if let Some((r, _)) = rank_correlation(&values, &along) {
            facts.push(Fact::number(
                "order association",
                r,
                "",
                Precision::Decimals(2),
                "How strongly the outcome follows the order of measurement: Spearman’s rank \
                 correlation.",
            ));
        }
    }
}
