//! Floor 1: mathematics on numbers only: no names, no text, no tables.

pub mod active_set;
pub mod basis;
pub mod certificate;
pub mod choose;
pub mod cox;
pub mod descent;
pub mod dual;
pub mod error;
pub mod factor;
pub mod features;
pub mod free_part;
pub mod freedom;
pub mod frontier;
pub mod gaussian;
pub mod glm;
pub mod ground;
pub mod grouped;
pub mod halves;
pub mod lanes;
pub mod loss;
pub mod matrix;
pub mod measure;
pub mod multinomial;
pub mod newton;
pub mod panels;
pub mod parts;
pub mod path;
pub mod penalty;
pub mod predictors;
pub mod procedure;
pub mod proof;
pub mod quadratic;
pub mod random;
pub mod range;
pub mod response;
pub mod ridge;
pub mod sample_space;
pub mod samples;
pub mod scan;
pub mod shortcut;
pub mod spectrum;
pub mod stability;
pub mod step;
pub mod task;
pub mod working;

#[cfg(test)]
pub(crate) mod designs;
#[cfg(test)]
mod laws;
