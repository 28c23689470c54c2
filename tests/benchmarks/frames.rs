//! What a frame costs: `cargo bench --bench frames`, or `cargo run` it in any profile.
//!
//! Each line is the median and the worst of many frames, in milliseconds of wall time: first
//! making the drawing list (events, layout, draw), then painting every pixel of the window, which
//! a real window does only for what changed.
#![expect(
    clippy::disallowed_methods,
    clippy::print_stdout,
    reason = "a benchmark measures time and prints it"
)]

use std::borrow::Cow;
use std::time::Instant;
use widefold::app::harness::{Harness, letter, moved, wheel};
use widefold::app::theme::Mode;
use widefold::app::widget::Element;
use widefold::app::widget::grid::{Field, Grid, Source};
use widefold::app::widget::list::List;
use widefold::app::widget::sentence::{Piece, Role, Sentence, Setting};

const FRAMES: usize = 60;
const SIZE: (f32, f32) = (1400.0, 900.0);

/// 360 × 20,000 fields.
struct Wide;

impl Source for Wide {
    fn n_rows(&self) -> usize {
        360
    }

    fn n_columns(&self) -> usize {
        20_000
    }

    fn corner(&self) -> Cow<'_, str> {
        "scan".into()
    }

    fn row(&self, row: usize) -> Cow<'_, str> {
        format!("scan {row}").into()
    }

    fn column(&self, column: usize) -> Cow<'_, str> {
        format!("m{column}").into()
    }

    fn field(&self, row: usize, column: usize) -> Field<'_> {
        Field::known(format!(
            "{:.4}",
            ((row * 7919 + column * 104_729) % 9973) as f64 / 997.0
        ))
    }
}

fn grid(source: &Wide, height: f32) -> Element<'_, ()> {
    Grid::new(source, height).into()
}

/// A page of cells, each two sentences and a grid.
fn page(source: &Wide, n_cells: usize) -> Element<'_, usize> {
    List::new((0..n_cells as u64).collect(), move |at| {
        let piece = |text: String, role| Piece { text, role };
        let pieces = vec![
            piece("Fit a ".to_owned(), Role::Plain),
            piece("lasso".to_owned(), Role::Editable),
            piece(format!(" number {at} of salt in moisture on "), Role::Plain),
            piece("prepared scans".to_owned(), Role::Editable),
            piece(
                ". Choose the penalty strength among 100 values by 10 parts.".to_owned(),
                Role::Plain,
            ),
        ];
        iced::widget::column![
            Sentence::new(pieces, Setting::Reading, Mode::Light).on_press(|at| at),
            Grid::new(source, 200.0),
        ]
        .padding(20)
        .into()
    })
    .into()
}

fn measure(name: &str, mut frame: impl FnMut(&mut Harness, usize)) {
    let mut window = Harness::new(SIZE.0, SIZE.1, Mode::Light);
    frame(&mut window, 0);
    let mut lists = Vec::new();
    let mut pixels = Vec::new();
    for at in 0..FRAMES {
        let begin = Instant::now();
        frame(&mut window, at);
        lists.push(begin.elapsed().as_secs_f64() * 1e3);
        let begin = Instant::now();
        let _ = window.painted(1.0);
        pixels.push(begin.elapsed().as_secs_f64() * 1e3);
    }
    lists.sort_by(f64::total_cmp);
    pixels.sort_by(f64::total_cmp);
    println!(
        "{name:<46} list {:6.2} / {:6.2} ms   all pixels {:6.2} / {:6.2} ms",
        lists[FRAMES / 2],
        lists[FRAMES - 1],
        pixels[FRAMES / 2],
        pixels[FRAMES - 1],
    );
}

fn main() {
    let source = Wide;
    println!("{FRAMES} frames at {} × {}, median / worst", SIZE.0, SIZE.1);
    measure("grid 360 × 20,000, full window, wheel", |window, at| {
        let turn = if at % 2 == 0 { -3.0 } else { -1.0 };
        let _ = window.feed(
            grid(&source, SIZE.1),
            &[moved(500.0, 400.0), wheel(turn, -1.0)],
        );
    });
    measure("grid 360 × 20,000, 400 px, wheel", |window, _| {
        let _ = window.feed(
            grid(&source, 400.0),
            &[moved(500.0, 200.0), wheel(-1.0, -1.0)],
        );
    });
    measure("page of 200 cells, wheel", |window, _| {
        let _ = window.feed(page(&source, 200), &[moved(10.0, 400.0), wheel(0.0, -2.0)]);
    });
    measure("page of 200 cells, a key", |window, _| {
        let key = letter("a", iced::keyboard::Modifiers::empty());
        let _ = window.feed(page(&source, 200), &[key]);
    });
}
