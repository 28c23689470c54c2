//! Starting from tables: choose files, see them as a grid, give columns their roles, read the
//! import report, get a ready study.

mod make;
mod noticed;
pub mod role;
mod say;
pub mod taken;
mod view;
pub mod word;

use crate::app::disk::{self, Wanted};
use crate::app::editor::place::{self, Place};
use crate::app::editor::{choice, column, names};
use crate::app::run;
use crate::app::screen::start::role::{Role, Roles};
use crate::app::screen::start::taken::{Shown, Taken, take, take_bytes};
use crate::app::screen::start::word::Ask;
use crate::app::session::Opened;
use crate::app::widget::grid::{Did, Show};
use crate::base::problem::Problem;
use crate::base::work::{CancelSource, Work};
use crate::eval::start::Started;
use crate::table::read::Options;
use iced::Task;
use std::collections::BTreeSet;
use std::path::PathBuf;
use std::sync::Arc;

/// The name by which the path is given the focus.
pub const FIELD: &str = "table path";

/// What happens on the screen.
#[derive(Clone, Debug)]
pub enum Message {
    /// About the place where the next table lies.
    Place(place::Message),
    /// A file has been read.
    Read(Box<Result<Arc<Taken>, Problem>>),
    /// A file that was taken has been read in another way: which, and how.
    ReadAgain(usize, Box<Result<Arc<Taken>, Problem>>),
    /// Another table is shown.
    Show(usize),
    /// A table is taken away.
    Remove(usize),
    /// The list of files is shown or hidden.
    Files,
    /// Something was done in the grid.
    Did(Did),
    /// A role was given to the column that stands out.
    Give(Role),
    /// A column was proposed for a role, and taken.
    Propose(String, Role),
    /// A part of a column's name is being typed.
    Jumping(String),
    /// The column whose name is typed is shown.
    Jump,
    /// A word was pressed: of which sentence, and which piece.
    Word(usize, usize),
    /// About the editor that is open.
    Editor(EditorMessage),
    /// What is open is closed.
    Escape,
    /// The study is made.
    Make,
    /// It has been made.
    Made(Box<Result<Arc<Started>, Problem>>),
    /// What is under way is called off.
    Stop,
    /// Back to the welcome page.
    Leave,
}

/// What happens in the editor of a word.
#[derive(Clone, Debug)]
pub enum EditorMessage {
    /// One of a few values.
    Choice(choice::Message),
    /// One column.
    Column(column::Message),
    /// Several columns.
    Names(names::Message),
}

/// What the screen wants of the window.
#[derive(Debug)]
pub enum Action {
    /// Nothing.
    None,
    /// Something is done outside.
    Run(Task<Message>),
    /// The study is ready: it, and what was taken where nothing was said.
    Begin(Box<Opened>, Vec<String>),
    /// Back to the welcome page.
    Leave,
}

/// What is under way.
enum Busy {
    /// Nothing.
    No,
    /// A file is being read. The work stops when it is dropped, with the screen.
    Reading { name: String, cancel: CancelSource },
    /// The study is being made.
    Making { cancel: CancelSource },
}

/// The editor of a word.
enum Field {
    Choice(choice::Choice),
    Column(column::Column),
    Names(names::Chosen),
}

/// The screen.
pub struct Start {
    place: Place,
    has_files: bool,
    tables: Vec<Arc<Taken>>,
    shown: Option<Shown>,
    at: usize,
    roles: Roles,
    /// The stable name of the kind of outcome, if one was chosen.
    kind: Option<&'static str>,
    marked: Option<String>,
    show: Show,
    jump: String,
    open: Option<(Ask, Field)>,
    busy: Busy,
    /// Files that were dropped and wait for their turn.
    waiting: Vec<PathBuf>,
    problem: Option<Problem>,
    version: u64,
}

