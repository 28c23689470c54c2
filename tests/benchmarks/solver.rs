//! Times of the solver, for `compare.py` beside it: reads a case from a file, prints one line.
//!
//! `solver CASE FILE N P REPEATS` prints seconds (median), passes over the matrix, the worst gap, the
//! number of chosen predictors at the last strength, whether all settled, the peak memory of the runs
//! over that of the matrix (matrix included, what the process held before them not), and the running
//! time of the first thread.
//! The file holds the predictors by columns, then the outcome, as little-endian f64.
#![expect(
    clippy::disallowed_methods,
    clippy::print_stdout,
    reason = "a benchmark reads its file, takes the time and prints"
)]

use std::io::Read;
use std::sync::Arc;
use std::time::Instant;
use widefold::base::thread::{Threads, in_order};
use widefold::base::work::Work;
use widefold::numeric::choose::Rule;
use widefold::numeric::matrix::Matrix;
use widefold::numeric::parts::{PartsParams, Scheme, Structure, assign};
use widefold::numeric::path::{Grouping, Params, Path, fit_path};
use widefold::numeric::predictors::Predictors;
use widefold::numeric::procedure::{
    ErrorMeasure, Material, Procedure, StrengthRule, Weighting, nested,
};
use widefold::numeric::range::{RangeParams, strength_range};
use widefold::numeric::response::{Response, Ties};
use widefold::numeric::samples::Samples;
use widefold::numeric::step::Chain;
use widefold::numeric::task::{Scaling, Task};

/// What a case came to.
#[derive(Default)]
struct Tally {
    passes: f64,
    gap: f64,
    chosen: usize,
    settled: bool,
}

impl Tally {
    fn of(path: &Path) -> Self {
        let points = 0..path.n_points();
        let infos: Vec<_> = points.map(|at| path.info(at)).collect();
        Self {
            // The moments are one more reading of the matrix.
            passes: 1.0 + infos.iter().map(|info| info.passes).sum::<f64>(),
            gap: infos
                .iter()
                .map(|info| info.relative_gap)
                .fold(0.0, f64::max),
            chosen: infos.last().map_or(0, |info| info.n_chosen),
            settled: infos.iter().all(|info| info.settled),
        }
    }

    fn and(self, other: &Self) -> Self {
        Self {
            passes: self.passes + other.passes,
            gap: self.gap.max(other.gap),
            chosen: other.chosen,
            settled: self.settled && other.settled,
        }
    }
}

struct Case {
    n: usize,
    x: Vec<f64>,
    y: Vec<f64>,
}

impl Case {
    fn read(file: &str, n: usize, p: usize) -> Self {
        // Read number by number, so that the peak of memory is that of the solver.
        let file = std::fs::File::open(file).expect("the file exists");
        let mut reader = std::io::BufReader::new(file);
        let mut read = |count: usize| -> Vec<f64> {
            let mut numbers = Vec::with_capacity(count);
            for _ in 0..count {
                let mut bytes = [0; 8];
                reader
                    .read_exact(&mut bytes)
                    .expect("the file is long enough");
                numbers.push(f64::from_le_bytes(bytes));
            }
            numbers
        };
        let x = read(n * p);
        let y = read(n);
        Self { n, x, y }
    }

    fn matrix(&self) -> Matrix {
        Matrix::from_column_slice(self.n, self.x.len() / self.n, &self.x)
    }
}

struct Setting<'a> {
    predictors: &'a Predictors,
    response: &'a Response,
    covariates: &'a Matrix,
}

