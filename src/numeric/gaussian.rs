//! The path of lasso and elastic net fits to a measured outcome.
//!
//! ```text
//! minimise  ½ Σᵢ vᵢ (yᵢ − b₀ − cᵢ'a − zᵢ'b)²  +  λ Σⱼ fⱼ ( share |bⱼ| + (1 − share)/2 bⱼ² )
//! ```
//!
//! v: weights of the training rows with sum 1; c: covariates; z: centred and scaled predictors; f:
//! penalty weights. Everything without a penalty is projected out first. A small working set is
//! solved exactly for a few strengths ahead; one certified scan then proves, for all of them, that
//! no predictor outside would enter. Whatever cannot be proved is computed in full.

use crate::base::work::Work;
use crate::numeric::active_set::{ActiveSet, Ended};
use crate::numeric::basis::Basis;
use crate::numeric::descent;
use crate::numeric::error::Stop;
use crate::numeric::frontier::{Frontier, Level, Proof, Within, capacity, worst};
use crate::numeric::ground::Ground;
use crate::numeric::lanes;
use crate::numeric::path::{Info, Params, Point};
use crate::numeric::scan::BATCH;
use crate::numeric::working::Working;

/// What rounding may add to a correlation when all vectors have length 1.
const FLOOR: f64 = 2e-15;

/// The residual of the null model counts as zero below this share of the outcome's length.
pub(crate) const NOTHING_LEFT: f64 = 1e-13;

/// One solved strength that waits for its proof.
struct Trial {
    solution: Vec<(usize, f64)>,
    residual: Vec<f64>,
    /// g = √v ∘ residual over all samples, as the only class.
    spread: Vec<Vec<f64>>,
    within: Within,
    penalty: f64,
    events: usize,
}

/// The path's state. All vectors are in units of the null model's residual.
struct Walk<'t, 'g> {
    ground: &'t mut Ground<'g>,
    basis: &'t Basis,
    params: &'t Params,
    share: f64,
    /// Length of the outcome after the null model.
    scale: f64,
    working: Working,
    active: ActiveSet,
    frontier: Frontier,
}

/// Fits all strengths, which must fall and be above zero, with a share above zero.
///
/// `outcome` holds √v ∘ y on the training rows, before anything was projected out.
///
/// # Errors
/// When called off.
pub(crate) fn walk(
    ground: &mut Ground<'_>,
    basis: &Basis,
    outcome: &[f64],
    share: f64,
    strengths: &[f64],
    params: &Params,
    work: &Work<'_>,
) -> Result<Vec<Point>, Stop> {
    let mut target = outcome.to_vec();
    basis.project(&mut target);
    basis.project(&mut target);
    let scale = lanes::norm(&target);
    if scale <= NOTHING_LEFT * lanes::norm(outcome) {
        return Ok(strengths
            .iter()
            .map(|_| {
                point(
                    ground,
                    basis,
                    outcome,
                    Vec::new(),
                    Info::exact(basis.rank()),
                )
            })
            .collect());
    }
    for value in &mut target {
        *value /= scale;
    }
    let p = ground.predictors.n_predictors();
    let frontier = Frontier::new(ground, &[spread(ground, &target)]);
    let mut walk = Walk {
        working: Working::new(ground.n_rows(), p, 1),
        ground,
        basis,
        params,
        share,
        scale,
        active: ActiveSet::default(),
        frontier,
    };
    walk.working.problem.target = target;
    let mut points: Vec<Point> = Vec::with_capacity(strengths.len());
    while points.len() < strengths.len() {
        work.step(points.len(), strengths.len())?;
        let ahead = &strengths[points.len()..];
        let ahead = &ahead[..ahead.len().min(BATCH)];
        let found = walk.advance(ahead, outcome, work)?;
        points.extend(found);
    }
    Ok(points)
}

