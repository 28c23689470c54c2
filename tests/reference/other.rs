//! Yes and no, classes, counts and times, against `values/{binomial,multinomial,poisson,cox}.json`.

use crate::support::{
    Table, all_close, close, distinct, list, listed, named, number, spread, standardised, text,
    values,
};
use serde_json::Value;
use widefold::base::work::Work;
use widefold::numeric::certificate::{certify, certify_classes};
use widefold::numeric::matrix::Matrix;
use widefold::numeric::path::{Params, Path, fit_path};
use widefold::numeric::predictors::Predictors;
use widefold::numeric::procedure::Hazard;
use widefold::numeric::range::all_zero_point;
use widefold::numeric::response::{Response, Ties};
use widefold::numeric::task::{Scaling, Task};

struct Setting {
    names: Vec<String>,
    predictors: Predictors,
    response: Response,
    rows: Vec<usize>,
    covariates: Matrix,
    scaling: Scaling,
}

impl Setting {
    fn new(names: Vec<String>, x: Matrix, response: Response, n: usize) -> Self {
        Self {
            covariates: Matrix::zeros(x.nrows(), 0),
            predictors: Predictors::new(x),
            rows: (0..n).collect(),
            scaling: Scaling::UnitVariance,
            names,
            response,
        }
    }

    fn task(&self) -> Task<'_> {
        Task {
            predictors: &self.predictors,
            response: &self.response,
            rows: &self.rows,
            columns: None,
            covariates: &self.covariates,
            weights: None,
            factors: None,
            scaling: self.scaling,
        }
    }

    fn fit(&self, share: f64, strengths: &[f64]) -> Path {
        // The files' tolerances (coefficients 1e-6, log-likelihoods 1e-9) ask for all there is:
        // the gap of a solution is of the order of the square of its distance.
        let params = Params {
            relative_gap: 1e-15,
            ..Params::default()
        };
        fit_path(&self.task(), share, strengths, &params, &Work::unattended()).unwrap()
    }
}

/// The largest allowed distance of a list of coefficients; 1e-6 of the largest.
fn coefficients(what: &str, found: &[f64], fit: &Value, key: &str, names: &[String]) {
    if fit.get(key).is_some() {
        all_close(what, found, &listed(&named(fit, key), names), 1e-6);
    }
}

fn check_case(case: &Value, setting: &Setting) {
    let name = text(case, "name");
    let share = number(case, "share");
    let p = setting.names.len();
    if share > 0.0 {
        let top = all_zero_point(
            &setting.task(),
            share,
            &Params::default(),
            &Work::unattended(),
        )
        .unwrap();
        close(name, top, number(case, "lambda_max"), 1e-10);
    }
    let fits = list(case, "fits");
    let strengths: Vec<f64> = fits.iter().map(|fit| number(fit, "lambda")).collect();
    let path = setting.fit(share, &strengths);
    let everything = path.predict(&setting.task(), &setting.rows);
    for (at, fit) in fits.iter().enumerate() {
        let what = format!("{name} {}", strengths[at]);
        let info = path.info(at);
        assert!(info.relative_gap < 1e-11, "{what}: {info:?}");
        close(&what, info.objective, number(fit, "objective"), 1e-10);
        close(&what, info.loss, number(fit, "loss"), 1e-8);
        assert_eq!(info.n_chosen, number(fit, "n_nonzero") as usize, "{what}");
        let k = path.n_linear();
        let solution = path.class_coefficients(at);
        if k == 1 {
            close(
                &what,
                solution[0].intercept,
                number(fit, "intercept_raw"),
                1e-6,
            );
            coefficients(
                &what,
                &standardised(&path, at, p),
                fit,
                "coef_std",
                &setting.names,
            );
            let raw = spread(&solution[0].predictors, p);
            coefficients(&what, &raw, fit, "coef_raw", &setting.names);
        } else {
            for (class, wanted) in list(fit, "classes").iter().enumerate() {
                let found = spread(&path.class_standardised(at, class), p);
                coefficients(&what, &found, wanted, "coef_std", &setting.names);
                let raw = number(wanted, "intercept_raw");
                let found = solution[class].intercept;
                assert!(
                    (found - raw).abs() < 1e-6 * raw.abs().max(1.0),
                    "{what}: {found} {raw}"
                );
            }
        }
        for (row, wanted) in fit["fitted_rows"].as_object().into_iter().flatten() {
            let row: usize = row.parse().unwrap();
            let eta: Vec<f64> = (0..k)
                .map(|class| everything[(row, at * k + class)])
                .collect();
            let found = setting.response.means(row, &eta);
            let wanted: Vec<f64> = match wanted {
                Value::Array(list) => list.iter().map(|x| x.as_f64().unwrap()).collect(),
                one => vec![one.as_f64().unwrap()],
            };
            for (f, w) in found.iter().zip(&wanted) {
                assert!(
                    (f - w).abs() < 1e-7 * w.max(1.0),
                    "{what} row {row}: {f} {w}"
                );
            }
        }
        let found = certify_classes(&setting.task(), share, strengths[at], &solution).unwrap();
        assert!(found.gap < 1e-9, "{what}: {found:?}");
        assert!(found.worst_violation < 1e-5, "{what}: {found:?}");
    }
}

