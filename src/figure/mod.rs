//! Pictures: what is shown, where it lies, and how it is written as SVG.
//!
//! A [`Figure`] says what is shown: no colours, no pixels. [`layout::layout`] turns it into a
//! [`picture::Picture`], in which only coordinates are left; painters turn a picture into SVG
//! text or into a canvas by a palette of [`ink`]. All text in a figure comes from its maker;
//! only the numbers along an axis are written here, through `base::number`.

pub mod axis;
pub mod font;
pub mod ink;
pub mod layout;
pub mod metrics;
pub mod picture;
pub mod rows;
pub mod shape;
pub mod svg;
pub mod tiles;

pub use rows::{Align, Bar, Column, Row, Rows, Stress, Track};
pub use tiles::Tiles;

use crate::base::real::Real;

/// What is shown.
#[derive(Clone, Debug, PartialEq)]
pub struct Figure {
    /// One line, set above the figure.
    pub title: String,
    /// What a reader would be told who cannot see the figure; painted nowhere, kept in files.
    pub description: String,
    /// Said in the middle of the figure when there is nothing to show.
    pub empty: String,
    /// A few numbers said beside the figure where there is room.
    pub aside: Vec<Note>,
    /// The figure itself.
    pub body: Body,
}

/// A number said beside a figure: what it is, and its text.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Note {
    /// What the number is.
    pub label: String,
    /// The number's text.
    pub value: String,
}

/// The sorts of figure.
#[derive(Clone, Debug, PartialEq)]
pub enum Body {
    /// Panels with axes, stacked.
    Panels(Vec<Panel>),
    /// Rows with a bar and columns of text.
    Rows(Rows),
    /// Coloured tiles, named along both sides.
    Tiles(Tiles),
}

/// An area with axes. Panels are stacked from top to bottom.
#[derive(Clone, Debug, PartialEq)]
pub struct Panel {
    /// The horizontal axis; `None` shares the one of the panel above.
    pub x: Option<Axis>,
    /// The vertical axis.
    pub y: Axis,
    /// What is painted, from the back to the front.
    pub layers: Vec<Layer>,
    /// How high the panel is.
    pub height: Height,
}

/// How high a panel is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Height {
    /// A share of what the strips leave; shares need not add up to one.
    Share(f64),
    /// A thin strip under the panel above, whose horizontal axis it shares. Its vertical axis has
    /// no ticks; its label stands to the left of it.
    Strip,
    /// The same, as high as one line of text: for numbers below the horizontal axis.
    Line,
    /// As high as wide, as far as there is room: for axes in the same unit.
    Square,
}

/// One axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// What the numbers are; empty where the title says it.
    pub label: String,
    /// The unit of the numbers, without brackets.
    pub unit: String,
    /// How numbers become places.
    pub scale: Scale,
    /// The ends of the axis; `None` takes them from what is shown.
    pub range: Option<(f64, f64)>,
    /// Whether zero is always on the axis.
    pub zero: Zero,
    /// The numbers to write along it; empty leaves the choice to layout.
    pub ticks: Vec<f64>,
    /// What the numbers mean, so that the window can turn a place back into a number.
    pub quantity: Quantity,
}

/// How numbers become places on an axis.
#[derive(Clone, Debug, Default, PartialEq)]
pub enum Scale {
    /// Equal steps.
    #[default]
    Linear,
    /// Equal ratios. Numbers that are not above zero have no place.
    Log10,
    /// Equal ratios, with a shelf below the smallest for numbers that are zero (or below).
    Log10AndZero,
    /// Shares shown as percentages, in equal steps.
    Percent,
    /// Names at 0, 1, 2, ...
    Names(Vec<String>),
}

/// Whether zero is always on an axis.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Zero {
    /// Yes: the axis of a length or an error.
    Shown,
    /// Only if the numbers reach it.
    Free,
}

/// What the numbers of an axis mean to the window.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Quantity {
    /// Nothing that can be set.
    Plain,
    /// The penalty strength, which can be dragged.
    Strength,
}

/// What a thing in a figure is for; it decides the ink.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Role {
    /// The nth series, counted from 0; the first is the accent.
    Series(u8),
    /// The same, held back: an apparent value, a second thing of the same sort.
    Pale(u8),
    /// What was chosen.
    Chosen,
    /// Background: present, not looked at.
    Quiet,
    /// Weak or doubtful.
    Caution,
    /// A line to compare with.
    Reference,
}

