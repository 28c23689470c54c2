//! A study is read and changed on its page.

use crate::support::Bench;
use iced::keyboard::key::Named;
use widefold::app::Message;
use widefold::app::shortcut::Shortcut;
use widefold::study::settings::fit::Penalty;

#[test]
fn a_recorded_study_is_shown_with_its_results_and_nothing_runs() {
    let mut bench = Bench::new(1280.0, 800.0);
    assert!(bench.sees("Sweet dishes"));
    let session = bench.app.study().expect("a study is open").session();
    assert!(session.run().is_none());
    assert!(!session.is_modified());
    let title = bench.fit_title();
    bench.go_to(&title);
    assert!(bench.sees("current"));
}

#[test]
fn a_word_is_changed_by_pressing_it_and_undo_takes_it_back() {
    let mut bench = Bench::new(1280.0, 800.0);
    let title = bench.fit_title();
    bench.go_to(&title);
    bench.press("lasso");
    bench.press("ridge");
    assert_eq!(bench.fit().penalty, Penalty::Ridge);
    assert_eq!(bench.undo_label().as_deref(), Some("change penalty"));
    let _ = bench.app.update(Message::Shortcut(Shortcut::Undo));
    assert_eq!(bench.fit().penalty, Penalty::Lasso);
    assert_eq!(bench.undo_label(), None);
}

#[test]
fn what_draws_on_a_changed_word_is_due_at_once() {
    let mut bench = Bench::new(1280.0, 800.0);
    let title = bench.fit_title();
    bench.go_to(&title);
    bench.press("lasso");
    bench.press("ridge");
    let session = bench.app.study().expect("a study is open").session();
    assert!(session.is_due());
    let state = |title: &str| {
        let id = session.study().titled(title).expect("the cell is there").id;
        session.standings().get(id).state.word()
    };
    assert_eq!(state(&title), "due");
    assert_eq!(state("How honest?"), "due");
    let data = &session.study().cells()[session
        .study()
        .cells()
        .iter()
        .position(|cell| cell.settings.kind() == widefold::study::cell::Kind::Data)
        .expect("there is data")];
    assert_eq!(session.standings().get(data.id).state.word(), "current");
}

#[test]
fn a_draft_that_cannot_stand_stays_in_the_editor_with_what_would_mend_it() {
    let mut bench = Bench::new(1280.0, 1400.0);
    let title = bench.fit_title();
    bench.go_to(&title);
    let before = bench.fit();
    // The number of strengths.
    bench.press("20");
    let set = "More";
    assert!(bench.sees(set));
    bench.tab_to_field();
    bench.type_letters("x");
    bench.key(Named::Enter);
    assert!(bench.sees("Less"), "the editor is still open");
    assert_eq!(bench.fit(), before);
    let _ = bench.app.update(Message::Shortcut(Shortcut::Escape));
    assert!(!bench.sees("Less"), "escape closes it");
}

#[test]
fn words_are_reached_and_pressed_by_the_keyboard_alone() {
    let mut bench = Bench::new(1280.0, 800.0);
    let title = bench.fit_title();
    bench.go_to(&title);
    let mut n_steps = 0;
    while !bench.has_focus("lasso") || n_steps == 0 {
        n_steps += 1;
        assert!(n_steps < 300, "the word was never reached");
        bench.tab();
    }
    bench.key(Named::Space);
    // To the third choice: what has the focus is brought into sight.
    for _ in 0..3 {
        bench.tab();
    }
    assert!(bench.sees("elastic net"), "the choices are open");
}

#[test]
fn the_reading_view_hides_every_control() {
    let mut bench = Bench::new(1280.0, 800.0);
    assert!(bench.sees("Bring up to date"));
    let _ = bench.app.update(Message::Shortcut(Shortcut::Read));
    bench.act(&[]);
    assert!(!bench.sees("Bring up to date"));
    assert!(!bench.sees("Write"));
    assert!(bench.sees("Leave the reading view"));
}

#[test]
fn closing_with_unsaved_changes_asks_first() {
    let mut bench = Bench::new(1280.0, 800.0);
    let title = bench.fit_title();
    bench.go_to(&title);
    bench.press("lasso");
    bench.press("ridge");
    let _ = bench.app.update(Message::Shortcut(Shortcut::Close));
    bench.act(&[]);
    assert!(bench.sees("changes that have not been saved"));
    bench.press("Stay");
    assert!(bench.app.study().is_some());
    let _ = bench.app.update(Message::Shortcut(Shortcut::Close));
    bench.act(&[]);
    bench.press("Give the changes up");
    assert!(bench.app.study().is_none());
}

