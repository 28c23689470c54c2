//! Panels with axes: margins, grid, numbers along the axes, and the words inside.

use crate::figure::axis::{Ends, Mapping, Tick};
use crate::figure::font::Face;
use crate::figure::ink::Ink;
use crate::figure::layout::axes::{self, Margins};
use crate::figure::layout::frame::{self, Frame};
use crate::figure::layout::layer::{self, Painted};
use crate::figure::layout::place;
use crate::figure::layout::sheet::Sheet;
use crate::figure::layout::{Shown, style};
use crate::figure::metrics;
use crate::figure::picture::{Anchor, Mark, Point, Rect, Ruler, Stroke};
use crate::figure::{Axis, End, Figure, Height, Layer, Panel, Quantity, Zero};

/// The height of a panel that stands alone on a page.
const NATURAL_PANEL: f64 = 196.0;
/// The height of a square panel on a page, at most.
const NATURAL_SQUARE: f64 = 320.0;
/// Between panels.
const PANEL_GAP: f64 = 10.0;
/// Between a panel and the strip below it.
const STRIP_GAP: f64 = 6.0;
/// The largest share of the width that a margin takes.
const WIDEST_MARGIN: f64 = 0.34;
/// The least width for numbers beside a square panel.
const ASIDE: f64 = 150.0;
/// The room that a vertical axis wants for each of its numbers.
const TICK_PITCH: f64 = 22.0;

/// Lays panels out below each other.
pub(super) fn lay(panels: &[Panel], figure: &Figure, room: Rect, sheet: &mut Sheet) -> Shown {
    if panels.is_empty() {
        return Shown::Nothing;
    }
    let rows = rows(panels, room);
    let x_maps = x_mappings(panels);
    let y_maps: Vec<Mapping> = panels.iter().map(y_mapping).collect();
    let y_ticks: Vec<Vec<Tick>> = panels
        .iter()
        .zip(&y_maps)
        .zip(&rows)
        .map(|((panel, map), row)| y_ticks(panel, map, row.height))
        .collect();
    let margins = margins(panels, &y_ticks, &x_maps, room.width);
    let widths = widths(panels, &rows, room.width - margins.left - margins.right);
    let frames: Vec<Frame> = rows
        .iter()
        .zip(widths)
        .zip(x_maps)
        .zip(y_maps)
        .zip(y_ticks)
        .map(|((((row, width), x), y), y_ticks)| Frame {
            plot: Rect::new(room.x + margins.left, row.top, width, row.height),
            x,
            y,
            y_ticks,
        })
        .collect();

    let shows = |(panel, frame): (&Panel, &Frame)| {
        let mut layers = panel.layers.iter();
        layers.any(|part| frame::shows_something(part, frame))
    };
    if !figure.empty.is_empty() && !panels.iter().zip(&frames).any(shows) {
        // Axes without data would show numbers that nobody measured.
        return Shown::Nothing;
    }
    for group in groups(panels) {
        let bearer = group
            .clone()
            .rev()
            .find(|at| bears_axis(panels, *at))
            .unwrap_or(group.start);
        let (above, last) = (&frames[group.start], &frames[bearer]);
        rulers(&panels[group.start], above, last, sheet);
        axes::x_axis(&panels[group.start], above, last, sheet);
        let mut drops = Vec::new();
        for at in group.clone() {
            let (panel, frame) = (&panels[at], &frames[at]);
            axes::grid(panel, frame, sheet);
            let mut painted = Painted::default();
            for part in &panel.layers {
                layer::paint(part, frame, &mut painted);
            }
            drops.append(&mut painted.drops);
            // A line from what was chosen down through the strips, behind their marks.
            if at > group.start && panel.height != Height::Line {
                sheet.marks(drops.iter().map(|from| drop_line(from.x, frame)));
            }
            if at + 1 < group.end && panels[at + 1].height != Height::Line {
                let own: Vec<Mark> = drops
                    .iter()
                    .map(|from| Mark::Line {
                        points: vec![*from, Point::new(from.x, frames[at + 1].plot.y)],
                        stroke: Stroke::solid(Ink::ChosenBand, 1.0),
                    })
                    .filter(|_| at == group.start)
                    .collect();
                sheet.marks(own);
            }
            axes::y_axis(panel, frame, &margins, sheet);
            axes::end_names(&painted.ends, frame, &margins, sheet);
            sheet.marks(std::mem::take(&mut painted.marks));
            for (region, tip) in painted.spots.drain(..) {
                sheet.spot(region, &tip);
            }
            place::words(&painted, frame, sheet);
        }
    }
    aside(figure, panels, &frames, room, sheet);
    Shown::Something
}

