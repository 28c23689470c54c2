//! Chains, plans and the run-time proof together.

use crate::support::{close, meats, meats_fat};
use std::borrow::Cow;
use std::sync::Arc;
use widefold::base::work::{CancelSource, Work};
use widefold::numeric::matrix::Matrix;
use widefold::numeric::measure::area_under_curve;
use widefold::numeric::parts::{PartsParams, Scheme, Split, Structure, assign};
use widefold::numeric::proof::{Breach, Proof};
use widefold::numeric::random::Random;
use widefold::numeric::samples::{Companions, OutcomeValues, Samples};
use widefold::numeric::step::*;

const ROWS: usize = 40;

fn chain() -> Chain {
    Chain::new(vec![
        SavitzkyGolay::new(7, 2, 0).unwrap().into(),
        ScatterCorrection::new(Reference::TrainingMean).into(),
        StandardNormalVariate.into(),
        Scaling::new(ScalingRule::UnitVariance).into(),
    ])
}

fn units() -> Vec<usize> {
    (0..ROWS).map(|row| row / 2).collect()
}

fn plan(structure: &Structure<'_>, rows: &[usize], seed: u64) -> Vec<Split> {
    let params = PartsParams {
        scheme: Scheme::Random,
        parts: 4,
        repeats: 1,
        seed,
    };
    assign(&params, rows, structure, "test").unwrap().splits(0)
}

fn shared() -> Samples {
    let rows: Vec<usize> = (0..ROWS).collect();
    let samples = Samples::new(meats()).select(&rows);
    chain().apply_shared(samples, &Work::unattended()).unwrap()
}

fn learn(split: &Split) -> LearnedChain {
    chain()
        .learn(split, &shared(), None, &Work::unattended())
        .unwrap()
}

#[test]
fn a_chain_is_divided_into_what_is_shared_what_is_learned_and_what_trails() {
    let chain = chain();
    assert_eq!((chain.shared_steps(), chain.own_steps()), (0..1, 1..3));
    let trailing = chain.trailing();
    assert_eq!(trailing.center, TrailingCenter::Center);
    assert_eq!(trailing.scale, TrailingScale::UnitVariance);
    let pareto = Chain::new(vec![
        Scaling::new(ScalingRule::Pareto).into(),
        Centering.into(),
    ]);
    assert_eq!(pareto.own_steps(), 0..1);
    assert_eq!(pareto.trailing().scale, TrailingScale::Leave);
    assert_eq!(
        Chain::new(Vec::new()).trailing().center,
        TrailingCenter::Leave
    );
}

#[test]
fn nested_parts_learned_from_their_own_rows_hold() {
    let units = units();
    let structure = Structure::of_units(&units);
    let rows: Vec<usize> = (0..ROWS).collect();
    let mut proof = Proof::new();
    assert!(!proof.holds(), "nothing was compared yet");
    for outer in plan(&structure, &rows, 1) {
        proof.check(&learn(&outer), &outer);
        for inner in plan(&structure, outer.training(), 2) {
            let mut own = Proof::new();
            own.check(&learn(&inner), &inner);
            proof.merge(own);
        }
    }
    assert!(proof.holds());
    // Four outer fits and sixteen inner ones; the scatter correction is the learned step.
    assert_eq!((proof.n_fits(), proof.n_learned_steps()), (20, 20));
}

#[test]
fn a_planted_leak_is_caught() {
    let units = units();
    let structure = Structure::of_units(&units);
    let rows: Vec<usize> = (0..ROWS).collect();
    let split = &plan(&structure, &rows, 1)[0];
    let leaky = learn(&Split::everything(&rows));
    let mut proof = Proof::new();
    proof.check(&leaky, split);
    assert!(!proof.holds());
    assert_eq!((proof.n_violations(), proof.violations()[0].step), (1, 1));
    assert_eq!(proof.violations()[0].breach, Breach::HeldOut);
    assert_eq!(proof.violations()[0].rows, split.held_out());
    let mut whole = Proof::new();
    whole.check(&learn(split), split);
    whole.merge(proof);
    assert!(!whole.holds());
}

#[test]
fn a_leak_through_a_unit_or_from_the_outer_level_is_caught() {
    let units = units();
    let structure = Structure::of_units(&units);
    // Only one scan of unit 0 is held out; the other was learnt from though it is in no part.
    let training: Vec<usize> = (2..30).collect();
    let split = Split::with_held_out(&training, &[0], &structure).unwrap();
    let mut with_sibling = training.clone();
    with_sibling.push(1);
    let mut proof = Proof::new();
    proof.check(&learn(&Split::everything(&with_sibling)), &split);
    assert_eq!(proof.violations()[0].breach, Breach::UnitHeldOut);
    assert_eq!(proof.violations()[0].rows, [1]);
    // Learnt from rows that an outer split holds out: strangers to the inner one.
    let mut proof = Proof::new();
    let mut with_stranger = training;
    with_stranger.push(35);
    proof.check(&learn(&Split::everything(&with_stranger)), &split);
    assert_eq!(proof.violations()[0].breach, Breach::OutsideTraining);
    assert_eq!(proof.violations()[0].rows, [35]);
}

#[test]
fn quality_control_samples_may_be_learned_from_unless_they_are_ever_held_out() {
    let companions = |rows: std::ops::Range<usize>| Companions {
        is_quality_control: Some((0..ROWS).map(|row| rows.contains(&row)).collect()),
        ..Companions::default()
    };
    let units: Vec<usize> = (0..ROWS).collect();
    let structure = Structure::of_units(&units);
    let rows: Vec<usize> = (0..30).collect();
    let checked = |quality_control: std::ops::Range<usize>| {
        let samples = shared().with_companions(companions(quality_control));
        let mut proof = Proof::new();
        for split in plan(&structure, &rows, 1) {
            for inner in plan(&structure, split.training(), 2) {
                let learned = chain().learn(&inner, &samples, None, &Work::unattended());
                proof.check(&learned.unwrap(), &inner);
            }
        }
        proof.holds()
    };
    assert!(checked(32..36));
    // Inside the plan, an outer held-out sample would be seen by the inner fits.
    assert!(!checked(10..14));
}

