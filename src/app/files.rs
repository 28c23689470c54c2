//! Studies and exports between session and disk, off the window's thread.

use crate::app::dialog::hand_over::Wish;
use crate::app::disk;
use crate::app::run;
use crate::app::session::{Opened, Session};
use crate::base::problem::Problem;
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
    /// The unsaved work that it was made from, where it was rescued.
    pub rescued: Option<Rescued>,
}

/// Opens a study.
pub fn open(path: PathBuf) -> Task<Result<Arc<Found>, Problem>> {
    run::off_thread(move || {
        // Rescued work may be opened from another folder than the study was.
        let path = std::path::absolute(&path).unwrap_or(path);
        let found = store::open_in_part(&path)?;
        // A study that is not here as a whole has no place of its own: saving asks for one.
        let place = (!found.is_from_newer()).then_some(path);
        Ok(Arc::new(found_at(found, place, None)))
    })
}

/// Opens what was rescued; it has no place of its own until it is saved.
pub fn open_rescued(rescue: Rescue, rescued: Rescued) -> Task<Result<Arc<Found>, Problem>> {
    run::off_thread(move || {
        let found = rescue.open(&rescued)?;
        let original = rescued.original.clone();
        Ok(Arc::new(found_at(found, original, Some(rescued))))
    })
}

fn found_at(found: store::Opened, path: Option<PathBuf>, rescued: Option<Rescued>) -> Found {
    Found {
        opened: Opened {
            study: found.study,
            shelf: found.shelf,
            ledger: found.ledger,
            record: found.record,
            path,
        },
        problems: found.problems,
        rescued,
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
        Some(path) => std::path::absolute(path)
            .unwrap_or_else(|_| path.clone())
            .with_extension(""),
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

/// Keeps unsaved work in a folder of the user's own.
pub fn keep(rescue: Rescue, session: &Session, name: String) -> Task<Result<(), Problem>> {
    let copy = Copy::of(session);
    let original = session.path().cloned();
    run::off_thread(move || {
        let when = disk::moment();
        let kept = rescue::Session {
            name: &name,
            original: original.as_deref(),
            when: &when,
        };
        rescue.keep(kept, &copy.study, &copy.shelf, &copy.ledger, &copy.record)
    })
}

/// The demo, where the program can find it: beside itself, or where it was started.
#[must_use]
pub fn demo() -> Option<PathBuf> {
    const NAME: &str = "examples/cellar-light.json";
    disk::first_of(NAME)
}

/// Writes a figure as a drawing and as a picture of it at twice its size, and says where. A path
/// that ends in the one or the other form gives this one only.
pub fn save_figure(path: PathBuf, drawing: String) -> Task<Result<String, Problem>> {
    run::off_thread(move || write_figure(&path, &drawing))
}

fn write_figure(path: &Path, drawing: &str) -> Result<String, Problem> {
    let ending = path.extension().map(|ending| ending.to_ascii_lowercase());
    let is = |form: &str| ending.as_deref() == Some(std::ffi::OsStr::new(form));
    let with = |form: &str| {
        let mut name = path.as_os_str().to_owned();
        if !is(form) {
            name.push(format!(".{form}"));
        }
        PathBuf::from(name)
    };
    let mut written = Vec::new();
    if !is("png") {
        store::replace(&with("svg"), drawing.as_bytes())?;
        written.push(disk::name(&with("svg")));
    }
    if !is("svg") {
        let picture = crate::export::picture::png(drawing, 2.0).map_err(|error| {
            Problem::new(
                "figure-unpainted",
                "The figure could not be painted as PNG.",
            )
            .mend("Save it as a drawing: let its name end in .svg.")
            .details(format!("{error:?}"))
        })?;
        store::replace(&with("png"), &picture)?;
        written.push(disk::name(&with("png")));
    }
    let folder = path.parent().unwrap_or(Path::new(""));
    Ok(format!(
        "Wrote {} in {}.",
        written.join(" and "),
        folder.display()
    ))
}
