//! Choosing share and strength on some rows, by inner parts of these rows alone.

use crate::base::work::Work;
use crate::numeric::choose::{self, Curve, Rule};
use crate::numeric::parts::{PartsParams, Split, assign};
use crate::numeric::procedure::part::{Learnt, fit_learnt, learn_part};
use crate::numeric::procedure::part_error::{mean_losses, part_errors};
use crate::numeric::procedure::{
    ErrorMeasure, Halt, Level, Material, PartFit, Procedure, ProcedureError, StrengthRule, Tally,
    fit_part, penalised_freedom, usual_ratio,
};
use crate::numeric::range::RangeParams;
use crate::numeric::response::{Response, deviance_of_times};

/// The procedure carried out on some rows.
#[derive(Debug)]
pub struct Tuned<'a> {
    /// One curve per lasso share; empty when the strength was given.
    pub curves: Vec<Curve>,
    /// Which curve won.
    pub share_at: usize,
    /// The place of the chosen strength in the range.
    pub strength_at: usize,
    /// The chosen lasso share.
    pub share: f64,
    /// The chosen strength.
    pub strength: f64,
    /// The chosen weights of the blocks of predictors; empty without blocks.
    pub block_weights: Vec<f64>,
    /// Where weights of blocks were to be chosen: every list that was tried, with its lowest error.
    pub weights_tried: Vec<(Vec<f64>, f64)>,
    /// Whether the range was made longer once because its weak end won.
    pub extended: Extended,
    /// Whether the range was cut short because weaker penalties would only follow single samples.
    pub cut: Cut,
    /// The fits on all the rows, at the strengths from the strongest to the weakest that was
    /// asked for; the chosen one is at `strength_at`.
    pub fit: PartFit<'a>,
    /// Counts over all fits.
    pub tally: Tally,
}

/// Whether a range was made longer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Extended {
    /// As it was asked for.
    No,
    /// Once.
    Once,
}

/// Whether a range was cut short.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cut {
    /// As it was asked for.
    No,
    /// Where the fit explains [`ENOUGH`] of the training rows' deviance.
    WhereExplained,
}

/// The share of the training rows' deviance from which on weaker penalties only follow single
/// samples: with separable classes the coefficients grow without limit beyond. A convention.
pub const ENOUGH: f64 = 0.99;

/// How much of the path on all the rows is wanted.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Reach {
    /// The whole range, for looking at.
    WholeRange,
    /// Down to the chosen strength, for predicting.
    Chosen,
}

/// Carries the procedure out on the training rows of a split.
///
/// One range of strengths serves all inner parts: it is taken from all rows that this level may
/// see. A part whose own all-zero point is lower simply starts empty.
///
/// Where there are several lists of block weights, all of this is done with each of them, on the
/// same parts, and the list with the lowest error wins; of equals the first.
///
/// # Errors
/// When preparation, plan or fit cannot be made, or the work was called off.
pub fn tune<'a>(
    material: &Material<'a>,
    procedure: &Procedure<'_>,
    split: &Split,
    purpose: &str,
    reach: Reach,
    work: &Work<'_>,
) -> Result<Tuned<'a>, Halt> {
    let count = procedure.n_weightings();
    let has_curves = matches!(procedure.strength, StrengthRule::Chosen { .. });
    if count == 1 || !has_curves {
        return tune_as_weighted(material, procedure, split, purpose, reach, work);
    }
    let mut best: Option<(f64, Tuned<'a>)> = None;
    let mut tried = Vec::with_capacity(count);
    let mut tally = Tally::default();
    for at in 0..count {
        let weights = procedure.block_weights(at);
        let bar = work.part(at as f32 / count as f32..(at + 1) as f32 / count as f32);
        let fixed = procedure.with_block_weights(weights);
        let tuned = tune_as_weighted(material, &fixed, split, purpose, reach, &bar)?;
        tally.merge(&tuned.tally);
        let errors = tuned.curves.iter().flat_map(|curve| &curve.errors);
        let lowest = errors
            .copied()
            .filter(|e| !e.is_nan())
            .fold(f64::INFINITY, f64::min);
        tried.push((weights.to_vec(), lowest));
        if best.as_ref().is_none_or(|(least, _)| lowest < *least) {
            best = Some((lowest, tuned));
        }
    }
    let (_, mut tuned) = best.ok_or(ProcedureError::NoError)?;
    tuned.weights_tried = tried;
    tuned.tally = tally;
    Ok(tuned)
}

