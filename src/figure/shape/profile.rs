//! Coefficients along a numeric axis, with the mean signal behind them.

use crate::figure::shape::{Caption, Heading};
use crate::figure::{Body, Dot, End, Figure, Label, Layer, Panel, Role, Tip, Weight};

/// What a coefficient profile is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Profile {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis, such as a wavelength.
    pub position: Heading,
    /// The vertical axis.
    pub coefficient: Heading,
    /// The position of each predictor, increasing.
    pub positions: Vec<f64>,
    /// Its coefficient.
    pub coefficients: Vec<f64>,
    /// The lower end of its band over resamples; empty for none.
    pub low: Vec<f64>,
    /// The upper end.
    pub high: Vec<f64>,
    /// The mean signal at each position; empty for none. Only its shape is shown.
    pub signal: Vec<f64>,
    /// Its name.
    pub signal_label: String,
    /// What the pointer is told about each predictor; empty, or as many.
    pub tips: Vec<Tip>,
}

/// If fewer than this share of the coefficients are not zero, they are shown as stems.
const SPARSE: f64 = 0.25;

impl Profile {
    /// The figure: a line where most coefficients are not zero, stems where few are.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let mut layers = Vec::new();
        if let Some((low, signal)) = self.signal_in_range() {
            layers.push(Layer::Band {
                role: Role::Quiet,
                x: self.positions.clone(),
                low: vec![low; signal.len()],
                high: signal.clone(),
            });
            layers.push(Layer::Line {
                role: Role::Quiet,
                x: self.positions.clone(),
                y: signal,
                weight: Weight::Fine,
                label: Some(Label {
                    text: self.signal_label.clone(),
                    end: End::Right,
                })
                .filter(|label| !label.text.is_empty()),
                tip: None,
            });
        }
        layers.push(Layer::Band {
            role: Role::Series(0),
            x: self.positions.clone(),
            low: self.low.clone(),
            high: self.high.clone(),
        });
        let chosen: Vec<usize> = (0..self.positions.len().min(self.coefficients.len()))
            .filter(|at| self.coefficients[*at] != 0.0)
            .collect();
        if (chosen.len() as f64) < SPARSE * self.positions.len() as f64 {
            let pick = |from: &[f64]| chosen.iter().map(|at| from[*at]).collect::<Vec<f64>>();
            let (x, y) = (pick(&self.positions), pick(&self.coefficients));
            layers.push(Layer::Interval {
                role: Role::Series(0),
                x: x.clone(),
                low: vec![0.0; y.len()],
                high: y.clone(),
            });
            layers.push(Layer::Points {
                role: Role::Series(0),
                x,
                y,
                dot: Dot::Normal,
                joined: Vec::new(),
                tips: if self.tips.is_empty() {
                    Vec::new()
                } else {
                    chosen
                        .iter()
                        .filter_map(|at| self.tips.get(*at).cloned())
                        .collect()
                },
            });
        } else {
            layers.push(Layer::Line {
                role: Role::Series(0),
                x: self.positions.clone(),
                y: self.coefficients.clone(),
                weight: Weight::Normal,
                label: None,
                tip: None,
            });
            layers.push(Layer::Columns {
                x: self.positions.clone(),
                tips: self.tips.clone(),
            });
        }
        let panel = Panel::new(self.position.linear(), self.coefficient.linear(), layers);
        self.caption.figure(Body::Panels(vec![panel]))
    }

    /// The low end of the coefficients, and the signal stretched to their range: it has another
    /// unit.
    fn signal_in_range(&self) -> Option<(f64, Vec<f64>)> {
        let ends = |values: &mut dyn Iterator<Item = f64>| {
            values.filter(|value| value.is_finite()).fold(
                None,
                |ends: Option<(f64, f64)>, value| {
                    Some(ends.map_or((value, value), |(low, high)| {
                        (low.min(value), high.max(value))
                    }))
                },
            )
        };
        let (from, to) = ends(&mut self.signal.iter().copied())?;
        let mut shown = self
            .coefficients
            .iter()
            .chain(&self.low)
            .chain(&self.high)
            .copied()
            .chain([0.0]);
        let (low, high) = ends(&mut shown)?;
        if to <= from {
            return None;
        }
        let stretch = |value: &f64| low + (value - from) / (to - from) * (high - low);
        Some((low, self.signal.iter().map(stretch).collect()))
    }
}
