//! Every setting of every kind of cell, through its word and its editor.

use super::*;
use crate::report::sentence::{Editor as Sort, Piece, Wholeness};
use crate::report::{self, Context};
use crate::study::cell::Cell;
use crate::study::edit::Edit;
use crate::study::ledger::Ledger;
use crate::study::settings::slot::Slot;
use crate::study::settings::spread;
use std::collections::BTreeSet;
use std::sync::Arc;

/// A study with the cells that the settings name, and last a cell with these settings.
fn study_with(settings: &Settings) -> (Study, CellId) {
    study_on(Settings::Data(spread::cellar()), settings)
}

/// The same, on these samples.
fn study_on(data: Settings, settings: &Settings) -> (Study, CellId) {
    let mut study = Study::new("Every word");
    let first = |all: Vec<Settings>| all.into_iter().next().expect("there are some");
    let fits: Vec<Settings> = spread::fit().into_iter().map(Settings::Fit).collect();
    let cells = [
        data,
        first(
            spread::prepare()
                .into_iter()
                .map(Settings::Prepare)
                .collect(),
        ),
        first(fits.clone()),
        first(fits),
        settings.clone(),
    ];
    let mut last = CellId::new(0);
    for (at, settings) in cells.into_iter().enumerate() {
        last = study.next_id();
        let cell = Cell {
            id: last,
            title: format!("cell {}", at + 1),
            settings,
        };
        let _ = study.apply(Edit::Insert { at, cell }).expect("it fits");
    }
    (study, last)
}

/// Every word of a cell, with the places of its sentence and of itself.
fn words(study: &Study, id: CellId) -> Vec<((usize, usize), Word)> {
    let standings = crate::eval::standing::Standings::default();
    let ledger = Ledger::default();
    let context = Context {
        study,
        standings: &standings,
        ledger: &ledger,
    };
    let mut words = Vec::new();
    for (nth, sentence) in report::cell(&context, id).sentences.iter().enumerate() {
        for (at, piece) in sentence.pieces.iter().enumerate() {
            if let Piece::Word(word) = piece {
                words.push(((nth, at), word.clone()));
            }
        }
    }
    words
}

fn names() -> Names {
    let names = [
        "scan", "wheel", "cave", "salt", "900 nm", "901 nm", "902 nm",
    ];
    Arc::new(names.map(str::to_owned).into())
}

fn open(study: &Study, id: CellId, at: (usize, usize), word: &Word) -> Open {
    Open::new(study, id, at, word, names(), None).0
}

/// What an editor would set after these messages.
fn committed(open: &mut Open, messages: Vec<Message>) -> Option<Value> {
    let mut last = None;
    for message in messages {
        if let Action::Commit(value) = open.update(message) {
            last = Some(value);
        }
    }
    last
}

#[test]
fn every_setting_of_tables_and_of_preparation_has_a_word() {
    let is_meant =
        |settings: &Settings| matches!(settings, Settings::Data(_) | Settings::Prepare(_));
    for settings in spread::all().into_iter().filter(is_meant) {
        // Some settings are told only where the kind of outcome has them.
        let mut told: BTreeSet<Slot> = BTreeSet::new();
        for data in spread::data() {
            let (study, id) = study_on(Settings::Data(data), &settings);
            told.extend(words(&study, id).into_iter().map(|(_, word)| word.slot));
        }
        for slot in settings.slots() {
            assert!(told.contains(&slot), "{slot:?} of {settings:?}");
        }
    }
}

#[test]
fn every_number_takes_its_bounds_and_nothing_beyond_them_or_that_is_no_number() {
    let mut n_numbers = 0;
    for settings in spread::all() {
        let (study, id) = study_with(&settings);
        for (at, word) in words(&study, id) {
            let Sort::Number { least, most, whole } = word.editor else {
                continue;
            };
            n_numbers += 1;
            let set = |typed: String| {
                let mut open = open(&study, id, at, &word);
                let typed = vec![
                    Message::Line(line::Message::Typed(typed)),
                    Message::Line(line::Message::Done),
                ];
                let value = committed(&mut open, typed)?;
                Some(changed(&study, &open, value))
            };
            let refused = set("seven".to_owned()).expect("the draft is handed over");
            let problem = refused.expect_err("this is no number");
            let says = problem.found.contains("must be") && problem.found.contains("seven");
            assert!(says, "{:?}: {problem}", word.slot);
            // A bound that is as large as a number can be has nothing beyond it.
            let beyond = [(least, least - 1.0), (most, most + 1.0)];
            for (bound, beyond) in beyond {
                if !bound.is_finite() || bound.abs() > 1e9 {
                    continue;
                }
                if let Some(result) = set(beyond.to_string()) {
                    assert!(result.is_err(), "{beyond} in {:?}", word.slot);
                }
                // An open bound is refused itself: it then belongs to the numbers that may not
                // stand there, which is for the slot to say.
                if whole == Wholeness::Whole
                    && let Some(result) = set(bound.to_string())
                {
                    let held = result.is_ok();
                    assert!(held || is_tied(&word.slot), "{bound} in {:?}", word.slot);
                }
            }
        }
    }
    assert!(n_numbers > 100, "{n_numbers} numbers were tried");
}

