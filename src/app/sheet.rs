//! What is shown of one cell, made once and kept until the cell may read differently.

use crate::app::widget::grid::{Align, Field, Source};
use crate::app::widget::sentence::{Piece, Role};
use crate::base::hash::ContentHash;
use crate::eval::fact::{FactColumn, FactValues};
use crate::figure::Meaning;
use crate::figure::layout;
use crate::figure::picture::{Picture, Size};
use crate::report::CellReport;
use crate::report::block::{self, Block, Grid, Item, ItemMark, Paragraph, Span};
use crate::report::sentence::{self, Sentence};
use std::borrow::Cow;
use std::sync::Arc;

/// What is shown of one cell.
#[derive(Debug)]
pub struct Sheet {
    /// All that the cell has to say.
    pub report: CellReport,
    /// The blocks as they are shown, in order.
    pub parts: Vec<Part>,
}

/// A block as it is shown.
#[derive(Debug)]
pub enum Part {
    /// A heading.
    Heading(String),
    /// A heading of prose; 1 is the highest.
    Section(u8, Vec<Piece>),
    /// Running text.
    Words(Vec<Piece>),
    /// A list: how deep each item is, what stands before it, what it says.
    List(Vec<(u8, String, Vec<Piece>)>),
    /// A quotation.
    Quote(Vec<Part>),
    /// Letters that keep their places.
    Code(String),
    /// A rule across the page.
    Rule,
    /// A table typed in prose: its head, then its rows.
    Tabular(Vec<block::Align>, Vec<Vec<Vec<Piece>>>),
    /// A grid.
    Grid(FactGrid),
    /// A figure.
    Figure(Figure),
    /// What can be done with one press.
    Offers(Vec<block::Offer>),
}

/// A figure as it is shown.
#[derive(Debug)]
pub struct Figure {
    /// Its short name, for files.
    pub name: String,
    /// The picture at the present width.
    pub picture: Arc<Picture>,
    /// The hash of the picture.
    pub hash: ContentHash,
    /// What is read below it.
    pub reading: Vec<Piece>,
}

impl Sheet {
    /// What is shown of a report on a page of this width.
    #[must_use]
    pub fn new(report: CellReport, width: f32) -> Self {
        let parts = report
            .blocks
            .iter()
            .map(|block| part(block, width))
            .collect();
        Self { report, parts }
    }
}

fn part(block: &Block, width: f32) -> Part {
    match block {
        Block::Heading(heading) => Part::Heading(heading.clone()),
        Block::Section { level, text } => Part::Section(*level, pieces(text)),
        Block::Paragraph(paragraph) => Part::Words(pieces(paragraph)),
        Block::List(paragraphs) => {
            let item = |paragraph| (0, "–".to_owned(), pieces(paragraph));
            Part::List(paragraphs.iter().map(item).collect())
        }
        Block::Items(items) => {
            let item = |item: &Item| {
                let mark = match item.mark {
                    ItemMark::Bullet => "–".to_owned(),
                    ItemMark::Number(number) => format!("{number}."),
                    ItemMark::Continued => String::new(),
                };
                (item.depth, mark, pieces(&item.text))
            };
            Part::List(items.iter().map(item).collect())
        }
        Block::Quote(blocks) => {
            Part::Quote(blocks.iter().map(|block| part(block, width)).collect())
        }
        Block::Code(letters) => Part::Code(letters.clone()),
        Block::Rule => Part::Rule,
        Block::Offers(offers) => Part::Offers(offers.clone()),
        Block::Tabular { head, align, rows } => {
            let row = |row: &Vec<Paragraph>| row.iter().map(pieces).collect();
            let all = std::iter::once(head).chain(rows).map(row).collect();
            Part::Tabular(align.clone(), all)
        }
        Block::Grid(grid) => Part::Grid(FactGrid::new(grid.clone())),
        Block::Figure(named) => {
            let size = layout::natural_size(&named.figure, f64::from(width));
            let size = Size::new(f64::from(width), size.height);
            let picture = layout::layout(&named.figure, size);
            Part::Figure(Figure {
                name: named.name.clone(),
                hash: ContentHash::of(&picture),
                picture: Arc::new(picture),
                reading: pieces(&named.reading),
            })
        }
    }
}

