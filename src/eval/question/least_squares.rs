//! Why can least squares not answer here?

use crate::base::number::Precision;
use crate::base::problem::Problem;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::Ended;
use crate::eval::kind::fit::Fitted;
use crate::eval::outcome::{Gives, Outcome};
use crate::eval::question::{active_columns, scale};
use crate::numeric::procedure::penalised_freedom;
use crate::numeric::spectrum::spectrum;

/// Answers from the spectrum of the prepared predictors of all analysed samples.
pub fn answer(fitted: &Fitted) -> Result<Outcome, Ended> {
    let rows = &fitted.prepared.data.analysed;
    let x = &fitted.last.samples.x;
    let columns = active_columns(fitted);
    let failed = |_| {
        Problem::new(
            "spectrum",
            "The spectrum of the predictors could not be computed.",
        )
        .mend("Look for predictors of enormous size, or scale them to unit variance.")
    };
    let all = spectrum(x, rows, &columns, scale(fitted)).map_err(failed)?;
    let share = fitted.last.share;
    // A lasso lifts no eigenvalue: it leaves predictors out. What a ridge penalty of the same
    // strength would add is shown beside it, and said to be that.
    let lift =
        fitted.last.strength * rows.len() as f64 * if share < 1.0 { 1.0 - share } else { 1.0 };
    let chosen: Vec<usize> = fitted.chosen().into_iter().map(|(at, _)| at).collect();
    let penalised = if share < 1.0 {
        all.condition(lift)
    } else if chosen.is_empty() {
        f64::NAN
    } else {
        spectrum(x, rows, &chosen, scale(fitted))
            .map_err(failed)?
            .condition(0.0)
    };
    let mut facts = Facts::new();
    facts.push(Fact::count(
        "samples",
        rows.len(),
        "How many samples were analysed.",
    ));
    facts.push(Fact::count(
        "predictors",
        columns.len(),
        "How many predictors could be chosen.",
    ));
    facts.push(Fact::count(
        "rank",
        all.rank(),
        "In how many independent directions the predictors vary over the samples.",
    ));
    facts.push(Fact::count(
        "zero eigenvalues",
        all.n_zero(),
        "How many eigenvalues of X'X are zero: directions about which the samples say nothing.",
    ));
    let digits = Precision::Significant(3);
    let first = all.eigenvalues.first().copied().unwrap_or(0.0);
    let last = all.eigenvalues.last().copied().unwrap_or(0.0);
    facts.push(Fact::number(
        "largest eigenvalue",
        first,
        "",
        digits,
        "The largest eigenvalue of X'X, of the predictors as the penalty sees them.",
    ));
    facts.push(Fact::number(
        "smallest positive eigenvalue",
        last,
        "",
        digits,
        "The smallest eigenvalue of X'X that is not zero.",
    ));
    facts.push(Fact::number("condition number", all.condition(0.0), "", digits, "The largest over the smallest eigenvalue of X'X: without limit when one of them is zero, and then least squares has no unique answer."));
    let meaning = if share < 1.0 {
        "The condition number once the penalty has added its constant to every eigenvalue."
    } else {
        "The condition number of X'X of the chosen predictors alone."
    };
    facts.push(Fact::number(
        "penalised condition number",
        penalised,
        "",
        digits,
        meaning,
    ));
    facts.push(Fact::number("penalty added", lift, "", digits, "What a ridge penalty of the chosen strength adds to every eigenvalue: strength times samples, times the ridge share in an elastic net."));
    facts.push(Fact::number(
        "chosen strength",
        fitted.last.strength,
        "",
        digits,
        "The penalty strength of the final fit.",
    ));
    let covariates = fitted.prepared.data.covariate_names.len();
    let (path, at) = (&fitted.last.path, fitted.last.strength_at);
    facts.push(Fact::number(
        "effective degrees of freedom",
        penalised_freedom(path, at, &fitted.response, covariates),
        "",
        digits,
        "How many parameters' worth of freedom the predictors use in the final fit.",
    ));
    facts.push(Fact::number(
        "participation ratio",
        all.participation_ratio(),
        "",
        digits,
        "How many directions really carry variation: (Σd²)²/Σd⁴ of the eigenvalues d².",
    ));
    // The zero eigenvalues are alike; as many as there are samples are enough to be seen.
    let n_shown = all.eigenvalues.len() + all.n_zero().min(rows.len());
    let values: Vec<f64> = (0..n_shown)
        .map(|at| all.eigenvalues.get(at).copied().unwrap_or(0.0))
        .collect();
    facts.push(Fact::table("spectrum", vec![
        FactColumn::numbers("direction", (1..=n_shown).map(|at| at as f64).collect(), "", Precision::Whole, "The direction, by falling eigenvalue."),
        FactColumn::numbers("eigenvalue", values.clone(), "", Precision::Significant(5), "The eigenvalue of X'X."),
        FactColumn::numbers("penalised eigenvalue", values.iter().map(|v| v + lift).collect(), "", Precision::Significant(5), "The eigenvalue with what a ridge penalty of this strength adds."),
        FactColumn::numbers("shrinkage factor", values.iter().map(|v| v / (v + lift)).collect(), "", Precision::Decimals(3), "How much of the direction a ridge penalty of this strength keeps: 1 all, 0 nothing."),
    ], "The eigenvalues of X'X; of those that are zero, at most as many as there are samples."));
    Ok(Outcome {
        gives: Gives::Facts,
        facts,
        caveats: Vec::new(),
    })
}
