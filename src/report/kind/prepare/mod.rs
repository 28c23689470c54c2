//! What a Prepare cell has to say.

mod clause;
mod figure;

use crate::eval::fact::FactTable;
use crate::report::Context;
use crate::report::block::{Block, Grid, Paragraph};
use crate::report::chain::Chain;
use crate::report::kind::prepare::clause::clause;
use crate::report::noun;
use crate::report::sentence::{Editor, Sentence};
use crate::report::tell::{Source, Telling};
use crate::report::word;
use crate::study::settings::prepare::{Prepare, Step, StepClass};
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::prepare::PrepareSlot;

/// Steps that stand in one sentence.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Group {
    Averaging,
    Class(StepClass),
}

impl Group {
    fn of(step: &Step) -> Self {
        if *step == Step::AverageUnits {
            Self::Averaging
        } else {
            Self::Class(step.class())
        }
    }

    fn opening(self, sample: &str) -> String {
        match self {
            Self::Averaging => "Before anything is learnt: ".to_owned(),
            Self::Class(StepClass::RowByRow) => format!("In each {sample} by itself: "),
            Self::Class(StepClass::FixedReference) => "By fixed rules: ".to_owned(),
            Self::Class(StepClass::Learned) => "Learnt in every training part: ".to_owned(),
            Self::Class(StepClass::LearnedWithOutcome) => {
                "Learnt with the outcome in every training part: ".to_owned()
            }
        }
    }
}

fn averages(prepare: &Prepare) -> bool {
    prepare.steps.contains(&Step::AverageUnits)
}

/// The settings as sentences, in the present tense.
#[must_use]
pub fn sentences(context: &Context<'_>, prepare: &Prepare) -> Vec<Sentence> {
    let chain = Chain::from(context, prepare.input);
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
    let mut nouns = (noun::sample(chain.settings()), noun::unit(chain.settings()));
    if chain.prepares.iter().any(|(_, before)| averages(before)) {
        nouns.0 = nouns.1.clone();
    }
    let mut at = 0;
    while let Some(first) = prepare.steps.get(at) {
        let group = Group::of(first);
        let mut sentence = Sentence::new().text(group.opening(&nouns.0.one));
        let from = at;
        while let Some(step) = prepare
            .steps
            .get(at)
            .filter(|step| Group::of(step) == group)
        {
            if at > from {
                sentence = sentence.text("; then ");
            }
            sentence = clause(sentence, at, step, &nouns.0, &nouns.1);
            at += 1;
        }
        if group == Group::Averaging {
            nouns.0 = nouns.1.clone();
        }
        sentences.push(sentence.text("."));
    }
    sentences
}

/// The answer in one sentence.
#[must_use]
pub fn answer(source: &Source<'_>) -> Paragraph {
    let predictors = source.say(
        "{predictors entering} [predictor goes|predictors go] in and {predictors leaving} \
         [comes|come] out; of {steps} [step|steps], {learned steps} [learns|learn] from samples.",
        &[],
    );
    if source.has("samples leaving") {
        predictors.and(source.say(
            " The {samples entering} samples become {samples leaving}, one for each unit.",
            &[],
        ))
    } else {
        predictors
    }
}

/// The rest of the answer: the steps with their classes, and what they do to some samples.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let grid = |title: &str, fact: &str| {
        Grid::of_table(title, source.cell, source.facts, fact).map(Block::Grid)
    };
    let mut blocks: Vec<Block> = grid("The steps", "step list").into_iter().collect();
    blocks.extend(figure::figures(source).into_iter().map(Block::Figure));
    blocks.extend(grid(
        "What each step does to training and held-out samples",
        "step effects",
    ));
    blocks
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
    if source.has("samples leaving") {
        telling.say(source.say(
            "The {samples entering} analysed [sample|samples] became {samples leaving}, one for \
             each unit; parts, predictions and counts of samples are of these.",
            &[],
        ));
    }
    if source.is_above_zero("learned steps") {
        telling.say(source.say(
            "{learned steps} of these steps [learns|learn] from samples (for example their mean); \
             where that was done is told with the fit.",
            &[],
        ));
    }
    if source.has("steps learned with the outcome") {
        telling.say(source.say(
            "{steps learned with the outcome} of them [looks|look] at the outcome of the samples \
             that [it is|they are] learnt from.",
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
        for column in ["parameters", "source"] {
            let is_said = table
                .texts(column)
                .get(row)
                .is_some_and(|text| !text.is_empty() && text != "–");
            if is_said {
                said = entry(said.text("; "), row, column);
            }
        }
        said = said.text(")");
    }
    said.text(".")
}
