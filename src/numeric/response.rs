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
            Self::YesNo(events) => Some(OutcomeValues::Events(events)),
        }
    }

    /// The number of linear predictors that a sample has: one, or one for each class.
    #[must_use]
    pub const fn n_linear(&self) -> usize {
        match self {
            Self::Classes { n_classes, .. } => *n_classes,
            Self::Measured(_) | Self::YesNo(_) | Self::Count { .. } | Self::Time { .. } => 1,
        }
    }

    /// The same response with the outcome of sample i taken from sample `from[i]`. Exposure and
    /// stratum stay with the sample: they are no outcome.
    #[must_use]
    pub fn rearranged(&self, from: &[usize]) -> Self {
        fn taken<T: Copy>(values: &[T], from: &[usize]) -> Vec<T> {
            from.iter().map(|&at| values[at]).collect()
        }
        match self {
            Self::Measured(values) => Self::Measured(taken(values, from)),
            Self::YesNo(yes) => Self::YesNo(taken(yes, from)),
            Self::Classes { class, n_classes } => Self::Classes {
                class: taken(class, from),
                n_classes: *n_classes,
            },
            Self::Count { count, offset } => Self::Count {
                count: taken(count, from),
                offset: offset.clone(),
            },
            Self::Time {
                time,
                event,
                strata,
                ties,
            } => Self::Time {
                time: taken(time, from),
                event: taken(event, from),
                strata: strata.clone(),
                ties: *ties,
            },
        }
    }

    /// The linear predictors of the model without predictors and covariates, fitted to some rows
    /// under the sample weights: mean, log odds, logarithms of the class shares, logarithm of the
    /// rate; 0 for times. Infinite where the rows hold a single class or nothing was counted.
    #[must_use]
    pub fn null_linear(&self, rows: &[usize], weights: Option<&[f64]>) -> Vec<f64> {
        let weight = |row: usize| weights.map_or(1.0, |weights| weights[row]);
        let sum = |of: &dyn Fn(usize) -> f64| -> f64 {
            rows.iter().map(|&row| weight(row) * of(row)).sum()
        };
        match self {
            Self::Measured(values) => vec![sum(&|row| values[row]) / sum(&|_| 1.0)],
            Self::YesNo(yes) => {
                let of = |wanted: bool| sum(&|row| f64::from(u8::from(yes[row] == wanted)));
                vec![(of(true) / of(false)).ln()]
            }
            Self::Classes { class, n_classes } => (0..*n_classes)
                .map(|k| (sum(&|row| f64::from(u8::from(class[row] == k))) / sum(&|_| 1.0)).ln())
                .collect(),
            Self::Count { count, offset } => {
                let exposure = |row: usize| {
                    offset
                        .as_ref()
                        .map_or(1.0, |offset: &Vec<f64>| offset[row].exp())
                };
                vec![(sum(&|row| count[row]) / sum(&exposure)).ln()]
            }
            Self::Time { .. } => vec![0.0],
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
/// penalty and not divided by anything, under the sample weights. `None` when the response is no
/// time, or holds no event.
#[must_use]
pub fn deviance_of_times(
    response: &Response,
    rows: &[usize],
    eta: &[f64],
    weights: Option<&[f64]>,
) -> Option<f64> {
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
    let weight = |row: usize| weights.map_or(1.0, |weights| weights[row]);
    let total: f64 = rows.iter().map(|&row| weight(row)).sum();
    let share = rows.iter().map(|&row| weight(row) / total).collect();
    let mut loss = Cox::new(&known, share, total, *ties);
    Some(2.0 * total * loss.evaluate(eta))
}
