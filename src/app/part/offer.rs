//! What can be added to a study: one cell of each kind, and every question.

use crate::app::session::new_cell;
use crate::app::theme::button::Look;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::study::Study;
use crate::study::cell::{Cell, CellId, Kind};
use crate::study::link::Link;
use crate::study::prose::Prose;
use crate::study::settings::Settings;
use crate::study::settings::compare::Compare;
use crate::study::settings::data::Data;
use crate::study::settings::fit::Fit;
use crate::study::settings::prepare::Prepare;
use crate::study::settings::question::{Ask, Question};
use crate::study::settings::score::Score;
use iced::widget::{Column, Row, column, row};
use iced::{Alignment, Length};

/// What happens to the offer.
#[derive(Clone, Debug)]
pub enum Message {
    /// A cell of a kind is added.
    Add(Kind),
    /// A question of the catalogue is added.
    Ask(usize),
    /// Nothing is added.
    Leave,
}

/// The offer, as it stands at a place of the page.
#[must_use]
pub fn view<'a>() -> Element<'a, Message> {
    let kinds = Kind::ALL.into_iter().filter(|kind| *kind != Kind::Question);
    let kinds = kinds.map(|kind| {
        press::words(kind.name(), Message::Add(kind))
            .look(Look::Accent)
            .into()
    });
    let questions = Ask::catalogue().into_iter().enumerate().map(|(at, ask)| {
        press::words(ask.words(), Message::Ask(at))
            .look(Look::Accent)
            .into()
    });
    column![
        row![
            text::quiet("Add").width(Length::Fill),
            press::words("Leave", Message::Leave)
        ]
        .align_y(Alignment::Center),
        Row::with_children(kinds).spacing(space::SMALL).wrap(),
        text::quiet("or ask"),
        Column::with_children(questions),
    ]
    .spacing(space::TIGHT)
    .into()
}

/// The cell that a message adds at a place. It draws on the nearest cell above that fits, or else
/// on the first that does.
#[must_use]
pub fn cell(study: &Study, at: usize, message: &Message) -> Option<Cell> {
    let nearest = |kinds: &[Kind]| -> Link {
        let fits = |cell: &&Cell| kinds.contains(&cell.settings.kind());
        let above = study.cells()[..at.min(study.cells().len())]
            .iter()
            .rev()
            .find(fits);
        Link(
            above
                .or_else(|| study.cells().iter().find(fits))
                .map(|cell| cell.id),
        )
    };
    let samples = || nearest(&[Kind::Prepare, Kind::Data]);
    let fit = || nearest(&[Kind::Fit]);
    let (wish, settings) = match message {
        Message::Leave => return None,
        Message::Ask(nth) => {
            let ask = Ask::catalogue().into_iter().nth(*nth)?;
            let title = ask.title();
            (title, Settings::Question(Question { fit: fit(), ask }))
        }
        Message::Add(kind) => match kind {
            Kind::Data => ("data", Settings::Data(Data::default())),
            Kind::Prepare => (
                "preparation",
                Settings::Prepare(Prepare {
                    input: samples(),
                    ..Prepare::default()
                }),
            ),
            Kind::Fit => {
                let input = samples();
                let mut fit = Fit {
                    input,
                    ..Fit::default()
                };
                if let Some(kind) = study.outcome_kind(input) {
                    fit.spread_evenly(kind);
                }
                ("fit", Settings::Fit(fit))
            }
            Kind::Question => {
                let ask = Ask::catalogue().into_iter().next()?;
                let title = ask.title();
                (title, Settings::Question(Question { fit: fit(), ask }))
            }
            Kind::Compare => {
                let fits = study
                    .cells()
                    .iter()
                    .filter(|cell| cell.settings.kind() == Kind::Fit)
                    .map(|cell| Link::to(cell.id))
                    .collect();
                ("comparison", Settings::Compare(Compare { fits }))
            }
            Kind::Score => (
                "scores",
                Settings::Score(Score {
                    fit: fit(),
                    ..Score::default()
                }),
            ),
            Kind::Prose => ("prose", Settings::Prose(Prose::default())),
        },
    };
    Some(new_cell(study, wish, settings))
}

/// A copy of a cell.
#[must_use]
pub fn copy(study: &Study, id: CellId) -> Option<Cell> {
    let cell = study.cell(id)?;
    Some(new_cell(study, &cell.title, cell.settings.clone()))
}
