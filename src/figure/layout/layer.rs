//! From the layers of a panel to marks, spots and the words that want a place.

use crate::figure::ink::Ink;
use crate::figure::layout::frame::Frame;
use crate::figure::layout::{bars, style, thin};
use crate::figure::picture::{Mark, Point, Region, Stroke};
use crate::figure::{At, Dot, End, Label, Layer, Role, Tip, Weight};

/// From so many points on, dots are small.
pub(super) const MANY: usize = 150;

/// From so many points on, dots are tiny and those on each other are merged.
pub(super) const VERY_MANY: usize = 1500;

/// The smallest region that a pointer can hit with ease: its radius.
const EASY: f64 = 6.0;

/// What the layers of one panel come to.
#[derive(Default)]
pub(super) struct Painted {
    /// Shapes, from the back to the front.
    pub(super) marks: Vec<Mark>,
    /// Regions with a meaning.
    pub(super) spots: Vec<(Region, Tip)>,
    /// Places that words had better not cover.
    pub(super) busy: Vec<Point>,
    /// Words that want a place, the most important first.
    pub(super) wishes: Vec<Wish>,
    /// Names at line ends.
    pub(super) ends: Vec<EndName>,
    /// Horizontal places of what was chosen, and where they are on the vertical axis.
    pub(super) drops: Vec<Point>,
}

/// A word that wants a place.
pub(super) struct Wish {
    pub(super) text: String,
    pub(super) role: Role,
    pub(super) place: Place,
}

/// Where a word wants to be.
pub(super) enum Place {
    /// Beside a place, at a distance.
    Beside(Point, f64),
    /// Beside an upright line, near the top.
    AtTop(f64),
    /// On a level line, near an end.
    OnLine(f64),
    /// Below or above a rising line, anywhere along it.
    Along(Point, Point),
    /// Centred above a place.
    Above(Point),
    /// Above a place, beside the line that comes down to it.
    RightAbove(Point),
}

/// A name at the end of a line.
pub(super) struct EndName {
    pub(super) label: Label,
    pub(super) role: Role,
    pub(super) y: f64,
}

/// Paints a layer.
pub(super) fn paint(layer: &Layer, frame: &Frame, out: &mut Painted) {
    match layer {
        Layer::Points {
            role,
            x,
            y,
            dot,
            joined,
            tips,
        } => points(frame, out, (*role, *dot), (x, y), joined, tips),
        Layer::Line {
            role,
            x,
            y,
            weight,
            label,
            tip,
        } => {
            let places = pairs(frame, x, y);
            line(
                frame,
                out,
                (*role, *weight),
                places,
                label.as_ref(),
                tip.as_ref(),
            );
        }
        Layer::Steps {
            role,
            x,
            y,
            label,
            tip,
        } => {
            let places = stairs(&pairs(frame, x, y));
            let style = (*role, Weight::Strong);
            line(frame, out, style, places, label.as_ref(), tip.as_ref());
        }
        Layer::Band { role, x, low, high } => band(frame, out, *role, x, low, high),
        Layer::Interval { role, x, low, high } => interval(frame, out, *role, x, low, high),
        Layer::Bars { role, x, y, tips } => bars::bars(frame, out, *role, x, y, tips),
        Layer::Bins { role, edges, y } => bars::bins(frame, out, *role, edges, y),
        Layer::Rule { role, at, label } => rule(frame, out, *role, *at, label),
        Layer::Identity { label } => identity(frame, out, label),
        Layer::Mark {
            role,
            x,
            y,
            label,
            tip,
        } => mark(frame, out, *role, (*x, *y), label, tip.as_ref()),
        Layer::Rug { role, x, tips } => bars::rug(frame, out, *role, x, tips),
        Layer::Columns { x, tips } => bars::columns(frame, out, x, tips),
        Layer::Text { role, x, y, text } => {
            if let Some(at) = frame.at(*x, *y).filter(|at| frame.holds(*at)) {
                out.wishes.push(Wish {
                    text: text.clone(),
                    role: *role,
                    place: match role {
                        Role::Chosen => Place::RightAbove(at),
                        Role::Series(_)
                        | Role::Pale(_)
                        | Role::Quiet
                        | Role::Caution
                        | Role::Reference => Place::Above(at),
                    },
                });
            }
        }
    }
}

