//! Tables as they are delivered: what is found can be treated by a flag, names survive to the
//! hand-overs, a changed file is shown before it is taken, and the design stands before any fit.

use crate::run::{QUICK, widefold};
use crate::support::{Dice, Folder, get};
use calamine::{Reader, Xlsx};
use serde_json::Value;
use std::collections::BTreeSet;
use std::fmt::Write as _;
use std::io::Cursor;

const LOTS: [&str; 8] = [
    "MAR-2", "SEP-9", "1E-05", "007", "2E3", "DEC-1", "0012", "3-4",
];

/// Samples and predictors with names that careless readers change, and traps beside them.
fn lots() -> String {
    let mut dice = Dice(11);
    let mut text = String::from("lot,week,order,y");
    for name in LOTS {
        let _ = write!(text, ",{name}");
    }
    for at in 0..30 {
        let _ = write!(text, ",x{at}");
    }
    for row in 0..40 {
        let mut normal = || (0..12).map(|_| dice.share()).sum::<f64>() - 6.0;
        let x: Vec<f64> = (0..38).map(|_| normal()).collect();
        let y = 2.0 * (x[0] + x[1] + x[2] + x[3]) + normal() * 0.2 + (row / 20) as f64 * 3.0;
        let _ = write!(
            text,
            "\n{}-{},week {},{},{y:.4}",
            LOTS[row / 5],
            row % 5,
            row / 20 + 1,
            row + 1
        );
        for (at, value) in x.iter().enumerate() {
            // A code for missing values, which nobody has named.
            if at == 20 && row % 7 == 3 {
                text.push_str(",-999");
            } else {
                let _ = write!(text, ",{value:.4}");
            }
        }
    }
    text
}

fn facts(folder: &Folder, study: &str) -> Value {
    let told = widefold(folder.path(), &["facts", study, "--json"]);
    assert_eq!(told.status, 0, "{}", told.error);
    serde_json::from_str(&told.out).unwrap()
}

fn fact<'a>(facts: &'a Value, kind: &str, name: &str) -> &'a Value {
    let cells = facts["cells"].as_array().unwrap();
    let cell = cells.iter().find(|cell| cell["kind"] == kind).unwrap();
    let all = cell["facts"].as_array().unwrap();
    let found = all.iter().find(|fact| fact["name"] == name);
    &found.unwrap_or_else(|| panic!("no {name}"))["value"]
}

fn start(folder: &Folder, more: &[&str]) -> crate::run::Answer {
    let mut arguments = vec!["start", "lots.csv", "--outcome", "y", "-o", "study.json"];
    arguments.extend(more);
    arguments.extend(QUICK);
    let started = widefold(folder.path(), &arguments);
    assert_eq!(started.status, 0, "{}", started.error);
    started
}

#[test]
fn names_that_look_like_dates_and_numbers_survive_to_both_hand_overs() {
    let folder = Folder::new();
    let _ = folder.put("lots.csv", lots().into_bytes());
    let _ = start(&folder, &["--unit-from-names", "--unit", "lot name"]);
    let exported = widefold(
        folder.path(),
        &[
            "export",
            "study.json",
            "--workbook",
            "out.xlsx",
            "--write-up",
            "out.md",
        ],
    );
    assert_eq!(exported.status, 0, "{}", exported.error);
    let mut book = Xlsx::new(Cursor::new(get(&folder.file("out.xlsx")))).unwrap();
    let mut texts: BTreeSet<String> = BTreeSet::new();
    for sheet in book.sheet_names() {
        let range = book.worksheet_range(&sheet).unwrap();
        texts.extend(range.used_cells().filter_map(|(_, _, cell)| match cell {
            calamine::Data::String(text) => Some(text.clone()),
            calamine::Data::Int(_)
            | calamine::Data::Float(_)
            | calamine::Data::Bool(_)
            | calamine::Data::DateTime(_)
            | calamine::Data::DateTimeIso(_)
            | calamine::Data::DurationIso(_)
            | calamine::Data::Error(_)
            | calamine::Data::Empty => None,
        }));
    }
    let text = String::from_utf8(get(&folder.file("out.md"))).unwrap();
    for lot in LOTS {
        assert!(texts.contains(lot), "the workbook lacks the unit {lot}");
        assert!(texts.contains(&format!("{lot}-3")), "and its sample");
    }
    // The first predictors carry the outcome, so that their names stand in the lists.
    for lot in &LOTS[..4] {
        assert!(
            text.contains(&format!("| {lot} |")),
            "the write-up lacks {lot}"
        );
    }
    let unit = fact(&facts(&folder, "study.json"), "data", "units").clone();
    assert_eq!(unit, 8);
}

