//! Floor 5: the window. The only folder that names the toolkit.
//!
//! Every screen, part, editor and dialog has a struct for what it keeps, a `Message` for what
//! happens to it, an `Action` for what it wants, and `update` and `view`. Only the session changes
//! a study, and only it starts a run.

pub mod dialog;
pub mod disk;
pub mod editor;
pub mod files;
mod fonts;
pub mod harness;
mod keys;
pub mod part;
pub mod preset;
pub mod run;
pub mod screen;
pub mod session;
pub mod sheet;
pub mod shortcut;
pub mod theme;
mod then;
pub mod widget;

use crate::app::dialog::hand_over::HandOver;
use crate::app::dialog::problem::Told;
use crate::app::dialog::{hand_over, keys as key_page, path, problem, unsaved};
use crate::app::files::Found;
use crate::app::screen::start::{self, Start};
use crate::app::screen::study::{self, StudyScreen};
use crate::app::screen::welcome::{self, Welcome};
use crate::app::session::Following;
use crate::app::theme::Mode;
use crate::app::widget::Element;
use crate::app::widget::inert::{Inert, Reach};
use crate::base::problem::Problem;
use crate::store::preferences::{Follow, Preferences};
use crate::store::rescue::{Rescue, Rescued};
use iced::widget::stack;
use iced::{Size, Subscription, Task, window};
use std::panic::AssertUnwindSafe;
use std::path::PathBuf;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

/// The smallest window in which everything can still be reached.
const LEAST: Size = Size::new(640.0, 480.0);
/// The window as it opens first.
const FIRST: Size = Size::new(1280.0, 800.0);

/// What happens to the window.
#[derive(Clone, Debug)]
pub enum Message {
    /// On the welcome page.
    Welcome(welcome::Message),
    /// While starting from tables.
    Start(start::Message),
    /// On the study screen.
    Study(study::Message),
    /// In the problem that is told.
    Problem(problem::Message),
    /// In the question about unsaved changes.
    Unsaved(unsaved::Message),
    /// In the dialog that asks for a path.
    Path(path::Message),
    /// In the dialog about the exports.
    HandOver(hand_over::Message),
    /// On the page of keys.
    Keys(key_page::Message),
    /// A key that means something everywhere.
    Shortcut(shortcut::Shortcut),
    /// To the window itself.
    Window(window::Id, window::Event),
    /// A study has been opened.
    Opened(Result<Arc<Found>, Problem>),
    /// The study has been saved.
    Saved(Result<(PathBuf, u64), Problem>),
    /// The exports have been written.
    HandedOver(Result<String, Problem>),
    /// A figure has been written.
    FigureSaved(Result<String, Problem>),
    /// Unsaved work has been kept.
    Kept(Result<(), Problem>),
    /// It is time to keep unsaved work.
    Beat,
}

/// What is shown.
enum Screen {
    Welcome(Welcome),
    Start(Box<Start>),
    Study(Box<StudyScreen>),
}

/// What lies over it.
enum Dialog {
    Problem(Told),
    Unsaved(Then),
    Path(Box<path::Path>),
    HandOver(HandOver),
    Keys,
}

/// What was wanted before something had to be asked.
#[derive(Clone, Debug, PartialEq)]
enum Then {
    /// Nothing more.
    Stay,
    /// The window closes.
    Quit,
    /// Back to the welcome page.
    Welcome,
    /// A path is asked for.
    AskOpen,
    /// A study is opened.
    Open(PathBuf),
    /// A study is started from tables.
    Start,
    /// A study is started from this table.
    StartFrom(PathBuf),
}

/// The window and all that it knows.
pub struct App {
    screen: Screen,
    dialog: Option<Dialog>,
    mode: Mode,
    scale: f32,
    following: Following,
    preferences: Preferences,
    /// Where the preferences are kept; nowhere in tests.
    folder: Option<PathBuf>,
    /// Where unsaved work is kept; nowhere where no home folder is known.
    shelter: Option<Rescue>,
    rescued: Vec<Rescued>,
    /// The unsaved work that the open study was made from.
    rescue: Option<Rescued>,
    /// Where a study is being opened from.
    opening: Option<PathBuf>,
    /// Where a file is being written, to be asked again if that fails.
    writing: Option<PathBuf>,
    /// The exports that are being written, to be asked again if that fails.
    handing: Option<HandOver>,
    /// The drawing of the figure that is being saved.
    drawing: Option<String>,
    /// What is done once the study has been saved.
    then: Then,
    size: Size,
    window: Option<window::Id>,
    /// Up to which edit unsaved work has been kept.
    kept: Option<u64>,
}

impl App {
    /// The window's first state, on a study if one is named.
    pub fn new(study: Option<PathBuf>) -> (Self, Task<Message>) {
        let folder = Preferences::folder_of_user();
        let preferences = folder
            .as_ref()
            .map_or_else(Preferences::default, |folder| Preferences::load(folder));
        let mut app = Self::with(preferences, folder, Rescue::of_user());
        let welcome = app.show_welcome();
        let task = match study {
            Some(path) => {
                app.opening = Some(path.clone());
                files::open(path).map(Message::Opened)
            }
            None => welcome,
        };
        (app, Task::batch([task, beat()]))
    }

