//! What an answer is made of: paragraphs with bound facts, grids, figures.

use crate::base::number::{self, Precision};
use crate::eval::fact::{Fact, FactColumn, FactTable, FactValue, Facts, with_unit};
use crate::figure::Figure;
use crate::study::cell::CellId;

/// A piece of an answer.
#[derive(Clone, Debug)]
#[expect(
    clippy::large_enum_variant,
    reason = "an answer has a few dozen pieces, and figures are most of what they hold"
)]
pub enum Block {
    /// A heading inside the cell.
    Heading(String),
    /// A heading in prose, with facts in it.
    Section {
        /// 1 for the highest.
        level: u8,
        /// The words.
        text: Paragraph,
    },
    /// A paragraph.
    Paragraph(Paragraph),
    /// A bulleted list.
    List(Vec<Paragraph>),
    /// A list as prose has it: bullets or numbers, nested.
    Items(Vec<Item>),
    /// A quotation.
    Quote(Vec<Block>),
    /// Letters that keep their places.
    Code(String),
    /// A rule across the page.
    Rule,
    /// A table typed in prose.
    Tabular {
        /// The heads of the columns.
        head: Vec<Paragraph>,
        /// How the columns are aligned, as many.
        align: Vec<Align>,
        /// The rows, each as long as the head.
        rows: Vec<Vec<Paragraph>>,
    },
    /// A grid of values.
    Grid(Grid),
    /// A figure.
    Figure(NamedFigure),
    /// What can be done with one press; nothing for readers.
    Offers(Vec<Offer>),
}

/// Something that can be done with one press: a setting of the cell, as it is said.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Offer {
    /// What the button says.
    pub label: String,
    /// The setting, such as `words for missing values += -9`.
    pub setting: String,
}

/// How a column of a table in prose is aligned.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Align {
    /// To the left.
    Start,
    /// In the middle.
    Middle,
    /// To the right.
    End,
}

/// An item of a list.
#[derive(Clone, Debug, PartialEq)]
pub struct Item {
    /// How deep it is nested, from 0.
    pub depth: u8,
    /// What stands before it.
    pub mark: ItemMark,
    /// What it says.
    pub text: Paragraph,
}

/// What stands before an item of a list.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ItemMark {
    /// A bullet.
    Bullet,
    /// A number.
    Number(u64),
    /// Nothing: a further paragraph of the item above.
    Continued,
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
    /// Strongly emphasised words of prose.
    Strong(String),
    /// Emphasised words of prose.
    Emphasis(String),
    /// Letters of prose that are set as they are.
    Code(String),
    /// Words of prose that name an address. Nothing is fetched from it.
    Link {
        /// The words.
        text: String,
        /// The address.
        address: String,
    },
    /// A name that the user or a file gave: of a file, a column, a sample, a cell; a reason.
    Name(String),
    /// Fixed letters of a formula or of a published name; its digits are no results.
    Formula(String),
    /// The text of a fact.
    Fact {
        /// The cell that gives the fact.
        cell: CellId,
        /// The fact's name.
        name: String,
        /// The fact as it is shown, with its unit.
        text: String,
    },
    /// The text of one entry of a fact that is a table.
    Entry {
        /// The cell that gives the fact.
        cell: CellId,
        /// The fact's name.
        fact: String,
        /// The row, from 0.
        row: usize,
        /// The column's name.
        column: String,
        /// The entry as it is shown, with its unit.
        text: String,
    },
    /// A number from the ledger of the study: looks, openings of the sealed set.
    Counted {
        /// What is counted.
        what: String,
        /// The number as it is shown.
        text: String,
    },
    /// A fact that does not exist, marked in place; the text as it was typed.
    Missing(String),
}

impl Span {
    /// How the piece reads.
    #[must_use]
    pub fn plain(&self) -> String {
        match self {
            Self::Text(text)
            | Self::Strong(text)
            | Self::Emphasis(text)
            | Self::Code(text)
            | Self::Link { text, .. }
            | Self::Name(text)
            | Self::Formula(text)
            | Self::Fact { text, .. }
            | Self::Entry { text, .. }
            | Self::Counted { text, .. } => text.clone(),
            Self::Missing(name) => format!("{{{name}}}"),
        }
    }
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

    /// Several sentences in one paragraph, parted by blanks.
    #[must_use]
    pub fn joined(sentences: Vec<Self>) -> Self {
        let mut all = Self::new();
        for sentence in sentences {
            if !all.spans.is_empty() {
                all = all.text(" ");
            }
            for span in sentence.spans {
                all = all.span(span);
            }
        }
        all
    }

    /// The same paragraph with one more piece. Words join the words before them.
    #[must_use]
    pub fn span(mut self, span: Span) -> Self {
        match (self.spans.last_mut(), span) {
            (Some(Span::Text(before)), Span::Text(text)) => before.push_str(&text),
            (_, span) => self.spans.push(span),
        }
        self
    }

