//! What is evaluated, what is remembered, and what comes of it.

use crate::run::{run, run_anew, small_study, snapshot, the, widefold};
use crate::support::{Folder, get};
use std::sync::Mutex;
use widefold::base::work::CancelSource;
use widefold::eval::desk::{MEMO_BUDGET, evaluate};
use widefold::eval::memo::Memo;
use widefold::eval::standing::{Event, Standing, Standings, State};
use widefold::store::{self, Record};
use widefold::study::Study;
use widefold::study::cell::{Cell, CellId, Kind};
use widefold::study::edit::{Edit, Titled};
use widefold::study::ledger::Ledger;
use widefold::study::link::Link;
use widefold::study::settings::Settings;
use widefold::study::settings::prepare::{Prepare, Step};
use widefold::study::settings::question::Ask;

fn ids(study: &Study) -> Vec<CellId> {
    study.cells().iter().map(|cell| cell.id).collect()
}

/// The ids of the cells for which something holds, in order.
fn which(study: &Study, holds: impl Fn(&Cell) -> bool) -> Vec<CellId> {
    let cells = study.cells().iter().filter(|cell| holds(cell));
    cells.map(|cell| cell.id).collect()
}

fn sorted(mut ids: Vec<CellId>) -> Vec<CellId> {
    ids.sort();
    ids
}

#[test]
fn changing_a_setting_evaluates_what_draws_on_it_and_nothing_else() {
    let started = small_study();
    let (mut study, shelf) = (started.study, started.shelf);
    let mut memo = Memo::new(MEMO_BUDGET);
    let first = run(&study, &shelf, &mut memo, 2);
    assert_eq!(sorted(first.evaluated), sorted(ids(&study)));
    assert!(run(&study, &shelf, &mut memo, 2).evaluated.is_empty());

    // The fit: itself, its questions and the summary, but neither tables nor preparation.
    let fit = the(&study, Kind::Fit);
    let Settings::Fit(mut settings) = study.cell(fit).unwrap().settings.clone() else {
        panic!("a fit has a fit's settings");
    };
    settings.seed += 1;
    let settings = Settings::Fit(settings);
    let back = study.apply(Edit::Configure { id: fit, settings }).unwrap();
    let above = [Kind::Data, Kind::Prepare];
    let expected = which(&study, |cell| !above.contains(&cell.settings.kind()));
    assert_eq!(
        sorted(run(&study, &shelf, &mut memo, 2).evaluated),
        sorted(expected)
    );

    // What was before is remembered.
    let _ = study.apply(back).unwrap();
    assert!(run(&study, &shelf, &mut memo, 2).evaluated.is_empty());

    // One question: itself alone.
    let asks = |cell: &Cell| match &cell.settings {
        Settings::Question(question) => matches!(question.ask, Ask::StandIns { .. }),
        Settings::Data(_)
        | Settings::Prepare(_)
        | Settings::Fit(_)
        | Settings::Compare(_)
        | Settings::Score(_)
        | Settings::Prose(_) => false,
    };
    let question = which(&study, asks)[0];
    let Settings::Question(mut settings) = study.cell(question).unwrap().settings.clone() else {
        panic!("a question has a question's settings");
    };
    if let Ask::StandIns { correlation, .. } = &mut settings.ask {
        *correlation = widefold::base::real::Real::new(0.5).unwrap();
    }
    let settings = Settings::Question(settings);
    let _ = study
        .apply(Edit::Configure {
            id: question,
            settings,
        })
        .unwrap();
    assert_eq!(run(&study, &shelf, &mut memo, 2).evaluated, [question]);
}

#[test]
fn renaming_and_moving_evaluate_nothing() {
    let started = small_study();
    let (mut study, shelf) = (started.study, started.shelf);
    let mut memo = Memo::new(MEMO_BUDGET);
    let _ = run(&study, &shelf, &mut memo, 2);
    for (at, id) in ids(&study).into_iter().enumerate() {
        let title = format!("another name {at}");
        let what = Titled::Cell(id);
        let _ = study.apply(Edit::Retitle { what, title }).unwrap();
        assert!(run(&study, &shelf, &mut memo, 2).evaluated.is_empty());
        let _ = study.apply(Edit::Move { id, to: 0 }).unwrap();
        assert!(run(&study, &shelf, &mut memo, 2).evaluated.is_empty());
    }
    let told = run(&study, &shelf, &mut memo, 2);
    let current = |id: CellId| told.standings.get(id).state == State::Current;
    assert!(ids(&study).into_iter().all(current));
}

#[test]
fn a_cell_may_stand_above_what_it_draws_on() {
    let started = small_study();
    let (mut study, shelf) = (started.study, started.shelf);
    let as_it_was = run_anew(&study, &shelf).standings;
    for id in ids(&study) {
        let _ = study.apply(Edit::Move { id, to: 0 }).unwrap();
    }
    assert_eq!(study.cells().last().unwrap().settings.kind(), Kind::Prose);
    let upside_down = run_anew(&study, &shelf).standings;
    for id in ids(&study) {
        let (before, after) = (as_it_was.get(id), upside_down.get(id));
        assert_eq!(after.state, State::Current);
        // In words, because what is not known equals nothing, not even itself.
        let words = |standing: Standing| format!("{:?}", standing.outcome.unwrap().facts);
        assert_eq!(words(before), words(after));
    }
}

