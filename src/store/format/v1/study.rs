//! A whole study in format 1: title, cells, ledger.

use crate::base::problem::{Place, Problem};
use crate::store::format::place::{At, Fault, Fields, Notes, way};
use crate::store::format::v1::kept::{Positions, put_back};
use crate::store::format::v1::{
    Group, Reading, Writing, kind_of, kind_word, out_of_bounds, read_settings, write_settings,
};
use crate::store::format::{FindTable, Read};
use crate::study::Study;
use crate::study::cell::{Cell, CellId, Kind};
use crate::study::kept::{Kept, KeptCell, KeptField, Step};
use crate::study::ledger::{Ledger, Look, Opening};
use crate::study::prose::{Piece, Prose};
use crate::study::settings::Settings;
use crate::study::settings::data::TableSource;
use crate::study::source::SourceId;
use serde_json::Value;
use std::collections::BTreeSet;

/// Numbers of cells in a file are at most this, so that there is always a next one.
const MOST_ID: u32 = 999_999_999;

const LEDGER: &str = "ledger";

/// Reads a study. What cannot be read is kept, shown as such, and told as a problem; only
/// something that is no study at all is refused.
///
/// # Errors
/// A [`Problem`] when there is no list of cells.
pub fn read(value: &Value, file: &str, table: &FindTable<'_>) -> Result<Read, Problem> {
    let refusal = |fault: Fault| {
        problem("not-a-study", file, &fault)
            .mend("Choose a study: a file that ends in .widefold, or its readable form in .json.")
    };
    let notes = Notes::default();
    let mut top = At::top(value, &notes).fields().map_err(refusal)?;
    let _ = (top.get("format"), top.get("program"));
    let entries = top.need("cells").map_err(refusal)?;
    let entries = entries.list().map_err(refusal)?;
    let mut problems = Vec::new();
    let mut complain = |result: Result<_, Fault>| {
        result.unwrap_or_else(|fault| {
            problems.push(problem("study-field", file, &fault));
            None
        })
    };
    let title = complain(top.text("title")).unwrap_or_default();
    let next_id = top.read("next-id", |at| at.count().map(|count| count.to_string()));
    let next_id = complain(next_id).and_then(|digits| digits.parse().ok());
    let ledger = top.get(LEDGER);

    let outlines = outline(
        &entries,
        next_id.unwrap_or(1).min(MOST_ID),
        file,
        &mut problems,
    );
    let cells = outlines.cells.iter().map(|cell| Cell {
        id: cell.id,
        title: cell.title.clone(),
        settings: Settings::Prose(Prose::default()),
    });
    let skeleton = Study::restored(&title, cells.collect(), outlines.next_id);
    let titled = |title: &str| {
        let as_written = outlines.cells.iter().find(|cell| cell.title == title);
        let id = as_written.map(|cell| cell.id);
        id.or_else(|| skeleton.titled(title).map(|cell| cell.id))
    };
    let reading = Reading {
        titled: &titled,
        table,
    };

    let mut kept = Kept::default();
    let mut cells = Vec::new();
    for ((entry, outline), named) in entries.iter().zip(&outlines.cells).zip(skeleton.cells()) {
        if named.title != outline.title {
            problems.push(
                Problem::new(
                    "cell-title",
                    format!(
                        "The title “{}” is blank, taken, or holds signs that prose needs; the cell \
                         is called “{}”.",
                        outline.title, named.title
                    ),
                )
                .at(Place::file(file))
                .mend("Give the cell another title."),
            );
        }
        let (settings, left) = read_cell(entry, outline, &reading);
        if let Some(complaint) = left.complaint {
            problems.push(complaint(file, &named.title));
        }
        if left.whole.is_some() || !left.fields.is_empty() {
            let left = KeptCell {
                settings: settings.clone(),
                whole: left.whole,
                fields: left.fields,
            };
            let _ = kept.cells.insert(named.id, left);
        }
        cells.push(Cell {
            id: named.id,
            title: named.title.clone(),
            settings,
        });
    }
    let ledger = read_ledger(ledger, file, &mut problems);
    top.done();
    kept.fields = notes.into_fields();
    if let Some(complaint) = unknown_fields(&kept.fields, "") {
        problems.push(complaint.at(Place::file(file)));
    }
    let study = Study::restored(&title, cells, outlines.next_id).with_kept(kept);
    Ok(Read {
        study,
        ledger,
        problems,
    })
}

