//! The error against the penalty strength, where the strength was chosen, and how many predictors.

use crate::figure::shape::{Caption, Choice, Counts, Heading, count_strip, value_near};
use crate::figure::{Body, End, Figure, Label, Layer, Panel, Quantity, Role, Tip, Weight, Zero};

/// What an error curve is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct ErrorCurve {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis.
    pub strength: Heading,
    /// The vertical axis.
    pub error: Heading,
    /// The strengths tried, increasing or decreasing.
    pub strengths: Vec<f64>,
    /// The mean held-out error at each.
    pub errors: Vec<f64>,
    /// The lower end of its band; empty for none.
    pub low: Vec<f64>,
    /// The upper end of its band.
    pub high: Vec<f64>,
    /// The lower end of a second, paler band, such as the spread over repeats; empty for none.
    pub spread_low: Vec<f64>,
    /// Its upper end.
    pub spread_high: Vec<f64>,
    /// What the pointer is told about each strength; empty, or as many.
    pub tips: Vec<Tip>,
    /// The error to compare with, such as that of the mean alone, and its name.
    pub baseline: Option<(f64, String)>,
    /// The chosen strength.
    pub chosen: Option<Choice>,
    /// The strengths chosen in the repeats and outer parts.
    pub repeats: Vec<f64>,
    /// What the pointer is told about them; empty, or as many.
    pub repeat_tips: Vec<Tip>,
    /// What they are; stands to the left of their strip.
    pub repeat_label: String,
    /// How many predictors are chosen at each strength.
    pub counts: Counts,
}

impl ErrorCurve {
    /// The figure: the curve with its band, and two strips below it.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let mut layers = vec![Layer::Columns {
            x: self.strengths.clone(),
            tips: self.tips.clone(),
        }];
        if let Some((at, name)) = &self.baseline {
            layers.push(Layer::Line {
                role: Role::Reference,
                x: self.strengths.clone(),
                y: vec![*at; self.strengths.len()],
                weight: Weight::Dashed,
                label: Some(Label {
                    text: name.clone(),
                    end: End::Right,
                }),
                tip: None,
            });
        }
        layers.push(Layer::Band {
            role: Role::Quiet,
            x: self.strengths.clone(),
            low: self.spread_low.clone(),
            high: self.spread_high.clone(),
        });
        layers.push(Layer::Band {
            role: Role::Series(0),
            x: self.strengths.clone(),
            low: self.low.clone(),
            high: self.high.clone(),
        });
        layers.push(Layer::Line {
            role: Role::Series(0),
            x: self.strengths.clone(),
            y: self.errors.clone(),
            weight: Weight::Strong,
            label: None,
            tip: None,
        });
        if let Some(choice) = &self.chosen
            && let Some(error) = value_near(&self.strengths, &self.errors, choice.at)
        {
            layers.push(Layer::Mark {
                role: Role::Chosen,
                x: choice.at,
                y: error,
                label: choice.label.clone(),
                tip: choice.tip.clone(),
            });
        }
        let x = self.strength.log().of(Quantity::Strength);
        let mut panels = vec![Panel::new(x, self.error.linear(), layers)];
        if !self.repeats.is_empty() {
            let dots = Layer::Rug {
                role: Role::Chosen,
                x: self.repeats.clone(),
                tips: self.repeat_tips.clone(),
            };
            panels.push(Panel::strip(&self.repeat_label, Zero::Free, vec![dots]));
        }
        panels.extend(count_strip(
            &self.counts,
            &self.strengths,
            self.chosen.as_ref(),
        ));
        self.caption.figure(Body::Panels(panels))
    }
}
