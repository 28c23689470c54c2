//! Paths of yes and no, classes, counts and times: certificates, invariance, hostile inputs.

use crate::base::work::Work;
use crate::numeric::certificate::{certify_classes, certify_grouping};
use crate::numeric::designs::{Design, Dice, outcome, predictors};
use crate::numeric::error::{FitError, Stop};
use crate::numeric::matrix::Matrix;
use crate::numeric::path::{Grouping, Params, Path, fit_path};
use crate::numeric::penalty::Sign;
use crate::numeric::predictors::Predictors;
use crate::numeric::range::{RangeParams, all_zero_point, strength_range};
use crate::numeric::response::{Response, Ties};
use crate::numeric::task::{Scaling, Task};

struct Data {
    predictors: Predictors,
    response: Response,
    rows: Vec<usize>,
    covariates: Matrix,
    weights: Option<Vec<f64>>,
    factors: Option<Vec<f64>>,
}

impl Data {
    fn new(x: Matrix, response: Response) -> Self {
        let n = x.nrows();
        Self {
            predictors: Predictors::new(x),
            response,
            rows: (0..n).collect(),
            covariates: Matrix::zeros(n, 0),
            weights: None,
            factors: None,
        }
    }

    fn task(&self) -> Task<'_> {
        Task {
            predictors: &self.predictors,
            response: &self.response,
            rows: &self.rows,
            columns: None,
            covariates: &self.covariates,
            weights: self.weights.as_deref(),
            factors: self.factors.as_deref(),
            scaling: Scaling::UnitVariance,
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
        self.try_fit(share, strengths, &Params::default()).unwrap()
    }

    fn try_fit(&self, share: f64, strengths: &[f64], params: &Params) -> Result<Path, Stop> {
        fit_path(&self.task(), share, strengths, params, &Work::unattended())
    }
}

const KINDS: [&str; 5] = ["yes or no", "class", "count", "Breslow", "Efron"];

/// An outcome of each kind that depends on a few predictors.
fn response(kind: &str, x: &Matrix, dice: &mut Dice) -> Response {
    let n = x.nrows();
    let score = outcome(x, 4, 0.5, dice);
    let mut sorted = score.clone();
    sorted.sort_by(f64::total_cmp);
    let rank = |value: f64| sorted.iter().filter(|other| **other < value).count();
    match kind {
        "yes or no" => Response::YesNo(score.iter().map(|s| rank(*s) * 5 > n * 2).collect()),
        "class" => Response::Classes {
            class: score.iter().map(|s| rank(*s) * 3 / n).collect(),
            n_classes: 3,
        },
        "count" => Response::Count {
            count: score.iter().map(|s| (6 * rank(*s) / n) as f64).collect(),
            offset: Some((0..n).map(|_| 0.2 * dice.normal()).collect()),
        },
        _ => Response::Time {
            time: score.iter().map(|s| (rank(*s) / 2) as f64).collect(),
            event: (0..n).map(|_| dice.below(4) > 0).collect(),
            strata: Some((0..n).map(|i| i % 2).collect()),
            ties: if kind == "Breslow" {
                Ties::Breslow
            } else {
                Ties::Efron
            },
        },
    }
}

fn random(kind: &str, design: Design, n: usize, p: usize, seed: u64) -> Data {
    let mut dice = Dice::new(seed);
    let x = predictors(design, n, p, &mut dice);
    let response = response(kind, &x, &mut dice);
    Data::new(x, response)
}

fn with_everything(mut data: Data) -> Data {
    let mut dice = Dice::new(77);
    let (n, p) = data.predictors.x().shape();
    data.rows.retain(|row| row % 7 != 3);
    data.covariates = Matrix::from_fn(n, 2, |i, k| match k {
        0 => dice.normal(),
        _ => 5.0 + (i % 3) as f64,
    });
    data.weights = Some((0..n).map(|i| [1.0, 0.5, 2.0, 1.5, 0.0][i % 5]).collect());
    data.factors = Some((0..p).map(|j| [1.0, 2.0, 0.5, 1.0][j % 4]).collect());
    if let Some(factors) = &mut data.factors {
        factors[2] = 0.0;
    }
    data
}

