//! Intervals: for one new sample, and for the error of a procedure.

use crate::support::close;
use widefold::numeric::measure::*;
use widefold::numeric::random::Random;

fn mean(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len() as f64
}

fn parts(residuals: &[f64], of_new: f64) -> Vec<PartPrediction> {
    let part = |&residual: &f64| PartPrediction { residual, of_new };
    residuals.iter().map(part).collect()
}

#[test]
fn ends_are_order_statistics_and_infinite_when_there_are_too_few() {
    let residuals: Vec<f64> = (1..=9).map(f64::from).collect();
    // α(n + 1) = 1: the smallest and the largest.
    assert_eq!(
        prediction_interval(&parts(&residuals, 20.0), 0.1),
        (11.0, 29.0)
    );
    // α(n + 1) = 2: the second from each side.
    assert_eq!(
        prediction_interval(&parts(&residuals, 20.0), 0.2),
        (12.0, 28.0)
    );
    let infinite = (f64::NEG_INFINITY, f64::INFINITY);
    assert_eq!(
        prediction_interval(&parts(&residuals[..8], 20.0), 0.1),
        infinite
    );
    assert_eq!(prediction_interval(&[], 0.1), infinite);
}

#[test]
fn new_samples_are_covered_as_often_as_stated() {
    // The mean of the others predicts; 4000 new samples. Five standard errors are 0.024.
    let mut random = Random::new(1, "coverage", 0);
    let (n, runs) = (20, 4000);
    let mut covered = 0;
    for _ in 0..runs {
        let y: Vec<f64> = (0..n).map(|_| random.normal().powi(3)).collect();
        let total: f64 = y.iter().sum();
        let parts: Vec<PartPrediction> = y
            .iter()
            .map(|y| {
                let of_new = (total - y) / (n - 1) as f64;
                let residual = (y - of_new).abs();
                PartPrediction { residual, of_new }
            })
            .collect();
        let (lower, upper) = prediction_interval(&parts, 0.1);
        let new = random.normal().powi(3);
        covered += usize::from(lower <= new && new <= upper);
    }
    let coverage = covered as f64 / f64::from(runs);
    assert!((coverage - 0.9).abs() < 0.035, "{coverage}");
    assert!(coverage >= prediction_interval_guarantee(n, n, 0.1));
}

#[test]
fn the_guarantee_is_that_of_the_theorems() {
    close(prediction_interval_guarantee(50, 50, 0.05), 0.9, 1e-15);
    for (n, k) in [(20, 5), (100, 10), (360, 5)] {
        let loss = 0.9 - prediction_interval_guarantee(n, k, 0.05);
        // The paper's simpler bound on the loss.
        assert!(loss > 0.0 && loss <= (2.0 / n as f64).sqrt());
    }
    assert_eq!(prediction_interval_guarantee(10, 2, 0.5), 0.0);
}

#[test]
fn the_careful_interval_follows_its_formula() {
    let part = |inner: &[f64], outer: &[f64]| ErrorsOfPart {
        inner: inner.to_vec(),
        outer: outer.to_vec(),
    };
    let errors = [
        part(&[1.0, 2.0, 3.0, 2.0], &[8.0, 6.0]),
        part(&[2.0, 4.0, 1.0, 1.0], &[1.0, 5.0]),
        part(&[3.0, 3.0, 2.0, 4.0], &[2.0, 2.0]),
    ];
    let interval = careful_interval(&errors, 3, 6, 2.0, 0.9).unwrap();
    // Means 2, 2, 3 against 7, 3, 2: a = 25, 1, 1; b = 2/2, 8/2, 0; so (27 − 5)/3 · 2/3. The
    // inner errors have mean 28/12 and squares about it 12.666…, divisor 11.
    let plain = (12.0 + 2.0 / 3.0) / 11.0 / 6.0;
    let raw = 28.0 / 12.0;
    close(interval.plain_standard_error, f64::sqrt(plain), 1e-12);
    close(interval.standard_error, (3.0 * plain).sqrt(), 1e-12);
    close(interval.bias, (1.0 + 1.0 / 3.0) * (raw - 2.0), 1e-12);
    let half = 1.644_853_626_951_472_2 * interval.standard_error;
    close(interval.upper, raw - interval.bias + half, 1e-12);
    assert_eq!(careful_interval(&errors, 2, 6, 2.0, 0.9), None);
    assert_eq!(
        careful_interval(&[part(&[1.0], &[2.0])], 3, 6, 2.0, 0.9),
        None
    );
}

/// Squared errors of the mean of the other parts, for samples dealt to `k` parts in turn.
fn squared_errors(y: &[f64], k: usize, repeat: &mut Random) -> (Vec<ErrorsOfPart>, f64) {
    let mut order: Vec<usize> = (0..y.len()).collect();
    repeat.shuffle(&mut order);
    let part = |p: usize| order.iter().skip(p).step_by(k).map(|&at| y[at]);
    let sum: Vec<f64> = (0..k).map(|p| part(p).sum()).collect();
    let count: Vec<f64> = (0..k).map(|p| part(p).count() as f64).collect();
    let without = |left_out: &[usize]| {
        let kept = (0..k).filter(|p| !left_out.contains(p));
        let (s, c) = kept.fold((0.0, 0.0), |(s, c), p| (s + sum[p], c + count[p]));
        s / c
    };
    let errors = |p: usize, of: f64| part(p).map(move |y| (y - of).powi(2)).collect::<Vec<_>>();
    let parts: Vec<ErrorsOfPart> = (0..k)
        .map(|outer| ErrorsOfPart {
            inner: (0..k)
                .filter(|&p| p != outer)
                .flat_map(|p| errors(p, without(&[outer, p])))
                .collect(),
            outer: errors(outer, without(&[outer])),
        })
        .collect();
    let plain: Vec<f64> = parts.iter().flat_map(|part| part.outer.clone()).collect();
    let plain = mean(&plain);
    (parts, plain)
}

#[test]
fn the_careful_interval_covers_the_error_of_the_procedure() {
    let (n, k, repeats, runs) = (40, 5, 5, 600);
    let truth = 1.0 + 1.0 / n as f64;
    let mut random = Random::new(2, "careful", 0);
    let (mut covered, mut estimates) = (0, Vec::new());
    for _ in 0..runs {
        let y: Vec<f64> = (0..n).map(|_| random.normal()).collect();
        let (mut parts, mut plain) = (Vec::new(), Vec::new());
        for _ in 0..repeats {
            let (own, mean) = squared_errors(&y, k, &mut random);
            parts.extend(own);
            plain.push(mean);
        }
        let interval = careful_interval(&parts, k, n, mean(&plain), 0.9).unwrap();
        covered += usize::from(interval.lower <= truth && truth <= interval.upper);
        estimates.push(interval.estimate);
    }
    // The standard deviation of one estimate is about √(2/40); five standard errors.
    assert!((mean(&estimates) - truth).abs() < 0.046);
    let coverage = covered as f64 / f64::from(runs);
    assert!((0.84..=0.98).contains(&coverage), "{coverage}");
}
