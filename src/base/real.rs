//! A finite number with lawful equality and hash, for settings.

use std::hash::{Hash, Hasher};

/// A finite `f64`. Minus zero is stored as zero, so that equal numbers have equal hashes.
#[derive(Clone, Copy, PartialEq, Default)]
pub struct Real(f64);

impl Real {
    /// Takes a finite number; `None` for NaN and the infinities.
    #[must_use]
    pub fn new(value: f64) -> Option<Self> {
        value.is_finite().then_some(Self(value + 0.0))
    }

    /// A constant that is known to be finite.
    ///
    /// # Panics
    /// When the constant is not finite; use [`Real::new`] for anything that was computed or typed.
    #[must_use]
    pub const fn constant(value: f64) -> Self {
        assert!(value.is_finite(), "a constant setting is finite");
        Self(value + 0.0)
    }

    /// The number itself.
    #[must_use]
    pub const fn get(self) -> f64 {
        self.0
    }
}

impl Eq for Real {}

impl PartialOrd for Real {
    fn partial_cmp(&self, other: &Self) -> Option<std::cmp::Ordering> {
        Some(self.cmp(other))
    }
}

impl Ord for Real {
    fn cmp(&self, other: &Self) -> std::cmp::Ordering {
        self.0.total_cmp(&other.0)
    }
}

impl Hash for Real {
    fn hash<H: Hasher>(&self, state: &mut H) {
        self.0.to_bits().hash(state);
    }
}

impl std::fmt::Debug for Real {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{:?}", self.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::base::hash::ContentHash;

    #[test]
    fn only_finite_numbers_are_taken() {
        assert!(Real::new(f64::NAN).is_none());
        assert!(Real::new(f64::INFINITY).is_none());
        assert_eq!(Real::new(1.5).map(Real::get), Some(1.5));
    }

    #[test]
    fn minus_zero_and_zero_are_one_number() {
        let (minus, plus) = (Real::new(-0.0), Real::new(0.0));
        assert_eq!(minus, plus);
        assert_eq!(ContentHash::of(&minus), ContentHash::of(&plus));
    }
}
