//! Do predictions match observations? One file per kind of outcome.

mod classes;
mod counts;
mod measured;
mod times;
mod yes_no;

use crate::base::number::Precision;
use crate::base::problem::Problem;
use crate::eval::fact::{Fact, Facts};
use crate::eval::kind::Ended;
use crate::eval::kind::fit::{Fitted, Measure, Performance, Sort, error_digits, performance};
use crate::eval::outcome::{Gives, Outcome};

/// Answers from the held-out predictions of the outer parts.
pub fn answer(fitted: &Fitted) -> Result<Outcome, Ended> {
    let Some(judged) = &fitted.judged else {
        return Err(not_judged().into());
    };
    let held_out = performance(&fitted.scene(), &fitted.prepared.data, &judged.held_out);
    let (facts, caveats) = match fitted.sort() {
        Sort::Measured => measured::answer(fitted, &held_out),
        Sort::YesNo => yes_no::answer(fitted, &held_out),
        Sort::Classes => classes::answer(fitted, &held_out),
        Sort::Count => counts::answer(fitted, &held_out),
        Sort::Time => times::answer(fitted, &held_out),
    };
    Ok(Outcome {
        gives: Gives::Facts,
        facts,
        caveats,
    })
}

/// The problem of a fit whose judgement was declined.
pub(super) fn not_judged() -> Problem {
    Problem::new(
        "not-judged",
        "The fit was not judged on parts that it had not seen, so there are no held-out predictions.",
    )
    .mend("Let the fit be judged by nested cross-validation.")
}

/// Publishes held-out measures, with the ends of their intervals, and those of the model without
/// predictors; what is not defined is left out.
fn publish(facts: &mut Facts, fitted: &Fitted, held_out: &Performance) {
    let sort = fitted.sort();
    let unit = &fitted.prepared.data.outcome.unit;
    let digits = error_digits(fitted);
    let mut push = |name: String, measure: Measure, value: f64, meaning: String| {
        if value.is_finite() {
            let digits = measure.digits(digits);
            facts.push(Fact::number(
                &name,
                value,
                measure.unit(unit),
                digits,
                &meaning,
            ));
        }
    };
    for measure in sort.always().iter().chain(sort.held_out()) {
        let name = format!("nested {}", measure.name());
        let what = measure.meaning(sort);
        push(
            name.clone(),
            *measure,
            held_out.mean.get(*measure),
            format!("{what}, on outer held-out samples."),
        );
        let ends = held_out
            .intervals
            .iter()
            .find(|(known, ..)| known == measure);
        if let Some((_, low, high)) = ends {
            for (end, value, word) in [("low", low, "Lower"), ("high", high, "Upper")] {
                push(
                    format!("{name} {end}"),
                    *measure,
                    *value,
                    format!(
                        "{word} end of its 95 % interval over units; it is about the procedure."
                    ),
                );
            }
        }
    }
    for measure in sort.baselines() {
        push(
            format!("{} {}", sort.baseline_word(), measure.name()),
            *measure,
            held_out.baseline.get(*measure),
            format!(
                "{}, of the model without predictors on the same parts.",
                measure.meaning(sort)
            ),
        );
    }
}

/// Publishes the ends of the interval of a calibration slope.
fn publish_slope_ends(facts: &mut Facts, slope: f64, error: f64) {
    if !(slope.is_finite() && error.is_finite()) {
        return;
    }
    for (end, value, meaning) in [
        (
            "calibration slope low",
            slope - 1.96 * error,
            "Lower end of a 95 % interval of the calibration slope, with units as the independent observations.",
        ),
        (
            "calibration slope high",
            slope + 1.96 * error,
            "Upper end of the same interval.",
        ),
    ] {
        facts.push(Fact::number(
            end,
            value,
            "",
            Precision::Decimals(3),
            meaning,
        ));
    }
}

/// The standard error of the slope of a recalibration a + b·x with the mean μ and the variance v of
/// each sample at the fitted line, the samples of a unit taken as one observation (the sandwich
/// estimator for clusters, Liang & Zeger 1986, with the factor m/(m − 1) for m units). NaN where x
/// does not vary.
fn recalibration_error(x: &[f64], observed: &[f64], fitted: &[(f64, f64)], units: &[usize]) -> f64 {
    let total: f64 = fitted.iter().map(|(_, v)| v).sum();
    let centre = x.iter().zip(fitted).map(|(x, (_, v))| x * v).sum::<f64>() / total;
    let information: f64 = x
        .iter()
        .zip(fitted)
        .map(|(x, (_, v))| v * (x - centre).powi(2))
        .sum();
    let mut scores = std::collections::BTreeMap::new();
    for (((x, y), (mean, _)), unit) in x.iter().zip(observed).zip(fitted).zip(units) {
        *scores.entry(*unit).or_insert(0.0) += (x - centre) * (y - mean);
    }
    let m = scores.len() as f64;
    let square: f64 = scores.values().map(|score: &f64| score * score).sum();
    if m > 1.0 && information > 0.0 {
        (square * m / (m - 1.0)).sqrt() / information
    } else {
        f64::NAN
    }
}

/// The unit of each analysed sample.
fn units(fitted: &Fitted) -> Vec<usize> {
    let data = &fitted.prepared.data;
    data.analysed.iter().map(|&row| data.units[row]).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_error_of_a_recalibration_agrees_with_a_general_library() {
        // statsmodels 0.15 GLM(y, [1, x], Binomial).fit(cov_type="cluster", groups,
        // use_correction=False): params and bse[1], times √(m/(m−1)) with m = 5 units.
        let x = [-2.0, -1.2, -0.7, -0.3, 0.1, 0.4, 0.9, 1.3, 1.8, 2.2];
        let y = [0.0, 0.0, 1.0, 0.0, 0.0, 1.0, 0.0, 1.0, 1.0, 1.0];
        let units = [0, 0, 1, 1, 2, 2, 3, 3, 4, 4];
        let (a, b) = (CHECKED.0, CHECKED.1);
        let fitted: Vec<(f64, f64)> = x
            .iter()
            .map(|x| {
                let p = 1.0 / (1.0 + f64::exp(-(a + b * x)));
                (p, p * (1.0 - p))
            })
            .collect();
        let error = recalibration_error(&x, &y, &fitted, &units);
        assert!((error - CHECKED.2).abs() < 1e-8, "{error}");
    }

    const CHECKED: (f64, f64, f64) = (
        -0.345_632_524_462_869_7,
        1.281_200_251_170_236_7,
        0.568_977_229_857_039_6,
    );
}
