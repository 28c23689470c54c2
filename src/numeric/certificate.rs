//! How far a solution can be from the best, in plain arithmetic that shares nothing with the solvers.

use crate::numeric::error::{FitError, Unsupported};
use crate::numeric::path::Coefficients;
use crate::numeric::response::Response;
use crate::numeric::task::{Scaling, Task};

/// An independent check of a solution.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Certificate {
    /// The duality gap over the loss of the model with an intercept only.
    pub gap: f64,
    /// The largest violation of the optimality conditions over all candidates, in units of the
    /// steepest slope of the penalty, λ (share + (1 − share) max|b|): |gradient| beyond what the
    /// penalty holds, or off the equation it must satisfy. Predictors and covariates without a
    /// penalty are checked too.
    pub worst_violation: f64,
    /// Where it is; `None` when it is at the intercept or a covariate.
    pub worst_predictor: Option<usize>,
}

/// Checks a solution of a task against the optimality conditions of every candidate and by its
/// duality gap, from the matrix itself, in plain double precision sums.
///
/// # Errors
/// What is wrong with the task.
pub fn certify(
    task: &Task<'_>,
    share: f64,
    strength: f64,
    solution: &Coefficients,
) -> Result<Certificate, FitError> {
    task.check()?;
    let part = Part::new(task)?;
    match task.response {
        Response::Measured(y) => Ok(measured(&part, y, share, strength, solution)),
        Response::YesNo(_)
        | Response::Classes { .. }
        | Response::Count { .. }
        | Response::Time { .. } => Err(FitError::Unsupported(Unsupported::Outcome)),
    }
}

/// Training rows and weights, taken from the task anew.
struct Part<'a> {
    task: &'a Task<'a>,
    rows: Vec<usize>,
    v: Vec<f64>,
}

/// A predictor on the training rows.
struct Column {
    z: Vec<f64>,
    /// Standard deviation, or 1 where predictors are only centred.
    scale: f64,
}

impl<'a> Part<'a> {
    fn new(task: &'a Task<'a>) -> Result<Self, FitError> {
        let rows: Vec<usize> = task
            .rows
            .iter()
            .copied()
            .filter(|&row| task.weight(row) > 0.0)
            .collect();
        if rows.is_empty() {
            return Err(FitError::NoRows);
        }
        let total: f64 = rows.iter().map(|&row| task.weight(row)).sum();
        let v = rows.iter().map(|&row| task.weight(row) / total).collect();
        Ok(Self { task, rows, v })
    }

    /// A candidate in the scale of the penalty; `None` when it cannot enter.
    fn column(&self, j: usize) -> Option<Column> {
        if self.task.columns.is_some_and(|columns| !columns[j]) {
            return None;
        }
        let raw: Vec<f64> = self
            .rows
            .iter()
            .map(|&row| self.task.predictors.x()[(row, j)])
            .collect();
        let top = raw.iter().fold(0.0_f64, |top, x| top.max(x.abs()));
        let first = raw[0];
        // Taken from the first value, so that a large common offset costs no digits.
        let shift: f64 = raw.iter().zip(&self.v).map(|(x, v)| v * (x - first)).sum();
        let z: Vec<f64> = raw.iter().map(|x| (x - first) - shift).collect();
        let size = z.iter().fold(0.0_f64, |size, x| size.max(x.abs()));
        if size <= 1e-14 * top {
            return None;
        }
        let square: f64 = z
            .iter()
            .zip(&self.v)
            .map(|(z, v)| v * (z / size) * (z / size))
            .sum();
        let scale = match self.task.scaling {
            Scaling::UnitVariance => size * square.sqrt(),
            Scaling::AsGiven => 1.0,
        };
        Some(Column {
            z: z.iter().map(|z| z / scale).collect(),
            scale,
        })
    }

    /// The largest coefficient in the scale of the penalty.
    fn largest(&self, solution: &Coefficients) -> f64 {
        solution
            .predictors
            .iter()
            .filter_map(|&(j, raw)| Some(raw.abs() * self.column(j)?.scale))
            .fold(0.0, f64::max)
    }

    /// The linear predictor of the training rows.
    fn linear(&self, solution: &Coefficients) -> Vec<f64> {
        self.rows
            .iter()
            .map(|&row| {
                let mut eta = solution.intercept;
                for (k, a) in solution.covariates.iter().enumerate() {
                    eta += self.task.covariates[(row, k)] * a;
                }
                for &(j, b) in &solution.predictors {
                    eta += self.task.predictors.x()[(row, j)] * b;
                }
                eta
            })
            .collect()
    }
}

