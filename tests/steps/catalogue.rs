//! Steps on rows and along the axis, against `catalogue.json`.

use crate::support::{all_close, applied, close, meats, numbers, reference, row, table};
use serde_json::Value;
use std::borrow::Cow;
use widefold::base::work::Work;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::samples::{Origin, Samples};
use widefold::numeric::step::*;

pub fn values() -> Value {
    reference(include_str!("catalogue.json"))
}

fn axis() -> Vec<f64> {
    (0..100).map(|j| 850.0 + 2.0 * f64::from(j)).collect()
}

pub fn spectra() -> Samples {
    Samples::new(meats()).with_axis(axis())
}

/// Rows 0 to 11 at every tenth position.
pub fn few() -> Samples {
    let all = meats();
    Samples::new(Matrix::from_fn(12, 10, |i, j| all[(i, 10 * j)]))
        .with_axis((0..10).map(|j| 850.0 + 20.0 * f64::from(j)).collect())
}

pub fn first(n: usize) -> Vec<usize> {
    (0..n).collect()
}

#[track_caller]
pub fn check_rows(samples: &Samples, expected: &Value, tolerance: f64) {
    all_close(samples.x.as_slice(), table(expected).as_slice(), tolerance);
}

#[test]
fn baselines_agree() {
    let values = values();
    let block = &values["asymmetric_baseline"];
    let rule = BaselineRule::Asymmetric {
        smoothness: block["smoothness"].as_f64().unwrap(),
        asymmetry: block["asymmetry"].as_f64().unwrap(),
    };
    let flat = applied(
        Baseline::new(rule).unwrap(),
        &[0],
        &spectra().select(&[0, 60]),
    );
    // A condition number of about 1e8 separates two solvers of the same equations.
    check_rows(&flat, &block["rows"], 1e-8);
    let samples = Samples::new(Matrix::from_row_slice(1, 4, &[3.0, 5.0, 9.0, 6.0]));
    let offset = applied(Baseline::new(BaselineRule::Offset).unwrap(), &[0], &samples);
    assert_eq!(row(&offset, 0), [0.0, 2.0, 6.0, 3.0]);
    let line = applied(Baseline::new(BaselineRule::Line).unwrap(), &[0], &samples);
    assert_eq!(row(&line, 0), [0.0, 1.0, 4.0, 0.0]);
}

#[test]
fn a_well_conditioned_baseline_agrees_to_ten_digits() {
    let values = values();
    let block = &values["asymmetric_baseline_100"];
    let rule = BaselineRule::Asymmetric {
        smoothness: block["smoothness"].as_f64().unwrap(),
        asymmetry: block["asymmetry"].as_f64().unwrap(),
    };
    let samples = spectra().select(&[0, 60]);
    let flat = applied(Baseline::new(rule).unwrap(), &[0], &samples);
    check_rows(&flat, &block["rows"], 1e-10);
}

#[test]
fn spikes_are_found_and_mended_as_documented() {
    let values = values();
    let block = &values["spikes"];
    let half = block["half"].as_u64().unwrap() as usize;
    let step = SpikeRemoval::new(half, block["threshold"].as_f64().unwrap()).unwrap();
    let samples = Samples::new(table(&block["values"]));
    let mended = applied(step, &[0], &samples);
    assert_ne!(mended, samples);
    check_rows(&mended, &block["rows"], 1e-12);
}

#[test]
fn a_curve_that_is_straight_is_its_own_baseline() {
    let rule = BaselineRule::Asymmetric {
        smoothness: 1e6,
        asymmetry: 0.01,
    };
    let samples = Samples::new(Matrix::from_fn(1, 50, |_, j| 2.0 - 0.1 * j as f64));
    let flat = applied(Baseline::new(rule).unwrap(), &[0], &samples);
    assert!(flat.x.iter().all(|x| x.abs() < 1e-7));
}

#[test]
fn values_on_a_common_axis_agree_and_the_axis_goes_along() {
    let values = values();
    let block = &values["common_axis"];
    let positions = numbers(&block["positions"]);
    for (rule, name) in [
        (Interpolation::Linear, "linear_row_3"),
        (Interpolation::CubicSpline, "spline_row_3"),
    ] {
        let step = CommonAxis::new(positions.clone(), rule).unwrap();
        let read = applied(step, &[0], &spectra());
        all_close(&row(&read, 3), &numbers(&block[name]), 1e-10);
        assert_eq!(read.axis.as_ref(), Some(&positions));
        assert_eq!(read.origin(5), Origin::Position(positions[5]));
    }
    // Where the positions are the axis itself, also turned round, nothing changes.
    let turned: Vec<f64> = axis().into_iter().rev().collect();
    let step = CommonAxis::new(turned, Interpolation::CubicSpline).unwrap();
    let read = applied(step, &[0], &spectra());
    assert_eq!(read.column(99), spectra().column(0));
    let beyond = Step::from(CommonAxis::new(vec![1049.0], Interpolation::Linear).unwrap());
    let stop = beyond
        .given()
        .unwrap()
        .apply(Cow::Owned(spectra()), &Work::unattended());
    let error = StepError::OutsideAxis {
        position: 1049.0,
        least: 850.0,
        most: 1048.0,
    };
    assert_eq!(stop.unwrap_err(), StepStop::Failed(error));
    assert!(CommonAxis::new(vec![1.0, 1.0], Interpolation::Linear).is_err());
}

