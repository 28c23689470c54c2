//! Penalty weights against ridge by hand, rescaled predictors and a search by hand.

use super::*;
use crate::base::thread::Threads;
use crate::numeric::choose::Rule;
use crate::numeric::designs::{Design, Dice, outcome, predictors};
use crate::numeric::matrix::Matrix;
use crate::numeric::parts::{PartsParams, Scheme, Split, Structure, assign};
use crate::numeric::path::Grouping;
use crate::numeric::predictors::Predictors;
use crate::numeric::procedure::{
    ErrorMeasure, Material, Reach, StrengthRule, Tally, fit_part, one_split, tune, without_pairs,
};
use crate::numeric::step::Chain;
use crate::numeric::task::Scaling;

struct Bench {
    samples: Samples,
    predictors: Predictors,
    response: Response,
    covariates: Matrix,
    units: Vec<usize>,
    chain: Chain,
}

impl Bench {
    /// An outcome that depends on the first ten predictors only.
    fn new(n: usize, p: usize, seed: u64) -> Self {
        let mut dice = Dice::new(seed);
        let x = predictors(Design::Independent, n, p, &mut dice);
        let first = x.columns(0, 10).into_owned();
        let y = outcome(&first, 5, 1.0, &mut dice);
        Self {
            samples: Samples::new(x.clone()),
            predictors: Predictors::new(x),
            response: Response::Measured(y),
            covariates: Matrix::zeros(n, 0),
            units: (0..n).collect(),
            chain: Chain::new(Vec::new()),
        }
    }

    fn material(&self) -> Material<'_> {
        Material {
            samples: &self.samples,
            predictors: &self.predictors,
            response: &self.response,
            covariates: &self.covariates,
            weights: None,
            structure: Structure::of_units(&self.units),
        }
    }

    fn procedure(&self, weighting: Weighting) -> Procedure<'_> {
        Procedure {
            chain: &self.chain,
            scaling: Scaling::UnitVariance,
            shares: vec![1.0],
            grouping: Grouping::Apart,
            weighting,
            signs: Vec::new(),
            measure: ErrorMeasure::SquaredError,
            strength: StrengthRule::Chosen {
                rule: Rule::LowestError,
                count: 20,
                ratio: Some(0.05),
                inner: plan(4),
            },
        }
    }
}

fn plan(parts: usize) -> PartsParams {
    PartsParams {
        scheme: Scheme::Random,
        parts,
        repeats: 1,
        seed: 3,
    }
}

/// The columns centred and scaled on some rows.
fn standardised(x: &Matrix, rows: &[usize]) -> Matrix {
    let m = rows.len() as f64;
    let mut z = x.select_rows(rows);
    for mut column in z.column_iter_mut() {
        let mean = column.mean();
        column.add_scalar_mut(-mean);
        let sd = (column.norm_squared() / m).sqrt();
        column /= sd;
    }
    z
}

/// Ridge coefficients b = Z'(ZZ' + mλI)⁻¹(y − mean y).
fn ridge(z: &Matrix, y: &Matrix, k: f64) -> Matrix {
    let centred = y.add_scalar(-y.mean());
    let gram = z * z.transpose() + Matrix::identity(z.nrows(), z.nrows()) * k;
    z.transpose() * gram.lu().solve(&centred).unwrap()
}

