//! The stability index: agreement of lists, corrected for chance.

use crate::numeric::measure::normal_quantile;
use crate::numeric::stability::Selections;

/// How well M lists chosen among d predictors agree (Nogueira, Sechidis and Brown 2018,
/// JMLR 18(174), definition 4 and theorem 7):
///
/// ```text
/// φ = 1 − [ mean_f  M/(M−1) · p_f (1 − p_f) ] / [ k̄/d · (1 − k̄/d) ]
/// ```
///
/// with p_f the share of lists that hold predictor f and k̄ the mean length. 1: the same list
/// each time; 0: as random lists of these lengths; below 0: less than random.
///
/// Everything is `None` where the index is 0/0: fewer than two lists, or all lists empty or
/// complete.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct StabilityIndex {
    /// The index φ.
    pub value: Option<f64>,
    /// The variance of φ over random lists, by the asymptotic formula.
    pub variance: Option<f64>,
    /// The mean number of predictors in a list.
    pub mean_chosen: f64,
    /// How many lists.
    pub n_runs: usize,
    /// How many predictors could be chosen.
    pub n_predictors: usize,
}

impl StabilityIndex {
    pub(super) fn of(selections: &Selections) -> Self {
        let runs = selections.runs();
        let (m, d) = (runs.len() as f64, selections.n_predictors() as f64);
        let mut index = Self {
            value: None,
            variance: None,
            mean_chosen: selections.mean_chosen(),
            n_runs: runs.len(),
            n_predictors: selections.n_predictors(),
        };
        let share = index.mean_chosen / d;
        let chance = share * (1.0 - share);
        let is_defined = runs.len() >= 2 && chance > 0.0;
        if !is_defined {
            return index;
        }
        let frequencies = selections.frequencies();
        let spread: f64 = frequencies.iter().map(|p| p * (1.0 - p)).sum::<f64>() / d;
        let value = 1.0 - m / (m - 1.0) * spread / chance;
        // The influence of each list on the index.
        let influences: Vec<f64> = runs
            .iter()
            .map(|run| {
                let own = run.len() as f64 / d;
                let agreement = run.iter().map(|&f| frequencies[f]).sum::<f64>() / d;
                let correction = 0.5 * value * (2.0 * own * share - own - share + 1.0);
                (agreement - own * share + correction) / chance
            })
            .collect();
        let mean = influences.iter().sum::<f64>() / m;
        let squares: f64 = influences.iter().map(|phi| (phi - mean).powi(2)).sum();
        index.value = Some(value);
        index.variance = Some(4.0 / (m * m) * squares);
        index
    }

    /// The interval around the index at a level such as 0.95. It is not cut at 1.
    #[must_use]
    pub fn interval(&self, level: f64) -> Option<(f64, f64)> {
        let half = normal_quantile(0.5 + 0.5 * level) * self.variance?.sqrt();
        self.value.map(|value| (value - half, value + half))
    }
}
