//! Where there is nothing to find, nothing is claimed.

use crate::run::{dice_table, quick, repository, run, the, try_start, without_answers};
use crate::support::{Dice, get};
use std::sync::Arc;
use widefold::base::real::Real;
use widefold::base::work::Work;
use widefold::eval::desk::MEMO_BUDGET;
use widefold::eval::fact::{Fact, Facts};
use widefold::eval::memo::Memo;
use widefold::eval::standing::{Standing, Standings, State};
use widefold::export::Occasion;
use widefold::export::write_up::write_up;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::parts::{Split, Structure};
use widefold::numeric::proof::{Breach, Proof};
use widefold::numeric::samples::Samples;
use widefold::numeric::step;
use widefold::report::Context;
use widefold::study::Study;
use widefold::study::cell::Kind;
use widefold::study::edit::Edit;
use widefold::study::ledger::Ledger;
use widefold::study::settings::Settings;
use widefold::study::settings::prepare::choice::{ScaleRule, Statistic};
use widefold::study::settings::prepare::{Reference, Step};
use widefold::study::source::Shelf;

/// The steps that may be stacked in any order.
fn steps() -> Vec<Step> {
    vec![
        Step::StandardNormalVariate,
        Step::SavitzkyGolay {
            window: 7,
            degree: 2,
            derivative: 1,
        },
        Step::ScatterCorrection {
            reference: Reference::Training,
        },
        Step::Center,
        Step::Scale {
            rule: ScaleRule::UnitVariance,
        },
        Step::ColumnImputation {
            statistic: Statistic::Median,
        },
        Step::NearConstantFilter {
            least: Real::constant(0.05),
        },
    ]
}

/// A spread of orders: every step alone, every step first before all others, the catalogue's
/// order and its reverse, and subsets in an order of the dice.
fn orders(n_more: usize) -> Vec<Vec<Step>> {
    let all = steps();
    let mut orders: Vec<Vec<Step>> = all.iter().map(|step| vec![step.clone()]).collect();
    for at in 0..all.len() {
        let mut rotated = all.clone();
        rotated.rotate_left(at);
        orders.push(rotated.clone());
        rotated.reverse();
        orders.push(rotated);
    }
    let mut dice = Dice(2026);
    for _ in 0..n_more {
        let mut left = all.clone();
        let mut order = Vec::new();
        for _ in 0..2 + dice.below(all.len() - 1) {
            order.push(left.swap_remove(dice.below(left.len())));
        }
        orders.push(order);
    }
    orders
}

/// The nested R² of a study under every order; an order that cannot be carried out says why.
fn claims(study: &Study, shelf: &Shelf, n_more: usize) -> Vec<f64> {
    let mut study = without_answers(study);
    let (prepared, fit) = (the(&study, Kind::Prepare), the(&study, Kind::Fit));
    let mut memo = Memo::new(MEMO_BUDGET);
    let mut claims = Vec::new();
    for order in orders(n_more) {
        let Settings::Prepare(mut prepare) = study.cell(prepared).unwrap().settings.clone() else {
            panic!("a preparation has a preparation's settings");
        };
        prepare.steps.clone_from(&order);
        let settings = Settings::Prepare(prepare);
        let id = prepared;
        let _ = study.apply(Edit::Configure { id, settings }).unwrap();
        let told = run(&study, shelf, &mut memo, 2);
        let standing = told.standings.get(fit);
        match (standing.outcome, standing.failure) {
            (Some(outcome), None) => {
                let r = outcome.facts.value("nested r²").unwrap();
                assert!(r <= 0.1, "{r} claimed from nothing by {order:?}");
                assert_eq!(outcome.facts.value("proof violations"), Some(0.0));
                claims.push(r);
            }
            (_, Some(failure)) => {
                let problem = &failure.problem;
                assert_ne!(problem.code.0, "fault-of-the-program", "{order:?}");
                assert!(!problem.mend.is_empty(), "{problem:?}");
            }
            (_, None) => {
                let failure = told.standings.get(prepared).failure;
                let problem = &failure.expect("something must have failed").problem;
                assert_ne!(problem.code.0, "fault-of-the-program", "{order:?}");
                assert!(!problem.mend.is_empty(), "{problem:?}");
            }
        }
    }
    claims
}

