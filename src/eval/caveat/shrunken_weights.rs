//! Note on what coefficients are.

use crate::eval::caveat::{Caveat, Origin, Severity};

/// The note that goes with every table or figure of coefficients (Haufe et al. 2014).
#[must_use]
pub fn always() -> Caveat {
    Caveat::new(
        "shrunken-weights",
        Severity::Note,
        "Weights, not effects",
        "Coefficients are pulled towards zero on purpose and depend on what else is in the model; \
         they are recipe weights, not effect sizes. A large weight can sit on a predictor that \
         only cancels noise. Tests of chosen predictors on the same samples are not valid.",
    )
    .origin(Origin::Published)
}
