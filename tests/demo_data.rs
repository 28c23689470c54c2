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
#[path = "../examples/demo/glasshouse.rs"]
mod glasshouse;
#[path = "../examples/demo/glasshouse_files.rs"]
mod glasshouse_files;
#[path = "../examples/demo/page.rs"]
mod page;

use calamine::{DataType, Reader, Xlsx};
use page::{Page, same_content, unpacked};
use std::collections::BTreeSet;
use std::io::Cursor;
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

/// The sheet "Wet chemistry" of a workbook: wheel, salt in moisture, salt_calc.
fn laboratory(name: &str) -> Vec<(String, f64, f64)> {
    let mut book = Xlsx::new(Cursor::new(file(name))).unwrap();
    let sheet = book.worksheet_range("Wet chemistry").unwrap();
    assert_eq!(
        sheet.get((0, 1)).unwrap().get_string(),
        Some("salt in moisture")
    );
    assert_eq!(sheet.get((1, 1)).unwrap().get_string(), Some("g/100 g"));
    sheet
        .rows()
        .skip(2)
        .map(|row| {
            let number = |at: usize| row[at].get_float().unwrap();
            (
                row[0].get_string().unwrap().to_owned(),
                number(1),
                number(3),
            )
        })
        .collect()
}

#[test]
fn laboratory_sheets_name_160_wheels_two_of_them_badly_and_hold_the_outcome_in_disguise() {
    for name in ["cellar-lab.xlsx", "cellar-lab-null.xlsx"] {
        let rows = laboratory(name);
        let wheels: BTreeSet<String> = rows.iter().map(|row| row.0.trim().to_uppercase()).collect();
        assert_eq!((rows.len(), wheels.len()), (160, 160));
        let bad: BTreeSet<&str> = rows
            .iter()
            .map(|row| row.0.as_str())
            .filter(|name| *name != name.trim().to_uppercase())
            .collect();
        assert_eq!(bad, BTreeSet::from(["W045 ", "w083"]));
        let (salt, disguise): (Vec<f64>, Vec<f64>) = rows.iter().map(|row| (row.1, row.2)).unzip();
        assert!(correlation(&salt, &disguise) > 0.9999);
        assert_ne!(salt, disguise);
    }
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

#[test]
fn the_glasshouse_files_are_what_their_generator_makes() {
    assert_same_as_files(&glasshouse_files::pages().unwrap());
}

/// The nights of the glasshouse, without the head.
fn nights() -> Rows {
    cells(&file("glasshouse-nights.csv"), ',').split_off(1)
}

#[test]
fn a_quarter_of_190_nights_in_84_bays_is_followed_by_leaf_spot() {
    let log = cells(&file("glasshouse-log.csv"), ',');
    let events = log.iter().filter(|row| row[1] == "yes").count();
    let bays: BTreeSet<&str> = log[1..].iter().map(|row| &row[0][..3]).collect();
    assert_eq!((log.len() - 1, events, bays.len()), (190, 46, 84));
    let same = log[1..].iter().filter(|row| row[1] == row[2]).count();
    assert!(
        (175..190).contains(&same),
        "spraying agrees with leaf-spot in {same} nights"
    );
    let mut twin = cells(&file("glasshouse-log-null.csv"), ',');
    assert_ne!(twin, log);
    assert_eq!(twin.iter().filter(|row| row[1] == "yes").count(), 46);
    twin.iter_mut()
        .zip(&log)
        .for_each(|(row, other)| row[1..].clone_from_slice(&other[1..]));
    assert_eq!(twin, log, "the twin has the same nights");
}

#[test]
fn six_sensors_read_a_fifth_to_two_thirds_of_their_values_below_the_limit() {
    let rows = nights();
    for &(sensor, share) in &glasshouse::LIMITED {
        let columns = 7 + sensor * glasshouse::N_WINDOWS..7 + (sensor + 1) * glasshouse::N_WINDOWS;
        let present: Vec<&String> = rows
            .iter()
            .flat_map(|row| &row[columns.clone()])
            .filter(|value| !value.is_empty())
            .collect();
        let below = present
            .iter()
            .filter(|value| value.as_str() == "<0.05")
            .count();
        let found = below as f64 / present.len() as f64;
        assert!(
            (found - share).abs() < 0.03,
            "sensor {sensor}: {found} below the limit"
        );
    }
}

#[test]
fn one_reading_in_twenty_five_is_missing_and_more_in_wet_weeks() {
    let missing = |weeks: &[&str]| -> f64 {
        let rows: Rows = nights()
            .into_iter()
            .filter(|row| weeks.contains(&&*row[2]))
            .collect();
        let empty = rows
            .iter()
            .flat_map(|row| &row[7..])
            .filter(|value| value.is_empty())
            .count();
        empty as f64 / (1440 * rows.len()) as f64
    };
    let dry = ["week 1", "week 3", "week 5", "week 6"];
    let wet = ["week 2", "week 4"];
    let all = [dry.as_slice(), wet.as_slice()].concat();
    assert!(
        (missing(&all) - 0.04).abs() < 0.005,
        "{} missing",
        missing(&all)
    );
    assert!(missing(&wet) > 2.0 * missing(&dry));
}

#[test]
fn week_and_outcome_go_together_as_designed_and_hopelessly_in_the_broken_design() {
    let house = glasshouse::glasshouse(glasshouse_files::SEED);
    let designed = glasshouse::association(&house.nights, |night| night.week);
    let broken = glasshouse::association(&house.nights, |night| night.broken_week);
    assert!((designed - 0.35).abs() < 0.03, "{designed}");
    assert!((broken - 0.90).abs() < 0.03, "{broken}");
}

#[test]
fn features_of_a_gas_could_stand_in_for_each_other() {
    let house = glasshouse::glasshouse(glasshouse_files::SEED);
    for gas in 0..glasshouse::GASES.len() {
        let family: Vec<Vec<f64>> = (0..house.features.len())
            .filter(|&at| {
                house.features[at]
                    .follows
                    .is_some_and(|follows| follows.0 == gas)
            })
            .map(|at| house.still.iter().map(|row| row[at]).collect())
            .collect();
        assert!((25..=60).contains(&family.len()));
        for (at, one) in family.iter().enumerate() {
            for other in &family[at + 1..] {
                let r = correlation(one, other);
                assert!((0.82..0.999).contains(&r), "gas {gas}: {r}");
            }
        }
    }
}

/// The correlation of two columns.
fn correlation(one: &[f64], other: &[f64]) -> f64 {
    let n = one.len() as f64;
    let (mean, mean_of_other) = (one.iter().sum::<f64>() / n, other.iter().sum::<f64>() / n);
    let (mut xx, mut yy, mut xy) = (0.0, 0.0, 0.0);
    for (x, y) in one.iter().zip(other) {
        let (x, y) = (x - mean, y - mean_of_other);
        xx += x * x;
        yy += y * y;
        xy += x * y;
    }
    xy / (xx * yy).sqrt()
}

#[test]
fn three_nights_were_recorded_twice_and_differ_in_the_last_place_at_most() {
    let truth = cells(&file("glasshouse-truth.csv"), ',');
    let rows = nights();
    let pairs: Vec<(&String, &String)> = truth
        .iter()
        .filter(|row| row[2] == "second recording of")
        .map(|row| (&row[1], &row[3]))
        .collect();
    assert_eq!(pairs.len(), 3);
    for (second, first) in pairs {
        let row_of = |name: &String| rows.iter().find(|row| &row[0] == name).unwrap();
        let (second, first) = (row_of(second), row_of(first));
        assert_ne!(second[7..], first[7..]);
        for (one, other) in second[7..].iter().zip(&first[7..]) {
            let number = |text: &str| text.trim_start_matches('<').parse::<f64>().ok();
            match (number(one), number(other)) {
                (Some(one), Some(other)) => assert!((one - other).abs() <= 1.0),
                (one, other) => assert_eq!(one, other, "missing in one recording only"),
            }
        }
    }
}
