//! How do the coefficients change with the penalty?

use crate::base::number::Precision;
use crate::eval::caveat::shrunken_weights;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::Ended;
use crate::eval::kind::fit::Fitted;
use crate::eval::outcome::{Gives, Outcome};
use std::collections::BTreeMap;

/// How many lines a trace of a ridge shows; in a ridge every predictor has one.
const MOST_LINES: usize = 200;

/// Answers from the path of the final fit.
pub fn answer(fitted: &Fitted) -> Result<Outcome, Ended> {
    let path = &fitted.last.path;
    let n_points = path.n_points();
    let mut lines: BTreeMap<usize, Vec<f64>> = BTreeMap::new();
    for at in 0..n_points {
        for (column, value) in path.standardised(at) {
            if value != 0.0 {
                lines.entry(column).or_insert_with(|| vec![0.0; n_points])[at] = value;
            }
        }
    }
    let n_ever = lines.len();
    let n_turning = lines.values().filter(|line| changes_sign(line)).count();
    let mut kept: Vec<(usize, Vec<f64>)> = lines.into_iter().collect();
    if kept.len() > MOST_LINES && fitted.last.share == 0.0 {
        let chosen = fitted.last.strength_at;
        kept.sort_by(|(a, left), (b, right)| {
            right[chosen]
                .abs()
                .total_cmp(&left[chosen].abs())
                .then(a.cmp(b))
        });
        kept.truncate(MOST_LINES);
        kept.sort_by_key(|(column, _)| *column);
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
        path.info(fitted.last.strength_at).n_chosen,
        "How many predictors have one at the chosen strength.",
    ));
    facts.push(Fact::count(
        "sign changes",
        n_turning,
        "How many predictors have a coefficient that changes its sign along the range.",
    ));
    facts.push(Fact::count("lines shown", kept.len(), "How many predictors the trace shows: all that are ever chosen, or of a ridge those with the largest coefficients."));
    let mut predictor = Vec::new();
    let mut strength = Vec::new();
    let mut value = Vec::new();
    for (column, line) in &kept {
        let name = fitted.column_name(*column);
        for (at, coefficient) in line.iter().enumerate() {
            predictor.push(name.clone());
            strength.push(path.strength(at));
            value.push(*coefficient);
        }
    }
    facts.push(Fact::table(
        "trace",
        vec![
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
        ],
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
                    .map(|at| path.info(at).n_chosen as f64)
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
