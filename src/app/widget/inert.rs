//! Something that is shown but cannot be reached: the page behind a dialog.

use crate::app::widget::Element;
use iced::advanced::layout::{self, Layout};
use iced::advanced::mouse;
use iced::advanced::renderer;
use iced::advanced::widget::{Tree, Widget, tree};
use iced::{Length, Rectangle, Size};

/// An element that neither events nor the focus reach.
pub struct Inert<'a, M>(Element<'a, M>);

impl<'a, M> Inert<'a, M> {
    /// Takes an element out of reach.
    pub fn new(element: impl Into<Element<'a, M>>) -> Self {
        Self(element.into())
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

    fn draw(
        &self,
        tree: &Tree,
        renderer: &mut iced::Renderer,
        theme: &iced::Theme,
        style: &renderer::Style,
        layout: Layout<'_>,
        _cursor: mouse::Cursor,
        viewport: &Rectangle,
    ) {
        let cursor = mouse::Cursor::Unavailable;
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
