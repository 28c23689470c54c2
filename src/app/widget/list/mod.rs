//! A page of cells of which only those that can be seen are built, each in a layer of its own.
//!
//! The toolkit has no such list, and its keyed column keeps state by position. This one keeps a
//! tree for each cell by its id, remembers measured heights, and stands by the cell at the top
//! of the view when a cell above it changes its height. A layer for each cell keeps the
//! damage of a redraw inside the cell.

mod settle;
mod state;

use crate::app::theme;
use crate::app::theme::space;
use crate::app::widget::Element;
use crate::app::widget::focus;
use crate::app::widget::layer;
use crate::app::widget::list::state::State;
use iced::advanced::layout::{self, Layout};
use iced::advanced::renderer::{self, Quad, Renderer as _};
use iced::advanced::widget::{Operation, Tree, Widget, tree};
use iced::advanced::{Clipboard, Shell, mouse, overlay};
use iced::keyboard::{self, key};
use iced::{Background, Border, Event, Length, Point, Rectangle, Size, Vector, window};
use std::collections::BTreeMap;

/// Names a cell of the list for as long as it lives.
pub type Key = u64;

/// How far a turn of the wheel by one line goes.
const LINE: f32 = 60.0;
/// How near the focused thing may come to the edge of the view.
const EDGE: f32 = 24.0;
/// How wide the bar at the right is.
const SCROLLER: f32 = 6.0;

/// A request to bring a cell to the top of the view, obeyed once.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct GoTo {
    /// Which cell.
    pub key: Key,
    /// Counts the requests; 0 is none.
    pub serial: u64,
}

/// A scrolling list of cells.
pub struct List<'a, M> {
    keys: Vec<Key>,
    build: Box<dyn Fn(usize) -> Element<'a, M> + 'a>,
    built: BTreeMap<usize, Element<'a, M>>,
    go_to: GoTo,
}

impl<'a, M> List<'a, M> {
    /// A list of cells. `build` makes the element of the cell at a position, and is asked only
    /// for cells that can be seen, their neighbours, and the one with the focus.
    pub fn new(keys: Vec<Key>, build: impl Fn(usize) -> Element<'a, M> + 'a) -> Self {
        Self {
            keys,
            build: Box::new(build),
            built: BTreeMap::new(),
            go_to: GoTo::default(),
        }
    }

    /// The same list, brought to a cell.
    #[must_use]
    pub fn go_to(mut self, go_to: GoTo) -> Self {
        self.go_to = go_to;
        self
    }
}

impl<'a, M: 'a> List<'a, M> {
    fn reveal(&mut self, tree: &mut Tree, layout: Layout<'_>, renderer: &iced::Renderer) {
        let state = tree.state.downcast_mut::<State>();
        let mut find = focus::Find::default();
        let mut holder = None;
        for (&at, child) in state.laid.iter().zip(layout.children()) {
            let Some(element) = self.built.get_mut(&at) else {
                continue;
            };
            let Some(tree) = state.trees.get_mut(&self.keys[at]) else {
                continue;
            };
            let operation: &mut dyn Operation = &mut find;
            element
                .as_widget_mut()
                .operate(tree, child, renderer, operation);
            if find.found.is_some() {
                holder = Some(at);
                break;
            }
        }
        state.focused = holder.map(|at| self.keys[at]);
        if !std::mem::take(&mut state.reveals) {
            return;
        }
        if let Some(target) = find.found {
            let view = layout.bounds();
            if target.y < view.y + EDGE {
                state.offset -= view.y + EDGE - target.y;
            } else if target.y + target.height > view.y + view.height - EDGE {
                let down = target.y + target.height - (view.y + view.height - EDGE);
                state.offset += down.min(target.y - view.y - EDGE).max(0.0);
            }
        }
    }

    /// Where the bar at the right is, if there is more than can be seen.
    fn scroller(&self, state: &State, bounds: Rectangle) -> Option<Rectangle> {
        let total = state.total(&self.keys);
        if total <= bounds.height {
            return None;
        }
        let length = (bounds.height * bounds.height / total).max(space::WIDE);
        let share = (state.scrolled(&self.keys) / (total - bounds.height)).clamp(0.0, 1.0);
        Some(Rectangle::new(
            Point::new(
                bounds.x + bounds.width - SCROLLER - space::AIR,
                bounds.y + share * (bounds.height - length),
            ),
            Size::new(SCROLLER, length),
        ))
    }
}

