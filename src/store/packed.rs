//! The packed form of a study: what goes into the archive, and what is made of what comes out.

use crate::base::problem::{Place, Problem};
use crate::store::archive::{self, ABOUT, Entry, STUDY, Unpacked};
use crate::store::format::print::print;
use crate::store::format::{self, Newer};
use crate::store::record::{self, Record};
use crate::store::{Form, Opened};
use crate::study::Study;
use crate::study::ledger::Ledger;
use crate::study::settings::Settings;
use crate::study::settings::data::TableSource;
use crate::study::source::{Shelf, SourceId};
use std::collections::BTreeMap;

/// The bytes of a packed study. `beside` are further entries, which are not part of the study.
///
/// Entries stand in the order of what would be missed most if the end of the file were lost: the
/// study, its tables, its record; within these by name.
///
/// # Errors
/// A [`Problem`] when it does not fit into an archive.
pub fn bytes(
    study: &Study,
    shelf: &Shelf,
    ledger: &Ledger,
    record: &Record,
    beside: &[Entry<'_>],
) -> Result<Vec<u8>, Problem> {
    let name = |table: &TableSource| table.file.clone();
    let text = print(&format::v1::study::write(study, ledger, &name));
    let mut entries = vec![
        Entry {
            name: "about.txt".to_owned(),
            bytes: ABOUT.as_bytes(),
        },
        Entry {
            name: STUDY.to_owned(),
            bytes: text.as_bytes(),
        },
    ];
    let sources = sources(study);
    for (id, ending) in &sources {
        if let Some(bytes) = shelf.get(id) {
            entries.push(Entry {
                name: format!("sources/{}.{ending}", id.hex()),
                bytes,
            });
        }
    }
    let mut written = record.written();
    written.sort();
    entries.extend(written.iter().map(|(name, bytes)| Entry {
        name: name.clone(),
        bytes,
    }));
    entries.extend(beside.iter().map(|entry| Entry {
        name: entry.name.clone(),
        bytes: entry.bytes,
    }));
    archive::pack(&entries)
}

/// Opens a packed study.
///
/// # Errors
/// A [`Problem`] when the study itself cannot be read, or is of a newer format that is refused.
pub fn open(bytes: &[u8], file: &str, newer: Newer) -> Result<Opened, Problem> {
    let is_wanted =
        |name: &str| name == STUDY || source_of(name).is_some() || record::cell_of(name).is_some();
    let mut unpacked = archive::unpack(bytes, file, &is_wanted)?;
    let text = unpacked.entries.remove(STUDY);
    let text = text.ok_or_else(|| no_study(&unpacked, file))?;
    let table = |name: &str, hash: Option<SourceId>| {
        let source = hash.unwrap_or_else(SourceId::unknown);
        (source, name.to_owned())
    };
    let read = format::read(&text, file, &table, newer)?;
    let mut problems = Vec::new();
    if unpacked.is_cut_off {
        problems.push(cut_off(file));
    }
    problems.extend(read.problems);
    let shelf = shelve(&mut unpacked, &read.study, file, &mut problems);
    let record = recorded(&unpacked, &read.study, file, &mut problems);
    Ok(Opened {
        study: read.study,
        shelf,
        ledger: read.ledger,
        record,
        problems,
        form: Form::Packed,
    })
}

fn no_study(unpacked: &Unpacked, file: &str) -> Problem {
    let is_broken = unpacked.broken.iter().any(|name| name == STUDY);
    let problem = if is_broken || unpacked.is_cut_off {
        Problem::new(
            "study-damaged",
            "The file is damaged at the place where the study stands.",
        )
        .mend("Take an earlier copy of the study.")
    } else {
        Problem::new("not-a-study", "This is an archive, but it holds no study.")
            .mend("Choose a file that was saved as a study.")
    };
    problem.at(Place::file(file))
}

fn cut_off(file: &str) -> Problem {
    Problem::new(
        "archive-cut-off",
        "The end of the file is missing; what stands before it has been rescued.",
    )
    .at(Place::file(file))
    .mend("Look through the study, then save it under another name.")
}

/// Puts the tables on the shelf whose bytes are what their names say.
fn shelve(
    unpacked: &mut Unpacked,
    study: &Study,
    file: &str,
    problems: &mut Vec<Problem>,
) -> Shelf {
    let mut shelf = Shelf::default();
    let mut wrong = Vec::new();
    let names: Vec<String> = unpacked.entries.keys().cloned().collect();
    for (name, id) in names
        .iter()
        .filter_map(|name| Some((name, source_of(name)?)))
    {
        let bytes = unpacked.entries.remove(name).unwrap_or_default();
        if SourceId::of(&bytes) == id {
            let _ = shelf.put(bytes);
        } else {
            wrong.push(id);
        }
    }
    wrong.extend(unpacked.broken.iter().filter_map(|name| source_of(name)));
    for table in tables(study) {
        if shelf.get(&table.source).is_some() {
            continue;
        }
        let problem = if wrong.contains(&table.source) {
            Problem::new(
                "table-damaged",
                format!(
                    "The table “{}” in the study is damaged: its bytes are not those that were \
                     imported.",
                    table.file
                ),
            )
        } else {
            Problem::new(
                "table-missing",
                format!("The table “{}” is not in the study file.", table.file),
            )
        };
        let problem = problem
            .at(Place::file(file))
            .mend(format!(
                "Choose the file “{}” again in its data cell, or take an earlier copy of the study.",
                table.file
            ))
            .details(format!("SHA-256 {}", table.source.hex()));
        if !problems.contains(&problem) {
            problems.push(problem);
        }
    }
    shelf
}

fn recorded(unpacked: &Unpacked, study: &Study, file: &str, problems: &mut Vec<Problem>) -> Record {
    let mut record = Record::default();
    for (name, bytes) in &unpacked.entries {
        if let Some(id) = record::cell_of(name).filter(|id| study.cell(*id).is_some())
            && let Err(problem) = record.take_in(id, bytes, file)
        {
            problems.push(problem);
        }
    }
    for name in &unpacked.broken {
        if let Some(id) = record::cell_of(name) {
            // Nothing can be read from no bytes; the problem says what to do.
            problems.extend(record.take_in(id, &[], file).err());
        }
    }
    record
}

/// The source that an entry holds.
fn source_of(name: &str) -> Option<SourceId> {
    let name = name.strip_prefix("sources/")?;
    SourceId::parse(name.split('.').next()?)
}

/// All tables that cells of the study name.
pub fn tables(study: &Study) -> Vec<&TableSource> {
    let mut tables = Vec::new();
    for cell in study.cells() {
        match &cell.settings {
            Settings::Data(data) => tables.extend(&data.tables),
            Settings::Score(score) => tables.extend(&score.table),
            Settings::Prepare(_)
            | Settings::Fit(_)
            | Settings::Question(_)
            | Settings::Compare(_)
            | Settings::Prose(_) => {}
        }
    }
    tables
}

/// The sources that a study refers to, with the ending of each one's file. Cells that this version
/// does not know may refer to sources too: every hash that stands in them counts.
fn sources(study: &Study) -> BTreeMap<SourceId, String> {
    let mut sources = BTreeMap::new();
    for table in tables(study) {
        let ending = || ending(&table.file);
        let _ = sources.entry(table.source.clone()).or_insert_with(ending);
    }
    for kept in study.kept().cells.values() {
        let texts = kept.whole.iter();
        let texts = texts.chain(kept.fields.iter().map(|field| &field.value));
        for id in texts.flat_map(|text| hashes(text)) {
            let _ = sources.entry(id).or_insert_with(|| "table".to_owned());
        }
    }
    sources
}

fn hashes(text: &str) -> impl Iterator<Item = SourceId> {
    text.split('"').filter_map(SourceId::parse)
}

/// How a file's name ends, as far as it can be part of a name in an archive.
fn ending(file: &str) -> String {
    let lower = file.to_ascii_lowercase();
    let plain = |ending: &&str| {
        (1..=8).contains(&ending.len()) && ending.bytes().all(|b| b.is_ascii_alphanumeric())
    };
    let mut endings = lower.rsplit('.');
    match (endings.next().filter(plain), endings.next().filter(plain)) {
        (Some("gz"), Some(inner)) if inner.len() < lower.len() - 3 => format!("{inner}.gz"),
        (Some(ending), _) if ending.len() < lower.len() => ending.to_owned(),
        _ => "table".to_owned(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_table_keeps_the_ending_of_its_file() {
        for (file, expected) in [
            ("cellar-lab.xlsx", "xlsx"),
            ("scans.CSV.gz", "csv.gz"),
            ("scans.2026.csv", "csv"),
            ("no ending", "table"),
            ("odd.e/nd", "table"),
            ("", "table"),
            (".gz", "gz"),
        ] {
            assert_eq!(ending(file), expected, "{file}");
        }
    }
}
