//! How strongly outcomes follow held-out linear predictors: the slope that would be 1 if they were
//! neither too extreme nor too timid.

use crate::base::work::Work;
use crate::numeric::matrix::Matrix;
use crate::numeric::path::{Params, fit_path};
use crate::numeric::predictors::Predictors;
use crate::numeric::response::{Response, Ties};
use crate::numeric::task::{Scaling, Task};
use std::collections::BTreeMap;
use std::sync::Arc;

/// The slope of a Poisson regression of counts on the logarithms of their held-out predictions.
/// `None` where predictions do not vary or there is no finite slope.
#[must_use]
pub fn count_calibration_slope(count: &[f64], predicted: &[f64]) -> Option<f64> {
    let logs: Vec<f64> = predicted.iter().map(|mean| mean.ln()).collect();
    let response = Response::Count {
        count: count.to_vec(),
        offset: None,
    };
    slope(&response, &logs)
}

/// The slope of a Cox regression of times on held-out linear predictors, stratified by the part in
/// which a sample was held out, because the parts' predictors have zeros of their own (van
/// Houwelingen 2000). `None` where predictors do not vary within a part or there is no finite slope.
#[must_use]
pub fn time_calibration_slope(
    time: &[f64],
    event: &[bool],
    linear: &[f64],
    part: &[usize],
) -> Option<f64> {
    let response = Response::Time {
        time: time.to_vec(),
        event: event.to_vec(),
        strata: Some(part.to_vec()),
        ties: Ties::Efron,
    };
    let mut first: BTreeMap<usize, f64> = BTreeMap::new();
    let varies = linear
        .iter()
        .zip(part)
        .any(|(eta, part)| *first.entry(*part).or_insert(*eta) != *eta);
    if !varies {
        return None;
    }
    // Where a part's zero lies changes nothing; without it the numbers stay small.
    let mut sums: BTreeMap<usize, (f64, f64)> = BTreeMap::new();
    for (eta, part) in linear.iter().zip(part) {
        let sum = sums.entry(*part).or_default();
        *sum = (sum.0 + eta, sum.1 + 1.0);
    }
    let centred: Vec<f64> = linear
        .iter()
        .zip(part)
        .map(|(eta, part)| eta - sums[part].0 / sums[part].1)
        .collect();
    slope(&response, &centred)
}

fn slope(response: &Response, linear: &[f64]) -> Option<f64> {
    let n = linear.len();
    let is_sound = linear.iter().all(|eta| eta.is_finite());
    let varies = linear.iter().any(|eta| *eta != linear[0]);
    if n < 3 || !is_sound || !varies {
        return None;
    }
    let predictors = Predictors::new(Arc::new(Matrix::from_column_slice(n, 1, linear)));
    let rows: Vec<usize> = (0..n).collect();
    let covariates = Matrix::zeros(n, 0);
    let task = Task {
        predictors: &predictors,
        response,
        rows: &rows,
        columns: None,
        covariates: &covariates,
        weights: None,
        factors: None,
        scaling: Scaling::UnitVariance,
    };
    let path = fit_path(&task, 1.0, &[0.0], &Params::default(), &Work::unattended()).ok()?;
    let value = path
        .coefficients(0)
        .predictors
        .first()
        .map_or(0.0, |(_, value)| *value);
    value.is_finite().then_some(value)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn predictions_that_are_half_as_bold_have_the_slope_two() {
        // Counts exactly at exp(η): the Poisson fit on η/2 has the slope 2 and no residual.
        let eta = [0.0, 0.7, 1.4, 2.1, 2.8];
        let count: Vec<f64> = eta.iter().map(|eta: &f64| eta.exp()).collect();
        let timid: Vec<f64> = eta.iter().map(|eta| (eta / 2.0).exp()).collect();
        let slope = count_calibration_slope(&count, &timid).unwrap();
        assert!((slope - 2.0).abs() < 1e-6, "{slope}");
        assert_eq!(count_calibration_slope(&count, &[3.0; 5]), None);
    }

    #[test]
    fn a_part_whose_predictors_are_shifted_changes_no_slope() {
        let time = [5.0, 8.0, 3.0, 9.0, 4.0, 7.0, 2.0, 6.0];
        let event = [true, false, true, true, true, false, true, true];
        let eta = [0.3, -0.2, 0.1, -0.9, 0.6, 0.4, 0.8, -0.1];
        let part = [0, 0, 0, 0, 1, 1, 1, 1];
        let shifted: Vec<f64> = eta
            .iter()
            .zip(&part)
            .map(|(eta, part)| eta + 100.0 * *part as f64)
            .collect();
        let slope = time_calibration_slope(&time, &event, &eta, &part).unwrap();
        let other = time_calibration_slope(&time, &event, &shifted, &part).unwrap();
        assert!((slope - other).abs() < 1e-5, "{slope} {other}");
        assert_eq!(
            time_calibration_slope(&time, &event, &[1.0; 8], &part),
            None
        );
    }
}