/// The places of pairs of numbers.
pub(super) fn pairs(frame: &Frame, x: &[f64], y: &[f64]) -> Vec<Option<Point>> {
    x.iter().zip(y).map(|(x, y)| frame.at(*x, *y)).collect()
}

fn points(
    frame: &Frame,
    out: &mut Painted,
    (role, dot): (Role, Dot),
    (x, y): (&[f64], &[f64]),
    joined: &[Vec<usize>],
    tips: &[Tip],
) {
    let places: Vec<Option<Point>> = pairs(frame, x, y)
        .into_iter()
        .map(|place| place.filter(|at| frame.holds(*at)))
        .collect();
    let count = places.len();
    // Dots that would touch all their neighbours along the axis are one of very many, too.
    let is_crowded = count as f64 * 4.0 > frame.plot.width;
    let radius = match dot {
        Dot::Small if is_crowded => style::TINY_DOT,
        Dot::Normal | Dot::Ring if count <= MANY => style::DOT,
        Dot::Normal | Dot::Ring | Dot::Small if count <= VERY_MANY => style::SMALL_DOT,
        Dot::Normal | Dot::Ring | Dot::Small => style::TINY_DOT,
    };
    for group in joined {
        let places: Vec<Point> = group
            .iter()
            .filter_map(|at| places.get(*at).copied().flatten())
            .collect();
        if places.len() > 1 {
            out.marks.push(Mark::Line {
                points: places,
                stroke: Stroke::solid(style::band_ink(role), 1.5),
            });
        }
    }
    let kept = if count > VERY_MANY {
        thin::dots(&places, 1.0)
    } else {
        (0..count).collect()
    };
    for at in kept {
        let Some(center) = places[at] else { continue };
        out.marks.push(match dot {
            Dot::Normal | Dot::Small => Mark::Disc {
                center,
                radius,
                fill: Some(style::dot_ink(role)),
                stroke: None,
            },
            Dot::Ring => Mark::Disc {
                center,
                radius,
                fill: Some(Ink::Ground),
                stroke: Some(Stroke::solid(style::mark_ink(role), 1.5)),
            },
        });
        out.busy.push(center);
        if let Some(tip) = tips.get(at) {
            let radius = (radius + 2.0).max(EASY);
            out.spots
                .push((Region::Disc { center, radius }, tip.clone()));
        }
    }
}

fn line(
    frame: &Frame,
    out: &mut Painted,
    (role, weight): (Role, Weight),
    places: Vec<Option<Point>>,
    label: Option<&Label>,
    tip: Option<&Tip>,
) {
    let stroke = match weight {
        Weight::Strong | Weight::Normal | Weight::Fine => {
            Stroke::solid(style::mark_ink(role), style::line_width(weight))
        }
        Weight::Faint => Stroke::solid(style::band_ink(role), style::line_width(weight)),
        Weight::Dashed => Stroke::dashed(style::mark_ink(role), style::line_width(weight)),
    };
    if let Some(label) = label {
        let mut inside = places.iter().flatten().filter(|at| frame.holds(**at));
        let end = match label.end {
            End::Left => inside.min_by(|a, b| a.x.total_cmp(&b.x)),
            End::Right => inside.by_ref().max_by(|a, b| a.x.total_cmp(&b.x)),
        };
        if let Some(end) = end {
            out.ends.push(EndName {
                label: label.clone(),
                role,
                y: end.y,
            });
        }
    }
    let pieces = thin::pieces(places.into_iter());
    let mut marks = Vec::new();
    for piece in pieces {
        if is_one_of_many(weight) && label.is_none() && is_flat(&piece, frame) {
            continue;
        }
        if piece.len() < 2 {
            // A piece of one point would not be seen as a line.
            if frame.holds(piece[0]) {
                marks.push(Mark::Disc {
                    center: piece[0],
                    radius: stroke.width.max(1.5),
                    fill: Some(stroke.ink),
                    stroke: None,
                });
            }
            continue;
        }
        if !is_one_of_many(weight) {
            out.busy.extend(between(&piece));
        }
        if let Some(tip) = tip {
            out.spots.push((Region::Line(piece.clone()), tip.clone()));
        }
        marks.push(Mark::Line {
            points: piece,
            stroke,
        });
    }
    clipped(frame, out, marks);
}

