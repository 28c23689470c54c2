//! The measures of performance: what each is called, what it means, and which a kind of outcome has.

use crate::base::number::Precision;
use crate::numeric::response::Response;
use std::collections::BTreeMap;

/// The sorts of outcome, as far as measures depend on them.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sort {
    /// A measured quantity.
    Measured,
    /// Yes or no.
    YesNo,
    /// One of several classes.
    Classes,
    /// A count.
    Count,
    /// The time to an event.
    Time,
}

impl Sort {
    /// The sort of an outcome.
    #[must_use]
    pub const fn of(response: &Response) -> Self {
        match response {
            Response::Measured(_) => Self::Measured,
            Response::YesNo(_) => Self::YesNo,
            Response::Classes { .. } => Self::Classes,
            Response::Count { .. } => Self::Count,
            Response::Time { .. } => Self::Time,
        }
    }

    /// What it is called.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Measured => "measured quantity",
            Self::YesNo => "yes or no",
            Self::Classes => "one of several classes",
            Self::Count => "count",
            Self::Time => "time to an event",
        }
    }

    /// The measure that a judgement is quoted by; more is better.
    #[must_use]
    pub const fn main(self) -> Measure {
        match self {
            Self::Measured => Measure::R2,
            Self::YesNo => Measure::Area,
            Self::Classes => Measure::Accuracy,
            Self::Count => Measure::DevianceExplained,
            Self::Time => Measure::Concordance,
        }
    }

    /// The error that stands beside it; less is better.
    #[must_use]
    pub const fn error(self) -> Measure {
        match self {
            Self::Measured => Measure::Rmse,
            Self::YesNo | Self::Classes => Measure::LogLoss,
            Self::Count => Measure::Deviance,
            Self::Time => Measure::BrierMiddle,
        }
    }

    /// The value of the main measure that guessing gives.
    #[must_use]
    pub const fn chance(self) -> f64 {
        match self {
            Self::YesNo | Self::Time => 0.5,
            Self::Measured | Self::Classes | Self::Count => 0.0,
        }
    }

    /// The measures that every way of judging gives, in order.
    #[must_use]
    pub const fn always(self) -> &'static [Measure] {
        match self {
            Self::Measured => &[Measure::Rmse, Measure::Mae, Measure::R2],
            Self::YesNo => &[
                Measure::Area,
                Measure::Brier,
                Measure::LogLoss,
                Measure::DevianceExplained,
                Measure::Misclassification,
            ],
            Self::Classes => &[
                Measure::Accuracy,
                Measure::Misclassification,
                Measure::BalancedAccuracy,
                Measure::LogLoss,
                Measure::Brier,
                Measure::DevianceExplained,
                Measure::Area,
            ],
            Self::Count => &[
                Measure::Deviance,
                Measure::DevianceExplained,
                Measure::Rmse,
                Measure::Mae,
            ],
            Self::Time => &[
                Measure::Concordance,
                Measure::DevianceExplained,
                Measure::AreaEarly,
                Measure::AreaMiddle,
                Measure::AreaLate,
                Measure::BrierEarly,
                Measure::BrierMiddle,
                Measure::BrierLate,
            ],
        }
    }

    /// The measures that only held-out predictions give.
    #[must_use]
    pub const fn held_out(self) -> &'static [Measure] {
        match self {
            Self::Measured => &[
                Measure::Slope,
                Measure::Intercept,
                Measure::Bias,
                Measure::Sep,
                Measure::Correlation,
            ],
            Self::YesNo => &[
                Measure::CalibrationSlope,
                Measure::CalibrationIntercept,
                Measure::CalibrationInTheLarge,
                Measure::Sensitivity,
                Measure::Specificity,
                Measure::SensitivityAtPrevalence,
                Measure::SpecificityAtPrevalence,
            ],
            Self::Classes => &[],
            Self::Count => &[
                Measure::CalibrationSlope,
                Measure::CalibrationRatio,
                Measure::Bias,
            ],
            Self::Time => &[Measure::CalibrationSlope],
        }
    }

    /// The measures whose spread over repeats is told.
    #[must_use]
    pub const fn spreads(self) -> &'static [Measure] {
        match self {
            Self::Measured => &[Measure::Rmse, Measure::R2],
            Self::YesNo => &[Measure::Area, Measure::LogLoss],
            Self::Classes => &[Measure::Accuracy, Measure::LogLoss],
            Self::Count => &[Measure::Deviance, Measure::DevianceExplained],
            Self::Time => &[Measure::Concordance, Measure::BrierMiddle],
        }
    }

    /// The measures of the model without predictors that are told.
    #[must_use]
    pub const fn baselines(self) -> &'static [Measure] {
        match self {
            Self::Measured => &[Measure::Rmse, Measure::Mae],
            Self::YesNo => &[Measure::Brier, Measure::LogLoss, Measure::Misclassification],
            Self::Classes => &[
                Measure::Accuracy,
                Measure::Misclassification,
                Measure::LogLoss,
                Measure::Brier,
            ],
            Self::Count => &[Measure::Deviance, Measure::Rmse, Measure::Mae],
            Self::Time => &[
                Measure::BrierEarly,
                Measure::BrierMiddle,
                Measure::BrierLate,
            ],
        }
    }

    /// The first word of the facts about the model without predictors.
    #[must_use]
    pub const fn baseline_word(self) -> &'static str {
        match self {
            Self::Measured => "mean-only",
            Self::YesNo | Self::Classes | Self::Count | Self::Time => "baseline",
        }
    }
}

