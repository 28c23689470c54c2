//! The five edits. Applying one gives the edit that takes it back.

use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::settings::Settings;

/// What can be titled.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Titled {
    /// The study itself.
    Study,
    /// A cell.
    Cell(CellId),
}

/// A change of a study.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Edit {
    /// Puts a cell at a position of the reading order.
    Insert {
        /// The position; at most the number of cells.
        at: usize,
        /// The cell. Its id is new, or that of a cell that was removed.
        cell: Cell,
    },
    /// Takes a cell away. Cells that draw on it stay and say what they miss.
    Remove {
        /// Which cell.
        id: CellId,
    },
    /// Moves a cell to another position of the reading order.
    Move {
        /// Which cell.
        id: CellId,
        /// Its position afterwards.
        to: usize,
    },
    /// Gives the study or a cell another title.
    Retitle {
        /// What is titled.
        what: Titled,
        /// The new title.
        title: String,
    },
    /// Swaps the settings of a cell for others of the same kind.
    Configure {
        /// Which cell.
        id: CellId,
        /// The new settings.
        settings: Settings,
    },
}

/// Why an edit was refused. A refused edit has changed nothing.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum EditError {
    /// No cell has this id.
    NoSuchCell(CellId),
    /// A cell with this id is in the study already.
    Twice(CellId),
    /// The position lies outside the list.
    Position {
        /// The position asked for.
        at: usize,
        /// The number of cells.
        n_cells: usize,
    },
    /// The title is blank.
    BlankTitle,
    /// Another cell has this title, so that references to it would be ambiguous.
    TitleTaken {
        /// The title.
        title: String,
        /// The cell that has it.
        by: CellId,
    },
    /// The new settings are of another kind than the cell.
    OtherKind(CellId),
    /// The edit would close a circle.
    Circle {
        /// The titles along the circle, from the edited cell back to itself.
        path: Vec<String>,
    },
}

/// Whether an edit may close a circle.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Circles {
    /// It may not.
    Refused,
    /// It only brings back what has been.
    AsTheyWere,
}

impl Study {
    /// Applies an edit and returns the edit that takes it back.
    ///
    /// Either the whole edit happens or, on an error, none of it.
    ///
    /// # Errors
    /// An [`EditError`] that says why the edit was refused.
    pub fn apply(&mut self, edit: Edit) -> Result<Edit, EditError> {
        self.apply_with(edit, Circles::Refused)
    }

    fn apply_with(&mut self, edit: Edit, circles: Circles) -> Result<Edit, EditError> {
        match edit {
            Edit::Insert { at, cell } => self.insert(at, cell, circles),
            Edit::Remove { id } => {
                let at = self.find(id)?;
                let cell = self.cells.remove(at);
                Ok(Edit::Insert { at, cell })
            }
            Edit::Move { id, to } => {
                let from = self.find(id)?;
                if to >= self.cells.len() {
                    return Err(EditError::Position {
                        at: to,
                        n_cells: self.cells.len(),
                    });
                }
                let cell = self.cells.remove(from);
                self.cells.insert(to, cell);
                Ok(Edit::Move { id, to: from })
            }
            Edit::Retitle {
                what: Titled::Study,
                title,
            } => {
                let title = lawful_title(&title)?;
                let old = std::mem::replace(&mut self.title, title);
                Ok(Edit::Retitle {
                    what: Titled::Study,
                    title: old,
                })
            }
            Edit::Retitle {
                what: Titled::Cell(id),
                title,
            } => {
                let at = self.find(id)?;
                let title = lawful_title(&title)?;
                self.title_is_free(&title, id)?;
                let old = std::mem::replace(&mut self.cells[at].title, title);
                Ok(Edit::Retitle {
                    what: Titled::Cell(id),
                    title: old,
                })
            }
            Edit::Configure { id, settings } => {
                let at = self.find(id)?;
                if settings.kind() != self.cells[at].settings.kind() {
                    return Err(EditError::OtherKind(id));
                }
                if circles == Circles::Refused {
                    self.closes_no_circle(id, &self.cells[at].title, &settings)?;
                }
                let settings = std::mem::replace(&mut self.cells[at].settings, settings);
                Ok(Edit::Configure { id, settings })
            }
        }
    }

