//! Filling missing values from the most similar training samples.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{forget_limits, mean_known};
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;
use std::sync::Arc;

/// Fills a missing value with the mean of the k nearest training samples that have it.
///
/// The distance of two samples is √(p/m · Σ (a − b)²) over the m active predictors that both
/// have, of p. Predictors are not scaled first. Where no training sample with the value shares
/// a predictor with the sample, the training mean is taken. (Troyanskaya et al. 2001.)
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct NearestImputation {
    k: usize,
    weights: NeighborWeights,
}

/// How the nearest samples count.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum NeighborWeights {
    /// All the same.
    Equal,
    /// By the inverse of their distance; at distance 0 they count alone.
    InverseDistance,
}

impl NearestImputation {
    /// The nearest `k`, 1 or more.
    ///
    /// # Errors
    /// [`ParameterError`] when `k` is 0.
    pub fn new(k: usize, weights: NeighborWeights) -> Result<Self, ParameterError> {
        let k = ParameterError::check_count("k", k, 1, 10_000)?;
        Ok(Self { k, weights })
    }
}

/// The training samples, row after row over the columns that were active, and column means.
#[derive(Clone, Debug)]
pub(crate) struct Donors {
    columns: Vec<usize>,
    rows: Arc<[Vec<f64>]>,
    means: Vec<Option<f64>>,
}

impl Preparation for NearestImputation {
    must_learn!(Donors, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Donors, StepStop> {
        let columns = part.active_columns();
        let mut rows = vec![Vec::with_capacity(columns.len()); part.n_rows()];
        let mut means = Vec::with_capacity(columns.len());
        for (at, &column) in columns.iter().enumerate() {
            if at % 1024 == 0 {
                work.check()?;
            }
            for (row, x) in rows.iter_mut().zip(part.column(column)) {
                row.push(x);
            }
            means.push(mean_known(part.column(column)));
        }
        Ok(Donors {
            columns,
            rows: rows.into(),
            means,
        })
    }

    fn apply<'s>(
        &self,
        donors: &Donors,
        mut samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        if !samples.has_gaps() {
            return Ok(samples);
        }
        let columns = &donors.columns;
        if let Some(column) = (0..samples.n_columns())
            .find(|at| samples.active[*at] && columns.binary_search(at).is_err())
        {
            return Err(StepError::NothingKnown { column }.into());
        }
        let mut fills = Vec::new();
        for row in 0..samples.n_samples() {
            let own: Vec<f64> = columns.iter().map(|&c| samples.x[(row, c)]).collect();
            if !own.iter().any(|x| x.is_nan()) {
                continue;
            }
            let mut near: Vec<(f64, usize)> = Vec::with_capacity(donors.rows.len());
            for (at, donor) in donors.rows.iter().enumerate() {
                work.check()?;
                let distance = distance(&own, donor);
                if !distance.is_nan() {
                    near.push((distance, at));
                }
            }
            // The stable sort keeps the order of the samples among equal distances.
            near.sort_by(|a, b| a.0.total_cmp(&b.0));
            for (place, _) in own.iter().enumerate().filter(|(_, x)| x.is_nan()) {
                let column = columns[place];
                if samples.active[column] {
                    let value = self
                        .fill(donors, &near, place)
                        .or(donors.means[place])
                        .ok_or(StepError::NothingKnown { column })?;
                    fills.push((row, column, value));
                }
            }
        }
        let changed = samples.to_mut();
        forget_limits(changed);
        let x = Arc::make_mut(&mut changed.x);
        for (row, column, value) in fills {
            x[(row, column)] = value;
        }
        Ok(samples)
    }
}

impl NearestImputation {
    fn fill(&self, donors: &Donors, near: &[(f64, usize)], place: usize) -> Option<f64> {
        let nearest: Vec<(f64, f64)> = near
            .iter()
            .map(|&(distance, at)| (distance, donors.rows[at][place]))
            .filter(|(_, x)| !x.is_nan())
            .take(self.k)
            .collect();
        let closest = nearest.first()?.0;
        let weight = |distance: f64| match self.weights {
            NeighborWeights::Equal => 1.0,
            NeighborWeights::InverseDistance if closest > 0.0 => 1.0 / distance,
            NeighborWeights::InverseDistance if distance == 0.0 => 1.0,
            NeighborWeights::InverseDistance => 0.0,
        };
        let total: f64 = nearest.iter().map(|&(distance, _)| weight(distance)).sum();
        let sum: f64 = nearest
            .iter()
            .map(|&(distance, x)| weight(distance) * x)
            .sum();
        Some(sum / total)
    }
}

/// Not a number when no value is known to both.
fn distance(a: &[f64], b: &[f64]) -> f64 {
    // Eight sums side by side, always the same way, let the processor work on several at once.
    const LANES: usize = 8;
    let (mut sums, mut counts) = ([0.0; LANES], [0.0; LANES]);
    for (a, b) in a.chunks(LANES).zip(b.chunks(LANES)) {
        for (lane, (a, b)) in a.iter().zip(b).enumerate() {
            let square = (a - b) * (a - b);
            let is_shared = !square.is_nan();
            sums[lane] += if is_shared { square } else { 0.0 };
            counts[lane] += if is_shared { 1.0 } else { 0.0 };
        }
    }
    let shared: f64 = counts.iter().sum();
    if shared == 0.0 {
        f64::NAN
    } else {
        (a.len() as f64 / shared * sums.iter().sum::<f64>()).sqrt()
    }
}
