//! What came of the fit: one sentence, how well it predicts, the error curve, the chosen predictors.

use crate::eval::fact::{FactColumn, FactTable, FactValue, FactValues, Facts};
use crate::report::Context;
use crate::report::block::{Block, Grid, Paragraph};
use crate::report::chain::{Chain, questions_of};
use crate::report::noun;
use crate::report::question::error_curve;
use crate::report::tell::Source;
use crate::study::settings::fit::{Fit, Judge, Penalty};
use crate::study::settings::question::Ask;

/// The answer in one sentence.
#[must_use]
pub fn answer(context: &Context<'_>, fit: &Fit, source: &Source<'_>) -> Paragraph {
    let chain = Chain::from(context, fit.input);
    let units = noun::unit(chain.settings()).many;
    let outcome = chain.outcome();
    match source.value("nested r²") {
        None => source.say(
            &format!(
                "How well the model predicts {units} that it has not seen was not examined; on its \
                 own {units} it seems to explain {{apparent r²|%}} of the variation in ‹0›, which \
                 flatters it."
            ),
            &[&outcome],
        ),
        Some(nested) if nested <= 0.0 => source.say(
            &format!(
                "On {units} that it has not seen, the model predicts ‹0› no better than the mean \
                 does (⟨R²⟩ {{nested r²}}); on its own {units} it seemed to explain {{apparent \
                 r²|%}}."
            ),
            &[&outcome],
        ),
        Some(_) => source.say(
            &format!(
                "On {units} that it has not seen, the model explains {{nested r²|%}} of the \
                 variation in ‹0›; on its own {units} it seemed to explain {{apparent r²|%}}."
            ),
            &[&outcome],
        ),
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(context: &Context<'_>, fit: &Fit, source: &Source<'_>) -> Vec<Block> {
    let mut blocks = Vec::new();
    match fit.judge {
        Judge::Nested(_) => blocks.push(Block::Grid(performance(source))),
        Judge::Declined => blocks.push(Block::Paragraph(Paragraph::of(
            "The procedure was not judged on samples that it has not seen. The error that chose \
             the penalty strength flatters the model and is not shown as its performance.",
        ))),
    }
    blocks.extend(error_curve::figure(source).map(Block::Figure));
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
fn performance(source: &Source<'_>) -> Grid {
    const ROWS: [(&str, &str); 3] = [
        ("on samples not seen (nested)", "nested"),
        ("by the mean alone, same parts", "mean-only"),
        ("on its own samples (flatters)", "apparent"),
    ];
    let column = |measure: &str, name: &str, meaning: &str| {
        let fact = |row: &str| source.facts.get(&format!("{row} {measure}"));
        let like = ROWS.iter().find_map(|(_, row)| fact(row));
        let value = |(_, row): &(&str, &str)| match fact(row).map(|fact| &fact.value) {
            Some(FactValue::Number(value)) => *value,
            Some(FactValue::Text(_) | FactValue::Table(_)) | None => f64::NAN,
        };
        like.map(|like| {
            FactColumn::numbers(
                name,
                ROWS.iter().map(value).collect(),
                &like.unit,
                like.precision,
                meaning,
            )
        })
    };
    let names = ROWS.iter().map(|(name, _)| (*name).to_owned()).collect();
    let mut columns = vec![FactColumn::texts("error", names, "What was predicted.")];
    columns.extend(column("rmse", "RMSE", "Root mean squared error."));
    columns.extend(column("mae", "MAE", "Mean absolute error."));
    columns.extend(column(
        "r²",
        "R²",
        "One minus the squared errors over the squared deviations from the mean.",
    ));
    Grid {
        title: "How well it predicts".to_owned(),
        columns,
        cell: source.cell,
        fact: String::new(),
    }
}

/// The chosen predictors, never without how often they would be chosen again, or the remark that
/// nobody asked.
fn chosen(context: &Context<'_>, fit: &Fit, source: &Source<'_>) -> Vec<Block> {
    let Some(coefficients) = source.rows("coefficients") else {
        return match source.value("chosen predictors") {
            Some(0.0) => vec![Block::Paragraph(Paragraph::of(
                "No predictor was chosen: the model is the mean alone.",
            ))],
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
