//! Floor 2: from a study to its outcomes.

pub mod caveat;
pub mod desk;
pub mod fact;
pub mod finding;
pub mod kind;
pub mod memo;
pub mod outcome;
pub mod plan;
pub mod question;
pub mod reread;
pub mod standing;
pub mod start;
