//! What came of the fit: one sentence, how well it predicts, the error curve, the chosen predictors.

use crate::eval::fact::{FactColumn, FactTable, FactValue, FactValues, Facts};
use crate::report::Context;
use crate::report::block::{Block, Grid, Paragraph};
use crate::report::chain::{Chain, questions_of};
use crate::report::kind::fit::kind;
use crate::report::noun;
use crate::report::question::error_curve;
use crate::report::tell::Source;
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::fit::{Fit, Judge, Penalty};
use crate::study::settings::question::Ask;

/// The answer in one sentence.
#[must_use]
pub fn answer(context: &Context<'_>, fit: &Fit, source: &Source<'_>) -> Paragraph {
    let chain = Chain::from(context, fit.input);
    let units = noun::unit(chain.settings()).many;
    let outcome = chain.outcome();
    let say = |pattern: &str| source.say(&pattern.replace("UNITS", &units), &[&outcome]);
    match kind(chain.settings()) {
        Some(OutcomeKind::YesNo { .. }) => say(yes_no(source)),
        Some(OutcomeKind::Classes) => say(classes(source)),
        Some(OutcomeKind::Count { .. }) => say(counts(source)),
        Some(OutcomeKind::Time { .. }) => say(times(source)),
        Some(OutcomeKind::Measured) | None => say(measured(source)),
    }
}

