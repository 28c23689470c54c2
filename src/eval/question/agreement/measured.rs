//! Measured quantities: predicted against observed values.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, agreement_slope};
use crate::eval::fact::{Fact, Facts};
use crate::eval::kind::fit::{Fitted, Measure, Performance, error_digits, held_out_predictions};

/// The facts and remarks.
pub fn answer(fitted: &Fitted, held_out: &Performance) -> (Facts, Vec<Caveat>) {
    let data = &fitted.prepared.data;
    let rows = &data.analysed;
    let observed = fitted.scene().observed();
    let predicted: Vec<f64> = held_out.scores.column(0).iter().copied().collect();
    let unit = data.outcome.unit.clone();
    let digits = error_digits(fitted);
    let mean = |measure: Measure| held_out.mean.get(measure);
    let slope = mean(Measure::Slope);
    let mut facts = Facts::new();
    let mut push = |name: &str, value: f64, unit: &str, precision: Precision, meaning: &str| {
        facts.push(Fact::number(name, value, unit, precision, meaning));
    };
    let share = Precision::Decimals(3);
    push(
        "nested rmse",
        mean(Measure::Rmse),
        &unit,
        digits,
        "Root mean squared error on outer held-out samples.",
    );
    push(
        "nested mae",
        mean(Measure::Mae),
        &unit,
        digits,
        "Mean absolute error on outer held-out samples.",
    );
    push(
        "nested r²",
        mean(Measure::R2),
        "",
        share,
        "R² on outer held-out samples: 1 − SSE/SST, SST about the mean of the analysed samples.",
    );
    push(
        "bias",
        mean(Measure::Bias),
        &unit,
        digits,
        "Mean of held-out predicted minus observed values.",
    );
    push(
        "sep",
        mean(Measure::Sep),
        &unit,
        digits,
        "Standard deviation of the held-out errors about the bias (divisor n − 1).",
    );
    push(
        "slope",
        slope,
        "",
        share,
        "Slope of the line of observed on held-out predicted values: below 1 predictions are too extreme, above 1 too timid.",
    );
    push(
        "intercept",
        mean(Measure::Intercept),
        &unit,
        digits,
        "Intercept of the same line.",
    );
    push(
        "correlation",
        mean(Measure::Correlation),
        "",
        share,
        "Correlation of observed and held-out predicted values.",
    );
    let error = slope_error(
        &predicted,
        &observed,
        &rows.iter().map(|&row| data.units[row]).collect::<Vec<_>>(),
    );
    push(
        "slope low",
        slope - 1.96 * error,
        "",
        share,
        "Lower end of a 95 % interval of the slope, with units as the independent observations.",
    );
    push(
        "slope high",
        slope + 1.96 * error,
        "",
        share,
        "Upper end of the same interval.",
    );
    if let Some(error) = data.outcome.reference_error {
        push(
            "reference error",
            error,
            &unit,
            Precision::Significant(3),
            "The standard deviation of the reference method's own error, as stated by the user.",
        );
    }
    facts.push(held_out_predictions(fitted, held_out));
    let caveats = agreement_slope::check(slope, slope - 1.96 * error, slope + 1.96 * error);
    (facts, caveats.into_iter().collect())
}

/// The standard error of the slope of observed on predicted values, with the samples of a unit as
/// one independent observation (the sandwich estimator for clusters, Liang & Zeger 1986, with the
/// factor m/(m − 1) for m units).
fn slope_error(predicted: &[f64], observed: &[f64], units: &[usize]) -> f64 {
    let n = predicted.len() as f64;
    let (mean_p, mean_o) = (
        predicted.iter().sum::<f64>() / n,
        observed.iter().sum::<f64>() / n,
    );
    let sxx: f64 = predicted.iter().map(|p| (p - mean_p).powi(2)).sum();
    if sxx <= 0.0 {
        return f64::NAN;
    }
    let sxy: f64 = predicted
        .iter()
        .zip(observed)
        .map(|(p, o)| (p - mean_p) * (o - mean_o))
        .sum();
    let slope = sxy / sxx;
    let mut scores = std::collections::BTreeMap::new();
    for ((p, o), unit) in predicted.iter().zip(observed).zip(units) {
        let residual = (o - mean_o) - slope * (p - mean_p);
        *scores.entry(*unit).or_insert(0.0) += (p - mean_p) * residual;
    }
    let m = scores.len() as f64;
    let square: f64 = scores.values().map(|score: &f64| score * score).sum();
    if m > 1.0 {
        (square * m / (m - 1.0)).sqrt() / sxx
    } else {
        f64::NAN
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_slope_error_agrees_with_a_general_library() {
        // statsmodels 0.15 OLS(o, [1, p]).fit(cov_type="cluster", groups, use_correction=False),
        // bse[1] times √(m/(m−1)) with m = 4 units.
        let p = [1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0];
        let o = [1.2, 1.9, 3.3, 3.8, 5.5, 5.7, 7.4, 7.6];
        let units = [0, 0, 1, 1, 2, 2, 3, 3];
        assert!((slope_error(&p, &o, &units) - 0.015_044_515_564_140_588).abs() < 1e-9);
    }
}
