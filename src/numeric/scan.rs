//! The certified scan: bounds on the correlation of every predictor with a few residuals, from
//! the 8-bit copy, in one reading of it.
//!
//! For a residual g over all n samples that sums to zero, with zeros on the samples left out,
//!
//! ```text
//! xⱼ'g = (xⱼ − middle)'g = stepⱼ · qⱼ'g + errorⱼ'g
//! g = unit · g₁₆ + δ          (g₁₆ whole numbers of 16 bits)
//! |xⱼ'g| ≤ stepⱼ · unit · |qⱼ'g₁₆|  +  ‖stepⱼ qⱼ‖ · ‖δ‖  +  ‖errorⱼ‖ · ‖g‖
//! ```
//!
//! by the triangle and Cauchy–Schwarz inequalities. The inner product of whole numbers is exact
//! in any order. A predictor whose bound lies below its threshold is *proved* to be inactive.

use crate::numeric::ground::Ground;
use crate::numeric::lanes;
use crate::numeric::panels::{PAIR, Panels, WIDTH};

/// How many residuals one reading takes in at most.
pub(crate) const BATCH: usize = 4;

/// Everything in single precision below is blown up by this much, which covers its roundings.
const INFLATE: f64 = 1.0 + 1e-5;

/// The bounds of one residual, and the largest of each panel, by which most panels are passed over.
#[derive(Clone, Debug, Default)]
pub(crate) struct Bounds {
    each: Vec<f32>,
    tops: Vec<f32>,
}

impl Bounds {
    fn resize(&mut self, n_panels: usize) {
        self.each.resize(n_panels * WIDTH, 0.0);
        self.tops.resize(n_panels, 0.0);
    }

    /// The bound of a predictor.
    pub(crate) fn of(&self, j: usize) -> f32 {
        self.each[j]
    }

    /// The bound of every predictor, and zeros that fill the last panel.
    pub(crate) fn each(&self) -> &[f32] {
        &self.each
    }

    /// The largest of all.
    pub(crate) fn largest(&self) -> f32 {
        self.tops.iter().fold(0.0, |top, &bound| top.max(bound))
    }

    /// Calls `see` with the predictors, rising, whose bound is above zero and not below `least`.
    pub(crate) fn not_below(&self, least: f32, mut see: impl FnMut(usize, f32)) {
        for (at, &top) in self.tops.iter().enumerate() {
            if top < least || top == 0.0 {
                continue;
            }
            let from = at * WIDTH;
            for (lane, &bound) in self.each[from..from + WIDTH].iter().enumerate() {
                if bound >= least && bound > 0.0 {
                    see(from + lane, bound);
                }
            }
        }
    }
}

/// What the bounds of one task need of every predictor.
pub(crate) struct Sieve {
    step: Vec<f32>,
    error: Vec<f32>,
    length: Vec<f32>,
    /// The row pairs with at least one training row.
    pairs: Vec<u32>,
}

/// A residual rounded to 16 bits.
struct Rounded {
    /// Two neighbouring samples each, for the listed row pairs.
    pairs: Vec<[i16; 2]>,
    /// `unit / ‖g‖`
    unit: f64,
    /// `‖δ‖ / ‖g‖`
    missed: f64,
}

impl Sieve {
    /// Prepares the bounds of a task: each predictor in the scale that its penalty sees, divided by
    /// its penalty weight. What cannot enter the fit gets zeros.
    pub(crate) fn new(ground: &Ground<'_>) -> Self {
        let panels = ground.predictors.panels();
        let p = ground.predictors.n_predictors();
        let scaled = |values: &[f64]| -> Vec<f32> {
            (0..panels.n_panels() * WIDTH)
                .map(|j| {
                    if j < p && ground.reach(j) > 0.0 {
                        (values[j] * ground.reach(j) * INFLATE) as f32
                    } else {
                        0.0
                    }
                })
                .collect()
        };
        let mut is_used = vec![false; panels.n_pairs()];
        for &row in &ground.rows {
            is_used[row / 2] = true;
        }
        Self {
            step: scaled(&panels.step),
            error: scaled(&panels.error),
            length: scaled(&panels.length),
            pairs: (0..panels.n_pairs())
                .filter(|&pair| is_used[pair])
                .map(|pair| pair as u32)
                .collect(),
        }
    }

