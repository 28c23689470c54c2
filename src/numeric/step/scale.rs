//! Centring and scaling, predictor by predictor.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{change_columns, known, mean_known, median_known};
use crate::numeric::step::{Class, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Subtracts from each predictor its mean in the training part.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Centering;

/// Subtracts from each predictor its mean in the training part and divides by its scale there.
/// A predictor whose scale is 0 in the training part becomes 0.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Scaling {
    rule: ScalingRule,
}

/// The scale of a predictor.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ScalingRule {
    /// The standard deviation, divisor n.
    UnitVariance,
    /// The square root of the standard deviation (divisor n).
    Pareto,
    /// The largest value minus the smallest.
    Range,
    /// The mean; a mean of 0 counts as no scale.
    Level,
    /// 1.4826… times the median distance from the median, which is subtracted instead of the
    /// mean. The factor makes it the standard deviation of normal values.
    Robust,
}

impl Scaling {
    /// Scales by this rule.
    #[must_use]
    pub fn new(rule: ScalingRule) -> Self {
        Self { rule }
    }

    /// The rule.
    #[must_use]
    pub fn rule(&self) -> ScalingRule {
        self.rule
    }
}

/// What is subtracted from each column, and what it is then divided by (0: it becomes 0).
#[derive(Clone, Debug)]
pub(crate) struct Affine {
    shift: Vec<f64>,
    scale: Vec<f64>,
}

impl Affine {
    fn learn(
        part: &TrainingPart<'_>,
        work: &Work<'_>,
        of_column: impl Fn(usize) -> Option<(f64, f64)>,
    ) -> Result<Self, StepStop> {
        let p = part.n_columns();
        let (mut shift, mut scale) = (vec![0.0; p], vec![1.0; p]);
        for column in part.active_columns() {
            if column % 1024 == 0 {
                work.check()?;
            }
            (shift[column], scale[column]) =
                of_column(column).ok_or(StepError::NothingKnown { column })?;
        }
        Ok(Self { shift, scale })
    }

    fn apply<'s>(
        &self,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        change_columns(samples, work, |column, values| {
            let (shift, scale) = (self.shift[column], self.scale[column]);
            for x in values {
                *x = if scale != 0.0 {
                    (*x - shift) / scale
                } else if x.is_nan() {
                    *x
                } else {
                    0.0
                };
            }
            Ok(())
        })
    }
}

impl Preparation for Centering {
    must_learn!(Affine, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Affine, StepStop> {
        Affine::learn(part, work, |column| {
            Some((mean_known(part.column(column))?, 1.0))
        })
    }

    fn apply<'s>(
        &self,
        found: &Affine,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        found.apply(samples, work)
    }
}

impl Preparation for Scaling {
    must_learn!(Affine, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Affine, StepStop> {
        Affine::learn(part, work, |column| {
            let values = || part.column(column);
            let mean = mean_known(values())?;
            let sd = mean_known(values().map(|x| (x - mean) * (x - mean)))?.sqrt();
            // A spread below the rounding error of the mean is no spread.
            let sd = if sd > 1e-14 * mean.abs() { sd } else { 0.0 };
            Some(match self.rule {
                ScalingRule::UnitVariance => (mean, sd),
                ScalingRule::Pareto => (mean, sd.sqrt()),
                ScalingRule::Level => (mean, mean),
                ScalingRule::Range => {
                    let (least, most) = known(values())
                        .fold((f64::INFINITY, f64::NEG_INFINITY), |(least, most), x| {
                            (least.min(x), most.max(x))
                        });
                    (mean, most - least)
                }
                ScalingRule::Robust => {
                    // One over the upper quartile of the normal distribution.
                    const NORMAL_CONSISTENCY: f64 = 1.482_602_218_505_602;
                    let median = median_known(values())?;
                    let distance = median_known(values().map(|x| (x - median).abs()))?;
                    (median, NORMAL_CONSISTENCY * distance)
                }
            })
        })
    }

    fn apply<'s>(
        &self,
        found: &Affine,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        found.apply(samples, work)
    }
}
