//! Floor 1: mathematics on numbers only: no names, no text, no tables.

pub mod active_set;
pub mod basis;
pub mod certificate;
pub mod cox;
pub mod descent;
pub mod dual;
pub mod error;
pub mod factor;
pub mod features;
pub mod freedom;
pub mod frontier;
pub mod gaussian;
pub mod glm;
pub mod ground;
pub mod grouped;
pub mod lanes;
pub mod loss;
pub mod matrix;
pub mod multinomial;
pub mod newton;
pub mod panels;
pub mod path;
pub mod penalty;
pub mod predictors;
pub mod quadratic;
pub mod range;
pub mod response;
pub mod ridge;
pub mod sample_space;
pub mod scan;
pub mod shortcut;
pub mod task;
pub mod working;

#[cfg(test)]
pub(crate) mod designs;
