//! Evaluates a Prepare cell: the steps of a chain, the first of them carried out once for all.

mod average;
mod facts;
mod preview;
mod refused;

use crate::base::problem::Problem;
use crate::base::work::{Cancelled, Work};
use crate::eval::caveat::order;
use crate::eval::fact::Facts;
use crate::eval::kind::data::Dataset;
use crate::eval::kind::prepare::average::averaged;
use crate::eval::kind::step::{numeric_step, step_problem};
use crate::eval::kind::{Ended, Inputs, verdict};
use crate::eval::outcome::{Gives, Outcome, Verdict};
use crate::numeric::matrix::Matrix;
use crate::numeric::predictors::Predictors;
use crate::numeric::procedure::Material;
use crate::numeric::samples::{Origin, Samples};
use crate::numeric::step::{Chain, ChainStop, StepError};
use crate::study::settings::prepare::{Prepare, Step};
use std::sync::{Arc, OnceLock};

/// Samples with preparation steps: what a fit draws on.
///
/// Where the samples of each unit are averaged, the units are the samples of everything that
/// follows; the steps before are carried out on the samples as measured.
#[derive(Debug)]
pub struct Prepared {
    /// The samples and their roles; units, where samples were averaged.
    pub data: Arc<Dataset>,
    /// The samples as the Data cell gives them.
    pub measured: Arc<Dataset>,
    /// All steps, also those of the Prepare cells before.
    pub steps: Vec<Step>,
    /// The steps carried out on the samples as measured, before those of each unit were averaged;
    /// `None` where they were not.
    pub before_averaging: Option<Chain>,
    /// The steps on `data`, as they are computed.
    pub chain: Chain,
    /// The samples of `data` after the steps that learn nothing.
    pub samples: Samples,
    /// Their predictor matrix, with what every fit on it shares; made when first asked for.
    predictors: OnceLock<Predictors>,
}

impl Prepared {
    /// Samples to which nothing is done.
    #[must_use]
    pub fn unprepared(data: &Arc<Dataset>) -> Self {
        Self {
            data: Arc::clone(data),
            measured: Arc::clone(data),
            steps: Vec::new(),
            before_averaging: None,
            chain: Chain::new(Vec::new()),
            samples: data.samples.clone(),
            predictors: OnceLock::new(),
        }
    }

    /// What a procedure works on.
    #[must_use]
    pub fn material(&self) -> Material<'_> {
        Material {
            samples: &self.samples,
            predictors: self
                .predictors
                .get_or_init(|| Predictors::new(Arc::clone(&self.samples.x))),
            response: &self.data.response,
            covariates: &self.data.covariates,
            weights: self.data.weights.as_deref(),
            structure: self.data.structure(),
        }
    }

    /// The name of a prepared column.
    #[must_use]
    pub fn column_name(&self, samples: &Samples, column: usize) -> String {
        self.origin_name(samples.origin(column))
    }

    fn origin_name(&self, origin: Origin) -> String {
        match origin {
            Origin::Predictor(at) => self.data.predictor_names[at].clone(),
            Origin::Score(at) => format!("score {}", at + 1),
            Origin::Position(at) => format!("{at} {}", self.data.axis_unit).trim().to_owned(),
        }
    }

    /// How many steps stand before the chain: those before an averaging, and the averaging.
    #[must_use]
    pub fn steps_before_chain(&self) -> usize {
        self.steps.len() - self.chain.steps().len()
    }

    /// Why a step of the chain could not be carried out.
    #[must_use]
    pub fn step_problem(&self, at: usize, error: &StepError) -> Problem {
        let at = self.steps_before_chain() + at;
        step_problem(&self.steps, at, error, &self.data)
    }

    /// About how many bytes this holds beyond the data.
    #[must_use]
    pub fn bytes(&self) -> usize {
        let matrix = matrix_bytes(&self.samples.x);
        let own = if Arc::ptr_eq(&self.samples.x, &self.data.samples.x) {
            0
        } else {
            matrix
        };
        let averaged = if Arc::ptr_eq(&self.data, &self.measured) {
            0
        } else {
            matrix_bytes(&self.data.samples.x)
        };
        own + averaged + matrix / 4
    }
}

