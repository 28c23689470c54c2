//! A window on a small invented study, and hands to work it with.

use std::sync::Arc;
use std::sync::Mutex;
use widefold::app::App;
use widefold::app::harness::{Harness, press};
use widefold::app::session::Opened;
use widefold::app::theme::Mode;
use widefold::base::thread::Threads;
use widefold::base::work::{CancelToken, Work};
use widefold::eval::desk::{Snapshot, evaluate};
use widefold::eval::memo::Memo;
use widefold::eval::standing::{Event, Standings};
use widefold::eval::start::{Wishes, start};
use widefold::store::Record;
use widefold::study::settings::Settings;
use widefold::study::settings::fit::{Fit, Judge, Plan, Scheme, Strength};

/// A window and what lies behind it.
pub struct Bench {
    /// The window.
    pub app: App,
    /// What was copied last.
    pub copied: Option<String>,
    harness: Harness,
}

/// A table of 24 dishes with 30 invented readings each, of which the third and the eighth follow
/// the sweetness.
fn table() -> String {
    let mut text = String::from("dish,oven,sweetness");
    for reading in 1..=30 {
        text.push_str(&format!(",r{reading}"));
    }
    // A fixed sequence of pseudo-random numbers: Park and Miller (1988), minimal standard.
    let mut state = 20_260_301_u64;
    let mut noise = || {
        state = state * 16_807 % 2_147_483_647;
        state as f64 / 2_147_483_647.0 - 0.5
    };
    for dish in 1..=24 {
        let readings: Vec<f64> = (0..30).map(|_| noise()).collect();
        let sweetness = 5.0 + 2.0 * readings[2] - 1.5 * readings[7] + 0.2 * noise();
        text.push_str(&format!(
            "\ndish {dish:02},oven {},{sweetness:.3}",
            dish % 3 + 1
        ));
        for reading in readings {
            text.push_str(&format!(",{reading:.4}"));
        }
    }
    text.push('\n');
    text
}

/// The study, evaluated and recorded; evaluated once for all tests.
pub fn recorded() -> Opened {
    static ONCE: std::sync::OnceLock<Opened> = std::sync::OnceLock::new();
    ONCE.get_or_init(evaluated).clone()
}

fn evaluated() -> Opened {
    let plan = |parts| Plan {
        scheme: Scheme::Units,
        parts,
        repeats: 1,
    };
    let mut fit = Fit {
        judge: Judge::Nested(plan(3)),
        ..Fit::default()
    };
    if let Strength::Chosen { range, inner, .. } = &mut fit.strength {
        range.count = 20;
        *inner = plan(4);
    }
    let wishes = Wishes {
        title: "Sweet dishes".to_owned(),
        outcome: "sweetness".to_owned(),
        batch: Some("oven".to_owned()),
        fit,
        ..Wishes::default()
    };
    let tables = [("dishes.csv".to_owned(), Arc::from(table().into_bytes()))];
    let started = start(&tables, &wishes, Threads::all(), &Work::unattended())
        .expect("nobody calls it off")
        .expect("the table is sound");
    let snapshot = Snapshot {
        study: started.study.clone(),
        shelf: started.shelf.clone(),
        recorded: std::collections::BTreeMap::new(),
        threads: Threads::all(),
    };
    let standings = Mutex::new(Standings::default());
    let tell = |event: Event| standings.lock().unwrap().absorb(&event);
    let mut memo = Memo::new(1 << 28);
    evaluate(&snapshot, &mut memo, &CancelToken::default(), &tell).unwrap();
    let standings = standings.into_inner().unwrap();
    Opened {
        record: Record::from(&started.study, &standings),
        study: started.study,
        shelf: started.shelf,
        ..Opened::default()
    }
}

impl Bench {
    /// A window of a size on the study.
    pub fn new(width: f32, height: f32) -> Self {
        let size = iced::Size::new(width, height);
        Self::on(App::on_study(recorded(), size, Mode::Light), size)
    }

