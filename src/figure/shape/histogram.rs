//! Counts of values in bins, with the observed value among them.

use crate::figure::shape::{Caption, Choice, Heading};
use crate::figure::{At, Body, Figure, Layer, Panel, Role};

/// What a histogram is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Histogram {
    /// The texts.
    pub caption: Caption,
    /// The horizontal axis.
    pub value: Heading,
    /// The vertical axis.
    pub count: Heading,
    /// The values.
    pub values: Vec<f64>,
    /// How many bins; 0 leaves the choice to the figure.
    pub bins: usize,
    /// The value that was observed.
    pub observed: Option<Choice>,
}

/// More bins than this are never wanted.
const MOST: usize = 200;

impl Histogram {
    /// The figure: bars, and a line at the observed value.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let (edges, counts) = self.binned();
        let mut layers = vec![Layer::Bins {
            role: Role::Quiet,
            edges,
            y: counts,
        }];
        if let Some(choice) = &self.observed {
            layers.push(Layer::Rule {
                role: Role::Chosen,
                at: At::X(choice.at),
                label: choice.label.clone(),
            });
        }
        let panel = Panel::new(self.value.linear(), self.count.linear(), layers);
        self.caption.figure(Body::Panels(vec![panel]))
    }

    /// Equal bins over the finite values; their number by Rice's rule, 2·∛n, unless given.
    fn binned(&self) -> (Vec<f64>, Vec<f64>) {
        let finite: Vec<f64> = self
            .values
            .iter()
            .copied()
            .filter(|value| value.is_finite() && value.abs() < 1e300)
            .collect();
        let (Some(low), Some(high)) = (
            finite.iter().copied().reduce(f64::min),
            finite.iter().copied().reduce(f64::max),
        ) else {
            return (Vec::new(), Vec::new());
        };
        let count = if self.bins > 0 {
            self.bins
        } else {
            (2.0 * (finite.len() as f64).cbrt()).ceil() as usize
        }
        .clamp(1, MOST);
        let width = (high - low) / count as f64;
        if !(width > 0.0) {
            let half = (low.abs() * 0.05).max(0.5);
            return (vec![low - half, low + half], vec![finite.len() as f64]);
        }
        let mut counts = vec![0.0; count];
        for value in finite {
            let bin = (((value - low) / width) as usize).min(count - 1);
            counts[bin] += 1.0;
        }
        let edges = (0..=count).map(|at| low + at as f64 * width).collect();
        (edges, counts)
    }
}
