//! The losses of outcomes that are not measured quantities: value, slope, curvature, conjugate.
//!
//! Every loss is a function f of the linear predictors η of the training rows, weighted by v with
//! sum 1. What the fits need of it: f(η); the residual r = −∇f(η); products with the Hessian H; and
//! the dual value −f*(−t·r) for 0 ≤ t ≤ 1, which bounds the optimum from below once t·r is feasible.

use crate::numeric::cox::Cox;
use crate::numeric::error::FitError;
use crate::numeric::ground::Ground;
use crate::numeric::multinomial::Multinomial;
use crate::numeric::response::Response;

/// Curvatures below this share of a sample's weight are lifted to it, so that steps stay finite
/// where a fit is nearly certain.
const LEAST_CURVATURE: f64 = 1e-12;

/// A loss, with its state at the linear predictors that it was last evaluated at.
pub(crate) trait Loss {
    /// The number of linear predictors of a sample, K.
    fn n_linear(&self) -> usize {
        1
    }

    /// Whether the loss needs an intercept. Times do not: adding one changes nothing.
    fn has_intercept(&self) -> bool {
        true
    }

    /// Moves to linear predictors (one class after the other) and gives the loss.
    fn evaluate(&mut self, eta: &[f64]) -> f64;

    /// −∇f, the same shape as the linear predictors.
    fn residual(&self) -> &[f64];

    /// The diagonal of the Hessian, where there is nothing else in it.
    fn curvature(&self) -> Option<&[f64]>;

    /// H·x.
    fn product(&self, x: &[f64], out: &mut Vec<f64>);

    /// −f*(−t·r) for 0 ≤ t ≤ 1, or a lower bound of it.
    fn dual(&self, t: f64) -> f64;

    /// A copy in its present state, whose Hessian stays while this one moves on.
    fn frozen(&self) -> Box<dyn Loss>;

    /// The smallest value that the loss has on any linear predictors.
    fn saturated(&self) -> f64 {
        0.0
    }
}

/// The loss of a task's outcome on its training rows.
///
/// # Errors
/// When the training rows hold one class only, no event, or no count above zero.
pub(crate) fn of(ground: &Ground<'_>, response: &Response) -> Result<Box<dyn Loss>, FitError> {
    let rows = &ground.rows;
    let v = ground.share.clone();
    match response {
        Response::Measured(_) => unreachable!("measured outcomes have their own solvers"),
        Response::YesNo(yes) => {
            let y: Vec<f64> = rows
                .iter()
                .map(|&row| f64::from(u8::from(yes[row])))
                .collect();
            if y.iter().all(|value| *value == y[0]) {
                return Err(FitError::OneClass);
            }
            Ok(Box::new(Binomial::new(y, v)))
        }
        Response::Count { count, offset } => {
            let y: Vec<f64> = rows.iter().map(|&row| count[row]).collect();
            if y.iter().all(|value| *value == 0.0) {
                return Err(FitError::NoCounts);
            }
            let offset = offset
                .as_ref()
                .map(|offset| rows.iter().map(|&row| offset[row]).collect());
            Ok(Box::new(Poisson::new(y, offset, v)))
        }
        Response::Classes { class, n_classes } => {
            let class: Vec<usize> = rows.iter().map(|&row| class[row]).collect();
            if let Some(empty) = (0..*n_classes).find(|k| !class.contains(k)) {
                return Err(FitError::EmptyClass(empty));
            }
            if *n_classes < 2 {
                return Err(FitError::OneClass);
            }
            Ok(Box::new(Multinomial::new(class, *n_classes, v)))
        }
        Response::Time {
            time,
            event,
            strata,
            ties,
        } => {
            let pick = |row: usize| (time[row], event[row], strata.as_ref().map_or(0, |s| s[row]));
            let rows: Vec<_> = rows.iter().map(|&row| pick(row)).collect();
            if rows.iter().all(|(_, event, _)| !event) {
                return Err(FitError::NoEvents);
            }
            Ok(Box::new(Cox::new(&rows, v, ground.total, *ties)))
        }
    }
}

/// f = Σ vᵢ [ log(1 + exp ηᵢ) − yᵢηᵢ ]
#[derive(Clone)]
struct Binomial {
    y: Vec<f64>,
    v: Vec<f64>,
    residual: Vec<f64>,
    curvature: Vec<f64>,
}

impl Binomial {
    fn new(y: Vec<f64>, v: Vec<f64>) -> Self {
        Self {
            residual: vec![0.0; y.len()],
            curvature: vec![0.0; y.len()],
            y,
            v,
        }
    }
}