/// What a cell is called, before anything else is known of it.
struct Outline {
    id: CellId,
    title: String,
    kind: Result<Kind, String>,
    way: String,
}

struct Outlines {
    cells: Vec<Outline>,
    next_id: u32,
}

/// Gives every cell a number and a title: its own where it has one, else a new one.
fn outline(entries: &[At<'_>], next_id: u32, file: &str, problems: &mut Vec<Problem>) -> Outlines {
    let number = |entry: &At<'_>| {
        let number = entry.value().get("id")?.as_u64()?;
        u32::try_from(number).ok().filter(|id| *id <= MOST_ID)
    };
    let mut used = BTreeSet::new();
    let numbers: Vec<Option<u32>> = entries
        .iter()
        .enumerate()
        .map(|(at, entry)| {
            let own = number(entry).filter(|id| used.insert(*id));
            if own.is_none() && entry.value().get("id").is_some() {
                problems.push(
                    Problem::new(
                        "cell-number",
                        format!(
                            "The number of the cell at cells[{at}] is taken or not a whole number; \
                             the cell has been given a new one."
                        ),
                    )
                    .at(Place::file(file))
                    .mend("Check what the cells below draw on."),
                );
            }
            own
        })
        .collect();
    let mut next_id = next_id.max(used.last().map_or(1, |id| id + 1)).max(1);
    let cells = entries.iter().zip(numbers).enumerate();
    let cells = cells.map(|(at, (entry, own))| {
        let id = own.unwrap_or_else(|| {
            next_id += 1;
            next_id - 1
        });
        let word = entry.value().get("kind").and_then(Value::as_str);
        let word = word.unwrap_or_default();
        let kind = kind_of(word).ok_or_else(|| word.to_owned());
        let title = entry.value().get("title").and_then(Value::as_str);
        let usual = kind.as_ref().map_or("Unknown cell", |kind| kind.name());
        Outline {
            id: CellId::new(id),
            title: match title {
                Some(title) => title.to_owned(),
                None => format!("{usual} {id}"),
            },
            kind,
            way: format!("cells[{at}]"),
        }
    });
    Outlines {
        cells: cells.collect(),
        next_id,
    }
}

type Complaint = Box<dyn Fn(&str, &str) -> Problem>;

/// What is left of a cell beyond its settings.
#[derive(Default)]
struct Left {
    whole: Option<String>,
    fields: Vec<KeptField>,
    complaint: Option<Complaint>,
}

