//! Remark that almost any penalty does equally well.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::Fitted;
use crate::numeric::choose;

/// An improvement over the strongest penalty below this share is none; a convention.
const IMPROVEMENT: f64 = 0.02;

/// A remark when the curve of errors is flat (Chen & Yang 2021; Riley et al. 2021).
#[must_use]
pub fn check(fitted: &Fitted) -> Option<Caveat> {
    let curve = fitted.last.curves.get(fitted.last.share_at)?;
    if curve.standard_errors.is_empty() {
        return None;
    }
    let lowest = choose::lowest(&curve.errors)?;
    let gain = curve.errors[0] - curve.errors[lowest];
    let within = gain < curve.standard_errors[lowest];
    let share = gain / curve.errors[0];
    if !within && share >= IMPROVEMENT {
        return None;
    }
    Some(
        Caveat::new(
            "flat-curve",
            Severity::Caution,
            "Any penalty does",
            "Almost any penalty does equally well, so the chosen one is close to arbitrary.",
        )
        .because(
            "improvement over the strongest",
            share,
            Precision::Percent(1),
        )
        .threshold("less than one standard error, or less than 2 %")
        .origin(Origin::Convention),
    )
}
