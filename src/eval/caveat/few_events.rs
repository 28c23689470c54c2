//! Remarks on few events or rare classes.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::{Fitted, Sort};
use std::collections::BTreeMap;

/// Below this number of units with an event, or of the rarest class, it is a caution; a convention.
const CAUTION: usize = 40;

/// With fewer of the rarest class in an outer training part nothing can be learnt of it: a stop; a
/// convention.
const STOP: usize = 10;

/// Below this number of the rarest class in a held-out part the part cannot be scored by itself; a
/// convention.
const PART: usize = 5;

/// The share of the rarer class below which accuracy misleads; a convention.
const MINORITY: f64 = 0.2;

/// The class of each analysed sample, or whether its event was seen; `None` for other outcomes.
fn strata(fitted: &Fitted) -> Option<Vec<usize>> {
    let scene = fitted.scene();
    match fitted.sort() {
        Sort::Measured | Sort::Count => None,
        Sort::YesNo | Sort::Classes => Some(scene.classes()),
        Sort::Time => Some(scene.events().into_iter().map(usize::from).collect()),
    }
}

/// The rarest that matters: of classes the rarest, of times the events. Its name and the samples.
fn rarest(fitted: &Fitted) -> Option<(String, usize, Vec<usize>)> {
    let rows = &fitted.prepared.data.analysed;
    let mut of: BTreeMap<usize, Vec<usize>> = BTreeMap::new();
    for (row, stratum) in rows.iter().zip(strata(fitted)?) {
        of.entry(stratum).or_default().push(*row);
    }
    if fitted.sort() == Sort::Time {
        return of.remove(&1).map(|own| ("the event".to_owned(), 1, own));
    }
    let (stratum, own) = of.into_iter().min_by_key(|(_, own)| own.len())?;
    let names = &fitted.prepared.data.outcome.classes;
    let name = names.get(stratum).cloned().unwrap_or_default();
    Some((format!("“{name}”"), stratum, own))
}

/// A remark on how many independent units there are of the rarest.
#[must_use]
pub fn check(fitted: &Fitted) -> Option<Caveat> {
    let (name, stratum, own) = rarest(fitted)?;
    let data = &fitted.prepared.data;
    let units = data.count_units(&own);
    let strata = strata(fitted)?;
    // The least that any outer training part holds.
    let place: BTreeMap<usize, usize> = data.analysed.iter().copied().zip(strata).collect();
    let in_training = fitted.judged.as_ref().and_then(|judged| {
        (0..judged.plan.n_repeats())
            .flat_map(|repeat| judged.plan.splits(repeat))
            .map(|split| {
                let rows: Vec<usize> = split
                    .training()
                    .iter()
                    .copied()
                    .filter(|row| place.get(row) == Some(&stratum))
                    .collect();
                data.count_units(&rows)
            })
            .min()
    });
    let least = in_training.unwrap_or(units);
    let shown = number::text(units as f64, Precision::Whole);
    let (severity, text) = if least < STOP {
        (
            Severity::Stop,
            format!(
                "Only {} independent units with {name} are left in a training part; from so few \
                 nothing can be learnt that would hold.",
                number::text(least as f64, Precision::Whole)
            ),
        )
    } else if units < CAUTION {
        (
            Severity::Caution,
            format!(
                "Only {shown} independent units are with {name}. They, and not the number of \
                 samples, decide how much can be learnt."
            ),
        )
    } else {
        return None;
    };
    Some(
        Caveat::new("few-events", severity, "Few events", text)
            .because("independent units", units as f64, Precision::Whole)
            .because(
                "least in an outer training part",
                least as f64,
                Precision::Whole,
            )
            .threshold("fewer than 40; a stop below 10 in an outer training part")
            .origin(Origin::Convention),
    )
}

/// A remark when held-out parts hold too few of the rarest to be scored one by one.
#[must_use]
pub fn small_parts(fitted: &Fitted) -> Option<Caveat> {
    let (name, stratum, _) = rarest(fitted)?;
    let strata = strata(fitted)?;
    let of: BTreeMap<usize, usize> = fitted
        .prepared
        .data
        .analysed
        .iter()
        .copied()
        .zip(strata)
        .collect();
    let fits = &fitted.judged.as_ref()?.held_out.fits;
    let least = fits
        .iter()
        .map(|fit| {
            fit.rows
                .iter()
                .filter(|row| of.get(row) == Some(&stratum))
                .count()
        })
        .min()?;
    if least >= PART {
        return None;
    }
    let text = format!(
        "Some held-out parts hold fewer than five samples with {name}, too few to score a part by \
         itself. Losses were taken over all parts together, and pairs were compared within parts."
    );
    Some(
        Caveat::new("small-parts", Severity::Note, "Small held-out parts", text)
            .because("least in a held-out part", least as f64, Precision::Whole)
            .threshold("fewer than 5")
            .origin(Origin::Convention),
    )
}

/// A remark when always giving the commoner answer would already be right most of the time
/// (imbalance is no fault in itself: van den Goorbergh and others 2022).
#[must_use]
pub fn imbalance(fitted: &Fitted) -> Option<Caveat> {
    if !matches!(fitted.sort(), Sort::YesNo | Sort::Classes) {
        return None;
    }
    let scene = fitted.scene();
    let classes = scene.classes();
    let mut counts: BTreeMap<usize, usize> = BTreeMap::new();
    for class in &classes {
        *counts.entry(*class).or_insert(0) += 1;
    }
    let n = classes.len() as f64;
    let (common, most) = counts.iter().max_by_key(|(_, count)| **count)?;
    let least = counts.values().min()?;
    let share = *least as f64 / n;
    if share >= MINORITY {
        return None;
    }
    let names = &fitted.prepared.data.outcome.classes;
    let text = format!(
        "Always answering “{}” would already be right in {} of the samples, so that the share of \
         right answers says little here.",
        names.get(*common).cloned().unwrap_or_default(),
        number::text(*most as f64 / n, Precision::Percent(0))
    );
    Some(
        Caveat::new("imbalance", Severity::Note, "Unbalanced classes", text)
            .because("share of the rarest class", share, Precision::Percent(0))
            .threshold("below 20 %")
            .origin(Origin::Convention),
    )
}
