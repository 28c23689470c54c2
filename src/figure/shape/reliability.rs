//! Whether a predicted share comes true: observed shares against predicted ones.

use crate::figure::shape::{Caption, Heading};
use crate::figure::{Axis, Body, Dot, Figure, Height, Layer, Note, Panel, Role, Scale, Tip, Zero};

/// What a figure of reliability is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Reliability {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis.
    pub predicted: Heading,
    /// The vertical axis.
    pub observed: Heading,
    /// The mean prediction of each group, from 0 to 1.
    pub predictions: Vec<f64>,
    /// The observed share of each group.
    pub shares: Vec<f64>,
    /// The lower end of its interval.
    pub low: Vec<f64>,
    /// The upper end of its interval.
    pub high: Vec<f64>,
    /// What the pointer is told about each group; empty, or as many.
    pub tips: Vec<Tip>,
    /// Said at the line of agreement.
    pub identity: String,
    /// The predictions of all samples, for the strip below; may be empty.
    pub samples: Vec<f64>,
    /// What they are; stands to the left of the strip.
    pub sample_label: String,
    /// Numbers said beside the figure.
    pub notes: Vec<Note>,
}

impl Reliability {
    /// The figure: a square panel with the predictions in a strip below.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let axis = |heading: &Heading| {
            Axis::scaled(&heading.label, &heading.unit, Scale::Percent).with_range(0.0, 1.0)
        };
        let layers = vec![
            Layer::Identity {
                label: self.identity.clone(),
            },
            Layer::Interval {
                role: Role::Pale(0),
                x: self.predictions.clone(),
                low: self.low.clone(),
                high: self.high.clone(),
            },
            Layer::Points {
                role: Role::Series(0),
                x: self.predictions.clone(),
                y: self.shares.clone(),
                dot: Dot::Normal,
                joined: Vec::new(),
                tips: self.tips.clone(),
            },
        ];
        let mut panel = Panel::new(axis(&self.predicted), axis(&self.observed), layers);
        panel.height = Height::Square;
        let mut panels = vec![panel];
        if !self.samples.is_empty() {
            let dots = Layer::Rug {
                role: Role::Series(0),
                x: self.samples.clone(),
                tips: Vec::new(),
            };
            panels.push(Panel::strip(&self.sample_label, Zero::Free, vec![dots]));
        }
        let mut figure = self.caption.figure(Body::Panels(panels));
        figure.aside.clone_from(&self.notes);
        figure
    }
}
