//! Remark on the order of preparation steps.
//!
//! Order rules of spectral and general preparation (Rinnan, van den Berg & Engelsen 2009 for
//! spectra; a convention of this program elsewhere): physics of the sample first, learned
//! references next, imputation before scaling, centring and scaling last.

use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::step::step_name;
use crate::study::settings::prepare::Step;

/// The remarks on these steps.
#[must_use]
pub fn caveats(steps: &[Step]) -> Vec<Caveat> {
    let mut found = Vec::new();
    for (at, step) in steps.iter().enumerate() {
        for later in &steps[at + 1..] {
            if let Some(reason) = out_of_order(step, later) {
                found.push(format!(
                    "“{}” comes after “{}”: {reason}",
                    step_name(later),
                    step_name(step)
                ));
            }
        }
    }
    found.dedup();
    if found.is_empty() {
        return Vec::new();
    }
    vec![Caveat {
        id: "step-order".to_owned(),
        severity: Severity::Caution,
        heading: "Unusual order of steps".to_owned(),
        text: format!("{}.", found.join("; ")),
        trigger: vec![(
            "pairs of steps out of order".to_owned(),
            found.len().to_string(),
        )],
        threshold: String::new(),
        origin: Origin::Convention,
    }]
}

/// Why `later` should not come after `earlier`, if so.
fn out_of_order(earlier: &Step, later: &Step) -> Option<&'static str> {
    let scales = |step: &Step| matches!(step, Step::Center | Step::UnitVariance);
    match later {
        Step::Log { .. } if scales(earlier) => Some("centred values have no logarithm below zero"),
        Step::SavitzkyGolay { .. } | Step::Detrend { .. } if scales(earlier) => {
            Some("neighbouring predictors are no longer on one scale")
        }
        Step::ScatterCorrection | Step::StandardNormalVariate if scales(earlier) => {
            Some("the sample's own shape is gone once predictors are scaled one by one")
        }
        Step::StandardNormalVariate if matches!(earlier, Step::ScatterCorrection) => {
            Some("both remove the same scatter")
        }
        Step::ScatterCorrection if matches!(earlier, Step::StandardNormalVariate) => {
            Some("both remove the same scatter")
        }
        Step::MedianImputation if scales(earlier) => {
            Some("means and standard deviations were taken before the gaps were filled")
        }
        Step::BelowLimit { .. } if matches!(earlier, Step::Log { .. }) => {
            Some("a limit belongs to the measured scale, not to its logarithm")
        }
        Step::BelowLimit { .. } if matches!(earlier, Step::MedianImputation) => {
            Some("values below a limit would already have been filled as if they were missing")
        }
        Step::Log { .. }
        | Step::SavitzkyGolay { .. }
        | Step::Detrend { .. }
        | Step::ScatterCorrection
        | Step::StandardNormalVariate
        | Step::MedianImputation
        | Step::BelowLimit { .. }
        | Step::MissingShareFilter { .. }
        | Step::NearConstantFilter { .. }
        | Step::Center
        | Step::UnitVariance => None,
    }
}
