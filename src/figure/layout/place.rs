//! Words inside a panel: each takes the first place where it covers least.

use crate::figure::Role;
use crate::figure::font::Face;
use crate::figure::layout::frame::Frame;
use crate::figure::layout::layer::{Painted, Place, Wish};
use crate::figure::layout::sheet::{self, Placed, Sheet};
use crate::figure::layout::style;
use crate::figure::picture::{Anchor, Point, Rect, Word};

/// So many pixels away from its place are as bad for a word as covering one more busy place.
const FAR: f64 = 3.0;

/// Sets the words that want a place, the most important first.
pub(super) fn words(painted: &Painted, frame: &Frame, sheet: &mut Sheet) {
    for wish in painted.wishes.iter().filter(|wish| !wish.text.is_empty()) {
        let best = candidates(wish, frame)
            .into_iter()
            .filter(|word| sheet.has_room(word) && lies_in(word, frame, wish))
            .map(|word| {
                let far = distance(&word.rect(), wish) / FAR;
                (covered(&word.rect(), &painted.busy) as f64 + far, word)
            })
            // The first of equals: candidates are listed by preference.
            .reduce(|best, next| if next.0 < best.0 { next } else { best });
        if let Some((_, word)) = best {
            let placed = sheet.word(word);
            debug_assert_eq!(placed, Placed::Yes);
        }
    }
}

/// Words stay over the panel; the ones above a bar may rise over its upper side.
fn lies_in(word: &Word, frame: &Frame, wish: &Wish) -> bool {
    let rect = word.rect();
    let plot = frame.plot;
    let over = match wish.place {
        Place::Above(_) | Place::RightAbove(_) => 16.0,
        Place::Beside(..) | Place::AtTop(_) | Place::OnLine(_) | Place::Along(..) => 6.0,
    };
    let (left, right) = match wish.place {
        Place::Above(_) | Place::RightAbove(_) => (f64::NEG_INFINITY, f64::INFINITY),
        Place::Beside(..) | Place::AtTop(_) | Place::OnLine(_) | Place::Along(..) => {
            (plot.x - 1.0, plot.right() + 1.0)
        }
    };
    rect.y >= plot.y - over
        && rect.bottom() <= plot.bottom() + 4.0
        && rect.x >= left
        && rect.right() <= right
}

/// How far a word is from the place that it belongs to, for words that may wander.
fn distance(rect: &Rect, wish: &Wish) -> f64 {
    match wish.place {
        Place::Beside(at, _) => {
            let x = (rect.x - at.x).max(at.x - rect.right()).max(0.0);
            let y = (rect.y - at.y).max(at.y - rect.bottom()).max(0.0);
            x.hypot(y)
        }
        Place::AtTop(_)
        | Place::OnLine(_)
        | Place::Along(..)
        | Place::Above(_)
        | Place::RightAbove(_) => 0.0,
    }
}

/// How many busy places a rectangle covers.
fn covered(rect: &Rect, busy: &[Point]) -> usize {
    let around = rect.grown(5.0);
    busy.iter().filter(|at| around.holds(**at)).count()
}

fn candidates(wish: &Wish, frame: &Frame) -> Vec<Word> {
    let face = match wish.role {
        Role::Chosen => Face::SansStrong,
        Role::Series(_) | Role::Pale(_) | Role::Quiet | Role::Caution | Role::Reference => {
            Face::Sans
        }
    };
    let ink = style::text_ink(wish.role);
    let word =
        |at: Point, anchor: Anchor| sheet::word(&wish.text, at, anchor, style::SMALL, ink, face);
    let plot = frame.plot;
    match wish.place {
        Place::Beside(at, distance) => {
            let mut words = Vec::new();
            // Further and further away, in case the near places are covered.
            for step in 0..5 {
                let away = distance + 5.0 + 10.0 * f64::from(step);
                let (up, down) = (at.y - away - 2.0, at.y + away + 9.0);
                words.push(word(Point::new(at.x, up), Anchor::Middle));
                words.push(word(Point::new(at.x, down), Anchor::Middle));
                for y in [at.y + style::BASELINE, up, down] {
                    words.push(word(Point::new(at.x + away, y), Anchor::Start));
                    words.push(word(Point::new(at.x - away, y), Anchor::End));
                }
            }
            words
        }
        Place::Along(from, to) => {
            let along = |share: f64| {
                Point::new(
                    from.x + share * (to.x - from.x),
                    from.y + share * (to.y - from.y),
                )
            };
            let places = [0.8, 0.7, 0.9, 0.6, 0.5, 0.3, 0.15].map(along);
            let below = places.map(|at| word(Point::new(at.x + 8.0, at.y + 10.0), Anchor::Start));
            let above = places.map(|at| word(Point::new(at.x - 8.0, at.y - 4.0), Anchor::End));
            below.into_iter().chain(above).collect()
        }
        Place::AtTop(x) => {
            let mut words = Vec::new();
            for step in 0..4 {
                let y = plot.y + 11.0 + 15.0 * f64::from(step);
                words.push(word(Point::new(x + 6.0, y), Anchor::Start));
                words.push(word(Point::new(x - 6.0, y), Anchor::End));
            }
            words
        }
        Place::OnLine(y) => {
            let (up, down) = (y - 5.0, y + 13.0);
            let middle = plot.x + plot.width / 2.0;
            vec![
                word(Point::new(plot.right() - 2.0, up), Anchor::End),
                word(Point::new(plot.x + 4.0, up), Anchor::Start),
                word(Point::new(plot.right() - 2.0, down), Anchor::End),
                word(Point::new(plot.x + 4.0, down), Anchor::Start),
                word(Point::new(middle, up), Anchor::Middle),
                word(Point::new(middle, down), Anchor::Middle),
            ]
        }
        Place::Above(at) => vec![
            word(Point::new(at.x, at.y - 4.0), Anchor::Middle),
            word(Point::new(at.x + 5.0, at.y - 4.0), Anchor::Start),
            word(Point::new(at.x - 5.0, at.y - 4.0), Anchor::End),
        ],
        Place::RightAbove(at) => vec![
            word(Point::new(at.x + 4.0, at.y - 4.0), Anchor::Start),
            word(Point::new(at.x - 4.0, at.y - 4.0), Anchor::End),
        ],
    }
}
