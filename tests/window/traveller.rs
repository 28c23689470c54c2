//! Who makes a journey: a window, eyes and hands, and what is checked on the way.
#![expect(
    clippy::disallowed_methods,
    clippy::print_stdout,
    reason = "a journey looks at files and says what it does"
)]

use crate::eyes::{self, Letters, Place};
use crate::screen::{Image, PATIENCE, Screen, Window, keep, wait};
use crate::table;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::time::Instant;

/// The ink of focus and of editable words on a light page.
const ACCENT: u32 = 0x0F_5E_6B;

/// A window, eyes and hands.
pub struct Traveller {
    /// The screen.
    pub screen: Screen,
    /// The window.
    pub window: Window,
    /// Where the tables lie, and where the study is saved.
    pub folder: PathBuf,
    shots: PathBuf,
    n_steps: usize,
}

impl Traveller {
    /// Opens the window without a study, beside two tables.
    pub fn set_out(folder: &Path, shots: &Path) -> Self {
        let tables = folder.join("tables");
        std::fs::create_dir_all(&tables).expect("a folder can be made");
        table::write(&tables);
        let screen = Screen::start(folder, (1280, 800));
        let program = Path::new(env!("CARGO_BIN_EXE_widefold"));
        let window = Window::open(&screen, program, &[], &tables);
        Self {
            screen,
            window,
            folder: tables,
            shots: shots.to_owned(),
            n_steps: 0,
        }
    }

    /// A step is done: says so, keeps a picture, and makes sure that the program still runs.
    pub fn done(&mut self, step: &str) {
        assert!(!self.window.has_ended(), "the program ended by itself");
        self.n_steps += 1;
        let name = format!("{:02} {step}.png", self.n_steps).replace(' ', "-");
        self.screen.keep(&self.shots.join(name));
        println!("  {:2} {step}", self.n_steps);
    }

    /// Where words stand, from top to bottom.
    pub fn places(&self, words: &str, letters: Letters) -> Vec<Place> {
        eyes::find(&self.screen.look(), words, letters)
    }

    /// Waits until words stand on the screen, and tells where; the first from the top.
    pub fn see(&self, words: &str, letters: Letters) -> Place {
        let begin = Instant::now();
        loop {
            let _ = self.window.settle();
            if let Some(place) = self.places(words, letters).first() {
                return *place;
            }
            if begin.elapsed() > PATIENCE {
                panic!("“{words}” never came on the screen; see missed.png");
            }
        }
    }

    /// Waits until everything is up to date. What was last said covers that; it is dismissed.
    pub fn see_up_to_date(&self, dismiss: impl Fn(Place)) {
        let begin = Instant::now();
        let words = "Everything is up to date.";
        while self.places(words, Letters::Plain).is_empty() {
            if let Some(place) = self.places("Dismiss", Letters::Plain).first() {
                dismiss(*place);
            }
            let _ = self.window.settle();
            if begin.elapsed() > PATIENCE {
                panic!("the study was never up to date; see missed.png");
            }
        }
    }

    /// Waits until words no longer stand on the screen.
    pub fn see_gone(&self, words: &str, letters: Letters) {
        wait(&format!("“{words}” to go from the screen"), || {
            let _ = self.window.settle();
            self.places(words, letters).is_empty()
        });
    }

    /// Whether what stands at a place has the focus: there is an upright accent line beside it.
    pub fn has_focus(&self, place: Place) -> bool {
        let image = self.screen.look();
        let (top, bottom) = (place.y as usize, (place.y + place.height) as usize);
        let left = place.x as usize;
        // The outline of a neighbour ends there, too; only its own goes over the words.
        let middle = (place.x + place.width / 2.0) as usize;
        let goes_over = (top.saturating_sub(12)..top).any(|y| color(&image, middle, y) == ACCENT);
        goes_over
            && (left.saturating_sub(12)..left).any(|x| {
                let n_accent = (top..bottom)
                    .filter(|y| color(&image, x, *y) == ACCENT)
                    .count();
                n_accent + 1 >= bottom - top
            })
    }

