//! Picture: marks, words and spots; only coordinates are left.

use std::hash::{Hash, Hasher};

use crate::figure::font::Face;
use crate::figure::ink::Ink;
use crate::figure::metrics;
use crate::figure::{Meaning, Quantity, Scale};

/// A place in pixels, from the top left.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Point {
    /// To the right.
    pub x: f64,
    /// Downwards.
    pub y: f64,
}

/// A width and a height in pixels.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Size {
    /// Width.
    pub width: f64,
    /// Height.
    pub height: f64,
}

/// An upright rectangle in pixels.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rect {
    /// Left side.
    pub x: f64,
    /// Upper side.
    pub y: f64,
    /// Width.
    pub width: f64,
    /// Height.
    pub height: f64,
}

/// What a figure comes to at one size. Marks are painted in order, then the words; spots are
/// not painted.
#[derive(Clone, Debug, PartialEq, Hash)]
pub struct Picture {
    /// The title, for a file's own title.
    pub title: String,
    /// What a reader is told who cannot see the picture.
    pub description: String,
    /// The size of the whole.
    pub size: Size,
    /// Shapes, from the back to the front.
    pub marks: Vec<Mark>,
    /// Texts; painted last, above all shapes.
    pub words: Vec<Word>,
    /// Regions with a meaning; where they overlap, the last one counts.
    pub spots: Vec<Spot>,
    /// Where a place can be turned back into a number.
    pub rulers: Vec<Ruler>,
}

/// A shape.
#[derive(Clone, Debug, PartialEq)]
pub enum Mark {
    /// An open line, with round joins and ends.
    Line {
        /// At least two points.
        points: Vec<Point>,
        /// How it is drawn.
        stroke: Stroke,
    },
    /// A filled polygon.
    Area {
        /// At least three points.
        points: Vec<Point>,
        /// Its colour.
        ink: Ink,
    },
    /// A disc, filled, outlined, or both.
    Disc {
        /// Its middle.
        center: Point,
        /// Its radius in pixels.
        radius: f64,
        /// The colour inside.
        fill: Option<Ink>,
        /// The outline.
        stroke: Option<Stroke>,
    },
    /// An upright rectangle, filled, outlined, or both.
    Rect {
        /// Where.
        rect: Rect,
        /// The radius of its corners in pixels.
        radius: f64,
        /// The colour inside.
        fill: Option<Ink>,
        /// The outline.
        stroke: Option<Stroke>,
    },
    /// Shapes of which only what lies in a rectangle is seen. Holds no clip itself.
    Clip {
        /// What is seen.
        rect: Rect,
        /// The shapes.
        marks: Vec<Mark>,
    },
}

/// How a line is drawn.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Stroke {
    /// Its colour.
    pub ink: Ink,
    /// Its width in pixels.
    pub width: f64,
    /// Whether it is broken.
    pub dash: Dash,
}

/// Whether a line is broken.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Dash {
    /// Not.
    Solid,
    /// Into strokes of three pixels and gaps of three.
    Dashed,
}

/// A text on one line.
#[derive(Clone, Debug, PartialEq)]
pub struct Word {
    /// What is painted.
    pub text: String,
    /// The whole text, where what is painted was cut short.
    pub full: Option<String>,
    /// A point on the baseline: the one that the anchor names.
    pub at: Point,
    /// Which point of the text lies there.
    pub anchor: Anchor,
    /// The height of an em in pixels.
    pub size: f64,
    /// The direction of reading.
    pub turn: Turn,
    /// The font.
    pub face: Face,
    /// The colour.
    pub ink: Ink,
}

/// Which point of a text lies at its place.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Anchor {
    /// Its beginning.
    Start,
    /// Its middle.
    Middle,
    /// Its end.
    End,
}

/// The direction in which a text is read.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Turn {
    /// From left to right.
    Level,
    /// From bottom to top: turned about its place by a quarter against the clock.
    Up,
}

