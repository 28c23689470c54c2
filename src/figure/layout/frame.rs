//! Frame: where one panel lies and how its numbers become places.

use crate::figure::axis::{Mapping, Tick};
use crate::figure::picture::{Point, Rect};
use crate::figure::{At, Layer};

/// A place further outside than this many lengths of the axis is drawn no further out.
const FARTHEST: f64 = 20.0;

/// One panel with its place and its mappings.
pub(super) struct Frame {
    /// The area of the data.
    pub(super) plot: Rect,
    /// From horizontal numbers to places.
    pub(super) x: Mapping,
    /// From vertical numbers to places.
    pub(super) y: Mapping,
    /// The numbers written along the vertical axis.
    pub(super) y_ticks: Vec<Tick>,
}

impl Frame {
    /// The horizontal place of a number.
    pub(super) fn at_x(&self, value: f64) -> Option<f64> {
        let share = self.x.share(value)?.clamp(-FARTHEST, FARTHEST);
        Some(self.plot.x + share * self.plot.width)
    }

    /// The vertical place of a number.
    pub(super) fn at_y(&self, value: f64) -> Option<f64> {
        let share = self.y.share(value)?.clamp(-FARTHEST, FARTHEST);
        Some(self.plot.bottom() - share * self.plot.height)
    }

    /// The place of a pair of numbers.
    pub(super) fn at(&self, x: f64, y: f64) -> Option<Point> {
        Some(Point::new(self.at_x(x)?, self.at_y(y)?))
    }

    /// The vertical place on which lengths stand.
    pub(super) fn base(&self) -> f64 {
        self.plot.bottom() - self.y.base() * self.plot.height
    }

    /// Whether a place lies in the area of the data, give or take half a pixel.
    pub(super) fn holds(&self, at: Point) -> bool {
        self.plot.grown(0.5).holds(at)
    }
}

/// Calls with every horizontal number of a layer.
pub(super) fn each_x(layer: &Layer, mut call: impl FnMut(f64)) {
    match layer {
        Layer::Points { x, .. }
        | Layer::Line { x, .. }
        | Layer::Steps { x, .. }
        | Layer::Band { x, .. }
        | Layer::Interval { x, .. }
        | Layer::Bars { x, .. }
        | Layer::Rug { x, .. }
        | Layer::Columns { x, .. }
        | Layer::Bins { edges: x, .. } => x.iter().copied().for_each(call),
        Layer::Rule { at, .. } => match at {
            At::X(x) => call(*x),
            At::Y(_) => {}
        },
        Layer::Mark { x, .. } => call(*x),
        Layer::Identity { .. } | Layer::Text { .. } => {}
    }
}

/// Calls with every vertical number of a layer.
pub(super) fn each_y(layer: &Layer, mut call: impl FnMut(f64)) {
    match layer {
        Layer::Points { y, .. } | Layer::Line { y, .. } | Layer::Steps { y, .. } => {
            y.iter().copied().for_each(call);
        }
        Layer::Band { low, high, .. } | Layer::Interval { low, high, .. } => {
            low.iter().chain(high).copied().for_each(call);
        }
        Layer::Bars { y, .. } | Layer::Bins { y, .. } => {
            if !y.is_empty() {
                call(0.0);
            }
            y.iter().copied().for_each(call);
        }
        Layer::Rule { at, .. } => match at {
            At::X(_) => {}
            At::Y(y) => call(*y),
        },
        Layer::Mark { y, .. } => call(*y),
        Layer::Identity { .. } | Layer::Rug { .. } | Layer::Columns { .. } | Layer::Text { .. } => {
        }
    }
}

/// Whether a layer shows any data that has a place.
pub(super) fn shows_something(layer: &Layer, frame: &Frame) -> bool {
    let any = |x: &[f64], y: &[f64]| x.iter().zip(y).any(|(x, y)| frame.at(*x, *y).is_some());
    match layer {
        Layer::Points { x, y, .. }
        | Layer::Line { x, y, .. }
        | Layer::Steps { x, y, .. }
        | Layer::Bars { x, y, .. } => any(x, y),
        Layer::Bins { edges, y, .. } => edges.len() > 1 && any(edges, y),
        Layer::Band { x, low, high, .. } | Layer::Interval { x, low, high, .. } => {
            any(x, low) && any(x, high)
        }
        Layer::Rug { x, .. } => x.iter().any(|x| frame.at_x(*x).is_some()),
        Layer::Mark { x, y, .. } => frame.at(*x, *y).is_some(),
        Layer::Rule { .. }
        | Layer::Identity { .. }
        | Layer::Columns { .. }
        | Layer::Text { .. } => false,
    }
}
