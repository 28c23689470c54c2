//! How marks and words of a picture are painted.

use crate::app::theme::Mode;
use crate::app::theme::{self, space, text};
use crate::app::widget::layer;
use crate::figure::ink::Ink;
use crate::figure::picture::{
    Anchor, Dash, Mark, Point as Place, Rect as Area, Stroke as Line, Word,
};
use iced::advanced::renderer::{Quad, Renderer as _};
use iced::advanced::text::{LineHeight, Renderer as _, Wrapping};
use iced::widget::canvas::{self, Frame, LineDash, Path, Stroke};
use iced::{Background, Border, Color, Pixels, Point, Rectangle, Size, Vector, alignment};

/// How long the strokes and gaps of a broken line are.
const DASHES: [f32; 2] = [3.0, 3.0];
/// How far the told words stand from the pointer.
const ASIDE: f32 = 14.0;
/// How much of an ink is left of what is no longer current.
const PALED: f32 = 0.45;

/// How ink becomes colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Brush {
    pub(super) mode: Mode,
    pub(super) is_paled: bool,
}

impl Brush {
    fn ink(self, ink: Ink) -> Color {
        let color = self.mode.colors().ink(ink);
        let is_ground = matches!(ink, Ink::Ground);
        if self.is_paled && !is_ground {
            color.scale_alpha(PALED)
        } else {
            color
        }
    }
}

/// Words beside the pointer, in a layer above everything.
pub(super) fn told(
    renderer: &mut iced::Renderer,
    theme: &iced::Theme,
    words: Option<(Point, String)>,
    shown: Rectangle,
) {
    let Some((at, words)) = words else {
        layer::standing(renderer, None, |_, _| {});
        return;
    };
    let colors = theme::colors(theme);
    let face = crate::figure::font::Face::Sans;
    let size = text::SMALL;
    let width = crate::figure::metrics::width(&words, face, f64::from(size)) as f32;
    let width = width.min(shown.width - 3.0 * space::SMALL);
    let sheet = Size::new(
        width + 2.0 * space::SMALL,
        text::SMALL_LINE + 2.0 * space::TIGHT,
    );
    let x = if at.x + ASIDE + sheet.width > shown.x + shown.width {
        (at.x - ASIDE - sheet.width).max(shown.x)
    } else {
        at.x + ASIDE
    };
    let lowest = (shown.y + shown.height - sheet.height).max(shown.y);
    let y = (at.y - sheet.height - space::TIGHT).clamp(shown.y, lowest);
    let bounds = Rectangle::new(Point::new(x.round(), y.round()), sheet);
    layer::standing(renderer, bounds.intersection(&shown), |renderer, layer| {
        renderer.fill_quad(
            Quad {
                bounds,
                border: Border {
                    color: colors.hairline,
                    width: space::HAIR,
                    radius: space::CORNER.into(),
                },
                ..Quad::default()
            },
            Background::Color(colors.sheet),
        );
        renderer.fill_text(
            iced::advanced::Text {
                content: words,
                bounds: Size::new(f32::INFINITY, text::SMALL_LINE),
                size: Pixels(size),
                line_height: LineHeight::Absolute(Pixels(text::SMALL_LINE)),
                font: text::SANS,
                align_x: iced::advanced::text::Alignment::Left,
                align_y: alignment::Vertical::Top,
                shaping: iced::advanced::text::Shaping::Auto,
                wrapping: Wrapping::None,
            },
            bounds.position() + Vector::new(space::SMALL, space::TIGHT),
            colors.ink,
            layer,
        );
    });
}

pub(super) fn level(renderer: &mut iced::Renderer, word: &Word, origin: Vector, brush: Brush) {
    let size = word.size as f32;
    let line = size * 1.5;
    // Always set from the left: the toolkit takes what changed of a text to lie to the right of
    // its place, whatever its alignment.
    let at = Point::new(
        word.rect().x as f32,
        word.at.y as f32 - text::baseline(size, line),
    );
    renderer.fill_text(
        iced::advanced::Text {
            content: word.text.clone(),
            bounds: Size::new(f32::INFINITY, line),
            size: Pixels(size),
            line_height: LineHeight::Absolute(Pixels(line)),
            font: text::face(word.face),
            align_x: iced::advanced::text::Alignment::Left,
            align_y: alignment::Vertical::Top,
            shaping: iced::advanced::text::Shaping::Auto,
            wrapping: Wrapping::None,
        },
        at + origin,
        brush.ink(word.ink),
        // The toolkit clips a text by its layer only where this says that it reaches beyond.
        region(word.rect().grown(1.0)) + origin,
    );
}

