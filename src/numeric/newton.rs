//! Proximal Newton on a working set: the loss is replaced by its second-order model, the model is
//! solved exactly with the penalty by the active set, and the step is checked on the loss itself.
//!
//! What carries no penalty is eliminated from every model, so that the active set never sees it.
//! The exact Hessian is used, not a bound of it: a few steps are enough. It is kept from step to
//! step, and from strength to strength, for as long as steps with it bring the gap down quickly:
//! making and factoring it anew is what costs.

use crate::base::work::Work;
use crate::numeric::active_set::{ActiveSet, Ended};
use crate::numeric::basis::Basis;
use crate::numeric::descent;
use crate::numeric::error::Stop;
use crate::numeric::free_part::{FreePart, free_slope};
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

/// A step that leaves more than this share of the gap has outlived its Hessian.
const SLOW: f64 = 0.1;

/// With goals below this share of the objective the Hessian is made anew in every step: the last
/// digits come at once then.
const KEEPING: f64 = 1e-10;

/// Steps with a kept Hessian go on to this share of the goal, because they end just below it, and
/// those with a new one far below.
const SPARE: f64 = 0.01;

/// The free coefficients alone are followed until their slopes have fallen to this.
const FREE_EXACT: f64 = 1e-14;

/// Steps at most that follow the free coefficients alone.
const POLISH: usize = 6;

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
    /// The second-order model of the last steps, while it is good enough.
    model: Option<Model>,
    /// Whether the ridge weights have changed since the model was factored.
    is_outdated: bool,
    /// The largest correlation of the working set.
    steepest: f64,
}

/// A second-order model: the Hessian at the linear predictors of some recent step.
struct Model {
    /// The loss where H was taken.
    loss: Box<dyn Loss>,
    free: FreePart,
    /// Which slots' HX and square belong to this H.
    is_prepared: Vec<bool>,
}

impl Model {
    /// Fills a slot's HX and square, unless they belong to this H already.
    fn prepare(&mut self, problem: &mut Quadratic, slot: usize) {
        if std::mem::replace(&mut self.is_prepared[slot], true) {
            return;
        }
        let range = slot * problem.length..(slot + 1) * problem.length;
        let x = &problem.x[range.clone()];
        let mut hx = Vec::with_capacity(x.len());
        self.loss.product(x, &mut hx);
        self.free.reduce(x, &mut hx);
        problem.square[slot] = lanes::dot(x, &hx);
        problem.hx[range].copy_from_slice(&hx);
    }
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
            model: None,
            is_outdated: false,
            steepest: 0.0,
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
        if let Some(model) = &mut self.model {
            model.is_prepared.resize(working.problem.n_slots(), false);
            model.is_prepared[slot] = false;
        }
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

