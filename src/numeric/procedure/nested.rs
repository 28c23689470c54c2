//! Judging the whole procedure on outer parts that it has not seen.

use crate::base::thread::{Threads, in_order};
use crate::base::work::Work;
use crate::numeric::parts::{Assignment, Split};
use crate::numeric::procedure::tune::{Reach, tune};
use crate::numeric::procedure::{Halt, Material, Procedure, Tally};

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
    /// Whether the chosen strength lies at an end of its range.
    pub at_edge: bool,
    /// How many predictors were chosen.
    pub n_chosen: usize,
    /// The held-out rows.
    pub rows: Vec<usize>,
    /// The linear predictor of each held-out row.
    pub predicted: Vec<f64>,
    /// The prediction of the model without predictors for the held-out rows: the weighted mean
    /// outcome of the training part.
    pub baseline: f64,
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
    let predicted = tuned.fit.predict(material, split.held_out());
    let at = tuned.strength_at;
    let n_strengths = tuned
        .curves
        .get(tuned.share_at)
        .map(|curve| curve.strengths.len());
    let fit = OuterFit {
        repeat: 0,
        part: 0,
        share: tuned.share,
        strength: tuned.strength,
        // The strong end of a sparse range is the empty model, beyond which nothing changes; only
        // ridge has more to find there.
        at_edge: n_strengths
            .is_some_and(|count| count > 1 && (at + 1 == count || (at == 0 && tuned.share == 0.0))),
        n_chosen: tuned.fit.path.info(at).n_chosen,
        rows: split.held_out().to_vec(),
        predicted: predicted.column(at).iter().copied().collect(),
        baseline: material
            .response
            .baseline(split.training(), material.weights),
    };
    Ok((fit, tuned.tally))
}
