//! Proximal Newton on a working set: the loss is replaced by its second-order model, the model is
//! solved exactly with the penalty by the active set, and the step is checked on the loss itself.
//!
//! What carries no penalty is eliminated from every model, so that the active set never sees it.
//! The exact Hessian is used, not a bound of it: a few steps are enough.

use crate::base::work::Work;
use crate::numeric::active_set::{ActiveSet, Ended};
use crate::numeric::basis::Basis;
use crate::numeric::descent;
use crate::numeric::error::Stop;
use crate::numeric::factor::Factor;
use crate::numeric::lanes;
use crate::numeric::loss::Loss;
use crate::numeric::quadratic::Quadratic;
use crate::numeric::working::Working;

/// Steps after which a strength counts as not settled.
const STEPS: usize = 100;

/// Halvings of a step that does not lower the objective.
const HALVINGS: usize = 40;

/// The slopes of what is not penalised must fall to this share of the sum of their terms.
const FREE_SLOPE: f64 = 1e-10;

/// A free column whose curvature outside the others is below this share of its own is left out.
const FREE_SPANNED: f64 = 1e-12;

/// A fit in progress.
pub(crate) struct Newton {
    pub(crate) loss: Box<dyn Loss>,
    /// The number of training rows.
    m: usize,
    /// K.
    n_linear: usize,
    /// The unpenalised columns, each of length m.
    pub(crate) free: Vec<Vec<f64>>,
    /// Their coefficients, class by class.
    pub(crate) a: Vec<f64>,
    /// The coefficient of each slot.
    pub(crate) b: Vec<f64>,
    /// The linear predictors, class by class.
    pub(crate) eta: Vec<f64>,
    /// The standardised column of each slot, of length m.
    pub(crate) plain: Vec<f64>,
}

/// Where a fit stands.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Standing {
    pub(crate) loss: f64,
    pub(crate) penalty: f64,
    /// The largest correlation over its threshold, within the working set.
    pub(crate) worst: f64,
    /// Σ excess²/(2 ridge), within the working set.
    pub(crate) excess: f64,
    /// The duality gap if the working set were everything.
    pub(crate) gap: f64,
    /// The largest slope of what is not penalised, over the sum of its terms.
    free_slope: f64,
}

/// What one step came to.
struct Step {
    /// The model's solution for the slots.
    b: Vec<f64>,
    /// The change of the free coefficients.
    a: Vec<f64>,
}

impl Newton {
    /// Starts from coefficients of zero. `free` holds the unpenalised columns without weights.
    pub(crate) fn new(loss: Box<dyn Loss>, free: Vec<Vec<f64>>, m: usize) -> Self {
        let n_linear = loss.n_linear();
        Self {
            m,
            n_linear,
            a: vec![0.0; free.len() * n_linear],
            b: Vec::new(),
            eta: vec![0.0; m * n_linear],
            plain: Vec::new(),
            free,
            loss,
        }
    }

    /// The length of the quadratic problem's columns.
    pub(crate) fn length(&self) -> usize {
        self.m * self.n_linear
    }

    /// Fills a slot's columns: the predictor on the training rows.
    pub(crate) fn fill(&mut self, working: &mut Working, slot: usize, column: &[f64]) {
        let end = (slot + 1) * self.m;
        if self.plain.len() < end {
            self.plain.resize(end, 0.0);
        }
        self.plain[slot * self.m..end].copy_from_slice(column);
        self.b.resize(working.problem.n_slots(), 0.0);
        let length = self.length();
        let class = working.class(slot);
        let problem = &mut working.problem;
        if problem.x.len() < (slot + 1) * length {
            problem.x.resize((slot + 1) * length, 0.0);
        }
        let x = &mut problem.x[slot * length..(slot + 1) * length];
        x.fill(0.0);
        x[class * self.m..(class + 1) * self.m].copy_from_slice(column);
    }

    fn column(&self, slot: usize) -> &[f64] {
        &self.plain[slot * self.m..(slot + 1) * self.m]
    }

    /// The slots with a coefficient other than zero.
    pub(crate) fn solution(&self) -> Vec<(usize, f64)> {
        let slots = self.b.iter().copied().enumerate();
        slots.filter(|(_, b)| *b != 0.0).collect()
    }

