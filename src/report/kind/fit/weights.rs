//! The sentences of a Fit cell on penalty weights, signs, strata and the interval.

use crate::report::block::Paragraph;
use crate::report::noun::{self, Noun};
use crate::report::sentence::{Editor, Sentence};
use crate::report::tell::{Source, Telling};
use crate::report::word;
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::fit::{Fit, Judge};
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::fit::FitSlot;
use crate::study::settings::slot::weights::WeightSlot;
use crate::study::settings::weights::{Block, BlockChoice, Interval, Signs, Strata, Weighting};

const WEIGHINGS: [(&str, &str); 4] = [
    ("equal", "all predictors alike"),
    ("blocks-by-hand", "blocks of predictors by hand"),
    (
        "blocks-chosen",
        "blocks of predictors by what predicts best",
    ),
    ("learnt", "each predictor by a first ridge fit"),
];
const RULES: [(&str, &str); 3] = [
    ("any", "of any sign"),
    ("not-negative", "never below zero"),
    ("not-negative-in", "never below zero for some predictors"),
];
const INTERVALS: [(&str, &str); 2] = [
    ("over-units", "from the spread over units"),
    (
        "careful",
        "from the spread over units, and the careful one beside it",
    ),
];

fn slot(slot: WeightSlot) -> Slot {
    Slot::Fit(FitSlot::Weight(slot))
}

/// The settings as sentences, in the present tense. They are details unless something is set.
#[must_use]
pub fn sentences(fit: &Fit, kind: Option<&OutcomeKind>, batch: &Noun) -> Vec<Sentence> {
    let mut sentences = vec![weighting(&fit.weighting), signs(&fit.signs)];
    if WeightSlot::Strata.is_for(kind) {
        sentences.push(strata(fit.strata, batch));
    }
    if let Judge::Nested(_) = fit.judge {
        let text = match fit.interval {
            Interval::OverUnits => INTERVALS[0].1,
            Interval::Careful => INTERVALS[1].1,
        };
        let sentence = Sentence::new()
            .text("The interval of the error comes ")
            .choice(slot(WeightSlot::Interval), text, &INTERVALS)
            .text(".");
        sentences.push(match fit.interval {
            Interval::OverUnits => sentence.detail(),
            Interval::Careful => sentence,
        });
    }
    sentences
}

/// The blocks in words: `900 nm … 1300 nm; 1700 nm`.
#[must_use]
pub fn block_names(blocks: &[Block]) -> String {
    let ranges: Vec<_> = blocks.iter().map(|block| block.range.clone()).collect();
    noun::list(&word::ranges(&ranges))
}

fn weighting(weighting: &Weighting) -> Sentence {
    let choice = |text: &str| {
        Sentence::new().text("The penalty weighs ").choice(
            slot(WeightSlot::Weighting),
            text,
            &WEIGHINGS,
        )
    };
    let (blocks, by) = match weighting {
        Weighting::Equal => return choice(WEIGHINGS[0].1).text(".").detail(),
        Weighting::Adaptive { power } => {
            return choice(WEIGHINGS[3].1)
                .text(" to the same training part, with the power ")
                .real(slot(WeightSlot::Power), *power)
                .text(".");
        }
        Weighting::Blocks { blocks, choice } => (blocks, choice),
    };
    let named = if blocks.is_empty() {
        "blocks still to be chosen".to_owned()
    } else {
        block_names(blocks)
    };
    let with_blocks = |sentence: Sentence| {
        sentence
            .text(": ")
            .word(slot(WeightSlot::Blocks), named.clone(), Editor::Columns)
    };
    let list = |numbers: Vec<String>| noun::list(&numbers);
    match by {
        BlockChoice::ByHand => {
            let weights = blocks.iter().map(|block| word::real(block.weight));
            with_blocks(choice(WEIGHINGS[1].1))
                .text(", with the weights ")
                .word(
                    slot(WeightSlot::BlockWeights),
                    list(weights.collect()),
                    Editor::List,
                )
                .text("; all others have the weight 1.")
        }
        BlockChoice::Chosen { grid } => {
            let weights = grid.iter().map(|weight| word::real(*weight));
            with_blocks(choice(WEIGHINGS[2].1))
                .text(", the best of the weights ")
                .word(
                    slot(WeightSlot::Grid),
                    list(weights.collect()),
                    Editor::List,
                )
                .text(" for each; all others have the weight 1.")
        }
    }
}

