//! Measured quantities: predicted against observed.

/// Agreement of n predictions with n observed values.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Agreement {
    /// How many pairs.
    pub n: usize,
    /// Root of the mean squared error, √(Σ(ŷ − y)²/n).
    pub rmse: f64,
    /// Mean absolute error, Σ|ŷ − y|/n.
    pub mae: f64,
    /// Median of the absolute errors.
    pub median_absolute_error: f64,
    /// Largest absolute error.
    pub largest_absolute_error: f64,
    /// Mean of prediction minus observed.
    pub bias: f64,
    /// Standard error of prediction: standard deviation, divisor n − 1, of prediction minus
    /// observed (so corrected for bias). `None` for n = 1.
    pub sep: Option<f64>,
    /// 1 − Σ(ŷ − y)²/Σ(y − ȳ)², with ȳ the mean of these observed values. `None` when they are
    /// all the same. [`r_squared`] takes another mean.
    pub r_squared: Option<f64>,
    /// Correlation of Pearson. `None` when either side does not vary.
    pub pearson: Option<f64>,
    /// Correlation of Spearman (of ranks, ties share their mean rank).
    pub spearman: Option<f64>,
    /// Concordance of Lin (1989), divisor n: 2 s_xy / (s_x² + s_y² + (x̄ − ȳ)²).
    pub concordance: Option<f64>,
    /// Least-squares line of observed on predicted: 1 and 0 when predictions are calibrated.
    pub observed_on_predicted: Option<Line>,
    /// Least-squares line of predicted on observed; flatter than 1 where predictions shrink.
    pub predicted_on_observed: Option<Line>,
    /// Standard deviation of the observed values, divisor n − 1.
    pub observed_sd: Option<f64>,
    /// Lower and upper quartile of the observed values (type 7).
    pub observed_quartiles: (f64, f64),
    /// Standard deviation of the observed values over RMSE.
    pub rpd: Option<f64>,
    /// Standard deviation of the observed values over SEP.
    pub rpd_of_sep: Option<f64>,
    /// Distance of the observed quartiles over RMSE (Bellon-Maurel et al. 2010).
    pub rpiq: Option<f64>,
}

/// A straight line.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Line {
    /// The value at 0.
    pub intercept: f64,
    /// The rise per unit.
    pub slope: f64,
}

/// What R² holds the squared errors against.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Baseline<'a> {
    /// The mean of the observed values themselves.
    ObservedMean,
    /// One prediction for each sample, such as the mean of the outcome in its training part.
    Predictions(&'a [f64]),
}

impl Agreement {
    /// Compares predictions with observed values; `None` when there are none, or when one of
    /// them is not finite.
    ///
    /// # Panics
    /// When there are not as many predictions as observed values.
    #[must_use]
    pub fn of(observed: &[f64], predicted: &[f64]) -> Option<Self> {
        assert_eq!(observed.len(), predicted.len(), "one prediction per sample");
        let is_finite = |values: &[f64]| values.iter().all(|x| x.is_finite());
        if observed.is_empty() || !is_finite(observed) || !is_finite(predicted) {
            return None;
        }
        let n = observed.len() as f64;
        let errors: Vec<f64> = predicted.iter().zip(observed).map(|(p, y)| p - y).collect();
        let mut absolute: Vec<f64> = errors.iter().map(|e| e.abs()).collect();
        absolute.sort_by(f64::total_cmp);
        let moments = Moments::of(predicted, observed);
        let rmse = (errors.iter().map(|e| e * e).sum::<f64>() / n).sqrt();
        let bias = mean(&errors);
        let sep = (observed.len() > 1).then(|| {
            (errors.iter().map(|e| (e - bias) * (e - bias)).sum::<f64>() / (n - 1.0)).sqrt()
        });
        let observed_sd = (observed.len() > 1).then(|| (moments.yy / (n - 1.0)).sqrt());
        let observed_quartiles = quartiles(observed);
        let ratio = |top: Option<f64>, below: Option<f64>| match (top, below) {
            (Some(top), Some(below)) if below > 0.0 => Some(top / below),
            (Some(_) | None, Some(_) | None) => None,
        };
        let iq = observed_quartiles.1 - observed_quartiles.0;
        Some(Self {
            n: observed.len(),
            rmse,
            mae: mean(&absolute),
            median_absolute_error: quantile(&absolute, 0.5),
            largest_absolute_error: *absolute.last().expect("there is an error"),
            bias,
            sep,
            r_squared: r_squared(observed, predicted, Baseline::ObservedMean),
            pearson: moments.correlation(),
            spearman: spearman(observed, predicted),
            concordance: moments.concordance(n),
            observed_on_predicted: moments.line(),
            predicted_on_observed: moments.turned().line(),
            observed_sd,
            observed_quartiles,
            rpd: ratio(observed_sd, Some(rmse)),
            rpd_of_sep: ratio(observed_sd, sep),
            rpiq: ratio(Some(iq), Some(rmse)),
        })
    }
}

