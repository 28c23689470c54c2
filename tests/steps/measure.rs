//! Measures against `metrics.json`.

use crate::support::{close, numbers, reference};
use serde_json::Value;
use widefold::numeric::measure::*;

fn values() -> Value {
    reference(include_str!("metrics.json"))
}

#[test]
fn measures_of_measured_quantities_agree() {
    let values = values();
    let block = &values["regression"];
    let (y, prediction) = (numbers(&block["y"]), numbers(&block["prediction"]));
    let agreement = Agreement::of(&y, &prediction).unwrap();
    let observed_line = agreement.observed_on_predicted.unwrap();
    let predicted_line = agreement.predicted_on_observed.unwrap();
    for (name, value) in [
        ("rmse", agreement.rmse),
        ("mae", agreement.mae),
        ("median_absolute_error", agreement.median_absolute_error),
        ("max_absolute_error", agreement.largest_absolute_error),
        ("bias_mean_prediction_minus_y", agreement.bias),
        ("sep_bias_corrected", agreement.sep.unwrap()),
        ("r2_1_minus_sse_over_sst", agreement.r_squared.unwrap()),
        ("pearson_r", agreement.pearson.unwrap()),
        ("spearman_rho", agreement.spearman.unwrap()),
        ("calibration_slope_y_on_prediction", observed_line.slope),
        (
            "calibration_intercept_y_on_prediction",
            observed_line.intercept,
        ),
        ("slope_prediction_on_y", predicted_line.slope),
        ("intercept_prediction_on_y", predicted_line.intercept),
        ("sd_y_divisor_n_minus_1", agreement.observed_sd.unwrap()),
        ("rpd_sd_over_rmse", agreement.rpd.unwrap()),
        ("rpd_sd_over_sep", agreement.rpd_of_sep.unwrap()),
        ("q1", agreement.observed_quartiles.0),
        ("q3", agreement.observed_quartiles.1),
        ("rpiq_over_rmse", agreement.rpiq.unwrap()),
        ("lin_concordance_divisor_n", agreement.concordance.unwrap()),
    ] {
        close(value, block[name].as_f64().unwrap(), 1e-12);
    }
}

#[test]
fn the_mean_that_r_squared_refers_to_can_be_given() {
    let observed = [1.0, 2.0, 6.0];
    let of_baseline =
        |baseline: &[f64]| r_squared(&observed, &[1.0, 2.0, 5.0], Baseline::Predictions(baseline));
    // SSE 1; around the means of others' training parts Σ(y − m)² = 16 + 4 + 20.25.
    close(
        of_baseline(&[5.0, 4.0, 1.5]).unwrap(),
        1.0 - 1.0 / 40.25,
        1e-15,
    );
    assert_eq!(of_baseline(&observed), None);
}

#[test]
fn what_does_not_vary_has_no_r_squared_and_no_correlation() {
    let agreement = Agreement::of(&[0.1, 0.1, 0.1], &[0.1, 0.2, 0.3]).unwrap();
    assert_eq!(agreement.r_squared, None);
    assert_eq!((agreement.pearson, agreement.spearman), (None, None));
    assert_eq!(agreement.rpd, Some(0.0));
    assert_eq!(agreement.predicted_on_observed, None);
    let exact = Agreement::of(&[1.0, 2.0], &[1.0, 2.0]).unwrap();
    assert_eq!((exact.r_squared, exact.rpd), (Some(1.0), None));
    assert_eq!(Agreement::of(&[], &[]), None);
    assert_eq!(Agreement::of(&[1.0], &[f64::NAN]), None);
    let single = Agreement::of(&[1.0], &[2.0]).unwrap();
    assert_eq!(
        (single.sep, single.r_squared, single.rmse),
        (None, None, 1.0)
    );
}

#[test]
fn tails_and_quantiles_agree_with_published_values() {
    // scipy 1.17: norm.ppf, norm.sf, chi2.sf.
    close(normal_quantile(0.975), 1.959_963_984_540_054, 1e-14);
    close(normal_quantile(0.9), 1.281_551_565_544_600_4, 1e-14);
    close(normal_quantile(0.01), -2.326_347_874_040_840_8, 1e-14);
    let relative = |value: f64, expected: f64| close(value / expected, 1.0, 1e-12);
    relative(normal_tail(5.0), 2.866_515_718_791_933e-7);
    relative(normal_tail(-1.0), 0.841_344_746_068_542_9);
    relative(
        chi_squared_tail(1.062_739_861_291_41, 1),
        0.302_591_116_989_095,
    );
    relative(chi_squared_tail(7.0, 3), 0.071_897_772_496_465_24);
    relative(chi_squared_tail(40.0, 10), 1.694_474_393_006_737e-5);
    assert_eq!(normal_quantile(1.0), f64::INFINITY);
    assert!(normal_quantile(1.5).is_nan());
}

