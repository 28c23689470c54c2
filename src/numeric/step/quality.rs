//! Quality-control samples: drift along the order of measurement, and unsteady predictors.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{change_columns, known};
use crate::numeric::step::filter::{judge_columns, keep_only};
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// The fewest quality-control samples from which a trend or a spread is learnt.
const FEWEST: usize = 3;

/// Takes out the drift that the quality-control samples show along the order of measurement,
/// predictor by predictor. Learnt from quality-control samples only; their outcome, if they
/// have one, is not used. Before the first and after the last of them the trend is level.
#[derive(Clone, Debug, PartialEq)]
pub struct QualityControlDrift {
    trend: DriftTrend,
    removal: DriftRemoval,
}

/// The shape of a drift.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum DriftTrend {
    /// A straight line.
    Line,
    /// Local straight lines with tricube weights over this share of the quality-control samples
    /// (Cleveland 1979, without robustness passes), joined by straight lines.
    Smooth {
        /// Above 0, at most 1.
        span: f64,
    },
}

/// How a drift f is taken out, with f̄ its mean over the quality-control samples.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum DriftRemoval {
    /// x·f̄/f, for drifts of sensitivity; f must be positive.
    Ratio,
    /// x − f + f̄, for drifts of level.
    Difference,
}

impl QualityControlDrift {
    /// A drift of this shape, taken out in this way.
    ///
    /// # Errors
    /// [`ParameterError`] when a span is out of its range.
    pub fn new(trend: DriftTrend, removal: DriftRemoval) -> Result<Self, ParameterError> {
        match trend {
            DriftTrend::Line => {}
            DriftTrend::Smooth { span } => {
                let _ = ParameterError::check("span", span, f64::MIN_POSITIVE, 1.0)?;
            }
        }
        Ok(Self { trend, removal })
    }
}

/// Trends of all columns over the same order values.
#[derive(Clone, Debug)]
pub(crate) struct Drift {
    /// Order values at which the trends are known, rising.
    knots: Vec<f64>,
    /// For each column the trend at the knots (empty for a column that is off), and its mean.
    trends: Vec<(Vec<f64>, f64)>,
}

impl Drift {
    fn at(&self, column: usize, order: f64) -> f64 {
        let (knots, trend) = (&self.knots, &self.trends[column].0);
        let above = knots.partition_point(|&k| k <= order);
        if above == 0 {
            return trend[0];
        }
        if above == knots.len() {
            return trend[above - 1];
        }
        let share = (order - knots[above - 1]) / (knots[above] - knots[above - 1]);
        (1.0 - share) * trend[above - 1] + share * trend[above]
    }
}

impl Preparation for QualityControlDrift {
    must_learn!(Drift, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Drift, StepStop> {
        let order = part.quality_control_order().ok_or(StepError::NoOrder)?;
        if let Some(at) = order.iter().position(|t| !t.is_finite()) {
            let row = part.quality_control()[at];
            return Err(StepError::OrderMissing { row }.into());
        }
        let mut knots = order.clone();
        knots.sort_by(f64::total_cmp);
        knots.dedup();
        if order.len() < FEWEST || knots.len() < 2 {
            return Err(StepError::TooFewQualityControls {
                needed: FEWEST,
                found: order.len().min(knots.len()),
            }
            .into());
        }
        let mut trends = vec![(Vec::new(), 0.0); part.n_columns()];
        for column in part.active_columns() {
            work.check()?;
            let points: Vec<(f64, f64)> = order
                .iter()
                .copied()
                .zip(part.quality_control_column(column))
                .filter(|(_, x)| !x.is_nan())
                .collect();
            if points.len() < FEWEST {
                return Err(StepError::TooFewQualityControls {
                    needed: FEWEST,
                    found: points.len(),
                }
                .into());
            }
            let trend: Vec<f64> = knots
                .iter()
                .map(|&t| match self.trend {
                    DriftTrend::Line => weighted_line(&points, t, |_| 1.0),
                    DriftTrend::Smooth { span } => smooth_at(&points, t, span),
                })
                .collect();
            trends[column] = (trend, 0.0);
        }
        let mut drift = Drift { knots, trends };
        for column in part.active_columns() {
            let mean = order.iter().map(|&t| drift.at(column, t)).sum::<f64>();
            drift.trends[column].1 = mean / order.len() as f64;
        }
        Ok(drift)
    }

    fn apply<'s>(
        &self,
        drift: &Drift,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let order = samples.companions.order.clone().ok_or(StepError::NoOrder)?;
        if let Some(row) = order.iter().position(|t| !t.is_finite()) {
            return Err(StepError::OrderMissing { row }.into());
        }
        change_columns(samples, work, |column, values| {
            if drift.trends[column].0.is_empty() {
                return Err(StepError::NothingKnown { column });
            }
            let mean = drift.trends[column].1;
            for (row, x) in values.iter_mut().enumerate() {
                let trend = drift.at(column, order[row]);
                *x = match self.removal {
                    DriftRemoval::Difference => *x - trend + mean,
                    DriftRemoval::Ratio if trend > 0.0 && mean > 0.0 => *x * (mean / trend),
                    DriftRemoval::Ratio => {
                        return Err(StepError::OutOfDomain {
                            row,
                            column,
                            value: trend,
                        });
                    }
                };
            }
            Ok(())
        })
    }
}

