//! Newer files for the tables of a study: what differs is said before it is taken.

use crate::base::problem::{Place, Problem};
use crate::base::thread::Threads;
use crate::base::work::Work;
use crate::eval::reread::changes;
use crate::store::{self, Opened};
use crate::study::edit::Edit;
use crate::study::settings::Settings;
use crate::study::settings::said::said;
use std::path::{Path, PathBuf};

/// Whether a table that has changed is taken.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Taking {
    /// It is.
    Accepted,
    /// What differs is said, and nothing is taken.
    Asked,
}

/// Sets settings of the first Data cell, each as it is said in one line.
///
/// # Errors
/// A [`Problem`] when there is no Data cell or a line says nothing that can be set.
pub fn set(opened: &mut Opened, lines: &[String]) -> Result<(), Problem> {
    for line in lines {
        let data = opened
            .study
            .cells()
            .iter()
            .find_map(|cell| match &cell.settings {
                Settings::Data(data) => Some((cell.id, data)),
                Settings::Prepare(_)
                | Settings::Fit(_)
                | Settings::Question(_)
                | Settings::Compare(_)
                | Settings::Score(_)
                | Settings::Prose(_) => None,
            });
        let Some((id, data)) = data else {
            return Err(Problem::new(
                "no-data-cell",
                "The study has no Data cell whose settings could be set.",
            ));
        };
        let settings = Settings::Data(said(data, line)?);
        let _ = opened
            .study
            .apply(Edit::Configure { id, settings })
            .map_err(|error| {
                Problem::new("edit", "The setting could not be taken.")
                    .details(format!("{error:?}"))
            })?;
    }
    Ok(())
}

/// Reads newer files for tables of the same name, and says what differs. Returns whether anything
/// stayed as it was because it was not accepted.
///
/// # Errors
/// A [`Problem`] when a file cannot be read, or no table is called like it.
pub fn reread(opened: &mut Opened, files: &[PathBuf], taking: Taking) -> Result<bool, Problem> {
    let mut has_stayed = false;
    for path in files {
        has_stayed |= reread_one(opened, path, taking)?;
    }
    Ok(has_stayed)
}

fn reread_one(opened: &mut Opened, path: &Path, taking: Taking) -> Result<bool, Problem> {
    let bytes = store::read_table(path)?;
    let file = path
        .file_name()
        .map_or_else(String::new, |name| name.to_string_lossy().into_owned());
    let mut is_known = false;
    let mut has_stayed = false;
    let cells = opened.study.cells().to_vec();
    for cell in &cells {
        let Settings::Data(data) = &cell.settings else {
            continue;
        };
        let mut renewed = data.clone();
        for at in 0..data.tables.len() {
            let table = &data.tables[at];
            if table.file != file {
                continue;
            }
            is_known = true;
            let Some(old) = opened.shelf.get(&table.source) else {
                eprintln!(
                    "“{file}”: the earlier file is not in the study, so that nothing can be compared."
                );
                has_stayed |= taking == Taking::Asked;
                renewed.tables[at].source = opened.shelf.put(bytes.clone());
                renewed.tables[at].taken_on = Some(super::today());
                continue;
            };
            let found = changes(data, at, old, &bytes, Threads::all(), &Work::unattended())
                .expect("nobody calls unattended work off")?;
            say(&found.sentences());
            if found.is_none() {
                continue;
            }
            has_stayed |= taking == Taking::Asked;
            let source = opened.shelf.put(bytes.clone());
            let whole = std::path::absolute(path).unwrap_or_else(|_| path.to_owned());
            opened.shelf.came_from(&source, &file, &whole);
            renewed.tables[at].source = source;
            renewed.tables[at].taken_on = Some(super::today());
        }
        if taking == Taking::Accepted && renewed != *data {
            let settings = Settings::Data(renewed);
            let edit = Edit::Configure {
                id: cell.id,
                settings,
            };
            let _ = opened.study.apply(edit).map_err(|error| {
                Problem::new("edit", "The newer table could not be taken.")
                    .details(format!("{error:?}"))
            })?;
        }
    }
    if !is_known {
        return Err(Problem::new(
            "no-such-table",
            format!("No table of the study is called “{file}”."),
        )
        .at(Place::file(&file))
        .mend("Give the newer file the name of the table that it is to replace."));
    }
    if has_stayed {
        eprintln!("Nothing was taken: the study keeps the earlier file until --accept is given.");
    }
    Ok(has_stayed)
}

#[expect(
    clippy::print_stdout,
    reason = "what differs is the result of the command"
)]
fn say(sentences: &[String]) {
    for sentence in sentences {
        println!("{sentence}");
    }
}
