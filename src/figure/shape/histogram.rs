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
        let mut value = self.value.linear();
        // Air around the bars, so that a line at the outermost value is seen as one.
        let reach = edges
            .iter()
            .copied()
            .chain(self.observed.iter().map(|choice| choice.at))
            .filter(|at| at.is_finite() && at.abs() < 1e300);
        let ends = reach.fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), at| {
            (low.min(at), high.max(at))
        });
        if ends.0 < ends.1 {
            let air = 0.04 * (ends.1 - ends.0);
            value = value.with_range(ends.0 - air, ends.1 + air);
        }
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
        let panel = Panel::new(value, self.count.linear(), layers);
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
        if width <= 0.0 {
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
