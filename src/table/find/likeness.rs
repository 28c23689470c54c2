//! Predictors that nearly equal the outcome, or are named like it (caveat 26).

use crate::base::work::{Cancelled, Work};
use crate::table::Table;
use crate::table::column::{Column, Values};
use crate::table::finding::{Finding, FindingKind, Likeness, Treatment};
use std::collections::BTreeMap;

/// A correlation or an area under the curve from which a predictor nearly equals the outcome.
const LIKE: f64 = 0.98;

/// Such a likeness must be rarer than this by chance among all predictors together.
const CHANCE: f64 = 0.05;

/// The outcome in the form in which predictors are held against it.
enum Outcome {
    Quantity(Vec<f64>),
    /// 0 and 1; NaN where missing.
    YesNo(Vec<f64>),
    Classes(Vec<Option<String>>),
}

/// Finds predictors that nearly equal the outcome, and ones that are named like it.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn find(
    table: &Table,
    outcome: usize,
    predictors: &[usize],
    work: &Work<'_>,
) -> Result<Vec<Finding>, Cancelled> {
    let column = &table.columns()[outcome];
    let form = form(column);
    let others: Vec<usize> = predictors
        .iter()
        .copied()
        .filter(|&at| at != outcome)
        .collect();
    let mut like: Vec<(f64, usize, Likeness)> = Vec::new();
    for (done, &at) in others.iter().enumerate() {
        work.step(done, others.len())?;
        if let Some(found) = likeness(&form, &table.columns()[at], others.len()) {
            let strength = match found {
                Likeness::Correlation(r) => r.abs(),
                Likeness::Auc(area) => area,
                Likeness::SameClasses => 1.0,
            };
            like.push((strength, at, found));
        }
    }
    let mut findings = Vec::new();
    like.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1)));
    if let Some(&(_, at, likeness)) = like.first() {
        let predictor = table.columns()[at].name.clone();
        let kind = FindingKind::EqualsOutcome {
            predictor,
            likeness,
        };
        let mut finding = Finding::new(kind, Treatment::Kept).counting(like.len());
        for (_, at, _) in &like {
            finding.add_column(&table.columns()[*at].name);
        }
        findings.push(finding);
    }
    let mut named = Finding::new(FindingKind::NamedLikeOutcome, Treatment::Kept);
    let similar: Vec<&str> = others
        .iter()
        .map(|&at| table.columns()[at].name.as_str())
        .filter(|name| are_named_alike(&column.name, name))
        .collect();
    // A whole family named like the outcome (“salt 1”, “salt 2”, …) is a way of naming.
    if !similar.is_empty() && similar.len() <= 5 {
        for name in similar {
            named.count += 1;
            named.add_column(name);
        }
        findings.push(named);
    }
    Ok(findings)
}

fn form(column: &Column) -> Outcome {
    let labels = column.labels();
    let mut classes: Vec<&String> = labels.iter().flatten().collect();
    classes.sort_unstable();
    classes.dedup();
    if classes.len() == 2 {
        let second = classes[1].clone();
        let code = |label: &Option<String>| match label {
            Some(label) if *label == second => 1.0,
            Some(_) => 0.0,
            None => f64::NAN,
        };
        return Outcome::YesNo(labels.iter().map(code).collect());
    }
    match &column.values {
        Values::Numbers(numbers) => Outcome::Quantity(numbers.values().to_vec()),
        Values::Texts(_) => Outcome::Classes(labels),
    }
}

fn likeness(outcome: &Outcome, predictor: &Column, n_predictors: usize) -> Option<Likeness> {
    match (outcome, &predictor.values) {
        (Outcome::Quantity(y), Values::Numbers(numbers)) => {
            let (r, n) = correlation(y, numbers.values())?;
            // Among independent normal values, |r| exceeds this about that often.
            let chance = (1.0 - r * r).max(0.0).powf((n as f64 - 2.0) / 2.0);
            (r.abs() >= LIKE && n >= 5 && chance * (n_predictors as f64) < CHANCE)
                .then_some(Likeness::Correlation(r))
        }
        (Outcome::YesNo(y), Values::Numbers(numbers)) => {
            let (area, ones, zeros) = auc(y, numbers.values())?;
            // The chance that one class lies wholly on one side of the other.
            let chance = 2.0 / choose(ones + zeros, ones);
            (area >= LIKE && chance * (n_predictors as f64) < CHANCE).then_some(Likeness::Auc(area))
        }
        (Outcome::YesNo(y), Values::Texts(texts)) => {
            let labels: Vec<Option<String>> = y
                .iter()
                .map(|y| (!y.is_nan()).then(|| y.to_string()))
                .collect();
            are_same_classes(&labels, texts).then_some(Likeness::SameClasses)
        }
        (Outcome::Classes(labels), _) => {
            are_same_classes(labels, &predictor.labels()).then_some(Likeness::SameClasses)
        }
        (Outcome::Quantity(_), Values::Texts(_)) => None,
    }
}