#[test]
fn logistic_paths_agree_with_the_reference() {
    let reference = values("binomial.json");
    for case in list(&reference, "cases") {
        let file = text(case, "data");
        let table = Table::named(file);
        let n = number(case, "n") as usize;
        let (names, yes): (Vec<String>, Vec<bool>) = match file {
            "breast_cancer_80.csv" => {
                let yes = table.column("target").iter().map(|x| *x == 1.0).collect();
                (table.names_but(&["target"]), yes)
            }
            "wine.csv" => {
                let outcome = table.names.last().unwrap().clone();
                let yes = table.column(&outcome).iter().map(|x| *x == 1.0).collect();
                (table.names_but(&[&outcome]), yes)
            }
            _ => {
                let y = table.column("permeability");
                let mut sorted = y.clone();
                sorted.sort_by(f64::total_cmp);
                let median = sorted[sorted.len() / 2];
                let names = table.names_but(&["permeability"]);
                let names = if text(case, "name").ends_with("distinct") {
                    distinct(&table, &names, n)
                } else {
                    names
                };
                (names, y.iter().map(|y| *y > median).collect())
            }
        };
        let x = table.matrix(&names);
        check_case(case, &Setting::new(names, x, Response::YesNo(yes), n));
    }
}

#[test]
fn multinomial_paths_agree_with_the_reference() {
    let reference = values("multinomial.json");
    let table = Table::named("wine.csv");
    let outcome = table.names.last().unwrap().clone();
    let names = table.names_but(&[&outcome]);
    for case in list(&reference, "cases") {
        let class = table.column(&outcome).iter().map(|x| *x as usize).collect();
        let response = Response::Classes {
            class,
            n_classes: 3,
        };
        let n = number(case, "n") as usize;
        let setting = Setting::new(names.clone(), table.matrix(&names), response, n);
        check_case(case, &setting);
    }
}

/// 0/1 columns of the factors and of all products that vary, in the file's order.
fn quine(columns: &[String]) -> (Matrix, Vec<f64>) {
    let table = Table::named("quine.csv");
    let n = table.n_rows();
    let indicator = |name: &str| -> Vec<f64> {
        let (factor, level) = name.split_at(3);
        table
            .text(factor)
            .iter()
            .map(|value| f64::from(u8::from(*value == level)))
            .collect()
    };
    let mut x = Matrix::repeat(n, columns.len(), 1.0);
    for (j, name) in columns.iter().enumerate() {
        for part in name.split(':') {
            for (i, value) in indicator(part).into_iter().enumerate() {
                x[(i, j)] *= value;
            }
        }
    }
    (x, table.column("Days"))
}

fn texts(value: &Value, key: &str) -> Vec<String> {
    let names = list(value, key).iter();
    names
        .map(|name| name.as_str().unwrap().to_owned())
        .collect()
}

#[test]
fn poisson_paths_agree_with_the_reference() {
    let reference = values("poisson.json");
    let columns = texts(&reference, "columns");
    let (x, count) = quine(&columns);
    let response = Response::Count {
        count: count.clone(),
        offset: None,
    };
    for case in list(&reference, "cases") {
        let n = number(case, "n") as usize;
        let setting = Setting::new(columns.clone(), x.clone(), response.clone(), n);
        check_case(case, &setting);
    }
    // Main effects at strength 0, with their deviance.
    let main = &reference["main_effects_lambda_0"];
    let names: Vec<String> = columns
        .iter()
        .filter(|c| !c.contains(':'))
        .cloned()
        .collect();
    let (x, _) = quine(&names);
    for share in [0.0, 1.0] {
        let setting = Setting::new(names.clone(), x.clone(), response.clone(), 146);
        let path = setting.fit(share, &[0.0]);
        let found = path.coefficients(0);
        close(
            "intercept",
            found.intercept,
            number(main, "intercept"),
            1e-8,
        );
        let wanted = listed(&named(main, "coef_raw"), &names);
        all_close(
            "poisson",
            &spread(&found.predictors, names.len()),
            &wanted,
            1e-8,
        );
        let saturated: f64 = count
            .iter()
            .map(|y| if *y > 0.0 { y - y * y.ln() } else { 0.0 })
            .sum();
        let deviance = 2.0 * (146.0 * path.info(0).loss - saturated);
        close("deviance", deviance, number(main, "deviance"), 1e-9);
    }
}

