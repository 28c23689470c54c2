//! The commands, on tables that nobody here made.

use crate::run::{QUICK, meats, repository, widefold};
use crate::support::{Folder, get};
use serde_json::Value;
use std::path::Path;

/// Start, update, facts and export of a table; returns the facts.
fn whole_job(folder: &Folder, table: &str, more: &[&str]) -> Value {
    let mut arguments = vec!["start", table, "-o", "study.widefold"];
    arguments.extend(more);
    arguments.extend(QUICK);
    let started = widefold(folder.path(), &arguments);
    assert_eq!(started.status, 0, "{}", started.error);
    let updated = widefold(folder.path(), &["update", "study.widefold"]);
    assert_eq!(updated.status, 0, "{}", updated.error);
    assert_eq!(
        (updated.out.as_str(), updated.error.as_str()),
        ("", ""),
        "quiet when nobody watches"
    );
    let facts = widefold(folder.path(), &["facts", "study.widefold", "--json"]);
    assert_eq!(facts.status, 0, "{}", facts.error);
    let exported = widefold(
        folder.path(),
        &[
            "export",
            "study.widefold",
            "--workbook",
            "out.xlsx",
            "--write-up",
            "out.md",
        ],
    );
    assert_eq!(exported.status, 0, "{}", exported.error);
    assert!(get(&folder.file("out.xlsx")).starts_with(b"PK"));
    figures_lie_beside(&folder.file("out.md"));
    serde_json::from_str(&facts.out).unwrap()
}

/// Every figure that the write-up shows is a picture in the folder beside it.
fn figures_lie_beside(write_up: &Path) {
    let text = String::from_utf8(get(write_up)).unwrap();
    let figures: Vec<&str> = text
        .lines()
        .filter(|line| line.starts_with("!["))
        .map(|line| line.rsplit_once('(').unwrap().1.trim_end_matches(')'))
        .collect();
    assert!(figures.len() >= 5, "{figures:?}");
    for figure in figures {
        let bytes = get(&write_up.parent().unwrap().join(figure));
        assert!(bytes.starts_with(b"\x89PNG"), "{figure}");
    }
}

fn keys(value: &Value) -> Vec<&str> {
    let keys = value.as_object().unwrap().keys();
    keys.map(String::as_str).collect()
}

/// The shape of the facts that scripts rely on.
fn has_the_stable_shape(facts: &Value) {
    assert_eq!(keys(facts), ["study", "cells"]);
    let cells = facts["cells"].as_array().unwrap();
    for cell in cells {
        assert_eq!(keys(cell), ["name", "kind", "state", "facts", "caveats"]);
        assert_eq!(cell["state"], "current", "{}", cell["name"]);
        for fact in cell["facts"].as_array().unwrap() {
            assert_eq!(keys(fact), ["name", "value", "unit", "text"]);
            assert!(fact["unit"].is_string() && fact["text"].is_string());
            if let Some(records) = fact["value"].as_array() {
                let first = records.first().map(keys);
                assert!(records.iter().all(|record| Some(keys(record)) == first));
            }
        }
        for caveat in cell["caveats"].as_array().unwrap() {
            assert_eq!(keys(caveat), ["id", "severity", "text"]);
        }
    }
}

fn fact<'a>(facts: &'a Value, kind: &str, name: &str) -> &'a Value {
    let cells = facts["cells"].as_array().unwrap();
    let cell = cells.iter().find(|cell| cell["kind"] == kind).unwrap();
    let all = cell["facts"].as_array().unwrap();
    let found = all.iter().find(|fact| fact["name"] == name);
    &found.unwrap_or_else(|| panic!("no {name}"))["value"]
}

const FAT: [&str; 6] = [
    "--outcome",
    "fat",
    "--ignore",
    "water",
    "--ignore",
    "protein",
];

