//! The facts of a Fit cell.

use crate::base::number::{Precision, decimals_for};
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::fit::measures::{Measure, Measures, Sort};
use crate::eval::kind::fit::performance::performance;
use crate::eval::kind::fit::procedure::numeric_measure;
use crate::eval::kind::fit::{Fitted, coefficients, kinds, nested, tables, weights};
use crate::numeric::choose;
use crate::numeric::path::Params;
use crate::numeric::procedure::{Cut, ErrorMeasure, Extended, penalised_freedom};
use crate::study::settings::fit::{
    Grouping, Judge, Penalty, Plan, Rule, Scaling, Scheme, Strength, Ties,
};

/// Digits of a strength in text.
pub(super) const STRENGTH: Precision = Precision::Significant(3);

/// Publishes the facts of a Fit cell.
pub fn publish(facts: &mut Facts, fitted: &Fitted) {
    settings(facts, fitted);
    outcome(facts, fitted);
    strength(facts, fitted);
    weights::publish(facts, fitted);
    let digits = error_digits(fitted);
    let apparent = fitted.scene().measures(&fitted.last.apparent);
    measures(
        facts,
        fitted,
        "apparent",
        fitted.sort().always(),
        &apparent,
        "on the samples it was fitted to",
    );
    tuning(facts, fitted, digits);
    let judged = fitted.judged.as_ref();
    let held_out =
        judged.map(|judged| performance(&fitted.scene(), &fitted.prepared.data, &judged.held_out));
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
        nested::publish(facts, fitted, judged, performance, &apparent);
    }
    certificates(facts, fitted);
    coefficients::publish(facts, fitted);
    if let Some(curve) = fitted.last.curves.get(fitted.last.share_at) {
        facts.push(tables::error_curve(fitted, curve));
    }
    if let (Some(judged), Some(performance)) = (judged, &held_out) {
        facts.push(tables::outer_choices(fitted, judged));
        facts.push(tables::held_out_predictions(fitted, performance));
        facts.push(tables::assignments(fitted, judged));
    }
}

/// Three significant digits of the outcome's spread, as decimals, for all errors in its unit, so
/// that they line up.
#[must_use]
pub fn error_digits(fitted: &Fitted) -> Precision {
    let values = match fitted.sort() {
        Sort::Measured | Sort::Count => fitted.scene().observed(),
        Sort::YesNo | Sort::Classes | Sort::Time => return Precision::Decimals(3),
    };
    let mean = values.iter().sum::<f64>() / values.len() as f64;
    let spread =
        (values.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / values.len() as f64).sqrt();
    // An error is often a fifth of the spread; one more digit keeps three of them.
    Precision::Decimals(decimals_for(spread / 3.0, 3))
}

/// Whether the errors of the curve are told as roots, in the unit of the outcome.
fn is_root(fitted: &Fitted) -> bool {
    let is_square = measure_of(fitted) == ErrorMeasure::SquaredError;
    let by_parts = matches!(
        &fitted.settings.strength,
        Strength::Chosen { rule, .. } if rule.needs_parts()
    );
    is_square && by_parts && matches!(fitted.sort(), Sort::Measured | Sort::Count)
}

fn measure_of(fitted: &Fitted) -> ErrorMeasure {
    numeric_measure(fitted.settings.measure, &fitted.response)
}

/// An error of the curve with its standard error, as it is told: a root where it is a mean square.
#[must_use]
pub fn curve_error(fitted: &Fitted, error: f64, standard_error: f64) -> (f64, f64) {
    if is_root(fitted) {
        let root = error.max(0.0).sqrt();
        // By the delta method: the standard error of a root is that of the square over twice it.
        (root, standard_error / (2.0 * root))
    } else {
        (error, standard_error)
    }
}

/// The unit and the digits of the errors of the curve.
#[must_use]
pub fn curve_unit(fitted: &Fitted) -> (String, Precision) {
    if is_root(fitted) {
        let unit = fitted.prepared.data.outcome.unit.clone();
        (unit, error_digits(fitted))
    } else {
        (String::new(), Precision::Decimals(4))
    }
}

/// What the errors of the curve are called.
#[must_use]
pub fn measure_words(fitted: &Fitted) -> &'static str {
    match (measure_of(fitted), fitted.sort()) {
        (ErrorMeasure::SquaredError, Sort::YesNo) => "mean squared error of the probability",
        (ErrorMeasure::SquaredError, _) => "mean squared error",
        (ErrorMeasure::Deviance, _) => "mean deviance",
        (ErrorMeasure::Misclassification, _) => "share called wrong",
        (ErrorMeasure::PartialLikelihood, _) => "partial likelihood deviance for each event",
        (ErrorMeasure::Concordance, _) => "share of pairs ordered wrongly",
    }
}

