//! What could stand in for the chosen predictors?

use crate::base::number::{self, Precision};
use crate::eval::fact::FactTable;
use crate::figure::shape::Caption;
use crate::figure::shape::stand_ins::StandIns;
use crate::figure::{Meaning, Tip};
use crate::report::block::{Block, Grid, NamedFigure, Paragraph};
use crate::report::tell::{Source, Telling};
use std::collections::BTreeMap;

/// At most so many chosen predictors and stand-ins are shown as tiles.
const SHOWN: usize = 24;

/// The answer in one sentence.
#[must_use]
pub fn answer(source: &Source<'_>) -> Paragraph {
    if source.value("chosen predictors") == Some(0.0) {
        return source.say(
            "The fit chose no predictor, so that none needs a stand-in.",
            &[],
        );
    }
    if source.is_above_zero("predictors with stand-ins") {
        source.say(
            "{predictors with stand-ins} of {chosen predictors} chosen [predictor|predictors] \
             could be replaced by others that carry nearly the same information, {stand-ins in \
             all} in all; which of them is in the list is partly luck.",
            &[],
        )
    } else {
        source.say(
            "No other predictor is correlated with a chosen one to {correlation threshold} or \
             more: the list has no stand-ins.",
            &[],
        )
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figure(source).map(Block::Figure).into_iter().collect();
    for (fact, title) in [
        ("groups", "Each chosen predictor and its stand-ins"),
        ("stand-ins", "All stand-ins"),
    ] {
        blocks.extend(Grid::of_table(title, source.cell, source.facts, fact).map(Block::Grid));
    }
    blocks
}

fn figure(source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("stand-ins")?;
    let chosen = first(table.texts("predictor"));
    let stand_ins = strongest(table, &chosen);
    let known: BTreeMap<(&str, &str), f64> = table
        .texts("predictor")
        .iter()
        .zip(table.texts("stand-in"))
        .zip(table.numbers("correlation"))
        .map(|((predictor, stand_in), correlation)| {
            ((predictor.as_str(), stand_in.as_str()), *correlation)
        })
        .collect();
    let mut correlations = Vec::new();
    let mut texts = Vec::new();
    let mut tips = Vec::new();
    for predictor in &chosen {
        for stand_in in &stand_ins {
            let correlation = known
                .get(&(predictor.as_str(), stand_in.as_str()))
                .copied()
                .unwrap_or(f64::NAN);
            let text = if correlation.is_finite() {
                number::text(correlation, Precision::Decimals(2))
            } else {
                String::new()
            };
            tips.push(Tip::new(
                Meaning::Pair(predictor.clone(), stand_in.clone()),
                if text.is_empty() {
                    format!("{stand_in} is no stand-in for {predictor}")
                } else {
                    format!("{stand_in} for {predictor}: correlation {text}")
                },
            ));
            correlations.push(correlation);
            texts.push(text);
        }
    }
    let shape = StandIns {
        caption: Caption {
            title: "Correlation of chosen predictors with their stand-ins".to_owned(),
            description: "One tile for each chosen predictor and each of its strongest stand-ins."
                .to_owned(),
            empty: "There are no stand-ins.".to_owned(),
        },
        row_label: "chosen".to_owned(),
        column_label: "stand-ins".to_owned(),
        chosen,
        stand_ins,
        correlations,
        texts,
        key: vec!["−1".to_owned(), "1".to_owned()],
        tips,
    };
    Some(NamedFigure {
        name: "stand-ins".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of("Treat each block as one finding."),
    })
}

/// The first names, each once, in their order.
fn first(names: &[String]) -> Vec<String> {
    let mut all: Vec<String> = Vec::new();
    for name in names {
        if all.len() == SHOWN {
            break;
        }
        if !all.contains(name) {
            all.push(name.clone());
        }
    }
    all
}

/// The stand-ins with the strongest correlations with these predictors, in the order of the table.
fn strongest(table: &FactTable, chosen: &[String]) -> Vec<String> {
    let names = table.texts("stand-in");
    let correlations = table.numbers("correlation");
    let mut rows: Vec<usize> = table
        .texts("predictor")
        .iter()
        .enumerate()
        .filter(|(_, predictor)| chosen.contains(predictor))
        .map(|(row, _)| row)
        .collect();
    let size = |row: &usize| correlations.get(*row).map_or(0.0, |value| value.abs());
    rows.sort_by(|a, b| size(b).total_cmp(&size(a)).then(a.cmp(b)));
    let mut shown: Vec<usize> = Vec::new();
    let mut seen: Vec<&String> = Vec::new();
    for row in rows {
        if seen.len() == SHOWN {
            break;
        }
        if let Some(name) = names.get(row)
            && !seen.contains(&name)
        {
            seen.push(name);
            shown.push(row);
        }
    }
    shown.sort_unstable();
    shown.into_iter().map(|row| names[row].clone()).collect()
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    telling.say(source.say(
        "A predictor counted as a stand-in for a chosen one when the absolute correlation of the \
         two was at least {correlation threshold}.",
        &[],
    ));
    if source.is_above_zero("predictors with stand-ins") {
        telling.say(source.say(
            "{predictors with stand-ins} of {chosen predictors} chosen [predictor|predictors] had \
             stand-ins, {stand-ins in all} in all; the largest group held {largest group}.",
            &[],
        ));
    } else {
        telling.say(Paragraph::of("No chosen predictor had one."));
    }
    telling.done()
}
