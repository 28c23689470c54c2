//! The careful interval of the judgement, beside the plain one.

use crate::base::number::Precision;
use crate::base::problem::Problem;
use crate::eval::fact::{Fact, Facts};
use crate::eval::kind::data::Dataset;
use crate::eval::kind::fit::facts::error_digits;
use crate::eval::kind::fit::measures::{Measure, Sort};
use crate::eval::kind::fit::performance::paired_loss;
use crate::eval::kind::fit::scene::{Predictions, Scene};
use crate::eval::kind::fit::{Fitted, Judged};
use crate::numeric::measure::{CarefulInterval, ErrorsOfPart, careful_interval};
use crate::numeric::procedure::{OuterFit, PairFit};
use std::collections::BTreeMap;

/// With more parts the procedure would be repeated for more than 190 pairs in each repeat.
const MOST_PARTS: usize = 20;

/// The careful interval, and how often the procedure was repeated for it.
#[derive(Clone, Copy, Debug)]
pub struct Careful {
    /// The interval of the mean loss over units.
    pub interval: CarefulInterval,
    /// Repetitions without a pair of parts.
    pub n_refits: usize,
}

/// Whether a plan of so many outer parts can have a careful interval.
///
/// # Errors
/// What would be needed.
pub fn check(n_parts: usize) -> Result<(), Problem> {
    if (3..=MOST_PARTS).contains(&n_parts) {
        return Ok(());
    }
    Err(Problem::new(
        "careful-interval-parts",
        format!(
            "The careful interval needs from 3 to {MOST_PARTS} outer parts, because the procedure \
             is repeated without each pair of them; there are {n_parts}."
        ),
    )
    .mend("Change the number of outer parts, or take the interval over units alone."))
}

/// The interval from the outer fits and those without each pair of parts. `None` when a loss is not
/// known.
#[must_use]
pub fn careful(
    scene: &Scene<'_>,
    data: &Dataset,
    n_parts: usize,
    outer: &[OuterFit],
    pairs: &[PairFit],
) -> Option<Careful> {
    let mut parts = Vec::with_capacity(outer.len());
    for fit in outer {
        let own = losses(scene, fit)?;
        let mut inner = Vec::new();
        for pair in pairs {
            let (first, second) = pair.parts;
            if pair.repeat != fit.repeat || (first != fit.part && second != fit.part) {
                continue;
            }
            let mut other = losses(scene, &pair.fit)?;
            other.retain(|row, _| !own.contains_key(row));
            inner.extend(unit_means(data, &other));
        }
        parts.push(ErrorsOfPart {
            inner,
            outer: unit_means(data, &own),
        });
    }
    let all: Vec<f64> = parts.iter().flat_map(|part| &part.outer).copied().collect();
    let plain = all.iter().sum::<f64>() / all.len() as f64;
    let mut units: Vec<usize> = scene.rows.iter().map(|&row| data.units[row]).collect();
    units.sort_unstable();
    units.dedup();
    let interval = careful_interval(&parts, n_parts, units.len(), plain, 0.95)?;
    Some(Careful {
        interval,
        n_refits: pairs.len(),
    })
}

/// The loss of each held-out row of a fit.
fn losses(scene: &Scene<'_>, fit: &OuterFit) -> Option<BTreeMap<usize, f64>> {
    let own = Scene {
        rows: &fit.rows,
        ..*scene
    };
    let mut predictions = Predictions::new(&own);
    let hazard = fit.hazards.as_ref().map(|hazards| &hazards.fitted);
    for place in 0..fit.rows.len() {
        let linear: Vec<f64> = fit.linear.row(place).iter().copied().collect();
        predictions.put(&own, place, 0, &linear, hazard);
    }
    let losses = own.losses(paired_loss(own.sort()), &predictions)?;
    let is_known = losses.iter().all(|loss| loss.is_finite());
    is_known.then(|| fit.rows.iter().copied().zip(losses).collect())
}

/// The mean loss of each unit, in the order of the units.
fn unit_means(data: &Dataset, losses: &BTreeMap<usize, f64>) -> Vec<f64> {
    let mut units: BTreeMap<usize, (f64, f64)> = BTreeMap::new();
    for (&row, loss) in losses {
        let (sum, count) = units.entry(data.units[row]).or_default();
        *sum += loss;
        *count += 1.0;
    }
    units.values().map(|(sum, count)| sum / count).collect()
}

/// Publishes the interval, where there is one.
pub(super) fn publish(facts: &mut Facts, fitted: &Fitted, judged: &Judged) {
    let Some(Careful { interval, n_refits }) = judged.careful else {
        return;
    };
    let sort = fitted.sort();
    let (what, is_root) = match sort {
        Sort::Measured => ("root mean squared error", true),
        Sort::YesNo | Sort::Classes => ("log loss", false),
        Sort::Count => ("mean deviance", false),
        Sort::Time => ("Brier score at the middle time", false),
    };
    let (unit, digits) = if is_root {
        let unit = Measure::Rmse.unit(&fitted.prepared.data.outcome.unit);
        (unit, error_digits(fitted))
    } else {
        ("", Precision::Decimals(3))
    };
    let told = |value: f64| {
        let value = value.max(0.0);
        if is_root { value.sqrt() } else { value }
    };
    let ends = [
        ("careful error", interval.estimate, "The estimate"),
        ("careful error low", interval.lower, "The lower end"),
        ("careful error high", interval.upper, "The upper end"),
    ];
    for (name, value, which) in ends {
        facts.push(Fact::number(
            name,
            told(value),
            unit,
            digits,
            &format!(
                "{which} of the careful 95 % interval of the {what} over units (Bates, Hastie & Tibshirani 2024), corrected for the smaller training parts; it is about the procedure on samples of this size, not about the final model."
            ),
        ));
    }
    facts.push(Fact::number(
        "careful interval widening",
        interval.standard_error / interval.plain_standard_error,
        "",
        Precision::Decimals(2),
        "How many times the standard error of plain cross-validation the careful one is.",
    ));
    facts.push(Fact::count(
        "careful refits",
        n_refits,
        "How often the whole procedure was repeated without a pair of outer parts for the careful interval.",
    ));
}
