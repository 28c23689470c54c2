//! A problem: what is the case, where, and what would mend it.

use crate::app::dialog::FIELD;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::base::problem::Problem;
use iced::Length;
use iced::widget::{Column, row, space as gap};

/// What happens to the dialog.
#[derive(Clone, Debug)]
pub enum Message {
    /// The details are copied.
    Copy,
    /// It has been read.
    Done,
}

/// The problem as it is told.
#[must_use]
pub fn view(problem: &Problem) -> Element<'_, Message> {
    let mut parts = Column::new().spacing(space::SMALL);
    if !problem.place.is_nowhere() {
        parts = parts.push(text::quiet(problem.place.to_string()));
    }
    parts = parts.push(text::prose(problem.found.as_str()));
    for instruction in &problem.mend {
        parts = parts.push(text::body(instruction.as_str()));
    }
    let mut line = row![gap().width(Length::Fill)].spacing(space::SMALL);
    if problem.details.is_some() {
        line = line.push(press::words("Copy details", Message::Copy));
    }
    line = line.push(press::main("Go on", Message::Done).id(FIELD));
    parts.push(line).into()
}

/// The problem as it is copied to be sent to somebody.
#[must_use]
pub fn details(problem: &Problem) -> String {
    let details = problem.details.clone().unwrap_or_default();
    format!("{problem}\n{}: {details}", problem.code)
}
