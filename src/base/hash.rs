//! The hash of a value's content, for this process only.

use std::hash::{DefaultHasher, Hash, Hasher};

/// The 128-bit hash of a value's content.
///
/// `derive(Hash)` promises nothing between compilers or after a variant is added, so a
/// `ContentHash` is never written to disk.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct ContentHash(u128);

impl ContentHash {
    /// Hashes a value by its content.
    #[must_use]
    pub fn of<T: Hash + ?Sized>(value: &T) -> Self {
        // Two independent 64-bit hashes: a collision of a single one would show the wrong result
        // about once in 2^32 recipes, and nobody would ever find out why.
        let half = |salt: u64| {
            let mut hasher = DefaultHasher::new();
            salt.hash(&mut hasher);
            value.hash(&mut hasher);
            hasher.finish()
        };
        Self((u128::from(half(0x5749_4445)) << 64) | u128::from(half(0x464f_4c44)))
    }
}

impl std::fmt::Debug for ContentHash {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{:032x}", self.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn equal_content_has_an_equal_hash_and_other_content_another() {
        assert_eq!(
            ContentHash::of("wheel"),
            ContentHash::of(&String::from("wheel"))
        );
        assert_ne!(ContentHash::of("wheel"), ContentHash::of("wheels"));
    }
}
