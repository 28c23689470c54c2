//! The facts of a Fit cell.

use crate::base::number::{Precision, decimals_for};
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::fit::performance::{Measures, Performance, interval, performance};
use crate::eval::kind::fit::tables::{
    assignments, coefficients, error_curve, outer_choices, predictions,
};
use crate::eval::kind::fit::{Fitted, Judged};
use crate::numeric::choose;
use crate::numeric::measure::quantile;
use crate::numeric::path::Params;
use crate::numeric::procedure::Extended;
use crate::study::settings::fit::{Judge, Penalty, Plan, Rule, Scaling, Scheme, Strength};

/// Digits of a strength in text.
pub(super) const STRENGTH: Precision = Precision::Significant(3);

/// Publishes the facts of a Fit cell.
pub fn publish(facts: &mut Facts, fitted: &Fitted) {
    settings(facts, fitted);
    strength(facts, fitted);
    let unit = fitted.prepared.data.outcome.unit.clone();
    let digits = error_digits(fitted);
    let apparent = apparent(fitted);
    measures(
        facts,
        "apparent",
        &apparent,
        &unit,
        digits,
        "on the samples it was fitted to",
    );
    tuning(facts, fitted, &unit, digits);
    let judged = fitted.judged.as_ref();
    let held_out = judged.map(|judged| {
        performance(
            &judged.held_out,
            &fitted.prepared.data,
            &fitted.prepared.data.analysed,
            fitted.observed(),
        )
    });
    facts.push(Fact::text(
        "judged",
        if judged.is_some() {
            "nested cross-validation"
        } else {
            "not judged"
        },
        "How the whole procedure was judged.",
    ));
    if let (Some(judged), Some(performance)) = (judged, &held_out) {
        nested(facts, fitted, judged, performance, &apparent, &unit, digits);
    }
    certificates(facts, fitted);
    coefficients(facts, fitted);
    if let Some(curve) = fitted.last.curves.get(fitted.last.share_at) {
        facts.push(error_curve(fitted, curve, &unit, digits));
    }
    if let (Some(judged), Some(performance)) = (judged, &held_out) {
        facts.push(outer_choices(fitted, judged, &unit, digits));
        facts.push(predictions(fitted, performance, &unit, digits));
        facts.push(assignments(fitted, judged));
    }
}

/// Three significant digits of the outcome's spread, as decimals, for all errors in its unit, so
/// that they line up.
#[must_use]
pub fn error_digits(fitted: &Fitted) -> Precision {
    let rows = &fitted.prepared.data.analysed;
    let values: Vec<f64> = rows.iter().map(|&row| fitted.observed()[row]).collect();
    let mean = values.iter().sum::<f64>() / values.len() as f64;
    let spread =
        (values.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / values.len() as f64).sqrt();
    // An error is often a fifth of the spread; one more digit keeps three of them.
    Precision::Decimals(decimals_for(spread / 3.0, 3))
}

fn settings(facts: &mut Facts, fitted: &Fitted) {
    let data = &fitted.prepared.data;
    let settings = &fitted.settings;
    let penalty = match settings.penalty {
        Penalty::Ridge => "ridge",
        Penalty::Lasso => "lasso",
        Penalty::ElasticNet { .. } => "elastic net",
    };
    facts.push(Fact::text("penalty", penalty, "The penalty."));
    facts.push(Fact::number(
        "lasso share",
        fitted.last.share,
        "",
        Precision::Significant(2),
        "How much of the penalty is on absolute coefficients: 0 is ridge, 1 is lasso.",
    ));
    let scaling = match settings.scaling {
        Scaling::UnitVariance => "each predictor scaled to unit variance in its training part",
        Scaling::AsPrepared => "predictors on the scale on which they were prepared",
    };
    facts.push(Fact::text(
        "scaling",
        scaling,
        "On which scale the penalty acts.",
    ));
    facts.push(Fact::count(
        "samples",
        data.analysed.len(),
        "How many samples were analysed.",
    ));
    facts.push(Fact::count(
        "units",
        data.count_units(&data.analysed),
        "How many independent units they belong to.",
    ));
    let active = fitted
        .last
        .samples
        .active
        .iter()
        .filter(|active| **active)
        .count();
    facts.push(Fact::count(
        "predictors",
        active,
        "How many predictors could be chosen in the final fit, after preparation.",
    ));
    facts.push(Fact::count(
        "covariates",
        data.covariate_names.len(),
        "How many columns are always in the model, unpenalised.",
    ));
    let rule = match &settings.strength {
        Strength::ByHand(_) => "by hand",
        Strength::Chosen { rule, inner, .. } => {
            if rule.needs_parts() {
                plan(facts, "inner", *inner);
            }
            match rule {
                Rule::LowestError => "lowest error",
                Rule::OneStandardError => "one standard error",
                Rule::GeneralisedCrossValidation => "generalised cross-validation",
                Rule::ExtendedBic { .. } => "extended BIC",
            }
        }
    };
    facts.push(Fact::text(
        "rule",
        rule,
        "The rule that chose the penalty strength.",
    ));
    if let Judge::Nested(outer) = settings.judge {
        plan(facts, "outer", outer);
    }
    facts.push(Fact::number(
        "seed",
        settings.seed as f64,
        "",
        Precision::Full,
        "The seed of all that was drawn at random.",
    ));
}

