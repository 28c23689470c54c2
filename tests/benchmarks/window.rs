//! What a frame costs in a real window: `cargo bench --bench window`, on a screen of its own.
//!
//! Nothing in the program measures itself: each event is made by xdotool, and the time that all
//! threads of the program spend on a processor until it rests again is read from outside, so that
//! a loaded machine distorts little. Each line is the median, the 95th percentile and the worst of
//! many events, in milliseconds; 16 ms is a frame at 60 a second. Needs Xvfb and xdotool.
#![expect(
    clippy::disallowed_methods,
    clippy::print_stdout,
    reason = "a benchmark makes studies, measures time and prints it"
)]

#[expect(dead_code, reason = "a journey needs more of these than a measurement")]
#[path = "../window/eyes.rs"]
mod eyes;
#[expect(dead_code, reason = "a journey needs more of these than a measurement")]
#[path = "../window/screen.rs"]
mod screen;

use eyes::Letters;
use screen::{Screen, Window, wait};
use serde_json::{Value, json};
use std::fmt::Write as _;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::time::{Duration, Instant};

const SIZES: [(usize, usize); 2] = [(1400, 900), (1920, 1200)];
const IDLE: Duration = Duration::from_secs(5);
const ROWS: usize = 360;
const COLUMNS: usize = 20_000;
const CELLS: usize = 200;

fn program() -> &'static Path {
    Path::new(env!("CARGO_BIN_EXE_widefold"))
}

fn run(arguments: &[&str]) {
    let output = Command::new(program())
        .args(arguments)
        .output()
        .expect("the program can be started");
    let said = String::from_utf8_lossy(&output.stderr);
    assert!(output.status.success(), "{arguments:?}: {said}");
}

/// The demo study with its results.
fn demo(folder: &Path) -> PathBuf {
    let path = folder.join("cellar-light.widefold");
    if !path.exists() {
        let demo = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples/cellar-light.json");
        run(&[
            "update",
            &demo.display().to_string(),
            "-o",
            &path.display().to_string(),
        ]);
    }
    path
}

fn read_json(path: &Path) -> Value {
    let text = std::fs::read_to_string(path).expect("the study can be read");
    serde_json::from_str(&text).expect("a readable study is JSON")
}

fn write_json(path: &Path, study: &Value) {
    std::fs::write(path, study.to_string()).expect("the study can be written");
}

/// A study of 360 × 20,000 values and nothing else, which is read when it is opened.
fn wide(folder: &Path) -> PathBuf {
    let path = folder.join("wide.json");
    if path.exists() {
        return path;
    }
    let mut table = String::from("sample");
    for column in 0..COLUMNS {
        let _ = write!(table, ",m{column}");
    }
    for row in 0..ROWS {
        let _ = write!(table, "\ns{row}");
        for column in 0..COLUMNS {
            let value = ((row * 7919 + column * 104_729) % 9973) as f64 / 997.0;
            let _ = write!(table, ",{value:.4}");
        }
    }
    std::fs::write(folder.join("wide.csv"), table).expect("the table can be written");
    run(&[
        "start",
        &folder.join("wide.csv").display().to_string(),
        "--outcome",
        "m0",
        "--samples",
        "sample",
        "-o",
        &path.display().to_string(),
    ]);
    let mut study = read_json(&path);
    let cells = study["cells"].as_array_mut().expect("a study has cells");
    cells.retain(|cell| cell["kind"] == "data");
    write_json(&path, &study);
    path
}

/// The demo study with its fit and questions again and again, with their results.
fn long(folder: &Path) -> PathBuf {
    let path = folder.join("long.widefold");
    if path.exists() {
        return path;
    }
    let demo = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples/cellar-light.json");
    let mut study = read_json(&demo);
    let mut next = study["next-id"].as_u64().expect("ids are counted");
    let cells = study["cells"].as_array_mut().expect("a study has cells");
    let again: Vec<Value> = cells
        .iter()
        .filter(|cell| cell["kind"] == "question" || cell["kind"] == "fit")
        .cloned()
        .collect();
    for cell in again.iter().cycle().take(CELLS.saturating_sub(cells.len())) {
        let mut copy = cell.clone();
        copy["id"] = json!(next);
        copy["title"] = json!(format!("{} {next}", cell["title"].as_str().unwrap_or("")));
        cells.push(copy);
        next += 1;
    }
    study["next-id"] = json!(next);
    // Beside the demo study, so that its tables are found.
    let bare = demo.with_file_name("long.json.tmp.json");
    write_json(&bare, &study);
    let paths = [bare.display().to_string(), path.display().to_string()];
    run(&["update", &paths[0], "-o", &paths[1]]);
    std::fs::remove_file(&bare).expect("a file that was made can be removed");
    path
}