    /// Goes to a remembered state.
    pub(crate) fn go_to(&mut self, a: &[f64], solution: &[(usize, f64)], eta: &[f64]) {
        self.a.copy_from_slice(a);
        self.b.fill(0.0);
        for &(slot, b) in solution {
            self.b[slot] = b;
        }
        self.eta.copy_from_slice(eta);
    }

    /// Linear predictors of coefficients.
    fn linear(&self, working: &Working, a: &[f64], b: &[f64]) -> Vec<f64> {
        let mut eta = vec![0.0; self.length()];
        for (class, eta) in eta.chunks_exact_mut(self.m).enumerate() {
            for (column, a) in self.free.iter().zip(&a[class * self.free.len()..]) {
                lanes::add_scaled(*a, column, eta);
            }
        }
        for (slot, &b) in b.iter().enumerate() {
            if b != 0.0 {
                let from = working.class(slot) * self.m;
                lanes::add_scaled(b, self.column(slot), &mut eta[from..from + self.m]);
            }
        }
        eta
    }

    /// Minimises loss plus penalty over the working set, until the gap within it is at most `goal`.
    ///
    /// # Errors
    /// When called off.
    pub(crate) fn solve(
        &mut self,
        working: &mut Working,
        active: &mut ActiveSet,
        goal: f64,
        work: &Work<'_>,
    ) -> Result<Standing, Stop> {
        self.b.resize(working.problem.n_slots(), 0.0);
        let mut standing = self.stand(working);
        for _ in 0..STEPS {
            work.check()?;
            if standing.gap <= goal && standing.free_slope <= FREE_SLOPE {
                break;
            }
            let step = self.step(working, active, work)?;
            let next = self.take(working, &step, standing);
            let Some(next) = next else {
                // Rounding is all that is left.
                break;
            };
            standing = next;
        }
        Ok(standing)
    }

    /// Evaluates the loss at the present linear predictors, and everything a certificate needs.
    pub(crate) fn stand(&mut self, working: &Working) -> Standing {
        let loss = self.loss.evaluate(&self.eta);
        let residual = self.loss.residual();
        let problem = &working.problem;
        let c: Vec<f64> = problem
            .used
            .iter()
            .map(|&slot| {
                let from = working.class(slot) * self.m;
                lanes::dot(self.column(slot), &residual[from..from + self.m])
            })
            .collect();
        let (worst, excess) = problem.infeasibility(&c);
        let penalty = problem.penalty(&self.solution());
        let is_ridge = problem.used.iter().any(|&slot| problem.ridge[slot] > 0.0);
        let dual = if is_ridge {
            self.loss.dual(1.0) - excess
        } else {
            self.loss.dual(1.0 / worst)
        };
        let free_slope = free_slope(&self.free, residual);
        Standing {
            loss,
            penalty,
            worst,
            excess,
            gap: loss + penalty - dual,
            free_slope,
        }
    }

    /// Takes a step, halved until the objective does not rise. `None` when it cannot be lowered.
    fn take(&mut self, working: &Working, step: &Step, before: Standing) -> Option<Standing> {
        let (a, b, eta) = (self.a.clone(), self.b.clone(), self.eta.clone());
        let height = before.loss + before.penalty;
        let mut share = 1.0;
        for _ in 0..HALVINGS {
            self.a = a.iter().zip(&step.a).map(|(a, d)| a + share * d).collect();
            self.b = if share == 1.0 {
                step.b.clone()
            } else {
                b.iter()
                    .zip(&step.b)
                    .map(|(b, c)| b + share * (c - b))
                    .collect()
            };
            self.eta = self.linear(working, &self.a, &self.b);
            let standing = self.stand(working);
            let now = standing.loss + standing.penalty;
            let rounding = 4.0 * f64::EPSILON * (before.loss.abs() + before.penalty);
            let is_better = standing.gap < before.gap || standing.free_slope < before.free_slope;
            if now.is_finite()
                && (now < height - rounding || (now <= height + rounding && is_better))
            {
                return Some(standing);
            }
            share *= 0.5;
        }
        self.a = a;
        self.b = b;
        self.eta = eta;
        let _ = self.loss.evaluate(&self.eta);
        None
    }

    /// Solves the second-order model at the present coefficients, where the loss was evaluated last.
    fn step(
        &mut self,
        working: &mut Working,
        active: &mut ActiveSet,
        work: &Work<'_>,
    ) -> Result<Step, Stop> {
        if self.loss.curvature().is_some() {
            self.step_diagonal(working, active, work)
        } else {
            self.step_general(working, active, work)
        }
    }

