//! Genomic markers: allele counts 0, 1 and 2.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::known;
use crate::numeric::step::filter::keep_only;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// Keeps markers whose rarer allele has at least a given frequency among the known allele counts
/// of the training part. A count must lie from 0 to 2.
#[derive(Clone, Debug, PartialEq)]
pub struct MinorAllele {
    least: f64,
}

impl MinorAllele {
    /// Keeps markers with at least this frequency, 0 to 0.5.
    ///
    /// # Errors
    /// [`ParameterError`] when the frequency is out of its range.
    pub fn new(least: f64) -> Result<Self, ParameterError> {
        let least = ParameterError::check("least", least, 0.0, 0.5)?;
        Ok(Self { least })
    }
}

impl Preparation for MinorAllele {
    must_learn!(Vec<bool>, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<bool>, StepStop> {
        let mut is_kept = part.active().to_vec();
        for column in part.active_columns() {
            if column % 1024 == 0 {
                work.check()?;
            }
            if let Some(at) = part
                .column(column)
                .position(|x| !(0.0..=2.0).contains(&x) && !x.is_nan())
            {
                return Err(StepError::OutOfDomain {
                    row: part.rows()[at],
                    column,
                    value: part.value(at, column),
                }
                .into());
            }
            let count = known(part.column(column)).count() as f64;
            let frequency = known(part.column(column)).sum::<f64>() / (2.0 * count);
            let rarer = frequency.min(1.0 - frequency);
            is_kept[column] = count > 0.0 && rarer >= self.least - 1e-12;
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
