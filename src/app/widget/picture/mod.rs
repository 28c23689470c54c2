//! Painter two: a picture on the canvas, that answers the pointer.

mod paint;

use crate::app::theme::{Mode, space};
use crate::app::widget::Element;
use crate::app::widget::focus::{self, Focus};
use crate::app::widget::layer;
use crate::app::widget::picture::paint::{Brush, level, paint, place, region, runs, told, turned};
use crate::base::hash::ContentHash;
use crate::base::number::{self, Precision};
use crate::figure::picture::{Picture, Ruler, Spot, Turn};
use crate::figure::{Meaning, Quantity};
use iced::advanced::graphics::geometry;
use iced::advanced::layout::{self, Layout};
use iced::advanced::renderer::{self, Quad, Renderer as _};
use iced::advanced::widget::{Operation, Tree, Widget, tree};
use iced::advanced::{Clipboard, Shell, mouse};
use iced::keyboard::{self, key};
use iced::widget::canvas;
use iced::{Background, Event, Length, Point, Rectangle, Size, Vector};
use std::sync::Arc;

/// How far an arrow key moves the strength, in pixels.
const STEP: f32 = 8.0;
/// How far with Shift.
const FINE: f32 = 1.0;

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
    strength: Option<f64>,
}

/// Where the strength is being moved to, from the left of the picture, and by what.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Drag {
    Pointer(f32),
    Keys(f32),
}

impl Drag {
    const fn x(self) -> f32 {
        match self {
            Self::Pointer(x) | Self::Keys(x) => x,
        }
    }
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
            strength: None,
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

    /// The same, of a fit at this strength: from there the keys move it.
    #[must_use]
    pub fn strength(mut self, strength: Option<f64>) -> Self {
        self.strength = strength;
        self
    }

    /// The same, paled: it shows what is no longer current.
    #[must_use]
    pub fn paled(mut self, is_paled: bool) -> Self {
        self.is_paled = is_paled;
        self
    }
}

#[derive(Default)]
struct State {
    /// One for each run of marks.
    marks: Vec<canvas::Cache>,
    made_of: Option<(ContentHash, Brush)>,
    hovered: Option<Spot>,
    drag: Option<Drag>,
    focus: Focus,
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

    fn operate(
        &mut self,
        tree: &mut Tree,
        layout: Layout<'_>,
        _renderer: &iced::Renderer,
        operation: &mut dyn Operation,
    ) {
        if self.tell.is_some() && self.strengths().is_some() {
            let state = tree.state.downcast_mut::<State>();
            operation.focusable(None, layout.bounds(), &mut state.focus);
        }
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
                if let Some(Drag::Pointer(_)) = state.drag {
                    if let Some(at) = cursor.position().map(|at| at - origin) {
                        state.drag = Some(Drag::Pointer(at.x));
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
                let has_focus = inside.is_some() && self.tell.is_some();
                if state.focus.0 != has_focus {
                    state.focus = Focus(has_focus && self.strengths().is_some());
                    state.drag = None;
                    shell.request_redraw();
                }
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
                        state.drag = Some(Drag::Pointer(at.x));
                        shell.request_redraw();
                    }
                    shell.capture_event();
                }
            }
            Event::Mouse(mouse::Event::ButtonReleased(mouse::Button::Left)) => {
                let from = state.pressed.take();
                let dragged = state.drag.take_if(|drag| matches!(drag, Drag::Pointer(_)));
                let (Some(tell), Some(from)) = (&self.tell, from) else {
                    return;
                };
                if let Some(to) = dragged.map(Drag::x) {
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
            Event::Keyboard(keyboard::Event::KeyPressed {
                key: keyboard::Key::Named(named),
                modifiers,
                ..
            }) if state.focus.0 && !shell.is_event_captured() => {
                self.steer(state, *named, *modifiers, shell);
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
        if state.focus.0 {
            focus::ring(renderer, theme, bounds.shrink(space::AIR + space::BAR));
        }
        let dragged = state
            .drag
            .and_then(|drag| self.dragged(state, bounds.position(), drag));
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
        if let Some(Drag::Pointer(_)) = state.drag {
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
            state.drag = None;
            state.made_of = Some((self.hash, self.brush()));
        }
        if state.highlighted != self.highlight {
            state.highlight.clear();
            state.highlighted.clone_from(&self.highlight);
        }
    }

    /// The ruler on which the strength can be moved.
    fn strengths(&self) -> Option<&Ruler> {
        let is_of_strengths = |ruler: &&Ruler| ruler.quantity == Quantity::Strength;
        self.picture.rulers.iter().find(is_of_strengths)
    }

    /// Moves the strength by the keyboard: arrows move it, Enter sets it, any other key that
    /// means something leaves it.
    fn steer(
        &self,
        state: &mut State,
        named: key::Named,
        modifiers: keyboard::Modifiers,
        shell: &mut Shell<'_, M>,
    ) {
        let (Some(ruler), Some(tell)) = (self.strengths(), &self.tell) else {
            return;
        };
        let step = match (named, modifiers.shift()) {
            (key::Named::ArrowLeft, true) => -FINE,
            (key::Named::ArrowLeft, false) => -STEP,
            (key::Named::ArrowRight, true) => FINE,
            (key::Named::ArrowRight, false) => STEP,
            (key::Named::Enter | key::Named::Space, _) => {
                if let Some(Drag::Keys(x)) = state.drag.take() {
                    shell.publish(tell(Told::Dragged(ruler.value_at(f64::from(x)))));
                    shell.capture_event();
                    shell.request_redraw();
                }
                return;
            }
            (key::Named::Escape | key::Named::Tab, _) => {
                if state.drag.take().is_some() {
                    shell.request_redraw();
                }
                return;
            }
            _ => return,
        };
        let from = match (state.drag, self.strength) {
            (Some(drag), _) => drag.x(),
            (None, Some(strength)) => ruler.x_at(strength) as f32,
            (None, None) => (ruler.rect.x + ruler.rect.width / 2.0) as f32,
        };
        let (low, high) = (ruler.rect.x as f32, ruler.rect.right() as f32);
        state.drag = Some(Drag::Keys((from + step).clamp(low, high)));
        shell.capture_event();
        shell.request_redraw();
    }

    /// The upright line where the strength is being moved to, and its value.
    fn dragged(&self, state: &State, origin: Point, drag: Drag) -> Option<(Rectangle, String)> {
        let (ruler, more) = match drag {
            Drag::Pointer(_) => (self.picture.ruler_at(place(state.pressed?))?, ""),
            Drag::Keys(_) => (self.strengths()?, "; Enter sets it"),
        };
        let x = f64::from(drag.x()).clamp(ruler.rect.x, ruler.rect.right());
        let at = Point::new(
            (origin.x + x as f32).round(),
            (origin.y + ruler.rect.y as f32).round(),
        );
        let size = Size::new(space::BAR, (ruler.rect.height as f32).round());
        let value = number::text(ruler.value_at(x), Precision::Significant(3));
        let words = format!("penalty strength {value}{more}");
        Some((Rectangle::new(at, size), words))
    }
}

impl<'a, M: 'a> From<Shown<'a, M>> for Element<'a, M> {
    fn from(shown: Shown<'a, M>) -> Self {
        Self::new(shown)
    }
}