fn flags(value: &Value) -> Vec<bool> {
    numbers(value).into_iter().map(|x| x == 1.0).collect()
}

#[test]
fn measures_of_probabilities_agree() {
    let values = values();
    let block = &values["binary"];
    let (y, p) = (flags(&block["y"]), numbers(&block["p"]));
    let measures = BinaryMeasures::of(&y, &p).unwrap();
    let calls = Confusion::at(&y, &p, 0.5);
    for (name, value) in [
        ("auc_ties_half", measures.area_under_curve.unwrap()),
        ("brier", measures.brier),
        (
            "brier_skill_against_prevalence",
            measures.brier_skill.unwrap(),
        ),
        ("log_loss", measures.log_loss),
        ("deviance_sum", measures.deviance),
        ("mcfadden_r2", measures.deviance_explained.unwrap()),
        ("true_positive", calls.true_positive as f64),
        ("false_positive", calls.false_positive as f64),
        ("true_negative", calls.true_negative as f64),
        ("false_negative", calls.false_negative as f64),
        ("accuracy", calls.accuracy().unwrap()),
        ("sensitivity", calls.sensitivity().unwrap()),
        ("specificity", calls.specificity().unwrap()),
        ("balanced_accuracy", calls.balanced_accuracy().unwrap()),
        ("matthews", calls.matthews().unwrap()),
    ] {
        close(value, block[name].as_f64().unwrap(), 1e-12);
    }
    let calibration = measures.calibration.unwrap();
    for (name, value) in [
        ("calibration_slope", calibration.slope),
        ("calibration_intercept_with_slope", calibration.intercept),
        ("calibration_in_the_large", calibration.in_the_large),
    ] {
        close(value, block[name].as_f64().unwrap(), 1e-8);
    }
}

#[test]
fn one_class_and_separated_classes_leave_measures_undefined() {
    let p = [0.2, 0.6, 0.7];
    let one = BinaryMeasures::of(&[true; 3], &p).unwrap();
    assert_eq!((one.area_under_curve, one.brier_skill), (None, None));
    assert_eq!((one.deviance_explained, one.calibration), (None, None));
    assert_eq!(Confusion::at(&[true; 3], &p, 0.5).specificity(), None);
    assert_eq!(
        Confusion::at(&[true; 3], &p, 0.9).positive_predictive_value(),
        None
    );
    let separated = BinaryMeasures::of(&[false, true, true], &p).unwrap();
    assert_eq!(
        (separated.area_under_curve, separated.calibration),
        (Some(1.0), None)
    );
    let same = BinaryMeasures::of(&[false, true, true], &[0.5; 3]).unwrap();
    assert_eq!((same.area_under_curve, same.calibration), (Some(0.5), None));
    assert_eq!(BinaryMeasures::of(&[true], &[1.5]), None);
    // A certain prediction that is wrong costs much, not everything.
    assert!(
        BinaryMeasures::of(&[true, false], &[0.0, 0.0])
            .unwrap()
            .log_loss
            .is_finite()
    );
}

#[test]
fn measures_of_class_probabilities_agree() {
    let values = values();
    let block = &values["multiclass"];
    let class: Vec<usize> = numbers(&block["y"]).iter().map(|&y| y as usize).collect();
    let p = crate::support::table(&block["p"]);
    let measures = ClassMeasures::of(&class, &p).unwrap();
    for (name, value) in [
        ("log_loss", measures.log_loss),
        ("brier_sum_over_classes", measures.brier),
        ("accuracy", measures.accuracy),
        ("macro_f1", measures.macro_f1),
        (
            "auc_one_vs_rest_mean",
            measures.area_one_against_rest.unwrap(),
        ),
    ] {
        close(value, block[name].as_f64().unwrap(), 1e-12);
    }
    // scikit-learn 1.9: balanced_accuracy_score.
    close(measures.balanced_accuracy, 0.805_555_555_555_555_5, 1e-12);
    for (row, expected) in measures.confusion.iter().zip(
        block["confusion_rows_true_columns_predicted"]
            .as_array()
            .unwrap(),
    ) {
        let row: Vec<f64> = row.iter().map(|&count| count as f64).collect();
        assert_eq!(row, numbers(expected));
    }
    let called: Vec<f64> = (0..p.nrows())
        .map(|at| predicted_class(p.row(at).transpose().as_slice()) as f64)
        .collect();
    assert_eq!(called, numbers(&block["predicted_class"]));
    let lacking = ClassMeasures::of(&[0, 1, 0], &p.rows(0, 3).into_owned()).unwrap();
    assert_eq!(lacking.area_one_against_rest, None);
}