/// A measure of performance.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Measure {
    /// Root mean squared error.
    Rmse,
    /// Mean absolute error.
    Mae,
    /// 1 − SSE/SST, SST about the mean of the observed values.
    R2,
    /// Mean of predicted minus observed.
    Bias,
    /// Standard deviation of the errors about the bias.
    Sep,
    /// Slope of the line of observed on predicted values.
    Slope,
    /// Its intercept.
    Intercept,
    /// Correlation of observed and predicted values.
    Correlation,
    /// Area under the receiver operating characteristic.
    Area,
    /// Brier score.
    Brier,
    /// Mean of minus the logarithm of the probability given to what happened.
    LogLoss,
    /// Share of the deviance that is explained.
    DevianceExplained,
    /// Share of samples called wrong.
    Misclassification,
    /// Share of samples called right.
    Accuracy,
    /// Mean over classes of the share called right.
    BalancedAccuracy,
    /// Slope of recalibration.
    CalibrationSlope,
    /// Intercept that belongs to it.
    CalibrationIntercept,
    /// Intercept of recalibration at the slope one.
    CalibrationInTheLarge,
    /// Expected over observed counts in all.
    CalibrationRatio,
    /// Share of events called, from one half on.
    Sensitivity,
    /// Share of others not called, below one half.
    Specificity,
    /// Share of events called, from the prevalence on.
    SensitivityAtPrevalence,
    /// Share of others not called, below the prevalence.
    SpecificityAtPrevalence,
    /// Mean deviance.
    Deviance,
    /// Harrell's concordance.
    Concordance,
    /// Area under the curve at the early time.
    AreaEarly,
    /// Area under the curve at the middle time.
    AreaMiddle,
    /// Area under the curve at the late time.
    AreaLate,
    /// Brier score at the early time.
    BrierEarly,
    /// Brier score at the middle time.
    BrierMiddle,
    /// Brier score at the late time.
    BrierLate,
}

/// The scale that a measure is told on.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Told {
    /// In the unit of the outcome.
    Outcome,
    /// A number without a unit.
    Plain,
    /// A percentage.
    Share,
}

