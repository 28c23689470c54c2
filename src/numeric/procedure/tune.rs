//! Choosing share and strength on some rows, by inner parts of these rows alone.

use crate::base::work::Work;
use crate::numeric::choose::{self, Curve, Rule};
use crate::numeric::parts::{PartsParams, Split, assign};
use crate::numeric::procedure::part::{fit_learnt, learn_part};
use crate::numeric::procedure::{
    Halt, Level, Material, PartFit, Procedure, ProcedureError, StrengthRule, Tally, fit_part,
    usual_ratio,
};
use crate::numeric::range::RangeParams;

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
    /// Whether the range was made longer once because its weak end won.
    pub extended: Extended,
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
                extended: Extended::No,
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
    let mut extended = Extended::No;
    for (at, &share) in procedure.shares.iter().enumerate() {
        let bar =
            work.part(at as f32 / n_shares as f32 * 0.9..(at + 1) as f32 / n_shares as f32 * 0.9);
        let (curve, longer) = search.curve(share, count, ratio, &bar)?;
        curves.push(curve);
        extended = if longer == Extended::Once {
            longer
        } else {
            extended
        };
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
        extended,
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
    ) -> Result<(Curve, Extended), Halt> {
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
        let mut strengths = learnt.strengths(self.material, rows, share, params, work)?;
        if strengths.is_empty() {
            // Nothing varies with the outcome: at every strength the model is empty.
            strengths.push(1.0);
        }
        drop(learnt);
        let curve = self.errors(share, &strengths, &work.part(0.0..0.7))?;
        let at_weak_end = choose::lowest(&curve.errors) == Some(strengths.len() - 1);
        if !at_weak_end || strengths.len() < 2 {
            return Ok((curve, Extended::No));
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
        Ok((longer, Extended::Once))
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
                parts.push(mean_losses(self.material, &fit, split.held_out()));
                done += 1;
                work.step(done, total)?;
            }
            by_repeat.push(parts);
        }
        Ok(choose::curve(share, strengths, &by_repeat))
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
            learnt,
            self.split,
            share,
            strengths,
            &mut self.tally,
            work,
        )?;
        let n = rows.len() as f64;
        let unpenalised = 1.0 + self.material.covariates.ncols() as f64;
        let losses = mean_losses(self.material, &fit, rows);
        let value = |at: usize| {
            let df = fit.path.info(at).effective_df;
            match self.rule {
                Rule::ExtendedBic { gamma } => {
                    choose::extended_bic(losses[at], n, df - unpenalised, p, gamma)
                }
                Rule::GeneralisedCrossValidation | Rule::LowestError | Rule::OneStandardError => {
                    choose::generalised_cross_validation(losses[at], n, df)
                }
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

/// The mean loss of some rows at every strength, under the sample weights.
fn mean_losses(material: &Material<'_>, fit: &PartFit<'_>, rows: &[usize]) -> Vec<f64> {
    let predicted = fit.predict(material, rows);
    let weight = |row: usize| material.weights.map_or(1.0, |weights| weights[row]);
    let total: f64 = rows.iter().map(|&row| weight(row)).sum();
    let loss = |at: usize| {
        let column = predicted.column(at);
        let sum: f64 = rows
            .iter()
            .zip(column.iter())
            .map(|(&row, &eta)| weight(row) * material.response.squared_error(row, eta))
            .sum();
        sum / total
    };
    (0..predicted.ncols()).map(loss).collect()
}
