//! Tests of reading through its one door; more, on files of other writers, in tests/tables.

use crate::base::layout::{Delimiter, Encoding, Orientation};
use crate::base::thread::Threads;
use crate::base::work::{CancelSource, Cancelled, Work};
use crate::table::column::Value;
use crate::table::read::{Options, ReadError, Reading, read};
use std::sync::atomic::{AtomicUsize, Ordering};

fn outcome(text: &str, options: &Options) -> Result<Reading, ReadError> {
    let work = Work::unattended();
    read(text.as_bytes(), "x.csv", options, Threads::new(2), &work).unwrap()
}

fn reading(text: &str) -> Reading {
    outcome(text, &Options::default()).unwrap()
}

fn codes(reading: &Reading) -> Vec<&'static str> {
    reading.findings.iter().map(|f| f.kind.code()).collect()
}

fn labels(reading: &Reading, column: &str) -> Vec<String> {
    let column = reading.table.column(column).unwrap();
    column
        .labels()
        .into_iter()
        .map(Option::unwrap_or_default)
        .collect()
}

#[test]
fn a_first_line_that_names_the_delimiter_is_followed() {
    let reading = reading("sep=;\nid;a, b;c\nx;1,5;2\ny;2,5;3\n");
    assert_eq!(reading.used.delimiter, Some(Delimiter::Semicolon));
    assert_eq!(labels(&reading, "a, b"), ["1.5", "2.5"]);
    assert_eq!(reading.table.place(0, 1).row, Some(3));
}

#[test]
fn an_unclosed_quote_does_not_swallow_the_rest() {
    let reading = reading("id,a\nx,1\n\"y,2\nz,3\n");
    assert_eq!(labels(&reading, "id"), ["x", "\"y", "z"]);
    assert_eq!(labels(&reading, "a"), ["1", "2", "3"]);
    assert_eq!(codes(&reading), ["unclosed-quote"]);
    assert_eq!(reading.findings[0].places[0].row, Some(3));
}

#[test]
fn broken_letters_are_kept_and_said() {
    let reading = reading("id,place\nx,KÃ¤se\ny,north\nz,south\n");
    assert_eq!(labels(&reading, "place"), ["KÃ¤se", "north", "south"]);
    assert_eq!(codes(&reading), ["broken-letters"]);
}

#[test]
fn sideways_tables_keep_units_and_places() {
    let text = "peak,unit,L001,L002,L003\nclass,,yes,no,yes\nmz 204.12,ppm,1.5,<0.05,2.5\nmz 310.2,ppb,2,3,4\n";
    let reading = reading(text);
    assert_eq!(
        reading.used.orientation,
        Some(Orientation::SamplesInColumns)
    );
    assert_eq!(labels(&reading, "sample"), ["L001", "L002", "L003"]);
    let peak = reading.table.column("mz 204.12").unwrap();
    assert_eq!(peak.unit.as_deref(), Some("ppm"));
    assert_eq!(peak.value(1), Value::BelowLimit(0.05));
    let place = reading
        .table
        .place(1, reading.table.position("mz 204.12").unwrap());
    assert_eq!(
        (place.row, place.column.as_deref()),
        (Some(3), Some("L002"))
    );
}

#[test]
fn a_table_can_be_turned_by_hand() {
    let options = Options {
        orientation: Some(Orientation::SamplesInColumns),
        ..Options::default()
    };
    let reading = outcome("id,a,b\nx,1,2\ny,3,4\n", &options).unwrap();
    assert_eq!(labels(&reading, "id"), ["a", "b"]);
    assert_eq!(labels(&reading, "y"), ["3", "4"]);
}