    /// The window of a user with these preferences.
    fn with(preferences: Preferences, folder: Option<PathBuf>, shelter: Option<Rescue>) -> Self {
        let rescued = shelter
            .as_ref()
            .map_or_else(Vec::new, |shelter| shelter.left_behind().0);
        let mode = match preferences.theme {
            crate::store::preferences::Theme::Dark => Mode::Dark,
            crate::store::preferences::Theme::Light | crate::store::preferences::Theme::System => {
                Mode::Light
            }
        };
        Self {
            screen: Screen::Welcome(Welcome::default()),
            dialog: None,
            mode,
            scale: preferences.text_scale as f32 / 100.0,
            following: match preferences.follow {
                Follow::AsIEdit => Following::AsIEdit,
                Follow::WhenAsked => Following::WhenAsked,
            },
            preferences,
            folder,
            shelter,
            rescued,
            rescue: None,
            opening: None,
            writing: None,
            handing: None,
            drawing: None,
            then: Then::Stay,
            size: FIRST,
            window: None,
            kept: None,
        }
    }

    /// The title of the window.
    #[must_use]
    pub fn title(&self) -> String {
        match &self.screen {
            Screen::Welcome(_) => "Widefold".to_owned(),
            Screen::Start(_) => "Start from tables – Widefold".to_owned(),
            Screen::Study(study) => {
                let session = study.session();
                let mark = if session.is_modified() { "• " } else { "" };
                format!("{mark}{} – Widefold", session.study().title())
            }
        }
    }

    /// Light or dark.
    #[must_use]
    pub fn theme(&self) -> iced::Theme {
        self.mode.theme()
    }

    /// Light or dark, as the program names it.
    #[must_use]
    pub fn mode(&self) -> Mode {
        self.mode
    }

    /// How large everything is.
    #[must_use]
    pub fn scale(&self) -> f32 {
        self.scale
    }

    /// The study screen, if a study is open.
    #[must_use]
    pub fn study(&self) -> Option<&StudyScreen> {
        match &self.screen {
            Screen::Study(study) => Some(study),
            Screen::Welcome(_) | Screen::Start(_) => None,
        }
    }

    /// What comes from outside without being asked for.
    pub fn subscription(&self) -> Subscription<Message> {
        Subscription::batch([
            iced::event::listen_with(keys::listen),
            window::events().map(|(id, event)| Message::Window(id, event)),
        ])
    }

    /// What is seen.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let screen = match &self.screen {
            Screen::Welcome(welcome) => welcome.view().map(Message::Welcome),
            Screen::Start(start) => start.view(self.size, self.mode).map(Message::Start),
            Screen::Study(study) => study.view(self.mode).map(Message::Study),
        };
        // The screen keeps its place in the tree, so that it is as it was when a dialog closes.
        let Some(dialog) = &self.dialog else {
            return stack![Inert::new(screen, Reach::Within)].into();
        };
        let content = match dialog {
            Dialog::Problem(told) => problem::view(told).map(Message::Problem),
            Dialog::Unsaved(_) => {
                let title = self
                    .study()
                    .map_or("", |study| study.session().study().title());
                unsaved::view(title).map(Message::Unsaved)
            }
            Dialog::Path(path) => path.view().map(Message::Path),
            Dialog::HandOver(hand_over) => hand_over.view().map(Message::HandOver),
            Dialog::Keys => key_page::view().map(Message::Keys),
        };
        stack![Inert::new(screen, Reach::Beyond), dialog::over(content)].into()
    }
}

/// Every half minute there is a time to keep unsaved work.
fn beat() -> Task<Message> {
    run::after(std::time::Duration::from_secs(30), Message::Beat)
}

/// Opens the window and returns when it is closed.
///
/// # Errors
/// A [`Problem`] when no window can be opened.
pub fn open(study: Option<PathBuf>) -> Result<(), Problem> {
    if !disk::has_display() {
        return Err(Problem::new(
            "no-display",
            "There is no display on which a window could be opened.",
        )
        .mend("Use the commands instead, which need none: widefold --help lists them."));
    }
    // The toolkit stops the program with a panic where a display is named but does not answer.
    let has_begun = Arc::new(AtomicBool::new(false));
    let begun = Arc::clone(&has_begun);
    let boot = move || {
        begun.store(true, Ordering::Relaxed);
        App::new(study.clone())
    };
    fonts::prefer_bundled();
    let application = iced::application(boot, App::update, App::view)
        .title(App::title)
        .theme(App::theme)
        .subscription(App::subscription)
        .scale_factor(App::scale)
        .default_font(theme::text::SANS)
        .window(window::Settings {
            size: FIRST,
            min_size: Some(LEAST),
            exit_on_close_request: false,
            ..window::Settings::default()
        });
    let no_window = |details: String| {
        Problem::new("no-window", "The window could not be opened.")
            .mend("Use the commands instead, which need none: widefold --help lists them.")
            .details(details)
    };
    let usual = std::panic::take_hook();
    let begun = Arc::clone(&has_begun);
    std::panic::set_hook(Box::new(move |panic| {
        if begun.load(Ordering::Relaxed) {
            usual(panic);
        }
    }));
    match std::panic::catch_unwind(AssertUnwindSafe(|| application.run())) {
        Ok(ended) => ended.map_err(|error| no_window(error.to_string())),
        Err(panic) if has_begun.load(Ordering::Relaxed) => std::panic::resume_unwind(panic),
        Err(_) => Err(no_window("The display does not answer.".to_owned())),
    }
}
