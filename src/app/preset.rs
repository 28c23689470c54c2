//! Named starting states, for tests and demos. They read and write nothing of the user's.

use crate::app::session::{Following, Opened};
use crate::app::theme::Mode;
use crate::app::{App, Dialog};
use crate::base::problem::Problem;
use crate::store::preferences::Preferences;
use iced::Size;

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
        let mut app = Self::with(Preferences::default(), None, Vec::new());
        app.mode = mode;
        app.resize(size);
        let _ = app.show_welcome();
        app
    }

    /// The same window, with a problem told over it.
    #[must_use]
    pub fn with_problem(mut self, problem: Problem) -> Self {
        self.dialog = Some(Dialog::Problem(problem));
        self
    }
}
