//! What the window reads from and writes to the disk itself: always off the window's thread.
#![expect(
    clippy::disallowed_methods,
    reason = "the window's own door to the disk: tables that the user chose, figures, listings"
)]

use crate::base::problem::{Place, Problem};
use std::path::{Path, PathBuf};

/// What lies in a folder: folders first, each in alphabetical order.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Listing {
    /// The folder.
    pub folder: PathBuf,
    /// The folders in it.
    pub folders: Vec<String>,
    /// The files in it that are wanted.
    pub files: Vec<String>,
}

/// What a file is wanted for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Wanted {
    /// A table to read.
    Table,
    /// A study to open.
    Study,
    /// A folder to write into.
    Folder,
}

impl Wanted {
    fn takes(self, name: &str) -> bool {
        let name = name.to_lowercase();
        let ends = |endings: &[&str]| endings.iter().any(|ending| name.ends_with(ending));
        match self {
            Self::Table => ends(&[
                ".csv", ".tsv", ".txt", ".tab", ".dat", ".csv.gz", ".tsv.gz", ".txt.gz", ".xlsx",
                ".xlsm", ".xlsb", ".xls", ".ods",
            ]),
            Self::Study => ends(&[".widefold", ".json"]),
            Self::Folder => false,
        }
    }
}

/// The folder in which people begin to look for files.
#[must_use]
pub fn start() -> PathBuf {
    std::env::current_dir().unwrap_or_else(|_| PathBuf::from("/"))
}

/// What lies in a folder.
///
/// # Errors
/// A [`Problem`] when the folder cannot be looked into.
pub fn list(folder: &Path, wanted: Wanted) -> Result<Listing, Problem> {
    let entries = std::fs::read_dir(folder).map_err(|error| {
        Problem::new("folder-unreadable", "The folder could not be looked into.")
            .at(Place::file(&folder.display().to_string()))
            .mend("Type the path of another folder.")
            .details(error.to_string())
    })?;
    let mut listing = Listing {
        folder: folder.to_owned(),
        ..Listing::default()
    };
    for entry in entries.flatten() {
        let name = entry.file_name().to_string_lossy().into_owned();
        if name.starts_with('.') {
            continue;
        }
        // A link counts as what it leads to.
        let is_folder = std::fs::metadata(entry.path()).is_ok_and(|what| what.is_dir());
        if is_folder {
            listing.folders.push(name);
        } else if wanted.takes(&name) {
            listing.files.push(name);
        }
    }
    listing.folders.sort_unstable();
    listing.files.sort_unstable();
    Ok(listing)
}

/// Whether a path is a folder.
#[must_use]
pub fn is_folder(path: &Path) -> bool {
    path.is_dir()
}

/// The last part of a path, for people.
#[must_use]
pub fn name(path: &Path) -> String {
    path.file_name().map_or_else(
        || path.display().to_string(),
        |name| name.to_string_lossy().into_owned(),
    )
}

/// Today in UTC, as year-month-day.
#[must_use]
pub fn today() -> String {
    chrono::Utc::now().format("%Y-%m-%d").to_string()
}

/// This moment in UTC, for people.
#[must_use]
pub fn moment() -> String {
    chrono::Utc::now().format("%Y-%m-%d %H:%M").to_string()
}

/// Makes a folder, with those above it.
///
/// # Errors
/// A [`Problem`] when it cannot be made.
pub fn make_folder(folder: &Path) -> Result<(), Problem> {
    std::fs::create_dir_all(folder).map_err(|error| {
        Problem::new("folder-unmade", "The folder could not be made.")
            .at(Place::file(&folder.display().to_string()))
            .mend("Choose another folder, or make room on the disk.")
            .details(error.to_string())
    })
}

/// The first place at which a file of the project is found: where the program was started, beside
/// it, or above it, where a build puts it.
#[must_use]
pub fn first_of(name: &str) -> Option<PathBuf> {
    const ABOVE: usize = 4;
    let program = std::env::current_exe().ok();
    let above = program.iter().flat_map(|program| program.ancestors());
    std::iter::once(start().as_path())
        .chain(above.skip(1).take(ABOVE))
        .map(|folder| folder.join(name))
        .find(|path| path.is_file())
}

/// Whether a window can be opened: without a display the toolkit stops the program.
#[must_use]
pub fn has_display() -> bool {
    let is_set = |name: &str| std::env::var(name).is_ok_and(|value| !value.is_empty());
    is_set("DISPLAY") || is_set("WAYLAND_DISPLAY")
}
