//! The facts of a fit on its performance on outer parts.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, Facts};
use crate::eval::kind::fit::facts::{STRENGTH, error_digits, measures};
use crate::eval::kind::fit::measures::{Measure, Measures, Sort};
use crate::eval::kind::fit::performance::{Performance, interval, paired_loss};
use crate::eval::kind::fit::{Fitted, Judged, careful, kinds};
use crate::numeric::measure::quantile;

/// Publishes what the outer parts say.
pub(super) fn publish(
    facts: &mut Facts,
    fitted: &Fitted,
    judged: &Judged,
    performance: &Performance,
    apparent: &Measures,
) {
    let sort = fitted.sort();
    let mean = &performance.mean;
    let on = "on outer held-out samples, over all samples of a repeat, averaged over repeats";
    measures(facts, fitted, "nested", sort.always(), mean, on);
    measures(facts, fitted, "nested", sort.held_out(), mean, "");
    if let Some(basis) = performance.basis {
        facts.push(Fact::text(
            "pairs compared",
            basis.words(),
            "Which pairs of samples count in the measures that compare pairs.",
        ));
    }
    spreads(facts, fitted, performance);
    intervals(facts, fitted, performance);
    careful::publish(facts, fitted, judged);
    baselines(facts, fitted, performance);
    let main = sort.main();
    facts.push(Fact::number(
        "optimism",
        apparent.get(main) - mean.get(main),
        "",
        main.digits(error_digits(fitted)),
        &format!(
            "Apparent {0} less nested {0}: how much the model flatters itself on its own samples.",
            main.title()
        ),
    ));
    outer(facts, judged);
    match sort {
        Sort::Measured | Sort::Count => {}
        Sort::YesNo => {
            facts.push(kinds::thresholds(fitted, performance));
            facts.push(kinds::reliability(fitted, performance));
        }
        Sort::Classes => {
            facts.push(kinds::confusion(fitted, performance));
            facts.push(kinds::by_class(fitted, performance));
        }
        Sort::Time => facts.push(kinds::at_times(fitted, performance)),
    }
}

/// How much the luck of the split matters.
fn spreads(facts: &mut Facts, fitted: &Fitted, performance: &Performance) {
    let unit = &fitted.prepared.data.outcome.unit;
    for measure in fitted.sort().spreads() {
        let values: Vec<f64> = performance
            .repeats
            .iter()
            .map(|repeat| repeat.get(*measure))
            .filter(|value| value.is_finite())
            .collect();
        let n = values.len() as f64;
        let mean = values.iter().sum::<f64>() / n;
        let spread = if n < 2.0 {
            f64::NAN
        } else {
            (values.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / (n - 1.0)).sqrt()
        };
        facts.push(Fact::number(
            &format!("nested {} spread", measure.name()),
            spread,
            measure.unit(unit),
            measure.digits(error_digits(fitted)),
            &format!(
                "Standard deviation of the held-out {} over repeats: how much the luck of the split matters (split-to-split).",
                measure.title()
            ),
        ));
    }
}

fn intervals(facts: &mut Facts, fitted: &Fitted, performance: &Performance) {
    let unit = &fitted.prepared.data.outcome.unit;
    let mut known: Vec<&(Measure, f64, f64)> = performance.intervals.iter().collect();
    // The measures of the headline first.
    let sort = fitted.sort();
    known.sort_by_key(|(measure, ..)| sort.always().iter().position(|known| known == measure));
    for (measure, low, high) in known {
        let about = format!(
            "a 95 % interval of the held-out {} from its spread over units (normal approximation); it is about the procedure on samples of this size, not about the final model",
            measure.title()
        );
        for (end, value, word) in [("low", low, "Lower"), ("high", high, "Upper")] {
            facts.push(Fact::number(
                &format!("nested {} {end}", measure.name()),
                *value,
                measure.unit(unit),
                measure.digits(error_digits(fitted)),
                &format!("{word} end of {about}."),
            ));
        }
    }
}

/// The model without predictors on the same parts, and the gain over it.
fn baselines(facts: &mut Facts, fitted: &Fitted, performance: &Performance) {
    let sort = fitted.sort();
    let on = match sort {
        Sort::Measured => {
            "of the model without predictors, the mean of each training part, on the same outer parts"
        }
        Sort::YesNo | Sort::Classes => {
            "of the model without predictors, the class shares of each training part, on the same outer parts"
        }
        Sort::Count => {
            "of the model without predictors, the mean rate of each training part, on the same outer parts"
        }
        Sort::Time => {
            "of the model without predictors, the share without the event in each training part, on the same outer parts"
        }
    };
    let baseline = &performance.baseline;
    measures(
        facts,
        fitted,
        sort.baseline_word(),
        sort.baselines(),
        baseline,
        on,
    );
    let errors = &performance.errors;
    let gains: Vec<f64> = errors
        .baseline
        .iter()
        .zip(&errors.model)
        .map(|(base, model)| base - model)
        .collect();
    let gain = interval(&gains, &errors.sizes);
    let base = match sort {
        Sort::Measured => baseline.get(Measure::Rmse).powi(2),
        Sort::YesNo | Sort::Classes | Sort::Count | Sort::Time => baseline.get(paired_loss(sort)),
    };
    let (name, what) = match sort {
        Sort::Measured => ("improvement over the mean", "mean squared error"),
        Sort::YesNo | Sort::Classes => ("improvement over the baseline", "log loss"),
        Sort::Count => ("improvement over the baseline", "mean deviance"),
        Sort::Time => (
            "improvement over the baseline",
            "Brier score at the middle time",
        ),
    };
    let mut push = |name: &str, value: f64, meaning: &str| {
        facts.push(Fact::number(
            name,
            value,
            "",
            Precision::Percent(0),
            meaning,
        ));
    };
    push(
        name,
        gain.value / base,
        &format!(
            "How much smaller the {what} is than that of the model without predictors, as a share of the latter."
        ),
    );
    push(
        "improvement low",
        gain.low / base,
        "Lower end of a 95 % interval of this improvement, from paired differences over units.",
    );
    push(
        "improvement high",
        gain.high / base,
        "Upper end of the same interval.",
    );
}

/// What the outer training parts chose.
fn outer(facts: &mut Facts, judged: &Judged) {
    let mut push = |name: &str, value: f64, unit: &str, precision: Precision, meaning: &str| {
        facts.push(Fact::number(name, value, unit, precision, meaning));
    };
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
