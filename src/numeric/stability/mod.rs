//! Would the same predictors be chosen again? Frequencies, agreement and error bounds.

mod bound;
mod index;

pub use bound::{r_concave_bound, unimodal_bound, worst_case_bound};
pub use index::StabilityIndex;

use crate::numeric::measure::normal_quantile;

/// Which of p predictors each of many runs has chosen.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Selections {
    n_predictors: usize,
    runs: Vec<Vec<usize>>,
}

impl Selections {
    /// The chosen predictors of each run, in any order; repeated ones count once.
    ///
    /// # Panics
    /// When a chosen predictor is not one of the `n_predictors`.
    #[must_use]
    pub fn new(n_predictors: usize, mut runs: Vec<Vec<usize>>) -> Self {
        for run in &mut runs {
            run.sort_unstable();
            run.dedup();
            assert!(
                run.last().is_none_or(|&chosen| chosen < n_predictors),
                "a chosen predictor is not among the predictors"
            );
        }
        Self { n_predictors, runs }
    }

    /// How many predictors could be chosen.
    #[must_use]
    pub fn n_predictors(&self) -> usize {
        self.n_predictors
    }

    /// The chosen predictors of each run, rising.
    #[must_use]
    pub fn runs(&self) -> &[Vec<usize>] {
        &self.runs
    }

    /// How many runs chose each predictor.
    #[must_use]
    pub fn counts(&self) -> Vec<usize> {
        let mut counts = vec![0; self.n_predictors];
        for &chosen in self.runs.iter().flatten() {
            counts[chosen] += 1;
        }
        counts
    }

    /// The share of runs that chose each predictor (not a number without runs).
    #[must_use]
    pub fn frequencies(&self) -> Vec<f64> {
        let runs = self.runs.len() as f64;
        let counts = self.counts().into_iter();
        counts.map(|count| count as f64 / runs).collect()
    }

    /// The share of pairs of runs in which both chose a predictor, when runs 2k and 2k + 1 are
    /// the halves of pair k.
    #[must_use]
    pub fn simultaneous_frequencies(&self) -> Vec<f64> {
        let mut counts = vec![0_usize; self.n_predictors];
        for pair in self.runs.chunks_exact(2) {
            for chosen in &pair[0] {
                if pair[1].binary_search(chosen).is_ok() {
                    counts[*chosen] += 1;
                }
            }
        }
        let pairs = (self.runs.len() / 2) as f64;
        counts
            .into_iter()
            .map(|count| count as f64 / pairs)
            .collect()
    }

    /// The mean number of predictors that a run chose.
    #[must_use]
    pub fn mean_chosen(&self) -> f64 {
        self.runs.iter().map(Vec::len).sum::<usize>() as f64 / self.runs.len() as f64
    }

    /// How well the runs agree, corrected for chance.
    #[must_use]
    pub fn index(&self) -> StabilityIndex {
        StabilityIndex::of(self)
    }
}

/// The interval of Wilson (1927) for a share, at a level such as 0.95. `None` without trials.
///
/// For resamples of one data set it says how far the number of resamples blurs the frequency;
/// it does not say how far other samples would.
#[must_use]
pub fn wilson_interval(successes: usize, trials: usize, level: f64) -> Option<(f64, f64)> {
    if trials == 0 || successes > trials {
        return None;
    }
    let n = trials as f64;
    let share = successes as f64 / n;
    let z = normal_quantile(0.5 + 0.5 * level);
    let middle = (share + z * z / (2.0 * n)) / (1.0 + z * z / n);
    let spread = share * (1.0 - share) / n + z * z / (4.0 * n * n);
    let half = z * spread.sqrt() / (1.0 + z * z / n);
    // The ends are exactly 0 and 1 where nothing, or everything, succeeded.
    let lower = if successes == 0 { 0.0 } else { middle - half };
    let upper = if successes == trials {
        1.0
    } else {
        middle + half
    };
    Some((lower, upper))
}