#[test]
fn an_offset_moves_the_intercept_alone_when_it_is_constant() {
    let reference = values("poisson.json");
    let columns = texts(&reference, "columns");
    let (x, count) = quine(&columns);
    let fit = |offset: f64| {
        let response = Response::Count {
            count: count.clone(),
            offset: Some(vec![offset; 146]),
        };
        let setting = Setting::new(columns.clone(), x.clone(), response, 146);
        setting.fit(1.0, &[0.5]).coefficients(0)
    };
    let (plain, moved) = (fit(0.0), fit(1.25));
    close("intercept", moved.intercept + 1.25, plain.intercept, 1e-8);
    let list = |c: &[(usize, f64)]| c.iter().map(|(_, b)| *b).collect::<Vec<_>>();
    all_close(
        "slopes",
        &list(&moved.predictors),
        &list(&plain.predictors),
        1e-7,
    );
}

fn ties(case: &Value) -> Ties {
    match text(case, "ties") {
        "breslow" => Ties::Breslow,
        _ => Ties::Efron,
    }
}

fn times(time: Vec<f64>, event: Vec<bool>, ties: Ties) -> Response {
    Response::Time {
        time,
        event,
        strata: None,
        ties,
    }
}

#[test]
fn the_six_rows_with_ties_have_their_closed_forms() {
    // Therneau & Grambsch (2000), appendix E.1.
    let reference = values("cox.json");
    let six = &reference["six_rows"];
    let event = vec![true, false, true, true, false, true];
    for (key, ties) in [("breslow", Ties::Breslow), ("efron", Ties::Efron)] {
        let known = &six[key];
        let x = Matrix::from_column_slice(6, 1, &[1.0, 1.0, 1.0, 0.0, 0.0, 0.0]);
        let response = times(vec![1.0, 1.0, 6.0, 6.0, 8.0, 9.0], event.clone(), ties);
        let mut setting = Setting::new(vec!["x".to_owned()], x, response, 6);
        setting.scaling = Scaling::AsGiven;
        let path = setting.fit(1.0, &[0.0]);
        close(
            key,
            path.coefficients(0).predictors[0].1,
            number(known, "b_lambda_0"),
            1e-8,
        );
        close(
            key,
            -6.0 * path.info(0).loss,
            number(known, "loglik_at_b"),
            1e-10,
        );
        for (share, name) in [
            (0.0, "lambda 0.1 share 0"),
            (1.0, "lambda 0.1 share 1"),
            (0.5, "lambda 0.1 share 0.5"),
        ] {
            let path = setting.fit(share, &[0.1]);
            let wanted = number(&known["penalised_b"], name);
            close(key, path.coefficients(0).predictors[0].1, wanted, 1e-8);
        }
    }
}

#[test]
fn cox_paths_agree_with_the_reference() {
    let reference = values("cox.json");
    for case in list(&reference, "cases") {
        let name = text(case, "name");
        let table_name = format!("{}.csv", name.split('_').next().unwrap());
        let table = Table::named(&table_name);
        let names = texts(case, "predictors");
        let n = table.n_rows();
        let column = |name: &str| -> Vec<f64> {
            if table.names.contains(&name.to_owned()) {
                return table.column(name);
            }
            // A level of the one factor with text.
            let values = table.text("celltype");
            values
                .iter()
                .map(|v| f64::from(u8::from(*v == name)))
                .collect()
        };
        let columns: Vec<Vec<f64>> = names.iter().map(|name| column(name)).collect();
        let x = Matrix::from_fn(n, names.len(), |i, j| columns[j][i]);
        let event = table
            .column(text(case, "event"))
            .iter()
            .map(|e| *e == 1.0)
            .collect();
        let response = times(table.column(text(case, "time")), event, ties(case));
        let setting = Setting::new(names.clone(), x, response, n);
        let unpenalised = &case["lambda_0"];
        let path = setting.fit(1.0, &[0.0]);
        let found = spread(&path.coefficients(0).predictors, names.len());
        let wanted = listed(&named(unpenalised, "coef_raw"), &names);
        all_close(name, &found, &wanted, 1e-6);
        close(
            name,
            -(n as f64) * path.info(0).loss,
            number(unpenalised, "loglik"),
            1e-9,
        );
        for part in list(case, "penalised") {
            check_times(name, part, &setting, n);
        }
    }
}

