//! The sheet on which a picture grows: it refuses words that would overlap.

use crate::figure::Tip;
use crate::figure::font::Face;
use crate::figure::ink::Ink;
use crate::figure::layout::style;
use crate::figure::metrics;
use crate::figure::picture::{
    Anchor, Mark, Picture, Point, Rect, Region, Ruler, Size, Spot, Telling, Turn, Word,
};

/// More spots than this are told to the pointer only.
const MOST_TOLD: usize = 400;

/// How much of the space around a letter box may be shared with a neighbour: boxes reach from
/// the accents of capitals to the descenders, which rarely meet.
const AIR: f64 = 0.75;

/// A picture that is being made.
pub(super) struct Sheet {
    size: Size,
    marks: Vec<Mark>,
    words: Vec<Word>,
    taken: Vec<Rect>,
    spots: Vec<Spot>,
    rulers: Vec<Ruler>,
}

impl Sheet {
    pub(super) fn new(size: Size) -> Self {
        Self {
            size,
            marks: Vec::new(),
            words: Vec::new(),
            taken: Vec::new(),
            spots: Vec::new(),
            rulers: Vec::new(),
        }
    }

    pub(super) fn size(&self) -> Size {
        self.size
    }

    pub(super) fn mark(&mut self, mark: Mark) {
        self.marks.push(mark);
    }

    pub(super) fn marks(&mut self, marks: impl IntoIterator<Item = Mark>) {
        self.marks.extend(marks);
    }

    pub(super) fn ruler(&mut self, ruler: Ruler) {
        self.rulers.push(ruler);
    }

    /// A small text on a level line; left out where it would overlap. Says whether it was set.
    pub(super) fn text(
        &mut self,
        text: &str,
        at: Point,
        anchor: Anchor,
        ink: Ink,
        face: Face,
    ) -> Placed {
        self.word(word(text, at, anchor, style::SMALL, ink, face))
    }

    /// A text on a level line that is cut short to `room` pixels.
    pub(super) fn fitted(
        &mut self,
        text: &str,
        at: Point,
        anchor: Anchor,
        size: f64,
        (ink, face): (Ink, Face),
        room: f64,
    ) -> Placed {
        let shown = metrics::fitted(text, face, size, room);
        let full = (shown != text).then(|| text.to_owned());
        self.word(Word {
            full,
            ..word(&shown, at, anchor, size, ink, face)
        })
    }

    /// Sets a word unless it would overlap another or leave the picture.
    pub(super) fn word(&mut self, word: Word) -> Placed {
        if word.text.is_empty() {
            return Placed::No;
        }
        if !self.has_room(&word) {
            return Placed::No;
        }
        self.taken.push(word.rect());
        self.words.push(word);
        Placed::Yes
    }

    /// Whether a word could be set.
    pub(super) fn has_room(&self, word: &Word) -> bool {
        let rect = word.rect();
        let page = Rect::new(0.0, 0.0, self.size.width, self.size.height).grown(0.01);
        let inside = page.holds(Point::new(rect.x, rect.y))
            && page.holds(Point::new(rect.right(), rect.bottom()));
        let around = Rect::new(
            rect.x - 2.0 * AIR,
            rect.y,
            rect.width + 4.0 * AIR,
            rect.height,
        );
        inside && !self.taken.iter().any(|taken| taken.overlaps(&around))
    }

    /// Gives a region a meaning.
    pub(super) fn spot(&mut self, region: Region, tip: &Tip) {
        self.spots.push(Spot {
            region,
            meaning: tip.meaning.clone(),
            text: tip.text.clone(),
            telling: Telling::Everyone,
        });
    }

    pub(super) fn into_picture(mut self, title: &str, description: &str) -> Picture {
        let page = Rect::new(0.0, 0.0, self.size.width, self.size.height);
        self.spots.retain_mut(|spot| cut_spot(spot, &page));
        if self.spots.len() > MOST_TOLD {
            for spot in &mut self.spots {
                spot.telling = Telling::Pointer;
            }
        }
        Picture {
            title: title.to_owned(),
            description: description.to_owned(),
            size: self.size,
            marks: self
                .marks
                .into_iter()
                .map(rounded_mark)
                .filter_map(|mark| cut_mark(mark, &page))
                .collect(),
            words: self.words,
            spots: self.spots.into_iter().map(rounded_spot).collect(),
            rulers: self.rulers,
        }
    }
}

