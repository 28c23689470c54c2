//! Judging the whole procedure on outer parts that it has not seen.

use crate::base::thread::{Threads, in_order};
use crate::base::work::Work;
use crate::numeric::matrix::Matrix;
use crate::numeric::parts::{Assignment, Split};
use crate::numeric::path::Path;
use crate::numeric::procedure::hazard::Hazard;
use crate::numeric::procedure::tune::{Cut, Reach, tune};
use crate::numeric::procedure::{
    Halt, Level, Material, PartFit, Procedure, ProcedureError, Tally, chosen_predictors,
};
use crate::numeric::response::Response;

/// The procedure on one outer training part, and what it predicted for the held-out part.
#[derive(Clone, Debug)]
pub struct OuterFit {
    /// The repeat, from 0.
    pub repeat: usize,
    /// The part, from 0.
    pub part: usize,
    /// The chosen lasso share.
    pub share: f64,
    /// The chosen strength.
    pub strength: f64,
    /// The chosen weights of the blocks of predictors; empty without blocks.
    pub block_weights: Vec<f64>,
    /// Whether the chosen strength lies at an end of its range.
    pub at_edge: bool,
    /// How many predictors were chosen.
    pub n_chosen: usize,
    /// The held-out rows.
    pub rows: Vec<usize>,
    /// The linear predictors of each held-out row, rows × 1 or rows × classes; offsets not included.
    pub linear: Matrix,
    /// The linear predictors of the model without predictors, fitted to the training part.
    pub baseline: Vec<f64>,
    /// For times: what turns a linear predictor into a share without the event.
    pub hazards: Option<Hazards>,
}

/// The cumulative hazards of a training part.
#[derive(Clone, Debug, PartialEq)]
pub struct Hazards {
    /// At a linear predictor of zero of the fit.
    pub fitted: Hazard,
    /// Of the model without predictors.
    pub baseline: Hazard,
}

/// All outer fits of a plan.
#[derive(Clone, Debug)]
pub struct HeldOut {
    /// One per repeat and part, in that order.
    pub fits: Vec<OuterFit>,
    /// Counts over all fits.
    pub tally: Tally,
}

/// Carries the procedure out on every outer training part of a plan and predicts the rows that
/// were held out.
///
/// # Errors
/// The first part, in order, in which the procedure cannot be carried out.
pub fn nested(
    material: &Material<'_>,
    procedure: &Procedure<'_>,
    plan: &Assignment,
    purpose: &str,
    threads: Threads,
    work: &Work<'_>,
) -> Result<HeldOut, Halt> {
    let splits: Vec<(usize, usize, Split)> = (0..plan.n_repeats())
        .flat_map(|repeat| {
            plan.splits(repeat)
                .into_iter()
                .enumerate()
                .map(move |(part, split)| (repeat, part, split))
        })
        .collect();
    let silent = work.silent();
    let results = in_order(threads, splits.len(), work, |at| {
        let (repeat, part, split) = &splits[at];
        let purpose = format!("{purpose} {repeat} {part}");
        match one_split(material, procedure, split, &purpose, &silent) {
            Ok((fit, tally)) => Ok(Ok((
                OuterFit {
                    repeat: *repeat,
                    part: *part,
                    ..fit
                },
                tally,
            ))),
            Err(Halt::Cancelled) => Err(crate::base::work::Cancelled),
            Err(Halt::Failed(error)) => Ok(Err(error)),
        }
    })?;
    let mut held_out = HeldOut {
        fits: Vec::with_capacity(results.len()),
        tally: Tally::default(),
    };
    for result in results {
        let (fit, tally) = result?;
        held_out.tally.merge(&tally);
        held_out.fits.push(fit);
    }
    Ok(held_out)
}

/// The procedure without two parts of a repeat, and what it predicted for both.
#[derive(Clone, Debug)]
pub struct PairFit {
    /// The repeat, from 0.
    pub repeat: usize,
    /// The two parts.
    pub parts: (usize, usize),
    /// The fit; its rows are those of both parts, rising.
    pub fit: OuterFit,
}

