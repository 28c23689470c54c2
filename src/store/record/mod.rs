//! Results as they were when last current, with what they were made from.

pub mod configuration;
mod written;

use crate::base::problem::{Place, Problem};
use crate::eval::outcome::{Failure, Gives, Outcome, Remedy};
use crate::eval::standing::{Standing, Standings, State};
use crate::store::format::place::{At, Notes};
use crate::store::format::v1::{
    Group, Reading, Writing, kind_of, kind_word, read_settings, write_settings,
};
use crate::store::format::{NEWEST, PROGRAM};
use crate::store::record::configuration::configuration;
use crate::store::record::written::{
    Written, WrittenFailure, WrittenOutcome, WrittenProblem, WrittenRemedy,
};
use crate::study::Study;
use crate::study::cell::CellId;
use crate::study::settings::Settings;
use crate::study::source::SourceId;
use serde_json::{Map, Value};
use std::collections::BTreeMap;
use std::sync::Arc;

/// The SHA-256 of what the result of a cell is made from: its settings and those of all cells it
/// draws on, in the file's own form, with the hashes of the tables. Blank when there is no such
/// cell. The ledger's looks and openings are counted by it.
#[must_use]
pub fn fingerprint(study: &Study, id: CellId) -> String {
    configuration(study, id).map_or_else(String::new, |made| made.fingerprint)
}

/// The results of a study as they were when last current.
#[derive(Clone, Debug, Default)]
pub struct Record {
    entries: BTreeMap<CellId, Arc<Entry>>,
}

/// One recorded result.
#[derive(Clone, Debug)]
pub struct Entry {
    /// The program that made it.
    pub program: String,
    /// The fingerprint of what it was made from.
    pub fingerprint: String,
    /// What it was made from, by fingerprint; the cell itself is last.
    made_from: Map<String, Value>,
    /// What came of it.
    verdict: Result<Arc<Outcome>, Arc<Failure>>,
}

impl Entry {
    /// What the cell gave: facts and caveats, and nothing to compute with.
    #[must_use]
    pub fn outcome(&self) -> Option<&Arc<Outcome>> {
        self.verdict.as_ref().ok()
    }

    /// Why the cell gave nothing.
    #[must_use]
    pub fn failure(&self) -> Option<&Arc<Failure>> {
        self.verdict.as_ref().err()
    }
}

impl Record {
    /// The results of all cells that are current or failed.
    #[must_use]
    pub fn from(study: &Study, standings: &Standings) -> Self {
        Self::default().updated(study, standings)
    }

    /// The same record, with the results of all cells that are current or failed. A cell that is
    /// due keeps what was recorded when it was last current.
    #[must_use]
    pub fn updated(&self, study: &Study, standings: &Standings) -> Self {
        let mut entries = BTreeMap::new();
        for cell in study.cells() {
            let old = self.entries.get(&cell.id);
            let standing = standings.get(cell.id);
            let verdict = match standing.state {
                State::Current => standing.outcome.map(Ok),
                State::Failed => standing.failure.map(Err),
                State::Due | State::Working(_) | State::Waiting | State::Stopped => None,
            };
            // A stand-in's own text is no result of the cell it stands for.
            let is_stand_in = study.kept().whole(cell.id, &cell.settings).is_some();
            let verdict = verdict.filter(|_| !is_stand_in);
            let made = verdict
                .and_then(|verdict| configuration(study, cell.id).map(|made| (verdict, made)));
            let Some((verdict, made)) = made else {
                if let Some(old) = old {
                    let _ = entries.insert(cell.id, Arc::clone(old));
                }
                continue;
            };
            let is_on_record = |outcome: &Arc<Outcome>| matches!(outcome.gives, Gives::OnRecord);
            if let Some(old) = old
                && old.fingerprint == made.fingerprint
                && verdict.as_ref().is_ok_and(is_on_record)
            {
                // Not computed again: the program that made it stays the one that is named.
                let _ = entries.insert(cell.id, Arc::clone(old));
                continue;
            }
            let entry = Entry {
                program: PROGRAM.to_owned(),
                fingerprint: made.fingerprint,
                made_from: made.parts.into_iter().collect(),
                verdict: verdict.map(|outcome| on_record(&outcome)),
            };
            let _ = entries.insert(cell.id, Arc::new(entry));
        }
        Self { entries }
    }