impl Start {
    /// Begins in the folder in which the program was started.
    pub fn new() -> (Self, Task<Message>) {
        let (place, task) = Place::read(Wanted::Table, disk::start());
        let screen = Self {
            place,
            has_files: true,
            tables: Vec::new(),
            shown: None,
            at: 0,
            roles: Roles::default(),
            kind: None,
            marked: None,
            show: Show::default(),
            jump: String::new(),
            open: None,
            busy: Busy::No,
            waiting: Vec::new(),
            problem: None,
            version: 0,
        };
        let focus = Task::batch([
            iced::widget::operation::focus(FIELD),
            iced::widget::operation::move_cursor_to_end(FIELD),
        ]);
        (screen, Task::batch([task.map(Message::Place), focus]))
    }

    /// Begins with tables that lie in memory: names of files and what they hold.
    ///
    /// # Panics
    /// When one of them holds no table.
    #[must_use]
    pub fn with(tables: &[(&str, &str)]) -> Self {
        let (mut screen, _) = Self::new();
        for (name, text) in tables {
            let path = PathBuf::from(name);
            let _ = screen.take(path.clone());
            let bytes: Arc<[u8]> = Arc::from(text.as_bytes());
            let taken = take_bytes(&path, bytes, Options::default(), &Work::unattended());
            let taken = taken.expect("whoever names tables in memory names sound ones");
            let _ = screen.update(Message::Read(Box::new(Ok(taken))));
        }
        screen
    }

    /// Takes a file, such as one that was dropped on the window.
    pub fn take(&mut self, path: PathBuf) -> Task<Message> {
        if !matches!(self.busy, Busy::No) {
            // Several files that are dropped at once come one after the other.
            self.waiting.push(path);
            return Task::none();
        }
        let cancel = CancelSource::new();
        let token = cancel.token();
        self.problem = None;
        self.busy = Busy::Reading {
            name: disk::name(&path),
            cancel,
        };
        run::off_thread(move || {
            let report = |_: f32| {};
            let work = Work::new(token, &report);
            Message::Read(Box::new(take(&path, &work)))
        })
    }

