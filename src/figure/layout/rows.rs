//! Rows with a name, a bar and columns of text.

use crate::figure::axis::{Ends, Mapping};
use crate::figure::font::Face;
use crate::figure::ink::Ink;
use crate::figure::layout::sheet::Sheet;
use crate::figure::layout::{Shown, style, thin};
use crate::figure::metrics;
use crate::figure::picture::{Anchor, Mark, Point, Rect, Region, Stroke};
use crate::figure::{Align, Axis, Bar, Column, Role, Row, Rows, Stress, Track, Zero};

/// The height of a row, text and air.
const PITCH: f64 = 22.0;
/// The least height of a row before rows are left out.
const TIGHT: f64 = 17.0;
/// The height of the line with the headings.
const HEAD: f64 = 20.0;
/// The thickness of a bar.
const BAR: f64 = 6.0;
/// Between columns, and between columns that stand close together.
const GUTTER: f64 = 20.0;
const CLOSE: f64 = 12.0;
/// The most of the width that names take.
const NAMES: f64 = 0.42;
/// The longest bars: longer ones put the numbers out of sight of the names.
const LONGEST_BAR: f64 = 460.0;
/// The shortest bars; where not even they have room, columns are left out from the right.
const SHORTEST_BAR: f64 = 56.0;
/// Below this width columns stand closer together.
const NARROW: f64 = 420.0;
/// More rows than this are not wanted on a page.
const MOST_ROWS: usize = 40;
/// The height of the line with the numbers of the axis.
const NUMBERS: f64 = 22.0;
/// How far dots are strewn up and down from the middle of their row.
const STREWN: f64 = 5.0;
/// Less room than this is not enough for a column.
const NARROWEST_COLUMN: f64 = 8.0;

/// The height that rows want.
pub(super) fn natural_height(rows: &Rows) -> f64 {
    let count = rows.rows.len().clamp(1, MOST_ROWS) as f64;
    let more = if rows.rows.len() > MOST_ROWS {
        PITCH
    } else {
        0.0
    };
    head_height(rows) + count * PITCH + more + numbers_height(rows) + 4.0
}

/// Dots are read off an axis; bars have their numbers beside them.
fn has_numbers(rows: &Rows) -> bool {
    rows.rows.iter().any(|row| match row.bar {
        Bar::Dots { .. } => true,
        Bar::Value { .. } | Bar::Closed(_) | Bar::Blank => false,
    })
}

fn numbers_height(rows: &Rows) -> f64 {
    if has_numbers(rows) { NUMBERS } else { 0.0 }
}

fn head_height(rows: &Rows) -> f64 {
    let has_head = !rows.names.is_empty()
        || !rows.bars.is_empty()
        || rows.columns.iter().any(|column| !column.heading.is_empty())
        || rows
            .rule
            .as_ref()
            .is_some_and(|(_, words)| !words.is_empty());
    if has_head { HEAD } else { 0.0 }
}

/// Where the columns are.
struct Plan {
    names: f64,
    bar: Rect,
    /// Left side and width of each column of text.
    columns: Vec<(f64, f64)>,
    map: Mapping,
    pitch: f64,
    top: f64,
    count: usize,
}

pub(super) fn lay(rows: &Rows, room: Rect, sheet: &mut Sheet) -> Shown {
    if rows.rows.is_empty() {
        return Shown::Nothing;
    }
    let plan = plan(rows, room);
    head(rows, &plan, room, sheet);
    ground(rows, &plan, sheet);
    for (at, row) in rows.rows.iter().take(plan.count).enumerate() {
        let middle = (plan.top + (at as f64 + 0.5) * plan.pitch).round();
        if let Some(tip) = &row.tip {
            let region = Rect::new(room.x, middle - plan.pitch / 2.0, room.width, plan.pitch);
            sheet.spot(Region::Rect(region), tip);
        }
        let (ink, face) = match row.stress {
            Stress::Plain => (Ink::Text, Face::Sans),
            Stress::Strong => (Ink::Text, Face::SansStrong),
        };
        let baseline = middle + style::BASELINE;
        let _ = sheet.fitted(
            &row.name,
            Point::new(room.x, baseline),
            Anchor::Start,
            style::TEXT,
            (ink, face),
            plan.names,
        );
        bar(row, &plan, middle, sheet);
        for (nth, (column, place)) in rows.columns.iter().zip(&plan.columns).enumerate() {
            if let Some(text) = row.cells.get(nth) {
                cell(
                    text,
                    column,
                    *place,
                    baseline,
                    (ink, face),
                    rows,
                    nth,
                    sheet,
                );
            }
        }
    }
    if plan.count < rows.rows.len() && !rows.more.is_empty() {
        let left_out = crate::base::number::text(
            (rows.rows.len() - plan.count) as f64,
            crate::base::number::Precision::Whole,
        );
        let baseline = plan.top + plan.count as f64 * plan.pitch + 14.0;
        let _ = sheet.fitted(
            &rows.more.replace("{}", &left_out),
            Point::new(room.x, baseline),
            Anchor::Start,
            style::SMALL,
            (Ink::QuietText, Face::Sans),
            room.width,
        );
    }
    Shown::Something
}

