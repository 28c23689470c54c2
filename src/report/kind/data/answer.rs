//! What came of reading: how many samples, the design, the import report.

use crate::eval::fact::Fact;
use crate::report::block::{Block, Grid, Offer, Paragraph};
use crate::report::kind::data::design;
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
const DESIGN: [&str; 20] = [
    "samples",
    "units",
    "samples per unit least",
    "samples per unit most",
    "batches",
    "sealed units",
    "sealed samples",
    "quality-control samples",
    "outcome mean",
    "outcome standard deviation",
    "outcome least",
    "outcome most",
    "events",
    "units with events",
    "batch association",
    "order association",
    "outcome share between units",
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
    blocks.extend(design::figures(source).into_iter().map(Block::Figure));
    blocks.extend(offers(source));
    for (fact, title) in [
        ("import findings", "The import report"),
        ("import places", "Where all that stands"),
        ("join report", "What was joined"),
        ("names that did not match", "Names that did not match"),
        ("flow of samples", "From the file to the fit"),
        ("outcome classes", "Classes of the outcome"),
        ("outcome by batch", "The outcome by batch"),
        (
            "outcome by order",
            "The outcome by the order of measurement",
        ),
        ("units by size", "Units by their number of samples"),
        ("outcome by unit", "The outcome by unit"),
        ("covariate coding", "How covariates are coded"),
        ("exclusions", "Samples that were excluded"),
        ("corrections", "Values that were corrected"),
        ("source files", "The files"),
    ] {
        blocks.extend(Grid::of_table(title, source.cell, source.facts, fact).map(Block::Grid));
    }
    blocks
}

/// What can be done about the findings with one press.
fn offers(source: &Source<'_>) -> Option<Block> {
    let table = source.rows("import offers")?;
    let offers = table
        .texts("offer")
        .iter()
        .zip(table.texts("setting"))
        .map(|(label, setting)| Offer {
            label: label.clone(),
            setting: setting.clone(),
        });
    Some(Block::Offers(offers.collect()))
}
