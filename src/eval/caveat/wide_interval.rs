//! Remark that the uncertainty is as large as the effect.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};

/// From which half-width of the interval of R² on it is said; a convention.
const HALF_WIDTH: f64 = 0.20;

/// A remark when the interval of the nested R² is wide (Bates, Hastie & Tibshirani; Varoquaux
/// 2018).
#[must_use]
pub fn check(low: f64, high: f64) -> Option<Caveat> {
    let half = (high - low) / 2.0;
    if half.is_nan() || half < HALF_WIDTH {
        return None;
    }
    Some(
        Caveat::new(
            "wide-interval",
            Severity::Caution,
            "Wide interval",
            "The uncertainty of the estimate is as large as the effect that one would want to claim.",
        )
        .because("half-width of the interval of R²", half, Precision::Decimals(2))
        .threshold("0.20 or more")
        .origin(Origin::Convention),
    )
}