fn drop_line(x: f64, frame: &Frame) -> Mark {
    Mark::Line {
        points: vec![
            Point::new(x, frame.plot.y - STRIP_GAP),
            Point::new(x, frame.plot.bottom()),
        ],
        stroke: Stroke::solid(Ink::ChosenBand, 1.0),
    }
}

/// The height that panels want.
pub(super) fn natural_height(panels: &[Panel], width: f64) -> f64 {
    let own: f64 = panels
        .iter()
        .map(|panel| match panel.height {
            Height::Share(share) if share.is_finite() => NATURAL_PANEL * share.clamp(0.2, 3.0),
            Height::Share(_) => NATURAL_PANEL,
            Height::Square => (width * 0.55).min(NATURAL_SQUARE),
            Height::Strip => style::STRIP,
            Height::Line => style::SMALL_LINE,
        })
        .sum();
    own + fixed_height(panels)
}

/// What headings, numbers and gaps need.
fn fixed_height(panels: &[Panel]) -> f64 {
    (0..panels.len())
        .map(|at| above(panels, at) + below(panels, at))
        .sum()
}

/// The height above a panel: a gap, and the heading of its vertical axis.
fn above(panels: &[Panel], at: usize) -> f64 {
    let gap = match (at, panels[at].height) {
        (0, _) => 2.0,
        (_, Height::Strip) => STRIP_GAP,
        (_, Height::Line) if panels[at - 1].height != Height::Line => STRIP_GAP,
        (_, Height::Line) => 0.0,
        (_, Height::Share(_) | Height::Square) => PANEL_GAP,
    };
    gap + match panels[at].height {
        Height::Strip | Height::Line => 0.0,
        // Half a line for the uppermost number, a whole one for a heading as well.
        Height::Share(_) | Height::Square if panels[at].y.heading().is_empty() => 6.0,
        Height::Share(_) | Height::Square => 6.0 + style::SMALL_LINE,
    }
}

/// The height below a panel: numbers and heading of the horizontal axis, if it is the one under
/// which they stand.
fn below(panels: &[Panel], at: usize) -> f64 {
    if !bears_axis(panels, at) {
        return 0.0;
    }
    let heading = x_axis_of(panels, at).map(Axis::heading).unwrap_or_default();
    22.0 + if heading.is_empty() {
        0.0
    } else {
        style::SMALL_LINE
    }
}

/// Whether the horizontal axis stands below a panel: the last of its run that is no line of
/// numbers.
fn bears_axis(panels: &[Panel], at: usize) -> bool {
    let later = panels[at + 1..]
        .iter()
        .take_while(|next| next.x.is_none())
        .all(|next| next.height == Height::Line);
    later && (panels[at].height != Height::Line || panels[at].x.is_some())
}

fn x_axis_of(panels: &[Panel], at: usize) -> Option<&Axis> {
    panels[..=at]
        .iter()
        .rev()
        .find_map(|panel| panel.x.as_ref())
}

/// Runs of panels that share a horizontal axis.
fn groups(panels: &[Panel]) -> Vec<std::ops::Range<usize>> {
    let mut starts: Vec<usize> = (0..panels.len())
        .filter(|at| *at == 0 || panels[*at].x.is_some())
        .collect();
    starts.push(panels.len());
    starts.windows(2).map(|pair| pair[0]..pair[1]).collect()
}

/// The upper end and the height of one panel's area of data.
struct Row {
    top: f64,
    height: f64,
}

