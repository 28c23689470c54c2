//! How do the coefficients change with the penalty?

use crate::base::number::Precision;
use crate::eval::caveat::shrunken_weights;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::Ended;
use crate::eval::kind::fit::Fitted;
use crate::eval::outcome::{Gives, Outcome};
use crate::numeric::procedure::chosen_predictors;
use std::collections::BTreeMap;

/// How many lines a trace of a ridge shows; in a ridge every predictor has one.
const MOST_LINES: usize = 200;

/// The line of a predictor, in a class where there are classes.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
struct Key {
    class: usize,
    column: usize,
}

/// Answers from the path of the final fit.
pub fn answer(fitted: &Fitted) -> Result<Outcome, Ended> {
    let path = &fitted.last.path;
    let n_points = path.n_points();
    let mut lines: BTreeMap<Key, Vec<f64>> = BTreeMap::new();
    for at in 0..n_points {
        for class in 0..path.n_linear() {
            for (column, value) in path.class_standardised(at, class) {
                if value != 0.0 {
                    let key = Key { class, column };
                    lines.entry(key).or_insert_with(|| vec![0.0; n_points])[at] = value;
                }
            }
        }
    }
    let ever = |keys: &mut dyn Iterator<Item = usize>| {
        let mut columns: Vec<usize> = keys.collect();
        columns.sort_unstable();
        columns.dedup();
        columns.len()
    };
    let n_ever = ever(&mut lines.keys().map(|key| key.column));
    let turning = lines.iter().filter(|(_, line)| changes_sign(line));
    let n_turning = ever(&mut turning.map(|(key, _)| key.column));
    let mut kept: Vec<(Key, Vec<f64>)> = lines.into_iter().collect();
    if kept.len() > MOST_LINES && fitted.last.share == 0.0 {
        let chosen = fitted.last.strength_at;
        kept.sort_by(|(a, left), (b, right)| {
            right[chosen]
                .abs()
                .total_cmp(&left[chosen].abs())
                .then(a.cmp(b))
        });
        kept.truncate(MOST_LINES);
        kept.sort_by_key(|(key, _)| *key);
    }
    let mut facts = Facts::new();
    facts.push(Fact::number(
        "chosen strength",
        fitted.last.strength,
        "",
        Precision::Significant(3),
        "The penalty strength of the final fit.",
    ));
    facts.push(Fact::count(
        "predictors ever chosen",
        n_ever,
        "How many predictors have a coefficient other than zero at some strength of the range.",
    ));
    facts.push(Fact::count(
        "chosen predictors",
        fitted.chosen().len(),
        "How many predictors have one at the chosen strength.",
    ));
    facts.push(Fact::count(
        "sign changes",
        n_turning,
        "How many predictors have a coefficient that changes its sign along the range; with classes, in any of them.",
    ));
    facts.push(Fact::count("lines shown", kept.len(), "How many lines the trace shows: of all predictors that are ever chosen, in each class where there are classes; or of a ridge those with the largest coefficients."));
    let mut predictor = Vec::new();
    let mut strength = Vec::new();
    let mut value = Vec::new();
    let mut classes = Vec::new();
    let labels = &fitted.prepared.data.outcome.classes;
    for (key, line) in &kept {
        let name = fitted.column_name(key.column);
        for (at, coefficient) in line.iter().enumerate() {
            classes.push(labels.get(key.class).cloned().unwrap_or_default());
            predictor.push(name.clone());
            strength.push(path.strength(at));
            value.push(*coefficient);
        }
    }
    let mut columns = Vec::new();
    if path.n_linear() > 1 {
        columns.push(FactColumn::texts(
            "class",
            classes,
            "The class whose coefficient it is.",
        ));
    }
    columns.extend([
        FactColumn::texts("predictor", predictor, "The predictor."),
        FactColumn::numbers(
            "strength",
            strength,
            "",
            Precision::Significant(4),
            "The penalty strength.",
        ),
        FactColumn::numbers(
            "standardised coefficient",
            value,
            "",
            Precision::Significant(4),
            "Its coefficient on the scale that the penalty sees.",
        ),
    ]);
    facts.push(Fact::table(
        "trace",
        columns,
        "The coefficients at every strength, predictor by predictor.",
    ));
    facts.push(Fact::table(
        "trace strengths",
        vec![
            FactColumn::numbers(
                "strength",
                (0..n_points).map(|at| path.strength(at)).collect(),
                "",
                Precision::Significant(4),
                "The penalty strength.",
            ),
            FactColumn::numbers(
                "chosen predictors",
                (0..n_points)
                    .map(|at| {
                        if path.n_linear() == 1 {
                            path.info(at).n_chosen as f64
                        } else {
                            chosen_predictors(path, at).len() as f64
                        }
                    })
                    .collect(),
                "",
                Precision::Whole,
                "How many predictors have a coefficient other than zero.",
            ),
        ],
        "How many predictors are chosen at every strength.",
    ));
    Ok(Outcome {
        gives: Gives::Facts,
        facts,
        caveats: vec![shrunken_weights::always()],
    })
}

fn changes_sign(line: &[f64]) -> bool {
    line.iter().any(|value| *value > 0.0) && line.iter().any(|value| *value < 0.0)
}