impl<'a, M: 'a> Widget<M, iced::Theme, iced::Renderer> for List<'a, M> {
    fn tag(&self) -> tree::Tag {
        tree::Tag::of::<State>()
    }

    fn state(&self) -> tree::State {
        tree::State::new(State::default())
    }

    fn diff(&self, tree: &mut Tree) {
        // The trees of the cells are in the state; what is no longer in the list is forgotten.
        let state = tree.state.downcast_mut::<State>();
        state.trees.retain(|key, _| self.keys.contains(key));
        state.heights.retain(|key, _| self.keys.contains(key));
    }

    fn size(&self) -> Size<Length> {
        Size::new(Length::Fill, Length::Fill)
    }

    fn layout(
        &mut self,
        tree: &mut Tree,
        renderer: &iced::Renderer,
        limits: &layout::Limits,
    ) -> layout::Node {
        let size = limits.max();
        let state = tree.state.downcast_mut::<State>();
        if (state.width - size.width).abs() > f32::EPSILON {
            state.width = size.width;
            state.heights.clear();
        }
        state.height = size.height;
        if self.keys.is_empty() {
            state.laid.clear();
            return layout::Node::new(size);
        }
        // The anchor is found again by its id, whatever was inserted or removed above it.
        match self.keys.iter().position(|key| *key == state.anchor) {
            Some(at) => state.anchor_at = at,
            None => {
                state.anchor_at = state.anchor_at.min(self.keys.len() - 1);
                state.offset = 0.0;
            }
        }
        if self.go_to.serial != state.served {
            state.served = self.go_to.serial;
            if let Some(at) = self.keys.iter().position(|key| *key == self.go_to.key) {
                state.anchor_at = at;
                state.offset = 0.0;
            }
        }
        let placed = self.settle(state, renderer);
        state.laid = placed.keys().copied().collect();
        let nodes = placed
            .into_values()
            .map(|(y, node)| node.move_to(Point::new(0.0, y.round())))
            .collect();
        layout::Node::with_children(size, nodes)
    }

    fn operate(
        &mut self,
        tree: &mut Tree,
        layout: Layout<'_>,
        renderer: &iced::Renderer,
        operation: &mut dyn Operation,
    ) {
        operation.container(None, layout.bounds());
        let state = tree.state.downcast_mut::<State>();
        let built = &mut self.built;
        let keys = &self.keys;
        operation.traverse(&mut |operation| {
            for (at, child) in state.laid.iter().zip(layout.children()) {
                let (Some(element), Some(tree)) =
                    (built.get_mut(at), state.trees.get_mut(&keys[*at]))
                else {
                    continue;
                };
                element
                    .as_widget_mut()
                    .operate(tree, child, renderer, operation);
            }
        });
        // The operation may have moved the focus; the next redraw looks where it is.
        state.reveals = true;
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
        let bounds = layout.bounds();
        let view = bounds.intersection(viewport).unwrap_or_default();
        {
            let state = tree.state.downcast_mut::<State>();
            let inner = if cursor.is_over(view) && state.drag.is_none() {
                cursor
            } else {
                mouse::Cursor::Unavailable
            };
            for (at, child) in state.laid.iter().zip(layout.children()) {
                let (Some(element), Some(tree)) =
                    (self.built.get_mut(at), state.trees.get_mut(&self.keys[*at]))
                else {
                    continue;
                };
                element
                    .as_widget_mut()
                    .update(tree, event, child, inner, renderer, clipboard, shell, &view);
            }
        }
        if self.keys.is_empty() {
            return;
        }
        match event {
            Event::Mouse(mouse::Event::ButtonPressed(_)) => {
                let state = tree.state.downcast_mut::<State>();
                let scroller = self.scroller(state, bounds);
                if let (Some(bar), Some(at)) = (scroller, cursor.position_over(view))
                    && at.x >= bar.x - space::TIGHT
                    && !shell.is_event_captured()
                {
                    if !bar.contains(Point::new(bar.x, at.y)) {
                        let share = (at.y - bounds.y) / bounds.height;
                        let total = state.total(&self.keys);
                        state.scroll_to(&self.keys, share * total - bounds.height / 2.0);
                        shell.invalidate_layout();
                    }
                    state.drag = Some(at.y);
                    shell.capture_event();
                    shell.request_redraw();
                } else {
                    // A press may have given the focus to a cell.
                    self.reveal(tree, layout, renderer);
                }
            }
            Event::Mouse(mouse::Event::ButtonReleased(_)) => {
                tree.state.downcast_mut::<State>().drag = None;
            }
            Event::Mouse(mouse::Event::CursorMoved { position }) => {
                let state = tree.state.downcast_mut::<State>();
                let scroller = self.scroller(state, bounds);
                if let (Some(from), Some(bar)) = (state.drag, scroller) {
                    let total = state.total(&self.keys);
                    let room = (bounds.height - bar.height).max(1.0);
                    let by = (position.y - from) * (total - bounds.height) / room;
                    let to = (state.scrolled(&self.keys) + by).clamp(0.0, total - bounds.height);
                    state.scroll_to(&self.keys, to);
                    state.drag = Some(position.y);
                    shell.invalidate_layout();
                    shell.request_redraw();
                } else {
                    let is_near = scroller.is_some_and(|bar| {
                        cursor.is_over(view) && position.x >= bar.x - space::SMALL
                    });
                    if is_near != state.is_hovered {
                        state.is_hovered = is_near;
                        shell.request_redraw();
                    }
                }
            }
            Event::Mouse(mouse::Event::WheelScrolled { delta })
                if cursor.is_over(view) && !shell.is_event_captured() =>
            {
                let state = tree.state.downcast_mut::<State>();
                let by = match delta {
                    mouse::ScrollDelta::Lines { y, .. } => -y * LINE,
                    mouse::ScrollDelta::Pixels { y, .. } => -y,
                };
                if by != 0.0 {
                    state.offset += by;
                    shell.capture_event();
                    shell.invalidate_layout();
                    shell.request_redraw();
                }
            }
            Event::Keyboard(keyboard::Event::KeyPressed {
                key: keyboard::Key::Named(named),
                modifiers,
                ..
            }) if !shell.is_event_captured() && modifiers.is_empty() => {
                let state = tree.state.downcast_mut::<State>();
                let page = bounds.height - LINE;
                let by = match named {
                    key::Named::PageDown => page,
                    key::Named::PageUp => -page,
                    key::Named::ArrowDown => LINE,
                    key::Named::ArrowUp => -LINE,
                    key::Named::Home => {
                        state.scroll_to(&self.keys, 0.0);
                        shell.invalidate_layout();
                        shell.request_redraw();
                        return;
                    }
                    key::Named::End => {
                        let total = state.total(&self.keys);
                        state.scroll_to(&self.keys, total);
                        shell.invalidate_layout();
                        shell.request_redraw();
                        return;
                    }
                    _ => return,
                };
                state.offset += by;
                shell.capture_event();
                shell.invalidate_layout();
                shell.request_redraw();
            }
            Event::Window(window::Event::RedrawRequested(_))
                if tree.state.downcast_ref::<State>().reveals =>
            {
                self.reveal(tree, layout, renderer);
                shell.invalidate_layout();
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
        style: &renderer::Style,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        viewport: &Rectangle,
    ) {
        let state = tree.state.downcast_ref::<State>();
        let bounds = layout.bounds();
        let Some(view) = bounds.intersection(viewport) else {
            return;
        };
        let cursor = if cursor.is_over(view) {
            cursor
        } else {
            mouse::Cursor::Unavailable
        };
        layer::anew(renderer, view, state.nudge(layout));
        for (at, child) in state.laid.iter().zip(layout.children()) {
            let (Some(element), Some(tree)) =
                (self.built.get(at), state.trees.get(&self.keys[*at]))
            else {
                continue;
            };
            if let Some(seen) = child.bounds().intersection(&view) {
                renderer.with_layer(seen, |renderer| {
                    element
                        .as_widget()
                        .draw(tree, renderer, theme, style, child, cursor, &seen);
                });
            }
        }
        let bar = self.scroller(state, bounds);
        layer::standing(renderer, bar, |renderer, bar| {
            let colors = theme::colors(theme);
            let color = if state.is_hovered || state.drag.is_some() {
                colors.quiet
            } else {
                colors.hairline
            };
            {
                renderer.fill_quad(
                    Quad {
                        bounds: bar,
                        border: Border {
                            radius: space::CORNER.into(),
                            ..Border::default()
                        },
                        ..Quad::default()
                    },
                    Background::Color(color),
                );
            }
        });
    }

    fn mouse_interaction(
        &self,
        tree: &Tree,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        viewport: &Rectangle,
        renderer: &iced::Renderer,
    ) -> mouse::Interaction {
        let state = tree.state.downcast_ref::<State>();
        let view = layout.bounds().intersection(viewport).unwrap_or_default();
        if !cursor.is_over(view) {
            return mouse::Interaction::None;
        }
        state
            .laid
            .iter()
            .zip(layout.children())
            .filter_map(|(at, child)| {
                let element = self.built.get(at)?;
                let tree = state.trees.get(&self.keys[*at])?;
                Some(
                    element
                        .as_widget()
                        .mouse_interaction(tree, child, cursor, &view, renderer),
                )
            })
            .max()
            .unwrap_or_default()
    }

    fn overlay<'b>(
        &'b mut self,
        tree: &'b mut Tree,
        layout: Layout<'b>,
        renderer: &iced::Renderer,
        viewport: &Rectangle,
        translation: Vector,
    ) -> Option<overlay::Element<'b, M, iced::Theme, iced::Renderer>> {
        let state = tree.state.downcast_mut::<State>();
        let mut trees: BTreeMap<Key, &mut Tree> = state
            .trees
            .iter_mut()
            .map(|(key, tree)| (*key, tree))
            .collect();
        let mut built: BTreeMap<usize, &mut Element<'a, M>> = self
            .built
            .iter_mut()
            .map(|(at, cell)| (*at, cell))
            .collect();
        for (at, child) in state.laid.iter().zip(layout.children()) {
            let (Some(element), Some(tree)) = (built.remove(at), trees.remove(&self.keys[*at]))
            else {
                continue;
            };
            let overlay =
                element
                    .as_widget_mut()
                    .overlay(tree, child, renderer, viewport, translation);
            if overlay.is_some() {
                return overlay;
            }
        }
        None
    }
}

impl<'a, M: 'a> From<List<'a, M>> for Element<'a, M> {
    fn from(list: List<'a, M>) -> Self {
        Self::new(list)
    }
}
