//! Something that can be pressed: with the pointer, or with Enter or the space bar when it has
//! the focus.

use crate::app::theme::button::{self, Hover, Look};
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::focus::{self, Focus};
use iced::advanced::layout::{self, Layout};
use iced::advanced::renderer::{self, Quad, Renderer as _};
use iced::advanced::widget::{Id, Operation, Tree, Widget, tree};
use iced::advanced::{Clipboard, Shell, mouse};
use iced::keyboard::{self, key};
use iced::{Border, Event, Length, Padding, Rectangle, Size, Vector, touch};

/// Something that can be pressed.
pub struct Press<'a, M> {
    content: Element<'a, M>,
    on_press: Option<M>,
    look: Look,
    id: Option<Id>,
    padding: Padding,
    width: Length,
}

/// Words that can be pressed.
pub fn words<'a, M: Clone + 'a>(words: impl Into<String>, on_press: M) -> Press<'a, M> {
    Press::new(text::plain(words.into(), text::SANS), on_press)
}

/// The words that are most likely wanted next.
pub fn main<'a, M: Clone + 'a>(words: impl Into<String>, on_press: M) -> Press<'a, M> {
    Press::new(text::plain(words.into(), text::STRONG), on_press).look(Look::Main)
}

impl<'a, M: Clone + 'a> Press<'a, M> {
    /// Makes something that can be pressed.
    pub fn new(content: impl Into<Element<'a, M>>, on_press: M) -> Self {
        Self {
            content: content.into(),
            on_press: Some(on_press),
            look: Look::Quiet,
            id: None,
            padding: Padding::from(space::AIR + space::BAR),
            width: Length::Shrink,
        }
    }

    /// The same, for another purpose.
    #[must_use]
    pub fn look(mut self, look: Look) -> Self {
        self.look = look;
        self
    }

    /// The same, but only if something can be done by it.
    #[must_use]
    pub fn only_if(mut self, can: bool) -> Self {
        if !can {
            self.on_press = None;
        }
        self
    }

    /// The same, with a name by which it can be given the focus.
    #[must_use]
    pub fn id(mut self, id: impl Into<Id>) -> Self {
        self.id = Some(id.into());
        self
    }

    /// The same, as wide as there is room.
    #[must_use]
    pub fn fill(mut self) -> Self {
        self.width = Length::Fill;
        self
    }
}

#[derive(Debug, Default)]
struct State {
    focus: Focus,
    is_hovered: bool,
    is_pressed: bool,
}

