//! How a grid is drawn.

use crate::app::theme::{self, space, text};
use crate::app::widget::focus;
use crate::app::widget::grid::view::View;
use crate::app::widget::grid::{Align, At, Bar, Condition, Grid, State};
use crate::app::widget::layer::Nudge;
use crate::figure::font::Face;
use crate::figure::metrics;
use iced::advanced::renderer::{Quad, Renderer as _};
use iced::advanced::text::{LineHeight, Renderer as _, Shaping, Wrapping};
use iced::{Background, Border, Color, Font, Pixels, Point, Rectangle, Size, alignment};

/// A text in a field.
struct Set<'a> {
    text: &'a str,
    field: Rectangle,
    font: Font,
    face: Face,
    color: Color,
    align: Align,
    /// What is left free at the end, so that decimal marks stand below each other.
    tail: f32,
}

impl<'a, M> Grid<'a, M> {
    /// Draws what can be seen, in a layer of its own.
    pub(super) fn paint(
        &self,
        state: &State,
        renderer: &mut iced::Renderer,
        theme: &iced::Theme,
        bounds: Rectangle,
        viewport: &Rectangle,
    ) {
        let view = self.view(state, bounds);
        let Some(shown) = bounds
            .expand(space::AIR + space::BAR)
            .intersection(viewport)
        else {
            return;
        };
        if state.focus.0 {
            // Around the grid, so that it covers no value.
            focus::ring(renderer, theme, bounds);
        }
        // One layer for all of it: what scrolls is one area to the toolkit, and its mask is
        // filled once.
        let nudge = Nudge::of(&[state.first.row as u64, state.first.column as u64]);
        let Some(layer) = nudge.apply(bounds).intersection(&shown) else {
            return;
        };
        renderer.with_layer(layer, |renderer| {
            self.paint_frame(state, renderer, theme, bounds, view);
            let within = |area: Rectangle| area.intersection(&layer).unwrap_or_default();
            self.paint_body(state, renderer, theme, view, within(view.body));
            let head = Rectangle {
                y: bounds.y,
                height: self.head_height(),
                ..view.body
            };
            self.paint_head(state, renderer, theme, view, head, within(head));
            let names = Rectangle {
                x: bounds.x,
                y: bounds.y,
                width: state.names,
                height: bounds.height - space::SMALL,
            };
            self.paint_names(state, renderer, theme, view, names, within(names));
        });
    }

    fn paint_frame(
        &self,
        state: &State,
        renderer: &mut iced::Renderer,
        theme: &iced::Theme,
        bounds: Rectangle,
        view: View,
    ) {
        let colors = theme::colors(theme);
        let mut line = |x: f32, y: f32, width: f32, height: f32, color: Color| {
            renderer.fill_quad(
                Quad {
                    bounds: Rectangle {
                        x: x.round(),
                        y: y.round(),
                        width,
                        height,
                    },
                    ..Quad::default()
                },
                Background::Color(color),
            );
        };
        let width = bounds.width - space::SMALL;
        line(
            bounds.x,
            view.body.y - space::HAIR,
            width,
            space::HAIR,
            colors.hairline,
        );
        line(
            bounds.x,
            bounds.y + bounds.height - space::SMALL,
            width,
            space::HAIR,
            colors.hairline,
        );
        for bar in [Bar::Rows, Bar::Columns] {
            if let Some(bar) = self.bar(state, view, bar) {
                renderer.fill_quad(
                    Quad {
                        bounds: bar,
                        border: Border {
                            radius: space::AIR.into(),
                            ..Border::default()
                        },
                        ..Quad::default()
                    },
                    Background::Color(colors.hairline),
                );
            }
        }
    }

