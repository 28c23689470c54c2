//! The laws of edits, held on random sequences.

use crate::base::real::Real;
use crate::study::Study;
use crate::study::cell::{Cell, CellId, Kind};
use crate::study::edit::{Edit, EditError, Titled};
use crate::study::history::History;
use crate::study::link::Link;
use crate::study::prose::{FactReference, Piece, Prose};
use crate::study::settings::Settings;
use crate::study::settings::compare::Compare;
use crate::study::settings::data::Data;
use crate::study::settings::fit::{Fit, Strength};
use crate::study::settings::prepare::{Prepare, Step};
use crate::study::settings::question::{Ask, Question};
use crate::study::settings::score::Score;
use std::collections::BTreeSet;

/// A seeded source of choices (SplitMix64; Steele, Lea and Flood 2014).
struct Dice(u64);

impl Dice {
    fn roll(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    fn below(&mut self, count: usize) -> usize {
        (self.roll() % count.max(1) as u64) as usize
    }
}

/// An id that is in the study more often than not; it may also be removed or never given out.
fn any_id(study: &Study, dice: &mut Dice) -> CellId {
    match dice.below(4) {
        0 => CellId::new(dice.below(study.next_id().number() as usize + 2) as u32),
        _ => study
            .cells()
            .get(dice.below(study.cells().len()))
            .map_or(CellId::new(1), |cell| cell.id),
    }
}

fn any_link(study: &Study, dice: &mut Dice) -> Link {
    match dice.below(5) {
        0 => Link::open(),
        _ => Link::to(any_id(study, dice)),
    }
}

fn any_settings(kind: Kind, study: &Study, dice: &mut Dice) -> Settings {
    match kind {
        Kind::Data => Settings::Data(Data {
            unit: (dice.below(2) == 0).then(|| "wheel".to_owned()),
            ..Data::default()
        }),
        Kind::Prepare => {
            let catalogue = Step::catalogue();
            let steps = (0..dice.below(4)).map(|_| catalogue[dice.below(catalogue.len())].clone());
            Settings::Prepare(Prepare {
                steps: steps.collect(),
                input: any_link(study, dice),
            })
        }
        Kind::Fit => Settings::Fit(Fit {
            input: any_link(study, dice),
            strength: Strength::ByHand(Real::constant(0.5)),
            seed: dice.roll(),
            ..Fit::default()
        }),
        Kind::Question => Settings::Question(Question {
            fit: any_link(study, dice),
            ask: Ask::catalogue()[dice.below(7)].clone(),
        }),
        Kind::Compare => Settings::Compare(Compare {
            fits: (0..dice.below(4)).map(|_| any_link(study, dice)).collect(),
        }),
        Kind::Score => Settings::Score(Score {
            fit: any_link(study, dice),
            table: None,
        }),
        Kind::Prose => {
            let fact = Piece::Fact(FactReference {
                cell: any_id(study, dice),
                fact: "nested rmse".to_owned(),
                decimals: None,
            });
            let text = Piece::Text(format!("Written {}: ", dice.below(100)));
            Settings::Prose(Prose {
                pieces: vec![text, fact],
            })
        }
    }
}

fn any_title(dice: &mut Dice) -> String {
    const TITLES: [&str; 9] = [
        "",
        " ",
        "Scans",
        "scans",
        "Salt lasso",
        "a {b: c} | d",
        "Prepared",
        "Ünïcode Ä",
        "x\ny",
    ];
    let stem = TITLES[dice.below(TITLES.len())];
    match dice.below(3) {
        0 => stem.to_owned(),
        _ => format!("{stem} {}", dice.below(30)),
    }
}

fn any_edit(study: &Study, dice: &mut Dice) -> Edit {
    let n_cells = study.cells().len();
    let kind = Kind::ALL[dice.below(Kind::ALL.len())];
    match dice.below(7) {
        0 | 1 => Edit::Insert {
            at: dice.below(n_cells + 2),
            cell: Cell {
                id: match dice.below(6) {
                    0 => any_id(study, dice),
                    _ => study.next_id(),
                },
                title: any_title(dice),
                settings: any_settings(kind, study, dice),
            },
        },
        2 => Edit::Remove {
            id: any_id(study, dice),
        },
        3 => Edit::Move {
            id: any_id(study, dice),
            to: dice.below(n_cells + 1),
        },
        4 => Edit::Retitle {
            what: match dice.below(3) {
                0 => Titled::Study,
                _ => Titled::Cell(any_id(study, dice)),
            },
            title: any_title(dice),
        },
        _ => {
            let id = any_id(study, dice);
            let kind = match (dice.below(10), study.cell(id)) {
                (0, _) | (_, None) => kind,
                (_, Some(cell)) => cell.settings.kind(),
            };
            Edit::Configure {
                id,
                settings: any_settings(kind, study, dice),
            }
        }
    }
}

/// What the laws speak of: title and cells. The counter of ids only ever rises.
fn content(study: &Study) -> (String, Vec<Cell>) {
    (study.title().to_owned(), study.cells().to_vec())
}

/// Whether a cell draws on itself, directly or through others.
fn has_circle(study: &Study) -> bool {
    study.cells().iter().any(|cell| {
        let mut open = cell.settings.draws_on();
        let mut seen = BTreeSet::new();
        while let Some(id) = open.pop() {
            if id == cell.id {
                return true;
            }
            if seen.insert(id)
                && let Some(other) = study.cell(id)
            {
                open.extend(other.settings.draws_on());
            }
        }
        false
    })
}

fn titles_and_ids_are_unique(study: &Study) -> bool {
    let ids: BTreeSet<_> = study.cells().iter().map(|cell| cell.id).collect();
    let titles = study.cells().iter().map(|cell| cell.title.to_lowercase());
    let titles: BTreeSet<_> = titles.collect();
    ids.len() == study.cells().len() && titles.len() == study.cells().len()
}

/// A study with a few cells, by lawful edits only.
fn any_study(dice: &mut Dice) -> Study {
    let mut study = Study::new("Random");
    for _ in 0..40 {
        let edit = any_edit(&study, dice);
        let _ = study.apply(edit);
    }
    study
}

#[test]
fn applying_and_taking_back_is_the_identity_and_the_inverse_of_the_inverse_is_the_edit() {
    let (mut applied, mut refused) = (0, 0);
    for seed in 0..200 {
        let mut dice = Dice(seed);
        let mut study = Study::new("Random");
        for _ in 0..60 {
            let edit = any_edit(&study, &mut dice);
            let before = study.clone();
            match study.apply(edit) {
                Ok(inverse) => {
                    applied += 1;
                    let after = study.clone();
                    let again = study.apply(inverse.clone()).unwrap();
                    assert_eq!(content(&study), content(&before));
                    // `again` is the edit with its title as it was kept; applied once more it
                    // gives the same study and the same inverse.
                    let inverse_again = study.apply(again.clone()).unwrap();
                    assert_eq!(study, after);
                    assert_eq!(inverse_again, inverse);
                    let _ = study.apply(inverse_again).unwrap();
                    let edit_again = study.apply(again.clone()).unwrap();
                    assert_eq!(edit_again, inverse);
                    assert_eq!(study, after);
                }
                Err(_) => {
                    refused += 1;
                    assert_eq!(study, before, "a refused edit changed something");
                }
            }
            assert!(titles_and_ids_are_unique(&study));
            assert!(!has_circle(&study), "an edit closed a circle");
        }
    }
    // The edits must be of both sorts, or the laws were not tried.
    assert!(applied > 3000 && refused > 1000, "{applied}, {refused}");
}

#[test]
fn the_inverse_of_the_inverse_is_the_edit_to_the_letter_where_the_title_is_lawful() {
    let mut dice = Dice(7);
    let mut compared = 0;
    for _ in 0..200 {
        let mut study = any_study(&mut dice);
        let edit = any_edit(&study, &mut dice);
        let lawful = match &edit {
            Edit::Insert { cell, .. } => study.clone().free_title(&cell.title) == cell.title,
            Edit::Retitle { title, .. } => study.free_title(title) == *title,
            Edit::Remove { .. } | Edit::Move { .. } | Edit::Configure { .. } => true,
        };
        if lawful && let Ok(inverse) = study.apply(edit.clone()) {
            assert_eq!(study.apply(inverse).unwrap(), edit);
            compared += 1;
        }
    }
    assert!(compared > 50, "{compared}");
}

#[test]
fn a_failing_batch_changes_nothing_and_a_good_one_can_be_taken_back() {
    let (mut good, mut bad) = (0, 0);
    for seed in 0..300 {
        let mut dice = Dice(1000 + seed);
        let mut study = any_study(&mut dice);
        let mut draft = study.clone();
        let mut batch = Vec::new();
        // Most edits of the batch apply; sometimes one at the end does not.
        for _ in 0..12 {
            let edit = any_edit(&draft, &mut dice);
            let fine = draft.apply(edit.clone()).is_ok();
            if fine || (batch.len() > 5 && dice.below(3) == 0) {
                batch.push(edit);
            }
        }
        let before = study.clone();
        match study.apply_all(batch) {
            Ok(back) => {
                good += 1;
                let after = content(&study);
                let forth = study.apply_all(back).unwrap();
                assert_eq!(content(&study), content(&before));
                let _ = study.apply_all(forth).unwrap();
                assert_eq!(content(&study), after);
            }
            Err(_) => {
                bad += 1;
                assert_eq!(study, before, "a failing batch changed something");
            }
        }
    }
    assert!(good > 50 && bad > 50, "{good}, {bad}");
}

#[test]
fn undo_and_redo_walk_through_the_same_states() {
    for seed in 0..60 {
        let mut dice = Dice(5000 + seed);
        let mut study = Study::new("Random");
        let mut history = History::new();
        let mut states = vec![content(&study)];
        for _ in 0..40 {
            let edits = (0..=dice.below(3)).map(|_| any_edit(&study, &mut dice));
            let edits = edits.collect();
            let label = format!("step {}", states.len());
            let before = study.clone();
            let step = history.commit(&mut study, &label, edits);
            if step.is_err() {
                assert_eq!(study, before);
            } else if study != before {
                states.push(content(&study));
            }
        }
        let last = states.len() - 1;
        let mut at = last;
        for _ in 0..200 {
            let back = dice.below(2) == 0;
            let label = if back {
                history.undo(&mut study)
            } else {
                history.redo(&mut study)
            };
            match (back, label) {
                (true, Some(label)) => {
                    assert_eq!(label, format!("step {at}"));
                    at -= 1;
                }
                (true, None) => assert_eq!(at, 0),
                (false, Some(label)) => {
                    at += 1;
                    assert_eq!(label, format!("step {at}"));
                }
                (false, None) => assert_eq!(at, last),
            }
            assert_eq!(content(&study), states[at]);
            assert_eq!(history.is_modified(), at > 0);
        }
    }
}

#[test]
fn ids_are_never_given_out_twice() {
    for seed in 0..50 {
        let mut dice = Dice(9000 + seed);
        let mut study = Study::new("Random");
        let mut history = History::new();
        let mut given = BTreeSet::new();
        for round in 0..100 {
            match dice.below(3) {
                0 if history.undo_label().is_some() => {
                    let _ = history.undo(&mut study);
                }
                1 if !study.cells().is_empty() => {
                    let id = study.cells()[dice.below(study.cells().len())].id;
                    let remove = vec![Edit::Remove { id }];
                    history.commit(&mut study, "remove", remove).unwrap();
                }
                _ => {
                    let id = study.next_id();
                    assert!(given.insert(id), "{id:?} was given out twice");
                    let cell = fit(id, &format!("Fit {round}"), Link::open());
                    let insert = vec![Edit::Insert { at: 0, cell }];
                    history.commit(&mut study, "insert", insert).unwrap();
                }
            }
        }
    }
}

fn fit(id: CellId, title: &str, input: Link) -> Cell {
    let settings = Settings::Fit(Fit {
        input,
        ..Fit::default()
    });
    Cell {
        id,
        title: title.to_owned(),
        settings,
    }
}

/// Three fits, each drawing on the one before it. A fit cannot draw on a fit, but links know
/// nothing of that.
fn chain() -> (Study, [CellId; 3]) {
    let mut study = Study::new("Chain");
    let ids = [1, 2, 3].map(CellId::new);
    let links = [Link::open(), Link::to(ids[0]), Link::to(ids[1])];
    let titles = ["First fit", "Second fit", "Third fit"];
    for at in 0..3 {
        let cell = fit(ids[at], titles[at], links[at]);
        let _ = study.apply(Edit::Insert { at, cell }).unwrap();
    }
    (study, ids)
}

#[test]
fn a_circle_is_refused_and_named() {
    let (mut study, ids) = chain();
    let before = study.clone();
    let closing = |to: CellId| Edit::Configure {
        id: ids[0],
        settings: fit(ids[0], "", Link::to(to)).settings,
    };
    let path = |titles: &[&str]| EditError::Circle {
        path: titles.iter().map(|title| (*title).to_owned()).collect(),
    };
    assert_eq!(
        study.apply(closing(ids[2])),
        Err(path(&["First fit", "Third fit", "Second fit", "First fit"]))
    );
    assert_eq!(
        study.apply(closing(ids[0])),
        Err(path(&["First fit", "First fit"]))
    );
    assert_eq!(study, before);
}

#[test]
fn a_circle_through_a_removed_cell_is_refused_when_it_comes_back() {
    let (mut study, ids) = chain();
    let back = study.apply(Edit::Remove { id: ids[1] }).unwrap();
    // The third fit still points to the removed second; now the first draws on the third.
    let settings = fit(ids[0], "", Link::to(ids[2])).settings;
    let edit = Edit::Configure {
        id: ids[0],
        settings,
    };
    let _ = study.apply(edit).unwrap();
    let before = study.clone();
    assert!(matches!(study.apply(back), Err(EditError::Circle { .. })));
    assert_eq!(study, before);
}

#[test]
fn a_circle_in_a_file_can_be_mended_and_the_mending_undone() {
    let (study, ids) = chain();
    let mut cells = study.cells().to_vec();
    cells[0] = fit(ids[0], "First fit", Link::to(ids[2]));
    let mut study = Study::restored("By hand", cells, 0);
    let mut history = History::new();
    let as_opened = content(&study);
    let steps = [
        Edit::Configure {
            id: ids[0],
            settings: fit(ids[0], "", Link::open()).settings,
        },
        Edit::Remove { id: ids[1] },
    ];
    for edit in steps {
        history.commit(&mut study, "mend", vec![edit]).unwrap();
    }
    assert!(!has_circle(&study));
    while history.undo(&mut study).is_some() {}
    assert_eq!(content(&study), as_opened);
    let remove = vec![Edit::Remove { id: ids[1] }];
    history.commit(&mut study, "remove", remove).unwrap();
    let _ = history.undo(&mut study);
    assert_eq!(content(&study), as_opened);
}

#[test]
fn a_study_written_by_hand_is_made_lawful() {
    let id = CellId::new(4);
    let cells = vec![
        fit(id, "Salt: lasso", Link::open()),
        fit(id, "salt  LASSO", Link::to(id)),
        fit(CellId::new(u32::MAX), "  ", Link::open()),
    ];
    let study = Study::restored(" ", cells, 2);
    assert_eq!(study.title(), "Untitled study");
    let titles: Vec<_> = study.cells().iter().map(|cell| &*cell.title).collect();
    assert_eq!(titles, ["Salt lasso", "salt LASSO 2", "Fit"]);
    assert_eq!(study.cells()[0].id, id);
    assert_ne!(study.cells()[1].id, id);
}

#[test]
fn a_blank_title_can_be_replaced_and_the_replacement_undone() {
    let mut study = Study::default();
    let mut history = History::new();
    let edit = Edit::Retitle {
        what: Titled::Study,
        title: "Cellar light".to_owned(),
    };
    history.commit(&mut study, "title", vec![edit]).unwrap();
    let _ = history.undo(&mut study);
    assert_eq!(study, Study::default());
}

#[test]
fn leaving_a_word_as_it_was_is_no_step() {
    let (mut study, ids) = chain();
    let mut history = History::new();
    let same = Edit::Configure {
        id: ids[1],
        settings: study.cells()[1].settings.clone(),
    };
    let edit = Edit::Remove { id: ids[2] };
    history.commit(&mut study, "remove", vec![edit]).unwrap();
    let _ = history.undo(&mut study);
    history.commit(&mut study, "nothing", vec![same]).unwrap();
    assert_eq!(history.redo_label(), Some("remove"));
    assert!(!history.is_modified());
}

#[test]
fn saved_is_a_state_and_not_a_depth() {
    let (mut study, ids) = chain();
    let mut history = History::new();
    let remove = |id| vec![Edit::Remove { id }];
    history.commit(&mut study, "a", remove(ids[2])).unwrap();
    history.saved();
    assert!(!history.is_modified());
    let _ = history.undo(&mut study);
    assert!(history.is_modified());
    history.commit(&mut study, "b", remove(ids[1])).unwrap();
    assert!(history.is_modified(), "same depth, other content");
}
