//! A Cholesky factor that grows and shrinks by one row and column at a time.

use crate::numeric::lanes::{add_scaled_body, dispatch, dot_body};
use crate::numeric::matrix::{self, Matrix};

/// The upper triangle R of G = R'R, stored by columns without gaps: column k has k + 1 entries.
#[derive(Clone, Debug, Default)]
pub(crate) struct Factor {
    entries: Vec<f64>,
    size: usize,
}

#[inline(always)]
fn start(column: usize) -> usize {
    column * (column + 1) / 2
}

impl Factor {
    /// The factor of a matrix of which the lower triangle is given, in blocks: many times faster
    /// than row by row. `None` when a pivot is at most `least` of its diagonal element.
    pub(crate) fn of(mut lower: Matrix, least: f64) -> Option<Self> {
        let size = lower.nrows();
        let diagonal: Vec<f64> = (0..size).map(|k| lower[(k, k)]).collect();
        if !matrix::cholesky(&mut lower) {
            return None;
        }
        let mut entries = Vec::with_capacity(start(size));
        for (k, diagonal) in diagonal.iter().enumerate() {
            let pivot = lower[(k, k)];
            // False for what is not a number as well.
            let is_clear = pivot * pivot > least * diagonal;
            if !is_clear {
                return None;
            }
            entries.extend((0..=k).map(|j| lower[(k, j)]));
        }
        Some(Self { entries, size })
    }

    /// Makes the factor empty.
    pub(crate) fn clear(&mut self) {
        self.entries.clear();
        self.size = 0;
    }

    /// Replaces `vector` by the solution w of R'w = vector.
    pub(crate) fn solve_transposed(&self, vector: &mut [f64]) {
        dispatch(
            #[inline(always)]
            || {
                for k in 0..vector.len() {
                    let column = &self.entries[start(k)..start(k + 1)];
                    let (known, rest) = vector.split_at_mut(k);
                    rest[0] = (rest[0] - dot_body(&column[..k], known)) / column[k];
                }
            },
        );
    }

    /// Replaces `vector` by the solution b of Rb = vector.
    pub(crate) fn solve_plain(&self, vector: &mut [f64]) {
        dispatch(
            #[inline(always)]
            || {
                for k in (0..vector.len()).rev() {
                    let column = &self.entries[start(k)..start(k + 1)];
                    let (rest, known) = vector.split_at_mut(k);
                    known[0] /= column[k];
                    add_scaled_body(-known[0], &column[..k], rest);
                }
            },
        );
    }

    /// Replaces `vector` by the solution b of Gb = vector.
    pub(crate) fn solve(&self, vector: &mut [f64]) {
        self.solve_transposed(vector);
        self.solve_plain(vector);
    }

    /// Tries to append a row and column to G. `cross` holds the new column's products with the
    /// old ones and is replaced by R'⁻¹ of them.
    ///
    /// Returns the pivot: what is left of `diagonal`. When it is at most `least`, the new column
    /// depends on the old ones as far as rounding can tell, and nothing is appended.
    pub(crate) fn append(&mut self, cross: &mut [f64], diagonal: f64, least: f64) -> f64 {
        self.solve_transposed(cross);
        let inside = dispatch(
            #[inline(always)]
            || dot_body(cross, cross),
        );
        let pivot = diagonal - inside;
        if pivot > least {
            self.entries.extend_from_slice(cross);
            self.entries.push(pivot.sqrt());
            self.size += 1;
        }
        pivot
    }

    /// G ← G + xx', by Givens rotations.
    pub(crate) fn add_outer(&mut self, mut x: Vec<f64>) {
        let mut turns: Vec<(f64, f64)> = Vec::with_capacity(self.size);
        for (k, left) in x.iter_mut().enumerate() {
            let column = &mut self.entries[start(k)..start(k + 1)];
            for (r, &(cos, sin)) in column.iter_mut().zip(&turns) {
                let upper = *r;
                *r = cos * upper + sin * *left;
                *left = cos * *left - sin * upper;
            }
            let length = column[k].hypot(*left);
            turns.push((column[k] / length, *left / length));
            column[k] = length;
        }
    }

