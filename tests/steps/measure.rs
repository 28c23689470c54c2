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