    fn paint_body(
        &self,
        state: &State,
        renderer: &mut iced::Renderer,
        theme: &iced::Theme,
        view: View,
        area: Rectangle,
    ) {
        let colors = theme::colors(theme);
        let from = state.starts.get(state.first.column).copied().unwrap_or(0.0);
        let place = |at: At| {
            let start = state.starts[at.column];
            Rectangle {
                x: view.body.x + start - from,
                y: view.body.y + (at.row - state.first.row) as f32 * space::ROW,
                width: state.starts[at.column + 1] - start,
                height: space::ROW,
            }
        };
        // What stands out: its ground, and its name in strong letters.
        let rows = state.first.row..state.first.row + view.n_rows;
        let columns = state.first.column..state.first.column + view.n_columns;
        let mut ground = |bounds: Rectangle| {
            let quad = Quad {
                bounds,
                ..Quad::default()
            };
            renderer.fill_quad(quad, Background::Color(colors.hover));
        };
        if let Some(row) = self.stands_out.row.filter(|row| rows.contains(row)) {
            ground(Rectangle {
                x: view.body.x - state.names,
                y: view.body.y + (row - state.first.row) as f32 * space::ROW,
                width: view.body.width + state.names,
                height: space::ROW,
            });
        }
        if let Some(column) = self.stands_out.column.filter(|at| columns.contains(at)) {
            ground(Rectangle {
                height: view.n_rows as f32 * space::ROW,
                ..place(At {
                    row: state.first.row,
                    column,
                })
            });
        }
        if let Some((low, high)) = Self::selection(state) {
            let last = At {
                row: (state.first.row + view.n_rows).saturating_sub(1),
                column: (state.first.column + view.n_columns).saturating_sub(1),
            };
            let low = At {
                row: low.row.max(state.first.row),
                column: low.column.max(state.first.column),
            };
            let high = At {
                row: high.row.min(last.row),
                column: high.column.min(last.column),
            };
            if low.row <= high.row && low.column <= high.column {
                let (first, last) = (place(low), place(high));
                renderer.fill_quad(
                    Quad {
                        bounds: Rectangle {
                            x: first.x,
                            y: first.y,
                            width: last.x + last.width - first.x,
                            height: last.y + last.height - first.y,
                        },
                        ..Quad::default()
                    },
                    Background::Color(colors.selected),
                );
            }
        }
        for row in state.first.row..state.first.row + view.n_rows {
            for column in state.first.column..state.first.column + view.n_columns {
                let field = self.source.field(row, column);
                let color = match field.condition {
                    Condition::Known => colors.ink,
                    Condition::Missing => colors.quiet,
                    Condition::BelowLimit | Condition::AboveLimit => colors.attention,
                    Condition::Corrected => colors.accent,
                };
                let at = place(At { row, column });
                let align = self.source.align(column);
                let tail = match align {
                    Align::Start => 0.0,
                    Align::End => {
                        let longest = state.tails.get(column).copied().unwrap_or(0.0);
                        (longest - tail(&field.text)).max(0.0)
                    }
                };
                set(
                    renderer,
                    &Set {
                        text: &field.text,
                        field: at,
                        font: text::SANS,
                        face: Face::Sans,
                        color,
                        align,
                        tail,
                    },
                    area,
                );
                if field.condition == Condition::Corrected {
                    renderer.fill_quad(
                        Quad {
                            bounds: Rectangle {
                                x: at.x + space::AIR,
                                y: at.y + space::TIGHT,
                                width: space::BAR,
                                height: at.height - space::SMALL,
                            },
                            ..Quad::default()
                        },
                        Background::Color(colors.accent),
                    );
                }
            }
        }
    }

    fn paint_head(
        &self,
        state: &State,
        renderer: &mut iced::Renderer,
        theme: &iced::Theme,
        view: View,
        head: Rectangle,
        area: Rectangle,
    ) {
        let colors = theme::colors(theme);
        let from = state.starts.get(state.first.column).copied().unwrap_or(0.0);
        for column in state.first.column..state.first.column + view.n_columns {
            let start = state.starts[column];
            let field = Rectangle {
                x: head.x + start - from,
                y: head.y,
                width: state.starts[column + 1] - start,
                height: space::ROW,
            };
            if state.hovered_head == Some(column) {
                renderer.fill_quad(
                    Quad {
                        bounds: Rectangle {
                            height: head.height - space::HAIR,
                            ..field
                        },
                        ..Quad::default()
                    },
                    Background::Color(colors.hover),
                );
            }
            let align = self.source.align(column);
            set(
                renderer,
                &Set {
                    text: &self.source.column(column),
                    field,
                    font: text::STRONG,
                    face: Face::SansStrong,
                    color: colors.ink,
                    align,
                    tail: 0.0,
                },
                area,
            );
            if let Some(remark) = self.source.remark(column) {
                set(
                    renderer,
                    &Set {
                        text: &remark,
                        field: Rectangle {
                            y: field.y + text::SMALL_LINE,
                            ..field
                        },
                        font: text::SANS,
                        face: Face::Sans,
                        color: colors.accent,
                        align,
                        tail: 0.0,
                    },
                    area,
                );
            }
        }
    }