#[test]
fn preparing_gives_what_learning_and_applying_gives() {
    let rows: Vec<usize> = (0..25).collect();
    let split = Split::everything(&rows);
    let shared = shared();
    let work = Work::unattended();
    let prepared = chain().prepare(&split, &shared, None, &work).unwrap();
    let applied = prepared.chain.apply(Cow::Borrowed(&shared), &work).unwrap();
    assert_eq!(prepared.samples.x, applied.x);
    let raw = Samples::new(meats()).select(&[3, 30]);
    let scored = prepared.chain.apply_from_start(raw, &work).unwrap();
    assert_eq!(scored.x.row(1), prepared.samples.x.row(30));
}

#[test]
fn a_chain_without_own_steps_copies_nothing() {
    let shared = shared();
    let filters = Chain::new(vec![
        MissingShare::new(0.5).unwrap().into(),
        NearConstant::new(0.9).unwrap().into(),
        ColumnImputation::new(ColumnStatistic::Median).into(),
        Centering.into(),
    ]);
    let rows: Vec<usize> = (0..25).collect();
    let work = Work::unattended();
    let prepared = filters
        .prepare(&Split::everything(&rows), &shared, None, &work)
        .unwrap();
    assert!(Arc::ptr_eq(&prepared.samples.x, &shared.x));
}

#[test]
fn a_failing_step_is_named_by_its_place_and_cancelling_is_no_failure() {
    let samples = Samples::new(Matrix::from_row_slice(
        2,
        3,
        &[1.0, 2.0, 3.0, 5.0, 5.0, 5.0],
    ));
    let chain = Chain::new(vec![
        Logarithm::new(LogarithmBase::Natural, 0.0).unwrap().into(),
        StandardNormalVariate.into(),
    ]);
    let stop = chain
        .apply_shared(samples.clone(), &Work::unattended())
        .unwrap_err();
    let error = StepError::NoSpread { row: 1 };
    assert_eq!(stop, ChainStop::Step { step: 1, error });
    let source = CancelSource::new();
    let report = |_: f32| ();
    let work = Work::new(source.token(), &report);
    source.cancel();
    assert_eq!(
        chain.apply_shared(samples, &work),
        Err(ChainStop::Cancelled)
    );
}

#[test]
fn the_outcome_reaches_only_the_training_part() {
    let fat = meats_fat();
    let samples = Samples::new(meats());
    let split = Split::everything(&[4, 9, 100]);
    let part = split
        .training_part(&samples)
        .with_outcome(Some(OutcomeValues::Numbers(&fat)));
    let expected = [fat[4], fat[9], fat[100]];
    let Some(widefold::numeric::parts::PartOutcome::Numbers(seen)) = part.outcome() else {
        panic!("a measured outcome stays one");
    };
    assert_eq!(seen, expected);
    close(part.value(2, 0), samples.x[(100, 0)], 0.0);
}

/// The area under the curve of held-out sums over the chosen predictors, each with the sign of
/// its difference between the classes, over data sets of pure noise.
fn area_on_noise(learn_from: impl Fn(&Split, &[usize]) -> Split) -> f64 {
    let (n, p, sets) = (60, 2000, 12);
    let rows: Vec<usize> = (0..n).collect();
    let class: Vec<usize> = (0..n).map(|row| row % 2).collect();
    let structure = Structure {
        strata: Some(&class),
        ..Structure::of_units(&rows)
    };
    let work = Work::unattended();
    let chain = Chain::new(vec![OutcomeFilter::new(20).unwrap().into()]);
    let mut sum = 0.0;
    for set in 0..sets {
        let mut random = Random::new(4, "noise", set);
        let samples = Samples::new(Matrix::from_fn(n, p, |_, _| random.normal()));
        let params = PartsParams {
            scheme: Scheme::Balanced,
            parts: 5,
            repeats: 1,
            seed: set,
        };
        let mut scores = vec![0.0; n];
        for split in assign(&params, &rows, &structure, "noise")
            .unwrap()
            .splits(0)
        {
            let outcome = Some(OutcomeValues::Classes(&class));
            let from = learn_from(&split, &rows);
            let prepared = chain.prepare(&from, &samples, outcome, &work).unwrap();
            for column in prepared.samples.active_columns() {
                let x = samples.column(column);
                let sign = |&row: &usize| if class[row] == 1 { x[row] } else { -x[row] };
                let slope: f64 = split.training().iter().map(sign).sum();
                for &row in split.held_out() {
                    scores[row] += slope * x[row];
                }
            }
        }
        let is_event: Vec<bool> = class.iter().map(|&class| class == 1).collect();
        sum += area_under_curve(&is_event, &scores).unwrap();
    }
    sum / f64::from(sets as u32)
}

#[test]
fn a_filter_by_outcome_finds_nothing_in_noise_unless_it_leaks() {
    let honest = area_on_noise(|split, _| split.clone());
    assert!((honest - 0.5).abs() < 0.07, "{honest}");
    // Learnt outside the parts, as a planted leak: pure noise looks like a perfect test.
    let leaky = area_on_noise(|_, rows| Split::everything(rows));
    assert!(leaky > 0.93, "{leaky}");
}
