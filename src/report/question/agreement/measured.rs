//! Measured quantities: predicted against observed values.

use crate::eval::fact::FactTable;
use crate::figure::shape::agreement::Agreement;
use crate::figure::shape::{Caption, Heading};
use crate::figure::{Meaning, Note, Tip};
use crate::report::block::{Block, Grid, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::noun;
use crate::report::tell::{Source, Telling};

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, source: &Source<'_>) -> Paragraph {
    let units = noun::unit(chain.settings()).many;
    let start = source.say(
        &format!(
            "On {units} that it has not seen, predictions miss by {{nested mae}} on average, with \
             an average difference (bias) of {{bias}}"
        ),
        &[],
    );
    match (source.value("slope low"), source.value("slope high")) {
        (Some(low), Some(high)) if low > 1.0 && high > 1.0 => start.and(source.say(
            "; the predictions are timid: where they differ by one, observations differ by {slope}.",
            &[],
        )),
        (Some(low), Some(high)) if low < 1.0 && high < 1.0 => start.and(source.say(
            "; the predictions are too extreme: where they differ by one, observations differ by \
             {slope}.",
            &[],
        )),
        (Some(_), Some(_)) => start.and(source.say(
            "; the slope of observed on predicted values ({slope}) cannot be told from one.",
            &[],
        )),
        (Some(_) | None, None) | (None, Some(_)) => start.text("."),
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(chain: &Chain<'_>, source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figure(chain, source)
        .map(Block::Figure)
        .into_iter()
        .collect();
    let numbers = source.given(&[
        "nested rmse",
        "nested mae",
        "nested r²",
        "bias",
        "sep",
        "slope",
        "slope low",
        "slope high",
        "intercept",
        "correlation",
        "reference error",
    ]);
    blocks.push(Block::Grid(Grid::of_facts(
        "How well predictions match, on samples not seen",
        source.cell,
        &numbers,
    )));
    blocks.extend(
        Grid::of_table(
            "Held-out predictions",
            source.cell,
            source.facts,
            "held-out predictions",
        )
        .map(Block::Grid),
    );
    blocks
}

fn figure(chain: &Chain<'_>, source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("held-out predictions")?;
    let outcome = chain.outcome();
    let unit = table
        .column("observed")
        .map_or_else(String::new, |column| column.unit.clone());
    // The slope stands among the numbers beside the figure, where nothing can cover it.
    let line = match (source.value("intercept"), source.value("slope")) {
        (Some(intercept), Some(slope)) => Some((intercept, slope, String::new())),
        (Some(_) | None, None) | (None, Some(_)) => None,
    };
    let note = |name: &str, label: &str| {
        source.facts.get(name).map(|fact| Note {
            label: label.to_owned(),
            value: fact.shown_with_unit(),
        })
    };
    let shape = Agreement {
        caption: Caption {
            title: format!("Observed against predicted {outcome}, on samples not seen"),
            description: "Each dot is a sample; dots on the line are predicted without error."
                .to_owned(),
            empty: "There are no held-out predictions.".to_owned(),
        },
        predicted: Heading::new("predicted", &unit),
        observed: Heading::new("observed", &unit),
        predictions: table.numbers("predicted").to_vec(),
        observations: table.numbers("observed").to_vec(),
        units: groups(table),
        tips: tips(table),
        identity: "observed = predicted".to_owned(),
        line,
        notes: [
            note("nested rmse", "RMSE"),
            note("nested r²", "R²"),
            note("bias", "average difference"),
            note("slope", "slope of the line"),
        ]
        .into_iter()
        .flatten()
        .collect(),
    };
    Some(NamedFigure {
        name: "agreement".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(
            "Dots on the line are right; a cloud flatter than the line means extreme predictions, \
             a steeper one timid ones.",
        ),
    })
}

/// The rows of each unit with more than one sample, in the order in which units appear.
fn groups(table: &FactTable) -> Vec<Vec<usize>> {
    let units = table.texts("unit");
    let mut groups: Vec<(&String, Vec<usize>)> = Vec::new();
    let mut place = std::collections::BTreeMap::new();
    for (row, unit) in units.iter().enumerate() {
        let at = *place.entry(unit).or_insert_with(|| {
            groups.push((unit, Vec::new()));
            groups.len() - 1
        });
        groups[at].1.push(row);
    }
    groups
        .into_iter()
        .map(|(_, rows)| rows)
        .filter(|rows| rows.len() > 1)
        .collect()
}

fn tips(table: &FactTable) -> Vec<Tip> {
    let text = |column: &str, row: usize| {
        table
            .column(column)
            .map_or_else(String::new, |column| column.shown(row))
    };
    table
        .texts("sample")
        .iter()
        .enumerate()
        .map(|(row, sample)| {
            Tip::new(
                Meaning::Sample(sample.clone()),
                format!(
                    "{sample}: observed {}, predicted {}",
                    text("observed", row),
                    text("predicted", row)
                ),
            )
        })
        .collect()
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(chain: &Chain<'_>, source: &Source<'_>) -> Vec<Paragraph> {
    let units = noun::unit(chain.settings()).many;
    let mut telling = Telling::new();
    let together = if chain.settings().is_some_and(|data| data.unit.is_some()) {
        format!(", with {units} kept together")
    } else {
        String::new()
    };
    telling.say(Paragraph::of(format!(
        "Agreement was examined on held-out predictions, each the mean over repeats{together}."
    )));
    telling.say(source.say(
        "The average difference (predicted minus observed) was {bias}; the standard deviation of \
         the differences about it (standard error of prediction) was {sep}.",
        &[],
    ));
    if source.has("slope low") && source.has("slope high") {
        telling.say(source.say(
            "Observed values regressed on predicted ones had the slope {slope} (interval {slope \
             low} to {slope high}) and the intercept {intercept}; the correlation was \
             {correlation}.",
            &[],
        ));
    } else {
        telling.say(source.say(
            "Observed values regressed on predicted ones had the slope {slope} and the intercept \
             {intercept}.",
            &[],
        ));
    }
    if source.has("reference error") {
        telling.say(source.say(
            "For comparison, the standard deviation of the reference method’s own error was stated \
             as {reference error}.",
            &[],
        ));
    }
    telling.done()
}
