//! What layout promises.

use crate::figure::layout::{layout, natural_size};
use crate::figure::picture::{Picture, Size};
use crate::figure::shape::Caption;
use crate::figure::shape::frequency::{Frequencies, Frequency};
use crate::figure::{Axis, Figure, Label, Layer, Panel, Role, Weight, Zero};

fn words(picture: &Picture) -> Vec<&str> {
    picture
        .words
        .iter()
        .map(|word| word.text.as_str())
        .collect()
}

fn line(x: &[f64], y: &[f64], name: &str) -> Layer {
    Layer::Line {
        role: Role::Series(0),
        x: x.to_vec(),
        y: y.to_vec(),
        weight: Weight::Normal,
        label: Some(Label {
            text: name.to_owned(),
            end: crate::figure::End::Right,
        }),
        tip: None,
    }
}

#[test]
fn a_figure_without_data_says_so_in_the_words_of_its_maker() {
    let axis = || Axis::linear("dose", "mg");
    let none = Panel::new(axis(), axis(), vec![line(&[1.0], &[f64::NAN], "")]);
    let figure = Figure::of_panels("Dose", vec![none]).with_empty("Nothing was measured.");
    let picture = layout(&figure, natural_size(&figure, 400.0));
    assert!(words(&picture).contains(&"Nothing was measured."));
}

#[test]
fn strips_lie_below_their_panel_on_the_same_horizontal_axis() {
    let strip = |at: f64| {
        let layers = vec![Layer::Rug {
            role: Role::Chosen,
            x: vec![at],
            tips: Vec::new(),
        }];
        Panel::strip("chosen", Zero::Free, layers)
    };
    let axis = Axis::log("strength", "");
    let panel = Panel::new(
        axis,
        Axis::linear("error", ""),
        vec![line(&[0.01, 1.0], &[1.0, 2.0], "")],
    );
    let figure = Figure::of_panels("", vec![panel, strip(0.1)]);
    let picture = layout(&figure, Size::new(400.0, 240.0));
    let x_of = |text: &str| {
        let word = picture.words.iter().find(|word| word.text == text);
        word.map(|word| word.at.x)
    };
    let dot = picture.marks.iter().find_map(|mark| match mark {
        crate::figure::picture::Mark::Disc { center, .. } => Some(center.x),
        crate::figure::picture::Mark::Line { .. }
        | crate::figure::picture::Mark::Area { .. }
        | crate::figure::picture::Mark::Rect { .. }
        | crate::figure::picture::Mark::Clip { .. } => None,
    });
    assert_eq!(dot, x_of("0.1"));
}

#[test]
fn names_at_line_ends_stand_apart_and_the_first_come_first() {
    let lines = (0..60)
        .map(|at| line(&[0.0, 1.0], &[0.0, 1.0], &format!("line {at}")))
        .collect();
    let panel = Panel::new(Axis::linear("", ""), Axis::linear("", ""), lines);
    let figure = Figure::of_panels("", vec![panel]);
    let picture = layout(&figure, Size::new(500.0, 200.0));
    let names: Vec<&str> = words(&picture)
        .into_iter()
        .filter(|word| word.starts_with("line "))
        .collect();
    assert!((8..20).contains(&names.len()), "{names:?}");
    let is_first = |name: &&str| name[5..].parse::<usize>().unwrap() < names.len();
    assert!(names.iter().all(is_first), "{names:?}");
}

#[test]
fn rows_without_room_are_counted() {
    let row = |at: usize| Frequency {
        name: format!("marker {at}"),
        share: 0.5,
        interval: None,
        cells: vec!["50 %".to_owned()],
        tip: None,
    };
    let figure = Frequencies {
        caption: Caption::titled("Again?"),
        columns: vec![String::new()],
        rows: (0..2_000).map(row).collect(),
        more: "and {} more".to_owned(),
        ..Frequencies::default()
    }
    .figure();
    let picture = layout(&figure, natural_size(&figure, 500.0));
    let shown = words(&picture)
        .iter()
        .filter(|word| word.starts_with("marker"))
        .count();
    let told = format!("and {} more", 2_000 - shown);
    assert!(words(&picture).contains(&told.as_str()), "{shown}");
}

#[test]
fn a_name_that_is_too_long_is_cut_and_kept() {
    let long = "a predictor whose name is as long as names of mass peaks tend to be, 1123.4567";
    let figure = Frequencies {
        rows: vec![Frequency {
            name: long.to_owned(),
            share: 0.5,
            interval: None,
            cells: Vec::new(),
            tip: None,
        }],
        ..Frequencies::default()
    }
    .figure();
    let picture = layout(&figure, natural_size(&figure, 300.0));
    let word = &picture.words[0];
    assert!(word.text.ends_with('…') && word.full.as_deref() == Some(long));
}
