//! How do the coefficients change with the penalty?

use crate::eval::fact::FactTable;
use crate::figure::shape::trace::{Standing, Trace, TraceLine};
use crate::figure::shape::{Caption, Counts, Heading};
use crate::figure::{Meaning, Tip};
use crate::report::block::{Block, Grid, NamedFigure, Paragraph};
use crate::report::question::choice;
use crate::report::tell::{Source, Telling};
use std::collections::BTreeMap;

/// So many lines carry their names.
const NAMED: usize = 8;

/// The answer in one sentence.
#[must_use]
pub fn answer(source: &Source<'_>) -> Paragraph {
    let start = source.say(
        "From the strongest to the weakest penalty {predictors ever chosen} [predictor enters|\
         predictors enter] the model at some strength and {chosen predictors} [is|are] in it at \
         the chosen one",
        &[],
    );
    if source.is_above_zero("sign changes") {
        start.and(source.say(
            "; {sign changes} [changes its|change their] sign on the way.",
            &[],
        ))
    } else {
        start.text("; none changes its sign on the way.")
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figures(source).into_iter().map(Block::Figure).collect();
    blocks.extend(
        Grid::of_table(
            "How many predictors at each strength",
            source.cell,
            source.facts,
            "trace strengths",
        )
        .map(Block::Grid),
    );
    blocks
}

/// So many classes have a figure of their own; the table holds all.
const MOST_CLASSES: usize = 8;

/// One figure, or one for each class.
fn figures(source: &Source<'_>) -> Vec<NamedFigure> {
    let Some(trace) = source.rows("trace") else {
        return Vec::new();
    };
    if trace.column("class").is_none() {
        return vec![figure(source, trace, None)];
    }
    let mut classes: Vec<&String> = Vec::new();
    for class in trace.texts("class") {
        if !classes.contains(&class) {
            classes.push(class);
        }
    }
    classes
        .into_iter()
        .take(MOST_CLASSES)
        .enumerate()
        .map(|(nth, class)| figure(source, trace, Some((nth + 1, class))))
        .collect()
}

fn figure(source: &Source<'_>, trace: &FactTable, class: Option<(usize, &str)>) -> NamedFigure {
    let strengths = source.facts.table("trace strengths");
    let at: Vec<f64> = match strengths {
        Some(table) => table.numbers("strength").to_vec(),
        None => distinct(trace.numbers("strength")),
    };
    let choice = choice(source);
    let chosen_at = choice.as_ref().and_then(|choice| nearest(&at, choice.at));
    let lines = lines(trace, class.map(|(_, class)| class), &at, chosen_at);
    let of = class.map_or_else(String::new, |(_, class)| format!(" for “{class}”"));
    let shape = Trace {
        caption: Caption {
            title: format!("Standardised coefficients{of} against penalty strength"),
            description: "One line for each predictor, from the strongest to the weakest penalty."
                .to_owned(),
            empty: "No predictor is chosen at any strength.".to_owned(),
        },
        strength: Heading::new("", ""),
        coefficient: Heading::new("", ""),
        strengths: at,
        lines,
        chosen: choice,
        counts: Counts {
            label: "predictors".to_owned(),
            values: strengths.map_or_else(Vec::new, |table| {
                table.numbers("chosen predictors").to_vec()
            }),
            chosen: source
                .facts
                .get("chosen predictors")
                .map_or_else(String::new, |fact| fact.shown()),
            tips: Vec::new(),
        },
    };
    NamedFigure {
        name: match class {
            // By number: two names of classes may be the same as names of files.
            Some((nth, _)) => format!("coefficient-trace-{nth}"),
            None => "coefficient-trace".to_owned(),
        },
        figure: shape.figure(),
        reading: Paragraph::of(if class.is_some() {
            "Lines that swing or cross near the mark are not to be trusted one by one; the strip \
             counts predictors in any class."
        } else {
            "Lines that swing or cross near the mark are not to be trusted one by one."
        }),
    }
}

/// One line for each predictor; the largest at the chosen strength carry their names.
fn lines(
    trace: &FactTable,
    class: Option<&str>,
    at: &[f64],
    chosen_at: Option<usize>,
) -> Vec<TraceLine> {
    let mut order: Vec<&String> = Vec::new();
    let mut values: BTreeMap<&String, Vec<f64>> = BTreeMap::new();
    let place: BTreeMap<u64, usize> = at
        .iter()
        .enumerate()
        .map(|(place, strength)| (strength.to_bits(), place))
        .collect();
    let classes = trace.texts("class");
    let rows = trace
        .texts("predictor")
        .iter()
        .zip(trace.numbers("strength"))
        .zip(trace.numbers("standardised coefficient"))
        .enumerate()
        .filter(|(row, _)| class.is_none_or(|class| classes[*row] == class))
        .map(|(_, values)| values);
    for ((predictor, strength), coefficient) in rows {
        let line = values.entry(predictor).or_insert_with(|| {
            order.push(predictor);
            vec![0.0; at.len()]
        });
        if let Some(place) = place.get(&strength.to_bits()) {
            line[*place] = *coefficient;
        }
    }
    let size = |predictor: &String| {
        chosen_at.map_or(0.0, |place| {
            values.get(predictor).map_or(0.0, |line| line[place].abs())
        })
    };
    let mut by_size: Vec<(f64, &String)> = order
        .iter()
        .map(|predictor| (size(predictor), *predictor))
        .filter(|(size, _)| *size > 0.0)
        .collect();
    by_size.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(b.1)));
    let named: Vec<&String> = by_size.iter().take(NAMED).map(|(_, name)| *name).collect();
    order
        .iter()
        .map(|predictor| TraceLine {
            name: (*predictor).clone(),
            values: values.get(*predictor).cloned().unwrap_or_default(),
            standing: if named.contains(predictor) {
                Standing::Named
            } else {
                Standing::Quiet
            },
            tip: Some(Tip::new(
                Meaning::Predictor((*predictor).clone()),
                (*predictor).clone(),
            )),
        })
        .collect()
}

fn distinct(numbers: &[f64]) -> Vec<f64> {
    let mut all = numbers.to_vec();
    all.sort_by(|a, b| b.total_cmp(a));
    all.dedup();
    all
}

fn nearest(at: &[f64], strength: f64) -> Option<usize> {
    let away = |place: &usize| (at[*place].ln() - strength.ln()).abs();
    (0..at.len()).min_by(|a, b| away(a).total_cmp(&away(b)))
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    telling.say(source.say(
        "Along the penalty range {predictors ever chosen} [predictor|predictors] had a coefficient \
         other than zero at some strength.",
        &[],
    ));
    telling.say(source.say("{sign changes} of them changed [its|their] sign.", &[]));
    telling.done()
}
