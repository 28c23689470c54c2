//! Asks what becomes of changes that have not been saved.

use crate::app::dialog::FIELD;
use crate::app::theme::button::Look;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use iced::Length;
use iced::widget::{column, row, space as gap};

/// What was answered.
#[derive(Clone, Debug)]
pub enum Message {
    /// They are saved.
    Save,
    /// They are given up.
    GiveUp,
    /// The study stays open.
    Stay,
}

/// The question.
#[must_use]
pub fn view<'a>(title: &str) -> Element<'a, Message> {
    column![
        text::prose(format!("“{title}” has changes that have not been saved.")),
        row![
            gap().width(Length::Fill),
            press::words("Give the changes up", Message::GiveUp).look(Look::Attention),
            press::words("Stay", Message::Stay),
            press::main("Save", Message::Save).id(FIELD),
        ]
        .spacing(space::SMALL),
    ]
    .spacing(space::GAP)
    .into()
}
