//! The widgets, driven without a display.

use crate::app::harness::{Harness, letter, moved, named, press, wheel};
use crate::app::theme::{Mode, text};
use crate::app::widget::Element;
use crate::app::widget::grid::{Did, Field, Grid, Source};
use crate::app::widget::list::{GoTo, List};
use crate::app::widget::press::words;
use crate::app::widget::sentence::{Piece, Role, Sentence, Setting};
use iced::advanced::widget::operation::focusable::focus_next;
use iced::keyboard::{Modifiers, key};
use iced::widget::{column, container, space};
use std::borrow::Cow;
use std::cell::RefCell;

/// A field for every row and column, without a table behind it.
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
        format!("marker {column}").into()
    }

    fn field(&self, row: usize, column: usize) -> Field<'_> {
        Field::known(format!("{row}.{column:04}"))
    }
}

fn grid<'a>(source: &'a Wide) -> Element<'a, Did> {
    Grid::new(source, 400.0).on(|did| did).into()
}

#[test]
fn a_press_in_a_grid_puts_the_cursor_on_the_field_that_is_seen_there() {
    let mut window = Harness::new(900.0, 500.0, Mode::Light);
    let told = window.feed(grid(&Wide), &press(300.0, 60.0));
    let Some(Did::At { row, column }) = told.first().copied() else {
        panic!("{told:?}");
    };
    assert_eq!(row, 1);
    // The same place shows another row after the wheel was turned.
    let _ = window.feed(grid(&Wide), &[moved(300.0, 60.0), wheel(0.0, -2.0)]);
    let told = window.feed(grid(&Wide), &press(300.0, 60.0));
    assert_eq!(told, [Did::At { row: 7, column }]);
}

#[test]
fn a_selection_is_copied_with_the_names_of_its_rows_and_columns() {
    let mut window = Harness::new(900.0, 500.0, Mode::Light);
    let _ = window.feed(grid(&Wide), &press(120.0, 36.0));
    let _ = window.feed(
        grid(&Wide),
        &[
            named(key::Named::ArrowRight, Modifiers::SHIFT),
            named(key::Named::ArrowDown, Modifiers::SHIFT),
            letter("c", Modifiers::COMMAND),
        ],
    );
    assert_eq!(
        window.copied(),
        Some("scan\tmarker 0\tmarker 1\nscan 0\t0.0000\t0.0001\nscan 1\t1.0000\t1.0001")
    );
}

#[test]
fn the_end_key_reaches_the_last_of_twenty_thousand_columns() {
    let mut window = Harness::new(900.0, 500.0, Mode::Light);
    let _ = window.feed(grid(&Wide), &press(120.0, 36.0));
    let told = window.feed(grid(&Wide), &[named(key::Named::End, Modifiers::empty())]);
    assert_eq!(
        told,
        [Did::At {
            row: 0,
            column: 19_999
        }]
    );
}

/// A list of cells that counts which of them are built.
fn list<'a>(heights: &'a [f32], built: &'a RefCell<Vec<usize>>, go_to: GoTo) -> Element<'a, usize> {
    let keys = (0..heights.len() as u64).collect();
    List::new(keys, move |at| {
        built.borrow_mut().push(at);
        column![words(format!("cell {at}"), at), space().height(heights[at])].into()
    })
    .go_to(go_to)
    .into()
}

#[test]
fn only_cells_that_can_be_seen_and_their_neighbours_are_built() {
    let heights = vec![150.0; 200];
    let built = RefCell::new(Vec::new());
    let mut window = Harness::new(800.0, 600.0, Mode::Light);
    let _ = window.feed(list(&heights, &built, GoTo::default()), &[]);
    let n_built = built.borrow().len();
    assert!((4..=6).contains(&n_built), "{n_built}");
}

#[test]
fn a_cell_that_grows_above_the_view_does_not_move_it() {
    let mut heights = vec![150.0; 200];
    let built = RefCell::new(Vec::new());
    let mut window = Harness::new(800.0, 600.0, Mode::Light);
    let turned = [moved(100.0, 100.0), wheel(0.0, -60.0)];
    let _ = window.feed(list(&heights, &built, GoTo::default()), &turned);
    let before = window.find(list(&heights, &built, GoTo::default()), "cell 21");
    assert!(before.is_some());
    heights[2] = 900.0;
    let after = window.find(list(&heights, &built, GoTo::default()), "cell 21");
    assert_eq!(before, after);
}

