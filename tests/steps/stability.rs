//! Stability index and bounds against `stability.json`.

use crate::support::{close, reference, table};
use serde_json::Value;
use widefold::numeric::stability::*;

fn values() -> Value {
    reference(include_str!("stability.json"))
}

#[test]
fn the_stability_index_its_variance_and_interval_agree() {
    let values = values();
    let cases = values["nogueira"]["cases"].as_array().unwrap();
    let mut undefined = 0;
    for case in cases {
        let z = table(&case["Z"]);
        let runs = (0..z.nrows())
            .map(|run| (0..z.ncols()).filter(|&f| z[(run, f)] == 1.0).collect())
            .collect();
        let index = Selections::new(z.ncols(), runs).index();
        let Some(expected) = case["stability"].as_f64() else {
            assert_eq!(
                (index.value, index.variance, index.interval(0.95)),
                (None, None, None)
            );
            undefined += 1;
            continue;
        };
        close(index.value.unwrap(), expected, 1e-12);
        close(
            index.variance.unwrap(),
            case["variance"].as_f64().unwrap(),
            1e-12,
        );
        close(
            index.mean_chosen,
            case["mean_selected"].as_f64().unwrap(),
            1e-12,
        );
        let (lower, upper) = index.interval(0.95).unwrap();
        close(lower, case["lower_95"].as_f64().unwrap(), 1e-12);
        close(upper, case["upper_95"].as_f64().unwrap(), 1e-12);
    }
    assert_eq!((cases.len(), undefined), (8, 2));
    assert_eq!(Selections::new(5, vec![vec![1]]).index().value, None);
}

#[test]
fn the_three_bounds_agree() {
    let values = values();
    let number = |case: &Value, name: &str| case[name].as_f64().unwrap();
    for case in values["meinshausen_buhlmann"]["cases"].as_array().unwrap() {
        let p = number(case, "p") as usize;
        let bound = worst_case_bound(number(case, "q"), p, number(case, "threshold")).unwrap();
        close(bound, number(case, "bound_expected_false"), 1e-12);
    }
    let at = |case: &Value| {
        let count = |name: &str| number(case, name) as usize;
        (
            number(case, "q"),
            count("p"),
            number(case, "tau"),
            count("B"),
        )
    };
    for case in values["shah_samworth_unimodal"]["cases"]
        .as_array()
        .unwrap()
    {
        let (q, p, tau, b) = at(case);
        let bound = unimodal_bound(q, p, tau, b).unwrap();
        close(bound, number(case, "bound_low_selection"), 1e-10);
        let worst = worst_case_bound(q, p, tau).unwrap();
        close(worst, number(case, "worst_case_bound"), 1e-12);
    }
    for case in values["shah_samworth_r_concave"]["cases"]
        .as_array()
        .unwrap()
    {
        let (q, p, tau, b) = at(case);
        let expected = number(case, "bound_low_selection");
        let bound = r_concave_bound(q, p, tau, b).unwrap();
        close(bound / expected, 1.0, 1e-4);
    }
}

#[test]
fn bounds_that_do_not_apply_are_not_given() {
    assert_eq!(worst_case_bound(10.0, 100, 0.5), None);
    assert_eq!(unimodal_bound(80.0, 100, 0.9, 50), None);
    assert_eq!(unimodal_bound(40.0, 100, 0.6, 50), None);
    assert_eq!(r_concave_bound(10.0, 0, 0.9, 50), None);
    assert_eq!(r_concave_bound(0.0, 100, 0.9, 50), Some(0.0));
    // More predictors than the theorem speaks of: nothing better than all of them.
    assert_eq!(r_concave_bound(99.0, 100, 0.6, 50), Some(100.0));
}

#[test]
fn the_index_of_a_whole_run_agrees_through_its_frequencies() {
    // Only frequencies are stored of the run, so lists with these frequencies are made up and
    // the value (not the variance, which depends on the lists) is compared.
    let values = values();
    let p = values["run"]["names"].as_array().unwrap().len();
    for run in values["run"]["runs"].as_array().unwrap() {
        let frequencies = run["selection_frequency"].as_object().unwrap();
        let mut runs = vec![Vec::new(); 50];
        let mut next = 0;
        for (predictor, frequency) in frequencies.values().enumerate() {
            let count = (frequency.as_f64().unwrap() * 50.0).round() as usize;
            for _ in 0..count {
                runs[next % 50].push(predictor);
                next += 1;
            }
        }
        let selections = Selections::new(p, runs);
        let index = selections.index();
        close(
            index.value.unwrap(),
            run["nogueira"]["stability"].as_f64().unwrap(),
            1e-12,
        );
        let q = index.mean_chosen;
        close(q, run["mean_selected"].as_f64().unwrap(), 1e-12);
        let worst = run["meinshausen_buhlmann_bound_at_0.7"].as_f64().unwrap();
        close(worst_case_bound(q, p, 0.7).unwrap(), worst, 1e-12);
        let unimodal = run["unimodal_bound_at_0.7"].as_f64().unwrap();
        close(unimodal_bound(q, p, 0.7, 25).unwrap(), unimodal, 1e-10);
    }
}

#[test]
fn frequencies_count_runs_and_pairs() {
    let runs = vec![vec![0, 2, 2], vec![2], vec![1, 2], vec![0]];
    let selections = Selections::new(4, runs);
    assert_eq!(selections.counts(), [2, 1, 3, 0]);
    assert_eq!(selections.frequencies(), [0.5, 0.25, 0.75, 0.0]);
    assert_eq!(selections.simultaneous_frequencies(), [0.0, 0.0, 0.5, 0.0]);
    assert_eq!(selections.mean_chosen(), 1.5);
}

#[test]
fn wilson_intervals_agree_with_published_values() {
    // Newcombe (1998), Statistics in Medicine 17, table I, method 3, to the digits printed.
    for (r, n, lower, upper) in [
        (81, 263, 0.2553, 0.3662),
        (15, 148, 0.0624, 0.1605),
        (0, 20, 0.0, 0.1611),
        (1, 29, 0.0061, 0.1718),
    ] {
        let (low, high) = wilson_interval(r, n, 0.95).unwrap();
        assert!((low - lower).abs() < 5e-5 && (high - upper).abs() < 5e-5);
    }
    assert_eq!(wilson_interval(20, 20, 0.95).unwrap().1, 1.0);
    assert_eq!(wilson_interval(0, 0, 0.95), None);
}