#[test]
fn the_cumulative_hazard_agrees_with_the_reference() {
    // Breslow's estimate at the means of the predictors, from a lasso of the arrests after release.
    let reference = values("cox.json");
    let known = &reference["baseline_hazard"];
    let table = Table::named(text(known, "data"));
    let names: Vec<String> = known["coef_std"]
        .as_object()
        .unwrap()
        .keys()
        .cloned()
        .collect();
    let columns: Vec<Vec<f64>> = names.iter().map(|name| table.column(name)).collect();
    let n = table.n_rows();
    let x = Matrix::from_fn(n, names.len(), |i, j| columns[j][i]);
    let (time, event) = (table.column("week"), table.column("arrest"));
    let event: Vec<bool> = event.iter().map(|e| *e == 1.0).collect();
    let setting = Setting::new(names, x, times(time.clone(), event.clone(), ties(known)), n);
    let path = setting.fit(number(known, "share"), &[number(known, "lambda")]);
    let rows: Vec<usize> = (0..n).collect();
    let eta = path.predict(&setting.task(), &rows);
    let seen: Vec<(f64, bool, usize)> = time.iter().zip(&event).map(|(t, e)| (*t, *e, 0)).collect();
    let hazard = Hazard::of(&seen, eta.as_slice(), &vec![1.0; n]);
    for (week, at) in [("1", 1.0), ("10", 10.0), ("26", 26.0), ("52", 52.0)] {
        let wanted = number(&known["cumulative_baseline_hazard_at_week"], week);
        close(week, hazard.at(0, at), wanted, 1e-6);
        let wanted = number(&known["survival_of_row_0_at_week"], week);
        close(week, hazard.survival(0, at, eta[0]), wanted, 1e-6);
    }
}

fn check_times(name: &str, part: &Value, setting: &Setting, n: usize) {
    let share = number(part, "share");
    if share > 0.0 {
        let top = all_zero_point(
            &setting.task(),
            share,
            &Params::default(),
            &Work::unattended(),
        )
        .unwrap();
        close(name, top, number(part, "lambda_max"), 1e-10);
    }
    let fits = list(part, "fits");
    let strengths: Vec<f64> = fits.iter().map(|fit| number(fit, "lambda")).collect();
    let path = setting.fit(share, &strengths);
    let p = setting.names.len();
    for (at, fit) in fits.iter().enumerate() {
        let what = format!("{name} share {share} {}", strengths[at]);
        let info = path.info(at);
        assert!(info.relative_gap < 1e-11, "{what}: {info:?}");
        close(&what, info.objective, number(fit, "objective"), 1e-9);
        close(&what, -(n as f64) * info.loss, number(fit, "loglik"), 1e-9);
        assert_eq!(info.n_chosen, number(fit, "n_nonzero") as usize, "{what}");
        coefficients(
            &what,
            &standardised(&path, at, p),
            fit,
            "coef_std",
            &setting.names,
        );
        let solution = path.coefficients(at);
        let raw = spread(&solution.predictors, p);
        coefficients(&what, &raw, fit, "coef_raw", &setting.names);
        let found = certify(&setting.task(), share, strengths[at], &solution).unwrap();
        assert!(
            found.gap < 1e-9 && found.worst_violation < 1e-5,
            "{what}: {found:?}"
        );
    }
}

#[test]
fn a_wide_cox_path_agrees_with_the_reference() {
    let reference = values("cox.json");
    let wide = &reference["wide"];
    let table = Table::named("permeability.csv");
    let names = distinct(&table, &table.names_but(&["permeability"]), 60);
    assert_eq!(names.len(), number(wide, "predictors") as usize);
    let event = (0..table.n_rows()).map(|row| row % 4 != 3).collect();
    let response = times(table.column("permeability"), event, Ties::Breslow);
    let setting = Setting::new(names.clone(), table.matrix(&names), response, 60);
    let mut part = wide.clone();
    part["share"] = Value::from(1.0);
    check_times("wide", &part, &setting, 60);
}
