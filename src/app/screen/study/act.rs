//! What the study screen does with what happens on it.

use crate::app::part::{cell, head, offer, strip, thread};
use crate::app::screen::study::{Action, Message, Renaming, StudyScreen};
use crate::study::cell::{Cell, CellId};
use crate::study::edit::{Edit, Titled};
use iced::Task;
use iced::widget::operation;

impl StudyScreen {
    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        let action = match message {
            Message::Session(message) => {
                let task = self.session.update(message);
                self.follow_table();
                self.follow_data();
                Action::Run(task.map(Message::Session))
            }
            Message::Head(message) => self.head(message),
            Message::Thread(thread::Message::GoTo(id)) => self.go_to(id),
            Message::Cell(id, message) => self.in_cell(id, *message),
            Message::Strip(strip::Message::Stop) => {
                self.session.stop();
                Action::None
            }
            Message::Strip(strip::Message::Dismiss) => {
                self.said = None;
                Action::None
            }
            Message::Offer => {
                self.offering = Some(None);
                Action::None
            }
            Message::Offered(message) => {
                let at = self.session.study().cells().len();
                self.add(at, &message)
            }
            Message::Escape => self.escape(),
            Message::Step(by) => self.step(by),
        };
        self.refresh();
        action
    }

    fn head(&mut self, message: head::Message) -> Action {
        match message {
            head::Message::Rename => {
                let draft = self.session.study().title().to_owned();
                self.rename(Titled::Study, draft, head::FIELD)
            }
            head::Message::Typed(draft) => self.type_title(draft),
            head::Message::Renamed => self.renamed(),
            head::Message::Undo => self.undo(),
            head::Message::Redo => self.redo(),
            head::Message::Read => {
                self.is_reading = !self.is_reading;
                self.close_all();
                self.sheets.clear();
                Action::None
            }
            head::Message::More => {
                self.head_more = self.head_more.other();
                Action::None
            }
            head::Message::SaveAs => Action::SaveAs,
            head::Message::Open => Action::Open,
            head::Message::Start => Action::Start,
            head::Message::Larger => Action::Scale(1),
            head::Message::Smaller => Action::Scale(-1),
            head::Message::Save => Action::Save,
            head::Message::HandOver => Action::HandOver,
            head::Message::BringUpToDate => self.bring_up_to_date(),
            head::Message::Follow(following) => {
                let task = self.session.follow(following);
                Action::Followed(following, task.map(Message::Session))
            }
            head::Message::Close => Action::Close,
            head::Message::Keys => Action::Keys,
            head::Message::Turn => Action::Turn,
        }
    }

    /// Evaluates what is due.
    pub fn bring_up_to_date(&mut self) -> Action {
        Action::Run(self.session.bring_up_to_date().map(Message::Session))
    }

    /// Takes the last step back.
    pub fn undo(&mut self) -> Action {
        self.close_all();
        let task = self.session.undo().map(Message::Session);
        self.follow_table();
        self.refresh();
        Action::Run(task)
    }

    /// Does it again.
    pub fn redo(&mut self) -> Action {
        self.close_all();
        let task = self.session.redo().map(Message::Session);
        self.follow_table();
        self.refresh();
        Action::Run(task)
    }

    fn close_all(&mut self) {
        self.editor = None;
        self.prose = None;
        self.renaming = None;
        self.offering = None;
        self.more = None;
    }

    fn escape(&mut self) -> Action {
        let had = self.editor.take().is_some()
            | self.renaming.take().is_some()
            | self.offering.take().is_some()
            | self.more.take().is_some()
            | (std::mem::take(&mut self.head_more) == head::More::Open);
        if had {
            return Action::None;
        }
        // Prose is closed last and only when nothing would be lost: undo does not reach drafts.
        match &self.prose {
            Some(prose) if prose.is_changed() => {
                self.said =
                    Some("The text has been changed: Set keeps it, Leave gives it up.".to_owned());
            }
            Some(_) => self.prose = None,
            None => {
                if self.highlight.take().is_none() {
                    self.said = None;
                }
            }
        }
        Action::None
    }

    pub(super) fn go_to(&mut self, id: CellId) -> Action {
        self.shown = Some(id);
        self.go_to.key = cell::key(id);
        self.go_to.serial += 1;
        Action::None
    }

    fn step(&mut self, by: isize) -> Action {
        let cells = self.session.study().cells();
        let at = self
            .shown
            .and_then(|id| self.session.study().position(id))
            .map_or(0, |at| at.saturating_add_signed(by));
        match cells.get(at.min(cells.len().saturating_sub(1))) {
            Some(cell) => self.go_to(cell.id),
            None => Action::None,
        }
    }

    /// Applies edits through the one door; a refusal is told.
    pub(super) fn commit(&mut self, label: &str, edits: Vec<Edit>) -> Action {
        match self.session.commit(label, edits) {
            Ok(task) => {
                self.follow_table();
                Action::Run(task.map(Message::Session))
            }
            Err(problem) => Action::Tell(problem),
        }
    }

    fn rename(&mut self, what: Titled, draft: String, field: &'static str) -> Action {
        self.more = None;
        self.renaming = Some(Renaming { what, draft });
        Action::Run(Task::batch([
            operation::focus(field),
            operation::select_all(field),
        ]))
    }

    fn type_title(&mut self, draft: String) -> Action {
        if let Some(renaming) = &mut self.renaming {
            renaming.draft = draft;
        }
        Action::None
    }

    fn renamed(&mut self) -> Action {
        let Some(Renaming { what, draft }) = self.renaming.clone() else {
            return Action::None;
        };
        let before = match what {
            Titled::Study => self.session.study().title().to_owned(),
            Titled::Cell(id) => self.title(id),
        };
        if draft.trim() == before {
            self.renaming = None;
            return Action::None;
        }
        let label = format!("rename {before}");
        let title = draft;
        let action = self.commit(&label, vec![Edit::Retitle { what, title }]);
        // A refused title stays in the field.
        if !matches!(action, Action::Tell(_)) {
            self.renaming = None;
        }
        action
    }

    pub(super) fn title(&self, id: CellId) -> String {
        self.session
            .study()
            .cell(id)
            .map_or_else(|| "a removed cell".to_owned(), |cell| cell.title.clone())
    }

    fn in_cell(&mut self, id: CellId, message: cell::Message) -> Action {
        self.shown = Some(id);
        match message {
            cell::Message::Word(nth, piece) => self.open_word(id, nth, piece),
            cell::Message::Editor(message) => self.in_editor(message),
            cell::Message::Write => self.write(id),
            cell::Message::Prose(message) => self.in_prose(message),
            cell::Message::Rename => {
                let draft = self.title(id);
                self.rename(Titled::Cell(id), draft, cell::FIELD)
            }
            cell::Message::Typed(draft) => self.type_title(draft),
            cell::Message::Renamed => self.renamed(),
            cell::Message::More => {
                self.more = (self.more != Some(id)).then_some(id);
                Action::None
            }
            cell::Message::Move(by) => self.move_by(id, by),
            cell::Message::Duplicate => self.duplicate(id),
            cell::Message::Remove => {
                self.more = None;
                let label = format!("remove {}", self.title(id));
                self.commit(&label, vec![Edit::Remove { id }])
            }
            cell::Message::AddBelow => {
                self.more = None;
                self.offering = Some(Some(id));
                Action::None
            }
            cell::Message::Offer(message) => {
                let at = self.session.study().position(id).map_or(0, |at| at + 1);
                self.add(at, &message)
            }
            cell::Message::Remedy(at) => self.take_remedy(id, at),
            cell::Message::CopyDetails => {
                let failure = self.session.standings().get(id).failure;
                let problem = failure.as_deref().map(|failure| failure.problem.clone());
                match problem {
                    Some(problem) => {
                        let details = problem.details.clone().unwrap_or_default();
                        let words = format!("{problem}\n{}: {details}", problem.code);
                        self.said = Some("The details have been copied.".to_owned());
                        Action::Run(iced::clipboard::write(words))
                    }
                    None => Action::None,
                }
            }
            cell::Message::Block(at, message) => self.in_block(id, at, message),
            cell::Message::Stop => {
                self.session.stop();
                Action::None
            }
            cell::Message::OpenTable => self.open_table(id),
            cell::Message::Table(message) => self.in_table(message),
            cell::Message::Notes => {
                if !self.notes.remove(&id) {
                    let _ = self.notes.insert(id);
                }
                Action::None
            }
        }
    }

    fn move_by(&mut self, id: CellId, by: isize) -> Action {
        let study = self.session.study();
        let n_cells = study.cells().len();
        let Some(from) = study.position(id) else {
            return Action::None;
        };
        let to = from.saturating_add_signed(by).min(n_cells - 1);
        if to == from {
            return Action::None;
        }
        let label = format!("move {}", self.title(id));
        self.commit(&label, vec![Edit::Move { id, to }])
    }

    fn duplicate(&mut self, id: CellId) -> Action {
        self.more = None;
        let study = self.session.study();
        let (Some(copy), Some(at)) = (offer::copy(study, id), study.position(id)) else {
            return Action::None;
        };
        let label = format!("duplicate {}", self.title(id));
        self.insert(&label, at + 1, copy)
    }

    fn add(&mut self, at: usize, message: &offer::Message) -> Action {
        self.offering = None;
        match offer::cell(self.session.study(), at, message) {
            Some(cell) => {
                let label = format!("add {}", cell.title);
                self.insert(&label, at, cell)
            }
            None => Action::None,
        }
    }

    fn insert(&mut self, label: &str, at: usize, cell: Cell) -> Action {
        let id = cell.id;
        let action = self.commit(label, vec![Edit::Insert { at, cell }]);
        let _ = self.go_to(id);
        action
    }

    fn take_remedy(&mut self, id: CellId, at: usize) -> Action {
        let failure = self.session.standings().get(id).failure;
        let remedy = failure
            .as_deref()
            .and_then(|failure| failure.remedies.get(at))
            .cloned();
        match remedy {
            Some(remedy) => {
                let settings = remedy.settings;
                self.commit(&remedy.label, vec![Edit::Configure { id, settings }])
            }
            None => Action::None,
        }
    }
}
