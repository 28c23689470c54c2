//! The outcome of all samples, and what a linear predictor says about it.

use crate::numeric::cox::Cox;
use crate::numeric::error::{FitError, Ingredient};
use crate::numeric::loss::{Loss, entropy, log_one_plus_exp, logistic};
use crate::numeric::samples::OutcomeValues;
use crate::numeric::task::numbers;

/// How times that are equal are counted in the partial likelihood.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Ties {
    /// Breslow (1974).
    Breslow,
    /// Efron (1977).
    Efron,
}

/// The outcome of all n samples.
#[derive(Clone, Debug, PartialEq)]
pub enum Response {
    /// A measured quantity.
    Measured(Vec<f64>),
    /// Yes or no.
    YesNo(Vec<bool>),
    /// One of several classes.
    Classes {
        /// The class of each sample, from 0.
        class: Vec<usize>,
        /// The number of classes.
        n_classes: usize,
    },
    /// A count.
    Count {
        /// The count of each sample; a whole number is not required.
        count: Vec<f64>,
        /// What is added to the linear predictor of each sample: the logarithm of its exposure.
        offset: Option<Vec<f64>>,
    },
    /// A time to an event.
    Time {
        /// When the event happened, or until when it had not.
        time: Vec<f64>,
        /// Whether the event was seen.
        event: Vec<bool>,
        /// Samples are compared within their stratum only.
        strata: Option<Vec<usize>>,
        /// How equal times are counted.
        ties: Ties,
    },
}

impl Response {
    /// The number of samples.
    #[must_use]
    pub fn n_samples(&self) -> usize {
        match self {
            Self::Measured(y) => y.len(),
            Self::YesNo(y) => y.len(),
            Self::Classes { class, .. } => class.len(),
            Self::Count { count, .. } => count.len(),
            Self::Time { time, .. } => time.len(),
        }
    }

    /// The outcome for steps that are learnt with it.
    #[must_use]
    pub fn values(&self) -> Option<OutcomeValues<'_>> {
        match self {
            Self::Measured(values) | Self::Count { count: values, .. } => {
                Some(OutcomeValues::Numbers(values))
            }
            Self::Classes { class, .. } => Some(OutcomeValues::Classes(class)),
            Self::Time { time, event, .. } => Some(OutcomeValues::Times { time, event }),
            // Such a step would need a copy as numbers; none is there yet.
            Self::YesNo(_) => None,
        }
    }

    /// The weighted mean of a measured outcome over some rows: the prediction of the model
    /// without predictors. NaN for another kind of outcome.
    #[must_use]
    pub fn baseline(&self, rows: &[usize], weights: Option<&[f64]>) -> f64 {
        let Self::Measured(values) = self else {
            return f64::NAN;
        };
        let weight = |row: usize| weights.map_or(1.0, |weights| weights[row]);
        let total: f64 = rows.iter().map(|&row| weight(row)).sum();
        rows.iter()
            .map(|&row| weight(row) * values[row])
            .sum::<f64>()
            / total
    }

    /// The squared error of a linear predictor for one sample of a measured outcome; NaN for
    /// another kind.
    #[must_use]
    pub fn squared_error(&self, row: usize, eta: f64) -> f64 {
        match self {
            Self::Measured(values) => (values[row] - eta).powi(2),
            Self::YesNo(_) | Self::Classes { .. } | Self::Count { .. } | Self::Time { .. } => {
                f64::NAN
            }
        }
    }

    /// Checks lengths, and the numbers of the rows in use.
    pub(crate) fn check(&self, n: usize, rows: &[usize]) -> Result<(), FitError> {
        let length = |what, found| {
            if found == n {
                Ok(())
            } else {
                Err(FitError::Shape {
                    what,
                    found,
                    expected: n,
                })
            }
        };
        length(Ingredient::Outcome, self.n_samples())?;
        let outcome = |values: &[f64], least: f64| {
            let values = rows.iter().map(|&row| (row, values[row]));
            numbers(Ingredient::Outcome, values, least)
        };
        match self {
            Self::Measured(y) => outcome(y, f64::NEG_INFINITY),
            Self::YesNo(_) => Ok(()),
            Self::Classes { class, n_classes } => {
                match rows.iter().find(|&&row| class[row] >= *n_classes) {
                    Some(&row) => Err(FitError::Number {
                        what: Ingredient::Outcome,
                        at: row,
                    }),
                    None => Ok(()),
                }
            }
            Self::Count { count, offset } => {
                outcome(count, 0.0)?;
                if let Some(offset) = offset {
                    length(Ingredient::Offset, offset.len())?;
                    let values = rows.iter().map(|&row| (row, offset[row]));
                    numbers(Ingredient::Offset, values, f64::NEG_INFINITY)?;
                }
                Ok(())
            }
            Self::Time {
                time,
                event,
                strata,
                ..
            } => {
                length(Ingredient::Outcome, event.len())?;
                if let Some(strata) = strata {
                    length(Ingredient::Strata, strata.len())?;
                }
                outcome(time, f64::NEG_INFINITY)
            }
        }
    }
}

