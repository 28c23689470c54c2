//! What came of reading: how many samples, the design, the import report.

use crate::eval::fact::Fact;
use crate::report::block::{Block, Grid, Paragraph};
use crate::report::noun;
use crate::report::tell::Source;
use crate::study::settings::data::Data;

/// The answer in one sentence.
#[must_use]
pub fn answer(data: &Data, source: &Source<'_>) -> Paragraph {
    let samples = noun::sample(Some(data));
    let units = noun::unit(Some(data));
    let pattern = if data.unit.is_some() {
        format!(
            "There are {{samples}} {} of {{units}} [{}|{}], with {{predictors}} \
             [predictor|predictors] each.",
            samples.many, units.one, units.many
        )
    } else {
        format!(
            "There are {{samples}} {}, with {{predictors}} [predictor|predictors] each.",
            samples.many
        )
    };
    source.say(&pattern, &[])
}

/// The facts of the design, in the order in which they are read.
const DESIGN: [&str; 15] = [
    "samples",
    "units",
    "samples per unit least",
    "samples per unit most",
    "batches",
    "sealed units",
    "sealed samples",
    "outcome mean",
    "outcome standard deviation",
    "outcome least",
    "outcome most",
    "events",
    "missing share",
    "below-limit share",
    "covariate names",
];

/// The rest of the answer.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let mut blocks = Vec::new();
    let design: Vec<&Fact> = source.given(&DESIGN);
    if !design.is_empty() {
        blocks.push(Block::Grid(Grid::of_facts(
            "The design",
            source.cell,
            &design,
        )));
    }
    for (fact, title) in [
        ("outcome classes", "Classes of the outcome"),
        ("import findings", "The import report"),
        ("join report", "What was joined"),
        ("exclusions", "Samples that were excluded"),
        ("corrections", "Values that were corrected"),
        ("source files", "The files"),
    ] {
        blocks.extend(Grid::of_table(title, source.cell, source.facts, fact).map(Block::Grid));
    }
    blocks
}
