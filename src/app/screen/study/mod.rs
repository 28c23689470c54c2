//! The study screen: thread, page, margin, strip.

mod act;
mod answer;
mod view;
mod write;

use crate::app::editor::Open;
use crate::app::editor::prose::Prose;
use crate::app::part::{cell, head, strip, table, thread};
use crate::app::session::{self, Following, Opened, Session};
use crate::app::sheet::Sheet;
use crate::app::theme::{Mode, space};
use crate::app::widget::list::GoTo;
use crate::base::problem::Problem;
use crate::figure::Meaning;
use crate::report::Context;
use crate::study::cell::CellId;
use iced::{Size, Task};
use std::cell::OnceCell;
use std::collections::{BTreeMap, BTreeSet};
use std::path::PathBuf;

/// What happens on the screen.
#[derive(Clone, Debug)]
pub enum Message {
    /// In the session.
    Session(session::Message),
    /// In the head line.
    Head(head::Message),
    /// On the thread.
    Thread(thread::Message),
    /// In a cell.
    Cell(CellId, Box<cell::Message>),
    /// In the strip.
    Strip(strip::Message),
    /// What can be added at the end of the page is shown.
    Offer,
    /// About the offer at the end of the page.
    Offered(crate::app::part::offer::Message),
    /// What is open is closed: an editor, a table, a highlight.
    Escape,
    /// The cell before or after the one at the top is shown.
    Step(isize),
}

/// What the screen wants of the window.
#[derive(Debug)]
pub enum Action {
    /// Nothing.
    None,
    /// Something is done outside.
    Run(Task<Message>),
    /// The study is to be saved.
    Save,
    /// The study is to be saved under another name.
    SaveAs,
    /// Another study is to be opened.
    Open,
    /// Another study is to be started from tables.
    Start,
    /// Letters become larger or smaller, by so many steps.
    Scale(i32),
    /// The exports are to be opened.
    HandOver,
    /// Back to the welcome page.
    Close,
    /// The keys are to be shown.
    Keys,
    /// Light or dark.
    Turn,
    /// The user turned following on or off, which is remembered.
    Followed(Following, Task<Message>),
    /// A figure is to be saved: where it would go, and its drawing.
    SaveFigure {
        /// Where it would go.
        wish: PathBuf,
        /// The drawing.
        drawing: String,
    },
    /// A problem is to be shown.
    Tell(Problem),
}

/// What is being renamed.
#[derive(Clone, Debug, PartialEq, Eq)]
struct Renaming {
    what: crate::study::edit::Titled,
    draft: String,
}

/// What was last set for a cell.
struct Kept {
    version: u64,
    sheet: OnceCell<Sheet>,
}

/// The study screen.
pub struct StudyScreen {
    session: Session,
    sheets: BTreeMap<CellId, Kept>,
    editor: Option<Open>,
    prose: Option<Prose>,
    table: Option<table::Open>,
    /// The cell whose table is opened as soon as it has been read.
    table_wanted: Option<CellId>,
    renaming: Option<Renaming>,
    more: Option<CellId>,
    head_more: head::More,
    /// After which cell the offer stands; `None` inside is the end of the page.
    offering: Option<Option<CellId>>,
    notes: BTreeSet<CellId>,
    highlight: Option<Meaning>,
    go_to: GoTo,
    shown: Option<CellId>,
    said: Option<String>,
    is_reading: bool,
    size: Size,
}

/// Where the columns of the page lie.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Columns {
    /// Left of everything, where the window is wider than the page needs.
    pub air: f32,
    /// The thread; 0 when there is no room or nothing but the page is wanted.
    pub thread: f32,
    /// The page.
    pub page: f32,
    /// The margin; 0 when it is folded into the page.
    pub margin: f32,
}