impl Response {
    /// What linear predictors say of a sample (offset not included in them): the mean of a measured
    /// outcome; the probability of yes; the probability of each class; the mean count, with the
    /// sample's offset; for times the hazard relative to a linear predictor of zero.
    #[must_use]
    pub fn means(&self, sample: usize, eta: &[f64]) -> Vec<f64> {
        match self {
            Self::Measured(_) => eta.to_vec(),
            Self::YesNo(_) => vec![logistic(eta[0])],
            Self::Classes { .. } => {
                let top = eta.iter().fold(f64::NEG_INFINITY, |top, eta| top.max(*eta));
                let sizes: Vec<f64> = eta.iter().map(|eta| (eta - top).exp()).collect();
                let sum: f64 = sizes.iter().sum();
                sizes.iter().map(|size| size / sum).collect()
            }
            Self::Count { offset, .. } => {
                let offset = offset.as_ref().map_or(0.0, |offset| offset[sample]);
                vec![(eta[0] + offset).exp()]
            }
            Self::Time { .. } => vec![eta[0].exp()],
        }
    }

    /// The deviance of one sample at its linear predictors: twice its loss above the smallest there
    /// can be. For a measured outcome the squared error. `None` for times, whose loss is of all
    /// samples together: see [`deviance_of_times`].
    #[must_use]
    pub fn deviance(&self, sample: usize, eta: &[f64]) -> Option<f64> {
        match self {
            Self::Measured(y) => Some((y[sample] - eta[0]) * (y[sample] - eta[0])),
            Self::YesNo(yes) => {
                let eta = if yes[sample] { -eta[0] } else { eta[0] };
                Some(2.0 * log_one_plus_exp(eta))
            }
            Self::Classes { class, .. } => {
                let top = eta.iter().fold(f64::NEG_INFINITY, |top, eta| top.max(*eta));
                let sum: f64 = eta.iter().map(|eta| (eta - top).exp()).sum();
                Some(2.0 * (top + sum.ln() - eta[class[sample]]))
            }
            Self::Count { count, offset } => {
                let y = count[sample];
                let zeta = eta[0] + offset.as_ref().map_or(0.0, |offset| offset[sample]);
                Some(2.0 * (zeta.exp() - y * zeta - y + entropy(y)))
            }
            Self::Time { .. } => None,
        }
    }
}

/// Minus twice the log partial likelihood of some samples at their linear predictors, without a
/// penalty and not divided by anything. `None` when the response is no time, or holds no event.
#[must_use]
pub fn deviance_of_times(response: &Response, rows: &[usize], eta: &[f64]) -> Option<f64> {
    let Response::Time {
        time,
        event,
        strata,
        ties,
    } = response
    else {
        return None;
    };
    let known: Vec<(f64, bool, usize)> = rows
        .iter()
        .map(|&row| (time[row], event[row], strata.as_ref().map_or(0, |s| s[row])))
        .collect();
    if known.iter().all(|(_, event, _)| !event) {
        return None;
    }
    let m = rows.len() as f64;
    let mut loss = Cox::new(&known, vec![1.0 / m; rows.len()], m, *ties);
    Some(2.0 * m * loss.evaluate(eta))
}
