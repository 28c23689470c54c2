//! Remark that the model looks much better on its own samples.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::Measure;

/// From which difference on it is said: of measures from one half to one, and of others; or from
/// which ratio of errors; conventions.
const DIFFERENCES: (f64, f64) = (0.10, 0.20);
const RATIO: f64 = 1.5;

/// A remark on the gap between apparent and nested performance (Poldrack, Huckins & Varoquaux
/// 2020; Van Calster et al. 2019).
#[must_use]
pub fn check(measure: Measure, apparent: f64, nested: f64, error_ratio: f64) -> Option<Caveat> {
    let ranks = [Measure::Area, Measure::Concordance, Measure::Accuracy].contains(&measure);
    let least = if ranks { DIFFERENCES.0 } else { DIFFERENCES.1 };
    let wide = apparent - nested >= least || error_ratio >= RATIO;
    if !wide {
        return None;
    }
    let show = |value| number::text(value, Precision::Decimals(2));
    let text = format!(
        "On its own training samples the model looks much better ({0} {1}) than on samples it has \
         not seen ({0} {2}); use the second.",
        measure.title(),
        show(apparent),
        show(nested)
    );
    Some(
        Caveat::new(
            "optimism",
            Severity::Caution,
            "Better on its own samples",
            text,
        )
        .because(
            &format!("apparent {}", measure.title()),
            apparent,
            Precision::Decimals(3),
        )
        .because(
            &format!("nested {}", measure.title()),
            nested,
            Precision::Decimals(3),
        )
        .threshold(if ranks {
            "a difference of 0.10 or more"
        } else {
            "a difference of 0.20 or more, or an error 1.5 times the apparent one"
        })
        .origin(Origin::Convention),
    )
}
