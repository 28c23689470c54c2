//! What goes wrong is told calmly, with a way out, and nothing is lost.

use crate::support::{Bench, Folder, recorded};
use iced::Size;
use widefold::app::dialog::path;
use widefold::app::editor::place;
use widefold::app::screen::{study, welcome};
use widefold::app::shortcut::Shortcut;
use widefold::app::{App, Message};
use widefold::store;
use widefold::store::preferences::Preferences;
use widefold::store::rescue::Rescue;

const SIZE: Size = Size::new(1280.0, 900.0);

fn user(folder: &Folder, preferences: Preferences) -> Bench {
    let rescue = Rescue::at(&folder.path("rescue"));
    let app = App::of_user(preferences, folder.path("settings"), rescue, SIZE);
    Bench::on(app, SIZE)
}

/// Opens a file as a press on the list of recent studies does.
fn open(bench: &mut Bench, folder: &Folder, name: &str) {
    let recent = welcome::Message::Recent(folder.path(name));
    bench.send(Message::Welcome(recent));
}

/// Chooses a place in the dialog that is open.
fn choose(bench: &mut Bench, path: &std::path::Path) {
    let typed = place::Message::Typed(path.display().to_string());
    bench.send(Message::Path(path::Message::Place(typed)));
    bench.send(Message::Path(path::Message::Place(place::Message::Done)));
}

fn press_a_word(bench: &mut Bench) {
    let title = bench.fit_title();
    bench.go_to(&title);
    bench.press("lasso");
    bench.press("ridge");
}

#[test]
fn a_file_that_is_no_study_can_be_taken_as_a_table_instead() {
    let folder = Folder::new("no-study");
    folder.write("lab.txt", b"name,salt\na,1\nb,2\n");
    let mut bench = user(&folder, Preferences::default());
    bench.send(Message::Shortcut(Shortcut::Open));
    choose(&mut bench, &folder.path("lab.txt"));
    assert!(bench.sees("This file is not a study."));
    assert!(bench.sees("Look for a study"));
    bench.press("Start from it as a table");
    assert!(bench.sees("2 rows, 2 columns"));
}

#[test]
fn a_damaged_study_is_told_and_the_one_that_was_open_stays() {
    let folder = Folder::new("damaged");
    folder.write("study.widefold", b"PK\x03\x04 and nothing more");
    let mut bench = Bench::new(SIZE.width, SIZE.height);
    press_a_word(&mut bench);
    bench.send(Message::Welcome(welcome::Message::Recent(
        folder.path("study.widefold"),
    )));
    assert!(bench.sees("Look for a study"));
    bench.press("Go on");
    let session = bench.app.study().expect("it is still open").session();
    assert_eq!(session.study().title(), "Sweet dishes");
    assert!(session.is_modified());
}

#[test]
fn a_study_that_has_vanished_can_be_taken_off_the_list() {
    let folder = Folder::new("vanished");
    let mut preferences = Preferences::default();
    preferences.note_recent(&folder.path("gone.widefold"));
    let mut bench = user(&folder, preferences);
    assert!(bench.sees("gone.widefold"));
    open(&mut bench, &folder, "gone.widefold");
    assert!(bench.sees("There is no file"));
    bench.press("Take it off the list");
    assert!(!bench.sees("gone.widefold"));
    let kept = Preferences::load(&folder.path("settings"));
    assert!(kept.recent.is_empty(), "and it does not come back");
}

#[test]
fn a_study_whose_table_has_vanished_opens_and_says_which() {
    let folder = Folder::new("table-gone");
    let text = r#"{"format": 1, "title": "Left alone", "cells": [
        {"id": 1, "kind": "data", "title": "scans", "tables": [{"file": "gone.csv"}]}]}"#;
    folder.write("study.json", text.as_bytes());
    let mut bench = user(&folder, Preferences::default());
    open(&mut bench, &folder, "study.json");
    assert!(bench.sees("gone.csv"), "the table is named");
    bench.press("Go on");
    assert!(bench.sees("Left alone"), "the study is open all the same");
}

#[test]
fn a_study_from_the_future_is_shown_and_never_replaced_without_a_question() {
    let folder = Folder::new("future");
    let text = br#"{"format": 9, "title": "Not yet", "cells": [
        {"id": 1, "kind": "prose", "title": "words", "text": "Known words."},
        {"id": 2, "kind": "oracle", "title": "unknown"}]}"#;
    folder.write("study.json", text);
    let mut bench = user(&folder, Preferences::default());
    open(&mut bench, &folder, "study.json");
    assert!(bench.sees("saved by a newer version (format 9)"));
    bench.press("Go on");
    assert!(bench.sees("Known words."));
    bench.send(Message::Shortcut(Shortcut::Save));
    assert!(bench.sees("Save the study as"), "a place is asked for");
    choose(&mut bench, &folder.path("study.json"));
    assert!(bench.sees("There is a file “study.json” already."));
    assert_eq!(folder.read("study.json"), text, "nothing was written yet");
    choose(&mut bench, &folder.path("copy.widefold"));
    assert!(folder.path("copy.widefold").is_file());
    assert_eq!(folder.read("study.json"), text);
}

