//! One training part: preparation learnt from it, and a path of fits on it.

use crate::base::work::Work;
use crate::numeric::matrix::Matrix;
use crate::numeric::parts::Split;
use crate::numeric::path::{Path, fit_path};
use crate::numeric::predictors::Predictors;
use crate::numeric::procedure::{
    Halt, Material, Procedure, ProcedureError, Tally, Weighting, first_stage,
};
use crate::numeric::range::{RangeParams, strength_range};
use crate::numeric::response::Response;
use crate::numeric::samples::Samples;
use crate::numeric::step::{LearnedChain, Prepared, TrailingScale};
use crate::numeric::task::{Scaling, Task};
use std::borrow::Cow;
use std::collections::BTreeMap;
use std::sync::Arc;

/// The preparation that was learnt from a training part, and all samples prepared with it.
#[derive(Debug)]
pub struct Learnt<'a> {
    /// What was learnt.
    pub chain: LearnedChain,
    /// All samples, prepared.
    pub samples: Cow<'a, Samples>,
    predictors: PartPredictors<'a>,
    scaling: Scaling,
    /// The penalty weight of each prepared column, where they are not 1.
    factors: Option<Vec<f64>>,
    /// For penalty weights that were learnt: the strength of the ridge fit in the first stage.
    pub first_strength: Option<f64>,
}

/// The predictor matrix of a part: the shared one wherever preparation left it as it was.
#[derive(Debug)]
enum PartPredictors<'a> {
    Shared(&'a Predictors),
    Own(Box<Predictors>),
}

/// A path of fits on one training part.
#[derive(Debug)]
pub struct PartFit<'a> {
    /// The preparation.
    pub learnt: Learnt<'a>,
    /// The fits.
    pub path: Path,
}

/// Learns the preparation from the training rows of a split, and proves that it did so.
///
/// # Errors
/// When a step cannot be learnt, a value is still missing afterwards, the proof fails, or the
/// work was called off.
pub fn learn_part<'a>(
    material: &Material<'a>,
    procedure: &Procedure<'_>,
    split: &Split,
    tally: &mut Tally,
    work: &Work<'_>,
) -> Result<Learnt<'a>, Halt> {
    let outcome = material.response.values();
    let Prepared { chain, samples } =
        procedure
            .chain
            .prepare(split, material.samples, outcome, work)?;
    tally.proof.check(&chain, split);
    if !tally.proof.holds() {
        return Err(ProcedureError::Leak.into());
    }
    if !samples.active.contains(&true) {
        return Err(ProcedureError::NoPredictors.into());
    }
    let predictors = if Arc::ptr_eq(&samples.x, &material.samples.x) {
        PartPredictors::Shared(material.predictors)
    } else {
        PartPredictors::Own(Box::new(Predictors::new(Arc::clone(&samples.x))))
    };
    let known = match &predictors {
        PartPredictors::Shared(predictors) => predictors,
        PartPredictors::Own(predictors) => predictors.as_ref(),
    };
    let rows = split.training().iter().chain(split.held_out()).copied();
    nothing_missing(&samples, known, rows)?;
    let scaling = match chain.trailing().scale {
        TrailingScale::UnitVariance => Scaling::UnitVariance,
        TrailingScale::Leave => procedure.scaling,
    };
    let mut learnt = Learnt {
        factors: procedure.given_factors(&samples),
        first_strength: None,
        chain,
        samples,
        predictors,
        scaling,
    };
    if let Weighting::Adaptive { power } = procedure.weighting {
        let task = learnt.task(material, split.training());
        tally.proof.check_moments(task.rows, split);
        let first = first_stage(&task, power, work)?;
        learnt.factors = Some(first.weights);
        learnt.first_strength = first.strength;
    }
    Ok(learnt)
}

fn nothing_missing(
    samples: &Samples,
    predictors: &Predictors,
    rows: impl Iterator<Item = usize> + Clone,
) -> Result<(), ProcedureError> {
    let mut first = None;
    let mut count = 0;
    for column in samples.active_columns() {
        // Known once for all parts: most columns have nothing missing in any sample.
        if predictors.half_range(column).is_finite() {
            continue;
        }
        let values = samples.column(column);
        for row in rows.clone() {
            if values[row].is_nan() {
                first = first.or(Some((row, column)));
                count += 1;
            }
        }
    }
    match first {
        Some((row, column)) => Err(ProcedureError::Missing { row, column, count }),
        None => Ok(()),
    }
}

