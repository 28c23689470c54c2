//! How well held-out samples were predicted.

use crate::eval::kind::data::Dataset;
use crate::numeric::measure::Agreement;
use crate::numeric::procedure::HeldOut;

/// The performance of a procedure on outer parts.
#[derive(Clone, Debug)]
pub struct Performance {
    /// The measures: computed over all samples of a repeat, then averaged over repeats.
    pub mean: Measures,
    /// The measures of each repeat.
    pub repeats: Vec<Measures>,
    /// The measures of the model without predictors on the same parts, averaged over repeats.
    pub baseline: Measures,
    /// The mean held-out prediction of each analysed sample over repeats.
    pub predicted: Vec<f64>,
    /// Squared errors by unit.
    pub errors: HeldOutErrors,
}

/// Squared held-out errors, summed by unit and averaged over repeats.
#[derive(Clone, Debug)]
pub struct HeldOutErrors {
    /// How many samples each unit has.
    pub sizes: Vec<usize>,
    /// The sum of squared errors of each unit's samples.
    pub model: Vec<f64>,
    /// The same for the model without predictors.
    pub baseline: Vec<f64>,
}

/// A mean with its 95 % interval.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    /// The mean.
    pub value: f64,
    /// Its standard error over units.
    pub standard_error: f64,
    /// The lower end.
    pub low: f64,
    /// The upper end.
    pub high: f64,
}

/// The normal quantile of a two-sided 95 % interval.
const QUANTILE: f64 = 1.959_963_984_540_054;

/// Gathers the outer fits over the analysed samples `rows`.
#[must_use]
pub fn performance(
    held_out: &HeldOut,
    data: &Dataset,
    rows: &[usize],
    observed: &[f64],
) -> Performance {
    let n_repeats = held_out
        .fits
        .iter()
        .map(|fit| fit.repeat + 1)
        .max()
        .unwrap_or(0);
    let place = |row: usize| {
        rows.binary_search(&row)
            .expect("held-out rows are analysed")
    };
    let outcome: Vec<f64> = rows.iter().map(|&row| observed[row]).collect();
    let mut predicted = vec![0.0; rows.len()];
    let mut repeats = Vec::with_capacity(n_repeats);
    let mut baselines = Vec::with_capacity(n_repeats);
    let mut model_error = vec![0.0; rows.len()];
    let mut baseline_error = vec![0.0; rows.len()];
    for repeat in 0..n_repeats {
        let mut own = vec![0.0; rows.len()];
        let mut mean_only = vec![0.0; rows.len()];
        for fit in held_out.fits.iter().filter(|fit| fit.repeat == repeat) {
            for (&row, &value) in fit.rows.iter().zip(&fit.predicted) {
                own[place(row)] = value;
                mean_only[place(row)] = fit.baseline;
            }
        }
        for at in 0..rows.len() {
            let share = 1.0 / n_repeats as f64;
            predicted[at] += own[at] * share;
            model_error[at] += (own[at] - outcome[at]).powi(2) * share;
            baseline_error[at] += (mean_only[at] - outcome[at]).powi(2) * share;
        }
        repeats.push(Measures::of(&outcome, &own));
        baselines.push(Measures::of(&outcome, &mean_only));
    }
    Performance {
        mean: mean_of(&repeats),
        baseline: mean_of(&baselines),
        repeats,
        predicted,
        errors: errors_by_unit(data, rows, &model_error, &baseline_error),
    }
}

/// Sums squared errors by unit.
#[must_use]
pub fn errors_by_unit(
    data: &Dataset,
    rows: &[usize],
    model: &[f64],
    baseline: &[f64],
) -> HeldOutErrors {
    let mut units: Vec<usize> = rows.iter().map(|&row| data.units[row]).collect();
    units.sort_unstable();
    units.dedup();
    let mut errors = HeldOutErrors {
        sizes: vec![0; units.len()],
        model: vec![0.0; units.len()],
        baseline: vec![0.0; units.len()],
    };
    for (at, &row) in rows.iter().enumerate() {
        let unit = units
            .binary_search(&data.units[row])
            .expect("every row has a unit");
        errors.sizes[unit] += 1;
        errors.model[unit] += model[at];
        errors.baseline[unit] += baseline[at];
    }
    errors
}

