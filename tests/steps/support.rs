//! Reading reference values; comparing numbers.

use serde_json::Value;
use std::borrow::Cow;
use widefold::base::work::Work;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::parts::Split;
use widefold::numeric::samples::Samples;
use widefold::numeric::step::Step;

pub fn reference(text: &str) -> Value {
    serde_json::from_str(text).unwrap()
}

/// A list of numbers; null is not a number.
pub fn numbers(value: &Value) -> Vec<f64> {
    let list = value.as_array().unwrap();
    list.iter()
        .map(|x| x.as_f64().unwrap_or(f64::NAN))
        .collect()
}

pub fn table(value: &Value) -> Matrix {
    let rows: Vec<Vec<f64>> = value.as_array().unwrap().iter().map(numbers).collect();
    Matrix::from_fn(rows.len(), rows[0].len(), |i, j| rows[i][j])
}

/// The 215 spectra of `meats.csv` (100 absorbances).
pub fn meats() -> Matrix {
    let rows: Vec<Vec<f64>> = include_str!("meats.csv")
        .lines()
        .skip(1)
        .map(|line| line.split(',').map(|x| x.parse().unwrap()).collect())
        .collect();
    Matrix::from_fn(rows.len(), 100, |i, j| rows[i][j])
}

/// The fat content in `meats.csv`.
pub fn meats_fat() -> Vec<f64> {
    let mut lines = include_str!("meats.csv").lines();
    let column = lines
        .next()
        .unwrap()
        .split(',')
        .position(|name| name == "fat");
    lines
        .map(|line| {
            line.split(',')
                .nth(column.unwrap())
                .unwrap()
                .parse()
                .unwrap()
        })
        .collect()
}

/// Applies a step that was learnt from the given training rows (or needs no samples).
pub fn applied(step: impl Into<Step>, training: &[usize], samples: &Samples) -> Samples {
    let work = Work::unattended();
    let split = Split::everything(training);
    let part = split.training_part(samples);
    let learned = step.into().learn(&part, &work).unwrap();
    learned
        .apply(Cow::Borrowed(samples), &work)
        .unwrap()
        .into_owned()
}

/// A row of the values.
pub fn row(samples: &Samples, row: usize) -> Vec<f64> {
    samples.x.row(row).iter().copied().collect()
}

/// Compares two numbers, relative to the larger of the expected one and 1.
#[track_caller]
pub fn close(actual: f64, expected: f64, tolerance: f64) {
    let distance = (actual - expected).abs() / expected.abs().max(1.0);
    assert!(
        distance <= tolerance || (actual.is_nan() && expected.is_nan()),
        "{actual} instead of {expected}, off by {distance:e}"
    );
}

#[track_caller]
pub fn all_close(actual: &[f64], expected: &[f64], tolerance: f64) {
    assert_eq!(actual.len(), expected.len());
    for (&actual, &expected) in actual.iter().zip(expected) {
        close(actual, expected, tolerance);
    }
}
