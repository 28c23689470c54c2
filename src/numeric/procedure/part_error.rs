//! The error of a held-out part, by which strengths are compared.

use crate::numeric::choose::PartErrors;
use crate::numeric::measure::area_under_curve_counts;
use crate::numeric::measure::{concordance, predicted_class};
use crate::numeric::parts::Split;
use crate::numeric::procedure::{Material, PartFit};
use crate::numeric::response::{Response, deviance_of_times};

/// What is made small when strengths are compared on held-out parts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ErrorMeasure {
    /// The mean squared error: of a measured outcome, of a count, or of the probability of yes.
    SquaredError,
    /// The mean deviance: twice the loss above the smallest there can be.
    Deviance,
    /// The share of samples that are called wrong: yes from a probability of one half on, or the
    /// most probable class.
    Misclassification,
    /// The deviance of the partial likelihood that the held-out samples add to that of the training
    /// samples, for each held-out event (Verweij & van Houwelingen 1993).
    PartialLikelihood,
    /// The share of pairs of a held-out part that are ordered wrongly: one less Harrell's
    /// concordance, or one less the area under the curve.
    Concordance,
}

impl ErrorMeasure {
    /// Whether it is defined for this sort of outcome.
    #[must_use]
    pub const fn applies_to(self, response: &Response) -> bool {
        match response {
            Response::Measured(_) => matches!(self, Self::SquaredError),
            Response::YesNo(_) => matches!(
                self,
                Self::SquaredError | Self::Deviance | Self::Misclassification | Self::Concordance
            ),
            Response::Classes { .. } => matches!(self, Self::Deviance | Self::Misclassification),
            Response::Count { .. } => matches!(self, Self::SquaredError | Self::Deviance),
            Response::Time { .. } => matches!(self, Self::PartialLikelihood | Self::Concordance),
        }
    }

    /// The usual measure for this sort of outcome: the one that belongs to its loss.
    #[must_use]
    pub const fn usual(response: &Response) -> Self {
        match response {
            Response::Measured(_) => Self::SquaredError,
            Response::YesNo(_) | Response::Classes { .. } | Response::Count { .. } => {
                Self::Deviance
            }
            Response::Time { .. } => Self::PartialLikelihood,
        }
    }

    /// Whether a held-out part of a single sample says nothing, because pairs are compared.
    #[must_use]
    pub const fn needs_pairs(self) -> bool {
        match self {
            Self::Concordance => true,
            Self::SquaredError
            | Self::Deviance
            | Self::Misclassification
            | Self::PartialLikelihood => false,
        }
    }
}

/// The errors of the held-out rows of a split at every strength of a fit to its training rows.
#[must_use]
pub fn part_errors(
    measure: ErrorMeasure,
    material: &Material<'_>,
    fit: &PartFit<'_>,
    split: &Split,
) -> PartErrors {
    match measure {
        ErrorMeasure::SquaredError | ErrorMeasure::Deviance | ErrorMeasure::Misclassification => {
            PartErrors {
                sums: mean_losses(measure, material, fit, split.held_out()),
                weight: 1.0,
            }
        }
        ErrorMeasure::PartialLikelihood => partial_likelihood(material, fit, split),
        ErrorMeasure::Concordance => disordered(material, fit, split.held_out()),
    }
}

/// The mean loss of some rows at every strength, under the sample weights.
pub(super) fn mean_losses(
    measure: ErrorMeasure,
    material: &Material<'_>,
    fit: &PartFit<'_>,
    rows: &[usize],
) -> Vec<f64> {
    let total: f64 = rows.iter().map(|&row| material.weight(row)).sum();
    let predicted = fit.predict(material, rows);
    let k = fit.path.n_linear();
    let mut eta = vec![0.0; k];
    (0..fit.path.n_points())
        .map(|at| {
            let mut sum = 0.0;
            for (i, &row) in rows.iter().enumerate() {
                for (class, eta) in eta.iter_mut().enumerate() {
                    *eta = predicted[(i, at * k + class)];
                }
                sum += material.weight(row) * loss(measure, material.response, row, &eta);
            }
            sum / total
        })
        .collect()
}

