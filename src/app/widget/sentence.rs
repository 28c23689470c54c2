//! A sentence set for reading, whose editable words can be pressed.

use crate::app::theme::Mode;
use crate::app::theme::{self, space, text};
use crate::app::widget::Element;
use crate::app::widget::focus::{self, Focus};
use iced::advanced::graphics::geometry;
use iced::advanced::layout::{self, Layout};
use iced::advanced::renderer::{self, Quad, Renderer as _};
use iced::advanced::text::{LineHeight, Paragraph as _, Renderer as _, Span, Wrapping};
use iced::advanced::widget::{Operation, Tree, Widget, tree};
use iced::advanced::{Clipboard, Shell, mouse};
use iced::keyboard::{self, key};
use iced::widget::canvas;
use iced::{
    Background, Border, Color, Event, Font, Length, Pixels, Point, Rectangle, Size, alignment,
};

type Paragraph = <iced::Renderer as iced::advanced::text::Renderer>::Paragraph;

/// How far below the baseline the dotted rule lies.
const DROP: f32 = 5.0;
/// From dot to dot of the rule.
const PITCH: f32 = 3.0;

/// What a piece of a sentence is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Role {
    /// Words that stand.
    Plain,
    /// Words that stand out.
    Strong,
    /// Words that are stressed.
    Emphasis,
    /// Letters that keep their places.
    Code,
    /// Words that can be edited.
    Editable,
    /// Words that are being edited.
    Open,
    /// A number that comes from a fact.
    Fact,
    /// A fact that does not exist.
    Missing,
    /// A fact that is still to come.
    Pending,
}

/// A piece of a sentence.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Piece {
    /// The words.
    pub text: String,
    /// What they are.
    pub role: Role,
}

/// In which letters a sentence is set.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Setting {
    /// A cell's sentence, and prose.
    Reading,
    /// The one sentence of an answer.
    Answer,
    /// What stands in the margin and below figures.
    Small,
}

impl Setting {
    const fn font(self) -> Font {
        match self {
            Self::Reading => text::SERIF,
            Self::Answer => text::ITALIC,
            Self::Small => text::SANS,
        }
    }

    const fn strong(self) -> Font {
        match self {
            Self::Reading | Self::Answer => text::TITLE,
            Self::Small => text::STRONG,
        }
    }

    const fn size(self) -> f32 {
        match self {
            Self::Reading => text::READING,
            Self::Answer => text::BODY,
            Self::Small => text::SMALL,
        }
    }

    const fn line(self) -> f32 {
        match self {
            Self::Reading => text::READING_LINE,
            Self::Answer => text::ANSWER_LINE,
            Self::Small => text::SMALL_LINE,
        }
    }
}

/// Whether the sentence is in force or shows what is no longer current.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Force {
    /// In force.
    #[default]
    Current,
    /// Paled.
    Paled,
}

/// A sentence.
pub struct Sentence<'a, M> {
    pieces: Vec<Piece>,
    setting: Setting,
    force: Force,
    mode: Mode,
    on_press: Option<Box<dyn Fn(usize) -> M + 'a>>,
}

impl<'a, M> Sentence<'a, M> {
    /// A sentence in which nothing can be pressed.
    #[must_use]
    pub fn new(pieces: Vec<Piece>, setting: Setting, mode: Mode) -> Self {
        Self {
            pieces,
            setting,
            force: Force::Current,
            mode,
            on_press: None,
        }
    }

    /// The same, whose editable pieces can be pressed; they are told by their position among
    /// the pieces.
    #[must_use]
    pub fn on_press(mut self, message: impl Fn(usize) -> M + 'a) -> Self {
        self.on_press = Some(Box::new(message));
        self
    }

    /// The same, in force or paled.
    #[must_use]
    pub fn force(mut self, force: Force) -> Self {
        self.force = force;
        self
    }

    fn color(&self, role: Role) -> Color {
        let colors = self.mode.colors();
        let color = match role {
            Role::Plain | Role::Strong | Role::Emphasis | Role::Code | Role::Fact => colors.ink,
            Role::Editable | Role::Open if self.on_press.is_some() => colors.accent,
            Role::Editable | Role::Open => colors.ink,
            Role::Missing => colors.attention,
            Role::Pending => colors.quiet,
        };
        match self.force {
            Force::Current => color,
            Force::Paled => colors.quiet,
        }
    }

    fn is_pressable(&self, at: usize) -> bool {
        self.on_press.is_some()
            && self
                .pieces
                .get(at)
                .is_some_and(|piece| matches!(piece.role, Role::Editable | Role::Open))
    }

