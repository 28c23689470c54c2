//! The path of fits to outcomes that are not measured quantities, by proximal Newton.
//!
//! The same two pieces as for a measured outcome: exact solutions on a small working set, and a
//! certified scan over all predictors for several strengths at once. Ridge fits are made in the space
//! of the samples, on the directions that the predictors span there.

use crate::base::work::Work;
use crate::numeric::active_set::ActiveSet;
use crate::numeric::dual::Dual;
use crate::numeric::error::{FitError, Stop};
use crate::numeric::features::Features;
use crate::numeric::frontier::{Frontier, Level, Proof, Within, capacity, worst};
use crate::numeric::ground::Ground;
use crate::numeric::loss;
use crate::numeric::matrix::Matrix;
use crate::numeric::newton::{Newton, Standing};
use crate::numeric::path::{Info, Linear, Params, Point};
use crate::numeric::penalty::Sign;
use crate::numeric::response::Response;
use crate::numeric::scan::BATCH;
use crate::numeric::working::Working;

/// What rounding may add to a correlation of a loss of size about 1.
const FLOOR: f64 = 1e-14;

/// Newton stops at this share of the gap that was asked for; the rest is room for the scan.
const WITHIN: f64 = 0.25;

/// A linear predictor beyond this says that coefficients grow without limit: the probability of
/// the other class is below 1e-13.
const BEYOND: f64 = 30.0;

/// The fit without penalised predictors, and what gaps are measured against.
pub(crate) struct Null {
    pub(crate) newton: Newton,
    /// The null loss less the smallest loss there can be.
    pub(crate) scale: f64,
    /// The number of unpenalised columns that count.
    pub(crate) rank: usize,
}

impl Null {
    /// Fits what carries no penalty.
    ///
    /// # Errors
    /// What is wrong with the outcome; [`FitError::Unbounded`] when it has no finite solution.
    pub(crate) fn new(
        ground: &Ground<'_>,
        response: &Response,
        work: &Work<'_>,
    ) -> Result<Self, Stop> {
        let loss = loss::of(ground, response)?;
        let (saturated, n_linear) = (loss.saturated(), loss.n_linear());
        let mut free = ground.free_columns();
        if !loss.has_intercept() {
            drop(free.remove(0));
        }
        let rank = free_rank(ground, &free) * if n_linear > 1 { n_linear - 1 } else { 1 };
        let mut newton = Newton::new(loss, free, ground.n_rows());
        let p = ground.predictors.n_predictors();
        let mut working = Working::new(newton.length(), p, n_linear);
        // Nothing is penalised, so the gap says nothing; the slopes decide.
        let goal = f64::INFINITY;
        let standing = newton.solve(&mut working, &mut ActiveSet::default(), goal, work)?;
        if !ground.free.is_empty() || ground.n_covariates() > 0 {
            let spread = newton
                .eta
                .iter()
                .fold(0.0_f64, |top, eta| top.max(eta.abs()));
            if spread > BEYOND && n_linear == 1 && !matches!(response, Response::Count { .. }) {
                return Err(FitError::Unbounded { strength: 0.0 }.into());
            }
        }
        Ok(Self {
            newton,
            scale: standing.loss - saturated,
            rank,
        })
    }

    /// The residual of each class over all samples, of sum zero.
    pub(crate) fn residuals(&self, ground: &Ground<'_>) -> Vec<Vec<f64>> {
        spread(ground, self.newton.loss.residual())
    }

    /// The curvature of the loss, summed over the samples: about the size by which ridge penalties
    /// differ from those of a measured outcome.
    pub(crate) fn curvature(&self) -> f64 {
        self.newton
            .loss
            .curvature()
            .map_or(1.0, |curvature| curvature.iter().sum())
    }
}

fn free_rank(ground: &Ground<'_>, free: &[Vec<f64>]) -> usize {
    crate::numeric::basis::Basis::new(ground.n_rows(), free.iter().cloned()).rank()
}

/// A residual of all classes over all samples, class by class, each of sum zero.
pub(crate) fn spread(ground: &Ground<'_>, residual: &[f64]) -> Vec<Vec<f64>> {
    residual
        .chunks_exact(ground.n_rows())
        .map(|r| ground.spread_centered(r.to_vec()))
        .collect()
}

