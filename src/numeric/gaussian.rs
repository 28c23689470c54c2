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
use crate::numeric::ground::Ground;
use crate::numeric::lanes;
use crate::numeric::path::{Info, Params, Point};
use crate::numeric::scan::{BATCH, Sieve};
use crate::numeric::working::Working;

/// What rounding may add to a correlation when all vectors have length 1.
const FLOOR: f64 = 2e-15;

/// A predictor violates when its correlation exceeds its threshold by more than this share, or by
/// [`FLOOR`].
const SLACK: f64 = 1e-11;

/// The residual of the null model counts as zero below this share of the outcome's length.
pub(crate) const NOTHING_LEFT: f64 = 1e-13;

/// One solved strength that waits for its proof.
struct Trial {
    solution: Vec<(usize, f64)>,
    residual: Vec<f64>,
    /// Length of the residual.
    length: f64,
    /// Largest correlation over its threshold, within the working set.
    worst: f64,
    /// Σ over the set of the squared excess, for the dual of the elastic net.
    excess: f64,
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
    sieve: Sieve,
    /// Bounds of the last accepted solution, on |zⱼ'g|/fⱼ over the residual's length.
    bounds: Vec<f32>,
    /// The length of that solution's residual.
    length: f64,
    /// The strength of that solution.
    strength: f64,
    passes: f64,
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
    let sieve = Sieve::new(ground);
    let mut walk = Walk {
        working: Working::new(ground.n_rows(), p),
        ground,
        basis,
        params,
        share,
        scale,
        active: ActiveSet::default(),
        sieve,
        bounds: Vec::new(),
        length: 1.0,
        strength: f64::INFINITY,
        passes: 0.0,
    };
    walk.working.problem.target = target;
    walk.start()?;
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

impl Walk<'_, '_> {
    /// One scan of the null model's residual.
    fn start(&mut self) -> Result<(), Stop> {
        let target = self.working.problem.target.clone();
        let mut bounds = vec![Vec::new()];
        self.scan(&[target], &mut bounds);
        self.bounds = bounds.pop().unwrap_or_default();
        Ok(())
    }

    /// Bounds for a few residuals on the training rows.
    fn scan(&mut self, residuals: &[Vec<f64>], bounds: &mut [Vec<f32>]) {
        let spread: Vec<Vec<f64>> = residuals.iter().map(|r| self.spread(r)).collect();
        let views: Vec<&[f64]> = spread.iter().map(Vec::as_slice).collect();
        self.sieve
            .bounds(self.ground.predictors.panels(), &views, bounds);
        // The 8-bit copy is an eighth of the matrix.
        self.passes += 0.125;
    }

    /// g = √v ∘ r over all samples, with sum zero.
    fn spread(&self, residual: &[f64]) -> Vec<f64> {
        let mut g: Vec<f64> = residual
            .iter()
            .zip(&self.ground.root)
            .map(|(r, root)| r * root)
            .collect();
        let sum: f64 = g.iter().sum();
        for (g, v) in g.iter_mut().zip(&self.ground.share) {
            *g -= sum * v;
        }
        let mut all = Vec::new();
        self.ground.spread(&g, &mut all);
        all
    }

    /// λ · share in units of the null residual.
    fn lasso(&self, strength: f64) -> f64 {
        strength * self.share / self.scale
    }

    /// Solves up to [`BATCH`] strengths on the working set, proves them with one scan, and
    /// returns those before the first that needs another predictor.
    fn advance(
        &mut self,
        strengths: &[f64],
        outcome: &[f64],
        work: &Work<'_>,
    ) -> Result<Vec<Point>, Stop> {
        self.admit_likely(strengths[strengths.len() - 1]);
        let mut points = Vec::new();
        let mut bounds: Vec<Vec<f32>> = vec![Vec::new(); BATCH];
        while points.is_empty() {
            let mut trials = Vec::with_capacity(strengths.len());
            for &strength in strengths {
                trials.push(self.solve(strength, work)?);
            }
            let residuals: Vec<Vec<f64>> =
                trials.iter().map(|trial| trial.residual.clone()).collect();
            self.scan(&residuals, &mut bounds[..trials.len()]);
            for (at, (trial, &strength)) in trials.iter().zip(strengths).enumerate() {
                let proof = self.prove(trial, strength, &bounds[at]);
                if proof.violators.is_empty() {
                    points.push(self.accept(trial, &proof, outcome));
                    self.length = trial.length;
                    self.strength = strength;
                    std::mem::swap(&mut self.bounds, &mut bounds[at]);
                } else {
                    self.active.go_to(&self.working.problem, &trial.solution);
                    let limit = 10 + trial.solution.len() / 4;
                    let most = self.admit(proof.violators, limit);
                    if most == 0 && points.is_empty() {
                        // Nothing could be admitted: all violators lie in the span of what is
                        // free. They have been taken out, so the next proof holds.
                        continue;
                    }
                    break;
                }
            }
        }
        self.trim();
        Ok(points)
    }

