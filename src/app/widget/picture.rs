//! Painter two: a picture on the canvas, that answers the pointer.

use crate::app::theme::Mode;
use crate::app::theme::{self, space, text};
use crate::app::widget::Element;
use crate::app::widget::layer;
use crate::base::hash::ContentHash;
use crate::base::number::{self, Precision};
use crate::figure::ink::Ink;
use crate::figure::picture::{
    Anchor, Dash, Mark, Picture, Point as Place, Rect as Area, Spot, Stroke as Line, Turn, Word,
};
use crate::figure::{Meaning, Quantity};
use iced::advanced::graphics::geometry;
use iced::advanced::layout::{self, Layout};
use iced::advanced::renderer::{self, Quad, Renderer as _};
use iced::advanced::text::{LineHeight, Renderer as _, Wrapping};
use iced::advanced::widget::{Tree, Widget, tree};
use iced::advanced::{Clipboard, Shell, mouse};
use iced::widget::canvas::{self, Frame, LineDash, Path, Stroke};
use iced::{
    Background, Border, Color, Event, Length, Pixels, Point, Rectangle, Size, Vector, alignment,
};
use std::sync::Arc;

/// How long the strokes and gaps of a broken line are.
const DASHES: [f32; 2] = [3.0, 3.0];
/// How far the told words stand from the pointer.
const ASIDE: f32 = 14.0;

/// What a picture tells the window.
#[derive(Clone, Debug, PartialEq)]
pub enum Told {
    /// A thing was pressed, or nothing was.
    Pressed(Option<Meaning>),
    /// The strength was dragged and let go at this value.
    Dragged(f64),
}

/// A picture that answers the pointer.
pub struct Shown<'a, M> {
    picture: Arc<Picture>,
    hash: ContentHash,
    mode: Mode,
    highlight: Option<Meaning>,
    tell: Option<Box<dyn Fn(Told) -> M + 'a>>,
    is_paled: bool,
}

impl<'a, M> Shown<'a, M> {
    /// A picture. `hash` is that of its content, taken once where the picture is kept.
    #[must_use]
    pub fn new(picture: Arc<Picture>, hash: ContentHash, mode: Mode) -> Self {
        Self {
            picture,
            hash,
            mode,
            highlight: None,
            tell: None,
            is_paled: false,
        }
    }

    /// The same, with a thing that stands out.
    #[must_use]
    pub fn highlight(mut self, meaning: Option<Meaning>) -> Self {
        self.highlight = meaning;
        self
    }

    /// The same, that tells what was pressed and dragged.
    #[must_use]
    pub fn tell(mut self, tell: impl Fn(Told) -> M + 'a) -> Self {
        self.tell = Some(Box::new(tell));
        self
    }

    /// The same, paled: it shows what is no longer current.
    #[must_use]
    pub fn paled(mut self, is_paled: bool) -> Self {
        self.is_paled = is_paled;
        self
    }
}

/// How much of an ink is left of what is no longer current.
const PALED: f32 = 0.45;

/// How ink becomes colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
struct Brush {
    mode: Mode,
    is_paled: bool,
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

#[derive(Default)]
struct State {
    /// One for each run of marks.
    marks: Vec<canvas::Cache>,
    made_of: Option<(ContentHash, Brush)>,
    hovered: Option<Spot>,
    /// Where the strength is being dragged to, from the left of the picture.
    drag: Option<f32>,
    pressed: Option<Point>,
    highlight: canvas::Cache,
    highlighted: Option<Meaning>,
}

impl<'a, M: 'a> Widget<M, iced::Theme, iced::Renderer> for Shown<'a, M> {
    fn tag(&self) -> tree::Tag {
        tree::Tag::of::<State>()
    }

    fn state(&self) -> tree::State {
        tree::State::new(State::default())
    }

    fn size(&self) -> Size<Length> {
        Size::new(Length::Shrink, Length::Shrink)
    }

    fn layout(
        &mut self,
        tree: &mut Tree,
        _renderer: &iced::Renderer,
        _limits: &layout::Limits,
    ) -> layout::Node {
        self.follow(tree.state.downcast_mut::<State>());
        let size = self.picture.size;
        layout::Node::new(Size::new(size.width as f32, size.height as f32))
    }