#[test]
fn the_deviance_of_counts_agrees() {
    let values = values();
    let block = &values["counts"];
    let (y, mean) = (numbers(&block["y"]), numbers(&block["mean"]));
    let measures = CountMeasures::of(&y, &mean).unwrap();
    close(
        measures.deviance,
        block["deviance_sum"].as_f64().unwrap(),
        1e-12,
    );
    close(
        measures.mean_deviance,
        block["mean_deviance"].as_f64().unwrap(),
        1e-12,
    );
    close(measures.bias, (28.6 - 30.0) / 8.0, 1e-12);
    assert_eq!(
        CountMeasures::of(&[2.0, 2.0], &[1.0, 2.0])
            .unwrap()
            .deviance_explained,
        None
    );
    assert_eq!(poisson_deviance(&[1.0], &[0.0]), f64::INFINITY);
}

/// Columns of a file by name.
fn columns(text: &str, names: &[&str]) -> Vec<Vec<f64>> {
    let mut lines = text.lines();
    let header: Vec<&str> = lines.next().unwrap().split(',').collect();
    let rows: Vec<Vec<f64>> = lines
        .map(|line| line.split(',').map(|x| x.parse().unwrap()).collect())
        .collect();
    names
        .iter()
        .map(|name| {
            let at = header.iter().position(|of| of == name).unwrap();
            rows.iter().map(|row| row[at]).collect()
        })
        .collect()
}

fn happened(values: &[f64]) -> Vec<bool> {
    values.iter().map(|&x| x == 1.0).collect()
}

fn check_concordance(counts: Concordance, block: &Value) {
    let count = |name: &str| block[name].as_u64().unwrap() as usize;
    let expected = Concordance {
        usable: count("usable"),
        concordant: count("concordant"),
        discordant: count("discordant"),
        tied: count("tied_risk"),
    };
    assert_eq!(counts, expected);
    close(counts.value().unwrap(), block["c"].as_f64().unwrap(), 1e-12);
}

#[test]
fn concordance_counts_the_same_pairs() {
    let values = values();
    let block = &values["concordance"];
    let (time, risk) = (numbers(&block["time"]), numbers(&block["risk"]));
    check_concordance(concordance(&time, &flags(&block["event"]), &risk), block);
    assert_eq!(
        concordance(&[1.0, 2.0], &[false, true], &[1.0, 2.0]).value(),
        None
    );
    // The coefficients of the fit without penalty (Efron) that the value is stated for.
    let coefficients = [
        ("fin", -0.379_422_166_871_208),
        ("age", -0.057_437_743_013_761_2),
        ("race", 0.313_899_785_949_293),
        ("wexp", -0.149_795_697_222_785),
        ("mar", -0.433_703_876_690_252),
        ("paro", -0.084_871_082_990_836_1),
        ("prio", 0.091_497_079_351_120_8),
    ];
    let rossi = include_str!("rossi.csv");
    let mut risk = vec![0.0; 432];
    for (name, coefficient) in coefficients {
        for (risk, x) in risk.iter_mut().zip(&columns(rossi, &[name])[0]) {
            *risk += coefficient * x;
        }
    }
    let outcome = columns(rossi, &["week", "arrest"]);
    let counts = concordance(&outcome[0], &happened(&outcome[1]), &risk);
    check_concordance(counts, &values["concordance_rossi"]);
}

#[test]
fn survival_curves_and_the_log_rank_test_agree() {
    let values = values();
    let block = &values["kaplan_meier_ovarian"];
    let data = columns(include_str!("ovarian.csv"), &["futime", "fustat", "rx"]);
    let event = happened(&data[1]);
    for (group, name) in [(1.0, "rx 1"), (2.0, "rx 2")] {
        let rows: Vec<usize> = (0..26).filter(|&row| data[2][row] == group).collect();
        let time: Vec<f64> = rows.iter().map(|&row| data[0][row]).collect();
        let event: Vec<bool> = rows.iter().map(|&row| event[row]).collect();
        let curve = kaplan_meier(&time, &event);
        let expected = &block["groups"][name];
        let of = |of: fn(&CurveStep) -> f64| curve.steps.iter().map(of).collect::<Vec<_>>();
        assert_eq!(of(|step| step.time), numbers(&expected["time"]));
        assert_eq!(
            of(|step| step.at_risk as f64),
            numbers(&expected["at_risk"])
        );
        assert_eq!(of(|step| step.events as f64), numbers(&expected["events"]));
        let survival = numbers(&expected["survival"]);
        crate::support::all_close(&of(|step| step.survival), &survival, 1e-12);
        let errors = numbers(&expected["greenwood_se"]);
        crate::support::all_close(&of(|step| step.standard_error), &errors, 1e-12);
        let first = curve.steps[0];
        assert_eq!(
            (curve.before(first.time), curve.at(first.time)),
            (1.0, first.survival)
        );
    }
    let group: Vec<usize> = data[2].iter().map(|&rx| rx as usize).collect();
    let test = log_rank(&data[0], &event, &group).unwrap();
    close(
        test.chi_squared,
        block["log_rank_chi2"].as_f64().unwrap(),
        1e-12,
    );
    close(test.p_value, block["log_rank_p"].as_f64().unwrap(), 1e-12);
    assert_eq!(log_rank(&data[0], &event, &[7; 26]), None);
}

