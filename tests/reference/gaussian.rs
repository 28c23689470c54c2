//! Lasso and elastic net for a measured outcome, against `values/gaussian_lasso_enet.json`.

use crate::support::{
    Table, all_close, close, distinct, list, listed, named, number, numbers, spread, standardised,
    text, values,
};
use serde_json::Value;
use widefold::base::work::Work;
use widefold::numeric::certificate::certify;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::path::{Params, fit_path};
use widefold::numeric::predictors::Predictors;
use widefold::numeric::range::all_zero_point;
use widefold::numeric::response::Response;
use widefold::numeric::task::{Scaling, Task};

/// What a case of the file is about.
struct Setting {
    names: Vec<String>,
    x: Matrix,
    y: Vec<f64>,
    rows: Vec<usize>,
}

fn setting(case: &Value) -> Setting {
    let file = text(case, "data");
    let table = Table::named(file);
    let (outcome, names): (&str, Vec<String>) = match file {
        "diabetes.csv" => ("y", table.names_but(&["y"])),
        "meats.csv" => ("fat", table.names_but(&["water", "fat", "protein"])),
        "permeability.csv" => ("permeability", table.names_but(&["permeability"])),
        other => panic!("no setting for {other}"),
    };
    let n = number(case, "n") as usize;
    let names = if text(case, "name").ends_with("distinct") {
        distinct(&table, &names, n)
    } else {
        names
    };
    Setting {
        x: table.matrix(&names),
        y: table.column(outcome),
        rows: (0..n).collect(),
        names,
    }
}

fn cases() -> Vec<Value> {
    // The prostate table does not travel with the tests.
    list(&values("gaussian_lasso_enet.json"), "cases")
        .iter()
        .filter(|case| text(case, "data") != "prostate.csv")
        .cloned()
        .collect()
}

#[test]
fn paths_agree_with_the_reference_in_objective_coefficients_and_fit() {
    for case in cases() {
        let name = text(&case, "name").to_owned();
        let Setting { names, x, y, rows } = setting(&case);
        let (n, p) = x.shape();
        let factors: Option<Vec<f64>> = case
            .get("penalty_weights")
            .map(|_| listed(&named(&case, "penalty_weights"), &names));
        let predictors = Predictors::new(x);
        let response = Response::Measured(y);
        let covariates = Matrix::zeros(n, 0);
        let task = Task {
            predictors: &predictors,
            response: &response,
            rows: &rows,
            columns: None,
            covariates: &covariates,
            weights: None,
            factors: factors.as_deref(),
            scaling: Scaling::UnitVariance,
        };
        let share = number(&case, "share");
        let top = all_zero_point(&task, share, &Params::default(), &Work::unattended()).unwrap();
        close(&name, top, number(&case, "lambda_max"), 1e-12);
        let expected = list(&case, "path");
        let strengths: Vec<f64> = expected.iter().map(|fit| number(fit, "lambda")).collect();
        let path = fit_path(
            &task,
            share,
            &strengths,
            &Params::default(),
            &Work::unattended(),
        )
        .unwrap();
        for (at, fit) in expected.iter().enumerate() {
            let what = format!("{name} {}", strengths[at]);
            let info = path.info(at);
            assert!(info.settled, "{what}: gap {}", info.relative_gap);
            // The file states 1e-10 for the objective, 1e-6 of the largest for coefficients.
            close(&what, info.objective, number(fit, "objective"), 1e-10);
            close(&what, info.loss, number(fit, "loss"), 1e-9);
            assert_eq!(info.n_chosen, number(fit, "n_nonzero") as usize, "{what}");
            let df = number(fit, "df_without_intercept") + 1.0;
            close(&what, info.effective_df, df, 1e-6);
            assert!(info.relative_gap < 1e-12, "{what}: {}", info.relative_gap);
            let found = standardised(&path, at, p);
            let wanted = listed(&named(fit, "coef_std"), &names);
            all_close(&what, &found, &wanted, 1e-6);
            let raw = path.coefficients(at);
            close(&what, raw.intercept, number(fit, "intercept_raw"), 1e-6);
            if fit.get("coef_raw").is_some() {
                let wanted = listed(&named(fit, "coef_raw"), &names);
                all_close(&what, &spread(&raw.predictors, p), &wanted, 1e-6);
            }
            if fit.get("fitted").is_some() {
                let fitted = path.predict(&task, &rows);
                let fitted: Vec<f64> = fitted.column(at).iter().copied().collect();
                all_close(&what, &fitted, &numbers(fit, "fitted"), 1e-6);
            }
            let certificate = certify(&task, share, strengths[at], &raw).unwrap();
            assert!(certificate.gap < 1e-8, "{what}: {certificate:?}");
            assert!(
                certificate.worst_violation < 1e-6,
                "{what}: {certificate:?}"
            );
        }
    }
}