fn rows(panels: &[Panel], room: Rect) -> Vec<Row> {
    let share = |panel: &Panel| match panel.height {
        Height::Share(share) if share.is_finite() => share.clamp(0.05, 20.0),
        Height::Share(_) | Height::Square => 1.0,
        Height::Strip | Height::Line => 0.0,
    };
    let shares: f64 = panels.iter().map(share).sum();
    let count = |height| panels.iter().filter(|panel| panel.height == height).count() as f64;
    let strips = count(Height::Strip);
    let left = room.height - fixed_height(panels) - count(Height::Line) * style::SMALL_LINE;
    // Where there is too little room, strips shrink with the rest.
    let wanted = strips * style::STRIP;
    let strip = if left - wanted >= style::LEAST_PANEL * shares.min(1.0) {
        style::STRIP
    } else {
        (left / (strips + 2.0 * shares)).clamp(1.0, style::STRIP)
    };
    let rest = (left - strips * strip).max(1.0);
    let mut top = room.y;
    (0..panels.len())
        .map(|at| {
            top += above(panels, at);
            let height = match panels[at].height {
                Height::Strip => strip,
                Height::Line => style::SMALL_LINE,
                Height::Share(_) | Height::Square => {
                    (rest * share(&panels[at]) / shares.max(0.05)).max(1.0)
                }
            };
            let row = Row {
                top: top.round(),
                height: height.floor().max(1.0),
            };
            top += height + below(panels, at);
            row
        })
        .collect()
}

/// The width of each panel's area of data: as wide as there is room, except below and in a
/// square one.
fn widths(panels: &[Panel], rows: &[Row], room: f64) -> Vec<f64> {
    let room = room.max(1.0);
    let mut widths = Vec::new();
    for group in groups(panels) {
        let width = match panels[group.start].height {
            Height::Square => room.min(rows[group.start].height),
            Height::Share(_) | Height::Strip | Height::Line => room,
        };
        widths.extend(group.map(|_| width));
    }
    widths
}

fn x_mappings(panels: &[Panel]) -> Vec<Mapping> {
    let default = Axis::linear("", "");
    let mut maps = Vec::new();
    for group in groups(panels) {
        let members = &panels[group.clone()];
        let axis = members[0].x.as_ref().unwrap_or(&default);
        let mut values = Vec::new();
        for panel in members {
            for part in &panel.layers {
                frame::each_x(part, |value| values.push(value));
            }
        }
        if members[0].height == Height::Square {
            let map = square_mapping(&members[0], axis);
            maps.extend(group.map(|_| map.clone()));
            continue;
        }
        let has_dots = members
            .iter()
            .any(|panel| !axes::is_strip(panel) && panel.layers.iter().any(wants_air));
        let ends = if has_dots { Ends::Padded } else { Ends::Exact };
        let map = Mapping::new(axis, values.into_iter(), ends);
        maps.extend(group.map(|_| map.clone()));
    }
    maps
}

/// Whether a layer wants air at the ends of the horizontal axis.
fn wants_air(part: &Layer) -> bool {
    match part {
        Layer::Points { .. } | Layer::Interval { .. } => true,
        Layer::Line { .. }
        | Layer::Steps { .. }
        | Layer::Band { .. }
        | Layer::Bars { .. }
        | Layer::Bins { .. }
        | Layer::Rule { .. }
        | Layer::Identity { .. }
        | Layer::Mark { .. }
        | Layer::Rug { .. }
        | Layer::Columns { .. }
        | Layer::Text { .. } => false,
    }
}

/// The mapping of both axes of a square panel: one range for both.
fn square_mapping(panel: &Panel, axis: &Axis) -> Mapping {
    let mut values = Vec::new();
    for part in &panel.layers {
        frame::each_x(part, |value| values.push(value));
        frame::each_y(part, |value| values.push(value));
    }
    Mapping::new(axis, values.into_iter(), Ends::Rounded)
}

fn y_mapping(panel: &Panel) -> Mapping {
    if panel.height == Height::Square {
        return square_mapping(panel, &panel.y);
    }
    let mut values = Vec::new();
    for part in &panel.layers {
        frame::each_y(part, |value| values.push(value));
    }
    let ends = match panel.height {
        Height::Strip if panel.y.zero == Zero::Shown => Ends::Exact,
        Height::Strip | Height::Line => Ends::Padded,
        Height::Share(_) | Height::Square => Ends::Rounded,
    };
    Mapping::new(&panel.y, values.into_iter(), ends)
}

fn y_ticks(panel: &Panel, map: &Mapping, height: f64) -> Vec<Tick> {
    match panel.height {
        Height::Strip | Height::Line => Vec::new(),
        Height::Share(_) => map.ticks((height / TICK_PITCH).floor().clamp(2.0, 7.0) as usize),
        Height::Square => map.ticks(axes::square_ticks(height)),
    }
}

