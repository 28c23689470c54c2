//! What is evaluated again, and that threads do not matter.
#![expect(clippy::disallowed_methods, reason = "tests read files of their own")]

use crate::support::{memo, spectra, started, update};
use std::sync::Mutex;
use widefold::base::thread::Threads;
use widefold::base::work::CancelSource;
use widefold::eval::desk::{Snapshot, evaluate};
use widefold::eval::standing::{Event, Standings, State};
use widefold::eval::start::{Started, Wishes};
use widefold::store::{self, Record};
use widefold::study::cell::CellId;
use widefold::study::edit::{Edit, Titled};
use widefold::study::history::History;
use widefold::study::ledger::Ledger;
use widefold::study::settings::Settings;
use widefold::study::settings::question::Ask;

fn ready() -> Started {
    let wishes = Wishes {
        outcome: "yield_g".to_owned(),
        unit: Some("vat".to_owned()),
        samples: Some("sample".to_owned()),
        ..Wishes::default()
    };
    let mut started = started(&[("vats.csv", spectra(48, 60, 3.0, 11))], wishes);
    // Fewer halves: the question is asked here for its place in the order, not for its answer.
    let chosen = started
        .study
        .cells()
        .iter()
        .find_map(|cell| match &cell.settings {
            Settings::Question(question) => match &question.ask {
                Ask::ChosenAgain {
                    threshold, seed, ..
                } => {
                    let ask = Ask::ChosenAgain {
                        pairs: 10,
                        threshold: *threshold,
                        seed: *seed,
                    };
                    Some((
                        cell.id,
                        Settings::Question(widefold::study::settings::question::Question {
                            ask,
                            ..question.clone()
                        }),
                    ))
                }
                _ => None,
            },
            _ => None,
        });
    let (id, settings) = chosen.unwrap();
    let _ = started
        .study
        .apply(Edit::Configure { id, settings })
        .unwrap();
    started
}

fn find(started: &Started, wanted: impl Fn(&Settings) -> bool) -> CellId {
    started
        .study
        .cells()
        .iter()
        .find(|cell| wanted(&cell.settings))
        .unwrap()
        .id
}

#[test]
fn only_what_draws_on_a_changed_setting_is_evaluated_again() {
    let mut started = ready();
    let mut memo = memo();
    let n_cells = started.study.cells().len();
    let (standings, run) = update(&started.study, &started.shelf, &mut memo, 2);
    assert_eq!(run, n_cells, "everything the first time");
    for cell in started.study.cells() {
        assert_eq!(
            standings.get(cell.id).state,
            State::Current,
            "{}",
            cell.title
        );
    }
    // Renaming and moving evaluate nothing.
    let data = find(&started, |s| matches!(s, Settings::Data(_)));
    let title = "vat spectra".to_owned();
    let _ = started
        .study
        .apply(Edit::Retitle {
            what: Titled::Cell(data),
            title,
        })
        .unwrap();
    let _ = started
        .study
        .apply(Edit::Move {
            id: data,
            to: n_cells - 1,
        })
        .unwrap();
    assert_eq!(update(&started.study, &started.shelf, &mut memo, 2).1, 0);
    // Another threshold of stand-ins concerns that question alone.
    let id = find(
        &started,
        |s| matches!(s, Settings::Question(q) if matches!(q.ask, Ask::StandIns { .. })),
    );
    let Settings::Question(mut question) = started.study.cell(id).unwrap().settings.clone() else {
        unreachable!()
    };
    question.ask = Ask::StandIns {
        correlation: widefold::base::real::Real::constant(0.9),
    };
    let _ = started
        .study
        .apply(Edit::Configure {
            id,
            settings: Settings::Question(question),
        })
        .unwrap();
    assert_eq!(update(&started.study, &started.shelf, &mut memo, 2).1, 1);
    // Another seed of the fit concerns the fit, its questions, and the prose with its facts.
    let id = find(&started, |s| matches!(s, Settings::Fit(_)));
    let Settings::Fit(mut fit) = started.study.cell(id).unwrap().settings.clone() else {
        unreachable!()
    };
    fit.seed += 1;
    let below = started.study.drawing_on(id).len();
    let back = started
        .study
        .apply(Edit::Configure {
            id,
            settings: Settings::Fit(fit),
        })
        .unwrap();
    assert_eq!(
        update(&started.study, &started.shelf, &mut memo, 2).1,
        1 + below
    );
    // Going back is remembered.
    let _ = started.study.apply(back).unwrap();
    assert_eq!(update(&started.study, &started.shelf, &mut memo, 2).1, 0);
}

#[test]
fn one_and_two_threads_give_the_same_bytes() {
    let started = ready();
    let bytes = |threads: usize| {
        let (standings, _) = update(&started.study, &started.shelf, &mut memo(), threads);
        let record = Record::from(&started.study, &standings);
        let path = std::env::temp_dir().join(format!(
            "widefold-threads-{}-{threads}.widefold",
            std::process::id()
        ));
        store::save(
            &path,
            &started.study,
            &started.shelf,
            &Ledger::default(),
            &record,
        )
        .unwrap();
        let bytes = std::fs::read(&path).unwrap();
        std::fs::remove_file(&path).unwrap();
        bytes
    };
    assert_eq!(bytes(1), bytes(2));
}

#[test]
fn a_removed_cell_leaves_its_questions_with_a_reason_and_undo_mends_them() {
    let mut started = ready();
    let mut memo = memo();
    let mut history = History::new();
    let fit = find(&started, |s| matches!(s, Settings::Fit(_)));
    let question = find(&started, |s| matches!(s, Settings::Question(_)));
    history
        .commit(
            &mut started.study,
            "remove the fit",
            vec![Edit::Remove { id: fit }],
        )
        .unwrap();
    let (standings, _) = update(&started.study, &started.shelf, &mut memo, 2);
    let standing = standings.get(question);
    assert_eq!(standing.state, State::Failed);
    assert_eq!(
        standing.failure.unwrap().problem.code.0,
        "drawn-on-cell-removed"
    );
    assert_eq!(
        history.undo(&mut started.study).as_deref(),
        Some("remove the fit")
    );
    let (standings, _) = update(&started.study, &started.shelf, &mut memo, 2);
    assert_eq!(standings.get(question).state, State::Current);
}

#[test]
fn a_stopped_cell_is_stopped_and_nothing_of_it_is_remembered() {
    let started = ready();
    let fit = find(&started, |s| matches!(s, Settings::Fit(_)));
    let source = CancelSource::new();
    let standings = Mutex::new(Standings::default());
    let snapshot = Snapshot {
        study: started.study.clone(),
        shelf: started.shelf.clone(),
        recorded: Default::default(),
        threads: Threads::new(2),
    };
    let tell = |event: Event| {
        if let Event::Progressed(id, share) = &event
            && *id == fit
            && *share > 0.2
        {
            source.cancel();
        }
        standings.lock().unwrap().absorb(&event);
    };
    let mut memo = memo();
    let ended = evaluate(&snapshot, &mut memo, &source.token(), &tell);
    assert!(ended.is_err());
    tell(Event::Ended { cancelled: true });
    assert_eq!(standings.lock().unwrap().get(fit).state, State::Stopped);
    let (standings, run) = update(&started.study, &started.shelf, &mut memo, 2);
    assert_eq!(standings.get(fit).state, State::Current);
    assert!(run > 1, "the fit was run afresh");
}