/// What is painted in a panel. Numbers that are not finite, or have no place on the axis, are
/// left out (and break a line).
#[derive(Clone, Debug, PartialEq)]
pub enum Layer {
    /// Dots.
    Points {
        /// What they are for.
        role: Role,
        /// Horizontal positions.
        x: Vec<f64>,
        /// Vertical positions, as many.
        y: Vec<f64>,
        /// How they look.
        dot: Dot,
        /// Points that belong together, joined by a fine line: indices into `x`.
        joined: Vec<Vec<usize>>,
        /// What the pointer is told; empty, or as many.
        tips: Vec<Tip>,
    },
    /// A line through points, left to right as given.
    Line {
        /// What it is for.
        role: Role,
        /// Horizontal positions.
        x: Vec<f64>,
        /// Vertical positions, as many.
        y: Vec<f64>,
        /// How strong it is.
        weight: Weight,
        /// Its name, set at an end of the line.
        label: Option<Label>,
        /// What the pointer is told.
        tip: Option<Tip>,
    },
    /// A line that keeps each value until the next position.
    Steps {
        /// What it is for.
        role: Role,
        /// Horizontal positions.
        x: Vec<f64>,
        /// Vertical positions, as many.
        y: Vec<f64>,
        /// Its name, set at an end of the line.
        label: Option<Label>,
        /// What the pointer is told.
        tip: Option<Tip>,
    },
    /// The area between two lines.
    Band {
        /// What it is for.
        role: Role,
        /// Horizontal positions.
        x: Vec<f64>,
        /// Lower ends, as many.
        low: Vec<f64>,
        /// Upper ends, as many.
        high: Vec<f64>,
    },
    /// Upright whiskers.
    Interval {
        /// What they are for.
        role: Role,
        /// Horizontal positions.
        x: Vec<f64>,
        /// Lower ends, as many.
        low: Vec<f64>,
        /// Upper ends, as many.
        high: Vec<f64>,
    },
    /// Upright bars that stand on zero, each from the middle of its neighbours.
    Bars {
        /// What they are for.
        role: Role,
        /// Horizontal positions, increasing.
        x: Vec<f64>,
        /// Heights, as many.
        y: Vec<f64>,
        /// What the pointer is told; empty, or as many.
        tips: Vec<Tip>,
    },
    /// Upright bars between given edges that stand on zero: a histogram.
    Bins {
        /// What they are for.
        role: Role,
        /// Edges, increasing; one more than heights.
        edges: Vec<f64>,
        /// Heights.
        y: Vec<f64>,
    },
    /// A straight line across the panel.
    Rule {
        /// What it is for.
        role: Role,
        /// Where.
        at: At,
        /// Said beside it; may be empty.
        label: String,
    },
    /// The line on which both numbers are the same.
    Identity {
        /// Said at its upper end; may be empty.
        label: String,
    },
    /// One place that the figure is about.
    Mark {
        /// What it is for.
        role: Role,
        /// Horizontal position.
        x: f64,
        /// Vertical position.
        y: f64,
        /// Said beside it.
        label: String,
        /// What the pointer is told.
        tip: Option<Tip>,
    },
    /// Dots in a strip, strewn a little up and down so that equal ones can be seen.
    Rug {
        /// What they are for.
        role: Role,
        /// Horizontal positions.
        x: Vec<f64>,
        /// What the pointer is told; empty, or as many.
        tips: Vec<Tip>,
    },
    /// Nothing to be seen: upright regions, each from the middle of its neighbours, that tell
    /// the pointer about a horizontal position.
    Columns {
        /// Horizontal positions, increasing.
        x: Vec<f64>,
        /// What the pointer is told, as many.
        tips: Vec<Tip>,
    },
    /// A word at a place, such as the number of predictors over its bar.
    Text {
        /// What it is for.
        role: Role,
        /// Horizontal position.
        x: f64,
        /// Vertical position.
        y: f64,
        /// The word.
        text: String,
    },
}

/// A name set at an end of a line.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Label {
    /// The name.
    pub text: String,
    /// At which end.
    pub end: End,
}

/// An end of a line.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum End {
    /// The left side of the panel.
    Left,
    /// The right side of the panel.
    Right,
}

/// How strong a line is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Weight {
    /// What the figure is about.
    Strong,
    /// One of several.
    Normal,
    /// One of many.
    Fine,
    /// One of very many: see-through, so that where they lie close is darker.
    Faint,
    /// One of several, broken into dashes.
    Dashed,
}

/// How a dot looks.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Dot {
    /// One of few.
    Normal,
    /// One of many.
    Small,
    /// An open ring.
    Ring,
}

/// Where a straight line across a panel lies.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum At {
    /// Upright, at a horizontal position.
    X(f64),
    /// Level, at a vertical position.
    Y(f64),
}

