//! Paths for a measured outcome: certificates, closed forms, invariance, hostile inputs.

use super::*;
use crate::base::thread::{Threads, in_order};
use crate::numeric::certificate::certify;
use crate::numeric::designs::{Design, Dice, outcome, predictors};
use crate::numeric::range::{RangeParams, all_zero_point, strength_range};
use crate::numeric::task::Scaling;

/// Everything a task borrows.
struct Data {
    predictors: Predictors,
    response: Response,
    rows: Vec<usize>,
    columns: Option<Vec<bool>>,
    covariates: Matrix,
    weights: Option<Vec<f64>>,
    factors: Option<Vec<f64>>,
    scaling: Scaling,
}

impl Data {
    fn new(x: Matrix, y: Vec<f64>) -> Self {
        let n = x.nrows();
        Self {
            predictors: Predictors::new(x),
            response: Response::Measured(y),
            rows: (0..n).collect(),
            columns: None,
            covariates: Matrix::zeros(n, 0),
            weights: None,
            factors: None,
            scaling: Scaling::UnitVariance,
        }
    }

    fn task(&self) -> Task<'_> {
        Task {
            predictors: &self.predictors,
            response: &self.response,
            rows: &self.rows,
            columns: self.columns.as_deref(),
            covariates: &self.covariates,
            weights: self.weights.as_deref(),
            factors: self.factors.as_deref(),
            scaling: self.scaling,
        }
    }

    fn range(&self, share: f64, count: usize, ratio: f64) -> Vec<f64> {
        strength_range(
            &self.task(),
            share,
            RangeParams { count, ratio },
            &Params::default(),
            &Work::unattended(),
        )
        .unwrap()
    }

    fn fit(&self, share: f64, strengths: &[f64]) -> Path {
        fit_path(
            &self.task(),
            share,
            strengths,
            &Params::default(),
            &Work::unattended(),
        )
        .unwrap()
    }
}

fn random(design: Design, n: usize, p: usize, seed: u64) -> Data {
    let mut dice = Dice::new(seed);
    let x = predictors(design, n, p, &mut dice);
    let y = outcome(&x, 5, 1.0, &mut dice);
    Data::new(x, y)
}

/// Covariates, sample weights (some zero), penalty weights (some zero), rows and columns left out.
fn with_everything(mut data: Data, seed: u64) -> Data {
    let mut dice = Dice::new(seed);
    let (n, p) = data.predictors.x().shape();
    data.rows.retain(|row| row % 5 != 3);
    data.covariates = Matrix::from_fn(n, 3, |i, k| match k {
        0 => dice.normal(),
        1 => 1990.0 + (i % 7) as f64,
        // The third is a combination of the others: it must not matter.
        _ => 2.0 * 1990.0 + 2.0 * (i % 7) as f64,
    });
    data.weights = Some((0..n).map(|i| [1.0, 0.5, 2.0, 0.0][i % 4]).collect());
    data.factors = Some(
        (0..p)
            .map(|j| [1.0, 2.0, 0.5, 1.0, 1.0, 3.0][j % 6])
            .collect(),
    );
    if let Some(factors) = &mut data.factors {
        factors[1] = 0.0;
    }
    data.columns = Some((0..p).map(|j| j % 11 != 5).collect());
    data
}

fn certified(data: &Data, share: f64, strengths: &[f64], what: &str) {
    let path = data.fit(share, strengths);
    for (at, &strength) in strengths.iter().enumerate() {
        let info = path.info(at);
        assert!(info.settled, "{what} {share} {strength}: {info:?}");
        let found = certify(&data.task(), share, strength, &path.coefficients(at)).unwrap();
        assert!(
            found.gap <= 1e-7 && found.worst_violation < 1e-4,
            "{what} share {share} strength {strength} ({at}): {found:?}, own gap {}",
            info.relative_gap
        );
    }
}

