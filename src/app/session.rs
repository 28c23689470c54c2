//! The open study: document, shelf, ledger, history, standings, and the run under way.
//!
//! One door: a study changes only through [`Session::commit`], [`Session::undo`] and
//! [`Session::redo`], and a run starts only here.

use crate::app::disk;
use crate::app::run::{self, Run};
use crate::base::hash::ContentHash;
use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::eval::desk::{Desk, Snapshot};
use crate::eval::outcome::{Gives, Outcome};
use crate::eval::plan;
use crate::eval::standing::{Event, Standings, State};
use crate::store::{self, Record};
use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::edit::{Edit, EditError};
use crate::study::history::History;
use crate::study::ledger::Ledger;
use crate::study::settings::Settings;
use crate::study::source::Shelf;
use iced::Task;
use std::collections::BTreeMap;
use std::path::PathBuf;
use std::sync::Arc;
use std::time::Duration;

/// How long after the last edit a run starts.
const DEBOUNCE: Duration = Duration::from_millis(150);

/// Whether the study follows every edit by itself.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Following {
    /// Results follow every edit.
    #[default]
    AsIEdit,
    /// Results follow when they are asked for.
    WhenAsked,
}

/// What happens to a session from outside the window's thread.
#[derive(Clone, Debug)]
pub enum Message {
    /// The time after an edit is over; the number is that of the edit.
    Settled(u64),
    /// The worker has told something; the number is that of the run.
    Told(u64, Vec<Event>),
}

/// The open study.
pub struct Session {
    study: Study,
    shelf: Shelf,
    ledger: Ledger,
    history: History,
    standings: Standings,
    record: Record,
    desk: Desk,
    run: Option<Run>,
    n_runs: u64,
    n_edits: u64,
    following: Following,
    path: Option<PathBuf>,
    /// Counts what can be seen of each cell, so that pages know when to be set anew.
    versions: BTreeMap<CellId, u64>,
    version: u64,
    /// What the outcome that is shown of each cell was made from.
    shown: BTreeMap<CellId, ContentHash>,
    /// What the cells of the run under way are made from.
    recipes: BTreeMap<CellId, ContentHash>,
}

/// A study as it comes from a file, or from tables.
#[derive(Clone, Debug, Default)]
pub struct Opened {
    /// The document.
    pub study: Study,
    /// The imported bytes.
    pub shelf: Shelf,
    /// What was counted.
    pub ledger: Ledger,
    /// Results as they were when last current.
    pub record: Record,
    /// Where it lies.
    pub path: Option<PathBuf>,
}

impl Session {
    /// A session on a study. Nothing runs yet.
    #[must_use]
    pub fn new(opened: Opened, following: Following) -> Self {
        let recipes = plan::plan(&opened.study).recipes;
        let standings = opened.record.standings(&opened.study);
        // What agrees with its record needs no run to be shown as current.
        let shown = recipes
            .into_iter()
            .filter(|(id, _)| standings.get(*id).state == State::Current)
            .collect();
        Self {
            study: opened.study,
            shelf: opened.shelf,
            ledger: opened.ledger,
            history: History::new(),
            standings,
            record: opened.record,
            desk: Desk::start(),
            run: None,
            n_runs: 0,
            n_edits: 0,
            following,
            path: opened.path,
            versions: BTreeMap::new(),
            version: 1,
            shown,
            recipes: BTreeMap::new(),
        }
    }

    /// The document.
    #[must_use]
    pub fn study(&self) -> &Study {
        &self.study
    }

    /// The imported bytes.
    #[must_use]
    pub fn shelf(&self) -> &Shelf {
        &self.shelf
    }

    /// Puts bytes on the shelf.
    pub fn shelf_mut(&mut self) -> &mut Shelf {
        &mut self.shelf
    }

    /// What was counted.
    #[must_use]
    pub fn ledger(&self) -> &Ledger {
        &self.ledger
    }

    /// How the cells stand.
    #[must_use]
    pub fn standings(&self) -> &Standings {
        &self.standings
    }

    /// Where the study lies.
    #[must_use]
    pub fn path(&self) -> Option<&PathBuf> {
        self.path.as_ref()
    }

    /// Whether the study follows every edit.
    #[must_use]
    pub fn following(&self) -> Following {
        self.following
    }

    /// The label of the step that undo would take back.
    #[must_use]
    pub fn undo_label(&self) -> Option<&str> {
        self.history.undo_label()
    }

    /// The label of the step that redo would do again.
    #[must_use]
    pub fn redo_label(&self) -> Option<&str> {
        self.history.redo_label()
    }

    /// Whether the study differs from what was last saved.
    #[must_use]
    pub fn is_modified(&self) -> bool {
        self.history.is_modified()
    }