    /// Says that the ridge weights have changed.
    pub(crate) fn refactor(&mut self) {
        self.is_outdated = true;
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
        let may_keep = goal > KEEPING * (standing.loss.abs() + standing.penalty);
        let goal = if may_keep { SPARE * goal } else { goal };
        for _ in 0..STEPS {
            work.check()?;
            if standing.gap <= goal && standing.free_slope <= FREE_SLOPE {
                break;
            }
            let is_fresh = self.model.is_none();
            let step = self.step(working, active, work)?;
            match self.take(working, &step, standing) {
                Some(next) => {
                    if !may_keep || next.gap > SLOW * standing.gap {
                        self.model = None;
                    }
                    standing = next;
                }
                // Rounding is all that is left.
                None if is_fresh => break,
                None => self.model = None,
            }
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
        self.steepest = c.iter().fold(0.0_f64, |top, c| top.max(c.abs()));
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
            self.polish();
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

    /// Newton steps of the free coefficients alone, with everything else as it is: a kept Hessian
    /// would only creep towards their slope of zero.
    fn polish(&mut self) {
        if self.free.is_empty() {
            return;
        }
        let mut height = self.loss.evaluate(&self.eta);
        for _ in 0..POLISH {
            let slope = free_slope(&self.free, self.loss.residual());
            if slope <= FREE_EXACT || !height.is_finite() {
                return;
            }
            let part = FreePart::new(self.loss.as_ref(), &self.free, self.m);
            let change = part.solve(part.products(self.loss.residual()));
            let (a, eta) = (self.a.clone(), self.eta.clone());
            for (a, change) in self.a.iter_mut().zip(&change) {
                *a += change;
            }
            for (class, eta) in self.eta.chunks_exact_mut(self.m).enumerate() {
                for (column, change) in self.free.iter().zip(&change[class * self.free.len()..]) {
                    lanes::add_scaled(*change, column, eta);
                }
            }
            let now = self.loss.evaluate(&self.eta);
            // Near the end the loss itself no longer tells better from worse; the slope does.
            let is_flatter = free_slope(&self.free, self.loss.residual()) < slope;
            let room = if is_flatter { 1e-12 } else { 0.0 };
            let is_lower = now <= height + room * height.abs();
            if !(now.is_finite() && is_lower) {
                (self.a, self.eta) = (a, eta);
                let _ = self.loss.evaluate(&self.eta);
                return;
            }
            height = now;
        }
    }

    /// Solves the second-order model at the present coefficients, where the loss was evaluated last.
    fn step(
        &mut self,
        working: &mut Working,
        active: &mut ActiveSet,
        work: &Work<'_>,
    ) -> Result<Step, Stop> {
        if self.is_diagonal(working) {
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
        for at in 0..problem.used.len() {
            let slot = problem.used[at];
            problem.along[slot] = lanes::dot(problem.column(slot), &problem.target);
        }
        let solution = self.solution();
        active.restart(problem, &solution);
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

    /// H is anything: pairs (x, Hx), free of the unpenalised columns U as H − HU(U'HU)⁻¹U'H. Only
    /// slots that become active need their Hx, and keep it for as long as H is kept.
    fn step_general(
        &mut self,
        working: &mut Working,
        active: &mut ActiveSet,
        work: &Work<'_>,
    ) -> Result<Step, Stop> {
        let is_new = self.model.is_none();
        let mut model = self.model.take().unwrap_or_else(|| self.present_model());
        let problem = &mut working.problem;
        let length = problem.length;
        problem.hx.resize(problem.x.len(), 0.0);
        model.is_prepared.resize(problem.n_slots(), false);
        let residual = self.loss.residual();
        // Xb is what the free columns leave of the linear predictors.
        let mut along = self.eta.clone();
        for (class, along) in along.chunks_exact_mut(self.m).enumerate() {
            for (column, a) in self.free.iter().zip(&self.a[class * self.free.len()..]) {
                lanes::add_scaled(-a, column, along);
            }
        }
        let mut target = Vec::new();
        model.loss.product(&along, &mut target);
        model.free.reduce(&along, &mut target);
        let slope = model.free.solve(model.free.products(residual));
        lanes::add_scaled(1.0, residual, &mut target);
        model.free.subtract(&slope, &mut target);
        problem.target = target;
        let mut prepare = |problem: &mut Quadratic, slot: usize| {
            model.prepare(problem, slot);
            problem.along[slot] = lanes::dot(problem.column(slot), &problem.target);
        };
        let solution = self.solution();
        for &(slot, _) in &solution {
            prepare(problem, slot);
        }
        if is_new || self.is_outdated {
            active.restart(problem, &solution);
            self.is_outdated = false;
        } else {
            active.go_to(problem, &solution);
        }
        let b = self.search(problem, active, &mut prepare, work)?;
        let mut moved = vec![0.0; length];
        for (slot, (new, old)) in b.iter().zip(&self.b).enumerate() {
            if new != old {
                lanes::add_scaled(new - old, problem.column(slot), &mut moved);
            }
        }
        let mut push = model.free.products(residual);
        for (push, h) in push.iter_mut().zip(model.free.h_products(&moved)) {
            *push -= h;
        }
        let a = model.free.solve(push);
        self.model = Some(model);
        Ok(Step { b, a })
    }

    /// The model at the linear predictors where the loss was evaluated last.
    fn present_model(&self) -> Model {
        Model {
            free: FreePart::new(self.loss.as_ref(), &self.free, self.m),
            loss: self.loss.frozen(),
            is_prepared: Vec::new(),
        }
    }

    /// Makes and factors the model anew where the fit stands, for what is read off its factor.
    pub(crate) fn refresh(&mut self, working: &mut Working, active: &mut ActiveSet) {
        if self.is_diagonal(working) {
            // Factored anew in every step.
            return;
        }
        let mut model = self.present_model();
        let problem = &mut working.problem;
        problem.hx.resize(problem.x.len(), 0.0);
        model.is_prepared.resize(problem.n_slots(), false);
        let solution = self.solution();
        for &(slot, _) in &solution {
            model.prepare(problem, slot);
        }
        active.restart(problem, &solution);
        self.is_outdated = false;
        self.model = Some(model);
    }

    /// Whether steps scale the columns by the root of a diagonal Hessian: with ridge weights more
    /// may be active than there are samples (see `sample_space`).
    fn is_diagonal(&self, working: &Working) -> bool {
        let problem = &working.problem;
        let has_ridge = problem.used.iter().any(|&slot| problem.ridge[slot] > 0.0);
        has_ridge && self.loss.curvature().is_some()
    }

    /// The exact search on the model from the present coefficients, or the guarded fallback. Gives
    /// a coefficient for every slot.
    fn search(
        &self,
        problem: &mut Quadratic,
        active: &mut ActiveSet,
        prepare: &mut dyn FnMut(&mut Quadratic, usize),
        work: &Work<'_>,
    ) -> Result<Vec<f64>, Stop> {
        let top = active.members.iter().fold(self.steepest, |top, &slot| {
            top.max(problem.along[slot].abs())
        });
        let floor = 1e-15 * top;
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
            let found: Vec<(usize, f64)> = (0..b.len())
                .filter(|&slot| b[slot] != 0.0)
                .map(|slot| (slot, b[slot]))
                .collect();
            active.restart(problem, &found);
        }
        Ok(b)
    }
}
