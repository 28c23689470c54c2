//! The run-time proof that nothing was learnt from a held-out sample.

use crate::numeric::parts::Split;
use crate::numeric::step::LearnedChain;
use std::collections::BTreeSet;

/// How many violations are kept with their rows; all are counted.
const VIOLATIONS_KEPT: usize = 20;

/// What was compared, and what was found. One is kept per fit of a study and merged from the
/// proofs of its parts, in any order.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Proof {
    n_fits: usize,
    n_learned_steps: usize,
    n_violations: usize,
    violations: Vec<Violation>,
    quality_control: BTreeSet<usize>,
    ever_held_out: BTreeSet<usize>,
}

/// A step that was learnt from rows that it must not see.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Violation {
    /// The step's place in the chain, from 0; [`usize::MAX`] for scaling in the solver.
    pub step: usize,
    /// What is wrong with the rows.
    pub breach: Breach,
    /// The rows.
    pub rows: Vec<usize>,
}

/// What is wrong with rows that a step was learnt from.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Breach {
    /// They are held out.
    HeldOut,
    /// They belong to a unit of which a row is held out.
    UnitHeldOut,
    /// They are neither training rows nor quality-control samples.
    OutsideTraining,
}

impl Proof {
    /// A proof of nothing yet.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// Compares, for every step of a chain, the rows that it was learnt from with the split for
    /// which it is used. They must be training rows or quality-control samples, and neither
    /// they nor their units may be held out.
    pub fn check(&mut self, learned: &LearnedChain, split: &Split) {
        self.n_fits += 1;
        let held_out: BTreeSet<usize> = split.held_out().iter().copied().collect();
        let training: BTreeSet<usize> = split.training().iter().copied().collect();
        let held_out_units: BTreeSet<usize> =
            held_out.iter().filter_map(|&row| split.unit(row)).collect();
        for (step, known) in learned.learned() {
            let Some(rows) = known.learned_from() else {
                continue;
            };
            self.n_learned_steps += 1;
            let beside: BTreeSet<usize> = known.quality_control().iter().copied().collect();
            let all: BTreeSet<usize> = rows.iter().copied().chain(beside.clone()).collect();
            let breach_of = |row: usize| {
                if held_out.contains(&row) {
                    Some(Breach::HeldOut)
                } else if split
                    .unit(row)
                    .is_some_and(|unit| held_out_units.contains(&unit))
                {
                    Some(Breach::UnitHeldOut)
                } else if !training.contains(&row) && !beside.contains(&row) {
                    Some(Breach::OutsideTraining)
                } else {
                    None
                }
            };
            for breach in [
                Breach::HeldOut,
                Breach::UnitHeldOut,
                Breach::OutsideTraining,
            ] {
                let rows: Vec<usize> = all
                    .iter()
                    .copied()
                    .filter(|&row| breach_of(row) == Some(breach))
                    .collect();
                if !rows.is_empty() {
                    self.record(Violation { step, breach, rows });
                }
            }
            self.quality_control
                .extend(beside.difference(&training).copied());
        }
        self.ever_held_out.extend(held_out);
    }

    /// Compares the rows from which the solver took means and standard deviations, where
    /// centring or scaling is left to it, with the split for which they are used.
    pub fn check_moments(&mut self, rows: &[usize], split: &Split) {
        self.n_learned_steps += 1;
        let is_training = |row: &&usize| split.training().binary_search(row).is_ok();
        let outside: Vec<usize> = rows
            .iter()
            .filter(|row| !is_training(row))
            .copied()
            .collect();
        if !outside.is_empty() {
            self.record(Violation {
                step: usize::MAX,
                breach: Breach::OutsideTraining,
                rows: outside,
            });
        }
    }

    /// Takes in what another proof has compared.
    pub fn merge(&mut self, other: Self) {
        self.n_fits += other.n_fits;
        self.n_learned_steps += other.n_learned_steps;
        self.n_violations += other.n_violations;
        self.violations.extend(other.violations);
        self.keep_some();
        self.quality_control.extend(other.quality_control);
        self.ever_held_out.extend(other.ever_held_out);
    }

    fn record(&mut self, violation: Violation) {
        self.n_violations += 1;
        self.violations.push(violation);
        self.keep_some();
    }

    /// The smallest violations are kept, so that the order of merging does not matter.
    fn keep_some(&mut self) {
        self.violations.sort();
        self.violations.truncate(VIOLATIONS_KEPT);
    }

    /// Whether at least one fit was compared and no step was learnt from a row that it must not
    /// see. A quality-control sample that was learnt from outside the training rows must not be
    /// held out in any of the fits.
    #[must_use]
    pub fn holds(&self) -> bool {
        self.n_fits > 0
            && self.n_violations == 0
            && self.quality_control.is_disjoint(&self.ever_held_out)
    }

    /// How many fits were compared.
    #[must_use]
    pub fn n_fits(&self) -> usize {
        self.n_fits
    }

    /// How many learned steps were compared, over all fits.
    #[must_use]
    pub fn n_learned_steps(&self) -> usize {
        self.n_learned_steps
    }

    /// How many violations were found.
    #[must_use]
    pub fn n_violations(&self) -> usize {
        self.n_violations
    }

    /// Some of the violations.
    #[must_use]
    pub fn violations(&self) -> &[Violation] {
        &self.violations
    }
}
