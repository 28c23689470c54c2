//! Something that is shown but may be out of reach: the page behind a dialog.

use crate::app::widget::Element;
use iced::advanced::layout::{self, Layout};
use iced::advanced::mouse;
use iced::advanced::renderer;
use iced::advanced::widget::{Operation, Tree, Widget, tree};
use iced::advanced::{Clipboard, Shell};
use iced::{Event, Length, Rectangle, Size};

/// Whether events and the focus reach an element.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Reach {
    /// They do.
    Within,
    /// They do not; it is only shown.
    Beyond,
}

/// An element that can be taken out of reach without losing its state.
pub struct Inert<'a, M>(Element<'a, M>, Reach);

impl<'a, M> Inert<'a, M> {
    /// An element within reach or beyond it.
    pub fn new(element: impl Into<Element<'a, M>>, reach: Reach) -> Self {
        Self(element.into(), reach)
    }
}

impl<'a, M: 'a> Widget<M, iced::Theme, iced::Renderer> for Inert<'a, M> {
    fn tag(&self) -> tree::Tag {
        self.0.as_widget().tag()
    }

    fn state(&self) -> tree::State {
        self.0.as_widget().state()
    }

    fn children(&self) -> Vec<Tree> {
        self.0.as_widget().children()
    }

    fn diff(&self, tree: &mut Tree) {
        self.0.as_widget().diff(tree);
    }

    fn size(&self) -> Size<Length> {
        self.0.as_widget().size()
    }

    fn layout(
        &mut self,
        tree: &mut Tree,
        renderer: &iced::Renderer,
        limits: &layout::Limits,
    ) -> layout::Node {
        self.0.as_widget_mut().layout(tree, renderer, limits)
    }

    fn operate(
        &mut self,
        tree: &mut Tree,
        layout: Layout<'_>,
        renderer: &iced::Renderer,
        operation: &mut dyn Operation,
    ) {
        if self.1 == Reach::Within {
            self.0
                .as_widget_mut()
                .operate(tree, layout, renderer, operation);
        }
    }

    fn update(
        &mut self,
        tree: &mut Tree,
        event: &Event,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        renderer: &iced::Renderer,
        clipboard: &mut dyn Clipboard,
        shell: &mut Shell<'_, M>,
        viewport: &Rectangle,
    ) {
        if self.1 == Reach::Within {
            self.0.as_widget_mut().update(
                tree, event, layout, cursor, renderer, clipboard, shell, viewport,
            );
        }
    }

    fn mouse_interaction(
        &self,
        tree: &Tree,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        viewport: &Rectangle,
        renderer: &iced::Renderer,
    ) -> mouse::Interaction {
        match self.1 {
            Reach::Within => self
                .0
                .as_widget()
                .mouse_interaction(tree, layout, cursor, viewport, renderer),
            Reach::Beyond => mouse::Interaction::None,
        }
    }

    fn draw(
        &self,
        tree: &Tree,
        renderer: &mut iced::Renderer,
        theme: &iced::Theme,
        style: &renderer::Style,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        viewport: &Rectangle,
    ) {
        let cursor = match self.1 {
            Reach::Within => cursor,
            Reach::Beyond => mouse::Cursor::Unavailable,
        };
        self.0
            .as_widget()
            .draw(tree, renderer, theme, style, layout, cursor, viewport);
    }
}

impl<'a, M: 'a> From<Inert<'a, M>> for Element<'a, M> {
    fn from(inert: Inert<'a, M>) -> Self {
        Self::new(inert)
    }
}
