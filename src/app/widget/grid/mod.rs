//! A grid of which only what can be seen is asked for and drawn.
//!
//! It scrolls by whole rows and columns, so that no value is cut and the toolkit's clipping
//! mask is seldom refilled; head line and name column stay. All of it lies in one layer, whose
//! bounds differ by an invisible amount with the scroll position (see `widget/layer.rs`).

mod draw;
mod source;
mod view;

pub use crate::app::widget::grid::source::{Align, Condition, Did, Field, Show, Source, StandsOut};

use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::focus::Focus;
use crate::app::widget::grid::view::View;
use iced::advanced::layout::{self, Layout};
use iced::advanced::renderer;
use iced::advanced::widget::{Id, Operation, Tree, Widget, tree};
use iced::advanced::{Clipboard, Shell, clipboard, mouse};
use iced::keyboard::{self, key};
use iced::{Event, Length, Rectangle, Size};
use std::time::{Duration, Instant};

/// What is copied at most, in bytes: larger clippings stall the reader.
const CLIPPING: usize = 2 << 20;
/// How many rows a turn of the wheel by one line goes.
const WHEEL_ROWS: f32 = 3.0;
/// How many columns a sideways turn of the wheel by one line goes.
const WHEEL_COLUMNS: f32 = 1.0;
/// The narrowest and the widest a column gets.
const WIDTHS: (f32, f32) = (56.0, 220.0);
/// Two presses within this time open a value.
const TWICE: Duration = Duration::from_millis(400);

/// A grid.
pub struct Grid<'a, M> {
    source: &'a dyn Source,
    height: f32,
    on: Option<Box<dyn Fn(Did) -> M + 'a>>,
    on_row: Option<Box<dyn Fn(usize) -> M + 'a>>,
    show: Show,
    id: Option<Id>,
    stands_out: StandsOut,
}

impl<'a, M> Grid<'a, M> {
    /// A grid that is at most this high.
    #[must_use]
    pub fn new(source: &'a dyn Source, height: f32) -> Self {
        Self {
            source,
            height,
            on: None,
            on_row: None,
            stands_out: StandsOut::default(),
            show: Show::default(),
            id: None,
        }
    }

    /// The same, that tells what is done in it.
    #[must_use]
    pub fn on(mut self, message: impl Fn(Did) -> M + 'a) -> Self {
        self.on = Some(Box::new(message));
        self
    }

    /// The same, that tells when a row is pressed by its name, or opened.
    #[must_use]
    pub fn on_row(mut self, message: impl Fn(usize) -> M + 'a) -> Self {
        self.on_row = Some(Box::new(message));
        self
    }

    /// The same, in which a row or a column stands out. It is brought into view once.
    #[must_use]
    pub fn stands_out(mut self, stands_out: StandsOut) -> Self {
        self.stands_out = stands_out;
        self
    }

    /// The same, showing a column.
    #[must_use]
    pub fn show(mut self, show: Show) -> Self {
        self.show = show;
        self
    }

    /// The same, with a name by which it can be given the focus.
    #[must_use]
    pub fn id(mut self, id: impl Into<Id>) -> Self {
        self.id = Some(id.into());
        self
    }

    fn head_height(&self) -> f32 {
        if self.source.has_remarks() {
            space::ROW + text::SMALL_LINE
        } else {
            space::ROW
        }
    }
}

/// A field by its row and column.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
struct At {
    row: usize,
    column: usize,
}

/// Which bar is being dragged.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Bar {
    Rows,
    Columns,
}

#[derive(Debug, Default)]
enum Drag {
    #[default]
    None,
    Selection,
    Bar(Bar),
}

