//! Floor 1.
