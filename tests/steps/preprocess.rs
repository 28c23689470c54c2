//! Steps against `preprocess.json`.

use crate::support::{all_close, applied, close, meats, numbers, reference, row, table};
use serde_json::Value;
use std::borrow::Cow;
use std::sync::Arc;
use widefold::base::work::Work;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::samples::{Limit, Samples, Side};
use widefold::numeric::step::*;

fn values() -> Value {
    reference(include_str!("preprocess.json"))
}

#[test]
fn savitzky_golay_weights_are_those_of_the_tables() {
    for case in values()["savitzky_golay_weights"].as_array().unwrap() {
        let count = |name: &str| case[name].as_u64().unwrap() as usize;
        let (window, degree, derivative) = (count("window"), count("degree"), count("derivative"));
        let positions: Vec<f64> = (0..window).map(|at| at as f64).collect();
        let weights = local_polynomial_weights(&positions, (window / 2) as f64, degree, derivative);
        // The weights of window 11, degree 4 are known to 1e-13 only (README of the values).
        all_close(&weights, &numbers(&case["weights_left_to_right"]), 1e-12);
    }
}

#[test]
fn savitzky_golay_spectra_agree_at_the_edges_and_inside() {
    let samples = Samples::new(meats());
    for case in values()["savitzky_golay_meats"]["cases"]
        .as_array()
        .unwrap()
    {
        let count = |name: &str| case[name].as_u64().unwrap() as usize;
        let step =
            SavitzkyGolay::new(count("window"), count("degree"), count("derivative")).unwrap();
        let smooth = applied(step, &[0], &samples);
        all_close(
            &row(&smooth, 0),
            &numbers(&case["row_0_edges_by_polynomial"]),
            1e-10,
        );
        let inner = &case["inner_points_only"];
        let points = numbers(&inner["points"]);
        let inside = points[0] as usize..=points[1] as usize;
        let (mut sum, mut squares) = (0.0, 0.0);
        for column in inside {
            for x in smooth.column(column) {
                sum += x;
                squares += x * x;
            }
        }
        close(sum, inner["sum_all_rows"].as_f64().unwrap(), 1e-10);
        close(
            squares,
            inner["sum_squares_all_rows"].as_f64().unwrap(),
            1e-10,
        );
    }
}

#[test]
fn derivatives_are_per_unit_of_the_axis_and_follow_an_uneven_one() {
    // The derivative of 3t² − t is 6t − 1 on any axis, also a falling one.
    let even: Vec<f64> = (0..15).map(|at| 900.0 + 2.0 * f64::from(at)).collect();
    let uneven: Vec<f64> = (0..15).map(|at| 1e4 / (10.0 + f64::from(at))).collect();
    for axis in [even, uneven] {
        let x = Matrix::from_fn(1, 15, |_, j| 3.0 * axis[j] * axis[j] - axis[j]);
        let samples = Samples::new(x).with_axis(axis.clone());
        let slope = applied(SavitzkyGolay::new(5, 2, 1).unwrap(), &[0], &samples);
        let expected: Vec<f64> = axis.iter().map(|t| 6.0 * t - 1.0).collect();
        all_close(&row(&slope, 0), &expected, 1e-9);
    }
}

#[test]
fn windows_do_not_reach_across_a_region_that_is_off() {
    let x = Matrix::from_fn(1, 12, |_, j| if j == 6 { 1e9 } else { (j * j) as f64 });
    let mut samples = Samples::new(x);
    samples.active[6] = false;
    let smooth = applied(SavitzkyGolay::new(5, 2, 0).unwrap(), &[0], &samples);
    // A parabola is left as it is, on both sides of the gap.
    let expected: Vec<f64> = row(&samples, 0);
    all_close(&row(&smooth, 0), &expected, 1e-12);
}

#[test]
fn a_window_wider_than_its_neighbours_is_refused() {
    let samples = Samples::new(Matrix::zeros(2, 4));
    let given = Step::from(SavitzkyGolay::new(5, 2, 0).unwrap())
        .given()
        .unwrap();
    let error = StepError::WindowTooWide { window: 5, run: 4 };
    let work = Work::unattended();
    assert_eq!(
        given.apply(Cow::Borrowed(&samples), &work).unwrap_err(),
        StepStop::Failed(error)
    );
    assert!(SavitzkyGolay::new(4, 2, 0).is_err() && SavitzkyGolay::new(3, 3, 0).is_err());
}