#[test]
fn the_log_rank_test_of_three_groups_with_ties_agrees() {
    // statsmodels 0.15: duration.survfunc.survdiff.
    let time = [5, 8, 8, 12, 12, 12, 15, 20, 22, 22, 30, 30].map(f64::from);
    let event = [1, 1, 0, 1, 1, 0, 0, 1, 0, 1, 0, 0].map(|e| e == 1);
    let group = [0, 1, 2, 0, 1, 2, 0, 1, 2, 0, 1, 2];
    let test = log_rank(&time, &event, &group).unwrap();
    assert_eq!(test.degrees, 2);
    close(test.chi_squared, 3.911_814_749_375_374, 1e-12);
    close(test.p_value, 0.141_436_082_930_740_84, 1e-12);
}

#[test]
fn measures_at_a_time_weight_by_the_chance_of_being_observed() {
    let time = [2.0, 3.0, 5.0, 6.0, 7.0, 9.0];
    let event = [true, false, true, true, false, true];
    let risk = [0.9, 0.1, 0.3, 0.6, 0.5, 0.3];
    // By hand: one of five ends at 3, so events at 5 and 6 weigh 1.25; the pairs won are 2 for
    // the event at 2, a half for the one at 5 and 2 for the one at 6, of 3.5 · 2.
    let area = time_dependent_area(&time, &event, &risk, 6.0).unwrap();
    close(area, (2.0 + 0.5 * 1.25 + 2.0 * 1.25) / 7.0, 1e-15);
    let survival = [0.2, 0.5, 0.6, 0.4, 0.7, 0.9];
    let brier = time_dependent_brier(&time, &event, &survival, 6.0).unwrap();
    let expected = 0.04 + (0.36 + 0.16 + 0.09 + 0.01) / 0.8;
    close(brier, expected / 6.0, 1e-15);
    // Events at the time of an end come first: here one of two is left to end at 3.
    let tied = time_dependent_brier(
        &[3.0, 3.0, 4.0],
        &[true, false, false],
        &[0.0, 0.0, 0.5],
        3.5,
    );
    close(tied.unwrap(), 0.25 / 0.5 / 3.0, 1e-15);
    assert_eq!(time_dependent_area(&time, &event, &risk, 1.0), None);
    assert_eq!(time_dependent_area(&time, &event, &risk, 9.0), None);
}

#[test]
fn measures_at_a_time_are_the_plain_ones_when_everyone_is_observed() {
    let values = values();
    let block = &values["binary"];
    let (y, p) = (flags(&block["y"]), numbers(&block["p"]));
    let time: Vec<f64> = y
        .iter()
        .map(|&event| if event { 1.0 } else { 5.0 })
        .collect();
    let event = vec![true; y.len()];
    let area = time_dependent_area(&time, &event, &p, 2.0).unwrap();
    close(area, block["auc_ties_half"].as_f64().unwrap(), 1e-12);
    let survival: Vec<f64> = p.iter().map(|p| 1.0 - p).collect();
    let brier = time_dependent_brier(&time, &event, &survival, 2.0).unwrap();
    close(brier, block["brier"].as_f64().unwrap(), 1e-12);
}

#[test]
fn associations_agree() {
    // scipy 1.17: stats.contingency.association(method="cramer"); η² from stats.f_oneway.
    let a = [0, 0, 0, 1, 1, 1, 1, 2, 2, 2, 2, 2];
    let b = [0, 0, 1, 1, 1, 1, 0, 2, 2, 0, 1, 2];
    let two = [1, 0, 1, 1, 1, 1, 0, 0, 0, 0, 1, 0];
    close(cramers_v(&a, &b).unwrap(), 0.548_862_460_002_503_7, 1e-12);
    close(cramers_v(&a, &two).unwrap(), 0.510_990_323_891_863, 1e-12);
    close(cramers_v(&a, &a).unwrap(), 1.0, 1e-12);
    assert_eq!(cramers_v(&a, &[4; 12]), None);
    let v = [3.1, 0.2, 9.9, 4.4, 4.4, 7.0, 1.5, 2.2, 8.1, 5.0, 6.6, 0.4];
    close(
        correlation_ratio(&a, &v).unwrap(),
        3.876_339_969_372_065e-4,
        1e-14,
    );
    assert_eq!(correlation_ratio(&a, &[2.0; 12]), None);
}