/// What is known of the outcome among the analysed samples.
fn outcome(facts: &mut Facts, fitted: &Fitted) {
    let scene = fitted.scene();
    let data = &fitted.prepared.data;
    facts.push(Fact::text(
        "kind of outcome",
        fitted.sort().word(),
        "What sort of thing is predicted.",
    ));
    let events: Vec<usize> = scene
        .rows
        .iter()
        .zip(scene.events())
        .filter(|(_, event)| *event)
        .map(|(row, _)| *row)
        .collect();
    match fitted.sort() {
        Sort::Measured | Sort::Count => {}
        Sort::YesNo => {
            facts.push(Fact::text(
                "event",
                data.outcome.classes.get(1).cloned().unwrap_or_default(),
                "The value that counts as the event.",
            ));
            facts.push(Fact::count(
                "events",
                events.len(),
                "How many of the analysed samples had the event.",
            ));
            facts.push(Fact::number(
                "prevalence",
                events.len() as f64 / scene.rows.len() as f64,
                "",
                Precision::Percent(0),
                "Their share.",
            ));
            facts.push(Fact::count(
                "units with an event",
                data.count_units(&events),
                "To how many independent units they belong.",
            ));
        }
        Sort::Classes => facts.push(kinds::class_counts(fitted)),
        Sort::Time => {
            facts.push(Fact::count(
                "events",
                events.len(),
                "In how many of the analysed samples the event was seen.",
            ));
            facts.push(Fact::count(
                "censored",
                scene.rows.len() - events.len(),
                "In how many observation ended before an event.",
            ));
            facts.push(Fact::count(
                "units with an event",
                data.count_units(&events),
                "To how many independent units the events belong.",
            ));
            let unit = &data.outcome.unit;
            for (name, time) in ["early time", "middle time", "late time"]
                .into_iter()
                .zip(fitted.horizons)
            {
                facts.push(Fact::number(
                    name,
                    time,
                    unit,
                    Precision::Significant(4),
                    "A time at which predictions are judged: the quartiles of the event times.",
                ));
            }
            facts.push(Fact::text(
                "ties",
                match fitted.settings.ties {
                    Ties::Efron => "Efron",
                    Ties::Breslow => "Breslow",
                },
                "How events at equal times are counted in the partial likelihood.",
            ));
        }
    }
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
    if fitted.sort() == Sort::Classes && fitted.last.share > 0.0 {
        let words = match settings.grouping {
            Grouping::Apart => "each class by itself",
            Grouping::Together => "all classes together, a predictor in or out as a whole",
        };
        facts.push(Fact::text(
            "grouping",
            words,
            "How the coefficients of a predictor in the classes are penalised.",
        ));
    }
    let sort = fitted.sort();
    let rule = match &settings.strength {
        Strength::ByHand(_) => "by hand",
        Strength::Chosen { rule, inner, .. } => {
            if rule.needs_parts() {
                plan(facts, "inner", *inner, sort);
                facts.push(Fact::text(
                    "error measure",
                    measure_words(fitted),
                    "What was compared between strengths on the inner held-out parts.",
                ));
            }
            match rule {
                Rule::LowestError => "lowest error",
                Rule::OneStandardError => "one standard error",
                Rule::GeneralisedCrossValidation => "generalised cross-validation",
                Rule::ExtendedBic { .. } => "extended BIC",
                Rule::Given { .. } => "by hand",
            }
        }
    };
    facts.push(Fact::text(
        "rule",
        rule,
        "The rule that chose the penalty strength.",
    ));
    if let Judge::Nested(outer) = settings.judge {
        plan(facts, "outer", outer, sort);
    }
    facts.push(Fact::number(
        "seed",
        settings.seed as f64,
        "",
        Precision::Full,
        "The seed of all that was drawn at random.",
    ));
}