    /// The same paragraph with the pieces of another behind it.
    #[must_use]
    pub fn and(mut self, other: Self) -> Self {
        for span in other.spans {
            self = self.span(span);
        }
        self
    }

    /// The same paragraph with more words.
    #[must_use]
    pub fn text(self, text: impl Into<String>) -> Self {
        self.span(Span::Text(text.into()))
    }

    /// The same paragraph with a name that the user or a file gave.
    #[must_use]
    pub fn name(self, name: impl Into<String>) -> Self {
        self.span(Span::Name(name.into()))
    }

    /// The same paragraph with the fixed letters of a formula.
    #[must_use]
    pub fn formula(self, letters: impl Into<String>) -> Self {
        self.span(Span::Formula(letters.into()))
    }

    /// The same paragraph with a number from the ledger of the study.
    #[must_use]
    pub fn counted(self, what: &str, count: usize) -> Self {
        self.span(Span::Counted {
            what: what.to_owned(),
            text: number::text(count as f64, Precision::Whole),
        })
    }

    /// The same paragraph with a fact, number and unit. A fact that the cell does not give is
    /// marked as missing.
    #[must_use]
    pub fn fact(self, cell: CellId, facts: &Facts, name: &str) -> Self {
        let shown = facts
            .get(name)
            .map(|fact| (fact.name.clone(), fact.shown_with_unit()));
        self.bound(cell, name, shown)
    }

    /// The same paragraph with a fact, shown with other digits than it asks for.
    #[must_use]
    pub fn fact_as(self, cell: CellId, facts: &Facts, name: &str, precision: Precision) -> Self {
        let shown = facts
            .get(name)
            .map(|fact| (fact.name.clone(), shown_as(fact, precision)));
        self.bound(cell, name, shown)
    }

    fn bound(self, cell: CellId, asked: &str, shown: Option<(String, String)>) -> Self {
        self.span(match shown {
            Some((name, text)) => Span::Fact { cell, name, text },
            None => Span::Missing(asked.to_owned()),
        })
    }

    /// The same paragraph with one entry of a fact that is a table. An entry that the fact does
    /// not hold is marked as missing.
    #[must_use]
    pub fn entry(
        self,
        cell: CellId,
        fact: &str,
        table: &FactTable,
        row: usize,
        name: &str,
    ) -> Self {
        let span = match table.column(name) {
            Some(column) if row < column.values.len() => Span::Entry {
                cell,
                fact: fact.to_owned(),
                row,
                column: name.to_owned(),
                text: with_unit(&column.shown(row), &column.unit),
            },
            Some(_) | None => Span::Missing(format!("{fact}: {name}")),
        };
        self.span(span)
    }

    /// Whether a fact that the text needs does not exist. Such a sentence is left out of exports
    /// and listed there under what must be supplied.
    #[must_use]
    pub fn is_incomplete(&self) -> bool {
        self.spans
            .iter()
            .any(|span| matches!(span, Span::Missing(_)))
    }

    /// The facts that the text needs and that do not exist.
    #[must_use]
    pub fn missing(&self) -> Vec<&str> {
        self.spans
            .iter()
            .filter_map(|span| match span {
                Span::Missing(name) => Some(name.as_str()),
                Span::Text(_)
                | Span::Strong(_)
                | Span::Emphasis(_)
                | Span::Code(_)
                | Span::Link { .. }
                | Span::Name(_)
                | Span::Formula(_)
                | Span::Fact { .. }
                | Span::Entry { .. }
                | Span::Counted { .. } => None,
            })
            .collect()
    }

    /// The text without its bindings.
    #[must_use]
    pub fn plain(&self) -> String {
        self.spans.iter().map(Span::plain).collect()
    }
}

fn shown_as(fact: &Fact, precision: Precision) -> String {
    match &fact.value {
        FactValue::Number(value) => {
            let unit = match precision {
                Precision::Percent(_) => "",
                Precision::Whole
                | Precision::Decimals(_)
                | Precision::Significant(_)
                | Precision::Full => &fact.unit,
            };
            with_unit(&number::text(*value, precision), unit)
        }
        FactValue::Text(_) | FactValue::Table(_) => fact.shown_with_unit(),
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

    /// A grid of all columns of a fact that is a table; `None` when there is no such fact or it
    /// has no rows.
    #[must_use]
    pub fn of_table(title: &str, cell: CellId, facts: &Facts, fact: &str) -> Option<Self> {
        let table = facts.table(fact).filter(|table| table.n_rows() > 0)?;
        Some(Self {
            title: title.to_owned(),
            columns: table.columns.clone(),
            cell,
            fact: fact.to_owned(),
        })
    }
}