    fn update(
        &mut self,
        tree: &mut Tree,
        event: &Event,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        _renderer: &iced::Renderer,
        _clipboard: &mut dyn Clipboard,
        shell: &mut Shell<'_, M>,
        viewport: &Rectangle,
    ) {
        let state = tree.state.downcast_mut::<State>();
        let shown = layout.bounds().intersection(viewport).unwrap_or_default();
        let origin = layout.position() - Point::ORIGIN;
        let inside = cursor.position_over(shown).map(|at| at - origin);
        match event {
            Event::Mouse(mouse::Event::CursorMoved { .. } | mouse::Event::CursorLeft) => {
                if state.drag.is_some() {
                    if let Some(at) = cursor.position().map(|at| at - origin) {
                        state.drag = Some(at.x);
                        shell.request_redraw();
                    }
                    return;
                }
                let hovered = inside.and_then(|at| self.picture.spot_at(place(at)));
                if state.hovered.as_ref() != hovered {
                    state.hovered = hovered.cloned();
                    shell.request_redraw();
                }
            }
            Event::Mouse(mouse::Event::ButtonPressed(mouse::Button::Left)) => {
                state.pressed = inside;
                if let (Some(at), Some(_)) = (inside, &self.tell) {
                    let is_ruled = self
                        .picture
                        .ruler_at(place(at))
                        .is_some_and(|ruler| ruler.quantity == Quantity::Strength);
                    let is_handle = self
                        .picture
                        .spot_at(place(at))
                        .is_none_or(|spot| matches!(spot.meaning, Meaning::Strength(_)));
                    if is_ruled && is_handle {
                        state.drag = Some(at.x);
                        shell.request_redraw();
                    }
                    shell.capture_event();
                }
            }
            Event::Mouse(mouse::Event::ButtonReleased(mouse::Button::Left)) => {
                let from = state.pressed.take();
                let dragged = state.drag.take();
                let (Some(tell), Some(from)) = (&self.tell, from) else {
                    return;
                };
                if let Some(to) = dragged {
                    shell.request_redraw();
                    // A press without a way is a press, not a drag.
                    if (to - from.x).abs() >= space::TIGHT
                        && let Some(ruler) = self.picture.ruler_at(place(from))
                    {
                        shell.publish(tell(Told::Dragged(ruler.value_at(f64::from(to)))));
                        shell.capture_event();
                        return;
                    }
                }
                if let Some(at) = inside {
                    let spot = self.picture.spot_at(place(at));
                    let meaning = spot.map(|spot| spot.meaning.clone());
                    if meaning.is_some() || self.highlight.is_some() {
                        shell.publish(tell(Told::Pressed(meaning)));
                        shell.capture_event();
                    }
                }
            }
            _ => {}
        }
    }

    fn draw(
        &self,
        tree: &Tree,
        renderer: &mut iced::Renderer,
        theme: &iced::Theme,
        _style: &renderer::Style,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        viewport: &Rectangle,
    ) {
        let state = tree.state.downcast_ref::<State>();
        let bounds = layout.bounds();
        let Some(shown) = bounds.intersection(viewport) else {
            return;
        };
        let origin = layout.position() - Point::ORIGIN;
        let mut caches = state.marks.iter();
        for run in runs(&self.picture.marks) {
            let cache = caches.next().expect("there is a cache for every run");
            let seen = run.seen.map_or(Rectangle::with_size(bounds.size()), region);
            let marks = cache.draw_with_bounds(renderer, seen, |frame| {
                frame.translate(Vector::new(-seen.x, -seen.y));
                for mark in run.marks {
                    paint(frame, mark, self.brush());
                }
            });
            renderer.with_translation(origin, |renderer| {
                geometry::Renderer::draw_geometry(renderer, marks);
            });
        }
        // Turned words are drawn as outlines, since the toolkit's texts cannot be turned.
        if let Some(cache) = caches.next() {
            let words = cache.draw(renderer, bounds.size(), |frame| {
                for word in &self.picture.words {
                    if word.turn == Turn::Up {
                        turned(frame, word, self.brush());
                    }
                }
            });
            renderer.with_translation(origin, |renderer| {
                geometry::Renderer::draw_geometry(renderer, words);
            });
        }
        if let Some(meaning) = &self.highlight {
            let marks = state.highlight.draw(renderer, bounds.size(), |frame| {
                for mark in self.picture.highlight(meaning) {
                    paint(frame, &mark, self.brush());
                }
            });
            renderer.with_translation(origin, |renderer| {
                geometry::Renderer::draw_geometry(renderer, marks);
            });
        }
        for word in &self.picture.words {
            if word.turn == Turn::Level {
                level(renderer, word, origin, self.brush());
            }
        }
        let dragged = state
            .drag
            .and_then(|x| self.dragged(state, bounds.position(), x));
        let line = dragged.as_ref().map(|(line, _)| *line);
        let line = line.and_then(|line| line.intersection(&shown));
        layer::standing(renderer, line, |renderer, bounds| {
            let line = Quad {
                bounds,
                ..Quad::default()
            };
            renderer.fill_quad(line, Background::Color(self.mode.colors().attention));
        });
        let pointed = cursor.position_over(shown).and_then(|at| {
            let spot = self.picture.spot_at(place(at - origin))?;
            Some((at, spot.text.clone()))
        });
        let words = dragged
            .map(|(line, words)| (line.position(), words))
            .or(pointed);
        told(renderer, theme, words, shown);
    }

