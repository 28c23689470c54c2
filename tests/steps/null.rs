//! Where there is nothing to find, nothing is claimed, whatever the order of the steps: noise,
//! also with a filter that looks at the outcome; and replicates of a subject.
//!
//! A yes/no outcome is fitted as 0 and 1 by ridge, with few strengths and parts so that a hundred
//! tables take seconds; the area under the curve needs no more than the order of the predictions.

use widefold::base::thread::Threads;
use widefold::base::work::Work;
use widefold::numeric::choose::Rule;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::measure::area_under_curve;
use widefold::numeric::parts::{PartsParams, Scheme, Structure, assign};
use widefold::numeric::path::Grouping;
use widefold::numeric::predictors::Predictors;
use widefold::numeric::procedure::{
    ErrorMeasure, Material, Procedure, StrengthRule, Weighting, nested,
};
use widefold::numeric::random::Random;
use widefold::numeric::response::Response;
use widefold::numeric::samples::Samples;
use widefold::numeric::step::*;
use widefold::numeric::task;

const SAMPLES: usize = 60;
const PREDICTORS: usize = 2_000;
const TABLES: u64 = 100;
/// Each table is prepared in every one of the six orders.
const ORDERS_PER_TABLE: usize = 6;

/// The nested area under the curve of ridge on 0 and 1, units kept together.
fn nested_area(x: Matrix, is_event: &[bool], units: &[usize], steps: Vec<Step>, seed: u64) -> f64 {
    let work = Work::unattended();
    let chain = Chain::new(steps);
    let samples = chain.apply_shared(Samples::new(x), &work).unwrap();
    let n = samples.n_samples();
    let y: Vec<f64> = is_event
        .iter()
        .map(|event| f64::from(u8::from(*event)))
        .collect();
    let strata: Vec<usize> = is_event.iter().map(|event| usize::from(*event)).collect();
    let (predictors, response) = (Predictors::new(samples.x.clone()), Response::Measured(y));
    let (covariates, rows) = (Matrix::zeros(n, 0), (0..n).collect::<Vec<_>>());
    let structure = Structure {
        strata: Some(&strata),
        ..Structure::of_units(units)
    };
    let material = Material {
        samples: &samples,
        predictors: &predictors,
        response: &response,
        covariates: &covariates,
        weights: None,
        structure,
    };
    let parts = |parts| PartsParams {
        scheme: Scheme::Balanced,
        parts,
        repeats: 1,
        seed,
    };
    let procedure = Procedure {
        weighting: Weighting::Equal,
        signs: Vec::new(),
        chain: &chain,
        scaling: task::Scaling::AsGiven,
        shares: vec![0.0],
        grouping: Grouping::Apart,
        measure: ErrorMeasure::SquaredError,
        strength: StrengthRule::Chosen {
            rule: Rule::LowestError,
            count: 5,
            ratio: Some(1e-3),
            inner: parts(3),
        },
    };
    let plan = assign(&parts(5), &rows, &structure, "outer").unwrap();
    let held_out = nested(
        &material,
        &procedure,
        &plan,
        "outer",
        Threads::new(2),
        &work,
    )
    .unwrap();
    assert!(held_out.tally.proof.holds());
    let mut score = vec![f64::NAN; n];
    for fit in &held_out.fits {
        for (&row, &predicted) in fit.rows.iter().zip(fit.linear.column(0).iter()) {
            score[row] = predicted;
        }
    }
    area_under_curve(is_event, &score).unwrap()
}

fn noise(random: &mut Random, n: usize) -> Matrix {
    Matrix::from_fn(n, PREDICTORS, |_, _| random.normal())
}

/// Three steps of the three classes that matter: row-by-row, learned, learned with the outcome.
fn steps(order: [usize; 3]) -> Vec<Step> {
    let all: [Step; 3] = [
        StandardNormalVariate.into(),
        Scaling::new(ScalingRule::UnitVariance).into(),
        OutcomeFilter::new(20).unwrap().into(),
    ];
    order.map(|at| all[at].clone()).to_vec()
}