fn plan(rows: &Rows, room: Rect) -> Plan {
    let face = |row: &Row| match row.stress {
        Stress::Plain => Face::Sans,
        Stress::Strong => Face::SansStrong,
    };
    let names = rows
        .rows
        .iter()
        .map(|row| metrics::width(&row.name, face(row), style::TEXT))
        .chain([metrics::width(&rows.names, Face::Sans, style::SMALL)])
        .fold(0.0, f64::max)
        .min(room.width * NAMES)
        .ceil();
    let gutter = if room.width < NARROW { CLOSE } else { GUTTER };
    let mut widths: Vec<f64> = rows
        .columns
        .iter()
        .enumerate()
        .map(|(nth, column)| column_width(rows, nth, column).min(room.width * 0.3).ceil())
        .collect();
    let has_bars = rows.rows.iter().any(|row| row.bar != Bar::Blank);
    let left = room.x + names + gutter;
    let length_beside = |widths: &[f64]| {
        let texts: f64 = widths.iter().map(|width| width + gutter).sum();
        (room.right() - left - texts).min(LONGEST_BAR)
    };
    let mut length = 0.0;
    if has_bars {
        // The first column is the number of the bar itself; it stays.
        while widths.len() > 1 && length_beside(&widths) < SHORTEST_BAR {
            let _ = widths.pop();
        }
        length = length_beside(&widths).max(0.0);
    }
    let bar = Rect::new(left, 0.0, length.floor(), BAR);
    let mut x = if length > 0.0 {
        bar.right()
    } else {
        left - gutter
    };
    let columns = widths
        .iter()
        .map(|width| {
            let start = x + gutter;
            x = start + width;
            (start, (room.right() - start).min(*width))
        })
        .collect();

    let head = head_height(rows);
    let space = (room.height - head - numbers_height(rows)).max(1.0);
    let wanted = rows.rows.len() as f64;
    let pitch = (space / wanted).floor().clamp(TIGHT, PITCH);
    let fitting = (space / pitch).floor().max(0.0) as usize;
    let count = if fitting >= rows.rows.len() {
        rows.rows.len()
    } else {
        // The last line says how many more there are.
        fitting.saturating_sub(1)
    };
    Plan {
        names,
        bar,
        columns,
        map: mapping(rows),
        pitch,
        top: room.y + head,
        count,
    }
}

fn mapping(rows: &Rows) -> Mapping {
    let mut axis = Axis::scaled("", "", rows.scale.clone()).with_zero(Zero::Shown);
    axis.range = rows.range;
    let is_dots = has_numbers(rows);
    if is_dots {
        axis.zero = Zero::Free;
    }
    let mut values = Vec::new();
    for row in &rows.rows {
        match &row.bar {
            Bar::Value {
                value, interval, ..
            } => {
                values.push(*value);
                values.extend(interval.iter().flat_map(|(low, high)| [*low, *high]));
            }
            Bar::Dots {
                values: dots,
                middle,
                ..
            } => {
                values.extend(dots);
                values.extend(middle);
            }
            Bar::Closed(_) | Bar::Blank => {}
        }
    }
    values.extend(rows.rule.iter().map(|(at, _)| *at));
    // Dots get air at both ends; bars end where the axis does.
    let ends = if is_dots { Ends::Padded } else { Ends::Exact };
    Mapping::new(&axis, values.into_iter(), ends)
}

fn column_width(rows: &Rows, nth: usize, column: &Column) -> f64 {
    let heading = metrics::width(&column.heading, Face::Sans, style::SMALL);
    let cells = rows
        .rows
        .iter()
        .filter_map(|row| Some((row, row.cells.get(nth)?)));
    let body = match column.align {
        Align::Start | Align::End => cells
            .map(|(row, text)| metrics::width(text, face_of(row), style::TEXT))
            .fold(0.0, f64::max),
        Align::Decimal => {
            let (before, after) = decimal_widths(rows, nth);
            before + after
        }
    };
    heading.max(body)
}

fn face_of(row: &Row) -> Face {
    match row.stress {
        Stress::Plain => Face::Sans,
        Stress::Strong => Face::SansStrong,
    }
}

