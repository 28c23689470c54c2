//! The eigenvalues of XᵀX, and what the penalty makes of them.

use crate::figure::shape::{Caption, Heading};
use crate::figure::{
    Axis, Body, Dot, End, Figure, Height, Label, Layer, Panel, Role, Scale, Tip, Weight,
};

/// What a spectrum is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Spectrum {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis: the direction's number.
    pub direction: Heading,
    /// The vertical axis.
    pub eigenvalue: Heading,
    /// The eigenvalues, falling; zero ones are zero or below.
    pub eigenvalues: Vec<f64>,
    /// Their name.
    pub own_label: String,
    /// The eigenvalues with the penalty added, as many; empty for none.
    pub lifted: Vec<f64>,
    /// Their name.
    pub lifted_label: String,
    /// The heading of the shrinkage factors.
    pub factor: String,
    /// The share of each direction that the penalty leaves; empty for no such panel.
    pub factors: Vec<f64>,
    /// What the pointer is told about each direction; empty, or as many.
    pub tips: Vec<Tip>,
}

impl Spectrum {
    /// The figure: eigenvalues on an axis of ratios with a shelf for zero, and the shrinkage
    /// factors below.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let numbers = |count: usize| (1..=count).map(|nth| nth as f64).collect::<Vec<f64>>();
        let name = |text: &String| {
            Some(Label {
                text: text.clone(),
                end: End::Right,
            })
            .filter(|label| !label.text.is_empty())
        };
        let mut layers = Vec::new();
        if !self.lifted.is_empty() {
            layers.push(Layer::Line {
                role: Role::Chosen,
                x: numbers(self.lifted.len()),
                y: self.lifted.clone(),
                weight: Weight::Normal,
                label: name(&self.lifted_label),
                tip: None,
            });
        }
        // The name stands at the end of an unseen line through the dots.
        layers.push(Layer::Line {
            role: Role::Series(0),
            x: numbers(self.eigenvalues.len()),
            y: self.eigenvalues.clone(),
            weight: Weight::Fine,
            label: name(&self.own_label),
            tip: None,
        });
        layers.push(Layer::Points {
            role: Role::Series(0),
            x: numbers(self.eigenvalues.len()),
            y: self.eigenvalues.clone(),
            dot: Dot::Small,
            joined: Vec::new(),
            tips: self.tips.clone(),
        });
        let mut x = self.direction.linear();
        let count = self.eigenvalues.len().max(self.lifted.len());
        if count > 1 {
            x = x.with_range(0.0, count as f64 + 1.0);
        }
        let scale = if self.eigenvalues.iter().any(|value| *value <= 0.0) {
            Scale::Log10AndZero
        } else {
            Scale::Log10
        };
        let y = Axis::scaled(&self.eigenvalue.label, &self.eigenvalue.unit, scale);
        let mut panels = vec![Panel::new(x, y, layers)];
        if !self.factors.is_empty() {
            let mut below = Panel::strip(&self.factor, crate::figure::Zero::Shown, Vec::new());
            below.y.scale = Scale::Percent;
            below.y.range = Some((0.0, 1.0));
            below.height = Height::Share(0.45);
            below.layers.push(Layer::Line {
                role: Role::Chosen,
                x: numbers(self.factors.len()),
                y: self.factors.clone(),
                weight: Weight::Normal,
                label: None,
                tip: None,
            });
            panels.push(below);
        }
        self.caption.figure(Body::Panels(panels))
    }
}