#[test]
fn noise_gives_half_the_area_whatever_the_order_of_steps_and_of_the_outcome_driven_filter() {
    let orders = [
        [0, 1, 2],
        [0, 2, 1],
        [1, 0, 2],
        [1, 2, 0],
        [2, 0, 1],
        [2, 1, 0],
    ];
    let mut areas = [const { Vec::new() }; 6];
    for table in 0..TABLES {
        let mut random = Random::new(table, "null table", 0);
        let x = noise(&mut random, SAMPLES);
        let mut is_event: Vec<bool> = (0..SAMPLES).map(|row| row % 2 == 0).collect();
        random.shuffle(&mut is_event);
        let units: Vec<usize> = (0..SAMPLES).collect();
        for turn in 0..ORDERS_PER_TABLE {
            let at = (table as usize + turn) % orders.len();
            let steps = steps(orders[at]);
            areas[at].push(nested_area(x.clone(), &is_event, &units, steps, table));
        }
    }
    let mean = |areas: &[f64]| areas.iter().sum::<f64>() / areas.len() as f64;
    let all: Vec<f64> = areas.concat();
    let overall = mean(&all);
    assert!((0.45..=0.55).contains(&overall), "{overall} on average");
    for (order, areas) in orders.iter().zip(&areas) {
        // The area of one table has a standard deviation of about 0.08; four standard errors.
        let mean = mean(areas);
        let slack = 4.0 * 0.08 / (areas.len() as f64).sqrt();
        assert!((mean - 0.49).abs() <= slack, "{order:?}: {mean}");
    }
}

#[test]
fn a_filter_that_saw_all_outcomes_would_find_much_in_the_same_noise() {
    // What the nested procedure must not do, done by hand: the filter on all samples first.
    let mut areas = Vec::new();
    for table in 0..5 {
        let mut random = Random::new(table, "null table", 0);
        let x = noise(&mut random, SAMPLES);
        let mut is_event: Vec<bool> = (0..SAMPLES).map(|row| row % 2 == 0).collect();
        random.shuffle(&mut is_event);
        let y: Vec<f64> = is_event
            .iter()
            .map(|event| f64::from(u8::from(*event)))
            .collect();
        let samples = Samples::new(x);
        let split = widefold::numeric::parts::Split::everything(&(0..SAMPLES).collect::<Vec<_>>());
        let part = split
            .training_part(&samples)
            .with_outcome(Some(widefold::numeric::samples::OutcomeValues::Numbers(&y)));
        let filter = Step::from(OutcomeFilter::new(20).unwrap());
        let work = Work::unattended();
        let kept = filter
            .learn(&part, &work)
            .unwrap()
            .apply(std::borrow::Cow::Borrowed(&samples), &work)
            .unwrap()
            .active_columns();
        let few = Matrix::from_fn(SAMPLES, kept.len(), |i, j| samples.x[(i, kept[j])]);
        let units: Vec<usize> = (0..SAMPLES).collect();
        areas.push(nested_area(few, &is_event, &units, Vec::new(), table));
    }
    let mean = areas.iter().sum::<f64>() / areas.len() as f64;
    assert!(mean > 0.85, "{mean}: the test above could not fail");
}

#[test]
fn replicates_kept_together_give_the_honest_area_and_split_by_row_they_do_not() {
    const SUBJECTS: usize = 20;
    const EACH: usize = 3;
    let (mut together, mut apart) = (Vec::new(), Vec::new());
    for table in 0..20 {
        let mut random = Random::new(table, "replicates", 0);
        let of_subject = Matrix::from_fn(SUBJECTS, 200, |_, _| random.normal());
        let x = Matrix::from_fn(SUBJECTS * EACH, 200, |row, column| {
            of_subject[(row / EACH, column)] + 0.1 * random.normal()
        });
        let mut outcome: Vec<bool> = (0..SUBJECTS).map(|at| at % 2 == 0).collect();
        random.shuffle(&mut outcome);
        let is_event: Vec<bool> = (0..SUBJECTS * EACH)
            .map(|row| outcome[row / EACH])
            .collect();
        let units: Vec<usize> = (0..SUBJECTS * EACH).map(|row| row / EACH).collect();
        let rows: Vec<usize> = (0..SUBJECTS * EACH).collect();
        let filter = || vec![OutcomeFilter::new(20).unwrap().into()];
        together.push(nested_area(x.clone(), &is_event, &units, filter(), table));
        apart.push(nested_area(x, &is_event, &rows, filter(), table));
    }
    let mean = |areas: &[f64]| areas.iter().sum::<f64>() / areas.len() as f64;
    let (together, apart) = (mean(&together), mean(&apart));
    assert!(
        (0.38..=0.6).contains(&together),
        "kept together: {together}"
    );
    assert!(apart > 0.95, "split by row: {apart}");
}
