//! Cross-validation and selection on halves with given parts, against `cv.json` and
//! `stability.json`.

use crate::support::{Table, list, number, numbers, values};
use serde_json::Value;
use std::collections::BTreeMap;
use widefold::base::thread::Threads;
use widefold::base::work::Work;
use widefold::numeric::choose::{self, Curve, PartErrors, Rule};
use widefold::numeric::halves::select_on_halves;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::parts::{Assignment, Split, Structure};
use widefold::numeric::path::Grouping;
use widefold::numeric::predictors::Predictors;
use widefold::numeric::procedure::{
    ErrorMeasure, Material, Procedure, StrengthRule, Tally, Weighting, fit_part, part_errors,
};
use widefold::numeric::response::{Response, Ties};
use widefold::numeric::samples::Samples;
use widefold::numeric::step::Chain;
use widefold::numeric::task::Scaling;

/// Of all values of `cv.json`: 1e-7, relative.
const TOLERANCE: f64 = 1e-7;

/// Of deviances over given parts: fits of a procedure stop at a relative gap of 1e-9, which leaves
/// linear predictors exact to about its root (3e-5); worst seen 2.2e-5.
const DEVIANCE_TOLERANCE: f64 = 1e-4;

/// Samples without units, covariates or preparation.
struct Bench {
    samples: Samples,
    predictors: Predictors,
    response: Response,
    covariates: Matrix,
    units: Vec<usize>,
    chain: Chain,
}

impl Bench {
    fn new(x: Matrix, y: Vec<f64>) -> Self {
        let samples = Samples::new(x);
        let n = samples.n_samples();
        Self {
            predictors: Predictors::new(samples.x.clone()),
            samples,
            response: Response::Measured(y),
            covariates: Matrix::zeros(n, 0),
            units: (0..n).collect(),
            chain: Chain::new(Vec::new()),
        }
    }

    fn of(case: &Value) -> Self {
        let file = case["data"].as_str().unwrap();
        let table = Table::named(file);
        let (outcome, names) = match file {
            "diabetes.csv" => ("y", table.names_but(&["y"])),
            "meats.csv" => ("fat", table.names_but(&["water", "fat", "protein"])),
            other => panic!("{other} is not expected here"),
        };
        let (x, mut y) = (table.matrix(&names), table.column(outcome));
        let n = if case["rows"] == "first 60" {
            60
        } else {
            y.len()
        };
        y.truncate(n);
        Self::new(Matrix::from_fn(n, names.len(), |i, j| x[(i, j)]), y)
    }

    fn material(&self) -> Material<'_> {
        Material {
            samples: &self.samples,
            predictors: &self.predictors,
            response: &self.response,
            covariates: &self.covariates,
            weights: None,
            structure: Structure::of_units(&self.units),
        }
    }

    fn procedure(&self) -> Procedure<'_> {
        Procedure {
            chain: &self.chain,
            scaling: Scaling::UnitVariance,
            shares: Vec::new(),
            grouping: Grouping::Apart,
            weighting: Weighting::Equal,
            signs: Vec::new(),
            measure: ErrorMeasure::usual(&self.response),
            strength: StrengthRule::Fixed(0.0),
        }
    }

    /// The held-out predictions of a part at every strength.
    fn predict(&self, split: &Split, share: f64, strengths: &[f64]) -> Matrix {
        let mut tally = Tally::default();
        let material = self.material();
        let work = Work::unattended();
        let fit = fit_part(
            &material,
            &self.procedure(),
            split,
            share,
            strengths,
            &mut tally,
            &work,
        );
        fit.unwrap().predict(&material, split.held_out())
    }

    fn outcome(&self, row: usize) -> f64 {
        match &self.response {
            Response::Measured(y) => y[row],
            other => panic!("{other:?} is not a measured quantity"),
        }
    }

    /// The mean squared error of every part at every strength.
    fn part_means(&self, splits: &[Split], share: f64, strengths: &[f64]) -> Vec<Vec<f64>> {
        let of_part = |split: &Split| {
            let predicted = self.predict(split, share, strengths);
            let rows = split.held_out();
            let mean = |at: usize| {
                let square =
                    |(i, &row): (usize, &usize)| (self.outcome(row) - predicted[(i, at)]).powi(2);
                rows.iter().enumerate().map(square).sum::<f64>() / rows.len() as f64
            };
            (0..strengths.len()).map(mean).collect()
        };
        splits.iter().map(of_part).collect()
    }

    /// The parts of rows by their position among them.
    fn splits(&self, rows: &[usize], n_parts: usize) -> Vec<Split> {
        let table = vec![(0..rows.len()).map(|at| at % n_parts).collect()];
        let structure = Structure::of_units(&self.units);
        let plan = Assignment::from_table(rows, table, n_parts, &structure).unwrap();
        plan.splits(0)
    }
}

