//! Sums over samples in a fixed order, so that their bits depend on no machine and no thread.
//!
//! Every sum runs over sixteen lanes that are added up in one fixed tree, with fused
//! multiply-add in every build. The widest instructions of the machine are chosen at run time;
//! they change the speed, not the order.

const LANES: usize = 16;

/// Runs a closure compiled for the widest instructions this machine has.
///
/// The closure must reach its loops through `#[inline(always)]` functions only.
#[inline]
pub(crate) fn dispatch<R>(closure: impl FnOnce() -> R) -> R {
    pulp::Arch::new().dispatch(closure)
}

#[inline(always)]
fn reduce(lanes: [f64; LANES]) -> f64 {
    let mut eight = [0.0; 8];
    for lane in 0..8 {
        eight[lane] = lanes[lane] + lanes[lane + 8];
    }
    let mut four = [0.0; 4];
    for lane in 0..4 {
        four[lane] = eight[lane] + eight[lane + 4];
    }
    (four[0] + four[2]) + (four[1] + four[3])
}

/// Σᵢ aᵢ bᵢ; for use inside [`dispatch`].
#[inline(always)]
pub(crate) fn dot_body(a: &[f64], b: &[f64]) -> f64 {
    let (a_blocks, a_rest) = a.as_chunks::<LANES>();
    let (b_blocks, b_rest) = b.as_chunks::<LANES>();
    let mut sums = [0.0; LANES];
    for (x, y) in a_blocks.iter().zip(b_blocks) {
        for lane in 0..LANES {
            sums[lane] = x[lane].mul_add(y[lane], sums[lane]);
        }
    }
    for (lane, (x, y)) in a_rest.iter().zip(b_rest).enumerate() {
        sums[lane] = x.mul_add(*y, sums[lane]);
    }
    reduce(sums)
}

/// Σᵢ (aᵢ − shift) bᵢ; for use inside [`dispatch`].
#[inline(always)]
pub(crate) fn shifted_dot_body(a: &[f64], shift: f64, b: &[f64]) -> f64 {
    let (a_blocks, a_rest) = a.as_chunks::<LANES>();
    let (b_blocks, b_rest) = b.as_chunks::<LANES>();
    let mut sums = [0.0; LANES];
    for (x, y) in a_blocks.iter().zip(b_blocks) {
        for lane in 0..LANES {
            sums[lane] = (x[lane] - shift).mul_add(y[lane], sums[lane]);
        }
    }
    for (lane, (x, y)) in a_rest.iter().zip(b_rest).enumerate() {
        sums[lane] = (x - shift).mul_add(*y, sums[lane]);
    }
    reduce(sums)
}

/// Σᵢ (aᵢ − shift)² bᵢ; for use inside [`dispatch`].
#[inline(always)]
pub(crate) fn shifted_square_body(a: &[f64], shift: f64, b: &[f64]) -> f64 {
    let (a_blocks, a_rest) = a.as_chunks::<LANES>();
    let (b_blocks, b_rest) = b.as_chunks::<LANES>();
    let mut sums = [0.0; LANES];
    for (x, y) in a_blocks.iter().zip(b_blocks) {
        for lane in 0..LANES {
            let off = x[lane] - shift;
            sums[lane] = (off * off).mul_add(y[lane], sums[lane]);
        }
    }
    for (lane, (x, y)) in a_rest.iter().zip(b_rest).enumerate() {
        let off = x - shift;
        sums[lane] = (off * off).mul_add(*y, sums[lane]);
    }
    reduce(sums)
}

/// The smallest and the largest value, and zero when all are finite (otherwise NaN); for use
/// inside [`dispatch`].
#[inline(always)]
pub(crate) fn extremes_body(a: &[f64]) -> (f64, f64, f64) {
    let (mut low, mut high, mut spoilt) = ([f64::INFINITY; 8], [f64::NEG_INFINITY; 8], [0.0; 8]);
    let (blocks, rest) = a.as_chunks::<8>();
    for x in blocks {
        for lane in 0..8 {
            low[lane] = if x[lane] < low[lane] {
                x[lane]
            } else {
                low[lane]
            };
            high[lane] = if x[lane] > high[lane] {
                x[lane]
            } else {
                high[lane]
            };
            // Zero for every finite value, NaN for every other.
            spoilt[lane] += x[lane] * 0.0;
        }
    }
    for x in rest {
        low[0] = low[0].min(*x);
        high[0] = high[0].max(*x);
        spoilt[0] += x * 0.0;
    }
    (
        low.into_iter().fold(f64::INFINITY, f64::min),
        high.into_iter().fold(f64::NEG_INFINITY, f64::max),
        spoilt.iter().sum(),
    )
}

