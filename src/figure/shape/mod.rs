//! Figures for the questions of a study, built from plain numbers. Every text comes from the
//! caller.

pub mod agreement;
pub mod confusion;
pub mod distribution;
pub mod error_curve;
pub mod frequency;
pub mod histogram;
pub mod ladder;
pub mod learning;
pub mod profile;
pub mod reliability;
pub mod residual;
pub mod roc;
pub mod spectrum;
pub mod stages;
pub mod stand_ins;
pub mod survival;
pub mod trace;

use crate::figure::{Axis, Body, Figure, Panel, Tip, Zero};
use crate::figure::{Layer, Role};

/// The texts that every figure has.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Caption {
    /// One line above the figure.
    pub title: String,
    /// What a reader is told who cannot see it.
    pub description: String,
    /// Said when there is nothing to show.
    pub empty: String,
}

/// What the numbers of an axis are.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Heading {
    /// Their name; empty where the title says it.
    pub label: String,
    /// Their unit; may be empty.
    pub unit: String,
}

/// What was chosen, on a horizontal axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Choice {
    /// Where.
    pub at: f64,
    /// Said beside it.
    pub label: String,
    /// What the pointer is told.
    pub tip: Option<Tip>,
}

/// A count for each position of a horizontal axis, shown in a strip.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Counts {
    /// What is counted; stands to the left of the strip.
    pub label: String,
    /// The counts, one for each position.
    pub values: Vec<f64>,
    /// The count at what was chosen, as text; may be empty.
    pub chosen: String,
    /// What the pointer is told; empty, or as many.
    pub tips: Vec<Tip>,
}

impl Caption {
    /// A caption with a title only.
    #[must_use]
    pub fn titled(title: &str) -> Self {
        Self {
            title: title.to_owned(),
            ..Self::default()
        }
    }

    fn figure(&self, body: Body) -> Figure {
        Figure::of(&self.title, body)
            .with_description(&self.description)
            .with_empty(&self.empty)
    }
}

impl Heading {
    /// A heading from its label and unit.
    #[must_use]
    pub fn new(label: &str, unit: &str) -> Self {
        Self {
            label: label.to_owned(),
            unit: unit.to_owned(),
        }
    }

    fn linear(&self) -> Axis {
        Axis::linear(&self.label, &self.unit)
    }

    fn log(&self) -> Axis {
        Axis::log(&self.label, &self.unit)
    }
}

/// The strip with a count for each position, and the one at what was chosen in words.
fn count_strip(counts: &Counts, positions: &[f64], choice: Option<&Choice>) -> Option<Panel> {
    if counts.values.is_empty() {
        return None;
    }
    let mut layers = vec![Layer::Bars {
        role: Role::Quiet,
        x: positions.to_vec(),
        y: counts.values.clone(),
        tips: counts.tips.clone(),
    }];
    if let Some(choice) = choice
        && !counts.chosen.is_empty()
        && let Some(count) = value_near(positions, &counts.values, choice.at)
    {
        layers.push(Layer::Text {
            role: Role::Chosen,
            x: choice.at,
            y: count,
            text: counts.chosen.clone(),
        });
    }
    Some(Panel::strip(&counts.label, Zero::Shown, layers))
}

/// The value at the position nearest to a place, by ratio.
fn value_near(positions: &[f64], values: &[f64], at: f64) -> Option<f64> {
    let away = |position: f64| (position.ln() - at.ln()).abs();
    positions
        .iter()
        .zip(values)
        .filter(|(position, value)| away(**position).is_finite() && value.is_finite())
        .min_by(|a, b| away(*a.0).total_cmp(&away(*b.0)))
        .map(|(_, value)| *value)
}