    /// G ← G − xx', by hyperbolic rotations in the stable mixed form; G must stay positive.
    pub(crate) fn subtract_outer(&mut self, mut x: Vec<f64>) {
        let mut turns: Vec<(f64, f64)> = Vec::with_capacity(self.size);
        for (k, left) in x.iter_mut().enumerate() {
            let column = &mut self.entries[start(k)..start(k + 1)];
            for (r, &(cos, sin)) in column.iter_mut().zip(&turns) {
                *r = (*r - sin * *left) / cos;
                *left = cos * *left - sin * *r;
            }
            let sin = *left / column[k];
            // Rounding may push the pivot to nothing, never below.
            let cos = ((1.0 - sin) * (1.0 + sin)).max(f64::EPSILON).sqrt();
            column[k] *= cos;
            turns.push((cos, sin));
        }
    }

    /// Takes out a row and column of G, by Givens rotations.
    pub(crate) fn remove(&mut self, at: usize) {
        let mut turns: Vec<(f64, f64)> = Vec::with_capacity(self.size - at);
        for old in at + 1..self.size {
            // This column moves one place to the left; its last entry must be turned away.
            let new = old - 1;
            let (from, to) = (start(old), start(new));
            self.entries.copy_within(from..from + old + 1, to);
            // That last entry lies where the next column will be moved to, and is lost then.
            let column = &mut self.entries[to..to + old + 1];
            for (row, &(cos, sin)) in (at..).zip(&turns) {
                let (upper, lower) = (column[row], column[row + 1]);
                column[row] = cos * upper + sin * lower;
                column[row + 1] = cos * lower - sin * upper;
            }
            let (upper, lower) = (column[new], column[old]);
            let length = upper.hypot(lower);
            let turn = if length == 0.0 {
                (1.0, 0.0)
            } else {
                (upper / length, lower / length)
            };
            column[new] = length;
            turns.push(turn);
        }
        self.size -= 1;
        self.entries.truncate(start(self.size));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn gram(columns: &[Vec<f64>], i: usize, j: usize) -> f64 {
        columns[i].iter().zip(&columns[j]).map(|(a, b)| a * b).sum()
    }

    fn grown(columns: &[Vec<f64>]) -> Factor {
        let mut factor = Factor::default();
        for k in 0..columns.len() {
            let mut cross: Vec<f64> = (0..k).map(|i| gram(columns, i, k)).collect();
            let pivot = factor.append(&mut cross, gram(columns, k, k), 1e-9);
            assert!(pivot > 1e-9);
        }
        factor
    }

    fn some_columns(count: usize) -> Vec<Vec<f64>> {
        (0..count)
            .map(|k| {
                (0..12)
                    .map(|i| ((i * 7 + k * 13) as f64).sin() + f64::from(u8::from(i == k)))
                    .collect()
            })
            .collect()
    }

    #[test]
    fn solutions_satisfy_the_equations_after_any_removal() {
        for gone in 0..6 {
            let mut columns = some_columns(6);
            let mut factor = grown(&columns);
            factor.remove(gone);
            drop(columns.remove(gone));
            let wanted: Vec<f64> = (0..5).map(|k| 1.0 + k as f64).collect();
            let mut solution = wanted.clone();
            factor.solve(&mut solution);
            for (i, wanted) in wanted.iter().enumerate() {
                let product: f64 = (0..5).map(|j| gram(&columns, i, j) * solution[j]).sum();
                assert!((product - wanted).abs() < 1e-10, "row {i} without {gone}");
            }
        }
    }

    #[test]
    fn a_dependent_column_is_told_by_its_pivot_and_not_appended() {
        let mut columns = some_columns(3);
        let sum = (0..12)
            .map(|i| columns[0][i] - 2.0 * columns[2][i])
            .collect();
        columns.push(sum);
        let mut factor = grown(&columns[..3]);
        let mut cross: Vec<f64> = (0..3).map(|i| gram(&columns, i, 3)).collect();
        let pivot = factor.append(&mut cross, gram(&columns, 3, 3), 1e-9);
        assert!(pivot.abs() < 1e-9);
        assert_eq!(factor.size, 3);
    }
}
