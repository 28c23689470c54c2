//! The SVG text of each kind of figure, and one PNG, as they were when somebody last looked.
//!
//! A missing or different reference fails; `UPDATE=1` writes it anew.

#![expect(
    clippy::disallowed_methods,
    reason = "tests read and write their own references"
)]

use std::path::PathBuf;

use widefold::export::picture;
use widefold::figure::ink::Palette;
use widefold::figure::layout::{layout, natural_size};
use widefold::figure::svg::svg;

use crate::sample;

fn folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("tests/snapshots/figures")
}

fn is_update() -> bool {
    std::env::var("UPDATE").is_ok_and(|value| value == "1")
}

#[test]
fn every_figure_is_drawn_as_it_was_looked_at() {
    let mut differing = Vec::new();
    for (name, figure) in sample::all() {
        let picture = layout(&figure, natural_size(&figure, 660.0));
        let text = svg(&picture.with_margin(16.0), &Palette::paper());
        let file = folder().join(format!("{name}.svg"));
        if is_update() {
            std::fs::create_dir_all(folder()).unwrap();
            std::fs::write(&file, &text).unwrap();
        } else if std::fs::read_to_string(&file).ok().as_ref() != Some(&text) {
            let actual = PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join(format!("{name}.svg"));
            std::fs::write(&actual, &text).unwrap();
            differing.push(format!("{} (now: {})", file.display(), actual.display()));
        }
    }
    assert!(differing.is_empty(), "missing or different: {differing:#?}");
}

#[test]
fn a_picture_has_the_same_pixels_with_the_bundled_fonts_on_every_machine() {
    let (_, figure) = sample::all().swap_remove(0);
    let picture = layout(&figure, natural_size(&figure, 480.0));
    let text = svg(&picture, &Palette::light());
    let bytes = picture::png(&text, 1.0).unwrap();
    assert_eq!(bytes, picture::png(&text, 1.0).unwrap());
    assert!(bytes.len() < 30 * 1024, "{} bytes", bytes.len());
    let file = folder().join("error-curve.png");
    if is_update() {
        std::fs::write(&file, &bytes).unwrap();
        return;
    }
    let pixels = |bytes: &[u8]| image::load_from_memory(bytes).unwrap().to_rgba8();
    let (now, then) = (pixels(&bytes), pixels(&std::fs::read(&file).unwrap()));
    assert_eq!(now.dimensions(), then.dimensions());
    // One step of a channel is what processors may round differently.
    let farthest = now
        .as_raw()
        .iter()
        .zip(then.as_raw())
        .map(|(now, then)| now.abs_diff(*then))
        .max();
    assert!(farthest <= Some(1), "a channel is off by {farthest:?}");
}

#[test]
fn what_is_no_picture_is_refused_with_a_reason() {
    use picture::PictureError;
    assert!(matches!(
        picture::png("salt", 1.0),
        Err(PictureError::NotSvg(_))
    ));
    let empty = "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"9\" height=\"9\"/>";
    assert!(matches!(
        picture::png(empty, 0.0),
        Err(PictureError::Size { .. })
    ));
    assert!(matches!(
        picture::png(empty, f64::NAN),
        Err(PictureError::Size { .. })
    ));
    assert!(matches!(
        picture::png(empty, 1e6),
        Err(PictureError::Size { .. })
    ));
}