#[test]
fn going_to_a_cell_is_obeyed_once() {
    let heights = vec![150.0; 200];
    let built = RefCell::new(Vec::new());
    let mut window = Harness::new(800.0, 600.0, Mode::Light);
    let go_to = GoTo {
        key: 120,
        serial: 1,
    };
    let top = window.find(list(&heights, &built, go_to), "cell 120");
    assert!(top.is_some_and(|bounds| bounds.y < 20.0), "{top:?}");
    let _ = window.feed(
        list(&heights, &built, go_to),
        &[moved(100.0, 100.0), wheel(0.0, 1.0)],
    );
    let lower = window.find(list(&heights, &built, go_to), "cell 120");
    assert!(lower.is_some_and(|bounds| bounds.y > 20.0), "{lower:?}");
}

#[test]
fn the_focus_goes_through_the_page_and_is_brought_into_view() {
    let heights = vec![250.0; 40];
    let built = RefCell::new(Vec::new());
    let mut window = Harness::new(800.0, 600.0, Mode::Light);
    let _ = window.feed(list(&heights, &built, GoTo::default()), &[]);
    for _ in 0..12 {
        let mut next = focus_next::<()>();
        window.operate(list(&heights, &built, GoTo::default()), &mut next);
        let _ = window.feed(list(&heights, &built, GoTo::default()), &[]);
    }
    let told = window.feed(
        list(&heights, &built, GoTo::default()),
        &[named(key::Named::Enter, Modifiers::empty())],
    );
    assert_eq!(told, [11]);
    let seen = window.find(list(&heights, &built, GoTo::default()), "cell 11");
    assert!(
        seen.is_some_and(|bounds| bounds.y >= 0.0 && bounds.y < 580.0),
        "{seen:?}"
    );
}

fn sentence<'a>() -> Element<'a, usize> {
    let plain = |text: &str| Piece {
        text: text.to_owned(),
        role: Role::Plain,
    };
    let word = |text: &str| Piece {
        text: text.to_owned(),
        role: Role::Editable,
    };
    let pieces = vec![
        plain("Fit a "),
        word("lasso"),
        plain(" of "),
        word("salt in moisture"),
        plain(" on "),
        word("prepared scans"),
        plain(". Choose the penalty strength among "),
        word("100"),
        plain(" values by "),
        word("10"),
        plain(" parts, repeated "),
        word("5"),
        plain(" times, taking the "),
        word("lowest error"),
        plain("."),
    ];
    container(Sentence::new(pieces, Setting::Reading, Mode::Light).on_press(|at| at))
        .padding(20)
        .into()
}

#[test]
fn words_of_a_sentence_are_pressed_with_the_pointer_and_the_keyboard() {
    let mut window = Harness::new(700.0, 200.0, Mode::Light);
    let word = window
        .find(sentence(), "lasso")
        .expect("the word is on the page");
    let told = window.feed(sentence(), &press(word.center_x(), word.center_y()));
    assert_eq!(told, [1]);
    let mut next = focus_next::<()>();
    window.operate(sentence(), &mut next);
    let told = window.feed(sentence(), &[named(key::Named::Space, Modifiers::empty())]);
    assert_eq!(told, [3]);
}

#[test]
fn standing_words_of_a_sentence_cannot_be_pressed() {
    let mut window = Harness::new(700.0, 200.0, Mode::Light);
    let told = window.feed(sentence(), &press(25.0, 35.0));
    assert_eq!(told, Vec::<usize>::new());
}

#[test]
fn text_is_set_in_the_bundled_fonts() {
    let mut window = Harness::new(300.0, 60.0, Mode::Light);
    let shot = window.shot::<()>(text::title("Cellar light").into(), 1.0);
    let ink = shot
        .pixels
        .chunks_exact(4)
        .filter(|pixel| pixel[0] < 80)
        .count();
    // Without a font nothing at all would be drawn.
    assert!(ink > 100, "{ink}");
}