    fn paragraph(&self, width: f32) -> Paragraph {
        let spans: Vec<Span<'_, (), Font>> = self
            .pieces
            .iter()
            .map(|piece| {
                let font = match piece.role {
                    Role::Strong => self.setting.strong(),
                    Role::Emphasis => text::ITALIC,
                    Role::Code => text::MONO,
                    Role::Plain
                    | Role::Editable
                    | Role::Open
                    | Role::Fact
                    | Role::Missing
                    | Role::Pending => self.setting.font(),
                };
                Span::new(piece.text.as_str())
                    .font(font)
                    .color(self.color(piece.role))
            })
            .collect();
        Paragraph::with_spans(iced::advanced::Text {
            content: spans.as_slice(),
            bounds: Size::new(width, f32::INFINITY),
            size: Pixels(self.setting.size()),
            line_height: LineHeight::Absolute(Pixels(self.setting.line())),
            font: self.setting.font(),
            align_x: iced::advanced::text::Alignment::Left,
            align_y: alignment::Vertical::Top,
            shaping: iced::advanced::text::Shaping::Advanced,
            wrapping: Wrapping::WordOrGlyph,
        })
    }
}

#[derive(Default)]
struct State {
    paragraph: Paragraph,
    made_of: Option<(Vec<Piece>, Setting, Mode, Force, u32)>,
    focuses: Vec<Focus>,
    hovered: Option<usize>,
    pressed: Option<usize>,
    dots: canvas::Cache,
}

impl State {
    fn word_at(&self, at: Point) -> Option<usize> {
        self.paragraph.hit_span(at)
    }
}

