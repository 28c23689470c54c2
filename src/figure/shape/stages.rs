//! A few samples before and after each of several steps.

use crate::figure::shape::{Caption, Heading};
use crate::figure::{
    Axis, Body, Dot, End, Figure, Height, Label, Layer, Panel, Role, Tip, Weight, Zero,
};

/// What the figure is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Stages {
    /// The texts.
    pub caption: Caption,
    /// The stages, in their order.
    pub stages: Vec<Stage>,
}

/// The samples at one stage.
#[derive(Clone, Debug, PartialEq)]
pub struct Stage {
    /// What the values are, such as the step that was taken last.
    pub label: String,
    /// The horizontal axis.
    pub position: Heading,
    /// Whether neighbours belong together.
    pub course: Course,
    /// The samples.
    pub curves: Vec<Curve>,
}

/// Whether the values of a sample make a course.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Course {
    /// Along an axis: a line.
    Line,
    /// Side by side: dots.
    Dots,
}

/// One sample at a stage.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    /// Which sort of sample it is, counted from 0.
    pub sort: u8,
    /// Its name, set beside the line; empty for none.
    pub label: String,
    /// The positions, increasing.
    pub positions: Vec<f64>,
    /// Its values, as many.
    pub values: Vec<f64>,
    /// What the pointer is told.
    pub tip: Option<Tip>,
}

impl Stages {
    /// The figure: one panel for each stage, one below the other.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let panels = self.stages.iter().map(Stage::panel).collect();
        self.caption.figure(Body::Panels(panels))
    }
}

impl Stage {
    fn panel(&self) -> Panel {
        let mut layers = Vec::new();
        for curve in &self.curves {
            let role = Role::Series(curve.sort);
            match self.course {
                Course::Line => layers.push(Layer::Line {
                    role,
                    x: curve.positions.clone(),
                    y: curve.values.clone(),
                    weight: Weight::Normal,
                    label: Some(Label {
                        text: curve.label.clone(),
                        end: End::Right,
                    })
                    .filter(|label| !label.text.is_empty()),
                    tip: curve.tip.clone(),
                }),
                Course::Dots => layers.push(Layer::Points {
                    role,
                    x: curve.positions.clone(),
                    y: curve.values.clone(),
                    dot: Dot::Small,
                    joined: Vec::new(),
                    tips: curve
                        .tip
                        .iter()
                        .cycle()
                        .take(curve.values.len())
                        .cloned()
                        .collect(),
                }),
            }
        }
        let mut panel = Panel::new(
            self.position.linear(),
            Axis::linear(&self.label, ""),
            layers,
        );
        panel.y.zero = Zero::Free;
        panel.height = Height::Share(1.0);
        panel
    }
}
