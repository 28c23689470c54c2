//! Predictions of a set of samples beside what was observed, for every sort of outcome.

use crate::eval::kind::fit::measures::{Measure, Measures, Sort};
use crate::eval::kind::fit::ranks::{self, Ranked};
use crate::numeric::matrix::Matrix;
use crate::numeric::measure::{
    Agreement, BinaryMeasures, ClassMeasures, Confusion, CountMeasures, brier_terms,
    poisson_deviance, predicted_class, time_dependent_area, time_dependent_brier,
};
use crate::numeric::procedure::{Hazard, count_calibration_slope, time_calibration_slope};
use crate::numeric::response::{Response, deviance_of_times};

/// The samples that are judged, and the times at which times are judged.
#[derive(Clone, Copy, Debug)]
pub struct Scene<'a> {
    /// The outcome of all samples.
    pub response: &'a Response,
    /// The samples that are judged, rising.
    pub rows: &'a [usize],
    /// For times: the early, the middle and the late time.
    pub horizons: [f64; 3],
}

/// Predictions of the samples of a scene, one row for each.
#[derive(Clone, Debug)]
pub struct Predictions {
    /// The linear predictors, samples × 1 or samples × classes; offsets not included.
    pub linear: Matrix,
    /// For times: the shares without the event at the horizons, samples × 3; else without columns.
    pub survival: Matrix,
    /// The part in which each sample was held out: only samples of one part were predicted by the
    /// same fit.
    pub part: Vec<usize>,
}

/// The quartiles of the event times of some rows: the times at which times are judged. NaN for
/// another sort of outcome and without an event.
#[must_use]
pub fn horizons(response: &Response, rows: &[usize]) -> [f64; 3] {
    let Response::Time { time, event, .. } = response else {
        return [f64::NAN; 3];
    };
    let mut times: Vec<f64> = rows
        .iter()
        .filter(|&&row| event[row])
        .map(|&row| time[row])
        .collect();
    times.sort_by(f64::total_cmp);
    if times.is_empty() {
        return [f64::NAN; 3];
    }
    // An event time itself, so that it can be said without rounding.
    [0.25, 0.5, 0.75].map(|share: f64| {
        let at = (share * times.len() as f64).ceil() as usize;
        times[at.clamp(1, times.len()) - 1]
    })
}

impl Predictions {
    /// Room for predictions.
    #[must_use]
    pub fn new(scene: &Scene<'_>) -> Self {
        let n = scene.rows.len();
        let n_times = match scene.response {
            Response::Time { .. } => 3,
            Response::Measured(_)
            | Response::YesNo(_)
            | Response::Classes { .. }
            | Response::Count { .. } => 0,
        };
        Self {
            linear: Matrix::zeros(n, scene.response.n_linear()),
            survival: Matrix::zeros(n, n_times),
            part: vec![0; n],
        }
    }

    /// Puts one sample in.
    pub fn put(
        &mut self,
        scene: &Scene<'_>,
        place: usize,
        part: usize,
        linear: &[f64],
        hazard: Option<&Hazard>,
    ) {
        for (class, eta) in linear.iter().enumerate() {
            self.linear[(place, class)] = *eta;
        }
        self.part[place] = part;
        let stratum = match scene.response {
            Response::Time { strata, .. } => strata.as_ref().map_or(0, |s| s[scene.rows[place]]),
            Response::Measured(_)
            | Response::YesNo(_)
            | Response::Classes { .. }
            | Response::Count { .. } => 0,
        };
        if let Some(hazard) = hazard {
            for (at, time) in scene.horizons.iter().enumerate() {
                self.survival[(place, at)] = hazard.survival(stratum, *time, linear[0]);
            }
        }
    }

    /// What is predicted, in words a reader knows: a value, the probability of yes, the probability
    /// of each class, a count; for times the linear predictor and the shares without the event.
    #[must_use]
    pub fn scores(&self, scene: &Scene<'_>) -> Matrix {
        let n = scene.rows.len();
        let k = self.linear.ncols();
        let mut scores = Matrix::zeros(n, k + self.survival.ncols());
        for (place, &row) in scene.rows.iter().enumerate() {
            let eta: Vec<f64> = self.linear.row(place).iter().copied().collect();
            let means = match scene.response {
                Response::Time { .. } => eta,
                Response::Measured(_)
                | Response::YesNo(_)
                | Response::Classes { .. }
                | Response::Count { .. } => scene.response.means(row, &eta),
            };
            for (at, mean) in means.iter().enumerate() {
                scores[(place, at)] = *mean;
            }
            for at in 0..self.survival.ncols() {
                scores[(place, k + at)] = self.survival[(place, at)];
            }
        }
        scores
    }
}