#[test]
fn every_solution_carries_an_independent_certificate() {
    let designs = [
        Design::Independent,
        Design::Neighbours,
        Design::Smooth,
        Design::Markers,
    ];
    for (seed, design) in designs.into_iter().enumerate() {
        for (n, p) in [(20, 60), (40, 300), (60, 15)] {
            let plain = random(design, n, p, seed as u64);
            let full = with_everything(random(design, n, p, seed as u64), 99);
            for data in [plain, full] {
                for share in [1.0, 0.5, 0.05] {
                    let strengths = data.range(share, 25, 0.01);
                    certified(&data, share, &strengths, &format!("{design:?} {n} x {p}"));
                }
                let strengths = data.range(0.0, 12, 0.1);
                certified(
                    &data,
                    0.0,
                    &strengths,
                    &format!("{design:?} {n} x {p} ridge"),
                );
            }
        }
    }
}

#[test]
fn nasty_columns_get_certified_solutions_too() {
    for seed in 0..12 {
        let (n, p) = [(9, 80), (30, 200), (50, 20), (25, 25)][seed as usize % 4];
        // Offsets of 1e6 and units of 1e±12 cost the check itself some digits.
        let data = random(Design::Nasty, n, p, seed);
        for share in [1.0, 0.3] {
            let strengths = data.range(share, 20, 1e-3);
            let path = data.fit(share, &strengths);
            for (at, &strength) in strengths.iter().enumerate() {
                let info = path.info(at);
                assert!(info.settled, "{seed} {share} {at}: {info:?}");
                let coefficients = path.coefficients(at);
                assert!(coefficients.intercept.is_finite());
                assert!(coefficients.predictors.iter().all(|(_, b)| b.is_finite()));
                let found = certify(&data.task(), share, strength, &coefficients).unwrap();
                assert!(found.gap <= 1e-6, "{seed} {share} {at}: {found:?} {info:?}");
            }
        }
    }
}

#[test]
fn the_model_is_empty_at_the_all_zero_point_and_not_just_below() {
    for seed in 0..6 {
        let data = with_everything(random(Design::Independent, 40, 120, seed), seed);
        for share in [1.0, 0.4] {
            let top = all_zero_point(&data.task(), share, &Params::default(), &Work::unattended())
                .unwrap();
            let path = data.fit(share, &[top, top * (1.0 - 1e-6)]);
            // The one predictor without a penalty is always in.
            assert_eq!(path.info(0).n_chosen, 1, "at the point");
            assert!(path.info(1).n_chosen > 1, "just below");
        }
    }
}

#[test]
fn ridge_through_the_samples_equals_ridge_through_the_predictors() {
    // (Z'Z/n + λI)⁻¹ Z'y/n by plain elimination, against the solver's routes for wide and narrow.
    for (n, p) in [(30, 12), (10, 80)] {
        let data = random(Design::Independent, n, p, 3);
        let x = data.predictors.x();
        let Response::Measured(y) = &data.response else {
            unreachable!("the outcome is measured")
        };
        let mut z = x.clone();
        for mut column in z.column_iter_mut() {
            let mean = column.mean();
            let sd = (column.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / n as f64).sqrt();
            column.apply(|v| *v = (*v - mean) / sd);
        }
        let mean = y.iter().sum::<f64>() / n as f64;
        let centered = Matrix::from_iterator(n, 1, y.iter().map(|y| y - mean));
        for strength in [0.01, 0.7, 20.0] {
            let left = z.transpose() * &z / n as f64 + Matrix::identity(p, p) * strength;
            let right = z.transpose() * &centered / n as f64;
            let wanted = left.lu().solve(&right).unwrap();
            let path = data.fit(0.0, &[strength]);
            for (j, b) in path.standardised(0) {
                assert!((b - wanted[j]).abs() < 1e-10 * wanted.amax(), "{n} x {p}");
            }
            let fitted = path.predict(&data.task(), &data.rows);
            for i in 0..n {
                let eta = mean + (z.row(i) * &wanted)[0];
                assert!((fitted[(i, 0)] - eta).abs() < 1e-9);
            }
        }
    }
}

