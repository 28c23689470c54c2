//! Asks for a study's file: typed in place, with what lies in the folder listed below it.

use crate::app::dialog::FIELD;
use crate::app::disk::{self, Wanted};
use crate::app::editor::place::{self, Place};
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::base::problem::Problem;
use iced::widget::{column, row, space as gap};
use iced::{Length, Task};
use std::path::{Path as FilePath, PathBuf};

/// What the path is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Purpose {
    /// A study is opened from it.
    Open,
    /// The study is saved to it.
    Save,
    /// A figure is written to it.
    Figure,
}

/// What happens to the path.
#[derive(Clone, Debug)]
pub enum Message {
    /// About the place.
    Place(place::Message),
    /// The file that is there is replaced.
    Replace,
    /// The path is not wanted any more.
    Leave,
}

/// What the dialog wants of the window.
#[derive(Debug)]
pub enum Action {
    /// Nothing.
    None,
    /// Something is done outside.
    Run(Task<Message>),
    /// The path was chosen.
    Take(PathBuf),
    /// The dialog is closed.
    Leave,
}

/// A path that is being chosen.
#[derive(Clone, Debug)]
pub struct Path {
    /// What it is for.
    pub purpose: Purpose,
    place: Place,
    /// The study's own file, which may be replaced without a question.
    own: Option<PathBuf>,
    /// A file that would be replaced, and the path that was chosen.
    over: Option<(PathBuf, PathBuf)>,
    /// Why the place is asked for.
    why: Option<Problem>,
}

impl Path {
    /// Begins at a path, or in the folder in which the program was started.
    pub fn new(
        purpose: Purpose,
        begin: Option<&FilePath>,
        wish: &str,
        why: Option<Problem>,
    ) -> (Self, Task<Message>) {
        let folder = begin
            .and_then(FilePath::parent)
            .filter(|folder| disk::is_folder(folder))
            .map_or_else(disk::start, FilePath::to_owned);
        let (place, task) = match (purpose, begin) {
            (Purpose::Save, Some(begin)) => Place::write(Wanted::Study, begin),
            (Purpose::Save, None) => Place::write(Wanted::Study, &folder.join(wish)),
            (Purpose::Figure, _) => Place::write(Wanted::Figure, &folder.join(wish)),
            (Purpose::Open, _) => Place::read(Wanted::Study, folder),
        };
        let dialog = Self {
            purpose,
            place,
            own: begin.map(FilePath::to_owned),
            over: None,
            why,
        };
        let focus = Task::batch([
            iced::widget::operation::focus(FIELD),
            iced::widget::operation::move_cursor_to_end(FIELD),
        ]);
        (dialog, Task::batch([task.map(Message::Place), focus]))
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Place(message) => {
                if matches!(message, place::Message::Typed(_) | place::Message::Took(_)) {
                    self.over = None;
                }
                match self.place.update(message) {
                    place::Action::None => Action::None,
                    place::Action::Run(task) => Action::Run(task.map(Message::Place)),
                    place::Action::Take(path) => self.take(path),
                }
            }
            Message::Replace => match self.over.take() {
                Some((_, path)) => Action::Take(path),
                None => Action::None,
            },
            Message::Leave => Action::Leave,
        }
    }

    fn take(&mut self, path: PathBuf) -> Action {
        let path = match (self.purpose, path.extension()) {
            (Purpose::Save, None) => path.with_extension("widefold"),
            (Purpose::Save | Purpose::Open | Purpose::Figure, _) => path,
        };
        let is_other = self.own.as_ref() != Some(&path) || self.why.is_some();
        let written = match (self.purpose, path.extension()) {
            (Purpose::Open, _) => Vec::new(),
            (Purpose::Save, _) | (Purpose::Figure, Some(_)) => vec![path.clone()],
            (Purpose::Figure, None) => vec![path.with_extension("svg"), path.with_extension("png")],
        };
        let there = written.into_iter().find(|path| disk::is_file(path));
        if let Some(there) = there.filter(|_| is_other) {
            self.over = Some((there, path));
            return Action::None;
        }
        Action::Take(path)
    }

    /// The path, and what lies in the folder.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let (title, done) = match self.purpose {
            Purpose::Open => ("Open a study", "Open"),
            Purpose::Save => ("Save the study as", "Save"),
            Purpose::Figure => ("Save the figure as", "Save"),
        };
        let mut parts = column![text::title(title)].spacing(space::SMALL + space::TIGHT);
        if let Some(why) = &self.why {
            parts = parts.push(text::wrong(why.found.as_str()));
            for instruction in &why.mend {
                parts = parts.push(text::body(instruction.as_str()));
            }
        }
        parts = parts.push(
            self.place
                .view(FIELD, done, space::LIST)
                .map(Message::Place),
        );
        if let Some((over, _)) = &self.over {
            parts = parts.push(
                row![
                    text::attention(format!("There is a file “{}” already.", disk::name(over)))
                        .width(Length::Fill),
                    press::words("Replace it", Message::Replace)
                        .look(crate::app::theme::button::Look::Attention),
                ]
                .spacing(space::SMALL)
                .align_y(iced::Alignment::Center),
            );
        }
        let forms = match self.purpose {
            Purpose::Open => None,
            Purpose::Save => Some(
                "A name that ends in .widefold keeps tables and results in one file; one that \
                 ends in .json is readable, and names its tables by path.",
            ),
            Purpose::Figure => Some(
                "A name that ends in .png gives a picture, one that ends in .svg a drawing, and \
                 one without an ending both.",
            ),
        };
        if let Some(forms) = forms {
            parts = parts.push(text::quiet(forms));
        }
        parts
            .push(
                row![
                    gap().width(Length::Fill),
                    press::words("Leave", Message::Leave),
                ]
                .spacing(space::SMALL),
            )
            .into()
    }
}
