//! The share without an event over time, a stepped line for each group.

use crate::figure::shape::{Caption, Heading};
use crate::figure::{Axis, Body, End, Figure, Height, Label, Layer, Panel, Role, Scale, Zero};

/// What survival curves are built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Survival {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis.
    pub time: Heading,
    /// The vertical axis.
    pub share: Heading,
    /// The groups, from the lowest risk to the highest.
    pub groups: Vec<Group>,
    /// The times at which the numbers at risk are written.
    pub times: Vec<f64>,
    /// What the numbers below are; stands above their names.
    pub at_risk: String,
}

/// One group.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Group {
    /// Its name.
    pub name: String,
    /// Times of the steps, increasing, from 0 on.
    pub times: Vec<f64>,
    /// The share without an event from each time on.
    pub shares: Vec<f64>,
    /// The lower end of its band; empty for none.
    pub low: Vec<f64>,
    /// The upper end.
    pub high: Vec<f64>,
    /// How many are at risk at each of the written times, as text; may be empty.
    pub at_risk: Vec<String>,
}

impl Survival {
    /// The figure: the curves, and a line with the numbers at risk for each group.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let mut layers = Vec::new();
        for (nth, group) in self.groups.iter().enumerate() {
            let role = Role::Series((nth % 250) as u8);
            let (x, low) = stairs(&group.times, &group.low);
            let (_, high) = stairs(&group.times, &group.high);
            layers.push(Layer::Band { role, x, low, high });
        }
        for (nth, group) in self.groups.iter().enumerate() {
            layers.push(Layer::Steps {
                role: Role::Series((nth % 250) as u8),
                x: group.times.clone(),
                y: group.shares.clone(),
                label: Some(Label {
                    text: group.name.clone(),
                    end: End::Right,
                })
                .filter(|label| !label.text.is_empty()),
                tip: None,
            });
        }
        let y =
            Axis::scaled(&self.share.label, &self.share.unit, Scale::Percent).with_range(0.0, 1.0);
        let mut time = self.time.linear().with_zero(Zero::Shown);
        time.ticks.clone_from(&self.times);
        let reach = self.groups.iter().flat_map(|group| &group.times);
        let last = reach
            .chain(&self.times)
            .copied()
            .filter(|time| time.is_finite())
            .fold(0.0, f64::max);
        if last > 0.0 && last < 1e300 {
            time = time.with_range(0.0, last);
        }
        let mut panels = vec![Panel::new(time, y, layers)];
        panels.extend(self.numbers_at_risk());
        self.caption.figure(Body::Panels(panels))
    }
}

impl Survival {
    /// A line of text that says what the numbers are, and one with numbers for each group.
    fn numbers_at_risk(&self) -> Vec<Panel> {
        let line = |label: &str, layers| {
            let mut line = Panel::strip(label, Zero::Free, layers);
            line.y.range = Some((0.0, 1.0));
            line.height = Height::Line;
            line
        };
        let mut lines = Vec::new();
        for (nth, group) in self.groups.iter().enumerate() {
            if group.at_risk.is_empty() {
                continue;
            }
            let text = |(at, text): (&f64, &String)| Layer::Text {
                role: Role::Series((nth % 250) as u8),
                x: *at,
                y: 0.0,
                text: text.clone(),
            };
            let numbers = self.times.iter().zip(&group.at_risk).map(text).collect();
            if lines.is_empty() && !self.at_risk.is_empty() {
                lines.push(line(&self.at_risk, Vec::new()));
            }
            lines.push(line(&group.name, numbers));
        }
        lines
    }
}

/// The corners of a stepped line that keeps each value until the next time.
fn stairs(times: &[f64], values: &[f64]) -> (Vec<f64>, Vec<f64>) {
    let (mut x, mut y) = (Vec::new(), Vec::new());
    let mut before = None;
    for (time, value) in times.iter().zip(values) {
        if let Some(before) = before {
            x.push(*time);
            y.push(before);
        }
        x.push(*time);
        y.push(*value);
        before = Some(*value);
    }
    (x, y)
}