    /// For each residual (n values that sum to zero): `out[k].of(j)` is at least
    /// `|zⱼ'gₖ| / (fⱼ ‖gₖ‖)`, with zⱼ the standardised predictor and fⱼ its penalty weight.
    pub(crate) fn bounds(&self, panels: &Panels, residuals: &[&[f64]], out: &mut [Bounds]) {
        for bounds in out.iter_mut() {
            bounds.resize(panels.n_panels());
        }
        let rounded: Vec<Rounded> = residuals.iter().map(|g| self.round(g)).collect();
        let mut rounded = rounded.as_slice();
        let mut out = out;
        while let Some((_, _)) = rounded.split_first() {
            let take = match rounded.len() {
                1 => 1,
                2 | 3 => 2,
                _ => BATCH,
            };
            let (now, later) = rounded.split_at(take);
            let (out_now, out_later) = out.split_at_mut(take);
            match take {
                1 => self.read::<1>(panels, now, out_now),
                2 => self.read::<2>(panels, now, out_now),
                _ => self.read::<BATCH>(panels, now, out_now),
            }
            rounded = later;
            out = out_later;
        }
    }

    /// Leaves a predictor out of all later bounds.
    pub(crate) fn forget(&mut self, j: usize) {
        self.step[j] = 0.0;
        self.error[j] = 0.0;
        self.length[j] = 0.0;
    }

    fn round(&self, residual: &[f64]) -> Rounded {
        let length = lanes::norm(residual);
        if length == 0.0 {
            return Rounded {
                pairs: vec![[0, 0]; self.pairs.len()],
                unit: 0.0,
                missed: 0.0,
            };
        }
        let (top, sum) = residual.iter().fold((0.0_f64, 0.0_f64), |(top, sum), g| {
            (top.max(g.abs()), sum + g.abs())
        });
        // 127 Σ|g₁₆| must stay below 2³¹; half a step of rounding for every sample is set aside.
        let room = f64::from(i32::MAX) / 127.0 - residual.len() as f64;
        let unit = (top / 32_767.0).max(sum / room.max(1.0));
        let mut missed = 0.0;
        let mut round = |at: usize| -> i16 {
            let g = residual.get(at).copied().unwrap_or(0.0) / unit;
            let whole = g.round_ties_even();
            missed += (g - whole) * (g - whole);
            whole as i16
        };
        let pairs = self
            .pairs
            .iter()
            .map(|&pair| [round(2 * pair as usize), round(2 * pair as usize + 1)])
            .collect();
        let unit = unit / length;
        Rounded {
            pairs,
            unit,
            missed: missed.sqrt() * unit * INFLATE,
        }
    }

    fn read<const B: usize>(&self, panels: &Panels, residuals: &[Rounded], out: &mut [Bounds]) {
        let g: [&[[i16; 2]]; B] = std::array::from_fn(|k| residuals[k].pairs.as_slice());
        let units = Units::<B> {
            unit: std::array::from_fn(|k| (residuals[k].unit * INFLATE) as f32),
            missed: std::array::from_fn(|k| (residuals[k].missed * INFLATE) as f32),
            length: std::array::from_fn(|k| f32::from(u8::from(residuals[k].unit > 0.0))),
        };
        #[cfg(target_arch = "x86_64")]
        if let Some(simd) = pulp::x86::V3::try_new() {
            simd.vectorize(
                #[inline(always)]
                || {
                    for at in 0..panels.n_panels() {
                        let sums = wide_sums::<B>(simd, panels.panel(at), &self.pairs, g);
                        self.finish(at, sums, &units, out);
                    }
                },
            );
            return;
        }
        for at in 0..panels.n_panels() {
            let sums = plain_sums::<B>(panels.panel(at), &self.pairs, g);
            self.finish(at, sums, &units, out);
        }
    }

