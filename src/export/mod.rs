//! Floor 4. Blocks into files.

pub mod picture;
