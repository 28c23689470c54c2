//! What was saved opens again as it was, with its results.

use crate::support::{Desk, Dice, Folder, any_desk, any_facts, current, get, put};
use std::path::{Path, PathBuf};
use widefold::eval::standing::{Standing, Standings, State};
use widefold::store::preferences::{Preferences, Theme};
use widefold::store::record::Record;
use widefold::store::rescue::{Rescue, Session};
use widefold::store::{self, Form, Opened, fingerprint};
use widefold::study::Study;
use widefold::study::cell::{Cell, CellId, Kind};
use widefold::study::edit::{Edit, Titled};
use widefold::study::history::History;
use widefold::study::ledger::Ledger;
use widefold::study::link::Link;
use widefold::study::settings::Settings;
use widefold::study::settings::data::{Data, Sealed, TableSource};
use widefold::study::settings::fit::{Fit, Penalty};
use widefold::study::settings::prepare::Prepare;
use widefold::study::settings::question::{Ask, Question, Seal};
use widefold::study::source::Shelf;

fn save(path: &Path, desk: &Desk) -> Record {
    let record = Record::from(&desk.study, &desk.standings);
    store::save(path, &desk.study, &desk.shelf, &desk.ledger, &record).unwrap();
    record
}

fn save_opened(path: &Path, opened: &Opened) {
    store::save(
        path,
        &opened.study,
        &opened.shelf,
        &opened.ledger,
        &opened.record,
    )
    .unwrap();
}

/// The tables of all cells, with their bytes.
fn tables(study: &Study, shelf: &Shelf) -> Vec<(String, Option<Vec<u8>>)> {
    let data = study.cells().iter().flat_map(|cell| match &cell.settings {
        Settings::Data(data) => data.tables.clone(),
        Settings::Score(score) => score.table.clone().into_iter().collect(),
        _ => Vec::new(),
    });
    let bytes = |table: &TableSource| shelf.get(&table.source).map(|bytes| bytes.to_vec());
    data.map(|table| (table.file.clone(), bytes(&table)))
        .collect()
}

/// All that is recorded, to the last digit: Rust writes a number so that it reads back the same.
fn recorded(study: &Study, record: &Record) -> Vec<String> {
    let entry = |cell: &Cell| format!("{:?} {:?}", cell.id, record.agreeing(study, cell.id));
    study.cells().iter().map(entry).collect()
}

#[test]
fn a_packed_study_opens_as_it_was_saved_even_where_its_tables_are_gone() {
    for seed in 0..60 {
        let folder = Folder::new();
        let desk = any_desk(seed, &folder);
        let path = folder.file("study.widefold");
        let record = save(&path, &desk);
        let bytes = get(&path);
        drop(folder);
        let opened = store::open_bytes(Path::new("/nowhere/study.widefold"), &bytes).unwrap();
        assert_eq!(opened.problems, [], "seed {seed}");
        assert_eq!(opened.study, desk.study, "seed {seed}");
        assert_eq!(opened.ledger, desk.ledger);
        assert_eq!(opened.form, Form::Packed);
        assert_eq!(
            tables(&opened.study, &opened.shelf),
            tables(&desk.study, &desk.shelf)
        );
        assert_eq!(
            recorded(&opened.study, &opened.record),
            recorded(&desk.study, &record)
        );
    }
}

#[test]
fn a_readable_study_opens_as_it_was_saved() {
    for seed in 100..160 {
        let folder = Folder::new();
        let desk = any_desk(seed, &folder);
        let name = ["study.json", "deeper/down/study.json"][seed as usize % 2];
        let path = folder.put(name, "");
        drop(save(&path, &desk));
        let opened = store::open(&path).unwrap();
        assert_eq!(opened.problems, [], "seed {seed}");
        assert_eq!(opened.study, desk.study, "seed {seed}");
        assert_eq!(opened.ledger, desk.ledger);
        assert_eq!(opened.form, Form::Bare);
        assert_eq!(
            tables(&opened.study, &opened.shelf),
            tables(&desk.study, &desk.shelf)
        );
    }
}

