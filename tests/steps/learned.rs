//! Steps that learn from samples, and functions of single values, against `catalogue.json` and
//! `preprocess.json`.

use crate::catalogue::{check_rows, few, first, spectra, values};
use crate::support::{all_close, applied, close, meats, meats_fat, numbers, reference, row, table};
use std::borrow::Cow;
use widefold::base::work::Work;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::parts::Split;
use widefold::numeric::samples::{Companions, Limit, Origin, OutcomeValues, Samples, Side};
use widefold::numeric::step::*;

#[test]
fn quotients_and_quantiles_agree_with_the_training_part_as_reference() {
    let values = values();
    let step = ProbabilisticQuotient::new(QuotientReference::TrainingMedian);
    check_rows(
        &applied(step, &first(8), &few()),
        &values["quotient_rows"],
        1e-12,
    );
    let step = QuantileNormalisation::learned();
    check_rows(
        &applied(step, &first(8), &few()),
        &values["quantile_rows"],
        1e-12,
    );
}

#[test]
fn equal_values_get_the_same_quantile() {
    let step = QuantileNormalisation::fixed(vec![1.0, 2.0, 4.0, 8.0]).unwrap();
    let samples = Samples::new(Matrix::from_row_slice(1, 4, &[5.0, 3.0, 5.0, 9.0]));
    assert_eq!(row(&applied(step, &[0], &samples), 0), [3.0, 1.0, 3.0, 8.0]);
}

#[test]
fn drift_is_the_trend_of_the_quality_control_samples() {
    let values = values();
    let block = &values["drift"];
    let (order, x) = (numbers(&block["order"]), numbers(&block["values"]));
    // The twelve are quality-control samples; two more lie between and beyond them.
    let mut orders = order.clone();
    orders.extend([5.0, 99.0]);
    let mut all = x.clone();
    all.extend([10.0, 10.0]);
    let samples =
        Samples::new(Matrix::from_column_slice(14, 1, &all)).with_companions(Companions {
            order: Some(orders),
            is_quality_control: Some((0..14).map(|row| row < 12).collect()),
            ..Companions::default()
        });
    for (trend, name) in [
        (DriftTrend::Line, "line"),
        (DriftTrend::Smooth { span: 0.5 }, "smooth"),
    ] {
        let fitted = numbers(&block[name]);
        let mean = fitted.iter().sum::<f64>() / 12.0;
        let step = QualityControlDrift::new(trend, DriftRemoval::Ratio).unwrap();
        let ratio = applied(step, &[12, 13], &samples);
        let expected: Vec<f64> = (0..12).map(|i| x[i] * mean / fitted[i]).collect();
        all_close(&ratio.column(0)[..12], &expected, 1e-10);
        // Order 5 is half-way between the second and the third; 99 is beyond the last.
        let between = 0.5 * (fitted[1] + fitted[2]);
        close(ratio.x[(12, 0)], 10.0 * mean / between, 1e-10);
        close(ratio.x[(13, 0)], 10.0 * mean / fitted[11], 1e-10);
        let step = QualityControlDrift::new(trend, DriftRemoval::Difference).unwrap();
        let difference = applied(step, &[12, 13], &samples);
        close(difference.x[(3, 0)], x[3] - fitted[3] + mean, 1e-10);
    }
}

#[test]
fn unsteady_predictors_are_switched_off() {
    // Relative standard deviations in the quality-control rows: 0.1, 0.5 and not defined.
    let x = Matrix::from_row_slice(
        4,
        3,
        &[
            9.0,
            0.5,
            1.0, //
            10.0,
            1.0,
            f64::NAN, //
            11.0,
            1.5,
            2.0, //
            50.0,
            1.0,
            3.0,
        ],
    );
    let samples = Samples::new(x).with_companions(Companions {
        is_quality_control: Some(vec![true, true, true, false]),
        ..Companions::default()
    });
    let kept =
        |most| applied(QualityControlSpread::new(most).unwrap(), &[3], &samples).active_columns();
    assert_eq!(
        (kept(0.1), kept(0.5), kept(0.09)),
        (vec![0], vec![0, 1], vec![])
    );
}

