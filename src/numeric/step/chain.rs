//! A chain of steps: what all parts share, what each part learns, and what the solver does.

use crate::base::work::{Cancelled, Work};
use crate::numeric::parts::Split;
use crate::numeric::samples::{OutcomeValues, Samples};
use crate::numeric::step::{Class, Learned, ScalingRule, Step, StepError, StepStop};
use std::borrow::Cow;
use std::ops::Range;
use std::sync::Arc;

/// Steps in the order in which they are applied.
///
/// * The row-by-row and fixed-reference steps at the front are the same in every part; they are
///   applied once to all samples ([`Chain::apply_shared`]).
/// * From the first learned step on, steps belong to a part ([`Chain::learn`]).
/// * A centring or unit-variance scaling at the end is not carried out: the solver does it
///   without copying the matrix ([`Chain::trailing`]).
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Chain {
    steps: Vec<Step>,
    shared: usize,
    own: usize,
}

/// What the solver does itself, from the training rows of each fit.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Trailing {
    /// Whether predictors are centred.
    pub center: TrailingCenter,
    /// Whether predictors are divided by their scale.
    pub scale: TrailingScale,
}

/// Whether the solver centres.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TrailingCenter {
    /// Predictors are centred on their mean in the training rows.
    Center,
    /// Predictors stay as they are.
    Leave,
}

/// Whether the solver scales.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TrailingScale {
    /// Predictors are divided by their standard deviation (divisor n) in the training rows.
    UnitVariance,
    /// Predictors stay as they are.
    Leave,
}

/// Why a chain ended early: called off, or a step is not possible.
#[derive(Clone, Debug, PartialEq)]
pub enum ChainStop {
    /// The work was called off.
    Cancelled,
    /// A step of the chain is not possible.
    Step {
        /// The step's place in the chain, from 0.
        step: usize,
        /// Why.
        error: StepError,
    },
}

impl From<Cancelled> for ChainStop {
    fn from(_: Cancelled) -> Self {
        Self::Cancelled
    }
}

impl ChainStop {
    fn at(step: usize) -> impl Fn(StepStop) -> Self {
        move |stop| match stop {
            StepStop::Cancelled => Self::Cancelled,
            StepStop::Failed(error) => Self::Step { step, error },
        }
    }
}

/// A chain that was learnt, and the samples as it leaves them.
#[derive(Clone, Debug)]
pub struct Prepared<'s> {
    /// The chain as learnt from the training part.
    pub chain: LearnedChain,
    /// All samples, training and held-out, prepared by it.
    pub samples: Cow<'s, Samples>,
}

impl Chain {
    /// A chain of these steps.
    #[must_use]
    pub fn new(steps: Vec<Step>) -> Self {
        let own = steps.len()
            - steps
                .iter()
                .rev()
                .take_while(|step| is_trailing(step))
                .count();
        let shared = steps[..own]
            .iter()
            .take_while(|step| match step.class() {
                Class::RowByRow | Class::FixedReference => true,
                Class::Learned | Class::LearnedWithOutcome => false,
            })
            .count();
        Self { steps, shared, own }
    }

    /// The steps.
    #[must_use]
    pub fn steps(&self) -> &[Step] {
        &self.steps
    }

    /// The places of the steps that are the same in every part.
    #[must_use]
    pub fn shared_steps(&self) -> Range<usize> {
        0..self.shared
    }

    /// The places of the steps that each part carries out for itself.
    #[must_use]
    pub fn own_steps(&self) -> Range<usize> {
        self.shared..self.own
    }

    /// What is left to the solver.
    #[must_use]
    pub fn trailing(&self) -> Trailing {
        let rest = &self.steps[self.own..];
        let scales = rest.iter().any(|step| matches!(step, Step::Scaling(_)));
        Trailing {
            center: if rest.is_empty() {
                TrailingCenter::Leave
            } else {
                TrailingCenter::Center
            },
            scale: if scales {
                TrailingScale::UnitVariance
            } else {
                TrailingScale::Leave
            },
        }
    }

