//! Predicted against observed values, with the line on which they agree.

use crate::figure::shape::{Caption, Heading};
use crate::figure::{Body, Dot, End, Figure, Height, Label, Layer, Note, Panel, Role, Tip, Weight};

/// What a figure of agreement is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Agreement {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis.
    pub predicted: Heading,
    /// The vertical axis, in the same unit.
    pub observed: Heading,
    /// The prediction for each sample.
    pub predictions: Vec<f64>,
    /// The observation of each sample.
    pub observations: Vec<f64>,
    /// Samples that belong to one unit: their indices.
    pub units: Vec<Vec<usize>>,
    /// What the pointer is told about each sample; empty, or as many.
    pub tips: Vec<Tip>,
    /// Said at the line of agreement.
    pub identity: String,
    /// Intercept and slope of a line through the points, and its name.
    pub line: Option<(f64, f64, String)>,
    /// Numbers said beside the figure.
    pub notes: Vec<Note>,
}

impl Agreement {
    /// The figure: a square panel.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let mut layers = vec![Layer::Identity {
            label: self.identity.clone(),
        }];
        layers.extend(self.fitted_line());
        layers.push(Layer::Points {
            role: Role::Series(0),
            x: self.predictions.clone(),
            y: self.observations.clone(),
            dot: Dot::Normal,
            joined: self.units.clone(),
            tips: self.tips.clone(),
        });
        let mut panel = Panel::new(self.predicted.linear(), self.observed.linear(), layers);
        panel.height = Height::Square;
        let mut figure = self.caption.figure(Body::Panels(vec![panel]));
        figure.aside.clone_from(&self.notes);
        figure
    }

    fn fitted_line(&self) -> Option<Layer> {
        let (intercept, slope, name) = self.line.as_ref()?;
        let finite = |value: &&f64| value.is_finite();
        let low = self
            .predictions
            .iter()
            .filter(finite)
            .copied()
            .reduce(f64::min)?;
        let high = self
            .predictions
            .iter()
            .filter(finite)
            .copied()
            .reduce(f64::max)?;
        Some(Layer::Line {
            role: Role::Chosen,
            x: vec![low, high],
            y: vec![intercept + slope * low, intercept + slope * high],
            weight: Weight::Normal,
            label: (!name.is_empty()).then(|| Label {
                text: name.clone(),
                end: End::Right,
            }),
            tip: None,
        })
    }
}
