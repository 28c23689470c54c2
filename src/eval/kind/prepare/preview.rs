//! What each step does: to all analysed samples, and to a few that are followed through.
//!
//! A learned step is learnt from four fifths of the units and applied to the last fifth, as it
//! will be in the parts of a fit; training and held-out samples are told apart. Nothing of this
//! is used by a fit.

use crate::base::work::Work;
use crate::eval::kind::Ended;
use crate::eval::kind::data::Dataset;
use crate::eval::kind::prepare::{Prepared, ended};
use crate::numeric::parts::{PartsParams, Scheme, Split, Structure, assign};
use crate::numeric::samples::{Origin, Samples};
use crate::numeric::step::{Chain, ChainStop, Step as NumericStep, StepStop};
use crate::study::settings::prepare::Step;
use std::borrow::Cow;
use std::collections::BTreeSet;

/// So many samples of each side are followed.
const FOLLOWED: usize = 2;
/// So many parts are drawn; the first is held out.
const PARTS: usize = 5;
/// The preview is a look at samples and no result; its draw need not be set.
const SEED: u64 = 1;

/// What was seen.
#[derive(Debug)]
pub struct Seen {
    /// How many predictors are left after each step, learnt from all analysed samples.
    pub left: Vec<usize>,
    /// Before the first step, and after each.
    pub stages: Vec<Stage>,
}

/// The samples at a stage, where the steps are learnt from the training samples of the preview.
#[derive(Debug)]
pub struct Stage {
    /// The training samples.
    pub training: Side,
    /// The held-out samples.
    pub held_out: Side,
    /// What each column is.
    pub origins: Vec<Origin>,
    /// The position of each column, where there is an axis.
    pub axis: Option<Vec<f64>>,
    /// Whether each column takes part.
    pub active: Vec<bool>,
    /// The followed samples.
    pub followed: Vec<Followed>,
}

/// The values of all samples of a side, all predictors together.
#[derive(Clone, Copy, Debug)]
pub struct Side {
    /// Their mean.
    pub mean: f64,
    /// Their standard deviation, divisor n.
    pub sd: f64,
    /// The share that is missing or beyond a limit.
    pub missing: f64,
}

/// One sample at a stage.
#[derive(Debug)]
pub struct Followed {
    /// Its name.
    pub name: String,
    /// On which side it is.
    pub part: Part,
    /// Its values, one per column.
    pub values: Vec<f64>,
}

/// A side of the preview.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Part {
    /// The steps are learnt from it.
    Training,
    /// They are applied to it.
    HeldOut,
}

/// Looks at all steps.
pub fn look(prepared: &Prepared, work: &Work<'_>) -> Result<Seen, Ended> {
    let measured = &prepared.measured;
    let Some(held_out) = held_out_units(measured) else {
        // Too few units to hold any out: only the numbers of predictors can be told.
        let all = |data: &Dataset| Some(Split::everything(&data.analysed));
        return Ok(Seen {
            left: walk(prepared, &all, &|_, samples, _| n_active(samples), work)?,
            stages: Vec::new(),
        });
    };
    let names: BTreeSet<&str> = held_out
        .iter()
        .map(|&unit| measured.unit_names[unit].as_str())
        .collect();
    let split = |data: &Dataset| {
        let (held, training): (Vec<usize>, Vec<usize>) = data
            .analysed
            .iter()
            .partition(|&&row| names.contains(data.unit_names[data.units[row]].as_str()));
        Split::with_held_out(&training, &held, &data.structure()).ok()
    };
    let stages = walk(prepared, &split, &stage, &work.part(0.0..0.6))?;
    let left = left_with_all(prepared, &stages, &work.part(0.6..1.0))?;
    Ok(Seen { left, stages })
}

fn n_active(samples: &Samples) -> usize {
    samples.active.iter().filter(|active| **active).count()
}

/// How many predictors are left after each step where it is learnt from all analysed samples.
/// Steps that learn nothing leave as many as in the preview.
fn left_with_all(
    prepared: &Prepared,
    stages: &[Stage],
    work: &Work<'_>,
) -> Result<Vec<usize>, Ended> {
    let chain = &prepared.chain;
    let own = chain.own_steps();
    let n_shared = prepared.steps_before_chain() + own.start;
    let mut left: Vec<usize> = stages[..=n_shared]
        .iter()
        .map(|stage| stage.active.iter().filter(|active| **active).count())
        .collect();
    let data = &prepared.data;
    let split = Split::everything(&data.analysed);
    let mut samples = Cow::Borrowed(&prepared.samples);
    for at in own.clone() {
        work.step(at - own.start, own.len())?;
        samples =
            one(&chain.steps()[at], data, samples, &split, work).map_err(|stop| match stop {
                StepStop::Cancelled => Ended::Cancelled,
                StepStop::Failed(error) => prepared.step_problem(at, &error).into(),
            })?;
        left.push(n_active(&samples));
    }
    // Centring and scaling at the end switch nothing off.
    left.resize(stages.len(), n_active(&samples));
    Ok(left)
}