/// One solved strength that waits for its proof.
struct Trial {
    solution: Vec<(usize, f64)>,
    a: Vec<f64>,
    eta: Vec<f64>,
    spread: Vec<Vec<f64>>,
    standing: Standing,
    events: usize,
    df: f64,
}

struct Walk<'t, 'g> {
    ground: &'t Ground<'g>,
    params: &'t Params,
    share: f64,
    /// The null loss, which gaps are measured against.
    scale: f64,
    rank: usize,
    newton: Newton,
    working: Working,
    active: ActiveSet,
    frontier: Frontier,
}

/// Fits all strengths, which must fall and be above zero, with a share above zero.
///
/// # Errors
/// When called off, or when the outcome cannot be fitted.
pub(crate) fn walk(
    ground: &Ground<'_>,
    response: &Response,
    share: f64,
    strengths: &[f64],
    params: &Params,
    work: &Work<'_>,
) -> Result<Vec<Point>, Stop> {
    let null = Null::new(ground, response, work)?;
    let p = ground.predictors.n_predictors();
    let frontier = Frontier::new(ground, &null.residuals(ground));
    let n_linear = null.newton.loss.n_linear();
    let mut walk = Walk {
        ground,
        params,
        share,
        scale: null.scale,
        rank: null.rank,
        working: Working::new(null.newton.length(), p, n_linear),
        newton: null.newton,
        active: ActiveSet::default(),
        frontier,
    };
    let mut points = Vec::with_capacity(strengths.len());
    while points.len() < strengths.len() {
        work.step(points.len(), strengths.len())?;
        let ahead = &strengths[points.len()..];
        // All classes of one fit are scanned together.
        let batch = (BATCH / n_linear).max(1);
        let found = walk.advance(&ahead[..ahead.len().min(batch)], work)?;
        points.extend(found);
    }
    Ok(points)
}

impl Walk<'_, '_> {
    fn level(&self, strength: f64) -> Level {
        Level {
            lasso: strength * self.share,
            ridge: strength * (1.0 - self.share),
        }
    }

    /// Solves a few strengths on the working set, proves them with one scan, and returns those
    /// before the first that needs another predictor.
    fn advance(&mut self, strengths: &[f64], work: &Work<'_>) -> Result<Vec<Point>, Stop> {
        let weakest = self.level(strengths[strengths.len() - 1]).lasso;
        let likely = self.frontier.likely(&self.working, weakest);
        self.admit(likely, capacity(self.ground));
        let mut points = Vec::new();
        while points.is_empty() {
            let mut trials = Vec::with_capacity(strengths.len());
            for &strength in strengths {
                trials.push(self.solve(strength, work)?);
            }
            let fits: Vec<&[Vec<f64>]> = trials.iter().map(|t| t.spread.as_slice()).collect();
            let scanned = self.frontier.scan(self.ground, &fits);
            let mut scanned = scanned.into_iter();
            let strengths = strengths.iter();
            for ((trial, &strength), bounds) in trials.iter().zip(strengths).zip(scanned.by_ref()) {
                let level = self.level(strength);
                let within = Within {
                    level,
                    worst: trial.standing.worst,
                    excess: trial.standing.excess,
                    floor: FLOOR,
                };
                let proof = self.frontier.prove(
                    self.ground,
                    &self.working,
                    self.params,
                    &trial.spread,
                    &bounds,
                    within,
                );
                if self.is_proved(trial, &proof) {
                    points.push(self.accept(trial, &proof));
                    self.frontier.accept(bounds, &trial.spread, level.lasso);
                } else {
                    self.newton.go_to(&trial.a, &trial.solution, &trial.eta);
                    self.admit(proof.violators, 10 + trial.solution.len() / 4);
                    self.frontier.discard(bounds);
                    break;
                }
            }
            scanned.for_each(|bounds| self.frontier.discard(bounds));
        }
        let limit = 2 * capacity(self.ground);
        if self.working.len() > limit + capacity(self.ground) + self.active.members.len() {
            let active: Vec<usize> = self.newton.solution().iter().map(|(s, _)| *s).collect();
            self.working.trim(&active, &self.active.correlation, limit);
        }
        Ok(points)
    }

