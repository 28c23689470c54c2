//! Stop: better than can be.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::Measure;

/// From which value of the main measure on it is too good to be true; a convention.
const LIMIT: f64 = 0.98;

/// The stop when predictions are better than the reference method allows (leakage by
/// illegitimate predictors: Kapoor & Narayanan 2023).
#[must_use]
pub fn check(
    measure: Measure,
    nested: f64,
    rmse: f64,
    reference_error: Option<f64>,
    unit: &str,
) -> Option<Caveat> {
    let below = reference_error.filter(|error| rmse < *error);
    let is_high = nested >= LIMIT;
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
    let caveat = Caveat::new("too-good", Severity::Stop, "Too good to be true", text)
        .because(
            &format!("nested {}", measure.title()),
            nested,
            Precision::Decimals(3),
        )
        .origin(Origin::Convention);
    if measure == Measure::R2 {
        return Some(
            caveat
                .because("nested RMSE", rmse, Precision::Significant(3))
                .threshold("R² of 0.98 or more, or an error below that of the reference method"),
        );
    }
    Some(caveat.threshold("0.98 or more"))
}
