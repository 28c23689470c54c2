//! The filter that looks at the outcome.

use crate::base::work::Work;
use crate::numeric::parts::{PartOutcome, TrainingPart};
use crate::numeric::samples::Samples;
use crate::numeric::step::filter::keep_only;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;
use std::collections::BTreeMap;

/// Keeps the predictors that go together with the outcome most closely, one by one, in the
/// training part. The closeness is
///
/// * for numbers (also 0 and 1): the squared correlation;
/// * for classes: the share of the squared deviations that lies between classes;
/// * for times: the score statistic of the one-predictor Cox model at 0 (Breslow ties).
///
/// Samples whose value is missing do not count for that predictor. Learnt outside the training
/// parts this step gives an error near 0 to pure noise (Ambroise and McLachlan 2002).
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct OutcomeFilter {
    keep: usize,
}

impl OutcomeFilter {
    /// Keeps this many predictors, 1 or more; of equally close ones the first.
    ///
    /// # Errors
    /// [`ParameterError`] when none is kept.
    pub fn new(keep: usize) -> Result<Self, ParameterError> {
        let keep = ParameterError::check_count("keep", keep, 1, usize::MAX)?;
        Ok(Self { keep })
    }
}

impl Preparation for OutcomeFilter {
    must_learn!(Vec<bool>, Class::LearnedWithOutcome);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<bool>, StepStop> {
        let outcome = part.outcome().ok_or(StepError::NoOutcome)?;
        let mut closeness: Vec<(f64, usize)> = Vec::new();
        for column in part.active_columns() {
            if column % 256 == 0 {
                work.check()?;
            }
            let values = part.column(column);
            let score = match &outcome {
                PartOutcome::Numbers(y) => squared_correlation(values, y),
                PartOutcome::Classes(class) => share_between(values, class),
                PartOutcome::Times(time, event) => cox_score(values, time, event),
            };
            closeness.push((score, column));
        }
        // The stable sort keeps the first of equally close ones first.
        closeness.sort_by(|a, b| b.0.total_cmp(&a.0));
        let mut is_kept = vec![false; part.n_columns()];
        for &(_, column) in closeness.iter().take(self.keep) {
            is_kept[column] = true;
        }
        Ok(is_kept)
    }

    fn apply<'s>(
        &self,
        is_kept: &Vec<bool>,
        samples: Cow<'s, Samples>,
        _: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        keep_only(samples, is_kept)
    }
}

/// 0 where either does not vary.
fn squared_correlation(x: impl Iterator<Item = f64>, y: &[f64]) -> f64 {
    let pairs: Vec<(f64, f64)> = x
        .zip(y.iter().copied())
        .filter(|(x, y)| !x.is_nan() && !y.is_nan())
        .collect();
    let n = pairs.len() as f64;
    let mean_x = pairs.iter().map(|(x, _)| x).sum::<f64>() / n;
    let mean_y = pairs.iter().map(|(_, y)| y).sum::<f64>() / n;
    let (mut xx, mut yy, mut xy) = (0.0, 0.0, 0.0);
    for (x, y) in pairs {
        xx += (x - mean_x) * (x - mean_x);
        yy += (y - mean_y) * (y - mean_y);
        xy += (x - mean_x) * (y - mean_y);
    }
    ratio(xy * xy, xx * yy)
}

fn share_between(x: impl Iterator<Item = f64>, class: &[usize]) -> f64 {
    let mut sums: BTreeMap<usize, (f64, f64)> = BTreeMap::new();
    let known: Vec<(f64, usize)> = x
        .zip(class.iter().copied())
        .filter(|(x, _)| !x.is_nan())
        .collect();
    let n = known.len() as f64;
    let mean = known.iter().map(|(x, _)| x).sum::<f64>() / n;
    let mut total = 0.0;
    for &(x, class) in &known {
        let own = sums.entry(class).or_insert((0.0, 0.0));
        own.0 += x - mean;
        own.1 += 1.0;
        total += (x - mean) * (x - mean);
    }
    let between: f64 = sums.values().map(|(sum, count)| sum * sum / count).sum();
    ratio(between, total)
}

/// U²/V with U = Σ over events of (x − mean of those at risk) and V the sum of the variances of
/// those at risk.
fn cox_score(x: impl Iterator<Item = f64>, time: &[f64], event: &[bool]) -> f64 {
    let mut rows: Vec<(f64, f64, bool)> = x
        .zip(time)
        .zip(event)
        .map(|((x, &time), &event)| (time, x, event))
        .filter(|(_, x, _)| !x.is_nan())
        .collect();
    let n = rows.len() as f64;
    let mean = rows.iter().map(|(_, x, _)| x).sum::<f64>() / n;
    // Latest first, so that those at risk are all that have been passed.
    rows.sort_by(|a, b| b.0.total_cmp(&a.0));
    let (mut count, mut sum, mut squares) = (0.0, 0.0, 0.0);
    let (mut u, mut v) = (0.0, 0.0);
    for tied in rows.chunk_by(|a, b| a.0 == b.0) {
        for (_, x, _) in tied {
            count += 1.0;
            sum += x - mean;
            squares += (x - mean) * (x - mean);
        }
        for (_, x, _) in tied.iter().filter(|(_, _, event)| *event) {
            u += (x - mean) - sum / count;
            v += squares / count - (sum / count) * (sum / count);
        }
    }
    ratio(u * u, v)
}

fn ratio(top: f64, below: f64) -> f64 {
    let value = top / below;
    if below > 0.0 && value.is_finite() {
        value
    } else {
        0.0
    }
}
