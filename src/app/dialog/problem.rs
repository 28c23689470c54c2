//! A problem: what is the case, where, what would mend it, and the ways out.

use crate::app::dialog::FIELD;
use crate::app::theme::button::Look;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::base::problem::Problem;
use iced::Length;
use iced::widget::{Column, Row, space as gap};
use std::path::PathBuf;

/// What happens to the dialog.
#[derive(Clone, Debug)]
pub enum Message {
    /// The details are copied.
    Copy,
    /// A way out is taken.
    Take(usize),
    /// It has been read.
    Done,
}

/// A way out of a problem.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Way {
    /// Another study is looked for.
    LookFor,
    /// The study is taken off the list of those that were open lately.
    Forget(PathBuf),
    /// The open study is saved under another name.
    SaveAs,
    /// A study is started from this table.
    StartFrom(PathBuf),
}

impl Way {
    const fn words(&self) -> &'static str {
        match self {
            Self::LookFor => "Look for a study",
            Self::Forget(_) => "Take it off the list",
            Self::SaveAs => "Save as",
            Self::StartFrom(_) => "Start from it as a table",
        }
    }
}

/// A problem that is told, with its ways out.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Told {
    /// The problem.
    pub problem: Problem,
    /// The ways out, beside going on.
    pub ways: Vec<Way>,
}

impl From<Problem> for Told {
    fn from(problem: Problem) -> Self {
        Self {
            problem,
            ways: Vec::new(),
        }
    }
}

/// The problem as it is told.
#[must_use]
pub fn view(told: &Told) -> Element<'_, Message> {
    let problem = &told.problem;
    let mut parts = Column::new().spacing(space::SMALL);
    if !problem.place.is_nowhere() {
        parts = parts.push(text::quiet(problem.place.to_string()));
    }
    parts = parts.push(text::prose(problem.found.as_str()));
    for instruction in &problem.mend {
        parts = parts.push(text::body(instruction.as_str()));
    }
    let mut line = Row::new()
        .spacing(space::SMALL)
        .push(gap().width(Length::Fill));
    if problem.details.is_some() {
        line = line.push(press::words("Copy details", Message::Copy));
    }
    for (at, way) in told.ways.iter().enumerate() {
        line = line.push(press::words(way.words(), Message::Take(at)).look(Look::Accent));
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
