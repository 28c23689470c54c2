//! Would the same predictors be chosen again?

use crate::base::number::Precision;
use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::base::work::Work;
use crate::eval::caveat::selection_unstable;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::Ended;
use crate::eval::kind::fit::{Fitted, Sort, halted};
use crate::eval::outcome::{Gives, Outcome};
use crate::eval::question::active_columns;
use crate::numeric::halves::{HalfChoice, select_on_halves};
use crate::numeric::parts::complementary_pairs;
use crate::numeric::procedure::{Halt, Level, Material, ProcedureError};
use crate::numeric::random::Random;
use crate::numeric::response::Response;
use crate::numeric::stability::{
    Selections, StabilityIndex, r_concave_bound, unimodal_bound, wilson_interval, worst_case_bound,
};
use std::collections::{BTreeMap, BTreeSet};

/// How many strengths lead from the strongest to the chosen one on a half: warm starts only.
const LEAD: usize = 8;

/// From which selection frequency on a predictor is listed although the final fit leaves it out.
const LISTED: f64 = 0.1;

/// Answers by fitting on complementary halves of the units (Shah & Samworth 2013).
pub fn answer(
    fitted: &Fitted,
    pairs: u32,
    threshold: f64,
    seed: u64,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Outcome, Ended> {
    if fitted.last.share == 0.0 {
        return Err(Problem::new(
            "ridge-chooses-nothing",
            "A ridge keeps every predictor, so there is no list that could be chosen again.",
        )
        .mend("Ask this of a lasso or an elastic net.")
        .into());
    }
    let trouble = |halt| halted(halt, &fitted.prepared, &fitted.settings);
    let material = fitted.material();
    let choices = halves(
        fitted,
        &material,
        pairs,
        seed,
        threads,
        &work.part(0.0..0.5),
    )
    .map_err(trouble)?;
    // The null companion: the same halves and strength, the outcome shuffled among units.
    let shuffled = shuffled(fitted, seed);
    let companion = Material {
        response: &shuffled,
        ..material
    };
    let null = halves(
        fitted,
        &companion,
        pairs,
        seed,
        threads,
        &work.part(0.5..1.0),
    )
    .map_err(trouble)?;
    let n_columns = fitted.last.samples.active.len();
    let selections = selections(n_columns, &choices);
    let (facts, index) = publish(fitted, pairs, threshold, &choices, &selections, &null);
    let caveats = selection_unstable::check(&facts, index.value);
    Ok(Outcome {
        gives: Gives::Facts,
        facts,
        caveats,
    })
}

fn halves(
    fitted: &Fitted,
    material: &Material<'_>,
    pairs: u32,
    seed: u64,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Vec<HalfChoice>, Halt> {
    let data = &fitted.prepared.data;
    let splits = complementary_pairs(pairs as usize, seed, &data.analysed, &material.structure)
        .map_err(|error| ProcedureError::Plan {
            level: Level::Outer,
            error,
        })?;
    let strongest = fitted
        .last
        .curves
        .get(fitted.last.share_at)
        .map_or(fitted.last.strength, |curve| curve.strengths[0]);
    let chosen = fitted.last.strength;
    let strengths: Vec<f64> = if strongest > chosen && chosen > 0.0 {
        let ratio = (chosen / strongest).powf(1.0 / (LEAD - 1) as f64);
        // The last one is the chosen strength itself, not a product of roundings.
        (0..LEAD - 1)
            .map(|at| strongest * ratio.powi(at as i32))
            .chain([chosen])
            .collect()
    } else {
        vec![chosen]
    };
    let procedure = fitted.procedure_as_chosen();
    let (choices, _) = select_on_halves(
        material,
        &procedure,
        &splits,
        fitted.last.share,
        &strengths,
        threads,
        work,
    )?;
    Ok(choices)
}

/// The outcome shuffled among units of equal size, each unit's samples kept together.
fn shuffled(fitted: &Fitted, seed: u64) -> Response {
    let data = &fitted.prepared.data;
    let mut members: BTreeMap<usize, Vec<usize>> = BTreeMap::new();
    for &row in &data.analysed {
        members.entry(data.units[row]).or_default().push(row);
    }
    let mut by_size: BTreeMap<usize, Vec<Vec<usize>>> = BTreeMap::new();
    for rows in members.into_values() {
        by_size.entry(rows.len()).or_default().push(rows);
    }
    // The sample whose outcome each sample gets.
    let mut from: Vec<usize> = (0..fitted.response.n_samples()).collect();
    for (size, units) in by_size {
        let mut order: Vec<usize> = (0..units.len()).collect();
        Random::new(seed, "null companion", size as u64).shuffle(&mut order);
        for (to, source) in units.iter().zip(order) {
            for (&to_row, &from_row) in to.iter().zip(&units[source]) {
                from[to_row] = from_row;
            }
        }
    }
    fitted.response.rearranged(&from)
}

fn selections(n_columns: usize, choices: &[HalfChoice]) -> Selections {
    let runs = choices
        .iter()
        .map(|half| half.chosen.iter().map(|(at, _)| *at).collect())
        .collect();
    Selections::new(n_columns, runs)
}

#[expect(
    clippy::too_many_lines,
    reason = "a list of facts, one after the other"
)]
fn publish(
    fitted: &Fitted,
    pairs: u32,
    threshold: f64,
    choices: &[HalfChoice],
    selections: &Selections,
    null: &[HalfChoice],
) -> (Facts, StabilityIndex) {
    let active = active_columns(fitted);
    let p = active.len();
    // The index compares with lists drawn at random from the predictors that could be chosen.
    let index = compact(selections, &active).index();
    let null_selections = compact(&self::selections(selections.n_predictors(), null), &active);
    let null_index = null_selections.index();
    let q = selections.mean_chosen();
    let trials = choices.len();
    let frequencies = selections.frequencies();
    let counts = selections.counts();
    let chosen = fitted.chosen();
    let in_list: BTreeSet<usize> = chosen.iter().map(|(at, _)| *at).collect();
    // With classes a predictor has several coefficients: the largest on the scale of the penalty.
    let coefficient: BTreeMap<usize, f64> = if fitted.sort() == Sort::Classes {
        chosen.iter().copied().collect()
    } else {
        let raw = fitted.last.path.coefficients(fitted.last.strength_at);
        raw.predictors.into_iter().collect()
    };
    let mut facts = Facts::new();
    let share = Precision::Percent(0);
    facts.push(Fact::count(
        "pairs",
        pairs as usize,
        "How many pairs of complementary halves of the units were drawn.",
    ));
    facts.push(Fact::count(
        "resamples",
        trials,
        "On how many halves the procedure was fitted.",
    ));
    facts.push(Fact::number(
        "threshold",
        threshold,
        "",
        share,
        "From which selection frequency on a predictor counts as chosen again.",
    ));
    facts.push(Fact::number(
        "strength used",
        fitted.last.strength,
        "",
        Precision::Significant(3),
        "The penalty strength on every half: that of the final fit.",
    ));
    facts.push(Fact::number(
        "mean chosen per half",
        q,
        "",
        Precision::Decimals(1),
        "How many predictors a half chose on average.",
    ));
    facts.push(Fact::count(
        "predictors",
        p,
        "How many predictors could be chosen.",
    ));
    facts.push(Fact::count(
        "chosen predictors",
        chosen.len(),
        "How many predictors the final fit chose.",
    ));
    let again = chosen
        .iter()
        .filter(|(at, _)| frequencies[*at] >= threshold)
        .count();
    facts.push(Fact::count(
        "chosen again",
        again,
        "How many of them were chosen on at least the threshold's share of halves.",
    ));
    let rarely = chosen
        .iter()
        .filter(|(at, _)| frequencies[*at] < 0.5)
        .count();
    facts.push(Fact::count(
        "chosen rarely",
        rarely,
        "How many of them were chosen on fewer than half of the halves.",
    ));
    let digits = Precision::Decimals(2);
    let mut number = |name: &str, value: Option<f64>, precision: Precision, meaning: &str| {
        facts.push(Fact::number(
            name,
            value.unwrap_or(f64::NAN),
            "",
            precision,
            meaning,
        ));
    };
    number(
        "stability index",
        index.value,
        digits,
        "Agreement of the lists, corrected for chance: 1 the same list each time, 0 lists drawn at random (Nogueira, Sechidis & Brown 2018).",
    );
    let ends = index.interval(0.95);
    number(
        "stability low",
        ends.map(|ends| ends.0),
        digits,
        "Lower end of its 95 % interval.",
    );
    number(
        "stability high",
        ends.map(|ends| ends.1.min(1.0)),
        digits,
        "Upper end of its 95 % interval.",
    );
    let bound = Precision::Significant(2);
    let about = "a bound on how many predictors of low selection probability (chosen no more often than the average predictor) are expected among those above the threshold; not a number of false discoveries";
    number(
        "expected low-selection predictors worst case",
        worst_case_bound(q, p, threshold),
        bound,
        &format!(
            "Without assumptions (Meinshausen & Bühlmann 2010; Shah & Samworth 2013): {about}."
        ),
    );
    number(
        "expected low-selection predictors unimodal",
        unimodal_bound(q, p, threshold, pairs as usize),
        bound,
        &format!("If selection frequencies are unimodal (Shah & Samworth 2013): {about}."),
    );
    number(
        "expected low-selection predictors r-concave",
        r_concave_bound(q, p, threshold, pairs as usize),
        bound,
        &format!("If selection frequencies are r-concave (Shah & Samworth 2013): {about}."),
    );
    number(
        "null stability index",
        null_index.value,
        digits,
        "The stability index of the same procedure on the outcome shuffled among units.",
    );
    let highest = null_selections
        .frequencies()
        .into_iter()
        .fold(0.0, f64::max);
    number(
        "null highest frequency",
        Some(highest),
        share,
        "The highest selection frequency of any predictor on the shuffled outcome.",
    );
    number(
        "null chosen per half",
        Some(null_selections.mean_chosen()),
        Precision::Decimals(1),
        "How many predictors a half chose on average on the shuffled outcome.",
    );
    // Those of the final fit and those that come close, by falling frequency.
    let mut listed: Vec<usize> = active
        .iter()
        .copied()
        .filter(|at| in_list.contains(at) || frequencies[*at] >= LISTED)
        .collect();
    listed.sort_by(|a, b| frequencies[*b].total_cmp(&frequencies[*a]).then(a.cmp(b)));
    let sign = |at: usize| {
        let signs: Vec<f64> = choices
            .iter()
            .flat_map(|half| {
                half.chosen
                    .iter()
                    .filter(|(c, _)| *c == at)
                    .map(|(_, sign)| *sign)
            })
            .collect();
        if signs.is_empty() {
            return f64::NAN;
        }
        let up = signs.iter().filter(|sign| **sign > 0.0).count();
        up.max(signs.len() - up) as f64 / signs.len() as f64
    };
    let column = |values: Vec<f64>, name: &str, precision: Precision, meaning: &str| {
        FactColumn::numbers(name, values, "", precision, meaning)
    };
    let wilson =
        |at: usize| wilson_interval(counts[at], trials, 0.95).unwrap_or((f64::NAN, f64::NAN));
    facts.push(Fact::table("frequencies", vec![
        FactColumn::texts("predictor", listed.iter().map(|&at| fitted.column_name(at)).collect(), "The predictor."),
        column(listed.iter().map(|&at| frequencies[at]).collect(), "frequency", share, "On what share of the halves it was chosen."),
        column(listed.iter().map(|&at| wilson(at).0).collect(), "low", share, "Lower end of the Wilson interval: how far the number of halves blurs the frequency."),
        column(listed.iter().map(|&at| wilson(at).1).collect(), "high", share, "Upper end of the same interval."),
        column(listed.iter().map(|&at| sign(at)).collect(), "sign consistency", share, "In what share of the halves that chose it the coefficient (with classes the largest) had its commoner sign."),
        FactColumn::texts("in the final list", listed.iter().map(|at| if in_list.contains(at) { "yes" } else { "no" }.to_owned()).collect(), "Whether the final fit chose it."),
        column(listed.iter().map(|at| coefficient.get(at).copied().unwrap_or(0.0)).collect(), "coefficient", Precision::Significant(4), if fitted.sort() == Sort::Classes { "The largest of its coefficients in the final fit, on the scale that the penalty sees." } else { "Its coefficient in the final fit." }),
    ], "How often each predictor was chosen on halves of the units: all of the final list, and others chosen on at least a tenth of the halves."));
    (facts, index)
}

/// The same selections over the active columns only, numbered anew.
fn compact(selections: &Selections, active: &[usize]) -> Selections {
    let runs = selections
        .runs()
        .iter()
        .map(|run| {
            run.iter()
                .filter_map(|at| active.binary_search(at).ok())
                .collect()
        })
        .collect();
    Selections::new(active.len(), runs)
}