    /// A window of a size on the study, light or dark.
    pub fn in_mode(size: iced::Size, mode: Mode) -> Self {
        let mut opened = recorded();
        // A place that is the same on every machine.
        opened.path = Some("/dairy/sweet-dishes.widefold".into());
        Self::on(App::on_study(opened, size, mode), size)
    }

    /// A window on whatever it shows.
    pub fn on(app: App, size: iced::Size) -> Self {
        let mode = app.mode();
        let mut bench = Self {
            app,
            copied: None,
            harness: Harness::new(size.width, size.height, mode),
        };
        bench.act(&[]);
        bench
    }

    /// Tells the window something, and does what comes of it beside the window, until nothing
    /// more comes.
    pub fn send(&mut self, message: widefold::app::Message) {
        let task = self.app.update(message);
        self.finish(task);
        self.act(&[]);
    }

    /// Does a task, and what comes of it, to its end.
    pub fn finish(&mut self, task: iced::Task<widefold::app::Message>) {
        let done = widefold::app::harness::done(task);
        self.copied = done.copied.or(self.copied.take());
        for message in done.messages {
            let task = self.app.update(message);
            self.finish(task);
        }
    }

    /// A picture of the window.
    pub fn shot(&mut self, scale: f32) -> widefold::app::harness::Shot {
        self.harness.shot(self.app.view(), scale)
    }

    /// The cell with a title.
    pub fn cell(&self, title: &str) -> widefold::study::cell::CellId {
        let study = self.app.study().expect("a study is open");
        let cell = study.session().study().titled(title);
        cell.unwrap_or_else(|| panic!("there is no cell “{title}”"))
            .id
    }

    /// The position of the first figure among the blocks of a cell.
    pub fn first_figure(&self, id: widefold::study::cell::CellId) -> usize {
        use widefold::report::block::Block;
        let study = self.app.study().expect("a study is open");
        let session = study.session();
        let context = widefold::report::Context {
            study: session.study(),
            standings: session.standings(),
            ledger: session.ledger(),
        };
        let report = widefold::report::cell(&context, id);
        let is_figure = |block: &Block| matches!(block, Block::Figure(_));
        let at = report.blocks.iter().position(is_figure);
        at.expect("the cell has a figure")
    }

    /// Feeds events, and the messages that come of them, until nothing more comes.
    pub fn act(&mut self, events: &[iced::Event]) {
        let messages = self.harness.feed(self.app.view(), events);
        for message in messages {
            let task = self.app.update(message);
            self.finish(task);
        }
        let _ = self.harness.feed(self.app.view(), &[]);
    }

    /// Whether some words can be seen.
    pub fn sees(&mut self, words: &str) -> bool {
        self.harness.find(self.app.view(), words).is_some()
    }

    /// Presses the smallest text that contains some words.
    pub fn press(&mut self, words: &str) {
        let bounds = self
            .harness
            .find(self.app.view(), words)
            .unwrap_or_else(|| panic!("“{words}” is not on the page"));
        self.act(&press(bounds.center_x(), bounds.center_y()));
    }

    /// Goes to a cell by the thread.
    pub fn go_to(&mut self, title: &str) {
        let study = self.app.study().expect("a study is open");
        let id = study
            .session()
            .study()
            .titled(title)
            .unwrap_or_else(|| panic!("there is no cell “{title}”"))
            .id;
        let message = widefold::app::part::thread::Message::GoTo(id);
        let message = widefold::app::screen::study::Message::Thread(message);
        let _ = self.app.update(widefold::app::Message::Study(message));
        self.act(&[]);
    }

