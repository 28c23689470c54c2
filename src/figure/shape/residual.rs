//! Residuals against a prediction, an order or a leverage.

use crate::figure::shape::{Caption, Heading};
use crate::figure::{At, Body, Dot, Figure, Layer, Panel, Role, Tip, Weight, Zero};

/// What a figure of residuals is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Residuals {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis.
    pub against: Heading,
    /// The vertical axis.
    pub residual: Heading,
    /// Horizontal position of each sample.
    pub positions: Vec<f64>,
    /// Its residual.
    pub residuals: Vec<f64>,
    /// What the pointer is told about each; empty, or as many.
    pub tips: Vec<Tip>,
    /// A smooth line through the residuals, by position; empty for none.
    pub smooth: Vec<(f64, f64)>,
    /// Level lines that mark what is far, with their words.
    pub limits: Vec<(f64, String)>,
    /// Upright lines that mark what is far, with their words.
    pub walls: Vec<(f64, String)>,
    /// Samples to be pointed out: index and words.
    pub pointed: Vec<(usize, String)>,
}

impl Residuals {
    /// The figure: dots around the line of no error.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let mut layers = Vec::new();
        let rule = |at, words: &String| Layer::Rule {
            role: Role::Reference,
            at,
            label: words.clone(),
        };
        layers.extend(
            self.limits
                .iter()
                .map(|(at, words)| rule(At::Y(*at), words)),
        );
        layers.extend(self.walls.iter().map(|(at, words)| rule(At::X(*at), words)));
        layers.push(Layer::Points {
            role: Role::Series(0),
            x: self.positions.clone(),
            y: self.residuals.clone(),
            dot: Dot::Normal,
            joined: Vec::new(),
            tips: self.tips.clone(),
        });
        if !self.smooth.is_empty() {
            layers.push(Layer::Line {
                role: Role::Chosen,
                x: self.smooth.iter().map(|(x, _)| *x).collect(),
                y: self.smooth.iter().map(|(_, y)| *y).collect(),
                weight: Weight::Normal,
                label: None,
                tip: None,
            });
        }
        for (at, words) in &self.pointed {
            if let (Some(x), Some(y)) = (self.positions.get(*at), self.residuals.get(*at)) {
                layers.push(Layer::Mark {
                    role: Role::Chosen,
                    x: *x,
                    y: *y,
                    label: words.clone(),
                    tip: self.tips.get(*at).cloned(),
                });
            }
        }
        let y = self.residual.linear().with_zero(Zero::Shown);
        let panel = Panel::new(self.against.linear(), y, layers);
        self.caption.figure(Body::Panels(vec![panel]))
    }
}
