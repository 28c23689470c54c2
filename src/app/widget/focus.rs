//! Focus: who has it, how it looks, and where it is.

use crate::app::theme;
use crate::app::theme::space;
use iced::advanced::renderer::{Quad, Renderer as _};
use iced::advanced::widget::operation::Focusable;
use iced::advanced::widget::{Id, Operation};
use iced::{Background, Border, Color, Rectangle};

/// Whether a widget of ours has the focus.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Focus(pub bool);

impl Focusable for Focus {
    fn is_focused(&self) -> bool {
        self.0
    }

    fn focus(&mut self) {
        self.0 = true;
    }

    fn unfocus(&mut self) {
        self.0 = false;
    }
}

/// Draws the outline of what has the focus: two pixels of accent with two pixels of air.
pub fn ring(renderer: &mut iced::Renderer, theme: &iced::Theme, around: Rectangle) {
    renderer.fill_quad(
        Quad {
            bounds: around.expand(space::AIR + space::BAR),
            border: Border {
                color: theme::colors(theme).accent,
                width: space::BAR,
                radius: (space::CORNER + space::AIR).into(),
            },
            ..Quad::default()
        },
        Background::Color(Color::TRANSPARENT),
    );
}

/// Finds the widget that has the focus, among those that it is shown.
#[derive(Debug, Default)]
pub struct Find {
    /// Where the focused widget is.
    pub found: Option<Rectangle>,
}

impl<T> Operation<T> for Find {
    fn traverse(&mut self, operate: &mut dyn FnMut(&mut dyn Operation<T>)) {
        operate(self);
    }

    fn focusable(&mut self, _id: Option<&Id>, bounds: Rectangle, state: &mut dyn Focusable) {
        if state.is_focused() {
            self.found = Some(bounds);
        }
    }
}