#[test]
fn every_solution_carries_an_independent_certificate() {
    for kind in KINDS {
        for (seed, design) in [Design::Independent, Design::Neighbours, Design::Markers]
            .into_iter()
            .enumerate()
        {
            for (n, p) in [(40, 120), (60, 12)] {
                let plain = random(kind, design, n, p, seed as u64);
                let full = with_everything(random(kind, design, n, p, seed as u64));
                for data in [plain, full] {
                    for share in [1.0, 0.4, 0.0] {
                        let ratio = if share > 0.0 { 0.05 } else { 0.5 };
                        let strengths = data.range(share, 10, ratio);
                        let path = data.fit(share, &strengths);
                        for (at, &strength) in strengths.iter().enumerate() {
                            let what = format!("{kind} {design:?} {n} x {p}, {share} {strength}");
                            let info = path.info(at);
                            assert!(info.settled, "{what}: {info:?}");
                            let solution = path.class_coefficients(at);
                            let found =
                                certify_classes(&data.task(), share, strength, &solution).unwrap();
                            assert!(found.gap < 1e-7, "{what}: {found:?} {info:?}");
                            assert!(found.worst_violation < 3e-3, "{what}: {found:?} {info:?}");
                        }
                    }
                }
            }
        }
    }
}

#[test]
fn the_model_is_empty_at_the_all_zero_point_and_not_just_below() {
    for kind in KINDS {
        let data = with_everything(random(kind, Design::Independent, 50, 90, 4));
        let top =
            all_zero_point(&data.task(), 0.8, &Params::default(), &Work::unattended()).unwrap();
        let path = data.fit(0.8, &[top, top * 0.999]);
        let free = if kind == "class" { 3 } else { 1 };
        assert_eq!(path.info(0).n_chosen, free, "{kind}");
        assert!(path.info(1).n_chosen > free, "{kind}");
    }
}

#[test]
fn predictions_are_the_coefficients_times_the_predictors() {
    for kind in KINDS {
        for (share, p) in [(0.0, 60), (0.0, 14_000), (1.0, 60)] {
            let data = random(kind, Design::Independent, 20, p, 5);
            let strengths = data.range(share, 3, 0.3);
            let path = data.fit(share, &strengths);
            let rows: Vec<usize> = (0..20).collect();
            let predicted = path.predict(&data.task(), &rows);
            for at in 0..3 {
                for (class, fit) in path.class_coefficients(at).iter().enumerate() {
                    for &row in &rows {
                        let mut eta = fit.intercept;
                        for &(j, b) in &fit.predictors {
                            eta += b * data.predictors.x()[(row, j)];
                        }
                        let found = predicted[(row, at * path.n_linear() + class)];
                        assert!((found - eta).abs() < 1e-9, "{kind} {share} {p}");
                    }
                }
            }
        }
    }
}

#[test]
fn a_sample_twice_is_a_sample_with_weight_two() {
    // Not for Efron: tied events share their mean weight, which is not the same thing.
    for kind in ["yes or no", "class", "count", "Breslow"] {
        let data = random(kind, Design::Independent, 30, 40, 6);
        let mut repeated = random(kind, Design::Independent, 30, 40, 6);
        let twice = |i: usize| if i < 30 { i } else { (i - 30) * 3 };
        let x = data.predictors.x();
        repeated.predictors = Predictors::new(Matrix::from_fn(40, 40, |i, j| x[(twice(i), j)]));
        repeated.covariates = Matrix::zeros(40, 0);
        repeated.rows = (0..40).collect();
        repeated.response = match &data.response {
            Response::Measured(_) => unreachable!("no measured outcome here"),
            Response::YesNo(yes) => Response::YesNo((0..40).map(|i| yes[twice(i)]).collect()),
            Response::Classes { class, n_classes } => Response::Classes {
                class: (0..40).map(|i| class[twice(i)]).collect(),
                n_classes: *n_classes,
            },
            Response::Count { count, offset } => Response::Count {
                count: (0..40).map(|i| count[twice(i)]).collect(),
                offset: offset
                    .as_ref()
                    .map(|offset| (0..40).map(|i| offset[twice(i)]).collect()),
            },
            Response::Time {
                time, event, ties, ..
            } => Response::Time {
                time: (0..40).map(|i| time[twice(i)]).collect(),
                event: (0..40).map(|i| event[twice(i)]).collect(),
                strata: Some((0..40).map(|i| twice(i) % 2).collect()),
                ties: *ties,
            },
        };
        let mut weighted = data;
        weighted.weights = Some(
            (0..30)
                .map(|i| if i % 3 == 0 { 2.0 } else { 1.0 })
                .collect(),
        );
        for share in [0.0, 1.0] {
            let strengths = repeated.range(share, 5, 0.2);
            let params = Params {
                relative_gap: 1e-13,
                ..Params::default()
            };
            let a = repeated.try_fit(share, &strengths, &params).unwrap();
            let b = weighted.try_fit(share, &strengths, &params).unwrap();
            for at in 0..5 {
                for class in 0..a.n_linear() {
                    let (left, right) = (
                        a.class_standardised(at, class),
                        b.class_standardised(at, class),
                    );
                    assert_eq!(left.len(), right.len(), "{kind} {share}");
                    for ((i, x), (j, y)) in left.iter().zip(&right) {
                        assert_eq!(i, j);
                        assert!((x - y).abs() < 1e-6, "{kind} {share}: {x} {y}");
                    }
                }
            }
        }
    }
}