#[test]
fn what_the_report_offers_is_taken_by_a_flag_and_recorded_as_a_setting() {
    let folder = Folder::new();
    let _ = folder.put("lots.csv", lots().into_bytes());
    let started = start(&folder, &["--samples", "lot"]);
    for word in [
        "--unit-from-names",
        "--batch \"week\"",
        "order of measurement",
    ] {
        assert!(
            started.error.contains(word),
            "no {word} in {}",
            started.error
        );
    }
    let before = facts(&folder, "study.json");
    let offers = fact(&before, "data", "import offers").as_array().unwrap();
    let code = offers
        .iter()
        .find(|offer| offer["finding"] == "suspected-code")
        .expect("-999 is suspected");
    let line = code["setting"].as_str().unwrap();
    let findings = fact(&before, "data", "import findings").as_array().unwrap();
    let finding = findings
        .iter()
        .find(|finding| finding["setting"] == line)
        .expect("the report names the setting");
    assert!(finding["count"].as_f64().unwrap() >= 5.0);
    let places = fact(&before, "data", "import places").as_array().unwrap();
    let of_code = |place: &&Value| place["finding"] == "suspected-code";
    assert_eq!(
        places.iter().filter(of_code).count(),
        6,
        "all places stand there"
    );
    // Nothing was repaired silently.
    assert_eq!(*fact(&before, "data", "missing values"), 0);
    let _ = start(&folder, &["--samples", "lot", "--set", line]);
    let after = facts(&folder, "study.json");
    assert_eq!(*fact(&after, "data", "missing values"), 6);
    let text = String::from_utf8(get(&folder.file("study.json"))).unwrap();
    assert!(text.contains("\"missing-codes\""), "{text}");
    let updated = widefold(
        folder.path(),
        &[
            "update",
            "study.json",
            "--set",
            "columns left out += x12; x13",
        ],
    );
    assert_eq!(updated.status, 0, "{}", updated.error);
    let after = facts(&folder, "study.json");
    assert_eq!(*fact(&after, "data", "predictors ignored"), 2);
    let wrong = widefold(
        folder.path(),
        &["update", "study.json", "--set", "colour = red"],
    );
    assert_eq!(wrong.status, 1);
    assert!(wrong.error.contains("columns left out"), "{}", wrong.error);
}

#[test]
fn a_changed_file_is_shown_to_the_column_before_it_is_taken() {
    let folder = Folder::new();
    let table = lots();
    let _ = folder.put("lots.csv", table.clone().into_bytes());
    let _ = start(&folder, &[]);
    let packed = ["update", "study.json", "-o", "study.widefold"];
    assert_eq!(widefold(folder.path(), &packed).status, 0);
    let before = get(&folder.file("study.widefold"));
    // One value of one column, and a sample less.
    let mut lines: Vec<String> = table.lines().map(str::to_owned).collect();
    let mut fields: Vec<&str> = lines[3].split(',').collect();
    fields[6] = "12.5";
    let changed = fields.join(",");
    lines[3] = changed;
    let _ = lines.pop();
    let _ = folder.put("lots.csv", lines.join("\n").into_bytes());
    let asked = widefold(
        folder.path(),
        &["update", "study.widefold", "--reread", "lots.csv"],
    );
    assert_eq!(asked.status, 1, "{}", asked.out);
    for words in [
        "In “1E-05” 1 value differs: MAR-2-2 from ",
        " to 12.5",
        "1 sample is gone: “3-4-4”",
    ] {
        assert!(asked.out.contains(words), "no “{words}” in {}", asked.out);
    }
    assert!(asked.error.contains("--accept"), "{}", asked.error);
    assert_eq!(
        get(&folder.file("study.widefold")),
        before,
        "nothing was taken"
    );
    // The readable form keeps no bytes, and does not take a changed table unasked either.
    let bare = widefold(folder.path(), &["update", "study.json"]);
    assert_eq!(bare.status, 1, "{}", bare.error);
    assert!(bare.error.contains("--accept"), "{}", bare.error);
    let taken = widefold(
        folder.path(),
        &[
            "update",
            "study.widefold",
            "--reread",
            "lots.csv",
            "--accept",
        ],
    );
    assert_eq!(taken.status, 0, "{}", taken.error);
    assert_eq!(
        *fact(&facts(&folder, "study.widefold"), "data", "samples read"),
        39
    );
}

#[test]
fn the_design_stands_in_tables_before_any_fit() {
    let folder = Folder::new();
    let _ = folder.put("lots.csv", lots().into_bytes());
    let _ = start(
        &folder,
        &[
            "--batch",
            "week",
            "--unit-from-names",
            "--set",
            "order of measurement = order",
            "--set",
            "exclusions += MAR-2-0; 007-1 because the vial broke",
            "--set",
            "rule for the sealed set = listed",
            "--set",
            "names of the sealed set = 3-4",
            "--predictors",
            "x*",
        ],
    );
    let facts = facts(&folder, "study.json");
    let flow = fact(&facts, "data", "flow of samples").as_array().unwrap();
    let told: Vec<(String, f64, f64)> = flow
        .iter()
        .map(|stage| {
            (
                stage["step"].as_str().unwrap().to_owned(),
                stage["samples"].as_f64().unwrap(),
                stage["left"].as_f64().unwrap(),
            )
        })
        .collect();
    let stage = |step: &str, samples: f64, left: f64| (step.to_owned(), samples, left);
    assert_eq!(
        told,
        [
            stage("read from lots.csv", 40.0, 40.0),
            stage("excluded: the vial broke", 2.0, 38.0),
            stage("sealed", 5.0, 33.0),
            stage("used", 33.0, 33.0),
        ]
    );
    assert_eq!(*fact(&facts, "data", "predictors"), 30);
    let batches = fact(&facts, "data", "outcome by batch").as_array().unwrap();
    assert_eq!(batches.len(), 2);
    let samples: f64 = batches.iter().map(|b| b["samples"].as_f64().unwrap()).sum();
    assert_eq!(samples, 33.0, "the sealed set is not looked at");
    assert!(fact(&facts, "data", "batch association").as_f64().unwrap() > 0.0);
    let order = fact(&facts, "data", "outcome by order").as_array().unwrap();
    assert_eq!(order.len(), 10);
    let sizes = fact(&facts, "data", "units by size").as_array().unwrap();
    let units: f64 = sizes
        .iter()
        .map(|size| size["units"].as_f64().unwrap())
        .sum();
    assert_eq!(units, fact(&facts, "data", "units").as_f64().unwrap());
}
