//! The penalty: its value, its slope at zero, and the signs it may be told to keep.

/// The signs a coefficient may have.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Sign {
    /// Either.
    #[default]
    Any,
    /// Zero or above.
    NotNegative,
    /// Zero or below.
    NotPositive,
}

impl Sign {
    /// Whether a coefficient may move from zero in the direction of `direction`.
    #[must_use]
    pub fn allows(self, direction: f64) -> bool {
        match self {
            Self::Any => true,
            Self::NotNegative => direction > 0.0,
            Self::NotPositive => direction < 0.0,
        }
    }
}

/// λ · f · ( share·|b| + (1 − share)/2 · b² ), the penalty of one coefficient with weight f.
#[must_use]
pub fn value(strength: f64, share: f64, factor: f64, b: f64) -> f64 {
    strength * factor * (share * b.abs() + 0.5 * (1.0 - share) * b * b)
}
