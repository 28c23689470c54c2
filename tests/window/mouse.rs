//! The journey with the mouse alone.

use crate::eyes::{Letters, Place};
use crate::traveller::Traveller;
use std::path::Path;

/// Makes the journey.
pub fn travel(folder: &Path, shots: &Path) {
    let mut on = Traveller::set_out(folder, shots);
    press(&on, "Start from tables", Letters::Name);
    press(&on, "scans.csv", Letters::Plain);
    let _ = on.see("40 rows, 26 columns", Letters::Plain);
    on.done("the first table is open");

    press(&on, "Add a table", Letters::Plain);
    press(&on, "lab.csv", Letters::Plain);
    let _ = on.see("20 rows, 3 columns", Letters::Plain);
    press(&on, "sweetness", Letters::Strong);
    press(&on, "outcome", Letters::Plain);
    on.see_gone("a column still to be chosen", Letters::Reading);
    press(&on, "oven", Letters::Strong);
    press(&on, "batch", Letters::Plain);
    press(&on, "scans.csv", Letters::Strong);
    press(&on, "dish", Letters::Strong);
    press(&on, "unit", Letters::Plain);
    let _ = on.see("are kept together", Letters::Reading);
    on.done("outcome and units are chosen");

    press(&on, "Make the study", Letters::Strong);
    on.titled("a study", |title| title.contains("Scans"));
    rest(&on);
    on.done("the fit is there");

    press(&on, "Save", Letters::Plain);
    let _ = on.see("Save the study as", Letters::Title);
    press_last(&on, "Save", Letters::Strong);
    let _ = on.file("scans.widefold");
    on.see_gone("Save the study as", Letters::Title);
    let before = on.facts("scans.widefold");
    assert!(before.contains("sweetness"), "the outcome is in the facts");
    assert!(
        before.contains("chosen strength"),
        "the fit is in the facts"
    );
    on.done("the study is saved");

    press(&on, "How honest?", Letters::Strong);
    let _ = on.see("How honest?", Letters::Name);
    let _ = on.see("The ladder", Letters::Strong);
    wander(&on);
    on.is_clean();
    on.done("the ladder is looked at");

    press(&on, "Error and strength", Letters::Strong);
    let _ = on.see("Error and strength", Letters::Name);
    let figure = on.see("Error against penalty strength", Letters::Strong);
    drag(&on, figure);
    rest(&on);
    on.titled("changed", |title| title.contains('•'));
    press(&on, "Save", Letters::Plain);
    on.titled("saved", |title| !title.contains('•'));
    let after = on.facts("scans.widefold");
    assert_ne!(strength(&before), strength(&after), "the strength moved");
    on.done("the strength is dragged");

    press(&on, "sweetness lasso", Letters::Strong);
    let _ = on.see("Weights, not effects", Letters::Strong);
    on.is_clean();
    on.done("the margin is read");

    press(&on, "Hand over", Letters::Plain);
    press_last(&on, "Write", Letters::Strong);
    let workbook = on.file("scans.xlsx");
    assert!(workbook.starts_with(b"PK"), "a workbook is a zip");
    let text = String::from_utf8(on.file("scans.md")).expect("the write-up is text");
    assert!(
        text.contains("sweetness"),
        "the write-up is about the outcome"
    );
    on.done("both hand-overs are written");

    press(&on, "And more", Letters::Plain);
    press(&on, "Close", Letters::Plain);
    let _ = on.see("Start from tables", Letters::Name);
    on.titled("no study", |title| !title.contains("Scans"));
    press(&on, "scans.widefold", Letters::Name);
    on.titled("the study again", |title| title.contains("Scans"));
    rest(&on);
    on.done("the study is open again");
}

/// Waits for words and presses them.
pub fn press(on: &Traveller, words: &str, letters: Letters) {
    let place = on.see(words, letters);
    on.screen.point(place.middle());
    on.screen.click();
    let _ = on.window.settle();
}

/// Waits until everything is up to date.
fn rest(on: &Traveller) {
    on.see_up_to_date(|place| {
        on.screen.point(place.middle());
        on.screen.click();
    });
}

/// Presses the last of several places where words stand: that of a dialog lies over the page.
fn press_last(on: &Traveller, words: &str, letters: Letters) {
    let _ = on.see(words, letters);
    let place = *on.places(words, letters).last().expect("it was seen");
    on.screen.point(place.middle());
    on.screen.click();
    let _ = on.window.settle();
}

/// Turns the wheel and moves the pointer over all that answers it.
fn wander(on: &Traveller) {
    for turn in 0..24 {
        on.screen.wheel(turn % 8 < 5);
        on.screen
            .point((300.0 + 37.0 * turn as f32, 120.0 + 26.0 * turn as f32));
    }
}

/// Drags the strength in the figure whose title stands at a place.
fn drag(on: &Traveller, title: Place) {
    let before = on.screen.look();
    let (x, y) = (title.x + 330.0, title.y + 150.0);
    on.screen.point((x, y));
    on.screen.hold(true);
    for step in 1..=12 {
        on.screen.point((x + 8.0 * step as f32, y));
    }
    let _ = on.window.settle();
    on.changed("the line that follows the pointer", &before);
    on.screen.hold(false);
    let _ = on.window.settle();
}

/// The chosen strength among the facts.
pub fn strength(facts: &str) -> String {
    facts
        .lines()
        .find(|line| line.contains("chosen strength"))
        .expect("the fit tells its strength")
        .to_owned()
}
