//! The readable form: one JSON text that names its tables by relative path. It holds no results.

use crate::base::problem::{Place, Problem};
use crate::store::format::Newer;
use crate::store::format::print::print;
use crate::store::packed::tables;
use crate::store::record::Record;
use crate::store::{Form, Opened, disk, format};
use crate::study::Study;
use crate::study::ledger::Ledger;
use crate::study::settings::data::TableSource;
use crate::study::source::{Shelf, SourceId};
use std::cell::RefCell;
use std::collections::BTreeMap;
use std::collections::btree_map::Entry;
use std::path::{Component, Path, PathBuf};

/// Opens a study in its readable form. Tables are looked for from the folder of `path`.
///
/// A table that is missing or has changed is told as a problem; the study opens all the same.
///
/// # Errors
/// A [`Problem`] when the text is no study, or one of a newer format that is refused.
pub fn open(bytes: &[u8], path: &Path, newer: Newer) -> Result<Opened, Problem> {
    let file = disk::name_of(path);
    let finder = RefCell::new(Finder {
        folder: folder_of(path),
        study: file.clone(),
        shelf: Shelf::default(),
        problems: Vec::new(),
    });
    let table = |name: &str, hash| finder.borrow_mut().find(name, hash);
    let read = format::read(bytes, &file, &table, newer)?;
    let finder = finder.into_inner();
    let mut problems = read.problems;
    for problem in finder.problems {
        if !problems.contains(&problem) {
            problems.push(problem);
        }
    }
    Ok(Opened {
        study: read.study,
        shelf: finder.shelf,
        ledger: read.ledger,
        record: Record::default(),
        problems,
        form: Form::Bare,
    })
}

fn folder_of(path: &Path) -> PathBuf {
    let absolute = std::path::absolute(path).unwrap_or_else(|_| path.to_owned());
    absolute.parent().map_or_else(PathBuf::new, Path::to_owned)
}

/// Finds the tables that a study names.
struct Finder {
    folder: PathBuf,
    study: String,
    shelf: Shelf,
    problems: Vec<Problem>,
}

impl Finder {
    fn find(&mut self, named: &str, hash: Option<SourceId>) -> (SourceId, String) {
        let path = self.folder.join(named);
        let file = disk::name_of(&path);
        let source = match disk::read(&path) {
            Ok(bytes) => {
                let present = self.shelf.put(bytes);
                if let Some(hash) = hash.filter(|hash| *hash != present) {
                    self.problems.push(self.changed(named, &hash, &present));
                }
                present
            }
            Err(error) => {
                let problem = disk::not_read(&path, &format!("the table “{named}”"), &error);
                let code = if problem.code.0 == "file-missing" {
                    "table-missing"
                } else {
                    "table-not-read"
                };
                let mut problem = problem.at(Place::file(&self.study));
                problem.code.0 = code;
                self.problems.push(problem);
                match hash {
                    Some(hash) => hash,
                    // Nothing but the path is known of it; so the path stays its name.
                    None => return (SourceId::unknown(), named.to_owned()),
                }
            }
        };
        self.shelf.came_from(&source, &file, &path);
        (source, file)
    }

    fn changed(&self, named: &str, hash: &SourceId, present: &SourceId) -> Problem {
        Problem::new(
            "table-changed",
            format!(
                "The table “{named}” is not the one that this study was saved with; the present \
                 one is used."
            ),
        )
        .at(Place::file(&self.study))
        .mend("Put the earlier table back, or bring the study up to date and save it.")
        .details(format!(
            "SHA-256 when saved {}, now {}",
            hash.hex(),
            present.hex()
        ))
    }
}