#[test]
fn predictors_enter_the_diabetes_lasso_in_the_published_order() {
    // Efron, Hastie, Johnstone & Tibshirani (2004): 3 9 4 7 2 10 5 8 6 1 -7 7.
    let reference = values("gaussian_lasso_enet.json");
    let entry = &reference["diabetes_order_of_entry"];
    let table = Table::named("diabetes.csv");
    let names = table.names_but(&["y"]);
    let predictors = Predictors::new(table.matrix(&names));
    let response = Response::Measured(table.column("y"));
    let n = table.n_rows();
    let rows: Vec<usize> = (0..n).collect();
    let covariates = Matrix::zeros(n, 0);
    let task = Task {
        predictors: &predictors,
        response: &response,
        rows: &rows,
        columns: None,
        covariates: &covariates,
        weights: None,
        factors: None,
        scaling: Scaling::UnitVariance,
    };
    // Between two knots of the piecewise linear path the active set does not change. The file's
    // columns have length 1, so its strengths are √n times smaller.
    let knots = numbers(entry, "knots_lambda");
    let scale = (n as f64).sqrt();
    let between: Vec<f64> = knots
        .windows(2)
        .map(|two| 0.5 * (two[0] + two[1]) * scale)
        .collect();
    let path = fit_path(
        &task,
        1.0,
        &between,
        &Params::default(),
        &Work::unattended(),
    )
    .unwrap();
    let mut events: Vec<i64> = Vec::new();
    let mut active: Vec<usize> = Vec::new();
    for at in 0..between.len() {
        let now: Vec<usize> = path.standardised(at).iter().map(|(j, _)| *j).collect();
        events.extend(
            now.iter()
                .filter(|j| !active.contains(j))
                .map(|j| *j as i64 + 1),
        );
        events.extend(
            active
                .iter()
                .filter(|j| !now.contains(j))
                .map(|j| -(*j as i64 + 1)),
        );
        active = now;
    }
    let expected: Vec<i64> = list(entry, "events")
        .iter()
        .map(|e| e.as_i64().unwrap())
        .collect();
    assert_eq!(events, expected);
}

#[test]
fn the_example_by_hand_is_exact() {
    // Three samples, x = -1, 0, 1, y = 1, 2, 6, not scaled: slopes 10/7, 17/11 and 7/4.
    let predictors = Predictors::new(Matrix::from_column_slice(3, 1, &[-1.0, 0.0, 1.0]));
    let response = Response::Measured(vec![1.0, 2.0, 6.0]);
    let covariates = Matrix::zeros(3, 0);
    let task = Task {
        predictors: &predictors,
        response: &response,
        rows: &[0, 1, 2],
        columns: None,
        covariates: &covariates,
        weights: None,
        factors: None,
        scaling: Scaling::AsGiven,
    };
    for (share, slope) in [(0.0, 10.0 / 7.0), (0.5, 17.0 / 11.0), (1.0, 7.0 / 4.0)] {
        let path = fit_path(
            &task,
            share,
            &[0.5],
            &Params::default(),
            &Work::unattended(),
        );
        let coefficients = path.unwrap().coefficients(0);
        close("intercept", coefficients.intercept, 3.0, 1e-12);
        close("slope", coefficients.predictors[0].1, slope, 1e-12);
    }
    close(
        "top",
        all_zero_point(&task, 1.0, &Params::default(), &Work::unattended()).unwrap(),
        5.0 / 3.0,
        1e-12,
    );
}