fn plan(facts: &mut Facts, level: &str, plan: Plan) {
    let scheme = match plan.scheme {
        Scheme::Units => "units at random",
        Scheme::Balanced => "units at random, classes spread evenly",
        Scheme::WholeBatches => "whole batches",
        Scheme::LeaveOneUnitOut => "one unit at a time",
        Scheme::Blocks => "blocks of units in order",
    };
    facts.push(Fact::count(
        &format!("{level} parts"),
        plan.parts as usize,
        "Into how many parts the samples were divided.",
    ));
    facts.push(Fact::count(
        &format!("{level} repeats"),
        plan.repeats as usize,
        "How often the parts were drawn anew.",
    ));
    facts.push(Fact::text(
        &format!("{level} scheme"),
        scheme,
        "How samples came into parts; units are never divided.",
    ));
}

fn strength(facts: &mut Facts, fitted: &Fitted) {
    let last = &fitted.last;
    let n = fitted.prepared.data.analysed.len() as f64;
    let mut push = |name: &str, value: f64, meaning: &str| {
        facts.push(Fact::number(name, value, "", STRENGTH, meaning));
    };
    push(
        "chosen strength",
        last.strength,
        "The penalty strength of the final fit, in the objective with the loss over 2n.",
    );
    push(
        "strength times n",
        last.strength * n,
        "The chosen strength for a loss of half the sum of squares; in ridge the constant added to the diagonal.",
    );
    push(
        "strength times 2n",
        last.strength * 2.0 * n,
        "The chosen strength for a loss of the sum of squares.",
    );
    push(
        "inverse strength",
        1.0 / (last.strength * n),
        "The chosen strength in the inverse form, 1 over strength times n.",
    );
    if let Some(curve) = last.curves.get(last.share_at) {
        let strengths = &curve.strengths;
        push(
            "strongest strength",
            strengths[0],
            "The largest strength tried.",
        );
        push(
            "weakest strength",
            strengths[strengths.len() - 1],
            "The smallest strength tried.",
        );
        facts.push(Fact::count(
            "strengths tried",
            strengths.len(),
            "How many strengths were tried.",
        ));
        facts.push(Fact::count(
            "strength position",
            last.strength_at + 1,
            "The place of the chosen strength among those tried, counted from the strongest.",
        ));
        let at_edge =
            last.strength_at + 1 == strengths.len() || last.strength_at == 0 && last.share == 0.0;
        facts.push(Fact::text("strength at edge", if at_edge { "yes" } else { "no" }, "Whether the chosen strength lies at an end of the range where a better one could lie beyond."));
        if last.extended == Extended::Once {
            facts.push(Fact::text(
                "range extended",
                "once, because its weak end was best",
                "Whether the range of strengths was made longer.",
            ));
        }
    }
    if last.curves.len() > 1 {
        let lowest: Vec<f64> = last
            .curves
            .iter()
            .map(|curve| {
                choose::lowest(&curve.errors)
                    .map_or(f64::NAN, |at| curve.errors[at].max(0.0).sqrt())
            })
            .collect();
        let unit = &fitted.prepared.data.outcome.unit;
        facts.push(Fact::table(
            "lasso shares tried",
            vec![
                FactColumn::numbers(
                    "lasso share",
                    last.curves.iter().map(|c| c.share).collect(),
                    "",
                    Precision::Significant(2),
                    "The lasso share.",
                ),
                FactColumn::numbers(
                    "tuning error",
                    lowest,
                    unit,
                    error_digits(fitted),
                    "The lowest error in the inner parts.",
                ),
            ],
            "The lasso shares among which the best was chosen.",
        ));
    }
    let info = last.path.info(last.strength_at);
    facts.push(Fact::count(
        "chosen predictors",
        info.n_chosen,
        "How many predictors have a coefficient other than zero in the final fit.",
    ));
    facts.push(Fact::number(
        "effective degrees of freedom",
        info.effective_df - 1.0 - fitted.prepared.data.covariate_names.len() as f64,
        "",
        Precision::Significant(3),
        "How many parameters' worth of freedom the predictors use in the final fit.",
    ));
}

