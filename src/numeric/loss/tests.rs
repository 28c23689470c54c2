//! Slopes, curvatures and conjugates of the losses, against differences and definitions.

use super::*;
use crate::numeric::designs::Dice;
use crate::numeric::lanes;
use crate::numeric::response::Ties;

const M: usize = 24;

/// One loss of each kind on made-up data with unequal weights: ties, strata, an offset.
fn losses(dice: &mut Dice) -> Vec<(&'static str, Box<dyn Loss>)> {
    let raw: Vec<f64> = (0..M).map(|i| [1.0, 2.0, 0.5][i % 3]).collect();
    let total: f64 = raw.iter().sum();
    let v: Vec<f64> = raw.iter().map(|w| w / total).collect();
    let yes = (0..M)
        .map(|_| f64::from(u8::from(dice.below(2) == 0)))
        .collect();
    let counts = (0..M).map(|_| dice.below(5) as f64).collect();
    let offset = (0..M).map(|_| 0.3 * dice.normal()).collect();
    let class = (0..M)
        .map(|i| if i < 3 { i } else { dice.below(3) })
        .collect();
    let rows: Vec<(f64, bool, usize)> = (0..M)
        .map(|i| (dice.below(6) as f64, dice.below(3) > 0, i % 2))
        .collect();
    let cox = |ties| Box::new(Cox::new(&rows, v.clone(), total, ties));
    vec![
        ("yes or no", Box::new(Binomial::new(yes, v.clone()))),
        (
            "count",
            Box::new(Poisson::new(counts, Some(offset), v.clone())),
        ),
        ("class", Box::new(Multinomial::new(class, 3, v.clone()))),
        ("time, Breslow", cox(Ties::Breslow)),
        ("time, Efron", cox(Ties::Efron)),
    ]
}

fn direction(size: usize, dice: &mut Dice) -> Vec<f64> {
    (0..size).map(|_| dice.normal()).collect()
}

fn moved(eta: &[f64], along: &[f64], step: f64) -> Vec<f64> {
    eta.iter()
        .zip(along)
        .map(|(eta, d)| eta + step * d)
        .collect()
}

#[test]
fn slopes_and_curvatures_are_the_differences_of_the_loss() {
    let mut dice = Dice::new(1);
    for (name, mut loss) in losses(&mut dice) {
        let size = M * loss.n_linear();
        for _ in 0..5 {
            let (eta, along) = (direction(size, &mut dice), direction(size, &mut dice));
            let h = 1e-4;
            let above = loss.evaluate(&moved(&eta, &along, h));
            let slope_above = lanes::dot(loss.residual(), &along);
            let below = loss.evaluate(&moved(&eta, &along, -h));
            let slope_below = lanes::dot(loss.residual(), &along);
            let _ = loss.evaluate(&eta);
            let slope = -lanes::dot(loss.residual(), &along);
            assert!((slope - (above - below) / (2.0 * h)).abs() < 1e-6, "{name}");
            let mut product = Vec::new();
            loss.product(&along, &mut product);
            let curvature = lanes::dot(&product, &along);
            let wanted = (slope_below - slope_above) / (2.0 * h);
            assert!(
                (curvature - wanted).abs() < 1e-5 * wanted.abs().max(1.0),
                "{name}"
            );
            if let Some(diagonal) = loss.curvature() {
                for (i, h) in diagonal.iter().enumerate() {
                    assert!((product[i] - h * along[i]).abs() < 1e-12);
                }
            }
        }
    }
}

/// f(η) + f*(−r) = −r'η where r = −∇f(η) (Fenchel), so −f*(−r) = f(η) + r'η.
#[test]
fn the_dual_value_at_the_full_residual_is_exact() {
    let mut dice = Dice::new(2);
    for (name, mut loss) in losses(&mut dice) {
        for _ in 0..20 {
            let eta = direction(M * loss.n_linear(), &mut dice);
            let value = loss.evaluate(&eta);
            let wanted = value + lanes::dot(loss.residual(), &eta);
            assert!((loss.dual(1.0) - wanted).abs() < 1e-12, "{name}");
        }
    }
}

/// −f*(−u) ≤ f(η') + u'η' for every η', whatever the shrinking of u.
#[test]
fn the_dual_value_bounds_the_loss_from_below_everywhere() {
    let mut dice = Dice::new(3);
    for (name, mut loss) in losses(&mut dice) {
        let size = M * loss.n_linear();
        for _ in 0..40 {
            let eta = direction(size, &mut dice);
            let _ = loss.evaluate(&eta);
            let t = dice.uniform();
            let dual = loss.dual(t);
            let u: Vec<f64> = loss.residual().iter().map(|r| t * r).collect();
            for _ in 0..20 {
                let scale = 3.0 * dice.uniform();
                let other: Vec<f64> = direction(size, &mut dice)
                    .iter()
                    .map(|x| scale * x)
                    .collect();
                let value = loss.evaluate(&other) + lanes::dot(&u, &other);
                assert!(dual <= value + 1e-12, "{name}: {dual} {value}");
            }
        }
    }
}

#[test]
fn far_off_linear_predictors_stay_finite() {
    let mut dice = Dice::new(4);
    for (name, mut loss) in losses(&mut dice) {
        let size = M * loss.n_linear();
        let far: Vec<f64> = direction(size, &mut dice)
            .iter()
            .map(|x| 200.0 * x)
            .collect();
        let value = loss.evaluate(&far);
        assert!(value.is_finite(), "{name}");
        assert!(loss.residual().iter().all(|r| r.is_finite()), "{name}");
        assert!(loss.dual(0.5).is_finite(), "{name}");
    }
}