/// What the pointer is told about a thing.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Tip {
    /// What it is.
    pub meaning: Meaning,
    /// The sentence that is shown.
    pub text: String,
}

/// What a thing in a figure is, so that the window can find the same thing in other figures.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Meaning {
    /// A sample, by its name.
    Sample(String),
    /// A unit, by its name.
    Unit(String),
    /// A batch, by its name.
    Batch(String),
    /// A predictor, by its name.
    Predictor(String),
    /// Two predictors, by their names.
    Pair(String, String),
    /// A class of the outcome, by its name.
    Class(String),
    /// A penalty strength.
    Strength(Real),
    /// A held-out part of a repeat, both counted from 0.
    Part {
        /// The repeat.
        repeat: usize,
        /// The part in it.
        part: usize,
    },
    /// Anything else, by its name.
    Thing(String),
}

impl Figure {
    /// A figure of panels.
    #[must_use]
    pub fn of_panels(title: &str, panels: Vec<Panel>) -> Self {
        Self::of(title, Body::Panels(panels))
    }

    /// A figure with the given body.
    #[must_use]
    pub fn of(title: &str, body: Body) -> Self {
        Self {
            title: title.to_owned(),
            description: String::new(),
            empty: String::new(),
            aside: Vec::new(),
            body,
        }
    }

    /// The same figure, with words for when there is nothing to show.
    #[must_use]
    pub fn with_empty(mut self, words: &str) -> Self {
        words.clone_into(&mut self.empty);
        self
    }

    /// The same figure, with words for readers who cannot see it.
    #[must_use]
    pub fn with_description(mut self, words: &str) -> Self {
        words.clone_into(&mut self.description);
        self
    }

    /// The same figure, with one more number beside it.
    #[must_use]
    pub fn with_note(mut self, label: &str, value: &str) -> Self {
        self.aside.push(Note {
            label: label.to_owned(),
            value: value.to_owned(),
        });
        self
    }
}

impl Panel {
    /// A panel with its own horizontal axis.
    #[must_use]
    pub fn new(x: Axis, y: Axis, layers: Vec<Layer>) -> Self {
        Self {
            x: Some(x),
            y,
            layers,
            height: Height::Share(1.0),
        }
    }

    /// A strip that shares the horizontal axis of the panel above.
    #[must_use]
    pub fn strip(label: &str, zero: Zero, layers: Vec<Layer>) -> Self {
        Self {
            x: None,
            y: Axis::linear(label, "").with_zero(zero),
            layers,
            height: Height::Strip,
        }
    }
}

impl Axis {
    /// An axis in equal steps.
    #[must_use]
    pub fn linear(label: &str, unit: &str) -> Self {
        Self::scaled(label, unit, Scale::Linear)
    }

    /// An axis in equal ratios.
    #[must_use]
    pub fn log(label: &str, unit: &str) -> Self {
        Self::scaled(label, unit, Scale::Log10)
    }

    /// An axis of the given scale.
    #[must_use]
    pub fn scaled(label: &str, unit: &str, scale: Scale) -> Self {
        Self {
            label: label.to_owned(),
            unit: unit.to_owned(),
            scale,
            range: None,
            zero: Zero::Free,
            ticks: Vec::new(),
            quantity: Quantity::Plain,
        }
    }

    /// The same axis with fixed ends.
    #[must_use]
    pub fn with_range(mut self, low: f64, high: f64) -> Self {
        self.range = Some((low, high));
        self
    }

    /// The same axis, with or without zero.
    #[must_use]
    pub fn with_zero(mut self, zero: Zero) -> Self {
        self.zero = zero;
        self
    }

    /// The same axis with the numbers that are to be written.
    #[must_use]
    pub fn with_ticks(mut self, ticks: &[f64]) -> Self {
        self.ticks = ticks.to_vec();
        self
    }

    /// The same axis of another quantity.
    #[must_use]
    pub fn of(mut self, quantity: Quantity) -> Self {
        self.quantity = quantity;
        self
    }

    /// The label and the unit, as they head the axis.
    #[must_use]
    pub fn heading(&self) -> String {
        match (self.label.is_empty(), self.unit.is_empty()) {
            (_, true) => self.label.clone(),
            (true, false) => self.unit.clone(),
            (false, false) => format!("{}, {}", self.label, self.unit),
        }
    }
}

impl Tip {
    /// A tip about a thing.
    #[must_use]
    pub fn new(meaning: Meaning, text: impl Into<String>) -> Self {
        Self {
            meaning,
            text: text.into(),
        }
    }
}
