//! The facts of a fit that are tables and that only one kind of outcome has.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, FactColumn};
use crate::eval::kind::fit::Fitted;
use crate::eval::kind::fit::measures::{Measure, Measures};
use crate::eval::kind::fit::performance::Performance;
use crate::numeric::matrix::Matrix;
use crate::numeric::measure::{Confusion, area_under_curve, predicted_class, quantile};
use crate::numeric::stability::wilson_interval;

const SHARE: Precision = Precision::Percent(0);

/// How many samples each class has.
#[must_use]
pub fn class_counts(fitted: &Fitted) -> Fact {
    let labels = &fitted.prepared.data.outcome.classes;
    let classes = fitted.scene().classes();
    let data = &fitted.prepared.data;
    let rows = |class: usize| -> Vec<usize> {
        let own = data.analysed.iter().zip(&classes);
        own.filter(|(_, of)| **of == class)
            .map(|(row, _)| *row)
            .collect()
    };
    let each = 0..labels.len();
    Fact::table(
        "classes",
        vec![
            FactColumn::texts("class", labels.clone(), "The class."),
            FactColumn::numbers(
                "samples",
                each.clone().map(|class| rows(class).len() as f64).collect(),
                "",
                Precision::Whole,
                "How many of the analysed samples are of this class.",
            ),
            FactColumn::numbers(
                "units",
                each.map(|class| data.count_units(&rows(class)) as f64)
                    .collect(),
                "",
                Precision::Whole,
                "To how many independent units they belong.",
            ),
        ],
        "The classes of the outcome.",
    )
}

/// The mean of a number over repeats in which it is known.
fn over_repeats(performance: &Performance, of: &dyn Fn(&Matrix) -> Option<f64>) -> f64 {
    let known: Vec<f64> = performance.each.iter().filter_map(of).collect();
    if known.is_empty() {
        f64::NAN
    } else {
        known.iter().sum::<f64>() / known.len() as f64
    }
}

/// What follows from calling yes from different probabilities on.
#[must_use]
pub fn thresholds(fitted: &Fitted, performance: &Performance) -> Fact {
    let events = fitted.scene().events();
    let prevalence = events.iter().filter(|event| **event).count() as f64 / events.len() as f64;
    let mut at: Vec<f64> = (1..10).map(|tenth| f64::from(tenth) / 10.0).collect();
    at.push(prevalence);
    at.sort_by(f64::total_cmp);
    at.dedup();
    let column = |name: &str, of: &dyn Fn(&Confusion) -> Option<f64>, meaning: &str| {
        let value = |threshold: &f64| {
            over_repeats(performance, &|scores| {
                let p: Vec<f64> = scores.column(0).iter().copied().collect();
                of(&Confusion::at(&events, &p, *threshold))
            })
        };
        FactColumn::numbers(name, at.iter().map(value).collect(), "", SHARE, meaning)
    };
    let name = |threshold: &f64| {
        if *threshold == prevalence {
            "prevalence"
        } else {
            ""
        }
        .to_owned()
    };
    Fact::table(
        "thresholds",
        vec![
            FactColumn::numbers(
                "threshold",
                at.clone(),
                "",
                Precision::Decimals(2),
                "Yes is called from this held-out probability on.",
            ),
            FactColumn::texts("which", at.iter().map(name).collect(), "What it is."),
            column(
                "sensitivity",
                &Confusion::sensitivity,
                "Share of events called.",
            ),
            column(
                "specificity",
                &Confusion::specificity,
                "Share of non-events not called.",
            ),
            column(
                "right among calls",
                &Confusion::positive_predictive_value,
                "Share of calls that were events.",
            ),
            column(
                "right among others",
                &Confusion::negative_predictive_value,
                "Share of the others that were none.",
            ),
        ],
        "Calls at stated thresholds, on held-out samples, averaged over repeats.",
    )
}

/// The fewest samples in a group of predictions.
const GROUP: usize = 10;

