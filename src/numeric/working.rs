//! The working set: the few predictors that a fit deals with in full, in a compact buffer.

use crate::numeric::basis::Basis;
use crate::numeric::ground::Ground;
use crate::numeric::lanes;
use crate::numeric::penalty::Sign;
use crate::numeric::quadratic::Quadratic;

/// Predictors in numbered slots. The matrix itself is read only when a predictor comes in.
///
/// With K linear predictors a member is a pair of predictor and class, and its key is
/// `predictor · K + class`; with one, the key is the predictor.
pub(crate) struct Working {
    pub(crate) problem: Quadratic,
    /// The key of each slot.
    pub(crate) key: Vec<usize>,
    /// K.
    pub(crate) n_linear: usize,
    /// The slot of each key, plus 1; 0 for those outside.
    slot: Vec<u32>,
    vacant: Vec<usize>,
}

impl Working {
    /// An empty working set for columns of a length, among p predictors with K classes.
    pub(crate) fn new(length: usize, p: usize, n_linear: usize) -> Self {
        Self {
            problem: Quadratic {
                length,
                target: vec![0.0; length],
                ..Quadratic::default()
            },
            key: Vec::new(),
            n_linear,
            slot: vec![0; p * n_linear],
            vacant: Vec::new(),
        }
    }

    /// Whether a member is in the set.
    pub(crate) fn holds(&self, key: usize) -> bool {
        self.slot[key] != 0
    }

    /// The predictor of a slot.
    pub(crate) fn predictor(&self, slot: usize) -> usize {
        self.key[slot] / self.n_linear
    }

    /// The class of a slot.
    pub(crate) fn class(&self, slot: usize) -> usize {
        self.key[slot] % self.n_linear
    }

    /// The number of members.
    pub(crate) fn len(&self) -> usize {
        self.problem.used.len()
    }

    /// The slot that the next member will get.
    pub(crate) fn next_slot(&self) -> usize {
        self.vacant.last().copied().unwrap_or(self.key.len())
    }

    /// Gives a member the next slot. Its column is the caller's to fill.
    pub(crate) fn claim(&mut self, key: usize, sign: Sign) -> usize {
        let slot = self.next_slot();
        let problem = &mut self.problem;
        if slot == self.key.len() {
            self.key.push(key);
            problem.square.push(0.0);
            problem.along.push(0.0);
            problem.lasso.push(f64::INFINITY);
            problem.ridge.push(0.0);
            problem.sign.push(sign);
        } else {
            let _ = self.vacant.pop();
            self.key[slot] = key;
            problem.sign[slot] = sign;
        }
        self.slot[key] = slot as u32 + 1;
        let at = problem.used.partition_point(|&used| used < slot);
        problem.used.insert(at, slot);
        slot
    }

    /// Takes in a predictor, free of what lies in the span of the basis. Returns `None`, and takes
    /// nothing in, when nothing is left of it.
    pub(crate) fn add(
        &mut self,
        ground: &Ground<'_>,
        basis: &Basis,
        predictor: usize,
        sign: Sign,
    ) -> Option<usize> {
        let length = self.problem.length;
        let slot = self.next_slot();
        let problem = &mut self.problem;
        if problem.x.len() < (slot + 1) * length {
            problem.x.resize((slot + 1) * length, 0.0);
        }
        let column = &mut problem.x[slot * length..(slot + 1) * length];
        ground.weighted(predictor, column);
        if basis.rank() > 1 {
            let before = lanes::norm(column);
            basis.project(column);
            if Ground::is_spanned(before, lanes::norm(column)) {
                return None;
            }
        }
        let square = lanes::dot(column, column);
        let along = lanes::dot(column, &problem.target);
        let slot = self.claim(predictor, sign);
        self.problem.square[slot] = square;
        self.problem.along[slot] = along;
        Some(slot)
    }

    /// Sends a member out. It must not be active.
    pub(crate) fn remove(&mut self, slot: usize) {
        self.slot[self.key[slot]] = 0;
        self.problem.used.retain(|&used| used != slot);
        self.vacant.push(slot);
    }

    /// Sets the penalty of all slots: `lasso · f` and `ridge · f` with the penalty weight f.
    pub(crate) fn set_penalty(&mut self, ground: &Ground<'_>, lasso: f64, ridge: f64) {
        for &slot in &self.problem.used {
            let factor = ground.factor(self.key[slot] / self.n_linear);
            self.problem.lasso[slot] = lasso * factor;
            self.problem.ridge[slot] = ridge * factor;
        }
    }

    /// The slots to keep when the set has grown large: those active, and of the others the
    /// `limit` closest to entering. Everything else leaves.
    pub(crate) fn trim(&mut self, active: &[usize], correlation: &[f64], limit: usize) {
        let mut is_active = vec![false; self.problem.n_slots()];
        for &slot in active {
            is_active[slot] = true;
        }
        let mut idle: Vec<(f64, usize)> = self
            .problem
            .used
            .iter()
            .filter(|&&slot| !is_active[slot])
            .map(|&slot| {
                // What came in last has not been looked at yet, and stays.
                let c = correlation.get(slot).copied().unwrap_or(f64::INFINITY);
                let closeness = if c.is_finite() {
                    c.abs() / self.problem.lasso[slot]
                } else {
                    f64::INFINITY
                };
                (closeness, slot)
            })
            .collect();
        idle.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1)));
        for (_, slot) in idle.into_iter().skip(limit) {
            self.remove(slot);
        }
    }
}
