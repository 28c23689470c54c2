//! Counts: expected against observed.

/// Measures of n expected counts.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CountMeasures {
    /// How many samples.
    pub n: usize,
    /// Σ 2·(y·log(y/μ) − (y − μ)), with 0·log 0 = 0.
    pub deviance: f64,
    /// Deviance over n.
    pub mean_deviance: f64,
    /// 1 − deviance over that of the mean count for everyone. `None` when counts do not vary.
    pub deviance_explained: Option<f64>,
    /// Mean of expected minus observed.
    pub bias: f64,
}

/// The Poisson deviance of expected counts. Infinite when 0 was expected and something came.
#[must_use]
pub fn poisson_deviance(observed: &[f64], expected: &[f64]) -> f64 {
    observed
        .iter()
        .zip(expected)
        .map(|(&y, &mu)| {
            let log = if y > 0.0 { y * (y / mu).ln() } else { 0.0 };
            2.0 * (log - (y - mu))
        })
        .sum()
}

impl CountMeasures {
    /// Compares expected with observed counts; `None` when there are none, or when one of them
    /// is negative or not finite.
    ///
    /// # Panics
    /// When there are not as many expected as observed counts.
    #[must_use]
    pub fn of(observed: &[f64], expected: &[f64]) -> Option<Self> {
        assert_eq!(observed.len(), expected.len(), "one expected count each");
        let is_sound = |counts: &[f64]| counts.iter().all(|x| x.is_finite() && *x >= 0.0);
        if observed.is_empty() || !is_sound(observed) || !is_sound(expected) {
            return None;
        }
        let n = observed.len() as f64;
        let mean = observed.iter().sum::<f64>() / n;
        let deviance = poisson_deviance(observed, expected);
        let varies = observed.iter().any(|&y| y != observed[0]);
        let of_mean = poisson_deviance(observed, &vec![mean; observed.len()]);
        Some(Self {
            n: observed.len(),
            deviance,
            mean_deviance: deviance / n,
            deviance_explained: varies.then(|| 1.0 - deviance / of_mean),
            bias: expected.iter().sum::<f64>() / n - mean,
        })
    }
}
