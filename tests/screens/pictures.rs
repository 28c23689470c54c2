//! Widgets as they were looked at, in light and dark: strict pictures.
//!
//! A missing picture fails unless `UPDATE=1`; a channel may be off by little; what differs is left in
//! the target folder.

use iced::widget::{column, container};
use image::codecs::png::{CompressionType, FilterType, PngEncoder};
use std::path::{Path, PathBuf};
use widefold::app::harness::{Harness, Shot};
use widefold::app::theme::{Mode, text};
use widefold::app::widget::sentence::{Piece, Role, Sentence, Setting};
use widefold::app::widget::{Element, press, progress};

fn sample<'a>(mode: Mode) -> Element<'a, usize> {
    let piece = |text: &str, role| Piece {
        text: text.to_owned(),
        role,
    };
    let sentence = vec![
        piece("Fit a ", Role::Plain),
        piece("lasso", Role::Open),
        piece(" of ", Role::Plain),
        piece("sweetness", Role::Editable),
        piece(" among ", Role::Plain),
        piece("100", Role::Editable),
        piece(" values.", Role::Plain),
    ];
    let answer = vec![piece("It explains 80 % of the variation.", Role::Fact)];
    let page = column![
        text::title("Sweet dishes"),
        Sentence::new(sentence, Setting::Reading, mode).on_press(|at| at),
        Sentence::new(answer, Setting::Answer, mode),
        progress::bar(0.6, 200.0),
        press::main("Bring up to date", 0),
    ]
    .spacing(12)
    .padding(20);
    container(page).into()
}

#[test]
fn a_sentence_and_what_stands_around_it_look_as_they_were_looked_at() {
    for (mode, name) in [(Mode::Light, "light"), (Mode::Dark, "dark")] {
        let mut window = Harness::new(400.0, 220.0, mode);
        let shot = window.shot(sample(mode), 1.0);
        holds(&format!("sentence-{name}"), &shot, 1);
    }
}

/// Compares a picture with the one that was looked at; every channel of every pixel may be off by
/// the tolerance.
#[expect(
    clippy::disallowed_methods,
    reason = "whoever looks at a picture says so when running the tests"
)]
pub fn holds(name: &str, shot: &Shot, tolerance: u8) {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let expected = root.join(format!("tests/snapshots/screens/{name}.png"));
    if std::env::var("UPDATE").is_ok_and(|update| update == "1") {
        write(&expected, shot);
        return;
    }
    let picture = image::open(&expected)
        .unwrap_or_else(|_| panic!("there is no {}; UPDATE=1 makes it", expected.display()))
        .to_rgba8();
    let is_same = picture.dimensions() == (shot.width, shot.height)
        && picture
            .as_raw()
            .iter()
            .zip(&shot.pixels)
            .all(|(one, other)| one.abs_diff(*other) <= tolerance);
    if !is_same {
        let left: PathBuf = root.join(format!("target/screens/{name}-actual.png"));
        write(&left, shot);
        panic!(
            "{name} differs from what was looked at; see {}",
            left.display()
        );
    }
}

#[expect(
    clippy::disallowed_methods,
    reason = "pictures are written as small as the format allows"
)]
fn write(path: &Path, shot: &Shot) {
    let folder = path.parent().expect("a picture lies in a folder");
    std::fs::create_dir_all(folder).unwrap();
    let pixels = shot.pixels.clone();
    let picture = image::RgbaImage::from_raw(shot.width, shot.height, pixels)
        .expect("a shot has four bytes for each pixel");
    // As small as the format allows: the pictures travel with the source.
    let file = std::io::BufWriter::new(std::fs::File::create(path).unwrap());
    let (compression, filter) = (CompressionType::Best, FilterType::Adaptive);
    let encoder = PngEncoder::new_with_quality(file, compression, filter);
    let is_grey = picture
        .pixels()
        .all(|image::Rgba([red, green, blue, _])| red == green && green == blue);
    if is_grey {
        let grey = image::DynamicImage::ImageRgba8(picture).into_luma8();
        grey.write_with_encoder(encoder).unwrap();
    } else {
        picture.write_with_encoder(encoder).unwrap();
    }
}
