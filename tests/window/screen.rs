//! A screen of its own, the window on it, and the hands on mouse and keys.
//!
//! The screen is Xvfb with its pixels in a file, so that looking costs a millisecond; the hands are
//! xdotool. Nothing waits for a time: everything waits for what it needs, and says what it missed.
#![expect(
    clippy::disallowed_methods,
    reason = "a window is watched from outside: its pixels, its files, its time on the processor"
)]

use std::io::{BufRead, BufReader};
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Stdio};
use std::time::{Duration, Instant};

/// How long anything may take on a slow machine; a ready study is worked out in it.
pub const PATIENCE: Duration = Duration::from_secs(240);
/// How long a window that does not rest is watched.
const RESTLESS: Duration = Duration::from_secs(2);
/// How often it is looked.
const GLANCE: Duration = Duration::from_millis(40);
/// How long a window that does nothing more is watched before it is taken to be done.
const STILL: Duration = Duration::from_millis(60);

/// Pixels: red, green and blue in the low 24 bits.
#[derive(Clone, PartialEq, Eq)]
pub struct Image {
    /// In pixels.
    pub width: usize,
    /// In pixels.
    pub height: usize,
    /// Row by row.
    pub pixels: Vec<u32>,
}

/// A screen.
pub struct Screen {
    server: Child,
    display: String,
    folder: PathBuf,
    /// Width and height in pixels.
    pub size: (usize, usize),
}

/// What is missing on this machine for a window to be opened on a screen of its own.
pub fn missing() -> Vec<&'static str> {
    ["Xvfb", "xdotool"]
        .into_iter()
        .filter(|program| {
            let found = Command::new("sh")
                .args(["-c", &format!("command -v {program}")])
                .stdout(Stdio::null())
                .status();
            !found.is_ok_and(|status| status.success())
        })
        .collect()
}

impl Screen {
    /// A screen of a size; its pixels and the user's folder lie in a folder.
    pub fn start(folder: &Path, size: (usize, usize)) -> Self {
        let pixels = folder.join("screen");
        std::fs::create_dir_all(&pixels).expect("a folder for the screen can be made");
        let (width, height) = size;
        let mut server = Command::new("Xvfb")
            .args(["-displayfd", "1", "-noreset", "-nolisten", "tcp", "-screen"])
            .args(["0", &format!("{width}x{height}x24"), "-fbdir"])
            .arg(&pixels)
            .stdout(Stdio::piped())
            .stderr(Stdio::null())
            .spawn()
            .expect("Xvfb can be started");
        let mut number = String::new();
        let told = server.stdout.take().expect("its output is taken");
        let _ = BufReader::new(told)
            .read_line(&mut number)
            .expect("Xvfb tells its number");
        assert!(!number.trim().is_empty(), "Xvfb found no free display");
        Self {
            server,
            display: format!(":{}", number.trim()),
            folder: folder.to_owned(),
            size,
        }
    }

    /// What is on the screen. The file is an X window dump, version 7.
    pub fn look(&self) -> Image {
        let bytes = std::fs::read(self.folder.join("screen/Xvfb_screen0"))
            .expect("Xvfb keeps its pixels in a file");
        let word = |at: usize| {
            let bytes = bytes[4 * at..4 * at + 4].try_into().expect("four bytes");
            u32::from_be_bytes(bytes) as usize
        };
        let (header, version, n_colors) = (word(0), word(1), word(19));
        let (width, height, line) = (word(4), word(5), word(12));
        assert!(version == 7 && word(11) == 32, "an unknown kind of dump");
        let from = header + 12 * n_colors;
        let pixels = (0..height)
            .flat_map(|y| {
                let row = &bytes[from + y * line..from + y * line + 4 * width];
                row.chunks_exact(4)
                    .map(|pixel| u32::from_le_bytes([pixel[0], pixel[1], pixel[2], 0]))
            })
            .collect();
        Image {
            width,
            height,
            pixels,
        }
    }

    /// Keeps what is on the screen as a picture.
    pub fn keep(&self, path: &Path) {
        keep(&self.look(), path);
    }

    fn hand(&self, arguments: &[&str]) -> String {
        let output = Command::new("xdotool")
            .args(arguments)
            .env("DISPLAY", &self.display)
            .output()
            .expect("xdotool can be started");
        String::from_utf8_lossy(&output.stdout).trim().to_owned()
    }

    /// Puts the pointer somewhere.
    pub fn point(&self, (x, y): (f32, f32)) {
        let (x, y) = (format!("{x:.0}"), format!("{y:.0}"));
        let _ = self.hand(&["mousemove", &x, &y]);
    }

    /// Presses the left button where the pointer is.
    pub fn click(&self) {
        let _ = self.hand(&["click", "1"]);
    }

    /// Turns the wheel by one line, down or up.
    pub fn wheel(&self, down: bool) {
        let _ = self.hand(&["click", if down { "5" } else { "4" }]);
    }

    /// Holds the left button, or lets it go.
    pub fn hold(&self, holds: bool) {
        let _ = self.hand(&[if holds { "mousedown" } else { "mouseup" }, "1"]);
    }

