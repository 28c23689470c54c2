//! The page that lists the keys.

use crate::app::dialog::FIELD;
use crate::app::shortcut;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use iced::Length;
use iced::widget::{Column, column, row, space as gap};

/// What happens to the page.
#[derive(Clone, Debug)]
pub enum Message {
    /// It has been read.
    Done,
}

/// All keys and what they do.
#[must_use]
pub fn view<'a>() -> Element<'a, Message> {
    let rows = shortcut::LISTED.iter().map(|(keys, what)| {
        row![
            text::heading(*keys).width(space::FIELD),
            text::body(*what).width(Length::Fill),
        ]
        .spacing(space::SMALL)
        .into()
    });
    column![
        text::title("Keys"),
        Column::with_children(rows).spacing(space::TIGHT),
        row![
            gap().width(Length::Fill),
            press::main("Go on", Message::Done).id(FIELD)
        ],
    ]
    .spacing(space::GAP)
    .into()
}