    /// Applies several edits, all or none, and returns the edits that take them back, in the
    /// order in which to apply them.
    ///
    /// # Errors
    /// The first refusal; the study is then as it was.
    pub fn apply_all(&mut self, edits: Vec<Edit>) -> Result<Vec<Edit>, EditError> {
        let mut back = Vec::with_capacity(edits.len());
        let next_id = self.next_id;
        for edit in edits {
            match self.apply(edit) {
                Ok(inverse) => back.push(inverse),
                Err(error) => {
                    back.reverse();
                    drop(self.take_back(back));
                    self.next_id = next_id;
                    return Err(error);
                }
            }
        }
        back.reverse();
        Ok(back)
    }

    /// Brings back a state that the study has been in, and returns the edits that leave it again.
    ///
    /// A file can be written by hand and hold a circle; mending the circle can then be undone,
    /// although no edit may close one.
    pub(in crate::study) fn take_back(&mut self, edits: Vec<Edit>) -> Vec<Edit> {
        let mut again: Vec<Edit> = edits
            .into_iter()
            .map(|edit| {
                self.apply_with(edit, Circles::AsTheyWere)
                    .expect("the study has been in this state before")
            })
            .collect();
        again.reverse();
        again
    }

    fn find(&self, id: CellId) -> Result<usize, EditError> {
        self.position(id).ok_or(EditError::NoSuchCell(id))
    }

    fn insert(&mut self, at: usize, mut cell: Cell, circles: Circles) -> Result<Edit, EditError> {
        let id = cell.id;
        if self.cell(id).is_some() {
            return Err(EditError::Twice(id));
        }
        if at > self.cells.len() {
            return Err(EditError::Position {
                at,
                n_cells: self.cells.len(),
            });
        }
        cell.title = lawful_title(&cell.title)?;
        self.title_is_free(&cell.title, id)?;
        if circles == Circles::Refused {
            self.closes_no_circle(id, &cell.title, &cell.settings)?;
        }
        self.next_id = self.next_id.max(id.number().saturating_add(1));
        self.cells.insert(at, cell);
        Ok(Edit::Remove { id })
    }

    fn title_is_free(&self, title: &str, id: CellId) -> Result<(), EditError> {
        match self.titled(title) {
            Some(other) if other.id != id => Err(EditError::TitleTaken {
                title: title.to_owned(),
                by: other.id,
            }),
            Some(_) | None => Ok(()),
        }
    }

    /// Follows the links from `settings` and refuses if they lead back to `id`.
    fn closes_no_circle(
        &self,
        id: CellId,
        title: &str,
        settings: &Settings,
    ) -> Result<(), EditError> {
        // Depth first, with the way that led to each cell, so that the circle can be named.
        let mut ways: Vec<Vec<CellId>> =
            settings.draws_on().into_iter().map(|to| vec![to]).collect();
        let mut seen = Vec::new();
        while let Some(way) = ways.pop() {
            let last = *way.last().expect("a way has at least one step");
            if last == id {
                let mut path = vec![title.to_owned()];
                let named = way[..way.len() - 1]
                    .iter()
                    .filter_map(|step| self.cell(*step));
                path.extend(named.map(|cell| cell.title.clone()));
                path.push(title.to_owned());
                return Err(EditError::Circle { path });
            }
            if seen.contains(&last) {
                continue;
            }
            seen.push(last);
            if let Some(cell) = self.cell(last) {
                for to in cell.settings.draws_on() {
                    let mut longer = way.clone();
                    longer.push(to);
                    ways.push(longer);
                }
            }
        }
        Ok(())
    }
}

/// A title as it is kept: one line, without the signs by which prose names a fact.
///
/// # Errors
/// [`EditError::BlankTitle`] when nothing is left.
pub(in crate::study) fn lawful_title(title: &str) -> Result<String, EditError> {
    // A title is named in prose as {title: fact | format}.
    let clean: String = title
        .chars()
        .map(|letter| {
            let sign = matches!(letter, '{' | '}' | ':' | '|') || letter.is_control();
            if sign { ' ' } else { letter }
        })
        .collect();
    let clean = clean.split_whitespace().collect::<Vec<_>>().join(" ");
    if clean.is_empty() {
        Err(EditError::BlankTitle)
    } else {
        Ok(clean)
    }
}

#[cfg(test)]
mod tests;