    /// Whether a trial stands. As the inner solution is exact only up to the gap that was asked
    /// for, a violation that costs less than that gap is none.
    fn is_proved(&mut self, trial: &Trial, proof: &Proof) -> bool {
        proof.violators.is_empty()
            || self.gap(trial, proof) <= self.params.relative_gap.min(1e-10) * self.scale
    }

    fn gap(&mut self, trial: &Trial, proof: &Proof) -> f64 {
        let _ = self.newton.loss.evaluate(&trial.eta);
        let dual = if self.share < 1.0 {
            self.newton.loss.dual(1.0) - proof.excess
        } else {
            self.newton.loss.dual(1.0 / proof.worst)
        };
        trial.standing.loss + trial.standing.penalty - dual
    }

    fn admit(&mut self, candidates: Vec<(f64, usize)>, limit: usize) {
        let mut column = vec![0.0; self.ground.n_rows()];
        for key in worst(candidates, limit) {
            let j = key / self.working.n_linear;
            self.ground.standardised(j, &mut column);
            let slot = self.working.claim(key, self.params.sign(j));
            self.newton.fill(&mut self.working, slot, &column);
            self.active.expect_new(slot);
        }
    }

    fn solve(&mut self, strength: f64, work: &Work<'_>) -> Result<Trial, Stop> {
        let Level { lasso, ridge } = self.level(strength);
        let before = self.active.events;
        self.working.set_penalty(self.ground, lasso, ridge);
        if ridge > 0.0 {
            self.newton.refactor();
        }
        let goal = WITHIN * self.params.relative_gap * self.scale;
        let standing = self
            .newton
            .solve(&mut self.working, &mut self.active, goal, work)?;
        let solution = self.newton.solution();
        let chosen = if self.share < 1.0 {
            self.newton.refresh(&mut self.working, &mut self.active);
            self.active.effective(&self.working.problem)
        } else {
            solution.len() as f64
        };
        Ok(Trial {
            solution,
            a: self.newton.a.clone(),
            eta: self.newton.eta.clone(),
            spread: spread(self.ground, self.newton.loss.residual()),
            standing,
            events: self.active.events - before,
            df: chosen + self.rank as f64,
        })
    }

    fn accept(&mut self, trial: &Trial, proof: &Proof) -> Point {
        let relative_gap = (self.gap(trial, proof) / self.scale).max(0.0);
        let info = Info {
            relative_gap,
            settled: relative_gap <= self.params.relative_gap,
            passes: self.frontier.take_passes(),
            events: trial.events,
            n_chosen: 0,
            objective: trial.standing.loss + trial.standing.penalty,
            loss: trial.standing.loss,
            effective_df: trial.df,
        };
        let mut chosen = vec![Vec::new(); self.working.n_linear];
        for &(slot, b) in &trial.solution {
            chosen[self.working.class(slot)].push((self.working.predictor(slot), b));
        }
        point(self.ground, &self.newton, &trial.a, chosen, info)
    }
}

/// Makes a point of the coefficients of free columns and chosen predictors.
fn point(
    ground: &Ground<'_>,
    newton: &Newton,
    a: &[f64],
    mut chosen: Vec<Vec<(usize, f64)>>,
    mut info: Info,
) -> Point {
    let n_linear = chosen.len();
    let n_free = a.len() / n_linear;
    let mut linear = Vec::with_capacity(n_linear);
    for (class, predictors) in chosen.iter_mut().enumerate() {
        let mut free: Vec<f64> = a[class * n_free..(class + 1) * n_free].to_vec();
        if n_linear > 1 {
            // Only differences between classes count: the symmetric form has sum zero.
            for (k, value) in free.iter_mut().enumerate() {
                let sum: f64 = (0..n_linear).map(|class| a[class * n_free + k]).sum();
                *value -= sum / n_linear as f64;
            }
        }
        if !newton.loss.has_intercept() {
            free.insert(0, 0.0);
        }
        let (intercept, covariates) = ground.covariate_coefficients(&free);
        let rest = &free[1 + ground.n_covariates()..];
        predictors.extend(ground.free.iter().copied().zip(rest.iter().copied()));
        predictors.retain(|(_, b)| *b != 0.0);
        predictors.sort_by_key(|(j, _)| *j);
        info.n_chosen += predictors.len();
        linear.push(Linear {
            intercept,
            covariates,
            predictors: std::mem::take(predictors),
        });
    }
    Point::several(info, linear)
}