#[track_caller]
fn near(actual: f64, expected: f64, what: &str) {
    let distance = (actual - expected).abs() / expected.abs();
    assert!(
        distance <= TOLERANCE,
        "{what}: {actual} instead of {expected}, off by {distance:e}"
    );
}

fn curve(bench: &Bench, splits: &[Split], share: f64, strengths: &[f64]) -> Curve {
    let parts = bench.part_means(splits, share, strengths);
    choose::curve(share, strengths, &[parts])
}

#[test]
fn errors_over_given_parts_and_the_choices_from_them_agree() {
    let reference = values("cv.json");
    for (name, n_parts) in [
        ("diabetes_lasso_10_folds", 10),
        ("meats60_ridge_5_folds", 5),
        ("meats60_enet_5_folds", 5),
    ] {
        let case = &reference["cases"][name];
        let bench = Bench::of(case);
        let rows: Vec<usize> = (0..bench.units.len()).collect();
        let splits = bench.splits(&rows, n_parts);
        let (share, strengths) = (number(case, "share"), numbers(case, "lambda"));
        let parts = bench.part_means(&splits, share, &strengths);
        for (part, expected) in list(case, "fold_mean").iter().enumerate() {
            for (at, expected) in expected.as_array().unwrap().iter().enumerate() {
                let what = format!("{name}, part {part}, strength {at}");
                near(parts[part][at], expected.as_f64().unwrap(), &what);
            }
        }
        let curve = choose::curve(share, &strengths, &[parts]);
        for (at, (mean, se)) in numbers(case, "mean")
            .into_iter()
            .zip(numbers(case, "se"))
            .enumerate()
        {
            near(curve.errors[at], mean, name);
            near(curve.standard_errors[at], se, name);
        }
        let picked = |rule| choose::pick(rule, &curve).map(|at| at as f64);
        assert_eq!(picked(Rule::LowestError), Some(number(case, "index_min")));
        assert_eq!(
            picked(Rule::OneStandardError),
            Some(number(case, "index_1se"))
        );
    }
}

/// The errors of given parts of a response, part by part, at every strength.
fn errors_of(
    case: &Value,
    (x, response): (Matrix, Response),
    measure: ErrorMeasure,
) -> (Vec<PartErrors>, Vec<f64>) {
    let mut bench = Bench::new(x, Vec::new());
    bench.response = response;
    let rows: Vec<usize> = (0..bench.units.len()).collect();
    let (share, strengths) = (number(case, "share"), numbers(case, "lambda"));
    let material = bench.material();
    let of_part = |split: &Split| {
        let fit = fit_part(
            &material,
            &bench.procedure(),
            split,
            share,
            &strengths,
            &mut Tally::default(),
            &Work::unattended(),
        );
        part_errors(measure, &material, &fit.unwrap(), split)
    };
    let parts = bench.splits(&rows, 5).iter().map(of_part).collect();
    (parts, strengths)
}

fn agree(parts: &[PartErrors], expected: &[Value], factor: f64, what: &str) {
    for (part, expected) in parts.iter().zip(expected) {
        for (sum, expected) in part.sums.iter().zip(expected.as_array().unwrap()) {
            let expected = expected.as_f64().unwrap() * factor;
            let distance = (sum - expected).abs();
            // Shares of few samples can be 0, where nothing is relative.
            assert!(
                distance <= DEVIANCE_TOLERANCE * expected.abs().max(1e-3),
                "{what}: {sum} instead of {expected}"
            );
        }
    }
}