#[test]
fn batches_lose_their_level_and_an_unseen_one_keeps_it() {
    let x = Matrix::from_column_slice(7, 1, &[1.0, 3.0, 10.0, 14.0, 5.0, 7.0, 12.0]);
    let samples = Samples::new(x).with_companions(Companions {
        batch: Some(vec![0, 0, 1, 1, 0, 2, 1]),
        ..Companions::default()
    });
    let centered = applied(BatchCentering, &[0, 1, 2, 3], &samples);
    // Batch means 2 and 12, mean of all 7; rows 4 to 6 were not learnt from.
    assert_eq!(centered.column(0), [6.0, 8.0, 5.0, 9.0, 10.0, 7.0, 7.0]);
    // Batch 1 has one training sample, too few to say its level.
    let single = applied(BatchCentering, &[0, 1, 2], &samples);
    assert_eq!(single.x[(2, 0)], 10.0);
}

#[test]
fn covariates_are_taken_out_as_the_training_part_says() {
    let values = values();
    let block = &values["covariate_removal"];
    let samples = few().with_companions(Companions {
        covariates: Some(table(&block["covariates"])),
        ..Companions::default()
    });
    check_rows(
        &applied(CovariateRemoval, &first(8), &samples),
        &block["rows"],
        1e-10,
    );
}

#[test]
fn scores_agree_up_to_the_stated_sign() {
    let values = values();
    let block = &values["scores"];
    let scores = applied(PrincipalScores::new(3).unwrap(), &first(60), &spectra());
    assert_eq!(
        (scores.n_columns(), scores.origin(2)),
        (3, Origin::Score(2))
    );
    // The inner products square the condition: the third singular value is 1e-2 of the first.
    all_close(&row(&scores, 0), &numbers(&block["row_0"]), 1e-9);
    all_close(&row(&scores, 150), &numbers(&block["row_150"]), 1e-9);
}

#[test]
fn nearest_samples_fill_as_the_reference_does() {
    let values = reference(include_str!("preprocess.json"));
    let block = &values["imputation"];
    let samples = Samples::new(table(&block["table"]));
    let step = |k, weights| NearestImputation::new(k, weights).unwrap();
    for (name, k, weights) in [
        ("knn_1_uniform", 1, NeighborWeights::Equal),
        ("knn_2_uniform", 2, NeighborWeights::Equal),
        ("knn_3_uniform", 3, NeighborWeights::Equal),
        (
            "knn_3_inverse_distance",
            3,
            NeighborWeights::InverseDistance,
        ),
    ] {
        let filled = applied(step(k, weights), &first(8), &samples);
        check_rows(&filled, &block[name], 1e-12);
    }
    let work = Work::unattended();
    let split = Split::everything(&first(8));
    let learned = Step::from(step(2, NeighborWeights::Equal));
    let learned = learned
        .learn(&split.training_part(&samples), &work)
        .unwrap();
    let new = Samples::new(table(&block["new_row"]));
    let filled = learned.apply(Cow::Owned(new), &work).unwrap();
    check_rows(&filled, &block["new_row_knn_2"], 1e-12);
}

#[test]
fn low_rank_fills_agree_and_are_close_to_the_truth() {
    let values = values();
    let block = &values["low_rank"];
    let all = meats();
    let mut x = Matrix::from_fn(40, 20, |i, j| all[(i, 5 * j)]);
    let cells: Vec<Vec<f64>> = block["cells"]
        .as_array()
        .unwrap()
        .iter()
        .map(numbers)
        .collect();
    for cell in &cells {
        x[(cell[0] as usize, cell[1] as usize)] = f64::NAN;
    }
    let filled = applied(
        LowRankImputation::new(2).unwrap(),
        &first(40),
        &Samples::new(x),
    );
    let expected = numbers(&block["values"]);
    let truth = numbers(&block["truth"]);
    for (at, cell) in cells.iter().enumerate() {
        let value = filled.x[(cell[0] as usize, cell[1] as usize)];
        // The iteration ends when fills change by less than 1e-4 of their spread.
        close(value, expected[at], 1e-3);
        close(value, truth[at], 0.02);
    }
}

