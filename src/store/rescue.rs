//! Unsaved work, kept in the user's own folder: nothing is written beside the user's files.

use crate::base::problem::{Place, Problem};
use crate::store::archive::{self, Entry};
use crate::store::format::v1::Group;
use crate::store::record::Record;
use crate::store::{Opened, disk, packed};
use crate::study::Study;
use crate::study::ledger::Ledger;
use crate::study::source::{self, Shelf};
use serde_json::Value;
use std::path::{Path, PathBuf};

/// The folder in which unsaved work is kept.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Rescue {
    folder: PathBuf,
}

/// Unsaved work that was found.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Rescued {
    /// The file that holds it.
    pub file: PathBuf,
    /// The study's own file; `None` when it had never been saved.
    pub original: Option<PathBuf>,
    /// The study's title.
    pub title: String,
    /// When it was kept, in the words of the one who kept it.
    pub when: String,
    /// The process that kept it.
    pub process: u32,
}

/// What names a piece of unsaved work.
#[derive(Clone, Copy, Debug)]
pub struct Session<'a> {
    /// Unlike that of any other window that is open.
    pub name: &'a str,
    /// The study's own file, if it has been saved before.
    pub original: Option<&'a Path>,
    /// The moment, as it will be shown to the user.
    pub when: &'a str,
}

/// The entry that says whose work it is.
const NOTE: &str = "rescue.json";

impl Rescue {
    /// The folder of the present user; `None` where no home folder is known.
    #[must_use]
    pub fn of_user() -> Option<Self> {
        let folder = disk::folder_of_user("XDG_DATA_HOME", ".local/share")?;
        Some(Self::at(&folder.join("rescue")))
    }

    /// Another folder.
    #[must_use]
    pub fn at(folder: &Path) -> Self {
        Self {
            folder: folder.to_owned(),
        }
    }

    /// Keeps the unsaved work of a session, in place of what it kept before.
    ///
    /// # Errors
    /// A [`Problem`] when it could not be written; what was kept before is untouched.
    pub fn keep(
        &self,
        session: Session<'_>,
        study: &Study,
        shelf: &Shelf,
        ledger: &Ledger,
        record: &Record,
    ) -> Result<(), Problem> {
        let mut note = Group::default();
        let original = session.original.map(|path| path.display().to_string());
        note.put_some("original", original);
        note.put("title", study.title());
        note.put("when", session.when);
        note.put("process", std::process::id());
        let note = note.value().to_string();
        let beside = Entry {
            name: NOTE.to_owned(),
            bytes: note.as_bytes(),
        };
        let bytes = packed::bytes(study, shelf, ledger, record, &[beside])?;
        disk::make_folder(&self.folder)?;
        disk::replace(&self.file_of(session.name), &bytes)
    }

    /// Forgets the unsaved work of a session: after it has been saved, or given up.
    ///
    /// # Errors
    /// A [`Problem`] when the file is still there.
    pub fn forget(&self, session: &str) -> Result<(), Problem> {
        disk::remove(&self.file_of(session))
    }

    /// Forgets unsaved work that was found: after it has been opened and saved, or declined.
    ///
    /// # Errors
    /// A [`Problem`] when the file is still there.
    pub fn decline(&self, rescued: &Rescued) -> Result<(), Problem> {
        disk::remove(&rescued.file)
    }

    /// The unsaved work of sessions that have ended without saving it, by name of file. A file
    /// that cannot be read is left where it is and told as a problem.
    #[must_use]
    pub fn left_behind(&self) -> (Vec<Rescued>, Vec<Problem>) {
        let mut left = Vec::new();
        let mut problems = Vec::new();
        for file in disk::files_in(&self.folder) {
            if file.extension().is_none_or(|ending| ending != "widefold") {
                continue;
            }
            match look_into(&file) {
                Ok(rescued) if is_running(rescued.process) => {}
                Ok(rescued) => left.push(rescued),
                Err(problem) => problems.push(problem),
            }
        }
        (left, problems)
    }

    /// Opens unsaved work. Where the study's own file still names its tables by path, they are
    /// known by these paths again.
    ///
    /// # Errors
    /// As [`crate::store::open`].
    pub fn open(&self, rescued: &Rescued) -> Result<Opened, Problem> {
        let mut opened = crate::store::open(&rescued.file)?;
        let original = rescued.original.as_ref();
        if let Some(Ok(original)) = original.map(|path| crate::store::open(path)) {
            for table in packed::tables(&original.study) {
                if let Some(path) = original.shelf.origin(&table.source, &table.file) {
                    opened.shelf.came_from(&table.source, &table.file, path);
                }
            }
        }
        Ok(opened)
    }

    fn file_of(&self, session: &str) -> PathBuf {
        // A session may be called anything; a file may not.
        let name = &source::fingerprint(session.as_bytes())[..16];
        self.folder.join(format!("{name}.widefold"))
    }
}

fn look_into(file: &Path) -> Result<Rescued, Problem> {
    let name = disk::name_of(file);
    let bytes = disk::read(file).map_err(|error| disk::not_read(file, "unsaved work", &error))?;
    let unpacked = archive::unpack(&bytes, &name, &|entry| entry == NOTE)?;
    let note = unpacked.entries.get(NOTE);
    let note = note.and_then(|note| serde_json::from_slice::<Value>(note).ok());
    let note = note.ok_or_else(|| {
        Problem::new(
            "rescue-damaged",
            "A file with unsaved work is damaged; it has been left where it is.",
        )
        .at(Place::file(&name))
        .mend(format!("Try to open “{}” as a study.", file.display()))
    })?;
    let text = |field: &str| note.get(field).and_then(Value::as_str).map(str::to_owned);
    let process = note.get("process").and_then(Value::as_u64);
    Ok(Rescued {
        file: file.to_owned(),
        original: text("original").map(PathBuf::from),
        title: text("title").unwrap_or_default(),
        when: text("when").unwrap_or_default(),
        process: process.and_then(|id| u32::try_from(id).ok()).unwrap_or(0),
    })
}

/// Whether another process of this number is running this program. Where the system does not say,
/// none is: an offer too many does less harm than one too few. Numbers are given out again after a
/// restart, so that the name of the program counts, too.
fn is_running(process: u32) -> bool {
    let name = |process: &str| disk::read(&Path::new("/proc").join(process).join("comm")).ok();
    let other = name(&process.to_string());
    process != std::process::id() && other.is_some() && other == name("self")
}