/// [`tune`] with the first list of block weights.
fn tune_as_weighted<'a>(
    material: &Material<'a>,
    procedure: &Procedure<'_>,
    split: &Split,
    purpose: &str,
    reach: Reach,
    work: &Work<'_>,
) -> Result<Tuned<'a>, Halt> {
    let block_weights = procedure.block_weights(0).to_vec();
    let mut tally = Tally::default();
    let (rule, count, ratio, inner) = match &procedure.strength {
        StrengthRule::Fixed(strength) => {
            let share = procedure.shares[0];
            let fit = fit_part(
                material,
                procedure,
                split,
                share,
                &[*strength],
                &mut tally,
                work,
            )?;
            return Ok(Tuned {
                curves: Vec::new(),
                share_at: 0,
                strength_at: 0,
                share,
                strength: *strength,
                block_weights,
                weights_tried: Vec::new(),
                extended: Extended::No,
                cut: Cut::No,
                fit,
                tally,
            });
        }
        StrengthRule::Chosen {
            rule,
            count,
            ratio,
            inner,
        } => (*rule, *count, *ratio, inner),
    };
    if let (Rule::Given { strength }, Reach::Chosen, [_]) = (rule, reach, &procedure.shares[..]) {
        // Nothing is left to choose: the comparison beside it is only for looking at.
        let given = Procedure {
            strength: StrengthRule::Fixed(strength),
            ..procedure.clone()
        };
        return tune_as_weighted(material, &given, split, purpose, reach, work);
    }
    let mut search = Search {
        material,
        procedure,
        split,
        purpose,
        rule,
        inner,
        tally,
    };
    let n_shares = procedure.shares.len();
    let mut curves = Vec::with_capacity(n_shares);
    let (mut extended, mut cut) = (Extended::No, Cut::No);
    for (at, &share) in procedure.shares.iter().enumerate() {
        let bar =
            work.part(at as f32 / n_shares as f32 * 0.9..(at + 1) as f32 / n_shares as f32 * 0.9);
        let (curve, longer, shorter) = search.curve(share, count, ratio, &bar)?;
        curves.push(curve);
        if longer == Extended::Once {
            extended = longer;
        }
        if shorter == Cut::WhereExplained {
            cut = shorter;
        }
    }
    let (share_at, strength_at) = winner(rule, &curves).ok_or(ProcedureError::NoError)?;
    let curve = &curves[share_at];
    let (share, strength) = (curve.share, curve.strengths[strength_at]);
    let strengths = match reach {
        Reach::WholeRange => &curve.strengths[..],
        Reach::Chosen => &curve.strengths[..=strength_at],
    };
    let fit = fit_part(
        material,
        procedure,
        split,
        share,
        strengths,
        &mut search.tally,
        &work.part(0.9..1.0),
    )?;
    let tally = search.tally;
    Ok(Tuned {
        curves,
        share_at,
        strength_at,
        share,
        strength,
        block_weights,
        weights_tried: Vec::new(),
        extended,
        cut,
        fit,
        tally,
    })
}

/// The share and strength that win: each share's own choice by the rule, and among these the
/// share whose lowest error is lowest; equals go to the larger share, which is sparser.
fn winner(rule: Rule, curves: &[Curve]) -> Option<(usize, usize)> {
    let mut best: Option<(usize, f64)> = None;
    for (at, curve) in curves.iter().enumerate() {
        let Some(lowest) = choose::lowest(&curve.errors) else {
            continue;
        };
        let error = curve.errors[lowest];
        if best.is_none_or(|(_, least)| error <= least) {
            best = Some((at, error));
        }
    }
    let (share_at, _) = best?;
    Some((share_at, choose::pick(rule, &curves[share_at])?))
}

struct Search<'s, 'a> {
    material: &'s Material<'a>,
    procedure: &'s Procedure<'s>,
    split: &'s Split,
    purpose: &'s str,
    rule: Rule,
    inner: &'s PartsParams,
    tally: Tally,
}