#[test]
fn deviances_and_wrong_calls_over_given_parts_agree() {
    let reference = values("cv.json");
    for (name, outcome) in [
        ("breast80_lasso_5_folds", "target"),
        ("wine_multinomial_lasso_5_folds", "class"),
    ] {
        let case = &reference["cases"][name];
        let table = Table::named(case["data"].as_str().unwrap());
        let x = table.matrix(&table.names_but(&[outcome]));
        let y = table.column(outcome);
        let response = || match outcome {
            "target" => Response::YesNo(y.iter().map(|y| *y > 0.5).collect()),
            _ => Response::Classes {
                class: y.iter().map(|y| *y as usize).collect(),
                n_classes: 3,
            },
        };
        let deviance = ErrorMeasure::Deviance;
        let (parts, strengths) = errors_of(case, (x.clone(), response()), deviance);
        agree(&parts, list(case, "fold_mean"), 1.0, name);
        let curve = choose::curve_of_parts(number(case, "share"), &strengths, &[parts]);
        for (found, expected) in curve.standard_errors.iter().zip(numbers(case, "se")) {
            let distance = (found - expected).abs();
            assert!(
                distance <= DEVIANCE_TOLERANCE * expected.abs(),
                "{name}: {found} instead of {expected}"
            );
        }
        let picked = |rule| choose::pick(rule, &curve).map(|at| at as f64);
        assert_eq!(picked(Rule::LowestError), Some(number(case, "index_min")));
        assert_eq!(
            picked(Rule::OneStandardError),
            Some(number(case, "index_1se"))
        );
        let calls = ErrorMeasure::Misclassification;
        let (parts, _) = errors_of(case, (x, response()), calls);
        agree(&parts, list(case, "misclassified_fold_mean"), 1.0, name);
    }
}

#[test]
fn partial_likelihoods_over_given_parts_agree() {
    let reference = values("cv.json");
    let case = &reference["cases"]["rossi_cox_lasso_5_folds"];
    let table = Table::named("rossi.csv");
    let x = table.matrix(&table.names_but(&["week", "arrest"]));
    let response = Response::Time {
        time: table.column("week"),
        event: table.column("arrest").iter().map(|y| *y > 0.5).collect(),
        strata: None,
        ties: Ties::Efron,
    };
    let measure = ErrorMeasure::PartialLikelihood;
    let (parts, strengths) = errors_of(case, (x, response), measure);
    // The reference lists log likelihoods, of which larger is better; these are deviances.
    agree(&parts, list(case, "fold_value"), -2.0, "rossi");
    let curve = choose::curve_of_parts(1.0, &strengths, &[parts]);
    let best = choose::pick(Rule::LowestError, &curve).map(|at| at as f64);
    assert_eq!(best, Some(number(case, "index_best")));
}

#[test]
fn nested_cross_validation_with_given_parts_agrees() {
    let reference = values("cv.json");
    let case = &reference["cases"]["diabetes_lasso_nested"];
    let bench = Bench::of(case);
    let rows: Vec<usize> = (0..bench.units.len()).collect();
    let (share, strengths) = (number(case, "share"), numbers(case, "lambda"));
    let mut predicted = vec![f64::NAN; rows.len()];
    let mut chosen = Vec::new();
    for outer in bench.splits(&rows, 5) {
        let inner = bench.splits(outer.training(), 5);
        let curve = curve(&bench, &inner, share, &strengths);
        let at = choose::pick(Rule::LowestError, &curve).unwrap();
        chosen.push(strengths[at]);
        let held_out = bench.predict(&outer, share, &strengths[..=at]);
        for (i, &row) in outer.held_out().iter().enumerate() {
            predicted[row] = held_out[(i, at)];
        }
    }
    assert_eq!(chosen, numbers(case, "chosen_lambda"));
    let n = rows.len() as f64;
    let residual = |row: &usize| bench.outcome(*row) - predicted[*row];
    let sse: f64 = rows.iter().map(|row| residual(row).powi(2)).sum();
    let mae = rows.iter().map(|row| residual(row).abs()).sum::<f64>() / n;
    let mean = rows.iter().map(|row| bench.outcome(*row)).sum::<f64>() / n;
    let sst: f64 = rows
        .iter()
        .map(|r| (bench.outcome(*r) - mean).powi(2))
        .sum();
    near((sse / n).sqrt(), number(case, "rmse"), "rmse");
    near(mae, number(case, "mae"), "mae");
    let r2 = number(case, "r2_about_overall_mean");
    near(1.0 - sse / sst, r2, "r²");
    for (row, expected) in numbers(case, "first_5_predictions").into_iter().enumerate() {
        near(predicted[row], expected, "prediction");
    }
}