/// A paragraph in pieces.
#[must_use]
pub fn pieces(paragraph: &Paragraph) -> Vec<Piece> {
    let piece = |span: &Span| {
        let role = match span {
            Span::Text(_) | Span::Name(_) | Span::Formula(_) => Role::Plain,
            Span::Code(_) => Role::Code,
            // Nothing is ever fetched, so that an address is text.
            Span::Link { .. } => Role::Plain,
            Span::Strong(_) => Role::Strong,
            Span::Emphasis(_) => Role::Emphasis,
            Span::Fact { .. } | Span::Entry { .. } | Span::Counted { .. } => Role::Fact,
            Span::Missing(_) => Role::Missing,
        };
        Piece {
            text: span.plain(),
            role,
        }
    };
    paragraph.spans.iter().map(piece).collect()
}

/// A sentence in pieces; the word at `open` is being edited.
#[must_use]
pub fn sentence_pieces(sentence: &Sentence, open: Option<usize>) -> Vec<Piece> {
    sentence
        .pieces
        .iter()
        .enumerate()
        .map(|(at, piece)| match piece {
            sentence::Piece::Text(text) => Piece {
                text: text.clone(),
                role: Role::Plain,
            },
            sentence::Piece::Word(word) => Piece {
                text: word.text.clone(),
                role: if open == Some(at) {
                    Role::Open
                } else {
                    Role::Editable
                },
            },
        })
        .collect()
}

/// A grid of facts, as a grid widget asks for it: the first column names the rows.
#[derive(Debug)]
pub struct FactGrid {
    /// The grid.
    pub grid: Grid,
}

impl FactGrid {
    /// The grid as it is shown.
    #[must_use]
    pub fn new(grid: Grid) -> Self {
        Self { grid }
    }

    /// What a row is about, where figures can show the same thing.
    #[must_use]
    pub fn meaning(&self, row: usize) -> Option<Meaning> {
        let first = self.grid.columns.first()?;
        let FactValues::Texts(names) = &first.values else {
            return None;
        };
        let name = names.get(row)?.clone();
        // Facts call their columns by these words.
        match first.name.as_str() {
            "predictor" => Some(Meaning::Predictor(name)),
            "sample" => Some(Meaning::Sample(name)),
            "unit" => Some(Meaning::Unit(name)),
            "batch" => Some(Meaning::Batch(name)),
            _ => None,
        }
    }

    /// The first row that is about a thing.
    #[must_use]
    pub fn row_of(&self, meaning: &Meaning) -> Option<usize> {
        (0..self.n_rows()).find(|row| self.meaning(*row).as_ref() == Some(meaning))
    }

    fn at(&self, column: usize) -> &FactColumn {
        &self.grid.columns[column + 1]
    }
}

impl Source for FactGrid {
    fn n_rows(&self) -> usize {
        self.grid
            .columns
            .first()
            .map_or(0, |column| column.values.len())
    }

    fn n_columns(&self) -> usize {
        self.grid.columns.len().saturating_sub(1)
    }

    fn corner(&self) -> Cow<'_, str> {
        self.grid.columns.first().map_or(Cow::Borrowed(""), heading)
    }

    fn row(&self, row: usize) -> Cow<'_, str> {
        self.grid
            .columns
            .first()
            .map_or(Cow::Borrowed(""), |column| Cow::Owned(column.shown(row)))
    }

    fn column(&self, column: usize) -> Cow<'_, str> {
        heading(self.at(column))
    }

    fn field(&self, row: usize, column: usize) -> Field<'_> {
        Field::known(self.at(column).shown(row))
    }

    fn align(&self, column: usize) -> Align {
        match self.at(column).values {
            FactValues::Numbers(_) => Align::End,
            FactValues::Texts(_) => Align::Start,
        }
    }
}

/// The heading of a column: units belong here.
fn heading(column: &FactColumn) -> Cow<'_, str> {
    if column.unit.is_empty() {
        Cow::Borrowed(&column.name)
    } else {
        Cow::Owned(format!("{}, {}", column.name, column.unit))
    }
}