/// Held-out probabilities in groups beside observed shares.
#[must_use]
pub fn reliability(fitted: &Fitted, performance: &Performance) -> Fact {
    let events = fitted.scene().events();
    let p: Vec<f64> = performance.scores.column(0).iter().copied().collect();
    let n = p.len();
    let mut order: Vec<usize> = (0..n).collect();
    order.sort_by(|a, b| p[*a].total_cmp(&p[*b]).then(a.cmp(b)));
    let n_groups = (n / GROUP).clamp(1, 10);
    let mut groups: Vec<Vec<usize>> = vec![Vec::new(); n_groups];
    for (place, sample) in order.into_iter().enumerate() {
        groups[place * n_groups / n].push(sample);
    }
    let count = |group: &Vec<usize>| group.iter().filter(|at| events[**at]).count();
    let mean = |group: &Vec<usize>| group.iter().map(|at| p[*at]).sum::<f64>() / group.len() as f64;
    let share = |group: &Vec<usize>| count(group) as f64 / group.len() as f64;
    let ends = |group: &Vec<usize>| {
        wilson_interval(count(group), group.len(), 0.95).unwrap_or((f64::NAN, f64::NAN))
    };
    let column = |name: &str, of: &dyn Fn(&Vec<usize>) -> f64, digits: Precision, meaning: &str| {
        FactColumn::numbers(name, groups.iter().map(of).collect(), "", digits, meaning)
    };
    let digits = Precision::Decimals(3);
    Fact::table(
        "reliability",
        vec![
            column(
                "predicted",
                &mean,
                digits,
                "The mean held-out probability of the group.",
            ),
            column(
                "observed",
                &share,
                digits,
                "The share of the group with the event.",
            ),
            column(
                "low",
                &|g| ends(g).0,
                digits,
                "Lower end of its Wilson interval, samples taken as independent.",
            ),
            column(
                "high",
                &|g| ends(g).1,
                digits,
                "Upper end of the same interval.",
            ),
            column(
                "samples",
                &|g| g.len() as f64,
                Precision::Whole,
                "How many samples are in the group.",
            ),
        ],
        "Samples in groups of equal size by their held-out probability.",
    )
}

/// Observed against called classes.
#[must_use]
pub fn confusion(fitted: &Fitted, performance: &Performance) -> Fact {
    let labels = &fitted.prepared.data.outcome.classes;
    let counts = mean_confusion(fitted, performance);
    let digits = if performance.each.len() == 1 {
        Precision::Whole
    } else {
        Precision::Decimals(1)
    };
    let mut columns = vec![FactColumn::texts(
        "observed",
        labels.clone(),
        "The class it is of.",
    )];
    for (called, label) in labels.iter().enumerate() {
        columns.push(FactColumn::numbers(
            &format!("called {label}"),
            counts.iter().map(|row| row[called]).collect(),
            "",
            digits,
            "How many of its samples were called this, averaged over repeats.",
        ));
    }
    Fact::table(
        "confusion",
        columns,
        "How many held-out samples of each class were called each class.",
    )
}

/// Counts by observed and called class, the mean over repeats.
fn mean_confusion(fitted: &Fitted, performance: &Performance) -> Vec<Vec<f64>> {
    let classes = fitted.scene().classes();
    let k = fitted.prepared.data.outcome.classes.len();
    let mut counts = vec![vec![0.0; k]; k];
    let share = 1.0 / performance.each.len() as f64;
    for scores in &performance.each {
        for (place, own) in classes.iter().enumerate() {
            let row: Vec<f64> = scores.row(place).iter().copied().collect();
            counts[*own][predicted_class(&row)] += share;
        }
    }
    counts
}