#[test]
fn cells_are_added_renamed_moved_and_removed() {
    let mut bench = Bench::new(1280.0, 800.0);
    let n_cells = |bench: &Bench| {
        let study = bench.app.study().expect("a study is open");
        study.session().study().cells().len()
    };
    let before = n_cells(&bench);
    let title = bench.fit_title();
    bench.go_to(&title);
    bench.press("More");
    bench.press("Duplicate");
    assert_eq!(n_cells(&bench), before + 1);
    let label = format!("duplicate {title}");
    assert_eq!(bench.undo_label().as_deref(), Some(label.as_str()));
    let _ = bench.app.update(Message::Shortcut(Shortcut::Undo));
    assert_eq!(n_cells(&bench), before);
}

#[test]
fn a_narrow_window_folds_the_margin_and_hides_nothing() {
    let mut bench = Bench::new(820.0, 900.0);
    let title = bench.fit_title();
    bench.go_to(&title);
    assert!(bench.sees("lasso"));
}

#[test]
fn a_dialog_that_closes_leaves_the_page_where_it_was() {
    let mut bench = Bench::new(1280.0, 800.0);
    let title = bench.fit_title();
    bench.go_to(&title);
    bench.act(&[
        widefold::app::harness::moved(600.0, 400.0),
        widefold::app::harness::wheel(0.0, -3.0),
    ]);
    let before = bench.place_of("chosen");
    let _ = bench.app.update(Message::Shortcut(Shortcut::HandOver));
    bench.act(&[]);
    assert!(bench.sees("the workbook"));
    let _ = bench.app.update(Message::Shortcut(Shortcut::Escape));
    bench.act(&[]);
    assert!(!bench.sees("the workbook"));
    assert_eq!(bench.place_of("chosen"), before);
}

#[test]
fn the_table_of_a_recorded_study_is_read_when_it_is_opened() {
    use widefold::app::part::cell;
    use widefold::app::screen::study;
    let mut bench = Bench::new(1280.0, 1400.0);
    let id = bench.cell("Tables");
    let open = Box::new(cell::Message::OpenTable);
    bench.send(Message::Study(study::Message::Cell(id, open)));
    bench.go_to("Tables");
    bench.scroll(500.0);
    assert!(bench.sees("24 samples, 33 columns"));
    let session = bench.app.study().expect("a study is open").session();
    assert!(!session.is_due(), "and nothing has become due by it");
}

#[test]
fn the_editor_of_a_column_knows_the_columns_of_a_recorded_study() {
    let mut bench = Bench::new(1280.0, 1400.0);
    let id = bench.cell("Tables");
    bench.go_to("Tables");
    // “Predict sweetness”: the second sentence, its first word.
    let word = Box::new(widefold::app::part::cell::Message::Word(1, 1));
    bench.send(Message::Study(widefold::app::screen::study::Message::Cell(
        id, word,
    )));
    assert!(bench.sees("33 of 33 columns."), "their names were read");
}

#[test]
fn every_word_of_every_cell_opens_its_editor_in_the_window() {
    use widefold::app::part::cell;
    use widefold::app::screen::study;
    use widefold::report::sentence::Piece;
    let mut bench = Bench::new(1280.0, 900.0);
    let session = bench.app.study().expect("a study is open").session();
    let context = widefold::report::Context {
        study: session.study(),
        standings: session.standings(),
        ledger: session.ledger(),
    };
    let mut words = Vec::new();
    for cell in session.study().cells() {
        let sentences = widefold::report::cell(&context, cell.id).sentences;
        for (nth, sentence) in sentences.iter().enumerate() {
            for (at, piece) in sentence.pieces.iter().enumerate() {
                if matches!(piece, Piece::Word(_)) {
                    words.push((cell.id, nth, at));
                }
            }
        }
    }
    assert!(words.len() > 60, "{} words", words.len());
    for (id, nth, at) in words {
        let word = || {
            Message::Study(study::Message::Cell(
                id,
                Box::new(cell::Message::Word(nth, at)),
            ))
        };
        bench.send(word());
        let typing = bench.app.study().expect("a study is open").is_typing();
        assert!(typing, "word {at} of sentence {nth} opens its editor");
        bench.send(Message::Shortcut(Shortcut::Escape));
        let typing = bench.app.study().expect("a study is open").is_typing();
        assert!(!typing, "escape closes it");
    }
    let session = bench.app.study().expect("a study is open").session();
    assert!(!session.is_modified(), "looking changes nothing");
}