fn is_one_of_many(weight: Weight) -> bool {
    match weight {
        Weight::Fine | Weight::Faint => true,
        Weight::Strong | Weight::Normal | Weight::Dashed => false,
    }
}

/// Whether a line never leaves the base by as much as can be seen.
fn is_flat(piece: &[Point], frame: &Frame) -> bool {
    let base = frame.base();
    piece.iter().all(|at| (at.y - base).abs() < 0.3)
}

/// Places along a line, near enough to each other that a word cannot slip between.
fn between(piece: &[Point]) -> Vec<Point> {
    let mut places = Vec::new();
    for pair in piece.windows(2) {
        let (from, to) = (pair[0], pair[1]);
        let steps = ((to.x - from.x).hypot(to.y - from.y) / 4.0).clamp(1.0, 400.0) as usize;
        for step in 0..steps {
            let share = step as f64 / steps as f64;
            places.push(Point::new(
                from.x + share * (to.x - from.x),
                from.y + share * (to.y - from.y),
            ));
        }
    }
    places.extend(piece.last());
    places
}

fn stairs(places: &[Option<Point>]) -> Vec<Option<Point>> {
    let mut stairs = Vec::new();
    let mut before: Option<Point> = None;
    for place in places {
        if let (Some(before), Some(place)) = (before, place) {
            stairs.push(Some(Point::new(place.x, before.y)));
        }
        stairs.push(*place);
        before = *place;
    }
    stairs
}

fn band(frame: &Frame, out: &mut Painted, role: Role, x: &[f64], low: &[f64], high: &[f64]) {
    let lows = pairs(frame, x, low);
    let highs = pairs(frame, x, high);
    // A place counts only where both ends have one.
    let both = |own: &[Option<Point>], other: &[Option<Point>]| -> Vec<Option<Point>> {
        own.iter()
            .zip(other)
            .map(|(own, other)| other.and(*own))
            .collect()
    };
    let lower = thin::pieces(both(&lows, &highs).into_iter());
    let upper = thin::pieces(both(&highs, &lows).into_iter());
    let mut marks = Vec::new();
    for (lower, upper) in lower.into_iter().zip(upper) {
        if lower.len() < 2 {
            continue;
        }
        out.busy.extend(between(&lower));
        out.busy.extend(between(&upper));
        let mut points = upper;
        points.extend(lower.into_iter().rev());
        marks.push(Mark::Area {
            points,
            ink: style::band_ink(role),
        });
    }
    clipped(frame, out, marks);
}

fn interval(frame: &Frame, out: &mut Painted, role: Role, x: &[f64], low: &[f64], high: &[f64]) {
    let plot = frame.plot;
    for ((x, low), high) in x.iter().zip(low).zip(high) {
        let (Some(low), Some(high)) = (frame.at(*x, *low), frame.at(*x, *high)) else {
            continue;
        };
        if low.x < plot.x - 0.5 || low.x > plot.right() + 0.5 {
            continue;
        }
        let inside = |at: Point| Point::new(at.x, at.y.clamp(plot.y, plot.bottom()));
        let points = vec![inside(low), inside(high)];
        out.busy.extend(between(&points));
        out.marks.push(Mark::Line {
            points,
            stroke: Stroke::solid(style::mark_ink(role), 1.5),
        });
    }
}

