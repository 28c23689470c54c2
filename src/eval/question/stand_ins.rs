//! What could stand in for the chosen predictors?

use crate::base::number::Precision;
use crate::base::work::Work;
use crate::eval::caveat::stand_ins;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::Ended;
use crate::eval::kind::fit::Fitted;
use crate::eval::outcome::{Gives, Outcome};
use crate::eval::question::active_columns;
use crate::numeric::spectrum::correlations;

/// How many predictors of a ridge are looked at: those with the largest coefficients.
const MOST: usize = 20;

/// How many stand-ins of one predictor are listed; all are counted.
const LISTED: usize = 25;

/// Answers from correlations of the prepared predictors over the analysed samples.
pub fn answer(fitted: &Fitted, threshold: f64, work: &Work<'_>) -> Result<Outcome, Ended> {
    let last = &fitted.last;
    let rows = &fitted.prepared.data.analysed;
    let active = active_columns(fitted);
    let mut chosen: Vec<(usize, f64)> = fitted
        .chosen()
        .into_iter()
        .filter(|(_, v)| *v != 0.0)
        .collect();
    let n_chosen = chosen.len();
    chosen.sort_by(|(a, left), (b, right)| right.abs().total_cmp(&left.abs()).then(a.cmp(b)));
    if last.share == 0.0 {
        chosen.truncate(MOST);
    }
    let columns: Vec<usize> = chosen.iter().map(|(at, _)| *at).collect();
    let in_list = |at: usize| columns.contains(&at);
    let mut groups: Vec<(usize, Vec<(usize, f64)>)> = Vec::new();
    for (at, &column) in columns.iter().enumerate() {
        work.step(at, columns.len())?;
        let r = correlations(&last.samples.x, rows, &[column], &active);
        let mut found: Vec<(usize, f64)> = active
            .iter()
            .copied()
            .zip(r.iter().copied())
            .filter(|(other, r)| *other != column && !in_list(*other) && r.abs() >= threshold)
            .collect();
        found.sort_by(|(a, left), (b, right)| right.abs().total_cmp(&left.abs()).then(a.cmp(b)));
        groups.push((column, found));
    }
    let mut facts = Facts::new();
    facts.push(Fact::number(
        "correlation threshold",
        threshold,
        "",
        Precision::Decimals(2),
        "From which absolute correlation on an unchosen predictor counts as a stand-in.",
    ));
    facts.push(Fact::count(
        "chosen predictors",
        n_chosen,
        "How many predictors the final fit chose.",
    ));
    facts.push(Fact::count("predictors looked at", columns.len(), "For how many of them stand-ins were looked for: all, or of a ridge those with the largest coefficients."));
    facts.push(Fact::count(
        "predictors with stand-ins",
        groups.iter().filter(|(_, found)| !found.is_empty()).count(),
        "How many of them have a stand-in.",
    ));
    let mut all: Vec<usize> = groups
        .iter()
        .flat_map(|(_, found)| found.iter().map(|(at, _)| *at))
        .collect();
    all.sort_unstable();
    all.dedup();
    facts.push(Fact::count(
        "stand-ins in all",
        all.len(),
        "How many different unchosen predictors are stand-ins.",
    ));
    facts.push(Fact::count(
        "largest group",
        groups
            .iter()
            .map(|(_, found)| found.len())
            .max()
            .unwrap_or(0),
        "The largest number of stand-ins of one predictor.",
    ));
    let names = |at: &usize| fitted.column_name(*at);
    let number = |name: &str, values: Vec<f64>, precision: Precision, meaning: &str| {
        FactColumn::numbers(name, values, "", precision, meaning)
    };
    facts.push(Fact::table(
        "groups",
        vec![
            FactColumn::texts(
                "predictor",
                groups.iter().map(|(at, _)| names(at)).collect(),
                "The chosen predictor.",
            ),
            number(
                "stand-ins",
                groups.iter().map(|(_, found)| found.len() as f64).collect(),
                Precision::Whole,
                "How many unchosen predictors could stand in for it.",
            ),
            FactColumn::texts(
                "strongest stand-in",
                groups
                    .iter()
                    .map(|(_, found)| found.first().map(|(at, _)| names(at)).unwrap_or_default())
                    .collect(),
                "The stand-in with the largest absolute correlation.",
            ),
            number(
                "strongest correlation",
                groups
                    .iter()
                    .map(|(_, found)| found.first().map_or(f64::NAN, |(_, r)| *r))
                    .collect(),
                Precision::Decimals(3),
                "Its correlation with the chosen predictor.",
            ),
        ],
        "The chosen predictors, by falling coefficient, with their stand-ins.",
    ));
    let listed: Vec<(usize, usize, f64)> = groups
        .iter()
        .flat_map(|(column, found)| {
            found
                .iter()
                .take(LISTED)
                .map(move |(other, r)| (*column, *other, *r))
        })
        .collect();
    facts.push(Fact::table("stand-ins", vec![
        FactColumn::texts("predictor", listed.iter().map(|(column, ..)| names(column)).collect(), "The chosen predictor."),
        FactColumn::texts("stand-in", listed.iter().map(|(_, other, _)| names(other)).collect(), "A predictor that could stand in for it."),
        number("correlation", listed.iter().map(|(.., r)| *r).collect(), Precision::Decimals(3), "Their correlation over the analysed samples."),
    ], "The stand-ins of each chosen predictor, strongest first; the strongest of each are listed."));
    let caveats = stand_ins::check(
        &groups
            .iter()
            .map(|(_, found)| (found.len(), found.first().map_or(0.0, |(_, r)| r.abs())))
            .collect::<Vec<_>>(),
    );
    Ok(Outcome {
        gives: Gives::Facts,
        facts,
        caveats: caveats.into_iter().collect(),
    })
}
