//! Chance for the demo data: one seeded generator and the few draws that the settings need.
//!
//! Only addition, multiplication, division and square roots are used, because these give the same
//! bits on every machine; the logarithm and the exponential of the platform need not.

use rand_chacha::ChaCha8Rng;
use rand_core::{Rng, SeedableRng};

/// A stream of random numbers that depends on its seed and on nothing else.
pub struct Chance(ChaCha8Rng);

impl Chance {
    /// Starts a stream.
    pub fn new(seed: u64) -> Self {
        Self(ChaCha8Rng::seed_from_u64(seed))
    }

    /// A number at or above 0 and below 1.
    pub fn uniform(&mut self) -> f64 {
        f64::from(self.0.next_u32()) / 4_294_967_296.0
    }

    /// A number at or above `low` and below `high`.
    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.uniform()
    }

    /// A whole number below `n`.
    pub fn below(&mut self, n: usize) -> usize {
        (self.uniform() * n as f64) as usize
    }

    /// A number from the standard normal law, to the accuracy that invented data ask for: the sum
    /// of twelve uniform numbers less six has mean 0, variance 1 and no tail beyond six.
    pub fn normal(&mut self) -> f64 {
        (0..12).map(|_| self.uniform()).sum::<f64>() - 6.0
    }

    /// `n` numbers from the standard normal law.
    pub fn normals(&mut self, n: usize) -> Vec<f64> {
        (0..n).map(|_| self.normal()).collect()
    }

    /// Yes with probability `share`.
    pub fn happens(&mut self, share: f64) -> bool {
        self.uniform() < share
    }

    /// Puts `items` into a random order.
    pub fn shuffle<T>(&mut self, items: &mut [T]) {
        for at in (1..items.len()).rev() {
            items.swap(at, self.below(at + 1));
        }
    }
}

/// e to the power `x`, for `x` up to 700: the series on a small argument, squared back up.
pub fn exp(x: f64) -> f64 {
    if x < -700.0 {
        return 0.0;
    }
    let small = x / 1024.0;
    let mut term = 1.0;
    let mut sum = 1.0;
    for order in 1..20 {
        term *= small / f64::from(order);
        sum += term;
    }
    for _ in 0..10 {
        sum *= sum;
    }
    sum
}

/// A smooth band: 1 at its center, falling off as the normal curve of standard deviation `width`.
pub fn band(at: f64, center: f64, width: f64) -> f64 {
    let distance = (at - center) / width;
    exp(-0.5 * distance * distance)
}