/// The worst violation so far.
struct Worst {
    violation: f64,
    predictor: Option<usize>,
}

impl Worst {
    fn see(&mut self, violation: f64, predictor: Option<usize>) {
        if violation > self.violation {
            self.violation = violation;
            self.predictor = predictor;
        }
    }
}

fn measured(
    part: &Part<'_>,
    y: &[f64],
    share: f64,
    strength: f64,
    solution: &Coefficients,
) -> Certificate {
    let task = part.task;
    let fitted = part.linear(solution);
    let y: Vec<f64> = part.rows.iter().map(|&row| y[row]).collect();
    let r: Vec<f64> = y.iter().zip(&fitted).map(|(y, f)| y - f).collect();
    let v = &part.v;
    let mean: f64 = y.iter().zip(v).map(|(y, v)| y * v).sum();
    let null: f64 = y
        .iter()
        .zip(v)
        .map(|(y, v)| 0.5 * v * (y - mean) * (y - mean))
        .sum();
    let product = |column: &[f64]| -> f64 {
        column
            .iter()
            .zip(&r)
            .zip(v)
            .map(|((x, r), v)| v * x * r)
            .sum()
    };
    let size: f64 = r.iter().zip(v).map(|(r, v)| v * r * r).sum();
    // Violations are in units of the penalty's slope; without a penalty, of the residual.
    let unit = if strength > 0.0 {
        strength * (share + (1.0 - share) * part.largest(solution))
    } else {
        size.sqrt()
    };
    let unit = if unit > 0.0 { unit } else { 1.0 };
    let mut worst = Worst {
        violation: 0.0,
        predictor: None,
    };
    worst.see(product(&vec![1.0; r.len()]).abs() / unit, None);
    for covariate in task.covariates.column_iter() {
        let column: Vec<f64> = part.rows.iter().map(|&row| covariate[row]).collect();
        let top = column.iter().fold(0.0_f64, |top, x| top.max(x.abs()));
        if top > 0.0 {
            worst.see(product(&column).abs() / (top * unit), None);
        }
    }
    let mut penalty = 0.0;
    let mut largest = 1.0_f64;
    let mut excess = 0.0;
    let mut coefficients = solution.predictors.iter().copied().peekable();
    for j in 0..task.predictors.n_predictors() {
        let raw = coefficients
            .next_if(|(at, _)| *at == j)
            .map_or(0.0, |(_, value)| value);
        let Some(column) = part.column(j) else {
            if raw != 0.0 {
                worst.see(f64::INFINITY, Some(j));
            }
            continue;
        };
        let b = raw * column.scale;
        let factor = task.factors.map_or(1.0, |factors| factors[j]) * strength;
        let (lasso, ridge) = (factor * share, factor * (1.0 - share));
        let c = product(&column.z);
        penalty += lasso * b.abs() + 0.5 * ridge * b * b;
        if factor == 0.0 {
            worst.see(c.abs() / unit, Some(j));
            continue;
        }
        let violation = if b == 0.0 {
            (c.abs() - lasso).max(0.0)
        } else {
            (c - lasso * b.signum() - ridge * b).abs()
        };
        worst.see(violation / unit, Some(j));
        let over = (c.abs() - lasso).max(0.0);
        if ridge > 0.0 {
            excess += over * over / (2.0 * ridge);
        } else if over > 0.0 {
            largest = largest.max(c.abs() / lasso);
        }
    }
    // The dual point is the residual, shrunk until it is feasible. It counts as orthogonal to what
    // is not penalised; the violation says how true that is.
    let t = 1.0 / largest;
    let along: f64 = y
        .iter()
        .zip(&r)
        .zip(v)
        .map(|((y, r), v)| v * (y - mean) * r)
        .sum();
    // ½‖y‖² − ½‖y − tr‖² = t y'r − t²/2 ‖r‖²
    let dual = t * along - 0.5 * t * t * size - excess;
    let gap = 0.5 * size + penalty - dual;
    Certificate {
        gap: if null > 0.0 { gap.max(0.0) / null } else { 0.0 },
        worst_violation: worst.violation,
        worst_predictor: worst.predictor,
    }
}