#[test]
fn power_transforms_and_fitted_powers_agree() {
    let values = reference(include_str!("preprocess.json"));
    let block = &values["power"];
    let x = numbers(&block["values"]);
    for (power, expected) in block["yeo_johnson_of_values"].as_object().unwrap() {
        let power: f64 = power.parse().unwrap();
        let of = |x: &f64| PowerFamily::YeoJohnson.value(*x, power).unwrap();
        all_close(
            &x.iter().map(of).collect::<Vec<_>>(),
            &numbers(expected),
            1e-12,
        );
    }
    for (power, expected) in block["boxcox_of_1_2_5"].as_object().unwrap() {
        let power: f64 = power.parse().unwrap();
        let of = |x: f64| PowerFamily::BoxCox.value(x, power).unwrap();
        all_close(&[1.0, 2.0, 5.0].map(of), &numbers(expected), 1e-12);
    }
    let fat = meats_fat();
    let samples = Samples::new(Matrix::from_column_slice(fat.len(), 1, &fat));
    for (family, name) in [
        (PowerFamily::BoxCox, "boxcox_lambda"),
        (PowerFamily::YeoJohnson, "yeo_johnson_lambda"),
    ] {
        let power = block[name].as_f64().unwrap();
        let step = PowerTransform::new(family, PowerChoice::Fitted).unwrap();
        let moved = applied(step, &first(60), &samples);
        // 1e-5 in the power is up to 1e-4 in the largest value.
        for row in [0, 100, 214] {
            close(
                moved.x[(row, 0)],
                family.value(fat[row], power).unwrap(),
                1e-4,
            );
        }
    }
    let given =
        Step::from(PowerTransform::new(PowerFamily::BoxCox, PowerChoice::Given(1.0)).unwrap());
    let zero = Samples::new(Matrix::zeros(1, 1));
    let stop = given
        .given()
        .unwrap()
        .apply(Cow::Owned(zero), &Work::unattended())
        .unwrap_err();
    let error = StepError::OutOfDomain {
        row: 0,
        column: 0,
        value: 0.0,
    };
    assert_eq!(stop, StepStop::Failed(error));
}

#[test]
fn falling_functions_turn_limits_round() {
    let limit = Limit {
        row: 0,
        column: 0,
        side: Side::Below,
        limit: 0.01,
    };
    let x = Matrix::from_column_slice(2, 1, &[f64::NAN, 0.1]);
    let samples = Samples::new(x).with_limits(vec![limit]);
    let absorbance = applied(Absorbance::of_shares(), &[0], &samples);
    close(absorbance.x[(1, 0)], 1.0, 1e-15);
    let expected = Limit {
        side: Side::Above,
        limit: 2.0,
        ..limit
    };
    assert_eq!(absorbance.limits, [expected]);
    let against = applied(Absorbance::against(vec![10.0]).unwrap(), &[0], &samples);
    close(against.x[(1, 0)], 2.0, 1e-15);
    let unit = applied(UnitConversion::new(-2.0, 1.0).unwrap(), &[0], &samples);
    assert_eq!((unit.x[(1, 0)], unit.limits[0].side), (0.8, Side::Above));
    let root = applied(Power::new(0.5).unwrap(), &[0], &samples);
    assert_eq!(
        (root.limits[0].limit, root.limits[0].side),
        (0.1, Side::Below)
    );
    let sine = applied(InverseHyperbolicSine::new(0.1).unwrap(), &[0], &samples);
    close(sine.x[(1, 0)], 0.881_373_587_019_543, 1e-15);
}

#[test]
fn rare_alleles_are_switched_off_and_other_values_refused() {
    let x = Matrix::from_row_slice(
        4,
        3,
        &[
            0.0,
            2.0,
            1.0, //
            0.0,
            2.0,
            f64::NAN, //
            0.0,
            1.0,
            1.0, //
            1.0,
            2.0,
            2.0,
        ],
    );
    let samples = Samples::new(x);
    let kept = |least, rows: &[usize]| {
        applied(MinorAllele::new(least).unwrap(), rows, &samples).active_columns()
    };
    // Allele frequencies 1/8, 7/8 and 4/6.
    assert_eq!(kept(0.125, &[0, 1, 2, 3]), [0, 1, 2]);
    assert_eq!(kept(0.13, &[0, 1, 2, 3]), [2]);
    assert_eq!(kept(0.01, &[0, 1, 2]), [1, 2]);
    let wrong = Samples::new(Matrix::from_row_slice(2, 1, &[1.0, 3.0]));
    let split = Split::everything(&[0, 1]);
    let step = Step::from(MinorAllele::new(0.1).unwrap());
    let stop = step
        .learn(&split.training_part(&wrong), &Work::unattended())
        .unwrap_err();
    let error = StepError::OutOfDomain {
        row: 1,
        column: 0,
        value: 3.0,
    };
    assert_eq!(stop, StepStop::Failed(error));
}