#[test]
fn standard_normal_variate_agrees() {
    let snv = &values()["scatter"]["snv"];
    let result = applied(StandardNormalVariate, &[0], &Samples::new(meats()));
    all_close(&row(&result, 0), &numbers(&snv["row_0"]), 1e-12);
    all_close(
        &row(&result, 60)[..10],
        &numbers(&snv["row_60_first_10"]),
        1e-12,
    );
    close(row(&result, 7).iter().map(|x| x * x).sum(), 99.0, 1e-12);
}

#[test]
fn scatter_correction_agrees_with_the_mean_of_the_first_sixty_rows() {
    let msc = &values()["scatter"]["msc"];
    let training: Vec<usize> = (0..60).collect();
    let step = ScatterCorrection::new(Reference::TrainingMean);
    let result = applied(step, &training, &Samples::new(meats()));
    all_close(&row(&result, 0), &numbers(&msc["row_0"]), 1e-12);
    all_close(
        &row(&result, 60)[..10],
        &numbers(&msc["row_60_first_10"]),
        1e-12,
    );
    close(result.x.sum(), msc["sum_all_rows"].as_f64().unwrap(), 1e-10);
}

#[test]
fn detrending_leaves_the_residuals_of_a_parabola() {
    // By the normal equations, row 0 of the spectra, over positions 0 to 99.
    let samples = Samples::new(meats());
    let flat = row(&applied(Detrend::new(2).unwrap(), &[0], &samples), 0);
    let basis = Matrix::from_fn(100, 3, |i, k| (i as f64).powi(k as i32));
    let y = samples.x.row(0).transpose();
    let beta = (basis.transpose() * &basis)
        .lu()
        .solve(&(basis.transpose() * &y))
        .unwrap();
    let expected: Vec<f64> = (y - basis * beta).iter().copied().collect();
    all_close(&flat, &expected, 1e-10);
}

#[test]
fn imputation_by_median_and_mean_agrees_and_knows_new_rows() {
    let values = values();
    let block = &values["imputation"];
    let samples = Samples::new(table(&block["table"]));
    let all: Vec<usize> = (0..8).collect();
    for (name, statistic) in [
        ("median", ColumnStatistic::Median),
        ("mean", ColumnStatistic::Mean),
    ] {
        let filled = applied(ColumnImputation::new(statistic), &all, &samples);
        all_close(filled.x.as_slice(), table(&block[name]).as_slice(), 1e-12);
    }
    let work = Work::unattended();
    let part = widefold::numeric::parts::Split::everything(&all);
    let step = Step::from(ColumnImputation::new(ColumnStatistic::Median));
    let learned = step.learn(&part.training_part(&samples), &work).unwrap();
    let new = Samples::new(table(&block["new_row"]));
    let filled = learned.apply(Cow::Owned(new), &work).unwrap();
    all_close(
        filled.x.as_slice(),
        table(&block["new_row_median"]).as_slice(),
        1e-12,
    );
}

#[test]
fn half_the_limit_stands_below_it_and_the_limit_above() {
    let limit = |row, side, limit| Limit {
        row,
        column: 0,
        side,
        limit,
    };
    let x = Matrix::from_column_slice(3, 1, &[f64::NAN, f64::NAN, 7.0]);
    let samples =
        Samples::new(x).with_limits(vec![limit(0, Side::Below, 0.5), limit(1, Side::Above, 9.0)]);
    let filled = applied(LimitFill::new(LimitRule::Half), &[0], &samples);
    assert_eq!(filled.column(0), [0.25, 9.0, 7.0]);
    assert!(filled.limits.is_empty());
    let root = applied(LimitFill::new(LimitRule::OverRootTwo), &[0], &samples);
    close(root.x[(0, 0)], 0.5 / 2.0_f64.sqrt(), 1e-15);
}

