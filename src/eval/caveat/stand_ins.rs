//! Remark that other predictors carry nearly the same information.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};

/// Absolute correlation from which on a stand-in is a note, and a caution; conventions.
const NOTE: f64 = 0.8;
const CAUTION: f64 = 0.95;

/// A remark on chosen predictors that have stand-ins. `groups` holds for each the number of its
/// stand-ins and the largest absolute correlation. The lasso's pick among them is arbitrary
/// (Mandozzi & Bühlmann 2016).
#[must_use]
pub fn check(groups: &[(usize, f64)]) -> Option<Caveat> {
    let strongest = groups.iter().map(|(_, r)| *r).fold(0.0, f64::max);
    if strongest < NOTE {
        return None;
    }
    let with = groups.iter().filter(|(count, _)| *count > 0).count();
    let severity = if strongest >= CAUTION {
        Severity::Caution
    } else {
        Severity::Note
    };
    let text = format!(
        "{} of {} chosen predictors have others that carry nearly the same information; the pick \
         among them is partly luck.",
        number::text(with as f64, Precision::Whole),
        number::text(groups.len() as f64, Precision::Whole)
    );
    Some(
        Caveat::new("stand-ins", severity, "Others could stand in", text)
            .because("largest correlation", strongest, Precision::Decimals(3))
            .threshold("0.8; a caution from 0.95")
            .origin(Origin::Convention),
    )
}
