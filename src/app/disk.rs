//! What the window reads from and writes to the disk itself: always off the window's thread.
#![expect(
    clippy::disallowed_methods,
    reason = "the window's own door to the disk: tables that the user chose, figures, listings"
)]

use crate::base::number::{self, Precision};
use crate::base::problem::{Place, Problem};
use std::path::{Path, PathBuf};
use std::time::{Duration, Instant};

/// What lies in a folder: folders first, each in alphabetical order.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Listing {
    /// The folder.
    pub folder: PathBuf,
    /// The folders in it.
    pub folders: Vec<String>,
    /// The files in it that are wanted.
    pub files: Vec<Entry>,
}

/// A file of a folder.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Entry {
    /// Its name.
    pub name: String,
    /// How large it is, for people.
    pub size: String,
}

/// What a file is wanted for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Wanted {
    /// A table to read.
    Table,
    /// A study to open.
    Study,
    /// A figure to write.
    Figure,
}

impl Wanted {
    /// What it is called in a dialog, and how its files' names end.
    const fn endings(self) -> (&'static str, &'static [&'static str]) {
        match self {
            Self::Table => (
                "tables",
                &[
                    "csv", "tsv", "txt", "tab", "dat", "gz", "xlsx", "xlsm", "xlsb", "xls", "ods",
                ],
            ),
            Self::Study => ("studies", &["widefold", "json"]),
            Self::Figure => ("figures", &["png", "svg"]),
        }
    }

    fn takes(self, name: &str) -> bool {
        let name = name.to_lowercase();
        let ends = |endings: &[&str]| endings.iter().any(|ending| name.ends_with(ending));
        match self {
            Self::Table => ends(&[
                ".csv", ".tsv", ".txt", ".tab", ".dat", ".csv.gz", ".tsv.gz", ".txt.gz", ".xlsx",
                ".xlsm", ".xlsb", ".xls", ".ods",
            ]),
            Self::Study => ends(&[".widefold", ".json"]),
            Self::Figure => ends(&[".png", ".svg"]),
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
        let what = std::fs::metadata(entry.path()).ok();
        if what.as_ref().is_some_and(std::fs::Metadata::is_dir) {
            listing.folders.push(name);
        } else if wanted.takes(&name) {
            let size = what.map_or_else(String::new, |what| size(what.len()));
            listing.files.push(Entry { name, size });
        }
    }
    listing.folders.sort_unstable();
    listing.files.sort_unstable();
    Ok(listing)
}

/// A number of bytes for people, in units of thousands.
fn size(bytes: u64) -> String {
    const UNITS: [&str; 4] = ["kB", "MB", "GB", "TB"];
    if bytes < 1000 {
        return format!("{bytes} B");
    }
    let mut value = bytes as f64 / 1000.0;
    let mut unit = UNITS[0];
    for next in &UNITS[1..] {
        if value < 999.5 {
            break;
        }
        value /= 1000.0;
        unit = next;
    }
    let digits = if value < 9.95 { 1 } else { 0 };
    format!(
        "{} {unit}",
        number::text(value, Precision::Decimals(digits))
    )
}

/// A path as it is typed, made whole: from the folder in which the program was started, and with
/// `~` for the home folder.
#[must_use]
pub fn full(typed: &str) -> PathBuf {
    let path = match (typed.strip_prefix("~/"), std::env::var_os("HOME")) {
        (Some(rest), Some(home)) => PathBuf::from(home).join(rest),
        (Some(_), None) | (None, _) => PathBuf::from(typed),
    };
    if path.is_absolute() {
        path
    } else {
        start().join(path)
    }
}

/// What came of asking the desktop for a file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Picked {
    /// This one.
    File(PathBuf),
    /// None was chosen.
    Nothing,
    /// The desktop offers no dialog.
    NoDialog,
}

/// A desktop that has no dialog answers at once; nobody can close one as quickly.
const AT_ONCE: Duration = Duration::from_millis(250);

/// Asks for a file in the desktop's own dialog, and waits for the answer.
#[must_use]
pub fn pick(wanted: Wanted, begin: &Path, name: Option<&str>) -> Picked {
    let (what, endings) = wanted.endings();
    let dialog = rfd::FileDialog::new()
        .set_directory(begin)
        .add_filter(what, endings);
    let asked = Instant::now();
    let picked = match name {
        Some(name) => dialog.set_file_name(name).save_file(),
        None => dialog.pick_file(),
    };
    match picked {
        Some(path) => Picked::File(path),
        None if asked.elapsed() < AT_ONCE => Picked::NoDialog,
        None => Picked::Nothing,
    }
}

/// Whether a path is a file.
#[must_use]
pub fn is_file(path: &Path) -> bool {
    path.is_file()
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
