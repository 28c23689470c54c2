//! Floor 1: the document: what the user decided, and nothing that follows from it.

pub mod cell;
pub mod edit;
pub mod history;
pub mod ledger;
pub mod link;
pub mod prose;
pub mod settings;
pub mod source;

use crate::study::cell::{Cell, CellId};

/// An ordered list of cells with a title. Every change is an [`edit::Edit`].
///
/// The order is for reading; what a cell draws on is in its settings.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Study {
    title: String,
    cells: Vec<Cell>,
    next_id: u32,
}

impl Study {
    /// A study without cells.
    #[must_use]
    pub fn new(title: &str) -> Self {
        Self {
            title: title.to_owned(),
            cells: Vec::new(),
            next_id: 1,
        }
    }

    /// A study as it was written down. `next_id` is raised above every id in use, so that no id
    /// is ever given out twice.
    #[must_use]
    pub fn restored(title: &str, cells: Vec<Cell>, next_id: u32) -> Self {
        let above = cells
            .iter()
            .map(|cell| cell.id.number() + 1)
            .max()
            .unwrap_or(1);
        Self {
            title: title.to_owned(),
            cells,
            next_id: next_id.max(above),
        }
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

    /// Where a cell stands in reading order.
    #[must_use]
    pub fn position(&self, id: CellId) -> Option<usize> {
        self.cells.iter().position(|cell| cell.id == id)
    }

    /// The first cell with this title; blanks around it and case do not count.
    #[must_use]
    pub fn titled(&self, title: &str) -> Option<&Cell> {
        let wanted = title.trim().to_lowercase();
        self.cells
            .iter()
            .find(|cell| cell.title.trim().to_lowercase() == wanted)
    }

    /// The id that the next new cell gets.
    #[must_use]
    pub fn next_id(&self) -> CellId {
        CellId::new(self.next_id)
    }

    /// A title for a new cell that no other cell has: the wish itself, or the wish and a number.
    #[must_use]
    pub fn free_title(&self, wish: &str) -> String {
        if self.titled(wish).is_none() {
            return wish.to_owned();
        }
        let mut number = 2;
        loop {
            let title = format!("{wish} {number}");
            if self.titled(&title).is_none() {
                return title;
            }
            number += 1;
        }
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
