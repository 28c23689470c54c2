//! Prediction intervals without a distribution: jackknife+ and CV+.

/// What the fit that had not seen a sample says of it, and of the new one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PartPrediction {
    /// |observed − predicted| of a sample (or unit) by the fit of the parts without it.
    pub residual: f64,
    /// The prediction of the new sample by that same fit.
    pub of_new: f64,
}

/// The jackknife+ interval (with every sample its own part) or CV+ interval of Barber, Candès,
/// Ramdas and Tibshirani (2021): from the ⌊α(n+1)⌋-th smallest of `of_new − residual` to the
/// ⌈(1−α)(n+1)⌉-th smallest of `of_new + residual`.
///
/// `miss` is α. One entry for each exchangeable thing: where samples come in units, one entry
/// per unit, and the interval is for a sample of a new unit. [`prediction_interval_guarantee`]
/// says what is guaranteed. An end is infinite where n is too small for α.
#[must_use]
pub fn prediction_interval(parts: &[PartPrediction], miss: f64) -> (f64, f64) {
    let n = parts.len();
    let mut below: Vec<f64> = parts.iter().map(|p| p.of_new - p.residual).collect();
    let mut above: Vec<f64> = parts.iter().map(|p| p.of_new + p.residual).collect();
    below.sort_by(f64::total_cmp);
    above.sort_by(f64::total_cmp);
    // The rounding of α(n + 1) must not move a whole number.
    let lower = (miss * (n + 1) as f64 + 1e-9).floor();
    let upper = ((1.0 - miss) * (n + 1) as f64 - 1e-9).ceil();
    let at = |sorted: &[f64], place: f64, beyond: f64| {
        if place >= 1.0 && place <= n as f64 {
            sorted[place as usize - 1]
        } else {
            beyond
        }
    };
    (
        at(&below, lower, f64::NEG_INFINITY),
        at(&above, upper, f64::INFINITY),
    )
}

/// The coverage that is guaranteed on average over training sets and new samples, for n
/// exchangeable things in k parts of equal size: 1 − 2α − min{2(1 − 1/k)/(n/k + 1),
/// (1 − k/n)/(k + 1)} (theorem 4 of the same paper); with k = n it is 1 − 2α (theorem 1).
#[must_use]
pub fn prediction_interval_guarantee(n: usize, k: usize, miss: f64) -> f64 {
    let (n, k) = (n as f64, k as f64);
    let loss = (2.0 * (1.0 - 1.0 / k) / (n / k + 1.0)).min((1.0 - k / n) / (k + 1.0));
    (1.0 - 2.0 * miss - loss).max(0.0)
}
