//! Asks what to hand over, and where to.

use crate::app::dialog::FIELD;
use crate::app::theme::button::Look;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::base::problem::Problem;
use crate::eval::caveat::Caveat;
use iced::widget::{Column, column, row, space as gap, text_input};
use iced::{Alignment, Length};
use std::path::PathBuf;

/// What happens to the dialog.
#[derive(Clone, Debug)]
pub enum Message {
    /// The folder and name are being typed.
    Typed(String),
    /// The reason for going on despite a stop is being typed.
    Despite(String),
    /// The workbook is wanted or not.
    Workbook,
    /// The write-up is wanted or not.
    WriteUp,
    /// They are written.
    Write,
    /// They are not wanted any more.
    Leave,
}

/// What is wanted of the exports.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Wish {
    /// Where the workbook goes.
    pub workbook: Option<PathBuf>,
    /// Where the write-up goes.
    pub write_up: Option<PathBuf>,
    /// Why standing stops are overridden.
    pub despite: Option<String>,
}

/// What the dialog wants of the window.
#[derive(Debug)]
pub enum Action {
    /// Nothing.
    None,
    /// The exports are written.
    Write(Wish),
    /// The dialog is closed.
    Leave,
}

/// What is being handed over.
#[derive(Clone, Debug)]
pub struct HandOver {
    path: String,
    has_workbook: bool,
    has_write_up: bool,
    despite: String,
    stops: Vec<Caveat>,
    is_due: bool,
    /// Why the last attempt failed.
    problem: Option<Problem>,
}

impl HandOver {
    /// Begins with both exports, beside the study.
    #[must_use]
    pub fn new(begin: PathBuf, stops: Vec<Caveat>, is_due: bool) -> Self {
        Self {
            path: begin.display().to_string(),
            has_workbook: true,
            has_write_up: true,
            despite: String::new(),
            stops,
            is_due,
            problem: None,
        }
    }

    /// What stood against writing is told, and nothing that was typed is lost.
    pub fn refuse(&mut self, problem: Problem) {
        self.problem = Some(problem);
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Typed(path) => {
                self.path = path;
                self.problem = None;
            }
            Message::Despite(despite) => self.despite = despite,
            Message::Workbook => self.has_workbook = !self.has_workbook,
            Message::WriteUp => self.has_write_up = !self.has_write_up,
            Message::Leave => return Action::Leave,
            Message::Write if self.can_write() => return Action::Write(self.wish()),
            Message::Write => {}
        }
        Action::None
    }

    fn can_write(&self) -> bool {
        let is_free = self.stops.is_empty() || !self.despite.trim().is_empty();
        (self.has_workbook || self.has_write_up) && !self.path.trim().is_empty() && is_free
    }

    fn wish(&self) -> Wish {
        let path = PathBuf::from(self.path.trim());
        let despite = self.despite.trim();
        Wish {
            workbook: self.has_workbook.then(|| with_ending(&path, ".xlsx")),
            write_up: self.has_write_up.then(|| with_ending(&path, ".md")),
            despite: (!despite.is_empty()).then(|| despite.to_owned()),
        }
    }

    /// What is wanted, and where to.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let wanted = |is_wanted: bool, words: &str, message: Message| {
            let (mark, look) = if is_wanted {
                ("with", Look::Chosen)
            } else {
                ("without", Look::Row)
            };
            press::words(format!("{mark} {words}"), message)
                .look(look)
                .fill()
        };
        let field = text_input("folder and name", &self.path)
            .id(FIELD)
            .font(text::SANS)
            .size(text::BODY)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Write);
        let mut parts = Column::new()
            .spacing(space::SMALL + space::TIGHT)
            .push(text::title("Hand over"))
            .push(
                column![
                    wanted(
                        self.has_workbook,
                        "the workbook, for people who do not program",
                        Message::Workbook
                    ),
                    wanted(
                        self.has_write_up,
                        "the methods write-up, with its figures in a folder beside it",
                        Message::WriteUp
                    ),
                ]
                .spacing(space::TIGHT),
            )
            .push(text::quiet("Folder and name, without an ending:"))
            .push(field);
        if let Some(problem) = &self.problem {
            parts = parts.push(text::wrong(problem.to_string()));
        }
        if self.is_due {
            parts = parts.push(text::attention(
                "Some cells are not up to date; what is written is what the page shows.",
            ));
        }
        if !self.stops.is_empty() {
            for stop in &self.stops {
                parts = parts
                    .push(text::wrong(stop.heading.as_str()))
                    .push(text::body(stop.text.as_str()));
            }
            parts = parts.push(
                text_input(
                    "why it is handed over nevertheless; this is printed in it",
                    &self.despite,
                )
                .font(text::SANS)
                .size(text::BODY)
                .style(input::line)
                .on_input(Message::Despite)
                .on_submit(Message::Write),
            );
        }
        parts
            .push(
                row![
                    gap().width(Length::Fill),
                    press::words("Leave", Message::Leave),
                    press::main("Write", Message::Write).only_if(self.can_write()),
                ]
                .spacing(space::SMALL)
                .align_y(Alignment::Center),
            )
            .into()
    }
}

/// A path with an ending. A point inside the name is part of the name.
fn with_ending(path: &std::path::Path, ending: &str) -> PathBuf {
    let mut name = path.as_os_str().to_owned();
    if !path.display().to_string().ends_with(ending) {
        name.push(ending);
    }
    PathBuf::from(name)
}
