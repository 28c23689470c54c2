//! Floor 3: what a cell has to say, once for all readers.
//!
//! Settings and facts go in; sentences and blocks come out. Page, reading view, write-up, workbook
//! and command line are painters of them.

pub mod block;
pub mod sentence;

use crate::eval::outcome::{Failure, Outcome};
use crate::eval::standing::{Standings, State};
use crate::report::block::{Block, Paragraph};
use crate::report::sentence::Sentence;
use crate::study::Study;
use crate::study::cell::CellId;
use crate::study::ledger::Ledger;
use std::sync::Arc;

/// What a report is made from.
#[derive(Clone, Copy)]
pub struct Context<'a> {
    /// The study.
    pub study: &'a Study,
    /// How its cells stand.
    pub standings: &'a Standings,
    /// What was counted.
    pub ledger: &'a Ledger,
}

impl Context<'_> {
    /// The last outcome of a cell.
    #[must_use]
    pub fn outcome(&self, id: CellId) -> Option<Arc<Outcome>> {
        self.standings.get(id).outcome
    }

    /// The title of a cell, or words that say that it was removed.
    #[must_use]
    pub fn title(&self, id: CellId) -> String {
        self.study
            .cell(id)
            .map_or_else(|| "a removed cell".to_owned(), |cell| cell.title.clone())
    }
}

/// Everything one cell has to say.
#[derive(Clone, Debug)]
pub struct CellReport {
    /// The cell.
    pub id: CellId,
    /// The settings as sentences with editable words, in the present tense.
    pub sentences: Vec<Sentence>,
    /// The settings and what came of them, in the past tense, for the write-up's methods.
    pub methods: Vec<Paragraph>,
    /// The answer in one plain sentence.
    pub answer: Option<Paragraph>,
    /// The rest of the answer.
    pub blocks: Vec<Block>,
    /// The state.
    pub state: State,
    /// Why there is no answer, if the cell failed.
    pub failure: Option<Arc<Failure>>,
}