#[test]
fn ridge_on_wide_data_is_certified_and_predicts_through_the_samples() {
    for everything in [false, true] {
        let mut data = random(Design::Independent, 15, 20_000, 31);
        if everything {
            data = with_everything(data, 32);
        }
        let strengths = data.range(0.0, 4, 0.01);
        certified(&data, 0.0, &strengths, "wide");
        let path = data.fit(0.0, &strengths);
        let rows: Vec<usize> = (0..15).collect();
        let predicted = path.predict(&data.task(), &rows);
        for at in 0..4 {
            let fit = path.coefficients(at);
            for &row in &rows {
                let covariates = fit.covariates.iter().enumerate();
                let mut eta = fit.intercept;
                eta += covariates
                    .map(|(k, a)| a * data.covariates[(row, k)])
                    .sum::<f64>();
                let x = data.predictors.x();
                eta += fit
                    .predictors
                    .iter()
                    .map(|(j, b)| b * x[(row, *j)])
                    .sum::<f64>();
                assert!((predicted[(row, at)] - eta).abs() < 1e-8);
            }
        }
        // Leave-one-out by the shortcut against a refit with k kept, on scaled predictors.
        if !everything {
            let shortcuts = path.shortcuts().unwrap();
            let mut part = data.task();
            let kept: Vec<usize> = (0..14).collect();
            part.rows = &kept;
            let mut z = data.predictors.x().clone();
            for mut column in z.column_iter_mut() {
                let mean = column.mean();
                let sd = (column.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / 15.0).sqrt();
                column.apply(|v| *v = (*v - mean) / sd);
            }
            let scaled = Predictors::new(z);
            part.predictors = &scaled;
            part.scaling = Scaling::AsGiven;
            let strength = strengths[2] * 15.0 / 14.0;
            let work = Work::unattended();
            let refit = fit_path(&part, 0.0, &[strength], &Params::default(), &work).unwrap();
            let Response::Measured(y) = &data.response else {
                unreachable!("the outcome is measured")
            };
            let off = y[14] - refit.predict(&part, &[14])[(0, 0)];
            assert!((off - shortcuts.residuals[(14, 2)]).abs() < 1e-8);
        }
    }
}

#[test]
fn an_orthogonal_design_is_thresholded_one_by_one() {
    // Columns of a Hadamard matrix: each lasso coefficient is the soft-thresholded mean product.
    let n = 8;
    let sign = |i: usize, j: usize| {
        if (i & j).count_ones().is_multiple_of(2) {
            1.0
        } else {
            -1.0
        }
    };
    let x = Matrix::from_fn(n, 7, |i, j| sign(i, j + 1));
    let y: Vec<f64> = (0..n).map(|i| (i as f64 * 1.7).sin() * 3.0).collect();
    let data = Data::new(x.clone(), y.clone());
    let path = data.fit(1.0, &[0.3]);
    let mut found = [0.0; 7];
    for (j, b) in path.standardised(0) {
        found[j] = b;
    }
    for j in 0..7 {
        let product = (0..n).map(|i| x[(i, j)] * y[i]).sum::<f64>() / n as f64;
        let wanted = product.signum() * (product.abs() - 0.3).max(0.0);
        assert!((found[j] - wanted).abs() < 1e-14);
    }
}

#[test]
fn predictions_are_the_coefficients_times_the_predictors() {
    for share in [0.0, 0.5, 1.0] {
        let data = with_everything(random(Design::Neighbours, 30, 200, 8), 1);
        let strengths = data.range(share, 6, 0.05);
        let path = data.fit(share, &strengths);
        let rows: Vec<usize> = (0..30).collect();
        let predicted = path.predict(&data.task(), &rows);
        for at in 0..strengths.len() {
            let fit = path.coefficients(at);
            for &row in &rows {
                let mut eta = fit.intercept;
                for (k, a) in fit.covariates.iter().enumerate() {
                    eta += a * data.covariates[(row, k)];
                }
                for &(j, b) in &fit.predictors {
                    eta += b * data.predictors.x()[(row, j)];
                }
                assert!((predicted[(row, at)] - eta).abs() < 1e-8 * eta.abs().max(1.0));
            }
        }
    }
}

fn same_fits(a: &Path, b: &Path, map: impl Fn(usize) -> usize, tolerance: f64) {
    for at in 0..a.n_points() {
        let mut left: Vec<(usize, f64)> = a
            .standardised(at)
            .into_iter()
            .map(|(j, b)| (map(j), b))
            .collect();
        left.sort_by_key(|(j, _)| *j);
        let right = b.standardised(at);
        let top = left.iter().fold(1e-9_f64, |top, (_, b)| top.max(b.abs()));
        assert_eq!(left.len(), right.len(), "fit {at}");
        for ((i, x), (j, y)) in left.iter().zip(&right) {
            assert_eq!(i, j);
            assert!((x - y).abs() < tolerance * top, "fit {at}: {x} {y}");
        }
    }
}