/// The loss of one sample.
fn loss(measure: ErrorMeasure, response: &Response, row: usize, eta: &[f64]) -> f64 {
    match (measure, response) {
        (
            ErrorMeasure::SquaredError,
            Response::Measured(values) | Response::Count { count: values, .. },
        ) => (response.means(row, eta)[0] - values[row]).powi(2),
        (ErrorMeasure::SquaredError, Response::YesNo(yes)) => {
            (response.means(row, eta)[0] - f64::from(u8::from(yes[row]))).powi(2)
        }
        (ErrorMeasure::Misclassification, Response::YesNo(yes)) => {
            f64::from(u8::from((eta[0] >= 0.0) != yes[row]))
        }
        (ErrorMeasure::Misclassification, Response::Classes { class, .. }) => {
            f64::from(u8::from(predicted_class(eta) != class[row]))
        }
        (
            ErrorMeasure::SquaredError
            | ErrorMeasure::Deviance
            | ErrorMeasure::Misclassification
            | ErrorMeasure::PartialLikelihood
            | ErrorMeasure::Concordance,
            _,
        ) => response.deviance(row, eta).unwrap_or(f64::NAN),
    }
}

/// −2 ( log partial likelihood of training and held-out rows together − of the training rows ), at
/// the coefficients of the training rows; weighed by held-out events.
fn partial_likelihood(material: &Material<'_>, fit: &PartFit<'_>, split: &Split) -> PartErrors {
    let mut all: Vec<usize> = split
        .training()
        .iter()
        .chain(split.held_out())
        .copied()
        .collect();
    all.sort_unstable();
    let predicted = fit.predict(material, &all);
    let is_training: Vec<bool> = all
        .iter()
        .map(|row| split.training().binary_search(row).is_ok())
        .collect();
    let deviance = |rows: &[usize], eta: &[f64]| {
        deviance_of_times(material.response, rows, eta, material.weights).unwrap_or(f64::NAN)
    };
    let sums = (0..fit.path.n_points())
        .map(|at| {
            let eta: Vec<f64> = predicted.column(at).iter().copied().collect();
            let inside: Vec<f64> = eta
                .iter()
                .zip(&is_training)
                .filter(|(_, inside)| **inside)
                .map(|(eta, _)| *eta)
                .collect();
            deviance(&all, &eta) - deviance(split.training(), &inside)
        })
        .collect();
    let weight = match material.response {
        Response::Time { event, .. } => split
            .held_out()
            .iter()
            .filter(|&&row| event[row])
            .map(|&row| material.weight(row))
            .sum(),
        Response::Measured(_)
        | Response::YesNo(_)
        | Response::Classes { .. }
        | Response::Count { .. } => 0.0,
    };
    PartErrors { sums, weight }
}

/// How many pairs are ordered wrongly, weighed by pairs.
fn disordered(material: &Material<'_>, fit: &PartFit<'_>, rows: &[usize]) -> PartErrors {
    let predicted = fit.predict(material, rows);
    let mut weight = 0.0;
    let mut sums = Vec::with_capacity(fit.path.n_points());
    for at in 0..fit.path.n_points() {
        let eta: Vec<f64> = predicted.column(at).iter().copied().collect();
        let (right, pairs) = match material.response {
            Response::Time {
                time,
                event,
                strata,
                ..
            } => ordered_times(time, event, strata.as_deref(), rows, &eta),
            Response::YesNo(yes) => {
                let known: Vec<bool> = rows.iter().map(|&row| yes[row]).collect();
                area_under_curve_counts(&known, &eta)
            }
            Response::Measured(_) | Response::Classes { .. } | Response::Count { .. } => (0.0, 0.0),
        };
        weight = pairs;
        sums.push(pairs - right);
    }
    PartErrors { sums, weight }
}

/// Pairs in the right order, ties one half, and usable pairs; within strata only.
fn ordered_times(
    time: &[f64],
    event: &[bool],
    strata: Option<&[usize]>,
    rows: &[usize],
    eta: &[f64],
) -> (f64, f64) {
    let mut names: Vec<usize> = strata.map_or_else(
        || vec![0],
        |strata| rows.iter().map(|&row| strata[row]).collect(),
    );
    names.sort_unstable();
    names.dedup();
    let (mut right, mut pairs) = (0.0, 0.0);
    for name in names {
        let own: Vec<usize> = (0..rows.len())
            .filter(|&i| strata.is_none_or(|strata| strata[rows[i]] == name))
            .collect();
        let times: Vec<f64> = own.iter().map(|&i| time[rows[i]]).collect();
        let events: Vec<bool> = own.iter().map(|&i| event[rows[i]]).collect();
        let risks: Vec<f64> = own.iter().map(|&i| eta[i]).collect();
        let counts = concordance(&times, &events, &risks);
        right += counts.concordant as f64 + 0.5 * counts.tied as f64;
        pairs += counts.usable as f64;
    }
    (right, pairs)
}