#[test]
fn a_save_that_fails_asks_for_another_place_and_loses_neither_the_file_nor_the_work() {
    let folder = Folder::new("save");
    let mut bench = Bench::new(SIZE.width, SIZE.height);
    bench.send(Message::Shortcut(Shortcut::Save));
    choose(&mut bench, &folder.path("dishes.widefold"));
    assert!(
        !bench
            .app
            .study()
            .expect("it is open")
            .session()
            .is_modified()
    );
    let before = folder.read("dishes.widefold");
    press_a_word(&mut bench);
    // A file where a folder is wanted answers as a disk that cannot be written to.
    folder.write("wall", b"");
    bench.send(Message::Shortcut(Shortcut::SaveAs));
    choose(&mut bench, &folder.path("wall").join("dishes.widefold"));
    assert!(
        bench.sees("Save the study as"),
        "another place is asked for"
    );
    assert!(bench.sees("There is no folder"), "and why");
    assert_eq!(folder.read("dishes.widefold"), before);
    assert!(
        bench
            .app
            .study()
            .expect("it is open")
            .session()
            .is_modified()
    );
    choose(&mut bench, &folder.path("elsewhere.widefold"));
    assert!(
        !bench
            .app
            .study()
            .expect("it is open")
            .session()
            .is_modified()
    );
    let saved = store::open(&folder.path("elsewhere.widefold")).expect("it was saved");
    assert_eq!(
        saved.study,
        *bench.app.study().expect("it is open").session().study()
    );
}

#[test]
fn a_name_that_says_no_form_is_asked_for_again() {
    let folder = Folder::new("form");
    let mut bench = Bench::new(SIZE.width, SIZE.height);
    bench.send(Message::Shortcut(Shortcut::Save));
    choose(&mut bench, &folder.path("dishes.txt"));
    assert!(bench.sees("does not say in which form to save"));
    assert!(bench.sees("Save the study as"));
    assert!(!folder.path("dishes.txt").exists());
}

#[test]
fn exports_that_cannot_be_written_are_asked_for_again_as_they_were_wished() {
    use widefold::app::dialog::hand_over::Message as HandOver;
    let folder = Folder::new("export");
    folder.write("wall", b"");
    let mut bench = Bench::new(SIZE.width, SIZE.height);
    bench.send(Message::Shortcut(Shortcut::HandOver));
    let wish = folder.path("wall").join("dishes");
    bench.send(Message::HandOver(HandOver::Typed(
        wish.display().to_string(),
    )));
    bench.send(Message::HandOver(HandOver::WriteUp));
    // Only 24 dishes: a stop stands, and is overridden with a reason.
    let reason = "Everybody who reads it knows.".to_owned();
    bench.send(Message::HandOver(HandOver::Despite(reason)));
    bench.send(Message::HandOver(HandOver::Write));
    assert!(bench.sees("There is no folder"));
    assert!(
        bench.sees("without the methods write-up"),
        "the wish is kept"
    );
    let wish = folder.path("dishes").display().to_string();
    bench.send(Message::HandOver(HandOver::Typed(wish)));
    bench.send(Message::HandOver(HandOver::Write));
    assert!(folder.path("dishes.xlsx").is_file());
    assert!(!folder.path("dishes.md").exists());
}

#[test]
fn unsaved_work_is_offered_after_a_crash_and_forgotten_once_it_is_saved() {
    let folder = Folder::new("rescue");
    {
        let mut bench = user(&folder, Preferences::default());
        bench.app.show(recorded());
        press_a_word(&mut bench);
        let task = bench.app.keep();
        bench.finish(task);
        // Here the process would end without another word.
    }
    let mut bench = user(&folder, Preferences::default());
    assert!(bench.sees("Go on with “Sweet dishes”"));
    bench.press("Go on with “Sweet dishes”");
    let session = bench.app.study().expect("it is open").session();
    assert!(session.is_modified(), "it lies nowhere else");
    assert_eq!(
        bench.fit().penalty,
        widefold::study::settings::fit::Penalty::Ridge
    );
    bench.send(Message::Shortcut(Shortcut::Save));
    choose(&mut bench, &folder.path("dishes.widefold"));
    let left = Rescue::at(&folder.path("rescue")).left_behind().0;
    assert!(left.is_empty(), "{left:?}");
}

