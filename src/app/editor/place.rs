//! A place on the disk: a path typed in place, with what lies in the folder listed below it.

use crate::app::disk::{self, Listing, Picked, Wanted};
use crate::app::run;
use crate::app::theme::button::Look;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press::{self, Press};
use crate::base::problem::Problem;
use iced::widget::{Column, column, container, row, scrollable, text_input};
use iced::{Alignment, Length, Task};
use std::path::{Path, PathBuf};

/// What the place is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Way {
    /// A file is taken from it.
    Read,
    /// A file is put there.
    Write,
}

/// What happens to the place.
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
    /// The desktop's own dialog is asked.
    Ask,
    /// It has answered.
    Picked(Picked),
}

/// What is wanted of those who asked for the place.
#[derive(Debug)]
pub enum Action {
    /// Nothing.
    None,
    /// Something is done outside.
    Run(Task<Message>),
    /// This is the place.
    Take(PathBuf),
}

/// A place that is being chosen.
#[derive(Clone, Debug)]
pub struct Place {
    wanted: Wanted,
    way: Way,
    path: String,
    listing: Listing,
    problem: Option<Problem>,
    desktop: Desktop,
}

/// How it stands with the desktop's own dialog.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Desktop {
    /// It may be asked.
    Free,
    /// It is open.
    Asked,
    /// The desktop has none.
    Missing,
}

impl Place {
    /// Looks for a file, beginning in a folder.
    pub fn read(wanted: Wanted, folder: PathBuf) -> (Self, Task<Message>) {
        let path = shown(&folder);
        Self::new(wanted, Way::Read, path, folder)
    }

    /// Looks for a place for a file, beginning with one.
    pub fn write(wanted: Wanted, path: &Path) -> (Self, Task<Message>) {
        let folder = path.parent().map_or_else(disk::start, Path::to_owned);
        Self::new(wanted, Way::Write, path.display().to_string(), folder)
    }

    fn new(wanted: Wanted, way: Way, path: String, folder: PathBuf) -> (Self, Task<Message>) {
        let place = Self {
            wanted,
            way,
            path,
            listing: Listing::default(),
            problem: None,
            desktop: Desktop::Free,
        };
        (place, list(folder, wanted))
    }

    /// The path as it is typed at present.
    #[must_use]
    pub fn typed(&self) -> &str {
        &self.path
    }

    /// Looks again in the folder of the last file: all that lies there is listed.
    pub fn again(&mut self) {
        self.path = shown(&self.listing.folder);
        self.problem = None;
    }

    /// What stood against it is told beside the field.
    pub fn refuse(&mut self, problem: Problem) {
        self.problem = Some(problem);
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Typed(path) => {
                self.path = path;
                self.problem = None;
                let folder = self.folder();
                if folder != self.listing.folder && disk::is_folder(&folder) {
                    return Action::Run(list(folder, self.wanted));
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
                match self.way {
                    Way::Read => Action::Take(path),
                    // A name that is there already is written into the field, not over the file.
                    Way::Write => {
                        self.path = path.display().to_string();
                        Action::None
                    }
                }
            }
            Message::Done => self.done(),
            Message::Ask => self.ask(),
            Message::Picked(picked) => {
                self.desktop = Desktop::Free;
                match picked {
                    Picked::File(path) => return Action::Take(path),
                    Picked::Nothing => {}
                    Picked::NoDialog => self.desktop = Desktop::Missing,
                }
                Action::None
            }
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

    /// Asks the desktop, on a thread of its own: it may take as long as it likes.
    fn ask(&mut self) -> Action {
        self.desktop = Desktop::Asked;
        let (wanted, folder) = (self.wanted, self.listing.folder.clone());
        let name = match self.way {
            Way::Read => None,
            Way::Write => Path::new(&self.path)
                .file_name()
                .map(|name| name.to_string_lossy().into_owned()),
        };
        Action::Run(run::off_thread(move || {
            Message::Picked(disk::pick(wanted, &folder, name.as_deref()))
        }))
    }

    fn done(&mut self) -> Action {
        let path = disk::full(self.path.trim());
        if self.path.trim().is_empty() {
            return Action::None;
        }
        if disk::is_folder(&path) {
            return self.go(path);
        }
        // What was typed names the only file that is listed, or is taken as it stands.
        let fitting = self.fitting();
        match (self.way, disk::is_file(&path), fitting.as_slice()) {
            (Way::Read, false, [only]) => Action::Take(self.listing.folder.join(only)),
            (Way::Read | Way::Write, _, _) => Action::Take(path),
        }
    }

    fn go(&mut self, folder: PathBuf) -> Action {
        self.problem = None;
        let name = Path::new(&self.path).file_name();
        self.path = match (self.way, name) {
            (Way::Write, Some(name)) => folder.join(name).display().to_string(),
            (Way::Write, None) | (Way::Read, _) => shown(&folder),
        };
        Action::Run(list(folder, self.wanted))
    }

    /// The folder that is typed, and the part of a name behind it.
    fn halves(&self) -> (PathBuf, String) {
        let path = disk::full(self.path.trim());
        if self.path.trim().ends_with(std::path::MAIN_SEPARATOR) {
            return (path, String::new());
        }
        let name = path.file_name().map(|name| name.to_string_lossy());
        let part = name.map_or_else(String::new, |name| name.to_lowercase());
        let folder = path.parent().map_or_else(disk::start, Path::to_owned);
        (folder, part)
    }

    fn folder(&self) -> PathBuf {
        self.halves().0
    }

    /// The part of a name by which what is listed is narrowed down.
    fn part(&self) -> String {
        let (folder, part) = self.halves();
        let is_here = folder == self.listing.folder && self.way == Way::Read;
        if is_here { part } else { String::new() }
    }

    /// The files that are listed and fit what is typed.
    fn fitting(&self) -> Vec<String> {
        let part = self.part();
        self.listing
            .files
            .iter()
            .filter(|file| file.name.to_lowercase().contains(&part))
            .map(|file| file.name.clone())
            .collect()
    }

    /// The field, and what lies in the folder, at most so high.
    #[must_use]
    pub fn view(&self, id: &'static str, done: &'static str, height: f32) -> Element<'_, Message> {
        let field = text_input("path of a file", &self.path)
            .id(id)
            .font(text::SANS)
            .size(text::BODY)
            .width(Length::Fill)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Done);
        let mut line = row![field, press::main(done, Message::Done)]
            .spacing(space::SMALL)
            .align_y(Alignment::Center);
        line = match self.desktop {
            Desktop::Free => line.push(press::words("Desktop’s dialog", Message::Ask)),
            Desktop::Asked => line.push(text::quiet("The desktop’s dialog is open.")),
            Desktop::Missing => line,
        };
        let mut parts = Column::new().spacing(space::SMALL).push(line);
        if self.desktop == Desktop::Missing {
            let words = "The desktop has no dialog for files; type the path, or choose below.";
            parts = parts.push(text::quiet(words));
        }
        if let Some(problem) = &self.problem {
            parts = parts.push(text::wrong(problem.to_string()));
        }
        parts.push(self.listed(height)).into()
    }

