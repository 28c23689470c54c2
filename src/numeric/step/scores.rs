//! Principal components: many predictors replaced by few scores.

use crate::base::work::Work;
use crate::numeric::matrix::{Matrix, product, symmetric_eigen};
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::{Origin, Samples};
use crate::numeric::step::column::mean_known;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;
use std::sync::Arc;

/// Replaces the active predictors by their scores on the first principal components of the
/// training part: z = (x − x̄)·V. The columns of V have length 1; of each, the loading of the
/// largest size is positive. No value may be missing.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct PrincipalScores {
    components: usize,
}

impl PrincipalScores {
    /// The first `components`, 1 or more.
    ///
    /// # Errors
    /// [`ParameterError`] when there is none.
    pub fn new(components: usize) -> Result<Self, ParameterError> {
        let components = ParameterError::check_count("components", components, 1, 10_000)?;
        Ok(Self { components })
    }
}

/// Means and directions over the columns that were active.
#[derive(Clone, Debug)]
pub(crate) struct Directions {
    pub(super) columns: Vec<usize>,
    pub(super) means: Vec<f64>,
    /// One row per column, one column per component.
    pub(super) loadings: Matrix,
}

impl Preparation for PrincipalScores {
    must_learn!(Directions, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Directions, StepStop> {
        let columns = part.active_columns();
        let (n, p) = (part.n_rows(), columns.len());
        // One degree of freedom goes to the means.
        let most = n.saturating_sub(1).min(p);
        if self.components > most {
            return Err(StepError::TooFewSamples {
                needed: self.components + 1,
                found: most + 1,
            }
            .into());
        }
        let mut means = Vec::with_capacity(p);
        let mut centered = Matrix::zeros(n, p);
        for (place, &column) in columns.iter().enumerate() {
            if let Some(at) = part.column(column).position(|x| x.is_nan()) {
                let row = part.rows()[at];
                return Err(StepError::Missing { row, column }.into());
            }
            let mean = mean_known(part.column(column)).expect("there are rows without gaps");
            for (value, x) in centered
                .column_mut(place)
                .iter_mut()
                .zip(part.column(column))
            {
                *value = x - mean;
            }
            means.push(mean);
        }
        let (_, loadings) = leading_directions(&centered, self.components, work)?;
        Ok(Directions {
            columns,
            means,
            loadings,
        })
    }

    fn apply<'s>(
        &self,
        found: &Directions,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let n = samples.n_samples();
        let mut scores = Matrix::zeros(n, self.components);
        for (place, &column) in found.columns.iter().enumerate() {
            if place % 256 == 0 {
                work.check()?;
            }
            if let Some(row) = samples.column(column).iter().position(|x| x.is_nan()) {
                return Err(StepError::Missing { row, column }.into());
            }
            for k in 0..self.components {
                let loading = found.loadings[(place, k)];
                let mut of_k = scores.column_mut(k);
                for (score, x) in of_k.iter_mut().zip(samples.column(column)) {
                    *score += (x - found.means[place]) * loading;
                }
            }
        }
        let companions = samples.into_owned().companions;
        Ok(Cow::Owned(Samples {
            x: Arc::new(scores),
            limits: Vec::new(),
            active: vec![true; self.components],
            axis: None,
            origins: Some((0..self.components).map(Origin::Score).collect()),
            companions,
        }))
    }
}

/// The singular values and right directions of the first `count` components of a centred n × p
/// matrix, through its n × n matrix of inner products.
pub(super) fn leading_directions(
    centered: &Matrix,
    count: usize,
    work: &Work<'_>,
) -> Result<(Vec<f64>, Matrix), StepStop> {
    /// Columns taken into one product.
    const BLOCK: usize = 256;
    let (n, p) = centered.shape();
    let mut gram = Matrix::zeros(n, n);
    for start in (0..p).step_by(BLOCK) {
        work.check()?;
        let block = centered.columns(start, BLOCK.min(p - start)).into_owned();
        gram += product(&block, &block.transpose());
    }
    work.check()?;
    let (values, vectors) =
        symmetric_eigen(&gram).map_err(|_| StepError::NotSettled { passes: 10_000 })?;
    work.check()?;
    let mut loadings = Matrix::zeros(p, count);
    let mut singular = Vec::with_capacity(count);
    for k in 0..count {
        let at = n - 1 - k;
        let value = values[at].max(0.0).sqrt();
        // A direction at the level of rounding is noise of the arithmetic, not of the samples.
        // Inner products know singular values to the root of the rounding error only.
        let is_real = value > 1e-7 * values[n - 1].max(0.0).sqrt();
        if !is_real {
            return Err(StepError::NotIndependent.into());
        }
        singular.push(value);
        let mut largest: f64 = 0.0;
        for column in 0..p {
            if column % 4096 == 0 {
                work.check()?;
            }
            let loading = centered.column(column).dot(&vectors.column(at)) / value;
            loadings[(column, k)] = loading;
            if loading.abs() > largest.abs() {
                largest = loading;
            }
        }
        if largest < 0.0 {
            loadings.column_mut(k).neg_mut();
        }
    }
    Ok((singular, loadings))
}
