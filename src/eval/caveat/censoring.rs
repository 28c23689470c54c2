//! Remark that most observations ended without the event.

use crate::base::number::{self, Precision};
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::{Fitted, Sort};

/// From which share of censored samples on it is said; a convention.
const SHARE: f64 = 0.8;

/// A remark on times of which few are known.
#[must_use]
pub fn check(fitted: &Fitted) -> Option<Caveat> {
    if fitted.sort() != Sort::Time {
        return None;
    }
    let events = fitted.scene().events();
    let censored = events.iter().filter(|event| !**event).count() as f64;
    let share = censored / events.len() as f64;
    if share < SHARE {
        return None;
    }
    let text = format!(
        "In {} of the samples observation ended before the event. What is known is known from the \
         few events; measures at late times lean on a handful of samples.",
        number::text(share, Precision::Percent(0))
    );
    Some(
        Caveat::new("censoring", Severity::Note, "Mostly censored", text)
            .because("share censored", share, Precision::Percent(0))
            .threshold("80 % or more")
            .origin(Origin::Convention),
    )
}