    fn paint_names(
        &self,
        state: &State,
        renderer: &mut iced::Renderer,
        theme: &iced::Theme,
        view: View,
        names: Rectangle,
        area: Rectangle,
    ) {
        let colors = theme::colors(theme);
        // The names begin where the words above the grid do.
        let field = |y: f32| Rectangle {
            x: names.x - space::SMALL,
            y,
            width: names.width + space::SMALL,
            height: space::ROW,
        };
        set(
            renderer,
            &Set {
                text: &self.source.corner(),
                field: field(names.y),
                font: text::STRONG,
                face: Face::SansStrong,
                color: colors.ink,
                align: Align::Start,
                tail: 0.0,
            },
            area,
        );
        for at in 0..view.n_rows {
            let is_out = self.stands_out.row == Some(state.first.row + at);
            let (font, face, color) = if is_out {
                (text::STRONG, Face::SansStrong, colors.ink)
            } else {
                (text::SANS, Face::Sans, colors.quiet)
            };
            set(
                renderer,
                &Set {
                    text: &self.source.row(state.first.row + at),
                    field: field(view.body.y + at as f32 * space::ROW),
                    font,
                    face,
                    color,
                    align: Align::Start,
                    tail: 0.0,
                },
                area,
            );
        }
    }
}

/// How wide a number is from its decimal mark on; nothing for what has none, such as words.
pub(super) fn tail(text: &str) -> f32 {
    let is_number = text.ends_with(|letter: char| letter.is_ascii_digit());
    match text.rfind('.') {
        Some(at) if is_number => {
            metrics::width(&text[at..], Face::Sans, f64::from(text::SMALL)) as f32
        }
        Some(_) | None => 0.0,
    }
}

fn set(renderer: &mut iced::Renderer, set: &Set<'_>, area: Rectangle) {
    let room = set.field.width - 2.0 * space::SMALL;
    let size = f64::from(text::SMALL);
    // Kerning and rounding make a text that just fits a little wider or narrower.
    let fits = metrics::width(set.text, set.face, size) <= f64::from(room) + 1.0;
    let words = if fits {
        set.text.to_owned()
    } else {
        metrics::fitted(set.text, set.face, size, f64::from(room))
    };
    if words.is_empty() {
        return;
    }
    // Always set from the left: the toolkit takes what changed of a text to lie to the right of
    // its place, whatever its alignment. Figures have no kerning, so that this is exact for them.
    let x = match set.align {
        Align::Start => set.field.x + space::SMALL,
        Align::End => {
            let width = metrics::width(&words, set.face, size) as f32;
            // A number that is longer than the ones that were measured moves to the left.
            let tail = set.tail.min((room - width).max(0.0));
            set.field.x + set.field.width - space::SMALL - width - tail
        }
    };
    let y = set.field.y + (set.field.height - text::SMALL_LINE) / 2.0;
    if !set.field.intersects(&area) {
        return;
    }
    // The toolkit clips a text by its layer only where this reaches beyond the layer, so that it
    // is not cut here; a field at the edge of the layer does so by the nudge alone.
    let clip = set.field.shrink(2.0 * Nudge::MOST);
    let is_ascii = words.is_ascii();
    renderer.fill_text(
        iced::advanced::Text {
            content: words,
            bounds: Size::new(f32::INFINITY, text::SMALL_LINE),
            size: Pixels(text::SMALL),
            line_height: LineHeight::Absolute(Pixels(text::SMALL_LINE)),
            font: set.font,
            align_x: iced::advanced::text::Alignment::Left,
            align_y: alignment::Vertical::Top,
            shaping: if is_ascii {
                Shaping::Basic
            } else {
                Shaping::Advanced
            },
            wrapping: Wrapping::None,
        },
        Point::new(x, y.round()),
        set.color,
        clip,
    );
}
