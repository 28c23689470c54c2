//! Steps that change every value by the same rising function: logarithms.

use crate::base::work::Work;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::change_columns;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// log(x + c), with a constant that is given.
#[derive(Clone, Debug, PartialEq)]
pub struct Logarithm {
    base: LogarithmBase,
    offset: f64,
}

/// The base of a logarithm.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum LogarithmBase {
    /// The natural logarithm.
    Natural,
    /// The logarithm to base 2.
    Two,
    /// The logarithm to base 10.
    Ten,
}

impl Logarithm {
    /// The logarithm of x + `offset`.
    ///
    /// # Errors
    /// [`ParameterError`] when the offset is not finite.
    pub fn new(base: LogarithmBase, offset: f64) -> Result<Self, ParameterError> {
        let offset = ParameterError::check("offset", offset, f64::MIN, f64::MAX)?;
        Ok(Self { base, offset })
    }

    fn value(&self, x: f64) -> Option<f64> {
        let shifted = x + self.offset;
        let value = match self.base {
            LogarithmBase::Natural => shifted.ln(),
            LogarithmBase::Two => shifted.log2(),
            LogarithmBase::Ten => shifted.log10(),
        };
        (shifted > 0.0).then_some(value)
    }
}

impl Preparation for Logarithm {
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
        map_values(samples, work, |x| self.value(x))
    }
}

/// Changes every known value by a rising function, and every limit with it. A limit outside the
/// domain of the function is forgotten; a value outside is an error.
pub(super) fn map_values<'s>(
    samples: Cow<'s, Samples>,
    work: &Work<'_>,
    value: impl Fn(f64) -> Option<f64>,
) -> Result<Cow<'s, Samples>, StepStop> {
    let mut limits = samples.limits.clone();
    limits.retain_mut(|limit| match value(limit.limit) {
        Some(mapped) if samples.active[limit.column] => {
            limit.limit = mapped;
            true
        }
        Some(_) | None => !samples.active[limit.column],
    });
    let mut samples = change_columns(samples, work, |column, values| {
        for (row, x) in values.iter_mut().enumerate() {
            if !x.is_nan() {
                *x = value(*x).ok_or(StepError::OutOfDomain {
                    row,
                    column,
                    value: *x,
                })?;
            }
        }
        Ok(())
    })?;
    if samples.limits != limits {
        samples.to_mut().limits = limits;
    }
    Ok(samples)
}
