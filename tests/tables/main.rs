//! Tables made by independent writers are read as written, or what differs is listed.
//!
//! `data/` is made by `make.py`, which also writes what has to come out. See `data/README.md`.

mod hostile;

use serde_json::Value as Json;
use std::collections::BTreeMap;
use std::path::Path;
use widefold::base::layout::Grouping;
use widefold::base::thread::Threads;
use widefold::base::work::Work;
use widefold::table::Table;
use widefold::table::column::Value;
use widefold::table::read::{Options, Outcome, Reading, read};

#[expect(
    clippy::disallowed_methods,
    reason = "tests read the files beside them"
)]
fn bytes_of(file: &str) -> Vec<u8> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("tests/tables/data")
        .join(file);
    std::fs::read(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

fn read_bytes(bytes: &[u8], file: &str, options: &Options, threads: usize) -> Outcome {
    let work = Work::unattended();
    read(bytes, file, options, Threads::new(threads), &work).expect("nobody calls off")
}

fn read_file(file: &str, options: &Options) -> Reading {
    read_bytes(&bytes_of(file), file, options, 2)
        .unwrap_or_else(|error| panic!("{file}: {error:?}"))
}

fn expected() -> BTreeMap<String, Json> {
    serde_json::from_slice(&bytes_of("expected.json")).unwrap()
}

fn options(json: &Json) -> Options {
    let mut options = Options::default();
    if let Some(codes) = json["missing_codes"].as_array() {
        options.missing_codes = codes
            .iter()
            .map(|code| code.as_str().unwrap().to_owned())
            .collect();
    }
    if json["grouping"] == "read" {
        options.grouping = Some(Grouping::Read);
    }
    options.sheet = json["sheet"].as_str().map(str::to_owned);
    options
}

fn as_expected(value: Value<'_>, expected: &Json) -> bool {
    match value {
        Value::Number(number) => expected.as_f64() == Some(number),
        Value::Text(text) => match expected.as_str() {
            Some(expected) => expected == text,
            // Labels that are written as numbers.
            None => expected.as_f64().is_some() && expected.as_f64() == text.parse().ok(),
        },
        Value::Missing => expected.is_null() || expected == "",
        Value::BelowLimit(limit) => expected["below"].as_f64() == Some(limit),
        Value::AboveLimit(limit) => expected["above"].as_f64() == Some(limit),
    }
}

/// What is not as expected in a table, if anything.
fn difference(table: &Table, expected: &Json) -> Option<String> {
    let columns = expected["columns"].as_array().unwrap();
    let names: Vec<&str> = table
        .columns()
        .iter()
        .map(|column| column.name.as_str())
        .collect();
    let expected_names: Vec<&str> = columns
        .iter()
        .map(|c| c["name"].as_str().unwrap())
        .collect();
    if names != expected_names {
        return Some(format!("the columns are {names:?}"));
    }
    for (column, expected) in table.columns().iter().zip(columns) {
        let values = expected["values"].as_array().unwrap();
        if column.len() != values.len() {
            return Some(format!("{} has {} values", column.name, column.len()));
        }
        for (row, expected) in values.iter().enumerate() {
            let value = column.value(row);
            if !as_expected(value, expected) {
                return Some(format!(
                    "{}, {row}: {value:?} is not {expected}",
                    column.name
                ));
            }
        }
    }
    for (name, unit) in expected["units"].as_object().unwrap() {
        if table.column(name).unwrap().unit.as_deref() != unit.as_str() {
            return Some(format!("{name} has not the unit {unit}"));
        }
    }
    let rows = expected["rows"].as_array()?;
    let places: Vec<_> = (0..table.n_rows())
        .map(|row| table.place(row, 0).row)
        .collect();
    let rows: Vec<_> = rows
        .iter()
        .map(|row| row.as_u64().map(|row| row as usize))
        .collect();
    (places != rows).then(|| format!("the rows are {places:?}"))
}

fn counts(reading: &Reading) -> BTreeMap<String, u64> {
    let mut counts = BTreeMap::new();
    for finding in &reading.findings {
        *counts.entry(finding.kind.code().to_owned()).or_default() += finding.count as u64;
    }
    counts
}

#[test]
fn every_file_is_read_as_written_and_what_differs_is_listed() {
    let mut differing = Vec::new();
    for (case, expected) in expected() {
        let file = expected["file"].as_str().unwrap_or(&case);
        let reading = read_file(file, &options(&expected["options"]));
        differing
            .extend(difference(&reading.table, &expected).map(|what| format!("{case}: {what}")));
        let expected: BTreeMap<String, u64> = expected["findings"]
            .as_object()
            .unwrap()
            .iter()
            .map(|(code, count)| (code.clone(), count.as_u64().unwrap()))
            .collect();
        let mut found = counts(&reading);
        // The count of a sideways table is how many rows it has, not how often it is sideways.
        let _ = found
            .entry("sideways".to_owned())
            .and_modify(|count| *count = 1);
        if found != expected {
            differing.push(format!("{case}: {found:?} is not {expected:?}"));
        }
    }
    assert!(differing.is_empty(), "{}", differing.join("\n"));
}

#[test]
fn reading_again_with_what_was_used_gives_the_same_table() {
    let mut differing = Vec::new();
    for (case, expected) in expected() {
        let file = expected["file"].as_str().unwrap_or(&case);
        let first = read_file(file, &options(&expected["options"]));
        let again = read_file(file, &first.used);
        differing.extend(difference(&again.table, &expected).map(|what| format!("{case}: {what}")));
        if again.used != first.used {
            differing.push(format!("{case}: {:?} is not {:?}", again.used, first.used));
        }
    }
    assert!(differing.is_empty(), "{}", differing.join("\n"));
}

#[test]
fn the_number_of_threads_changes_nothing() {
    for file in [
        "wide.csv",
        "late-labels.csv.gz",
        "damaged.csv",
        "sideways.csv",
    ] {
        let bytes = bytes_of(file);
        let one = read_bytes(&bytes, file, &Options::default(), 1).unwrap();
        let three = read_bytes(&bytes, file, &Options::default(), 3).unwrap();
        let text = |reading: &Reading| format!("{:?}", reading.table.columns());
        assert!(text(&one) == text(&three), "{file}");
        assert_eq!(one.findings, three.findings, "{file}");
    }
}

#[test]
fn every_damage_is_found_where_it_was_done() {
    let expected = expected();
    for (file, head) in [("damaged.csv", 3), ("damaged.xlsx", 3)] {
        let reading = read_file(file, &Options::default());
        let damage = expected[file]["damage"].as_object().unwrap();
        assert!(
            damage.len() >= 12,
            "{file} has {} kinds of damage",
            damage.len()
        );
        for (code, places) in damage {
            let finding = reading
                .findings
                .iter()
                .find(|finding| finding.kind.code() == code)
                .unwrap_or_else(|| panic!("{file}: {code} was not found"));
            for place in places.as_array().unwrap() {
                let Some(column) = place[1].as_u64() else {
                    continue;
                };
                let name = &reading.table.columns()[column as usize].name;
                let found = finding.places.iter().any(|found| match place[0].as_u64() {
                    Some(row) => {
                        *found == reading.table.place(row as usize, column as usize)
                            && found.column.as_deref() == Some(name)
                    }
                    None => found.row == Some(head),
                });
                assert!(found, "{file}: {code} at {place}: {:?}", finding.places);
            }
        }
    }
}
