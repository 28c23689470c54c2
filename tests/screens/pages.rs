//! Every screen as it was looked at, in light and dark, at half its size and in shades of grey.

use crate::pictures::holds;
use crate::support::Bench;
use iced::Size;
use widefold::app::harness::Shot;
use widefold::app::screen::study;
use widefold::app::shortcut::Shortcut;
use widefold::app::theme::Mode;
use widefold::app::{App, Message};
use widefold::base::problem::{Place, Problem};

const SIZE: Size = Size::new(1280.0, 800.0);
/// From one shade of grey to the next.
const SHADE: u8 = 17;
const MODES: [(Mode, &str); 2] = [(Mode::Light, "light"), (Mode::Dark, "dark")];

/// Holds what is seen to the picture that was looked at.
fn looks(name: &str, make: impl Fn(Mode) -> Bench) {
    for (mode, word) in MODES {
        let mut bench = make(mode);
        holds(&format!("{name}-{word}"), &halved(&bench.shot(1.0)), SHADE);
    }
}

/// A picture at half its size in shades of grey: each pixel is the mean of four.
fn halved(shot: &Shot) -> Shot {
    let (width, height) = (shot.width / 2, shot.height / 2);
    let grey = |x: u32, y: u32| -> u32 {
        let at = ((y * shot.width + x) * 4) as usize;
        shot.pixels[at..at + 3]
            .iter()
            .map(|part| u32::from(*part))
            .sum()
    };
    let mut pixels = Vec::with_capacity((width * height * 4) as usize);
    for y in (0..height).map(|y| 2 * y) {
        for x in (0..width).map(|x| 2 * x) {
            let sum = grey(x, y) + grey(x + 1, y) + grey(x, y + 1) + grey(x + 1, y + 1);
            // Few shades are enough to tell what changed.
            let shade = (sum / 12) as u8 / SHADE * SHADE;
            pixels.extend([shade, shade, shade, u8::MAX]);
        }
    }
    Shot {
        width,
        height,
        pixels,
    }
}

/// A table of scans and a damaged one that belongs to it.
const TABLES: [(&str, &str); 2] = [
    (
        "scans.csv",
        "scan,wheel,cave,900 nm,901 nm,902 nm,903 nm\n\
         w1-a,w1,north,0.36,0.4105,0.2,0.31\nw1-b,w1,north,0.361,0.41,0.21,0.32\n\
         w2-a,w2,south,0.35,0.4,0.2,0.3\nw2-b,w2,south,0.3525,,0.22,0.33\n\
         w3-a,w3,north,0.34,0.39,0.2,<0.3\nw3-b,w3,north,0.3405,0.395,>0.9,0.3\n",
    ),
    (
        "lab.csv",
        "wheel,salt,probe\nw1,2.5,ok\nw2,12.25,\nw3,ND,ok\nw3,1.75,ok\n",
    ),
];

#[test]
fn the_welcome_page() {
    looks("welcome", |mode| {
        Bench::on(App::on_welcome(SIZE, mode), SIZE)
    });
}

#[test]
fn starting_from_tables_with_the_import_report() {
    looks("start", |mode| {
        let app = App::on_welcome(SIZE, mode).starting(&TABLES[..1]);
        let mut bench = Bench::on(app, SIZE);
        bench.press("cave");
        bench
    });
    looks("start-second", |mode| {
        let app = App::on_welcome(SIZE, mode).starting(&TABLES);
        Bench::on(app, SIZE)
    });
}

#[test]
fn a_study_and_its_reading_view() {
    looks("study", |mode| {
        let mut bench = Bench::in_mode(SIZE, mode);
        let title = bench.fit_title();
        bench.go_to(&title);
        bench
    });
    looks("reading", |mode| {
        let mut bench = Bench::in_mode(SIZE, mode);
        bench.send(Message::Shortcut(Shortcut::Read));
        bench
    });
}

#[test]
fn an_open_editor_with_a_draft_that_cannot_stand() {
    looks("editor", |mode| {
        let mut bench = Bench::in_mode(SIZE, mode);
        let title = bench.fit_title();
        bench.go_to(&title);
        bench.press("20");
        bench.tab_to_field();
        bench.type_letters("x");
        bench.key(iced::keyboard::key::Named::Enter);
        bench
    });
}

#[test]
fn an_open_table() {
    use widefold::app::part::cell;
    looks("table", |mode| {
        let mut bench = Bench::in_mode(SIZE, mode);
        let id = bench.cell("Tables");
        // The record has no table; a run brings it.
        let open = || {
            let message = Box::new(cell::Message::OpenTable);
            Message::Study(study::Message::Cell(id, message))
        };
        bench.send(open());
        bench.send(open());
        bench.go_to("Tables");
        bench.scroll(480.0);
        bench
    });
}

#[test]
fn the_dialogs() {
    for (name, shortcut) in [("hand-over", Shortcut::HandOver), ("keys", Shortcut::Keys)] {
        looks(name, |mode| {
            let mut bench = Bench::in_mode(SIZE, mode);
            bench.send(Message::Shortcut(shortcut));
            bench
        });
    }
    looks("unsaved", |mode| {
        let mut bench = Bench::in_mode(SIZE, mode);
        let title = bench.fit_title();
        bench.go_to(&title);
        bench.press("lasso");
        bench.press("ridge");
        bench.send(Message::Shortcut(Shortcut::Close));
        bench
    });
}

#[test]
fn a_trouble_that_is_told() {
    looks("trouble", |mode| {
        let problem = Problem::new("file-missing", "There is no file “/dairy/gone.widefold”.")
            .at(Place::file("gone.widefold"))
            .mend("Check the name, or look where the file has gone.")
            .details("not found");
        Bench::on(App::on_welcome(SIZE, mode).with_problem(problem), SIZE)
    });
}

#[test]
fn larger_letters_and_a_small_window_hide_nothing() {
    // The window is told in letters’ sizes: at twice the size of letters it is half as wide.
    for (width, height) in [(640.0, 480.0), (853.0, 533.0), (1920.0, 1200.0)] {
        let size = Size::new(width, height);
        let mut bench = Bench::in_mode(size, Mode::Light);
        for word in ["Save", "Hand over", "Sweet dishes"] {
            let place = bench
                .place_of(word)
                .unwrap_or_else(|| panic!("{word} at {width}"));
            assert!(
                place.x >= 0.0 && place.x + place.width <= width,
                "{word} at {width}"
            );
        }
    }
}
