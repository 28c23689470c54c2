//! Steps that bring each row onto its own scale.

use crate::base::work::Work;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{change_rows, known};
use crate::numeric::step::{Class, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Standard normal variate (Barnes, Dhanoa and Lister 1989): each row minus its mean, divided by
/// its standard deviation with divisor (number of active predictors − 1).
///
/// Missing values stay missing and count in neither.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct StandardNormalVariate;

impl Preparation for StandardNormalVariate {
    type Found = ();

    fn class(&self) -> Class {
        Class::RowByRow
    }

    fn given(&self) -> Option<()> {
        Some(())
    }

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let columns = samples.active_columns();
        change_rows(samples, &columns, work, |row, values| {
            let count = known(values.iter().copied()).count() as f64;
            let mean = known(values.iter().copied()).sum::<f64>() / count;
            let squares: f64 = known(values.iter().copied())
                .map(|x| (x - mean) * (x - mean))
                .sum();
            let sd = (squares / (count - 1.0)).sqrt();
            // A spread below the rounding error of the mean is no spread.
            let has_spread = sd > 1e-14 * mean.abs();
            if !has_spread {
                return Err(StepError::NoSpread { row });
            }
            for x in values {
                *x = (*x - mean) / sd;
            }
            Ok(())
        })
    }
}
