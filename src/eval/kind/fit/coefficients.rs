//! The facts of a fit on its coefficients, and what else a stranger needs to use it.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::fit::Fitted;
use crate::eval::kind::fit::measures::Sort;
use crate::numeric::path::Coefficients;
use std::collections::BTreeMap;

const DIGITS: Precision = Precision::Significant(4);

const MEANING: &str = "Its coefficient, for predictors as prepared but not scaled. Shrunken and conditional on what else is in the model: a recipe weight, not an effect.";

/// Publishes the coefficients of the final fit.
pub(super) fn publish(facts: &mut Facts, fitted: &Fitted) {
    if fitted.sort() == Sort::Classes {
        classes(facts, fitted);
        return;
    }
    let last = &fitted.last;
    let raw = last.path.coefficients(last.strength_at);
    let standardised: BTreeMap<usize, f64> = last
        .path
        .standardised(last.strength_at)
        .into_iter()
        .collect();
    let (unit, meaning) = match fitted.sort() {
        Sort::Measured => (
            fitted.prepared.data.outcome.unit.as_str(),
            "The intercept of the final fit, for predictors as prepared but not scaled.",
        ),
        Sort::YesNo => (
            "",
            "The intercept of the final fit on the scale of log odds, for predictors as prepared but not scaled.",
        ),
        Sort::Count | Sort::Classes => (
            "",
            "The intercept of the final fit on the scale of logarithms, for predictors as prepared but not scaled.",
        ),
        Sort::Time => (
            "",
            "What is added to the linear predictor, so that it is zero at the means of the samples; the baseline below belongs to it.",
        ),
    };
    facts.push(Fact::number(
        "intercept",
        raw.intercept,
        unit,
        DIGITS,
        meaning,
    ));
    facts.push(Fact::table(
        "coefficients",
        vec![
            names(fitted, raw.predictors.iter().map(|(at, _)| *at)),
            FactColumn::numbers(
                "coefficient",
                raw.predictors.iter().map(|(_, value)| *value).collect(),
                "",
                DIGITS,
                MEANING,
            ),
            FactColumn::numbers(
                "standardised coefficient",
                raw.predictors
                    .iter()
                    .map(|(at, _)| standardised.get(at).copied().unwrap_or(f64::NAN))
                    .collect(),
                "",
                DIGITS,
                "Its coefficient on the scale that the penalty sees.",
            ),
        ],
        "The chosen predictors of the final fit and their coefficients.",
    ));
    if !raw.covariates.is_empty() {
        let columns = vec![FactColumn::numbers(
            "coefficient",
            raw.covariates,
            "",
            DIGITS,
            "Its coefficient; not penalised.",
        )];
        facts.push(covariates(fitted, columns));
    }
    if fitted.sort() == Sort::Time {
        baseline(facts, fitted);
    }
}

fn names(fitted: &Fitted, columns: impl Iterator<Item = usize>) -> FactColumn {
    FactColumn::texts(
        "predictor",
        columns.map(|at| fitted.column_name(at)).collect(),
        "The chosen predictor.",
    )
}

fn covariates(fitted: &Fitted, columns: Vec<FactColumn>) -> Fact {
    let mut all = vec![FactColumn::texts(
        "covariate",
        fitted.prepared.data.covariate_names.clone(),
        "The covariate.",
    )];
    all.extend(columns);
    Fact::table(
        "covariate coefficients",
        all,
        "The coefficients of the covariates in the final fit.",
    )
}

/// One column of coefficients for each class.
fn classes(facts: &mut Facts, fitted: &Fitted) {
    let last = &fitted.last;
    let labels = &fitted.prepared.data.outcome.classes;
    let by_class = last.path.class_coefficients(last.strength_at);
    let largest = fitted.chosen();
    facts.push(Fact::table(
        "intercepts",
        vec![
            FactColumn::texts("class", labels.clone(), "The class."),
            FactColumn::numbers(
                "intercept",
                by_class.iter().map(|class| class.intercept).collect(),
                "",
                DIGITS,
                "Its intercept, for predictors as prepared but not scaled.",
            ),
        ],
        "The intercepts of the final fit; only their differences matter.",
    ));
    let mut columns = vec![names(fitted, largest.iter().map(|(at, _)| *at))];
    for (label, class) in labels.iter().zip(&by_class) {
        let known: BTreeMap<usize, f64> = class.predictors.iter().copied().collect();
        columns.push(FactColumn::numbers(
            &format!("coefficient for {label}"),
            largest
                .iter()
                .map(|(at, _)| known.get(at).copied().unwrap_or(0.0))
                .collect(),
            "",
            DIGITS,
            MEANING,
        ));
    }
    columns.push(FactColumn::numbers(
        "standardised coefficient",
        largest.iter().map(|(_, value)| *value).collect(),
        "",
        DIGITS,
        "The largest of its coefficients in the classes, on the scale that the penalty sees.",
    ));
    facts.push(Fact::table(
        "coefficients",
        columns,
        "The chosen predictors of the final fit and their coefficients in each class.",
    ));
    let has_covariates = by_class.first().is_some_and(|c| !c.covariates.is_empty());
    if has_covariates {
        let column = |(label, class): (&String, &Coefficients)| {
            FactColumn::numbers(
                &format!("coefficient for {label}"),
                class.covariates.clone(),
                "",
                DIGITS,
                "Its coefficient; not penalised.",
            )
        };
        let columns = labels.iter().zip(&by_class).map(column).collect();
        facts.push(covariates(fitted, columns));
    }
}

/// The share without the event along time, at a linear predictor of zero.
fn baseline(facts: &mut Facts, fitted: &Fitted) {
    let Some(hazard) = &fitted.last.hazard else {
        return;
    };
    let scene = fitted.scene();
    let mut times: Vec<f64> = scene
        .observed()
        .into_iter()
        .zip(scene.events())
        .filter(|(_, event)| *event)
        .map(|(time, _)| time)
        .collect();
    times.sort_by(f64::total_cmp);
    times.dedup();
    let unit = &fitted.prepared.data.outcome.unit;
    facts.push(Fact::table(
        "baseline survival",
        vec![
            FactColumn::numbers(
                "time",
                times.clone(),
                unit,
                Precision::Significant(4),
                "A time with an event.",
            ),
            FactColumn::numbers(
                "cumulative hazard",
                times.iter().map(|time| hazard.at(0, *time)).collect(),
                "",
                DIGITS,
                "The cumulative hazard at a linear predictor of zero (Breslow 1974).",
            ),
            FactColumn::numbers(
                "share without the event",
                times
                    .iter()
                    .map(|time| hazard.survival(0, *time, 0.0))
                    .collect(),
                "",
                DIGITS,
                "What follows from it.",
            ),
        ],
        "What turns a linear predictor into a share without the event.",
    ));
}