    /// The recorded result of a cell, whether or not it still agrees.
    #[must_use]
    pub fn entry(&self, id: CellId) -> Option<&Entry> {
        self.entries.get(&id).map(Arc::as_ref)
    }

    /// The recorded result of a cell, if it was made from what the study says now.
    #[must_use]
    pub fn agreeing(&self, study: &Study, id: CellId) -> Option<&Entry> {
        let entry = self.entry(id)?;
        (entry.fingerprint == fingerprint(study, id)).then_some(entry)
    }

    /// The recorded outcome of a cell, if it was made from what the study says now. It holds facts
    /// and caveats, and gives nothing to compute with.
    #[must_use]
    pub fn outcome_if_agrees(&self, study: &Study, id: CellId) -> Option<Outcome> {
        let outcome = self.agreeing(study, id)?.outcome()?;
        Some(Outcome::clone(outcome))
    }

    /// All recorded outcomes that were made from what the study says now.
    #[must_use]
    pub fn outcomes(&self, study: &Study) -> BTreeMap<CellId, Arc<Outcome>> {
        let cells = study.cells().iter();
        let agreeing = cells.filter_map(|cell| {
            let outcome = self.agreeing(study, cell.id)?.outcome()?;
            Some((cell.id, Arc::clone(outcome)))
        });
        agreeing.collect()
    }

    /// How the cells of a study stand when it has just been opened: recorded results that agree
    /// are current or failed, others are shown but due.
    #[must_use]
    pub fn standings(&self, study: &Study) -> Standings {
        let mut standings = Standings::default();
        for (id, entry) in &self.entries {
            if study.cell(*id).is_none() {
                continue;
            }
            let agrees = entry.fingerprint == fingerprint(study, *id);
            let (state, outcome, failure) = match (&entry.verdict, agrees) {
                (Ok(outcome), true) => (State::Current, Some(outcome), None),
                (Ok(outcome), false) => (State::Due, Some(outcome), None),
                (Err(failure), true) => (State::Failed, None, Some(failure)),
                (Err(_), false) => continue,
            };
            let standing = Standing {
                state,
                outcome: outcome.cloned(),
                failure: failure.cloned(),
            };
            standings.put(*id, standing);
        }
        standings
    }

    /// Whether nothing is recorded.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.entries.is_empty()
    }

    /// Every recorded result in writing, under the name of its file.
    #[must_use]
    pub fn written(&self) -> Vec<(String, Vec<u8>)> {
        let entries = self.entries.iter();
        entries
            .map(|(id, entry)| (file_name(*id), write(entry)))
            .collect()
    }

    /// Takes in one recorded result as it was written.
    ///
    /// # Errors
    /// A [`Problem`] when it cannot be read; the cell is then due.
    pub fn take_in(&mut self, id: CellId, bytes: &[u8], file: &str) -> Result<(), Problem> {
        let entry = read(bytes).map_err(|details| {
            Problem::new(
                "record-damaged",
                format!(
                    "The recorded result of cell {} cannot be read; the cell has to be brought up \
                     to date.",
                    id.number()
                ),
            )
            .at(Place::file(file))
            .mend("Bring the study up to date and save it.")
            .details(details)
        })?;
        let _ = self.entries.insert(id, Arc::new(entry));
        Ok(())
    }
}

/// The cell to which a file of the record belongs.
#[must_use]
pub fn cell_of(file: &str) -> Option<CellId> {
    let digits = file.strip_prefix("record/")?.strip_suffix(".json")?;
    let number: u32 = digits.parse().ok()?;
    let id = CellId::new(number);
    (file_name(id) == file).then_some(id)
}