#[derive(Debug, Default)]
struct State {
    focus: Focus,
    /// Where each column begins, and where the last ends, from the left of the body.
    starts: Vec<f32>,
    /// What the longest fields of each column have behind the place of the decimal mark.
    tails: Vec<f32>,
    /// How wide the last column would like to be.
    last_width: f32,
    names: f32,
    measured: Option<(u64, usize, usize)>,
    first: At,
    /// What is left of wheel turns that were no whole row or column.
    rest: (f32, f32),
    cursor: Option<At>,
    anchor: At,
    hovered_head: Option<usize>,
    drag: Drag,
    last_press: Option<(Instant, At)>,
    served: u64,
    is_shifted: bool,
    stood_out: StandsOut,
}

impl<'a, M> Grid<'a, M> {
    /// The selected fields: first and last row, first and last column.
    fn selection(state: &State) -> Option<(At, At)> {
        let cursor = state.cursor?;
        let low = At {
            row: cursor.row.min(state.anchor.row),
            column: cursor.column.min(state.anchor.column),
        };
        let high = At {
            row: cursor.row.max(state.anchor.row),
            column: cursor.column.max(state.anchor.column),
        };
        Some((low, high))
    }

    /// The selection with its names, as tab-separated text.
    fn clipping(&self, state: &State) -> Option<String> {
        let (low, high) = Self::selection(state)?;
        if low == high {
            return Some(self.source.field(low.row, low.column).text.into_owned());
        }
        let mut text = self.source.corner().into_owned();
        for column in low.column..=high.column {
            text.push('\t');
            text.push_str(&self.source.column(column));
        }
        for row in low.row..=high.row {
            text.push('\n');
            text.push_str(&self.source.row(row));
            for column in low.column..=high.column {
                text.push('\t');
                text.push_str(&self.source.field(row, column).text);
            }
            if text.len() > CLIPPING {
                return None;
            }
        }
        Some(text)
    }

    /// Moves the cursor by the keyboard. Returns whether the key meant something.
    fn steer(&self, state: &mut State, view: View, named: key::Named, command: bool) -> bool {
        let (n_rows, n_columns) = (self.source.n_rows(), self.source.n_columns());
        if n_rows == 0 || n_columns == 0 {
            return false;
        }
        let mut at = state.cursor.unwrap_or(state.first);
        let page = ((view.body.height / space::ROW) as usize).max(2) - 1;
        match named {
            key::Named::ArrowUp => at.row = at.row.saturating_sub(1),
            key::Named::ArrowDown => at.row = (at.row + 1).min(n_rows - 1),
            key::Named::ArrowLeft => at.column = at.column.saturating_sub(1),
            key::Named::ArrowRight => at.column = (at.column + 1).min(n_columns - 1),
            key::Named::PageUp => at.row = at.row.saturating_sub(page),
            key::Named::PageDown => at.row = (at.row + page).min(n_rows - 1),
            key::Named::Home => {
                at.column = 0;
                if command {
                    at.row = 0;
                }
            }
            key::Named::End => {
                at.column = n_columns - 1;
                if command {
                    at.row = n_rows - 1;
                }
            }
            _ => return false,
        }
        state.cursor = Some(at);
        if !state.is_shifted {
            state.anchor = at;
        }
        self.show_at(state, view, at);
        true
    }
}

