//! A file to be read and put on the shelf.

use crate::app::disk::{self, Wanted};
use crate::app::editor::place::{self, Place};
use crate::app::editor::{Action, FIELD};
use crate::app::run;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::base::work::Work;
use crate::eval::reread::{Changes, changes};
use crate::study::settings::data::Data;
use iced::widget::{Column, column, row};
use iced::{Alignment, Task};
use std::path::PathBuf;
use std::sync::Arc;

/// What happens to the file.
#[derive(Clone, Debug)]
pub enum Message {
    /// About the place where it lies.
    Place(place::Message),
    /// It has been read: from where, what, and what differs from the earlier one.
    Read(PathBuf, Box<Result<Found, Problem>>),
    /// A file that differs is taken.
    Accept,
    /// The earlier file stays.
    Keep,
}

/// A file that has been read: its bytes, and what differs from the earlier one.
type Found = (Arc<[u8]>, Option<Changes>);

/// The table that a newer file would replace.
#[derive(Clone, Debug)]
pub struct Earlier {
    /// The settings of its Data cell.
    pub data: Data,
    /// Its position among the tables.
    pub at: usize,
    /// Its bytes.
    pub bytes: Arc<[u8]>,
}

/// A newer file that has been read and not yet been taken.
#[derive(Clone, Debug)]
struct Newer {
    path: PathBuf,
    bytes: Arc<[u8]>,
    sentences: Vec<String>,
}

/// A file that is being chosen.
#[derive(Clone, Debug)]
pub struct File {
    place: Place,
    is_reading: bool,
    earlier: Option<Arc<Earlier>>,
    newer: Option<Box<Newer>>,
}

impl File {
    /// Begins in a folder.
    pub fn new(folder: PathBuf) -> (Self, Task<Message>) {
        let (place, task) = Place::read(Wanted::Table, folder);
        let file = Self {
            place,
            is_reading: false,
            earlier: None,
            newer: None,
        };
        (file, task.map(Message::Place))
    }

    /// What differs from this table is shown before a file is taken for it.
    pub fn replaces(&mut self, earlier: Earlier) {
        self.earlier = Some(Arc::new(earlier));
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
            Message::Read(path, read) => {
                self.is_reading = false;
                match *read {
                    Ok((bytes, Some(changes))) if !changes.is_none() => {
                        self.newer = Some(Box::new(Newer {
                            path,
                            bytes,
                            sentences: changes.sentences(),
                        }));
                        Action::None
                    }
                    Ok((bytes, _)) => Action::Take { path, bytes },
                    Err(problem) => {
                        self.place.refuse(problem);
                        Action::None
                    }
                }
            }
            Message::Accept => match self.newer.take() {
                Some(newer) => Action::Take {
                    path: newer.path,
                    bytes: newer.bytes,
                },
                None => Action::None,
            },
            Message::Keep => {
                self.newer = None;
                Action::None
            }
        }
    }

    /// Reads a file off the window's thread.
    pub fn read(&mut self, path: PathBuf) -> Task<Message> {
        self.is_reading = true;
        let earlier = self.earlier.clone();
        run::off_thread(move || {
            let read = crate::store::read_file(&path).map(|bytes| {
                let bytes: Arc<[u8]> = bytes.into();
                let found = earlier.and_then(|earlier| differs(&earlier, &bytes));
                (bytes, found)
            });
            Message::Read(path, Box::new(read))
        })
    }

    /// The path, and what lies in the folder.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        if let Some(newer) = &self.newer {
            let sentences = newer
                .sentences
                .iter()
                .map(|sentence| text::body(sentence.as_str()).into());
            return column![
                Column::with_children(sentences).spacing(space::TIGHT),
                text::quiet("Nothing has been taken yet; the study keeps the earlier file."),
                row![
                    press::main("Take the newer file", Message::Accept),
                    press::words("Keep the earlier file", Message::Keep),
                ]
                .spacing(space::SMALL)
                .align_y(Alignment::Center),
            ]
            .spacing(space::SMALL)
            .into();
        }
        let place = self.place.view(FIELD, "Take", space::LIST);
        let mut parts = column![place.map(Message::Place)].spacing(space::SMALL);
        if self.is_reading {
            parts = parts.push(text::quiet("The file is being read."));
        }
        parts.into()
    }
}

/// What differs between the earlier table and new bytes; `None` where the new ones hold no table
/// that could be compared, which evaluating the cell then says.
fn differs(earlier: &Earlier, bytes: &[u8]) -> Option<Changes> {
    let work = Work::unattended();
    changes(
        &earlier.data,
        earlier.at,
        &earlier.bytes,
        bytes,
        Threads::all(),
        &work,
    )
    .ok()?
    .ok()
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