pub(super) fn turned(frame: &mut Frame, word: &Word, brush: Brush) {
    let size = word.size as f32;
    let line = size * 1.5;
    frame.with_save(|frame| {
        frame.translate(Vector::new(word.at.x as f32, word.at.y as f32));
        frame.rotate(-std::f32::consts::FRAC_PI_2);
        frame.fill_text(canvas::Text {
            content: word.text.clone(),
            position: Point::new(0.0, -text::baseline(size, line)),
            max_width: f32::INFINITY,
            color: brush.ink(word.ink),
            size: Pixels(size),
            line_height: LineHeight::Absolute(Pixels(line)),
            font: text::face(word.face),
            align_x: match word.anchor {
                Anchor::Start => iced::advanced::text::Alignment::Left,
                Anchor::Middle => iced::advanced::text::Alignment::Center,
                Anchor::End => iced::advanced::text::Alignment::Right,
            },
            align_y: alignment::Vertical::Top,
            shaping: iced::advanced::text::Shaping::Auto,
        });
    });
}

/// Marks that are painted into one frame. The toolkit clips frames, not marks.
pub(super) struct Run<'a> {
    pub(super) seen: Option<Area>,
    pub(super) marks: &'a [Mark],
}

pub(super) fn runs(marks: &[Mark]) -> Vec<Run<'_>> {
    let mut runs = Vec::new();
    let mut from = 0;
    for (at, mark) in marks.iter().enumerate() {
        if let Mark::Clip { rect, marks: inner } = mark {
            if from < at {
                runs.push(Run {
                    seen: None,
                    marks: &marks[from..at],
                });
            }
            runs.push(Run {
                seen: Some(*rect),
                marks: inner,
            });
            from = at + 1;
        }
    }
    if from < marks.len() {
        runs.push(Run {
            seen: None,
            marks: &marks[from..],
        });
    }
    runs
}

pub(super) fn region(rect: Area) -> Rectangle {
    Rectangle {
        x: rect.x as f32,
        y: rect.y as f32,
        width: rect.width as f32,
        height: rect.height as f32,
    }
}

fn point(at: Place) -> Point {
    Point::new(at.x as f32, at.y as f32)
}

pub(super) fn place(at: Point) -> Place {
    Place::new(f64::from(at.x), f64::from(at.y))
}

fn stroke(line: &Line, brush: Brush) -> Stroke<'static> {
    Stroke {
        style: canvas::Style::Solid(brush.ink(line.ink)),
        width: line.width as f32,
        line_cap: match line.dash {
            Dash::Solid => canvas::LineCap::Round,
            Dash::Dashed => canvas::LineCap::Butt,
        },
        line_join: canvas::LineJoin::Round,
        line_dash: match line.dash {
            Dash::Solid => LineDash::default(),
            Dash::Dashed => LineDash {
                segments: &DASHES,
                offset: 0,
            },
        },
    }
}

fn polyline(points: &[Place]) -> Path {
    Path::new(|path| {
        for (at, place) in points.iter().enumerate() {
            if at == 0 {
                path.move_to(point(*place));
            } else {
                path.line_to(point(*place));
            }
        }
    })
}

pub(super) fn paint(frame: &mut Frame, mark: &Mark, brush: Brush) {
    let fill_and_outline =
        |frame: &mut Frame, path: &Path, fill: Option<Ink>, outline: Option<Line>| {
            if let Some(ink) = fill {
                frame.fill(path, brush.ink(ink));
            }
            if let Some(line) = outline {
                frame.stroke(path, stroke(&line, brush));
            }
        };
    match mark {
        Mark::Line {
            points,
            stroke: line,
        } => {
            frame.stroke(&polyline(points), stroke(line, brush));
        }
        Mark::Area { points, ink } => {
            frame.fill(&polyline(points), brush.ink(*ink));
        }
        Mark::Disc {
            center,
            radius,
            fill,
            stroke,
        } => {
            let path = Path::circle(point(*center), *radius as f32);
            fill_and_outline(frame, &path, *fill, *stroke);
        }
        Mark::Rect {
            rect,
            radius,
            fill,
            stroke,
        } => {
            let path = Path::rounded_rectangle(
                Point::new(rect.x as f32, rect.y as f32),
                Size::new(rect.width as f32, rect.height as f32),
                (*radius as f32).into(),
            );
            fill_and_outline(frame, &path, *fill, *stroke);
        }
        // A clip is a run of its own; it holds no clip itself.
        Mark::Clip { rect: _, marks } => {
            for mark in marks {
                paint(frame, mark, brush);
            }
        }
    }
}
