//! Coordinate descent with Anderson acceleration on the working set: the guarded fallback.
//!
//! Bertrand & Massias (2021). It is used only when the exact search has stalled, which rounding
//! can make it do; it cannot stall, it can only be slow.

use crate::base::work::{Cancelled, Work};
use crate::numeric::lanes;
use crate::numeric::quadratic::Quadratic;

/// Iterates that one extrapolation combines.
const MEMORY: usize = 5;

/// Most rounds of the descent before it gives up and says so.
const ROUNDS: usize = 20_000;

/// Solves the problem by coordinate descent from `b` (one value a slot), until no coordinate can
/// move a correlation by more than `tolerance`. Returns whether that was reached.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub(crate) fn descend(
    problem: &Quadratic,
    b: &mut [f64],
    tolerance: f64,
    work: &Work<'_>,
) -> Result<bool, Cancelled> {
    let mut residual = Vec::new();
    let mut trail: Vec<Vec<f64>> = vec![b.to_vec()];
    for _ in 0..ROUNDS {
        work.check()?;
        problem.residual(&problem.used, &used(problem, b), &mut residual);
        let moved = round(problem, b, &mut residual);
        if moved <= tolerance {
            return Ok(true);
        }
        trail.push(b.to_vec());
        if trail.len() > MEMORY {
            if let Some(better) = extrapolate(&trail)
                && objective(problem, &better) < objective(problem, b)
            {
                b.copy_from_slice(&better);
            }
            trail.clear();
            trail.push(b.to_vec());
        }
    }
    Ok(false)
}

fn used(problem: &Quadratic, b: &[f64]) -> Vec<f64> {
    problem.used.iter().map(|&slot| b[slot]).collect()
}

/// One round over all coordinates; returns the largest change in units of a correlation.
fn round(problem: &Quadratic, b: &mut [f64], residual: &mut [f64]) -> f64 {
    let mut moved = 0.0_f64;
    for &slot in &problem.used {
        let curvature = problem.square[slot] + problem.ridge[slot];
        if curvature <= 0.0 {
            continue;
        }
        let pull = lanes::dot(problem.column(slot), residual) + problem.square[slot] * b[slot];
        let size = (pull.abs() - problem.lasso[slot]).max(0.0) / curvature;
        let next = if problem.sign[slot].allows(pull) {
            size * pull.signum()
        } else {
            0.0
        };
        let step = next - b[slot];
        if step != 0.0 {
            lanes::add_scaled(-step, problem.h_column(slot), residual);
            b[slot] = next;
            moved = moved.max(step.abs() * curvature);
        }
    }
    moved
}

fn objective(problem: &Quadratic, b: &[f64]) -> f64 {
    let mut residual = Vec::new();
    problem.residual(&problem.used, &used(problem, b), &mut residual);
    problem
        .used
        .iter()
        .map(|&slot| {
            let c = lanes::dot(problem.column(slot), &residual);
            if b[slot] != 0.0 && !problem.sign[slot].allows(b[slot]) {
                return f64::INFINITY;
            }
            -0.5 * b[slot] * (problem.along[slot] + c)
                + problem.lasso[slot] * b[slot].abs()
                + 0.5 * problem.ridge[slot] * b[slot] * b[slot]
        })
        .sum()
}

/// The combination of the last iterates, with weights of sum 1, whose differences nearly cancel.
fn extrapolate(trail: &[Vec<f64>]) -> Option<Vec<f64>> {
    let steps: Vec<Vec<f64>> = trail
        .windows(2)
        .map(|two| two[1].iter().zip(&two[0]).map(|(a, b)| a - b).collect())
        .collect();
    let k = steps.len();
    let mut gram: Vec<Vec<f64>> = (0..k)
        .map(|i| (0..k).map(|j| lanes::dot(&steps[i], &steps[j])).collect())
        .collect();
    let trace: f64 = (0..k).map(|i| gram[i][i]).sum();
    // A little of the identity keeps the small system solvable (the authors' own safeguard).
    for (i, row) in gram.iter_mut().enumerate() {
        row[i] += 1e-12 * trace;
        row.push(1.0);
    }
    for i in 0..k {
        let pivot = gram[i][i];
        if pivot <= 0.0 || !pivot.is_finite() {
            return None;
        }
        let row = gram[i].clone();
        for below in gram.iter_mut().skip(i + 1) {
            let factor = below[i] / pivot;
            for (x, y) in below.iter_mut().zip(&row) {
                *x -= factor * y;
            }
        }
    }
    let mut weights = vec![0.0; k];
    for i in (0..k).rev() {
        let known: f64 = (i + 1..k).map(|j| gram[i][j] * weights[j]).sum();
        weights[i] = (gram[i][k] - known) / gram[i][i];
    }
    let sum: f64 = weights.iter().sum();
    if sum == 0.0 || !sum.is_finite() {
        return None;
    }
    let mut mixed = vec![0.0; trail[0].len()];
    for (weight, iterate) in weights.iter().zip(&trail[1..]) {
        lanes::add_scaled(weight / sum, iterate, &mut mixed);
    }
    Some(mixed)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numeric::active_set::{ActiveSet, Ended};
    use crate::numeric::designs::Dice;
    use crate::numeric::penalty::Sign;

    #[test]
    fn descent_and_the_exact_search_find_the_same_solution() {
        let mut dice = Dice::new(4);
        for (round, rule) in [Sign::Any, Sign::NotNegative].into_iter().enumerate() {
            let (length, count) = (15, 40);
            let x: Vec<f64> = (0..length * count).map(|_| dice.normal()).collect();
            let target: Vec<f64> = (0..length).map(|_| dice.normal()).collect();
            let column = |k: usize| &x[k * length..(k + 1) * length];
            let mut problem = Quadratic {
                length,
                along: (0..count).map(|k| lanes::dot(column(k), &target)).collect(),
                square: (0..count)
                    .map(|k| lanes::dot(column(k), column(k)))
                    .collect(),
                lasso: vec![1.5; count],
                ridge: vec![0.2 * round as f64; count],
                sign: vec![rule; count],
                used: (0..count).collect(),
                hx: Vec::new(),
                target: target.clone(),
                x: x.clone(),
            };
            let work = Work::unattended();
            let mut search = ActiveSet::default();
            assert_eq!(
                search.solve(&mut problem, 1e-14, &mut |_, _| (), &work),
                Ok(Ended::Settled)
            );
            let mut b = vec![0.0; count];
            assert_eq!(descend(&problem, &mut b, 1e-12, &work), Ok(true));
            let mut exact = vec![0.0; count];
            for (slot, value) in search.solution() {
                exact[slot] = value;
            }
            assert!(exact.iter().any(|b| *b != 0.0));
            for k in 0..count {
                assert!((exact[k] - b[k]).abs() < 1e-9);
            }
        }
    }
}
