//! Floor 4: studies on disk: the packed form, the readable form, what is recorded, what is rescued.

mod acts;
pub mod archive;
pub mod bare;
mod disk;
pub mod format;
pub mod packed;
pub mod preferences;
pub mod record;
pub mod rescue;

use crate::base::problem::{Place, Problem};
use crate::store::format::Newer;
use crate::study::Study;
use crate::study::ledger::Ledger;
use crate::study::settings::data::TableSource;
use crate::study::source::Shelf;
use std::path::Path;

pub use crate::store::acts::note_acts;
pub use crate::store::disk::{make_folder, replace};
pub use crate::store::record::{Record, fingerprint};

/// The form of a study on disk.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// A readable text that names its tables by path, without results: `.json`.
    Bare,
    /// One file with everything: `.widefold`.
    Packed,
}

impl Form {
    /// The form that a file's name asks for.
    ///
    /// # Errors
    /// A [`Problem`] when the name ends in neither way.
    pub fn of(path: &Path) -> Result<Self, Problem> {
        let ending = path.extension().unwrap_or_default();
        let ending = ending.to_string_lossy().to_lowercase();
        match ending.as_str() {
            "widefold" => Ok(Self::Packed),
            "json" => Ok(Self::Bare),
            _ => Err(Problem::new(
                "unknown-ending",
                format!(
                    "The name “{}” does not say in which form to save.",
                    disk::name_of(path)
                ),
            )
            .at(Place::file(&disk::name_of(path)))
            .mend("End the name in .widefold, or in .json for the readable form.")),
        }
    }
}

/// A study that has been opened.
#[derive(Debug)]
pub struct Opened {
    /// The study.
    pub study: Study,
    /// The bytes of its tables.
    pub shelf: Shelf,
    /// What was counted.
    pub ledger: Ledger,
    /// Results as they were when last current.
    pub record: Record,
    /// What was found on the way; nothing of it kept the study from opening.
    pub problems: Vec<Problem>,
    /// The form in which it lay on disk.
    pub form: Form,
}

impl Opened {
    /// Whether a newer version has saved the study, so that not all of it may be here.
    #[must_use]
    pub fn is_from_newer(&self) -> bool {
        let is_newer = |problem: &Problem| problem.code.0 == format::NEWER;
        self.problems.iter().any(is_newer)
    }
}

/// Opens a study of either form; the content decides which it is.
///
/// # Errors
/// A [`Problem`] when there is no such file, it is no study, it is damaged beyond rescue, or it
/// comes from a newer version.
pub fn open(path: &Path) -> Result<Opened, Problem> {
    let bytes = disk::read(path).map_err(|error| disk::not_read(path, "the study", &error))?;
    open_bytes(path, &bytes)
}

/// Opens a study as [`open`] does, and of one from a newer version as much as this version knows;
/// [`Opened::is_from_newer`] tells it then.
///
/// # Errors
/// As [`open`], but a study of a newer format only when nothing of it can be read.
pub fn open_in_part(path: &Path) -> Result<Opened, Problem> {
    let bytes = disk::read(path).map_err(|error| disk::not_read(path, "the study", &error))?;
    open_form(path, &bytes, Newer::InPart)
}

/// Opens a study from the bytes of its file. The readable form looks for its tables from the
/// folder of `path`.
///
/// # Errors
/// As [`open`].
pub fn open_bytes(path: &Path, bytes: &[u8]) -> Result<Opened, Problem> {
    open_form(path, bytes, Newer::Refused)
}

fn open_form(path: &Path, bytes: &[u8], newer: Newer) -> Result<Opened, Problem> {
    let file = disk::name_of(path);
    let text = bytes.strip_prefix(b"\xef\xbb\xbf").unwrap_or(bytes);
    let text = text.trim_ascii_start();
    match text.first() {
        None => Err(Problem::new("study-empty", "The file is empty.")
            .at(Place::file(&file))
            .mend("Take an earlier copy of the study.")),
        Some(b'P') if bytes.starts_with(b"PK") => packed::open(bytes, &file, newer),
        Some(b'{') => bare::open(bytes, path, newer),
        Some(_) => Err(Problem::new("not-a-study", "This file is not a study.")
            .at(Place::file(&file))
            .mend(
                "Choose a file that ends in .widefold or .json; to begin a study from a \
                     table, start one.",
            )),
    }
}

/// The bytes of a table's file.
///
/// # Errors
/// A [`Problem`] when there is no such file or it cannot be read.
pub fn read_table(path: &Path) -> Result<Vec<u8>, Problem> {
    disk::read(path).map_err(|error| disk::not_read(path, "the table", &error))
}

/// Saves a study in the form that the name asks for. The file that was there before stays as it
/// was until the new one is safely on the disk.
///
/// # Errors
/// A [`Problem`] that says why it could not be saved; what was there is untouched.
pub fn save(
    path: &Path,
    study: &Study,
    shelf: &Shelf,
    ledger: &Ledger,
    record: &Record,
) -> Result<(), Problem> {
    match Form::of(path)? {
        Form::Bare => bare::save(path, study, shelf, ledger),
        Form::Packed => {
            let bytes = packed::bytes(study, shelf, ledger, record, &[])?;
            disk::replace(path, &bytes)
        }
    }
}

/// The bytes of a file.
///
/// # Errors
/// A [`Problem`] when the file could not be read, or has no end, as a device has none.
pub fn read_file(path: &Path) -> Result<Vec<u8>, Problem> {
    let what = format!("“{}”", disk::name_of(path));
    disk::read(path).map_err(|error| disk::not_read(path, &what, &error))
}

/// Puts the bytes of a table's file on the shelf and returns the table, with every interpretation
/// left to the reader.
///
/// # Errors
/// A [`Problem`] when the file could not be read.
pub fn take_in(path: &Path, shelf: &mut Shelf) -> Result<TableSource, Problem> {
    let bytes = disk::read(path).map_err(|error| disk::not_read(path, "a table", &error))?;
    let source = shelf.put(bytes);
    let file = disk::name_of(path);
    let origin = std::path::absolute(path).unwrap_or_else(|_| path.to_owned());
    shelf.came_from(&source, &file, &origin);
    Ok(TableSource::new(source, &file))
}
