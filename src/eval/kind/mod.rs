//! One pure function per kind of cell.

pub mod data;
pub mod fit;
pub mod prepare;