impl Measure {
    /// What it is called in the names of facts.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Rmse => "rmse",
            Self::Mae => "mae",
            Self::R2 => "r²",
            Self::Bias => "bias",
            Self::Sep => "sep",
            Self::Slope => "slope",
            Self::Intercept => "intercept",
            Self::Correlation => "correlation",
            Self::Area => "auc",
            Self::Brier => "brier",
            Self::LogLoss => "log loss",
            Self::DevianceExplained => "deviance explained",
            Self::Misclassification => "misclassification",
            Self::Accuracy => "accuracy",
            Self::BalancedAccuracy => "balanced accuracy",
            Self::CalibrationSlope => "calibration slope",
            Self::CalibrationIntercept => "calibration intercept",
            Self::CalibrationInTheLarge => "calibration in the large",
            Self::CalibrationRatio => "expected over observed",
            Self::Sensitivity => "sensitivity at one half",
            Self::Specificity => "specificity at one half",
            Self::SensitivityAtPrevalence => "sensitivity at the prevalence",
            Self::SpecificityAtPrevalence => "specificity at the prevalence",
            Self::Deviance => "deviance",
            Self::Concordance => "concordance",
            Self::AreaEarly => "auc at the early time",
            Self::AreaMiddle => "auc at the middle time",
            Self::AreaLate => "auc at the late time",
            Self::BrierEarly => "brier at the early time",
            Self::BrierMiddle => "brier at the middle time",
            Self::BrierLate => "brier at the late time",
        }
    }

    /// What it is called in running text and in heads of tables.
    #[must_use]
    pub const fn title(self) -> &'static str {
        match self {
            Self::Rmse => "RMSE",
            Self::Mae => "MAE",
            Self::R2 => "R²",
            Self::Sep => "SEP",
            Self::Area => "AUC",
            Self::Brier => "Brier score",
            Self::DevianceExplained => "share of deviance explained",
            Self::Misclassification => "share called wrong",
            Self::Accuracy => "share called right",
            Self::BalancedAccuracy => "mean share called right by class",
            Self::AreaEarly => "AUC at the early time",
            Self::AreaMiddle => "AUC at the middle time",
            Self::AreaLate => "AUC at the late time",
            Self::BrierEarly => "Brier score at the early time",
            Self::BrierMiddle => "Brier score at the middle time",
            Self::BrierLate => "Brier score at the late time",
            Self::Bias
            | Self::Slope
            | Self::Intercept
            | Self::Correlation
            | Self::LogLoss
            | Self::CalibrationSlope
            | Self::CalibrationIntercept
            | Self::CalibrationInTheLarge
            | Self::CalibrationRatio
            | Self::Sensitivity
            | Self::Specificity
            | Self::SensitivityAtPrevalence
            | Self::SpecificityAtPrevalence
            | Self::Deviance
            | Self::Concordance => self.name(),
        }
    }

    /// What it is, for the dictionary, without a full stop.
    #[must_use]
    pub const fn meaning(self, sort: Sort) -> &'static str {
        match self {
            Self::Rmse => "Root mean squared error",
            Self::Mae => "Mean absolute error",
            Self::R2 => "1 − SSE/SST, SST about the mean of the samples judged",
            Self::Bias => "Mean of predicted minus observed values",
            Self::Sep => "Standard deviation of the errors about the bias (divisor n − 1)",
            Self::Slope => {
                "Slope of the line of observed on predicted values: below 1 predictions are too extreme, above 1 too timid"
            }
            Self::Intercept => "Intercept of the same line",
            Self::Correlation => "Correlation of observed and predicted values",
            Self::Area => match sort {
                Sort::Classes => {
                    "Area under the curve of each class against the rest, averaged over classes; pairs are compared within held-out parts"
                }
                Sort::Measured | Sort::YesNo | Sort::Count | Sort::Time => {
                    "Area under the receiver operating characteristic: the share of pairs of an event and a non-event that are ordered rightly, ties one half; pairs are compared within held-out parts"
                }
            },
            Self::Brier => match sort {
                Sort::Classes => {
                    "Mean over samples of the summed squared errors of the class probabilities (Brier 1950)"
                }
                Sort::Measured | Sort::YesNo | Sort::Count | Sort::Time => {
                    "Mean squared error of the probability (Brier 1950)"
                }
            },
            Self::LogLoss => {
                "Mean of minus the logarithm of the probability given to what happened; half the mean deviance"
            }
            Self::DevianceExplained => match sort {
                Sort::Time => {
                    "1 − deviance of the partial likelihood over that without predictors, both within held-out parts"
                }
                Sort::Measured | Sort::YesNo | Sort::Classes | Sort::Count => {
                    "1 − deviance over the deviance of one value for all samples judged"
                }
            },
            Self::Misclassification => match sort {
                Sort::Classes => "Share of samples whose most probable class is not theirs",
                Sort::Measured | Sort::YesNo | Sort::Count | Sort::Time => {
                    "Share of samples called wrong when a probability of one half or more is called yes"
                }
            },
            Self::Accuracy => "Share of samples whose most probable class is theirs",
            Self::BalancedAccuracy => {
                "Mean over classes of the share of their samples called right"
            }
            Self::CalibrationSlope => match sort {
                Sort::Count => {
                    "Slope of a Poisson regression of counts on the logarithm of their predictions: below 1 predictions are too extreme, above 1 too timid"
                }
                Sort::Time => {
                    "Slope of a Cox regression of times on the linear predictor, stratified by held-out part: below 1 predictions are too extreme, above 1 too timid"
                }
                Sort::Measured | Sort::YesNo | Sort::Classes => {
                    "Slope of the logistic recalibration (Cox 1958): below 1 probabilities are too extreme, above 1 too timid"
                }
            },
            Self::CalibrationIntercept => "Intercept that belongs to this slope",
            Self::CalibrationInTheLarge => {
                "Intercept of the recalibration with the slope kept at 1: above 0 events are more frequent than predicted"
            }
            Self::CalibrationRatio => "Sum of predicted over sum of observed counts",
            Self::Sensitivity => {
                "Share of events called when a probability of one half or more is called yes"
            }
            Self::Specificity => {
                "Share of non-events not called when a probability of one half or more is called yes"
            }
            Self::SensitivityAtPrevalence => {
                "Share of events called when a probability of the prevalence or more is called yes"
            }
            Self::SpecificityAtPrevalence => {
                "Share of non-events not called when a probability of the prevalence or more is called yes"
            }
            Self::Deviance => "Mean Poisson deviance",
            Self::Concordance => {
                "Harrell's concordance: the share of usable pairs in which the sample with the earlier event has the higher risk, ties one half; pairs are compared within held-out parts"
            }
            Self::AreaEarly | Self::AreaMiddle | Self::AreaLate => {
                "Area under the curve of samples with an event by that time against samples still without one, weighed for censoring (Uno and others 2007)"
            }
            Self::BrierEarly | Self::BrierMiddle | Self::BrierLate => {
                "Mean squared error of the predicted share without the event at that time, weighed for censoring (Graf and others 1999)"
            }
        }
    }

    const fn told(self) -> Told {
        match self {
            Self::Rmse | Self::Mae | Self::Bias | Self::Sep | Self::Intercept => Told::Outcome,
            Self::Misclassification
            | Self::Accuracy
            | Self::BalancedAccuracy
            | Self::Sensitivity
            | Self::Specificity
            | Self::SensitivityAtPrevalence
            | Self::SpecificityAtPrevalence => Told::Share,
            Self::R2
            | Self::Slope
            | Self::Correlation
            | Self::Area
            | Self::Brier
            | Self::LogLoss
            | Self::DevianceExplained
            | Self::CalibrationSlope
            | Self::CalibrationIntercept
            | Self::CalibrationInTheLarge
            | Self::CalibrationRatio
            | Self::Deviance
            | Self::Concordance
            | Self::AreaEarly
            | Self::AreaMiddle
            | Self::AreaLate
            | Self::BrierEarly
            | Self::BrierMiddle
            | Self::BrierLate => Told::Plain,
        }
    }

    /// Its unit, where `unit` is that of the outcome.
    #[must_use]
    pub const fn unit(self, unit: &str) -> &str {
        match self.told() {
            Told::Outcome => unit,
            Told::Plain | Told::Share => "",
        }
    }

    /// Its digits, where `digits` are those of errors in the unit of the outcome.
    #[must_use]
    pub const fn digits(self, digits: Precision) -> Precision {
        match self.told() {
            Told::Outcome => digits,
            Told::Plain => Precision::Decimals(3),
            Told::Share => Precision::Percent(0),
        }
    }
}

/// Values of measures; what is not defined is not there.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Measures(BTreeMap<Measure, f64>);

impl Measures {
    /// The value of a measure; NaN where it is not defined.
    #[must_use]
    pub fn get(&self, measure: Measure) -> f64 {
        self.0.get(&measure).copied().unwrap_or(f64::NAN)
    }

    /// Notes a value, if it is defined and finite.
    pub fn set(&mut self, measure: Measure, value: impl Into<Option<f64>>) {
        if let Some(value) = value.into().filter(|value| value.is_finite()) {
            let _ = self.0.insert(measure, value);
        }
    }

    /// The mean of each measure over the repeats in which it is defined.
    #[must_use]
    pub fn mean_of(repeats: &[Self]) -> Self {
        let mut mean = Self::default();
        let mut all: Vec<Measure> = repeats.iter().flat_map(|m| m.0.keys().copied()).collect();
        all.sort_unstable();
        all.dedup();
        for measure in all {
            let known: Vec<f64> = repeats
                .iter()
                .filter_map(|m| m.0.get(&measure).copied())
                .collect();
            mean.set(measure, known.iter().sum::<f64>() / known.len() as f64);
        }
        mean
    }
}
