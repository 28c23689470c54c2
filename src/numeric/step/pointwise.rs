//! Steps that change every value by one function: units, logarithms, powers, absorbance.

use crate::base::work::Work;
use crate::numeric::samples::{Samples, Side};
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
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        map_values(samples, work, Direction::Rising, |_, x| self.value(x))
    }
}

/// Another unit: factor·x + offset.
#[derive(Clone, Debug, PartialEq)]
pub struct UnitConversion {
    factor: f64,
    offset: f64,
}

impl UnitConversion {
    /// factor·x + offset.
    ///
    /// # Errors
    /// [`ParameterError`] when the factor is 0 or one of the two is not finite.
    pub fn new(factor: f64, offset: f64) -> Result<Self, ParameterError> {
        let factor = ParameterError::check_not_zero("factor", factor)?;
        let offset = ParameterError::check("offset", offset, f64::MIN, f64::MAX)?;
        Ok(Self { factor, offset })
    }
}

impl Preparation for UnitConversion {
    knows_enough!(Class::FixedReference);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let direction = if self.factor > 0.0 {
            Direction::Rising
        } else {
            Direction::Falling
        };
        map_values(samples, work, direction, |_, x| {
            Some(self.factor * x + self.offset)
        })
    }
}

/// Inverse hyperbolic sine, asinh(x/scale): like a logarithm for large values of either sign,
/// like x/scale for small ones.
#[derive(Clone, Debug, PartialEq)]
pub struct InverseHyperbolicSine {
    scale: f64,
}

impl InverseHyperbolicSine {
    /// asinh(x/scale).
    ///
    /// # Errors
    /// [`ParameterError`] when the scale is not a positive number.
    pub fn new(scale: f64) -> Result<Self, ParameterError> {
        let scale = ParameterError::check("scale", scale, f64::MIN_POSITIVE, f64::MAX)?;
        Ok(Self { scale })
    }
}

impl Preparation for InverseHyperbolicSine {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        map_values(samples, work, Direction::Rising, |_, x| {
            Some((x / self.scale).asinh())
        })
    }
}

/// A power of values that are 0 or more (above 0 for a negative power).
#[derive(Clone, Debug, PartialEq)]
pub struct Power {
    exponent: f64,
}

impl Power {
    /// x to the power of `exponent`, −5 to 5 and not 0.
    ///
    /// # Errors
    /// [`ParameterError`] when the exponent is out of its range.
    pub fn new(exponent: f64) -> Result<Self, ParameterError> {
        let exponent = ParameterError::check_not_zero("exponent", exponent)?;
        let exponent = ParameterError::check("exponent", exponent, -5.0, 5.0)?;
        Ok(Self { exponent })
    }
}

impl Preparation for Power {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let direction = if self.exponent > 0.0 {
            Direction::Rising
        } else {
            Direction::Falling
        };
        map_values(samples, work, direction, |_, x| {
            let is_inside = x > 0.0 || (x == 0.0 && self.exponent > 0.0);
            is_inside.then(|| x.powf(self.exponent))
        })
    }
}

/// Reflectance or transmittance to absorbance: −log₁₀(x/reference), with a reference row (such
/// as a white standard) or 1 for values that are shares already.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Absorbance {
    reference: Option<Vec<f64>>,
}

impl Absorbance {
    /// −log₁₀(x), for values that are shares of the reference already.
    #[must_use]
    pub fn of_shares() -> Self {
        Self { reference: None }
    }

    /// −log₁₀(x/reference), with one reference value for each column.
    ///
    /// # Errors
    /// [`ParameterError`] when a reference value is not a positive number.
    pub fn against(reference: Vec<f64>) -> Result<Self, ParameterError> {
        for &value in &reference {
            let _ = ParameterError::check("reference", value, f64::MIN_POSITIVE, f64::MAX)?;
        }
        Ok(Self {
            reference: Some(reference),
        })
    }
}

impl Preparation for Absorbance {
    type Found = ();

    fn class(&self) -> Class {
        match self.reference {
            None => Class::RowByRow,
            Some(_) => Class::FixedReference,
        }
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
        match &self.reference {
            Some(reference) if reference.len() != samples.n_columns() => {
                return Err(StepError::WrongColumns {
                    expected: reference.len(),
                    found: samples.n_columns(),
                }
                .into());
            }
            Some(_) | None => {}
        }
        map_values(samples, work, Direction::Falling, |column, x| {
            let reference = self.reference.as_ref().map_or(1.0, |r| r[column]);
            (x > 0.0).then(|| -(x / reference).log10())
        })
    }
}

/// Whether a function keeps or turns the order of values.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Direction {
    /// A larger value stays larger.
    Rising,
    /// A larger value becomes smaller.
    Falling,
}

/// Changes every known value by a monotone function of column and value, and every limit with
/// it. A limit outside the domain of the function is forgotten; a value outside is an error.
pub(super) fn map_values<'s>(
    samples: Cow<'s, Samples>,
    work: &Work<'_>,
    direction: Direction,
    value: impl Fn(usize, f64) -> Option<f64>,
) -> Result<Cow<'s, Samples>, StepStop> {
    let mut limits = samples.limits.clone();
    limits.retain_mut(|limit| match value(limit.column, limit.limit) {
        Some(mapped) if samples.active[limit.column] => {
            limit.limit = mapped;
            if direction == Direction::Falling {
                limit.side = match limit.side {
                    Side::Below => Side::Above,
                    Side::Above => Side::Below,
                };
            }
            true
        }
        Some(_) | None => !samples.active[limit.column],
    });
    let mut samples = change_columns(samples, work, |column, values| {
        for (row, x) in values.iter_mut().enumerate() {
            if !x.is_nan() {
                *x = value(column, *x).ok_or(StepError::OutOfDomain {
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
