//! Counts: predicted against observed counts.

use crate::figure::shape::agreement::Agreement;
use crate::figure::shape::{Caption, Heading};
use crate::figure::{Meaning, Tip};
use crate::report::block::{Block, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::noun;
use crate::report::question::agreement::{note, numbers, shown, tables};
use crate::report::tell::{Source, Telling};

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, source: &Source<'_>) -> Paragraph {
    let units = noun::unit(chain.settings()).many;
    let start = source.say(
        &format!(
            "On {units} that it has not seen, expected counts miss by {{nested mae}} on average"
        ),
        &[],
    );
    let (low, high) = (
        source.value("calibration slope low"),
        source.value("calibration slope high"),
    );
    match (low, high) {
        (Some(low), Some(high)) if low > 1.0 && high > 1.0 => start.and(source.say(
            "; the predictions are timid (calibration slope {nested calibration slope}).",
            &[],
        )),
        (Some(low), Some(high)) if low < 1.0 && high < 1.0 => start.and(source.say(
            "; the predictions are too extreme (calibration slope {nested calibration slope}).",
            &[],
        )),
        (Some(_), Some(_)) => start.and(source.say(
            "; the slope of their calibration ({nested calibration slope}) cannot be told from one.",
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
    blocks.push(numbers(
        source,
        &[
            "nested deviance",
            "nested deviance low",
            "nested deviance high",
            "baseline deviance",
            "nested deviance explained",
            "nested rmse",
            "nested mae",
            "nested bias",
            "nested expected over observed",
            "nested calibration slope",
            "calibration slope low",
            "calibration slope high",
        ],
    ));
    blocks.extend(tables(
        source,
        &[("held-out predictions", "Held-out predictions")],
    ));
    blocks
}

fn figure(chain: &Chain<'_>, source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("held-out predictions")?;
    let unit = table
        .column("observed")
        .map_or_else(String::new, |column| column.unit.clone());
    let tips = table
        .texts("sample")
        .iter()
        .enumerate()
        .map(|(row, sample)| {
            Tip::new(
                Meaning::Sample(sample.clone()),
                format!(
                    "{sample}: observed {}, expected {}",
                    shown(table, "observed", row),
                    shown(table, "predicted", row)
                ),
            )
        })
        .collect();
    let shape = Agreement {
        caption: Caption {
            title: format!(
                "Observed against expected {}, on samples not seen",
                chain.outcome()
            ),
            description: "Each dot is a sample; counts scatter about the line even when what is \
                          expected is right."
                .to_owned(),
            empty: "There are no held-out predictions.".to_owned(),
        },
        predicted: Heading::new("expected", &unit),
        observed: Heading::new("observed", &unit),
        predictions: table.numbers("predicted").to_vec(),
        observations: table.numbers("observed").to_vec(),
        units: Vec::new(),
        tips,
        identity: "observed = expected".to_owned(),
        line: None,
        notes: [
            note(source, "nested deviance explained", "deviance explained"),
            note(source, "nested rmse", "RMSE"),
            note(source, "nested calibration slope", "calibration slope"),
        ]
        .into_iter()
        .flatten()
        .collect(),
    };
    Some(NamedFigure {
        name: "agreement".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(
            "Dots spread about the line by chance, wider where more is expected; a cloud flatter than \
             the line means extreme predictions, a steeper one timid ones.",
        ),
    })
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    telling.say(Paragraph::of(
        "Agreement was examined on held-out expected counts, each the mean over repeats.",
    ));
    if source.has("calibration slope low") && source.has("calibration slope high") {
        telling.say(source.say(
            "The slope of a Poisson regression of the counts on the logarithms of what was expected \
             was {nested calibration slope} (interval {calibration slope low} to {calibration slope \
             high}, with units as the independent observations).",
            &[],
        ));
    }
    telling.done()
}