/// A region with a meaning.
#[derive(Clone, Debug, PartialEq, Hash)]
pub struct Spot {
    /// Where.
    pub region: Region,
    /// What is there.
    pub meaning: Meaning,
    /// The sentence that is shown.
    pub text: String,
    /// Who is told.
    pub telling: Telling,
}

/// The shape of a region.
#[derive(Clone, Debug, PartialEq)]
pub enum Region {
    /// A rectangle.
    Rect(Rect),
    /// A disc.
    Disc {
        /// Its middle.
        center: Point,
        /// Its radius in pixels.
        radius: f64,
    },
    /// All that lies within three pixels of a line.
    Line(Vec<Point>),
}

/// Who is told about a spot.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Telling {
    /// The pointer in the window, and readers of a file.
    Everyone,
    /// The pointer only: where there are so many that a file would swell.
    Pointer,
}

/// A horizontal axis on which a place can be turned back into a number.
#[derive(Clone, Debug, PartialEq)]
pub struct Ruler {
    /// The area over which it holds.
    pub rect: Rect,
    /// What the numbers mean.
    pub quantity: Quantity,
    /// How numbers become places.
    pub scale: Scale,
    /// The number at the left side.
    pub low: f64,
    /// The number at the right side.
    pub high: f64,
}

/// How far from a line the pointer still means it, in pixels.
pub const REACH: f64 = 3.0;

impl Picture {
    /// What lies at a place: the uppermost spot that covers it.
    #[must_use]
    pub fn spot_at(&self, at: Point) -> Option<&Spot> {
        self.spots.iter().rev().find(|spot| spot.region.holds(at))
    }

    /// Everywhere that a thing is shown.
    pub fn spots_of<'a>(&'a self, meaning: &'a Meaning) -> impl Iterator<Item = &'a Spot> {
        self.spots
            .iter()
            .filter(move |spot| spot.meaning == *meaning)
    }

    /// Marks that make a thing stand out, to be painted above the picture.
    #[must_use]
    pub fn highlight(&self, meaning: &Meaning) -> Vec<Mark> {
        let stroke = |width| Stroke::solid(Ink::Highlight, width);
        self.spots_of(meaning)
            .map(|spot| match &spot.region {
                Region::Rect(rect) => Mark::Rect {
                    rect: *rect,
                    radius: 2.0,
                    fill: None,
                    stroke: Some(stroke(1.5)),
                },
                Region::Disc { center, radius } => Mark::Disc {
                    center: *center,
                    radius: *radius,
                    fill: None,
                    stroke: Some(stroke(1.5)),
                },
                Region::Line(points) => Mark::Line {
                    points: points.clone(),
                    stroke: stroke(2.5),
                },
            })
            .collect()
    }

    /// The same picture with a margin around it: for files, where no page surrounds it.
    #[must_use]
    pub fn with_margin(mut self, margin: f64) -> Self {
        self.size = Size::new(
            self.size.width + 2.0 * margin,
            self.size.height + 2.0 * margin,
        );
        for mark in &mut self.marks {
            mark.shift(margin);
        }
        for word in &mut self.words {
            word.at.shift(margin);
        }
        for spot in &mut self.spots {
            match &mut spot.region {
                Region::Rect(rect) => rect.shift(margin),
                Region::Disc { center, .. } => center.shift(margin),
                Region::Line(points) => points.iter_mut().for_each(|point| point.shift(margin)),
            }
        }
        for ruler in &mut self.rulers {
            ruler.rect.shift(margin);
        }
        self
    }

    /// The ruler under a place, if there is one.
    #[must_use]
    pub fn ruler_at(&self, at: Point) -> Option<&Ruler> {
        self.rulers.iter().find(|ruler| ruler.rect.holds(at))
    }
}

impl Ruler {
    /// The horizontal place of a number; numbers outside count as the nearer end.
    #[must_use]
    pub fn x_at(&self, value: f64) -> f64 {
        let share = match self.scale {
            Scale::Linear | Scale::Percent | Scale::Names(_) => {
                (value - self.low) / (self.high - self.low)
            }
            Scale::Log10 | Scale::Log10AndZero => {
                let (low, high) = (self.low.log10(), self.high.log10());
                (value.max(f64::MIN_POSITIVE).log10() - low) / (high - low)
            }
        };
        self.rect.x + share.clamp(0.0, 1.0) * self.rect.width
    }