#[test]
fn the_filter_by_outcome_keeps_the_closest_predictors() {
    let values = values();
    let block = &values["relevance"];
    let kept = |keep: usize, samples: &Samples, rows: usize, outcome: OutcomeValues<'_>| {
        let split = Split::everything(&first(rows));
        let part = split.training_part(samples).with_outcome(Some(outcome));
        let work = Work::unattended();
        let step = Step::from(OutcomeFilter::new(keep).unwrap());
        let learned = step.learn(&part, &work).unwrap();
        let active = learned
            .apply(Cow::Borrowed(samples), &work)
            .unwrap()
            .active_columns();
        active
            .into_iter()
            .map(|column| column as f64)
            .collect::<Vec<_>>()
    };
    let fat = meats_fat();
    let by_number = kept(7, &spectra(), 60, OutcomeValues::Numbers(&fat));
    assert_eq!(by_number, numbers(&block["numbers"]));
    let class: Vec<usize> = (0..215).map(|row| (row * 7) % 3).collect();
    let by_class = kept(7, &spectra(), 60, OutcomeValues::Classes(&class));
    assert_eq!(by_class, numbers(&block["classes"]));
    let rossi: Vec<Vec<f64>> = include_str!("rossi.csv")
        .lines()
        .skip(1)
        .map(|line| line.split(',').map(|x| x.parse().unwrap()).collect())
        .collect();
    let samples = Samples::new(Matrix::from_fn(432, 7, |i, j| rossi[i][j + 2]));
    let time: Vec<f64> = rossi.iter().map(|row| row[0]).collect();
    let event: Vec<bool> = rossi.iter().map(|row| row[1] == 1.0).collect();
    let scores = numbers(&block["times_score"]);
    let mut order = first(7);
    order.sort_by(|&a, &b| scores[b].total_cmp(&scores[a]));
    for keep in 1..7 {
        let outcome = OutcomeValues::Times {
            time: &time,
            event: &event,
        };
        let mut expected: Vec<f64> = order[..keep].iter().map(|&j| j as f64).collect();
        expected.sort_by(f64::total_cmp);
        assert_eq!(kept(keep, &samples, 432, outcome), expected);
    }
    let step = Step::from(OutcomeFilter::new(2).unwrap());
    let split = Split::everything(&first(9));
    let stop = step.learn(&split.training_part(&spectra()), &Work::unattended());
    assert_eq!(stop.unwrap_err(), StepStop::Failed(StepError::NoOutcome));
}

#[test]
fn a_step_that_lacks_what_it_needs_says_what() {
    let samples = Samples::new(Matrix::from_fn(6, 3, |i, j| (i * j + i) as f64));
    let mut gappy = samples.clone();
    std::sync::Arc::make_mut(&mut gappy.x)[(2, 1)] = f64::NAN;
    let split = Split::everything(&[0, 1, 2, 3]);
    let refused = |step: Step, samples: &Samples| {
        let part = split.training_part(samples);
        match step.learn(&part, &Work::unattended()).unwrap_err() {
            StepStop::Failed(error) => error,
            StepStop::Cancelled => panic!("nobody called the work off"),
        }
    };
    assert_eq!(
        refused(BatchCentering.into(), &samples),
        StepError::NoBatches
    );
    assert_eq!(
        refused(CovariateRemoval.into(), &samples),
        StepError::NoCovariates
    );
    let drift = QualityControlDrift::new(DriftTrend::Line, DriftRemoval::Ratio).unwrap();
    assert_eq!(refused(drift.into(), &samples), StepError::NoOrder);
    let spread = QualityControlSpread::new(0.3).unwrap();
    let few = StepError::TooFewQualityControls {
        needed: 3,
        found: 0,
    };
    assert_eq!(refused(spread.into(), &samples), few);
    let scores = |count| Step::from(PrincipalScores::new(count).unwrap());
    assert_eq!(
        refused(scores(1), &gappy),
        StepError::Missing { row: 2, column: 1 }
    );
    let many = StepError::TooFewSamples {
        needed: 5,
        found: 4,
    };
    assert_eq!(refused(scores(4), &samples), many);
    // Three columns in proportion hold one direction.
    assert_eq!(refused(scores(2), &samples), StepError::NotIndependent);
}
