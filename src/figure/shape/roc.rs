//! Hits against false alarms over all thresholds.

use crate::figure::shape::{Caption, Heading};
use crate::figure::{Axis, Body, Figure, Height, Layer, Note, Panel, Role, Scale, Tip, Weight};

/// What a receiver operating characteristic is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Roc {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis.
    pub false_alarms: Heading,
    /// The vertical axis.
    pub hits: Heading,
    /// The overall curve: false alarms and hits, from 0 to 1.
    pub curve: Vec<(f64, f64)>,
    /// The curves of the repeats, thin behind it.
    pub repeats: Vec<Vec<(f64, f64)>>,
    /// A threshold in use: false alarms, hits, its words and what the pointer is told.
    pub threshold: Option<(f64, f64, String, Option<Tip>)>,
    /// Said at the line of chance.
    pub chance: String,
    /// Numbers said beside the figure.
    pub notes: Vec<Note>,
}

impl Roc {
    /// The figure: a square panel.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let line = |curve: &[(f64, f64)], role, weight| Layer::Line {
            role,
            x: curve.iter().map(|(x, _)| *x).collect(),
            y: curve.iter().map(|(_, y)| *y).collect(),
            weight,
            label: None,
            tip: None,
        };
        let mut layers = vec![Layer::Identity {
            label: self.chance.clone(),
        }];
        let repeats = self.repeats.iter();
        layers.extend(repeats.map(|curve| line(curve, Role::Pale(0), Weight::Fine)));
        layers.push(line(&self.curve, Role::Series(0), Weight::Strong));
        if let Some((x, y, words, tip)) = &self.threshold {
            layers.push(Layer::Mark {
                role: Role::Chosen,
                x: *x,
                y: *y,
                label: words.clone(),
                tip: tip.clone(),
            });
        }
        let axis = |heading: &Heading| {
            Axis::scaled(&heading.label, &heading.unit, Scale::Percent).with_range(0.0, 1.0)
        };
        let mut panel = Panel::new(axis(&self.false_alarms), axis(&self.hits), layers);
        panel.height = Height::Square;
        let mut figure = self.caption.figure(Body::Panels(vec![panel]));
        figure.aside.clone_from(&self.notes);
        figure
    }
}