#[test]
fn the_order_of_samples_and_predictors_does_not_matter() {
    let data = random(Design::Neighbours, 30, 90, 12);
    let x = data.predictors.x();
    let Response::Measured(y) = &data.response else {
        unreachable!("the outcome is measured")
    };
    let turned = Matrix::from_fn(30, 90, |i, j| x[((i * 7 + 3) % 30, (j * 7 + 5) % 90)]);
    let y_turned = (0..30).map(|i| y[(i * 7 + 3) % 30]).collect();
    let other = Data::new(turned, y_turned);
    for share in [0.0, 0.5, 1.0] {
        let strengths = data.range(share, 15, 0.05);
        let (a, b) = (data.fit(share, &strengths), other.fit(share, &strengths));
        let map = |old: usize| (0..90).find(|j| (j * 7 + 5) % 90 == old).unwrap();
        same_fits(&a, &b, map, 1e-8);
    }
}

#[test]
fn units_do_not_matter_once_predictors_are_scaled() {
    let data = random(Design::Independent, 30, 90, 13);
    let units = |j: usize| 10_f64.powi((j % 19) as i32 - 9);
    let x = data.predictors.x();
    let Response::Measured(y) = &data.response else {
        unreachable!("the outcome is measured")
    };
    let scaled = Matrix::from_fn(30, 90, |i, j| (x[(i, j)] + (j % 3) as f64) * units(j));
    let other = Data::new(scaled, y.clone());
    for share in [0.0, 0.5, 1.0] {
        let strengths = data.range(share, 15, 0.05);
        let (a, b) = (data.fit(share, &strengths), other.fit(share, &strengths));
        same_fits(&a, &b, |j| j, 1e-8);
    }
    // A tiny or huge unit of the outcome scales strengths and coefficients alone.
    for unit in [1e-150, 1e150] {
        let other = Data::new(x.clone(), y.iter().map(|y| y * unit).collect());
        let strengths = data.range(1.0, 15, 0.05);
        let large: Vec<f64> = strengths.iter().map(|s| s * unit).collect();
        let (a, b) = (data.fit(1.0, &strengths), other.fit(1.0, &large));
        for at in 0..15 {
            assert!(b.info(at).settled);
            for ((i, u), (j, v)) in a.standardised(at).iter().zip(b.standardised(at)) {
                assert_eq!(*i, j);
                assert!((u - v / unit).abs() < 1e-8 * u.abs());
            }
        }
    }
}

#[test]
fn a_sample_twice_is_a_sample_with_weight_two() {
    let data = random(Design::Independent, 24, 70, 14);
    let x = data.predictors.x();
    let Response::Measured(y) = &data.response else {
        unreachable!("the outcome is measured")
    };
    let twice = |i: usize| if i < 24 { i } else { (i - 24) * 3 };
    let longer = Matrix::from_fn(32, 70, |i, j| x[(twice(i), j)]);
    let repeated = Data::new(longer, (0..32).map(|i| y[twice(i)]).collect());
    let mut weighted = Data::new(x.clone(), y.clone());
    weighted.weights = Some(
        (0..24)
            .map(|i| if i % 3 == 0 { 2.0 } else { 1.0 })
            .collect(),
    );
    for share in [0.0, 0.5, 1.0] {
        let strengths = repeated.range(share, 12, 0.05);
        let (a, b) = (
            repeated.fit(share, &strengths),
            weighted.fit(share, &strengths),
        );
        same_fits(&a, &b, |j| j, 1e-8);
    }
}