/// How well each class is told from the others.
#[must_use]
pub fn by_class(fitted: &Fitted, performance: &Performance) -> Fact {
    let labels = &fitted.prepared.data.outcome.classes;
    let classes = fitted.scene().classes();
    let counts = mean_confusion(fitted, performance);
    let each = || 0..labels.len();
    let ratio = |part: f64, whole: f64| if whole > 0.0 { part / whole } else { f64::NAN };
    let of_class = |class: usize| counts[class].iter().sum::<f64>();
    let called = |class: usize| counts.iter().map(|row| row[class]).sum::<f64>();
    let area = |class: usize| {
        let is_own: Vec<bool> = classes.iter().map(|own| *own == class).collect();
        over_repeats(performance, &|scores| {
            let p: Vec<f64> = scores.column(class).iter().copied().collect();
            area_under_curve(&is_own, &p)
        })
    };
    let column = |name: &str, values: Vec<f64>, digits: Precision, meaning: &str| {
        FactColumn::numbers(name, values, "", digits, meaning)
    };
    Fact::table(
        "by class",
        vec![
            FactColumn::texts("class", labels.clone(), "The class."),
            column(
                "samples",
                each().map(of_class).collect(),
                Precision::Whole,
                "How many samples are of this class.",
            ),
            column(
                "sensitivity",
                each()
                    .map(|class| ratio(counts[class][class], of_class(class)))
                    .collect(),
                SHARE,
                "Share of its held-out samples called right, averaged over repeats.",
            ),
            column(
                "right among calls",
                each()
                    .map(|class| ratio(counts[class][class], called(class)))
                    .collect(),
                SHARE,
                "Share of the calls of this class that were right.",
            ),
            column(
                "auc against the rest",
                each().map(area).collect(),
                Precision::Decimals(3),
                "Area under the curve of this class against the rest, pairs of all parts pooled, averaged over repeats.",
            ),
        ],
        "How well each class is told from the others, on held-out samples.",
    )
}

/// How well times are predicted at the early, the middle and the late time.
#[must_use]
pub fn at_times(fitted: &Fitted, performance: &Performance) -> Fact {
    let scene = fitted.scene();
    let (times, events) = (scene.observed(), scene.events());
    let number = |name: &str, values: [f64; 3], unit: &str, digits: Precision, meaning: &str| {
        FactColumn::numbers(name, values.to_vec(), unit, digits, meaning)
    };
    let get = |measures: &Measures, list: [Measure; 3]| list.map(|measure| measures.get(measure));
    let areas = [Measure::AreaEarly, Measure::AreaMiddle, Measure::AreaLate];
    let briers = [
        Measure::BrierEarly,
        Measure::BrierMiddle,
        Measure::BrierLate,
    ];
    let digits = Precision::Decimals(3);
    let horizons = fitted.horizons;
    let so_far = |at: f64| {
        let known = times.iter().zip(&events);
        known
            .filter(|(time, event)| **event && **time <= at)
            .count() as f64
    };
    let beyond = |at: f64| times.iter().filter(|time| **time > at).count() as f64;
    Fact::table(
        "at stated times",
        vec![
            FactColumn::texts(
                "which",
                ["early time", "middle time", "late time"]
                    .map(str::to_owned)
                    .to_vec(),
                "Quartiles of the event times.",
            ),
            number(
                "time",
                horizons,
                &fitted.prepared.data.outcome.unit,
                Precision::Significant(4),
                "The time.",
            ),
            number(
                "events by then",
                horizons.map(so_far),
                "",
                Precision::Whole,
                "How many events had been seen.",
            ),
            number(
                "still without",
                horizons.map(beyond),
                "",
                Precision::Whole,
                "How many samples were still observed without an event.",
            ),
            number(
                "auc",
                get(&performance.mean, areas),
                "",
                digits,
                "Area under the curve at that time, weighed for censoring (Uno and others 2007).",
            ),
            number(
                "brier",
                get(&performance.mean, briers),
                "",
                digits,
                "Brier score at that time, weighed for censoring (Graf and others 1999).",
            ),
            number(
                "baseline brier",
                get(&performance.baseline, briers),
                "",
                digits,
                "The same of the model without predictors.",
            ),
        ],
        "How well held-out samples are predicted at stated times.",
    )
}

/// The cuts between three groups of equal size, by held-out risk.
#[must_use]
pub fn thirds(risk: &[f64]) -> (f64, f64) {
    (quantile(risk, 1.0 / 3.0), quantile(risk, 2.0 / 3.0))
}