#[test]
fn two_classes_in_ridge_are_yes_and_no_at_another_strength() {
    // In the symmetric form each class has half of the difference; the penalty is halved with it.
    let data = random("yes or no", Design::Independent, 40, 15, 7);
    let Response::YesNo(yes) = &data.response else {
        unreachable!("the outcome is yes or no")
    };
    let mut classes = random("yes or no", Design::Independent, 40, 15, 7);
    classes.response = Response::Classes {
        class: yes.iter().map(|yes| usize::from(*yes)).collect(),
        n_classes: 2,
    };
    let (a, b) = (data.fit(0.0, &[0.05]), classes.fit(0.0, &[0.1]));
    let (first, second) = (b.class_standardised(0, 0), b.class_standardised(0, 1));
    for (k, (_, one)) in a.standardised(0).iter().enumerate() {
        assert!((second[k].1 - first[k].1 - one).abs() < 1e-5);
        assert!((second[k].1 + first[k].1).abs() < 1e-6);
    }
}

#[test]
fn separable_classes_have_finite_coefficients_at_every_strength() {
    // p ≫ n: every labelling is separable. The range goes far below what is useful.
    let data = random("yes or no", Design::Independent, 20, 200, 8);
    let strengths = data.range(1.0, 40, 1e-4);
    let path = data.fit(1.0, &strengths);
    for at in 0..40 {
        let fit = path.coefficients(at);
        assert!(fit.intercept.is_finite());
        assert!(fit.predictors.iter().all(|(_, b)| b.is_finite()));
        assert!(path.info(at).settled, "{at}: {:?}", path.info(at));
    }
    assert!(path.info(39).loss < 0.01 * path.info(0).loss);
}

#[test]
fn sign_rules_are_kept() {
    for kind in ["yes or no", "count", "Breslow"] {
        let data = random(kind, Design::Neighbours, 40, 60, 9);
        // A higher score is a later time, so a lower hazard.
        let (rule, sense) = match kind {
            "Breslow" => (Sign::NotPositive, -1.0),
            _ => (Sign::NotNegative, 1.0),
        };
        let params = Params {
            signs: vec![rule; 60],
            ..Params::default()
        };
        let strengths = data.range(1.0, 10, 0.05);
        let path = data.try_fit(1.0, &strengths, &params).unwrap();
        for at in 0..10 {
            assert!(path.info(at).settled, "{kind}: {:?}", path.info(at));
            assert!(path.standardised(at).iter().all(|(_, b)| b * sense > 0.0));
        }
        assert!(path.info(9).n_chosen > 0);
    }
}

#[test]
fn strata_do_not_meet() {
    // Shifting all times of one stratum changes nothing.
    let data = random("Efron", Design::Independent, 40, 30, 10);
    let mut shifted = random("Efron", Design::Independent, 40, 30, 10);
    if let Response::Time {
        time,
        strata: Some(strata),
        ..
    } = &mut shifted.response
    {
        for (time, stratum) in time.iter_mut().zip(strata) {
            *time += 1000.0 * *stratum as f64;
        }
    }
    let strengths = data.range(1.0, 5, 0.1);
    let (a, b) = (data.fit(1.0, &strengths), shifted.fit(1.0, &strengths));
    assert_eq!(a.coefficients(4), b.coefficients(4));
}