impl Search<'_, '_> {
    /// The curve of one share; its range is made longer once if its weak end wins.
    fn curve(
        &mut self,
        share: f64,
        count: usize,
        ratio: Option<f64>,
        work: &Work<'_>,
    ) -> Result<(Curve, Extended, Cut), Halt> {
        let rows = self.split.training();
        let learnt = learn_part(
            self.material,
            self.procedure,
            self.split,
            &mut self.tally,
            work,
        )?;
        let p = learnt
            .samples
            .active
            .iter()
            .filter(|active| **active)
            .count();
        let ratio = ratio.unwrap_or_else(|| usual_ratio(share, rows.len(), p));
        let params = RangeParams { count, ratio };
        let mut strengths =
            learnt.strengths(self.material, rows, share, self.procedure, params, work)?;
        if strengths.is_empty() {
            // Nothing varies with the outcome: at every strength the model is empty.
            strengths.push(1.0);
        }
        if let Rule::Given { strength } = self.rule {
            let at = strengths.partition_point(|tried| *tried > strength);
            if strengths.get(at) != Some(&strength) {
                strengths.insert(at, strength);
            }
            let curve = self.errors(share, &strengths, &work.part(0.1..1.0))?;
            return Ok((curve, Extended::No, Cut::No));
        }
        let cut = self.cut(learnt, share, &mut strengths, &work.part(0.0..0.1))?;
        let curve = self.errors(share, &strengths, &work.part(0.1..0.7))?;
        let at_weak_end = choose::lowest(&curve.errors) == Some(strengths.len() - 1);
        if !at_weak_end || strengths.len() < 2 || cut == Cut::WhereExplained {
            return Ok((curve, Extended::No, cut));
        }
        // The same spacing, half as many strengths again: the curve's first part stays the same.
        let factor = strengths[1] / strengths[0];
        // Only the new ones are fitted, from the last of the old ones on.
        let last = strengths.len() - 1;
        let mut weaker = vec![strengths[last]];
        for _ in 0..count.div_ceil(2) {
            weaker.push(weaker[weaker.len() - 1] * factor);
        }
        let tail = self.errors(share, &weaker, &work.part(0.7..1.0))?;
        let mut longer = curve;
        longer.strengths.extend(&tail.strengths[1..]);
        longer.errors.extend(&tail.errors[1..]);
        longer
            .standard_errors
            .extend(tail.standard_errors.iter().skip(1));
        Ok((longer, Extended::Once, cut))
    }

    /// Leaves out the strengths behind the first at which the fit on all rows explains nearly all
    /// of their deviance. Measured outcomes are left alone: their fits stay finite anyway.
    fn cut(
        &mut self,
        learnt: Learnt<'_>,
        share: f64,
        strengths: &mut Vec<f64>,
        work: &Work<'_>,
    ) -> Result<Cut, Halt> {
        let measure = match self.material.response {
            Response::Measured(_) => return Ok(Cut::No),
            Response::YesNo(_) | Response::Classes { .. } | Response::Count { .. } => {
                ErrorMeasure::Deviance
            }
            Response::Time { .. } => ErrorMeasure::PartialLikelihood,
        };
        if strengths.len() < 2 {
            return Ok(Cut::No);
        }
        let fit = fit_learnt(
            self.material,
            self.procedure,
            learnt,
            self.split,
            (share, strengths),
            &mut self.tally,
            work,
        )?;
        let deviances = training_deviances(measure, self.material, &fit, self.split.training());
        let enough = deviances
            .iter()
            .position(|deviance| *deviance <= (1.0 - ENOUGH) * deviances[0]);
        match enough {
            Some(at) if at + 1 < strengths.len() => {
                strengths.truncate((at + 1).max(2));
                Ok(Cut::WhereExplained)
            }
            Some(_) | None => Ok(Cut::No),
        }
    }

    fn errors(&mut self, share: f64, strengths: &[f64], work: &Work<'_>) -> Result<Curve, Halt> {
        if self.rule.needs_parts() {
            self.held_out_errors(share, strengths, work)
        } else {
            self.criterion(share, strengths, work)
        }
    }