fn measured(source: &Source<'_>) -> &'static str {
    match source.value("nested r²") {
        None => {
            "How well the model predicts UNITS that it has not seen was not examined; on its own \
             UNITS it seems to explain {apparent r²|%} of the variation in ‹0›, which flatters it."
        }
        Some(nested) if nested <= 0.0 => {
            "On UNITS that it has not seen, the model predicts ‹0› no better than the mean does \
             (⟨R²⟩ {nested r²}); on its own UNITS it seemed to explain {apparent r²|%}."
        }
        Some(_) => {
            "On UNITS that it has not seen, the model explains {nested r²|%} of the variation in \
             ‹0›; on its own UNITS it seemed to explain {apparent r²|%}."
        }
    }
}

fn yes_no(source: &Source<'_>) -> &'static str {
    let nested = source.value("nested auc");
    match (nested, source.value("nested auc low")) {
        (None, _) => {
            "How well the model tells “{event}” from the rest in UNITS that it has not seen was not \
             examined; on its own UNITS it seems to reach an ⟨AUC⟩ of {apparent auc}, which flatters \
             it."
        }
        (Some(nested), low) if nested <= 0.5 || low.is_some_and(|low| low <= 0.5) => {
            "On UNITS that it has not seen, the model cannot clearly tell “{event}” from the rest: the \
             ⟨AUC⟩ is {nested auc}, and guessing has one half; on its own UNITS it seemed to reach \
             {apparent auc}."
        }
        (Some(_), _) => {
            "On UNITS that it has not seen, the model puts one with “{event}” above one without in \
             {nested auc|%} of pairs (⟨AUC⟩; guessing has one half); on its own UNITS it seemed to \
             reach {apparent auc|%}."
        }
    }
}

fn classes(source: &Source<'_>) -> &'static str {
    if !source.has("nested accuracy") {
        return "How well the model tells the classes of ‹0› apart in UNITS that it has not seen was \
                not examined; on its own UNITS it seems to call {apparent accuracy} right, which \
                flatters it.";
    }
    "On UNITS that it has not seen, the model calls {nested accuracy} of the classes of ‹0› right, \
     where always the commonest class would be right in {baseline accuracy}; on its own UNITS it \
     seemed to call {apparent accuracy} right."
}

fn counts(source: &Source<'_>) -> &'static str {
    match source.value("nested deviance explained") {
        None => {
            "How well the model predicts UNITS that it has not seen was not examined; on its own \
             UNITS it seems to explain {apparent deviance explained|%} of the deviance of ‹0›, which \
             flatters it."
        }
        Some(nested) if nested <= 0.0 => {
            "On UNITS that it has not seen, the model predicts ‹0› no better than the mean rate does \
             (share of deviance explained {nested deviance explained}); on its own UNITS it seemed to \
             explain {apparent deviance explained|%}."
        }
        Some(_) => {
            "On UNITS that it has not seen, the model explains {nested deviance explained|%} of the \
             deviance of ‹0›; on its own UNITS it seemed to explain {apparent deviance explained|%}."
        }
    }
}

fn times(source: &Source<'_>) -> &'static str {
    let nested = source.value("nested concordance");
    match (nested, source.value("nested concordance low")) {
        (None, _) => {
            "How well the model orders UNITS that it has not seen by ‹0› was not examined; on its own \
             UNITS it seems to order {apparent concordance|%} of pairs rightly, which flatters it."
        }
        (Some(nested), low) if nested <= 0.5 || low.is_some_and(|low| low <= 0.5) => {
            "On UNITS that it has not seen, the model cannot clearly say which has the event earlier: \
             the concordance is {nested concordance}, and guessing has one half; on its own UNITS it \
             seemed to reach {apparent concordance}."
        }
        (Some(_), _) => {
            "On UNITS that it has not seen, the model says rightly which of two has the event earlier \
             in {nested concordance|%} of pairs (guessing has one half); on its own UNITS it seemed \
             to reach {apparent concordance|%}."
        }
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(context: &Context<'_>, fit: &Fit, source: &Source<'_>) -> Vec<Block> {
    let mut blocks = Vec::new();
    match fit.judge {
        Judge::Nested(_) => blocks.push(Block::Grid(performance(context, fit, source))),
        Judge::Declined => blocks.push(Block::Paragraph(Paragraph::of(
            "The procedure was not judged on samples that it has not seen. The error that chose \
             the penalty strength flatters the model and is not shown as its performance.",
        ))),
    }
    blocks.extend(error_curve::figure(source).map(Block::Figure));
    for (fact, title) in [
        ("at stated times", "At stated times, on samples not seen"),
        ("by class", "Class by class, on samples not seen"),
        (
            "thresholds",
            "Calls at stated thresholds, on samples not seen",
        ),
    ] {
        blocks.extend(Grid::of_table(title, source.cell, source.facts, fact).map(Block::Grid));
    }
    blocks.extend(chosen(context, fit, source));
    blocks.extend(
        Grid::of_table(
            "Covariates, unpenalised",
            source.cell,
            source.facts,
            "covariate coefficients",
        )
        .map(Block::Grid),
    );
    blocks
}

/// Held-out error against the two numbers that put it into proportion. The tuning error is left
/// out on purpose: it chose the model.
fn performance(context: &Context<'_>, fit: &Fit, source: &Source<'_>) -> Grid {
    let chain = Chain::from(context, fit.input);
    let kind = kind(chain.settings());
    let (alone, baseline) = match kind {
        Some(OutcomeKind::YesNo { .. } | OutcomeKind::Classes) => {
            ("by the class shares alone, same parts", "baseline")
        }
        Some(OutcomeKind::Count { .. }) => ("by the mean rate alone, same parts", "baseline"),
        Some(OutcomeKind::Time { .. }) => ("by one curve for all, same parts", "baseline"),
        Some(OutcomeKind::Measured) | None => ("by the mean alone, same parts", "mean-only"),
    };
    let rows: [(&str, &str); 3] = [
        ("on samples not seen (nested)", "nested"),
        (alone, baseline),
        ("on its own samples (flatters)", "apparent"),
    ];
    let column = |(measure, name, meaning): &(&str, &str, &str)| {
        let fact = |row: &str| source.facts.get(&format!("{row} {measure}"));
        let like = rows.iter().find_map(|(_, row)| fact(row));
        let value = |(_, row): &(&str, &str)| match fact(row).map(|fact| &fact.value) {
            Some(FactValue::Number(value)) => *value,
            Some(FactValue::Text(_) | FactValue::Table(_)) | None => f64::NAN,
        };
        like.map(|like| {
            FactColumn::numbers(
                name,
                rows.iter().map(value).collect(),
                &like.unit,
                like.precision,
                meaning,
            )
        })
    };
    let names = rows.iter().map(|(name, _)| (*name).to_owned()).collect();
    let mut columns = vec![FactColumn::texts("error", names, "What was predicted.")];
    columns.extend(shown(kind).iter().filter_map(column));
    Grid {
        title: "How well it predicts".to_owned(),
        columns,
        cell: source.cell,
        fact: String::new(),
    }
}

/// The measures of a kind of outcome that stand side by side: the end of the fact's name, the head
/// and the meaning of the column.
const fn shown(
    kind: Option<&OutcomeKind>,
) -> &'static [(&'static str, &'static str, &'static str)] {
    match kind {
        Some(OutcomeKind::YesNo { .. }) => &[
            (
                "auc",
                "AUC",
                "Area under the receiver operating characteristic.",
            ),
            (
                "brier",
                "Brier score",
                "Mean squared error of the probability.",
            ),
            (
                "log loss",
                "log loss",
                "Mean of minus the logarithm of the probability given to what happened.",
            ),
            (
                "misclassification",
                "called wrong",
                "Share called wrong when one half or more is called yes.",
            ),
        ],
        Some(OutcomeKind::Classes) => &[
            (
                "accuracy",
                "called right",
                "Share of samples whose most probable class is theirs.",
            ),
            (
                "balanced accuracy",
                "mean by class",
                "Mean over classes of the share called right.",
            ),
            (
                "log loss",
                "log loss",
                "Mean of minus the logarithm of the probability given to the class that was.",
            ),
            (
                "auc",
                "AUC",
                "Area under the curve of each class against the rest, averaged.",
            ),
        ],
        Some(OutcomeKind::Count { .. }) => &[
            ("deviance", "mean deviance", "Mean Poisson deviance."),
            (
                "deviance explained",
                "explained",
                "Share of the deviance that is explained.",
            ),
            ("rmse", "RMSE", "Root mean squared error."),
            ("mae", "MAE", "Mean absolute error."),
        ],
        Some(OutcomeKind::Time { .. }) => &[
            (
                "concordance",
                "concordance",
                "Share of usable pairs that are ordered rightly.",
            ),
            (
                "auc at the middle time",
                "AUC, middle time",
                "Area under the curve at the middle time.",
            ),
            (
                "brier at the early time",
                "Brier, early time",
                "Brier score at the early time.",
            ),
            (
                "brier at the middle time",
                "Brier, middle time",
                "Brier score at the middle time.",
            ),
            (
                "brier at the late time",
                "Brier, late time",
                "Brier score at the late time.",
            ),
        ],
        Some(OutcomeKind::Measured) | None => &[
            ("rmse", "RMSE", "Root mean squared error."),
            ("mae", "MAE", "Mean absolute error."),
            (
                "r²",
                "R²",
                "One minus the squared errors over the squared deviations from the mean.",
            ),
        ],
    }
}

/// The chosen predictors, never without how often they would be chosen again, or the remark that
/// nobody asked.
fn chosen(context: &Context<'_>, fit: &Fit, source: &Source<'_>) -> Vec<Block> {
    let Some(coefficients) = source.rows("coefficients") else {
        return match source.value("chosen predictors") {
            Some(0.0) => vec![Block::Paragraph(Paragraph::of(nothing_chosen(
                context, fit,
            )))],
            Some(_) | None => Vec::new(),
        };
    };
    let is_ridge = matches!(fit.penalty, Penalty::Ridge);
    let mut blocks = Vec::new();
    let mut columns = coefficients.columns.clone();
    let title = if is_ridge {
        "Coefficients of all predictors"
    } else {
        "Chosen predictors"
    };
    if !is_ridge {
        match with_facts(context, source, is_chosen_again, "frequencies") {
            Some(facts) => columns.extend(frequencies(coefficients, &facts)),
            None => blocks.push(Block::Paragraph(source.say(
                "Read this list with care: how often these {chosen predictors} [predictor|\
                 predictors] would be chosen again is not known. Ask the fit “‹0›”.",
                &["Would the same predictors be chosen again?"],
            ))),
        }
        if let Some(facts) = with_facts(context, source, is_stand_ins, "groups") {
            columns.extend(stand_ins(coefficients, &facts));
        }
    }
    blocks.push(Block::Grid(Grid {
        title: title.to_owned(),
        columns,
        cell: source.cell,
        fact: "coefficients".to_owned(),
    }));
    blocks
}

fn nothing_chosen(context: &Context<'_>, fit: &Fit) -> &'static str {
    let chain = Chain::from(context, fit.input);
    match kind(chain.settings()) {
        Some(OutcomeKind::YesNo { .. }) => {
            "No predictor was chosen: the model gives every sample the same probability, up to \
             covariates."
        }
        Some(OutcomeKind::Classes) => {
            "No predictor was chosen: the model gives every sample the same probabilities, up to \
             covariates."
        }
        Some(OutcomeKind::Count { .. }) => {
            "No predictor was chosen: the model is the mean rate alone, up to covariates."
        }
        Some(OutcomeKind::Time { .. }) => {
            "No predictor was chosen: the model has one curve for all samples, up to covariates."
        }
        Some(OutcomeKind::Measured) | None => {
            "No predictor was chosen: the model is the mean alone."
        }
    }
}

fn is_chosen_again(ask: &Ask) -> bool {
    matches!(ask, Ask::ChosenAgain { .. })
}

fn is_stand_ins(ask: &Ask) -> bool {
    matches!(ask, Ask::StandIns { .. })
}

/// The facts of the first question of this sort that is asked of the fit and gives this table.
fn with_facts(
    context: &Context<'_>,
    source: &Source<'_>,
    is_sought: fn(&Ask) -> bool,
    fact: &str,
) -> Option<Facts> {
    questions_of(context, source.cell)
        .filter(|(_, question)| is_sought(&question.ask))
        .filter_map(|(cell, _)| context.outcome(cell.id))
        .find(|outcome| outcome.facts.table(fact).is_some())
        .map(|outcome| outcome.facts.clone())
}

/// The columns of another table, matched to the predictors of this one.
fn frequencies(coefficients: &FactTable, facts: &Facts) -> Vec<FactColumn> {
    ["frequency", "low", "high", "sign consistency"]
        .iter()
        .filter_map(|column| matched(coefficients, facts.table("frequencies")?, column))
        .map(|mut column| {
            if column.name == "low" || column.name == "high" {
                column.name = format!("frequency, {}", column.name);
            }
            column
        })
        .collect()
}

fn stand_ins(coefficients: &FactTable, facts: &Facts) -> Option<FactColumn> {
    let mut column = matched(coefficients, facts.table("groups")?, "stand-ins")?;
    // A predictor that is in no group has no stand-in.
    if let FactValues::Numbers(numbers) = &mut column.values {
        for number in numbers.iter_mut().filter(|number| number.is_nan()) {
            *number = 0.0;
        }
    }
    Some(column)
}

fn matched(coefficients: &FactTable, other: &FactTable, name: &str) -> Option<FactColumn> {
    let column = other.column(name)?;
    let keys = other.texts("predictor");
    let values = other.numbers(name);
    let value = |predictor: &String| {
        keys.iter()
            .position(|key| key == predictor)
            .and_then(|row| values.get(row).copied())
            .unwrap_or(f64::NAN)
    };
    Some(FactColumn::numbers(
        name,
        coefficients.texts("predictor").iter().map(value).collect(),
        &column.unit,
        column.precision,
        &column.meaning,
    ))
}
