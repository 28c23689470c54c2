//! A small table of words and numbers, each row in as many lines as it takes: facts with what
//! they mean, findings with where they stand.

use crate::app::part::block::{Manner, Message};
use crate::app::sheet::FactGrid;
use crate::app::theme::{container, space, text};
use crate::app::widget::Element;
use crate::app::widget::grid::{Align, Source};
use crate::app::widget::press;
use crate::app::widget::sentence::Force;
use crate::figure::font::Face;
use crate::figure::metrics;
use iced::widget::{Column, Row, row, rule};
use iced::{Alignment, Length};

/// The widest that a column gets which is not the last.
const WIDEST: f32 = 208.0;
/// The most rows and columns, beside the names, of a table that is small.
const SMALL: (usize, usize) = (40, 4);

/// Whether a table is small and has words that a grid would cut, or consists of single facts.
#[must_use]
pub fn is_for(grid: &FactGrid) -> bool {
    let is_small = grid.n_rows() <= SMALL.0 && grid.n_columns() <= SMALL.1;
    let size = f64::from(text::SMALL);
    let is_long = |words: &str| metrics::width(words, Face::Sans, size) > f64::from(WIDEST);
    let has_long = (0..grid.n_rows()).any(|row| {
        let fields = (0..grid.n_columns()).map(|column| grid.field(row, column).text);
        is_long(&grid.row(row)) || fields.into_iter().any(|field| is_long(&field))
    });
    grid.grid.fact.is_empty() || (is_small && has_long)
}

/// The facts below each other; `at` is the position of the table among the blocks of its cell.
#[must_use]
pub fn view<'a>(grid: &'a FactGrid, at: usize, manner: Manner<'a>) -> Element<'a, Message> {
    let widths = widths(grid);
    let mut title = Row::new()
        .spacing(space::SMALL)
        .align_y(Alignment::Center)
        .push(text::heading(grid.grid.title.as_str()).width(Length::Fill));
    if !manner.is_reading {
        title = title.push(press::words("Copy", Message::CopyTable(at)));
    }
    let line = |fields: Vec<iced::widget::Text<'a>>| -> Element<'a, Message> {
        let fields = fields.into_iter().enumerate().map(|(nth, field)| {
            let is_number = nth > 0 && grid.align(nth - 1) == Align::End;
            let align = if is_number {
                iced::Alignment::End
            } else {
                iced::Alignment::Start
            };
            let width = widths.get(nth).copied().unwrap_or(Length::Fill);
            let wrapping = iced::widget::text::Wrapping::WordOrGlyph;
            field.width(width).align_x(align).wrapping(wrapping).into()
        });
        Row::with_children(fields).spacing(space::GAP).into()
    };
    let n_columns = grid.n_columns();
    let head = std::iter::once(text::heading(grid.corner()))
        .chain((0..n_columns).map(|column| text::heading(grid.column(column))))
        .collect();
    let mut table = Column::new()
        .spacing(space::TIGHT)
        .push(title)
        .push(line(head))
        .push(rule::horizontal(space::HAIR).style(container::hairline));
    for fact in 0..grid.n_rows() {
        let field = |column: usize| {
            let words = grid.field(fact, column).text;
            match manner.force {
                Force::Current => text::body(words),
                Force::Paled => text::quiet(words),
            }
        };
        let fields = std::iter::once(text::quiet(grid.row(fact)))
            .chain((0..n_columns).map(field))
            .collect();
        table = table.push(line(fields));
    }
    row![table.width(Length::Fill)].into()
}

/// How wide the columns are: as wide as their longest words; those with long ones share the room
/// that is left, and so does the last.
fn widths(grid: &FactGrid) -> Vec<Length> {
    let size = f64::from(text::SMALL);
    let wide = |words: &str, face: Face| metrics::width(words, face, size);
    let names = (0..grid.n_rows())
        .map(|row| wide(&grid.row(row), Face::Sans))
        .fold(wide(&grid.corner(), Face::SansStrong), f64::max);
    let values = (0..grid.n_columns()).map(|column| {
        (0..grid.n_rows())
            .map(|row| wide(&grid.field(row, column).text, Face::Sans))
            .fold(wide(&grid.column(column), Face::SansStrong), f64::max)
    });
    let all: Vec<f32> = std::iter::once(names)
        .chain(values)
        // Kerning makes a text a little wider or narrower than its letters.
        .map(|width| (width as f32 + space::AIR).ceil())
        .collect();
    let last = all.len().saturating_sub(1);
    all.into_iter()
        .enumerate()
        .map(|(nth, width)| {
            let is_words = nth == 0 || grid.align(nth - 1) == Align::Start;
            if width > WIDEST || (nth == last && is_words) {
                Length::Fill
            } else {
                Length::Fixed(width)
            }
        })
        .collect()
}

/// The facts as tab-separated text, to be pasted elsewhere.
#[must_use]
pub fn copied(grid: &FactGrid) -> String {
    let n_columns = grid.n_columns();
    let mut lines = Vec::with_capacity(grid.n_rows() + 1);
    let head = std::iter::once(grid.corner()).chain((0..n_columns).map(|at| grid.column(at)));
    lines.push(head.collect::<Vec<_>>().join("\t"));
    for fact in 0..grid.n_rows() {
        let fields = (0..n_columns).map(|column| grid.field(fact, column).text);
        let fields = std::iter::once(grid.row(fact)).chain(fields);
        lines.push(fields.collect::<Vec<_>>().join("\t"));
    }
    lines.join("\n")
}