    /// H is diagonal: columns times √H, free of the unpenalised ones, make H the identity.
    fn step_diagonal(
        &mut self,
        working: &mut Working,
        active: &mut ActiveSet,
        work: &Work<'_>,
    ) -> Result<Step, Stop> {
        let curvature = self.loss.curvature().unwrap_or_default();
        let root: Vec<f64> = curvature.iter().map(|h| h.sqrt()).collect();
        let times_root =
            |column: &[f64]| -> Vec<f64> { column.iter().zip(&root).map(|(x, s)| x * s).collect() };
        let basis = Basis::new(self.m, self.free.iter().map(|column| times_root(column)));
        let pull: Vec<f64> = self
            .loss
            .residual()
            .iter()
            .zip(&root)
            .map(|(r, s)| r / s)
            .collect();
        let problem = &mut working.problem;
        for &slot in &problem.used {
            let x = &mut problem.x[slot * self.m..(slot + 1) * self.m];
            let z = &self.plain[slot * self.m..(slot + 1) * self.m];
            for ((x, z), s) in x.iter_mut().zip(z).zip(&root) {
                *x = z * s;
            }
            basis.project(x);
        }
        let mut target = pull.clone();
        basis.project(&mut target);
        for (slot, &b) in self.b.iter().enumerate() {
            if b != 0.0 {
                lanes::add_scaled(b, problem.column(slot), &mut target);
            }
        }
        problem.target = target;
        for at in 0..problem.used.len() {
            let slot = problem.used[at];
            problem.square[slot] = lanes::dot(problem.column(slot), problem.column(slot));
        }
        let b = self.search(problem, active, &mut |_, _| (), work)?;
        // The free coefficients follow from what the members leave.
        let mut rest = pull;
        for (slot, (new, old)) in b.iter().zip(&self.b).enumerate() {
            if new != old {
                lanes::add_scaled(old - new, &times_root(self.column(slot)), &mut rest);
            }
        }
        let a = basis.coefficients(&rest);
        Ok(Step { b, a })
    }

    /// H is anything: pairs (x, Hx), free of the unpenalised columns U as H − HU(U'HU)⁻¹U'H.
    fn step_general(
        &mut self,
        working: &mut Working,
        active: &mut ActiveSet,
        work: &Work<'_>,
    ) -> Result<Step, Stop> {
        let loss = &self.loss;
        let free = FreePart::new(loss.as_ref(), &self.free, self.m);
        let residual = loss.residual();
        let problem = &mut working.problem;
        let length = problem.length;
        problem.hx.resize(problem.x.len(), 0.0);
        let mut along = vec![0.0; length];
        for (slot, &b) in self.b.iter().enumerate() {
            if b != 0.0 {
                lanes::add_scaled(b, problem.column(slot), &mut along);
            }
        }
        let mut target = Vec::new();
        loss.product(&along, &mut target);
        free.reduce(&along, &mut target);
        let slope = free.solve(free.products(residual));
        lanes::add_scaled(1.0, residual, &mut target);
        free.subtract(&slope, &mut target);
        problem.target = target;
        let mut scratch = Vec::new();
        let mut prepare = |problem: &mut Quadratic, slot: usize| {
            let x = &problem.x[slot * length..(slot + 1) * length];
            loss.product(x, &mut scratch);
            free.reduce(x, &mut scratch);
            problem.square[slot] = lanes::dot(x, &scratch);
            problem.hx[slot * length..(slot + 1) * length].copy_from_slice(&scratch);
        };
        for (slot, &b) in self.b.iter().enumerate() {
            if b != 0.0 {
                prepare(problem, slot);
            }
        }
        let b = self.search(problem, active, &mut prepare, work)?;
        let mut moved = vec![0.0; length];
        for (slot, (new, old)) in b.iter().zip(&self.b).enumerate() {
            if new != old {
                lanes::add_scaled(new - old, problem.column(slot), &mut moved);
            }
        }
        let mut push = free.products(residual);
        for (push, h) in push.iter_mut().zip(free.h_products(&moved)) {
            *push -= h;
        }
        let a = free.solve(push);
        Ok(Step { b, a })
    }

