//! How does the error change with the penalty, and how firmly is the strength chosen?

use crate::figure::shape::error_curve::ErrorCurve;
use crate::figure::shape::{Caption, Counts, Heading};
use crate::figure::{Meaning, Tip};
use crate::report::block::{Block, Grid, NamedFigure, Paragraph};
use crate::report::noun;
use crate::report::question::{choice, strength_tips};
use crate::report::tell::{Source, Telling};

/// Below this gain over the strongest penalty the curve counts as flat: the convention of the
/// caveat on flat curves, as is one standard error.
const FLAT_SHARE: f64 = 0.02;

/// From which interquartile range of the logarithm (base ten) on the choice counts as loose: the
/// convention of the caveat on unsteady strengths.
const LOOSE: f64 = 0.5;

/// The answer in one sentence.
#[must_use]
pub fn answer(source: &Source<'_>) -> Paragraph {
    let is_flat = match source.facts.words("flat") {
        Some(word) => word == "yes",
        // A record from before this was a fact.
        None => {
            source
                .value("curve improvement")
                .is_some_and(|gain| gain < FLAT_SHARE)
                || source
                    .value("standard errors below the strongest")
                    .is_some_and(|count| count < 1.0)
        }
    };
    if !source.has("curve improvement") && !source.has("deviance gained") {
        return source.say(
            "The rule takes the strength {chosen strength}; it needs no held-out parts, so that \
             there is no held-out error to show.",
            &[],
        );
    }
    let start = if is_flat {
        source.say(
            "Hardly any penalty does better than the strongest, so that the chosen strength \
             ({chosen strength}) is close to arbitrary",
            &[],
        )
    } else if source.has("deviance gained") {
        source.say(
            "At the chosen strength, {chosen strength}, the error is among the lowest; the \
             cross-validated deviance of the partial likelihood lies {deviance gained} below that at \
             the strongest penalty",
            &[],
        )
    } else if is_square(source) {
        source.say(
            "At the chosen strength, {chosen strength}, the error is among the lowest; the lowest \
             squared error lies {curve improvement|%} below that at the strongest penalty",
            &[],
        )
    } else {
        source.say(
            "At the chosen strength, {chosen strength}, the error is among the lowest; the lowest \
             {error measure} lies {curve improvement|%} below that at the strongest penalty",
            &[],
        )
    };
    match source.value("strength log10 interquartile range") {
        None => start.text("; how firmly the strength is chosen was not examined."),
        Some(range) if range >= LOOSE => start.and(source.say(
            ", but other splits of the samples choose anything from {strength least} to {strength \
             most}.",
            &[],
        )),
        Some(_) => start.and(source.say(
            ", and other splits of the samples choose much the same ({strength least} to {strength \
             most}).",
            &[],
        )),
    }
}

/// Whether the error is a mean square of a measured quantity, as it was before there were others.
fn is_square(source: &Source<'_>) -> bool {
    source
        .facts
        .words("error measure")
        .is_none_or(|words| words == "mean squared error")
}

/// The rest of the answer.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figure(source).map(Block::Figure).into_iter().collect();
    let numbers = source.given(&[
        "chosen strength",
        "error measure",
        "lowest error",
        "lowest error standard error",
        "one-standard-error strength",
        "curve improvement",
        "deviance gained",
        "standard errors below the strongest",
        "strength log10 interquartile range",
        "strength least",
        "strength most",
        "share of outer fits at the edge",
        "fewest chosen predictors",
        "most chosen predictors",
    ]);
    blocks.push(Block::Grid(Grid::of_facts(
        "How firmly the strength is chosen",
        source.cell,
        &numbers,
    )));
    for (fact, title) in [
        ("error curve", "The error at each strength"),
        ("outer choices", "What each outer training part chose"),
    ] {
        blocks.extend(Grid::of_table(title, source.cell, source.facts, fact).map(Block::Grid));
    }
    blocks
}