    /// The settings of the first fit.
    pub fn fit(&self) -> Fit {
        let study = self.app.study().expect("a study is open");
        study
            .session()
            .study()
            .cells()
            .iter()
            .find_map(|cell| match &cell.settings {
                Settings::Fit(fit) => Some(fit.clone()),
                Settings::Data(_)
                | Settings::Prepare(_)
                | Settings::Question(_)
                | Settings::Compare(_)
                | Settings::Score(_)
                | Settings::Prose(_) => None,
            })
            .expect("the study has a fit")
    }

    /// The title of the first fit.
    pub fn fit_title(&self) -> String {
        let study = self.app.study().expect("a study is open");
        study
            .session()
            .study()
            .cells()
            .iter()
            .find(|cell| matches!(cell.settings, Settings::Fit(_)))
            .expect("the study has a fit")
            .title
            .clone()
    }

    /// The label of what undo would take back.
    pub fn undo_label(&self) -> Option<String> {
        let study = self.app.study().expect("a study is open");
        study.session().undo_label().map(str::to_owned)
    }

    /// Turns the wheel over the page, by so many pixels down.
    pub fn scroll(&mut self, down: f32) {
        use iced::mouse::{Event, ScrollDelta};
        let delta = ScrollDelta::Pixels { x: 0.0, y: -down };
        self.act(&[
            widefold::app::harness::moved(940.0, 400.0),
            iced::Event::Mouse(Event::WheelScrolled { delta }),
        ]);
    }

    /// Types letters where the focus is.
    pub fn type_letters(&mut self, letters: &str) {
        for letter in letters.chars() {
            self.act(&[widefold::app::harness::letter(
                &letter.to_string(),
                iced::keyboard::Modifiers::empty(),
            )]);
        }
    }

    /// Presses a named key.
    pub fn key(&mut self, named: iced::keyboard::key::Named) {
        self.act(&[widefold::app::harness::named(
            named,
            iced::keyboard::Modifiers::empty(),
        )]);
    }

    /// Gives the focus to the field of the open editor.
    pub fn tab_to_field(&mut self) {
        let field = iced::advanced::widget::Id::new(widefold::app::editor::FIELD);
        let mut focus = iced::advanced::widget::operation::focusable::focus::<()>(field);
        self.harness.operate(self.app.view(), &mut focus);
        self.act(&[]);
    }

    /// Where some words can be seen.
    pub fn place_of(&mut self, words: &str) -> Option<iced::Rectangle> {
        self.harness.find(self.app.view(), words)
    }

    /// Whether a text that contains some words has the focus.
    pub fn has_focus(&mut self, words: &str) -> bool {
        let text = self.harness.find(self.app.view(), words);
        let focus = self.harness.focused(self.app.view());
        matches!((text, focus), (Some(text), Some(focus)) if text.intersects(&focus))
    }

    /// Moves the focus on, as the Tab key does.
    pub fn tab(&mut self) {
        let mut next = iced::advanced::widget::operation::focusable::focus_next::<()>();
        self.harness.operate(self.app.view(), &mut next);
        self.act(&[]);
    }
}

/// A folder of a test's own, which goes when the test ends.
pub struct Folder(std::path::PathBuf);

#[expect(
    clippy::disallowed_methods,
    reason = "tests of what the disk does need files of their own"
)]
impl Folder {
    /// An empty folder.
    pub fn new(name: &str) -> Self {
        let name = format!("widefold-screens-{}-{name}", std::process::id());
        let folder = std::env::temp_dir().join(name);
        std::fs::create_dir_all(&folder).unwrap();
        Self(folder)
    }

    /// A place in it.
    pub fn path(&self, name: &str) -> std::path::PathBuf {
        self.0.join(name)
    }

    /// Writes a file.
    pub fn write(&self, name: &str, bytes: &[u8]) {
        std::fs::write(self.path(name), bytes).unwrap();
    }

    /// Reads a file.
    pub fn read(&self, name: &str) -> Vec<u8> {
        std::fs::read(self.path(name)).unwrap()
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        let _ = std::fs::remove_dir_all(&self.0);
    }
}
