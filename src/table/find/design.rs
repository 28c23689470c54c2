//! The design: whether the outcome goes together with a batch or the order of measurement
//! (caveats 15 and 17).

use crate::table::Table;
use crate::table::column::{Column, Values};
use crate::table::find::likeness::correlation;
use crate::table::finding::{Association, Finding, FindingKind, Treatment};
use std::collections::{BTreeMap, BTreeSet};

/// Cramér's V from which it is said.
const V: f64 = 0.3;

/// The share of variance between batches from which it is said.
const ETA_SQUARED: f64 = 0.14;

/// The share of samples in batches of one class from which it is said, however small the batches.
const ONE_CLASS: f64 = 0.8;

/// A single batch of one class is said from this many samples on; smaller ones are chance.
const LARGE: usize = 5;

/// Spearman's correlation with the order from which it is said.
const RANK: f64 = 0.3;

/// More unlike values than this make a numeric outcome a quantity rather than classes.
const CLASSES: usize = 10;

/// Whether the outcome goes together with a batch, and whether batches hold a single class.
#[must_use]
pub fn batch(table: &Table, outcome: usize, batch: usize) -> Vec<Finding> {
    let (column, batches) = (&table.columns()[outcome], table.columns()[batch].labels());
    let name = table.columns()[batch].name.clone();
    let mut findings = Vec::new();
    let mut report = |kind, count: usize| {
        let mut finding = Finding::new(kind, Treatment::Kept).counting(count);
        finding.add_column(&name);
        findings.push(finding);
    };
    match classes(column) {
        Some(classes) => {
            let table = cross(&classes, &batches);
            if let Some((v, corrected)) = cramers_v(&table) {
                // Many small batches give a large V by chance; the corrected one must agree.
                if v >= V && corrected >= V / 2.0 {
                    let strength = Association::CramersV(v);
                    report(
                        FindingKind::BatchWithOutcome {
                            batch: name.clone(),
                            strength,
                        },
                        table.len(),
                    );
                }
            }
            let sizes: Vec<(usize, bool)> = table
                .values()
                .map(|counts| (counts.values().sum(), counts.len() == 1))
                .collect();
            let all: usize = sizes.iter().map(|(size, _)| size).sum();
            let in_one: usize = sizes
                .iter()
                .filter(|(_, one)| *one)
                .map(|(size, _)| size)
                .sum();
            let n_classes = classes.iter().flatten().collect::<BTreeSet<_>>().len();
            let share = in_one as f64 / all.max(1) as f64;
            let has_large = sizes.iter().any(|(size, one)| *one && *size >= LARGE);
            let are_batches = sizes.iter().any(|(size, _)| *size > 1);
            if n_classes > 1 && table.len() > 1 && are_batches && (has_large || share >= ONE_CLASS)
            {
                report(
                    FindingKind::BatchOfOneClass {
                        batch: name.clone(),
                        share,
                    },
                    in_one,
                );
            }
        }
        None => {
            let Some(numbers) = column.as_numbers() else {
                return findings;
            };
            if let Some((eta, corrected, count)) = eta_squared(numbers.values(), &batches)
                && eta >= ETA_SQUARED
                && corrected >= ETA_SQUARED / 2.0
            {
                let strength = Association::EtaSquared(eta);
                report(
                    FindingKind::BatchWithOutcome {
                        batch: name.clone(),
                        strength,
                    },
                    count,
                );
            }
        }
    }
    findings
}

/// The classes of an outcome, if it has classes.
fn classes(column: &Column) -> Option<Vec<Option<String>>> {
    let labels = column.labels();
    let unlike: BTreeSet<&String> = labels.iter().flatten().collect();
    match column.values {
        Values::Texts(_) => Some(labels),
        Values::Numbers(_) if unlike.len() <= CLASSES && unlike.len() * 3 <= labels.len() => {
            Some(labels)
        }
        Values::Numbers(_) => None,
    }
}

type Cross = BTreeMap<String, BTreeMap<String, usize>>;

/// How often each class stands in each batch.
#[must_use]
pub fn cross(classes: &[Option<String>], batches: &[Option<String>]) -> Cross {
    let mut cross = Cross::new();
    for (class, batch) in classes.iter().zip(batches) {
        if let (Some(class), Some(batch)) = (class, batch) {
            *cross
                .entry(batch.clone())
                .or_default()
                .entry(class.clone())
                .or_default() += 1;
        }
    }
    cross
}

