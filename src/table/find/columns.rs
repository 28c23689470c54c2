//! Predictors without information: empty, constant, equal to another; and the shares of values
//! that are missing or below a limit.

use crate::base::work::{Cancelled, Work};
use crate::table::Table;
use crate::table::column::{Censored, Column, Value, Values};
use crate::table::finding::{Finding, FindingKind, Treatment};
use std::collections::HashMap;
use std::hash::{DefaultHasher, Hash, Hasher};

/// From this share of missing values on, it is said (caveat 21).
const MISSING: f64 = 0.05;

/// From this share of one predictor below a limit on, it is said (caveat 22).
const BELOW: f64 = 0.30;

/// What is to be noticed about the predictors one by one.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn find(
    table: &Table,
    predictors: &[usize],
    work: &Work<'_>,
) -> Result<Vec<Finding>, Cancelled> {
    let mut empty = Finding::new(FindingKind::EmptyColumns, Treatment::Kept);
    let mut constant = Finding::new(FindingKind::ConstantColumns, Treatment::Kept);
    let mut equal = Finding::new(FindingKind::EqualColumns, Treatment::Kept);
    let mut below = Finding::new(
        FindingKind::BelowLimitShare { largest: 0.0 },
        Treatment::Kept,
    );
    let (mut missing, mut values, mut largest) = (0_usize, 0_usize, 0.0_f64);
    let mut by_hash: HashMap<u64, Vec<usize>> = HashMap::new();
    for (done, &at) in predictors.iter().enumerate() {
        work.step(done, predictors.len())?;
        let column = &table.columns()[at];
        let n_missing = n_missing(column);
        missing += n_missing;
        values += column.len();
        let share = n_below(column) as f64 / column.len().max(1) as f64;
        if share >= BELOW {
            below.count += 1;
            below.add_column(&column.name);
            largest = largest.max(share);
        }
        if n_missing == column.len() {
            empty.count += 1;
            empty.add_column(&column.name);
            continue;
        }
        if is_constant(column) {
            constant.count += 1;
            constant.add_column(&column.name);
            continue;
        }
        let known = by_hash.entry(hash(column)).or_default();
        if let Some(&other) = known
            .iter()
            .find(|&&other| are_equal(column, &table.columns()[other]))
        {
            equal.count += 1;
            equal.add_column(&column.name);
            equal.add_example(&table.columns()[other].name);
        } else {
            known.push(at);
        }
    }
    below.kind = FindingKind::BelowLimitShare { largest };
    let share = missing as f64 / values.max(1) as f64;
    let mut shares = Finding::new(FindingKind::MissingShare { share }, Treatment::Kept);
    shares.count = if share >= MISSING { missing } else { 0 };
    let findings = [empty, constant, equal, shares, below];
    Ok(findings
        .into_iter()
        .filter(|finding| finding.count > 0)
        .collect())
}

/// How many values are missing (one that is known by a limit is not).
#[must_use]
pub fn n_missing(column: &Column) -> usize {
    match &column.values {
        Values::Numbers(numbers) => {
            let nothing = numbers
                .values()
                .iter()
                .filter(|value| value.is_nan())
                .count();
            nothing - numbers.censored().len()
        }
        Values::Texts(texts) => texts.iter().filter(|text| text.is_none()).count(),
    }
}

/// How many values are below a limit.
#[must_use]
pub fn n_below(column: &Column) -> usize {
    column.as_numbers().map_or(0, |numbers| {
        let is_below = |(_, limit): &&(u32, Censored)| matches!(limit, Censored::Below(_));
        numbers.censored().iter().filter(is_below).count()
    })
}

/// Whether all values that there are, are the same, and there is one.
#[must_use]
pub fn is_constant(column: &Column) -> bool {
    let mut first = None;
    (0..column.len())
        .map(|row| column.value(row))
        .filter(|value| *value != Value::Missing)
        .all(|value| *first.get_or_insert(value) == value)
        && first.is_some()
}

fn hash(column: &Column) -> u64 {
    let mut hasher = DefaultHasher::new();
    match &column.values {
        Values::Numbers(numbers) => {
            for value in numbers.values() {
                // All that is no number hashes alike; equality is checked value by value.
                let bits = if value.is_nan() {
                    1
                } else {
                    (value + 0.0).to_bits()
                };
                bits.hash(&mut hasher);
            }
        }
        Values::Texts(texts) => texts.hash(&mut hasher),
    }
    hasher.finish()
}

fn are_equal(one: &Column, other: &Column) -> bool {
    one.len() == other.len() && (0..one.len()).all(|row| one.value(row) == other.value(row))
}
