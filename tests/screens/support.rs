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

/// The study, evaluated and recorded.
fn study() -> Opened {
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
        let mut bench = Self {
            app: App::on_study(study(), size, Mode::Light),
            harness: Harness::new(width, height, Mode::Light),
        };
        bench.act(&[]);
        bench
    }

    /// Feeds events, and the messages that come of them, until nothing more comes.
    pub fn act(&mut self, events: &[iced::Event]) {
        let messages = self.harness.feed(self.app.view(), events);
        for message in messages {
            // What would happen off the window's thread does not happen here.
            let _ = self.app.update(message);
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
