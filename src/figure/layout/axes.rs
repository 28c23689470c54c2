//! Grid, numbers and headings along the axes of panels, and the names at the ends of lines.

use crate::figure::axis::Tick;
use crate::figure::font::Face;
use crate::figure::ink::Ink;
use crate::figure::layout::ends::{self, Wish as EndWish};
use crate::figure::layout::frame::Frame;
use crate::figure::layout::layer::EndName;
use crate::figure::layout::sheet::{Placed, Sheet};
use crate::figure::layout::style;
use crate::figure::metrics;
use crate::figure::picture::{Anchor, Mark, Point, Stroke};
use crate::figure::{End, Height, Layer, Panel};

/// Between the written numbers of a horizontal axis.
const TICK_AIR: f64 = 18.0;

/// Where the margins are.
pub(super) struct Margins {
    pub(super) left: f64,
    pub(super) right: f64,
    /// On which side the numbers of the vertical axes stand.
    pub(super) numbers: End,
}

/// The grid of a panel: level lines; upright ones only where both axes are numbers alike.
pub(super) fn grid(panel: &Panel, frame: &Frame, sheet: &mut Sheet) {
    let plot = frame.plot;
    let level = |y: f64, ink: Ink| Mark::Line {
        points: vec![Point::new(plot.x, y), Point::new(plot.right(), y)],
        stroke: Stroke::solid(ink, style::HAIR),
    };
    let crisp = |place: f64| place.floor() + 0.5;
    match panel.height {
        Height::Strip | Height::Line => {}
        Height::Share(_) | Height::Square => {
            for tick in &frame.y_ticks {
                let y = crisp(plot.bottom() - tick.share * plot.height).min(plot.bottom() - 0.5);
                sheet.mark(level(y, Ink::Grid));
            }
        }
    }
    if panel.height == Height::Square {
        for tick in frame.x.ticks(square_ticks(plot.width)) {
            let x = crisp(plot.x + tick.share * plot.width).min(plot.right() - 0.5);
            sheet.mark(Mark::Line {
                points: vec![Point::new(x, plot.y), Point::new(x, plot.bottom())],
                stroke: Stroke::solid(Ink::Grid, style::HAIR),
            });
        }
    }
    let stands = panel.layers.iter().any(|part| match part {
        Layer::Bars { .. } | Layer::Bins { .. } => true,
        Layer::Points { .. }
        | Layer::Line { .. }
        | Layer::Steps { .. }
        | Layer::Band { .. }
        | Layer::Interval { .. }
        | Layer::Rule { .. }
        | Layer::Identity { .. }
        | Layer::Mark { .. }
        | Layer::Rug { .. }
        | Layer::Columns { .. }
        | Layer::Text { .. } => false,
    });
    let y_ends = frame.y.ends();
    let has_zero_line = match panel.height {
        Height::Share(_) => true,
        Height::Strip | Height::Line | Height::Square => false,
    };
    let crosses_zero = y_ends.0 < 0.0 && y_ends.1 > 0.0 && has_zero_line;
    if stands || crosses_zero {
        let y = crisp(frame.base()).clamp(plot.y + 0.5, plot.bottom() - 0.5);
        sheet.mark(level(y, Ink::Axis));
    }
}

/// The numbers and the heading of a vertical axis.
pub(super) fn y_axis(panel: &Panel, frame: &Frame, margins: &Margins, sheet: &mut Sheet) {
    let plot = frame.plot;
    if is_strip(panel) {
        // Numbers in a line of text are centred on their places, the first at the very edge.
        let away = match panel.height {
            Height::Line => 2.0 * style::GAP,
            Height::Strip | Height::Share(_) | Height::Square => style::GAP,
        };
        let at = Point::new(plot.x - away, plot.y + plot.height / 2.0 + style::BASELINE);
        let _ = sheet.fitted(
            &panel.y.heading(),
            at,
            Anchor::End,
            style::SMALL,
            (Ink::QuietText, Face::Sans),
            at.x,
        );
        return;
    }
    // Numbers are right-aligned on either side, so that their decimal marks stand below each
    // other.
    let widest = frame
        .y_ticks
        .iter()
        .map(|tick| metrics::width(&tick.text, Face::Sans, style::SMALL))
        .fold(0.0, f64::max);
    let (x, room) = match margins.numbers {
        End::Left => (plot.x - style::GAP, plot.x - style::GAP),
        End::Right => (plot.right() + style::GAP + widest, widest),
    };
    for tick in &frame.y_ticks {
        let y = plot.bottom() - tick.share * plot.height + style::BASELINE;
        let _ = sheet.fitted(
            &tick.text,
            Point::new(x, y),
            Anchor::End,
            style::SMALL,
            (Ink::QuietText, Face::Sans),
            room,
        );
    }
    let factor = frame.y.factor();
    let heading = [panel.y.heading(), factor]
        .iter()
        .filter(|part| !part.is_empty())
        .cloned()
        .collect::<Vec<String>>()
        .join(" ");
    let (at, anchor) = match margins.numbers {
        End::Left => (Point::new(0.0, plot.y - 12.0), Anchor::Start),
        End::Right => (Point::new(sheet.size().width, plot.y - 12.0), Anchor::End),
    };
    let width = sheet.size().width;
    let _ = sheet.fitted(
        &heading,
        at,
        anchor,
        style::SMALL,
        (Ink::QuietText, Face::Sans),
        width,
    );
}