/// Saves a study in its readable form. A table that lies in a file of its own is named by its
/// path; others are written to a folder beside the study. No other file is ever overwritten.
///
/// # Errors
/// A [`Problem`] when a file could not be written; the study that was there is untouched.
pub fn save(path: &Path, study: &Study, shelf: &Shelf, ledger: &Ledger) -> Result<(), Problem> {
    let mut names = BTreeMap::new();
    for table in tables(study) {
        let key = (table.source.clone(), table.file.clone());
        if let Entry::Vacant(place) = names.entry(key) {
            let _ = place.insert(name(table, shelf, path)?);
        }
    }
    let name = |table: &TableSource| {
        let key = (table.source.clone(), table.file.clone());
        names.get(&key).unwrap_or(&table.file).clone()
    };
    let text = print(&format::v1::study::write(study, ledger, &name));
    disk::replace(path, text.as_bytes())
}

/// How a table's file is called in the study at `path`; writes it there if it lies nowhere.
fn name(table: &TableSource, shelf: &Shelf, path: &Path) -> Result<String, Problem> {
    let folder = folder_of(path);
    let origin = shelf.origin(&table.source, &table.file);
    let Some(bytes) = shelf.get(&table.source) else {
        let origin = origin.map(|origin| relative(origin, &folder));
        return Ok(origin.unwrap_or_else(|| table.file.clone()));
    };
    // A file that has changed since is not what the study was computed from.
    if let Some(origin) = origin
        && disk::read(origin).is_ok_and(|present| present[..] == bytes[..])
    {
        return Ok(relative(origin, &folder));
    }
    let stem = path.file_stem().unwrap_or_default().to_string_lossy();
    let beside = folder.join(format!("{stem}-tables"));
    disk::make_folder(&beside)?;
    let file = disk::name_of(Path::new(&table.file));
    let numbered = format!("{}-{file}", &table.source.hex()[..12]);
    for file in [file, numbered] {
        let place = beside.join(&file);
        match disk::read(&place) {
            Ok(present) if present[..] == bytes[..] => return Ok(relative(&place, &folder)),
            Ok(_) => {}
            Err(_) => {
                disk::replace(&place, bytes)?;
                return Ok(relative(&place, &folder));
            }
        }
    }
    Err(Problem::new(
        "table-not-written",
        format!(
            "The table “{}” has no place beside the study: other files have its names.",
            table.file
        ),
    )
    .at(Place::file(&disk::name_of(path)))
    .mend("Save the study under another name."))
}

/// A path as it is written in a study that lies in `folder`: from there, with `/` between the
/// names. Paths below the folder stay as they were typed.
fn relative(path: &Path, folder: &Path) -> String {
    let joined = |path: &Path| {
        let names = path
            .components()
            .map(|part| part.as_os_str().to_string_lossy());
        names.collect::<Vec<_>>().join("/")
    };
    if let Ok(below) = path.strip_prefix(folder) {
        return joined(below);
    }
    let (path, folder) = (plain(path), plain(folder));
    let shared = path.components().zip(folder.components());
    let shared = shared.take_while(|(a, b)| a == b).count();
    if shared == 0 {
        // Another disk: there is no way from here.
        return path.to_string_lossy().into_owned();
    }
    let up = folder
        .components()
        .skip(shared)
        .map(|_| Component::ParentDir);
    let down = path.components().skip(shared);
    joined(&up.chain(down).collect::<PathBuf>())
}

/// A path without detours.
fn plain(path: &Path) -> PathBuf {
    let mut plain = PathBuf::new();
    for part in path.components() {
        match part {
            Component::CurDir => {}
            Component::ParentDir => drop(plain.pop()),
            Component::Prefix(_) | Component::RootDir | Component::Normal(_) => plain.push(part),
        }
    }
    plain
}

#[cfg(test)]
#[cfg(unix)]
mod tests {
    use super::*;

    #[test]
    fn a_path_is_told_from_the_folder_of_the_study() {
        let tell = |path, folder| relative(Path::new(path), Path::new(folder));
        assert_eq!(tell("/a/b/c.csv", "/a/b"), "c.csv");
        assert_eq!(tell("/a/b/../d/c.csv", "/a/b"), "../d/c.csv");
        assert_eq!(tell("/a/b/../d/c.csv", "/a/x"), "../d/c.csv");
        assert_eq!(tell("/a/b/c.csv", "/a/b/d/e"), "../../c.csv");
    }
}
