//! The journey with the keyboard alone.

use crate::eyes::Letters;
use crate::mouse::strength;
use crate::traveller::Traveller;
use std::path::Path;

/// Makes the journey.
pub fn travel(folder: &Path, shots: &Path) {
    let mut on = Traveller::set_out(folder, shots);
    let _ = on.see("Start from tables", Letters::Name);
    on.screen.keys("ctrl+n");
    let _ = on.see("scans.csv", Letters::Plain);
    write_over(&on, &on.folder.join("scans.csv").display().to_string());
    let _ = on.see("40 rows, 26 columns", Letters::Plain);
    on.done("the first table is open");

    press(&on, "Add a table", Letters::Plain);
    press(&on, "lab.csv", Letters::Plain);
    let _ = on.see("20 rows, 3 columns", Letters::Plain);
    to_jump(&on);
    on.screen.keys("shift+Tab");
    on.screen.write("sweet");
    on.screen.keys("Return");
    press(&on, "outcome", Letters::Plain);
    on.see_gone("a column still to be chosen", Letters::Reading);
    press(&on, "scans.csv", Letters::Strong);
    let _ = on.see("40 rows, 26 columns", Letters::Plain);
    to_jump(&on);
    on.screen.keys("shift+Tab ctrl+a");
    on.screen.write("dish");
    on.screen.keys("Return");
    press(&on, "unit", Letters::Plain);
    let _ = on.see("are kept together", Letters::Reading);
    on.done("outcome and units are chosen");

    press(&on, "Make the study", Letters::Strong);
    on.titled("a study", |title| title.contains("Scans"));
    rest(&on);
    on.done("the fit is there");

    on.screen.keys("ctrl+s");
    let _ = on.see("Save the study as", Letters::Title);
    write_over(
        &on,
        &on.folder.join("dishes.widefold").display().to_string(),
    );
    let _ = on.file("dishes.widefold");
    on.see_gone("Save the study as", Letters::Title);
    let before = on.facts("dishes.widefold");
    assert!(before.contains("sweetness"), "the outcome is in the facts");
    on.done("the study is saved");

    press(&on, "How honest?", Letters::Strong);
    let _ = on.see("The ladder", Letters::Strong);
    on.done("the ladder is looked at");

    press(&on, "Error and strength", Letters::Strong);
    let _ = on.see("Error against penalty strength", Letters::Strong);
    let mut n_keys = 0;
    let moved = loop {
        let still = on.screen.look();
        on.screen.keys("Tab");
        let _ = on.window.settle();
        on.screen.keys("Right Right Right Right Right Right");
        let _ = on.window.settle();
        if !on.places("Enter sets it", Letters::Plain).is_empty() {
            break still;
        }
        n_keys += 1;
        assert!(n_keys < 40, "the figure never got the focus");
    };
    on.changed("the line that follows the keys", &moved);
    on.screen.keys("Return");
    let _ = on.window.settle();
    rest(&on);
    on.titled("changed", |title| title.contains('•'));
    on.screen.keys("ctrl+s");
    on.titled("saved", |title| !title.contains('•'));
    let after = on.facts("dishes.widefold");
    assert_ne!(strength(&before), strength(&after), "the strength moved");
    on.done("the strength is moved");

    on.screen.keys("ctrl+z");
    on.titled("changed again", |title| title.contains('•'));
    on.screen.keys("ctrl+shift+z");
    rest(&on);
    on.done("undo and redo");

    press(&on, "sweetness lasso", Letters::Strong);
    let _ = on.see("Weights, not effects", Letters::Strong);
    on.done("the margin is read");

    on.screen.keys("ctrl+e");
    let _ = on.see("Hand over", Letters::Title);
    write_over(&on, &on.folder.join("hand").display().to_string());
    let workbook = on.file("hand.xlsx");
    assert!(workbook.starts_with(b"PK"), "a workbook is a zip");
    let text = String::from_utf8(on.file("hand.md")).expect("the write-up is text");
    assert!(
        text.contains("sweetness"),
        "the write-up is about the outcome"
    );
    on.done("both hand-overs are written");

    on.screen.keys("ctrl+s");
    on.titled("saved", |title| !title.contains('•'));
    on.screen.keys("ctrl+w");
    let _ = on.see("Start from tables", Letters::Name);
    on.titled("no study", |title| !title.contains("Scans"));
    on.screen.keys("ctrl+o");
    let _ = on.see("Open a study", Letters::Title);
    write_over(
        &on,
        &on.folder.join("dishes.widefold").display().to_string(),
    );
    on.titled("the study again", |title| title.contains("Scans"));
    rest(&on);
    on.done("the study is open again");
}

/// Waits until everything is up to date.
fn rest(on: &Traveller) {
    on.see_up_to_date(|_| on.screen.keys("Escape"));
}

/// Goes to “Jump”, beside whose field the next letters are wanted.
fn to_jump(on: &Traveller) {
    let _ = on.see("Jump", Letters::Plain);
    on.tab_to("Jump", Letters::Plain);
}

/// Gives words the focus and presses them.
fn press(on: &Traveller, words: &str, letters: Letters) {
    let _ = on.see(words, letters);
    on.tab_to(words, letters);
    on.screen.keys("Return");
    let _ = on.window.settle();
}

/// Writes over what stands in the field that has the focus, and sends it off.
fn write_over(on: &Traveller, letters: &str) {
    let _ = on.window.settle();
    on.screen.keys("ctrl+a");
    on.screen.write(letters);
    on.screen.keys("Return");
    let _ = on.window.settle();
}