fn rule(frame: &Frame, out: &mut Painted, role: Role, at: At, label: &str) {
    let plot = frame.plot;
    let (points, place) = match at {
        At::X(x) => {
            let Some(x) = frame.at_x(x) else { return };
            let ends = vec![Point::new(x, plot.y), Point::new(x, plot.bottom())];
            if role == Role::Chosen && frame.holds(ends[1]) {
                out.drops.push(ends[1]);
            }
            (ends, Place::AtTop(x))
        }
        At::Y(y) => {
            let Some(y) = frame.at_y(y) else { return };
            let ends = vec![Point::new(plot.x, y), Point::new(plot.right(), y)];
            (ends, Place::OnLine(y))
        }
    };
    if !points.iter().all(|at| frame.holds(*at)) {
        return;
    }
    out.busy.extend(between(&points));
    let ink = style::mark_ink(role);
    let stroke = match role {
        Role::Chosen => Stroke::solid(ink, 1.5),
        Role::Series(_) | Role::Pale(_) | Role::Quiet | Role::Caution | Role::Reference => {
            Stroke::dashed(ink, 1.0)
        }
    };
    out.marks.push(Mark::Line { points, stroke });
    if !label.is_empty() {
        out.wishes.push(Wish {
            text: label.to_owned(),
            role,
            place,
        });
    }
}

fn identity(frame: &Frame, out: &mut Painted, label: &str) {
    let ((x_low, x_high), (y_low, y_high)) = (frame.x.ends(), frame.y.ends());
    let (low, high) = (x_low.max(y_low), x_high.min(y_high));
    let (Some(from), Some(to)) = (frame.at(low, low), frame.at(high, high)) else {
        return;
    };
    if low >= high {
        return;
    }
    out.busy.extend(between(&[from, to]));
    out.marks.push(Mark::Line {
        points: vec![from, to],
        stroke: Stroke::solid(Ink::Axis, 1.0),
    });
    if !label.is_empty() {
        out.wishes.push(Wish {
            text: label.to_owned(),
            role: Role::Reference,
            place: Place::Along(from, to),
        });
    }
}

fn mark(
    frame: &Frame,
    out: &mut Painted,
    role: Role,
    (x, y): (f64, f64),
    label: &str,
    tip: Option<&Tip>,
) {
    let Some(center) = frame.at(x, y).filter(|at| frame.holds(*at)) else {
        return;
    };
    out.marks.push(Mark::Disc {
        center,
        radius: style::RING,
        fill: Some(Ink::Ground),
        stroke: Some(Stroke::solid(style::mark_ink(role), 2.0)),
    });
    out.busy.push(center);
    out.drops.push(center);
    if !label.is_empty() {
        // What was chosen comes before everything else.
        out.wishes.insert(
            0,
            Wish {
                text: label.to_owned(),
                role,
                place: Place::Beside(center, style::RING),
            },
        );
    }
    if let Some(tip) = tip {
        let radius = style::RING + 3.0;
        out.spots
            .push((Region::Disc { center, radius }, tip.clone()));
    }
}

/// Puts lines and areas on the sheet, cut to the area of the data where they reach beyond it.
fn clipped(frame: &Frame, out: &mut Painted, marks: Vec<Mark>) {
    let is_inside = |mark: &Mark| match mark {
        Mark::Line { points, .. } | Mark::Area { points, .. } => {
            points.iter().all(|at| frame.holds(*at))
        }
        Mark::Disc { center, .. } => frame.holds(*center),
        Mark::Rect { rect, .. } | Mark::Clip { rect, .. } => frame.plot.covers(rect),
    };
    if marks.iter().all(is_inside) {
        out.marks.extend(marks);
    } else {
        out.marks.push(Mark::Clip {
            rect: frame.plot,
            marks,
        });
    }
}
