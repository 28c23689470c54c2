//! Reading the tables and values of this folder, and comparing numbers.

use serde_json::Value;
use std::collections::BTreeMap;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::path::Path;

/// A table of text values.
pub struct Table {
    pub names: Vec<String>,
    rows: Vec<Vec<String>>,
}

impl Table {
    pub fn named(file: &str) -> Self {
        let text = match file {
            "meats.csv" => include_str!("data/meats.csv"),
            "permeability.csv" => include_str!("data/permeability.csv"),
            "diabetes.csv" => include_str!("data/diabetes.csv"),
            "longley.csv" => include_str!("data/longley.csv"),
            "hald.csv" => include_str!("data/hald.csv"),
            "breast_cancer_80.csv" => include_str!("data/breast_cancer_80.csv"),
            "wine.csv" => include_str!("data/wine.csv"),
            "quine.csv" => include_str!("data/quine.csv"),
            "rossi.csv" => include_str!("data/rossi.csv"),
            "ovarian.csv" => include_str!("data/ovarian.csv"),
            "veteran.csv" => include_str!("data/veteran.csv"),
            other => panic!("there is no table {other}"),
        };
        let mut lines = text.lines();
        let split = |line: &str| line.split(',').map(str::to_owned).collect::<Vec<_>>();
        let names = split(lines.next().unwrap());
        let rows = lines.filter(|line| !line.is_empty()).map(split).collect();
        Self { names, rows }
    }

    pub fn n_rows(&self) -> usize {
        self.rows.len()
    }

    pub fn text(&self, name: &str) -> Vec<&str> {
        let at = self.names.iter().position(|n| n == name).unwrap();
        self.rows.iter().map(|row| row[at].as_str()).collect()
    }

    pub fn column(&self, name: &str) -> Vec<f64> {
        self.text(name).iter().map(|x| x.parse().unwrap()).collect()
    }

    /// The columns with these names as a matrix.
    pub fn matrix(&self, names: &[String]) -> Matrix {
        let columns: Vec<Vec<f64>> = names.iter().map(|name| self.column(name)).collect();
        Matrix::from_fn(self.n_rows(), names.len(), |i, j| columns[j][i])
    }

    /// The names of all columns but these.
    pub fn names_but(&self, others: &[&str]) -> Vec<String> {
        self.names
            .iter()
            .filter(|name| !others.contains(&name.as_str()))
            .cloned()
            .collect()
    }
}

/// Of columns that are equal or exactly opposite (once centred) keeps the first; drops constants.
pub fn distinct(table: &Table, names: &[String], n_rows: usize) -> Vec<String> {
    let mut seen = std::collections::BTreeSet::new();
    let mut kept = Vec::new();
    for name in names {
        let column: Vec<f64> = table.column(name)[..n_rows].to_vec();
        if column.iter().all(|x| *x == column[0]) {
            continue;
        }
        // All these columns hold 0 and 1 only: opposite means the other way round.
        let first = column[0];
        let pattern: Vec<bool> = column.iter().map(|x| *x == first).collect();
        if seen.insert(pattern) {
            kept.push(name.clone());
        }
    }
    kept
}

/// A file of reference values.
pub fn values(file: &str) -> Value {
    let text = match file {
        "gaussian_lasso_enet.json" => include_str!("values/gaussian_lasso_enet.json"),
        "gaussian_ridge.json" => include_str!("values/gaussian_ridge.json"),
        "collinearity.json" => include_str!("values/collinearity.json"),
        "binomial.json" => include_str!("values/binomial.json"),
        "multinomial.json" => include_str!("values/multinomial.json"),
        "poisson.json" => include_str!("values/poisson.json"),
        "cox.json" => include_str!("values/cox.json"),
        "cv.json" => include_str!("values/cv.json"),
        // Kept once: the tests of stability share it.
        "stability.json" => include_str!("../steps/stability.json"),
        other => panic!("there are no values {other}"),
    };
    serde_json::from_str(text).unwrap()
}

pub fn list<'a>(value: &'a Value, key: &str) -> &'a [Value] {
    value[key].as_array().unwrap()
}

pub fn number(value: &Value, key: &str) -> f64 {
    value[key]
        .as_f64()
        .unwrap_or_else(|| panic!("no number {key} in {value}"))
}

pub fn numbers(value: &Value, key: &str) -> Vec<f64> {
    list(value, key)
        .iter()
        .map(|x| x.as_f64().unwrap())
        .collect()
}

pub fn text<'a>(value: &'a Value, key: &str) -> &'a str {
    value[key].as_str().unwrap()
}

/// Named numbers.
pub fn named(value: &Value, key: &str) -> BTreeMap<String, f64> {
    value[key]
        .as_object()
        .unwrap()
        .iter()
        .map(|(name, x)| (name.clone(), x.as_f64().unwrap()))
        .collect()
}

/// Asserts that two numbers differ by at most `tolerance` times the size of the expected one.
#[track_caller]
pub fn close(what: &str, found: f64, expected: f64, tolerance: f64) {
    let off = (found - expected).abs();
    assert!(
        off <= tolerance * expected.abs(),
        "{what}: found {found}, expected {expected}, off by {:e} of it",
        off / expected.abs()
    );
}

/// Asserts that lists differ by at most `tolerance` times the largest expected entry.
#[track_caller]
pub fn all_close(what: &str, found: &[f64], expected: &[f64], tolerance: f64) {
    assert_eq!(found.len(), expected.len(), "{what}: lengths");
    let top = expected.iter().fold(0.0_f64, |top, x| top.max(x.abs()));
    for (at, (f, e)) in found.iter().zip(expected).enumerate() {
        assert!(
            (f - e).abs() <= tolerance * top,
            "{what}[{at}]: found {f}, expected {e}, off by {:e} of the largest",
            (f - e).abs() / top
        );
    }
}

/// Sparse coefficients as a list over all names.
pub fn spread(coefficients: &[(usize, f64)], p: usize) -> Vec<f64> {
    let mut all = vec![0.0; p];
    for &(j, b) in coefficients {
        all[j] = b;
    }
    all
}

/// Named reference coefficients as a list over all names; those not listed are zero.
pub fn listed(expected: &BTreeMap<String, f64>, names: &[String]) -> Vec<f64> {
    assert!(expected.keys().all(|name| names.contains(name)));
    names
        .iter()
        .map(|name| expected.get(name).copied().unwrap_or(0.0))
        .collect()
}

/// The coefficients of a fit in the scale of the penalty, as a list over all predictors.
pub fn standardised(path: &Path, at: usize, p: usize) -> Vec<f64> {
    spread(&path.standardised(at), p)
}
