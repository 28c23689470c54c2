//! Floor 1: the document: what the user decided, and nothing that follows from it.

pub mod cell;
pub mod edit;
pub mod history;
pub mod kept;
pub mod ledger;
pub mod link;
pub mod prose;
pub mod settings;
pub mod source;

use crate::study::cell::{Cell, CellId};
use crate::study::edit::lawful_title;
use crate::study::kept::Kept;
use crate::study::link::Link;
use crate::study::settings::Settings;
use crate::study::settings::data::OutcomeKind;
use std::collections::BTreeSet;

/// An ordered list of cells with a title. Every change is an [`edit::Edit`].
///
/// The order is for reading; what a cell draws on is in its settings.
///
/// Always true: ids and titles are unique, and every title is one that prose can name. Circles
/// are refused by edits, but a file can hold one, because files can be written by hand.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Study {
    title: String,
    cells: Vec<Cell>,
    next_id: u32,
    kept: Kept,
}

impl Default for Study {
    fn default() -> Self {
        Self::new(UNTITLED)
    }
}

/// The title of a study to which nobody has given one.
const UNTITLED: &str = "Untitled study";

impl Study {
    /// A study without cells. A blank title becomes “Untitled study”.
    #[must_use]
    pub fn new(title: &str) -> Self {
        Self {
            title: lawful_title(title).unwrap_or_else(|_| UNTITLED.to_owned()),
            cells: Vec::new(),
            next_id: 1,
            kept: Kept::default(),
        }
    }

    /// A study as it was written down.
    ///
    /// What no edit could have led to is mended, because a file can be written by hand: a title
    /// that is blank or taken gets a number, an id that is taken is replaced by a new one, and
    /// `next_id` is raised above every id in use, so that no id is ever given out twice.
    #[must_use]
    pub fn restored(title: &str, cells: Vec<Cell>, next_id: u32) -> Self {
        let above = cells.iter().map(|cell| cell.id.number().saturating_add(1));
        let mut study = Self::new(title);
        study.next_id = above.max().unwrap_or(1).max(next_id).max(1);
        let mut ids = BTreeSet::new();
        let mut titles = BTreeSet::new();
        for mut cell in cells {
            if !ids.insert(cell.id) {
                cell.id = study.next_id();
                study.next_id = study.next_id.saturating_add(1);
                let _ = ids.insert(cell.id);
            }
            let wish = lawful_title(&cell.title)
                .unwrap_or_else(|_| cell.settings.kind().name().to_owned());
            cell.title = numbered(&wish, |title| !titles.contains(&folded(title)));
            let _ = titles.insert(folded(&cell.title));
            study.cells.push(cell);
        }
        study
    }

    /// The same study, with what its file holds beyond what this version knows.
    #[must_use]
    pub fn with_kept(mut self, kept: Kept) -> Self {
        self.kept = kept;
        self
    }

    /// What its file holds beyond what this version knows.
    #[must_use]
    pub fn kept(&self) -> &Kept {
        &self.kept
    }

    /// The title of the study.
    #[must_use]
    pub fn title(&self) -> &str {
        &self.title
    }

    /// The cells in reading order.
    #[must_use]
    pub fn cells(&self) -> &[Cell] {
        &self.cells
    }

    /// The cell with this id.
    #[must_use]
    pub fn cell(&self, id: CellId) -> Option<&Cell> {
        self.cells.iter().find(|cell| cell.id == id)
    }

    /// The kind of outcome of the samples that a link leads to, as far as it has been said.
    #[must_use]
    pub fn outcome_kind(&self, link: Link) -> Option<&OutcomeKind> {
        let mut next = link.0;
        // No chain is longer than there are cells; a circle, which only a file can hold, ends.
        for _ in 0..=self.cells.len() {
            match &self.cell(next?)?.settings {
                Settings::Data(data) => {
                    return data.outcome.as_ref().map(|outcome| &outcome.kind);
                }
                Settings::Prepare(prepare) => next = prepare.input.0,
                Settings::Fit(fit) => next = fit.input.0,
                Settings::Question(_)
                | Settings::Compare(_)
                | Settings::Score(_)
                | Settings::Prose(_) => return None,
            }
        }
        None
    }

    /// Where a cell stands in reading order.
    #[must_use]
    pub fn position(&self, id: CellId) -> Option<usize> {
        self.cells.iter().position(|cell| cell.id == id)
    }

    /// The cell with this title; extra blanks and case do not count.
    #[must_use]
    pub fn titled(&self, title: &str) -> Option<&Cell> {
        let wanted = folded(title);
        self.cells.iter().find(|cell| folded(&cell.title) == wanted)
    }

    /// The id that the next new cell gets.
    #[must_use]
    pub fn next_id(&self) -> CellId {
        CellId::new(self.next_id)
    }

    /// A title for a new cell that no other cell has: the wish itself, or the wish and a number.
    #[must_use]
    pub fn free_title(&self, wish: &str) -> String {
        let wish = lawful_title(wish).unwrap_or_else(|_| "Cell".to_owned());
        numbered(&wish, |title| self.titled(title).is_none())
    }

    /// All cells that draw on `id`, directly or through others, in reading order.
    #[must_use]
    pub fn drawing_on(&self, id: CellId) -> Vec<CellId> {
        let mut reached = vec![id];
        let mut at = 0;
        while let Some(&from) = reached.get(at) {
            for cell in &self.cells {
                if cell.settings.draws_on().contains(&from) && !reached.contains(&cell.id) {
                    reached.push(cell.id);
                }
            }
            at += 1;
        }
        let drawing = |cell: &&Cell| cell.id != id && reached.contains(&cell.id);
        self.cells
            .iter()
            .filter(drawing)
            .map(|cell| cell.id)
            .collect()
    }
}

/// A title as it is compared with others.
fn folded(title: &str) -> String {
    let words: Vec<_> = title.split_whitespace().collect();
    words.join(" ").to_lowercase()
}

/// The wish itself, or the wish and the first number, from 2 on, that makes it free.
fn numbered(wish: &str, is_free: impl Fn(&str) -> bool) -> String {
    if is_free(wish) {
        return wish.to_owned();
    }
    (2_u64..)
        .map(|number| format!("{wish} {number}"))
        .find(|title| is_free(title))
        .expect("some number is free")
}
