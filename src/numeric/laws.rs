//! Laws of every kind of outcome and every lasso share: order, units, weights, threads, and inputs
//! that nobody would wish for. Nothing that leaves a fit is ever not a number.

use crate::base::thread::{Threads, in_order};
use crate::base::work::Work;
use crate::numeric::designs::{Design, Dice, outcome, predictors};
use crate::numeric::error::{FitError, Stop};
use crate::numeric::matrix::Matrix;
use crate::numeric::path::{Grouping, Params, Path, fit_path};
use crate::numeric::predictors::Predictors;
use crate::numeric::range::{RangeParams, strength_range};
use crate::numeric::response::{Response, Ties};
use crate::numeric::task::{Scaling, Task};

const SHARES: [f64; 3] = [1.0, 0.4, 0.0];

/// A kind of outcome, and whether the classes of a predictor are penalised as one.
type Kind = (&'static str, Grouping);

const KINDS: [Kind; 7] = [
    ("measured", Grouping::Apart),
    ("yes or no", Grouping::Apart),
    ("class", Grouping::Apart),
    ("class", Grouping::Together),
    ("count", Grouping::Apart),
    ("Breslow", Grouping::Apart),
    ("Efron", Grouping::Apart),
];

struct Case {
    kind: Kind,
    x: Matrix,
    response: Response,
    rows: Vec<usize>,
    weights: Option<Vec<f64>>,
}

impl Case {
    fn new(kind: Kind, x: Matrix, dice: &mut Dice) -> Self {
        let n = x.nrows();
        let score = outcome(&x, 4, 0.8, dice);
        let mut sorted = score.clone();
        sorted.sort_by(f64::total_cmp);
        let rank = |value: f64| sorted.iter().filter(|other| **other < value).count();
        let response = match kind.0 {
            "measured" => Response::Measured(score),
            "yes or no" => Response::YesNo(score.iter().map(|s| rank(*s) * 5 > n * 2).collect()),
            "class" => Response::Classes {
                class: score.iter().map(|s| rank(*s) * 3 / n).collect(),
                n_classes: 3,
            },
            "count" => Response::Count {
                count: score.iter().map(|s| (6 * rank(*s) / n) as f64).collect(),
                offset: Some((0..n).map(|_| 0.2 * dice.normal()).collect()),
            },
            name => Response::Time {
                time: score.iter().map(|s| (rank(*s) / 2) as f64).collect(),
                event: (0..n).map(|_| dice.below(4) > 0).collect(),
                strata: Some((0..n).map(|i| i % 2).collect()),
                ties: [Ties::Breslow, Ties::Efron][usize::from(name == "Efron")],
            },
        };
        Self {
            kind,
            x,
            response,
            rows: (0..n).collect(),
            weights: None,
        }
    }

    fn random(kind: Kind, design: Design, n: usize, p: usize, seed: u64) -> Self {
        let mut dice = Dice::new(seed);
        let x = predictors(design, n, p, &mut dice);
        Self::new(kind, x, &mut dice)
    }

    /// With the sample at `from(i)` in place i.
    fn rearranged(&self, n: usize, from: impl Fn(usize) -> usize) -> Self {
        fn taken<T: Clone>(values: &[T], n: usize, from: &dyn Fn(usize) -> usize) -> Vec<T> {
            (0..n).map(|i| values[from(i)].clone()).collect()
        }
        let response = match &self.response {
            Response::Measured(y) => Response::Measured(taken(y, n, &from)),
            Response::YesNo(y) => Response::YesNo(taken(y, n, &from)),
            Response::Classes { class, n_classes } => Response::Classes {
                class: taken(class, n, &from),
                n_classes: *n_classes,
            },
            Response::Count { count, offset } => Response::Count {
                count: taken(count, n, &from),
                offset: offset.as_ref().map(|o| taken(o, n, &from)),
            },
            Response::Time {
                time,
                event,
                strata,
                ties,
            } => Response::Time {
                time: taken(time, n, &from),
                event: taken(event, n, &from),
                strata: strata.as_ref().map(|s| taken(s, n, &from)),
                ties: *ties,
            },
        };
        Self {
            kind: self.kind,
            x: Matrix::from_fn(n, self.x.ncols(), |i, j| self.x[(from(i), j)]),
            response,
            rows: (0..n).collect(),
            weights: None,
        }
    }

    fn with_task<T>(&self, answer: impl FnOnce(&Task<'_>, &Params) -> T) -> T {
        let predictors = Predictors::new(self.x.clone());
        let covariates = Matrix::zeros(self.x.nrows(), 0);
        let task = Task {
            predictors: &predictors,
            response: &self.response,
            rows: &self.rows,
            columns: None,
            covariates: &covariates,
            weights: self.weights.as_deref(),
            factors: None,
            scaling: Scaling::UnitVariance,
        };
        let params = Params {
            relative_gap: 1e-11,
            grouping: self.kind.1,
            ..Params::default()
        };
        answer(&task, &params)
    }

    fn range(&self, share: f64) -> Result<Vec<f64>, Stop> {
        let range = RangeParams {
            count: 6,
            ratio: if share == 0.0 { 1e-2 } else { 0.1 },
        };
        self.with_task(|task, params| {
            strength_range(task, share, range, params, &Work::unattended())
        })
    }

    fn try_fit(&self, share: f64, strengths: &[f64]) -> Result<Path, Stop> {
        self.with_task(|task, params| {
            let path = fit_path(task, share, strengths, params, &Work::unattended())?;
            self.all_finite(&path, task);
            Ok(path)
        })
    }

    fn all_finite(&self, path: &Path, task: &Task<'_>) {
        for at in 0..path.n_points() {
            let info = path.info(at);
            let numbers = [
                info.relative_gap,
                info.objective,
                info.loss,
                info.effective_df,
            ];
            assert!(
                numbers.iter().all(|v| v.is_finite()),
                "{:?}: {info:?}",
                self.kind
            );
            for one in path.class_coefficients(at) {
                assert!(one.intercept.is_finite(), "{:?}", self.kind);
                assert!(one.predictors.iter().all(|(_, b)| b.is_finite()));
            }
        }
        let all: Vec<usize> = (0..self.x.nrows()).collect();
        assert!(path.predict(task, &all).iter().all(|eta| eta.is_finite()));
    }

    /// The fits of a range of this case's own, or of given strengths, and their linear predictors.
    fn etas(&self, share: f64, strengths: &[f64]) -> Matrix {
        let path = self.try_fit(share, strengths).unwrap();
        let rows: Vec<usize> = (0..self.x.nrows()).collect();
        for at in 0..path.n_points() {
            assert!(path.gap(at).1, "{:?} {share}: not settled", self.kind);
        }
        self.with_task(|task, _| path.predict(task, &rows))
    }
}

fn near(what: &str, kind: Kind, share: f64, left: &Matrix, right: &Matrix) {
    assert_eq!(left.shape(), right.shape());
    let top = left.amax().max(1.0);
    let apart = (left - right).amax();
    assert!(
        apart <= 2e-4 * top,
        "{what}, {kind:?}, share {share}: {apart} of {top}"
    );
}

#[test]
fn the_order_of_samples_and_predictors_does_not_matter() {
    for kind in KINDS {
        let case = Case::random(kind, Design::Independent, 30, 90, 3);
        let (n, p) = case.x.shape();
        let turn = |i: usize| (i * 7 + 4) % n;
        let mut turned = case.rearranged(n, turn);
        turned.x = Matrix::from_fn(n, p, |i, j| case.x[(turn(i), (j * 7 + 5) % p)]);
        for share in SHARES {
            let strengths = case.range(share).unwrap();
            let again = turned.range(share).unwrap();
            for (a, b) in strengths.iter().zip(&again) {
                assert!((a / b - 1.0).abs() < 1e-9, "{kind:?}: {a} {b}");
            }
            let plain = case.etas(share, &strengths);
            let other = turned.etas(share, &strengths);
            let back = Matrix::from_fn(n, plain.ncols(), |i, k| plain[(turn(i), k)]);
            near("order", kind, share, &back, &other);
        }
    }
}

#[test]
fn units_do_not_matter_even_when_they_are_huge_or_tiny() {
    for kind in KINDS {
        let case = Case::random(kind, Design::Independent, 30, 60, 4);
        let mut moved = case.rearranged(30, |i| i);
        let sizes = [1.0, 1e9, 1e-9, -3.0, 1e150, 1e-150];
        for (j, mut column) in moved.x.column_iter_mut().enumerate() {
            column *= sizes[j % sizes.len()];
            if j.is_multiple_of(4) {
                column.add_scalar_mut(7.0 * sizes[j % sizes.len()]);
            }
        }
        for share in SHARES {
            let strengths = case.range(share).unwrap();
            let plain = case.etas(share, &strengths);
            near("units", kind, share, &plain, &moved.etas(share, &strengths));
        }
    }
}

#[test]
fn a_sample_twice_is_weight_two_and_weight_zero_is_absence() {
    for kind in KINDS {
        let case = Case::random(kind, Design::Independent, 30, 50, 5);
        let twice = |i: usize| if i < 30 { i } else { (i - 30) * 3 };
        let repeated = case.rearranged(40, twice);
        let mut weighted = case.rearranged(30, |i| i);
        let double = |i: usize| if i.is_multiple_of(3) { 2.0 } else { 1.0 };
        weighted.weights = Some((0..30).map(double).collect());
        let mut absent = case.rearranged(30, |i| i);
        absent.rows = (0..30).filter(|i| i % 5 != 2).collect();
        let mut zero = case.rearranged(30, |i| i);
        zero.weights = Some((0..30).map(|i| f64::from(u8::from(i % 5 != 2))).collect());
        for share in SHARES {
            let strengths = case.range(share).unwrap();
            let without = absent.etas(share, &strengths);
            assert_eq!(without, zero.etas(share, &strengths), "{kind:?} {share}");
            // Tied events under Efron share their mean weight, which is not the same thing.
            if kind.0 != "Efron" {
                let both = weighted.etas(share, &strengths);
                let first = repeated.etas(share, &strengths).rows(0, 30).into_owned();
                near("weights", kind, share, &first, &both);
            }
        }
    }
}

#[test]
fn the_bytes_do_not_depend_on_the_number_of_threads() {
    let cases: Vec<Case> = KINDS
        .iter()
        .map(|kind| Case::random(*kind, Design::Neighbours, 24, 120, 6))
        .collect();
    let bits = |threads: usize| -> Vec<Vec<u64>> {
        let count = cases.len() * SHARES.len();
        in_order(Threads::new(threads), count, &Work::unattended(), |at| {
            let (case, share) = (&cases[at / SHARES.len()], SHARES[at % SHARES.len()]);
            let etas = case.etas(share, &case.range(share).unwrap());
            Ok(etas.iter().map(|eta| eta.to_bits()).collect())
        })
        .unwrap()
    };
    let alone = bits(1);
    assert_eq!(alone, bits(2));
    assert_eq!(alone, bits(5));
}

#[test]
fn unwished_for_columns_never_make_a_number_that_is_none() {
    for kind in KINDS {
        for seed in 0..3 {
            let mut case = Case::random(kind, Design::Nasty, 25, 60, 20 + seed);
            // Constant on the training rows only: the values differ in those held out.
            case.rows = (0..25).filter(|row| row % 5 != 1).collect();
            for j in [3, 17] {
                for &row in &case.rows {
                    case.x[(row, j)] = -2.5;
                }
            }
            for share in SHARES {
                let strengths = case.range(share).unwrap();
                let path = case.try_fit(share, &strengths).unwrap();
                for at in 0..path.n_points() {
                    for class in 0..path.n_linear() {
                        let chosen = path.class_standardised(at, class);
                        assert!(chosen.iter().all(|(j, _)| ![3, 17].contains(j)));
                    }
                }
            }
        }
    }
}

#[test]
fn equal_predictors_leave_the_fit_as_it_is() {
    for kind in KINDS {
        let case = Case::random(kind, Design::Independent, 26, 30, 8);
        let mut doubled = case.rearranged(26, |i| i);
        doubled.x = Matrix::from_fn(26, 60, |i, j| case.x[(i, j % 30)]);
        let strengths = case.range(1.0).unwrap();
        let plain = case.etas(1.0, &strengths);
        near("twins", kind, 1.0, &plain, &doubled.etas(1.0, &strengths));
    }
}

#[test]
fn a_few_samples_of_very_many_predictors_are_fitted() {
    for kind in KINDS {
        let case = Case::random(kind, Design::Independent, 8, 200_000, 9);
        for share in [1.0, 0.0] {
            let strengths = case.range(share).unwrap();
            let path = case.try_fit(share, &strengths).unwrap();
            assert!((0..path.n_points()).all(|at| path.gap(at).1), "{kind:?}");
        }
    }
}

#[test]
fn outcomes_that_say_nothing_are_refused_or_fitted_without_a_number_that_is_none() {
    let failed = |result: Result<Path, Stop>| match result {
        Err(Stop::Failed(error)) => error,
        other => panic!("{other:?}"),
    };
    let work = ("Breslow", Grouping::Apart);
    for (name, ties) in [("Breslow", Ties::Breslow), ("Efron", Ties::Efron)] {
        let mut case = Case::random((name, work.1), Design::Independent, 20, 40, 10);
        let with = |event: Vec<bool>, time: Vec<f64>| Response::Time {
            time,
            event,
            strata: None,
            ties,
        };
        let times = || (0..20).map(|i| f64::from(i * 7 % 20)).collect::<Vec<_>>();
        case.response = with(vec![false; 20], times());
        assert_eq!(failed(case.try_fit(1.0, &[0.1])), FitError::NoEvents);
        // One event among all, and the same when it is the last to be observed.
        for only in [0, 17] {
            case.response = with((0..20).map(|i| i == only).collect(), times());
            for share in SHARES {
                let strengths = case.range(share).unwrap();
                if !strengths.is_empty() {
                    drop(case.try_fit(share, &strengths).unwrap());
                }
            }
        }
        // All at one time.
        case.response = with((0..20).map(|i| i % 3 > 0).collect(), vec![4.0; 20]);
        for share in SHARES {
            drop(case.etas(share, &case.range(share).unwrap()));
        }
    }
    for kind in KINDS {
        let mut case = Case::random(kind, Design::Independent, 20, 40, 11);
        case.weights = Some(vec![0.0; 20]);
        assert_eq!(failed(case.try_fit(1.0, &[0.1])), FitError::NoRows);
    }
    // Weights of zero can leave one class, or no events.
    let mut case = Case::random(KINDS[1], Design::Independent, 20, 40, 12);
    if let Response::YesNo(yes) = &case.response {
        case.weights = Some(yes.iter().map(|yes| f64::from(u8::from(*yes))).collect());
    }
    assert_eq!(failed(case.try_fit(1.0, &[0.1])), FitError::OneClass);
    // Classes that one predictor separates have finite coefficients at every strength above zero.
    for kind in [KINDS[1], KINDS[2], KINDS[3]] {
        let mut case = Case::random(kind, Design::Independent, 21, 30, 13);
        for i in 0..21 {
            let place = match &case.response {
                Response::YesNo(yes) => usize::from(yes[i]),
                Response::Classes { class, .. } => class[i],
                _ => unreachable!("both kinds are classes"),
            };
            case.x[(i, 5)] = place as f64;
        }
        for share in SHARES {
            let strengths: Vec<f64> = (0..6).map(|k| 0.1_f64.powi(k)).collect();
            drop(case.try_fit(share, &strengths).unwrap());
        }
    }
}