/// log(1 + exp η) without overflow.
pub(crate) fn log_one_plus_exp(eta: f64) -> f64 {
    eta.max(0.0) + (-eta.abs()).exp().ln_1p()
}

/// 1 / (1 + exp(−η)) without overflow.
pub(crate) fn logistic(eta: f64) -> f64 {
    let small = (-eta.abs()).exp();
    if eta >= 0.0 {
        1.0 / (1.0 + small)
    } else {
        small / (1.0 + small)
    }
}

/// a log a, continued by 0 at 0.
pub(crate) fn entropy(a: f64) -> f64 {
    if a > 0.0 { a * a.ln() } else { 0.0 }
}

impl Loss for Binomial {
    fn evaluate(&mut self, eta: &[f64]) -> f64 {
        let mut loss = 0.0;
        for (i, &eta) in eta.iter().enumerate() {
            let (y, v) = (self.y[i], self.v[i]);
            let mu = logistic(eta);
            // Written without y − μ, which would lose digits where μ is nearly y.
            let off = if y > 0.5 { logistic(-eta) } else { -mu };
            loss += v * log_one_plus_exp(if y > 0.5 { -eta } else { eta });
            self.residual[i] = v * off;
            self.curvature[i] = v * (mu * logistic(-eta)).max(LEAST_CURVATURE);
        }
        loss
    }

    fn residual(&self) -> &[f64] {
        &self.residual
    }

    fn curvature(&self) -> Option<&[f64]> {
        Some(&self.curvature)
    }

    fn product(&self, x: &[f64], out: &mut Vec<f64>) {
        out.clear();
        out.extend(x.iter().zip(&self.curvature).map(|(x, h)| x * h));
    }

    fn dual(&self, t: f64) -> f64 {
        // With a = y − t(y − μ): −Σ v [a log a + (1 − a) log(1 − a)].
        let mut sum = 0.0;
        for (r, v) in self.residual.iter().zip(&self.v) {
            // |y − a|: the entropy does not care which of the two classes it is.
            let off = (t * r / v).abs().min(1.0);
            sum -= v * (entropy(off) + (1.0 - off) * (-off).ln_1p());
        }
        if sum.is_finite() { sum } else { 0.0 }
    }

    fn frozen(&self) -> Box<dyn Loss> {
        Box::new(self.clone())
    }
}

/// f = Σ vᵢ [ exp ζᵢ − yᵢζᵢ ],  ζ = η + offset
#[derive(Clone)]
struct Poisson {
    y: Vec<f64>,
    offset: Vec<f64>,
    v: Vec<f64>,
    mean: Vec<f64>,
    residual: Vec<f64>,
    curvature: Vec<f64>,
}

impl Poisson {
    fn new(y: Vec<f64>, offset: Option<Vec<f64>>, v: Vec<f64>) -> Self {
        let m = y.len();
        Self {
            y,
            offset: offset.unwrap_or_else(|| vec![0.0; m]),
            v,
            mean: vec![0.0; m],
            residual: vec![0.0; m],
            curvature: vec![0.0; m],
        }
    }
}

impl Loss for Poisson {
    fn evaluate(&mut self, eta: &[f64]) -> f64 {
        let mut loss = 0.0;
        for (i, &eta) in eta.iter().enumerate() {
            let (y, v) = (self.y[i], self.v[i]);
            let zeta = eta + self.offset[i];
            let mean = zeta.exp();
            loss += v * (mean - y * zeta);
            self.mean[i] = mean;
            self.residual[i] = v * (y - mean);
            self.curvature[i] = v * mean.max(LEAST_CURVATURE);
        }
        loss
    }

    fn residual(&self) -> &[f64] {
        &self.residual
    }

    fn curvature(&self) -> Option<&[f64]> {
        Some(&self.curvature)
    }

    fn product(&self, x: &[f64], out: &mut Vec<f64>) {
        out.clear();
        out.extend(x.iter().zip(&self.curvature).map(|(x, h)| x * h));
    }

    fn dual(&self, t: f64) -> f64 {
        // With a = (1 − t) y + t μ: −Σ [ v (a log a − a) + u · offset ], u = t·r.
        let mut sum = 0.0;
        for i in 0..self.y.len() {
            let a = (1.0 - t) * self.y[i] + t * self.mean[i];
            sum -= self.v[i] * (entropy(a) - a) + t * self.residual[i] * self.offset[i];
        }
        sum
    }

    fn frozen(&self) -> Box<dyn Loss> {
        Box::new(self.clone())
    }

    fn saturated(&self) -> f64 {
        let terms = self.y.iter().zip(&self.v);
        terms.map(|(y, v)| v * (y - entropy(*y))).sum()
    }
}

#[cfg(test)]
mod tests;