fn read_cell(entry: &At<'_>, outline: &Outline, reading: &Reading<'_>) -> (Settings, Left) {
    let stand_in = |words: String, complaint: Complaint| {
        let pieces = vec![Piece::Text(format!("*{words} It is kept as it was.*"))];
        let left = Left {
            whole: Some(whole(entry.value())),
            fields: Vec::new(),
            complaint: Some(complaint),
        };
        (Settings::Prose(Prose { pieces }), left)
    };
    let kind = match &outline.kind {
        Ok(kind) => *kind,
        Err(word) => {
            let found = if word.is_empty() {
                "This cell does not say of which kind it is.".to_owned()
            } else {
                format!("This cell is of the kind “{word}”, which this version does not know.")
            };
            let (place, words) = (outline.way.clone(), found.clone());
            let complaint = move |file: &str, title: &str| {
                Problem::new("unknown-kind", format!("“{title}” ({place}): {words}"))
                    .at(Place::file(file))
                    .mend("Open the study with a newer version, or correct the word after “kind”.")
            };
            return stand_in(found, Box::new(complaint));
        }
    };
    // Read from the cell itself, so that ways are told from there and stay when it is moved.
    let notes = Notes::default();
    let read = || -> Result<Settings, Fault> {
        let mut fields = At::top(entry.value(), &notes).fields()?;
        let _ = (fields.get("id"), fields.get("kind"), fields.text("title")?);
        let settings = read_settings(kind, &mut fields, reading)?;
        fields.done();
        match out_of_bounds(&settings) {
            Some(problem) => {
                let mut mend = problem.mend.join(" ");
                if mend.is_empty() {
                    mend = "Correct the number.".to_owned();
                }
                Err(At::top(entry.value(), &notes).fault(&problem.found, &mend))
            }
            None => Ok(settings),
        }
    };
    let way_here = outline.way.clone();
    match read() {
        Ok(settings) => {
            let fields = notes.into_fields();
            let complaint = unknown_fields(&fields, &way_here).map(|problem| -> Complaint {
                Box::new(move |file, title| {
                    let mut problem = problem.clone().at(Place::file(file));
                    problem.found = format!("“{title}”: {}", problem.found);
                    problem
                })
            });
            let left = Left {
                whole: None,
                fields,
                complaint,
            };
            (settings, left)
        }
        Err(fault) => {
            let words = format!("This cell could not be read. {}", fault.found);
            let inner = way(&fault.path);
            let dot = if inner.is_empty() { "" } else { "." };
            let place = format!("{way_here}{dot}{inner}");
            let complaint = move |file: &str, title: &str| {
                Problem::new(
                    "cell-not-read",
                    format!("“{title}” ({place}): {}", fault.found),
                )
                .at(Place::file(file))
                .mend(fault.mend.clone())
            };
            stand_in(words, Box::new(complaint))
        }
    }
}

/// A cell in the file's own words, but for its number and title, which the study keeps.
fn whole(value: &Value) -> String {
    let mut value = value.clone();
    if let Value::Object(map) = &mut value {
        let _ = (map.shift_remove("id"), map.shift_remove("title"));
    } else {
        let mut group = Group::default();
        group.put("was", value);
        value = group.value();
    }
    value.to_string()
}

/// A remark on fields that are kept without having an effect.
fn unknown_fields(fields: &[KeptField], way_here: &str) -> Option<Problem> {
    const MOST: usize = 8;
    let name = |field: &KeptField| {
        let steps = [way_here.to_owned(), way(&field.path), field.name.clone()];
        let steps: Vec<_> = steps.into_iter().filter(|step| !step.is_empty()).collect();
        steps.join(".")
    };
    let mut names: Vec<_> = fields.iter().take(MOST).map(name).collect();
    if fields.len() > MOST {
        names.push(format!("and {} more", fields.len() - MOST));
    }
    let found = match fields.len() {
        0 => return None,
        1 => format!(
            "The field {} is not known; it is kept and has no effect.",
            names[0]
        ),
        _ => format!(
            "These fields are not known; they are kept and have no effect: {}.",
            names.join(", ")
        ),
    };
    let problem = Problem::new("unknown-field", found);
    Some(problem.mend("Check the spelling, or open the study with a newer version."))
}

fn problem(code: &'static str, file: &str, fault: &Fault) -> Problem {
    let way = way(&fault.path);
    let found = if way.is_empty() {
        fault.found.clone()
    } else {
        format!("{way}: {}", fault.found)
    };
    Problem::new(code, found)
        .at(Place::file(file))
        .mend(fault.mend.clone())
}