#[test]
fn rescued_work_that_is_closed_without_saving_asks_first() {
    let folder = Folder::new("rescue-close");
    {
        let mut bench = user(&folder, Preferences::default());
        bench.app.show(recorded());
        press_a_word(&mut bench);
        let task = bench.app.keep();
        bench.finish(task);
    }
    let mut bench = user(&folder, Preferences::default());
    bench.press("Go on with “Sweet dishes”");
    bench.send(Message::Shortcut(Shortcut::Close));
    assert!(bench.sees("changes that have not been saved"));
    bench.press("Give the changes up");
    assert!(!bench.sees("Go on with “Sweet dishes”"), "it was given up");
}

#[test]
fn what_was_kept_is_not_written_again_while_nothing_changes() {
    let folder = Folder::new("keep-once");
    let mut bench = user(&folder, Preferences::default());
    bench.app.show(recorded());
    let task = bench.app.keep();
    assert!(
        widefold::app::harness::done(task).messages.is_empty(),
        "it is not changed"
    );
    press_a_word(&mut bench);
    let task = bench.app.keep();
    assert_eq!(widefold::app::harness::done(task).messages.len(), 1);
    let task = bench.app.keep();
    assert!(widefold::app::harness::done(task).messages.is_empty());
}

#[test]
fn a_figure_is_saved_in_the_form_that_its_name_asks_for_and_copied_as_a_drawing() {
    use widefold::app::part::{block, cell};
    let folder = Folder::new("figure");
    let mut bench = Bench::new(SIZE.width, SIZE.height);
    let title = bench.fit_title();
    let id = bench.cell(&title);
    let figure = bench.first_figure(id);
    let in_block = |message| {
        let message = cell::Message::Block(figure, message);
        Message::Study(study::Message::Cell(id, Box::new(message)))
    };
    bench.send(in_block(block::Message::SaveFigure(figure)));
    assert!(bench.sees("Save the figure as"));
    choose(&mut bench, &folder.path("curve"));
    let drawing = folder.read("curve.svg");
    assert!(drawing.starts_with(b"<svg"), "a drawing");
    let picture = image::load_from_memory(&folder.read("curve.png")).expect("a picture");
    assert!(
        picture.width() > 800,
        "crisp: twice the size of the page’s text"
    );
    bench.send(in_block(block::Message::SaveFigure(figure)));
    choose(&mut bench, &folder.path("only.png"));
    assert!(folder.path("only.png").is_file());
    assert!(!folder.path("only.svg").exists());
    bench.send(in_block(block::Message::SaveFigure(figure)));
    choose(&mut bench, &folder.path("curve"));
    assert!(bench.sees("There is a file “curve.svg” already."));
    let _ = bench.app.update(Message::Shortcut(Shortcut::Escape));
    bench.send(in_block(block::Message::CopyFigure(figure)));
    assert_eq!(
        bench.copied.as_deref().map(str::as_bytes),
        Some(&drawing[..])
    );
}

#[test]
fn what_the_user_likes_is_remembered() {
    let folder = Folder::new("likes");
    let mut bench = user(&folder, Preferences::default());
    bench.app.show(recorded());
    bench.send(Message::Shortcut(Shortcut::Turn));
    bench.send(Message::Shortcut(Shortcut::Larger));
    use widefold::app::part::head;
    use widefold::app::session::Following;
    let follow = head::Message::Follow(Following::WhenAsked);
    bench.send(Message::Study(study::Message::Head(follow)));
    let kept = Preferences::load(&folder.path("settings"));
    let again = App::of_user(
        kept.clone(),
        folder.path("settings"),
        Rescue::at(&folder.path("rescue")),
        SIZE,
    );
    assert_eq!(again.mode(), widefold::app::theme::Mode::Dark);
    assert!((again.scale() - 1.1).abs() < 1e-6);
    assert_eq!(kept.follow, widefold::store::preferences::Follow::WhenAsked);
}

#[test]
fn a_file_that_is_dropped_goes_where_it_belongs() {
    use iced::window;
    let folder = Folder::new("dropped");
    folder.write("scans.csv", b"scan,salt,r1\na,1,0.1\nb,2,0.2\nc,3,0.3\n");
    folder.write("lab.csv", b"scan,fat\na,1\nb,2\nc,3\n");
    let mut bench = user(&folder, Preferences::default());
    let drop = |name: &str| {
        Message::Window(
            window::Id::unique(),
            window::Event::FileDropped(folder.path(name)),
        )
    };
    bench.send(drop("scans.csv"));
    bench.send(drop("lab.csv"));
    assert!(bench.sees("scans.csv") && bench.sees("lab.csv"));
    assert!(bench.sees("3 rows, 2 columns"));
    // A study is opened, whatever was begun.
    let mut other = Bench::new(SIZE.width, SIZE.height);
    other.send(Message::Shortcut(Shortcut::Save));
    choose(&mut other, &folder.path("dishes.widefold"));
    bench.send(drop("dishes.widefold"));
    assert!(bench.sees("Sweet dishes"));
    // Over an open study a table goes to the editor that asks for one.
    bench.send(drop("lab.csv"));
    assert!(bench.sees("press that name in a Data or Score cell first"));
}
