//! Samples that are identical, or far closer together than samples usually are (caveat 14).

use crate::base::thread::{Threads, in_order};
use crate::base::work::{Cancelled, Work};
use crate::table::Table;
use crate::table::column::Values;
use crate::table::find::Roles;
use crate::table::finding::{Finding, FindingKind, KEPT, Treatment, shortened};
use std::collections::{BTreeMap, HashMap};
use std::hash::{DefaultHasher, Hash, Hasher};

/// A pair is near when its distance is below this share of the median distance to the nearest
/// neighbour, in at least [`DIMENSION`] effective dimensions. Among independent samples the
/// share falls below 0.12 to 0.18 in one of a hundred tables of dimension 5.
const NEAR: f64 = 0.10;

/// The effective dimension from which [`NEAR`] holds.
const DIMENSION: f64 = 5.0;

/// The share in fewer dimensions, where chance brings samples closer together.
const NEAR_IN_FEW: f64 = 0.02;

/// Larger tables are not searched for near pairs: their distances would take too long.
const MOST_SAMPLES: usize = 3000;

/// How many products the distances may take, about two seconds; predictors are thinned out to
/// an evenly spaced choice.
const PRODUCTS: usize = 2_000_000_000;

/// Finds samples that are identical in all predictors, and pairs that are nearly so. Pairs
/// within one unit are repeats and not reported.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn find(
    table: &Table,
    roles: &Roles<'_>,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Vec<Finding>, Cancelled> {
    let numeric: Vec<usize> = roles
        .predictors
        .iter()
        .copied()
        .filter(|&at| table.columns()[at].is_numeric())
        .collect();
    if numeric.len() < 2 || table.n_rows() < 4 {
        return Ok(Vec::new());
    }
    let units = roles
        .unit
        .and_then(|name| table.column(name))
        .map(|column| column.labels());
    let are_one_unit = |one: usize, other: usize| {
        units
            .as_ref()
            .is_some_and(|units| units[one].is_some() && units[one] == units[other])
    };
    let names = roles.sample_name.and_then(|name| table.column(name));
    let name_of = |row: usize| {
        names
            .and_then(|names| names.label(row))
            .unwrap_or_else(|| format!("row {}", table.place(row, 0).row.unwrap_or(row + 1)))
    };
    let report = |kind, pairs: Vec<(usize, usize)>| {
        let mut finding = Finding::new(kind, Treatment::Kept).counting(pairs.len());
        for (one, other) in pairs.into_iter().take(KEPT) {
            finding.places.push(table.place(other, 0));
            finding.examples.push(shortened(&format!(
                "{} and {}",
                name_of(one),
                name_of(other)
            )));
        }
        (finding.count > 0).then_some(finding)
    };
    let identical = identical(table, &numeric, work)?;
    let same: Vec<(usize, usize)> = identical
        .into_iter()
        .filter(|&(one, other)| !are_one_unit(one, other))
        .collect();
    let known: std::collections::BTreeSet<(usize, usize)> = same.iter().copied().collect();
    let mut findings: Vec<Finding> = Vec::new();
    findings.extend(report(FindingKind::IdenticalSamples, same));
    if let Some((dimension, near)) = near(table, &numeric, threads, work)? {
        let pairs = near
            .into_iter()
            .filter(|pair| !known.contains(pair) && !are_one_unit(pair.0, pair.1))
            .collect();
        findings.extend(report(
            FindingKind::NearIdenticalSamples { dimension },
            pairs,
        ));
    }
    Ok(findings)
}

