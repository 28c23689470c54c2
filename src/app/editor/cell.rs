//! A cell to draw on.

use crate::app::editor::{Action, FIELD};
use crate::app::theme::button::Look;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press::Press;
use crate::study::Study;
use crate::study::cell::{CellId, Kind};
use crate::study::settings::slot::Value;
use iced::widget::{Column, row};

/// What happens to the cells.
#[derive(Clone, Debug)]
pub enum Message {
    /// One was taken.
    Took(CellId),
}

/// The cells that can be drawn on.
#[derive(Clone, Debug)]
pub struct CellEditor {
    cells: Vec<(CellId, Kind, String)>,
    present: Vec<CellId>,
}

impl CellEditor {
    /// The cells of these kinds, without the cell itself and those that draw on it.
    #[must_use]
    pub fn new(study: &Study, cell: CellId, kinds: &[Kind]) -> Self {
        let drawing = study.drawing_on(cell);
        let cells = study
            .cells()
            .iter()
            .filter(|other| {
                other.id != cell
                    && kinds.contains(&other.settings.kind())
                    && !drawing.contains(&other.id)
            })
            .map(|other| (other.id, other.settings.kind(), other.title.clone()))
            .collect();
        let present = study
            .cell(cell)
            .map(|cell| cell.settings.draws_on())
            .unwrap_or_default();
        Self { cells, present }
    }

    /// Takes a message in.
    #[must_use]
    pub fn update(message: Message) -> Action {
        match message {
            Message::Took(id) => Action::Commit(Value::Cell(Some(id))),
        }
    }

    /// The cells below each other.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        if self.cells.is_empty() {
            return text::quiet("There is no cell that this one could draw on; add one first.")
                .into();
        }
        let rows = self
            .cells
            .iter()
            .enumerate()
            .map(|(at, (id, kind, title))| {
                let look = if self.present.contains(id) {
                    Look::Chosen
                } else {
                    Look::Row
                };
                let words = row![text::quiet(kind.name()), text::body(title.as_str())]
                    .spacing(space::SMALL);
                let press = Press::new(words, Message::Took(*id)).look(look).fill();
                if at == 0 {
                    press.id(FIELD).into()
                } else {
                    press.into()
                }
            });
        Column::with_children(rows).into()
    }
}
