//! The cumulative hazard of a fit to times, from which shares without the event follow.

/// Breslow's estimate of the cumulative hazard at a linear predictor of zero, stratum by stratum:
///
/// ```text
/// H(t) = Σ over event times s ≤ t of ( weight of the events at s ) / Σ over the risk set of w·exp η
/// ```
///
/// (Breslow 1974). It goes with both ways of counting tied events.
#[derive(Clone, Debug, PartialEq)]
pub struct Hazard {
    /// For each stratum that has an event: its name, its event times rising, and H from each on.
    strata: Vec<(usize, Vec<f64>, Vec<f64>)>,
}

impl Hazard {
    /// Estimates the hazard from time, event and stratum, linear predictor and weight of each
    /// sample.
    #[must_use]
    pub fn of(known: &[(f64, bool, usize)], eta: &[f64], weights: &[f64]) -> Self {
        let mut order: Vec<usize> = (0..known.len()).collect();
        order.sort_by(|&a, &b| {
            known[a]
                .2
                .cmp(&known[b].2)
                .then(known[b].0.total_cmp(&known[a].0))
                .then(a.cmp(&b))
        });
        let mut strata = Vec::new();
        for own in order.chunk_by(|&a, &b| known[a].2 == known[b].2) {
            // From the latest time to the earliest the risk set only grows.
            let mut at_risk = 0.0;
            let mut steps: Vec<(f64, f64)> = Vec::new();
            for same in own.chunk_by(|&a, &b| known[a].0 == known[b].0) {
                at_risk += same.iter().map(|&i| weights[i] * eta[i].exp()).sum::<f64>();
                let events: f64 = same
                    .iter()
                    .filter(|&&i| known[i].1)
                    .map(|&i| weights[i])
                    .sum();
                if events > 0.0 {
                    steps.push((known[same[0]].0, events / at_risk));
                }
            }
            if steps.is_empty() {
                continue;
            }
            steps.reverse();
            let mut sum = 0.0;
            let cumulative = steps
                .iter()
                .map(|(_, step)| {
                    sum += step;
                    sum
                })
                .collect();
            let times = steps.iter().map(|(time, _)| *time).collect();
            strata.push((known[own[0]].2, times, cumulative));
        }
        Self { strata }
    }

    /// The cumulative hazard of a stratum at a time; that of all strata's mean where a stratum is
    /// not known.
    #[must_use]
    pub fn at(&self, stratum: usize, time: f64) -> f64 {
        let of = |times: &[f64], cumulative: &[f64]| {
            let past = times.partition_point(|step| *step <= time);
            past.checked_sub(1).map_or(0.0, |at| cumulative[at])
        };
        match self.strata.iter().find(|(name, ..)| *name == stratum) {
            Some((_, times, cumulative)) => of(times, cumulative),
            None if self.strata.is_empty() => 0.0,
            None => {
                let sum: f64 = self
                    .strata
                    .iter()
                    .map(|(_, times, cumulative)| of(times, cumulative))
                    .sum();
                sum / self.strata.len() as f64
            }
        }
    }

    /// The share without the event at a time, at a linear predictor.
    #[must_use]
    pub fn survival(&self, stratum: usize, time: f64, eta: f64) -> f64 {
        // 0 · exp ∞ is no number; before the first event everyone is without it.
        let hazard = self.at(stratum, time);
        if hazard == 0.0 {
            1.0
        } else {
            (-hazard * eta.exp()).exp()
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn without_predictors_the_hazard_counts_events_over_those_at_risk() {
        // Five samples, events at 2 (two of five at risk) and 4 (one of two): 2/5 and 2/5 + 1/2.
        let known = [
            (2.0, true, 0),
            (2.0, true, 0),
            (3.0, false, 0),
            (4.0, true, 0),
            (5.0, false, 0),
        ];
        let hazard = Hazard::of(&known, &[0.0; 5], &[1.0; 5]);
        assert_eq!(hazard.at(0, 1.9), 0.0);
        assert!((hazard.at(0, 2.0) - 0.4).abs() < 1e-15);
        assert!((hazard.at(0, 9.0) - 0.9).abs() < 1e-15);
        // A weight of two is the sample twice.
        let twice = Hazard::of(&known[1..], &[0.0; 4], &[2.0, 1.0, 1.0, 1.0]);
        assert_eq!(twice, hazard);
    }
}