#[test]
fn learnt_weights_follow_from_a_ridge_fit_to_the_training_rows_alone() {
    let bench = Bench::new(24, 40, 1);
    let split = Split::with_held_out(
        &(0..18).collect::<Vec<_>>(),
        &(18..24).collect::<Vec<_>>(),
        &bench.material().structure,
    )
    .unwrap();
    let learn = |bench: &Bench| {
        let procedure = bench.procedure(Weighting::Adaptive { power: 0.7 });
        let mut tally = Tally::default();
        let (material, work) = (bench.material(), Work::unattended());
        let fit = fit_part(
            &material,
            &procedure,
            &split,
            1.0,
            &[0.1],
            &mut tally,
            &work,
        )
        .unwrap();
        let learnt = fit.learnt;
        (
            learnt.factors().unwrap().to_vec(),
            learnt.first_strength.unwrap(),
        )
    };
    let (weights, strength) = learn(&bench);
    let z = standardised(bench.predictors.x(), split.training());
    let Response::Measured(y) = &bench.response else {
        unreachable!("the outcome was made as a measured one")
    };
    let own = Matrix::from_fn(18, 1, |i, _| y[i]);
    let b = ridge(&z, &own, 18.0 * strength);
    let mean = b.iter().map(|b| b.abs()).sum::<f64>() / 40.0;
    for (weight, b) in weights.iter().zip(b.iter()) {
        let wanted = (mean / b.abs()).powf(0.7);
        assert!((weight / wanted - 1.0).abs() < 1e-6, "{weight} {wanted}");
    }
    // The strength has the lowest leave-one-out error of the whole range, by refits.
    let left_out = |strength: f64| -> f64 {
        let errors = (0..18).map(|gone| {
            let kept: Vec<usize> = (0..18).filter(|&i| i != gone).collect();
            let (part, value) = (z.select_rows(&kept), own.select_rows(&kept));
            // The means are those of the rows that are left, the scale and the constant stay.
            let means = part.row_mean();
            let centred = Matrix::from_fn(17, 40, |i, j| part[(i, j)] - means[j]);
            let b = ridge(&centred, &value, 18.0 * strength);
            let off = z.row(gone) - means;
            let predicted = value.mean() + (off * b)[0];
            (own[gone] - predicted).powi(2)
        });
        errors.sum::<f64>() / 18.0
    };
    let material = bench.material();
    let task = Task {
        predictors: &bench.predictors,
        response: &bench.response,
        rows: split.training(),
        columns: None,
        covariates: material.covariates,
        weights: None,
        factors: None,
        scaling: Scaling::UnitVariance,
    };
    let params = Params::default();
    let tried = strength_range(&task, 0.0, FIRST_STAGE, &params, &Work::unattended()).unwrap();
    let least = tried
        .iter()
        .map(|s| left_out(*s))
        .fold(f64::INFINITY, f64::min);
    assert!(left_out(strength) <= least * (1.0 + 1e-9));
    // Nothing about the held-out samples counts.
    let mut other = Bench::new(24, 40, 1);
    if let Response::Measured(y) = &mut other.response {
        y[18..].fill(1e3);
    }
    assert_eq!(learn(&other), (weights, strength));
}

#[test]
fn a_weight_is_a_predictor_on_another_scale() {
    let bench = Bench::new(30, 12, 2);
    let weights: Vec<f64> = (0..12).map(|j| [0.5, 1.0, 3.0][j % 3]).collect();
    let block = (0..12).map(Some).collect();
    let procedure = bench.procedure(Weighting::Blocks {
        block,
        candidates: vec![weights.clone()],
    });
    let rows: Vec<usize> = (0..30).collect();
    let split = Split::everything(&rows);
    let (material, work) = (bench.material(), Work::unattended());
    let mut tally = Tally::default();
    let strengths = [0.4, 0.1, 0.02];
    let fit = fit_part(
        &material, &procedure, &split, 1.0, &strengths, &mut tally, &work,
    )
    .unwrap();
    let z = standardised(bench.predictors.x(), &rows);
    let rescaled = Matrix::from_fn(30, 12, |i, j| z[(i, j)] / weights[j]);
    let scaled = Predictors::new(rescaled);
    let task = Task {
        predictors: &scaled,
        response: &bench.response,
        rows: &rows,
        columns: None,
        covariates: &bench.covariates,
        weights: None,
        factors: None,
        scaling: Scaling::AsGiven,
    };
    let plain = fit_path(&task, 1.0, &strengths, &Params::default(), &work).unwrap();
    for at in 0..3 {
        let found = fit.path.standardised(at);
        let wanted = plain.standardised(at);
        assert_eq!(found.len(), wanted.len());
        for ((i, a), (j, b)) in found.iter().zip(&wanted) {
            assert_eq!(i, j);
            assert!((a * weights[*j] - b).abs() < 1e-7, "{a} {b}");
        }
    }
}

