//! Note that the training classes are perfectly separated.

use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::{Fitted, Sort};
use crate::numeric::measure::predicted_class;

/// The note when the final fit calls every one of its own samples right. With more predictors than
/// samples some direction always separates the classes (Cover 1965); without a penalty its
/// coefficients would grow without limit, with one they stay finite.
#[must_use]
pub fn check(fitted: &Fitted) -> Option<Caveat> {
    let scene = fitted.scene();
    let classes = scene.classes();
    let linear = &fitted.last.apparent.linear;
    let is_separated = match fitted.sort() {
        Sort::Measured | Sort::Count | Sort::Time => false,
        Sort::YesNo => {
            let eta = linear.as_slice();
            let of = |class: usize| {
                let own = classes.iter().zip(eta);
                own.filter(move |(of, _)| **of == class)
                    .map(|(_, eta)| *eta)
            };
            let highest = of(0).fold(f64::NEG_INFINITY, f64::max);
            let lowest = of(1).fold(f64::INFINITY, f64::min);
            highest < lowest
        }
        Sort::Classes => classes.iter().enumerate().all(|(place, class)| {
            let eta: Vec<f64> = linear.row(place).iter().copied().collect();
            predicted_class(&eta) == *class
        }),
    };
    let n_active = fitted.last.samples.active.iter().filter(|a| **a).count();
    let text = if n_active >= classes.len() {
        "On its own samples the model separates the classes perfectly. With more predictors than \
         samples that is to be expected and proves nothing."
    } else {
        "On its own samples the model separates the classes perfectly. That alone proves nothing; \
         what counts are samples that it has not seen."
    };
    is_separated.then(|| {
        Caveat::new("separation", Severity::Note, "Perfectly separated", text)
            .origin(Origin::Published)
    })
}
