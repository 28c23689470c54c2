//! The working set: the few predictors that a fit deals with in full, in a compact buffer.

use crate::numeric::basis::Basis;
use crate::numeric::ground::Ground;
use crate::numeric::lanes;
use crate::numeric::penalty::Sign;
use crate::numeric::quadratic::Quadratic;

/// Predictors in numbered slots. The matrix itself is read only when a predictor comes in.
pub(crate) struct Working {
    pub(crate) problem: Quadratic,
    /// The predictor of each slot.
    pub(crate) predictor: Vec<usize>,
    /// The slot of each predictor, plus 1; 0 for those outside.
    slot: Vec<u32>,
    vacant: Vec<usize>,
}

impl Working {
    /// An empty working set for columns of a length, among p predictors.
    pub(crate) fn new(length: usize, p: usize) -> Self {
        Self {
            problem: Quadratic {
                length,
                target: vec![0.0; length],
                ..Quadratic::default()
            },
            predictor: Vec::new(),
            slot: vec![0; p],
            vacant: Vec::new(),
        }
    }

    /// Whether a predictor is in the set.
    pub(crate) fn holds(&self, predictor: usize) -> bool {
        self.slot[predictor] != 0
    }

    /// The number of predictors in the set.
    pub(crate) fn len(&self) -> usize {
        self.problem.used.len()
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
        let slot = self.vacant.last().copied().unwrap_or(self.predictor.len());
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
        let (square, along) = (
            lanes::dot(column, column),
            lanes::dot(column, &problem.target),
        );
        if slot == self.predictor.len() {
            self.predictor.push(predictor);
            problem.square.push(square);
            problem.along.push(along);
            problem.lasso.push(f64::INFINITY);
            problem.ridge.push(0.0);
            problem.sign.push(sign);
        } else {
            let _ = self.vacant.pop();
            self.predictor[slot] = predictor;
            problem.square[slot] = square;
            problem.along[slot] = along;
            problem.sign[slot] = sign;
        }
        self.slot[predictor] = slot as u32 + 1;
        let at = problem.used.partition_point(|&used| used < slot);
        problem.used.insert(at, slot);
        Some(slot)
    }

    /// Sends a predictor out. It must not be active.
    pub(crate) fn remove(&mut self, slot: usize) {
        self.slot[self.predictor[slot]] = 0;
        self.problem.used.retain(|&used| used != slot);
        self.vacant.push(slot);
    }

    /// Sets the penalty of all slots: `lasso · f` and `ridge · f` with the penalty weight f.
    pub(crate) fn set_penalty(&mut self, ground: &Ground<'_>, lasso: f64, ridge: f64) {
        for &slot in &self.problem.used {
            let factor = ground.factor(self.predictor[slot]);
            self.problem.lasso[slot] = lasso * factor;
            self.problem.ridge[slot] = ridge * factor;
        }
    }
}
