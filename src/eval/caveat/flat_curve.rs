//! Remark that almost any penalty does equally well.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::{Fitted, numeric_measure};
use crate::numeric::choose::{self, Curve};
use crate::numeric::procedure::ErrorMeasure;

/// An improvement over the strongest penalty below this share is none; a convention.
const IMPROVEMENT: f64 = 0.02;

/// A gain in the deviance of the partial likelihood below this is none: what a parameter that is of
/// no use costs on average (Akaike 1974). Its standard error over parts says little, because the
/// parts differ in how many are at risk.
const DEVIANCE: f64 = 2.0;

/// For times chosen by their partial likelihood: how much smaller the deviance of the lowest error
/// is than that of the strongest penalty, over all events of the analysed samples.
#[must_use]
pub fn deviance_gained(fitted: &Fitted, curve: &Curve) -> Option<f64> {
    let by = numeric_measure(fitted.settings.measure, &fitted.response);
    if by != ErrorMeasure::PartialLikelihood || curve.standard_errors.is_empty() {
        return None;
    }
    let lowest = choose::lowest(&curve.errors)?;
    let events = fitted.scene().events();
    let n_events = events.iter().filter(|event| **event).count() as f64;
    Some((curve.errors[0] - curve.errors[lowest]) * n_events)
}

/// Whether hardly any strength does better than the strongest.
#[must_use]
pub fn is_flat(fitted: &Fitted, curve: &Curve) -> bool {
    if let Some(gain) = deviance_gained(fitted, curve) {
        return gain < DEVIANCE;
    }
    let Some(lowest) = choose::lowest(&curve.errors) else {
        return false;
    };
    let gain = curve.errors[0] - curve.errors[lowest];
    gain < curve.standard_errors[lowest] || gain < IMPROVEMENT * curve.errors[0]
}

/// A remark when the curve of errors is flat (Chen & Yang 2021; Riley et al. 2021).
#[must_use]
pub fn check(fitted: &Fitted) -> Option<Caveat> {
    let curve = fitted.last.curves.get(fitted.last.share_at)?;
    if curve.standard_errors.is_empty() || !is_flat(fitted, curve) {
        return None;
    }
    let caveat = Caveat::new(
        "flat-curve",
        Severity::Caution,
        "Any penalty does",
        "Almost any penalty does equally well, so the chosen one is close to arbitrary.",
    )
    .origin(Origin::Convention);
    if let Some(gain) = deviance_gained(fitted, curve) {
        return Some(
            caveat
                .because(
                    "deviance gained over the strongest",
                    gain,
                    Precision::Decimals(1),
                )
                .threshold("a gain below 2"),
        );
    }
    let lowest = choose::lowest(&curve.errors)?;
    let share = (curve.errors[0] - curve.errors[lowest]) / curve.errors[0];
    Some(
        caveat
            .because(
                "improvement over the strongest",
                share,
                Precision::Percent(1),
            )
            .threshold("less than one standard error, or less than 2 %"),
    )
}
