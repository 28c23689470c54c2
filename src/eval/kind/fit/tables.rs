//! The facts of a fit that are tables: error curve, outer choices, predictions, assignments.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, FactColumn};
use crate::eval::kind::fit::facts::{
    STRENGTH, curve_error, curve_unit, error_digits, measure_words,
};
use crate::eval::kind::fit::measures::{Measure, Sort};
use crate::eval::kind::fit::performance::{Performance, paired_loss};
use crate::eval::kind::fit::scene::Predictions;
use crate::eval::kind::fit::{Fitted, Judged};
use crate::numeric::choose::Curve;
use crate::numeric::measure::predicted_class;
use crate::numeric::procedure::{OuterFit, chosen_predictors};

/// The error curve as a table, with a band of one standard error.
#[must_use]
pub fn error_curve(fitted: &Fitted, curve: &Curve) -> Fact {
    let n = curve.strengths.len();
    let (unit, digits) = curve_unit(fitted);
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
        let told = |at: usize, shift: f64| {
            let error = curve.errors[at] + shift * curve.standard_errors[at];
            curve_error(fitted, error, curve.standard_errors[at])
        };
        let mut push = |name: &str, value: &dyn Fn(usize) -> f64, meaning: &str| {
            columns.push(FactColumn::numbers(
                name,
                (0..n).map(value).collect(),
                &unit,
                digits,
                meaning,
            ));
        };
        let what = if unit.is_empty() && fitted.sort() != Sort::Measured {
            format!("The {} in the inner parts.", measure_words(fitted))
        } else {
            "Root of the mean squared error in the inner parts.".to_owned()
        };
        push("error", &|at| told(at, 0.0).0, &what);
        push(
            "standard error",
            &|at| told(at, 0.0).1,
            "Standard error of this error over the parts of a repeat.",
        );
        push(
            "low",
            &|at| told(at, -1.0).0,
            "The error less one standard error.",
        );
        push(
            "high",
            &|at| told(at, 1.0).0,
            "The error and one standard error.",
        );
    }
    let path = &fitted.last.path;
    let chosen = (0..n)
        .map(|at| {
            if at >= path.n_points() {
                f64::NAN
            } else if path.n_linear() == 1 {
                path.info(at).n_chosen as f64
            } else {
                chosen_predictors(path, at).len() as f64
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

/// The error of one outer fit on the part that it had not seen.
fn part_error(fitted: &Fitted, fit: &OuterFit) -> f64 {
    let scene = fitted.scene_of(&fit.rows);
    let mut own = Predictions::new(&scene);
    for place in 0..fit.rows.len() {
        let linear: Vec<f64> = fit.linear.row(place).iter().copied().collect();
        own.put(&scene, place, 0, &linear, None);
    }
    let sort = fitted.sort();
    if sort == Sort::Time {
        return scene.ranked(&own).map_or(f64::NAN, |ranked| ranked.value);
    }
    let losses = scene.losses(paired_loss(sort), &own).unwrap_or_default();
    let mean = losses.iter().sum::<f64>() / losses.len() as f64;
    if sort == Sort::Measured {
        mean.sqrt()
    } else {
        mean
    }
}

/// What each outer training part chose, and how well it predicted its held-out part.
#[must_use]
pub fn outer_choices(fitted: &Fitted, judged: &Judged) -> Fact {
    let fits = &judged.held_out.fits;
    let sort = fitted.sort();
    let shown = if sort == Sort::Time {
        Measure::Concordance
    } else {
        paired_loss(sort)
    };
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
                shown.name(),
                fits.iter().map(|fit| part_error(fitted, fit)).collect(),
                shown.unit(&fitted.prepared.data.outcome.unit),
                shown.digits(error_digits(fitted)),
                &format!("{}, on the held-out part.", shown.meaning(sort)),
            ),
        ],
        "What each outer training part chose.",
    )
}

/// The columns that name a sample.
fn named(fitted: &Fitted) -> Vec<FactColumn> {
    let data = &fitted.prepared.data;
    let rows = &data.analysed;
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
    columns
}