fn apparent(fitted: &Fitted) -> Measures {
    let rows = &fitted.prepared.data.analysed;
    let observed: Vec<f64> = rows.iter().map(|&row| fitted.observed()[row]).collect();
    Measures::of(&observed, &fitted.last.fitted)
}

/// Digits of R² and slopes.
const SHARE: Precision = Precision::Decimals(3);

fn measures(facts: &mut Facts, which: &str, m: &Measures, unit: &str, digits: Precision, on: &str) {
    let mut push = |name: &str, value: f64, unit: &str, precision: Precision, meaning: String| {
        facts.push(Fact::number(
            &format!("{which} {name}"),
            value,
            unit,
            precision,
            &meaning,
        ));
    };
    push(
        "rmse",
        m.rmse,
        unit,
        digits,
        format!("Root mean squared error {on}."),
    );
    push(
        "mae",
        m.mae,
        unit,
        digits,
        format!("Mean absolute error {on}."),
    );
    push(
        "r²",
        m.r2,
        "",
        SHARE,
        format!("R² {on}: 1 − SSE/SST, SST about the mean of the analysed samples."),
    );
}

fn tuning(facts: &mut Facts, fitted: &Fitted, unit: &str, digits: Precision) {
    let last = &fitted.last;
    let Some(curve) = last.curves.get(last.share_at) else {
        return;
    };
    if curve.standard_errors.is_empty() {
        return;
    }
    let error = curve.errors[last.strength_at];
    facts.push(Fact::number("tuning rmse", error.max(0.0).sqrt(), unit, digits, "Root mean squared error in the inner parts at the chosen strength. It chose the strength, so it flatters; it is not performance."));
    let rows = &fitted.prepared.data.analysed;
    let observed: Vec<f64> = rows.iter().map(|&row| fitted.observed()[row]).collect();
    let mean = observed.iter().sum::<f64>() / observed.len() as f64;
    let sst = observed.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / observed.len() as f64;
    facts.push(Fact::number("tuning r²", 1.0 - error / sst, "", SHARE, "R² in the inner parts at the chosen strength. It chose the strength, so it flatters; it is not performance."));
}

#[expect(
    clippy::too_many_lines,
    reason = "a list of facts, one after the other"
)]
fn nested(
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

fn certificates(facts: &mut Facts, fitted: &Fitted) {
    let tally = &fitted.tally;
    facts.push(Fact::count(
        "solutions",
        tally.solutions,
        "How many penalised fits were computed in all.",
    ));
    facts.push(Fact::count(
        "unsettled solutions",
        tally.unsettled,
        "How many of them did not reach the solver's tolerance.",
    ));
    facts.push(Fact::number("worst gap", tally.worst_gap, "", Precision::Significant(2), "The largest relative duality gap of all solutions: how far the objective can at most be from its minimum, as a share of the objective without predictors."));
    facts.push(Fact::number(
        "solver tolerance",
        Params::default().relative_gap,
        "",
        Precision::Significant(1),
        "The relative duality gap at which a fit counts as settled.",
    ));
    facts.push(Fact::count("fits checked", tally.proof.n_fits(), "For how many training parts it was checked at run time from which samples their preparation was learnt."));
    facts.push(Fact::count(
        "learned steps checked",
        tally.proof.n_learned_steps(),
        "How many learned steps were checked.",
    ));
    facts.push(Fact::count(
        "proof violations",
        tally.proof.n_violations(),
        "How many of them had been learnt from a sample that was held out.",
    ));
}