impl<'a, M: 'a> Widget<M, iced::Theme, iced::Renderer> for Sentence<'a, M> {
    fn tag(&self) -> tree::Tag {
        tree::Tag::of::<State>()
    }

    fn state(&self) -> tree::State {
        tree::State::new(State::default())
    }

    fn size(&self) -> Size<Length> {
        Size::new(Length::Fill, Length::Shrink)
    }

    fn layout(
        &mut self,
        tree: &mut Tree,
        _renderer: &iced::Renderer,
        limits: &layout::Limits,
    ) -> layout::Node {
        let state = tree.state.downcast_mut::<State>();
        let width = limits.max().width;
        let is_same =
            state
                .made_of
                .as_ref()
                .is_some_and(|(pieces, setting, mode, force, made_width)| {
                    *pieces == self.pieces
                        && *setting == self.setting
                        && *mode == self.mode
                        && *force == self.force
                        && *made_width == width.to_bits()
                });
        if !is_same {
            state.paragraph = self.paragraph(width);
            state.dots.clear();
            state.focuses.resize(self.pieces.len(), Focus::default());
            state.made_of = Some((
                self.pieces.clone(),
                self.setting,
                self.mode,
                self.force,
                width.to_bits(),
            ));
        }
        let height = state.paragraph.min_height().max(self.setting.line());
        layout::Node::new(Size::new(width, height))
    }

    fn operate(
        &mut self,
        tree: &mut Tree,
        layout: Layout<'_>,
        _renderer: &iced::Renderer,
        operation: &mut dyn Operation,
    ) {
        let state = tree.state.downcast_mut::<State>();
        let plain: String = self
            .pieces
            .iter()
            .map(|piece| piece.text.as_str())
            .collect();
        operation.text(None, layout.bounds(), &plain);
        for at in 0..self.pieces.len() {
            if self.is_pressable(at) {
                let first = state.paragraph.span_bounds(at).into_iter().next();
                let bounds = first.map_or(layout.bounds(), |bounds| {
                    bounds + (layout.position() - Point::ORIGIN)
                });
                if let Some(focus) = state.focuses.get_mut(at) {
                    operation.focusable(None, bounds, focus);
                }
                operation.text(None, bounds, &self.pieces[at].text);
            }
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
        let Some(on_press) = &self.on_press else {
            return;
        };
        let state = tree.state.downcast_mut::<State>();
        let shown = layout.bounds().intersection(viewport).unwrap_or_default();
        let under = || {
            cursor
                .position_over(shown)
                .and_then(|at| state.word_at(at - (layout.position() - Point::ORIGIN)))
                .filter(|at| self.is_pressable(*at))
        };
        match event {
            Event::Mouse(mouse::Event::CursorMoved { .. } | mouse::Event::CursorLeft) => {
                let hovered = under();
                if hovered != state.hovered {
                    state.hovered = hovered;
                    shell.request_redraw();
                }
            }
            Event::Mouse(mouse::Event::ButtonPressed(mouse::Button::Left)) => {
                let pressed = under();
                state.pressed = pressed;
                for (at, focus) in state.focuses.iter_mut().enumerate() {
                    if focus.0 != (pressed == Some(at)) {
                        *focus = Focus(pressed == Some(at));
                        shell.request_redraw();
                    }
                }
                if pressed.is_some() {
                    shell.capture_event();
                }
            }
            Event::Mouse(mouse::Event::ButtonReleased(mouse::Button::Left)) => {
                let released = under();
                if let Some(at) = state.pressed.take()
                    && released == Some(at)
                {
                    shell.publish(on_press(at));
                    shell.capture_event();
                }
            }
            Event::Keyboard(keyboard::Event::KeyPressed {
                key: keyboard::Key::Named(key::Named::Enter | key::Named::Space),
                modifiers,
                ..
            }) if modifiers.is_empty() && !shell.is_event_captured() => {
                if let Some(at) = state.focuses.iter().position(|focus| focus.0) {
                    shell.publish(on_press(at));
                    shell.capture_event();
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
        let Some(shown) = bounds.expand(space::TIGHT).intersection(viewport) else {
            return;
        };
        let colors = theme::colors(theme);
        let origin = layout.position() - Point::ORIGIN;
        // Asked now and not remembered: a page that scrolls moves words away from the pointer.
        let hovered = cursor
            .position_over(shown)
            .and_then(|at| state.word_at(at - origin));
        for (at, piece) in self.pieces.iter().enumerate() {
            let is_hovered = hovered == Some(at) && self.is_pressable(at);
            let ground = match piece.role {
                Role::Open if self.on_press.is_some() => Some(colors.selected),
                _ if is_hovered => Some(colors.hover),
                Role::Plain
                | Role::Strong
                | Role::Emphasis
                | Role::Code
                | Role::Editable
                | Role::Open
                | Role::Fact
                | Role::Missing
                | Role::Pending => None,
            };
            let is_focused = state.focuses.get(at).is_some_and(|focus| focus.0);
            if ground.is_none() && !is_focused {
                continue;
            }
            let parts = state.paragraph.span_bounds(at);
            for part in &parts {
                let part = tight(*part + origin, self.setting);
                if let Some(ground) = ground {
                    renderer.fill_quad(
                        Quad {
                            bounds: part,
                            border: Border {
                                radius: space::CORNER.into(),
                                ..Border::default()
                            },
                            ..Quad::default()
                        },
                        Background::Color(ground),
                    );
                }
                if is_focused && self.is_pressable(at) {
                    focus::ring(renderer, theme, part);
                }
            }
        }
        if self.on_press.is_some() {
            let dots = state.dots.draw(renderer, bounds.size(), |frame| {
                let baseline = text::baseline(self.setting.size(), self.setting.line());
                for (at, piece) in self.pieces.iter().enumerate() {
                    if !self.is_pressable(at) {
                        continue;
                    }
                    let color = Color {
                        a: 0.7,
                        ..self.color(piece.role)
                    };
                    for part in state.paragraph.span_bounds(at) {
                        let y = (line_top(part, self.setting) + baseline + DROP).round();
                        let path = canvas::Path::new(|path| {
                            let mut x = part.x.round();
                            while x < part.x + part.width - 1.0 {
                                path.rectangle(Point::new(x, y), Size::new(1.0, 1.0));
                                x += PITCH;
                            }
                        });
                        frame.fill(&path, color);
                    }
                }
            });
            renderer.with_translation(origin, |renderer| {
                geometry::Renderer::draw_geometry(renderer, dots);
            });
        }
        renderer.fill_paragraph(&state.paragraph, bounds.position(), colors.ink, shown);
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
        let shown = layout.bounds().intersection(viewport).unwrap_or_default();
        let is_over_word = cursor
            .position_over(shown)
            .and_then(|at| state.word_at(at - (layout.position() - Point::ORIGIN)))
            .is_some_and(|at| self.is_pressable(at));
        if is_over_word {
            mouse::Interaction::Pointer
        } else {
            mouse::Interaction::None
        }
    }
}

/// The top of the line that a part of a span lies on.
fn line_top(part: Rectangle, setting: Setting) -> f32 {
    let middle = part.y + part.height / 2.0;
    (middle / setting.line()).floor() * setting.line()
}

/// The ground of a word: a little less than its line.
fn tight(part: Rectangle, setting: Setting) -> Rectangle {
    let air = (setting.line() - setting.size() * 1.5) / 2.0;
    Rectangle {
        x: part.x - space::AIR,
        y: part.y + air,
        width: part.width + 2.0 * space::AIR,
        height: part.height - 2.0 * air,
    }
}

impl<'a, M: 'a> From<Sentence<'a, M>> for Element<'a, M> {
    fn from(sentence: Sentence<'a, M>) -> Self {
        Self::new(sentence)
    }
}
