//! What an answer is made of: paragraphs with bound facts, grids, figures.

use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::figure::Figure;
use crate::study::cell::CellId;

/// A piece of an answer.
#[derive(Clone, Debug)]
pub enum Block {
    /// A heading inside the cell.
    Heading(String),
    /// A paragraph.
    Paragraph(Paragraph),
    /// A bulleted list.
    List(Vec<Paragraph>),
    /// A grid of values.
    Grid(Grid),
    /// A figure.
    Figure(NamedFigure),
}

/// Running text in which every number is bound to a fact.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Paragraph {
    /// The text in pieces.
    pub spans: Vec<Span>,
}

/// A piece of running text.
#[derive(Clone, Debug, PartialEq)]
pub enum Span {
    /// Words. They hold no numbers of the study.
    Text(String),
    /// Emphasised words.
    Strong(String),
    /// The text of a fact.
    Fact {
        /// The cell that gives the fact.
        cell: CellId,
        /// The fact's name.
        name: String,
        /// The fact as it is shown, with its unit.
        text: String,
    },
    /// A fact that does not exist, marked in place; the text as it was typed.
    Missing(String),
}

impl Paragraph {
    /// An empty paragraph.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// Words and nothing else.
    #[must_use]
    pub fn of(text: impl Into<String>) -> Self {
        Self::new().text(text)
    }

    /// The same paragraph with more words.
    #[must_use]
    pub fn text(mut self, text: impl Into<String>) -> Self {
        self.spans.push(Span::Text(text.into()));
        self
    }

    /// The same paragraph with a fact, number and unit. A fact that the cell does not give is
    /// marked as missing.
    #[must_use]
    pub fn fact(mut self, cell: CellId, facts: &Facts, name: &str) -> Self {
        self.spans.push(match facts.get(name) {
            Some(fact) => Span::Fact {
                cell,
                name: fact.name.clone(),
                text: fact.shown_with_unit(),
            },
            None => Span::Missing(name.to_owned()),
        });
        self
    }

    /// Whether a fact that the text needs does not exist. Such a sentence is left out of exports
    /// and listed there under what must be supplied.
    #[must_use]
    pub fn is_incomplete(&self) -> bool {
        self.spans
            .iter()
            .any(|span| matches!(span, Span::Missing(_)))
    }

    /// The text without its bindings.
    #[must_use]
    pub fn plain(&self) -> String {
        let mut plain = String::new();
        for span in &self.spans {
            match span {
                Span::Text(text) | Span::Strong(text) | Span::Fact { text, .. } => {
                    plain.push_str(text);
                }
                Span::Missing(name) => {
                    plain.push('{');
                    plain.push_str(name);
                    plain.push('}');
                }
            }
        }
        plain
    }
}

/// A grid of values: whole columns of a fact's table, or of single facts.
#[derive(Clone, Debug, PartialEq)]
pub struct Grid {
    /// What the grid shows.
    pub title: String,
    /// The columns, with names, units, digits and meanings.
    pub columns: Vec<FactColumn>,
    /// The cell whose facts these are.
    pub cell: CellId,
    /// The fact that the rows come from; empty when the rows are single facts.
    pub fact: String,
}

/// A figure with the words around it.
#[derive(Clone, Debug)]
pub struct NamedFigure {
    /// A short name for files, unique within the cell: `error-curve`.
    pub name: String,
    /// What is shown.
    pub figure: Figure,
    /// The one-line reading printed below it.
    pub reading: Paragraph,
}

impl Grid {
    /// A grid whose rows are single facts: name, value, unit, meaning.
    #[must_use]
    pub fn of_facts(title: &str, cell: CellId, facts: &[&Fact]) -> Self {
        let column =
            |name: &str, texts: Vec<String>, meaning: &str| FactColumn::texts(name, texts, meaning);
        Self {
            title: title.to_owned(),
            columns: vec![
                column(
                    "measure",
                    facts.iter().map(|fact| fact.name.clone()).collect(),
                    "What is measured.",
                ),
                column(
                    "value",
                    facts.iter().map(|fact| fact.shown_with_unit()).collect(),
                    "The value, with its unit.",
                ),
                column(
                    "meaning",
                    facts.iter().map(|fact| fact.meaning.clone()).collect(),
                    "What the value means.",
                ),
            ],
            cell,
            fact: String::new(),
        }
    }
}
