//! Note on the one-standard-error choice.

use crate::eval::caveat::{Caveat, Origin, Severity};

/// A note when the rule is the one-standard-error choice (Chen & Yang 2021).
#[must_use]
pub fn always() -> Caveat {
    Caveat::new(
        "one-standard-error",
        Severity::Note,
        "A shorter list",
        "A stronger penalty than the best-scoring one was chosen to shorten the list; predictions \
         may be slightly worse.",
    )
    .origin(Origin::Published)
}