const HELD_OUT: &str = "The held-out prediction, the mean over repeats.";
const APPARENT: &str = "The value of the final fit on its own sample; not a prediction.";

/// The held-out prediction of every analysed sample, beside what was observed.
#[must_use]
pub fn held_out_predictions(fitted: &Fitted, performance: &Performance) -> Fact {
    let mut columns = named(fitted);
    let scene = fitted.scene();
    let column =
        |at: usize| -> Vec<f64> { performance.scores.column(at).iter().copied().collect() };
    let own = fitted.last.apparent.scores(&scene);
    let apparent = |at: usize| -> Vec<f64> { own.column(at).iter().copied().collect() };
    let unit = &fitted.prepared.data.outcome.unit;
    let labels = &fitted.prepared.data.outcome.classes;
    let label = |class: usize| labels.get(class).cloned().unwrap_or_default();
    let share = Precision::Decimals(3);
    let mut number = |name: &str, values: Vec<f64>, unit: &str, digits: Precision, is: &str| {
        columns.push(FactColumn::numbers(name, values, unit, digits, is));
    };
    match fitted.sort() {
        Sort::Measured | Sort::Count => {
            let digits = error_digits(fitted);
            let observed = scene.observed();
            let residual = column(0)
                .iter()
                .zip(&observed)
                .map(|(p, o)| p - o)
                .collect();
            number("observed", observed, unit, digits, "The observed outcome.");
            number("predicted", column(0), unit, digits, HELD_OUT);
            number(
                "residual",
                residual,
                unit,
                digits,
                "Predicted less observed.",
            );
            number("apparent", apparent(0), unit, digits, APPARENT);
        }
        Sort::YesNo => {
            let observed = scene.classes().into_iter().map(label).collect();
            columns.push(FactColumn::texts(
                "observed",
                observed,
                "What was observed.",
            ));
            let what = "The held-out probability of the event, the mean over repeats.";
            columns.push(FactColumn::numbers("predicted", column(0), "", share, what));
            columns.push(FactColumn::numbers(
                "apparent",
                apparent(0),
                "",
                share,
                APPARENT,
            ));
        }
        Sort::Classes => {
            let observed = scene.classes().into_iter().map(label).collect();
            columns.push(FactColumn::texts(
                "observed",
                observed,
                "The class it is of.",
            ));
            let called = (0..scene.rows.len())
                .map(|place| {
                    let row: Vec<f64> = performance.scores.row(place).iter().copied().collect();
                    label(predicted_class(&row))
                })
                .collect();
            columns.push(FactColumn::texts(
                "predicted",
                called,
                "The class of the highest held-out probability, the mean over repeats.",
            ));
            for (class, name) in labels.iter().enumerate() {
                columns.push(FactColumn::numbers(
                    &format!("probability of {name}"),
                    column(class),
                    "",
                    share,
                    "The held-out probability of this class, the mean over repeats.",
                ));
            }
        }
        Sort::Time => {
            let time = scene.observed();
            number(
                "observed",
                time,
                unit,
                Precision::Significant(4),
                "The observed time.",
            );
            let events = scene.events();
            let word = |event: &bool| if *event { "event" } else { "censored" }.to_owned();
            columns.push(FactColumn::texts(
                "ended by",
                events.iter().map(word).collect(),
                "Whether the time ended with the event or with the observation.",
            ));
            columns.push(FactColumn::numbers(
                "predicted",
                column(0),
                "",
                share,
                "The held-out linear predictor, the mean over repeats: higher is an earlier event; zero is the means of the training part.",
            ));
            for (at, when) in ["early", "middle", "late"].into_iter().enumerate() {
                columns.push(FactColumn::numbers(
                    &format!("without the event at the {when} time"),
                    column(at + 1),
                    "",
                    share,
                    "The held-out share without the event at that time, the mean over repeats.",
                ));
            }
            columns.push(FactColumn::numbers(
                "apparent",
                apparent(0),
                "",
                share,
                APPARENT,
            ));
        }
    }
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