    /// Whether leaving would lose what has been said.
    #[must_use]
    pub fn has_begun(&self) -> bool {
        !self.tables.is_empty()
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Place(message) => return self.place(message),
            Message::Read(result) => return self.read(*result),
            Message::ReadAgain(at, result) => return self.read_again(at, *result),
            Message::Show(at) => {
                self.at = at;
                self.has_files = false;
                self.refresh();
            }
            Message::Remove(at) => {
                if at < self.tables.len() {
                    let _ = self.tables.remove(at);
                    self.at = 0;
                    self.refresh();
                }
            }
            Message::Files => {
                self.has_files = !self.has_files;
                if self.has_files {
                    self.place.again();
                    return Action::Run(iced::widget::operation::focus(FIELD));
                }
            }
            Message::Did(Did::Head(column) | Did::At { column, .. }) => {
                self.marked = self
                    .shown
                    .as_ref()
                    .map(|shown| shown.name(column).to_owned());
            }
            Message::Did(Did::Opened { .. } | Did::Row(_)) => {}
            Message::Give(role) => {
                if let Some(name) = self.marked.clone() {
                    self.give(&name, role);
                }
            }
            Message::Propose(name, role) => self.give(&name, role),
            Message::Jumping(jump) => self.jump = jump,
            Message::Jump => {
                let search = self.jump.clone();
                self.jump(&search);
            }
            Message::Word(sentence, piece) => return self.open_word(sentence, piece),
            Message::Editor(message) => return self.in_editor(message),
            Message::Escape => {
                if self.open.take().is_none() && self.shown.is_some() {
                    self.has_files = false;
                }
            }
            Message::Make => return self.make(),
            Message::Made(result) => return self.made(*result),
            Message::Stop => {
                if let Busy::Reading { cancel, .. } | Busy::Making { cancel } = &self.busy {
                    cancel.cancel();
                }
                self.busy = Busy::No;
                self.waiting.clear();
            }
            Message::Leave => return Action::Leave,
        }
        Action::None
    }

    fn place(&mut self, message: place::Message) -> Action {
        self.problem = None;
        match self.place.update(message) {
            place::Action::None => Action::None,
            place::Action::Run(task) => Action::Run(task.map(Message::Place)),
            place::Action::Take(path) => Action::Run(self.take(path)),
        }
    }

    fn read(&mut self, result: Result<Arc<Taken>, Problem>) -> Action {
        if !matches!(self.busy, Busy::Reading { .. }) {
            // It was called off meanwhile.
            return Action::None;
        }
        self.busy = Busy::No;
        match result {
            Ok(taken) => {
                self.tables.retain(|known| known.path != taken.path);
                self.propose(&taken);
                self.tables.push(taken);
                self.at = self.tables.len() - 1;
                self.has_files = false;
                self.refresh();
            }
            Err(problem) => self.problem = Some(problem),
        }
        if self.waiting.is_empty() {
            return Action::None;
        }
        let next = self.waiting.remove(0);
        let problem = self.problem.take();
        let task = self.take(next);
        self.problem = problem;
        Action::Run(task)
    }

    /// What the first table says of itself: the names of the samples, and what they belong to.
    /// Both can be seen in the sentence and taken back there. What is predicted is never guessed.
    fn propose(&mut self, taken: &Taken) {
        if !self.tables.is_empty() {
            return;
        }
        let proposals = [
            (&taken.proposals.samples, Role::SampleName),
            (&taken.proposals.unit, Role::Unit),
        ];
        for (proposal, role) in proposals {
            if let Some(proposal) = proposal
                && self.roles.first(role).is_none()
                && self.roles.given(&proposal.column).is_none()
            {
                self.roles.give(&proposal.column, role);
            }
        }
    }

    fn read_again(&mut self, at: usize, result: Result<Arc<Taken>, Problem>) -> Action {
        self.busy = Busy::No;
        match result {
            Ok(taken) => {
                if let Some(known) = self.tables.get_mut(at)
                    && known.path == taken.path
                {
                    *known = taken;
                }
                self.refresh();
            }
            // The table stays as it was read before.
            Err(problem) => self.problem = Some(problem),
        }
        Action::None
    }

    fn refresh(&mut self) {
        self.version += 1;
        let there: BTreeSet<&str> = self
            .tables
            .iter()
            .flat_map(|taken| taken.reading.table.columns())
            .map(|column| column.name.as_str())
            .collect();
        self.roles.keep_only(|name| there.contains(name));
        if let Some(marked) = &self.marked
            && !there.contains(marked.as_str())
        {
            self.marked = None;
        }
        self.at = self.at.min(self.tables.len().saturating_sub(1));
        self.shown = self.tables.get(self.at).map(|taken| Shown {
            taken: Arc::clone(taken),
            roles: self.roles.clone(),
            version: self.version,
        });
        if self.shown.is_none() {
            self.has_files = true;
        }
    }

    fn give(&mut self, name: &str, role: Role) {
        self.roles.give(name, role);
        if role == Role::Event {
            self.kind = Some("time");
        }
        self.problem = None;
        self.refresh();
    }

    fn jump(&mut self, search: &str) {
        let Some(shown) = &self.shown else {
            return;
        };
        let names: Vec<String> = shown
            .table()
            .columns()
            .iter()
            .map(|column| column.name.clone())
            .collect();
        let (found, _) = column::found(&names, search);
        match found.first() {
            Some(first) => {
                self.problem = None;
                self.marked = names.get(*first).cloned();
                self.show = Show {
                    column: *first,
                    row: None,
                    serial: self.show.serial + 1,
                };
            }
            None => {
                let found = format!("No column has “{}” in its name.", search.trim());
                self.problem = Some(Problem::new("no-such-column", found));
            }
        }
    }

    /// The names of the columns of all tables, each once.
    fn names(&self) -> Vec<String> {
        let mut seen = BTreeSet::new();
        self.tables
            .iter()
            .flat_map(|taken| taken.reading.table.columns())
            .filter(|column| seen.insert(column.name.as_str()))
            .map(|column| column.name.clone())
            .collect()
    }
}

#[cfg(test)]
mod tests;