/// The value at `t` of the line that fits some points with weights; their weighted mean where
/// no line is determined.
fn weighted_line(points: &[(f64, f64)], t: f64, weight: impl Fn(f64) -> f64) -> f64 {
    let (mut w_sum, mut t_sum, mut x_sum) = (0.0, 0.0, 0.0);
    for &(at, x) in points {
        let w = weight(at);
        w_sum += w;
        t_sum += w * at;
        x_sum += w * x;
    }
    let (t_mean, x_mean) = (t_sum / w_sum, x_sum / w_sum);
    let (mut tt, mut tx) = (0.0, 0.0);
    for &(at, x) in points {
        let w = weight(at);
        tt += w * (at - t_mean) * (at - t_mean);
        tx += w * (at - t_mean) * (x - x_mean);
    }
    let range = points
        .iter()
        .map(|(at, _)| (at - t).abs())
        .fold(0.0, f64::max);
    if tt > 1e-12 * range * range * w_sum {
        x_mean + tx / tt * (t - t_mean)
    } else {
        x_mean
    }
}

fn smooth_at(points: &[(f64, f64)], t: f64, span: f64) -> f64 {
    // At least three points take part, and rounding must not drop one.
    let count = (span * points.len() as f64 + 1e-9) as usize;
    let count = count.clamp(FEWEST.min(points.len()), points.len());
    let mut distances: Vec<f64> = points.iter().map(|(at, _)| (at - t).abs()).collect();
    distances.sort_by(f64::total_cmp);
    let reach = distances[count - 1];
    let tricube = |at: f64| {
        let u = (at - t).abs() / reach;
        if u < 1.0 {
            (1.0 - u * u * u).powi(3)
        } else {
            0.0
        }
    };
    let mass: f64 = points.iter().map(|(at, _)| tricube(*at)).sum();
    if reach > 0.0 && mass > 0.0 {
        weighted_line(points, t, tricube)
    } else {
        weighted_line(points, t, |at| if at == t { 1.0 } else { 1e-9 })
    }
}

/// Keeps predictors whose relative standard deviation in the quality-control samples (divisor
/// n − 1, over the size of the mean) is at most a given one.
#[derive(Clone, Debug, PartialEq)]
pub struct QualityControlSpread {
    most: f64,
}

impl QualityControlSpread {
    /// Keeps predictors with at most this relative standard deviation, such as 0.3.
    ///
    /// # Errors
    /// [`ParameterError`] when it is negative or not finite.
    pub fn new(most: f64) -> Result<Self, ParameterError> {
        let most = ParameterError::check("most", most, 0.0, f64::MAX)?;
        Ok(Self { most })
    }
}

impl Preparation for QualityControlSpread {
    must_learn!(Vec<bool>, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<bool>, StepStop> {
        let found = part.quality_control().len();
        if found < FEWEST {
            return Err(StepError::TooFewQualityControls {
                needed: FEWEST,
                found,
            }
            .into());
        }
        judge_columns(part, work, |column| {
            let values: Vec<f64> = known(part.quality_control_column(column)).collect();
            let n = values.len() as f64;
            let mean = values.iter().sum::<f64>() / n;
            let squares: f64 = values.iter().map(|x| (x - mean) * (x - mean)).sum();
            let sd = (squares / (n - 1.0)).sqrt();
            values.len() >= FEWEST && sd <= self.most * mean.abs()
        })
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