/// The numbers and the heading of the horizontal axis that a run of panels shares.
pub(super) fn x_axis(panel: &Panel, first: &Frame, last: &Frame, sheet: &mut Sheet) {
    let Some(axis) = panel.x.as_ref() else {
        return;
    };
    let plot = last.plot;
    let width = first.plot.width;
    let small = |text: &str| metrics::width(text, Face::Sans, style::SMALL);
    let widest = |ticks: &[Tick]| {
        ticks
            .iter()
            .map(|tick| small(&tick.text))
            .fold(0.0, f64::max)
    };
    // As many numbers as have room, measured on a generous first try.
    let tried = first.x.ticks(6);
    let pitch = widest(&tried) + TICK_AIR;
    let most = match panel.height {
        Height::Square => square_ticks(width),
        Height::Share(_) | Height::Strip | Height::Line => {
            (width / pitch).floor().clamp(2.0, 8.0) as usize
        }
    };
    let ticks = first.x.ticks(most);
    let pitch = (width / ticks.len().max(1) as f64).max(1.0);
    let is_names = match axis.scale {
        crate::figure::Scale::Names(_) => true,
        crate::figure::Scale::Linear
        | crate::figure::Scale::Percent
        | crate::figure::Scale::Log10
        | crate::figure::Scale::Log10AndZero => false,
    };
    // Names are cut short if that leaves a word; otherwise only some of them are written.
    let (every, room) = if !is_names {
        (1, f64::INFINITY)
    } else if pitch >= 56.0 || pitch >= widest(&ticks) + style::GAP {
        (1, pitch - style::GAP)
    } else {
        let every = ((widest(&ticks).min(80.0) + style::GAP) / pitch)
            .ceil()
            .max(1.0);
        (every as usize, every * pitch - style::GAP)
    };
    let baseline = plot.bottom() + 17.0;
    for tick in ticks.iter().step_by(every) {
        let x = plot.x + tick.share * plot.width;
        let _ = sheet.fitted(
            &tick.text,
            Point::new(x, baseline),
            Anchor::Middle,
            style::SMALL,
            (Ink::QuietText, Face::Sans),
            room,
        );
        if !is_names {
            let x = (x.floor() + 0.5).min(plot.right() - 0.5);
            sheet.mark(Mark::Line {
                points: vec![
                    Point::new(x, plot.bottom()),
                    Point::new(x, plot.bottom() + 3.0),
                ],
                stroke: Stroke::solid(Ink::Axis, style::HAIR),
            });
        }
    }
    let heading = [axis.heading(), first.x.factor()]
        .iter()
        .filter(|part| !part.is_empty())
        .cloned()
        .collect::<Vec<String>>()
        .join(" ");
    if heading.is_empty() {
        return;
    }
    let at = Point::new(plot.right(), baseline + style::SMALL_LINE);
    let _ = sheet.fitted(
        &heading,
        at,
        Anchor::End,
        style::SMALL,
        (Ink::QuietText, Face::Sans),
        plot.right(),
    );
}

/// Names at the ends of lines, with a fine stroke to the line where they had to move.
pub(super) fn end_names(names: &[EndName], frame: &Frame, margins: &Margins, sheet: &mut Sheet) {
    let plot = frame.plot;
    for end in [End::Left, End::Right] {
        let wishes: Vec<EndWish> = names
            .iter()
            .enumerate()
            .filter(|(_, name)| name.label.end == end)
            .map(|(at, name)| EndWish { at, y: name.y })
            .collect();
        let (edge, away, anchor, room) = match end {
            End::Left => (plot.x, -1.0, Anchor::End, margins.left),
            End::Right => (plot.right(), 1.0, Anchor::Start, margins.right),
        };
        for wish in ends::spread(wishes, plot.y, plot.bottom()) {
            let name = &names[wish.at];
            let at = Point::new(edge + away * (style::GAP + 2.0), wish.y + style::BASELINE);
            let placed = sheet.fitted(
                &name.label.text,
                at,
                anchor,
                style::SMALL,
                (style::text_ink(name.role), Face::Sans),
                room - style::GAP - 2.0,
            );
            if placed == Placed::Yes && (wish.y - name.y).abs() > 3.0 {
                sheet.mark(Mark::Line {
                    points: vec![
                        Point::new(edge + away * 1.5, name.y),
                        Point::new(edge + away * style::GAP, wish.y),
                    ],
                    stroke: Stroke::solid(style::mark_ink(name.role), 0.75),
                });
            }
        }
    }
}

/// How many numbers are written along either axis of a square.
pub(super) fn square_ticks(side: f64) -> usize {
    (side / 46.0).floor().clamp(2.0, 6.0) as usize
}

/// Whether a panel is a strip under another one, without numbers along its vertical axis.
pub(super) fn is_strip(panel: &Panel) -> bool {
    match panel.height {
        Height::Strip | Height::Line => true,
        Height::Share(_) | Height::Square => false,
    }
}