/// The error curve; for rules without parts the criterion that chose.
#[must_use]
pub fn figure(source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("error curve")?;
    let (name, label) = if table.column("error").is_some() {
        (
            "error",
            source
                .facts
                .words("error measure")
                .filter(|_| !is_square(source))
                .unwrap_or("error"),
        )
    } else {
        ("criterion", "criterion")
    };
    let column = table.column(name)?;
    let repeats = source
        .rows("outer choices")
        .map_or_else(Vec::new, |outer| outer.numbers("strength").to_vec());
    let chosen = source
        .facts
        .get("chosen predictors")
        .map_or_else(String::new, |fact| fact.shown());
    let heading = Heading::new("", &column.unit);
    let unit = if column.unit.is_empty() {
        String::new()
    } else {
        format!(", {},", column.unit)
    };
    let shape = ErrorCurve {
        caption: Caption {
            title: format!("{}{unit} against penalty strength", noun::capital(label)),
            description: format!(
                "The {label} at each penalty strength, with the chosen strength marked."
            ),
            empty: "No strength was tried.".to_owned(),
        },
        strength: Heading::new("", ""),
        error: heading,
        strengths: table.numbers("strength").to_vec(),
        errors: table.numbers(name).to_vec(),
        low: table.numbers("low").to_vec(),
        high: table.numbers("high").to_vec(),
        spread_low: Vec::new(),
        spread_high: Vec::new(),
        tips: strength_tips(table, &[(name, label), ("chosen predictors", "predictors")]),
        // The error of the mean alone comes from the outer parts; this curve from the inner ones.
        baseline: None,
        chosen: choice(source),
        repeat_tips: repeat_tips(source),
        repeats,
        repeat_label: "chosen in".to_owned(),
        counts: Counts {
            label: "predictors".to_owned(),
            values: table.numbers("chosen predictors").to_vec(),
            chosen,
            tips: Vec::new(),
        },
    };
    Some(NamedFigure {
        name: "error-curve".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(
            "A flat bottom means that the choice matters little; scattered dots mean that another \
             split would have chosen otherwise.",
        ),
    })
}

fn repeat_tips(source: &Source<'_>) -> Vec<Tip> {
    let Some(table) = source.rows("outer choices") else {
        return Vec::new();
    };
    let count = |column: &str, row: usize| {
        let number = table.numbers(column).get(row).copied().unwrap_or(1.0);
        (number.max(1.0) as usize).saturating_sub(1)
    };
    let text = |column: &str, row: usize| {
        table
            .column(column)
            .map_or_else(String::new, |column| column.shown(row))
    };
    (0..table.n_rows())
        .map(|row| {
            let meaning = Meaning::Part {
                repeat: count("repeat", row),
                part: count("part", row),
            };
            let words = format!(
                "repeat {}, outer part {}: strength {}, predictors {}",
                text("repeat", row),
                text("part", row),
                text("strength", row),
                text("chosen predictors", row)
            );
            Tip::new(meaning, words)
        })
        .collect()
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    if source.has("lowest error") {
        telling.say(source.say(
            if source.has("deviance gained") {
                "The {error measure} had its lowest value {lowest error} (standard error {lowest error \
                 standard error}); over all events the cross-validated deviance there was {deviance \
                 gained} below that at the strongest penalty."
            } else if is_square(source) {
                "The error over the strengths had its lowest value {lowest error} (standard error \
                 {lowest error standard error}); the squared error there was {curve improvement|%} \
                 below that at the strongest penalty."
            } else {
                "The {error measure} had its lowest value {lowest error} (standard error {lowest error \
                 standard error}), {curve improvement|%} below that at the strongest penalty."
            },
            &[],
        ));
    }
    if source.has("one-standard-error strength") {
        telling.say(source.say(
            "The one-standard-error rule would have taken the strength {one-standard-error \
             strength}.",
            &[],
        ));
    }
    if source.has("strength least") {
        telling.say(source.say(
            "Over the outer training parts the chosen strengths lay between {strength least} and \
             {strength most}; the interquartile range of their logarithms (base ten) was {strength \
             log10 interquartile range}.",
            &[],
        ));
    }
    telling.done()
}