/// Carries the procedure out without each pair of outer parts of a plan, and predicts both: what the
/// careful interval needs beside the outer fits (Bates, Hastie & Tibshirani 2024).
///
/// # Errors
/// The first pair, in order, in which the procedure cannot be carried out.
pub fn without_pairs(
    material: &Material<'_>,
    procedure: &Procedure<'_>,
    plan: &Assignment,
    purpose: &str,
    threads: Threads,
    work: &Work<'_>,
) -> Result<(Vec<PairFit>, Tally), Halt> {
    let mut pairs: Vec<(usize, (usize, usize), Split)> = Vec::new();
    for repeat in 0..plan.n_repeats() {
        let splits = plan.splits(repeat);
        for first in 0..splits.len() {
            for second in first + 1..splits.len() {
                let both = [&splits[first], &splits[second]];
                let held: Vec<usize> = both
                    .iter()
                    .flat_map(|split| split.held_out())
                    .copied()
                    .collect();
                let training: Vec<usize> = both[0]
                    .training()
                    .iter()
                    .copied()
                    .filter(|row| both[1].held_out().binary_search(row).is_err())
                    .collect();
                let split = Split::with_held_out(&training, &held, &material.structure).map_err(
                    |error| ProcedureError::Plan {
                        level: Level::Outer,
                        error,
                    },
                )?;
                pairs.push((repeat, (first, second), split));
            }
        }
    }
    let silent = work.silent();
    let results = in_order(threads, pairs.len(), work, |at| {
        let (repeat, (first, second), split) = &pairs[at];
        let purpose = format!("{purpose} {repeat} {first} {second}");
        match one_split(material, procedure, split, &purpose, &silent) {
            Ok(found) => Ok(Ok(found)),
            Err(Halt::Cancelled) => Err(crate::base::work::Cancelled),
            Err(Halt::Failed(error)) => Ok(Err(error)),
        }
    })?;
    let mut tally = Tally::default();
    let mut fits = Vec::with_capacity(results.len());
    for (result, (repeat, parts, _)) in results.into_iter().zip(&pairs) {
        let (fit, counts) = result?;
        tally.merge(&counts);
        fits.push(PairFit {
            repeat: *repeat,
            parts: *parts,
            fit,
        });
    }
    Ok((fits, tally))
}

/// Carries the procedure out on the training rows of one split and predicts its held-out rows.
///
/// # Errors
/// When the procedure cannot be carried out, or the work was called off.
pub fn one_split(
    material: &Material<'_>,
    procedure: &Procedure<'_>,
    split: &Split,
    purpose: &str,
    work: &Work<'_>,
) -> Result<(OuterFit, Tally), Halt> {
    let tuned = tune(material, procedure, split, purpose, Reach::Chosen, work)?;
    let at = tuned.strength_at;
    let k = tuned.fit.path.n_linear();
    let predicted = tuned.fit.predict(material, split.held_out());
    let hazards = hazards(material, &tuned.fit, at, split.training());
    let n_strengths = tuned
        .curves
        .get(tuned.share_at)
        .map(|curve| curve.strengths.len());
    let fit = OuterFit {
        repeat: 0,
        part: 0,
        share: tuned.share,
        strength: tuned.strength,
        block_weights: tuned.block_weights,
        // The strong end of a sparse range is the empty model, beyond which nothing changes; only
        // ridge has more to find there.
        // The weak end of a range that was cut is where the fit follows its samples anyway.
        at_edge: n_strengths.is_some_and(|count| {
            let is_weakest = at + 1 == count && tuned.cut == Cut::No;
            count > 1 && (is_weakest || (at == 0 && tuned.share == 0.0))
        }),
        n_chosen: n_chosen(&tuned.fit.path, at),
        rows: split.held_out().to_vec(),
        linear: predicted.columns(at * k, k).into_owned(),
        baseline: material
            .response
            .null_linear(split.training(), material.weights),
        hazards,
    };
    Ok((fit, tuned.tally))
}

/// How many predictors have a coefficient other than zero, in any class.
fn n_chosen(path: &Path, at: usize) -> usize {
    if path.n_linear() == 1 {
        path.info(at).n_chosen
    } else {
        chosen_predictors(path, at).len()
    }
}

/// The hazards of a fit to times at one of its strengths.
#[must_use]
pub fn hazards(
    material: &Material<'_>,
    fit: &PartFit<'_>,
    at: usize,
    training: &[usize],
) -> Option<Hazards> {
    let Response::Time {
        time,
        event,
        strata,
        ..
    } = material.response
    else {
        return None;
    };
    let eta = fit.predict(material, training);
    let known: Vec<(f64, bool, usize)> = training
        .iter()
        .map(|&row| (time[row], event[row], strata.as_ref().map_or(0, |s| s[row])))
        .collect();
    let weights: Vec<f64> = training.iter().map(|&row| material.weight(row)).collect();
    let zero = vec![0.0; training.len()];
    Some(Hazards {
        fitted: Hazard::of(&known, eta.column(at).as_slice(), &weights),
        baseline: Hazard::of(&known, &zero, &weights),
    })
}