    /// The run under way.
    #[must_use]
    pub fn run(&self) -> Option<&Run> {
        self.run.as_ref()
    }

    /// How many edits, undone and done again ones included, there have been.
    #[must_use]
    pub fn n_edits(&self) -> u64 {
        self.n_edits
    }

    /// Whether any cell needs evaluating.
    #[must_use]
    pub fn is_due(&self) -> bool {
        self.study.cells().iter().any(|cell| {
            matches!(
                self.standings.get(cell.id).state,
                State::Due | State::Stopped | State::Waiting
            )
        })
    }

    /// A number that changes when anything that can be seen of a cell may have changed.
    #[must_use]
    pub fn version(&self, id: CellId) -> u64 {
        self.versions.get(&id).copied().unwrap_or(0) + self.version
    }

    /// Applies edits as one step and remembers how to take it back.
    ///
    /// # Errors
    /// A [`Problem`] that says why the edits were refused; nothing has changed then.
    pub fn commit(&mut self, label: &str, edits: Vec<Edit>) -> Result<Task<Message>, Problem> {
        self.history
            .commit(&mut self.study, label, edits)
            .map_err(|error| refusal(&self.study, &error))?;
        Ok(self.edited())
    }

    /// Takes the last step back.
    pub fn undo(&mut self) -> Task<Message> {
        match self.history.undo(&mut self.study) {
            Some(_) => self.edited(),
            None => Task::none(),
        }
    }

    /// Does the step again that was last taken back.
    pub fn redo(&mut self) -> Task<Message> {
        match self.history.redo(&mut self.study) {
            Some(_) => self.edited(),
            None => Task::none(),
        }
    }

    fn edited(&mut self) -> Task<Message> {
        self.n_edits += 1;
        self.version += 1;
        self.mark_due();
        match self.following {
            Following::AsIEdit => run::after(DEBOUNCE, Message::Settled(self.n_edits)),
            Following::WhenAsked => Task::none(),
        }
    }

    /// Marks at once what an edit made due. The run under way works on what is no longer there,
    /// so it is called off; the next one finds out which of the due is remembered.
    fn mark_due(&mut self) {
        if self.run.take().is_some() {
            self.standings.absorb(&Event::Ended { cancelled: false });
        }
        let recipes = plan::plan(&self.study).recipes;
        let due: Vec<(CellId, State)> = recipes
            .iter()
            .filter(|(id, recipe)| self.shown.get(id) != Some(recipe))
            .map(|(id, _)| (*id, State::Due))
            .collect();
        self.standings.absorb(&Event::Planned(due));
    }

    /// The results as they are recorded when the study is saved now.
    #[must_use]
    pub fn record(&self) -> Record {
        self.record.updated(&self.study, &self.standings)
    }

    /// Notes that the study has been saved at a place, as it was after so many edits. What was
    /// edited while it was being written is not saved.
    pub fn saved(&mut self, path: PathBuf, n_edits: u64) {
        self.path = Some(path);
        if n_edits == self.n_edits {
            self.history.saved();
        }
    }

    /// Notes that the study as it was opened is not what lies at its place: it was rescued.
    pub fn unsaved(&mut self) {
        self.history.unsaved();
    }

    /// Turns following on or off.
    pub fn follow(&mut self, following: Following) -> Task<Message> {
        self.following = following;
        match following {
            Following::AsIEdit => self.bring_up_to_date(),
            Following::WhenAsked => Task::none(),
        }
    }

    /// Evaluates what is due, and a cell whose recorded outcome has facts but no table.
    pub fn bring_table(&mut self, id: CellId) -> Task<Message> {
        let mut recorded = self.record.outcomes(&self.study);
        let _ = recorded.remove(&id);
        self.start(recorded)
    }

    /// Evaluates what is due.
    pub fn bring_up_to_date(&mut self) -> Task<Message> {
        let recorded = self.record.outcomes(&self.study);
        self.start(recorded)
    }

    fn start(&mut self, recorded: BTreeMap<CellId, Arc<Outcome>>) -> Task<Message> {
        // Dropping the run that is under way calls it off.
        self.run = None;
        self.n_runs += 1;
        self.recipes = plan::plan(&self.study).recipes;
        let snapshot = Snapshot {
            study: self.study.clone(),
            shelf: self.shelf.clone(),
            recorded,
            threads: Threads::all(),
        };
        let number = self.n_runs;
        let (run, task) = Run::start(&self.desk, snapshot, number);
        self.run = Some(run);
        task.map(move |events| Message::Told(number, events))
    }