#[test]
fn open_spectra_go_from_table_to_hand_over_without_editing() {
    let folder = Folder::new();
    let table = folder.put("meats.csv", meats(215));
    let facts = whole_job(&folder, table.to_str().unwrap(), &FAT);
    has_the_stable_shape(&facts);
    assert_eq!(*fact(&facts, "fit", "samples"), 215);
    assert_eq!(*fact(&facts, "fit", "predictors"), 100);
    // Linear models of this table leave about 2 to 3 % fat unexplained (sd 12.7), so R² is high.
    assert!(fact(&facts, "fit", "nested r²").as_f64().unwrap() > 0.9);
    assert_eq!(*fact(&facts, "fit", "proof violations"), 0);
    let table = fact(&facts, "fit", "held-out predictions");
    assert_eq!(table.as_array().unwrap().len(), 215);
    assert_eq!(facts["study"]["looks"], 1);
}

#[test]
fn fewer_spectra_than_wavelengths_go_the_same_way() {
    let folder = Folder::new();
    let table = folder.put("meats.csv", meats(60));
    let facts = whole_job(&folder, table.to_str().unwrap(), &FAT);
    has_the_stable_shape(&facts);
    assert_eq!(*fact(&facts, "fit", "samples"), 60);
    let honest = fact(&facts, "fit", "nested r²").as_f64().unwrap();
    let flattering = fact(&facts, "fit", "apparent r²").as_f64().unwrap();
    assert!(0.7 < honest && honest < flattering, "{honest} {flattering}");
}

#[test]
fn a_thousand_fingerprints_of_few_compounds_go_the_same_way() {
    let folder = Folder::new();
    let table = repository("tests/reference/data/permeability.csv");
    let table = folder.put("permeability.csv", get(&table));
    let facts = whole_job(
        &folder,
        table.to_str().unwrap(),
        &["--outcome", "permeability"],
    );
    has_the_stable_shape(&facts);
    assert_eq!(*fact(&facts, "fit", "samples"), 165);
    assert_eq!(*fact(&facts, "fit", "predictors"), 1107);
    let honest = fact(&facts, "fit", "nested r²").as_f64().unwrap();
    let flattering = fact(&facts, "fit", "apparent r²").as_f64().unwrap();
    assert!(0.2 < honest && honest < flattering, "{honest} {flattering}");
}

#[test]
fn a_wrong_command_line_ends_with_two_and_what_cannot_be_done_with_one() {
    let folder = Folder::new();
    let here = folder.path();
    for wrong in [
        &["start", "table.csv", "-o", "study.widefold"][..],
        &["update"],
        &["no-such-command", "x"],
        &["facts", "a.widefold", "--unknown"],
    ] {
        let answer = widefold(here, wrong);
        assert_eq!(answer.status, 2, "{wrong:?}: {}", answer.error);
        assert!(!answer.error.is_empty() && answer.out.is_empty());
    }
    for (cannot, names) in [
        (&["update", "absent.widefold"][..], "absent.widefold"),
        (&["facts", "absent.widefold", "--json"], "absent.widefold"),
        (&["export", "absent.widefold"], "--workbook"),
        (
            &[
                "start",
                "absent.csv",
                "--outcome",
                "y",
                "-o",
                "study.widefold",
            ],
            "absent.csv",
        ),
    ] {
        let answer = widefold(here, cannot);
        assert_eq!(answer.status, 1, "{cannot:?}: {}", answer.error);
        assert!(answer.error.contains(names), "{}", answer.error);
        assert!(answer.error.contains('→'), "{}", answer.error);
    }
}

#[test]
fn commands_of_later_issues_say_that_they_are_not_built_yet() {
    let folder = Folder::new();
    for command in [
        &[
            "score",
            "s.widefold",
            "--fit",
            "f",
            "new.csv",
            "-o",
            "out.csv",
        ][..],
        &["verify", "s.widefold"],
        &["compare", "a.widefold", "b.widefold"],
    ] {
        let answer = widefold(folder.path(), command);
        assert_eq!(answer.status, 1);
        assert!(
            answer.error.contains("is not built yet"),
            "{}",
            answer.error
        );
    }
}