/// g = √v ∘ r over all samples, with sum zero.
fn spread(ground: &Ground<'_>, residual: &[f64]) -> Vec<f64> {
    let weighted = residual.iter().zip(&ground.root).map(|(r, root)| r * root);
    ground.spread_centered(weighted.collect())
}

impl Walk<'_, '_> {
    /// λ · share in units of the null residual, and λ · (1 − share).
    fn level(&self, strength: f64) -> Level {
        Level {
            lasso: strength * self.share / self.scale,
            ridge: strength * (1.0 - self.share),
        }
    }

    /// Solves up to [`BATCH`] strengths on the working set, proves them with one scan, and
    /// returns those before the first that needs another predictor.
    fn advance(
        &mut self,
        strengths: &[f64],
        outcome: &[f64],
        work: &Work<'_>,
    ) -> Result<Vec<Point>, Stop> {
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
            for (trial, bounds) in trials.iter().zip(scanned.by_ref()) {
                let proof = self.frontier.prove(
                    self.ground,
                    &self.working,
                    self.params,
                    &trial.spread,
                    &bounds,
                    trial.within,
                );
                if proof.violators.is_empty() {
                    points.push(self.accept(trial, &proof, outcome));
                    self.frontier
                        .accept(bounds, &trial.spread, trial.within.level.lasso);
                } else {
                    // What comes in, or is found to be spanned and left out, violates no more.
                    self.active.go_to(&self.working.problem, &trial.solution);
                    self.admit(proof.violators, 10 + trial.solution.len() / 4);
                    self.frontier.discard(bounds);
                    break;
                }
            }
            scanned.for_each(|bounds| self.frontier.discard(bounds));
        }
        let limit = 2 * capacity(self.ground);
        if self.working.len() > limit + capacity(self.ground) + self.active.members.len() {
            self.working
                .trim(&self.active.members, &self.active.correlation, limit);
        }
        Ok(points)
    }

    /// Admits the worst of the given predictors (ties by index).
    fn admit(&mut self, candidates: Vec<(f64, usize)>, limit: usize) {
        for j in worst(candidates, limit) {
            match self
                .working
                .add(self.ground, self.basis, j, self.params.sign(j))
            {
                Some(slot) => self.active.expect_new(slot),
                None => {
                    self.ground.leave_out(j);
                    self.frontier.forget(j);
                }
            }
        }
    }

    /// Solves one strength on the working set.
    fn solve(&mut self, strength: f64, work: &Work<'_>) -> Result<Trial, Stop> {
        let Level { lasso, ridge } = self.level(strength);
        let before = self.active.events;
        self.working.set_penalty(self.ground, lasso, ridge);
        if ridge > 0.0 {
            self.active.refactor(&self.working.problem);
        }
        let ended = self
            .active
            .solve(&mut self.working.problem, FLOOR, &mut |_, _| (), work)?;
        let mut trial = self.trial(self.active.solution(), strength);
        if ended == Ended::Stalled || trial.residual.iter().any(|r| !r.is_finite()) {
            trial = self.fall_back(trial, strength, work)?;
        }
        trial.events = self.active.events - before;
        Ok(trial)
    }

    /// Coordinate descent from where the exact search has stalled.
    fn fall_back(&mut self, stalled: Trial, strength: f64, work: &Work<'_>) -> Result<Trial, Stop> {
        let mut b = vec![0.0; self.working.problem.n_slots()];
        for &(slot, value) in &stalled.solution {
            if value.is_finite() {
                b[slot] = value;
            }
        }
        let _ = descent::descend(&self.working.problem, &mut b, FLOOR, work)?;
        let solution: Vec<(usize, f64)> = (0..b.len())
            .filter(|&slot| b[slot] != 0.0)
            .map(|slot| (slot, b[slot]))
            .collect();
        self.active.restart(&self.working.problem, &solution);
        Ok(self.trial(solution, strength))
    }

    /// Everything about a solution that its proof needs.
    fn trial(&self, solution: Vec<(usize, f64)>, strength: f64) -> Trial {
        let problem = &self.working.problem;
        let (slots, b): (Vec<usize>, Vec<f64>) = solution.iter().copied().unzip();
        let mut residual = Vec::new();
        problem.residual(&slots, &b, &mut residual);
        let mut c = Vec::new();
        lanes::chosen_dots(&problem.x, &problem.used, &residual, &mut c);
        let (worst, excess) = problem.infeasibility(&c);
        let penalty = problem.penalty(&solution);
        Trial {
            spread: vec![spread(self.ground, &residual)],
            solution,
            residual,
            within: Within {
                level: self.level(strength),
                worst,
                excess,
                floor: FLOOR,
            },
            penalty,
            events: 0,
        }
    }

    /// Turns a proved trial into a point, with its certificate.
    fn accept(&mut self, trial: &Trial, proof: &Proof, outcome: &[f64]) -> Point {
        let fit = 0.5 * lanes::dot(&trial.residual, &trial.residual);
        // The dual point: the residual, shrunk until it is feasible (lasso), or as it is, at the
        // cost of the excess (elastic net).
        let (shrink, excess) = if self.share < 1.0 {
            (1.0, proof.excess)
        } else {
            (1.0 / proof.worst, 0.0)
        };
        let distance: f64 = self
            .working
            .problem
            .target
            .iter()
            .zip(&trial.residual)
            .map(|(y, r)| (y - shrink * r) * (y - shrink * r))
            .sum();
        let gap = fit + trial.penalty - (0.5 - 0.5 * distance - excess);
        let relative_gap = (2.0 * gap).max(0.0);
        let square = self.scale * self.scale;
        let solution: Vec<(usize, f64)> = trial
            .solution
            .iter()
            .map(|&(slot, b)| (self.working.key[slot], self.scale * b))
            .collect();
        let info = Info {
            relative_gap,
            settled: relative_gap <= self.params.relative_gap,
            passes: self.frontier.take_passes(),
            events: trial.events,
            n_chosen: 0,
            objective: square * (fit + trial.penalty),
            loss: square * fit,
            effective_df: (self.basis.rank() + solution.len()) as f64,
        };
        point(self.ground, self.basis, outcome, solution, info)
    }
}

