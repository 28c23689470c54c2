//! The 8-bit copy of the predictor matrix, with the error of every column.
//!
//! Sixteen columns form a panel. Inside a panel two rows of all sixteen columns lie side by side
//! (32 bytes), so that one multiply-add instruction takes in two rows of eight columns and no sum
//! ever has to be gathered across a register.

use crate::numeric::lanes;
use crate::numeric::matrix::Matrix;

/// Columns of one panel.
pub(crate) const WIDTH: usize = 16;
/// Bytes that hold two rows of one panel.
pub(crate) const PAIR: usize = 2 * WIDTH;

/// The 8-bit copy: column j is `middle + step · q + error`, with −127 ≤ q ≤ 127.
#[derive(Debug)]
pub(crate) struct Panels {
    bytes: Vec<i8>,
    /// Row pairs of a panel.
    n_pairs: usize,
    /// The size of one step of each column.
    pub(crate) step: Vec<f64>,
    /// A bound on the length of each column's error vector over all samples.
    pub(crate) error: Vec<f64>,
    /// A bound on the length of each column's `step · q`.
    pub(crate) length: Vec<f64>,
}

impl Panels {
    /// Rounds every column to 8 bits. Columns with values that are not finite become zero, with
    /// an infinite error.
    pub(crate) fn new(x: &Matrix, middle: &[f64], half_range: &[f64]) -> Self {
        let (n, p) = x.shape();
        let n_pairs = n.div_ceil(2);
        let n_panels = p.div_ceil(WIDTH);
        let mut bytes = vec![0_i8; n_panels * n_pairs * PAIR];
        let mut step = vec![0.0; p];
        let mut error = vec![0.0; p];
        let mut length = vec![0.0; p];
        let mut rounded = vec![0.0; n];
        let mut missed = vec![0.0; n];
        for j in 0..p {
            let half = half_range[j];
            if !half.is_finite() {
                error[j] = f64::INFINITY;
                continue;
            }
            if half == 0.0 || n == 0 {
                continue;
            }
            let column = &x.as_slice()[j * n..(j + 1) * n];
            // In units of half the range, so that no unit of measurement over- or underflows.
            let (missed, size) = lanes::dispatch(
                #[inline(always)]
                || {
                    round_column(column, middle[j], half, &mut rounded, &mut missed);
                    (
                        lanes::dot_body(&missed, &missed).sqrt(),
                        lanes::dot_body(&rounded, &rounded).sqrt(),
                    )
                },
            );
            let panel = &mut bytes[j / WIDTH * n_pairs * PAIR..][..n_pairs * PAIR];
            let place = 2 * (j % WIDTH);
            for (pair, two) in panel.chunks_exact_mut(PAIR).zip(rounded.chunks(2)) {
                for (byte, q) in pair[place..].iter_mut().zip(two) {
                    *byte = *q as i8;
                }
            }
            step[j] = half / 127.0;
            // The margin covers the rounding of `x − middle` and of the sums themselves: a few
            // units in the last place per sample, in units of half the range.
            let margin = 1e-14 * (n as f64).sqrt();
            error[j] = half * (missed * (1.0 + 1e-12) + margin);
            length[j] = half * (size / 127.0) * (1.0 + 1e-12);
        }
        Self {
            bytes,
            n_pairs,
            step,
            error,
            length,
        }
    }

    /// The row pairs of a panel.
    pub(crate) fn panel(&self, at: usize) -> &[[i8; PAIR]] {
        let size = self.n_pairs * PAIR;
        self.bytes[at * size..(at + 1) * size].as_chunks::<PAIR>().0
    }

    /// The number of panels.
    pub(crate) fn n_panels(&self) -> usize {
        self.step.len().div_ceil(WIDTH)
    }

    /// The number of row pairs.
    pub(crate) fn n_pairs(&self) -> usize {
        self.n_pairs
    }
}

/// q = round(127 (x − middle)/half) and what is missed, in units of `half`.
#[inline(always)]
fn round_column(column: &[f64], middle: f64, half: f64, rounded: &mut [f64], missed: &mut [f64]) {
    let steps = 127.0 / half;
    // The reciprocal of the smallest numbers overflows; then the division itself is taken.
    if steps.is_finite() {
        for ((x, q), e) in column.iter().zip(rounded).zip(missed) {
            let off = (x - middle) * steps;
            *q = off.round_ties_even();
            *e = (off - *q) * (1.0 / 127.0);
        }
    } else {
        for ((x, q), e) in column.iter().zip(rounded).zip(missed) {
            let off = (x - middle) / half * 127.0;
            *q = off.round_ties_even();
            *e = (off - *q) * (1.0 / 127.0);
        }
    }
}