    /// Moves the focus on with the Tab key until words have it.
    pub fn tab_to(&self, words: &str, letters: Letters) {
        let mut n_keys = 0;
        let mut places = Vec::new();
        loop {
            let _ = self.window.settle();
            // The page scrolls with the focus at times; looking for words is slow.
            if n_keys % 4 == 0 {
                places = self.places(words, letters);
            }
            if places.iter().any(|place| self.has_focus(*place)) {
                return;
            }
            assert!(n_keys < 80, "“{words}” never got the focus");
            n_keys += 1;
            self.screen.keys("Tab");
        }
    }

    /// Waits for the window's title.
    pub fn titled(&self, what: &str, is_so: impl Fn(&str) -> bool) {
        wait(&format!("the window's title: {what}"), || {
            is_so(&self.window.title(&self.screen))
        });
    }

    /// Waits for a file that is not empty and no longer grows.
    pub fn file(&self, name: &str) -> Vec<u8> {
        let path = self.folder.join(name);
        let mut before = 0;
        wait(&format!("{name} on the disk"), || {
            let length = std::fs::metadata(&path).map_or(0, |about| about.len());
            let is_whole = length > 0 && length == before;
            before = length;
            is_whole
        });
        std::fs::read(&path).expect("a file that is there can be read")
    }

    /// The facts of a saved study, as the command line tells them.
    pub fn facts(&self, name: &str) -> String {
        let output = Command::new(env!("CARGO_BIN_EXE_widefold"))
            .arg("facts")
            .arg(self.folder.join(name))
            .output()
            .expect("the program can be started");
        // A question that asks how a strength was chosen has no answer once it is set by hand, and
        // the command says so; the facts of all other cells are told.
        String::from_utf8_lossy(&output.stdout).into_owned()
    }

    /// Makes sure that nothing is left on the screen of what was there before: what has been
    /// painted piece by piece must look as when it is painted at once, which turning from light to
    /// dark and back brings about.
    pub fn is_clean(&self) {
        let _ = self.window.settle();
        let pieces = self.screen.look();
        self.screen.keys("F9");
        self.changed("the dark page", &pieces);
        self.screen.keys("F9");
        wait("the light page", || {
            self.screen.look().pixels[0] == pieces.pixels[0]
        });
        let _ = self.window.settle();
        let whole = self.screen.look();
        let differ: Vec<(usize, usize)> = (0..whole.pixels.len())
            .filter(|at| is_other(pieces.pixels[*at], whole.pixels[*at]))
            .map(|at| (at % whole.width, at / whole.width))
            .collect();
        if let (Some(first), Some(last)) = (differ.first(), differ.last()) {
            self.screen.keep(&self.shots.join("painted-whole.png"));
            keep(&pieces, &self.shots.join("painted-in-pieces.png"));
            panic!(
                "{} pixels were left over, from {first:?} to {last:?}",
                differ.len()
            );
        }
    }

    /// Waits until something on the screen differs from a picture of before.
    pub fn changed(&self, what: &str, before: &Image) {
        wait(what, || self.screen.look() != *before);
        let _ = self.window.settle();
    }
}

impl Drop for Traveller {
    fn drop(&mut self) {
        // What was on the screen when something was missed.
        if std::thread::panicking() {
            self.screen.keep(&self.shots.join("missed.png"));
        }
    }
}

/// The color of a pixel.
pub fn color(image: &Image, x: usize, y: usize) -> u32 {
    image.pixels[y * image.width + x] & 0x00FF_FFFF
}

/// Whether two pixels differ by more than the rounding of translucent colours, which depends on
/// how often a place is painted over.
fn is_other(one: u32, other: u32) -> bool {
    one.to_le_bytes()
        .iter()
        .zip(other.to_le_bytes())
        .any(|(one, other)| one.abs_diff(other) > 2)
}