/// A number's text up to its decimal mark, and the rest.
fn at_decimal(text: &str) -> (&str, &str) {
    let at = text
        .find('.')
        .or_else(|| text.find(|c: char| !(c.is_ascii_digit() || "−,<>".contains(c))))
        .unwrap_or(text.len());
    // A text that is no number, such as a dash, stands where the digits end.
    if at == 0 {
        (text, "")
    } else {
        text.split_at(at)
    }
}

/// The widest part before and after the decimal marks of a column.
fn decimal_widths(rows: &Rows, nth: usize) -> (f64, f64) {
    rows.rows
        .iter()
        .filter_map(|row| Some((face_of(row), row.cells.get(nth)?)))
        .fold((0.0, 0.0), |(before, after), (face, text)| {
            let (whole, rest) = at_decimal(text);
            let width = |text| metrics::width(text, face, style::TEXT);
            (f64::max(before, width(whole)), f64::max(after, width(rest)))
        })
}

#[expect(
    clippy::too_many_arguments,
    reason = "a cell is where its row and its column meet"
)]
fn cell(
    text: &str,
    column: &Column,
    (left, width): (f64, f64),
    baseline: f64,
    (ink, face): (Ink, Face),
    rows: &Rows,
    nth: usize,
    sheet: &mut Sheet,
) {
    if width < NARROWEST_COLUMN {
        return;
    }
    let (x, anchor, room) = match column.align {
        Align::Start => (left, Anchor::Start, width),
        Align::End => (left + width, Anchor::End, width),
        Align::Decimal => {
            let (_, after) = decimal_widths(rows, nth);
            let (_, rest) = at_decimal(text);
            let own = metrics::width(rest, face, style::TEXT);
            (left + width - after + own, Anchor::End, width)
        }
    };
    let at = Point::new(x, baseline);
    let _ = sheet.fitted(text, at, anchor, style::TEXT, (ink, face), room);
}

fn head(rows: &Rows, plan: &Plan, room: Rect, sheet: &mut Sheet) {
    let y = plan.top - 7.0;
    let quiet = (Ink::QuietText, Face::Sans);
    for (column, (left, width)) in rows.columns.iter().zip(&plan.columns) {
        let (x, anchor) = match column.align {
            Align::Start => (*left, Anchor::Start),
            Align::End | Align::Decimal => (left + width, Anchor::End),
        };
        let at = Point::new(x, y);
        let _ = sheet.fitted(&column.heading, at, anchor, style::SMALL, quiet, *width);
    }
    if let Some((at, words)) = &rows.rule
        && let Some(x) = at_x(plan, *at)
    {
        let width = metrics::width(words, Face::Sans, style::SMALL);
        let left = (x - width / 2.0).clamp(plan.bar.x, (plan.bar.right() - width).max(plan.bar.x));
        let at = Point::new(left, y);
        let _ = sheet.fitted(
            words,
            at,
            Anchor::Start,
            style::SMALL,
            quiet,
            plan.bar.width,
        );
    }
    let names = Point::new(room.x, y);
    let _ = sheet.fitted(
        &rows.names,
        names,
        Anchor::Start,
        style::SMALL,
        quiet,
        plan.names,
    );
    if plan.bar.width > 0.0 {
        let bars = Point::new(plan.bar.x, y);
        let factor = if has_numbers(rows) {
            plan.map.factor()
        } else {
            String::new()
        };
        let _ = sheet.fitted(
            format!("{} {factor}", rows.bars).trim(),
            bars,
            Anchor::Start,
            style::SMALL,
            quiet,
            plan.bar.width,
        );
    }
}

/// The upright line through all bars, and the one at zero where bars go both ways.
fn ground(rows: &Rows, plan: &Plan, sheet: &mut Sheet) {
    if plan.bar.width == 0.0 || plan.count == 0 {
        return;
    }
    let (low, high) = plan.map.ends();
    let bottom = plan.top + plan.count as f64 * plan.pitch;
    let mut upright = |value: f64, stroke: Stroke| {
        if let Some(x) = at_x(plan, value) {
            let x = x.floor() + 0.5;
            sheet.mark(Mark::Line {
                points: vec![Point::new(x, plan.top), Point::new(x, bottom)],
                stroke,
            });
        }
    };
    if low < 0.0 && high > 0.0 {
        upright(0.0, Stroke::solid(Ink::Axis, style::HAIR));
    }
    if let Some((at, _)) = &rows.rule {
        upright(*at, Stroke::dashed(Ink::Reference, style::HAIR));
    }
    if has_numbers(rows) {
        numbers(plan, bottom, sheet);
    }
    if rows.track == Track::Shown {
        for (at, row) in rows.rows.iter().take(plan.count).enumerate() {
            let is_tracked = match row.bar {
                Bar::Value { .. } => true,
                Bar::Dots { .. } | Bar::Closed(_) | Bar::Blank => false,
            };
            let y = (plan.top + (at as f64 + 0.5) * plan.pitch).round() - BAR / 2.0;
            if is_tracked {
                sheet.mark(rounded_bar(
                    Rect::new(plan.bar.x, y, plan.bar.width, BAR),
                    Ink::Track,
                ));
            }
        }
    }
}

