//! The facts of a fit on its performance on outer parts.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, Facts};
use crate::eval::kind::fit::facts::{SHARE, STRENGTH, measures};
use crate::eval::kind::fit::performance::{Measures, Performance, interval};
use crate::eval::kind::fit::{Fitted, Judged};
use crate::numeric::measure::quantile;

/// Publishes what the outer parts say.
#[expect(
    clippy::too_many_lines,
    reason = "a list of facts, one after the other"
)]
pub(super) fn publish(
    facts: &mut Facts,
    fitted: &Fitted,
    judged: &Judged,
    performance: &Performance,
    apparent: &Measures,
    unit: &str,
    digits: Precision,
) {
    let mean = &performance.mean;
    measures(
        facts,
        "nested",
        mean,
        unit,
        digits,
        "on outer held-out samples, over all samples of a repeat, averaged over repeats",
    );
    let mut push = |name: &str, value: f64, unit: &str, precision: Precision, meaning: &str| {
        facts.push(Fact::number(name, value, unit, precision, meaning));
    };
    push(
        "nested slope",
        mean.slope,
        "",
        SHARE,
        "Slope of the line of observed on held-out predicted values: below 1 predictions are too extreme, above 1 too timid.",
    );
    push(
        "nested intercept",
        mean.intercept,
        unit,
        digits,
        "Intercept of the same line.",
    );
    push(
        "nested bias",
        mean.bias,
        unit,
        digits,
        "Mean of held-out predicted minus observed values.",
    );
    push(
        "nested sep",
        mean.sep,
        unit,
        digits,
        "Standard deviation of the held-out errors about the bias (divisor n − 1).",
    );
    push(
        "nested correlation",
        mean.correlation,
        "",
        SHARE,
        "Correlation of observed and held-out predicted values.",
    );
    let spread = |get: fn(&Measures) -> f64| {
        let values: Vec<f64> = performance
            .repeats
            .iter()
            .map(get)
            .filter(|v| v.is_finite())
            .collect();
        let n = values.len() as f64;
        let mean = values.iter().sum::<f64>() / n;
        if n < 2.0 {
            f64::NAN
        } else {
            (values.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / (n - 1.0)).sqrt()
        }
    };
    push(
        "nested rmse spread",
        spread(|m| m.rmse),
        unit,
        digits,
        "Standard deviation of the held-out error over repeats: how much the luck of the split matters (split-to-split).",
    );
    push(
        "nested r² spread",
        spread(|m| m.r2),
        "",
        SHARE,
        "Standard deviation of the held-out R² over repeats (split-to-split).",
    );
    let errors = &performance.errors;
    let square = interval(&errors.model, &errors.sizes);
    let observed: Vec<f64> = fitted
        .prepared
        .data
        .analysed
        .iter()
        .map(|&row| fitted.observed()[row])
        .collect();
    let centre = observed.iter().sum::<f64>() / observed.len() as f64;
    let variance =
        observed.iter().map(|v| (v - centre).powi(2)).sum::<f64>() / observed.len() as f64;
    let about = "a 95 % interval from the spread of squared errors over units (normal approximation); it is about the procedure on samples of this size, not about the final model";
    push(
        "nested rmse low",
        square.low.max(0.0).sqrt(),
        unit,
        digits,
        &format!("Lower end of {about}."),
    );
    push(
        "nested rmse high",
        square.high.sqrt(),
        unit,
        digits,
        &format!("Upper end of {about}."),
    );
    push(
        "nested r² low",
        1.0 - square.high / variance,
        "",
        SHARE,
        &format!("Lower end of {about}."),
    );
    push(
        "nested r² high",
        1.0 - square.low.max(0.0) / variance,
        "",
        SHARE,
        &format!("Upper end of {about}."),
    );
    push(
        "mean-only rmse",
        performance.baseline.rmse,
        unit,
        digits,
        "Root mean squared error of the model without predictors, the mean of each training part, on the same outer parts.",
    );
    push(
        "mean-only mae",
        performance.baseline.mae,
        unit,
        digits,
        "Mean absolute error of the model without predictors on the same outer parts.",
    );
    let gains: Vec<f64> = errors
        .baseline
        .iter()
        .zip(&errors.model)
        .map(|(base, model)| base - model)
        .collect();
    let gain = interval(&gains, &errors.sizes);
    let base = performance.baseline.rmse.powi(2);
    push(
        "improvement over the mean",
        gain.value / base,
        "",
        Precision::Percent(0),
        "How much smaller the mean squared error is than that of the model without predictors, as a share of the latter.",
    );
    push(
        "improvement low",
        gain.low / base,
        "",
        Precision::Percent(0),
        "Lower end of a 95 % interval of this improvement, from paired differences over units.",
    );
    push(
        "improvement high",
        gain.high / base,
        "",
        Precision::Percent(0),
        "Upper end of the same interval.",
    );
    push(
        "optimism",
        apparent.r2 - mean.r2,
        "",
        SHARE,
        "Apparent R² less nested R²: how much the model flatters itself on its own samples.",
    );
    let fits = &judged.held_out.fits;
    let strengths: Vec<f64> = fits.iter().map(|fit| fit.strength).collect();
    let at = |share: f64| quantile(&strengths, share);
    push(
        "outer strength median",
        at(0.5),
        "",
        STRENGTH,
        "The median of the strengths chosen in the outer training parts.",
    );
    push(
        "outer strength lower quartile",
        at(0.25),
        "",
        STRENGTH,
        "A quarter of the outer training parts chose a smaller strength.",
    );
    push(
        "outer strength upper quartile",
        at(0.75),
        "",
        STRENGTH,
        "A quarter of the outer training parts chose a larger strength.",
    );
    push(
        "outer strength log10 interquartile range",
        at(0.75).log10() - at(0.25).log10(),
        "",
        Precision::Decimals(2),
        "How many powers of ten the middle half of the chosen strengths spans.",
    );
    let edge = fits.iter().filter(|fit| fit.at_edge).count() as f64 / fits.len() as f64;
    push(
        "share of outer fits at the edge",
        edge,
        "",
        Precision::Percent(0),
        "In how many outer training parts the chosen strength lay at an end of the range.",
    );
    let chosen: Vec<f64> = fits.iter().map(|fit| fit.n_chosen as f64).collect();
    let count = Precision::Whole;
    push(
        "chosen predictors outer median",
        quantile(&chosen, 0.5),
        "",
        count,
        "The median number of predictors chosen in the outer training parts.",
    );
    push(
        "chosen predictors outer least",
        chosen.iter().copied().fold(f64::INFINITY, f64::min),
        "",
        count,
        "The smallest number of predictors chosen in an outer training part.",
    );
    push(
        "chosen predictors outer most",
        chosen.iter().copied().fold(0.0, f64::max),
        "",
        count,
        "The largest number of predictors chosen in an outer training part.",
    );
}
