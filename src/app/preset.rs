//! Named starting states, for tests and demos.

use crate::app::App;
use crate::app::session::{Following, Opened};
use iced::Size;

impl App {
    /// A window of a size on a study, in which nothing runs by itself.
    #[must_use]
    pub fn on_study(opened: Opened, size: Size) -> Self {
        let (mut app, _) = Self::new(None);
        app.following = Following::WhenAsked;
        app.resize(size);
        let _ = app.show_study(opened);
        app
    }

    /// The welcome page in a window of a size.
    #[must_use]
    pub fn on_welcome(size: Size) -> Self {
        let (mut app, _) = Self::new(None);
        app.resize(size);
        app
    }
}
