//! The range of penalty strengths: from where the penalty empties the model, downwards.

use crate::base::work::Work;
use crate::numeric::error::{FitError, Stop};
use crate::numeric::gaussian::NOTHING_LEFT;
use crate::numeric::glm::Null;
use crate::numeric::ground::{Ground, Penalised};
use crate::numeric::grouped;
use crate::numeric::lanes;
use crate::numeric::path::{Grouping, Params};
use crate::numeric::response::Response;
use crate::numeric::ridge::Spectrum;
use crate::numeric::scan::{Bounds, Sieve};
use crate::numeric::task::Task;

/// How a range of strengths is laid out.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct RangeParams {
    /// How many strengths, evenly spaced in the logarithm.
    pub count: usize,
    /// The last strength as a share of the first (for ridge see [`strength_range`]).
    pub ratio: f64,
}

impl Default for RangeParams {
    /// 100 strengths down to 1 % of the first.
    fn default() -> Self {
        Self {
            count: 100,
            ratio: 0.01,
        }
    }
}

/// A slope of a loss of size about 1 that is rounding only.
const ROUNDING: f64 = 1e-14;

/// No range goes below this share of the largest eigenvalue: in double precision there is nothing
/// left to tell apart there.
const LOWEST: f64 = 1e-10;

/// Falling strengths for a task.
///
/// With a lasso share above 0: from the all-zero point down to `ratio` times it. For ridge there is
/// no all-zero point. There the range starts at the sum of the eigenvalues of K = ZZ'/n, where the
/// penalised predictors have less than one degree of freedom together, and ends at `ratio` times the
/// smallest eigenvalue that is not zero, where nearly all of them are free; but never below 1e-10 of
/// the largest. For other outcomes than measured ones both ends are multiplied by the
/// curvature of the null model's loss.
///
/// Gives an empty list when no predictor can enter.
///
/// # Errors
/// [`Stop::Cancelled`] when called off; [`Stop::Failed`] with what is wrong with the task.
pub fn strength_range(
    task: &Task<'_>,
    share: f64,
    range: RangeParams,
    params: &Params,
    work: &Work<'_>,
) -> Result<Vec<f64>, Stop> {
    let (first, last) = if share == 0.0 {
        ridge_ends(task, range.ratio, work)?
    } else {
        let first = all_zero_point(task, share, params, work)?;
        (first, first * range.ratio)
    };
    if first <= 0.0 || range.count == 0 {
        return Ok(Vec::new());
    }
    let steps = (range.count - 1).max(1) as f64;
    Ok((0..range.count)
        .map(|at| match at {
            0 => first,
            _ => first * (last / first).powf(at as f64 / steps),
        })
        .collect())
}

fn ridge_ends(task: &Task<'_>, ratio: f64, work: &Work<'_>) -> Result<(f64, f64), Stop> {
    let ground = Ground::new(task, Penalised::ByWeight, work)?;
    let spectrum = Spectrum::new(&ground, &ground.basis(), work)?;
    let top = spectrum.values.first().copied().unwrap_or(0.0);
    let sum: f64 = spectrum.values.iter().sum();
    let curvature = match task.response {
        Response::Measured(_) => 1.0,
        Response::YesNo(_)
        | Response::Classes { .. }
        | Response::Count { .. }
        | Response::Time { .. } => Null::new(&ground, task.response, work)?.curvature(),
    };
    let smallest = spectrum
        .values
        .iter()
        .copied()
        .filter(|d| *d > 1e-12 * top)
        .fold(top, f64::min);
    let last = (ratio * smallest).max(LOWEST * top);
    Ok((curvature * sum, curvature * last))
}

/// The smallest strength at which no penalised predictor is in the model:
/// `max_j |gradient_j| / (share · f_j)` at the model of intercept, covariates and predictors without
/// a penalty, over the directions that the sign rules allow; for classes that are penalised together
/// `max_j ‖gradient_j‖ / (share · f_j)`. Infinite for a share of 0 unless nothing is left to explain;
/// 0 when no predictor can enter.
///
/// # Errors
/// [`Stop::Cancelled`] when called off; [`Stop::Failed`] with what is wrong with the task.
pub fn all_zero_point(
    task: &Task<'_>,
    share: f64,
    params: &Params,
    work: &Work<'_>,
) -> Result<f64, Stop> {
    if !(0.0..=1.0).contains(&share) {
        return Err(FitError::Share(share).into());
    }
    let ground = Ground::new(task, Penalised::ByWeight, work)?;
    let top = match task.response {
        Response::Measured(y) => {
            let basis = ground.basis();
            let outcome: Vec<f64> = ground
                .rows
                .iter()
                .zip(&ground.root)
                .map(|(&row, root)| y[row] * root)
                .collect();
            let mut residual = outcome.clone();
            basis.project(&mut residual);
            basis.project(&mut residual);
            if lanes::norm(&residual) <= NOTHING_LEFT * lanes::norm(&outcome) {
                return Ok(0.0);
            }
            for (r, root) in residual.iter_mut().zip(&ground.root) {
                *r *= root;
            }
            let mut g = Vec::new();
            ground.spread(&residual, &mut g);
            largest(&ground, &g, params)
        }
        Response::YesNo(_)
        | Response::Classes { .. }
        | Response::Count { .. }
        | Response::Time { .. } => {
            let null = Null::new(&ground, task.response, work)?;
            let is_classes = matches!(task.response, Response::Classes { .. });
            let top = if is_classes && params.grouping == Grouping::Together {
                grouped::top(&ground, &null)
            } else {
                let tops = null
                    .residuals(&ground)
                    .into_iter()
                    .map(|g| largest(&ground, &g, params));
                tops.fold(0.0, f64::max)
            };
            if top > ROUNDING { top } else { 0.0 }
        }
    };
    Ok(if top > 0.0 { top / share } else { 0.0 })
}

/// The largest |zⱼ'g|/fⱼ over the penalised predictors that may move in the direction of zⱼ'g,
/// exactly: bounds for all, then the contenders in full.
pub(crate) fn largest(ground: &Ground<'_>, g: &[f64], params: &Params) -> f64 {
    let sieve = Sieve::new(ground);
    let mut bounds = [Bounds::default()];
    sieve.bounds(ground.predictors.panels(), &[g], &mut bounds);
    let [bounds] = bounds;
    let length = lanes::norm(g);
    let mut order: Vec<usize> = (0..ground.predictors.n_predictors())
        .filter(|&j| bounds.of(j) > 0.0)
        .collect();
    order.sort_by(|&a, &b| bounds.of(b).total_cmp(&bounds.of(a)).then(a.cmp(&b)));
    let mut top = 0.0_f64;
    for j in order {
        if f64::from(bounds.of(j)) * length < top {
            break;
        }
        let c = ground.correlation(j, g);
        if params.sign(j).allows(c) {
            top = top.max(c.abs() / ground.factor(j));
        }
    }
    top
}