    /// The exact search on the model, or the guarded fallback. Gives a coefficient for every slot.
    fn search(
        &self,
        problem: &mut Quadratic,
        active: &mut ActiveSet,
        prepare: &mut dyn FnMut(&mut Quadratic, usize),
        work: &Work<'_>,
    ) -> Result<Vec<f64>, Stop> {
        for at in 0..problem.used.len() {
            let slot = problem.used[at];
            problem.along[slot] = lanes::dot(problem.column(slot), &problem.target);
        }
        let top = problem
            .used
            .iter()
            .fold(0.0_f64, |top, &slot| top.max(problem.along[slot].abs()));
        let floor = 1e-15 * top;
        active.restart(problem, &self.solution());
        let ended = active.solve(problem, floor, prepare, work)?;
        let mut b = vec![0.0; problem.n_slots()];
        for (slot, value) in active.solution() {
            b[slot] = value;
        }
        if ended == Ended::Stalled || b.iter().any(|b| !b.is_finite()) {
            b.clone_from(&self.b);
            for at in 0..problem.used.len() {
                prepare(problem, problem.used[at]);
            }
            let _ = descent::descend(problem, &mut b, floor, work)?;
        }
        Ok(b)
    }
}

/// The largest slope of what is not penalised, over the sum of its terms.
pub(crate) fn free_slope(free: &[Vec<f64>], residual: &[f64]) -> f64 {
    let mut largest = 0.0_f64;
    for column in free {
        for residual in residual.chunks_exact(column.len()) {
            let slope = lanes::dot(column, residual).abs();
            let terms = column.iter().zip(residual);
            let size: f64 = terms.map(|(u, r)| (u * r).abs()).sum();
            // The absolute part is rounding, in a loss of size about 1.
            largest = largest.max(slope / (size + 1e-4));
        }
    }
    largest
}

/// The unpenalised columns of all classes under a general H.
pub(crate) struct FreePart {
    /// Columns of length N, those that are kept.
    u: Vec<Vec<f64>>,
    hu: Vec<Vec<f64>>,
    /// Of U'HU.
    factor: Factor,
    kept: Vec<usize>,
    n_columns: usize,
}

impl FreePart {
    pub(crate) fn new(loss: &dyn Loss, free: &[Vec<f64>], m: usize) -> Self {
        let n_linear = loss.n_linear();
        let mut part = Self {
            u: Vec::new(),
            hu: Vec::new(),
            factor: Factor::default(),
            kept: Vec::new(),
            n_columns: free.len() * n_linear,
        };
        for class in 0..n_linear {
            for (k, column) in free.iter().enumerate() {
                let mut u = vec![0.0; m * n_linear];
                u[class * m..(class + 1) * m].copy_from_slice(column);
                let mut hu = Vec::new();
                loss.product(&u, &mut hu);
                let mut cross: Vec<f64> = part.hu.iter().map(|h| lanes::dot(h, &u)).collect();
                let diagonal = lanes::dot(&u, &hu);
                let least = FREE_SPANNED * diagonal;
                if part.factor.append(&mut cross, diagonal, least) > least {
                    part.kept.push(class * free.len() + k);
                    part.u.push(u);
                    part.hu.push(hu);
                }
            }
        }
        part
    }

    /// U'x.
    pub(crate) fn products(&self, x: &[f64]) -> Vec<f64> {
        self.u.iter().map(|u| lanes::dot(u, x)).collect()
    }

    /// U'Hx.
    pub(crate) fn h_products(&self, x: &[f64]) -> Vec<f64> {
        self.hu.iter().map(|h| lanes::dot(h, x)).collect()
    }

    /// (U'HU)⁻¹ of a vector over the kept columns, spread over all columns.
    pub(crate) fn solve(&self, mut kept: Vec<f64>) -> Vec<f64> {
        self.factor.solve(&mut kept);
        let mut all = vec![0.0; self.n_columns];
        for (&at, value) in self.kept.iter().zip(kept) {
            all[at] = value;
        }
        all
    }

    /// hx ← hx − HU·coefficients.
    pub(crate) fn subtract(&self, coefficients: &[f64], hx: &mut [f64]) {
        for (&at, hu) in self.kept.iter().zip(&self.hu) {
            lanes::add_scaled(-coefficients[at], hu, hx);
        }
    }

    /// From Hx to (H − HU(U'HU)⁻¹U'H)x.
    pub(crate) fn reduce(&self, x: &[f64], hx: &mut [f64]) {
        let coefficients = self.solve(self.h_products(x));
        self.subtract(&coefficients, hx);
    }
}
