//! Time to an event: curves, concordance, and measures at a time.
//!
//! `time` is the time to the event or to the end of observation, `event` whether it was the
//! event. At equal times events come before ends of observation.

use crate::numeric::matrix::Matrix;
use crate::numeric::measure::chi_squared_tail;

/// Harrell's concordance (Harrell et al. 1982, 1996), with the counts behind it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Concordance {
    /// Pairs of which it is known who had the event first: the shorter time is an event; at
    /// equal times an event and an end of observation. Two events at one time are not usable.
    pub usable: usize,
    /// Usable pairs in which who had the event first has the higher risk.
    pub concordant: usize,
    /// Usable pairs in which it has the lower risk.
    pub discordant: usize,
    /// Usable pairs of equal risk.
    pub tied: usize,
}

impl Concordance {
    /// (concordant + ½ tied)/usable. `None` without usable pairs.
    #[must_use]
    pub fn value(&self) -> Option<f64> {
        (self.usable > 0)
            .then(|| (self.concordant as f64 + 0.5 * self.tied as f64) / self.usable as f64)
    }
}

/// Counts concordant pairs; a higher risk should mean an earlier event.
#[must_use]
pub fn concordance(time: &[f64], event: &[bool], risk: &[f64]) -> Concordance {
    let mut counts = Concordance {
        usable: 0,
        concordant: 0,
        discordant: 0,
        tied: 0,
    };
    for first in (0..time.len()).filter(|&at| event[at]) {
        for later in 0..time.len() {
            let is_later =
                time[later] > time[first] || (time[later] == time[first] && !event[later]);
            if is_later {
                counts.usable += 1;
                match risk[first].total_cmp(&risk[later]) {
                    std::cmp::Ordering::Greater => counts.concordant += 1,
                    std::cmp::Ordering::Less => counts.discordant += 1,
                    std::cmp::Ordering::Equal => counts.tied += 1,
                }
            }
        }
    }
    counts
}

/// A survival curve that falls at its steps: 1 before the first.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    /// The steps, one for each time with an event, rising.
    pub steps: Vec<CurveStep>,
}

/// One time with events.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CurveStep {
    /// The time.
    pub time: f64,
    /// How many were still observed just before.
    pub at_risk: usize,
    /// How many had the event then.
    pub events: usize,
    /// The share surviving this time.
    pub survival: f64,
    /// Its standard error by Greenwood's formula (not a number once nobody survives).
    pub standard_error: f64,
}

impl Curve {
    /// The share surviving `time`.
    #[must_use]
    pub fn at(&self, time: f64) -> f64 {
        self.last_step(|step| step.time <= time)
    }

    /// The share surviving up to just before `time`.
    #[must_use]
    pub fn before(&self, time: f64) -> f64 {
        self.last_step(|step| step.time < time)
    }

    fn last_step(&self, is_past: impl Fn(&CurveStep) -> bool) -> f64 {
        let past = self.steps.partition_point(is_past);
        past.checked_sub(1)
            .map_or(1.0, |at| self.steps[at].survival)
    }
}

/// The product-limit estimate of Kaplan and Meier (1958).
#[must_use]
pub fn kaplan_meier(time: &[f64], event: &[bool]) -> Curve {
    let (mut survival, mut greenwood) = (1.0, 0.0);
    let steps = event_times(time, event)
        .into_iter()
        .map(|at| {
            let at_risk = time.iter().filter(|&&t| t >= at).count();
            let events = (0..time.len())
                .filter(|&i| event[i] && time[i] == at)
                .count();
            let (r, d) = (at_risk as f64, events as f64);
            survival *= 1.0 - d / r;
            greenwood += d / (r * (r - d));
            CurveStep {
                time: at,
                at_risk,
                events,
                survival,
                standard_error: survival * f64::sqrt(greenwood),
            }
        })
        .collect();
    Curve { steps }
}

fn event_times(time: &[f64], event: &[bool]) -> Vec<f64> {
    let mut times: Vec<f64> = (0..time.len())
        .filter(|&at| event[at])
        .map(|at| time[at])
        .collect();
    times.sort_by(f64::total_cmp);
    times.dedup();
    times
}

/// The curve of staying observed: ends of observation are its events. Events at the same time
/// come first, so they are no longer at risk of an end.
fn staying_observed(time: &[f64], event: &[bool]) -> Curve {
    let ends: Vec<bool> = event.iter().map(|event| !event).collect();
    let mut survival = 1.0;
    let steps = event_times(time, &ends)
        .into_iter()
        .map(|at| {
            let later = |i: usize| time[i] > at || (time[i] == at && ends[i]);
            let at_risk = (0..time.len()).filter(|&i| later(i)).count();
            let events = (0..time.len())
                .filter(|&i| ends[i] && time[i] == at)
                .count();
            survival *= 1.0 - events as f64 / at_risk as f64;
            CurveStep {
                time: at,
                at_risk,
                events,
                survival,
                standard_error: f64::NAN,
            }
        })
        .collect();
    Curve { steps }
}

