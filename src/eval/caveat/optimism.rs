//! Remark that the model looks much better on its own samples.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};

/// From which difference of R² on it is said, or from which ratio of errors; conventions.
const DIFFERENCE: f64 = 0.20;
const RATIO: f64 = 1.5;

/// A remark on the gap between apparent and nested performance (Poldrack, Huckins & Varoquaux
/// 2020; Van Calster et al. 2019).
#[must_use]
pub fn check(
    apparent_r2: f64,
    nested_r2: f64,
    apparent_rmse: f64,
    nested_rmse: f64,
) -> Option<Caveat> {
    let wide = apparent_r2 - nested_r2 >= DIFFERENCE || nested_rmse >= RATIO * apparent_rmse;
    if !wide {
        return None;
    }
    let show = |value| number::text(value, Precision::Decimals(2));
    let text = format!(
        "On its own training samples the model looks much better (R² {}) than on samples it has \
         not seen (R² {}); use the second.",
        show(apparent_r2),
        show(nested_r2)
    );
    Some(
        Caveat::new(
            "optimism",
            Severity::Caution,
            "Better on its own samples",
            text,
        )
        .because("apparent R²", apparent_r2, Precision::Decimals(3))
        .because("nested R²", nested_r2, Precision::Decimals(3))
        .threshold("a difference of 0.20 or more, or an error 1.5 times the apparent one")
        .origin(Origin::Convention),
    )
}
