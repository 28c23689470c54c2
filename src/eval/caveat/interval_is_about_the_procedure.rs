//! Note on what the nested estimate is about.

use crate::eval::caveat::{Caveat, Origin, Severity};

/// The note that goes with every nested estimate (Bates, Hastie & Tibshirani).
#[must_use]
pub fn always() -> Caveat {
    Caveat::new(
        "about-the-procedure",
        Severity::Note,
        "About the recipe",
        "The nested estimate describes this recipe on samples of this size, not the final fitted \
         model itself. Intervals from the parts of one data set tend to be too narrow.",
    )
    .origin(Origin::Published)
}
