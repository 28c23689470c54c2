//! Journeys in a real window, on a screen of its own: once with the mouse alone, once with the
//! keyboard alone. `cargo test --test window`; not part of `cargo test`, which needs no display.
//!
//! Two tables are opened, the outcome and the units are chosen, a ready study is fitted, the
//! ladder is looked at, the strength is moved, the margin is read, both exports are written, and
//! the study is saved, closed and opened again. After each step something is checked that only
//! the step can bring about: words on the screen, the window's title, a file, the facts of the
//! study as the command line tells them. Pictures of the steps are left in `target/window`.
//!
//! Needs Xvfb, xdotool and the five libraries that the README names; where they lack, it says so
//! and fails.
#![expect(
    clippy::disallowed_methods,
    clippy::print_stdout,
    reason = "a journey reads and writes files as a person would, and says what it does"
)]

mod eyes;
mod keyboard;
mod mouse;
mod screen;
mod table;
mod traveller;

use std::path::{Path, PathBuf};
use std::time::Instant;

fn main() {
    let missing = screen::missing();
    if !missing.is_empty() {
        println!(
            "No window was opened: {} is missing. On Debian: apt-get install xvfb xdotool \
             libx11-6 libx11-xcb1 libxcursor1 libxi6 libxkbcommon-x11-0",
            missing.join(" and ")
        );
        std::process::exit(1);
    }
    let wanted: Vec<String> = std::env::args().skip(1).collect();
    let pictures = Path::new(env!("CARGO_TARGET_TMPDIR")).join("../window");
    type Journey = fn(&Path, &Path);
    let journeys: [(&str, Journey); 2] = [("mouse", mouse::travel), ("keyboard", keyboard::travel)];
    for (name, travel) in journeys {
        if !wanted.is_empty() && !wanted.iter().any(|wish| wish == name) {
            continue;
        }
        let begin = Instant::now();
        println!("With the {name} alone:");
        let folder = clean(Path::new(env!("CARGO_TARGET_TMPDIR")).join(format!("window-{name}")));
        let shots = clean(pictures.join(name));
        travel(&folder, &shots);
        println!("done in {:.0} s", begin.elapsed().as_secs_f64());
    }
}

/// An empty folder.
fn clean(folder: PathBuf) -> PathBuf {
    let _ = std::fs::remove_dir_all(&folder);
    std::fs::create_dir_all(&folder).expect("a folder can be made below the target folder");
    folder
        .canonicalize()
        .expect("a folder that was made has a path")
}
