//! Asks for a path: typed in place, with what lies in the folder listed below it.

use crate::app::dialog::FIELD;
use crate::app::disk::{self, Listing, Wanted};
use crate::app::editor::file;
use crate::app::run;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::base::problem::Problem;
use iced::widget::{column, row, space as gap, text_input};
use iced::{Length, Task};
use std::path::PathBuf;

/// What the path is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Purpose {
    /// A study is opened from it.
    Open,
    /// The study is saved to it.
    Save,
}

/// What happens to the path.
#[derive(Clone, Debug)]
pub enum Message {
    /// It is being typed.
    Typed(String),
    /// A folder was opened.
    Into(String),
    /// The folder above was opened.
    Up,
    /// A file was taken.
    Took(String),
    /// It is as it should be.
    Done,
    /// It is not wanted any more.
    Leave,
    /// A folder has been listed.
    Listed(Result<Listing, Problem>),
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
    path: String,
    listing: Listing,
    problem: Option<Problem>,
}

impl Path {
    /// Begins at a path, or in the folder in which the program was started.
    pub fn new(
        purpose: Purpose,
        begin: Option<&std::path::Path>,
        wish: &str,
    ) -> (Self, Task<Message>) {
        let folder = begin
            .and_then(std::path::Path::parent)
            .filter(|folder| disk::is_folder(folder))
            .map_or_else(disk::start, std::path::Path::to_owned);
        let path = match (purpose, begin) {
            (Purpose::Save, Some(begin)) => begin.display().to_string(),
            (Purpose::Save, None) => folder.join(wish).display().to_string(),
            (Purpose::Open, _) => file::shown(&folder),
        };
        let dialog = Self {
            purpose,
            path,
            listing: Listing::default(),
            problem: None,
        };
        let focus = Task::batch([
            iced::widget::operation::focus(FIELD),
            iced::widget::operation::move_cursor_to_end(FIELD),
        ]);
        (dialog, Task::batch([list(folder), focus]))
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Typed(path) => {
                self.path = path;
                self.problem = None;
                let folder = PathBuf::from(&self.path);
                if disk::is_folder(&folder) && folder != self.listing.folder {
                    return Action::Run(list(folder));
                }
                Action::None
            }
            Message::Into(name) => self.go(self.listing.folder.join(name)),
            Message::Up => match self.listing.folder.parent() {
                Some(above) => self.go(above.to_owned()),
                None => Action::None,
            },
            Message::Took(name) => {
                let path = self.listing.folder.join(name);
                match self.purpose {
                    Purpose::Open => Action::Take(path),
                    // A name that is there already is written into the field, not over the file.
                    Purpose::Save => {
                        self.path = path.display().to_string();
                        Action::None
                    }
                }
            }
            Message::Done => {
                let path = PathBuf::from(self.path.trim());
                if disk::is_folder(&path) {
                    return self.go(path);
                }
                if self.path.trim().is_empty() {
                    return Action::None;
                }
                let path = match (self.purpose, path.extension()) {
                    (Purpose::Save, None) => path.with_extension("widefold"),
                    (Purpose::Save | Purpose::Open, _) => path,
                };
                Action::Take(path)
            }
            Message::Leave => Action::Leave,
            Message::Listed(Ok(listing)) => {
                self.listing = listing;
                Action::None
            }
            Message::Listed(Err(problem)) => {
                self.problem = Some(problem);
                Action::None
            }
        }
    }

    fn go(&mut self, folder: PathBuf) -> Action {
        let name = match self.purpose {
            Purpose::Open => None,
            Purpose::Save => std::path::Path::new(&self.path)
                .file_name()
                .map(std::ffi::OsStr::to_owned),
        };
        self.path = match name {
            Some(name) => folder.join(name).display().to_string(),
            None => file::shown(&folder),
        };
        Action::Run(list(folder))
    }

    /// The path, and what lies in the folder.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let (title, done) = match self.purpose {
            Purpose::Open => ("Open a study", "Open"),
            Purpose::Save => ("Save the study as", "Save"),
        };
        let field = text_input("path", &self.path)
            .id(FIELD)
            .font(text::SANS)
            .size(text::BODY)
            .width(Length::Fill)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Done);
        let mut parts = column![
            text::title(title),
            field,
            file::listed(&self.listing, Message::Up, Message::Into, Message::Took),
        ]
        .spacing(space::SMALL + space::TIGHT);
        if let Some(problem) = &self.problem {
            parts = parts.push(text::wrong(problem.to_string()));
        }
        parts
            .push(
                row![
                    gap().width(Length::Fill),
                    press::words("Leave", Message::Leave),
                    press::main(done, Message::Done),
                ]
                .spacing(space::SMALL),
            )
            .into()
    }
}

fn list(folder: PathBuf) -> Task<Message> {
    run::off_thread(move || Message::Listed(disk::list(&folder, Wanted::Study)))
}
