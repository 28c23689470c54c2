//! A file: a path typed in place, with what lies in the folder listed below it.

use crate::app::disk::{self, Listing, Wanted};
use crate::app::editor::{Action, FIELD};
use crate::app::run;
use crate::app::theme::button::Look;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press::{self, Press};
use crate::base::problem::Problem;
use iced::widget::{Column, column, container, row, scrollable, text_input};
use iced::{Alignment, Length, Task};
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// What happens to the file.
#[derive(Clone, Debug)]
pub enum Message {
    /// The path is being typed.
    Typed(String),
    /// A folder was opened.
    Into(String),
    /// The folder above was opened.
    Up,
    /// A file was taken.
    Took(String),
    /// The path is as it should be.
    Done,
    /// A folder has been listed.
    Listed(Result<Listing, Problem>),
    /// A file has been read.
    Read(String, Result<Arc<[u8]>, Problem>),
}

/// A file that is being chosen.
#[derive(Clone, Debug)]
pub struct File {
    path: String,
    listing: Listing,
    problem: Option<Problem>,
    is_reading: bool,
}

impl File {
    /// Begins in the folder in which the program was started.
    pub fn new() -> (Self, Task<Message>) {
        let folder = disk::start();
        let file = Self {
            path: shown(&folder),
            listing: Listing::default(),
            problem: None,
            is_reading: false,
        };
        (file, list(folder, Wanted::Table))
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Typed(path) => {
                self.path = path;
                self.problem = None;
                let folder = PathBuf::from(&self.path);
                if disk::is_folder(&folder) && folder != self.listing.folder {
                    return Action::Run(list(folder, Wanted::Table).map(super::Message::File));
                }
                Action::None
            }
            Message::Into(name) => self.go(self.listing.folder.join(name)),
            Message::Up => match self.listing.folder.parent() {
                Some(above) => self.go(above.to_owned()),
                None => Action::None,
            },
            Message::Took(name) => self.read(self.listing.folder.join(name)),
            Message::Done => {
                let path = PathBuf::from(self.path.trim());
                if disk::is_folder(&path) {
                    self.go(path)
                } else {
                    self.read(path)
                }
            }
            Message::Listed(Ok(listing)) => {
                self.listing = listing;
                Action::None
            }
            Message::Listed(Err(problem)) => {
                self.problem = Some(problem);
                Action::None
            }
            Message::Read(name, Ok(bytes)) => Action::Take { name, bytes },
            Message::Read(_, Err(problem)) => {
                self.is_reading = false;
                self.problem = Some(problem);
                Action::None
            }
        }
    }

    fn go(&mut self, folder: PathBuf) -> Action {
        self.path = shown(&folder);
        Action::Run(list(folder, Wanted::Table).map(super::Message::File))
    }

    fn read(&mut self, path: PathBuf) -> Action {
        self.is_reading = true;
        self.problem = None;
        let task = run::off_thread(move || {
            let bytes = crate::store::read_file(&path).map(Into::into);
            Message::Read(disk::name(&path), bytes)
        });
        Action::Run(task.map(super::Message::File))
    }

    /// The path, and what lies in the folder.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let field = text_input("path of a file", &self.path)
            .id(FIELD)
            .font(text::SANS)
            .size(text::BODY)
            .width(Length::Fill)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Done);
        let mut parts = column![
            row![field, press::main("Take", Message::Done)]
                .spacing(space::SMALL)
                .align_y(Alignment::Center),
            listed(&self.listing, Message::Up, Message::Into, Message::Took),
        ]
        .spacing(space::SMALL);
        if self.is_reading {
            parts = parts.push(text::quiet("The file is being read."));
        }
        if let Some(problem) = &self.problem {
            parts = parts.push(text::wrong(problem.to_string()));
        }
        parts.into()
    }
}

/// A folder's path as it is typed: with a mark at its end.
#[must_use]
pub fn shown(folder: &Path) -> String {
    let mut path = folder.display().to_string();
    if !path.ends_with(std::path::MAIN_SEPARATOR) {
        path.push(std::path::MAIN_SEPARATOR);
    }
    path
}

/// Lists a folder off the window's thread.
pub fn list(folder: PathBuf, wanted: Wanted) -> Task<Message> {
    run::off_thread(move || Message::Listed(disk::list(&folder, wanted)))
}

/// A folder's contents, to be opened and taken.
pub fn listed<'a, M: Clone + 'a>(
    listing: &'a Listing,
    up: M,
    into: impl Fn(String) -> M,
    took: impl Fn(String) -> M,
) -> Element<'a, M> {
    let entry = |words: String, message: M, look: Look| -> Element<'a, M> {
        Press::new(text::plain(words, text::SANS), message)
            .look(look)
            .fill()
            .into()
    };
    let mut rows = Vec::new();
    if listing.folder.parent().is_some() {
        rows.push(entry("Folder above".to_owned(), up, Look::Quiet));
    }
    rows.extend(listing.folders.iter().map(|name| {
        let words = format!("{name}{}", std::path::MAIN_SEPARATOR);
        entry(words, into(name.clone()), Look::Quiet)
    }));
    rows.extend(
        listing
            .files
            .iter()
            .map(|name| entry(name.clone(), took(name.clone()), Look::Accent)),
    );
    container(
        scrollable(Column::with_children(rows))
            .direction(input::narrow())
            .style(input::scroller)
            .width(Length::Fill),
    )
    .max_height(space::LIST)
    .into()
}