/// The mean of values over samples with its standard error over units: the sums of a unit's
/// deviations count as one observation (linearised ratio estimate for samples in clusters,
/// Cochran 1977, chapter 9), so that repeats of one unit do not make it better known.
#[must_use]
pub fn interval(sums: &[f64], sizes: &[usize]) -> Interval {
    let n: f64 = sizes.iter().map(|&size| size as f64).sum();
    let m = sums.len() as f64;
    let value = sums.iter().sum::<f64>() / n;
    let square: f64 = sums
        .iter()
        .zip(sizes)
        .map(|(sum, &size)| (sum - value * size as f64).powi(2))
        .sum();
    let standard_error = if m > 1.0 {
        (square * m / (m - 1.0)).sqrt() / n
    } else {
        f64::NAN
    };
    Interval {
        value,
        standard_error,
        low: value - QUANTILE * standard_error,
        high: value + QUANTILE * standard_error,
    }
}

/// The measures of a measured quantity. NaN where a measure is not defined, such as the slope of
/// constant predictions.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Measures {
    /// Root mean squared error.
    pub rmse: f64,
    /// Mean absolute error.
    pub mae: f64,
    /// 1 − SSE/SST, SST about the mean of the observed values.
    pub r2: f64,
    /// Mean of predicted minus observed.
    pub bias: f64,
    /// Standard deviation of the errors about the bias (divisor n − 1).
    pub sep: f64,
    /// Slope of the line of observed on predicted values.
    pub slope: f64,
    /// Intercept of the same line.
    pub intercept: f64,
    /// Pearson's correlation of observed and predicted values.
    pub correlation: f64,
}

impl Measures {
    /// The measures of predictions; all NaN when there are none.
    #[must_use]
    pub fn of(observed: &[f64], predicted: &[f64]) -> Self {
        let known = |value: Option<f64>| value.unwrap_or(f64::NAN);
        let agreement = Agreement::of(observed, predicted);
        let get = |get: fn(&Agreement) -> Option<f64>| known(agreement.as_ref().and_then(get));
        Self {
            rmse: get(|a| Some(a.rmse)),
            mae: get(|a| Some(a.mae)),
            r2: get(|a| a.r_squared),
            bias: get(|a| Some(a.bias)),
            sep: get(|a| a.sep),
            slope: get(|a| a.observed_on_predicted.map(|line| line.slope)),
            intercept: get(|a| a.observed_on_predicted.map(|line| line.intercept)),
            correlation: get(|a| a.pearson),
        }
    }
}

/// The mean of each measure over the repeats in which it is defined.
fn mean_of(repeats: &[Measures]) -> Measures {
    let mean = |get: fn(&Measures) -> f64| {
        let known: Vec<f64> = repeats
            .iter()
            .map(get)
            .filter(|value| value.is_finite())
            .collect();
        if known.is_empty() {
            f64::NAN
        } else {
            known.iter().sum::<f64>() / known.len() as f64
        }
    };
    Measures {
        rmse: mean(|m| m.rmse),
        mae: mean(|m| m.mae),
        r2: mean(|m| m.r2),
        bias: mean(|m| m.bias),
        sep: mean(|m| m.sep),
        slope: mean(|m| m.slope),
        intercept: mean(|m| m.intercept),
        correlation: mean(|m| m.correlation),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn repeats_of_one_unit_do_not_narrow_the_interval() {
        let single = interval(&[1.0, 2.0, 4.0, 5.0], &[1, 1, 1, 1]);
        let thrice = interval(&[3.0, 6.0, 12.0, 15.0], &[3, 3, 3, 3]);
        assert!((single.value - 3.0).abs() < 1e-12);
        assert!((single.standard_error - thrice.standard_error).abs() < 1e-12);
        // The usual standard error of a mean: √(Σ(x − x̄)²/(n − 1)/n) = √(10/3/4).
        assert!((single.standard_error - (10.0_f64 / 12.0).sqrt()).abs() < 1e-12);
    }
}