fn matrix_bytes(matrix: &Matrix) -> usize {
    matrix.len() * size_of::<f64>()
}

/// Evaluates a Prepare cell.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn evaluate(
    settings: &Prepare,
    inputs: &Inputs<'_>,
    work: &Work<'_>,
) -> Result<Verdict, Cancelled> {
    verdict(prepare(settings, inputs, work))
}

fn prepare(settings: &Prepare, inputs: &Inputs<'_>, work: &Work<'_>) -> Result<Outcome, Ended> {
    let before = inputs.prepared(settings.input)?;
    let mut steps = before.steps.clone();
    steps.extend(settings.steps.iter().cloned());
    if let Some(problem) = refused::order(&steps) {
        return Err(problem.into());
    }
    let prepared = carry_out(&before.measured, steps, &work.part(0.0..0.4))?;
    // All analysed samples once, to say how many predictors come through and to find out now, not
    // in the fit, what cannot be done.
    let seen = preview::look(&prepared, &work.part(0.4..1.0))?;
    let mut facts = Facts::new();
    facts::publish(&mut facts, &prepared, &seen);
    let caveats = order::caveats(&prepared);
    Ok(Outcome {
        gives: Gives::Prepared(Arc::new(prepared)),
        facts,
        caveats,
    })
}

/// Carries out the steps that learn nothing, and makes the chain of the others.
fn carry_out(
    measured: &Arc<Dataset>,
    steps: Vec<Step>,
    work: &Work<'_>,
) -> Result<Prepared, Ended> {
    let averaging = steps.iter().position(|step| *step == Step::AverageUnits);
    let n_before = averaging.map_or(0, |at| at + 1);
    let (data, before_averaging, first) = match averaging {
        None => (Arc::clone(measured), None, measured.samples.clone()),
        Some(at) => {
            let chain = chain(&steps[..at], &[], measured)?;
            let single = chain
                .apply_shared(measured.samples.clone(), &work.part(0.0..0.4))
                .map_err(|stop| ended(stop, &steps, 0, measured))?;
            let data = averaged(measured, &single, &work.part(0.4..0.6))?;
            let samples = data.samples.clone();
            (Arc::new(data), Some(chain), samples)
        }
    };
    let chain = chain(&steps[n_before..], &steps[..n_before], measured)?;
    let samples = chain
        .apply_shared(first, &work.part(0.6..1.0))
        .map_err(|stop| ended(stop, &steps, n_before, &data))?;
    Ok(Prepared {
        data,
        measured: Arc::clone(measured),
        steps,
        before_averaging,
        chain,
        samples,
        predictors: OnceLock::new(),
    })
}

/// Some steps as they are computed, after those before them.
fn chain(steps: &[Step], before: &[Step], data: &Dataset) -> Result<Chain, Problem> {
    let mut columns: &[String] = &data.predictor_names;
    if before.iter().any(makes_columns) {
        columns = &[];
    }
    let mut computed = Vec::with_capacity(steps.len());
    for step in steps {
        computed.extend(numeric_step(step, columns)?);
        if makes_columns(step) {
            columns = &[];
        }
    }
    Ok(Chain::new(computed))
}

/// Whether a step puts new columns in place of the predictors.
const fn makes_columns(step: &Step) -> bool {
    matches!(step, Step::CommonAxis { .. } | Step::PrincipalScores { .. })
}

fn ended(stop: ChainStop, steps: &[Step], n_before: usize, data: &Dataset) -> Ended {
    match stop {
        ChainStop::Cancelled => Ended::Cancelled,
        ChainStop::Step { step, error } => {
            step_problem(steps, n_before + step, &error, data).into()
        }
    }
}
