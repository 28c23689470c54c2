//! Penalty weights and sign rules of the predictors, as a training part sees them.

use crate::base::work::Work;
use crate::numeric::error::Stop;
use crate::numeric::path::{Params, Path, fit_path};
use crate::numeric::penalty::Sign;
use crate::numeric::procedure::Procedure;
use crate::numeric::range::{RangeParams, strength_range};
use crate::numeric::response::Response;
use crate::numeric::samples::{Origin, Samples};
use crate::numeric::task::Task;

/// The penalty weights of the predictors, beside the strength that they share.
#[derive(Clone, Debug, PartialEq)]
pub enum Weighting {
    /// 1 for all.
    Equal,
    /// One for each block of predictors, and 1 for those in no block.
    Blocks {
        /// The block of each predictor given.
        block: Vec<Option<usize>>,
        /// The weights of the blocks that are tried, each list with one for each block. With
        /// several lists the one with the lowest error is chosen in every training part.
        candidates: Vec<Vec<f64>>,
    },
    /// Learnt in every training part from a first fit: (mean |b| / |bⱼ|)^power, with b the
    /// coefficients of a ridge fit on the scale that the penalty sees (the adaptive lasso of Zou
    /// 2006, with ridge in the first stage as suggested there).
    Adaptive {
        /// Above 0; 1 is usual.
        power: f64,
    },
}

/// Strengths of the first stage.
const FIRST_STAGE: RangeParams = RangeParams {
    count: 40,
    ratio: 1e-3,
};

/// No learnt weight is larger: such a predictor stays out at every strength that is tried.
const LARGEST: f64 = 1e8;

impl Procedure<'_> {
    /// The lists of block weights that are to be compared: one where nothing is to be chosen.
    #[must_use]
    pub fn n_weightings(&self) -> usize {
        match &self.weighting {
            Weighting::Equal | Weighting::Adaptive { .. } => 1,
            Weighting::Blocks { candidates, .. } => candidates.len().max(1),
        }
    }

    /// The weights of the blocks in a list; empty without blocks.
    #[must_use]
    pub fn block_weights(&self, at: usize) -> &[f64] {
        match &self.weighting {
            Weighting::Equal | Weighting::Adaptive { .. } => &[],
            Weighting::Blocks { candidates, .. } => {
                candidates.get(at).map_or(&[], |weights| weights.as_slice())
            }
        }
    }

    /// The procedure with these weights of the blocks, so that nothing is left to choose.
    #[must_use]
    pub fn with_block_weights(&self, weights: &[f64]) -> Self {
        let mut procedure = self.clone();
        if let Weighting::Blocks { candidates, .. } = &mut procedure.weighting {
            *candidates = vec![weights.to_vec()];
        }
        procedure
    }

    /// The penalty weight of each prepared column, where they are given.
    pub(super) fn given_factors(&self, samples: &Samples) -> Option<Vec<f64>> {
        match &self.weighting {
            Weighting::Equal | Weighting::Adaptive { .. } => None,
            Weighting::Blocks { block, .. } => {
                let weights = self.block_weights(0);
                let weight = |column: usize| match samples.origin(column) {
                    Origin::Predictor(j) => block[j].map_or(1.0, |block| weights[block]),
                    Origin::Score(_) | Origin::Position(_) => 1.0,
                };
                Some((0..samples.n_columns()).map(weight).collect())
            }
        }
    }

    /// The rules by which every path on these samples is fitted.
    #[must_use]
    pub fn params(&self, samples: &Samples) -> Params {
        let sign = |column: usize| match samples.origin(column) {
            Origin::Predictor(j) => self.signs[j],
            Origin::Score(_) | Origin::Position(_) => Sign::Any,
        };
        Params {
            grouping: self.grouping,
            signs: if self.signs.iter().all(|sign| *sign == Sign::Any) {
                Vec::new()
            } else {
                (0..samples.n_columns()).map(sign).collect()
            },
            ..Params::default()
        }
    }
}

/// What the first stage of an adaptive fit gave.
#[derive(Clone, Debug, PartialEq)]
pub struct FirstStage {
    /// The penalty weight of each column.
    pub weights: Vec<f64>,
    /// The strength of the ridge fit; `None` when no predictor varies.
    pub strength: Option<f64>,
}

/// Learns penalty weights from a ridge fit to the rows of a task.
///
/// The strength of that fit is the one with the lowest exact leave-one-out error for a measured
/// outcome, and otherwise the one with the lowest Akaike criterion, `2n·loss + 2·df` with the
/// effective degrees of freedom (Hastie, Tibshirani & Friedman 2009, section 7.6).
///
/// # Errors
/// What is wrong with the task, or that the work was called off.
pub fn first_stage(task: &Task<'_>, power: f64, work: &Work<'_>) -> Result<FirstStage, Stop> {
    let p = task.predictors.n_predictors();
    let params = Params::default();
    let strengths = strength_range(task, 0.0, FIRST_STAGE, &params, work)?;
    if strengths.is_empty() {
        return Ok(FirstStage {
            weights: vec![1.0; p],
            strength: None,
        });
    }
    let path = fit_path(task, 0.0, &strengths, &params, work)?;
    let at = best(task, &path);
    let mut squares = vec![0.0; p];
    for class in 0..path.n_linear() {
        for (j, b) in path.class_standardised(at, class) {
            squares[j] += b * b;
        }
    }
    let sizes: Vec<f64> = squares.iter().map(|square| f64::sqrt(*square)).collect();
    let known: Vec<f64> = sizes.iter().copied().filter(|size| *size > 0.0).collect();
    let mean = known.iter().sum::<f64>() / known.len().max(1) as f64;
    let weights = sizes
        .iter()
        .map(|size| {
            let weight = (mean / size).powf(power);
            // What is not there, or nothing at all in every fit, has no say either way.
            if weight.is_nan() {
                1.0
            } else {
                weight.clamp(1.0 / LARGEST, LARGEST)
            }
        })
        .collect();
    Ok(FirstStage {
        weights,
        strength: Some(strengths[at]),
    })
}

/// The place of the best ridge fit; of equals the strongest.
fn best(task: &Task<'_>, path: &Path) -> usize {
    let total: f64 = task.rows.iter().map(|&row| task.weight(row)).sum();
    let value = |at: usize| match (task.response, path.shortcuts()) {
        (Response::Measured(_), Some(shortcuts)) => shortcuts.leave_one_out[at],
        (_, _) => {
            let info = path.info(at);
            2.0 * total * info.loss + 2.0 * info.effective_df
        }
    };
    let mut best = 0;
    for at in 1..path.n_points() {
        // An error that is no number never wins.
        if value(at) < value(best) || value(best).is_nan() {
            best = at;
        }
    }
    best
}

#[cfg(test)]
mod tests;