impl Scene<'_> {
    /// The sort of outcome.
    #[must_use]
    pub const fn sort(&self) -> Sort {
        Sort::of(self.response)
    }

    /// The outcome as numbers: 0 and 1 for no and yes, the class, the count, the time.
    #[must_use]
    pub fn observed(&self) -> Vec<f64> {
        let value = |&row: &usize| match self.response {
            Response::Measured(values)
            | Response::Count { count: values, .. }
            | Response::Time { time: values, .. } => values[row],
            Response::YesNo(yes) => f64::from(u8::from(yes[row])),
            Response::Classes { class, .. } => class[row] as f64,
        };
        self.rows.iter().map(value).collect()
    }

    /// Whether each sample had the event; all of them for outcomes without events.
    #[must_use]
    pub fn events(&self) -> Vec<bool> {
        let value = |&row: &usize| match self.response {
            Response::YesNo(yes) => yes[row],
            Response::Time { event, .. } => event[row],
            Response::Measured(_) | Response::Classes { .. } | Response::Count { .. } => true,
        };
        self.rows.iter().map(value).collect()
    }

    /// The class of each sample; all 0 for outcomes without classes.
    #[must_use]
    pub fn classes(&self) -> Vec<usize> {
        match self.response {
            Response::Classes { class, .. } => self.rows.iter().map(|&row| class[row]).collect(),
            Response::YesNo(yes) => self.rows.iter().map(|&row| usize::from(yes[row])).collect(),
            Response::Measured(_) | Response::Count { .. } | Response::Time { .. } => {
                vec![0; self.rows.len()]
            }
        }
    }

    /// All measures of some predictions.
    #[must_use]
    pub fn measures(&self, predictions: &Predictions) -> Measures {
        let scores = predictions.scores(self);
        let first: Vec<f64> = scores.column(0).iter().copied().collect();
        let mut measures = Measures::default();
        match self.response {
            Response::Measured(_) => agreement(&mut measures, &self.observed(), &first),
            Response::YesNo(_) => self.yes_no(&mut measures, &first),
            Response::Classes { .. } => {
                if let Some(found) = ClassMeasures::of(&self.classes(), &scores) {
                    measures.set(Measure::LogLoss, found.log_loss);
                    measures.set(Measure::Brier, found.brier);
                    measures.set(Measure::Accuracy, found.accuracy);
                    measures.set(Measure::Misclassification, 1.0 - found.accuracy);
                    measures.set(Measure::BalancedAccuracy, found.balanced_accuracy);
                    let null = self.null_loss();
                    measures.set(Measure::DevianceExplained, 1.0 - found.log_loss / null);
                }
            }
            Response::Count { .. } => {
                let observed = self.observed();
                if let Some(found) = CountMeasures::of(&observed, &first) {
                    measures.set(Measure::Deviance, found.mean_deviance);
                    let null = self.null_loss();
                    measures.set(Measure::DevianceExplained, 1.0 - found.mean_deviance / null);
                    let sum = |values: &[f64]| values.iter().sum::<f64>();
                    measures.set(Measure::CalibrationRatio, sum(&first) / sum(&observed));
                    measures.set(
                        Measure::CalibrationSlope,
                        count_calibration_slope(&observed, &first),
                    );
                }
                if let Some(found) = Agreement::of(&observed, &first) {
                    measures.set(Measure::Rmse, found.rmse);
                    measures.set(Measure::Mae, found.mae);
                    measures.set(Measure::Bias, found.bias);
                }
            }
            Response::Time { .. } => self.times(&mut measures, predictions),
        }
        if let Some(ranked) = self.ranked(predictions) {
            measures.set(ranked.measure, ranked.value);
        }
        measures
    }

    fn yes_no(&self, measures: &mut Measures, probability: &[f64]) {
        let events = self.events();
        let Some(found) = BinaryMeasures::of(&events, probability) else {
            return;
        };
        measures.set(Measure::Brier, found.brier);
        measures.set(Measure::LogLoss, found.log_loss);
        measures.set(Measure::DevianceExplained, found.deviance_explained);
        if let Some(calibration) = found.calibration {
            measures.set(Measure::CalibrationSlope, calibration.slope);
            measures.set(Measure::CalibrationIntercept, calibration.intercept);
            measures.set(Measure::CalibrationInTheLarge, calibration.in_the_large);
        }
        let half = Confusion::at(&events, probability, 0.5);
        measures.set(Measure::Misclassification, half.accuracy().map(|a| 1.0 - a));
        measures.set(Measure::Sensitivity, half.sensitivity());
        measures.set(Measure::Specificity, half.specificity());
        let prevalence = found.n_events as f64 / found.n as f64;
        let there = Confusion::at(&events, probability, prevalence);
        measures.set(Measure::SensitivityAtPrevalence, there.sensitivity());
        measures.set(Measure::SpecificityAtPrevalence, there.specificity());
    }

    fn times(&self, measures: &mut Measures, predictions: &Predictions) {
        let (time, event) = (self.observed(), self.events());
        let areas = [Measure::AreaEarly, Measure::AreaMiddle, Measure::AreaLate];
        let briers = [
            Measure::BrierEarly,
            Measure::BrierMiddle,
            Measure::BrierLate,
        ];
        for (at, horizon) in self.horizons.into_iter().enumerate() {
            let survival: Vec<f64> = predictions.survival.column(at).iter().copied().collect();
            let risk: Vec<f64> = survival.iter().map(|share| 1.0 - share).collect();
            measures.set(
                areas[at],
                time_dependent_area(&time, &event, &risk, horizon),
            );
            measures.set(
                briers[at],
                time_dependent_brier(&time, &event, &survival, horizon),
            );
        }
        let eta: Vec<f64> = predictions.linear.column(0).iter().copied().collect();
        let (mut own, mut null) = (0.0, 0.0);
        let mut parts = predictions.part.clone();
        parts.sort_unstable();
        parts.dedup();
        for part in &parts {
            let places: Vec<usize> = (0..self.rows.len())
                .filter(|&place| predictions.part[place] == *part)
                .collect();
            let rows: Vec<usize> = places.iter().map(|&place| self.rows[place]).collect();
            let inside: Vec<f64> = places.iter().map(|&place| eta[place]).collect();
            let zero = vec![0.0; inside.len()];
            let deviance =
                |eta: &[f64]| deviance_of_times(self.response, &rows, eta, None).unwrap_or(0.0);
            own += deviance(&inside);
            null += deviance(&zero);
        }
        if null > 0.0 {
            measures.set(Measure::DevianceExplained, 1.0 - own / null);
        }
        measures.set(
            Measure::CalibrationSlope,
            time_calibration_slope(&time, &event, &eta, &predictions.part),
        );
    }

    /// The measure that compares pairs, with how much each sample sways it.
    #[must_use]
    pub fn ranked(&self, predictions: &Predictions) -> Option<Ranked> {
        let eta = |class: usize| -> Vec<f64> {
            predictions.linear.column(class).iter().copied().collect()
        };
        match self.response {
            Response::YesNo(_) => ranks::area(&self.events(), &eta(0), &predictions.part),
            Response::Classes { n_classes, .. } => {
                let probabilities = predictions.scores(self);
                let scores: Vec<Vec<f64>> = (0..*n_classes)
                    .map(|class| probabilities.column(class).iter().copied().collect())
                    .collect();
                ranks::areas(&self.classes(), &scores, &predictions.part)
            }
            Response::Time { strata, .. } => {
                // Pairs of different strata are never compared.
                let stratum: Vec<usize> = strata.as_ref().map_or_else(
                    || vec![0; self.rows.len()],
                    |strata| self.rows.iter().map(|&row| strata[row]).collect(),
                );
                ranks::concordance(
                    &self.observed(),
                    &self.events(),
                    &eta(0),
                    &predictions.part,
                    &stratum,
                )
            }
            Response::Measured(_) | Response::Count { .. } => None,
        }
    }

    /// The loss of each sample under a measure that is a mean over samples. `None` for others.
    #[must_use]
    pub fn losses(&self, measure: Measure, predictions: &Predictions) -> Option<Vec<f64>> {
        let scores = predictions.scores(self);
        let observed = self.observed();
        let classes = self.classes();
        let places = 0..self.rows.len();
        let explained = measure == Measure::DevianceExplained;
        match self.response {
            Response::Measured(_) => [Measure::Rmse, Measure::R2].contains(&measure).then(|| {
                places
                    .map(|at| (scores[(at, 0)] - observed[at]).powi(2))
                    .collect()
            }),
            Response::YesNo(_) => {
                let p = |at: usize| scores[(at, 0)];
                let loss: &dyn Fn(usize) -> f64 = if measure == Measure::Brier {
                    &|at| (p(at) - observed[at]).powi(2)
                } else if measure == Measure::LogLoss || explained {
                    &|at| {
                        -if observed[at] > 0.5 {
                            p(at)
                        } else {
                            1.0 - p(at)
                        }
                        .max(CLOSEST)
                        .ln()
                    }
                } else if measure == Measure::Misclassification {
                    &|at| f64::from(u8::from((p(at) >= 0.5) != (observed[at] > 0.5)))
                } else {
                    return None;
                };
                Some(places.map(loss).collect())
            }
            Response::Classes { n_classes, .. } => {
                let own = |at: usize, class: usize| if class == classes[at] { 1.0 } else { 0.0 };
                let square =
                    |at: usize, class: usize| (scores[(at, class)] - own(at, class)).powi(2);
                let is_wrong = |at: usize| {
                    let row: Vec<f64> = scores.row(at).iter().copied().collect();
                    predicted_class(&row) != classes[at]
                };
                let calls = [Measure::Misclassification, Measure::Accuracy].contains(&measure);
                let loss: &dyn Fn(usize) -> f64 = if measure == Measure::Brier {
                    &|at| (0..*n_classes).map(|class| square(at, class)).sum()
                } else if measure == Measure::LogLoss || explained {
                    &|at| -scores[(at, classes[at])].max(CLOSEST).ln()
                } else if calls {
                    &|at| f64::from(u8::from(is_wrong(at)))
                } else {
                    return None;
                };
                Some(places.map(loss).collect())
            }
            Response::Count { .. } => {
                let loss: &dyn Fn(usize) -> f64 = if measure == Measure::Rmse {
                    &|at| (scores[(at, 0)] - observed[at]).powi(2)
                } else if measure == Measure::Deviance || explained {
                    &|at| poisson_deviance(&[observed[at]], &[scores[(at, 0)]])
                } else {
                    return None;
                };
                Some(places.map(loss).collect())
            }
            Response::Time { .. } => {
                let survival: Vec<f64> = predictions.survival.column(1).iter().copied().collect();
                (measure == Measure::BrierMiddle)
                    .then(|| brier_terms(&observed, &self.events(), &survival, self.horizons[1]))
                    .flatten()
            }
        }
    }

    /// The mean loss of one value for all samples judged, against which a share is explained: the
    /// mean, the prevalence, the class shares, the mean rate. NaN for times.
    #[must_use]
    pub fn null_loss(&self) -> f64 {
        let observed = self.observed();
        let n = observed.len() as f64;
        match self.response {
            Response::Measured(_) => {
                let mean = observed.iter().sum::<f64>() / n;
                observed.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / n
            }
            Response::YesNo(_) | Response::Classes { .. } => {
                let classes = self.classes();
                let mut counts = std::collections::BTreeMap::new();
                for class in &classes {
                    *counts.entry(*class).or_insert(0.0) += 1.0;
                }
                counts
                    .values()
                    .map(|count: &f64| -count / n * (count / n).ln())
                    .sum()
            }
            Response::Count { offset, .. } => {
                let exposure: Vec<f64> = self
                    .rows
                    .iter()
                    .map(|&row| {
                        offset
                            .as_ref()
                            .map_or(1.0, |offset: &Vec<f64>| offset[row].exp())
                    })
                    .collect();
                let rate = observed.iter().sum::<f64>() / exposure.iter().sum::<f64>();
                let expected: Vec<f64> = exposure.iter().map(|e| e * rate).collect();
                poisson_deviance(&observed, &expected) / n
            }
            Response::Time { .. } => f64::NAN,
        }
    }
}

/// As in the measures of probabilities: a certain prediction that is wrong has a large finite cost.
const CLOSEST: f64 = 1e-15;

fn agreement(measures: &mut Measures, observed: &[f64], predicted: &[f64]) {
    let Some(found) = Agreement::of(observed, predicted) else {
        return;
    };
    measures.set(Measure::Rmse, found.rmse);
    measures.set(Measure::Mae, found.mae);
    measures.set(Measure::R2, found.r_squared);
    measures.set(Measure::Bias, found.bias);
    measures.set(Measure::Sep, found.sep);
    let line = found.observed_on_predicted;
    measures.set(Measure::Slope, line.map(|line| line.slope));
    measures.set(Measure::Intercept, line.map(|line| line.intercept));
    measures.set(Measure::Correlation, found.pearson);
}