#[test]
fn a_gap_between_two_positions_stays_a_gap() {
    let mut samples = Samples::new(Matrix::from_row_slice(
        1,
        5,
        &[1.0, 4.0, f64::NAN, 16.0, 25.0],
    ))
    .with_axis(vec![1.0, 2.0, 3.0, 4.0, 5.0]);
    for rule in [Interpolation::Linear, Interpolation::CubicSpline] {
        let step = CommonAxis::new(vec![1.5, 2.5, 3.5, 4.5], rule).unwrap();
        let is_gap: Vec<bool> = row(&applied(step, &[0], &samples), 0)
            .iter()
            .map(|x| x.is_nan())
            .collect();
        assert_eq!(is_gap, [false, true, true, false]);
    }
    // A predictor that is off is not a gap: its neighbours reach across.
    samples.active[2] = false;
    let step = CommonAxis::new(vec![3.0], Interpolation::Linear).unwrap();
    assert_eq!(row(&applied(step, &[0], &samples), 0), [10.0]);
}

#[test]
fn regions_are_cut_or_kept_on_the_axis() {
    let samples = few();
    let active = |treatment| {
        let step = CutRegions::new(vec![(890.0, 851.0)], treatment).unwrap();
        applied(step, &[0], &samples).active_columns()
    };
    assert_eq!(active(Regions::Keep), [1, 2]);
    assert_eq!(active(Regions::Cut), [0, 3, 4, 5, 6, 7, 8, 9]);
}

#[test]
fn a_spike_is_replaced_and_a_peak_is_not() {
    let mut x = Matrix::from_fn(1, 60, |_, j| (-((j as f64 - 30.0) / 6.0).powi(2)).exp());
    let clean = x.clone();
    x[(0, 12)] += 1.5;
    let step = SpikeRemoval::new(3, 8.0).unwrap();
    let mended = applied(step.clone(), &[0], &Samples::new(x));
    assert!((mended.x[(0, 12)] - clean[(0, 12)]).abs() < 0.02);
    let untouched = applied(step, &[0], &Samples::new(clean.clone()));
    assert_eq!(*untouched.x, clean);
}

#[test]
fn extended_scatter_correction_agrees() {
    let values = values();
    let block = &values["extended_scatter"];
    let interferent = numbers(&block["interferent"]);
    let step = ExtendedScatterCorrection::new(Reference::TrainingMean, 2, vec![interferent]);
    let result = applied(step.unwrap(), &first(60), &spectra());
    check_rows(&result.select(&[0, 100]), &block["rows_0_100"], 1e-10);
    // With a constant only it is the plain correction.
    let plain = ExtendedScatterCorrection::new(Reference::TrainingMean, 0, Vec::new()).unwrap();
    let plain = applied(plain, &first(60), &spectra());
    let scatter = ScatterCorrection::new(Reference::TrainingMean);
    let scatter = applied(scatter, &first(60), &spectra());
    all_close(plain.x.as_slice(), scatter.x.as_slice(), 1e-10);
}

#[test]
fn rows_are_normalised_as_defined() {
    let values = values();
    let block = &values["row"];
    let by = |divisor, target| {
        row(
            &applied(Normalisation::new(divisor, target).unwrap(), &[0], &few()),
            2,
        )
    };
    all_close(&by(Divisor::Sum, 1e6), &numbers(&block["sum_row_2"]), 1e-12);
    all_close(
        &by(Divisor::Area, 1.0),
        &numbers(&block["area_row_2"]),
        1e-12,
    );
    let old = row(&few(), 2);
    let most = old.iter().copied().fold(0.0, f64::max);
    let peak = by(Divisor::Peak, 1.0);
    all_close(
        &peak,
        &old.iter().map(|x| x / most).collect::<Vec<_>>(),
        1e-15,
    );
    close(
        by(Divisor::Length, 1.0).iter().map(|x| x * x).sum(),
        1.0,
        1e-14,
    );
    close(by(Divisor::Standard(4), 7.0)[4], 7.0, 1e-14);
    let logs = applied(CenteredLogRatio::new(0.5).unwrap(), &[0], &few());
    all_close(
        &row(&logs, 2),
        &numbers(&block["centered_log_ratio_row_2"]),
        1e-12,
    );
    let dark = Samples::new(Matrix::zeros(1, 3));
    let sum = Step::from(Normalisation::new(Divisor::Sum, 1.0).unwrap())
        .given()
        .unwrap();
    let stop = sum
        .apply(Cow::Owned(dark), &Work::unattended())
        .unwrap_err();
    assert_eq!(
        stop,
        StepStop::Failed(StepError::NoTotal { row: 0, total: 0.0 })
    );
}