    fn listed(&self, height: f32) -> Element<'_, Message> {
        let part = self.part();
        let mut rows = Vec::new();
        if self.listing.folder.parent().is_some() {
            rows.push(entry("Folder above", "", Message::Up, Look::Quiet));
        }
        let fits = |name: &str| name.to_lowercase().contains(&part);
        for name in self.listing.folders.iter().filter(|name| fits(name)) {
            let words = format!("{name}{}", std::path::MAIN_SEPARATOR);
            rows.push(entry(words, "", Message::Into(name.clone()), Look::Row));
        }
        for file in self.listing.files.iter().filter(|file| fits(&file.name)) {
            let took = Message::Took(file.name.clone());
            rows.push(entry(
                file.name.clone(),
                file.size.as_str(),
                took,
                Look::Accent,
            ));
        }
        let what = match self.wanted {
            Wanted::Table => "table",
            Wanted::Study => "study",
            Wanted::Figure => "figure",
        };
        let has_files = self.listing.files.iter().any(|file| fits(&file.name));
        let mut parts = column![
            container(
                scrollable(Column::with_children(rows))
                    .direction(input::narrow())
                    .style(input::scroller)
                    .width(Length::Fill),
            )
            .max_height(height)
        ]
        .spacing(space::TIGHT);
        if !has_files && self.way == Way::Read {
            let words = if part.is_empty() {
                format!("There is no {what} in this folder.")
            } else {
                format!("No {what} in this folder has “{part}” in its name.")
            };
            parts = parts.push(text::quiet(words));
        }
        parts.into()
    }
}

fn entry<'a>(
    words: impl Into<String>,
    beside: &'a str,
    message: Message,
    look: Look,
) -> Element<'a, Message> {
    let words = row![
        text::plain(words.into(), text::SANS).width(Length::Fill),
        text::quiet(beside),
    ]
    .spacing(space::GAP);
    Press::new(words, message).look(look).fill().into()
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
fn list(folder: PathBuf, wanted: Wanted) -> Task<Message> {
    run::off_thread(move || Message::Listed(disk::list(&folder, wanted)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::app::disk::Entry;

    fn listed(way: Way, typed: &str) -> Place {
        let file = |name: &str| Entry {
            name: name.to_owned(),
            size: "2 kB".to_owned(),
        };
        let listing = Listing {
            folder: PathBuf::from("/dairy"),
            folders: vec!["older".to_owned()],
            files: vec![file("lab.xlsx"), file("scans.csv")],
        };
        Place {
            wanted: Wanted::Table,
            way,
            path: typed.to_owned(),
            listing,
            problem: None,
            desktop: Desktop::Free,
        }
    }

    #[test]
    fn a_part_of_a_name_narrows_the_list_and_takes_the_only_file_left() {
        let mut place = listed(Way::Read, "/dairy/sca");
        assert_eq!(place.fitting(), ["scans.csv"]);
        let Action::Take(path) = place.update(Message::Done) else {
            panic!("the only file that fits is taken");
        };
        assert_eq!(path, PathBuf::from("/dairy/scans.csv"));
    }

    #[test]
    fn a_desktop_without_a_dialog_leaves_the_typed_path_and_says_so() {
        let mut place = listed(Way::Read, "/dairy/");
        let Action::Run(_) = place.update(Message::Ask) else {
            panic!("the desktop is asked beside the window");
        };
        let _ = place.update(Message::Picked(Picked::NoDialog));
        assert_eq!(place.desktop, Desktop::Missing);
        let Action::Take(path) = place.update(Message::Took("scans.csv".to_owned())) else {
            panic!("the list is still there");
        };
        assert_eq!(path, PathBuf::from("/dairy/scans.csv"));
    }

    #[test]
    fn where_a_file_is_to_be_written_what_is_there_is_never_taken_by_a_part_of_its_name() {
        let mut place = listed(Way::Write, "/dairy/sca");
        assert_eq!(place.fitting().len(), 2);
        let Action::Take(path) = place.update(Message::Done) else {
            panic!("the typed name is taken as it stands");
        };
        assert_eq!(path, PathBuf::from("/dairy/sca"));
    }
}