impl Columns {
    /// The columns in a window of a width.
    #[must_use]
    pub fn new(width: f32, is_reading: bool) -> Self {
        let thread = if is_reading || width < space::PAGE + space::WIDE {
            0.0
        } else {
            space::THREAD
        };
        let beside = 2.0 * space::WIDE;
        if width < space::FOLD {
            let page = (width - thread - beside).min(space::PAGE + space::WIDE);
            let air = ((width - thread - beside - page) / 2.0).max(0.0);
            return Self {
                air,
                thread,
                page,
                margin: 0.0,
            };
        }
        let room = width - thread - 2.0 * beside;
        let margin = (room - space::PAGE).clamp(space::MARGIN, space::NOTE);
        let page = (room - margin).min(space::PAGE + space::WIDE);
        let air = ((room - margin - page) / 2.0).max(0.0).floor();
        Self {
            air,
            thread,
            page,
            margin,
        }
    }
}

impl StudyScreen {
    /// The screen of a study, and the run that finds out what is due.
    pub fn new(opened: Opened, following: Following, size: Size) -> (Self, Task<Message>) {
        let is_new = opened.record.is_empty();
        let session = Session::new(opened, following);
        let mut screen = Self {
            session,
            sheets: BTreeMap::new(),
            editor: None,
            prose: None,
            table: None,
            table_wanted: None,
            renaming: None,
            more: None,
            head_more: head::More::default(),
            offering: None,
            notes: BTreeSet::new(),
            highlight: None,
            go_to: GoTo::default(),
            shown: None,
            said: None,
            is_reading: false,
            size,
        };
        screen.refresh();
        let task = match (following, is_new) {
            (Following::AsIEdit, _) | (_, true) => screen.session.bring_up_to_date(),
            (Following::WhenAsked, false) => Task::none(),
        };
        (screen, task.map(Message::Session))
    }

    /// The open study.
    #[must_use]
    pub fn session(&self) -> &Session {
        &self.session
    }

    /// The open study, to be told that it was saved.
    pub fn session_mut(&mut self) -> &mut Session {
        &mut self.session
    }

    /// Says something in the strip.
    pub fn say(&mut self, words: impl Into<String>) {
        self.said = Some(words.into());
    }

    /// The window has another size.
    pub fn resize(&mut self, size: Size) {
        let before = Columns::new(self.size.width, self.is_reading).page;
        self.size = size;
        if (before - Columns::new(size.width, self.is_reading).page).abs() > f32::EPSILON {
            self.sheets.clear();
        }
        self.refresh();
    }

    /// Forgets what was set for cells that may read differently now.
    fn refresh(&mut self) {
        let session = &self.session;
        self.sheets
            .retain(|id, kept| kept.version == session.version(*id));
        for cell in session.study().cells() {
            let _ = self.sheets.entry(cell.id).or_insert_with(|| Kept {
                version: session.version(cell.id),
                sheet: OnceCell::new(),
            });
        }
        // What is open in a cell that is gone goes with it.
        let study = session.study();
        let is_gone = |id: CellId| study.cell(id).is_none();
        if self.editor.as_ref().is_some_and(|open| is_gone(open.cell)) {
            self.editor = None;
        }
        if self.prose.as_ref().is_some_and(|prose| is_gone(prose.cell)) {
            self.prose = None;
        }
        if self.table.as_ref().is_some_and(|table| is_gone(table.cell)) {
            self.table = None;
        }
    }

    /// What is shown of a cell; made when it is first asked for.
    fn sheet(&self, id: CellId) -> Option<&Sheet> {
        let kept = self.sheets.get(&id)?;
        Some(kept.sheet.get_or_init(|| {
            let context = Context {
                study: self.session.study(),
                standings: self.session.standings(),
                ledger: self.session.ledger(),
            };
            let width = Columns::new(self.size.width, self.is_reading).page;
            Sheet::new(crate::report::cell(&context, id), width)
        }))
    }

    /// Whether something is being typed that a key might disturb.
    #[must_use]
    pub fn is_typing(&self) -> bool {
        self.editor.is_some() || self.prose.is_some() || self.renaming.is_some()
    }

    /// Whether there is a draft that closing the window would lose.
    #[must_use]
    pub fn has_draft(&self) -> bool {
        self.prose.as_ref().is_some_and(Prose::is_changed)
            || self
                .editor
                .as_ref()
                .is_some_and(|open| open.draft().is_some())
    }

    /// The mode-independent view; see the file `view`.
    #[must_use]
    pub fn view(&self, mode: Mode) -> crate::app::widget::Element<'_, Message> {
        self.page(mode)
    }
}
