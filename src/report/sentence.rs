//! A sentence: text with editable words.

use crate::study::cell::{CellId, Kind};
use crate::study::settings::slot::{Slot, Value};

/// A sentence that tells a setting, with words that can be edited in place.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Sentence {
    /// The pieces in reading order.
    pub pieces: Vec<Piece>,
    /// Whether it is one of the first that a reader needs.
    pub rank: Rank,
}

/// Whether a sentence is one of the first that a reader needs.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Rank {
    /// Always shown.
    #[default]
    Main,
    /// How the finer points are set; may be folded away.
    Detail,
}

/// A piece of a sentence.
#[derive(Clone, Debug, PartialEq)]
pub enum Piece {
    /// Words that stand.
    Text(String),
    /// Words that can be edited.
    Word(Word),
}

/// Words that can be edited.
#[derive(Clone, Debug, PartialEq)]
pub struct Word {
    /// Which setting they show.
    pub slot: Slot,
    /// How they read.
    pub text: String,
    /// What opens when they are chosen.
    pub editor: Editor,
}

/// The sorts of editor.
#[derive(Clone, Debug, PartialEq)]
pub enum Editor {
    /// A number between bounds.
    Number {
        /// The smallest lawful number.
        least: f64,
        /// The largest lawful number.
        most: f64,
        /// Whether only whole numbers are lawful.
        whole: Wholeness,
    },
    /// One of a few values.
    Choice(Vec<Choice>),
    /// Words of the user's own.
    Text,
    /// One column of the tables, or none.
    Column,
    /// Ranges of columns, with search.
    Columns,
    /// Several columns, one by one, with search.
    Names,
    /// A cell of one of these kinds.
    Cell(Vec<Kind>),
    /// A file.
    File,
    /// An ordered list of preparation steps.
    Steps,
    /// A list of texts or numbers.
    List,
    /// A list of recorded acts, to look at and take back: corrections, exclusions.
    Acts,
}

/// Whether only whole numbers are lawful.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Wholeness {
    /// Only whole numbers.
    Whole,
    /// Any number.
    Any,
}

/// One of a few values.
#[derive(Clone, Debug, PartialEq)]
pub struct Choice {
    /// How it reads.
    pub label: String,
    /// What it sets.
    pub value: Value,
}

impl Sentence {
    /// An empty sentence.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// The same sentence with more standing words.
    #[must_use]
    pub fn text(mut self, text: impl Into<String>) -> Self {
        self.pieces.push(Piece::Text(text.into()));
        self
    }

    /// The same sentence with an editable word.
    #[must_use]
    pub fn word(mut self, slot: Slot, text: impl Into<String>, editor: Editor) -> Self {
        self.pieces.push(Piece::Word(Word {
            slot,
            text: text.into(),
            editor,
        }));
        self
    }

    /// The same sentence as a detail.
    #[must_use]
    pub fn detail(mut self) -> Self {
        self.rank = Rank::Detail;
        self
    }

    /// The words that can be edited.
    pub fn words(&self) -> impl Iterator<Item = &Word> {
        self.pieces.iter().filter_map(|piece| match piece {
            Piece::Word(word) => Some(word),
            Piece::Text(_) => None,
        })
    }

    /// How the sentence reads.
    #[must_use]
    pub fn plain(&self) -> String {
        let text = |piece: &Piece| match piece {
            Piece::Text(text) => text.clone(),
            Piece::Word(word) => word.text.clone(),
        };
        self.pieces.iter().map(text).collect()
    }
}

/// A cell that a word can link to, as an editor lists it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct CellChoice {
    /// The cell.
    pub id: CellId,
    /// Its title.
    pub title: String,
}
