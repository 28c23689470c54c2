//! The facts of a Fit cell.

use crate::base::number::{Precision, decimals_for};
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::fit::performance::{Measures, performance};
use crate::eval::kind::fit::{Fitted, nested, tables};
use crate::numeric::choose;
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
        nested::publish(facts, fitted, judged, performance, &apparent, &unit, digits);
    }
    certificates(facts, fitted);
    coefficients(facts, fitted);
    if let Some(curve) = fitted.last.curves.get(fitted.last.share_at) {
        facts.push(tables::error_curve(fitted, curve, &unit, digits));
    }
    if let (Some(judged), Some(performance)) = (judged, &held_out) {
        facts.push(tables::outer_choices(fitted, judged, &unit, digits));
        facts.push(tables::held_out_predictions(
            fitted,
            performance,
            &unit,
            digits,
        ));
        facts.push(tables::assignments(fitted, judged));
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
pub(super) const SHARE: Precision = Precision::Decimals(3);

pub(super) fn measures(
    facts: &mut Facts,
    which: &str,
    m: &Measures,
    unit: &str,
    digits: Precision,
    on: &str,
) {
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

fn coefficients(facts: &mut Facts, fitted: &Fitted) {
    let last = &fitted.last;
    let raw = last.path.coefficients(last.strength_at);
    let standardised: std::collections::BTreeMap<usize, f64> = last
        .path
        .standardised(last.strength_at)
        .into_iter()
        .collect();
    let digits = Precision::Significant(4);
    facts.push(Fact::number(
        "intercept",
        raw.intercept,
        &fitted.prepared.data.outcome.unit,
        digits,
        "The intercept of the final fit, for predictors as prepared but not scaled.",
    ));
    facts.push(Fact::table("coefficients", vec![
        FactColumn::texts("predictor", raw.predictors.iter().map(|(at, _)| fitted.column_name(*at)).collect(), "The chosen predictor."),
        FactColumn::numbers("coefficient", raw.predictors.iter().map(|(_, value)| *value).collect(), "", digits, "Its coefficient, for predictors as prepared but not scaled. Shrunken and conditional on what else is in the model: a recipe weight, not an effect."),
        FactColumn::numbers("standardised coefficient", raw.predictors.iter().map(|(at, _)| standardised.get(at).copied().unwrap_or(f64::NAN)).collect(), "", digits, "Its coefficient on the scale that the penalty sees."),
    ], "The chosen predictors of the final fit and their coefficients."));
    if !raw.covariates.is_empty() {
        facts.push(Fact::table(
            "covariate coefficients",
            vec![
                FactColumn::texts(
                    "covariate",
                    fitted.prepared.data.covariate_names.clone(),
                    "The covariate.",
                ),
                FactColumn::numbers(
                    "coefficient",
                    raw.covariates,
                    "",
                    digits,
                    "Its coefficient; not penalised.",
                ),
            ],
            "The coefficients of the covariates in the final fit.",
        ));
    }
}
