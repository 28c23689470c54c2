//! The careful interval for the error of a procedure, by nested cross-validation.

use crate::numeric::measure::normal_quantile;

/// Errors (squared errors, losses, ...) that belong to one outer part of one repeat.
#[derive(Clone, Debug, PartialEq)]
pub struct ErrorsOfPart {
    /// Errors of the samples of the other K − 1 parts, each predicted by a fit to the K − 2
    /// parts that are neither its own nor the outer one.
    pub inner: Vec<f64>,
    /// Errors of the outer part's samples, predicted by a fit to the other K − 1 parts.
    pub outer: Vec<f64>,
}

/// An interval for the expected error of the procedure at this number of samples. It is about
/// the procedure, not about the one fit that it gave.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CarefulInterval {
    /// The estimate, corrected for the smaller training parts.
    pub estimate: f64,
    /// The lower end.
    pub lower: f64,
    /// The upper end.
    pub upper: f64,
    /// The estimated standard error of the estimate.
    pub standard_error: f64,
    /// The standard error that plain cross-validation would claim.
    pub plain_standard_error: f64,
    /// What the correction for smaller training parts took off.
    pub bias: f64,
}

/// The interval of Bates, Hastie and Tibshirani (2024, JASA 119:1434, algorithm 1).
///
/// With a = (mean inner − mean outer error)² and b = variance of the mean outer error, over all
/// outer parts and repeats, the mean squared error of the inner estimate is mean(a) − mean(b).
/// The standard error is √((K−1)/K · that), kept between the plain one and √K times it. The
/// estimate is the mean inner error minus (1 + (K−2)/K)·(mean inner − `plain_mean`), with
/// `plain_mean` the mean error of plain K-part cross-validation of the same samples.
///
/// `n_samples` is the number of independent things (units, when errors are means per unit).
/// `None` when K is below 3, a part is empty, or an outer part has one error only.
#[must_use]
pub fn careful_interval(
    parts: &[ErrorsOfPart],
    n_parts: usize,
    n_samples: usize,
    plain_mean: f64,
    level: f64,
) -> Option<CarefulInterval> {
    if n_parts < 3 || parts.is_empty() || n_samples < 2 {
        return None;
    }
    let mut inner: Vec<f64> = Vec::new();
    let (mut a, mut b) = (0.0, 0.0);
    for part in parts {
        let (inside, outside) = (mean(&part.inner)?, mean(&part.outer)?);
        a += (inside - outside).powi(2);
        b += variance(&part.outer)? / part.outer.len() as f64;
        inner.extend(&part.inner);
    }
    let (count, k) = (parts.len() as f64, n_parts as f64);
    let raw = mean(&inner)?;
    let plain_standard_error = (variance(&inner)? / n_samples as f64).sqrt();
    let squared = ((a - b) / count).max(0.0) * (k - 1.0) / k;
    let standard_error = squared
        .sqrt()
        .clamp(plain_standard_error, plain_standard_error * k.sqrt());
    let bias = (1.0 + (k - 2.0) / k) * (raw - plain_mean);
    let estimate = raw - bias;
    let half = normal_quantile(0.5 + 0.5 * level) * standard_error;
    Some(CarefulInterval {
        estimate,
        lower: estimate - half,
        upper: estimate + half,
        standard_error,
        plain_standard_error,
        bias,
    })
}

fn mean(values: &[f64]) -> Option<f64> {
    (!values.is_empty()).then(|| values.iter().sum::<f64>() / values.len() as f64)
}

/// With divisor n − 1.
fn variance(values: &[f64]) -> Option<f64> {
    let mean = mean(values)?;
    let squares: f64 = values.iter().map(|x| (x - mean).powi(2)).sum();
    (values.len() > 1).then(|| squares / (values.len() - 1) as f64)
}