    /// Presses keys, one after the other, by their names in X.
    pub fn keys(&self, keys: &str) {
        for key in keys.split(' ') {
            let _ = self.hand(&["key", "--clearmodifiers", key]);
        }
    }

    /// Types letters.
    pub fn write(&self, letters: &str) {
        let _ = self.hand(&["type", "--delay", "15", letters]);
    }
}

impl Drop for Screen {
    fn drop(&mut self) {
        let _ = self.server.kill();
        let _ = self.server.wait();
    }
}

/// A window of the program on a screen.
pub struct Window {
    program: Child,
    id: String,
}

impl Window {
    /// Starts the program and waits for its window, which gets all of the screen and the focus.
    /// The user's folder lies beside the screen.
    pub fn open(screen: &Screen, program: &Path, arguments: &[&str], at: &Path) -> Self {
        let (window, _) = Self::open_until(screen, program, arguments, at, "Widefold");
        let (width, height) = (screen.size.0.to_string(), screen.size.1.to_string());
        let _ = screen.hand(&["windowmove", &window.id, "0", "0"]);
        let _ = screen.hand(&["windowsize", &window.id, &width, &height]);
        let _ = screen.hand(&["windowfocus", &window.id]);
        let _ = window.settle();
        window
    }

    /// Starts the program and waits until its window has a title that contains some words, and
    /// has painted; tells when that was.
    pub fn open_until(
        screen: &Screen,
        program: &Path,
        arguments: &[&str],
        at: &Path,
        title: &str,
    ) -> (Self, Instant) {
        let home = screen.folder.join("home");
        std::fs::create_dir_all(&home).expect("a folder for the user can be made");
        let mut program = Command::new(program)
            .args(arguments)
            .current_dir(at)
            .env("DISPLAY", &screen.display)
            .env("HOME", &home)
            .env_remove("WAYLAND_DISPLAY")
            .env_remove("XDG_CONFIG_HOME")
            .env_remove("XDG_DATA_HOME")
            .env_remove("XDG_STATE_HOME")
            // Without an input method of its own a bare server can keep keys back.
            .env("XMODIFIERS", "@im=none")
            .spawn()
            .expect("the program can be started");
        let mut id = String::new();
        let begin = Instant::now();
        while id.is_empty() {
            assert!(begin.elapsed() < PATIENCE, "no window opened");
            let ended = program.try_wait().expect("the program can be asked");
            assert!(ended.is_none(), "the program ended before it had a window");
            let found = screen.hand(&["search", "--onlyvisible", "--name", title]);
            found.lines().last().unwrap_or_default().clone_into(&mut id);
            std::thread::sleep(GLANCE / 4);
        }
        let window = Self { program, id };
        // A window that has not painted is black.
        wait("the first frame", || screen.look().pixels[0] != 0);
        (window, Instant::now())
    }

    /// The title of the window.
    pub fn title(&self, screen: &Screen) -> String {
        screen.hand(&["getwindowname", &self.id])
    }

    /// The milliseconds that all threads of the program have spent on a processor.
    pub fn spent(&self) -> f64 {
        let tasks = format!("/proc/{}/task", self.program.id());
        let Ok(tasks) = std::fs::read_dir(tasks) else {
            return 0.0;
        };
        tasks
            .filter_map(|task| {
                let told = std::fs::read_to_string(task.ok()?.path().join("schedstat")).ok()?;
                told.split(' ').next()?.parse::<f64>().ok()
            })
            .sum::<f64>()
            / 1e6
    }

    /// Waits until the program rests, or has not rested for a while, and tells what it has spent
    /// by then.
    pub fn settle(&self) -> f64 {
        let begin = Instant::now();
        let mut last = self.spent();
        let mut since = Instant::now();
        while since.elapsed() < STILL && begin.elapsed() < RESTLESS {
            std::thread::sleep(STILL / 15);
            let now = self.spent();
            if now > last {
                last = now;
                since = Instant::now();
            }
        }
        last
    }

    /// Whether the program has ended by itself.
    pub fn has_ended(&mut self) -> bool {
        self.program.try_wait().is_ok_and(|ended| ended.is_some())
    }
}

impl Drop for Window {
    fn drop(&mut self) {
        let _ = self.program.kill();
        let _ = self.program.wait();
    }
}

/// Keeps pixels as a picture.
pub fn keep(image: &Image, path: &Path) {
    let bytes = image
        .pixels
        .iter()
        .flat_map(|pixel| [(pixel >> 16) as u8, (pixel >> 8) as u8, *pixel as u8])
        .collect();
    let picture = image::RgbImage::from_raw(image.width as u32, image.height as u32, bytes)
        .expect("three bytes for each pixel");
    picture.save(path).expect("the picture can be written");
}

/// Waits until something is the case, or says what was missed.
pub fn wait(what: &str, mut is_so: impl FnMut() -> bool) {
    let begin = Instant::now();
    while !is_so() {
        assert!(begin.elapsed() < PATIENCE, "waited in vain: {what}");
        std::thread::sleep(GLANCE);
    }
}