/// Reads what was counted. An entry that cannot be read still counts.
fn read_ledger(at: Option<At<'_>>, file: &str, problems: &mut Vec<Problem>) -> Ledger {
    let mut complain = |fault: Fault| problems.push(problem("ledger", file, &fault));
    let fields = at.map(|at| at.fields()).transpose();
    let Ok(Some(mut fields)) = fields.map_err(&mut complain) else {
        return Ledger::default();
    };
    let mut entries = |fields: &mut Fields<'_>, name| -> Vec<[String; 3]> {
        let list = fields.get(name).map(|at| at.list()).transpose();
        let list = list.map_err(&mut complain).ok().flatten();
        let mut entry = |at: At<'_>| -> [String; 3] {
            let mut group = match at.fields() {
                Ok(group) => group,
                Err(fault) => {
                    complain(fault);
                    return Default::default();
                }
            };
            let texts = ["configuration", "cell", "date"].map(|name| match group.text(name) {
                Ok(text) => text.unwrap_or_default(),
                Err(fault) => {
                    complain(fault);
                    String::new()
                }
            });
            group.done();
            texts
        };
        list.unwrap_or_default()
            .into_iter()
            .map(&mut entry)
            .collect()
    };
    let looks = entries(&mut fields, "looks");
    let openings = entries(&mut fields, "openings");
    fields.done();
    let look = |[configuration, cell, date]: [String; 3]| Look {
        configuration,
        cell,
        date,
    };
    let opening = |[configuration, cell, date]: [String; 3]| Opening {
        cell,
        configuration,
        date,
    };
    Ledger::restored(
        looks.into_iter().map(look).collect(),
        openings.into_iter().map(opening).collect(),
    )
}

/// Writes a study and its ledger. `file` tells how a table's file is called.
#[must_use]
pub fn write(study: &Study, ledger: &Ledger, file: &dyn Fn(&TableSource) -> String) -> Value {
    let titled = |title: &str| study.titled(title).map(|cell| cell.id);
    let reading = Reading {
        titled: &titled,
        table: &|name, _| (SourceId::unknown(), name.to_owned()),
    };
    let link = |id: CellId| Value::from(id.number());
    let writing = Writing {
        link: &link,
        file,
        reread: Some(&reading),
    };
    let kept = study.kept();
    let mut top = Group::default();
    top.put("format", 1);
    top.put("program", crate::store::format::PROGRAM);
    top.put("title", study.title());
    top.put("next-id", study.next_id().number());
    let cells = study
        .cells()
        .iter()
        .map(|cell| write_cell(cell, kept, &writing));
    top.put("cells", Value::Array(cells.collect()));
    let in_ledger = |field: &KeptField| field.path.first() == Some(&Step::Field(LEDGER.to_owned()));
    let counted = write_ledger(ledger);
    if counted.is_some() || kept.fields.iter().any(in_ledger) {
        top.put(LEDGER, counted.unwrap_or_else(|| Group::default().value()));
    }
    let mut value = top.value();
    // The ledger is only ever appended to, so that its positions stay; cells are not part of this.
    put_back(&mut value, &kept.fields, Positions::AsRead);
    value
}

fn write_cell(cell: &Cell, kept: &Kept, writing: &Writing<'_>) -> Value {
    if let Some(whole) = kept.whole(cell.id, &cell.settings)
        && let Ok(Value::Object(fields)) = serde_json::from_str(whole)
    {
        let mut group = Group::default();
        group.put("id", cell.id.number());
        group.put("title", cell.title.clone());
        for (name, value) in fields {
            group.put(&name, value);
        }
        return group.value();
    }
    let mut group = Group::default();
    group.put("id", cell.id.number());
    group.put("kind", kind_word(cell.settings.kind()));
    group.put("title", cell.title.clone());
    write_settings(&cell.settings, &mut group, writing);
    let mut value = group.value();
    if let Some(left) = kept.cells.get(&cell.id) {
        let positions = if left.settings == cell.settings {
            Positions::AsRead
        } else {
            Positions::Changed
        };
        put_back(&mut value, &left.fields, positions);
    }
    value
}

fn write_ledger(ledger: &Ledger) -> Option<Value> {
    let entry = |configuration: &str, cell: &str, date: &str| {
        let mut group = Group::default();
        group.put("configuration", configuration);
        group.put("cell", cell);
        group.put("date", date);
        group.value()
    };
    let looks = ledger.looks().iter();
    let looks = looks.map(|look| entry(&look.configuration, &look.cell, &look.date));
    let openings = ledger.openings().iter();
    let openings =
        openings.map(|opening| entry(&opening.configuration, &opening.cell, &opening.date));
    if ledger.looks().is_empty() && ledger.openings().is_empty() {
        return None;
    }
    let mut group = Group::default();
    group.put_list("looks", looks);
    group.put_list("openings", openings);
    Some(group.value())
}