    /// The sequential strong rule (Tibshirani et al. 2012), for the weakest strength ahead.
    fn admit_likely(&mut self, weakest: f64) {
        let from = if self.strength.is_finite() {
            self.lasso(self.strength)
        } else {
            f64::from(self.bounds.iter().fold(0.0_f32, |top, &b| top.max(b)))
        };
        let threshold = 2.0 * self.lasso(weakest) - from;
        let least = (threshold / self.length) as f32;
        let likely: Vec<(f64, usize)> = (0..self.ground.predictors.n_predictors())
            .filter(|&j| self.bounds[j] > 0.0 && self.bounds[j] >= least)
            .filter(|&j| !self.working.holds(j))
            .map(|j| (f64::from(self.bounds[j]), j))
            .collect();
        let _ = self.admit(likely, self.capacity());
    }

    /// How many predictors may come into the working set at once.
    fn capacity(&self) -> usize {
        100 + self.ground.n_rows() / 4
    }

    /// Admits the worst of the given predictors (ties by index); returns how many came in.
    fn admit(&mut self, mut candidates: Vec<(f64, usize)>, limit: usize) -> usize {
        let order = |a: &(f64, usize), b: &(f64, usize)| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1));
        if candidates.len() > limit {
            let (_, _, _) = candidates.select_nth_unstable_by(limit - 1, order);
            candidates.truncate(limit);
        }
        candidates.sort_by_key(|candidate| candidate.1);
        let mut count = 0;
        for (_, j) in candidates {
            let sign = self.params.sign(j);
            match self.working.add(self.ground, self.basis, j, sign) {
                Some(slot) => {
                    if let Some(c) = self.active.correlation.get_mut(slot) {
                        *c = f64::INFINITY;
                    }
                    count += 1;
                }
                None => self.forget(j),
            }
        }
        count
    }

    /// Takes a predictor that the unpenalised columns span out of the fit.
    fn forget(&mut self, j: usize) {
        self.ground.leave_out(j);
        self.sieve.forget(j);
    }

    /// Solves one strength on the working set.
    fn solve(&mut self, strength: f64, work: &Work<'_>) -> Result<Trial, Stop> {
        let lasso = self.lasso(strength);
        let ridge = strength * (1.0 - self.share);
        let before = self.active.events;
        self.working.set_penalty(self.ground, lasso, ridge);
        if ridge > 0.0 {
            self.active.refactor(&self.working.problem);
        }
        let ended = self.active.solve(&self.working.problem, FLOOR, work)?;
        let mut trial = self.trial(self.active.solution(), ridge);
        if ended == Ended::Stalled || !trial.length.is_finite() {
            trial = self.fall_back(trial, ridge, work)?;
        }
        trial.events = self.active.events - before;
        Ok(trial)
    }

    /// Coordinate descent from where the exact search has stalled.
    fn fall_back(&mut self, stalled: Trial, ridge: f64, work: &Work<'_>) -> Result<Trial, Stop> {
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
        Ok(self.trial(solution, ridge))
    }

    /// Everything about a solution that its proof needs.
    fn trial(&self, solution: Vec<(usize, f64)>, ridge: f64) -> Trial {
        let problem = &self.working.problem;
        let (slots, b): (Vec<usize>, Vec<f64>) = solution.iter().copied().unzip();
        let mut residual = Vec::new();
        problem.residual(&slots, &b, &mut residual);
        let mut c = Vec::new();
        lanes::chosen_dots(&problem.x, &problem.used, &residual, &mut c);
        let (mut worst, mut excess) = (1.0_f64, 0.0);
        for (&slot, &c) in problem.used.iter().zip(&c) {
            if let Some(over) = problem.excess(slot, c)
                && over > 0.0
            {
                worst = worst.max(c.abs() / problem.lasso[slot]);
                if ridge > 0.0 {
                    excess += over * over / (2.0 * problem.ridge[slot]);
                }
            }
        }
        let penalty = solution
            .iter()
            .map(|&(slot, b)| problem.lasso[slot] * b.abs() + 0.5 * problem.ridge[slot] * b * b)
            .sum();
        Trial {
            length: lanes::norm(&residual),
            solution,
            residual,
            worst,
            excess,
            penalty,
            events: 0,
        }
    }

    /// Looks for predictors outside the working set that the bounds cannot exclude.
    fn prove(&mut self, trial: &Trial, strength: f64, bounds: &[f32]) -> Proof {
        let lasso = self.lasso(strength);
        let ridge = strength * (1.0 - self.share);
        let least = (lasso / trial.length) as f32;
        // Rounded down, so that the comparison in single precision errs on the safe side.
        let least = least * (1.0 - 2.0 * f32::EPSILON);
        let mut proof = Proof {
            violators: Vec::new(),
            worst: trial.worst,
            excess: trial.excess,
        };
        let mut g = Vec::new();
        let mut read = 0_usize;
        for (j, &bound) in bounds[..self.ground.predictors.n_predictors()]
            .iter()
            .enumerate()
        {
            if bound < least || bound == 0.0 || self.working.holds(j) {
                continue;
            }
            if g.is_empty() {
                g = self.spread(&trial.residual);
            }
            read += 1;
            let c = self.ground.correlation(j, &g);
            let factor = self.ground.factor(j);
            if !self.params.sign(j).allows(c) {
                continue;
            }
            let over = c.abs() - lasso * factor;
            if over <= 0.0 {
                continue;
            }
            if over > SLACK * lasso * factor + FLOOR {
                proof.violators.push((over / factor, j));
            }
            proof.worst = proof.worst.max(c.abs() / (lasso * factor));
            if ridge > 0.0 {
                proof.excess += over * over / (2.0 * ridge * factor);
            }
        }
        self.passes += read as f64 / self.ground.predictors.n_predictors() as f64;
        proof
    }

    /// Turns a proved trial into a point, with its certificate.
    fn accept(&mut self, trial: &Trial, proof: &Proof, outcome: &[f64]) -> Point {
        let fit = 0.5 * trial.length * trial.length;
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
            .map(|&(slot, b)| (self.working.predictor[slot], self.scale * b))
            .collect();
        let info = Info {
            relative_gap,
            settled: relative_gap <= self.params.relative_gap,
            passes: std::mem::take(&mut self.passes),
            events: trial.events,
            n_chosen: 0,
            objective: square * (fit + trial.penalty),
            loss: square * fit,
            effective_df: (self.basis.rank() + solution.len()) as f64,
        };
        point(self.ground, self.basis, outcome, solution, info)
    }

    /// Sends out of the working set what is far from entering, once the set has grown large.
    fn trim(&mut self) {
        let keep = 2 * self.capacity() + self.active.members.len();
        if self.working.len() <= keep + self.capacity() {
            return;
        }
        let mut is_active = vec![false; self.working.problem.n_slots()];
        for &slot in &self.active.members {
            is_active[slot] = true;
        }
        let mut idle: Vec<(f64, usize)> = self
            .working
            .problem
            .used
            .iter()
            .filter(|&&slot| !is_active[slot])
            .map(|&slot| {
                let c = self.active.correlation[slot].abs();
                (c / self.working.problem.lasso[slot], slot)
            })
            .collect();
        idle.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1)));
        for (_, slot) in idle.into_iter().skip(2 * self.capacity()) {
            self.working.remove(slot);
        }
    }
}

/// What the scan says about a trial.
struct Proof {
    /// Predictors outside the working set that must come in: excess and index.
    violators: Vec<(f64, usize)>,
    worst: f64,
    excess: f64,
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
