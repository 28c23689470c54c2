//! What a Question cell has to say, whichever question it is.

use crate::report::Context;
use crate::report::block::{Block, Paragraph};
use crate::report::chain::Chain;
use crate::report::question::{
    agreement, chosen_again, coefficient_trace, error_curve, ladder, least_squares, stand_ins,
};
use crate::report::sentence::{Choice, Editor, Sentence};
use crate::report::tell::Source;
use crate::report::word;
use crate::study::cell::Kind;
use crate::study::settings::question::{Ask, Question, Seal};
use crate::study::settings::slot::question::QuestionSlot;
use crate::study::settings::slot::{Slot, Value};

const SEALS: [(&str, &str); 2] = [("closed", "stays closed"), ("opened", "is opened")];

/// The settings as sentences, in the present tense.
#[must_use]
pub fn sentences(context: &Context<'_>, question: &Question) -> Vec<Sentence> {
    let choices = Ask::catalogue()
        .iter()
        .map(|ask| Choice {
            label: ask.words().to_owned(),
            value: Value::choice(ask.name()),
        })
        .collect();
    let mut sentences = vec![
        Sentence::new()
            .text("Asked of ")
            .cell(
                Slot::Question(QuestionSlot::Fit),
                word::cell(context, question.fit, "a fit still to be chosen"),
                &[Kind::Fit],
            )
            .text(": ")
            .word(
                Slot::Question(QuestionSlot::Ask),
                question.ask.words(),
                Editor::Choice(choices),
            ),
    ];
    match &question.ask {
        Ask::LeastSquares | Ask::ErrorCurve | Ask::CoefficientTrace | Ask::Agreement => {}
        Ask::Ladder { seal } => sentences.push(sealing(*seal)),
        Ask::ChosenAgain {
            pairs,
            threshold,
            seed,
        } => {
            sentences.push(
                Sentence::new()
                    .text("Draw ")
                    .whole(Slot::Question(QuestionSlot::Pairs), u64::from(*pairs))
                    .text(
                        " pairs of halves; a predictor counts as chosen again from the selection \
                         frequency ",
                    )
                    .real(Slot::Question(QuestionSlot::Threshold), *threshold)
                    .text(" on."),
            );
            sentences.push(
                Sentence::new()
                    .text("Seed ")
                    .whole(Slot::Question(QuestionSlot::Seed), *seed)
                    .text("."),
            );
        }
        Ask::StandIns { correlation } => sentences.push(
            Sentence::new()
                .text("A predictor is a stand-in from the correlation ")
                .real(Slot::Question(QuestionSlot::Correlation), *correlation)
                .text(" on, whichever its sign."),
        ),
    }
    sentences
}

fn sealing(seal: Seal) -> Sentence {
    let text = match seal {
        Seal::Closed => "stays closed",
        Seal::Opened => "is opened",
    };
    let sentence = Sentence::new().text("The sealed set ").choice(
        Slot::Question(QuestionSlot::Seal),
        text,
        &SEALS,
    );
    match seal {
        Seal::Closed => sentence.text("."),
        Seal::Opened => sentence.text(", which is counted and printed."),
    }
}

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, question: &Question, source: &Source<'_>) -> Paragraph {
    match &question.ask {
        Ask::LeastSquares => least_squares::answer(source),
        Ask::ErrorCurve => error_curve::answer(source),
        Ask::CoefficientTrace => coefficient_trace::answer(source),
        Ask::Agreement => agreement::answer(chain, source),
        Ask::Ladder { .. } => ladder::answer(chain, source),
        Ask::ChosenAgain { .. } => chosen_again::answer(chain, source),
        Ask::StandIns { .. } => stand_ins::answer(source),
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(chain: &Chain<'_>, question: &Question, source: &Source<'_>) -> Vec<Block> {
    match &question.ask {
        Ask::LeastSquares => least_squares::blocks(chain, source),
        Ask::ErrorCurve => error_curve::blocks(source),
        Ask::CoefficientTrace => coefficient_trace::blocks(source),
        Ask::Agreement => agreement::blocks(chain, source),
        Ask::Ladder { .. } => ladder::blocks(chain, source),
        Ask::ChosenAgain { .. } => chosen_again::blocks(source),
        Ask::StandIns { .. } => stand_ins::blocks(source),
    }
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(
    context: &Context<'_>,
    chain: &Chain<'_>,
    question: &Question,
    source: &Source<'_>,
) -> Vec<Paragraph> {
    match &question.ask {
        Ask::LeastSquares => least_squares::methods(chain, source),
        Ask::ErrorCurve => error_curve::methods(source),
        Ask::CoefficientTrace => coefficient_trace::methods(source),
        Ask::Agreement => agreement::methods(chain, source),
        Ask::Ladder { .. } => ladder::methods(context, chain, source),
        Ask::ChosenAgain { .. } => chosen_again::methods(chain, source),
        Ask::StandIns { .. } => stand_ins::methods(source),
    }
}