/// The numbers of the axis below the rows.
fn numbers(plan: &Plan, bottom: f64, sheet: &mut Sheet) {
    let most = (plan.bar.width / 55.0).floor().clamp(2.0, 7.0) as usize;
    for tick in plan.map.ticks(most) {
        let x = plan.bar.x + tick.share * plan.bar.width;
        let place = Point::new(x, bottom + 15.0);
        let _ = sheet.text(
            &tick.text,
            place,
            Anchor::Middle,
            Ink::QuietText,
            Face::Sans,
        );
        let x = (x.floor() + 0.5).min(plan.bar.right() - 0.5);
        sheet.mark(Mark::Line {
            points: vec![Point::new(x, plan.top), Point::new(x, bottom)],
            stroke: Stroke::solid(Ink::Grid, style::HAIR),
        });
    }
}

/// The horizontal place of a number, no further out than the bars reach.
fn at_x(plan: &Plan, value: f64) -> Option<f64> {
    let share = plan.map.share(value)?.clamp(0.0, 1.0);
    Some(plan.bar.x + share * plan.bar.width)
}

fn rounded_bar(rect: Rect, ink: Ink) -> Mark {
    Mark::Rect {
        rect,
        radius: (BAR / 2.0).min(rect.width / 2.0),
        fill: Some(ink),
        stroke: None,
    }
}

fn bar(row: &Row, plan: &Plan, middle: f64, sheet: &mut Sheet) {
    if plan.bar.width == 0.0 {
        return;
    }
    match &row.bar {
        Bar::Value {
            role,
            value,
            interval,
        } => value_bar(*role, *value, *interval, plan, middle, sheet),
        Bar::Closed(words) => {
            let width = metrics::width(words, Face::Sans, style::SMALL) + 2.0 * style::GAP;
            let box_width = width.min(plan.bar.width);
            sheet.mark(Mark::Rect {
                rect: Rect::new(plan.bar.x + 0.5, middle - 7.5, box_width - 1.0, 16.0),
                radius: 3.0,
                fill: None,
                stroke: Some(Stroke::dashed(Ink::Axis, 1.0)),
            });
            let _ = sheet.fitted(
                words,
                Point::new(plan.bar.x + style::GAP, middle + style::BASELINE),
                Anchor::Start,
                style::SMALL,
                (Ink::QuietText, Face::Sans),
                box_width - 2.0 * style::GAP,
            );
        }
        Bar::Dots {
            role,
            values,
            middle: center,
        } => {
            let places: Vec<Option<Point>> = values
                .iter()
                .enumerate()
                .map(|(at, value)| {
                    let up = thin::strewn(at) * 2.0 * STREWN;
                    Some(Point::new(at_x(plan, *value)?, middle + up))
                })
                .collect();
            for at in thin::dots(&places, 0.7) {
                sheet.marks(places[at].map(|center| Mark::Disc {
                    center,
                    radius: style::SMALL_DOT,
                    fill: Some(style::dot_ink(*role)),
                    stroke: None,
                }));
            }
            if let Some(x) = center.and_then(|value| at_x(plan, value)) {
                sheet.mark(Mark::Line {
                    points: vec![Point::new(x, middle - 8.0), Point::new(x, middle + 8.0)],
                    stroke: Stroke::solid(Ink::Text, 1.5),
                });
            }
        }
        Bar::Blank => {}
    }
}

fn value_bar(
    role: Role,
    value: f64,
    interval: Option<(f64, f64)>,
    plan: &Plan,
    middle: f64,
    sheet: &mut Sheet,
) {
    let zero = at_x(plan, 0.0_f64.max(plan.map.ends().0)).unwrap_or(plan.bar.x);
    if let Some(x) = at_x(plan, value) {
        let width = (x - zero).abs();
        if width > 0.05 {
            let rect = Rect::new(zero.min(x), middle - BAR / 2.0, width, BAR);
            sheet.mark(rounded_bar(rect, style::mark_ink(role)));
        }
    }
    if let Some((low, high)) = interval
        && let (Some(low), Some(high)) = (at_x(plan, low), at_x(plan, high))
    {
        sheet.mark(Mark::Line {
            points: vec![Point::new(low, middle), Point::new(high, middle)],
            stroke: Stroke::solid(Ink::Text, 1.5),
        });
    }
}