/// The fit without any penalty.
///
/// # Errors
/// When called off; [`FitError::Unbounded`] when it has no finite solution.
pub(crate) fn unpenalised(
    ground: &Ground<'_>,
    response: &Response,
    work: &Work<'_>,
) -> Result<Point, Stop> {
    let mut null = Null::new(ground, response, work)?;
    let loss = null.newton.loss.evaluate(&null.newton.eta);
    let mut info = Info::exact(null.rank);
    info.loss = loss;
    info.objective = loss;
    let a = null.newton.a.clone();
    let chosen = vec![Vec::new(); null.newton.loss.n_linear()];
    Ok(point(ground, &null.newton, &a, chosen, info))
}

/// Ridge fits at strengths above zero that fall.
pub(crate) struct RidgeFits {
    pub(crate) points: Vec<Point>,
    pub(crate) dual: Option<Dual>,
}

/// Ridge: Newton on the directions that the predictors span in the space of the samples.
///
/// # Errors
/// When called off, or when the outcome cannot be fitted.
pub(crate) fn ridge(
    ground: &Ground<'_>,
    response: &Response,
    strengths: &[f64],
    params: &Params,
    work: &Work<'_>,
) -> Result<RidgeFits, Stop> {
    let null = Null::new(ground, response, work)?;
    let (scale, rank) = (null.scale, null.rank);
    let mut newton = null.newton;
    let n_linear = newton.loss.n_linear();
    let features = Features::new(ground, work)?;
    let size = features.columns.ncols();
    let mut working = Working::new(newton.length(), size.max(1), n_linear);
    for k in 0..size {
        for class in 0..n_linear {
            let slot = working.claim(k * n_linear + class, Sign::Any);
            let column: Vec<f64> = features.columns.column(k).iter().copied().collect();
            newton.fill(&mut working, slot, &column);
        }
    }
    let mut active = ActiveSet::default();
    let mut points = Vec::with_capacity(strengths.len());
    let mut alphas = Vec::new();
    for (at, &strength) in strengths.iter().enumerate() {
        work.step(at, strengths.len())?;
        for &slot in &working.problem.used {
            working.problem.lasso[slot] = 0.0;
            working.problem.ridge[slot] = strength;
        }
        newton.refactor();
        let before = active.events;
        let goal = WITHIN * params.relative_gap * scale;
        let standing = newton.solve(&mut working, &mut active, goal, work)?;
        newton.refresh(&mut working, &mut active);
        let relative_gap = (standing.gap / scale).max(0.0);
        let mut info = Info {
            relative_gap,
            settled: relative_gap <= params.relative_gap,
            passes: 0.0,
            events: active.events - before,
            n_chosen: 0,
            objective: standing.loss + standing.penalty,
            loss: standing.loss,
            effective_df: rank as f64 + active.effective(&working.problem),
        };
        let beta = Matrix::from_fn(size, n_linear, |k, class| newton.b[k * n_linear + class]);
        let mut chosen = vec![Vec::new(); n_linear];
        match features.coefficients(ground, &beta) {
            Ok(listed) => chosen = listed,
            Err(alpha) => {
                info.n_chosen = n_linear * features.n_predictors;
                alphas.extend(alpha.column_iter().map(|column| column.into_owned()));
            }
        }
        let a = newton.a.clone();
        points.push(point(ground, &newton, &a, chosen, info));
    }
    let dual = (!alphas.is_empty()).then(|| Dual::new(ground, Matrix::from_columns(&alphas)));
    Ok(RidgeFits { points, dual })
}

#[cfg(test)]
mod tests;