    /// Applies the steps that are the same in every part to all samples.
    ///
    /// # Errors
    /// [`ChainStop`] when a step is not possible with these samples, or the work was called off.
    pub fn apply_shared(&self, samples: Samples, work: &Work<'_>) -> Result<Samples, ChainStop> {
        let mut samples = Cow::Owned(samples);
        for (at, step) in self.steps[..self.shared].iter().enumerate() {
            work.step(at, self.shared)?;
            let given = step
                .given()
                .expect("the shared steps are row-by-row or have a fixed reference");
            samples = given.apply(samples, work).map_err(ChainStop::at(at))?;
        }
        Ok(samples.into_owned())
    }

    /// Learns the steps of one part, and prepares all samples by them. Only the training rows
    /// of `split` are learnt from; `outcome` has an entry for each of all samples.
    ///
    /// # Errors
    /// [`ChainStop`] when a step is not possible with this part, or the work was called off.
    pub fn prepare<'s>(
        &self,
        split: &Split,
        shared: &'s Samples,
        outcome: Option<OutcomeValues<'_>>,
        work: &Work<'_>,
    ) -> Result<Prepared<'s>, ChainStop> {
        let mut samples = Cow::Borrowed(shared);
        let mut learned = Vec::with_capacity(self.own - self.shared);
        for at in self.own_steps() {
            work.check()?;
            let step = &self.steps[at];
            let part = split.training_part(&samples).with_outcome(outcome);
            let known = step.learn(&part, work).map_err(ChainStop::at(at))?;
            samples = known.apply(samples, work).map_err(ChainStop::at(at))?;
            learned.push(known);
        }
        let chain = LearnedChain {
            learned: learned.into(),
            chain: Arc::new(self.clone()),
        };
        Ok(Prepared { chain, samples })
    }

    /// Learns the steps of one part. [`Chain::prepare`] gives the prepared samples as well,
    /// without working them out again.
    ///
    /// # Errors
    /// [`ChainStop`] when a step is not possible with this part, or the work was called off.
    pub fn learn(
        &self,
        split: &Split,
        shared: &Samples,
        outcome: Option<OutcomeValues<'_>>,
        work: &Work<'_>,
    ) -> Result<LearnedChain, ChainStop> {
        Ok(self.prepare(split, shared, outcome, work)?.chain)
    }
}

fn is_trailing(step: &Step) -> bool {
    matches!(step, Step::Centering(_))
        || matches!(step, Step::Scaling(scaling) if scaling.rule() == ScalingRule::UnitVariance)
}

/// A chain as one part has learnt it.
#[derive(Clone, Debug)]
pub struct LearnedChain {
    learned: Arc<[Learned]>,
    chain: Arc<Chain>,
}

impl LearnedChain {
    /// Applies the part's own steps to samples to which the shared ones were applied.
    ///
    /// # Errors
    /// [`ChainStop`] when a step is not possible with these samples, or the work was called off.
    pub fn apply<'s>(
        &self,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, ChainStop> {
        let mut samples = samples;
        for (known, at) in self.learned.iter().zip(self.chain.own_steps()) {
            work.check()?;
            samples = known.apply(samples, work).map_err(ChainStop::at(at))?;
        }
        Ok(samples)
    }

    /// Applies the whole chain, but for what is left to the solver, to samples as they were
    /// measured: for scoring new ones.
    ///
    /// # Errors
    /// [`ChainStop`] when a step is not possible with these samples, or the work was called off.
    pub fn apply_from_start(
        &self,
        samples: Samples,
        work: &Work<'_>,
    ) -> Result<Samples, ChainStop> {
        let shared = self.chain.apply_shared(samples, work)?;
        Ok(self.apply(Cow::Owned(shared), work)?.into_owned())
    }

    /// The part's own steps as learnt, with their places in the chain.
    pub fn learned(&self) -> impl Iterator<Item = (usize, &Learned)> {
        self.chain.own_steps().zip(self.learned.iter())
    }

    /// What is left to the solver.
    #[must_use]
    pub fn trailing(&self) -> Trailing {
        self.chain.trailing()
    }
}