/// Fits what carries no penalty to what the penalised predictors leave, and makes the point.
fn point(
    ground: &Ground<'_>,
    basis: &Basis,
    outcome: &[f64],
    mut predictors: Vec<(usize, f64)>,
    mut info: Info,
) -> Point {
    let mut rest = outcome.to_vec();
    if basis.rank() > 1 {
        let mut column = vec![0.0; ground.n_rows()];
        for &(j, b) in &predictors {
            ground.weighted(j, &mut column);
            lanes::add_scaled(-b, &column, &mut rest);
        }
    }
    // With the intercept alone the centred predictors have no part in it.
    let free = basis.coefficients(&rest);
    let (intercept, covariates) = ground.covariate_coefficients(&free);
    let rest = &free[1 + ground.n_covariates()..];
    predictors.extend(ground.free.iter().copied().zip(rest.iter().copied()));
    predictors.retain(|(_, b)| *b != 0.0);
    predictors.sort_by_key(|(j, _)| *j);
    info.n_chosen = predictors.len();
    Point::single(info, intercept, covariates, predictors)
}

/// The fit without any penalty: everything is among the free columns.
pub(crate) fn unpenalised(ground: &Ground<'_>, basis: &Basis, outcome: &[f64]) -> Point {
    let mut rest = outcome.to_vec();
    basis.project(&mut rest);
    basis.project(&mut rest);
    let loss = 0.5 * lanes::dot(&rest, &rest);
    let mut info = Info::exact(basis.rank());
    info.loss = loss;
    info.objective = loss;
    point(ground, basis, outcome, Vec::new(), info)
}
