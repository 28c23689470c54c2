//! Dialogs: what is asked or told before the work goes on.

pub mod hand_over;
pub mod keys;
pub mod path;
pub mod problem;
pub mod unsaved;

use crate::app::theme::{container, space};
use crate::app::widget::Element;
use iced::Length;
use iced::widget::{container as boxed, opaque};

/// The name by which the first thing of a dialog is given the focus.
pub const FIELD: &str = "dialog field";

/// A dialog over the page.
#[must_use]
pub fn over<'a, M: 'a>(content: Element<'a, M>) -> Element<'a, M> {
    let sheet = boxed(content)
        .padding(space::WIDE - space::SMALL)
        .width(space::DIALOG)
        .style(container::sheet);
    opaque(
        boxed(sheet)
            .center(Length::Fill)
            .padding(space::GAP)
            .style(container::veil),
    )
}