/// Pearson's correlation over the samples that have both values, and how many these are.
#[must_use]
pub fn correlation(y: &[f64], x: &[f64]) -> Option<(f64, usize)> {
    let both = || y.iter().zip(x).filter(|(y, x)| !y.is_nan() && !x.is_nan());
    let n = both().count();
    let count = n as f64;
    let (sum_y, sum_x) = both().fold((0.0, 0.0), |(a, b), (y, x)| (a + y, b + x));
    let (mean_y, mean_x) = (sum_y / count, sum_x / count);
    let (mut yy, mut xx, mut xy) = (0.0, 0.0, 0.0);
    for (y, x) in both() {
        yy += (y - mean_y).powi(2);
        xx += (x - mean_x).powi(2);
        xy += (y - mean_y) * (x - mean_x);
    }
    let r = xy / (yy * xx).sqrt();
    (n > 2 && r.is_finite()).then_some((r.clamp(-1.0, 1.0), n))
}

/// The area under the ROC curve, turned to at least one half, and the sizes of both classes.
fn auc(y: &[f64], x: &[f64]) -> Option<(f64, usize, usize)> {
    let mut both: Vec<(f64, bool)> = y
        .iter()
        .zip(x)
        .filter(|(y, x)| !y.is_nan() && !x.is_nan())
        .map(|(y, x)| (*x, *y == 1.0))
        .collect();
    both.sort_by(|a, b| a.0.total_cmp(&b.0));
    let ones = both.iter().filter(|(_, is_one)| *is_one).count();
    let zeros = both.len() - ones;
    if ones < 2 || zeros < 2 {
        return None;
    }
    // Mann and Whitney's count, ties by halves.
    let (mut below, mut wins) = (0_usize, 0.0);
    for tied in both.chunk_by(|a, b| a.0 == b.0) {
        let ones = tied.iter().filter(|(_, is_one)| *is_one).count();
        let zeros = tied.len() - ones;
        wins += ones as f64 * (below as f64 + zeros as f64 / 2.0);
        below += zeros;
    }
    let area: f64 = wins / (ones as f64 * zeros as f64);
    Some((area.max(1.0 - area), ones, zeros))
}

fn choose(n: usize, k: usize) -> f64 {
    (1..=k.min(n - k)).fold(1.0, |ways, at| ways * (n + 1 - at) as f64 / at as f64)
}

/// Whether labels and classes stand for each other one to one, with classes that repeat.
fn are_same_classes(one: &[Option<String>], other: &[Option<String>]) -> bool {
    let mut there: BTreeMap<&str, &str> = BTreeMap::new();
    let mut back: BTreeMap<&str, &str> = BTreeMap::new();
    let mut n = 0;
    for (a, b) in one.iter().zip(other) {
        let (Some(a), Some(b)) = (a, b) else { continue };
        n += 1;
        if *there.entry(a).or_insert(b) != b || *back.entry(b).or_insert(a) != a {
            return false;
        }
    }
    there.len() > 1 && there.len() * 3 <= n
}

/// Whether two names share their first word, or one is contained in the other.
fn are_named_alike(outcome: &str, predictor: &str) -> bool {
    let words = |name: &str| -> Vec<String> {
        name.to_lowercase()
            .split(|letter: char| !letter.is_alphanumeric())
            .filter(|word| !word.is_empty())
            .map(str::to_owned)
            .collect()
    };
    let (one, other) = (words(outcome), words(predictor));
    let is_long = |word: &String| word.chars().count() >= 4;
    match (one.first(), other.first()) {
        (Some(first), Some(second)) => {
            (first == second && is_long(first)) || (one.concat() == other.concat())
        }
        _ => false,
    }
}
