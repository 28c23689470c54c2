//! Yes or no: probabilities against what happened.

use crate::numeric::measure::regression::ranks;

/// Probabilities are kept this far from 0 and 1 where a logarithm of them is taken; a certain
/// prediction that is wrong costs −log of it, about 34.5, instead of everything.
const CLOSEST_TO_CERTAIN: f64 = 1e-15;

/// Measures of n probabilities of an event.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BinaryMeasures {
    /// How many samples.
    pub n: usize,
    /// How many of them had the event.
    pub n_events: usize,
    /// Area under the receiver operating characteristic: the share of pairs of an event and a
    /// non-event in which the event has the higher probability, ties one half. `None` when
    /// there is no such pair.
    pub area_under_curve: Option<f64>,
    /// Mean of (p − y)² (Brier 1950).
    pub brier: f64,
    /// 1 − Brier over that of the prevalence for everyone. `None` with one class only.
    pub brier_skill: Option<f64>,
    /// Mean of −log of the probability given to what happened.
    pub log_loss: f64,
    /// 2 n times the log loss.
    pub deviance: f64,
    /// 1 − log loss over that of the prevalence for everyone (McFadden). `None` with one class
    /// only.
    pub deviance_explained: Option<f64>,
    /// How observed frequencies follow the probabilities. `None` when the logistic fit has no
    /// finite solution.
    pub calibration: Option<Calibration>,
}

/// Logistic recalibration, logit P(y = 1) = a + b·logit(p) (Cox 1958).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Calibration {
    /// The slope b: 1 when calibrated, below 1 when probabilities are too extreme.
    pub slope: f64,
    /// The intercept a that belongs to this slope.
    pub intercept: f64,
    /// Calibration in the large: a with b fixed at 1; above 0 when events are more frequent
    /// than predicted.
    pub in_the_large: f64,
}

impl BinaryMeasures {
    /// Compares probabilities with what happened; `None` when there are none, or when one is
    /// not from 0 to 1.
    ///
    /// # Panics
    /// When there are not as many probabilities as samples.
    #[must_use]
    pub fn of(is_event: &[bool], probability: &[f64]) -> Option<Self> {
        assert_eq!(is_event.len(), probability.len(), "one probability each");
        let is_sound = probability.iter().all(|p| (0.0..=1.0).contains(p));
        if is_event.is_empty() || !is_sound {
            return None;
        }
        let n = is_event.len() as f64;
        let n_events = is_event.iter().filter(|&&event| event).count();
        let prevalence = n_events as f64 / n;
        let brier_of = |p: &dyn Fn(usize) -> f64| {
            (0..is_event.len())
                .map(|at| (p(at) - number(is_event[at])).powi(2))
                .sum::<f64>()
                / n
        };
        let loss_of = |p: &dyn Fn(usize) -> f64| {
            (0..is_event.len())
                .map(|at| log_loss_of(is_event[at], p(at)))
                .sum::<f64>()
                / n
        };
        let brier = brier_of(&|at| probability[at]);
        let log_loss = loss_of(&|at| probability[at]);
        let varies = n_events > 0 && n_events < is_event.len();
        let beside = |own: f64, baseline: f64| varies.then(|| 1.0 - own / baseline);
        Some(Self {
            n: is_event.len(),
            n_events,
            area_under_curve: area_under_curve(is_event, probability),
            brier,
            brier_skill: beside(brier, brier_of(&|_| prevalence)),
            log_loss,
            deviance: 2.0 * n * log_loss,
            deviance_explained: beside(log_loss, loss_of(&|_| prevalence)),
            calibration: calibration(is_event, probability),
        })
    }
}

fn number(event: bool) -> f64 {
    if event { 1.0 } else { 0.0 }
}

fn log_loss_of(event: bool, p: f64) -> f64 {
    -if event { p } else { 1.0 - p }.max(CLOSEST_TO_CERTAIN).ln()
}

/// The share of pairs of an event and a non-event in which the event has the higher score, ties
/// one half. `None` when there is no such pair.
#[must_use]
pub fn area_under_curve(is_event: &[bool], score: &[f64]) -> Option<f64> {
    let (wins, pairs) = area_under_curve_counts(is_event, score);
    (pairs > 0.0).then(|| wins / pairs)
}

/// The pairs of an event and a non-event in which the event has the higher score, ties one half,
/// and the number of such pairs.
#[must_use]
pub fn area_under_curve_counts(is_event: &[bool], score: &[f64]) -> (f64, f64) {
    let events = is_event.iter().filter(|&&event| event).count();
    let others = is_event.len() - events;
    let rank_sum: f64 = ranks(score)
        .into_iter()
        .zip(is_event)
        .filter(|&(_, &event)| event)
        .map(|(rank, _)| rank)
        .sum();
    let events_f = events as f64;
    let wins = rank_sum - events_f * (events_f + 1.0) / 2.0;
    (wins, events_f * others as f64)
}

/// Fits the logistic recalibration by Newton's method. `None` when there is no finite solution:
/// one class only, probabilities that do not vary, or perfectly separated ones.
#[must_use]
pub fn calibration(is_event: &[bool], probability: &[f64]) -> Option<Calibration> {
    let logits: Vec<f64> = probability
        .iter()
        .map(|p| {
            let p = p.clamp(CLOSEST_TO_CERTAIN, 1.0 - CLOSEST_TO_CERTAIN);
            (p / (1.0 - p)).ln()
        })
        .collect();
    let (intercept, slope) = logistic_line(is_event, &logits)?;
    let in_the_large = logistic_shift(is_event, &logits)?;
    Some(Calibration {
        slope,
        intercept,
        in_the_large,
    })
}