fn margins(panels: &[Panel], y_ticks: &[Vec<Tick>], x_maps: &[Mapping], width: f64) -> Margins {
    let small = |text: &str| metrics::width(text, Face::Sans, style::SMALL);
    let widest = |widths: &mut dyn Iterator<Item = f64>| widths.fold(0.0, f64::max);
    let numbers = widest(&mut y_ticks.iter().flatten().map(|tick| small(&tick.text)));
    let strips = widest(
        &mut panels
            .iter()
            .filter(|panel| axes::is_strip(panel))
            .map(|panel| match panel.height {
                Height::Line => small(&panel.y.heading()) + style::GAP,
                Height::Strip | Height::Share(_) | Height::Square => small(&panel.y.heading()),
            }),
    );
    let names = |end: End| {
        widest(
            &mut panels
                .iter()
                .flat_map(|panel| &panel.layers)
                .filter_map(layer_label)
                .filter(|label| label.end == end)
                .map(|label| small(&label.text) + 4.0),
        )
    };
    let (left_names, right_names) = (names(End::Left), names(End::Right));
    let side = if left_names > 0.0 {
        End::Right
    } else {
        End::Left
    };
    let with_gap = |width: f64| if width > 0.0 { width + style::GAP } else { 0.0 };
    let (mut left, mut right) = match side {
        End::Left => (numbers.max(strips), right_names),
        End::Right => (left_names.max(strips), right_names.max(numbers)),
    };
    left = with_gap(left).min(width * WIDEST_MARGIN);
    right = with_gap(right).min(width * WIDEST_MARGIN);
    // The outermost numbers of the horizontal axes reach half their width beyond it.
    for map in x_maps {
        let ticks = map.ticks(4);
        let over = |tick: Option<&Tick>, share: f64| {
            tick.filter(|tick| (tick.share - share).abs() < 0.05)
                .map_or(0.0, |tick| small(&tick.text) / 2.0 + 1.0)
        };
        left = left.max(over(ticks.first(), 0.0).min(width * WIDEST_MARGIN));
        right = right.max(over(ticks.last(), 1.0).min(width * WIDEST_MARGIN));
    }
    Margins {
        left: left.ceil(),
        right: right.ceil().max(style::RING + 1.0),
        numbers: side,
    }
}

fn layer_label(part: &Layer) -> Option<&crate::figure::Label> {
    match part {
        Layer::Line { label, .. } | Layer::Steps { label, .. } => label.as_ref(),
        Layer::Points { .. }
        | Layer::Band { .. }
        | Layer::Interval { .. }
        | Layer::Bars { .. }
        | Layer::Bins { .. }
        | Layer::Rule { .. }
        | Layer::Identity { .. }
        | Layer::Mark { .. }
        | Layer::Rug { .. }
        | Layer::Columns { .. }
        | Layer::Text { .. } => None,
    }
}

fn rulers(panel: &Panel, first: &Frame, last: &Frame, sheet: &mut Sheet) {
    if let Some(axis) = panel.x.as_ref()
        && axis.quantity == Quantity::Strength
    {
        let (low, high) = first.x.ends();
        sheet.ruler(Ruler {
            rect: Rect::new(
                first.plot.x,
                first.plot.y,
                first.plot.width,
                last.plot.bottom() - first.plot.y,
            ),
            quantity: axis.quantity,
            scale: axis.scale.clone(),
            low,
            high,
        });
    }
}

/// Numbers said in the room beside a square panel.
fn aside(figure: &Figure, panels: &[Panel], frames: &[Frame], room: Rect, sheet: &mut Sheet) {
    let Some(at) = panels
        .iter()
        .position(|panel| panel.height == Height::Square)
    else {
        return;
    };
    let plot = frames[at].plot;
    let left = plot.right() + 32.0;
    let space = room.right() - left;
    if space < ASIDE {
        return;
    }
    let mut y = plot.y + 8.0;
    for note in &figure.aside {
        if y + 18.0 > plot.bottom() {
            break;
        }
        let _ = sheet.fitted(
            &note.label,
            Point::new(left, y),
            Anchor::Start,
            style::SMALL,
            (Ink::QuietText, Face::Sans),
            space,
        );
        let _ = sheet.fitted(
            &note.value,
            Point::new(left, y + 17.0),
            Anchor::Start,
            style::TITLE,
            (Ink::Text, Face::SansStrong),
            space,
        );
        y += 44.0;
    }
}