/// Ten standardised columns (divisor n), squares of all but sex, and all products.
fn products(names: &[String]) -> (Matrix, Vec<f64>) {
    let table = Table::named("diabetes.csv");
    let n = table.n_rows();
    let standardised = |name: &str| -> Vec<f64> {
        let values = table.column(name);
        let mean = values.iter().sum::<f64>() / n as f64;
        let square = values.iter().map(|x| (x - mean).powi(2)).sum::<f64>();
        let sd = (square / n as f64).sqrt();
        values.iter().map(|x| (x - mean) / sd).collect()
    };
    let columns: Vec<Vec<f64>> = names
        .iter()
        .map(|name| {
            if let Some(name) = name.strip_suffix("^2") {
                standardised(name).iter().map(|x| x * x).collect()
            } else if let Some((a, b)) = name.split_once('*') {
                let (a, b) = (standardised(a), standardised(b));
                a.iter().zip(&b).map(|(a, b)| a * b).collect()
            } else {
                standardised(name)
            }
        })
        .collect();
    let x = Matrix::from_fn(n, names.len(), |i, j| columns[j][i]);
    (x, table.column("y"))
}

#[test]
fn selection_on_given_halves_agrees_exactly() {
    let reference = values("stability.json");
    let run = &reference["run"];
    let names: Vec<String> = list(run, "names")
        .iter()
        .map(|name| name.as_str().unwrap().to_owned())
        .collect();
    let (x, y) = products(&names);
    let bench = Bench::new(x, y);
    let material = bench.material();
    let pairs: Vec<(Split, Split)> = list(run, "first_halves")
        .iter()
        .map(|half| {
            let first: Vec<usize> = half
                .as_array()
                .unwrap()
                .iter()
                .map(|row| row.as_u64().unwrap() as usize)
                .collect();
            let second: Vec<usize> = (0..442).filter(|row| !first.contains(row)).collect();
            assert_eq!((first.len(), second.len()), (221, 221));
            let split =
                |a: &[usize], b: &[usize]| Split::with_held_out(a, b, &material.structure).unwrap();
            (split(&first, &second), split(&second, &first))
        })
        .collect();
    for case in list(run, "runs") {
        let strength = number(case, "lambda");
        // The path comes down to the strength, as it would from the all-zero point.
        let (choices, tally) = select_on_halves(
            &material,
            &bench.procedure(),
            &pairs,
            1.0,
            &[4.0 * strength, 2.0 * strength, strength],
            Threads::all(),
            &Work::unattended(),
        )
        .unwrap();
        assert!(tally.proof.holds());
        let mut counts: BTreeMap<&str, u32> = BTreeMap::new();
        for &(predictor, _) in choices.iter().flat_map(|choice| &choice.chosen) {
            *counts.entry(names[predictor].as_str()).or_default() += 1;
        }
        let expected: BTreeMap<&str, u32> = case["selection_frequency"]
            .as_object()
            .unwrap()
            .iter()
            .map(|(name, share)| {
                (
                    name.as_str(),
                    (share.as_f64().unwrap() * 50.0).round() as u32,
                )
            })
            .collect();
        assert_eq!(counts, expected, "at the strength {strength}");
    }
}
