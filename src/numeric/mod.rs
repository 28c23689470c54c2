//! Floor 1: mathematics on numbers only: no names, no text, no tables.

pub mod matrix;
pub mod measure;
pub mod parts;
pub mod proof;
pub mod random;
pub mod samples;
pub mod stability;
pub mod step;