#[test]
fn what_cannot_be_fitted_is_said() {
    let x = predictors(Design::Independent, 12, 5, &mut Dice::new(11));
    let failed = |response: Response| {
        let data = Data::new(x.clone(), response);
        data.try_fit(1.0, &[0.1], &Params::default()).err()
    };
    let time = |event: Vec<bool>| Response::Time {
        time: (0..12).map(f64::from).collect(),
        event,
        strata: None,
        ties: Ties::Efron,
    };
    assert_eq!(
        failed(Response::YesNo(vec![true; 12])),
        Some(FitError::OneClass.into())
    );
    assert_eq!(
        failed(time(vec![false; 12])),
        Some(FitError::NoEvents.into())
    );
    let none = Response::Count {
        count: vec![0.0; 12],
        offset: None,
    };
    assert_eq!(failed(none), Some(FitError::NoCounts.into()));
    let empty = Response::Classes {
        class: (0..12).map(|i| 2 * (i % 2)).collect(),
        n_classes: 3,
    };
    assert_eq!(failed(empty), Some(FitError::EmptyClass(1).into()));
    // One event among the twelve, and ties everywhere, are no reason to refuse.
    let one = Data::new(x.clone(), time((0..12).map(|i| i == 5).collect()));
    assert!(one.fit(1.0, &one.range(1.0, 5, 0.1)).info(4).settled);
    let tied = Response::Time {
        time: vec![3.0; 12],
        event: vec![true; 12],
        strata: None,
        ties: Ties::Efron,
    };
    let tied = Data::new(x.clone(), tied);
    assert!(tied.try_fit(1.0, &[0.1], &Params::default()).is_ok());
    // Without a penalty, separable classes have no finite fit.
    let yes = Response::YesNo((0..12).map(|i| x[(i, 0)] > 0.0).collect());
    let stop = Data::new(x.clone(), yes).try_fit(1.0, &[0.0], &Params::default());
    let unbounded = FitError::Unbounded { strength: 0.0 };
    assert_eq!(stop.err(), Some(unbounded.into()));
}

#[test]
fn classes_together_are_in_or_out_as_a_whole_and_certified() {
    let params = Params {
        grouping: Grouping::Together,
        ..Params::default()
    };
    for (seed, design) in [Design::Independent, Design::Neighbours]
        .into_iter()
        .enumerate()
    {
        for (n, p) in [(45, 120), (60, 8)] {
            let plain = random("class", design, n, p, seed as u64);
            let full = with_everything(random("class", design, n, p, seed as u64));
            for data in [plain, full] {
                for share in [1.0, 0.5] {
                    let top =
                        all_zero_point(&data.task(), share, &params, &Work::unattended()).unwrap();
                    let steps = 0..8;
                    let strengths: Vec<f64> = steps.map(|k| top * 0.65_f64.powi(k)).collect();
                    let path = data.try_fit(share, &strengths, &params).unwrap();
                    let free = data.factors.is_some().then_some(2);
                    for (at, &strength) in strengths.iter().enumerate() {
                        let what = format!("{design:?} {n} x {p}, {share} {strength}");
                        let info = path.info(at);
                        assert!(info.settled, "{what}: {info:?}");
                        let solution = path.class_coefficients(at);
                        let task = data.task();
                        let grouping = Grouping::Together;
                        let found =
                            certify_grouping(&task, share, strength, &solution, grouping).unwrap();
                        assert!(found.gap < 1e-7, "{what}: {found:?}");
                        assert!(found.worst_violation < 3e-3, "{what}: {found:?}");
                        let listed = |class: usize| -> Vec<usize> {
                            let chosen = solution[class].predictors.iter().map(|(j, _)| *j);
                            chosen.filter(|j| Some(*j) != free).collect()
                        };
                        assert_eq!(listed(0), listed(1), "{what}");
                        assert_eq!(listed(0), listed(2), "{what}");
                        assert_eq!(listed(0).is_empty(), at == 0, "{what}");
                    }
                }
            }
        }
    }
}

#[test]
fn nearly_without_a_lasso_part_classes_together_have_the_freedom_of_ridge() {
    let data = random("class", Design::Independent, 40, 12, 31);
    let strengths = [1.0, 0.1, 0.01];
    let params = Params {
        grouping: Grouping::Together,
        relative_gap: 1e-12,
        ..Params::default()
    };
    let together = data.try_fit(1e-7, &strengths, &params).unwrap();
    let ridge = data.try_fit(0.0, &strengths, &params).unwrap();
    for at in 0..3 {
        let (found, wanted) = (together.info(at).effective_df, ridge.info(at).effective_df);
        assert!((found - wanted).abs() < 1e-3, "{found} {wanted}");
    }
    // A real group penalty leaves less than a count of the chosen coefficients.
    let path = data
        .try_fit(1.0, &data.range(1.0, 5, 0.2), &params)
        .unwrap();
    for at in 1..5 {
        let info = path.info(at);
        let penalised = info.effective_df - 2.0;
        assert!(
            penalised > 0.0 && penalised < info.n_chosen as f64,
            "{info:?}"
        );
    }
}