fn signs(signs: &Signs) -> Sentence {
    let choice = |text: &str| {
        Sentence::new()
            .text("Coefficients are ")
            .choice(slot(WeightSlot::Signs), text, &RULES)
    };
    match signs {
        Signs::Any => choice(RULES[0].1).text(".").detail(),
        Signs::NotNegative => choice(RULES[1].1).text("."),
        Signs::NotNegativeIn(ranges) => {
            let named = if ranges.is_empty() {
                "predictors still to be chosen".to_owned()
            } else {
                noun::list(&word::ranges(ranges))
            };
            choice(RULES[2].1)
                .text(": ")
                .word(slot(WeightSlot::SignColumns), named, Editor::Columns)
                .text(".")
        }
    }
}

fn strata(strata: Strata, batch: &Noun) -> Sentence {
    let within = format!("within their {} only", batch.one);
    let labels = [("together", "all with all"), ("batches", within.as_str())];
    let text = match strata {
        Strata::None => labels[0].1,
        Strata::Batches => labels[1].1,
    };
    let sentence = Sentence::new()
        .text("Times are compared ")
        .choice(slot(WeightSlot::Strata), text, &labels)
        .text(".");
    match strata {
        Strata::None => sentence.detail(),
        Strata::Batches => sentence,
    }
}

/// How predictors were weighed, which signs they could have and which times were compared, in the
/// past tense; nothing where nothing was set.
pub fn methods(telling: &mut Telling, fit: &Fit, source: &Source<'_>, batch: &Noun) {
    match &fit.weighting {
        Weighting::Equal => {}
        Weighting::Blocks { choice, .. } => {
            telling.say(source.say(
                "The penalty weight ⟨fⱼ⟩ of a predictor was that of its block, and ⟨1⟩ in no block; in \
                 the final fit they were {block weights}.",
                &[],
            ));
            if matches!(choice, BlockChoice::Chosen { .. }) {
                telling.say(source.say(
                    "These weights were chosen among {block weights tried} [combination|combinations] \
                     by the lowest error on the inner parts, anew in every training part.",
                    &[],
                ));
                if source.has("outer parts with the same block weights") {
                    telling.say(source.say(
                        "The same weights were chosen in {outer parts with the same block weights} \
                         of the outer training parts.",
                        &[],
                    ));
                }
            }
        }
        Weighting::Adaptive { .. } => {
            telling.say(source.say(
                "The penalty weight of a predictor was ⟨fⱼ = (mean |r| / |rⱼ|)ᵍ⟩ with the power ⟨g⟩ \
                 {learnt weights power} and ⟨rⱼ⟩ its coefficient in a first ridge fit, on the scale \
                 that the penalty sees (the adaptive lasso of Zou).",
                &[],
            ));
            telling.say(Paragraph::of(
                "The first fit was made anew in every training part, inner ones included, at the \
                 strength with the lowest exact leave-one-out error for a measured outcome and the \
                 lowest Akaike criterion otherwise.",
            ));
            if source.has("first-stage strength") {
                telling.say(source.say(
                    "On all samples that strength was {first-stage strength}.",
                    &[],
                ));
            }
        }
    }
    if fit.signs != Signs::Any && source.has("predictors never negative") {
        telling.say(source.say(
            "The coefficients of {predictors never negative} [predictor|predictors] were not allowed \
             below zero.",
            &[],
        ));
    }
    if fit.strata == Strata::Batches && source.has("strata") {
        telling.say(source.say(
            &format!(
                "Times were compared within the {{strata}} [{}|{}] only, each with a hazard of its \
                 own.",
                batch.one, batch.many
            ),
            &[],
        ));
        if source.is_above_zero("strata without events") {
            telling.say(source.say(
                "{strata without events} of them had no event and said nothing about the \
                 coefficients.",
                &[],
            ));
        }
    }
    telling.end();
}

/// The careful interval, in the past tense.
pub fn careful(
    telling: &mut Telling,
    kind: Option<&OutcomeKind>,
    source: &Source<'_>,
    unit: &Noun,
) {
    if !source.has("careful error") {
        return;
    }
    let what = match kind {
        Some(OutcomeKind::Measured) | None => "root mean squared error",
        Some(OutcomeKind::YesNo { .. } | OutcomeKind::Classes) => "log loss",
        Some(OutcomeKind::Count { .. }) => "mean deviance",
        Some(OutcomeKind::Time { .. }) => "Brier score at the middle time",
    };
    telling.say(source.say(
        &format!(
            "The careful ⟨95 %⟩ interval of Bates, Hastie and Tibshirani for the {what}, over {}, \
             runs from {{careful error low}} to {{careful error high}} about {{careful error}}.",
            unit.many
        ),
        &[],
    ));
    telling.say(source.say(
        "For it the whole procedure was repeated {careful refits} [time|times] without a pair of \
         outer parts; its standard error is {careful interval widening} times the plain one. It is \
         about the procedure on studies of this size, not about the final fitted model.",
        &[],
    ));
    telling.end();
}
