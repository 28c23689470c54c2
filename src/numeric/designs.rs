//! Made-up predictors and outcomes for the tests of this floor, the nasty ones included.

use crate::numeric::matrix::Matrix;

/// A small generator for tests (splitmix64), so that each test is the same every time.
pub(crate) struct Dice(u64);

impl Dice {
    pub(crate) fn new(seed: u64) -> Self {
        Self(seed)
    }

    pub(crate) fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// Between 0 and 1.
    pub(crate) fn uniform(&mut self) -> f64 {
        (self.next() >> 11) as f64 / (1_u64 << 53) as f64
    }

    pub(crate) fn below(&mut self, limit: usize) -> usize {
        (self.next() % limit as u64) as usize
    }

    /// Standard normal, by the polar angle.
    pub(crate) fn normal(&mut self) -> f64 {
        let radius = (-2.0 * (1.0 - self.uniform()).ln()).sqrt();
        radius * (std::f64::consts::TAU * self.uniform()).cos()
    }
}

/// The kinds of columns that a test matrix mixes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Design {
    /// Independent normal columns.
    Independent,
    /// Neighbours correlate at 0.95.
    Neighbours,
    /// Smooth bumps: nearly singular.
    Smooth,
    /// 0, 1 or 2.
    Markers,
    /// Normal columns with twins, opposite twins, constants, huge and tiny units, large offsets,
    /// heavy tails, and a column with a single value that differs.
    Nasty,
}

pub(crate) fn predictors(design: Design, n: usize, p: usize, dice: &mut Dice) -> Matrix {
    let mut x = Matrix::zeros(n, p);
    match design {
        Design::Independent => x.iter_mut().for_each(|value| *value = dice.normal()),
        Design::Neighbours => {
            for i in 0..n {
                let mut last = dice.normal();
                for j in 0..p {
                    x[(i, j)] = last;
                    last = 0.95 * last + (1.0 - 0.95_f64 * 0.95).sqrt() * dice.normal();
                }
            }
        }
        Design::Smooth => {
            for i in 0..n {
                for _ in 0..12 {
                    let (at, width) = (dice.uniform(), 0.05 + 0.2 * dice.uniform());
                    let height = dice.normal();
                    for j in 0..p {
                        let off = (j as f64 / p as f64 - at) / width;
                        x[(i, j)] += height * (-0.5 * off * off).exp();
                    }
                }
            }
        }
        Design::Markers => {
            for j in 0..p {
                let share = 0.1 + 0.4 * dice.uniform();
                for i in 0..n {
                    let two = [dice.uniform(), dice.uniform()];
                    x[(i, j)] = two.iter().filter(|u| **u < share).count() as f64;
                }
            }
        }
        Design::Nasty => nasty(&mut x, dice),
    }
    x
}

fn nasty(x: &mut Matrix, dice: &mut Dice) {
    let (n, p) = x.shape();
    for j in 0..p {
        for i in 0..n {
            x[(i, j)] = dice.normal();
        }
        let before = j.saturating_sub(1 + dice.below(3));
        match dice.below(10) {
            0 => x.set_column(j, &x.column(before).into_owned()),
            1 => x.set_column(j, &(-2.0 * x.column(before))),
            2 => x.column_mut(j).fill(3.7),
            3 => x.column_mut(j).apply(|value| *value *= 1e12),
            4 => x.column_mut(j).apply(|value| *value *= 1e-12),
            5 => x.column_mut(j).apply(|value| *value += 1e6),
            6 => x.column_mut(j).apply(|value| *value = value.powi(5)),
            7 => {
                x.column_mut(j).fill(0.0);
                x[(dice.below(n), j)] = 1.0;
            }
            _ => {}
        }
    }
}

/// An outcome with a few true effects on standardised columns, and noise.
pub(crate) fn outcome(x: &Matrix, effects: usize, noise: f64, dice: &mut Dice) -> Vec<f64> {
    let (n, p) = x.shape();
    let mut y: Vec<f64> = (0..n).map(|_| noise * dice.normal()).collect();
    for _ in 0..effects {
        let column = x.column(dice.below(p));
        let mean = column.mean();
        let sd = (column.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / n as f64).sqrt();
        let effect = 1.0 + dice.uniform();
        if sd > 1e-13 * column.amax() {
            for i in 0..n {
                y[i] += effect * (column[i] - mean) / sd;
            }
        }
    }
    y
}