#[test]
fn logarithms_take_limits_along_and_refuse_what_has_none() {
    let limit = Limit {
        row: 0,
        column: 0,
        side: Side::Below,
        limit: 9.0,
    };
    let x = Matrix::from_column_slice(2, 1, &[f64::NAN, 99.0]);
    let samples = Samples::new(x).with_limits(vec![limit]);
    let step = Logarithm::new(LogarithmBase::Ten, 1.0).unwrap();
    let logs = applied(step, &[0], &samples);
    assert_eq!((logs.x[(1, 0)], logs.limits[0].limit), (2.0, 1.0));
    let negative = Samples::new(Matrix::from_column_slice(2, 1, &[3.0, -1.0]));
    let given = Step::from(Logarithm::new(LogarithmBase::Natural, 1.0).unwrap())
        .given()
        .unwrap();
    let stop = given
        .apply(Cow::Borrowed(&negative), &Work::unattended())
        .unwrap_err();
    let error = StepError::OutOfDomain {
        row: 1,
        column: 0,
        value: -1.0,
    };
    assert_eq!(stop, StepStop::Failed(error));
}

#[test]
fn scaling_agrees_with_the_description_of_the_reference_list() {
    let values = values();
    let block = &values["describe"];
    let x = numbers(&block["x"]);
    let n = x.len();
    let number = |name: &str| block[name].as_f64().unwrap();
    let samples = Samples::new(Matrix::from_column_slice(n, 1, &x));
    let all: Vec<usize> = (0..n).collect();
    let (mean, sd) = (number("mean"), number("sd_divisor_n"));
    let by = |rule: ScalingRule| {
        applied(Scaling::new(rule), &all, &samples)
            .column(0)
            .to_vec()
    };
    let expected =
        |shift: f64, scale: f64| -> Vec<f64> { x.iter().map(|x| (x - shift) / scale).collect() };
    all_close(&by(ScalingRule::UnitVariance), &expected(mean, sd), 1e-12);
    all_close(&by(ScalingRule::Pareto), &expected(mean, sd.sqrt()), 1e-12);
    all_close(&by(ScalingRule::Range), &expected(mean, 9.7), 1e-12);
    all_close(&by(ScalingRule::Level), &expected(mean, mean), 1e-12);
    let robust = expected(number("median"), number("mad_times_1.4826"));
    all_close(&by(ScalingRule::Robust), &robust, 1e-12);
    let centered = applied(Centering, &all, &samples);
    all_close(centered.column(0), &expected(mean, 1.0), 1e-12);
}

#[test]
fn filters_judge_the_training_part_and_only_switch_off() {
    let nan = f64::NAN;
    let x = Matrix::from_row_slice(
        4,
        4,
        &[
            1.0, 5.0, nan, 2.0, //
            2.0, 5.0, nan, 2.0, //
            3.0, 5.0, 4.0, 2.0, //
            4.0, 6.0, 4.0, 1.0,
        ],
    );
    let samples = Samples::new(x);
    let missing = applied(MissingShare::new(0.5).unwrap(), &[0, 1, 2], &samples);
    assert_eq!(missing.active, [true, true, false, true]);
    assert!(Arc::ptr_eq(&missing.x, &samples.x));
    let near = applied(NearConstant::new(0.75).unwrap(), &[0, 1, 2, 3], &samples);
    assert_eq!(near.active, [true, false, false, false]);
    let constant = applied(NearConstant::new(1.0).unwrap(), &[0, 1, 2], &samples);
    assert_eq!(constant.active, [true, false, false, false]);
}

#[test]
fn a_step_that_changes_nothing_copies_nothing() {
    let samples = Samples::new(Matrix::from_fn(5, 3, |i, j| (i * j) as f64));
    let work = Work::unattended();
    let split = widefold::numeric::parts::Split::everything(&[0, 1, 2, 3]);
    let steps: [Step; 4] = [
        ColumnImputation::new(ColumnStatistic::Median).into(),
        LimitFill::new(LimitRule::Half).into(),
        MissingShare::new(0.2).unwrap().into(),
        MissingShare::with_call_rate(0.9).unwrap().into(),
    ];
    for step in steps {
        let learned = step.learn(&split.training_part(&samples), &work).unwrap();
        let result = learned.apply(Cow::Borrowed(&samples), &work).unwrap();
        assert!(matches!(result, Cow::Borrowed(_)));
    }
}
