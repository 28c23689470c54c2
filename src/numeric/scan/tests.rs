//! The bound of the certified scan, proved again on hard columns and residuals.

use super::*;
use crate::base::work::Work;
use crate::numeric::designs::{Design, Dice, predictors};
use crate::numeric::ground::Penalised;
use crate::numeric::matrix::Matrix;
use crate::numeric::predictors::Predictors;
use crate::numeric::response::Response;
use crate::numeric::task::{Scaling, Task};

/// Calls `check` with each predictor's true |zⱼ'g|/(fⱼ‖g‖) and its bound, over many random tasks.
fn over_random_tasks(mut check: impl FnMut(f64, f64)) {
    let mut dice = Dice::new(5);
    for round in 0..60 {
        let design = [
            Design::Independent,
            Design::Nasty,
            Design::Markers,
            Design::Smooth,
            Design::Nasty,
        ][round % 5];
        let n = 2 + dice.below(70);
        let p = 1 + dice.below(90);
        let predictors = Predictors::new(predictors(design, n, p, &mut dice));
        let response = Response::Measured(vec![0.0; n]);
        let rows: Vec<usize> = (0..n).filter(|_| dice.below(4) > 0).collect();
        if rows.len() < 2 {
            continue;
        }
        let factors: Vec<f64> = (0..p).map(|_| 0.1 + 3.0 * dice.uniform()).collect();
        let covariates = Matrix::zeros(n, 0);
        let task = Task {
            predictors: &predictors,
            response: &response,
            rows: &rows,
            columns: None,
            covariates: &covariates,
            weights: None,
            factors: Some(&factors),
            scaling: Scaling::UnitVariance,
        };
        let ground = Ground::new(&task, Penalised::ByWeight, &Work::unattended()).unwrap();
        let sieve = Sieve::new(&ground);
        let count = 1 + dice.below(6);
        let residuals: Vec<Vec<f64>> = (0..count).map(|_| residual(&rows, n, &mut dice)).collect();
        let views: Vec<&[f64]> = residuals.iter().map(Vec::as_slice).collect();
        let mut bounds = vec![Bounds::default(); count];
        sieve.bounds(predictors.panels(), &views, &mut bounds);
        for (g, bounds) in residuals.iter().zip(&bounds) {
            let length = lanes::norm(g);
            for (j, factor) in factors.iter().enumerate() {
                let truth = ground.correlation(j, g).abs() / (factor * length);
                check(truth, f64::from(bounds.of(j)));
            }
            let least = bounds.of(dice.below(p));
            let mut seen = Vec::new();
            bounds.not_below(least, |j, _| seen.push(j));
            let above = |&j: &usize| bounds.of(j) >= least && bounds.of(j) > 0.0;
            assert_eq!(seen, (0..p).filter(above).collect::<Vec<_>>());
            assert_eq!(
                bounds.largest(),
                bounds.each().iter().copied().fold(0.0, f32::max)
            );
        }
    }
}

/// Zero off the rows, of sum zero; heavy-tailed, of any size.
fn residual(rows: &[usize], n: usize, dice: &mut Dice) -> Vec<f64> {
    let mut g = vec![0.0; n];
    let size = 10_f64.powi(dice.below(30) as i32 - 15);
    for &row in rows {
        g[row] = size * dice.normal().powi(3);
    }
    let mean = g.iter().sum::<f64>() / rows.len() as f64;
    for &row in rows {
        g[row] -= mean;
    }
    g
}

#[test]
fn the_bound_is_never_below_the_truth() {
    over_random_tasks(|truth, bound| {
        assert!(bound >= truth, "bound {bound}, truth {truth}");
    });
}

#[test]
fn the_bound_is_close_enough_to_exclude_nearly_everything() {
    // On columns without heavy tails the error of 8 bits is below 1 % of the residual's length.
    let mut dice = Dice::new(6);
    let predictors = Predictors::new(predictors(Design::Independent, 60, 200, &mut dice));
    let response = Response::Measured(vec![0.0; 60]);
    let rows: Vec<usize> = (0..60).collect();
    let covariates = Matrix::zeros(60, 0);
    let task = Task {
        predictors: &predictors,
        response: &response,
        rows: &rows,
        columns: None,
        covariates: &covariates,
        weights: None,
        factors: None,
        scaling: Scaling::UnitVariance,
    };
    let ground = Ground::new(&task, Penalised::ByWeight, &Work::unattended()).unwrap();
    let g = residual(&rows, 60, &mut dice);
    let mut bounds = [Bounds::default()];
    Sieve::new(&ground).bounds(predictors.panels(), &[&g], &mut bounds);
    for (j, &bound) in bounds[0].each()[..200].iter().enumerate() {
        let truth = ground.correlation(j, &g).abs() / lanes::norm(&g);
        // The scale of a column against the residual's length: √n.
        assert!(f64::from(bound) - truth < 0.01 * 60_f64.sqrt());
    }
}

#[test]
fn markers_of_three_values_are_exact() {
    let mut dice = Dice::new(7);
    let x = predictors(Design::Markers, 50, 40, &mut dice);
    let predictors = Predictors::new(x);
    let panels = predictors.panels();
    for j in 0..40 {
        assert!(panels.error[j] <= 1e-12, "0, 1 and 2 are −127, 0 and 127");
    }
}

#[test]
fn wide_and_plain_sums_are_equal() {
    let mut dice = Dice::new(8);
    let panel: Vec<[i8; PAIR]> = (0..33)
        .map(|_| std::array::from_fn(|_| dice.below(255) as i8))
        .collect();
    let pairs: Vec<u32> = (0..33).filter(|pair| pair % 5 != 2).collect();
    let some = |dice: &mut Dice| -> Vec<[i16; 2]> {
        let mut number = || (dice.below(65_535) as i32 - 32_767) as i16;
        pairs
            .iter()
            .map(|_| [number() / 64, number() / 64])
            .collect()
    };
    let (first, second) = (some(&mut dice), some(&mut dice));
    let plain = plain_sums::<2>(&panel, &pairs, [&first, &second]);
    #[cfg(target_arch = "x86_64")]
    if let Some(simd) = pulp::x86::V3::try_new() {
        let wide = simd.vectorize(|| wide_sums::<2>(simd, &panel, &pairs, [&first, &second]));
        assert_eq!(wide, plain);
    }
    let by_hand: i32 = pairs
        .iter()
        .zip(&first)
        .map(|(&pair, g)| {
            let bytes = panel[pair as usize];
            i32::from(bytes[6]) * i32::from(g[0]) + i32::from(bytes[7]) * i32::from(g[1])
        })
        .sum();
    assert_eq!(plain[0][3], by_hand);
}