    /// From the sums of one panel to its bounds.
    #[inline(always)]
    fn finish<const B: usize>(
        &self,
        at: usize,
        sums: [[i32; WIDTH]; B],
        units: &Units<B>,
        out: &mut [Bounds],
    ) {
        let range = at * WIDTH..(at + 1) * WIDTH;
        let [step, error, length] = [&self.step, &self.error, &self.length].map(|values| {
            let (lanes, _) = values[range.clone()].as_chunks::<WIDTH>();
            lanes[0]
        });
        for k in 0..B {
            let mut bounds = [0.0_f32; WIDTH];
            for lane in 0..WIDTH {
                bounds[lane] = (sums[k][lane] as f32).abs() * (step[lane] * units.unit[k])
                    + length[lane] * units.missed[k]
                    + error[lane] * units.length[k];
            }
            let mut top = bounds;
            for half in [8, 4, 2, 1] {
                for lane in 0..half {
                    top[lane] = if top[lane] < top[lane + half] {
                        top[lane + half]
                    } else {
                        top[lane]
                    };
                }
            }
            out[k].each[range.clone()].copy_from_slice(&bounds);
            out[k].tops[at] = top[0];
        }
    }
}

/// The sizes that belong to a few rounded residuals.
struct Units<const B: usize> {
    unit: [f32; B],
    missed: [f32; B],
    /// 1, or 0 for a residual of zeros.
    length: [f32; B],
}

/// The sums Σ q g₁₆ of one panel, in plain code.
#[inline(always)]
fn plain_sums<const B: usize>(
    panel: &[[i8; PAIR]],
    pairs: &[u32],
    g: [&[[i16; 2]]; B],
) -> [[i32; WIDTH]; B] {
    let mut sums = [[0_i32; WIDTH]; B];
    for (at, &pair) in pairs.iter().enumerate() {
        let bytes = &panel[pair as usize];
        for k in 0..B {
            let [first, second] = g[k][at];
            for lane in 0..WIDTH {
                sums[k][lane] += i32::from(bytes[2 * lane]) * i32::from(first)
                    + i32::from(bytes[2 * lane + 1]) * i32::from(second);
            }
        }
    }
    sums
}

/// The same sums with 256-bit multiply-add.
#[cfg(target_arch = "x86_64")]
#[inline(always)]
fn wide_sums<const B: usize>(
    simd: pulp::x86::V3,
    panel: &[[i8; PAIR]],
    pairs: &[u32],
    g: [&[[i16; 2]]; B],
) -> [[i32; WIDTH]; B] {
    use std::arch::x86_64::{__m128i, __m256i};
    let zero = simd.avx._mm256_setzero_si256();
    let mut sums: [[__m256i; 2]; B] = [[zero; 2]; B];
    for (at, &pair) in pairs.iter().enumerate() {
        let halves: [__m128i; 2] = pulp::cast(panel[pair as usize]);
        let low = simd.avx2._mm256_cvtepi8_epi16(halves[0]);
        let high = simd.avx2._mm256_cvtepi8_epi16(halves[1]);
        for k in 0..B {
            let both: i32 = pulp::cast(g[k][at]);
            let both = simd.avx._mm256_set1_epi32(both);
            let [first, second] = sums[k];
            sums[k] = [
                simd.avx2
                    ._mm256_add_epi32(first, simd.avx2._mm256_madd_epi16(low, both)),
                simd.avx2
                    ._mm256_add_epi32(second, simd.avx2._mm256_madd_epi16(high, both)),
            ];
        }
    }
    std::array::from_fn(|k| pulp::cast(sums[k]))
}

#[cfg(test)]
mod tests;
