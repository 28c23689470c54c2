//! The quadratic problem that stands inside every fit: a least-squares part and the penalty, on the
//! few predictors of the working set.

use crate::numeric::lanes;
use crate::numeric::penalty::Sign;

/// Minimise, over the coefficients b of the columns in use,
///
/// ```text
/// ½ (b − 0)'X'HX (b − 0) − b'X't + Σⱼ ( lassoⱼ |bⱼ| + ½ ridgeⱼ bⱼ² )      bⱼ within its sign rule
/// ```
///
/// X has columns of length N in numbered slots. H is given by the columns HX where it is not the
/// identity. Columns are thought of as free of everything unpenalised.
#[derive(Default)]
pub(crate) struct Quadratic {
    /// N.
    pub(crate) length: usize,
    /// The slots' columns, one after the other.
    pub(crate) x: Vec<f64>,
    /// The slots' columns times H; empty when H is the identity.
    pub(crate) hx: Vec<f64>,
    /// t, of length N.
    pub(crate) target: Vec<f64>,
    /// xⱼ't.
    pub(crate) along: Vec<f64>,
    /// xⱼ'Hxⱼ.
    pub(crate) square: Vec<f64>,
    /// The weight of |bⱼ|.
    pub(crate) lasso: Vec<f64>,
    /// The weight of ½ bⱼ².
    pub(crate) ridge: Vec<f64>,
    /// The signs that bⱼ may have.
    pub(crate) sign: Vec<Sign>,
    /// The slots in use, rising.
    pub(crate) used: Vec<usize>,
}

impl Quadratic {
    /// The number of slots there are, used or not.
    pub(crate) fn n_slots(&self) -> usize {
        self.lasso.len()
    }

    /// The columns that stand for HX.
    pub(crate) fn h_columns(&self) -> &[f64] {
        if self.hx.is_empty() {
            &self.x
        } else {
            &self.hx
        }
    }

    /// A slot's column of X.
    pub(crate) fn column(&self, slot: usize) -> &[f64] {
        &self.x[slot * self.length..(slot + 1) * self.length]
    }

    /// A slot's column of HX.
    pub(crate) fn h_column(&self, slot: usize) -> &[f64] {
        &self.h_columns()[slot * self.length..(slot + 1) * self.length]
    }

    /// The columns of some slots side by side, from X or HX.
    pub(crate) fn gather(&self, columns: &[f64], slots: &[usize], out: &mut Vec<f64>) {
        let length = self.length;
        out.clear();
        for &slot in slots {
            out.extend_from_slice(&columns[slot * length..(slot + 1) * length]);
        }
    }

    /// t − Σ bⱼ Hxⱼ over the given slots.
    pub(crate) fn residual(&self, slots: &[usize], b: &[f64], out: &mut Vec<f64>) {
        out.clear();
        out.extend_from_slice(&self.target);
        lanes::subtract_columns(self.h_columns(), slots, b, out);
    }

    /// For the correlations of the used slots: the largest over its threshold, at least 1, and
    /// Σ excess²/(2 ridge).
    pub(crate) fn infeasibility(&self, c: &[f64]) -> (f64, f64) {
        let (mut worst, mut excess) = (1.0_f64, 0.0);
        for (&slot, &c) in self.used.iter().zip(c) {
            if let Some(over) = self.excess(slot, c)
                && over > 0.0
            {
                worst = worst.max(c.abs() / self.lasso[slot]);
                if self.ridge[slot] > 0.0 {
                    excess += over * over / (2.0 * self.ridge[slot]);
                }
            }
        }
        (worst, excess)
    }

    /// The penalty of a solution.
    pub(crate) fn penalty(&self, solution: &[(usize, f64)]) -> f64 {
        solution
            .iter()
            .map(|&(slot, b)| self.lasso[slot] * b.abs() + 0.5 * self.ridge[slot] * b * b)
            .sum()
    }

    /// The excess of a slot's correlation c over what the penalty holds down, and the sign with
    /// which it would enter: `None` when its sign rule forbids that sign.
    pub(crate) fn excess(&self, slot: usize, c: f64) -> Option<f64> {
        self.sign[slot]
            .allows(c)
            .then(|| c.abs() - self.lasso[slot])
    }
}
