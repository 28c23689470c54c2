//! What a Prepare cell has to say.

use crate::eval::fact::FactTable;
use crate::report::Context;
use crate::report::block::{Block, Grid, Paragraph};
use crate::report::chain::Chain;
use crate::report::noun;
use crate::report::sentence::{Editor, Sentence};
use crate::report::tell::{Source, Telling};
use crate::report::word;
use crate::study::settings::prepare::{Prepare, Step, StepClass};
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::prepare::{PrepareSlot, StepSlot};

const DERIVATIVES: [(&str, &str); 3] = [
    ("smoothing", "smoothed course"),
    ("first-derivative", "first derivative"),
    ("second-derivative", "second derivative"),
];

/// The settings as sentences, in the present tense.
#[must_use]
pub fn sentences(context: &Context<'_>, prepare: &Prepare) -> Vec<Sentence> {
    let chain = Chain::from(context, prepare.input);
    let sample = noun::sample(chain.settings()).one;
    let steps = match prepare.steps.len() {
        0 => "no step yet".to_owned(),
        1 => "1 step".to_owned(),
        count => format!("{} steps", word::whole(count as u64)),
    };
    let mut sentences = vec![
        Sentence::new()
            .text("Prepare ")
            .cell(
                Slot::Prepare(PrepareSlot::Input),
                word::cell(context, prepare.input, "samples still to be chosen"),
                &word::SAMPLES,
            )
            .text(" by ")
            .word(Slot::Prepare(PrepareSlot::Steps), steps, Editor::Steps)
            .text("."),
    ];
    let mut at = 0;
    while let Some(first) = prepare.steps.get(at) {
        let class = first.class();
        let opening = match class {
            StepClass::RowByRow => format!("In each {sample} by itself: "),
            StepClass::FixedReference => "By fixed rules: ".to_owned(),
            StepClass::Learned => "Learnt in every training part: ".to_owned(),
        };
        let mut sentence = Sentence::new().text(opening);
        let from = at;
        while let Some(step) = prepare.steps.get(at).filter(|step| step.class() == class) {
            if at > from {
                sentence = sentence.text("; then ");
            }
            sentence = clause(sentence, at, step, &sample);
            at += 1;
        }
        sentences.push(sentence.text("."));
    }
    sentences
}

/// What one step does, in the imperative.
fn clause(sentence: Sentence, at: usize, step: &Step, sample: &str) -> Sentence {
    let slot = |slot: StepSlot| Slot::Prepare(PrepareSlot::Step(at, slot));
    let steps = Slot::Prepare(PrepareSlot::Steps);
    let named = |sentence: Sentence, text: &str| sentence.word(steps, text, Editor::Steps);
    match step {
        Step::Log { offset } => named(
            sentence
                .text("add ")
                .real(slot(StepSlot::Offset), *offset)
                .text(" to each value and take the natural "),
            "logarithm",
        ),
        Step::StandardNormalVariate => named(sentence.text("take the "), "standard normal variate")
            .text(" (minus its mean, divided by its standard deviation)"),
        Step::SavitzkyGolay {
            window,
            degree,
            derivative,
        } => {
            let text = match derivative {
                0 => "smoothed course",
                1 => "first derivative",
                _ => "second derivative",
            };
            named(
                sentence
                    .text("take the ")
                    .choice(slot(StepSlot::Derivative), text, &DERIVATIVES)
                    .text(" by "),
                "local polynomials",
            )
            .text(" (Savitzky and Golay), window ")
            .whole(slot(StepSlot::Window), u64::from(*window))
            .text(", degree ")
            .whole(slot(StepSlot::Degree), u64::from(*degree))
        }
        Step::Detrend { degree } => named(sentence.text("take away a "), "trend")
            .text(" along the predictors, a polynomial of degree ")
            .whole(slot(StepSlot::Degree), u64::from(*degree)),
        Step::ScatterCorrection => named(sentence.text("correct the "), "scatter")
            .text(format!(" by regressing each {sample} on the mean {sample}")),
        Step::MissingShareFilter { most } => named(
            sentence.text("leave out predictors with "),
            "missing values",
        )
        .text(" in a share of samples above ")
        .real(slot(StepSlot::MostMissing), *most),
        Step::NearConstantFilter { least } => {
            named(sentence.text("leave out "), "nearly constant predictors")
                .text(", in which a share of samples below ")
                .real(slot(StepSlot::LeastDiffering), *least)
                .text(" differs from the commonest value")
        }
        Step::MedianImputation => named(sentence.text("put the predictor’s "), "median")
            .text(" in place of a missing value"),
        Step::BelowLimit { share } => named(
            sentence
                .text("put ")
                .real(slot(StepSlot::ShareOfLimit), *share)
                .text(" times the limit in place of a value "),
            "below a limit",
        ),
        Step::Center => named(sentence, "centre").text(" each predictor"),
        Step::UnitVariance => {
            named(sentence, "scale").text(" each predictor to a standard deviation of one")
        }
    }
}

/// The answer in one sentence.
#[must_use]
pub fn answer(source: &Source<'_>) -> Paragraph {
    source.say(
        "{predictors entering} [predictor goes|predictors go] in and {predictors leaving} \
         [comes|come] out; of {steps} [step|steps], {learned steps} [learns|learn] from samples.",
        &[],
    )
}

/// The rest of the answer: the steps with their classes, and remarks on their order.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let grid = |title: &str, fact: &str| {
        Grid::of_table(title, source.cell, source.facts, fact).map(Block::Grid)
    };
    grid("The steps", "step list")
        .into_iter()
        .chain(grid("Remarks on their order", "order remarks"))
        .collect()
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    match source.rows("step list") {
        None if source.value("steps") == Some(0.0) => {
            telling.say(source.say("The predictors were taken as they are.", &[]));
        }
        None => telling.say(source.say("The predictors were prepared by {step list}.", &[])),
        Some(table) => telling.say(listed(source, table)),
    }
    if source.is_above_zero("learned steps") {
        telling.say(source.say(
            "{learned steps} of these steps [learns|learn] from samples (for example their mean); \
             where that was done is told with the fit.",
            &[],
        ));
    }
    telling.say(source.say(
        "With all samples in use, {predictors entering} [predictor|predictors] went in and \
         {predictors leaving} came out.",
        &[],
    ));
    telling.done()
}

fn listed(source: &Source<'_>, table: &FactTable) -> Paragraph {
    let entry = |paragraph: Paragraph, row: usize, column: &str| {
        paragraph.entry(source.cell, "step list", table, row, column)
    };
    let mut said = Paragraph::of("The predictors were prepared in this order: ");
    for row in 0..table.n_rows() {
        if row > 0 {
            said = said.text("; ");
        }
        said = entry(said, row, "step");
        said = entry(said.text(" ("), row, "class");
        let has_parameters = table
            .texts("parameters")
            .get(row)
            .is_some_and(|text| !text.is_empty() && text != "–");
        if has_parameters {
            said = entry(said.text("; "), row, "parameters");
        }
        said = said.text(")");
    }
    said.text(".")
}
