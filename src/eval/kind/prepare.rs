//! Evaluates a Prepare cell: the steps of a chain, the first of them carried out once for all.

use crate::base::problem::Problem;
use crate::base::work::{Cancelled, Work};
use crate::eval::caveat::order;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::data::Dataset;
use crate::eval::kind::step::{class_name, numeric_step, parameters, step_name, step_problem};
use crate::eval::kind::{Ended, Inputs, verdict};
use crate::eval::outcome::{Gives, Outcome, Verdict};
use crate::numeric::matrix::Matrix;
use crate::numeric::parts::Split;
use crate::numeric::predictors::Predictors;
use crate::numeric::procedure::Material;
use crate::numeric::samples::{Origin, Samples};
use crate::numeric::step::{Chain, ChainStop, Class, Step as NumericStep};
use crate::study::settings::prepare::{Prepare, Step};
use std::sync::{Arc, OnceLock};

/// Samples with preparation steps: what a fit draws on.
#[derive(Debug)]
pub struct Prepared {
    /// The samples and their roles.
    pub data: Arc<Dataset>,
    /// All steps, also those of the Prepare cells before.
    pub steps: Vec<Step>,
    /// The same steps, as they are computed.
    pub chain: Chain,
    /// The samples after the steps that learn nothing.
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
            steps: Vec::new(),
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
        match samples.origin(column) {
            Origin::Predictor(at) => self.data.predictor_names[at].clone(),
            Origin::Score(at) => format!("score {}", at + 1),
            Origin::Position(at) => format!("{at} {}", self.data.axis_unit).trim().to_owned(),
        }
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
        own + matrix / 4
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
    let numeric = steps
        .iter()
        .map(numeric_step)
        .collect::<Result<Vec<_>, Problem>>()?;
    let chain = Chain::new(numeric);
    let samples = chain
        .apply_shared(before.data.samples.clone(), &work.part(0.0..0.6))
        .map_err(|stop| ended(stop, &steps, &before.data))?;
    let prepared = Prepared {
        data: Arc::clone(&before.data),
        steps,
        chain,
        samples,
        predictors: OnceLock::new(),
    };
    // All analysed samples once, to say how many predictors come through and to find out now, not
    // in the fit, what cannot be done.
    let split = Split::everything(&prepared.data.analysed);
    let outcome = prepared.data.response.values();
    let all = prepared
        .chain
        .prepare(&split, &prepared.samples, outcome, &work.part(0.6..1.0))
        .map_err(|stop| ended(stop, &prepared.steps, &prepared.data))?;
    let leaving = all.samples.active.iter().filter(|active| **active).count();
    let entering = prepared
        .data
        .samples
        .active
        .iter()
        .filter(|active| **active)
        .count();
    drop(all);
    let mut facts = Facts::new();
    publish(&mut facts, &prepared, entering, leaving);
    let caveats = order::caveats(&prepared.steps);
    Ok(Outcome {
        gives: Gives::Prepared(Arc::new(prepared)),
        facts,
        caveats,
    })
}

fn publish(facts: &mut Facts, prepared: &Prepared, entering: usize, leaving: usize) {
    let steps = &prepared.steps;
    facts.push(Fact::count(
        "steps",
        steps.len(),
        "How many preparation steps are taken.",
    ));
    let classes: Vec<Class> = prepared
        .chain
        .steps()
        .iter()
        .map(NumericStep::class)
        .collect();
    let learned = classes
        .iter()
        .filter(|class| matches!(class, Class::Learned | Class::LearnedWithOutcome))
        .count();
    facts.push(Fact::count(
        "learned steps",
        learned,
        "How many steps are learnt from samples, and so learnt anew in every training part.",
    ));
    facts.push(Fact::count(
        "predictors entering",
        entering,
        "How many predictors enter the preparation.",
    ));
    facts.push(Fact::count(
        "predictors leaving",
        leaving,
        "How many predictors come through when the steps are learnt from all samples; inside a \
         training part it can be another number.",
    ));
    facts.push(Fact::table(
        "step list",
        vec![
            FactColumn::texts(
                "step",
                steps
                    .iter()
                    .map(|step| step_name(step).to_owned())
                    .collect(),
                "The step.",
            ),
            FactColumn::texts(
                "class",
                classes
                    .iter()
                    .map(|class| class_name(*class).to_owned())
                    .collect(),
                "What the step needs to know, which decides where it may be fitted.",
            ),
            FactColumn::texts(
                "parameters",
                steps.iter().map(parameters).collect(),
                "The step's settings.",
            ),
        ],
        "The preparation steps in their order.",
    ));
}

fn ended(stop: ChainStop, steps: &[Step], data: &Dataset) -> Ended {
    match stop {
        ChainStop::Cancelled => Ended::Cancelled,
        ChainStop::Step { step, error } => step_problem(&steps[step], step, &error, data).into(),
    }
}