#[test]
fn the_bits_do_not_depend_on_the_number_of_threads() {
    let data = random(Design::Neighbours, 40, 300, 15);
    let fits = |threads: usize| -> Vec<Vec<u64>> {
        in_order(Threads::new(threads), 6, &Work::unattended(), |part| {
            let mut task = data.task();
            let rows: Vec<usize> = (0..40).filter(|row| row % 6 != part).collect();
            task.rows = &rows;
            let share = [1.0, 0.5, 0.0][part % 3];
            let strengths = strength_range(
                &task,
                share,
                RangeParams::default(),
                &Params::default(),
                &Work::unattended(),
            )
            .unwrap();
            let params = Params::default();
            let path = fit_path(&task, share, &strengths, &params, &Work::unattended()).unwrap();
            let mut bits = Vec::new();
            for at in 0..path.n_points() {
                bits.push(path.coefficients(at).intercept.to_bits());
                bits.extend(path.standardised(at).iter().map(|(_, b)| b.to_bits()));
            }
            Ok(bits)
        })
        .unwrap()
    };
    let one = fits(1);
    assert_eq!(one, fits(2));
    assert_eq!(one, fits(3));
}

#[test]
fn strengths_may_come_in_any_order() {
    let data = random(Design::Independent, 30, 60, 16);
    let falling = data.range(1.0, 9, 0.05);
    let mut rising = falling.clone();
    rising.reverse();
    let (a, b) = (data.fit(1.0, &falling), data.fit(1.0, &rising));
    for (at, &strength) in falling.iter().enumerate() {
        assert_eq!(a.standardised(at), b.standardised(8 - at));
        assert_eq!(b.strength(8 - at), strength);
    }
}

#[test]
fn without_a_penalty_a_narrow_fit_is_least_squares() {
    let data = random(Design::Independent, 40, 5, 17);
    for share in [0.0, 1.0] {
        let path = data.fit(share, &[0.0]);
        let found = certify(&data.task(), share, 0.0, &path.coefficients(0)).unwrap();
        assert!(found.worst_violation < 1e-12, "share {share}: {found:?}");
        assert_eq!(path.info(0).n_chosen, 5);
    }
}

#[test]
fn sign_rules_are_kept_and_certified() {
    let data = random(Design::Neighbours, 40, 120, 18);
    let rule = |j: usize| [Sign::NotNegative, Sign::NotPositive, Sign::Any][j % 3];
    let params = Params {
        signs: (0..120).map(rule).collect(),
        ..Params::default()
    };
    for share in [1.0, 0.5] {
        let strengths = data.range(share, 20, 0.01);
        let work = Work::unattended();
        let path = fit_path(&data.task(), share, &strengths, &params, &work).unwrap();
        let free = data.fit(share, &strengths);
        for at in 0..20 {
            assert!(path.info(at).settled);
            for (j, b) in path.standardised(at) {
                match rule(j) {
                    Sign::NotNegative => assert!(b > 0.0),
                    Sign::NotPositive => assert!(b < 0.0),
                    Sign::Any => assert!(b != 0.0),
                }
            }
            assert!(path.info(at).objective >= free.info(at).objective * (1.0 - 1e-9));
        }
        assert!(path.info(19).objective > free.info(19).objective * (1.0 + 1e-6));
    }
}

#[test]
fn tiny_and_degenerate_tasks_get_their_answer() {
    // One predictor; two samples; all predictors constant; a constant outcome.
    let one = random(Design::Independent, 12, 1, 19);
    assert!(one.fit(1.0, &one.range(1.0, 5, 0.01)).info(4).n_chosen == 1);
    let two = random(Design::Independent, 2, 30, 20);
    for share in [0.0, 1.0] {
        let path = two.fit(share, &two.range(share, 20, 1e-3));
        assert!((0..20).all(|at| path.info(at).settled));
    }
    let single = random(Design::Independent, 1, 30, 20);
    assert_eq!(single.range(1.0, 20, 1e-3), Vec::<f64>::new());
    let path = single.fit(1.0, &[1.0, 0.1]);
    assert_eq!(path.info(1).n_chosen, 0);
    let constant = Data::new(Matrix::repeat(10, 4, 2.5), (0..10).map(f64::from).collect());
    assert_eq!(constant.range(1.0, 5, 0.1), Vec::<f64>::new());
    for share in [0.0, 1.0] {
        let path = constant.fit(share, &[1.0, 0.0]);
        assert_eq!(path.coefficients(0).intercept, 4.5);
        assert_eq!(path.info(1).n_chosen, 0);
    }
    let mut flat = random(Design::Independent, 10, 20, 21);
    flat.response = Response::Measured(vec![0.1; 10]);
    assert_eq!(flat.range(1.0, 5, 0.1), Vec::<f64>::new());
    for share in [0.0, 1.0] {
        let path = flat.fit(share, &[1.0]);
        assert!((path.coefficients(0).intercept - 0.1).abs() < 1e-15);
        assert_eq!(path.info(0).relative_gap, 0.0);
    }
}