    /// The number at a horizontal place; places outside count as the nearer end.
    #[must_use]
    pub fn value_at(&self, x: f64) -> f64 {
        let share = ((x - self.rect.x) / self.rect.width).clamp(0.0, 1.0);
        match self.scale {
            Scale::Linear | Scale::Percent | Scale::Names(_) => {
                self.low + share * (self.high - self.low)
            }
            Scale::Log10 | Scale::Log10AndZero => {
                let (low, high) = (self.low.log10(), self.high.log10());
                10f64.powf(low + share * (high - low))
            }
        }
    }
}

impl Point {
    /// A place.
    #[must_use]
    pub const fn new(x: f64, y: f64) -> Self {
        Self { x, y }
    }

    fn shift(&mut self, by: f64) {
        self.x += by;
        self.y += by;
    }

    fn distance(self, other: Self) -> f64 {
        (self.x - other.x).hypot(self.y - other.y)
    }
}

impl Size {
    /// A width and a height.
    #[must_use]
    pub const fn new(width: f64, height: f64) -> Self {
        Self { width, height }
    }
}

impl Rect {
    /// A rectangle by its upper left corner and its size.
    #[must_use]
    pub const fn new(x: f64, y: f64, width: f64, height: f64) -> Self {
        Self {
            x,
            y,
            width,
            height,
        }
    }

    fn shift(&mut self, by: f64) {
        self.x += by;
        self.y += by;
    }

    /// The right side.
    #[must_use]
    pub fn right(&self) -> f64 {
        self.x + self.width
    }

    /// The lower side.
    #[must_use]
    pub fn bottom(&self) -> f64 {
        self.y + self.height
    }

    /// Whether a place lies in it.
    #[must_use]
    pub fn holds(&self, at: Point) -> bool {
        at.x >= self.x && at.x <= self.right() && at.y >= self.y && at.y <= self.bottom()
    }

    /// Whether two rectangles share any area.
    #[must_use]
    pub fn overlaps(&self, other: &Self) -> bool {
        self.x < other.right()
            && other.x < self.right()
            && self.y < other.bottom()
            && other.y < self.bottom()
    }

    /// Whether another rectangle lies in it.
    #[must_use]
    pub fn covers(&self, other: &Self) -> bool {
        self.holds(Point::new(other.x, other.y))
            && self.holds(Point::new(other.right(), other.bottom()))
    }

    /// What it has in common with another one.
    #[must_use]
    pub fn common(&self, other: &Self) -> Option<Self> {
        let (left, top) = (self.x.max(other.x), self.y.max(other.y));
        let right = self.right().min(other.right());
        let bottom = self.bottom().min(other.bottom());
        (left < right && top < bottom).then(|| Self::new(left, top, right - left, bottom - top))
    }

    /// The same rectangle, larger by a margin on each side.
    #[must_use]
    pub fn grown(&self, by: f64) -> Self {
        Self::new(
            self.x - by,
            self.y - by,
            self.width + 2.0 * by,
            self.height + 2.0 * by,
        )
    }
}

impl Region {
    /// Whether a place lies in the region.
    #[must_use]
    pub fn holds(&self, at: Point) -> bool {
        match self {
            Self::Rect(rect) => rect.holds(at),
            Self::Disc { center, radius } => center.distance(at) <= *radius,
            Self::Line(points) => points
                .windows(2)
                .any(|pair| distance_to(at, pair[0], pair[1]) <= REACH),
        }
    }
}

fn distance_to(at: Point, from: Point, to: Point) -> f64 {
    let (dx, dy) = (to.x - from.x, to.y - from.y);
    let length = dx * dx + dy * dy;
    let share = if length > 0.0 {
        (((at.x - from.x) * dx + (at.y - from.y) * dy) / length).clamp(0.0, 1.0)
    } else {
        0.0
    };
    at.distance(Point::new(from.x + share * dx, from.y + share * dy))
}

