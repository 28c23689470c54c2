//! Baselines: what lies under a row of values, subtracted.

use crate::base::work::Work;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{change_rows, known, runs};
use crate::numeric::step::local::positions;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Each row minus a baseline of its own.
#[derive(Clone, Debug, PartialEq)]
pub struct Baseline {
    rule: BaselineRule,
}

/// What the baseline of a row is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum BaselineRule {
    /// Its smallest active value.
    Offset,
    /// The straight line through its first and last known active values.
    Line,
    /// The smooth curve z of Eilers and Boelens (2005), which minimises
    /// Σ wᵢ (xᵢ − zᵢ)² + smoothness·Σ (second differences of z)², with weight `asymmetry` where
    /// the row lies above the curve and 1 − `asymmetry` where it lies below. Runs of
    /// neighbouring active predictors have their own curves; missing values weigh nothing.
    Asymmetric {
        /// 10² to 10⁹ as a rule; above 0.
        smoothness: f64,
        /// 0.001 to 0.1 as a rule; above 0, below 1.
        asymmetry: f64,
    },
}

/// Passes after which the weights have nearly always settled.
const MOST_PASSES: usize = 200;

impl Baseline {
    /// A baseline by this rule.
    ///
    /// # Errors
    /// [`ParameterError`] when a parameter of the rule is out of its range.
    pub fn new(rule: BaselineRule) -> Result<Self, ParameterError> {
        match rule {
            BaselineRule::Offset | BaselineRule::Line => {}
            BaselineRule::Asymmetric {
                smoothness,
                asymmetry,
            } => {
                let _ = ParameterError::check("smoothness", smoothness, 1e-6, 1e15)?;
                let _ = ParameterError::check("asymmetry", asymmetry, 1e-9, 1.0 - 1e-9)?;
            }
        }
        Ok(Self { rule })
    }
}

impl Preparation for Baseline {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let columns = samples.active_columns();
        match self.rule {
            BaselineRule::Offset => change_rows(samples, &columns, work, |row, values| {
                let least = known(values.iter().copied()).fold(f64::INFINITY, f64::min);
                if least == f64::INFINITY {
                    return Err(StepError::NoSpread { row });
                }
                values.iter_mut().for_each(|x| *x -= least);
                Ok(())
            }),
            BaselineRule::Line => {
                let axis = positions(&samples)?;
                let axis: Vec<f64> = columns.iter().map(|&column| axis[column]).collect();
                change_rows(samples, &columns, work, |row, values| {
                    subtract_line(&axis, values).ok_or(StepError::NoSpread { row })
                })
            }
            BaselineRule::Asymmetric {
                smoothness,
                asymmetry,
            } => {
                let mut samples = samples;
                for run in runs(&samples.active) {
                    let columns: Vec<usize> = run.collect();
                    samples = change_rows(samples, &columns, work, |row, values| {
                        if values.iter().all(|x| x.is_nan()) {
                            return Err(StepError::NoSpread { row });
                        }
                        let curve = asymmetric_baseline(values, smoothness, asymmetry)?;
                        for (x, z) in values.iter_mut().zip(curve) {
                            *x -= z;
                        }
                        Ok(())
                    })?;
                }
                Ok(samples)
            }
        }
    }
}

fn subtract_line(axis: &[f64], values: &mut [f64]) -> Option<()> {
    let first = values.iter().position(|x| !x.is_nan())?;
    let last = values.iter().rposition(|x| !x.is_nan())?;
    let (from, start) = (axis[first], values[first]);
    let slope = if last > first {
        (values[last] - start) / (axis[last] - from)
    } else {
        0.0
    };
    for (x, t) in values.iter_mut().zip(axis) {
        *x -= start + slope * (t - from);
    }
    Some(())
}

fn asymmetric_baseline(
    values: &[f64],
    smoothness: f64,
    asymmetry: f64,
) -> Result<Vec<f64>, StepError> {
    let mut weights: Vec<f64> = values
        .iter()
        .map(|x| if x.is_nan() { 0.0 } else { 1.0 })
        .collect();
    // A value this close to the curve lies on it, and a curve that moves no more has settled.
    let slack = 1e-9
        * known(values.iter().copied())
            .map(f64::abs)
            .fold(0.0, f64::max);
    let mut last: Option<Vec<f64>> = None;
    for _ in 0..MOST_PASSES {
        let curve = smooth(values, &weights, smoothness);
        let mut settled = last.is_some_and(|last| {
            let mut pairs = last.iter().zip(&curve);
            pairs.all(|(old, new)| (old - new).abs() <= slack)
        });
        let mut same = true;
        for ((weight, x), z) in weights.iter_mut().zip(values).zip(&curve) {
            let next = if x.is_nan() {
                0.0
            } else if x - z > slack {
                asymmetry
            } else if z - x > slack {
                1.0 - asymmetry
            } else {
                *weight
            };
            same &= *weight == next;
            *weight = next;
        }
        settled |= same;
        if settled {
            return Ok(curve);
        }
        last = Some(curve);
    }
    Err(StepError::NotSettled {
        passes: MOST_PASSES,
    })
}

/// Minimises Σ wᵢ (xᵢ − zᵢ)² + smoothness·Σ (zᵢ − 2zᵢ₊₁ + zᵢ₊₂)², by the LDLᵀ factors of the
/// pentadiagonal matrix W + smoothness·DᵀD.
fn smooth(values: &[f64], weights: &[f64], smoothness: f64) -> Vec<f64> {
    let n = values.len();
    let (mut diagonal, mut first, mut second) = (weights.to_vec(), vec![0.0; n], vec![0.0; n]);
    for i in 0..n.saturating_sub(2) {
        for (at, square) in [(i, 1.0), (i + 1, 4.0), (i + 2, 1.0)] {
            diagonal[at] += smoothness * square;
        }
        first[i] -= 2.0 * smoothness;
        first[i + 1] -= 2.0 * smoothness;
        second[i] += smoothness;
    }
    // With fewer than three known values a straight line is not determined; a trace of weight
    // everywhere keeps the curve at 0 there.
    let trace = 1e-12 * smoothness.min(1.0);
    diagonal.iter_mut().for_each(|d| *d += trace);
    // In place: `first` and `second` become the two lower diagonals of L, `diagonal` becomes D.
    let mut z: Vec<f64> = (0..n)
        .map(|i| {
            if weights[i] > 0.0 {
                weights[i] * values[i]
            } else {
                0.0
            }
        })
        .collect();
    for i in 0..n {
        let d = diagonal[i];
        let (a, b) = (first[i], second[i]);
        let (l1, l2) = (a / d, b / d);
        if i + 1 < n {
            diagonal[i + 1] -= l1 * a;
            if i + 2 < n {
                first[i + 1] -= l1 * b;
                diagonal[i + 2] -= l2 * b;
            }
        }
        (first[i], second[i]) = (l1, l2);
        if i + 1 < n {
            z[i + 1] -= l1 * z[i];
        }
        if i + 2 < n {
            z[i + 2] -= l2 * z[i];
        }
    }
    for i in (0..n).rev() {
        z[i] /= diagonal[i];
        if i + 1 < n {
            z[i] -= first[i] * z[i + 1];
        }
        if i + 2 < n {
            z[i] -= second[i] * z[i + 2];
        }
    }
    z
}
