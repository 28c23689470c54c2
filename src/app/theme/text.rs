//! Letters by purpose: the bundled fonts, three sizes, and the helpers that set text in them.

use crate::app::theme;
use crate::app::widget::Element;
use crate::figure::font::Face;
use iced::widget::text::{self, LineHeight, Wrapping};
use iced::{Color, Font, Pixels, font};

/// Chrome, tables, figures.
pub const SANS: Font = face(Face::Sans);
/// The same in semi-bold.
pub const STRONG: Font = face(Face::SansStrong);
/// Sentences and prose.
pub const SERIF: Font = face(Face::Serif);
/// The one plain sentence of an answer.
pub const ITALIC: Font = face(Face::SerifItalic);
/// Titles and names of cells.
pub const TITLE: Font = face(Face::SerifStrong);

/// Notes, grids, states.
pub const SMALL: f32 = 13.0;
/// Chrome and answers.
pub const BODY: f32 = 15.0;
/// Sentences and prose.
pub const READING: f32 = 17.0;
/// The line of sentences and prose.
pub const READING_LINE: f32 = 30.0;
/// The line of answers.
pub const ANSWER_LINE: f32 = 24.0;
/// The line of small text.
pub const SMALL_LINE: f32 = 20.0;

/// Letters that keep their places.
pub const MONO: Font = Font::with_name(crate::figure::font::MONO_FAMILY);

/// A bundled face as the toolkit names it.
#[must_use]
pub const fn face(face: Face) -> Font {
    let (family, weight, style) = match face {
        Face::Sans => ("Noto Sans", font::Weight::Normal, font::Style::Normal),
        Face::SansStrong => ("Noto Sans", font::Weight::Semibold, font::Style::Normal),
        Face::Serif => ("Noto Serif", font::Weight::Normal, font::Style::Normal),
        Face::SerifItalic => ("Noto Serif", font::Weight::Normal, font::Style::Italic),
        Face::SerifStrong => ("Noto Serif", font::Weight::Semibold, font::Style::Normal),
        Face::Symbols => ("DejaVu Sans", font::Weight::Normal, font::Style::Normal),
    };
    Font {
        family: font::Family::Name(family),
        weight,
        stretch: font::Stretch::Normal,
        style,
    }
}

/// How far below the top of a line of text its baseline lies.
///
/// The bundled Noto faces have an ascent of 1069 and a descent of 293 thousandths of an em, and
/// the toolkit sets them in the middle of the line.
#[must_use]
pub fn baseline(size: f32, line: f32) -> f32 {
    (line - 1.362 * size) / 2.0 + 1.069 * size
}

/// Set in the given face and size, on lines of the given height.
fn set<'a>(
    words: impl text::IntoFragment<'a>,
    font: Font,
    size: f32,
    line: f32,
    color: fn(&theme::color::Colors) -> Color,
) -> iced::widget::Text<'a> {
    iced::widget::text(words)
        .font(font)
        .size(size)
        .line_height(LineHeight::Absolute(Pixels(line)))
        .style(move |theme: &iced::Theme| text::Style {
            color: Some(color(theme::colors(theme))),
        })
}

/// A study's title.
pub fn title<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, TITLE, READING, 26.0, |colors| colors.ink)
}

/// A cell's name.
pub fn name<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, TITLE, BODY, ANSWER_LINE, |colors| colors.ink)
}

/// A heading in sans.
pub fn heading<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, STRONG, SMALL, SMALL_LINE, |colors| colors.ink)
}

/// Words of the program.
pub fn body<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, SANS, SMALL, SMALL_LINE, |colors| colors.ink)
}

/// Words of the program that are read second.
pub fn quiet<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, SANS, SMALL, SMALL_LINE, |colors| colors.quiet)
}

/// Words in the accent colour.
pub fn accent<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, SANS, SMALL, SMALL_LINE, |colors| colors.accent)
}

/// Words that ask for attention.
pub fn attention<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, SANS, SMALL, SMALL_LINE, |colors| colors.attention)
}

/// What went wrong.
pub fn wrong<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, SANS, SMALL, SMALL_LINE, |colors| colors.stop)
}

/// The plain sentence of an answer.
pub fn answer<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, ITALIC, BODY, ANSWER_LINE, |colors| colors.ink)
}

/// Prose.
pub fn prose<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, SERIF, READING, READING_LINE, |colors| colors.ink)
}

/// Letters that keep their places, such as a piece of a file.
pub fn code<'a>(words: impl text::IntoFragment<'a>) -> iced::widget::Text<'a> {
    set(words, MONO, SMALL, SMALL_LINE, |colors| colors.ink)
}

/// Words whose colour comes from what they stand in, such as a button.
pub fn plain<'a>(words: impl text::IntoFragment<'a>, font: Font) -> iced::widget::Text<'a> {
    iced::widget::text(words)
        .font(font)
        .size(SMALL)
        .line_height(LineHeight::Absolute(Pixels(SMALL_LINE)))
        .wrapping(Wrapping::Word)
}

/// Nothing, where words would stand.
#[must_use]
pub fn none<'a, M: 'a>() -> Element<'a, M> {
    iced::widget::space().into()
}