impl<'a, M: Clone + 'a> Widget<M, iced::Theme, iced::Renderer> for Press<'a, M> {
    fn tag(&self) -> tree::Tag {
        tree::Tag::of::<State>()
    }

    fn state(&self) -> tree::State {
        tree::State::new(State::default())
    }

    fn children(&self) -> Vec<Tree> {
        vec![Tree::new(&self.content)]
    }

    fn diff(&self, tree: &mut Tree) {
        tree.diff_children(std::slice::from_ref(&self.content));
    }

    fn size(&self) -> Size<Length> {
        Size::new(self.width, Length::Shrink)
    }

    fn layout(
        &mut self,
        tree: &mut Tree,
        renderer: &iced::Renderer,
        limits: &layout::Limits,
    ) -> layout::Node {
        layout::padded(limits, self.width, Length::Shrink, self.padding, |limits| {
            self.content
                .as_widget_mut()
                .layout(&mut tree.children[0], renderer, limits)
        })
    }

    fn operate(
        &mut self,
        tree: &mut Tree,
        layout: Layout<'_>,
        renderer: &iced::Renderer,
        operation: &mut dyn Operation,
    ) {
        if self.on_press.is_some() {
            let state = tree.state.downcast_mut::<State>();
            operation.focusable(self.id.as_ref(), layout.bounds(), &mut state.focus);
        }
        operation.container(self.id.as_ref(), layout.bounds());
        operation.traverse(&mut |operation| {
            self.content.as_widget_mut().operate(
                &mut tree.children[0],
                layout.child(0),
                renderer,
                operation,
            );
        });
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
        let Some(on_press) = &self.on_press else {
            state.focus = Focus(false);
            return;
        };
        let is_over = cursor.is_over(layout.bounds().intersection(viewport).unwrap_or_default());
        match event {
            Event::Mouse(mouse::Event::ButtonPressed(mouse::Button::Left))
            | Event::Touch(touch::Event::FingerPressed { .. }) => {
                state.is_pressed = is_over;
                if state.focus.0 != is_over {
                    state.focus = Focus(is_over);
                    shell.request_redraw();
                }
                if is_over {
                    shell.capture_event();
                }
            }
            Event::Mouse(mouse::Event::ButtonReleased(mouse::Button::Left))
            | Event::Touch(touch::Event::FingerLifted { .. })
                if std::mem::take(&mut state.is_pressed) && is_over =>
            {
                shell.publish(on_press.clone());
                shell.capture_event();
            }
            Event::Keyboard(keyboard::Event::KeyPressed { key, modifiers, .. })
                if state.focus.0
                    && modifiers.is_empty()
                    && matches!(
                        key,
                        keyboard::Key::Named(key::Named::Enter | key::Named::Space)
                    )
                    && !shell.is_event_captured() =>
            {
                shell.publish(on_press.clone());
                shell.capture_event();
            }
            Event::Mouse(mouse::Event::CursorMoved { .. } | mouse::Event::CursorLeft)
                if is_over != state.is_hovered =>
            {
                state.is_hovered = is_over;
                shell.request_redraw();
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
        // Asked now and not remembered: a page that scrolls moves things away from the pointer.
        let shown = layout.bounds().intersection(viewport).unwrap_or_default();
        let hover = match (&self.on_press, cursor.is_over(shown)) {
            (None, _) => Hover::Off,
            (Some(_), true) => Hover::Over,
            (Some(_), false) => Hover::Away,
        };
        let style = button::style(theme, self.look, hover);
        if let Some(ground) = style.ground {
            renderer.fill_quad(
                Quad {
                    bounds: layout.bounds(),
                    border: Border {
                        radius: space::CORNER.into(),
                        ..Border::default()
                    },
                    ..Quad::default()
                },
                ground,
            );
        }
        self.content.as_widget().draw(
            &tree.children[0],
            renderer,
            theme,
            &renderer::Style {
                text_color: style.text,
            },
            layout.child(0),
            cursor,
            viewport,
        );
        if state.focus.0 {
            // The padding has room for ring and air, so that no neighbour clips them.
            let inside = layout.bounds().shrink(space::AIR + space::BAR);
            focus::ring(renderer, theme, inside);
        }
    }

    fn mouse_interaction(
        &self,
        _tree: &Tree,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        viewport: &Rectangle,
        _renderer: &iced::Renderer,
    ) -> mouse::Interaction {
        let shown = layout.bounds().intersection(viewport).unwrap_or_default();
        if self.on_press.is_some() && cursor.is_over(shown) {
            mouse::Interaction::Pointer
        } else {
            mouse::Interaction::None
        }
    }

    fn overlay<'b>(
        &'b mut self,
        tree: &'b mut Tree,
        layout: Layout<'b>,
        renderer: &iced::Renderer,
        viewport: &Rectangle,
        translation: Vector,
    ) -> Option<iced::advanced::overlay::Element<'b, M, iced::Theme, iced::Renderer>> {
        self.content.as_widget_mut().overlay(
            &mut tree.children[0],
            layout.child(0),
            renderer,
            viewport,
            translation,
        )
    }
}

impl<'a, M: Clone + 'a> From<Press<'a, M>> for Element<'a, M> {
    fn from(press: Press<'a, M>) -> Self {
        Self::new(press)
    }
}
