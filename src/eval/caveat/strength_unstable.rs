//! Remark that repeating the split changes the penalty a lot.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::fit::Fitted;
use crate::numeric::measure::quantile;

/// The interquartile range of log10 strength from which on it is said, and the ratio of the
/// largest to the smallest number of chosen predictors; conventions.
const RANGE: f64 = 0.5;
const RATIO: f64 = 3.0;

/// A remark when outer training parts choose very different strengths or numbers of predictors
/// (Riley et al. 2021; Martin et al. 2021).
#[must_use]
pub fn check(fitted: &Fitted) -> Option<Caveat> {
    let fits = &fitted.judged.as_ref()?.held_out.fits;
    let strengths: Vec<f64> = fits.iter().map(|fit| fit.strength.log10()).collect();
    let range = quantile(&strengths, 0.75) - quantile(&strengths, 0.25);
    let least = fits.iter().map(|fit| fit.n_chosen).min()?;
    let most = fits.iter().map(|fit| fit.n_chosen).max()?;
    let ratio = most as f64 / least.max(1) as f64;
    let lists_vary = fitted.last.share > 0.0 && ratio >= RATIO;
    if range < RANGE && !lists_vary {
        return None;
    }
    Some(
        Caveat::new(
            "strength-unstable",
            Severity::Caution,
            "Another split, another penalty",
            "Repeating the split changes the penalty and the list a lot; treat one run as one draw.",
        )
        .because("interquartile range of log10 strength", range, Precision::Decimals(2))
        .because("fewest chosen predictors", least as f64, Precision::Whole)
        .because("most chosen predictors", most as f64, Precision::Whole)
        .threshold("0.5 powers of ten, or three times as many predictors")
        .origin(Origin::Convention),
    )
}
