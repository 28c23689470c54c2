//! A piece of the thread: the line, and the dot of one cell with its state.

use crate::app::theme::{self, space};
use crate::app::widget::Element;
use crate::eval::standing::State;
use iced::advanced::layout::{self, Layout};
use iced::advanced::mouse;
use iced::advanced::renderer::{self, Quad, Renderer as _};
use iced::advanced::widget::{Tree, Widget};
use iced::{Background, Border, Color, Length, Point, Rectangle, Size};

/// How far below the top the middle of the dot lies: the middle of a name's first line.
const MIDDLE: f32 = 14.0;

/// Where in the thread a piece is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// There is nothing before and after it.
    Only,
    /// At the beginning.
    First,
    /// Between others.
    Between,
    /// At the end.
    Last,
}

impl Place {
    /// The place of a piece among others.
    #[must_use]
    pub const fn of(at: usize, count: usize) -> Self {
        match (at, count) {
            (_, 0 | 1) => Self::Only,
            (0, _) => Self::First,
            (at, count) if at + 1 == count => Self::Last,
            _ => Self::Between,
        }
    }
}

/// A piece of the thread.
#[derive(Clone, Copy, Debug)]
pub struct Rail {
    state: State,
    place: Place,
}

impl Rail {
    /// The piece of a cell in this state.
    #[must_use]
    pub const fn new(state: State, place: Place) -> Self {
        Self { state, place }
    }
}

impl<M> Widget<M, iced::Theme, iced::Renderer> for Rail {
    fn size(&self) -> Size<Length> {
        Size::new(Length::Fixed(space::GAP), Length::Fill)
    }

    fn layout(
        &mut self,
        _tree: &mut Tree,
        _renderer: &iced::Renderer,
        limits: &layout::Limits,
    ) -> layout::Node {
        layout::atomic(limits, space::GAP, Length::Fill)
    }

    fn draw(
        &self,
        _tree: &Tree,
        renderer: &mut iced::Renderer,
        theme: &iced::Theme,
        _style: &renderer::Style,
        layout: Layout<'_>,
        _cursor: mouse::Cursor,
        _viewport: &Rectangle,
    ) {
        let colors = theme::colors(theme);
        let bounds = layout.bounds();
        let middle = bounds.x + space::GAP / 2.0;
        let y = bounds.y + MIDDLE;
        let air = space::DOT + space::BAR + space::HAIR;
        let mut line = |from: f32, to: f32| {
            renderer.fill_quad(
                Quad {
                    bounds: Rectangle {
                        x: (middle - space::HAIR).round(),
                        y: from,
                        width: space::HAIR,
                        height: (to - from).max(0.0),
                    },
                    ..Quad::default()
                },
                Background::Color(colors.hairline),
            );
        };
        if matches!(self.place, Place::Between | Place::Last) {
            line(bounds.y, y - air);
        }
        if matches!(self.place, Place::Between | Place::First) {
            line(y + air, bounds.y + bounds.height);
        }
        // Full: there is a result in force. Open: there is something to do, or to wait for.
        let (fill, edge) = match self.state {
            State::Current => (colors.accent, colors.accent),
            State::Working(_) => (colors.paper, colors.accent),
            State::Due | State::Waiting => (colors.paper, colors.caution),
            State::Stopped => (colors.paper, colors.attention),
            State::Failed => (colors.stop, colors.stop),
        };
        let radius = match self.state {
            // A failed cell is square, so that not only its colour tells it.
            State::Failed => 0.0,
            State::Current | State::Working(_) | State::Due | State::Waiting | State::Stopped => {
                space::DOT
            }
        };
        renderer.fill_quad(
            Quad {
                bounds: Rectangle::new(
                    Point::new((middle - space::DOT).round(), (y - space::DOT).round()),
                    Size::new(2.0 * space::DOT, 2.0 * space::DOT),
                ),
                border: Border {
                    color: edge,
                    width: space::BAR,
                    radius: radius.into(),
                },
                ..Quad::default()
            },
            Background::Color(Color { a: 1.0, ..fill }),
        );
    }
}

impl<'a, M: 'a> From<Rail> for Element<'a, M> {
    fn from(rail: Rail) -> Self {
        Self::new(rail)
    }
}