    fn mouse_interaction(
        &self,
        tree: &Tree,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        viewport: &Rectangle,
        _renderer: &iced::Renderer,
    ) -> mouse::Interaction {
        let state = tree.state.downcast_ref::<State>();
        if state.drag.is_some() {
            return mouse::Interaction::ResizingHorizontally;
        }
        let shown = layout.bounds().intersection(viewport).unwrap_or_default();
        let Some(at) = cursor.position_over(shown) else {
            return mouse::Interaction::None;
        };
        let at = place(at - (layout.position() - Point::ORIGIN));
        match self.picture.spot_at(at) {
            Some(spot) if matches!(spot.meaning, Meaning::Strength(_)) => {
                mouse::Interaction::ResizingHorizontally
            }
            Some(_) => mouse::Interaction::Pointer,
            None => mouse::Interaction::None,
        }
    }
}

impl<'a, M: 'a> Shown<'a, M> {
    fn brush(&self) -> Brush {
        Brush {
            mode: self.mode,
            is_paled: self.is_paled,
        }
    }

    /// Forgets what was painted of another picture.
    fn follow(&self, state: &mut State) {
        if state.made_of != Some((self.hash, self.brush())) {
            state.marks.clear();
            // One more than runs: the last is for the turned words.
            let n_caches = runs(&self.picture.marks).len() + 1;
            state.marks.resize_with(n_caches, canvas::Cache::new);
            state.highlight.clear();
            state.hovered = None;
            state.made_of = Some((self.hash, self.brush()));
        }
        if state.highlighted != self.highlight {
            state.highlight.clear();
            state.highlighted.clone_from(&self.highlight);
        }
    }

    /// The upright line under the pointer while the strength is dragged, and its value.
    fn dragged(&self, state: &State, origin: Point, x: f32) -> Option<(Rectangle, String)> {
        let from = state.pressed?;
        let ruler = self.picture.ruler_at(place(from))?;
        let x = f64::from(x).clamp(ruler.rect.x, ruler.rect.right());
        let at = Point::new(
            (origin.x + x as f32).round(),
            (origin.y + ruler.rect.y as f32).round(),
        );
        let size = Size::new(space::BAR, (ruler.rect.height as f32).round());
        let value = number::text(ruler.value_at(x), Precision::Significant(3));
        Some((
            Rectangle::new(at, size),
            format!("penalty strength {value}"),
        ))
    }
}

/// Words beside the pointer, in a layer above everything.
fn told(
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

fn level(renderer: &mut iced::Renderer, word: &Word, origin: Vector, brush: Brush) {
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

fn turned(frame: &mut Frame, word: &Word, brush: Brush) {
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
struct Run<'a> {
    seen: Option<Area>,
    marks: &'a [Mark],
}

fn runs(marks: &[Mark]) -> Vec<Run<'_>> {
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

fn region(rect: Area) -> Rectangle {
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

fn place(at: Point) -> Place {
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

fn paint(frame: &mut Frame, mark: &Mark, brush: Brush) {
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

impl<'a, M: 'a> From<Shown<'a, M>> for Element<'a, M> {
    fn from(shown: Shown<'a, M>) -> Self {
        Self::new(shown)
    }
}
