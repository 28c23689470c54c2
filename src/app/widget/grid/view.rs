//! Where the fields of a grid lie, and which of them can be seen.

use crate::app::theme::{space, text};
use crate::app::widget::grid::{Align, At, Bar, Grid, State, WIDTHS, draw};
use crate::figure::font::Face;
use crate::figure::metrics;
use iced::{Point, Rectangle};

/// How many names are measured for the width of the name column.
const MEASURED: usize = 400;
/// How many fields of a column are measured for its width, spread over its rows.
const SAMPLED: usize = 12;
/// The widest that a last column of words gets.
const WIDEST: f32 = 640.0;
/// How many columns are few.
const FEW: usize = 4;

/// What of a grid can be seen.
#[derive(Clone, Copy, Debug)]
pub(super) struct View {
    /// The fields.
    pub(super) body: Rectangle,
    pub(super) n_rows: usize,
    pub(super) n_columns: usize,
}

impl<'a, M> Grid<'a, M> {
    pub(super) fn view(&self, state: &State, bounds: Rectangle) -> View {
        let head = self.head_height();
        let body = Rectangle {
            x: bounds.x + state.names,
            y: bounds.y + head,
            width: (bounds.width - state.names - space::SMALL).max(0.0),
            height: (bounds.height - head - space::SMALL).max(0.0),
        };
        let n_rows = ((body.height / space::ROW) as usize)
            .min(self.source.n_rows().saturating_sub(state.first.row));
        let from = state.starts.get(state.first.column).copied().unwrap_or(0.0);
        let n_columns = state
            .starts
            .iter()
            .skip(state.first.column + 1)
            .take_while(|end| **end - from <= body.width + 0.5)
            .count();
        View {
            body,
            n_rows,
            // A column that is wider than the body is cut, but seen.
            n_columns: n_columns
                .max(1)
                .min(self.source.n_columns().saturating_sub(state.first.column)),
        }
    }

    /// The last position to which it makes sense to scroll.
    pub(super) fn last_first(&self, state: &State, view: View) -> At {
        let rows = (view.body.height / space::ROW) as usize;
        let end = state.starts.last().copied().unwrap_or(0.0);
        let column = state
            .starts
            .partition_point(|start| end - *start > view.body.width + 0.5);
        At {
            row: self.source.n_rows().saturating_sub(rows.max(1)),
            column: column.min(self.source.n_columns().saturating_sub(1)),
        }
    }

    /// Scrolls by rows and columns as far as there are any. Returns whether anything moved.
    pub(super) fn scroll(
        &self,
        state: &mut State,
        view: View,
        rows: isize,
        columns: isize,
    ) -> bool {
        let last = self.last_first(state, view);
        let before = state.first;
        state.first.row = state.first.row.saturating_add_signed(rows).min(last.row);
        state.first.column = state
            .first
            .column
            .saturating_add_signed(columns)
            .min(last.column);
        before != state.first
    }

    pub(super) fn show_at(&self, state: &mut State, view: View, at: At) {
        let rows = ((view.body.height / space::ROW) as usize).max(1);
        if at.row < state.first.row {
            state.first.row = at.row;
        } else if at.row >= state.first.row + rows {
            state.first.row = at.row + 1 - rows;
        }
        if at.column < state.first.column {
            state.first.column = at.column;
        }
        let end = state.starts.get(at.column + 1).copied().unwrap_or(0.0);
        while state.first.column < at.column
            && end - state.starts[state.first.column] > view.body.width + 0.5
        {
            state.first.column += 1;
        }
    }

    pub(super) fn at(&self, state: &State, view: View, point: Point) -> Option<At> {
        let n_columns = self.source.n_columns();
        if self.source.n_rows() == 0 || n_columns == 0 {
            return None;
        }
        let row = ((point.y - view.body.y) / space::ROW).floor();
        let row = (state.first.row as f32 + row).max(0.0) as usize;
        let x = point.x - view.body.x + state.starts[state.first.column];
        let column = state.starts.partition_point(|start| *start <= x).max(1) - 1;
        Some(At {
            row: row.min(self.source.n_rows() - 1),
            column: column.min(n_columns - 1),
        })
    }

    /// How wide the fields of a column are before the decimal mark, and from there on.
    fn extent(&self, column: usize) -> (f32, f32) {
        let n_rows = self.source.n_rows();
        let align = self.source.align(column);
        let (mut before, mut tail) = (0.0_f32, 0.0_f32);
        for nth in 0..n_rows.min(SAMPLED) {
            let row = nth * n_rows / n_rows.min(SAMPLED);
            let field = self.source.field(row, column);
            let all = metrics::width(&field.text, Face::Sans, f64::from(text::SMALL)) as f32;
            let behind = match align {
                Align::Start => 0.0,
                Align::End => draw::tail(&field.text),
            };
            before = before.max(all - behind);
            tail = tail.max(behind);
        }
        (before, tail)
    }

