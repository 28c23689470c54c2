//! The exact solver of the quadratic problem on a working set: an active set on a Cholesky factor.
//!
//! Feature-sign search (Lee, Battle, Raina & Ng 2007) in the family of homotopy methods (Osborne,
//! Presnell & Turlach 2000; Efron et al. 2004). With the signs of the active coefficients fixed the
//! problem is linear: the coefficients move towards its solution and stop where the first of them
//! reaches zero, which then leaves. At the solution the worst violators of the optimality
//! conditions enter. The objective falls with every round, so the search ends.

use crate::base::work::{Cancelled, Work};
use crate::numeric::factor::Factor;
use crate::numeric::lanes;
use crate::numeric::matrix;
use crate::numeric::quadratic::Quadratic;
use crate::numeric::sample_space::{Change, SampleSpace};

/// A newcomer whose pivot is below this share of its square lies in the span of the active ones,
/// as far as the factor can tell after refinement.
const SPANNED: f64 = 1e-11;

/// The active equations are refined until they hold to this share of the penalty.
const EQUATIONS: f64 = 1e-12;

/// A violation up to this share of the threshold that cannot be lowered is put down to rounding.
const ROUNDING: f64 = 1e-8;

/// Inactive members whose correlation was below this share of their threshold are looked at only
/// when nothing else is left to do.
const HOT: f64 = 0.9;

/// How a search ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Ended {
    /// All optimality conditions hold on the working set, up to rounding.
    Settled,
    /// More events than a search can need: rounding has made it go round in circles.
    Stalled,
}

/// The state of the search. It stays valid when the penalty changes, and when slots that are not
/// active are filled or emptied.
#[derive(Default)]
pub(crate) struct ActiveSet {
    /// The slots of the active columns, in the order of the factor.
    pub(crate) members: Vec<usize>,
    /// Their coefficients.
    pub(crate) b: Vec<f64>,
    /// Their signs: 1, −1, or 0 where neither penalty nor rule cares about the sign.
    signs: Vec<f64>,
    factor: Factor,
    /// In place of the factor when more are active than there are samples.
    space: Option<SampleSpace>,
    /// t − HXb.
    pub(crate) residual: Vec<f64>,
    /// xⱼ'(t − HXb) of each slot, as of the last look.
    pub(crate) correlation: Vec<f64>,
    /// Entries and departures so far.
    pub(crate) events: usize,
    scratch: Vec<f64>,
    /// The active columns of X and HX side by side, kept because fresh memory costs time.
    blocks: [Vec<f64>; 2],
}

impl ActiveSet {
    /// Solves the problem from the present coefficients. `floor` is the size of a correlation that
    /// is rounding only; `prepare` fills a slot's HX and square before the slot becomes active.
    ///
    /// # Errors
    /// [`Cancelled`] when the work was called off.
    pub(crate) fn solve(
        &mut self,
        problem: &mut Quadratic,
        floor: f64,
        prepare: &mut dyn FnMut(&mut Quadratic, usize),
        work: &Work<'_>,
    ) -> Result<Ended, Cancelled> {
        self.correlation.resize(problem.n_slots(), f64::INFINITY);
        let budget = self.events + 1000 + 50 * (problem.used.len() + problem.length);
        let mut lowest = f64::INFINITY;
        let mut batch = usize::MAX;
        let mut barred: Vec<usize> = Vec::new();
        let mut newest: Vec<usize> = Vec::new();
        loop {
            work.check()?;
            if self.events > budget {
                return Ok(Ended::Stalled);
            }
            self.descend(problem);
            self.settle_equations(problem, floor);
            let value = self.value(problem);
            if value < lowest {
                lowest = value;
                barred.clear();
                batch = usize::MAX;
            } else if batch == 1 {
                barred.append(&mut newest);
            } else {
                batch = 1;
            }
            let entrants = self.violators(problem, floor, &barred);
            if entrants.is_empty() {
                return Ok(self.judge(problem, floor, &barred));
            }
            let limit = (1 + self.members.len() / 20).min(batch);
            newest.clear();
            for slot in entrants.into_iter().take(limit) {
                newest.push(slot);
                prepare(problem, slot);
                if !self.enter(problem, slot) {
                    barred.push(slot);
                }
            }
        }
    }