fn plan(facts: &mut Facts, level: &str, plan: Plan, sort: Sort) {
    let scheme = match plan.scheme {
        Scheme::Units => "units at random",
        Scheme::Balanced if sort == Sort::Time => "units at random, events spread evenly",
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
    let sort = fitted.sort();
    let (own, times_n, times_2n) = match sort {
        Sort::Measured => (
            "The penalty strength of the final fit, in the objective with the loss over 2n.",
            "The chosen strength for a loss of half the sum of squares; in ridge the constant added to the diagonal.",
            "The chosen strength for a loss of the sum of squares.",
        ),
        Sort::YesNo | Sort::Classes | Sort::Count => (
            "The penalty strength of the final fit, in the objective with the mean loss.",
            "The chosen strength for a loss that is minus the log likelihood.",
            "The chosen strength for a loss that is the deviance.",
        ),
        Sort::Time => (
            "The penalty strength of the final fit, in the objective with minus the log partial likelihood over n.",
            "The chosen strength for a loss that is minus the log partial likelihood.",
            "The chosen strength for a loss that is minus twice the log partial likelihood.",
        ),
    };
    push("chosen strength", last.strength, own);
    push("strength times n", last.strength * n, times_n);
    push("strength times 2n", last.strength * 2.0 * n, times_2n);
    push(
        "inverse strength",
        1.0 / (last.strength * n),
        "The chosen strength in the inverse form, 1 over strength times n.",
    );
    if sort == Sort::Time {
        push(
            "strength times 2",
            last.strength * 2.0,
            "The chosen strength for a loss that is minus the log partial likelihood times 2/n.",
        );
    }
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
        let at_edge = last.is_at_edge();
        facts.push(Fact::text("strength at edge", if at_edge { "yes" } else { "no" }, "Whether the chosen strength lies at an end of the range where a better one could lie beyond."));
        if last.extended == Extended::Once {
            facts.push(Fact::text(
                "range extended",
                "once, because its weak end was best",
                "Whether the range of strengths was made longer.",
            ));
        }
        if last.cut == Cut::WhereExplained {
            facts.push(Fact::text(
                "range cut",
                "where the fit explains 99 % of its samples’ deviance",
                "Whether the range of strengths was cut short, because weaker penalties would only follow single samples.",
            ));
        }
    }
    if last.curves.len() > 1 {
        let lowest: Vec<f64> = last
            .curves
            .iter()
            .map(|curve| {
                choose::lowest(&curve.errors)
                    .map_or(f64::NAN, |at| curve_error(fitted, curve.errors[at], 0.0).0)
            })
            .collect();
        let (unit, digits) = curve_unit(fitted);
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
                    &unit,
                    digits,
                    "The lowest error in the inner parts, or the lowest value of the criterion.",
                ),
            ],
            "The lasso shares among which the best was chosen.",
        ));
    }
    facts.push(Fact::count(
        "chosen predictors",
        fitted.chosen().len(),
        "How many predictors have a coefficient other than zero in the final fit.",
    ));
    let covariates = fitted.prepared.data.covariate_names.len();
    facts.push(Fact::number(
        "effective degrees of freedom",
        penalised_freedom(&last.path, last.strength_at, &fitted.response, covariates),
        "",
        Precision::Significant(3),
        "How many parameters' worth of freedom the predictors use in the final fit.",
    ));
}

/// Digits of a share of deviance.
pub(super) const SHARE: Precision = Precision::Decimals(3);

/// Publishes measures; those that are not defined are left out, unless they are of a measured
/// outcome, whose list of facts is the same for every fit.
pub(super) fn measures(
    facts: &mut Facts,
    fitted: &Fitted,
    which: &str,
    list: &[Measure],
    values: &Measures,
    on: &str,
) {
    let sort = fitted.sort();
    let unit = &fitted.prepared.data.outcome.unit;
    let digits = error_digits(fitted);
    for measure in list {
        let value = values.get(*measure);
        if value.is_nan() && sort != Sort::Measured {
            continue;
        }
        let meaning = match on {
            "" => format!("{}.", measure.meaning(sort)),
            on => format!("{}, {on}.", measure.meaning(sort)),
        };
        facts.push(Fact::number(
            &format!("{which} {}", measure.name()),
            value,
            measure.unit(unit),
            measure.digits(digits),
            &meaning,
        ));
    }
}

fn tuning(facts: &mut Facts, fitted: &Fitted, digits: Precision) {
    let last = &fitted.last;
    let Some(curve) = last.curves.get(last.share_at) else {
        return;
    };
    if curve.standard_errors.is_empty() {
        return;
    }
    let error = curve.errors[last.strength_at];
    let flatters = "It chose the strength, so it flatters; it is not performance.";
    if fitted.sort() == Sort::Measured {
        let unit = &fitted.prepared.data.outcome.unit;
        facts.push(Fact::number(
            "tuning rmse",
            error.max(0.0).sqrt(),
            unit,
            digits,
            &format!(
                "Root mean squared error in the inner parts at the chosen strength. {flatters}"
            ),
        ));
        facts.push(Fact::number(
            "tuning r²",
            1.0 - error / fitted.scene().null_loss(),
            "",
            SHARE,
            &format!("R² in the inner parts at the chosen strength. {flatters}"),
        ));
        return;
    }
    let (unit, digits) = curve_unit(fitted);
    let (error, _) = curve_error(fitted, error, 0.0);
    facts.push(Fact::number(
        "tuning error",
        error,
        &unit,
        digits,
        &format!(
            "The {} in the inner parts at the chosen strength. {flatters}",
            measure_words(fitted)
        ),
    ));
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
