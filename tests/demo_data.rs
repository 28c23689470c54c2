//! The demo data are what their generators make, and hold the traps that their page describes.
#![allow(
    dead_code,
    reason = "the generators are read in as modules; a test does not use all that their programs use"
)]

#[path = "../examples/demo/cellar.rs"]
mod cellar;
#[path = "../examples/demo/cellar_files.rs"]
mod cellar_files;
#[path = "../examples/demo/chance.rs"]
mod chance;
#[path = "../examples/demo/page.rs"]
mod page;

use page::{Page, same_content, unpacked};
use std::collections::BTreeSet;
use std::path::Path;

/// The bytes of a file of the demo data.
#[expect(clippy::disallowed_methods, reason = "this test is about files")]
fn file(name: &str) -> Vec<u8> {
    std::fs::read(
        Path::new(env!("CARGO_MANIFEST_DIR"))
            .join("demo-data")
            .join(name),
    )
    .unwrap()
}

/// Rows of cells.
type Rows = Vec<Vec<String>>;

/// A text file as rows of cells.
fn cells(bytes: &[u8], delimiter: char) -> Rows {
    let text = std::str::from_utf8(bytes).unwrap();
    text.lines()
        .map(|line| line.split(delimiter).map(str::to_owned).collect())
        .collect()
}

fn assert_same_as_files(pages: &[Page]) {
    for page in pages {
        assert!(
            same_content(page, &file(page.name)).unwrap(),
            "{} differs",
            page.name
        );
    }
}

#[test]
fn the_exponential_agrees_with_that_of_the_platform() {
    for x in [-600.0, -40.5, -1.0, -1e-9, 0.0, 0.3, 1.0, 12.0, 300.0] {
        let off = (chance::exp(x) / f64::exp(x) - 1.0).abs();
        assert!(off < 1e-12, "exp({x}) is off by {off}");
    }
    assert!(chance::exp(-5000.0).abs() < f64::MIN_POSITIVE);
}

#[test]
fn normal_draws_have_mean_nought_and_variance_one() {
    let draws = chance::Chance::new(5).normals(40_000);
    let mean = draws.iter().sum::<f64>() / 40_000.0;
    let variance = draws.iter().map(|z| z * z).sum::<f64>() / 40_000.0 - mean * mean;
    assert!(mean.abs() < 0.02, "mean {mean}");
    assert!((variance - 1.0).abs() < 0.03, "variance {variance}");
}

#[test]
fn the_cellar_files_are_what_their_generator_makes() {
    assert_same_as_files(&cellar_files::pages().unwrap());
}

#[test]
fn cellar_scans_have_700_distinct_points_and_decimal_commas() {
    let rows = cells(&file("cellar-scans.csv"), ';');
    assert_eq!(rows.len(), 481);
    let names: BTreeSet<&String> = rows[0].iter().collect();
    assert_eq!((rows[0].len(), names.len()), (707, 707));
    assert_eq!(
        (rows[0][7].as_str(), rows[0][706].as_str()),
        ("900 nm", "1700 nm")
    );
    for row in &rows[1..] {
        assert_eq!(row.len(), 707);
        assert!(
            row[7..]
                .iter()
                .all(|value| value.contains(',') && !value.contains('.'))
        );
    }
    let sealed = rows.iter().filter(|row| row[5] == "season 8").count();
    assert_eq!(sealed, 120);
}

#[test]
fn the_sideways_copy_turned_upright_is_the_scans() {
    let sideways = cells(
        &unpacked(&file("cellar-scans-sideways.csv.gz")).unwrap(),
        ';',
    );
    assert_eq!(
        page::transposed(&sideways),
        cells(&file("cellar-scans.csv"), ';')
    );
}

#[test]
fn laboratory_values_lie_in_range_and_off_the_truth_by_the_stated_error() {
    let truth = cells(&file("cellar-truth.csv"), ',');
    let values = |quantity: &str| -> Vec<f64> {
        truth
            .iter()
            .filter(|row| row[2] == quantity)
            .map(|row| row[3].parse().unwrap())
            .collect()
    };
    let (actual, found) = (values("true salt g/100 g"), values("found salt g/100 g"));
    assert_eq!((actual.len(), found.len()), (160, 160));
    assert!(found.iter().all(|salt| (1.8..=4.2).contains(salt)));
    let squares: f64 = actual
        .iter()
        .zip(&found)
        .map(|(a, f)| (a - f) * (a - f))
        .sum();
    let sd = (squares / 160.0).sqrt();
    assert!(
        (sd - cellar::LABORATORY_SD).abs() < 0.02,
        "laboratory error {sd}"
    );
    // The twin deals out what the laboratory wrote: same values, other wheels.
    let mut twin = values("salt in null twin g/100 g");
    let mut once = found.clone();
    assert_ne!(twin, once);
    twin.sort_by(f64::total_cmp);
    once.sort_by(f64::total_cmp);
    assert_eq!(twin, once);
}

#[test]
fn the_truth_sheet_names_ten_spikes_in_five_scans_and_one_pair_of_swapped_labels() {
    let truth = cells(&file("cellar-truth.csv"), ',');
    let spikes: Vec<&Vec<String>> = truth
        .iter()
        .filter(|row| row[2].starts_with("spike"))
        .collect();
    let scans: BTreeSet<&String> = spikes.iter().map(|row| &row[1]).collect();
    assert_eq!((spikes.len(), scans.len()), (10, 5));
    let swapped: Vec<(&str, &str)> = truth
        .iter()
        .filter(|row| row[2] == "label swapped with")
        .map(|row| (row[1].as_str(), row[3].as_str()))
        .collect();
    assert_eq!(swapped, [("W007", "W110"), ("W110", "W007")]);
}