impl Setting<'_> {
    fn task<'a>(&'a self, rows: &'a [usize]) -> Task<'a> {
        Task {
            predictors: self.predictors,
            response: self.response,
            rows,
            columns: None,
            covariates: self.covariates,
            weights: None,
            factors: None,
            scaling: Scaling::UnitVariance,
        }
    }

    fn path(&self, rows: &[usize], share: f64, strengths: &[f64], gap: f64) -> Path {
        let params = Params {
            relative_gap: gap,
            ..Params::default()
        };
        let task = self.task(rows);
        fit_path(&task, share, strengths, &params, &Work::unattended())
            .expect("the case can be fitted")
    }

    fn range(&self, rows: &[usize], share: f64, count: usize, ratio: f64) -> Vec<f64> {
        strength_range(
            &self.task(rows),
            share,
            RangeParams { count, ratio },
            &Params::default(),
            &Work::unattended(),
        )
        .expect("the case has a range")
    }

    /// The whole procedure as a Fit cell carries it out: five outer parts ten times, and in each of
    /// them the strength among 100 by ten parts five times.
    fn nested(&self, rows: &[usize]) -> Tally {
        let samples = Samples::new(self.predictors.x().clone());
        let predictors = Predictors::new(Arc::clone(&samples.x));
        let chain = Chain::new(Vec::new());
        let units = rows.to_vec();
        let material = Material {
            samples: &samples,
            predictors: &predictors,
            response: self.response,
            covariates: self.covariates,
            weights: None,
            structure: Structure::of_units(&units),
        };
        let plan = |parts, repeats| PartsParams {
            scheme: Scheme::Random,
            parts,
            repeats,
            seed: 1,
        };
        let procedure = Procedure {
            chain: &chain,
            scaling: Scaling::UnitVariance,
            shares: vec![1.0],
            grouping: Grouping::Apart,
            weighting: Weighting::Equal,
            signs: Vec::new(),
            measure: ErrorMeasure::SquaredError,
            strength: StrengthRule::Chosen {
                rule: Rule::LowestError,
                count: 100,
                ratio: Some(0.01),
                inner: plan(10, 5),
            },
        };
        let work = Work::unattended();
        let outer = assign(&plan(5, 10), rows, &material.structure, "outer")
            .expect("a hundred samples make five parts");
        let threads = Threads::all();
        let found = nested(&material, &procedure, &outer, "outer", threads, &work)
            .expect("the procedure can be carried out");
        assert!(found.tally.proof.holds());
        Tally {
            // The readings of single paths are not gathered by a procedure.
            passes: f64::NAN,
            gap: found.tally.worst_gap,
            chosen: found.fits.last().map_or(0, |fit| fit.n_chosen),
            settled: found.tally.unsettled == 0,
        }
    }

    /// A path on each part's training rows, with predictions of the others; then on all rows.
    fn parts(&self, n: usize, n_parts: usize, share: f64, strengths: &[f64]) -> Tally {
        let tallies = in_order(Threads::all(), n_parts + 1, &Work::unattended(), |part| {
            let (train, held): (Vec<usize>, Vec<usize>) =
                (0..n).partition(|row| row % n_parts != part);
            let path = self.path(&train, share, strengths, 1e-8);
            if !held.is_empty() {
                let predicted = path.predict(&self.task(&train), &held);
                assert!(predicted.iter().all(|eta| eta.is_finite()));
            }
            Ok(Tally::of(&path))
        })
        .expect("nobody calls it off");
        tallies.iter().fold(
            Tally {
                settled: true,
                ..Tally::default()
            },
            |sum, one| sum.and(one),
        )
    }
}