    fn held_out_errors(
        &mut self,
        share: f64,
        strengths: &[f64],
        work: &Work<'_>,
    ) -> Result<Curve, Halt> {
        let purpose = format!("inner {}", self.purpose);
        let plan = assign(
            self.inner,
            self.split.training(),
            &self.material.structure,
            &purpose,
        )
        .map_err(|error| ProcedureError::Plan {
            level: Level::Inner,
            error,
        })?;
        let mut by_repeat = Vec::with_capacity(plan.n_repeats());
        let mut done = 0;
        for repeat in 0..plan.n_repeats() {
            let splits = plan.splits(repeat);
            let total = splits.len() * plan.n_repeats();
            let mut parts = Vec::with_capacity(splits.len());
            for split in &splits {
                let fit = fit_part(
                    self.material,
                    self.procedure,
                    split,
                    share,
                    strengths,
                    &mut self.tally,
                    &work.silent(),
                )?;
                let measure = self.procedure.measure;
                parts.push(part_errors(measure, self.material, &fit, split));
                done += 1;
                work.step(done, total)?;
            }
            by_repeat.push(parts);
        }
        Ok(choose::curve_of_parts(share, strengths, &by_repeat))
    }

    /// A criterion that is computed on the training rows alone.
    fn criterion(&mut self, share: f64, strengths: &[f64], work: &Work<'_>) -> Result<Curve, Halt> {
        let rows = self.split.training();
        let learnt = learn_part(
            self.material,
            self.procedure,
            self.split,
            &mut self.tally,
            work,
        )?;
        let p = learnt
            .samples
            .active
            .iter()
            .filter(|active| **active)
            .count() as f64;
        let fit = fit_learnt(
            self.material,
            self.procedure,
            learnt,
            self.split,
            (share, strengths),
            &mut self.tally,
            work,
        )?;
        let response = self.material.response;
        let n_covariates = self.material.covariates.ncols();
        let n = rows.len() as f64;
        let deviances = match response {
            Response::Measured(_) => {
                mean_losses(ErrorMeasure::SquaredError, self.material, &fit, rows)
            }
            Response::YesNo(_) | Response::Classes { .. } | Response::Count { .. } => {
                training_deviances(ErrorMeasure::Deviance, self.material, &fit, rows)
            }
            Response::Time { .. } => {
                training_deviances(ErrorMeasure::PartialLikelihood, self.material, &fit, rows)
            }
        };
        let counted = match response {
            Response::Time { event, .. } => rows.iter().filter(|&&row| event[row]).count() as f64,
            Response::Measured(_)
            | Response::YesNo(_)
            | Response::Classes { .. }
            | Response::Count { .. } => n,
        };
        let value = |at: usize| match self.rule {
            Rule::ExtendedBic { gamma } => {
                let k = penalised_freedom(&fit.path, at, response, n_covariates);
                let deviance = match response {
                    Response::Measured(_) if deviances[at] > 0.0 => n * deviances[at].ln(),
                    // A fit without residuals has used up every sample.
                    Response::Measured(_) => f64::INFINITY,
                    Response::YesNo(_)
                    | Response::Classes { .. }
                    | Response::Count { .. }
                    | Response::Time { .. } => deviances[at],
                };
                let coefficients = p * fit.path.n_linear() as f64;
                choose::extended_bic(deviance, counted, k, coefficients, gamma)
            }
            Rule::GeneralisedCrossValidation
            | Rule::LowestError
            | Rule::OneStandardError
            | Rule::Given { .. } => {
                let df = fit.path.info(at).effective_df;
                choose::generalised_cross_validation(deviances[at], n, df)
            }
        };
        Ok(Curve {
            share,
            strengths: strengths.to_vec(),
            errors: (0..strengths.len()).map(value).collect(),
            standard_errors: Vec::new(),
        })
    }
}

/// The deviance of the training rows at every strength.
fn training_deviances(
    measure: ErrorMeasure,
    material: &Material<'_>,
    fit: &PartFit<'_>,
    rows: &[usize],
) -> Vec<f64> {
    if measure == ErrorMeasure::PartialLikelihood {
        let predicted = fit.predict(material, rows);
        return predicted
            .column_iter()
            .map(|eta| {
                let eta: Vec<f64> = eta.iter().copied().collect();
                deviance_of_times(material.response, rows, &eta, material.weights)
                    .unwrap_or(f64::NAN)
            })
            .collect();
    }
    let total: f64 = rows.iter().map(|&row| material.weight(row)).sum();
    let means = mean_losses(measure, material, fit, rows);
    means.into_iter().map(|mean| mean * total).collect()
}
