//! What the evaluation of a cell gives.

use crate::base::problem::Problem;
use crate::eval::caveat::Caveat;
use crate::eval::fact::Facts;
use crate::eval::kind::data::Dataset;
use crate::eval::kind::fit::Fitted;
use crate::eval::kind::prepare::Prepared;
use crate::study::settings::Settings;
use std::sync::Arc;

/// What the evaluation of a cell gives to its readers and to the cells that draw on it.
#[derive(Clone, Debug)]
pub struct Outcome {
    /// What cells that draw on this one compute with.
    pub gives: Gives,
    /// What it publishes.
    pub facts: Facts,
    /// The remarks on it.
    pub caveats: Vec<Caveat>,
}

/// What a cell gives to the cells that draw on it.
#[derive(Clone, Debug)]
pub enum Gives {
    /// Nothing but facts.
    Facts,
    /// Only facts for now, because the outcome comes from the record of the study file. A cell
    /// that draws on it makes it be evaluated afresh.
    OnRecord,
    /// Samples with roles.
    Data(Arc<Dataset>),
    /// Samples with preparation steps.
    Prepared(Arc<Prepared>),
    /// A fit.
    Fit(Arc<Fitted>),
}

/// Why a cell could not be evaluated, with ways out that can be clicked.
///
/// A failure does not name its cell, so that it can be remembered; the cell is added when shown.
#[derive(Clone, Debug, PartialEq)]
pub struct Failure {
    /// What is the case.
    pub problem: Problem,
    /// Settings of the same cell that would mend it.
    pub remedies: Vec<Remedy>,
}

/// A way out of a failure: settings for the same cell. Taking it is an ordinary edit.
#[derive(Clone, Debug, PartialEq)]
pub struct Remedy {
    /// What the button says.
    pub label: String,
    /// The settings.
    pub settings: Settings,
}

impl From<Problem> for Failure {
    fn from(problem: Problem) -> Self {
        Self {
            problem,
            remedies: Vec::new(),
        }
    }
}

/// An outcome, or why there is none.
pub type Verdict = Result<Outcome, Failure>;
