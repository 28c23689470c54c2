//! Classes: which are called which.

use crate::figure::shape::Caption;
use crate::figure::shape::confusion::Confusion;
use crate::report::block::{Block, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::noun;
use crate::report::question::agreement::{numbers, shown, tables};
use crate::report::tell::{Source, Telling};

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, source: &Source<'_>) -> Paragraph {
    let units = noun::unit(chain.settings()).many;
    let start = source.say(
        &format!("Of {units} that it has not seen, the model calls {{nested accuracy}} right"),
        &[],
    );
    let differ = source.facts.words("hardest class") != source.facts.words("easiest class");
    if differ && source.has("hardest class sensitivity") {
        start.and(source.say(
            ": most easily those of “{easiest class}” ({easiest class sensitivity}), least those of \
             “{hardest class}” ({hardest class sensitivity}).",
            &[],
        ))
    } else {
        start.text(".")
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figure(source).map(Block::Figure).into_iter().collect();
    blocks.push(numbers(
        source,
        &[
            "nested accuracy",
            "nested accuracy low",
            "nested accuracy high",
            "baseline accuracy",
            "nested balanced accuracy",
            "nested misclassification",
            "nested log loss",
            "baseline log loss",
            "nested deviance explained",
            "nested brier",
            "nested auc",
            "nested auc low",
            "nested auc high",
            "pairs compared",
        ],
    ));
    blocks.extend(tables(
        source,
        &[
            ("by class", "Class by class"),
            ("confusion", "Observed against called classes"),
            ("held-out predictions", "Held-out predictions"),
        ],
    ));
    blocks
}

fn figure(source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("confusion")?;
    let classes = table.texts("observed").to_vec();
    let columns: Vec<String> = classes
        .iter()
        .map(|class| format!("called {class}"))
        .collect();
    let each =
        || (0..classes.len()).flat_map(|row| columns.iter().map(move |column| (row, column)));
    let counts = each()
        .map(|(row, column)| table.numbers(column).get(row).copied().unwrap_or(f64::NAN))
        .collect();
    let texts = each()
        .map(|(row, column)| shown(table, column, row))
        .collect();
    let shape = Confusion {
        caption: Caption {
            title: "Observed against called classes, on samples not seen".to_owned(),
            description: "How many samples of each class were called each class; the diagonal is \
                          right."
                .to_owned(),
            empty: "There are no held-out predictions.".to_owned(),
        },
        row_label: "observed".to_owned(),
        column_label: "called".to_owned(),
        classes,
        counts,
        texts,
    };
    Some(NamedFigure {
        name: "confusion".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(
            "A dark tile off the diagonal is a pair of classes that the model mistakes for each other.",
        ),
    })
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    telling.say(Paragraph::of(
        "A sample was called the class of its highest held-out probability; counts are means over \
         repeats.",
    ));
    if source.has("hardest class sensitivity") {
        telling.say(source.say(
            "The share called right was largest for “{easiest class}” ({easiest class sensitivity}) and \
             smallest for “{hardest class}” ({hardest class sensitivity}).",
            &[],
        ));
    }
    telling.done()
}
