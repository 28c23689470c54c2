//! Bounds on how many rarely selected predictors a list of often selected ones holds.
//!
//! In all of them q is the mean number of predictors that one half selects, p the number of
//! predictors, τ the threshold on the selection frequency over B complementary pairs. They bound
//! the expected number of predictors in the list whose *selection probability* in a half is at
//! most θ = q/p; that is not the number of false discoveries.

/// The bound without assumptions: q² / ((2τ − 1) p), for τ above 1/2 (Meinshausen and Bühlmann
/// 2010, theorem 1, where it holds under exchangeability; Shah and Samworth 2013, theorem 1,
/// where it holds always for predictors of low selection probability).
///
/// `None` when τ is not above 1/2 or p is 0.
#[must_use]
pub fn worst_case_bound(q: f64, p: usize, threshold: f64) -> Option<f64> {
    (threshold > 0.5 && threshold <= 1.0 && p > 0)
        .then(|| q * q / ((2.0 * threshold - 1.0) * p as f64))
}

/// The bound when simultaneous selection frequencies have a unimodal distribution (Shah and
/// Samworth 2013, theorem 2): C(τ, B) q²/p with
///
/// ```text
/// C = 1 / (2 (2τ − 1 − 1/(2B)))            τ ≤ 3/4
/// C = 4 (1 − τ + 1/(2B)) / (1 + 1/B)       τ > 3/4
/// ```
///
/// `None` where the theorem does not apply: θ above 1/√3, or τ not above
/// min(1/2 + θ², 1/2 + 1/(2B) + 3θ²/4).
#[must_use]
pub fn unimodal_bound(q: f64, p: usize, threshold: f64, pairs: usize) -> Option<f64> {
    if p == 0 || pairs == 0 {
        return None;
    }
    let (b, theta) = (pairs as f64, q / p as f64);
    let least = (0.5 + theta * theta).min(0.5 + 0.5 / b + 0.75 * theta * theta);
    if !(threshold > least && threshold <= 1.0 && theta <= 1.0 / 3.0_f64.sqrt()) {
        return None;
    }
    let factor = if threshold <= 0.75 {
        0.5 / (2.0 * threshold - 1.0 - 0.5 / b)
    } else {
        4.0 * (1.0 - threshold + 0.5 / b) / (1.0 + 1.0 / b)
    };
    Some(factor * q * theta)
}

/// The bound when simultaneous selection frequencies have a −1/2-concave distribution and
/// selection frequencies a −1/4-concave one (Shah and Samworth 2013, section 3.3):
/// p · min{ D(θ², 2τ − 1, B, −1/2), D(θ, τ, 2B, −1/4) }, with D the largest tail probability.
///
/// `None` where τ is not above 1/2, or p or B is 0.
#[must_use]
pub fn r_concave_bound(q: f64, p: usize, threshold: f64, pairs: usize) -> Option<f64> {
    let is_sound = threshold > 0.5 && threshold <= 1.0 && q >= 0.0;
    if p == 0 || pairs == 0 || !is_sound {
        return None;
    }
    let theta = q / p as f64;
    let of_pairs = largest_tail(theta * theta, 2.0 * threshold - 1.0, pairs, 2);
    let of_halves = largest_tail(theta, threshold, 2 * pairs, 4);
    Some(of_pairs.min(of_halves) * p as f64)
}

/// D(η, t, B, −1/s): the largest P(X ≥ t) over the −1/s-concave distributions on
/// {0, 1/B, …, 1} with mean at most η.
///
/// The extreme distributions are proportional to (a + i)⁻ˢ on 0 … k, with what is missing of
/// the mean put on k + 1. For each k the best a is sought between the values at which k and
/// k + 1 alone give the mean.
fn largest_tail(mean: f64, t: f64, b: usize, s: i32) -> f64 {
    let mean = mean * b as f64;
    // The rounding of t · B must not push a whole number up.
    let from = (t * b as f64 - 1e-9).ceil() as usize;
    let first = (2.0 * mean).ceil() as usize + 1;
    if from < first || first > b {
        return 1.0;
    }
    if mean <= 0.0 {
        return 0.0;
    }
    let mut best: f64 = 0.0;
    let mut upper = offset_for_mean(mean, from, s);
    for k in from..b {
        let lower = offset_for_mean(mean, k + 1, s);
        let tail = |log_a: f64| tail_with_rest(log_a.exp(), mean, from, k, s);
        best = best.max(maximum(lower.min(upper).ln(), lower.max(upper).ln(), tail));
        upper = lower;
    }
    let (whole, tail) = sums(upper, from, b, s);
    best.max(tail / whole)
}

/// The weights (a + i)⁻ˢ, i = 0 … k: their sum, and the sum of those from `from` on.
fn sums(a: f64, from: usize, k: usize, s: i32) -> (f64, f64) {
    let mut whole = 0.0;
    let mut tail = 0.0;
    for i in 0..=k {
        let weight = (a + i as f64).powi(-s);
        whole += weight;
        if i >= from {
            tail += weight;
        }
    }
    (whole, tail)
}

/// The offset a at which the distribution on 0 … k alone has the mean.
fn offset_for_mean(mean: f64, k: usize, s: i32) -> f64 {
    let excess = |a: f64| {
        let (mut sum, mut moment) = (0.0, 0.0);
        for i in 0..=k {
            let weight = (a + i as f64).powi(-s);
            sum += weight;
            moment += i as f64 * weight;
        }
        moment / sum - mean
    };
    // A larger offset flattens the distribution and raises the mean.
    let (mut low, mut high) = (1e-5_f64.ln(), 1e5_f64.ln());
    if excess(low.exp()) >= 0.0 || excess(high.exp()) <= 0.0 {
        return high.exp();
    }
    for _ in 0..80 {
        let middle = 0.5 * (low + high);
        if excess(middle.exp()) < 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
    (0.5 * (low + high)).exp()
}

/// P(X ≥ from) when the weights on 0 … k are scaled so that the rest on k + 1 gives the mean.
fn tail_with_rest(a: f64, mean: f64, from: usize, k: usize, s: i32) -> f64 {
    let end = (k + 1) as f64;
    let (mut below, mut spread) = (0.0, 0.0);
    for i in 0..=k {
        let weight = (a + i as f64).powi(-s);
        spread += (end - i as f64) * weight;
        if i < from {
            below += weight;
        }
    }
    1.0 - (end - mean) / spread * below
}

/// The largest value of a function with one peak between two points: a look at 24 points, then
/// golden-section search (Kiefer 1953) around the best of them.
fn maximum(low: f64, high: f64, f: impl Fn(f64) -> f64) -> f64 {
    const POINTS: usize = 24;
    const GOLDEN: f64 = 0.618_033_988_749_894_8;
    let at = |i: usize| low + (high - low) * i as f64 / POINTS as f64;
    let best = (0..=POINTS)
        .max_by(|&i, &j| f(at(i)).total_cmp(&f(at(j))))
        .expect("there are points");
    let (mut a, mut b) = (at(best.saturating_sub(1)), at((best + 1).min(POINTS)));
    let mut top = f(at(best));
    for _ in 0..60 {
        let (left, right) = (b - GOLDEN * (b - a), a + GOLDEN * (b - a));
        let (f_left, f_right) = (f(left), f(right));
        top = top.max(f_left).max(f_right);
        if f_left > f_right {
            b = right;
        } else {
            a = left;
        }
    }
    top
}
