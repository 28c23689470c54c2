//! Why can least squares not answer here?

use crate::base::number::{self, Precision};
use crate::figure::shape::spectrum::Spectrum;
use crate::figure::shape::{Caption, Heading};
use crate::figure::{Meaning, Tip};
use crate::report::block::{Block, Grid, NamedFigure, Paragraph};
use crate::report::tell::{Source, Telling};

/// The answer in one sentence.
#[must_use]
pub fn answer(source: &Source<'_>) -> Paragraph {
    if source.is_above_zero("zero eigenvalues") {
        source.say(
            "{samples} samples tell {predictors} predictors apart in only {rank} directions; in \
             the other {zero eigenvalues} least squares has no unique answer, and the penalty \
             gives one.",
            &[],
        )
    } else {
        source.say(
            "Least squares has one answer here, but it can be a fragile one: the largest eigenvalue \
             is {condition number} times the smallest.",
            &[],
        )
    }
}

/// Whether the penalty has a squared part, which adds to every eigenvalue. A lasso makes the answer
/// unique in another way: by leaving predictors out.
fn lifts(source: &Source<'_>) -> bool {
    source.is_above_zero("penalty added")
}

/// The facts of the grid.
const NUMBERS: [&str; 12] = [
    "samples",
    "predictors",
    "rank",
    "zero eigenvalues",
    "largest eigenvalue",
    "smallest positive eigenvalue",
    "condition number",
    "penalised condition number",
    "penalty added",
    "chosen strength",
    "effective degrees of freedom",
    "participation ratio",
];

/// The rest of the answer.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figure(source).map(Block::Figure).into_iter().collect();
    let numbers = source
        .facts
        .all()
        .iter()
        .filter(|fact| NUMBERS.contains(&fact.name.as_str()))
        .collect::<Vec<_>>();
    blocks.push(Block::Grid(Grid::of_facts(
        "What the predictors can tell apart",
        source.cell,
        &numbers,
    )));
    blocks
}

fn figure(source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("spectrum")?;
    let eigenvalues = table.numbers("eigenvalue");
    let text = |column: &str, row: usize| {
        table
            .column(column)
            .map_or_else(String::new, |column| column.shown(row))
    };
    let has_lift = lifts(source);
    let column = |name: &str| {
        if has_lift {
            table.numbers(name).to_vec()
        } else {
            Vec::new()
        }
    };
    let tip = |row: usize| {
        let direction = format!("direction {}", text("direction", row));
        let mut words = format!("{direction}: eigenvalue {}", text("eigenvalue", row));
        if has_lift {
            words.push_str(&format!(
                ", with the penalty {}, share left {}",
                text("penalised eigenvalue", row),
                text("shrinkage factor", row)
            ));
        }
        Tip::new(Meaning::Thing(direction), words)
    };
    let shape = Spectrum {
        caption: Caption {
            title: if has_lift {
                "Eigenvalues of the predictors’ cross-products, without and with the penalty"
            } else {
                "Eigenvalues of the predictors’ cross-products"
            }
            .to_owned(),
            description: format!(
                "{} directions, from the strongest to the weakest.",
                number::text(eigenvalues.len() as f64, Precision::Whole)
            ),
            empty: "No spectrum is known.".to_owned(),
        },
        direction: Heading::new("direction", ""),
        eigenvalue: Heading::new("eigenvalue", ""),
        eigenvalues: eigenvalues.to_vec(),
        own_label: "without penalty".to_owned(),
        lifted: column("penalised eigenvalue"),
        lifted_label: "with penalty".to_owned(),
        factor: "share left".to_owned(),
        factors: column("shrinkage factor"),
        tips: (0..eigenvalues.len()).map(tip).collect(),
    };
    Some(NamedFigure {
        name: "spectrum".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(if has_lift {
            "How many independent directions the data really have, and which of them the penalty \
             mutes."
        } else {
            "How many independent directions the data really have."
        }),
    })
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    telling.say(source.say(
        "The cross-products of the centred and scaled predictors (⟨XᵀX⟩, {predictors} rows and \
         columns) from {samples} samples had the rank {rank} and {zero eigenvalues} eigenvalues of \
         zero, so that least squares determines the coefficients only in as many directions as the \
         rank.",
        &[],
    ));
    telling.say(if lifts(source) {
        source.say(
            "Their condition number was {condition number}; with {penalty added} added to every \
             eigenvalue by the squared part of the penalty at the chosen strength {chosen strength} \
             it was {penalised condition number}.",
            &[],
        )
    } else {
        source.say(
            "Their condition number was {condition number}; that of the predictors chosen at the \
             strength {chosen strength} alone was {penalised condition number}.",
            &[],
        )
    });
    telling.say(source.say(
        "The final fit used {effective degrees of freedom} effective degrees of freedom.",
        &[],
    ));
    telling.done()
}