impl Mark {
    fn shift(&mut self, by: f64) {
        match self {
            Self::Line { points, .. } | Self::Area { points, .. } => {
                points.iter_mut().for_each(|point| point.shift(by));
            }
            Self::Disc { center, .. } => center.shift(by),
            Self::Rect { rect, .. } => rect.shift(by),
            Self::Clip { rect, marks } => {
                rect.shift(by);
                marks.iter_mut().for_each(|mark| mark.shift(by));
            }
        }
    }
}

impl Stroke {
    /// An unbroken line.
    #[must_use]
    pub const fn solid(ink: Ink, width: f64) -> Self {
        Self {
            ink,
            width,
            dash: Dash::Solid,
        }
    }

    /// A broken line.
    #[must_use]
    pub const fn dashed(ink: Ink, width: f64) -> Self {
        Self {
            ink,
            width,
            dash: Dash::Dashed,
        }
    }
}

impl Word {
    /// The rectangle that the text needs, from ascender to descender.
    #[must_use]
    pub fn rect(&self) -> Rect {
        let width = metrics::width(&self.text, self.face, self.size);
        let (ascent, descent) = (
            self.face.ascent() * self.size,
            self.face.descent() * self.size,
        );
        let before = match self.anchor {
            Anchor::Start => 0.0,
            Anchor::Middle => width / 2.0,
            Anchor::End => width,
        };
        match self.turn {
            Turn::Level => Rect::new(
                self.at.x - before,
                self.at.y - ascent,
                width,
                ascent + descent,
            ),
            Turn::Up => Rect::new(
                self.at.x - ascent,
                self.at.y - (width - before),
                ascent + descent,
                width,
            ),
        }
    }
}

// Pictures are hashed so that a canvas knows when to paint anew. Coordinates are hashed by
// their bits: layout rounds them, and a picture holds no NaN.
impl Hash for Mark {
    fn hash<H: Hasher>(&self, state: &mut H) {
        std::mem::discriminant(self).hash(state);
        match self {
            Self::Line { points, stroke } => (points, stroke).hash(state),
            Self::Area { points, ink } => (points, ink).hash(state),
            Self::Disc {
                center,
                radius,
                fill,
                stroke,
            } => (center, radius.to_bits(), fill, stroke).hash(state),
            Self::Rect {
                rect,
                radius,
                fill,
                stroke,
            } => (rect, radius.to_bits(), fill, stroke).hash(state),
            Self::Clip { rect, marks } => (rect, marks).hash(state),
        }
    }
}

impl Hash for Region {
    fn hash<H: Hasher>(&self, state: &mut H) {
        std::mem::discriminant(self).hash(state);
        match self {
            Self::Rect(rect) => rect.hash(state),
            Self::Disc { center, radius } => (center, radius.to_bits()).hash(state),
            Self::Line(points) => points.hash(state),
        }
    }
}

impl Hash for Point {
    fn hash<H: Hasher>(&self, state: &mut H) {
        [self.x.to_bits(), self.y.to_bits()].hash(state);
    }
}

impl Hash for Size {
    fn hash<H: Hasher>(&self, state: &mut H) {
        [self.width.to_bits(), self.height.to_bits()].hash(state);
    }
}

impl Hash for Rect {
    fn hash<H: Hasher>(&self, state: &mut H) {
        [self.x, self.y, self.width, self.height]
            .map(f64::to_bits)
            .hash(state);
    }
}

impl Hash for Stroke {
    fn hash<H: Hasher>(&self, state: &mut H) {
        (self.ink, self.width.to_bits(), self.dash).hash(state);
    }
}

impl Hash for Word {
    fn hash<H: Hasher>(&self, state: &mut H) {
        (&self.text, &self.full, self.at, self.anchor).hash(state);
        (self.size.to_bits(), self.turn, self.face, self.ink).hash(state);
    }
}

impl Hash for Ruler {
    fn hash<H: Hasher>(&self, state: &mut H) {
        (self.rect, self.quantity, self.low.to_bits()).hash(state);
        self.high.to_bits().hash(state);
    }
}