/// b ← b + factor · a; for use inside [`dispatch`].
#[inline(always)]
pub(crate) fn add_scaled_body(factor: f64, a: &[f64], b: &mut [f64]) {
    for (x, y) in a.iter().zip(b) {
        *y = factor.mul_add(*x, *y);
    }
}

/// Σᵢ aᵢ bᵢ.
pub(crate) fn dot(a: &[f64], b: &[f64]) -> f64 {
    dispatch(
        #[inline(always)]
        || dot_body(a, b),
    )
}

/// √Σᵢ aᵢ², safe from overflow for lengths of any size.
pub(crate) fn norm(a: &[f64]) -> f64 {
    let top = a.iter().fold(0.0_f64, |top, x| top.max(x.abs()));
    if top == 0.0 || !top.is_finite() {
        return top;
    }
    if (1e-140..1e140).contains(&top) {
        return dot(a, a).sqrt();
    }
    let small: Vec<f64> = a.iter().map(|x| x / top).collect();
    top * dot(&small, &small).sqrt()
}

/// b ← b + factor · a.
pub(crate) fn add_scaled(factor: f64, a: &[f64], b: &mut [f64]) {
    dispatch(
        #[inline(always)]
        || add_scaled_body(factor, a, b),
    );
}

/// The products of chosen columns with a vector: `out[k]` = column `which[k]` · vector.
/// `columns` holds columns of the vector's length one after the other.
pub(crate) fn chosen_dots(columns: &[f64], which: &[usize], vector: &[f64], out: &mut Vec<f64>) {
    let n = vector.len();
    out.clear();
    dispatch(
        #[inline(always)]
        || {
            for &column in which {
                out.push(dot_body(&columns[column * n..(column + 1) * n], vector));
            }
        },
    );
}

/// vector ← vector − Σₖ factors[k] · column which[k].
pub(crate) fn subtract_columns(
    columns: &[f64],
    which: &[usize],
    factors: &[f64],
    vector: &mut [f64],
) {
    let n = vector.len();
    dispatch(
        #[inline(always)]
        || {
            for (&column, &factor) in which.iter().zip(factors) {
                add_scaled_body(-factor, &columns[column * n..(column + 1) * n], vector);
            }
        },
    );
}

#[cfg(test)]
mod tests {
    use super::*;

    fn plain(a: &[f64], b: &[f64]) -> f64 {
        a.iter().zip(b).map(|(x, y)| x * y).sum()
    }

    #[test]
    fn lengths_that_fill_no_block_are_summed_too() {
        for n in [0, 1, 15, 16, 17, 31, 100] {
            let a: Vec<f64> = (0..n).map(|i| f64::from(i) - 7.5).collect();
            let b: Vec<f64> = (0..n).map(|i| 0.5 * f64::from(i)).collect();
            assert_eq!(dot(&a, &b), plain(&a, &b), "these sums are exact in binary");
            let off: Vec<f64> = a.iter().map(|x| x - 2.0).collect();
            assert_eq!(dispatch(|| shifted_dot_body(&a, 2.0, &b)), plain(&off, &b));
        }
    }

    #[test]
    fn wide_instructions_and_plain_code_give_the_same_bits() {
        let a: Vec<f64> = (0..203).map(|i| (f64::from(i) * 0.7).sin()).collect();
        let b: Vec<f64> = (0..203).map(|i| (f64::from(i) * 1.3).cos() * 1e3).collect();
        assert_eq!(dot(&a, &b).to_bits(), dot_body(&a, &b).to_bits());
    }

    #[test]
    fn lengths_neither_overflow_nor_vanish() {
        assert!((norm(&[3e200, 4e200]) / 5e200 - 1.0).abs() < 1e-15);
        assert!((norm(&[3e-200, 4e-200]) / 5e-200 - 1.0).abs() < 1e-15);
    }
}