/// The log-rank test of equal survival in some groups.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LogRank {
    /// The statistic.
    pub chi_squared: f64,
    /// Its degrees of freedom: groups − 1.
    pub degrees: usize,
    /// P(χ² larger) when survival is equal and the groups were made without the times.
    pub p_value: f64,
}

/// The log-rank test (Mantel 1966; ties by the hypergeometric variance). `None` with fewer than
/// two groups, or when no group can be told from the others by an event.
///
/// Groups that were made from predictions of the same samples give no valid p-value.
#[must_use]
pub fn log_rank(time: &[f64], event: &[bool], group: &[usize]) -> Option<LogRank> {
    let mut groups = group.to_vec();
    groups.sort_unstable();
    groups.dedup();
    let degrees = groups.len().checked_sub(1).filter(|&degrees| degrees > 0)?;
    let index: Vec<usize> = group
        .iter()
        .map(|of| groups.binary_search(of).expect("every group is listed"))
        .collect();
    let mut excess = Matrix::zeros(degrees, 1);
    let mut variance = Matrix::zeros(degrees, degrees);
    for at in event_times(time, event) {
        let (mut at_risk, mut events) = (vec![0.0; groups.len()], vec![0.0; groups.len()]);
        for i in 0..time.len() {
            if time[i] >= at {
                at_risk[index[i]] += 1.0;
            }
            if time[i] == at && event[i] {
                events[index[i]] += 1.0;
            }
        }
        let (r, d): (f64, f64) = (at_risk.iter().sum(), events.iter().sum());
        for g in 0..degrees {
            excess[(g, 0)] += events[g] - d * at_risk[g] / r;
            if r > 1.0 {
                let factor = d * (r - d) / (r - 1.0) * at_risk[g] / r;
                for h in 0..degrees {
                    let same = if g == h { 1.0 } else { 0.0 };
                    variance[(g, h)] += factor * (same - at_risk[h] / r);
                }
            }
        }
    }
    let solved = variance.cholesky()?.solve(&excess);
    let chi_squared = excess.dot(&solved);
    Some(LogRank {
        chi_squared,
        degrees,
        p_value: chi_squared_tail(chi_squared, degrees),
    })
}

/// The area under the curve at a time: the share of pairs of a sample with an event by then and
/// one without an event until then, in which the first has the higher risk, ties one half. Each
/// event counts with the inverse of its probability of being observed (cumulative cases,
/// dynamic controls; Uno et al. 2007). `None` when there is no such pair, or an event has no
/// such probability.
#[must_use]
pub fn time_dependent_area(time: &[f64], event: &[bool], risk: &[f64], at: f64) -> Option<f64> {
    let observed = staying_observed(time, event);
    let (mut wins, mut weights) = (0.0, 0.0);
    let controls: Vec<usize> = (0..time.len()).filter(|&i| time[i] > at).collect();
    for case in (0..time.len()).filter(|&i| event[i] && time[i] <= at) {
        let probability = observed.before(time[case]);
        if probability <= 0.0 {
            return None;
        }
        let won: f64 = controls
            .iter()
            .map(|&control| match risk[case].total_cmp(&risk[control]) {
                std::cmp::Ordering::Greater => 1.0,
                std::cmp::Ordering::Equal => 0.5,
                std::cmp::Ordering::Less => 0.0,
            })
            .sum();
        wins += won / probability;
        weights += 1.0 / probability;
    }
    let pairs = weights * controls.len() as f64;
    (pairs > 0.0).then(|| wins / pairs)
}

/// The Brier score at a time: the mean of (survived − predicted survival)², each sample weighted
/// by the inverse of its probability of being observed; samples whose observation ended before
/// without an event count 0 (Graf et al. 1999). `None` without samples, or when a probability
/// is 0.
#[must_use]
pub fn time_dependent_brier(
    time: &[f64],
    event: &[bool],
    survival_at: &[f64],
    at: f64,
) -> Option<f64> {
    let terms = brier_terms(time, event, survival_at, at)?;
    (!terms.is_empty()).then(|| terms.iter().sum::<f64>() / terms.len() as f64)
}

/// What each sample adds to n times [`time_dependent_brier`]. `None` when a probability of being
/// observed is 0, or the time is no number.
#[must_use]
pub fn brier_terms(time: &[f64], event: &[bool], survival_at: &[f64], at: f64) -> Option<Vec<f64>> {
    if at.is_nan() {
        return None;
    }
    let observed = staying_observed(time, event);
    let mut terms = vec![0.0; time.len()];
    for i in 0..time.len() {
        let (error, probability) = if time[i] > at {
            (1.0 - survival_at[i], observed.at(at))
        } else if event[i] {
            (survival_at[i], observed.before(time[i]))
        } else {
            continue;
        };
        if probability <= 0.0 {
            return None;
        }
        terms[i] = error * error / probability;
    }
    Some(terms)
}
