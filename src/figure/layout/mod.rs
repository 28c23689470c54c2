//! Layout: a figure and a size in, a picture out. All decisions about places are made here.

mod axes;
mod bars;
mod ends;
mod frame;
mod layer;
mod panels;
mod place;
mod rows;
mod sheet;
mod style;
mod thin;
mod tiles;

#[cfg(test)]
mod tests;

use crate::figure::layout::sheet::Sheet;
use crate::figure::picture::{Anchor, Picture, Point, Rect, Size};
use crate::figure::{Body, Figure, font::Face, ink::Ink, metrics};

/// Below this width or height nothing is legible; a picture is never smaller.
const SMALLEST: f64 = 40.0;

/// Lays a figure out. The same figure and size always give the same picture; no text overlaps
/// another, and nothing reaches beyond the picture. Texts that have no room are cut short with
/// an ellipsis, or left out if they are the less important ones.
#[must_use]
pub fn layout(figure: &Figure, size: Size) -> Picture {
    let clean = |length: f64| {
        if length.is_finite() {
            length.clamp(SMALLEST, 20_000.0).round()
        } else {
            SMALLEST
        }
    };
    let size = Size::new(clean(size.width), clean(size.height));
    let mut sheet = Sheet::new(size);
    let top = heading(figure, &mut sheet);
    let room = Rect::new(0.0, top, size.width, (size.height - top).max(1.0));
    let is_empty = match &figure.body {
        Body::Panels(panels) => panels::lay(panels, figure, room, &mut sheet),
        Body::Rows(rows) => rows::lay(rows, room, &mut sheet),
        Body::Tiles(tiles) => tiles::lay(tiles, room, &mut sheet),
    };
    if is_empty == Shown::Nothing && !figure.empty.is_empty() {
        let middle = Point::new(size.width / 2.0, top + room.height / 2.0 + style::BASELINE);
        let _ = sheet.text(
            &figure.empty,
            middle,
            Anchor::Middle,
            Ink::QuietText,
            Face::Sans,
        );
    }
    sheet.into_picture(&figure.title, &figure.description)
}

/// The size at which a figure looks best on a page of the given width.
#[must_use]
pub fn natural_size(figure: &Figure, width: f64) -> Size {
    let width = width.clamp(SMALLEST, 20_000.0);
    let top = heading_height(title_lines(figure, width).len());
    let body = match &figure.body {
        Body::Panels(panels) => panels::natural_height(panels, width),
        Body::Rows(rows) => rows::natural_height(rows),
        Body::Tiles(tiles) => tiles::natural_height(tiles, width),
    };
    Size::new(width, (top + body).ceil())
}

/// Whether there was anything to show.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Shown {
    Something,
    Nothing,
}

/// The title, broken into lines.
fn title_lines(figure: &Figure, width: f64) -> Vec<String> {
    metrics::lines(
        &figure.title,
        Face::SansStrong,
        style::TITLE,
        width,
        style::TITLE_LINES,
    )
}

/// The height of a title of so many lines, with the air below it.
fn heading_height(lines: usize) -> f64 {
    match lines {
        0 => 0.0,
        more => style::TITLE_HEIGHT + (more - 1) as f64 * style::TITLE_PITCH,
    }
}

/// Sets the title and returns where the rest begins.
fn heading(figure: &Figure, sheet: &mut Sheet) -> f64 {
    let width = sheet.size().width;
    let lines = title_lines(figure, width);
    for (nth, line) in lines.iter().enumerate() {
        let y = style::TITLE_BASELINE + nth as f64 * style::TITLE_PITCH;
        let _ = sheet.fitted(
            line,
            Point::new(0.0, y),
            Anchor::Start,
            style::TITLE,
            (Ink::Text, Face::SansStrong),
            width,
        );
    }
    heading_height(lines.len())
}
