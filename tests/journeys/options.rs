//! Penalty weights, rules for signs, strata and the careful interval: what was set is what was done,
//! is said, and is refused where it cannot be done.

use crate::run::{dice_table, quick, quick_fit, run_anew, the, try_start, without_answers};
use std::fmt::Write as _;
use widefold::base::real::Real;
use widefold::eval::fact::Facts;
use widefold::eval::start::Wishes;
use widefold::export::Occasion;
use widefold::export::write_up::write_up;
use widefold::report::Context;
use widefold::study::cell::Kind;
use widefold::study::ledger::Ledger;
use widefold::study::settings::data::{ColumnRange, OutcomeKind};
use widefold::study::settings::fit::{Fit, Judge, Penalty, Strength};
use widefold::study::settings::weights::{Block, BlockChoice, Interval, Signs, Strata, Weighting};

/// The facts of the fit and the write-up; or the code of what is wrong.
fn fitted(table: &str, wishes: &Wishes) -> Result<(Facts, String), String> {
    let started = try_start(&[("table.csv", table.as_bytes().to_vec())], wishes).unwrap();
    let study = without_answers(&started.study);
    let told = run_anew(&study, &started.shelf);
    let standing = told.standings.get(the(&study, Kind::Fit));
    if let Some(failure) = &standing.failure {
        assert!(!failure.problem.mend.is_empty(), "{:?}", failure.problem);
        return Err(failure.problem.code.0.to_owned());
    }
    let facts = standing.outcome.unwrap().facts.clone();
    let ledger = Ledger::default();
    let context = Context {
        study: &study,
        standings: &told.standings,
        ledger: &ledger,
    };
    let occasion = Occasion {
        date: "2026-03-01".to_owned(),
        despite: None,
    };
    let text = write_up(&context, &occasion, "figures").unwrap().markdown;
    Ok((facts, text))
}

fn with(change: impl FnOnce(&mut Fit)) -> Wishes {
    let mut wishes = quick("y");
    change(&mut wishes.fit);
    wishes
}

fn block(first: &str, last: &str, weight: f64) -> Block {
    Block {
        range: ColumnRange {
            first: first.to_owned(),
            last: last.to_owned(),
        },
        weight: Real::constant(weight),
    }
}

fn blocks(choice: BlockChoice) -> Weighting {
    Weighting::Blocks {
        blocks: vec![block("x1", "x5", 0.5), block("x6", "x40", 2.0)],
        choice,
    }
}

#[test]
fn weights_by_hand_are_said_and_chosen_ones_compared() {
    let table = dice_table(7, 30, 40, 2.0);
    let by_hand = with(|fit| fit.weighting = blocks(BlockChoice::ByHand));
    let (facts, text) = fitted(&table, &by_hand).unwrap();
    let words = "x1 … x5: 0.5; x6 … x40: 2";
    assert_eq!(facts.words("block weights"), Some(words));
    assert!(facts.get("block weights tried").is_none());
    assert!(text.contains(words) && text.contains("Σⱼ fⱼ·|bⱼ|"));

    let grid = [0.5, 1.0, 2.0].map(Real::constant).to_vec();
    let chosen = with(|fit| fit.weighting = blocks(BlockChoice::Chosen { grid }));
    let (facts, text) = fitted(&table, &chosen).unwrap();
    assert_eq!(facts.value("block weights tried"), Some(9.0));
    let same = facts.value("outer parts with the same block weights");
    assert!(same.is_some_and(|share| (0.0..=1.0).contains(&share)));
    assert!(text.contains("anew in every training part"));
    assert_eq!(facts.value("proof violations"), Some(0.0));
}

#[test]
fn learnt_weights_and_signs_are_said_with_what_they_rest_on() {
    let table = dice_table(8, 30, 40, 2.0);
    let wishes = with(|fit| {
        fit.weighting = Weighting::Adaptive {
            power: Real::constant(1.0),
        };
        fit.signs = Signs::NotNegative;
    });
    let (facts, text) = fitted(&table, &wishes).unwrap();
    assert!(facts.value("first-stage strength").unwrap() > 0.0);
    assert_eq!(facts.value("predictors never negative"), Some(40.0));
    assert!(text.contains("the adaptive lasso of Zou"));
    assert!(text.contains("not allowed below zero"));
    // Nothing is said where nothing was set.
    let (plain, text) = fitted(&table, &quick("y")).unwrap();
    for name in [
        "first-stage strength",
        "predictors never negative",
        "careful error",
    ] {
        assert!(plain.get(name).is_none(), "{name}");
    }
    assert!(!text.contains("fⱼ") && !text.contains("below zero"));
}