/// The units that the preview holds out; `None` where there are too few to hold any out.
fn held_out_units(data: &Dataset) -> Option<BTreeSet<usize>> {
    let structure = Structure::of_units(&data.units);
    let parts = PARTS.min(data.count_units(&data.analysed));
    let params = PartsParams {
        scheme: Scheme::Random,
        parts,
        repeats: 1,
        seed: SEED,
    };
    let plan = assign(&params, &data.analysed, &structure, "preview").ok()?;
    let first = plan.splits(0).into_iter().next()?;
    Some(
        first
            .held_out()
            .iter()
            .map(|&row| data.units[row])
            .collect(),
    )
}

/// Carries out one step after the other, and looks at the samples before the first and after each.
fn walk<T>(
    prepared: &Prepared,
    split: &dyn Fn(&Dataset) -> Option<Split>,
    look: &dyn Fn(&Dataset, &Samples, &Split) -> T,
    work: &Work<'_>,
) -> Result<Vec<T>, Ended> {
    let n_steps = prepared.steps.len();
    let none = Chain::default();
    let first = prepared.before_averaging.as_ref().unwrap_or(&none);
    let mut steps = first.steps().iter().chain(prepared.chain.steps());
    let mut data = &prepared.measured;
    let mut samples = Cow::Borrowed(&data.samples);
    let mut looks = Vec::with_capacity(n_steps + 1);
    let Some(mut parts) = split(data) else {
        return Ok(looks);
    };
    looks.push(look(data, &samples, &parts));
    for (at, step) in prepared.steps.iter().enumerate() {
        work.step(at, n_steps)?;
        if *step == Step::AverageUnits {
            data = &prepared.data;
            samples = Cow::Borrowed(&data.samples);
            let Some(of_units) = split(data) else {
                return Ok(looks);
            };
            parts = of_units;
        } else {
            let computed = steps.next().expect("every other step is computed");
            samples = one(computed, data, samples, &parts, work).map_err(|stop| match stop {
                StepStop::Cancelled => Ended::Cancelled,
                StepStop::Failed(error) => ended(
                    ChainStop::Step { step: at, error },
                    &prepared.steps,
                    0,
                    data,
                ),
            })?;
        }
        looks.push(look(data, &samples, &parts));
    }
    Ok(looks)
}

fn one<'s>(
    step: &NumericStep,
    data: &Dataset,
    samples: Cow<'s, Samples>,
    split: &Split,
    work: &Work<'_>,
) -> Result<Cow<'s, Samples>, StepStop> {
    let learned = {
        let part = split
            .training_part(&samples)
            .with_outcome(data.response.values());
        step.learn(&part, work)?
    };
    learned.apply(samples, work)
}

fn stage(data: &Dataset, samples: &Samples, split: &Split) -> Stage {
    let follow = |rows: &[usize], part: Part| -> Vec<Followed> {
        let mut units = BTreeSet::new();
        rows.iter()
            .filter(|&&row| units.insert(data.units[row]))
            .take(FOLLOWED)
            .map(|&row| Followed {
                name: data.names[row].clone(),
                part,
                values: samples.x.row(row).iter().copied().collect(),
            })
            .collect()
    };
    let mut followed = follow(split.training(), Part::Training);
    followed.extend(follow(split.held_out(), Part::HeldOut));
    Stage {
        training: side(samples, split.training()),
        held_out: side(samples, split.held_out()),
        origins: (0..samples.n_columns())
            .map(|column| samples.origin(column))
            .collect(),
        axis: samples.axis.clone(),
        active: samples.active.clone(),
        followed,
    }
}

fn side(samples: &Samples, rows: &[usize]) -> Side {
    let (mut known, mut sum, mut all) = (0.0, 0.0, 0.0);
    let values = || {
        samples
            .active_columns()
            .into_iter()
            .flat_map(move |column| {
                let values = samples.column(column);
                rows.iter().map(move |&row| values[row])
            })
    };
    for value in values() {
        all += 1.0;
        if !value.is_nan() {
            known += 1.0;
            sum += value;
        }
    }
    let mean = sum / known;
    let squares: f64 = values()
        .filter(|value| !value.is_nan())
        .map(|value| (value - mean) * (value - mean))
        .sum();
    Side {
        mean,
        sd: (squares / known).sqrt(),
        missing: 1.0 - known / all,
    }
}
