//! The facts of a fit that are tables: error curve, outer choices, predictions, assignments.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, FactColumn};
use crate::eval::kind::fit::facts::STRENGTH;
use crate::eval::kind::fit::performance::Performance;
use crate::eval::kind::fit::{Fitted, Judged};
use crate::numeric::choose::Curve;

/// The error curve as a table: root mean squared errors with a band of one standard error.
#[must_use]
pub fn error_curve(fitted: &Fitted, curve: &Curve, unit: &str, digits: Precision) -> Fact {
    let n = curve.strengths.len();
    let root = |value: f64| value.max(0.0).sqrt();
    let mut columns = vec![FactColumn::numbers(
        "strength",
        curve.strengths.clone(),
        "",
        Precision::Significant(4),
        "The penalty strength.",
    )];
    if curve.standard_errors.is_empty() {
        columns.push(FactColumn::numbers(
            "criterion",
            curve.errors.clone(),
            "",
            Precision::Significant(5),
            "The value of the criterion that chose the strength.",
        ));
    } else {
        let shifted = |sign: f64| {
            (0..n)
                .map(|at| root(curve.errors[at] + sign * curve.standard_errors[at]))
                .collect()
        };
        // By the delta method: the standard error of a root is that of the square over twice it.
        let errors = (0..n)
            .map(|at| curve.standard_errors[at] / (2.0 * root(curve.errors[at])))
            .collect();
        columns.push(FactColumn::numbers(
            "error",
            curve.errors.iter().map(|e| root(*e)).collect(),
            unit,
            digits,
            "Root of the mean squared error in the inner parts.",
        ));
        columns.push(FactColumn::numbers(
            "standard error",
            errors,
            unit,
            digits,
            "Standard error of this error over the parts of a repeat.",
        ));
        columns.push(FactColumn::numbers(
            "low",
            shifted(-1.0),
            unit,
            digits,
            "The error less one standard error.",
        ));
        columns.push(FactColumn::numbers(
            "high",
            shifted(1.0),
            unit,
            digits,
            "The error and one standard error.",
        ));
    }
    let path = &fitted.last.path;
    let chosen = (0..n)
        .map(|at| {
            if at < path.n_points() {
                path.info(at).n_chosen as f64
            } else {
                f64::NAN
            }
        })
        .collect();
    columns.push(FactColumn::numbers(
        "chosen predictors",
        chosen,
        "",
        Precision::Whole,
        "How many predictors the fit on all analysed samples chooses at this strength.",
    ));
    Fact::table(
        "error curve",
        columns,
        "The error of every strength that was tried.",
    )
}

/// What each outer training part chose, and how well it predicted its held-out part.
#[must_use]
pub fn outer_choices(fitted: &Fitted, judged: &Judged, unit: &str, digits: Precision) -> Fact {
    let fits = &judged.held_out.fits;
    let observed = fitted.observed();
    let rmse = fits
        .iter()
        .map(|fit| {
            let square: f64 = fit
                .rows
                .iter()
                .zip(&fit.predicted)
                .map(|(&row, p)| (p - observed[row]).powi(2))
                .sum();
            (square / fit.rows.len() as f64).sqrt()
        })
        .collect();
    let number = |name: &str, values: Vec<f64>, precision: Precision, meaning: &str| {
        FactColumn::numbers(name, values, "", precision, meaning)
    };
    Fact::table(
        "outer choices",
        vec![
            number(
                "repeat",
                fits.iter().map(|f| f.repeat as f64 + 1.0).collect(),
                Precision::Whole,
                "The repeat.",
            ),
            number(
                "part",
                fits.iter().map(|f| f.part as f64 + 1.0).collect(),
                Precision::Whole,
                "The part that was held out.",
            ),
            number(
                "strength",
                fits.iter().map(|f| f.strength).collect(),
                STRENGTH,
                "The strength that its training part chose.",
            ),
            number(
                "lasso share",
                fits.iter().map(|f| f.share).collect(),
                Precision::Significant(2),
                "The lasso share that its training part chose.",
            ),
            number(
                "chosen predictors",
                fits.iter().map(|f| f.n_chosen as f64).collect(),
                Precision::Whole,
                "How many predictors its training part chose.",
            ),
            FactColumn::numbers(
                "rmse",
                rmse,
                unit,
                digits,
                "Root mean squared error on the held-out part.",
            ),
        ],
        "What each outer training part chose.",
    )
}

/// The held-out prediction of every analysed sample, beside what was observed.
#[must_use]
pub fn held_out_predictions(
    fitted: &Fitted,
    performance: &Performance,
    unit: &str,
    digits: Precision,
) -> Fact {
    let data = &fitted.prepared.data;
    let rows = &data.analysed;
    let observed: Vec<f64> = rows.iter().map(|&row| fitted.observed()[row]).collect();
    let mut columns = vec![
        FactColumn::texts(
            "sample",
            rows.iter().map(|&row| data.names[row].clone()).collect(),
            "The sample.",
        ),
        FactColumn::texts(
            "unit",
            rows.iter()
                .map(|&row| data.unit_names[data.units[row]].clone())
                .collect(),
            "The unit that it belongs to.",
        ),
    ];
    if let Some(batches) = &data.batches {
        columns.push(FactColumn::texts(
            "batch",
            rows.iter()
                .map(|&row| data.batch_names[batches[row]].clone())
                .collect(),
            "The batch that it belongs to.",
        ));
    }
    let residual = performance
        .predicted
        .iter()
        .zip(&observed)
        .map(|(p, o)| p - o)
        .collect();
    columns.push(FactColumn::numbers(
        "observed",
        observed,
        unit,
        digits,
        "The observed outcome.",
    ));
    columns.push(FactColumn::numbers(
        "predicted",
        performance.predicted.clone(),
        unit,
        digits,
        "The held-out prediction, the mean over repeats.",
    ));
    columns.push(FactColumn::numbers(
        "residual",
        residual,
        unit,
        digits,
        "Predicted less observed.",
    ));
    columns.push(FactColumn::numbers(
        "apparent",
        fitted.last.fitted.clone(),
        unit,
        digits,
        "The value of the final fit on its own sample; not a prediction.",
    ));
    Fact::table(
        "held-out predictions",
        columns,
        "The predictions of samples by fits that had not seen them.",
    )
}

/// The part in which every sample was held out, repeat by repeat.
#[must_use]
pub fn assignments(fitted: &Fitted, judged: &Judged) -> Fact {
    let data = &fitted.prepared.data;
    let mut columns = vec![FactColumn::texts(
        "sample",
        judged
            .plan
            .rows()
            .iter()
            .map(|&row| data.names[row].clone())
            .collect(),
        "The sample.",
    )];
    for (repeat, parts) in judged.plan.table().iter().enumerate() {
        columns.push(FactColumn::numbers(
            &format!("repeat {}", repeat + 1),
            parts.iter().map(|part| *part as f64 + 1.0).collect(),
            "",
            Precision::Whole,
            "The outer part in which the sample was held out.",
        ));
    }
    Fact::table(
        "assignments",
        columns,
        "In which outer part each sample was held out.",
    )
}