#[test]
fn no_order_of_steps_finds_anything_in_the_null_twin() {
    let text = String::from_utf8(get(&repository("demo-data/cellar-scans.csv"))).unwrap();
    let thinned: Vec<String> = text
        .lines()
        .map(|line| {
            let fields: Vec<&str> = line.split(';').collect();
            // The names and every tenth wavelength.
            let kept = fields[..7].iter().chain(fields[7..].iter().step_by(10));
            kept.copied().collect::<Vec<_>>().join(";")
        })
        .collect();
    let mut wishes = quick("salt in moisture");
    wishes.unit = Some("wheel".to_owned());
    wishes.samples = Some("scan".to_owned());
    let tables = [
        ("scans.csv", thinned.join("\n").into_bytes()),
        (
            "cellar-lab-null.xlsx",
            get(&repository("demo-data/cellar-lab-null.xlsx")),
        ),
    ];
    let started = try_start(&tables, &wishes).unwrap();
    let claims = claims(&started.study, &started.shelf, 10);
    // The others fail: nothing can be regressed on a reference that was centred before.
    assert!(claims.len() >= 20, "{} orders worked", claims.len());
}

#[test]
fn no_order_of_steps_finds_anything_in_noise() {
    let table = dice_table(11, 40, 60, 0.0).into_bytes();
    let started = try_start(&[("noise.csv", table)], &quick("y")).unwrap();
    let claims = claims(&started.study, &started.shelf, 40);
    // The others fail: noise has no common shape for the scatter correction to refer to.
    assert!(claims.len() >= 20, "{} orders worked", claims.len());
}

#[test]
fn a_chain_that_has_seen_held_out_samples_is_caught() {
    let mut dice = Dice(3);
    let samples = Samples::new(Matrix::from_fn(20, 6, |_, j| j as f64 + dice.share()));
    let units: Vec<usize> = (0..20).map(|row| row / 2).collect();
    let structure = Structure::of_units(&units);
    let rows: Vec<usize> = (0..20).collect();
    let split = Split::with_held_out(&rows[..14], &rows[14..], &structure).unwrap();
    let chain = step::Chain::new(vec![
        step::ScatterCorrection::new(step::Reference::TrainingMean).into(),
    ]);
    let learn = |split: &Split| chain.learn(split, &samples, None, &Work::unattended());
    let mut honest = Proof::new();
    honest.check(&learn(&split).unwrap(), &split);
    assert!(honest.holds());
    let mut leaky = Proof::new();
    leaky.check(&learn(&Split::everything(&rows)).unwrap(), &split);
    assert!(!leaky.holds());
    let violation = &leaky.violations()[0];
    assert_eq!(violation.breach, Breach::HeldOut);
    assert_eq!(violation.rows, split.held_out());
}

#[test]
fn the_write_up_claims_no_proof_that_found_violations() {
    let started = crate::run::small_study();
    let (study, shelf) = (started.study, started.shelf);
    let mut standings = run(&study, &shelf, &mut Memo::new(MEMO_BUDGET), 2).standings;
    let ledger = Ledger::default();
    let text = |standings: &Standings| {
        let context = Context {
            study: &study,
            standings,
            ledger: &ledger,
        };
        let occasion = Occasion {
            date: "2026-03-01".to_owned(),
            despite: None,
        };
        write_up(&context, &occasion, "figures").unwrap().markdown
    };
    let key = "none that had been learnt from a held-out sample";
    assert!(text(&standings).contains(key));

    let fit = the(&study, Kind::Fit);
    let standing = standings.get(fit);
    let mut outcome = standing.outcome.unwrap().as_ref().clone();
    let mut facts = Facts::new();
    for fact in outcome.facts.all() {
        facts.push(if fact.name == "proof violations" {
            Fact::count("proof violations", 1, "How many were found.")
        } else {
            fact.clone()
        });
    }
    outcome.facts = facts;
    let planted = Standing {
        state: State::Current,
        outcome: Some(Arc::new(outcome)),
        failure: None,
    };
    standings.put(fit, planted);
    assert!(!text(&standings).contains(key));
}
