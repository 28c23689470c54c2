//! Given parts against reference values.
//!
//! `tests/reference/values/cv.json`: made by an independent exact solver, the gaussian cases also
//! by scikit-learn 1.9.1. Tolerance 1e-7 relative, places exact, as stated there.

use serde_json::Value;
use widefold::base::work::Work;
use widefold::numeric::choose::{self, Curve, Rule};
use widefold::numeric::matrix::Matrix;
use widefold::numeric::parts::{Assignment, Split, Structure};
use widefold::numeric::predictors::Predictors;
use widefold::numeric::procedure::{Material, Procedure, StrengthRule, Tally, fit_part};
use widefold::numeric::response::Response;
use widefold::numeric::samples::Samples;
use widefold::numeric::step::Chain;
use widefold::numeric::task::Scaling;

const DIABETES: &str = include_str!("../reference/data/diabetes.csv");
const MEATS: &str = include_str!("../reference/data/meats.csv");

struct Table {
    samples: Samples,
    predictors: Predictors,
    response: Response,
    covariates: Matrix,
    units: Vec<usize>,
}

impl Table {
    fn read(text: &str, outcome: &str, predictors: impl Fn(&str) -> bool, n: usize) -> Self {
        let mut lines = text.lines();
        let heads: Vec<&str> = lines.next().unwrap().split(',').collect();
        let rows: Vec<Vec<f64>> = lines
            .take(n)
            .map(|line| {
                line.split(',')
                    .map(|value| value.parse().unwrap())
                    .collect()
            })
            .collect();
        let y = heads.iter().position(|head| *head == outcome).unwrap();
        let columns: Vec<usize> = (0..heads.len())
            .filter(|&at| predictors(heads[at]))
            .collect();
        let x = Matrix::from_fn(rows.len(), columns.len(), |i, j| rows[i][columns[j]]);
        let samples = Samples::new(x);
        Self {
            predictors: Predictors::new(samples.x.clone()),
            samples,
            response: Response::Measured(rows.iter().map(|row| row[y]).collect()),
            covariates: Matrix::zeros(rows.len(), 0),
            units: (0..rows.len()).collect(),
        }
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

    fn plan(
        &self,
        rows: &[usize],
        parts: usize,
        place: impl Fn(usize, usize) -> usize,
    ) -> Assignment {
        let table = rows
            .iter()
            .enumerate()
            .map(|(at, &row)| place(at, row))
            .collect();
        Assignment::from_table(rows, vec![table], parts, &Structure::of_units(&self.units)).unwrap()
    }
}

fn procedure(chain: &Chain) -> Procedure<'_> {
    Procedure {
        chain,
        scaling: Scaling::UnitVariance,
        shares: vec![1.0],
        strength: StrengthRule::Fixed(1.0),
    }
}

fn predicted(table: &Table, split: &Split, share: f64, strengths: &[f64]) -> Matrix {
    let chain = Chain::new(Vec::new());
    let mut tally = Tally::default();
    let material = table.material();
    let work = Work::unattended();
    let fit = fit_part(
        &material,
        &procedure(&chain),
        split,
        share,
        strengths,
        &mut tally,
        &work,
    );
    let fit = fit.unwrap();
    assert_eq!(tally.unsettled, 0);
    assert!(tally.proof.holds());
    fit.predict(&material, split.held_out())
}

fn curve(table: &Table, plan: &Assignment, share: f64, strengths: &[f64]) -> Curve {
    let parts = plan
        .splits(0)
        .iter()
        .map(|split| {
            let eta = predicted(table, split, share, strengths);
            let rows = split.held_out();
            let error = |at: usize| {
                let errors = rows.iter().enumerate();
                errors
                    .map(|(i, &row)| table.response.squared_error(row, eta[(i, at)]))
                    .sum::<f64>()
                    / rows.len() as f64
            };
            (0..strengths.len()).map(error).collect()
        })
        .collect();
    choose::curve(share, strengths, &[parts])
}

fn case(name: &str) -> Value {
    let all: Value = serde_json::from_str(include_str!("../reference/values/cv.json")).unwrap();
    all["cases"][name].clone()
}

fn numbers(value: &Value) -> Vec<f64> {
    value
        .as_array()
        .unwrap()
        .iter()
        .map(|v| v.as_f64().unwrap())
        .collect()
}

fn close(found: f64, expected: f64) {
    let off = (found - expected).abs() / expected.abs();
    assert!(off < 1e-7, "{found} against {expected}");
}

fn check(name: &str, table: &Table, n: usize, parts: usize, share: f64) {
    let case = case(name);
    let strengths = numbers(&case["lambda"]);
    let rows: Vec<usize> = (0..n).collect();
    let plan = table.plan(&rows, parts, |_, row| row % parts);
    let curve = curve(table, &plan, share, &strengths);
    for (found, expected) in curve.errors.iter().zip(numbers(&case["mean"])) {
        close(*found, expected);
    }
    for (found, expected) in curve.standard_errors.iter().zip(numbers(&case["se"])) {
        close(*found, expected);
    }
    let place = |rule| choose::pick(rule, &curve).unwrap() as u64;
    assert_eq!(
        place(Rule::LowestError),
        case["index_min"].as_u64().unwrap()
    );
    assert_eq!(
        place(Rule::OneStandardError),
        case["index_1se"].as_u64().unwrap()
    );
}

#[test]
fn a_lasso_by_ten_given_parts_has_the_reference_errors_and_choices() {
    let table = Table::read(DIABETES, "y", |head| head != "y", 442);
    check("diabetes_lasso_10_folds", &table, 442, 10, 1.0);
}

#[test]
fn a_ridge_by_five_given_parts_has_the_reference_errors_and_choices() {
    let table = Table::read(MEATS, "fat", |head| head.starts_with("x_"), 60);
    check("meats60_ridge_5_folds", &table, 60, 5, 0.0);
}

#[test]
fn an_elastic_net_by_five_given_parts_has_the_reference_errors_and_choices() {
    let table = Table::read(MEATS, "fat", |head| head.starts_with("x_"), 60);
    check("meats60_enet_5_folds", &table, 60, 5, 0.5);
}

#[test]
fn nested_given_parts_choose_and_predict_as_the_reference_does() {
    let table = Table::read(DIABETES, "y", |head| head != "y", 442);
    let case = case("diabetes_lasso_nested");
    let strengths = numbers(&case["lambda"]);
    let chosen = numbers(&case["chosen_lambda"]);
    let rows: Vec<usize> = (0..442).collect();
    let outer = table.plan(&rows, 5, |_, row| row % 5);
    let mut square = 0.0;
    for (part, split) in outer.splits(0).iter().enumerate() {
        let inner = table.plan(split.training(), 5, |at, _| at % 5);
        let curve = curve(&table, &inner, 1.0, &strengths);
        let at = choose::pick(Rule::LowestError, &curve).unwrap();
        assert_eq!(strengths[at], chosen[part], "part {part}");
        let eta = predicted(&table, split, 1.0, &strengths[..=at]);
        for (i, &row) in split.held_out().iter().enumerate() {
            square += table.response.squared_error(row, eta[(i, at)]);
        }
    }
    close((square / 442.0).sqrt(), case["rmse"].as_f64().unwrap());
}
