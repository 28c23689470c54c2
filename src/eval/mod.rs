//! Floor 2: from a study to its outcomes.

pub mod caveat;
pub mod fact;
pub mod kind;
pub mod outcome;
pub mod standing;