    /// Whether what was barred for not lowering the objective violates by rounding only.
    fn judge(&mut self, problem: &Quadratic, floor: f64, barred: &[usize]) -> Ended {
        for &slot in barred {
            let c = lanes::dot(problem.column(slot), &self.residual);
            self.correlation[slot] = c;
            if let Some(excess) = problem.excess(slot, c)
                && excess > ROUNDING * problem.lasso[slot] + 100.0 * floor
                && !self.members.contains(&slot)
            {
                return Ended::Stalled;
            }
        }
        Ended::Settled
    }

    /// Moves to the solution of the active equations, dropping what changes its sign on the way.
    fn descend(&mut self, problem: &Quadratic) {
        loop {
            let mut goal: Vec<f64> = self
                .members
                .iter()
                .zip(&self.signs)
                .map(|(&slot, sign)| problem.along[slot] - problem.lasso[slot] * sign)
                .collect();
            self.solve_equations(problem, &mut goal);
            let mut step = 1.0;
            let mut leaves = None;
            for (at, (&goal, &sign)) in goal.iter().zip(&self.signs).enumerate() {
                if goal * sign < 0.0 {
                    let share = self.b[at] / (self.b[at] - goal);
                    if share < step {
                        step = share.max(0.0);
                        leaves = Some(at);
                    }
                }
            }
            let Some(at) = leaves else {
                self.b = goal;
                return;
            };
            for (b, goal) in self.b.iter_mut().zip(&goal) {
                *b += step * (goal - *b);
            }
            self.leave(problem, at);
        }
    }

    /// Takes the residual, and refines the coefficients until the active equations hold.
    fn settle_equations(&mut self, problem: &Quadratic, floor: f64) {
        let mut before = f64::INFINITY;
        for _ in 0..4 {
            problem.residual(&self.members, &self.b, &mut self.residual);
            let mut c = std::mem::take(&mut self.scratch);
            lanes::chosen_dots(&problem.x, &self.members, &self.residual, &mut c);
            let mut worst = 0.0_f64;
            let mut allowed = floor;
            for (at, &slot) in self.members.iter().enumerate() {
                self.correlation[slot] = c[at];
                c[at] -= problem.ridge[slot] * self.b[at] + problem.lasso[slot] * self.signs[at];
                worst = worst.max(c[at].abs());
                allowed = allowed.max(EQUATIONS * problem.lasso[slot]);
            }
            if worst <= allowed || worst >= 0.5 * before {
                self.scratch = c;
                return;
            }
            before = worst;
            self.solve_equations(problem, &mut c);
            for ((b, step), sign) in self.b.iter_mut().zip(&c).zip(&self.signs) {
                // A refinement never changes a sign: that is for the next round to decide.
                if *sign == 0.0 || (*b + step) * sign >= 0.0 {
                    *b += step;
                }
            }
            self.scratch = c;
        }
    }

    /// The objective at the present coefficients, less its constant.
    pub(crate) fn value(&self, problem: &Quadratic) -> f64 {
        let mut value = 0.0;
        for (&slot, &b) in self.members.iter().zip(&self.b) {
            value += -0.5 * b * (problem.along[slot] + self.correlation[slot])
                + problem.lasso[slot] * b.abs()
                + 0.5 * problem.ridge[slot] * b * b;
        }
        value
    }

