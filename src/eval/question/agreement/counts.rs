//! Counts: predicted against observed counts.

use crate::eval::caveat::{Caveat, calibration_slope};
use crate::eval::fact::Facts;
use crate::eval::kind::fit::{Fitted, Measure, Performance, held_out_predictions};
use crate::eval::question::agreement::{publish, publish_slope_ends, recalibration_error, units};
use crate::numeric::procedure::count_calibration_slope;

/// The facts and remarks.
pub fn answer(fitted: &Fitted, held_out: &Performance) -> (Facts, Vec<Caveat>) {
    let mut facts = Facts::new();
    publish(&mut facts, fitted, held_out);
    let observed = fitted.scene().observed();
    let predicted: Vec<f64> = held_out.scores.column(0).iter().copied().collect();
    let slope = held_out.mean.get(Measure::CalibrationSlope);
    let error = slope_error(&observed, &predicted, &units(fitted));
    publish_slope_ends(&mut facts, slope, error);
    facts.push(held_out_predictions(fitted, held_out));
    let caveats = calibration_slope::check(slope, error);
    (facts, caveats.into_iter().collect())
}

/// The standard error of the slope of the Poisson recalibration of the mean predictions.
fn slope_error(observed: &[f64], predicted: &[f64], units: &[usize]) -> f64 {
    let Some(slope) = count_calibration_slope(observed, predicted) else {
        return f64::NAN;
    };
    let logs: Vec<f64> = predicted.iter().map(|mean| mean.ln()).collect();
    // The intercept that goes with the slope makes the sums agree.
    let sizes: Vec<f64> = logs.iter().map(|x| (slope * x).exp()).collect();
    let scale = observed.iter().sum::<f64>() / sizes.iter().sum::<f64>();
    let fitted: Vec<(f64, f64)> = sizes
        .iter()
        .map(|size| (size * scale, size * scale))
        .collect();
    recalibration_error(&logs, observed, &fitted, units)
}
