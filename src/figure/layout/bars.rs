//! Layers that stand in columns: bars, bins, strewn dots, and regions for the pointer.

use crate::figure::ink::Ink;
use crate::figure::layout::frame::Frame;
use crate::figure::layout::layer::{MANY, Painted, VERY_MANY, pairs};
use crate::figure::layout::{style, thin};
use crate::figure::picture::{Mark, Point, Rect, Region};
use crate::figure::{Role, Tip};

/// Bars narrower than this are painted as one area.
const NARROWEST_BAR: f64 = 2.5;

pub(super) fn bars(
    frame: &Frame,
    out: &mut Painted,
    role: Role,
    x: &[f64],
    y: &[f64],
    tips: &[Tip],
) {
    let places = pairs(frame, x, y);
    let edges = edges(frame, x);
    let narrowest = edges
        .iter()
        .flatten()
        .map(|(left, right)| right - left)
        .fold(f64::INFINITY, f64::min);
    let gap = if narrowest < NARROWEST_BAR {
        0.0
    } else {
        (narrowest * 0.3).clamp(1.0, 10.0)
    };
    for (at, (place, edge)) in places.iter().zip(&edges).enumerate() {
        let (Some(place), Some((left, right))) = (place, edge) else {
            continue;
        };
        let rect = standing(frame, left + gap / 2.0, right - gap / 2.0, place.y);
        if rect.width > 0.0 && rect.height > 0.0 {
            out.marks.push(Mark::Rect {
                rect,
                radius: 0.0,
                fill: Some(bar_ink(role)),
                stroke: None,
            });
        }
        out.busy.push(*place);
        if let Some(tip) = tips.get(at) {
            let column = Rect::new(*left, frame.plot.y, right - left, frame.plot.height);
            out.spots.push((Region::Rect(column), tip.clone()));
        }
    }
}

/// Bars of the background are paler than its lines: they cover more.
fn bar_ink(role: Role) -> Ink {
    match role {
        Role::Quiet => Ink::QuietBar,
        Role::Series(_) | Role::Pale(_) | Role::Chosen | Role::Caution | Role::Reference => {
            style::mark_ink(role)
        }
    }
}

/// A bar that stands on the base (or hangs from it), cut to the area of the data.
fn standing(frame: &Frame, left: f64, right: f64, y: f64) -> Rect {
    let plot = frame.plot;
    let (left, right) = (left.max(plot.x), right.min(plot.right()));
    let (base, y) = (frame.base(), y.clamp(plot.y, plot.bottom()));
    Rect::new(left, base.min(y), right - left, (base - y).abs())
}

/// The stretch of each position: from the middle of its neighbours, cut to the area of the data.
fn edges(frame: &Frame, x: &[f64]) -> Vec<Option<(f64, f64)>> {
    let places: Vec<Option<f64>> = x.iter().map(|x| frame.at_x(*x)).collect();
    let mut sorted: Vec<f64> = places.iter().flatten().copied().collect();
    sorted.sort_by(f64::total_cmp);
    sorted.dedup();
    let plot = frame.plot;
    places
        .into_iter()
        .map(|place| {
            let place = place?;
            let nth = sorted.partition_point(|other| *other < place);
            let before = nth.checked_sub(1).and_then(|at| sorted.get(at));
            let after = sorted.get(nth + 1);
            let reach = |other: Option<&f64>| other.map(|other| (other - place).abs() / 2.0);
            // The outermost reach as far outwards as inwards; a single one takes a tenth.
            let left = reach(before).or(reach(after)).unwrap_or(plot.width / 20.0);
            let right = reach(after).or(reach(before)).unwrap_or(plot.width / 20.0);
            let (left, right) = (
                (place - left).max(plot.x),
                (place + right).min(plot.right()),
            );
            (right > left).then_some((left, right))
        })
        .collect()
}

pub(super) fn bins(frame: &Frame, out: &mut Painted, role: Role, edges: &[f64], y: &[f64]) {
    for (pair, height) in edges.windows(2).zip(y) {
        let (Some(left), Some(right)) = (frame.at_x(pair[0]), frame.at_x(pair[1])) else {
            continue;
        };
        let Some(top) = frame.at_y(*height) else {
            continue;
        };
        let gap = if right - left < 4.0 { 0.0 } else { 0.5 };
        let rect = standing(frame, left + gap, right - gap, top);
        if rect.width > 0.0 && rect.height > 0.0 {
            out.marks.push(Mark::Rect {
                rect,
                radius: 0.0,
                fill: Some(bar_ink(role)),
                stroke: None,
            });
            out.busy.push(Point::new((left + right) / 2.0, top));
        }
    }
}

pub(super) fn rug(frame: &Frame, out: &mut Painted, role: Role, x: &[f64], tips: &[Tip]) {
    let radius = if x.len() > MANY {
        style::TINY_DOT
    } else {
        style::SMALL_DOT
    };
    let plot = frame.plot;
    let room = (plot.height - 2.0 * radius).max(0.0) * 0.8;
    let places: Vec<Option<Point>> = x
        .iter()
        .enumerate()
        .map(|(at, x)| {
            let x = frame.at_x(*x)?;
            let y = plot.y + plot.height / 2.0 + thin::strewn(at) * room;
            Some(Point::new(x, y)).filter(|at| frame.holds(*at))
        })
        .collect();
    let kept = if places.len() > VERY_MANY {
        thin::dots(&places, 1.0)
    } else {
        (0..places.len()).collect()
    };
    for at in kept {
        let Some(center) = places[at] else { continue };
        out.marks.push(Mark::Disc {
            center,
            radius,
            fill: Some(style::dot_ink(role)),
            stroke: None,
        });
        out.busy.push(center);
        if let Some(tip) = tips.get(at) {
            out.spots.push((
                Region::Disc {
                    center,
                    radius: radius + 1.0,
                },
                tip.clone(),
            ));
        }
    }
}

pub(super) fn columns(frame: &Frame, out: &mut Painted, x: &[f64], tips: &[Tip]) {
    let plot = frame.plot;
    for (edge, tip) in edges(frame, x).into_iter().zip(tips) {
        if let Some((left, right)) = edge {
            let rect = Rect::new(left, plot.y, right - left, plot.height);
            out.spots.push((Region::Rect(rect), tip.clone()));
        }
    }
}