/// 1 − Σ(y − ŷ)² / Σ(y − baseline)². `None` when the baseline is without error.
///
/// # Panics
/// When there are not as many predictions as observed values.
#[must_use]
pub fn r_squared(observed: &[f64], predicted: &[f64], baseline: Baseline<'_>) -> Option<f64> {
    let error = |of: &dyn Fn(usize) -> f64| -> f64 {
        (0..observed.len())
            .map(|at| (observed[at] - of(at)).powi(2))
            .sum()
    };
    let total = match baseline {
        Baseline::ObservedMean => {
            let mean = mean(observed);
            // Equal values may differ from their mean by rounding.
            if observed.iter().all(|&y| y == observed[0]) {
                return None;
            }
            error(&|_| mean)
        }
        Baseline::Predictions(values) => {
            assert_eq!(values.len(), observed.len(), "one baseline per sample");
            error(&|at| values[at])
        }
    };
    assert_eq!(observed.len(), predicted.len(), "one prediction per sample");
    (total > 0.0).then(|| 1.0 - error(&|at| predicted[at]) / total)
}

/// Correlation of the ranks of two lists; equal values share their mean rank. `None` when
/// either does not vary.
#[must_use]
pub fn spearman(a: &[f64], b: &[f64]) -> Option<f64> {
    Moments::of(&ranks(a), &ranks(b)).correlation()
}

/// The quantile at `share` (0 to 1) of some finite values: linear interpolation at place
/// (n − 1)·share (type 7 of Hyndman and Fan 1996). Not a number without values.
#[must_use]
pub fn quantile(values: &[f64], share: f64) -> f64 {
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    let Some(last) = sorted.len().checked_sub(1) else {
        return f64::NAN;
    };
    let place = share.clamp(0.0, 1.0) * last as f64;
    let below = place.floor() as usize;
    let above = (below + 1).min(last);
    sorted[below] + (place - below as f64) * (sorted[above] - sorted[below])
}

/// Lower and upper quartile (type 7).
#[must_use]
pub fn quartiles(values: &[f64]) -> (f64, f64) {
    (quantile(values, 0.25), quantile(values, 0.75))
}

/// Ranks from 1; equal values share their mean rank.
pub(super) fn ranks(values: &[f64]) -> Vec<f64> {
    let mut order: Vec<usize> = (0..values.len()).collect();
    order.sort_by(|&a, &b| values[a].total_cmp(&values[b]));
    let mut ranks = vec![0.0; values.len()];
    let mut start = 0;
    for group in order.chunk_by(|&a, &b| values[a] == values[b]) {
        let end = start + group.len();
        for &at in group {
            ranks[at] = 0.5 * (start + 1 + end) as f64;
        }
        start = end;
    }
    ranks
}

pub(super) fn mean(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len() as f64
}

/// Means and centred sums of squares and products of pairs (x, y).
#[derive(Clone, Copy)]
struct Moments {
    mean_x: f64,
    mean_y: f64,
    xx: f64,
    yy: f64,
    xy: f64,
}

impl Moments {
    fn of(x: &[f64], y: &[f64]) -> Self {
        let (mean_x, mean_y) = (mean(x), mean(y));
        let mut moments = Self {
            mean_x,
            mean_y,
            xx: 0.0,
            yy: 0.0,
            xy: 0.0,
        };
        for (x, y) in x.iter().zip(y) {
            moments.xx += (x - mean_x) * (x - mean_x);
            moments.yy += (y - mean_y) * (y - mean_y);
            moments.xy += (x - mean_x) * (y - mean_y);
        }
        // Sums of squares at the level of rounding of the mean are no variation.
        let count = x.len() as f64;
        let floor = |mean: f64| count * (1e-15 * mean).powi(2);
        if moments.xx <= floor(mean_x) {
            moments.xx = 0.0;
        }
        if moments.yy <= floor(mean_y) {
            moments.yy = 0.0;
        }
        moments
    }

    fn turned(self) -> Self {
        Self {
            mean_x: self.mean_y,
            mean_y: self.mean_x,
            xx: self.yy,
            yy: self.xx,
            xy: self.xy,
        }
    }

    /// The line of y on x.
    fn line(self) -> Option<Line> {
        (self.xx > 0.0).then(|| {
            let slope = self.xy / self.xx;
            Line {
                intercept: self.mean_y - slope * self.mean_x,
                slope,
            }
        })
    }

    fn correlation(self) -> Option<f64> {
        (self.xx > 0.0 && self.yy > 0.0)
            .then(|| (self.xy / (self.xx.sqrt() * self.yy.sqrt())).clamp(-1.0, 1.0))
    }

    fn concordance(self, n: f64) -> Option<f64> {
        let shift = (self.mean_x - self.mean_y).powi(2);
        let below = self.xx / n + self.yy / n + shift;
        (self.xx > 0.0 && self.yy > 0.0).then(|| 2.0 * self.xy / n / below)
    }
}