#[test]
fn the_careful_interval_is_wider_than_the_plain_one_and_about_the_procedure() {
    let table = dice_table(9, 40, 30, 2.0);
    let wishes = with(|fit| fit.interval = Interval::Careful);
    let (facts, text) = fitted(&table, &wishes).unwrap();
    let value = |name: &str| facts.value(name).unwrap();
    // Four parts have six pairs.
    assert_eq!(value("careful refits"), 6.0);
    assert!(value("careful error low") < value("careful error"));
    assert!(value("careful error") < value("careful error high"));
    // Kept between the plain standard error and √4 times it.
    let widening = value("careful interval widening");
    assert!((1.0..=2.0).contains(&widening), "{widening}");
    assert!(text.contains("not about the final fitted model"));
}

/// Times of two batches whose clocks run at different speed; `x1` shortens them.
fn times() -> String {
    let plain = dice_table(10, 60, 25, 0.0);
    let mut text = String::from("name,time,event,rig");
    for (at, line) in plain.lines().enumerate() {
        let cells: Vec<&str> = line.split(',').collect();
        if at == 0 {
            for name in &cells[2..] {
                let _ = write!(text, ",{name}");
            }
            continue;
        }
        let (noise, x): (f64, f64) = (cells[1].parse().unwrap(), cells[2].parse().unwrap());
        let rig = if at % 2 == 0 {
            ("north", 0.0)
        } else {
            ("south", 3.0)
        };
        let time = (rig.1 - 1.5 * x + 0.5 * noise).exp();
        let _ = write!(
            text,
            "\n{},{time:.4},{},{}",
            cells[0],
            usize::from(at % 4 != 0),
            rig.0
        );
        for cell in &cells[2..] {
            let _ = write!(text, ",{cell}");
        }
    }
    text
}

fn of_times(strata: Strata, batch: Option<&str>) -> Wishes {
    Wishes {
        outcome: "time".to_owned(),
        kind: Some(OutcomeKind::Time {
            event: "event".to_owned(),
        }),
        batch: batch.map(str::to_owned),
        ignored: match batch {
            Some(_) => Vec::new(),
            None => vec!["rig".to_owned()],
        },
        fit: Fit {
            strata,
            ..quick_fit()
        },
        ..quick("time")
    }
}

#[test]
fn times_within_batches_are_told_apart_better_than_across_them() {
    let (within, text) = fitted(&times(), &of_times(Strata::Batches, Some("rig"))).unwrap();
    assert_eq!(within.value("strata"), Some(2.0));
    assert_eq!(within.value("strata without events"), Some(0.0));
    assert!(text.contains("within the 2") && text.contains("a hazard of its own"));
    let (across, _) = fitted(&times(), &of_times(Strata::None, Some("rig"))).unwrap();
    assert!(across.get("strata").is_none());
    let concordance = |facts: &Facts| facts.value("nested concordance").unwrap();
    assert!(concordance(&within) > concordance(&across));
    let refused = fitted(&times(), &of_times(Strata::Batches, None));
    assert_eq!(refused.unwrap_err(), "strata-without-batches");
}

#[test]
fn what_cannot_be_done_is_refused_with_what_would_mend_it() {
    let table = dice_table(11, 24, 40, 2.0);
    let named = |blocks: Vec<Block>| {
        with(|fit| {
            fit.weighting = Weighting::Blocks {
                blocks,
                choice: BlockChoice::ByHand,
            }
        })
    };
    let grid = vec![Real::constant(1.0)];
    let cases = [
        ("no-blocks", named(Vec::new())),
        ("no-such-predictor", named(vec![block("x1", "q9", 1.0)])),
        (
            "blocks-overlap",
            named(vec![block("x1", "x5", 1.0), block("x5", "x9", 2.0)]),
        ),
        (
            "weights-without-choice",
            with(|fit| {
                fit.weighting = blocks(BlockChoice::Chosen { grid });
                fit.strength = Strength::ByHand(Real::constant(0.1));
            }),
        ),
        (
            "signs-in-ridge",
            with(|fit| {
                fit.penalty = Penalty::Ridge;
                fit.signs = Signs::NotNegative;
            }),
        ),
        (
            "careful-interval-parts",
            with(|fit| {
                fit.interval = Interval::Careful;
                if let Judge::Nested(plan) = &mut fit.judge {
                    plan.parts = 2;
                }
            }),
        ),
    ];
    for (code, wishes) in cases {
        assert_eq!(fitted(&table, &wishes).unwrap_err(), code);
    }
}
