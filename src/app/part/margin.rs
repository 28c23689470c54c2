//! The margin: caveats, set beside the cell that they concern.

use crate::app::theme::{container, space, text};
use crate::app::widget::Element;
use crate::eval::caveat::Caveat;
use iced::widget::{Column, column, container as boxed, row, space as gap};
use iced::{Length, Padding};

/// The notes of one cell, below each other.
#[must_use]
pub fn notes<'a, M: 'a>(caveats: &[Caveat]) -> Element<'a, M> {
    let notes = caveats.iter().map(note);
    Column::with_children(notes)
        .spacing(space::GAP + space::TIGHT)
        .max_width(space::NOTE)
        .padding(Padding {
            top: space::SMALL,
            bottom: space::GAP,
            ..Padding::ZERO
        })
        .into()
}

fn note<'a, M: 'a>(caveat: &Caveat) -> Element<'a, M> {
    let bar = boxed(gap())
        .width(space::BAR + space::HAIR)
        .height(Length::Fill)
        .style(container::severity(caveat.severity));
    let words = column![
        row![
            text::heading(caveat.heading.clone()).width(Length::Fill),
            text::quiet(caveat.severity.word()),
        ]
        .spacing(space::SMALL),
        text::body(caveat.text.clone()),
    ]
    .width(Length::Fill);
    // The bar takes the height of the words beside it.
    row![bar, words]
        .spacing(space::SMALL)
        .height(Length::Shrink)
        .into()
}
