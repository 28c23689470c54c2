//! Stop: better than can be.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};

/// From which R² on it is too good to be true; a convention.
const R2: f64 = 0.98;

/// The stop when predictions are better than the reference method allows (leakage by
/// illegitimate predictors: Kapoor & Narayanan 2023).
#[must_use]
pub fn check(r2: f64, rmse: f64, reference_error: Option<f64>, unit: &str) -> Option<Caveat> {
    let below = reference_error.filter(|error| rmse < *error);
    let is_high = r2 >= R2;
    if !is_high && below.is_none() {
        return None;
    }
    let against = below.map_or_else(String::new, |error| {
        format!(
            " The reference method's own error is {} {unit}.",
            number::text(error, Precision::Significant(3))
        )
    });
    let text = format!(
        "This is better than can be expected; look for the outcome in disguise among the \
         predictors, or for repeats of one unit on both sides.{against}"
    );
    Some(
        Caveat::new("too-good", Severity::Stop, "Too good to be true", text)
            .because("nested R²", r2, Precision::Decimals(3))
            .because("nested RMSE", rmse, Precision::Significant(3))
            .threshold("R² of 0.98 or more, or an error below that of the reference method")
            .origin(Origin::Convention),
    )
}