#[test]
fn a_column_that_is_constant_in_the_part_only_gets_zero() {
    let mut data = random(Design::Independent, 20, 40, 22);
    let mut x = data.predictors.x().clone();
    for i in 0..20 {
        x[(i, 3)] = if i == 19 { 5.0 } else { 0.3 };
    }
    data.predictors = Predictors::new(x);
    data.rows = (0..19).collect();
    for share in [0.0, 0.5, 1.0] {
        let path = data.fit(share, &data.range(share, 30, 1e-3));
        for at in 0..30 {
            assert!(
                path.standardised(at)
                    .iter()
                    .all(|(j, b)| *j != 3 && b.is_finite())
            );
        }
    }
}

#[test]
fn equal_columns_leave_the_fit_as_it_is() {
    let data = random(Design::Independent, 25, 40, 23);
    let x = data.predictors.x();
    let Response::Measured(y) = &data.response else {
        unreachable!("the outcome is measured")
    };
    let doubled = Matrix::from_fn(25, 80, |i, j| x[(i, j % 40)]);
    let other = Data::new(doubled, y.clone());
    let strengths = data.range(1.0, 40, 1e-3);
    let (a, b) = (data.fit(1.0, &strengths), other.fit(1.0, &strengths));
    let rows: Vec<usize> = (0..25).collect();
    let (left, right) = (
        a.predict(&data.task(), &rows),
        b.predict(&other.task(), &rows),
    );
    let apart = (left - right).amax();
    assert!(apart < 1e-7, "{apart:e}");
    assert!((0..40).all(|at| b.info(at).settled));
}

#[test]
fn what_is_wrong_is_said() {
    let fit = |data: &Data, share: f64, strengths: &[f64]| {
        fit_path(
            &data.task(),
            share,
            strengths,
            &Params::default(),
            &Work::unattended(),
        )
        .err()
    };
    let data = random(Design::Independent, 12, 6, 24);
    assert_eq!(fit(&data, 1.5, &[1.0]), Some(FitError::Share(1.5).into()));
    assert_eq!(
        fit(&data, 1.0, &[-1.0]),
        Some(FitError::Strength(-1.0).into())
    );
    let mut spoilt = random(Design::Independent, 12, 6, 24);
    let mut x = spoilt.predictors.x().clone();
    x[(7, 2)] = f64::NAN;
    spoilt.predictors = Predictors::new(x);
    let number = |what, at| Some(Stop::Failed(FitError::Number { what, at }));
    assert_eq!(fit(&spoilt, 1.0, &[1.0]), number(Ingredient::Predictors, 2));
    let mut spoilt = random(Design::Independent, 12, 6, 24);
    spoilt.response = Response::Measured(vec![f64::INFINITY; 12]);
    assert_eq!(fit(&spoilt, 1.0, &[1.0]), number(Ingredient::Outcome, 0));
    let mut spoilt = random(Design::Independent, 12, 6, 24);
    spoilt.weights = Some(vec![0.0; 12]);
    assert_eq!(fit(&spoilt, 1.0, &[1.0]), Some(FitError::NoRows.into()));
    spoilt.rows = vec![3, 3];
    assert_eq!(
        fit(&spoilt, 1.0, &[1.0]),
        Some(FitError::Rows { row: 3 }.into())
    );
}

#[test]
fn a_path_stops_when_it_is_called_off() {
    let data = random(Design::Independent, 30, 60, 25);
    let source = crate::base::work::CancelSource::new();
    let report = |_: f32| source.cancel();
    let work = Work::new(source.token(), &report);
    let strengths = data.range(1.0, 50, 0.01);
    let stop = fit_path(&data.task(), 1.0, &strengths, &Params::default(), &work).err();
    assert_eq!(stop, Some(Stop::Cancelled));
}
