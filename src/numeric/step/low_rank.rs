//! Filling missing values by a few components that all predictors share.

use crate::base::work::Work;
use crate::numeric::matrix::Matrix;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{forget_limits, mean_known};
use crate::numeric::step::scores::{Directions, leading_directions};
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;
use std::sync::Arc;

/// Low-rank imputation (after Troyanskaya et al. 2001, SVDimpute): in the training part, gaps
/// are filled with the mean, then again and again with what the first `rank` principal
/// components say, until the fills change by less than one part in 10⁴ of their spread. Any
/// sample, training or held-out, is then completed from its known values by the components as
/// learnt.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LowRankImputation {
    rank: usize,
}

const MOST_PASSES: usize = 400;
const TOLERANCE: f64 = 1e-4;

impl LowRankImputation {
    /// The first `rank` components, 1 to 100.
    ///
    /// # Errors
    /// [`ParameterError`] when the rank is out of its range.
    pub fn new(rank: usize) -> Result<Self, ParameterError> {
        let rank = ParameterError::check_count("rank", rank, 1, 100)?;
        Ok(Self { rank })
    }
}

impl Preparation for LowRankImputation {
    must_learn!(Directions, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Directions, StepStop> {
        let columns = part.active_columns();
        let (n, p) = (part.n_rows(), columns.len());
        let most = n.saturating_sub(1).min(p);
        if self.rank > most {
            return Err(StepError::TooFewSamples {
                needed: self.rank + 1,
                found: most + 1,
            }
            .into());
        }
        let mut filled = Matrix::zeros(n, p);
        let mut gaps = Vec::new();
        for (place, &column) in columns.iter().enumerate() {
            let mean = mean_known(part.column(column)).ok_or(StepError::NothingKnown { column })?;
            for (at, x) in part.column(column).enumerate() {
                if x.is_nan() {
                    gaps.push((at, place));
                }
                filled[(at, place)] = if x.is_nan() { mean } else { x };
            }
        }
        for _ in 0..MOST_PASSES {
            work.check()?;
            let means: Vec<f64> = (0..p).map(|place| filled.column(place).mean()).collect();
            let centered = Matrix::from_fn(n, p, |at, place| filled[(at, place)] - means[place]);
            let (_, loadings) = leading_directions(&centered, self.rank, work)?;
            let scores = &centered * &loadings;
            let (mut change, mut size) = (0.0, 0.0);
            for &(at, place) in &gaps {
                let said: f64 = (0..self.rank)
                    .map(|k| scores[(at, k)] * loadings[(place, k)])
                    .sum();
                let old = centered[(at, place)];
                change += (said - old).powi(2);
                size += said.powi(2) + old.powi(2);
                filled[(at, place)] = means[place] + said;
            }
            if change <= TOLERANCE * TOLERANCE * size {
                return Ok(Directions {
                    columns,
                    means,
                    loadings,
                });
            }
        }
        Err(StepError::NotSettled {
            passes: MOST_PASSES,
        }
        .into())
    }

    fn apply<'s>(
        &self,
        found: &Directions,
        mut samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        if !samples.has_gaps() {
            return Ok(samples);
        }
        if let Some(column) = (0..samples.n_columns())
            .find(|at| samples.active[*at] && found.columns.binary_search(at).is_err())
        {
            return Err(StepError::NothingKnown { column }.into());
        }
        let mut fills = Vec::new();
        for row in 0..samples.n_samples() {
            work.check()?;
            let own: Vec<f64> = found.columns.iter().map(|&c| samples.x[(row, c)]).collect();
            if !own.iter().any(|x| x.is_nan()) {
                continue;
            }
            let scores = scores_of_known(found, &own);
            for (place, _) in own.iter().enumerate().filter(|(_, x)| x.is_nan()) {
                let said: f64 = (0..self.rank)
                    .map(|k| scores[k] * found.loadings[(place, k)])
                    .sum();
                fills.push((row, found.columns[place], found.means[place] + said));
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

/// The scores that fit the known values of a sample best. A trace of ridge keeps them finite
/// when fewer values are known than there are components; nothing known gives 0, the mean.
fn scores_of_known(found: &Directions, own: &[f64]) -> Vec<f64> {
    const TRACE: f64 = 1e-9;
    let rank = found.loadings.ncols();
    let mut inner = Matrix::identity(rank, rank) * TRACE;
    let mut right = Matrix::zeros(rank, 1);
    for (place, x) in own.iter().enumerate().filter(|(_, x)| !x.is_nan()) {
        for k in 0..rank {
            let loading = found.loadings[(place, k)];
            right[(k, 0)] += loading * (x - found.means[place]);
            for l in 0..rank {
                inner[(k, l)] += loading * found.loadings[(place, l)];
            }
        }
    }
    inner
        .cholesky()
        .map_or_else(|| vec![0.0; rank], |c| c.solve(&right).as_slice().to_vec())
}
