//! Extended scatter correction: a reference, a polynomial baseline and known interferents.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::change_rows;
use crate::numeric::step::local::{positions, scaled_positions};
use crate::numeric::step::scatter::{reference_at, training_mean};
use crate::numeric::step::span::Span;
use crate::numeric::step::{Class, ParameterError, Preparation, Reference, StepError, StepStop};
use std::borrow::Cow;

/// Extended multiplicative scatter correction (Martens and Stark 1991): each row is fitted by
/// x = b·reference + polynomial in the axis + Σ d·interferent + e and becomes
/// (x − polynomial − Σ d·interferent)/b.
#[derive(Clone, Debug, PartialEq)]
pub struct ExtendedScatterCorrection {
    reference: Reference,
    degree: usize,
    interferents: Vec<Vec<f64>>,
}

impl ExtendedScatterCorrection {
    /// A reference, a polynomial of `degree` 0 to 6, and interferents with one value for each
    /// column.
    ///
    /// # Errors
    /// [`ParameterError`] when the degree is out of its range.
    pub fn new(
        reference: Reference,
        degree: usize,
        interferents: Vec<Vec<f64>>,
    ) -> Result<Self, ParameterError> {
        let degree = ParameterError::check_count("degree", degree, 0, 6)?;
        Ok(Self {
            reference,
            degree,
            interferents,
        })
    }
}

impl Preparation for ExtendedScatterCorrection {
    type Found = Vec<f64>;

    fn class(&self) -> Class {
        self.reference.class()
    }

    fn given(&self) -> Option<Vec<f64>> {
        self.reference.given()
    }

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<f64>, StepStop> {
        training_mean(part, work)
    }

    fn apply<'s>(
        &self,
        reference: &Vec<f64>,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let columns = samples.active_columns();
        let mut terms = vec![reference_at(reference, &samples, &columns)?];
        let points = scaled_positions(&positions(&samples)?, &columns);
        for degree in 0..=self.degree {
            terms.push(points.iter().map(|t| t.powi(degree as i32)).collect());
        }
        for interferent in &self.interferents {
            terms.push(reference_at(interferent, &samples, &columns)?);
        }
        let whole = Span::new(&terms).ok_or(StepError::NotIndependent)?;
        change_rows(samples, &columns, work, |row, values| {
            let coefficients = if values.iter().any(|x| x.is_nan()) {
                coefficients_of_known(&terms, values)?
            } else {
                whole.coefficients(values)
            };
            let slope = coefficients[0];
            let rises = slope > 0.0;
            if !rises {
                return Err(StepError::FlatAgainstReference { row, slope });
            }
            for (at, x) in values.iter_mut().enumerate() {
                let beside: f64 = (1..terms.len())
                    .map(|k| coefficients[k] * terms[k][at])
                    .sum();
                *x = (*x - beside) / slope;
            }
            Ok(())
        })
    }
}

/// The coefficients that fit the known values of a row.
fn coefficients_of_known(terms: &[Vec<f64>], values: &[f64]) -> Result<Vec<f64>, StepError> {
    let known: Vec<usize> = (0..values.len())
        .filter(|&at| !values[at].is_nan())
        .collect();
    let chosen = |of: &[f64]| -> Vec<f64> { known.iter().map(|&at| of[at]).collect() };
    let terms: Vec<Vec<f64>> = terms.iter().map(|term| chosen(term)).collect();
    let span = Span::new(&terms).ok_or(StepError::NotIndependent)?;
    Ok(span.coefficients(&chosen(values)))
}
