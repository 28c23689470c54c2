//! Active equations solved in the space of the samples, for more active predictors than samples.
//!
//! With ridge weights D above zero (as in Li, Sun & Toh 2018)
//!
//! ```text
//! (D + X'X)⁻¹ = D⁻¹ − D⁻¹X' M⁻¹ XD⁻¹,     M = I + XD⁻¹X'
//! ```
//!
//! M has as many rows as there are samples, and a predictor that comes or goes changes it by one
//! rank.

use crate::numeric::factor::Factor;
use crate::numeric::lanes;
use crate::numeric::matrix::{self, Matrix};
use crate::numeric::quadratic::Quadratic;

/// The Cholesky factor of M.
pub(crate) struct SampleSpace {
    factor: Factor,
    length: usize,
}

/// Whether a predictor comes or goes.
#[derive(Clone, Copy, PartialEq)]
pub(crate) enum Change {
    Comes,
    Goes,
}

impl SampleSpace {
    /// Whether the equations of a problem can be solved this way.
    pub(crate) fn suits(problem: &Quadratic, count: usize) -> bool {
        let has_ridge = |&slot: &usize| problem.ridge[slot] > 0.0;
        count > problem.length && problem.hx.is_empty() && problem.used.iter().all(has_ridge)
    }

    /// Factors M for the given members.
    pub(crate) fn new(problem: &Quadratic, members: &[usize]) -> Self {
        let length = problem.length;
        let mut block = Vec::with_capacity(length * members.len());
        for &slot in members {
            let root = problem.ridge[slot].sqrt();
            block.extend(problem.column(slot).iter().map(|x| x / root));
        }
        let mut m = Matrix::identity(length, length);
        matrix::add_outer(&mut m, &block);
        let mut factor = Factor::default();
        let mut cross = Vec::with_capacity(length);
        for i in 0..length {
            cross.clear();
            cross.extend((0..i).map(|j| m[(i, j)]));
            // M is at least the identity, so every pivot is at least 1 but for rounding.
            let _ = factor.append(&mut cross, m[(i, i)].max(1.0), 0.0);
        }
        Self { factor, length }
    }

    /// Takes in or out a member.
    pub(crate) fn change(&mut self, problem: &Quadratic, slot: usize, change: Change) {
        let root = problem.ridge[slot].sqrt();
        let vector = problem.column(slot).iter().map(|x| x / root).collect();
        match change {
            Change::Comes => self.factor.add_outer(vector),
            Change::Goes => self.factor.subtract_outer(vector),
        }
    }

    /// Replaces a right-hand side by the solution of the active equations.
    pub(crate) fn solve(&self, problem: &Quadratic, members: &[usize], vector: &mut [f64]) {
        for (value, &slot) in vector.iter_mut().zip(members) {
            *value /= problem.ridge[slot];
        }
        let mut sum = vec![0.0; self.length];
        let negative: Vec<f64> = vector.iter().map(|value| -value).collect();
        lanes::subtract_columns(&problem.x, members, &negative, &mut sum);
        self.factor.solve(&mut sum);
        let mut along = Vec::new();
        lanes::chosen_dots(&problem.x, members, &sum, &mut along);
        for ((value, along), &slot) in vector.iter_mut().zip(&along).zip(members) {
            *value -= along / problem.ridge[slot];
        }
    }

    /// The trace of X(D + X'X)⁻¹X' = I − M⁻¹.
    pub(crate) fn effective(&self) -> f64 {
        let mut trace = self.length as f64;
        for i in 0..self.length {
            let mut unit = vec![0.0; self.length];
            unit[i] = 1.0;
            self.factor.solve_transposed(&mut unit);
            trace -= lanes::dot(&unit, &unit);
        }
        trace
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numeric::designs::Dice;
    use crate::numeric::penalty::Sign;

    #[test]
    fn solutions_satisfy_the_active_equations_after_any_change() {
        let mut dice = Dice::new(3);
        let (length, count) = (8, 20);
        let mut problem = Quadratic {
            length,
            x: (0..length * count).map(|_| dice.normal()).collect(),
            target: vec![0.0; length],
            ridge: (0..count).map(|_| 0.1 + dice.uniform()).collect(),
            lasso: vec![1.0; count],
            sign: vec![Sign::Any; count],
            used: (0..count).collect(),
            ..Quadratic::default()
        };
        problem.square = vec![0.0; count];
        let mut members: Vec<usize> = (0..15).collect();
        assert!(SampleSpace::suits(&problem, members.len()));
        let mut space = SampleSpace::new(&problem, &members);
        for step in 0..12 {
            if step % 3 == 0 {
                let gone = members.remove(step % members.len());
                space.change(&problem, gone, Change::Goes);
            } else if let Some(new) = (0..count).find(|slot| !members.contains(slot)) {
                members.push(new);
                space.change(&problem, new, Change::Comes);
            }
            let wanted: Vec<f64> = members.iter().map(|_| dice.normal()).collect();
            let mut b = wanted.clone();
            space.solve(&problem, &members, &mut b);
            for (i, &slot) in members.iter().enumerate() {
                let mut sum = problem.ridge[slot] * b[i];
                for (j, &other) in members.iter().enumerate() {
                    sum += lanes::dot(problem.column(slot), problem.column(other)) * b[j];
                }
                assert!((sum - wanted[i]).abs() < 1e-10);
            }
        }
    }
}