impl<'a, M: 'a> Widget<M, iced::Theme, iced::Renderer> for Grid<'a, M> {
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
        self.measure(state);
        self.fit_last(state, limits.max().width - state.names - space::SMALL);
        let head = self.head_height();
        let rows = ((self.height - head - space::SMALL) / space::ROW).floor();
        let rows = rows.max(1.0).min(self.source.n_rows().max(1) as f32);
        let height = head + rows * space::ROW + space::SMALL;
        let size = Size::new(limits.max().width, height.min(limits.max().height));
        if self.show.serial != state.served {
            state.served = self.show.serial;
            if self.show.column < self.source.n_columns() {
                let at = At {
                    row: self.show.row.unwrap_or(state.first.row),
                    column: self.show.column,
                };
                state.cursor = Some(at);
                state.anchor = at;
                let view = self.view(state, Rectangle::with_size(size));
                let last = self.last_first(state, view);
                state.first.column = at.column.min(last.column);
                self.show_at(state, view, at);
            }
        }
        if self.stands_out != state.stood_out {
            state.stood_out = self.stands_out;
            let at = At {
                row: self.stands_out.row.unwrap_or(state.first.row),
                column: self.stands_out.column.unwrap_or(state.first.column),
            };
            if at.row < self.source.n_rows() && at.column < self.source.n_columns() {
                let view = self.view(state, Rectangle::with_size(size));
                self.show_at(state, view, at);
            }
        }
        layout::Node::new(size)
    }

    fn operate(
        &mut self,
        tree: &mut Tree,
        layout: Layout<'_>,
        _renderer: &iced::Renderer,
        operation: &mut dyn Operation,
    ) {
        let state = tree.state.downcast_mut::<State>();
        operation.focusable(self.id.as_ref(), layout.bounds(), &mut state.focus);
    }

    fn update(
        &mut self,
        tree: &mut Tree,
        event: &Event,
        layout: Layout<'_>,
        cursor: mouse::Cursor,
        _renderer: &iced::Renderer,
        clipboard: &mut dyn Clipboard,
        shell: &mut Shell<'_, M>,
        viewport: &Rectangle,
    ) {
        let state = tree.state.downcast_mut::<State>();
        let bounds = layout.bounds();
        let view = self.view(state, bounds);
        let shown = bounds.intersection(viewport).unwrap_or_default();
        let tell = |shell: &mut Shell<'_, M>, did: Did| {
            if let Some(on) = &self.on {
                shell.publish(on(did));
            }
            match (did, &self.on_row) {
                (Did::Row(row) | Did::Opened { row, column: _ }, Some(on_row)) => {
                    shell.publish(on_row(row));
                }
                (Did::Row(_) | Did::Opened { .. } | Did::At { .. } | Did::Head(_), _) => {}
            }
        };
        match event {
            Event::Mouse(mouse::Event::WheelScrolled { delta }) if cursor.is_over(shown) => {
                let (x, y) = match delta {
                    mouse::ScrollDelta::Lines { x, y } => (-x * WHEEL_COLUMNS, -y * WHEEL_ROWS),
                    mouse::ScrollDelta::Pixels { x, y } => (-x / WIDTHS.0, -y / space::ROW),
                };
                let (x, y) = if state.is_shifted && x == 0.0 {
                    (y, 0.0)
                } else {
                    (x, y)
                };
                state.rest.0 += x;
                state.rest.1 += y;
                let whole = (state.rest.0.trunc(), state.rest.1.trunc());
                state.rest = (state.rest.0.fract(), state.rest.1.fract());
                if self.scroll(state, view, whole.1 as isize, whole.0 as isize) {
                    shell.request_redraw();
                    shell.capture_event();
                } else if whole == (0.0, 0.0) {
                    shell.capture_event();
                }
            }
            Event::Mouse(mouse::Event::ButtonPressed(mouse::Button::Left)) => {
                let Some(point) = cursor.position_over(shown) else {
                    if state.focus.0 {
                        state.focus = Focus(false);
                        shell.request_redraw();
                    }
                    return;
                };
                state.focus = Focus(true);
                shell.capture_event();
                shell.request_redraw();
                let right = view.body.x + view.body.width;
                let bottom = view.body.y + view.body.height;
                if point.x >= right {
                    state.drag = Drag::Bar(Bar::Rows);
                    self.drag_bar(state, view, Bar::Rows, point);
                } else if point.y >= bottom {
                    state.drag = Drag::Bar(Bar::Columns);
                    self.drag_bar(state, view, Bar::Columns, point);
                } else if let Some(at) = self.at(state, view, point) {
                    if point.y < view.body.y {
                        if point.x >= view.body.x {
                            tell(shell, Did::Head(at.column));
                        }
                    } else if point.x < view.body.x {
                        tell(shell, Did::Row(at.row));
                    } else {
                        if !state.is_shifted {
                            state.anchor = at;
                        }
                        state.cursor = Some(at);
                        state.drag = Drag::Selection;
                        #[expect(
                            clippy::disallowed_methods,
                            reason = "two presses are one only if they follow each other quickly"
                        )]
                        let now = Instant::now();
                        let was = state.last_press.replace((now, at));
                        let is_second = was.is_some_and(|(then, there)| {
                            there == at && now.duration_since(then) < TWICE
                        });
                        let (row, column) = (at.row, at.column);
                        tell(
                            shell,
                            if is_second {
                                Did::Opened { row, column }
                            } else {
                                Did::At { row, column }
                            },
                        );
                    }
                }
            }
            Event::Mouse(mouse::Event::ButtonReleased(mouse::Button::Left)) => {
                state.drag = Drag::None;
            }
            Event::Mouse(mouse::Event::CursorMoved { position }) => match state.drag {
                Drag::Bar(bar) => {
                    self.drag_bar(state, view, bar, *position);
                    shell.request_redraw();
                }
                Drag::Selection => {
                    let at = self.at(state, view, *position);
                    if at.is_some() && at != state.cursor {
                        state.cursor = at;
                        if let Some(at) = at {
                            self.show_at(state, view, at);
                        }
                        shell.request_redraw();
                    }
                }
                Drag::None => {
                    let head = Rectangle {
                        y: bounds.y,
                        height: self.head_height(),
                        ..view.body
                    };
                    let over =
                        self.on.is_some() && cursor.is_over(shown) && head.contains(*position);
                    let hovered = if over {
                        self.at(state, view, *position).map(|at| at.column)
                    } else {
                        None
                    };
                    if hovered != state.hovered_head {
                        state.hovered_head = hovered;
                        shell.request_redraw();
                    }
                }
            },
            Event::Keyboard(keyboard::Event::ModifiersChanged(modifiers)) => {
                state.is_shifted = modifiers.shift();
            }
            Event::Keyboard(keyboard::Event::KeyPressed { key, modifiers, .. })
                if state.focus.0 && !shell.is_event_captured() =>
            {
                state.is_shifted = modifiers.shift();
                match key.as_ref() {
                    keyboard::Key::Character("c") if modifiers.command() => {
                        if let Some(text) = self.clipping(state) {
                            clipboard.write(clipboard::Kind::Standard, text);
                        }
                        shell.capture_event();
                    }
                    keyboard::Key::Character("a") if modifiers.command() => {
                        state.anchor = At::default();
                        state.cursor = Some(At {
                            row: self.source.n_rows().saturating_sub(1),
                            column: self.source.n_columns().saturating_sub(1),
                        });
                        shell.capture_event();
                        shell.request_redraw();
                    }
                    keyboard::Key::Named(key::Named::Enter) => {
                        if let Some(at) = state.cursor {
                            let (row, column) = (at.row, at.column);
                            tell(shell, Did::Opened { row, column });
                            shell.capture_event();
                        }
                    }
                    keyboard::Key::Named(named) => {
                        let before = state.cursor;
                        if self.steer(state, view, named, modifiers.command()) {
                            shell.capture_event();
                            shell.request_redraw();
                            if let Some(at) = state.cursor
                                && before != state.cursor
                            {
                                let (row, column) = (at.row, at.column);
                                tell(shell, Did::At { row, column });
                            }
                        }
                    }
                    keyboard::Key::Character(_) | keyboard::Key::Unidentified => {}
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
        _cursor: mouse::Cursor,
        viewport: &Rectangle,
    ) {
        let state = tree.state.downcast_ref::<State>();
        self.paint(state, renderer, theme, layout.bounds(), viewport);
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
        if !cursor.is_over(shown) {
            mouse::Interaction::None
        } else if state.hovered_head.is_some() {
            mouse::Interaction::Pointer
        } else {
            mouse::Interaction::Idle
        }
    }
}

impl<'a, M: 'a> From<Grid<'a, M>> for Element<'a, M> {
    fn from(grid: Grid<'a, M>) -> Self {
        Self::new(grid)
    }
}