/// Steps of Newton's method before it is given up; a finite solution takes fewer than ten.
const NEWTON_STEPS: usize = 60;
/// A step this small, relative to 1 + |value|, ends it.
const NEWTON_TOLERANCE: f64 = 1e-13;

fn logistic_line(is_event: &[bool], x: &[f64]) -> Option<(f64, f64)> {
    let mean = x.iter().sum::<f64>() / x.len() as f64;
    let (mut a, mut b) = (0.0, 0.0);
    for _ in 0..NEWTON_STEPS {
        let (mut g, mut h) = ([0.0; 2], [0.0; 3]);
        for (&event, x) in is_event.iter().zip(x) {
            let x = x - mean;
            let p = 1.0 / (1.0 + (-(a + b * x)).exp());
            let (rest, weight) = (number(event) - p, p * (1.0 - p));
            g[0] += rest;
            g[1] += rest * x;
            h[0] += weight;
            h[1] += weight * x;
            h[2] += weight * x * x;
        }
        let determinant = h[0] * h[2] - h[1] * h[1];
        let is_solvable = determinant > 1e-12 * h[0] * h[2];
        if !is_solvable {
            return None;
        }
        let step_a = (h[2] * g[0] - h[1] * g[1]) / determinant;
        let step_b = (h[0] * g[1] - h[1] * g[0]) / determinant;
        // Half steps where a whole one would run away on its first flight.
        let damp = (4.0 / step_a.abs().max(step_b.abs())).min(1.0);
        a += damp * step_a;
        b += damp * step_b;
        let is_small = |step: f64, of: f64| step.abs() <= NEWTON_TOLERANCE * (1.0 + of.abs());
        if is_small(step_a, a) && is_small(step_b, b) {
            return Some((a - b * mean, b));
        }
    }
    None
}

fn logistic_shift(is_event: &[bool], x: &[f64]) -> Option<f64> {
    let mut a = 0.0;
    for _ in 0..NEWTON_STEPS {
        let (mut g, mut h) = (0.0, 0.0);
        for (&event, x) in is_event.iter().zip(x) {
            let p = 1.0 / (1.0 + (-(a + x)).exp());
            g += number(event) - p;
            h += p * (1.0 - p);
        }
        let step: f64 = g / h;
        if !step.is_finite() {
            return None;
        }
        a += step.clamp(-4.0, 4.0);
        if step.abs() <= NEWTON_TOLERANCE * (1.0 + a.abs()) {
            return Some(a);
        }
    }
    None
}

/// Events and calls at a threshold.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Confusion {
    /// Events called events.
    pub true_positive: usize,
    /// Non-events called events.
    pub false_positive: usize,
    /// Non-events called non-events.
    pub true_negative: usize,
    /// Events called non-events.
    pub false_negative: usize,
}

impl Confusion {
    /// Calls an event where the probability is `threshold` or more.
    #[must_use]
    pub fn at(is_event: &[bool], probability: &[f64], threshold: f64) -> Self {
        let mut counts = Self {
            true_positive: 0,
            false_positive: 0,
            true_negative: 0,
            false_negative: 0,
        };
        for (&event, &p) in is_event.iter().zip(probability) {
            let cell = match (event, p >= threshold) {
                (true, true) => &mut counts.true_positive,
                (false, true) => &mut counts.false_positive,
                (false, false) => &mut counts.true_negative,
                (true, false) => &mut counts.false_negative,
            };
            *cell += 1;
        }
        counts
    }

    /// Share of right calls.
    #[must_use]
    pub fn accuracy(&self) -> Option<f64> {
        share(self.true_positive + self.true_negative, self.n())
    }

    /// Share of events called events.
    #[must_use]
    pub fn sensitivity(&self) -> Option<f64> {
        share(self.true_positive, self.true_positive + self.false_negative)
    }

    /// Share of non-events called non-events.
    #[must_use]
    pub fn specificity(&self) -> Option<f64> {
        share(self.true_negative, self.true_negative + self.false_positive)
    }

    /// Share of calls that were events.
    #[must_use]
    pub fn positive_predictive_value(&self) -> Option<f64> {
        share(self.true_positive, self.true_positive + self.false_positive)
    }

    /// Share of calls of non-events that were right.
    #[must_use]
    pub fn negative_predictive_value(&self) -> Option<f64> {
        share(self.true_negative, self.true_negative + self.false_negative)
    }

    /// Mean of sensitivity and specificity.
    #[must_use]
    pub fn balanced_accuracy(&self) -> Option<f64> {
        Some(0.5 * (self.sensitivity()? + self.specificity()?))
    }

    /// Correlation of calls and events (Matthews 1975).
    #[must_use]
    pub fn matthews(&self) -> Option<f64> {
        let f = |count: usize| count as f64;
        let (tp, fp) = (f(self.true_positive), f(self.false_positive));
        let (tn, fn_) = (f(self.true_negative), f(self.false_negative));
        let below = (tp + fp) * (tp + fn_) * (tn + fp) * (tn + fn_);
        (below > 0.0).then(|| (tp * tn - fp * fn_) / below.sqrt())
    }

    fn n(&self) -> usize {
        self.true_positive + self.false_positive + self.true_negative + self.false_negative
    }
}

fn share(part: usize, whole: usize) -> Option<f64> {
    (whole > 0).then(|| part as f64 / whole as f64)
}