/// Whether a word was set.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Placed {
    Yes,
    No,
}

/// A text on a level line.
pub(super) fn word(text: &str, at: Point, anchor: Anchor, size: f64, ink: Ink, face: Face) -> Word {
    Word {
        text: text.to_owned(),
        full: None,
        // Rounded at once, so that what was found to have room still has it on the sheet.
        at: rounded(at),
        anchor,
        size,
        turn: Turn::Level,
        face,
        ink,
    }
}

/// To a tenth of a pixel: finer is not seen, and files stay short.
fn tenth(length: f64) -> f64 {
    // Adding zero turns minus zero into zero, so that equal pictures have equal text.
    (length * 10.0).round() / 10.0 + 0.0
}

fn rounded(at: Point) -> Point {
    Point::new(tenth(at.x), tenth(at.y))
}

fn rounded_rect(rect: Rect) -> Rect {
    Rect::new(
        tenth(rect.x),
        tenth(rect.y),
        tenth(rect.width),
        tenth(rect.height),
    )
}

/// The points, rounded, without the ones that repeat the one before.
fn rounded_points(points: Vec<Point>) -> Vec<Point> {
    let mut kept: Vec<Point> = points.into_iter().map(rounded).collect();
    if kept.len() > 2 {
        kept.dedup();
        if kept.len() == 1 {
            kept.push(kept[0]);
        }
    }
    kept
}

fn rounded_mark(mark: Mark) -> Mark {
    match mark {
        Mark::Line { points, stroke } => Mark::Line {
            points: rounded_points(points),
            stroke,
        },
        Mark::Area { points, ink } => Mark::Area {
            points: rounded_points(points),
            ink,
        },
        Mark::Disc {
            center,
            radius,
            fill,
            stroke,
        } => Mark::Disc {
            center: rounded(center),
            radius: tenth(radius),
            fill,
            stroke,
        },
        Mark::Rect {
            rect,
            radius,
            fill,
            stroke,
        } => Mark::Rect {
            rect: rounded_rect(rect),
            radius: tenth(radius),
            fill,
            stroke,
        },
        Mark::Clip { rect, marks } => Mark::Clip {
            rect: rounded_rect(rect),
            marks: marks.into_iter().map(rounded_mark).collect(),
        },
    }
}

/// A mark, cut to the page where there was too little room for it; `None` if nothing is left.
fn cut_mark(mark: Mark, page: &Rect) -> Option<Mark> {
    let air = page.grown(1.0);
    match mark {
        Mark::Line { ref points, .. } | Mark::Area { ref points, .. } => {
            if points.iter().all(|at| air.holds(*at)) {
                Some(mark)
            } else {
                Some(Mark::Clip {
                    rect: *page,
                    marks: vec![mark],
                })
            }
        }
        Mark::Disc { center, radius, .. } => {
            let around = Rect::new(center.x, center.y, 0.0, 0.0).grown(radius);
            air.covers(&around).then_some(mark)
        }
        Mark::Rect {
            rect,
            radius,
            fill,
            stroke,
        } => Some(Mark::Rect {
            rect: rect.common(page)?,
            radius,
            fill,
            stroke,
        }),
        Mark::Clip { rect, marks } => Some(Mark::Clip {
            rect: rect.common(page)?,
            marks,
        }),
    }
}

/// Cuts a spot to the page; says whether anything is left of it.
fn cut_spot(spot: &mut Spot, page: &Rect) -> bool {
    match &mut spot.region {
        Region::Rect(rect) => match rect.common(page) {
            Some(common) => {
                *rect = common;
                true
            }
            None => false,
        },
        Region::Disc { center, .. } => page.holds(*center),
        Region::Line(points) => points.iter().any(|at| page.holds(*at)),
    }
}

fn rounded_spot(spot: Spot) -> Spot {
    let region = match spot.region {
        Region::Rect(rect) => Region::Rect(rounded_rect(rect)),
        Region::Disc { center, radius } => Region::Disc {
            center: rounded(center),
            radius: tenth(radius),
        },
        Region::Line(points) => Region::Line(rounded_points(points)),
    };
    Spot { region, ..spot }
}