    /// Stops the run under way.
    pub fn stop(&mut self) {
        if let Some(run) = &self.run {
            run.stop();
        }
    }

    /// Takes in what came from outside the window's thread.
    pub fn update(&mut self, message: Message) -> Task<Message> {
        match message {
            Message::Settled(edit) if edit == self.n_edits => self.bring_up_to_date(),
            Message::Settled(_) => Task::none(),
            Message::Told(run, events) => {
                if self
                    .run
                    .as_ref()
                    .is_some_and(|under_way| under_way.number() == run)
                {
                    self.absorb(&events);
                }
                Task::none()
            }
        }
    }

    fn absorb(&mut self, events: &[Event]) {
        for event in events {
            self.standings.absorb(event);
            if let Some(run) = &mut self.run {
                run.absorb(event);
            }
            match event {
                Event::Planned(states) => {
                    for (id, _) in states {
                        self.touch(*id);
                    }
                }
                Event::Started(id) => self.touch(*id),
                Event::Finished { id, .. } => {
                    if let Some(recipe) = self.recipes.get(id) {
                        let _ = self.shown.insert(*id, *recipe);
                    }
                    self.touch(*id);
                }
                Event::Progressed(..) => {}
                Event::Ended { .. } => {
                    self.run = None;
                    self.version += 1;
                    let date = disk::today();
                    store::note_acts(&self.study, &self.standings, &mut self.ledger, &date);
                }
            }
        }
    }

    /// Everything that draws on a cell may read differently, too.
    fn touch(&mut self, id: CellId) {
        let mut touched = self.study.drawing_on(id);
        touched.push(id);
        for id in touched {
            *self.versions.entry(id).or_insert(0) += 1;
        }
    }
}

/// Why an edit was refused, for people.
fn refusal(study: &Study, error: &EditError) -> Problem {
    let title = |id: CellId| {
        study
            .cell(id)
            .map_or_else(|| "a removed cell".to_owned(), |cell| cell.title.clone())
    };
    match error {
        EditError::NoSuchCell(_) => Problem::new(
            "no-such-cell",
            "The cell that was to be changed is no longer in the study.",
        ),
        EditError::Twice(id) => Problem::new(
            "cell-twice",
            format!("“{}” is in the study already.", title(*id)),
        ),
        EditError::Position { .. } => Problem::new(
            "no-such-place",
            "The cell cannot be moved beyond the ends of the page.",
        ),
        EditError::BlankTitle => Problem::new("blank-title", "A title needs at least one letter.")
            .mend("Type a title, or leave it as it was."),
        EditError::TitleTaken { title, by: _ } => Problem::new(
            "title-taken",
            format!("Another cell is called “{title}” already; prose could not tell them apart."),
        )
        .mend("Choose another title."),
        EditError::OtherKind(id) => Problem::new(
            "other-kind",
            format!("“{}” is a cell of another kind.", title(*id)),
        ),
        EditError::Circle { path } => {
            let first = path.first().map_or("", String::as_str);
            let way: Vec<String> = path.iter().map(|title| format!("“{title}”")).collect();
            Problem::new(
                "circle",
                format!(
                    "“{first}” cannot draw on this cell, because the way leads back to it: {}.",
                    way.join(" draws on ")
                ),
            )
            .mend("Choose another cell for it to draw on.")
        }
    }
}

/// A cell with settings, under a title that no other cell has.
#[must_use]
pub fn new_cell(study: &Study, wish: &str, settings: Settings) -> Cell {
    Cell {
        id: study.next_id(),
        title: study.free_title(wish),
        settings,
    }
}

/// The Data cell that a cell leads back to.
#[must_use]
pub fn data_cell(study: &Study, from: CellId) -> Option<CellId> {
    let mut at = from;
    // A study has fewer links in a row than cells, unless it was edited into a circle.
    for _ in 0..=study.cells().len() {
        let settings = &study.cell(at)?.settings;
        if matches!(settings, Settings::Data(_)) {
            return Some(at);
        }
        at = *settings.draws_on().first()?;
    }
    None
}

/// The samples with roles that a cell leads back to.
#[must_use]
pub fn dataset(
    study: &Study,
    standings: &Standings,
    from: CellId,
) -> Option<Arc<crate::eval::kind::data::Dataset>> {
    let mut at = from;
    // A study has fewer links in a row than cells, unless it was edited into a circle.
    for _ in 0..=study.cells().len() {
        let outcome = standings.get(at).outcome;
        if let Some(Gives::Data(dataset)) = outcome.as_deref().map(|outcome| &outcome.gives) {
            return Some(Arc::clone(dataset));
        }
        at = *study.cell(at)?.settings.draws_on().first()?;
    }
    None
}