/// Whether the numbers that a place takes depend on another place of the same step.
fn is_tied(slot: &Slot) -> bool {
    matches!(slot, Slot::Prepare(_))
}

#[test]
fn every_choice_can_be_taken() {
    for settings in spread::all() {
        let (study, id) = study_with(&settings);
        for (at, word) in words(&study, id) {
            let Sort::Choice(choices) = &word.editor else {
                continue;
            };
            assert!(choices.len() > 1, "{:?} leaves no choice", word.slot);
            for nth in 0..choices.len() {
                let mut open = open(&study, id, at, &word);
                let took = Message::Choice(choice::Message::Took(nth));
                // The choice that stands closes the editor.
                if let Some(value) = committed(&mut open, vec![took]) {
                    let result = changed(&study, &open, value);
                    assert!(result.is_ok(), "{:?}: {result:?}", word.slot);
                }
            }
        }
    }
}

#[test]
fn columns_cells_steps_and_lists_hand_over_what_can_stand() {
    let mut n_tried = 0;
    for settings in spread::all() {
        let (study, id) = study_with(&settings);
        for (at, word) in words(&study, id) {
            let mut open = open(&study, id, at, &word);
            let messages = match &word.editor {
                Sort::Column => vec![
                    Message::Column(column::Message::Typed("wheel".to_owned())),
                    Message::Column(column::Message::Done),
                ],
                Sort::Columns => vec![
                    Message::Columns(columns::Message::Took(4)),
                    Message::Columns(columns::Message::Took(6)),
                    Message::Columns(columns::Message::Done),
                ],
                Sort::Names => vec![
                    Message::Names(names::Message::Took(2)),
                    Message::Names(names::Message::Done),
                ],
                Sort::Steps => vec![
                    Message::Steps(steps::Message::Add(0, 0)),
                    Message::Steps(steps::Message::Done),
                ],
                Sort::Cell(kinds) => {
                    let drawn = settings.draws_on();
                    let fits = |cell: &&Cell| {
                        cell.id != id
                            && kinds.contains(&cell.settings.kind())
                            // A fit cannot be compared twice.
                            && (kinds.len() > 1 || !drawn.contains(&cell.id))
                    };
                    let Some(other) = study.cells().iter().find(fits) else {
                        continue;
                    };
                    vec![Message::Cell(cell::Message::Took(other.id))]
                }
                Sort::Number { .. }
                | Sort::Choice(_)
                | Sort::Text
                | Sort::File
                | Sort::List
                | Sort::Acts => continue,
            };
            n_tried += 1;
            let value = committed(&mut open, messages).expect("it is handed over");
            let result = changed(&study, &open, value);
            assert!(result.is_ok(), "{:?}: {result:?}", word.slot);
        }
    }
    assert!(n_tried > 50, "{n_tried} words were tried");
}

#[test]
fn a_list_that_is_left_as_it_was_changes_nothing() {
    for settings in spread::all() {
        let (study, id) = study_with(&settings);
        for (at, word) in words(&study, id) {
            if word.editor != Sort::List {
                continue;
            }
            let mut open = open(&study, id, at, &word);
            let Editor::List(list) = &open.editor else {
                panic!("{:?} is a list", word.slot);
            };
            let typed = list.typed().to_owned();
            let done = || Message::List(list::Message::Done);
            assert!(matches!(open.update(done()), Action::Close));
            // Typed anew, letter for letter, it means the same.
            let anew = |text: &str| Message::List(list::Message::Typed(text.to_owned()));
            let again = vec![anew(&format!("{typed};")), done()];
            if !typed.is_empty() {
                let value = committed(&mut open, again).expect("the draft is handed over");
                let result = changed(&study, &open, value).expect("it stood there before");
                assert_eq!(result, settings, "{:?}", word.slot);
            }
        }
    }
}

#[test]
fn what_is_refused_stays_in_the_editor_with_what_would_mend_it() {
    let settings = spread::all();
    let fit = settings
        .iter()
        .find(|settings| matches!(settings, Settings::Fit(_)))
        .expect("there is a fit");
    let (study, id) = study_with(fit);
    let is_number = |word: &Word| matches!(word.editor, Sort::Number { .. });
    let (at, word) = words(&study, id)
        .into_iter()
        .find(|(_, word)| is_number(word))
        .expect("a fit has numbers");
    let mut open = open(&study, id, at, &word);
    let typed = Message::Line(line::Message::Typed("minus nine".to_owned()));
    let _ = open.update(typed);
    assert_eq!(open.draft(), Some(Value::Text("minus nine".to_owned())));
    let value = committed(&mut open, vec![Message::Line(line::Message::Done)]);
    let value = value.expect("the draft is handed over");
    open.problem = changed(&study, &open, value.clone()).err();
    assert!(open.problem.is_some());
    assert_eq!(open.draft(), Some(value), "the draft is still there");
}
