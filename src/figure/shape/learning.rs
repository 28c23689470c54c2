//! The error against the number of units: whether more would help.

use crate::figure::shape::{Caption, Heading};
use crate::figure::{At, Body, Dot, Figure, Layer, Panel, Role, Tip, Weight};

/// What a learning curve is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Learning {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis.
    pub units: Heading,
    /// The vertical axis.
    pub error: Heading,
    /// How many units were used.
    pub counts: Vec<f64>,
    /// The mean error with so many.
    pub errors: Vec<f64>,
    /// The lower end of its band.
    pub low: Vec<f64>,
    /// The upper end.
    pub high: Vec<f64>,
    /// An error to compare with, and its name.
    pub baseline: Option<(f64, String)>,
    /// What the pointer is told about each; empty, or as many.
    pub tips: Vec<Tip>,
}

impl Learning {
    /// The figure: a line with dots and its band.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let mut layers = Vec::new();
        if let Some((at, words)) = &self.baseline {
            layers.push(Layer::Rule {
                role: Role::Reference,
                at: At::Y(*at),
                label: words.clone(),
            });
        }
        layers.push(Layer::Band {
            role: Role::Series(0),
            x: self.counts.clone(),
            low: self.low.clone(),
            high: self.high.clone(),
        });
        layers.push(Layer::Line {
            role: Role::Series(0),
            x: self.counts.clone(),
            y: self.errors.clone(),
            weight: Weight::Strong,
            label: None,
            tip: None,
        });
        layers.push(Layer::Points {
            role: Role::Series(0),
            x: self.counts.clone(),
            y: self.errors.clone(),
            dot: Dot::Ring,
            joined: Vec::new(),
            tips: self.tips.clone(),
        });
        let panel = Panel::new(self.units.linear(), self.error.linear(), layers);
        self.caption.figure(Body::Panels(vec![panel]))
    }
}