#[test]
fn a_circle_in_a_file_is_told_and_all_else_is_evaluated() {
    let started = small_study();
    let next = started.study.next_id().number();
    let mut cells = started.study.cells().to_vec();
    for (own, other) in [(next, next + 1), (next + 1, next)] {
        let prepare = Prepare {
            input: Link::to(CellId::new(other)),
            steps: vec![Step::Center],
        };
        cells.push(Cell {
            id: CellId::new(own),
            title: format!("circle {own}"),
            settings: Settings::Prepare(prepare),
        });
    }
    let study = Study::restored("By hand", cells, next + 2);
    let folder = Folder::new();
    let path = folder.file("circle.widefold");
    let record = Record::default();
    store::save(&path, &study, &started.shelf, &Ledger::default(), &record).unwrap();
    let opened = store::open(&path).unwrap();
    let told = run_anew(&opened.study, &opened.shelf);
    for cell in opened.study.cells() {
        let standing = told.standings.get(cell.id);
        if cell.title.starts_with("circle") {
            assert_eq!(standing.state, State::Failed);
            let problem = &standing.failure.unwrap().problem;
            assert_eq!(problem.code.0, "circle");
            assert!(problem.found.contains(&cell.title));
        } else {
            assert_eq!(standing.state, State::Current, "{}", cell.title);
        }
    }
    let answer = widefold(folder.path(), &["update", "circle.widefold"]);
    assert_eq!(answer.status, 1);
    assert!(answer.error.contains("draws on itself"), "{}", answer.error);
}

#[test]
fn a_removed_cell_is_missed_by_name_and_undo_brings_everything_back() {
    let started = small_study();
    let (mut study, shelf) = (started.study, started.shelf);
    let mut memo = Memo::new(MEMO_BUDGET);
    let _ = run(&study, &shelf, &mut memo, 2);
    let (prepared, fit) = (the(&study, Kind::Prepare), the(&study, Kind::Fit));
    let back = study.apply(Edit::Remove { id: prepared }).unwrap();
    let told = run(&study, &shelf, &mut memo, 2);
    let standing = told.standings.get(fit);
    assert_eq!(standing.state, State::Failed);
    let problem = &standing.failure.unwrap().problem;
    assert_eq!(problem.code.0, "drawn-on-cell-removed");
    assert!(!problem.mend.is_empty());
    for id in which(&study, |cell| cell.settings.kind() == Kind::Question) {
        assert_eq!(told.standings.get(id).state, State::Waiting);
    }
    let _ = study.apply(back).unwrap();
    let told = run(&study, &shelf, &mut memo, 2);
    assert!(told.evaluated.is_empty());
    assert_eq!(told.standings.get(fit).state, State::Current);
}

/// The bytes of the saved study and its record.
fn saved(study: &Study, shelf: &widefold::study::source::Shelf, threads: usize) -> Vec<u8> {
    let told = run(study, shelf, &mut Memo::new(MEMO_BUDGET), threads);
    let folder = Folder::new();
    let path = folder.file("study.widefold");
    let record = Record::from(study, &told.standings);
    let mut ledger = Ledger::default();
    store::note_acts(study, &told.standings, &mut ledger, "2026-03-01");
    store::save(&path, study, shelf, &ledger, &record).unwrap();
    get(&path)
}

#[test]
fn one_thread_and_two_give_the_same_bytes() {
    let started = small_study();
    let one = saved(&started.study, &started.shelf, 1);
    let two = saved(&started.study, &started.shelf, 2);
    assert!(one.len() > 10_000);
    assert!(one == two, "the saved studies differ");
    let folder = Folder::new();
    let _ = folder.put("one.widefold", one);
    let _ = folder.put("two.widefold", two);
    let json = |name| widefold(folder.path(), &["facts", name, "--json"]).out;
    let facts = json("one.widefold");
    assert!(facts.contains("nested rmse"));
    assert_eq!(facts, json("two.widefold"));
}

#[test]
fn a_run_that_is_called_off_leaves_its_cell_stopped_and_not_remembered() {
    let started = small_study();
    let (study, shelf) = (started.study, started.shelf);
    let fit = the(&study, Kind::Fit);
    let mut memo = Memo::new(MEMO_BUDGET);
    let cancel = CancelSource::new();
    let standings = Mutex::new(Standings::default());
    let tell = |event: Event| {
        standings.lock().unwrap().absorb(&event);
        if matches!(event, Event::Progressed(id, share) if id == fit && share > 0.1) {
            cancel.cancel();
        }
    };
    let snapshot = snapshot(&study, &shelf, 2);
    let ended = evaluate(&snapshot, &mut memo, &cancel.token(), &tell);
    assert!(ended.is_err());
    tell(Event::Ended { cancelled: true });
    let standing = standings.into_inner().unwrap().get(fit);
    assert_eq!(standing.state, State::Stopped);
    assert!(standing.outcome.is_none() && standing.failure.is_none());
    // What was finished before is remembered; the fit and what draws on it are not.
    let told = run(&study, &shelf, &mut memo, 2);
    let done = [Kind::Data, Kind::Prepare];
    let expected = which(&study, |cell| !done.contains(&cell.settings.kind()));
    assert_eq!(sorted(told.evaluated), sorted(expected));
    assert_eq!(told.standings.get(fit).state, State::Current);
}
