//! Do predictions match observations? One file per kind of outcome.

mod classes;
mod counts;
mod measured;
mod times;
mod yes_no;

use crate::figure::Note;
use crate::report::block::{Block, Grid, Paragraph};
use crate::report::chain::Chain;
use crate::report::kind::fit::kind;
use crate::report::tell::Source;
use crate::study::settings::data::OutcomeKind;

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, source: &Source<'_>) -> Paragraph {
    match kind(chain.settings()) {
        Some(OutcomeKind::YesNo { .. }) => yes_no::answer(chain, source),
        Some(OutcomeKind::Classes) => classes::answer(chain, source),
        Some(OutcomeKind::Count { .. }) => counts::answer(chain, source),
        Some(OutcomeKind::Time { .. }) => times::answer(chain, source),
        Some(OutcomeKind::Measured) | None => measured::answer(chain, source),
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(chain: &Chain<'_>, source: &Source<'_>) -> Vec<Block> {
    match kind(chain.settings()) {
        Some(OutcomeKind::YesNo { .. }) => yes_no::blocks(source),
        Some(OutcomeKind::Classes) => classes::blocks(source),
        Some(OutcomeKind::Count { .. }) => counts::blocks(chain, source),
        Some(OutcomeKind::Time { .. }) => times::blocks(chain, source),
        Some(OutcomeKind::Measured) | None => measured::blocks(chain, source),
    }
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(chain: &Chain<'_>, source: &Source<'_>) -> Vec<Paragraph> {
    match kind(chain.settings()) {
        Some(OutcomeKind::YesNo { .. }) => yes_no::methods(source),
        Some(OutcomeKind::Classes) => classes::methods(source),
        Some(OutcomeKind::Count { .. }) => counts::methods(source),
        Some(OutcomeKind::Time { .. }) => times::methods(source),
        Some(OutcomeKind::Measured) | None => measured::methods(chain, source),
    }
}

/// The numbers that a fit's answer gives, in one grid.
fn numbers(source: &Source<'_>, names: &[&str]) -> Block {
    Block::Grid(Grid::of_facts(
        "How well predictions match, on samples not seen",
        source.cell,
        &source.given(names),
    ))
}

/// The tables that a fit's answer gives, each with its title.
fn tables(source: &Source<'_>, tables: &[(&str, &str)]) -> Vec<Block> {
    tables
        .iter()
        .filter_map(|(fact, title)| Grid::of_table(title, source.cell, source.facts, fact))
        .map(Block::Grid)
        .collect()
}

/// A number beside a figure.
fn note(source: &Source<'_>, name: &str, label: &str) -> Option<Note> {
    let _ = source.value(name)?;
    source.facts.get(name).map(|fact| Note {
        label: label.to_owned(),
        value: fact.shown_with_unit(),
    })
}

/// A column of a table as text; a dash where it is not known.
fn shown(table: &crate::eval::fact::FactTable, column: &str, row: usize) -> String {
    table
        .column(column)
        .map_or_else(String::new, |column| column.shown(row))
}
