//! Polynomials along the axis: local (smoothing, derivatives) and of the whole row (trend).

use crate::base::work::Work;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{change_rows, runs};
use crate::numeric::step::span::dot;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Savitzky and Golay (1964): around every predictor a polynomial is fitted by least squares to
/// the predictors in a window, and its value (or derivative) at the predictor is taken. Near
/// the ends, the polynomial of the first or last full window is evaluated at the predictor.
///
/// | parameter | range | meaning |
/// |---|---|---|
/// | window | odd, degree + 1 or more | how many neighbouring predictors |
/// | degree | 0 to 10, less than window | of the polynomial |
/// | derivative | 0 to degree | 0 smooths |
///
/// Derivatives are per unit of the axis, or per predictor when there is no axis. On an axis
/// that is not evenly spaced each window is fitted at its own positions. Windows do not reach
/// across predictors that are switched off. A missing value makes the values of every window
/// that holds it missing.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SavitzkyGolay {
    window: usize,
    degree: usize,
    derivative: usize,
}

impl SavitzkyGolay {
    /// A window of `window` predictors, a polynomial of `degree`, and its `derivative`.
    ///
    /// # Errors
    /// [`ParameterError`] when a parameter is out of its range; an even window is.
    pub fn new(window: usize, degree: usize, derivative: usize) -> Result<Self, ParameterError> {
        let degree = ParameterError::check_count("degree", degree, 0, 10)?;
        let derivative = ParameterError::check_count("derivative", derivative, 0, degree)?;
        let least = degree + 1 + degree % 2;
        let window = ParameterError::check_count("window", window, least, 9_999)?;
        if window.is_multiple_of(2) {
            return Err(ParameterError {
                parameter: "window",
                value: window as f64,
                least: (window - 1) as f64,
                most: (window + 1) as f64,
            });
        }
        Ok(Self {
            window,
            degree,
            derivative,
        })
    }

    /// For each predictor of a run where its window starts and with which weights.
    fn plan(&self, positions: &[f64]) -> Vec<(usize, Vec<f64>)> {
        let (n, half) = (positions.len(), self.window / 2);
        let even = is_even(positions);
        let mut centered: Option<Vec<f64>> = None;
        (0..n)
            .map(|at| {
                let start = at.saturating_sub(half).min(n - self.window);
                if let (true, true, Some(weights)) = (even, at == start + half, &centered) {
                    return (start, weights.clone());
                }
                let weights = local_polynomial_weights(
                    &positions[start..start + self.window],
                    positions[at],
                    self.degree,
                    self.derivative,
                );
                if even && at == start + half {
                    centered = Some(weights.clone());
                }
                (start, weights)
            })
            .collect()
    }
}

impl Preparation for SavitzkyGolay {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        mut samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let axis = positions(&samples)?;
        for run in runs(&samples.active) {
            if run.len() < self.window {
                return Err(StepError::WindowTooWide {
                    window: self.window,
                    run: run.len(),
                }
                .into());
            }
            let plan = self.plan(&axis[run.clone()]);
            let mut smooth = vec![0.0; run.len()];
            let columns: Vec<usize> = run.collect();
            samples = change_rows(samples, &columns, work, |_, values| {
                for ((start, weights), value) in plan.iter().zip(&mut smooth) {
                    *value = dot(weights, &values[*start..start + self.window]);
                }
                values.copy_from_slice(&smooth);
                Ok(())
            })?;
        }
        Ok(samples)
    }
}

/// The weights w with which Σ wₖ·y(tₖ) is the `derivative`-th derivative, at `at`, of the
/// polynomial of `degree` that fits y at `positions` by least squares.
///
/// The positions must differ and be more than `degree`. An orthonormal basis of the polynomials
/// is built by repeated Gram–Schmidt on positions scaled to −1 … 1.
#[must_use]
pub fn local_polynomial_weights(
    positions: &[f64],
    at: f64,
    degree: usize,
    derivative: usize,
) -> Vec<f64> {
    let (least, most) = ends(positions);
    let (middle, half) = (0.5 * (least + most), 0.5 * (most - least));
    let half = if half > 0.0 { half } else { 1.0 };
    let scaled: Vec<f64> = positions.iter().map(|t| (t - middle) / half).collect();
    let basis = Orthonormal::new(&scaled, degree);
    let at = (at - middle) / half;
    let factors = basis.derivatives(at, derivative);
    (0..positions.len())
        .map(|k| {
            let sum: f64 = (0..=degree).map(|d| factors[d] * basis.values[d][k]).sum();
            sum / half.powi(derivative as i32)
        })
        .collect()
}

/// Polynomials of degree 0 to d that are orthonormal over some points.
struct Orthonormal {
    /// The values of each polynomial at the points.
    values: Vec<Vec<f64>>,
    /// The coefficients of each polynomial, constant first.
    coefficients: Vec<Vec<f64>>,
}

