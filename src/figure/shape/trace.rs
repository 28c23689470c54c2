//! The coefficients against the penalty strength, and how many are not zero.

use crate::figure::shape::{Caption, Choice, Counts, Heading, count_strip};
use crate::figure::{
    At, Body, End, Figure, Height, Label, Layer, Panel, Quantity, Role, Tip, Weight,
};

/// What a coefficient trace is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Trace {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis.
    pub strength: Heading,
    /// The vertical axis.
    pub coefficient: Heading,
    /// The strengths, increasing or decreasing.
    pub strengths: Vec<f64>,
    /// One line for each predictor; those that are zero throughout are left out of the figure.
    pub lines: Vec<TraceLine>,
    /// The chosen strength.
    pub chosen: Option<Choice>,
    /// How many predictors are chosen at each strength.
    pub counts: Counts,
}

/// The coefficients of one predictor.
#[derive(Clone, Debug, PartialEq)]
pub struct TraceLine {
    /// Its name, set at its end if it is named.
    pub name: String,
    /// The coefficient at each strength.
    pub values: Vec<f64>,
    /// Whether it is one of those that are named.
    pub standing: Standing,
    /// What the pointer is told.
    pub tip: Option<Tip>,
}

/// Whether a line is one of those that are named.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Standing {
    /// In a colour of its own, with its name at its end.
    Named,
    /// A fine line of the background.
    Quiet,
}

/// From so many lines on, those of the background are see-through.
const CROWD: usize = 80;

impl Trace {
    /// The figure: the lines, and a strip with the count below it.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let is_ever = |line: &&TraceLine| {
            line.values
                .iter()
                .any(|value| *value != 0.0 && value.is_finite())
        };
        let mut layers = Vec::new();
        let quiet = |line: &&TraceLine| line.standing == Standing::Quiet;
        let named = |line: &&TraceLine| line.standing == Standing::Named;
        let background: Vec<&TraceLine> = self.lines.iter().filter(quiet).filter(is_ever).collect();
        let weight = if background.len() > CROWD {
            Weight::Faint
        } else {
            Weight::Fine
        };
        for line in background {
            layers.push(self.layer(line, Role::Quiet, weight, None));
        }
        for (nth, line) in self.lines.iter().filter(named).filter(is_ever).enumerate() {
            let label = Label {
                text: line.name.clone(),
                end: End::Left,
            };
            let role = Role::Series((nth % 250) as u8);
            layers.push(self.layer(line, role, Weight::Normal, Some(label)));
        }
        if let Some(choice) = &self.chosen {
            layers.push(Layer::Rule {
                role: Role::Chosen,
                at: At::X(choice.at),
                label: choice.label.clone(),
            });
        }
        let x = self.strength.log().of(Quantity::Strength);
        let mut panel = Panel::new(x, self.coefficient.linear(), layers);
        panel.height = Height::Share(1.25);
        let mut panels = vec![panel];
        panels.extend(count_strip(
            &self.counts,
            &self.strengths,
            self.chosen.as_ref(),
        ));
        self.caption.figure(Body::Panels(panels))
    }

    fn layer(&self, line: &TraceLine, role: Role, weight: Weight, label: Option<Label>) -> Layer {
        Layer::Line {
            role,
            x: self.strengths.clone(),
            y: without_rest(&line.values),
            weight,
            label,
            tip: line.tip.clone(),
        }
    }
}

/// The coefficients without the stretches at zero, so that lines do not cover each other there;
/// the zeros next to another value stay, so that each line begins on the axis.
fn without_rest(values: &[f64]) -> Vec<f64> {
    let is_zero = |at: Option<usize>| at.and_then(|at| values.get(at)).is_none_or(|v| *v == 0.0);
    (0..values.len())
        .map(|at| {
            let is_rest = is_zero(Some(at)) && is_zero(at.checked_sub(1)) && is_zero(Some(at + 1));
            if is_rest { f64::NAN } else { values[at] }
        })
        .collect()
}