#[test]
fn chosen_block_weights_are_those_of_a_search_by_hand() {
    let bench = Bench::new(40, 120, 3);
    // The outcome depends on the first block only.
    let block: Vec<Option<usize>> = (0..120).map(|j| Some(usize::from(j >= 10))).collect();
    let candidates = vec![vec![1.0, 1.0], vec![1.0, 4.0], vec![4.0, 1.0]];
    let procedure = bench.procedure(Weighting::Blocks {
        block,
        candidates: candidates.clone(),
    });
    let rows: Vec<usize> = (0..40).collect();
    let split = Split::everything(&rows);
    let (material, work) = (bench.material(), Work::unattended());
    let find = |procedure: &Procedure<'_>| {
        tune(&material, procedure, &split, "x", Reach::Chosen, &work).unwrap()
    };
    let tuned = find(&procedure);
    let by_hand: Vec<f64> = candidates
        .iter()
        .map(|weights| {
            let alone = find(&procedure.with_block_weights(weights));
            assert!(alone.weights_tried.is_empty());
            let errors = &alone.curves[0].errors;
            errors.iter().copied().fold(f64::INFINITY, f64::min)
        })
        .collect();
    let told: Vec<f64> = tuned
        .weights_tried
        .iter()
        .map(|(_, error)| *error)
        .collect();
    assert_eq!(told, by_hand);
    assert_eq!(tuned.block_weights, [1.0, 4.0], "{by_hand:?}");
    assert!(by_hand[1] < by_hand[0] && by_hand[0] < by_hand[2]);
}

#[test]
fn signs_that_are_ruled_out_never_come() {
    let bench = Bench::new(40, 60, 4);
    let mut procedure = bench.procedure(Weighting::Equal);
    procedure.signs = (0..60)
        .map(|j| [Sign::NotNegative, Sign::Any][usize::from(j >= 30)])
        .collect();
    let rows: Vec<usize> = (0..40).collect();
    let split = Split::everything(&rows);
    let tuned = tune(
        &bench.material(),
        &procedure,
        &split,
        "x",
        Reach::WholeRange,
        &Work::unattended(),
    )
    .unwrap();
    let path = &tuned.fit.path;
    let last = path.standardised(path.n_points() - 1);
    assert!(last.iter().any(|(j, b)| *j >= 30 && *b < 0.0));
    for at in 0..path.n_points() {
        let chosen = path.standardised(at);
        assert!(chosen.iter().all(|(j, b)| *j >= 30 || *b > 0.0));
    }
}

#[test]
fn each_pair_of_parts_is_predicted_by_a_fit_that_has_seen_neither() {
    let bench = Bench::new(24, 30, 5);
    let procedure = bench.procedure(Weighting::Equal);
    let rows: Vec<usize> = (0..24).collect();
    let material = bench.material();
    let outer = assign(&plan(4), &rows, &material.structure, "outer").unwrap();
    let work = Work::unattended();
    let run = |threads| {
        without_pairs(
            &material,
            &procedure,
            &outer,
            "pair",
            Threads::new(threads),
            &work,
        )
        .unwrap()
    };
    let (pairs, tally) = run(2);
    assert_eq!(pairs.len(), 6);
    assert!(tally.proof.holds());
    let parts = outer.splits(0);
    for (pair, again) in pairs.iter().zip(&run(1).0) {
        assert_eq!(pair.fit.linear, again.fit.linear);
        let (first, second) = pair.parts;
        let mut held = [parts[first].held_out(), parts[second].held_out()].concat();
        held.sort_unstable();
        assert_eq!(pair.fit.rows, held);
        let training: Vec<usize> = rows.iter().copied().filter(|r| !held.contains(r)).collect();
        let split = Split::with_held_out(&training, &held, &material.structure).unwrap();
        let purpose = format!("pair 0 {first} {second}");
        let (alone, _) = one_split(&material, &procedure, &split, &purpose, &work).unwrap();
        assert_eq!(alone.linear, pair.fit.linear);
    }
}