/// Does something many times and prints what each cost.
fn measure(window: &Window, name: &str, count: usize, mut event: impl FnMut(usize)) {
    let mut costs: Vec<f64> = (0..count)
        .map(|at| {
            let before = window.settle();
            event(at);
            window.settle() - before
        })
        .collect();
    costs.sort_by(f64::total_cmp);
    println!(
        "  {name:<44} {:6.1} {:6.1} {:6.1}",
        costs[count / 2],
        costs[count * 95 / 100],
        costs[count - 1]
    );
}

fn open(screen: &Screen, study: &Path, folder: &Path) -> Window {
    let study = study.display().to_string();
    let window = Window::open(screen, program(), &[&study], folder);
    let _ = see(screen, "Everything is up to date.", Letters::Plain);
    window
}

fn see(screen: &Screen, words: &str, letters: Letters) -> (f32, f32) {
    let mut found = None;
    wait(&format!("“{words}” on the screen"), || {
        found = eyes::find(&screen.look(), words, letters).first().copied();
        found.is_some()
    });
    found.expect("it was waited for").middle()
}

fn press(screen: &Screen, window: &Window, words: &str, letters: Letters) {
    screen.point(see(screen, words, letters));
    screen.click();
    let _ = window.settle();
}

/// From the start of the program to the recorded study on the screen, in seconds.
fn cold_start(screen: &Screen, study: &Path, folder: &Path) -> f64 {
    let begin = Instant::now();
    let study = study.display().to_string();
    let (window, shown) = Window::open_until(screen, program(), &[&study], folder, "Cellar light");
    let seconds = shown.duration_since(begin).as_secs_f64();
    drop(window);
    seconds
}

fn demo_study(screen: &Screen, study: &Path, folder: &Path) {
    let window = open(screen, study, folder);
    let (width, height) = (screen.size.0 as f32, screen.size.1 as f32);
    screen.point((width / 2.0, height / 2.0));
    let before = window.settle();
    std::thread::sleep(IDLE);
    println!(
        "  idle for {} s                                {:6.1}",
        IDLE.as_secs(),
        window.spent() - before
    );
    measure(&window, "wheel down the page", 60, |_| screen.wheel(true));
    measure(&window, "wheel up the page", 60, |_| screen.wheel(false));
    press(screen, &window, "Error and strength", Letters::Strong);
    let title = "Error, g/100 g, against penalty strength";
    let (_, y) = see(screen, title, Letters::Strong);
    let x = width / 2.0 - 150.0;
    measure(&window, "pointer over a figure", 60, |at| {
        screen.point((x + 5.0 * at as f32, y + 60.0 + at as f32));
    });
    screen.point((x, y + 120.0));
    screen.hold(true);
    measure(&window, "strength dragged", 40, |at| {
        screen.point((x + 5.0 * at as f32, y + 120.0));
    });
    // Back to where it began: a press without a way sets nothing.
    screen.point((x, y + 120.0));
    screen.hold(false);
    press(screen, &window, "Summary", Letters::Strong);
    press(screen, &window, "Write", Letters::Plain);
    measure(&window, "letter typed in prose", 60, |at| {
        screen.write(if at % 6 == 5 { " " } else { "e" });
    });
}

fn main() {
    let missing = screen::missing();
    if !missing.is_empty() {
        println!(
            "No window was opened: {} is missing.",
            missing.join(" and ")
        );
        std::process::exit(1);
    }
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("window-bench");
    std::fs::create_dir_all(&folder).expect("a folder can be made below the target folder");
    let (demo, wide, long) = (demo(&folder), wide(&folder), long(&folder));
    for size in SIZES {
        let screen = Screen::start(&folder, size);
        println!(
            "{} × {}: milliseconds on the processor, median, 95 %, worst",
            size.0, size.1
        );
        let seconds = cold_start(&screen, &demo, &folder);
        println!("  start to the recorded study on the screen    {seconds:6.2} s");
        demo_study(&screen, &demo, &folder);
        {
            let window = open(&screen, &wide, &folder);
            press(&screen, &window, "Table", Letters::Plain);
            let (x, y) = see(&screen, "sample", Letters::Strong);
            screen.point((x + 200.0, y + 120.0));
            measure(&window, "360 × 20,000: wheel", 60, |_| screen.wheel(true));
            screen.click();
            measure(&window, "360 × 20,000: a page to the right", 40, |_| {
                screen.keys("ctrl+End ctrl+Home");
            });
        }
        let window = open(&screen, &long, &folder);
        screen.point((size.0 as f32 / 2.0, size.1 as f32 / 2.0));
        measure(&window, "200 cells: wheel down", 80, |_| screen.wheel(true));
        measure(&window, "200 cells: to the end and back", 10, |at| {
            screen.keys(if at % 2 == 0 { "End" } else { "Home" });
        });
    }
}