    pub(super) fn measure(&self, state: &mut State) {
        let source = self.source;
        let key = (source.version(), source.n_rows(), source.n_columns());
        if state.measured == Some(key) {
            return;
        }
        state.measured = Some(key);
        let size = f64::from(text::SMALL);
        let mut start = 0.0;
        state.starts.clear();
        state.starts.reserve(source.n_columns() + 1);
        state.starts.push(0.0);
        state.tails.clear();
        state.tails.reserve(source.n_columns());
        for column in 0..source.n_columns() {
            let name = metrics::width(&source.column(column), Face::SansStrong, size) as f32;
            let (before, tail) = self.extent(column);
            let fields = before + tail;
            state.tails.push(tail);
            let remark = source.remark(column).map_or(0.0, |remark| {
                metrics::width(&remark, Face::Sans, size) as f32
            });
            let width = name.max(fields).max(remark) + 2.0 * space::SMALL;
            // Words in the last column have all the room that is left.
            let is_last = column + 1 == source.n_columns();
            let widest = if is_last && source.align(column) == Align::Start {
                WIDEST
            } else {
                WIDTHS.1
            };
            let width = width.clamp(WIDTHS.0, widest).round();
            state.last_width = width;
            start += width;
            state.starts.push(start);
        }
        let names = (0..source.n_rows().min(MEASURED))
            .map(|row| metrics::width(&source.row(row), Face::Sans, size))
            .fold(
                metrics::width(&source.corner(), Face::SansStrong, size),
                f64::max,
            );
        // Beside few columns there is room for long names.
        let widest = if source.n_columns() <= FEW {
            WIDEST / 2.0
        } else {
            WIDTHS.1
        };
        state.names = (names as f32 + 2.0 * space::SMALL)
            .clamp(WIDTHS.0, widest)
            .round();
        let last_row = source.n_rows().saturating_sub(1);
        let last_column = source.n_columns().saturating_sub(1);
        state.first.row = state.first.row.min(last_row);
        state.first.column = state.first.column.min(last_column);
        state.cursor = state
            .cursor
            .filter(|at| at.row <= last_row && at.column <= last_column);
    }

    /// A wide last column takes the room that is left, so that it can be seen whole.
    pub(super) fn fit_last(&self, state: &mut State, body: f32) {
        if let [.., start, end] = &mut state.starts[..] {
            let room = (body - *start).floor().max(WIDTHS.1);
            *end = *start + state.last_width.min(room);
        }
    }

    pub(super) fn bar(&self, state: &State, view: View, bar: Bar) -> Option<Rectangle> {
        let last = self.last_first(state, view);
        match bar {
            Bar::Rows => {
                let rows = (view.body.height / space::ROW).floor();
                let share = rows / self.source.n_rows().max(1) as f32;
                let length = (view.body.height * share).max(space::GAP);
                let at = state.first.row as f32 / last.row.max(1) as f32;
                (last.row > 0).then_some(Rectangle {
                    x: view.body.x + view.body.width + space::AIR,
                    y: view.body.y + at * (view.body.height - length),
                    width: space::TIGHT,
                    height: length,
                })
            }
            Bar::Columns => {
                let all = state.starts.last().copied().unwrap_or(1.0).max(1.0);
                let length = (view.body.width * view.body.width / all).max(space::GAP);
                let at = state.first.column as f32 / last.column.max(1) as f32;
                (last.column > 0).then_some(Rectangle {
                    x: view.body.x + at * (view.body.width - length),
                    y: view.body.y + view.body.height + space::AIR,
                    width: length,
                    height: space::TIGHT,
                })
            }
        }
    }

    pub(super) fn drag_bar(&self, state: &mut State, view: View, bar: Bar, point: Point) {
        let last = self.last_first(state, view);
        match bar {
            Bar::Rows => {
                let share = ((point.y - view.body.y) / view.body.height).clamp(0.0, 1.0);
                state.first.row = (share * last.row as f32).round() as usize;
            }
            Bar::Columns => {
                let share = ((point.x - view.body.x) / view.body.width).clamp(0.0, 1.0);
                state.first.column = (share * last.column as f32).round() as usize;
            }
        }
    }
}
