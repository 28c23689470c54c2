//! The figure of a Prepare cell: a few samples before and after each step.

use crate::eval::fact::FactTable;
use crate::figure::shape::stages::{Course, Curve, Stage, Stages};
use crate::figure::shape::{Caption, Heading};
use crate::figure::{Meaning, Tip};
use crate::report::block::{NamedFigure, Paragraph};
use crate::report::tell::Source;
use std::ops::Range;

/// So many stages stand in one figure; a longer list goes on in the next.
const IN_A_FIGURE: usize = 4;

/// The figures, so many as the stages need. A step that leaves every followed value as it was has
/// no panel of its own.
#[must_use]
pub fn figures(source: &Source<'_>) -> Vec<NamedFigure> {
    let Some(table) = source.rows("followed samples") else {
        return Vec::new();
    };
    let mut stages: Vec<Range<usize>> = Vec::new();
    for range in runs(table.numbers("stage")) {
        let changed = stages
            .last()
            .is_none_or(|before| !is_same(table, before.clone(), range.clone()));
        if changed {
            stages.push(range);
        }
    }
    if stages.len() < 2 {
        return Vec::new();
    }
    let count = stages.len().div_ceil(IN_A_FIGURE);
    stages
        .chunks(IN_A_FIGURE)
        .enumerate()
        .map(|(at, stages)| {
            let part = match count {
                1 => String::new(),
                _ => format!(" ({} of {count})", at + 1),
            };
            let shape = Stages {
                caption: Caption {
                    title: format!("A few samples before and after the steps{part}"),
                    description: "One panel for each step that changes values; training samples \
                                  and held-out samples in two colours."
                        .to_owned(),
                    empty: "No value is known.".to_owned(),
                },
                stages: stages
                    .iter()
                    .map(|range| stage(table, range.clone()))
                    .collect(),
            };
            NamedFigure {
                name: match at {
                    0 => "steps".to_owned(),
                    _ => format!("steps-{}", at + 1),
                },
                figure: shape.figure(),
                reading: Paragraph::of(
                    "Held-out samples had no part in what the learned steps know; they should look \
                     like the training samples after each step.",
                ),
            }
        })
        .collect()
}

/// Runs of equal numbers.
fn runs(numbers: &[f64]) -> Vec<Range<usize>> {
    let mut runs = Vec::new();
    let mut start = 0;
    for run in numbers.chunk_by(|a, b| a == b) {
        runs.push(start..start + run.len());
        start += run.len();
    }
    runs
}

fn is_same(table: &FactTable, a: Range<usize>, b: Range<usize>) -> bool {
    let values = table.numbers("value");
    let bits = |range: Range<usize>| values[range].iter().map(|value| value.to_bits());
    a.len() == b.len()
        && table.texts("predictor")[a.clone()] == table.texts("predictor")[b.clone()]
        && bits(a).eq(bits(b))
}

fn stage(table: &FactTable, range: Range<usize>) -> Stage {
    let text = |column: &str| table.texts(column)[range.start].clone();
    let positions = &table.numbers("position")[range.clone()];
    // Places among predictors are counted; positions on an axis are numbers of their own.
    let unit = table
        .column("position")
        .map_or_else(String::new, |column| column.unit.clone());
    let samples = &table.texts("sample")[range.clone()];
    let values = &table.numbers("value")[range.clone()];
    let parts = &table.texts("part")[range.clone()];
    let along = text("along");
    let mut start = 0;
    let mut curves: Vec<Curve> = Vec::new();
    for run in samples.chunk_by(|a, b| a == b) {
        let rows = start..start + run.len();
        start += run.len();
        let part = &parts[rows.start];
        let sort = u8::from(part == "held-out");
        let is_first = curves.iter().all(|curve| curve.sort != sort);
        let mut pairs: Vec<(f64, f64)> = positions[rows.clone()]
            .iter()
            .copied()
            .zip(values[rows.clone()].iter().copied())
            .collect();
        pairs.sort_by(|a, b| a.0.total_cmp(&b.0));
        let name = &samples[rows.start];
        curves.push(Curve {
            sort,
            label: if is_first {
                part.clone()
            } else {
                String::new()
            },
            positions: pairs.iter().map(|pair| pair.0).collect(),
            values: pairs.iter().map(|pair| pair.1).collect(),
            tip: Some(Tip::new(
                Meaning::Sample(name.clone()),
                format!("{name}, {part}"),
            )),
        });
    }
    Stage {
        label: text("after"),
        position: match along.as_str() {
            "axis" => Heading::new("", &unit),
            "scores" => Heading::new("score", ""),
            _ => Heading::new("place among the predictors", ""),
        },
        course: if along == "axis" && is_dense(&curves) {
            Course::Line
        } else {
            Course::Dots
        },
        curves,
    }
}

/// Whether the positions of the samples have no holes, such as a filter leaves: no distance is
/// more than four times the usual one.
fn is_dense(curves: &[Curve]) -> bool {
    let Some(first) = curves.first() else {
        return true;
    };
    let mut distances: Vec<f64> = first
        .positions
        .windows(2)
        .map(|pair| pair[1] - pair[0])
        .collect();
    distances.sort_by(f64::total_cmp);
    match (distances.get(distances.len() / 2), distances.last()) {
        (Some(usual), Some(most)) => *most <= 4.0 * usual,
        _ => true,
    }
}
