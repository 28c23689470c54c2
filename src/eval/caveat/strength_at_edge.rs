//! Remark that the chosen strength lies at an end of the range.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::Fitted;

/// The share of outer training parts from which on it is said although the final fit is inside.
const SHARE: f64 = 0.2;

/// A remark when the best strength lies at an end of the range, after the range was made longer
/// once. Common practice, from memory.
#[must_use]
pub fn check(fitted: &Fitted) -> Option<Caveat> {
    if fitted.settings.strength.is_by_hand() {
        return None;
    }
    let last = &fitted.last;
    let _ = last.curves.get(last.share_at)?;
    let at_edge = last.is_at_edge();
    let fits = fitted
        .judged
        .as_ref()
        .map_or(&[][..], |judged| &judged.held_out.fits[..]);
    let share = if fits.is_empty() {
        0.0
    } else {
        fits.iter().filter(|fit| fit.at_edge).count() as f64 / fits.len() as f64
    };
    if !at_edge && share <= SHARE {
        return None;
    }
    Some(
        Caveat::new(
            "strength-at-edge",
            Severity::Caution,
            "Strength at the end of the range",
            "The best penalty strength lies at the end of the range tried; the true best may be \
             outside.",
        )
        .because(
            "share of outer parts at the end",
            share,
            Precision::Percent(0),
        )
        .threshold("the final fit at an end, or more than 20 % of outer parts")
        .origin(Origin::Convention),
    )
}
