//! Named starting states, for tests and demos. They read and write nothing of the user's.

use crate::app::screen::start::Start;
use crate::app::session::{Following, Opened};
use crate::app::theme::Mode;
use crate::app::{App, Dialog, Screen};
use crate::base::problem::Problem;
use crate::store::preferences::Preferences;
use crate::store::rescue::Rescue;
use iced::Size;
use std::path::PathBuf;

impl App {
    /// A window of a size on a study, in which nothing runs by itself.
    #[must_use]
    pub fn on_study(opened: Opened, size: Size, mode: Mode) -> Self {
        let mut app = Self::on_welcome(size, mode);
        app.following = Following::WhenAsked;
        let _ = app.show_study(opened);
        app
    }

    /// The welcome page in a window of a size.
    #[must_use]
    pub fn on_welcome(size: Size, mode: Mode) -> Self {
        let mut app = Self::with(Preferences::default(), None, None);
        app.mode = mode;
        app.resize(size);
        let _ = app.show_welcome();
        app
    }

    /// The welcome page of a user with preferences and a folder for unsaved work; nothing runs by
    /// itself.
    #[must_use]
    pub fn of_user(preferences: Preferences, folder: PathBuf, rescue: Rescue, size: Size) -> Self {
        let mut app = Self::with(preferences, Some(folder), Some(rescue));
        app.following = Following::WhenAsked;
        app.resize(size);
        let _ = app.show_welcome();
        app
    }

    /// The same window, on another study.
    pub fn show(&mut self, opened: Opened) {
        let _ = self.show_study(opened);
    }

    /// The same window, starting from tables: names of files and what they hold.
    ///
    /// # Panics
    /// When one of them holds no table.
    #[must_use]
    pub fn starting(mut self, tables: &[(&str, &str)]) -> Self {
        self.screen = Screen::Start(Box::new(Start::with(tables)));
        self
    }

    /// The same window, with a problem told over it.
    #[must_use]
    pub fn with_problem(mut self, problem: Problem) -> Self {
        self.dialog = Some(Dialog::Problem(problem.into()));
        self
    }
}
