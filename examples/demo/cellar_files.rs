//! The cellars as an instrument and a laboratory deliver them, and the truth beside them.

use crate::cellar::{
    CAVES, Cellar, FAT_BANDS, MAKERS, N_POINTS, N_WHEELS, SALT_BANDS, WATER_BANDS, Wheel, cellar,
    curve, wavelength,
};
use crate::chance::Chance;
use crate::page::{Page, lines, packed, rounded, transposed, with_comma, with_point};
use rust_xlsxwriter::{DocProperties, ExcelDateTime, Format, Workbook, XlsxError};
use std::error::Error;

/// The seed of the setting and that of the null twin.
const SEED: u64 = 20_260_328;
const NULL_SEED: u64 = 20_260_329;
/// What the two seasons are called.
const SEASONS: [&str; 2] = ["season 7", "season 8"];
/// Share of chlorine in salt: the laboratory measures chloride.
const CHLORIDE: f64 = 0.6066;

/// All files of the setting.
///
/// # Errors
///
/// When the workbook writer or the compressor fails.
pub fn pages() -> Result<Vec<Page>, Box<dyn Error>> {
    let cellar = cellar(SEED);
    let scans = scan_rows(&cellar);
    let written: Vec<f64> = cellar
        .wheels
        .iter()
        .map(|wheel| wheel.written_salt)
        .collect();
    let shuffled = shuffled_within_seasons(&cellar.wheels);
    Ok(vec![
        Page {
            name: "cellar-scans.csv",
            bytes: lines(&scans, ';'),
        },
        Page {
            name: "cellar-scans-sideways.csv.gz",
            bytes: packed(&lines(&transposed(&scans), ';'))?,
        },
        Page {
            name: "cellar-lab.xlsx",
            bytes: laboratory(&cellar.wheels, &written, &NOTES)?,
        },
        Page {
            name: "cellar-lab-null.xlsx",
            bytes: laboratory(&cellar.wheels, &shuffled, &NULL_NOTES)?,
        },
        Page {
            name: "cellar-truth.csv",
            bytes: lines(&truth_rows(&cellar, &shuffled), ','),
        },
    ])
}

/// The name of a point as the instrument heads its column: `900 nm`, `901.1 nm`.
pub fn point_name(point: usize) -> String {
    let number = with_point(wavelength(point), 1);
    format!("{} nm", number.trim_end_matches(".0"))
}

fn scan_rows(cellar: &Cellar) -> Vec<Vec<String>> {
    let mut head: Vec<String> = ["scan", "wheel", "cave", "maker", "probe", "season", "order"]
        .map(str::to_owned)
        .to_vec();
    head.extend((0..N_POINTS).map(point_name));
    let mut rows = vec![head];
    for scan in &cellar.scans {
        let wheel = &cellar.wheels[scan.wheel];
        let mut row = vec![
            scan.name.clone(),
            wheel.name.clone(),
            CAVES[wheel.cave].0.to_owned(),
            MAKERS[wheel.maker].to_owned(),
            format!("probe {}", scan.probe + 1),
            SEASONS[wheel.season].to_owned(),
            scan.order.to_string(),
        ];
        row.extend(scan.spectrum.iter().map(|&value| with_comma(value, 5)));
        rows.push(row);
    }
    rows
}

/// The outcome of the null twin: the same values, given to other wheels of the same season.
fn shuffled_within_seasons(wheels: &[Wheel]) -> Vec<f64> {
    let mut chance = Chance::new(NULL_SEED);
    let mut values: Vec<f64> = wheels.iter().map(|wheel| wheel.written_salt).collect();
    let (this_season, next_season) = values.split_at_mut(N_WHEELS);
    chance.shuffle(this_season);
    chance.shuffle(next_season);
    values
}

const NOTES: [&str; 6] = [
    "Cellar light: wet chemistry of the wheels (invented data).",
    "Salt by titration of chloride on a core of each wheel; moisture by drying at 102 °C.",
    "salt_calc is worked out from the titration. It is not a separate measurement.",
    "Repeat analyses of one core differ with a standard deviation of about 0.12 g/100 g.",
    "Wheels W121 to W160 are of the following season.",
    "The tray of 14 March was relabelled by hand after a spill.",
];
const NULL_NOTES: [&str; 2] = [
    "Null twin of cellar-lab.xlsx (invented data).",
    "Salt and salt_calc were dealt out at random among the wheels of each season.",
];

