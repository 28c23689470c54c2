//! A file to be read and put on the shelf.

use crate::app::disk::{self, Wanted};
use crate::app::editor::place::{self, Place};
use crate::app::editor::{Action, FIELD};
use crate::app::run;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::base::problem::Problem;
use iced::Task;
use iced::widget::column;
use std::path::PathBuf;
use std::sync::Arc;

/// What happens to the file.
#[derive(Clone, Debug)]
pub enum Message {
    /// About the place where it lies.
    Place(place::Message),
    /// It has been read: from where, and what.
    Read(PathBuf, Result<Arc<[u8]>, Problem>),
}

/// A file that is being chosen.
#[derive(Clone, Debug)]
pub struct File {
    place: Place,
    is_reading: bool,
}

impl File {
    /// Begins in a folder.
    pub fn new(folder: PathBuf) -> (Self, Task<Message>) {
        let (place, task) = Place::read(Wanted::Table, folder);
        let file = Self {
            place,
            is_reading: false,
        };
        (file, task.map(Message::Place))
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Place(message) => match self.place.update(message) {
                place::Action::None => Action::None,
                place::Action::Run(task) => {
                    Action::Run(task.map(|message| super::Message::File(Message::Place(message))))
                }
                place::Action::Take(path) => Action::Run(self.read(path).map(super::Message::File)),
            },
            Message::Read(path, Ok(bytes)) => Action::Take { path, bytes },
            Message::Read(_, Err(problem)) => {
                self.is_reading = false;
                self.place.refuse(problem);
                Action::None
            }
        }
    }

    /// Reads a file off the window's thread.
    pub fn read(&mut self, path: PathBuf) -> Task<Message> {
        self.is_reading = true;
        run::off_thread(move || {
            let bytes = crate::store::read_file(&path).map(Into::into);
            Message::Read(path, bytes)
        })
    }

    /// The path, and what lies in the folder.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let place = self.place.view(FIELD, "Take", space::LIST);
        let mut parts = column![place.map(Message::Place)].spacing(space::SMALL);
        if self.is_reading {
            parts = parts.push(text::quiet("The file is being read."));
        }
        parts.into()
    }
}

/// The folder in which a table of a study is looked for first: beside the study, else where the
/// program was started.
#[must_use]
pub fn beside(study: Option<&PathBuf>) -> PathBuf {
    study
        .and_then(|path| path.parent())
        .filter(|folder| disk::is_folder(folder))
        .map_or_else(disk::start, PathBuf::from)
}
