//! Why can least squares not answer here?

use crate::base::number::{self, Precision};
use crate::figure::shape::spectrum::Spectrum;
use crate::figure::shape::{Caption, Heading};
use crate::figure::{Meaning, Tip};
use crate::report::block::{Block, Grid, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::tell::{Source, Telling};
use crate::study::settings::fit::Penalty;

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

/// Whether the penalty has no squared part, so that it makes the answer unique in another way: by
/// leaving predictors out. What a ridge penalty of the same strength would do is shown instead.
fn is_lasso(chain: &Chain<'_>) -> bool {
    chain
        .fit
        .is_some_and(|(_, fit)| matches!(fit.penalty, Penalty::Lasso))
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
pub fn blocks(chain: &Chain<'_>, source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figure(chain, source)
        .map(Block::Figure)
        .into_iter()
        .collect();
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

fn figure(chain: &Chain<'_>, source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("spectrum")?;
    let eigenvalues = table.numbers("eigenvalue");
    let text = |column: &str, row: usize| {
        table
            .column(column)
            .map_or_else(String::new, |column| column.shown(row))
    };
    let lifted = if is_lasso(chain) {
        "with a ridge penalty of the chosen strength"
    } else {
        "with the penalty"
    };
    let tip = |row: usize| {
        let direction = format!("direction {}", text("direction", row));
        let words = format!(
            "{direction}: eigenvalue {}, {lifted} {}, share left {}",
            text("eigenvalue", row),
            text("penalised eigenvalue", row),
            text("shrinkage factor", row)
        );
        Tip::new(Meaning::Thing(direction), words)
    };
    let shape = Spectrum {
        caption: Caption {
            title: format!("Eigenvalues of the predictors’ cross-products, without and {lifted}"),
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
        lifted: table.numbers("penalised eigenvalue").to_vec(),
        lifted_label: if is_lasso(chain) {
            "with a ridge penalty".to_owned()
        } else {
            "with penalty".to_owned()
        },
        factor: "share left".to_owned(),
        factors: table.numbers("shrinkage factor").to_vec(),
        tips: (0..eigenvalues.len()).map(tip).collect(),
    };
    Some(NamedFigure {
        name: "spectrum".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(
            "How many independent directions the data really have, and which of them a penalty \
             mutes.",
        ),
    })
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(chain: &Chain<'_>, source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    telling.say(
        source
            .say(
                "The cross-products of the predictors as the penalty sees them (⟨XᵀX⟩, \
                 {predictors} rows and columns) from {samples} samples had the rank {rank}",
                &[],
            )
            .and(if source.is_above_zero("zero eigenvalues") {
                source.say(
                    " and {zero eigenvalues} [eigenvalue|eigenvalues] of zero, so that least \
                     squares determines the coefficients only in as many directions as the rank.",
                    &[],
                )
            } else {
                Paragraph::of(", so that least squares has one answer.")
            }),
    );
    telling.say(if is_lasso(chain) {
        source.say(
            "Their condition number was {condition number}; that of the predictors alone that the \
             lasso chose at the strength {chosen strength} was {penalised condition number}. A \
             ridge penalty of the same strength would add {penalty added} to every eigenvalue.",
            &[],
        )
    } else {
        source.say(
            "Their condition number was {condition number}; with {penalty added} added to every \
             eigenvalue by the squared part of the penalty at the chosen strength {chosen strength} \
             it was {penalised condition number}.",
            &[],
        )
    });
    telling.say(source.say(
        "The final fit used {effective degrees of freedom} effective degrees of freedom.",
        &[],
    ));
    telling.done()
}