    /// The slots outside the active set that violate the optimality conditions, worst first, ties
    /// by slot.
    fn violators(&mut self, problem: &Quadratic, floor: f64, barred: &[usize]) -> Vec<usize> {
        let mut is_out = vec![true; problem.n_slots()];
        for &slot in self.members.iter().chain(barred) {
            is_out[slot] = false;
        }
        let (hot, cold): (Vec<usize>, Vec<usize>) = problem
            .used
            .iter()
            .filter(|&&slot| is_out[slot])
            .partition(|&&slot| self.correlation[slot].abs() >= HOT * problem.lasso[slot]);
        for slots in [hot, cold] {
            lanes::chosen_dots(&problem.x, &slots, &self.residual, &mut self.scratch);
            let mut found: Vec<(f64, usize)> = Vec::new();
            for (&slot, &c) in slots.iter().zip(&self.scratch) {
                self.correlation[slot] = c;
                if let Some(excess) = problem.excess(slot, c)
                    && excess > 2.0 * EQUATIONS * problem.lasso[slot] + floor
                {
                    found.push((excess, slot));
                }
            }
            if !found.is_empty() {
                found.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1)));
                return found.into_iter().map(|(_, slot)| slot).collect();
            }
        }
        Vec::new()
    }

    /// Lets a slot become active with coefficient zero, in the direction of its correlation.
    ///
    /// When it lies in the span of the active ones, the fit can be kept while weight is moved to
    /// the newcomer, which lowers the penalty, until an active coefficient reaches zero: that one
    /// leaves and the newcomer takes its place. Returns whether it is active now.
    fn enter(&mut self, problem: &Quadratic, slot: usize) -> bool {
        let direction = self.correlation[slot].signum();
        let sign = self.sign_of(problem, slot, direction);
        let mut b_new = 0.0;
        loop {
            let mut cross = std::mem::take(&mut self.scratch);
            let pivot = self.try_append(problem, slot, &mut cross);
            let diagonal = problem.square[slot] + problem.ridge[slot];
            if pivot > SPANNED * diagonal {
                self.scratch = cross;
                self.members.push(slot);
                self.signs.push(sign);
                self.b.push(b_new);
                self.events += 1;
                return true;
            }
            // cross = R'⁻¹ G_Aj, so that u = R⁻¹ cross gives xⱼ = X_A u.
            self.factor.solve_plain(&mut cross);
            let mut step = f64::INFINITY;
            let mut leaves = None;
            for (at, u) in cross.iter().enumerate() {
                // By the sign, not the coefficient: one that has only just entered is zero, and
                // must leave rather than take the wrong sign.
                if direction * u * self.signs[at] > 0.0 {
                    let reach = self.b[at].abs() / u.abs();
                    if reach < step {
                        step = reach;
                        leaves = Some(at);
                    }
                }
            }
            let Some(at) = leaves.filter(|_| step.is_finite()) else {
                self.scratch = cross;
                return false;
            };
            for (b, u) in self.b.iter_mut().zip(&cross) {
                *b -= direction * step * u;
            }
            b_new += direction * step;
            self.scratch = cross;
            self.leave(problem, at);
        }
    }

    /// Replaces a right-hand side by the solution of the active equations.
    fn solve_equations(&self, problem: &Quadratic, vector: &mut [f64]) {
        match &self.space {
            Some(space) => space.solve(problem, &self.members, vector),
            None => self.factor.solve(vector),
        }
    }

    /// Appends a slot's column to the factor if its pivot allows.
    fn try_append(&mut self, problem: &Quadratic, slot: usize, cross: &mut Vec<f64>) -> f64 {
        if self.space.is_none() && SampleSpace::suits(problem, self.members.len()) {
            self.space = Some(SampleSpace::new(problem, &self.members));
        }
        if let Some(space) = &mut self.space {
            // With a ridge weight nothing lies in the span of the others.
            space.change(problem, slot, Change::Comes);
            return f64::INFINITY;
        }
        lanes::chosen_dots(
            problem.h_columns(),
            &self.members,
            problem.column(slot),
            cross,
        );
        let diagonal = problem.square[slot] + problem.ridge[slot];
        self.factor.append(cross, diagonal, SPANNED * diagonal)
    }

    fn sign_of(&self, problem: &Quadratic, slot: usize, direction: f64) -> f64 {
        let is_indifferent =
            problem.lasso[slot] == 0.0 && problem.sign[slot] == crate::numeric::penalty::Sign::Any;
        if is_indifferent { 0.0 } else { direction }
    }

    fn leave(&mut self, problem: &Quadratic, at: usize) {
        match &mut self.space {
            Some(space) => space.change(problem, self.members[at], Change::Goes),
            None => self.factor.remove(at),
        }
        let _ = self.members.remove(at);
        let _ = self.signs.remove(at);
        let _ = self.b.remove(at);
        self.events += 1;
    }

    /// The degrees of freedom of the active coefficients: the trace of G(G + ridge)⁻¹ for the G of
    /// the problem that was solved last.
    pub(crate) fn effective(&self, problem: &Quadratic) -> f64 {
        if let Some(space) = &self.space {
            return space.effective();
        }
        let k = self.members.len();
        let mut lost = 0.0;
        for (at, &slot) in self.members.iter().enumerate() {
            let mut unit = vec![0.0; k];
            unit[at] = 1.0;
            self.factor.solve_transposed(&mut unit);
            lost += problem.ridge[slot] * lanes::dot(&unit, &unit);
        }
        k as f64 - lost
    }

    /// Says that a slot has been filled anew, so that nothing is known of it.
    pub(crate) fn expect_new(&mut self, slot: usize) {
        if let Some(c) = self.correlation.get_mut(slot) {
            *c = f64::INFINITY;
        }
    }

    /// The active slots with their coefficients.
    pub(crate) fn solution(&self) -> Vec<(usize, f64)> {
        self.members
            .iter()
            .copied()
            .zip(self.b.iter().copied())
            .filter(|(_, b)| *b != 0.0)
            .collect()
    }

    /// Goes to the given coefficients with as few changes of the factor as possible.
    pub(crate) fn go_to(&mut self, problem: &Quadratic, solution: &[(usize, f64)]) {
        self.correlation.resize(problem.n_slots(), f64::INFINITY);
        let mut wanted = vec![0.0; problem.n_slots()];
        for &(slot, b) in solution {
            wanted[slot] = b;
        }
        for at in (0..self.members.len()).rev() {
            let b = wanted[self.members[at]];
            if b == 0.0 {
                self.leave(problem, at);
            } else {
                self.b[at] = b;
                self.signs[at] = self.sign_of(problem, self.members[at], b.signum());
                wanted[self.members[at]] = 0.0;
            }
        }
        for &(slot, b) in solution {
            if wanted[slot] != 0.0 {
                self.append_at(problem, slot, b);
            }
        }
    }

    /// Factors anew, after H or the ridge weights have changed.
    pub(crate) fn refactor(&mut self, problem: &Quadratic) {
        let solution = self.solution();
        self.restart(problem, &solution);
    }

    /// Factors anew at the given coefficients.
    pub(crate) fn restart(&mut self, problem: &Quadratic, solution: &[(usize, f64)]) {
        self.factor.clear();
        self.members.clear();
        self.signs.clear();
        self.b.clear();
        self.correlation.resize(problem.n_slots(), f64::INFINITY);
        self.space = None;
        if SampleSpace::suits(problem, solution.len()) {
            for &(slot, b) in solution {
                self.push(problem, slot, b);
            }
            self.space = Some(SampleSpace::new(problem, &self.members));
            return;
        }
        // All products at once: much cheaper than column by column.
        let slots: Vec<usize> = solution.iter().map(|(slot, _)| *slot).collect();
        let [x, hx] = &mut self.blocks;
        problem.gather(&problem.x, &slots, x);
        let gram = if problem.hx.is_empty() {
            matrix::lower_product(x, x, problem.length)
        } else {
            problem.gather(&problem.hx, &slots, hx);
            matrix::lower_product(x, hx, problem.length)
        };
        let mut whole = gram.clone();
        for (at, &slot) in slots.iter().enumerate() {
            whole[(at, at)] = problem.square[slot] + problem.ridge[slot];
        }
        if let Some(factor) = Factor::of(whole, SPANNED) {
            self.factor = factor;
            for &(slot, b) in solution {
                self.push(problem, slot, b);
            }
            return;
        }
        let mut kept: Vec<usize> = Vec::with_capacity(slots.len());
        for (at, &(slot, b)) in solution.iter().enumerate() {
            let mut cross: Vec<f64> = kept.iter().map(|&k| gram[(at, k)]).collect();
            let diagonal = problem.square[slot] + problem.ridge[slot];
            let least = SPANNED * diagonal;
            if self.factor.append(&mut cross, diagonal, least) > least {
                kept.push(at);
                self.push(problem, slot, b);
            }
        }
    }

    /// Appends a slot with a coefficient; one in the span of the others is left at zero, and will
    /// enter again if it is needed.
    fn append_at(&mut self, problem: &Quadratic, slot: usize, b: f64) {
        let mut cross = std::mem::take(&mut self.scratch);
        let pivot = self.try_append(problem, slot, &mut cross);
        self.scratch = cross;
        let diagonal = problem.square[slot] + problem.ridge[slot];
        if pivot > SPANNED * diagonal {
            self.push(problem, slot, b);
        }
    }

    fn push(&mut self, problem: &Quadratic, slot: usize, b: f64) {
        let sign = self.sign_of(problem, slot, b.signum());
        self.members.push(slot);
        self.signs.push(sign);
        self.b.push(b);
    }
}
