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
            "Least squares has an answer here, but a fragile one: the largest eigenvalue is \
             {condition number} times the smallest; the penalty brings that down to {penalised \
             condition number} times.",
            &[],
        )
    }
}

/// The facts of the grid.
const NUMBERS: [&str; 11] = [
    "samples",
    "predictors",
    "rank",
    "zero eigenvalues",
    "largest eigenvalue",
    "smallest positive eigenvalue",
    "condition number",
    "penalised condition number",
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
    let tip = |row: usize| {
        let direction = format!("direction {}", text("direction", row));
        let words = format!(
            "{direction}: eigenvalue {}, with the penalty {}, share left {}",
            text("eigenvalue", row),
            text("penalised eigenvalue", row),
            text("shrinkage factor", row)
        );
        Tip::new(Meaning::Thing(direction), words)
    };
    let shape = Spectrum {
        caption: Caption {
            title: "Eigenvalues of the predictors’ cross-products, without and with the penalty"
                .to_owned(),
            description: format!(
                "{} directions, from the strongest to the weakest, with and without the penalty.",
                number::text(eigenvalues.len() as f64, Precision::Whole)
            ),
            empty: "No spectrum is known.".to_owned(),
        },
        direction: Heading::new("direction", ""),
        eigenvalue: Heading::new("eigenvalue", ""),
        eigenvalues: eigenvalues.to_vec(),
        own_label: "without penalty".to_owned(),
        lifted: table.numbers("penalised eigenvalue").to_vec(),
        lifted_label: "with penalty".to_owned(),
        factor: "share left".to_owned(),
        factors: table.numbers("shrinkage factor").to_vec(),
        tips: (0..eigenvalues.len()).map(tip).collect(),
    };
    Some(NamedFigure {
        name: "spectrum".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(
            "How many independent directions the data really have, and which of them the penalty \
             mutes.",
        ),
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
    telling.say(source.say(
        "Their condition number was {condition number}; with the chosen strength {chosen strength} \
         added to every eigenvalue (in the scaling of the objective) it was {penalised condition \
         number}, and the squared penalty of that strength would leave {effective degrees of \
         freedom} effective degrees of freedom.",
        &[],
    ));
    telling.done()
}