/// Cramér's V of a table of counts by batch and class, as is and corrected for bias.
///
/// V = √(χ² / (n · min(r − 1, c − 1))); corrected after Bergsma (2013),
/// doi 10.1016/j.jkss.2012.10.002.
#[must_use]
pub fn cramers_v(cross: &Cross) -> Option<(f64, f64)> {
    let mut by_class: BTreeMap<&str, f64> = BTreeMap::new();
    let mut n = 0.0;
    for counts in cross.values() {
        for (class, &count) in counts {
            *by_class.entry(class).or_default() += count as f64;
            n += count as f64;
        }
    }
    let (rows, columns) = (cross.len() as f64, by_class.len() as f64);
    if rows < 2.0 || columns < 2.0 || n < 3.0 {
        return None;
    }
    let mut chi_squared = 0.0;
    for counts in cross.values() {
        let in_row: f64 = counts.values().map(|&count| count as f64).sum();
        for (class, in_class) in &by_class {
            let expected = in_row * in_class / n;
            let observed = counts.get(*class).map_or(0.0, |&count| count as f64);
            chi_squared += (observed - expected).powi(2) / expected;
        }
    }
    let phi = chi_squared / n;
    let v = (phi / (rows - 1.0).min(columns - 1.0)).sqrt();
    let bias = (rows - 1.0) * (columns - 1.0) / (n - 1.0);
    let shrunk = |k: f64| k - (k - 1.0).powi(2) / (n - 1.0);
    let least = (shrunk(rows) - 1.0).min(shrunk(columns) - 1.0);
    let corrected = if least > 0.0 {
        ((phi - bias).max(0.0) / least).sqrt()
    } else {
        0.0
    };
    Some((v, corrected))
}

/// The share of variance between batches: η² = SSB / SST; corrected for the number of batches
/// (Kelley's ε²); and the number of batches.
#[must_use]
pub fn eta_squared(y: &[f64], batches: &[Option<String>]) -> Option<(f64, f64, usize)> {
    let mut groups: BTreeMap<&str, Vec<f64>> = BTreeMap::new();
    for (y, batch) in y.iter().zip(batches) {
        if let (false, Some(batch)) = (y.is_nan(), batch) {
            groups.entry(batch).or_default().push(*y);
        }
    }
    let n: usize = groups.values().map(Vec::len).sum();
    if groups.len() < 2 || n <= groups.len() {
        return None;
    }
    let mean = groups.values().flatten().sum::<f64>() / n as f64;
    let (mut between, mut total) = (0.0, 0.0);
    for group in groups.values() {
        let own = group.iter().sum::<f64>() / group.len() as f64;
        between += group.len() as f64 * (own - mean).powi(2);
        total += group.iter().map(|y| (y - mean).powi(2)).sum::<f64>();
    }
    if total <= 0.0 {
        return None;
    }
    let eta = between / total;
    let corrected = 1.0 - (1.0 - eta) * (n as f64 - 1.0) / (n - groups.len()) as f64;
    Some((eta, corrected, groups.len()))
}

/// Whether the outcome follows the order of measurement.
#[must_use]
pub fn order(table: &Table, outcome: usize, order: usize) -> Option<Finding> {
    let y = in_numbers(&table.columns()[outcome])?;
    let x = in_numbers(&table.columns()[order])?;
    let (rank_correlation, n) = rank_correlation(&y, &x)?;
    // Beyond 2.58 standard errors, so that a dozen samples do not cry wolf.
    let is_no_chance = rank_correlation.abs() * (n as f64 - 1.0).sqrt() >= 2.58;
    (rank_correlation.abs() >= RANK && is_no_chance).then(|| {
        let kind = FindingKind::OrderWithOutcome {
            order: table.columns()[order].name.clone(),
            rank_correlation,
        };
        let mut finding = Finding::new(kind, Treatment::Kept).counting(n);
        finding.add_column(&table.columns()[order].name);
        finding
    })
}

/// Spearman's rank correlation of the pairs that are both known, and how many these are.
#[must_use]
pub fn rank_correlation(y: &[f64], x: &[f64]) -> Option<(f64, usize)> {
    let both: Vec<usize> = (0..y.len())
        .filter(|&at| !y[at].is_nan() && !x[at].is_nan())
        .collect();
    let pick = |values: &[f64]| ranks(&both.iter().map(|&at| values[at]).collect::<Vec<_>>());
    correlation(&pick(y), &pick(x))
}

/// Numbers as they are; two classes as 0 and 1; dates and other sortable labels by their order.
fn in_numbers(column: &Column) -> Option<Vec<f64>> {
    let Values::Texts(texts) = &column.values else {
        return column.as_numbers().map(|numbers| numbers.values().to_vec());
    };
    let mut unlike: Vec<&String> = texts.iter().flatten().collect();
    unlike.sort_unstable();
    unlike.dedup();
    let are_dates = unlike
        .iter()
        .all(|text| text.len() >= 10 && text.as_bytes()[4] == b'-');
    (unlike.len() == 2 || are_dates).then(|| {
        texts
            .iter()
            .map(|text| {
                let at = text
                    .as_ref()
                    .and_then(|text| unlike.binary_search(&text).ok());
                at.map_or(f64::NAN, |at| at as f64)
            })
            .collect()
    })
}

/// Ranks from 1; equal values share the mean of theirs.
fn ranks(values: &[f64]) -> Vec<f64> {
    let mut order: Vec<usize> = (0..values.len()).collect();
    order.sort_by(|&a, &b| values[a].total_cmp(&values[b]));
    let mut ranks = vec![0.0; values.len()];
    let mut before = 0;
    for tied in order.chunk_by(|&a, &b| values[a] == values[b]) {
        let mean = before as f64 + (tied.len() as f64 + 1.0) / 2.0;
        for &at in tied {
            ranks[at] = mean;
        }
        before += tied.len();
    }
    ranks
}
