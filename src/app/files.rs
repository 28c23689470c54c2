//! Studies and exports between session and disk, off the window's thread.

use crate::app::dialog::hand_over::Wish;
use crate::app::disk;
use crate::app::run;
use crate::app::session::{Opened, Session};
use crate::base::problem::{Place, Problem};
use crate::eval::standing::Standings;
use crate::export::Occasion;
use crate::export::workbook::workbook;
use crate::export::write_up::write_up;
use crate::report::Context;
use crate::store::rescue::{self, Rescue, Rescued};
use crate::store::{self, Record};
use crate::study::Study;
use crate::study::ledger::Ledger;
use crate::study::source::Shelf;
use iced::Task;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// How the write-up's window names the reason for going on despite a stop.
const DESPITE: &str = "the field for the reason";

/// A study that has been opened, and what was found on the way.
#[derive(Clone, Debug)]
pub struct Found {
    /// The study.
    pub opened: Opened,
    /// Problems that did not keep it from opening.
    pub problems: Vec<Problem>,
}

/// Opens a study.
pub fn open(path: PathBuf) -> Task<Result<Arc<Found>, Problem>> {
    run::off_thread(move || {
        let found = store::open(&path)?;
        Ok(Arc::new(found_at(found, Some(path))))
    })
}

/// Opens what was rescued; it has no place of its own until it is saved.
pub fn open_rescued(rescued: Rescued) -> Task<Result<Arc<Found>, Problem>> {
    run::off_thread(move || {
        let found = store::open(&rescued.file)?;
        Ok(Arc::new(found_at(found, rescued.original)))
    })
}

fn found_at(found: store::Opened, path: Option<PathBuf>) -> Found {
    Found {
        opened: Opened {
            study: found.study,
            shelf: found.shelf,
            ledger: found.ledger,
            record: found.record,
            path,
        },
        problems: found.problems,
    }
}

/// What is written: the study as it is now, whatever happens to it meanwhile.
struct Copy {
    study: Study,
    shelf: Shelf,
    ledger: Ledger,
    record: Record,
    standings: Standings,
}

impl Copy {
    fn of(session: &Session) -> Self {
        Self {
            study: session.study().clone(),
            shelf: session.shelf().clone(),
            ledger: session.ledger().clone(),
            record: session.record(),
            standings: session.standings().clone(),
        }
    }
}

/// Saves a study. Tells where and after how many edits.
pub fn save(session: &Session, path: PathBuf) -> Task<Result<(PathBuf, u64), Problem>> {
    let copy = Copy::of(session);
    let n_edits = session.n_edits();
    run::off_thread(move || {
        store::save(&path, &copy.study, &copy.shelf, &copy.ledger, &copy.record)?;
        Ok((path, n_edits))
    })
}

/// Writes the exports that are wanted, and says what was written.
pub fn hand_over(session: &Session, wish: Wish) -> Task<Result<String, Problem>> {
    let copy = Copy::of(session);
    run::off_thread(move || write(&copy, &wish))
}

fn write(copy: &Copy, wish: &Wish) -> Result<String, Problem> {
    let context = Context {
        study: &copy.study,
        standings: &copy.standings,
        ledger: &copy.ledger,
    };
    let occasion = Occasion {
        date: disk::today(),
        despite: wish.despite.clone(),
    };
    let mut written = Vec::new();
    if let Some(path) = &wish.workbook {
        let bytes = workbook(&context, &occasion).map_err(|error| error.problem(DESPITE))?;
        store::replace(path, &bytes)?;
        written.push(disk::name(path));
    }
    if let Some(path) = &wish.write_up {
        let folder = figure_folder(path);
        let made =
            write_up(&context, &occasion, &folder).map_err(|error| error.problem(DESPITE))?;
        let beside = path.parent().unwrap_or(Path::new("")).join(&folder);
        if !made.figures.is_empty() {
            disk::make_folder(&beside)?;
        }
        for (name, bytes) in &made.figures {
            store::replace(&beside.join(name), bytes)?;
        }
        store::replace(path, made.markdown.as_bytes())?;
        written.push(disk::name(path));
    }
    let folder = wish
        .workbook
        .as_ref()
        .or(wish.write_up.as_ref())
        .and_then(|path| path.parent())
        .map_or_else(String::new, |folder| folder.display().to_string());
    Ok(format!("Wrote {} in {folder}.", written.join(" and ")))
}

/// The folder beside a write-up that takes its figures.
fn figure_folder(path: &Path) -> String {
    let stem = path
        .file_stem()
        .map_or_else(|| "write-up".into(), |stem| stem.to_string_lossy());
    format!("{stem}-figures")
}

/// Where the exports of a study go, unless somebody says otherwise: beside it, under its title.
#[must_use]
pub fn beside(session: &Session) -> PathBuf {
    match session.path() {
        Some(path) => path.with_extension(""),
        None => disk::start().join(wish(session.study())),
    }
}

/// A file's name for a study: its title, in letters that every file system takes.
#[must_use]
pub fn wish(study: &Study) -> String {
    let clean: String = study
        .title()
        .to_lowercase()
        .chars()
        .map(|letter| {
            if letter.is_alphanumeric() {
                letter
            } else {
                '-'
            }
        })
        .collect();
    let clean = clean.trim_matches('-');
    if clean.is_empty() {
        "study".to_owned()
    } else {
        clean.to_owned()
    }
}

/// Keeps unsaved work in the user's own folder.
pub fn keep(session: &Session, name: String) -> Task<Result<(), Problem>> {
    let copy = Copy::of(session);
    let original = session.path().cloned();
    run::off_thread(move || {
        let Some(rescue) = Rescue::of_user() else {
            return Ok(());
        };
        let when = disk::moment();
        let kept = rescue::Session {
            name: &name,
            original: original.as_deref(),
            when: &when,
        };
        rescue.keep(kept, &copy.study, &copy.shelf, &copy.ledger, &copy.record)
    })
}

/// Forgets unsaved work: it has been saved, or given up.
pub fn forget(name: &str) {
    if let Some(rescue) = Rescue::of_user() {
        // A copy that cannot be removed is offered once more, which does no harm.
        let _ = rescue.forget(name);
    }
}

/// What was rescued after a crash.
#[must_use]
pub fn left_behind() -> Vec<Rescued> {
    Rescue::of_user().map_or_else(Vec::new, |rescue| rescue.left_behind().0)
}

/// Gives up what was rescued.
///
/// # Errors
/// When it cannot be removed.
pub fn decline(rescued: &Rescued) -> Result<(), Problem> {
    Rescue::of_user().map_or(Ok(()), |rescue| rescue.decline(rescued))
}

/// The demo, where the program can find it: beside itself, or where it was started.
#[must_use]
pub fn demo() -> Option<PathBuf> {
    const NAME: &str = "examples/cellar-light.json";
    disk::first_of(NAME)
}

/// A problem that a file of this name is not there any more.
#[must_use]
pub fn vanished(path: &Path) -> Problem {
    Problem::new("study-vanished", "The study is no longer where it was.")
        .at(Place::file(&path.display().to_string()))
        .mend("Look for it with “Open a study”.")
}