/// The laboratory's workbook. Wheels stand in the order in which they were analysed.
fn laboratory(wheels: &[Wheel], salt: &[f64], notes: &[&str]) -> Result<Vec<u8>, XlsxError> {
    let mut order: Vec<usize> = (0..wheels.len()).collect();
    let (this_season, next_season) = order.split_at_mut(N_WHEELS);
    let mut chance = Chance::new(SEED);
    chance.shuffle(this_season);
    chance.shuffle(next_season);

    let mut book = Workbook::new();
    let created = ExcelDateTime::from_ymd(2026, 3, 1)?;
    let _ = book.set_properties(&DocProperties::new().set_creation_datetime(&created));
    let date = Format::new().set_num_format("yyyy-mm-dd");
    let sheet = book.add_worksheet().set_name("Wet chemistry")?;
    let heads = [
        "wheel",
        "salt in moisture",
        "moisture",
        "salt_calc",
        "date of analysis",
    ];
    let units = ["", "g/100 g", "g/100 g", "g/100 g", ""];
    for (column, (head, unit)) in (0..).zip(heads.into_iter().zip(units)) {
        let _ = sheet.write(0, column, head)?;
        if !unit.is_empty() {
            let _ = sheet.write(1, column, unit)?;
        }
    }
    for (row, (place, &wheel)) in (2..).zip(order.iter().enumerate()) {
        let found = rounded(salt[wheel], 2);
        let _ = sheet.write(row, 0, written_name(&wheels[wheel].name))?;
        let _ = sheet.write(row, 1, found)?;
        let _ = sheet.write(row, 2, rounded(wheels[wheel].moisture, 1))?;
        let _ = sheet.write(row, 3, rounded(CHLORIDE * found, 2))?;
        let _ = sheet.write_with_format(row, 4, &analysed(place)?, &date)?;
    }
    let _ = sheet.set_column_width(1, 16)?.set_column_width(4, 16)?;
    let sheet = book.add_worksheet().set_name("Notes")?;
    for (row, note) in (0..).zip(notes) {
        let _ = sheet.write(row, 0, *note)?;
    }
    book.save_to_buffer()
}

/// A wheel's name as it was typed into the laboratory's table: one with a blank behind, one small.
fn written_name(name: &str) -> String {
    match name {
        "W045" => "W045 ".to_owned(),
        "W083" => "w083".to_owned(),
        other => other.to_owned(),
    }
}

/// Ten wheels were analysed a day, the next season's a year later.
fn analysed(place: usize) -> Result<ExcelDateTime, XlsxError> {
    let (year, day) = if place < N_WHEELS {
        (2026, 3 + place / 10)
    } else {
        (2027, 8 + (place - N_WHEELS) / 10)
    };
    let day = u8::try_from(day).expect("ten wheels a day take less than a month");
    ExcelDateTime::from_ymd(year, 3, day)
}

/// The truth sheet: one quantity per row.
fn truth_rows(cellar: &Cellar, shuffled: &[f64]) -> Vec<Vec<String>> {
    let mut rows = vec![
        ["kind", "name", "quantity", "value"]
            .map(str::to_owned)
            .to_vec(),
    ];
    let mut add = |kind: &str, name: &str, quantity: &str, value: String| {
        rows.push(vec![
            kind.to_owned(),
            name.to_owned(),
            quantity.to_owned(),
            value,
        ]);
    };
    for bands in [&SALT_BANDS[..], &FAT_BANDS[..], &WATER_BANDS[..]] {
        for band in bands {
            let name = format!("{} {}", band.what, band.center);
            add("band", &name, "center nm", with_point(band.center, 0));
            add("band", &name, "width nm", with_point(band.width, 0));
            add(
                "band",
                &name,
                "absorbance per unit",
                with_point(band.height, 3),
            );
        }
    }
    let curves = [("salt", curve(&SALT_BANDS)), ("fat", curve(&FAT_BANDS))];
    for (what, curve) in &curves {
        for (point, &value) in curve.iter().enumerate() {
            let quantity = format!("absorbance per unit of {what}");
            add("point", &point_name(point), &quantity, with_point(value, 6));
        }
    }
    for (at, wheel) in cellar.wheels.iter().enumerate() {
        add(
            "wheel",
            &wheel.name,
            "true salt g/100 g",
            with_point(wheel.true_salt, 4),
        );
        add(
            "wheel",
            &wheel.name,
            "found salt g/100 g",
            with_point(wheel.found_salt, 4),
        );
        add(
            "wheel",
            &wheel.name,
            "salt in null twin g/100 g",
            with_point(shuffled[at], 4),
        );
        add(
            "wheel",
            &wheel.name,
            "fat in standard deviations",
            with_point(wheel.fat, 4),
        );
        add(
            "wheel",
            &wheel.name,
            "water in standard deviations",
            with_point(wheel.water, 4),
        );
    }
    let (one, other) = (
        &cellar.wheels[cellar.swapped.0],
        &cellar.wheels[cellar.swapped.1],
    );
    add("wheel", &one.name, "label swapped with", other.name.clone());
    add("wheel", &other.name, "label swapped with", one.name.clone());
    for scan in &cellar.scans {
        add("scan", &scan.name, "gain", with_point(scan.gain, 4));
        add(
            "scan",
            &scan.name,
            "offset absorbance",
            with_point(scan.offset, 4),
        );
        add(
            "scan",
            &scan.name,
            "slope absorbance per 400 nm",
            with_point(scan.slope, 4),
        );
        add(
            "scan",
            &scan.name,
            "warmth in standard deviations",
            with_point(scan.temperature, 4),
        );
        for &(point, height) in &scan.spikes {
            let quantity = format!("spike at {}", point_name(point));
            add("scan", &scan.name, &quantity, with_point(height, 4));
        }
    }
    rows
}