impl Orthonormal {
    fn new(points: &[f64], degree: usize) -> Self {
        let mut values: Vec<Vec<f64>> = Vec::with_capacity(degree + 1);
        let mut coefficients: Vec<Vec<f64>> = Vec::with_capacity(degree + 1);
        for d in 0..=degree {
            // The next polynomial starts as t times the last one (1 at the beginning).
            let (mut value, mut coefficient) = if d == 0 {
                (vec![1.0; points.len()], vec![1.0])
            } else {
                let value = values[d - 1].iter().zip(points).map(|(v, t)| v * t);
                let mut shifted = vec![0.0];
                shifted.extend(&coefficients[d - 1]);
                (value.collect(), shifted)
            };
            // Twice is enough (Kahan and Parlett).
            for _ in 0..2 {
                for (other, other_coefficient) in values.iter().zip(&coefficients) {
                    let overlap = dot(other, &value);
                    for (v, o) in value.iter_mut().zip(other) {
                        *v -= overlap * o;
                    }
                    for (c, o) in coefficient.iter_mut().zip(other_coefficient) {
                        *c -= overlap * o;
                    }
                }
            }
            let length = dot(&value, &value).sqrt();
            value.iter_mut().for_each(|v| *v /= length);
            coefficient.iter_mut().for_each(|c| *c /= length);
            values.push(value);
            coefficients.push(coefficient);
        }
        Self {
            values,
            coefficients,
        }
    }

    /// The derivative of each polynomial at a point.
    fn derivatives(&self, at: f64, derivative: usize) -> Vec<f64> {
        self.coefficients
            .iter()
            .map(|coefficients| {
                coefficients
                    .iter()
                    .enumerate()
                    .skip(derivative)
                    .map(|(power, c)| {
                        let falling: f64 = (0..derivative).map(|k| (power - k) as f64).product();
                        c * falling * at.powi((power - derivative) as i32)
                    })
                    .sum()
            })
            .collect()
    }
}

/// Each row minus the polynomial of `degree` in the axis that fits its active predictors best.
///
/// Without an axis, predictors count as evenly spaced. A missing value stays missing; the
/// polynomial is fitted to the known ones.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Detrend {
    degree: usize,
}

impl Detrend {
    /// A trend of `degree` 0 to 6.
    ///
    /// # Errors
    /// [`ParameterError`] when the degree is out of its range.
    pub fn new(degree: usize) -> Result<Self, ParameterError> {
        let degree = ParameterError::check_count("degree", degree, 0, 6)?;
        Ok(Self { degree })
    }
}

impl Preparation for Detrend {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let axis = positions(&samples)?;
        let columns = samples.active_columns();
        let points = scaled_positions(&axis, &columns);
        if points.len() <= self.degree {
            return Err(StepError::WindowTooWide {
                window: self.degree + 1,
                run: points.len(),
            }
            .into());
        }
        let whole = Orthonormal::new(&points, self.degree);
        change_rows(samples, &columns, work, |row, values| {
            let known: Vec<usize> = (0..values.len())
                .filter(|&at| !values[at].is_nan())
                .collect();
            if known.len() <= self.degree {
                return Err(StepError::NoSpread { row });
            }
            if known.len() == values.len() {
                subtract_trend(values, &whole);
            } else {
                let points: Vec<f64> = known.iter().map(|&at| points[at]).collect();
                let mut rest: Vec<f64> = known.iter().map(|&at| values[at]).collect();
                subtract_trend(&mut rest, &Orthonormal::new(&points, self.degree));
                for (&at, rest) in known.iter().zip(rest) {
                    values[at] = rest;
                }
            }
            Ok(())
        })
    }
}

fn subtract_trend(values: &mut [f64], basis: &Orthonormal) {
    for polynomial in &basis.values {
        let share = dot(polynomial, values);
        for (value, p) in values.iter_mut().zip(polynomial) {
            *value -= share * p;
        }
    }
}

pub(super) fn scaled_positions(axis: &[f64], columns: &[usize]) -> Vec<f64> {
    let chosen: Vec<f64> = columns.iter().map(|&column| axis[column]).collect();
    let (least, most) = ends(&chosen);
    let (middle, half) = (0.5 * (least + most), 0.5 * (most - least));
    let half = if half > 0.0 { half } else { 1.0 };
    chosen.iter().map(|t| (t - middle) / half).collect()
}

/// The axis, or 0, 1, 2, ... where there is none. An axis must rise or fall throughout.
pub(super) fn positions(samples: &Samples) -> Result<Vec<f64>, StepError> {
    let Some(axis) = &samples.axis else {
        return Ok((0..samples.n_columns()).map(|at| at as f64).collect());
    };
    let rises = axis.len() < 2 || axis[1] > axis[0];
    for column in 1..axis.len() {
        let step = axis[column] - axis[column - 1];
        let goes_on = if rises { step > 0.0 } else { step < 0.0 };
        if !goes_on {
            return Err(StepError::AxisNotMonotone { column });
        }
    }
    Ok(axis.clone())
}

/// Whether positions are evenly spaced up to rounding in the tenth digit of a step.
fn is_even(positions: &[f64]) -> bool {
    let n = positions.len();
    if n < 2 {
        return true;
    }
    let step = (positions[n - 1] - positions[0]) / (n - 1) as f64;
    let slack = 1e-10 * step.abs() + 1e-13 * positions[0].abs().max(positions[n - 1].abs());
    (0..n).all(|at| (positions[at] - positions[0] - step * at as f64).abs() <= slack)
}

fn ends(positions: &[f64]) -> (f64, f64) {
    positions
        .iter()
        .fold((f64::INFINITY, f64::NEG_INFINITY), |(least, most), &t| {
            (least.min(t), most.max(t))
        })
}