fn run(name: &str, case: &Case, x: Matrix) -> Tally {
    let n = case.n;
    let rows: Vec<usize> = (0..n).collect();
    let predictors = Predictors::new(x);
    let median = {
        let mut sorted = case.y.clone();
        sorted.sort_by(f64::total_cmp);
        sorted[n / 2]
    };
    let response = match name {
        "logistic" => Response::YesNo(case.y.iter().map(|y| *y > median).collect()),
        "cox" => Response::Time {
            time: case.y.iter().map(|y| (-y / 5.0).exp()).collect(),
            event: (0..n).map(|i| i % 3 != 0).collect(),
            strata: None,
            ties: Ties::Breslow,
        },
        _ => Response::Measured(case.y.clone()),
    };
    let covariates = Matrix::zeros(n, 0);
    let setting = Setting {
        predictors: &predictors,
        response: &response,
        covariates: &covariates,
    };
    match name {
        "lasso" | "enet05" | "enet01" => {
            let share = [1.0, 0.5, 0.1][["lasso", "enet05", "enet01"]
                .iter()
                .position(|one| *one == name)
                .expect("one of the three")];
            let strengths = setting.range(&rows, share, 100, 0.01);
            Tally::of(&setting.path(&rows, share, &strengths, 1e-8))
        }
        "logistic" | "cox" => {
            let strengths = setting.range(&rows, 1.0, 100, 0.01);
            Tally::of(&setting.path(&rows, 1.0, &strengths, 3e-7))
        }
        "parts" => {
            let strengths = setting.range(&rows, 1.0, 100, 0.01);
            setting.parts(n, 10, 1.0, &strengths)
        }
        "ridge" => {
            let strengths: Vec<f64> = (0..100)
                .map(|k| 10_f64.powf(5.0 - 0.06 * f64::from(k)))
                .collect();
            let path = setting.path(&rows, 0.0, &strengths, 1e-8);
            let shortcuts = path.shortcuts().expect("ridge has shortcuts");
            assert!(shortcuts.leave_one_out.iter().all(|e| e.is_finite()));
            Tally::of(&path)
        }
        "ridge-parts" => {
            let strengths: Vec<f64> = (0..100)
                .map(|k| 10_f64.powf(5.0 - 0.06 * f64::from(k)))
                .collect();
            setting.parts(n, 10, 0.0, &strengths)
        }
        "halves" => {
            let strengths = setting.range(&rows, 1.0, 50, 0.1);
            let tallies = in_order(Threads::all(), 100, &Work::unattended(), |half| {
                let mut state = half as u64 + 1;
                let mut order: Vec<(u64, usize)> = (0..n)
                    .map(|row| {
                        state = state
                            .wrapping_mul(6_364_136_223_846_793_005)
                            .wrapping_add(12345);
                        (state >> 20, row)
                    })
                    .collect();
                order.sort_unstable();
                let mut rows: Vec<usize> = order[..n / 2].iter().map(|(_, row)| *row).collect();
                rows.sort_unstable();
                Ok(Tally::of(&setting.path(&rows, 1.0, &strengths, 1e-8)))
            })
            .expect("nobody calls it off");
            tallies.iter().fold(
                Tally {
                    settled: true,
                    ..Tally::default()
                },
                |sum, one| sum.and(one),
            )
        }
        "nested" => setting.nested(&rows),
        other => panic!("there is no case {other}"),
    }
}

/// Memory of this process in bytes, where the system tells: `VmHWM` the most, `VmRSS` at present.
fn memory(word: &str) -> f64 {
    let status = std::fs::read_to_string("/proc/self/status").unwrap_or_default();
    let line = status.lines().find(|line| line.starts_with(word));
    let kilobytes = line.and_then(|line| line.split_whitespace().nth(1)?.parse::<f64>().ok());
    kilobytes.unwrap_or(f64::NAN) * 1024.0
}

/// Seconds that the calling thread has been running, where the system tells: of use when other
/// programs keep the machine busy.
fn running() -> f64 {
    let status = std::fs::read_to_string("/proc/thread-self/schedstat").unwrap_or_default();
    let first = status.split_whitespace().next();
    first
        .and_then(|word| word.parse::<f64>().ok())
        .unwrap_or(f64::NAN)
        * 1e-9
}

fn main() {
    let words: Vec<String> = std::env::args()
        .skip(1)
        .filter(|word| word != "--bench")
        .collect();
    let [name, file, n, p, repeats] = words.as_slice() else {
        println!("run tests/benchmarks/run, which makes the cases");
        return;
    };
    let number = |word: &str| word.parse::<usize>().expect("a whole number");
    let (n, p) = (number(n), number(p));
    let case = Case::read(file, n, p);
    let (mut times, mut busy) = (Vec::new(), Vec::new());
    let mut tally = Tally::default();
    let before = memory("VmRSS");
    for _ in 0..number(repeats).max(1) {
        // The solver takes the matrix over; the copy that this leaves is not part of the time.
        let x = case.matrix();
        let (start, started) = (Instant::now(), running());
        tally = run(name, &case, x);
        times.push(start.elapsed().as_secs_f64());
        busy.push(running() - started);
    }
    times.sort_by(f64::total_cmp);
    busy.sort_by(f64::total_cmp);
    let matrix = (n * p * 8) as f64;
    println!(
        "{:.6} {:.2} {:.3e} {} {} {:.2} {:.6}",
        times[times.len() / 2],
        tally.passes,
        tally.gap,
        tally.chosen,
        tally.settled,
        (memory("VmHWM") - before) / matrix,
        busy[busy.len() / 2],
    );
}