#[test]
fn columns_are_text_or_numbers_as_asked() {
    let text = "lot,dose,grade\n1,10,007\n2,20,A\n3,30,B\n";
    let options = Options {
        as_text: vec!["dose".to_owned()],
        as_numbers: vec!["lot".to_owned(), "grade".to_owned()],
        ..Options::default()
    };
    let reading = outcome(text, &options).unwrap();
    assert_eq!(
        reading.table.column("dose").unwrap().value(0),
        Value::Text("10")
    );
    assert_eq!(
        reading.table.column("lot").unwrap().value(0),
        Value::Number(1.0)
    );
    assert_eq!(
        reading.table.column("grade").unwrap().value(0),
        Value::Number(7.0)
    );
    assert_eq!(
        reading.table.column("grade").unwrap().value(1),
        Value::Missing
    );
}

#[test]
fn a_header_can_be_named_or_denied() {
    let text = "made in March\nid,a\nx,1\ny,2\n";
    let with = |header_row| {
        let options = Options {
            header_row: Some(header_row),
            ..Options::default()
        };
        outcome(text, &options).unwrap()
    };
    assert_eq!(labels(&with(2), "id"), ["x", "y"]);
    assert_eq!(labels(&with(3), "x"), ["y"]);
    assert_eq!(with(0).table.columns()[0].name, "column 1");
}

#[test]
fn a_stated_encoding_is_followed_and_what_it_cannot_read_is_said() {
    let bytes = b"id,place\nx,K\xe4se\ny,north\nz,south\n";
    let options = Options {
        encoding: Some(Encoding::Utf8),
        ..Options::default()
    };
    let work = Work::unattended();
    let reading = read(bytes, "x", &options, Threads::new(1), &work)
        .unwrap()
        .unwrap();
    assert_eq!(codes(&reading), ["broken-letters"]);
    assert_eq!(labels(&reading, "place")[0], "K\u{fffd}se");
}

#[test]
fn dates_of_a_whole_column_stay_text() {
    let reading = reading("id,day,a\nx,2026-03-02,1\ny,2026-03-03,2\n");
    assert_eq!(labels(&reading, "day"), ["2026-03-02", "2026-03-03"]);
    assert_eq!(codes(&reading), ["date-labels"]);
}

#[test]
fn reading_reports_its_steps_and_stops_when_called_off() {
    let mut text = String::from("id,a,b\n");
    for row in 0..60_000 {
        text.push_str(&format!("S{row},{}.25,{row}\n", row % 97));
    }
    let steps = AtomicUsize::new(0);
    let source = CancelSource::new();
    let count = |_: f32| {
        let _ = steps.fetch_add(1, Ordering::Relaxed);
    };
    let work = Work::new(source.token(), &count);
    let whole = read(
        text.as_bytes(),
        "x",
        &Options::default(),
        Threads::new(2),
        &work,
    );
    assert_eq!(whole.unwrap().unwrap().table.n_rows(), 60_000);
    let all = steps.load(Ordering::Relaxed);
    assert!(all > 10, "{all} steps");
    // Called off at any of its steps, it stops.
    for stop_at in [1, all / 2, all - 1] {
        let steps = AtomicUsize::new(0);
        let source = CancelSource::new();
        let stop = |_: f32| {
            if steps.fetch_add(1, Ordering::Relaxed) + 1 >= stop_at {
                source.cancel();
            }
        };
        let work = Work::new(source.token(), &stop);
        let stopped = read(
            text.as_bytes(),
            "x",
            &Options::default(),
            Threads::new(2),
            &work,
        );
        assert!(
            matches!(stopped, Err(Cancelled)),
            "at step {stop_at} of {all}"
        );
    }
}

#[test]
fn progress_never_runs_backwards() {
    let text = format!("id,a\n{}", "x,1.5\n".repeat(50_000));
    let last = std::sync::Mutex::new(0.0_f32);
    let report = |share: f32| {
        let mut last = last.lock().unwrap();
        assert!(
            share >= *last - 1e-6 && share <= 1.0,
            "{share} after {last}"
        );
        *last = share;
    };
    let source = CancelSource::new();
    let work = Work::new(source.token(), &report);
    let _ = read(
        text.as_bytes(),
        "x",
        &Options::default(),
        Threads::new(1),
        &work,
    )
    .unwrap()
    .unwrap();
}