impl Learnt<'_> {
    /// The predictor matrix of this part, all samples.
    #[must_use]
    pub fn predictors(&self) -> &Predictors {
        match &self.predictors {
            PartPredictors::Shared(predictors) => predictors,
            PartPredictors::Own(predictors) => predictors,
        }
    }

    /// The penalty weight of each prepared column, where they are not all 1.
    #[must_use]
    pub fn factors(&self) -> Option<&[f64]> {
        self.factors.as_deref()
    }

    /// The fitting problem of this part.
    #[must_use]
    pub fn task<'t>(&'t self, material: &'t Material<'_>, rows: &'t [usize]) -> Task<'t> {
        Task {
            predictors: self.predictors(),
            response: material.response,
            rows,
            columns: Some(&self.samples.active),
            covariates: material.covariates,
            weights: material.weights,
            factors: self.factors.as_deref(),
            scaling: self.scaling,
        }
    }

    /// The strengths of a range for this part, falling from its all-zero point.
    ///
    /// # Errors
    /// When the outcome cannot be fitted, or the work was called off.
    pub fn strengths(
        &self,
        material: &Material<'_>,
        rows: &[usize],
        share: f64,
        procedure: &Procedure<'_>,
        params: RangeParams,
        work: &Work<'_>,
    ) -> Result<Vec<f64>, Halt> {
        let task = self.task(material, rows);
        Ok(strength_range(
            &task,
            share,
            params,
            &procedure.params(&self.samples),
            work,
        )?)
    }
}

/// Fits a path on the training rows of a split with preparation that was learnt from them.
///
/// # Errors
/// When the fit cannot be made, or was called off.
pub fn fit_learnt<'a>(
    material: &Material<'_>,
    procedure: &Procedure<'_>,
    learnt: Learnt<'a>,
    split: &Split,
    (share, strengths): (f64, &[f64]),
    tally: &mut Tally,
    work: &Work<'_>,
) -> Result<PartFit<'a>, Halt> {
    let task = learnt.task(material, split.training());
    tally.proof.check_moments(task.rows, split);
    if !tally.proof.holds() {
        return Err(ProcedureError::Leak.into());
    }
    let path = fit_path(
        &task,
        share,
        strengths,
        &procedure.params(&learnt.samples),
        work,
    )?;
    tally.count(&path);
    Ok(PartFit { learnt, path })
}

/// Learns the preparation from the training rows of a split and fits a path on them.
///
/// # Errors
/// When preparation or fit cannot be made, or the work was called off.
pub fn fit_part<'a>(
    material: &Material<'a>,
    procedure: &Procedure<'_>,
    split: &Split,
    share: f64,
    strengths: &[f64],
    tally: &mut Tally,
    work: &Work<'_>,
) -> Result<PartFit<'a>, Halt> {
    let learnt = learn_part(material, procedure, split, tally, work)?;
    let wanted = (share, strengths);
    fit_learnt(material, procedure, learnt, split, wanted, tally, work)
}

impl PartFit<'_> {
    /// The linear predictor of some samples at every strength: rows × strengths.
    #[must_use]
    pub fn predict(&self, material: &Material<'_>, rows: &[usize]) -> Matrix {
        self.path.predict(&self.learnt.task(material, &[]), rows)
    }
}

/// The chosen predictors of a fit, rising, each with its coefficient on the scale that the penalty
/// sees; with classes the one of largest size among them.
#[must_use]
pub fn chosen_predictors(path: &Path, at: usize) -> Vec<(usize, f64)> {
    if path.n_linear() == 1 {
        return path.standardised(at);
    }
    let mut largest: BTreeMap<usize, f64> = BTreeMap::new();
    for class in 0..path.n_linear() {
        for (column, value) in path.class_standardised(at, class) {
            let known = largest.entry(column).or_insert(value);
            if value.abs() > known.abs() {
                *known = value;
            }
        }
    }
    largest.into_iter().collect()
}

/// The effective degrees of freedom of the penalised coefficients of a fit: without intercepts and
/// covariates.
#[must_use]
pub fn penalised_freedom(path: &Path, at: usize, response: &Response, covariates: usize) -> f64 {
    let free = match response {
        Response::Measured(_) | Response::YesNo(_) | Response::Count { .. } => 1 + covariates,
        // One class follows from the others.
        Response::Classes { n_classes, .. } => (n_classes - 1) * (1 + covariates),
        Response::Time { .. } => covariates,
    };
    path.info(at).effective_df - free as f64
}
