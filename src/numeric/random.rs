//! The one generator of random numbers, always with a seed.
//!
//! The stream is fixed for ever by published algorithms, not by the version of a library:
//!
//! * words: ChaCha with 8 rounds (Bernstein 2008), read as little-endian 64-bit words;
//! * the key: the seed (8 bytes, little-endian), the index (8 bytes, little-endian) and the
//!   128-bit FNV-1a hash of the purpose's UTF-8 bytes (16 bytes, little-endian);
//! * integers below a bound: Lemire (2019), multiplication with rejection;
//! * shuffles: Fisher and Yates as given by Durstenfeld (1964), from the last place down;
//! * uniform numbers: the upper 53 bits of a word over 2⁵³;
//! * normal numbers: the polar method of Marsaglia and Bray (1964), the second of each pair kept.
//!
//! A test pins the first values against an independent computation.

use rand_chacha::ChaCha8Rng;
use rand_core::{Rng, SeedableRng};

/// A stream of random numbers that depends on a seed, a purpose and an index, and on nothing
/// else: not on what was drawn before for another purpose, nor on the thread.
#[derive(Clone, Debug)]
pub struct Random {
    words: ChaCha8Rng,
    spare_normal: Option<f64>,
}

impl Random {
    /// The stream for `seed`, `purpose` (such as “outer parts”) and `index` (such as the number
    /// of the repeat).
    #[must_use]
    pub fn new(seed: u64, purpose: &str, index: u64) -> Self {
        let mut key = [0; 32];
        key[..8].copy_from_slice(&seed.to_le_bytes());
        key[8..16].copy_from_slice(&index.to_le_bytes());
        key[16..].copy_from_slice(&fnv1a(purpose.as_bytes()).to_le_bytes());
        Self {
            words: ChaCha8Rng::from_seed(key),
            spare_normal: None,
        }
    }

    /// The next 64 random bits.
    pub fn word(&mut self) -> u64 {
        self.words.next_u64()
    }

    /// A whole number from 0 to `bound` − 1, each equally likely. 0 when `bound` is 0.
    pub fn below(&mut self, bound: usize) -> usize {
        let bound = bound as u64;
        if bound == 0 {
            return 0;
        }
        let mut product = u128::from(self.word()) * u128::from(bound);
        if (product as u64) < bound {
            let rejected = bound.wrapping_neg() % bound;
            while (product as u64) < rejected {
                product = u128::from(self.word()) * u128::from(bound);
            }
        }
        (product >> 64) as usize
    }

    /// Puts `items` into a random order, each order equally likely.
    pub fn shuffle<T>(&mut self, items: &mut [T]) {
        for last in (1..items.len()).rev() {
            let other = self.below(last + 1);
            items.swap(last, other);
        }
    }

    /// A number from 0 (included) to 1 (not included).
    pub fn uniform(&mut self) -> f64 {
        const STEP: f64 = 1.0 / (1_u64 << 53) as f64;
        (self.word() >> 11) as f64 * STEP
    }

    /// A number from the normal distribution with mean 0 and standard deviation 1.
    pub fn normal(&mut self) -> f64 {
        if let Some(spare) = self.spare_normal.take() {
            return spare;
        }
        loop {
            let u = 2.0 * self.uniform() - 1.0;
            let v = 2.0 * self.uniform() - 1.0;
            let s = u * u + v * v;
            if s > 0.0 && s < 1.0 {
                let factor = (-2.0 * s.ln() / s).sqrt();
                self.spare_normal = Some(v * factor);
                return u * factor;
            }
        }
    }
}

/// The 128-bit FNV-1a hash (Fowler, Noll and Vo; RFC 9923).
fn fnv1a(bytes: &[u8]) -> u128 {
    const OFFSET: u128 = 0x6c62_272e_07bb_0142_62b8_2175_6295_c58d;
    const PRIME: u128 = 0x0000_0000_0100_0000_0000_0000_0000_013b;
    bytes.iter().fold(OFFSET, |hash, &byte| {
        (hash ^ u128::from(byte)).wrapping_mul(PRIME)
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    // The expected values come from an implementation of the same published algorithms written
    // independently in another language; the FNV-1a value of “foobar” is the published vector.

    fn stream() -> Random {
        Random::new(20_260_301, "outer parts", 3)
    }

    #[test]
    fn the_stream_is_the_published_one() {
        assert_eq!(fnv1a(b"foobar"), 0x343e_1662_793c_64bf_6f0d_3597_ba44_6f18);
        let mut random = stream();
        let words = [random.word(), random.word(), random.word()];
        assert_eq!(
            words,
            [
                0xac18_851c_5416_d354,
                0xe0da_c7fe_9564_abc5,
                0x7d0b_85e3_f087_c02c
            ]
        );
    }

    #[test]
    fn whole_numbers_shuffles_and_normal_numbers_never_change() {
        let mut random = stream();
        let digits: Vec<_> = (0..12).map(|_| random.below(10)).collect();
        assert_eq!(digits, [6, 8, 4, 4, 2, 9, 7, 5, 4, 4, 6, 3]);
        let mut order: Vec<_> = (0..10).collect();
        stream().shuffle(&mut order);
        assert_eq!(order, [8, 0, 5, 9, 4, 1, 2, 3, 7, 6]);
        let mut random = stream();
        assert_eq!(random.uniform(), 0.672_249_144_950_991_8);
        let mut random = stream();
        assert!((random.normal() - 0.356_090_304_792_596_46).abs() < 1e-15);
        assert!((random.normal() - 0.782_138_068_889_782_4).abs() < 1e-15);
    }

    #[test]
    fn streams_for_other_purposes_and_indices_differ() {
        let first = |mut random: Random| random.word();
        let word = first(stream());
        assert_ne!(word, first(Random::new(20_260_301, "outer parts", 4)));
        assert_ne!(word, first(Random::new(20_260_301, "inner parts", 3)));
        assert_ne!(word, first(Random::new(20_260_302, "outer parts", 3)));
    }

    #[test]
    fn whole_numbers_are_equally_likely_and_normal_numbers_have_their_moments() {
        let mut random = stream();
        let mut counts = [0_usize; 7];
        for _ in 0..70_000 {
            counts[random.below(7)] += 1;
        }
        // Five standard deviations of a binomial count around 10,000.
        assert!(counts.iter().all(|&count| count.abs_diff(10_000) < 463));
        let draws: Vec<f64> = (0..40_000).map(|_| random.normal()).collect();
        let moment = |power: i32| draws.iter().map(|x| x.powi(power)).sum::<f64>() / 40_000.0;
        assert!(moment(1).abs() < 0.025 && (moment(2) - 1.0).abs() < 0.036);
        assert!((moment(4) - 3.0).abs() < 0.25);
    }

    #[test]
    fn a_bound_of_none_or_one_gives_nought() {
        let mut random = stream();
        assert_eq!((random.below(0), random.below(1)), (0, 0));
    }
}