#[test]
fn opening_and_saving_gives_the_same_bytes() {
    for seed in 200..240 {
        let folder = Folder::new();
        let desk = any_desk(seed, &folder);
        for name in ["study.widefold", "study.json"] {
            let (first, second) = (folder.file(name), folder.file(&format!("again-{name}")));
            drop(save(&first, &desk));
            save_opened(&second, &store::open(&first).unwrap());
            assert_eq!(get(&first), get(&second), "seed {seed}, {name}");
        }
    }
}

#[test]
fn both_forms_hold_the_same_study() {
    let folder = Folder::new();
    let desk = any_desk(7, &folder);
    let packed = folder.file("study.widefold");
    drop(save(&packed, &desk));
    // Opened from the packed form nobody knows where the tables lay: they are written beside.
    let opened = store::open(&packed).unwrap();
    let elsewhere = folder.put("elsewhere/study.json", "");
    save_opened(&elsewhere, &opened);
    let again = store::open(&elsewhere).unwrap();
    assert_eq!(again.problems, []);
    assert_eq!(again.study, desk.study);
    assert_eq!(
        tables(&again.study, &again.shelf),
        tables(&desk.study, &desk.shelf)
    );
    assert!(folder.file("elsewhere/study-tables").is_dir());
}

#[test]
fn a_readable_study_that_is_saved_elsewhere_still_finds_its_tables() {
    let folder = Folder::new();
    let table = folder.put("tables/lab.csv", "a,b\n1,2\n");
    let mut shelf = Shelf::default();
    let source = store::take_in(&table, &mut shelf).unwrap();
    let study = study_of(source);
    let (here, there) = (
        folder.put("studies/s.json", ""),
        folder.put("x/y/s.json", ""),
    );
    let none = (Ledger::default(), Record::default());
    store::save(&here, &study, &shelf, &none.0, &none.1).unwrap();
    let text = String::from_utf8(get(&here)).unwrap();
    assert!(text.contains(r#""file": "../tables/lab.csv""#), "{text}");
    save_opened(&there, &store::open(&here).unwrap());
    let text = String::from_utf8(get(&there)).unwrap();
    assert!(text.contains(r#""file": "../../tables/lab.csv""#), "{text}");
    assert_eq!(store::open(&there).unwrap().problems, []);
}

#[test]
fn a_table_that_changed_after_import_is_written_beside_and_not_lost() {
    let folder = Folder::new();
    let table = folder.put("lab.csv", "a,b\n1,2\n");
    let mut shelf = Shelf::default();
    let study = study_of(store::take_in(&table, &mut shelf).unwrap());
    put(&table, "a,b\n9,9\n");
    // Another file already has the table's name beside the study.
    let taken = folder.put("s-tables/lab.csv", "somebody else's");
    let path = folder.file("s.json");
    let none = (Ledger::default(), Record::default());
    store::save(&path, &study, &shelf, &none.0, &none.1).unwrap();
    let opened = store::open(&path).unwrap();
    assert_eq!(opened.problems, []);
    assert_eq!(
        tables(&opened.study, &opened.shelf)[0].1.as_deref(),
        Some(&b"a,b\n1,2\n"[..])
    );
    assert_eq!(get(&table), b"a,b\n9,9\n");
    assert_eq!(get(&taken), b"somebody else's");
}

/// One data cell with one table.
fn study_of(table: TableSource) -> Study {
    let mut study = Study::new("Lab");
    let _ = insert(
        &mut study,
        "Lab values",
        Settings::Data(Data {
            tables: vec![table],
            ..Data::default()
        }),
    );
    study
}

fn insert(study: &mut Study, title: &str, settings: Settings) -> CellId {
    let id = study.next_id();
    let cell = Cell {
        id,
        title: title.to_owned(),
        settings,
    };
    let at = study.cells().len();
    let _ = study.apply(Edit::Insert { at, cell }).unwrap();
    id
}

/// Data, preparation, fit and question, each current with some facts.
fn line(folder: &Folder) -> (Desk, [CellId; 4]) {
    let mut shelf = Shelf::default();
    let table = folder.put("scans.csv", "name,x1,x2,y\na,1,2,3\nb,2,3,4\n");
    let table = store::take_in(&table, &mut shelf).unwrap();
    let mut study = study_of(table);
    let data = study.cells()[0].id;
    let prepare = insert(
        &mut study,
        "Prepared",
        Settings::Prepare(Prepare {
            input: Link::to(data),
            steps: Vec::new(),
        }),
    );
    let fit = insert(
        &mut study,
        "Salt lasso",
        Settings::Fit(Fit {
            input: Link::to(prepare),
            ..Fit::default()
        }),
    );
    let question = insert(
        &mut study,
        "How honest?",
        Settings::Question(Question {
            fit: Link::to(fit),
            ask: Ask::Agreement,
        }),
    );
    let ids = [data, prepare, fit, question];
    let mut standings = Standings::default();
    for (at, id) in ids.into_iter().enumerate() {
        standings.put(id, current(any_facts(&mut Dice(at as u64)), Vec::new()));
    }
    let desk = Desk {
        study,
        shelf,
        ledger: Ledger::default(),
        standings,
    };
    (desk, ids)
}

fn states(record: &Record, study: &Study) -> Vec<State> {
    let standings = record.standings(study);
    let cells = study.cells().iter();
    cells.map(|cell| standings.get(cell.id).state).collect()
}

#[test]
fn recorded_results_are_current_until_something_they_were_made_from_changes() {
    let folder = Folder::new();
    let (desk, [_, prepare, fit, question]) = line(&folder);
    let path = folder.file("s.widefold");
    drop(save(&path, &desk));
    let Opened {
        mut study, record, ..
    } = store::open(&path).unwrap();
    assert_eq!(states(&record, &study), [State::Current; 4]);
    assert_eq!(record.outcomes(&study).len(), 4);
    let outcome = record.outcome_if_agrees(&study, fit).unwrap();
    let facts = desk.standings.get(fit).outcome.unwrap().facts.clone();
    assert_eq!(format!("{:?}", outcome.facts), format!("{facts:?}"));

    let harmless = [
        Edit::Retitle {
            what: Titled::Cell(prepare),
            title: "Another name".to_owned(),
        },
        Edit::Retitle {
            what: Titled::Study,
            title: "Another study".to_owned(),
        },
        Edit::Move {
            id: question,
            to: 0,
        },
    ];
    let _ = study.apply_all(harmless.to_vec()).unwrap();
    assert_eq!(states(&record, &study), [State::Current; 4]);

    let fitted = |penalty| {
        Settings::Fit(Fit {
            input: Link::to(prepare),
            penalty,
            ..Fit::default()
        })
    };
    let back = study.apply(Edit::Configure {
        id: fit,
        settings: fitted(Penalty::Ridge),
    });
    assert!(record.outcome_if_agrees(&study, fit).is_none());
    assert!(record.outcome_if_agrees(&study, question).is_none());
    assert!(record.outcome_if_agrees(&study, prepare).is_some());
    assert_eq!(record.outcomes(&study).len(), 2);
    // The old result is still shown, as due.
    assert!(record.standings(&study).get(fit).outcome.is_some());
    let _ = study.apply(back.unwrap()).unwrap();
    assert_eq!(states(&record, &study), [State::Current; 4]);
}

#[test]
fn the_record_of_a_cell_that_is_due_stays_in_the_file() {
    let folder = Folder::new();
    let (mut desk, [_, prepare, fit, question]) = line(&folder);
    let record = Record::from(&desk.study, &desk.standings);
    let removed = desk.study.apply(Edit::Remove { id: prepare });
    assert!(removed.is_ok());
    let mut standings = record.standings(&desk.study);
    assert_eq!(standings.get(fit).state, State::Due);
    standings.put(fit, current(any_facts(&mut Dice(99)), Vec::new()));
    let updated = record.updated(&desk.study, &standings);
    assert!(updated.entry(prepare).is_none());
    assert!(updated.agreeing(&desk.study, fit).is_some());
    let kept = updated.entry(question).unwrap();
    assert_eq!(
        kept.fingerprint,
        record.entry(question).unwrap().fingerprint
    );
    assert!(updated.agreeing(&desk.study, question).is_none());
}

#[test]
fn the_program_that_computed_a_result_stays_named_until_it_is_computed_again() {
    let folder = Folder::new();
    let (desk, [_, _, fit, _]) = line(&folder);
    let path = folder.file("s.widefold");
    drop(save(&path, &desk));
    let opened = store::open(&path).unwrap();
    let (name, bytes) = opened.record.written().swap_remove(2);
    assert_eq!(name, format!("record/{}.json", fit.number()));
    let text = String::from_utf8(bytes).unwrap();
    let old = text.replacen(store::format::PROGRAM, "widefold 0.0.1", 1);
    let mut record = opened.record.clone();
    record.take_in(fit, old.as_bytes(), "s.widefold").unwrap();
    // An older program's result is no less current.
    let standings = record.standings(&opened.study);
    assert_eq!(standings.get(fit).state, State::Current);
    let updated = record.updated(&opened.study, &standings);
    assert_eq!(updated.entry(fit).unwrap().program, "widefold 0.0.1");
    let updated = record.updated(&opened.study, &desk.standings);
    assert_eq!(updated.entry(fit).unwrap().program, store::format::PROGRAM);
}

#[test]
fn a_fingerprint_is_that_of_the_configuration_and_not_of_names_and_places() {
    let folder = Folder::new();
    let (desk, [data, prepare, fit, question]) = line(&folder);
    let print = |id| fingerprint(&desk.study, id);
    let all = [data, prepare, fit, question].map(print);
    for (at, one) in all.iter().enumerate() {
        assert_eq!(one.len(), 64);
        assert!(all[..at].iter().all(|other| other != one));
    }
    // The same line with other numbers and titles.
    let mut other = Study::new("Other");
    let unused = insert(&mut other, "Unused", Settings::Fit(Fit::default()));
    let _ = other.apply(Edit::Remove { id: unused }).unwrap();
    let mut ids: Vec<CellId> = Vec::new();
    for cell in desk.study.cells() {
        let input = ids.last().copied().map_or(Link::open(), Link::to);
        let settings = match cell.settings.clone() {
            Settings::Prepare(prepare) => Settings::Prepare(Prepare { input, ..prepare }),
            Settings::Fit(fit) => Settings::Fit(Fit { input, ..fit }),
            Settings::Question(question) => Settings::Question(Question {
                fit: input,
                ..question
            }),
            other => other,
        };
        let title = format!("Other {}", cell.title);
        ids.push(insert(&mut other, &title, settings));
    }
    assert_ne!(ids[0], data);
    let others: Vec<_> = ids.iter().map(|id| fingerprint(&other, *id)).collect();
    assert_eq!(others, all);
}

#[test]
fn looks_and_openings_are_counted_once_for_each_configuration() {
    let folder = Folder::new();
    let (mut desk, [data, prepare, fit, question]) = line(&folder);
    let configure = |study: &mut Study, id, settings| {
        let _ = study.apply(Edit::Configure { id, settings }).unwrap();
    };
    let ask = |seal| {
        Settings::Question(Question {
            fit: Link::to(fit),
            ask: Ask::Ladder { seal },
        })
    };
    let note = |desk: &mut Desk, date: &str| {
        store::note_acts(&desk.study, &desk.standings, &mut desk.ledger, date);
        (desk.ledger.looks().len(), desk.ledger.openings().len())
    };
    configure(&mut desk.study, question, ask(Seal::Opened));
    assert_eq!(note(&mut desk, "2026-03-14"), (1, 0), "nothing is sealed");
    let sealed = Settings::Data(Data {
        sealed: Sealed::Listed(vec!["a".to_owned()]),
        ..Data::default()
    });
    configure(&mut desk.study, data, sealed);
    configure(&mut desk.study, question, ask(Seal::Closed));
    assert_eq!(note(&mut desk, "2026-03-15"), (2, 0), "other data");
    configure(&mut desk.study, question, ask(Seal::Opened));
    assert_eq!(note(&mut desk, "2026-03-16"), (2, 1));
    assert_eq!(note(&mut desk, "2026-03-17"), (2, 1));
    assert_eq!(desk.ledger.openings()[0].cell, "Lab values");
    assert_eq!(desk.ledger.openings()[0].date, "2026-03-16");
    let configuration = fingerprint(&desk.study, fit);
    assert_eq!(desk.ledger.openings()[0].configuration, configuration);
    assert_eq!(desk.ledger.looks()[1].configuration, configuration);
    // A fit that has not been evaluated has not been held against the outcome.
    let other = Settings::Fit(Fit {
        input: Link::to(prepare),
        penalty: Penalty::Ridge,
        ..Fit::default()
    });
    configure(&mut desk.study, fit, other);
    desk.standings.put(fit, Standing::due());
    assert_eq!(note(&mut desk, "2026-03-18").0, 2);
}

#[test]
fn a_circle_or_a_very_long_line_has_a_fingerprint_too() {
    let text = r#"{"cells": [
        {"id": 1, "kind": "prepare", "draws-on": 2},
        {"id": 2, "kind": "prepare", "draws-on": 1},
        {"id": 3, "kind": "fit", "draws-on": 2}]}"#;
    let opened = store::open_bytes(Path::new("circle.json"), text.as_bytes()).unwrap();
    assert_eq!(fingerprint(&opened.study, CellId::new(3)).len(), 64);
    let cells = (1..3000).map(|at| {
        format!(
            r#"{{"id": {at}, "kind": "prepare", "draws-on": {}}}"#,
            at - 1
        )
    });
    let text = format!(r#"{{"cells": [{}]}}"#, cells.collect::<Vec<_>>().join(","));
    let opened = store::open_bytes(Path::new("line.json"), text.as_bytes()).unwrap();
    assert_eq!(fingerprint(&opened.study, CellId::new(2999)).len(), 64);
}

const BY_HAND: &str = r##"{
  "title": "By hand",
  "cells": [
    { "kind": "prose", "title": "Abstract",
      "text": ["# What we found", "", "The error was {Salt lasso: nested rmse | 2 decimals}."] },
    { "kind": "data", "title": "Scans",
      "tables": [{ "file": "tables/scans.csv" }, { "file": "tables/lab.csv", "join": "wheel" }],
      "outcome": "salt", "predictors": ["900", { "first": "910", "last": "1700" }],
      "unit": "wheel" },
    { "kind": "prepare", "title": "Prepared", "draws-on": "scans",
      "steps": ["standard-normal-variate", { "step": "log", "offset": 1 }, "center"] },
    { "kind": "fit", "title": "Salt lasso", "draws-on": "Prepared",
      "choose": { "rule": "one-standard-error", "inner": { "parts": 5 } } },
    { "kind": "question", "draws-on": "Salt lasso", "ask": "chosen-again" }
  ]
}
"##;

#[test]
fn a_study_written_by_hand_needs_little() {
    let folder = Folder::new();
    let scans = folder.put("tables/scans.csv", "scan,wheel,900\na,1,2\n");
    let lab = folder.put("tables/lab.csv", "wheel,salt\n1,2\n");
    let path = folder.put("by-hand.json", BY_HAND);
    let opened = store::open(&path).unwrap();
    assert_eq!(opened.problems, []);
    let cells = opened.study.cells();
    let titles: Vec<_> = cells.iter().map(|cell| cell.title.as_str()).collect();
    assert_eq!(
        titles,
        ["Abstract", "Scans", "Prepared", "Salt lasso", "Question 5"]
    );
    assert_eq!(cells[2].settings.draws_on(), [cells[1].id]);
    assert_eq!(cells[3].settings.draws_on(), [cells[2].id]);
    assert_eq!(cells[0].settings.draws_on(), [cells[3].id]);
    let Settings::Data(data) = &cells[1].settings else {
        panic!("the second cell is a data cell");
    };
    let bytes: Vec<_> = data
        .tables
        .iter()
        .map(|t| opened.shelf.get(&t.source))
        .collect();
    assert_eq!(bytes[0].unwrap()[..], get(&scans)[..]);
    assert_eq!(bytes[1].unwrap()[..], get(&lab)[..]);
    // Saved once, it says everything; saved again, it stays as it is.
    save_opened(&path, &opened);
    let once = get(&path);
    let again = store::open(&path).unwrap();
    assert_eq!(again.study, opened.study);
    save_opened(&path, &again);
    assert_eq!(get(&path), once);
    let text = String::from_utf8(once).unwrap();
    assert!(text.contains("{#4: nested rmse | 2 decimals}"), "{text}");
    assert!(text.contains(r#""file": "tables/scans.csv""#), "{text}");
}

#[test]
fn what_a_field_means_when_it_is_absent_is_what_the_program_usually_chooses_today() {
    let text = r#"{"cells": [{"kind": "fit"}, {"kind": "question", "ask": "chosen-again"},
        {"kind": "question", "ask": "stand-ins"}, {"kind": "question", "ask": "ladder"},
        {"kind": "data"}]}"#;
    let opened = store::open_bytes(Path::new("usual.json"), text.as_bytes()).unwrap();
    let settings = |at: usize| opened.study.cells()[at].settings.clone();
    assert_eq!(settings(0), Settings::Fit(Fit::default()));
    for at in 1..4 {
        let Settings::Question(question) = settings(at) else {
            panic!("cell {at} is a question");
        };
        assert!(Ask::catalogue().contains(&question.ask));
    }
    assert_eq!(settings(4), Settings::Data(Data::default()));
}

#[test]
fn kinds_and_fields_that_are_not_known_are_kept_and_written_back() {
    let text = r#"{
      "cells": [
        { "id": 1, "kind": "fit", "title": "Fit", "mood": { "deep": [1.50, "x"] },
          "choose": { "inner": { "parts": 4, "shape": "round" } } },
        { "id": 2, "kind": "shuffle", "title": "Shuffle test", "draws-on": 1, "times": 1000 },
        { "id": 3, "kind": "prepare", "title": "Steps", "draws-on": 2,
          "steps": [{ "step": "center", "why": "because" }, "unit-variance"] }
      ],
      "colour": "blue",
      "ledger": { "looks": [{ "configuration": "a", "cell": "b", "date": "c", "who": "d" }] }
    }"#;
    let folder = Folder::new();
    let path = folder.put("new.json", text);
    let mut opened = store::open(&path).unwrap();
    let codes: Vec<_> = opened.problems.iter().map(|p| p.code.0).collect();
    assert_eq!(
        codes,
        [
            "unknown-field",
            "unknown-kind",
            "unknown-field",
            "unknown-field"
        ]
    );
    assert_eq!(opened.study.cells().len(), 3);
    let shown = &opened.study.cells()[1];
    assert_eq!(shown.settings.kind(), Kind::Prose);
    assert!(format!("{:?}", shown.settings).contains("of the kind “shuffle”"));

    // Titles may change, and a removed cell may come back: nothing of it is lost.
    let mut history = History::new();
    let edits = vec![
        Edit::Retitle {
            what: Titled::Cell(CellId::new(2)),
            title: "Chance".to_owned(),
        },
        Edit::Remove { id: CellId::new(3) },
    ];
    history.commit(&mut opened.study, "x", edits).unwrap();
    for _ in 0..2 {
        let _ = history.undo(&mut opened.study);
        let _ = history.redo(&mut opened.study);
    }
    let _ = history.undo(&mut opened.study);
    let edit = Edit::Retitle {
        what: Titled::Cell(CellId::new(2)),
        title: "Chance".to_owned(),
    };
    let _ = opened.study.apply(edit).unwrap();

    for name in ["again.json", "again.widefold"] {
        let again = folder.file(name);
        save_opened(&again, &opened);
        let reopened = store::open(&again).unwrap();
        assert_eq!(reopened.study, opened.study, "{name}");
        let codes_again: Vec<_> = reopened.problems.iter().map(|p| p.code.0).collect();
        assert_eq!(codes_again, codes);
    }
    let text = String::from_utf8(get(&folder.file("again.json"))).unwrap();
    for kept in [
        r#""deep": [1.5, "x"]"#,
        r#""shape": "round""#,
        r#""kind": "shuffle""#,
        r#""title": "Chance""#,
        r#""times": 1000"#,
        r#"{ "step": "center", "why": "because" }"#,
        r#""colour": "blue""#,
        r#""who": "d""#,
    ] {
        assert!(text.contains(kept), "{kept} in {text}");
    }
}

#[test]
fn what_lies_inside_is_described_inside() {
    let folder = Folder::new();
    let (desk, _) = line(&folder);
    let path = folder.file("s.widefold");
    drop(save(&path, &desk));
    let bytes = get(&path);
    let all = store::archive::unpack(&bytes, "s.widefold", &|_| true).unwrap();
    let names: Vec<_> = all.entries.keys().map(String::as_str).collect();
    let source = names
        .iter()
        .find(|name| name.starts_with("sources/"))
        .unwrap();
    assert_eq!(
        names,
        [
            "about.txt",
            "record/1.json",
            "record/2.json",
            "record/3.json",
            "record/4.json",
            source,
            "study.json"
        ]
    );
    assert_eq!(all.entries["about.txt"], store::archive::ABOUT.as_bytes());
    assert!(source.ends_with(".csv"));
    assert_eq!(all.entries[*source], get(&folder.file("scans.csv")));
}

#[test]
fn unsaved_work_is_found_offered_and_forgotten() {
    let folder = Folder::new();
    let rescue = Rescue::at(&folder.file("data/rescue"));
    assert_eq!(rescue.left_behind(), (Vec::new(), Vec::new()));
    let (desk, _) = line(&folder);
    let record = Record::from(&desk.study, &desk.standings);
    let original = PathBuf::from("/home/a/cellar.widefold");
    let session = Session {
        name: "first window",
        original: Some(&original),
        when: "2026-03-14 10:15",
    };
    for _ in 0..2 {
        rescue
            .keep(session, &desk.study, &desk.shelf, &desk.ledger, &record)
            .unwrap();
    }
    let (left, problems) = rescue.left_behind();
    assert_eq!(problems, []);
    assert_eq!(left.len(), 1);
    assert_eq!(left[0].original.as_deref(), Some(&*original));
    assert_eq!(left[0].title, "Lab");
    assert_eq!(left[0].when, "2026-03-14 10:15");
    let opened = rescue.open(&left[0]).unwrap();
    assert_eq!(opened.study, desk.study);
    assert_eq!(opened.problems, []);
    assert_eq!(states(&opened.record, &opened.study), [State::Current; 4]);

    // The study lay in its readable form: its tables are named by path again when it is saved.
    let readable = folder.file("lab.json");
    let save = |shelf: &Shelf| {
        let nothing = Record::default();
        store::save(&readable, &desk.study, shelf, &desk.ledger, &nothing).unwrap();
        get(&readable)
    };
    let before = save(&desk.shelf);
    let session = Session {
        original: Some(&readable),
        ..session
    };
    rescue
        .keep(session, &desk.study, &desk.shelf, &desk.ledger, &record)
        .unwrap();
    let opened = rescue.open(&rescue.left_behind().0[0]).unwrap();
    assert_eq!(save(&opened.shelf), before);

    put(&folder.file("data/rescue/broken.widefold"), "PK nonsense");
    let (left, problems) = rescue.left_behind();
    assert_eq!((left.len(), problems.len()), (1, 1));
    rescue.forget("first window").unwrap();
    rescue.forget("first window").unwrap();
    assert_eq!(rescue.left_behind().0, []);
    assert!(folder.file("data/rescue/broken.widefold").exists());
}

#[test]
fn preferences_outlive_damage() {
    let folder = Folder::new();
    let home = folder.file("config");
    assert_eq!(Preferences::load(&home), Preferences::default());
    let mut liked = Preferences::default();
    liked.theme = Theme::Dark;
    liked.text_scale = 125;
    for at in 0..20 {
        liked.note_recent(&PathBuf::from(format!("/studies/{at}.widefold")));
    }
    liked.note_recent(Path::new("/studies/15.widefold"));
    assert_eq!(liked.recent.len(), 12);
    assert_eq!(liked.recent[0], Path::new("/studies/15.widefold"));
    assert_eq!(liked.recent[1], Path::new("/studies/19.widefold"));
    liked.save(&home).unwrap();
    assert_eq!(Preferences::load(&home), liked);

    let file = home.join("preferences.json");
    put(
        &file,
        r#"{"theme": 7, "text-scale": 9999, "recent": ["/a", 3], "new": [1]}"#,
    );
    let damaged = Preferences::load(&home);
    assert_eq!(damaged.theme, Theme::System);
    assert_eq!(damaged.text_scale, 300);
    assert_eq!(damaged.recent, [PathBuf::from("/a")]);
    damaged.save(&home).unwrap();
    assert!(String::from_utf8(get(&file)).unwrap().contains("\"new\""));
    for broken in ["", "[]", "{\"theme\": ", "\u{0}\u{1}"] {
        put(&file, broken);
        assert_eq!(Preferences::load(&home), Preferences::default());
    }
}