/// Samples that equal an earlier one in every predictor, with that one.
fn identical(
    table: &Table,
    predictors: &[usize],
    work: &Work<'_>,
) -> Result<Vec<(usize, usize)>, Cancelled> {
    let mut hashers: Vec<DefaultHasher> = vec![DefaultHasher::new(); table.n_rows()];
    let mut filled = vec![0_usize; table.n_rows()];
    for &at in predictors {
        work.check()?;
        let Values::Numbers(numbers) = &table.columns()[at].values else {
            continue;
        };
        for (row, value) in numbers.values().iter().enumerate() {
            if value.is_nan() {
                0_u64.hash(&mut hashers[row]);
            } else {
                (value + 0.0).to_bits().hash(&mut hashers[row]);
                filled[row] += 1;
            }
        }
    }
    let mut first: HashMap<u64, Vec<usize>> = HashMap::new();
    let mut pairs = Vec::new();
    for (row, hasher) in hashers.iter().enumerate() {
        // Samples that hold next to nothing are alike for want of values.
        if filled[row] * 2 < predictors.len() {
            continue;
        }
        let known = first.entry(hasher.finish()).or_default();
        let are_equal = |one: usize| {
            predictors
                .iter()
                .all(|&at| table.columns()[at].value(one) == table.columns()[at].value(row))
        };
        match known.iter().find(|&&one| are_equal(one)) {
            Some(&one) => pairs.push((one, row)),
            None => known.push(row),
        }
    }
    Ok(pairs)
}

type Near = (f64, Vec<(usize, usize)>);

/// The effective dimension and the pairs that are near.
fn near(
    table: &Table,
    predictors: &[usize],
    threads: Threads,
    work: &Work<'_>,
) -> Result<Option<Near>, Cancelled> {
    let n = table.n_rows();
    if n > MOST_SAMPLES {
        return Ok(None);
    }
    let most = (PRODUCTS / (n * n)).max(50);
    let every = predictors.len().div_ceil(most).max(1);
    let columns: Vec<Vec<f64>> = predictors
        .iter()
        .step_by(every)
        .filter_map(|&at| table.columns()[at].as_numbers())
        .filter_map(|numbers| standardized(numbers.values()))
        .collect();
    if columns.is_empty() {
        return Ok(None);
    }
    let rows: Vec<Vec<f64>> = (0..n)
        .map(|row| columns.iter().map(|column| column[row]).collect())
        .collect();
    drop(columns);
    // The Gram matrix holds both: distances and, through its norm, the effective dimension.
    let gram = in_order(threads, n, work, |one| {
        Ok((0..=one)
            .map(|other| dot(&rows[one], &rows[other]))
            .collect::<Vec<f64>>())
    })?;
    let trace: f64 = (0..n).map(|row| gram[row][row]).sum();
    let squares: f64 = (0..n)
        .flat_map(|one| (0..=one).map(move |other| (one, other)))
        .map(|(one, other)| gram[one][other].powi(2) * if one == other { 1.0 } else { 2.0 })
        .sum();
    if squares <= 0.0 {
        return Ok(None);
    }
    let dimension = trace * trace / squares;
    let distance = |one: usize, other: usize| {
        (gram[one][one] + gram[other][other] - 2.0 * gram[one.max(other)][one.min(other)])
            .max(0.0)
            .sqrt()
    };
    let mut nearest: Vec<f64> = (0..n)
        .map(|one| {
            (0..n)
                .filter(|&other| other != one)
                .map(|other| distance(one, other))
                .fold(f64::INFINITY, f64::min)
        })
        .collect();
    nearest.sort_by(f64::total_cmp);
    let median = nearest[n / 2];
    let share = if dimension >= DIMENSION {
        NEAR
    } else {
        NEAR_IN_FEW
    };
    let mut pairs: BTreeMap<(usize, usize), f64> = BTreeMap::new();
    for one in 0..n {
        for other in one + 1..n {
            let apart = distance(one, other);
            if apart < share * median {
                let _ = pairs.insert((one, other), apart);
            }
        }
    }
    Ok(Some((dimension, pairs.into_keys().collect())))
}

fn dot(one: &[f64], other: &[f64]) -> f64 {
    one.iter().zip(other).map(|(a, b)| a * b).sum()
}

/// Values with mean 0 and standard deviation 1; what is no number stands at the mean.
fn standardized(values: &[f64]) -> Option<Vec<f64>> {
    let known = || values.iter().filter(|value| !value.is_nan());
    let n = known().count() as f64;
    let mean = known().sum::<f64>() / n;
    let sd = (known().map(|value| (value - mean).powi(2)).sum::<f64>() / n).sqrt();
    (n > 1.0 && sd > 0.0 && sd.is_finite()).then(|| {
        values
            .iter()
            .map(|value| {
                if value.is_nan() {
                    0.0
                } else {
                    (value - mean) / sd
                }
            })
            .collect()
    })
}