fn file_name(id: CellId) -> String {
    format!("record/{}.json", id.number())
}

/// What is kept of an outcome: what it publishes, and not what others compute with.
fn on_record(outcome: &Arc<Outcome>) -> Arc<Outcome> {
    match outcome.gives {
        Gives::OnRecord => Arc::clone(outcome),
        Gives::Facts | Gives::Data(_) | Gives::Prepared(_) | Gives::Fit(_) => Arc::new(Outcome {
            gives: Gives::OnRecord,
            facts: outcome.facts.clone(),
            caveats: outcome.caveats.clone(),
        }),
    }
}

fn write(entry: &Entry) -> Vec<u8> {
    let (outcome, failure) = match &entry.verdict {
        Ok(outcome) => (
            Some(WrittenOutcome::of(&outcome.facts, &outcome.caveats)),
            None,
        ),
        Err(failure) => (None, Some(write_failure(failure))),
    };
    let written = Written {
        format: NEWEST,
        program: entry.program.clone(),
        fingerprint: entry.fingerprint.clone(),
        made_from: entry.made_from.clone(),
        outcome,
        failure,
    };
    let mut bytes = serde_json::to_vec(&written).expect("names are texts and numbers are finite");
    bytes.push(b'\n');
    bytes
}

fn read(bytes: &[u8]) -> Result<Entry, String> {
    let written: Written = serde_json::from_slice(bytes).map_err(|error| error.to_string())?;
    if written.format != NEWEST {
        return Err(format!("It is of format {}.", written.format));
    }
    let verdict = match (written.outcome, written.failure) {
        (Some(outcome), None) => {
            let (facts, caveats) = outcome
                .read()
                .ok_or("A fact or a caveat has a word unknown here.")?;
            Ok(Arc::new(Outcome {
                gives: Gives::OnRecord,
                facts,
                caveats,
            }))
        }
        (None, Some(failure)) => Err(Arc::new(read_failure(failure))),
        _ => return Err("It holds neither an outcome nor a failure, or both.".to_owned()),
    };
    Ok(Entry {
        program: written.program,
        fingerprint: written.fingerprint,
        made_from: written.made_from,
        verdict,
    })
}

fn write_failure(failure: &Failure) -> WrittenFailure {
    let link = |id: CellId| Value::from(id.number());
    let writing = Writing {
        link: &link,
        file: &|table| table.file.clone(),
        reread: None,
    };
    let remedy = |remedy: &Remedy| {
        let mut group = Group::default();
        group.put("kind", kind_word(remedy.settings.kind()));
        write_settings(&remedy.settings, &mut group, &writing);
        WrittenRemedy {
            label: remedy.label.clone(),
            settings: group.value(),
        }
    };
    WrittenFailure {
        problem: WrittenProblem::of(&failure.problem),
        remedies: failure.remedies.iter().map(remedy).collect(),
    }
}

/// A remedy that cannot be read is left out: the cell can be brought up to date to get it again.
fn read_failure(failure: WrittenFailure) -> Failure {
    let reading = Reading {
        titled: &|_| None,
        table: &|name, hash| {
            let source = hash.unwrap_or_else(SourceId::unknown);
            (source, name.to_owned())
        },
    };
    let settings = |value: &Value| -> Option<Settings> {
        let notes = Notes::default();
        let mut fields = At::top(value, &notes).fields().ok()?;
        let kind = kind_of(fields.need("kind").ok()?.value().as_str()?)?;
        read_settings(kind, &mut fields, &reading).ok()
    };
    let remedy = |remedy: WrittenRemedy| {
        Some(Remedy {
            settings: settings(&remedy.settings)?,
            label: remedy.label,
        })
    };
    Failure {
        problem: failure.problem.read(),
        remedies: failure.remedies.into_iter().filter_map(remedy).collect(),
    }
}
