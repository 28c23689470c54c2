//! The error curve over held-out parts, and the strength that a rule picks.

/// The rules that choose a strength.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Rule {
    /// The lowest mean held-out error.
    LowestError,
    /// The largest strength whose mean held-out error is at most the lowest plus its standard
    /// error (Breiman, Friedman, Olshen & Stone 1984, for trees).
    OneStandardError,
    /// The lowest generalised cross-validation value (Golub, Heath & Wahba 1979):
    /// mean residual² / (1 − df/n)², df with the intercept and the covariates.
    GeneralisedCrossValidation,
    /// The lowest extended Bayesian information criterion (Chen & Chen 2008; 2012 for other outcomes
    /// than measured ones): deviance + k·log n + 2γ·log C(m, k), k the effective degrees of freedom
    /// of the penalised coefficients and m how many of these there are. The deviance of a measured
    /// outcome is n·log(mean residual²); for times n is the number of events (Volinsky & Raftery
    /// 2000).
    ExtendedBic {
        /// γ, from 0 to 1.
        gamma: f64,
    },
    /// The strength given, which is one of those that are compared.
    Given {
        /// The strength.
        strength: f64,
    },
}

impl Rule {
    /// Whether the rule needs held-out parts.
    #[must_use]
    pub const fn needs_parts(self) -> bool {
        match self {
            Self::LowestError | Self::OneStandardError | Self::Given { .. } => true,
            Self::GeneralisedCrossValidation | Self::ExtendedBic { .. } => false,
        }
    }
}

/// The mean error of each strength of a range.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    /// The lasso share of these fits.
    pub share: f64,
    /// The strengths, falling.
    pub strengths: Vec<f64>,
    /// The criterion of each strength: mean held-out error, or the value of a criterion that
    /// needs no parts.
    pub errors: Vec<f64>,
    /// The standard error of each held-out error; empty for a criterion that needs no parts.
    ///
    /// Within one repeat: the standard deviation of the parts' mean errors (divisor parts − 1)
    /// over √parts. Over repeats: the mean of these, because repeats see the same samples again
    /// and do not make the error better known.
    pub standard_errors: Vec<f64>,
}

/// The error of one held-out part at every strength, as a ratio of `sums` to `weight`.
///
/// A measure that is a mean over samples has the part's mean and the weight 1, so that every part
/// counts the same; the partial likelihood is weighed by events and the concordance by pairs.
#[derive(Clone, Debug, PartialEq)]
pub struct PartErrors {
    /// One for each strength.
    pub sums: Vec<f64>,
    /// What they are to be divided by; 0 where the part says nothing.
    pub weight: f64,
}

/// Gathers the errors of held-out parts into a curve.
///
/// `by_repeat[r][k][j]` is the mean error of strength j in held-out part k of repeat r. The
/// curve is the plain mean over the parts of a repeat, then over repeats.
#[must_use]
pub fn curve(share: f64, strengths: &[f64], by_repeat: &[Vec<Vec<f64>>]) -> Curve {
    let each = |sums: &Vec<f64>| PartErrors {
        sums: sums.clone(),
        weight: 1.0,
    };
    let weighed: Vec<Vec<PartErrors>> = by_repeat
        .iter()
        .map(|parts| parts.iter().map(each).collect())
        .collect();
    curve_of_parts(share, strengths, &weighed)
}

/// Gathers the errors of held-out parts into a curve: for each repeat the sum of the parts' sums
/// over the sum of their weights, then the mean over repeats.
///
/// The standard error of such a ratio is linearised: of part deviations dₖ = sumₖ − ratio·weightₖ,
/// √(K/(K − 1) Σ dₖ²)/Σ weightₖ (Cochran 1977, chapter 6); with equal weights the usual standard
/// error of a mean.
#[must_use]
pub fn curve_of_parts(share: f64, strengths: &[f64], by_repeat: &[Vec<PartErrors>]) -> Curve {
    let n_repeats = by_repeat.len() as f64;
    let mut errors = vec![0.0; strengths.len()];
    let mut standard_errors = vec![0.0; strengths.len()];
    for parts in by_repeat {
        let known = || parts.iter().filter(|part| part.weight > 0.0);
        let n_parts = known().count() as f64;
        let weight: f64 = known().map(|part| part.weight).sum();
        for at in 0..strengths.len() {
            let ratio = known().map(|part| part.sums[at]).sum::<f64>() / weight;
            let square = known()
                .map(|part| (part.sums[at] - ratio * part.weight).powi(2))
                .sum::<f64>();
            errors[at] += ratio / n_repeats;
            standard_errors[at] += (square * n_parts / (n_parts - 1.0)).sqrt() / weight / n_repeats;
        }
    }
    Curve {
        share,
        strengths: strengths.to_vec(),
        errors,
        standard_errors,
    }
}

/// The strength that a rule picks from a curve: its place in the range.
///
/// Equal errors go to the larger strength. `None` when no error is a number.
#[must_use]
pub fn pick(rule: Rule, curve: &Curve) -> Option<usize> {
    let lowest = lowest(&curve.errors)?;
    match rule {
        Rule::LowestError | Rule::GeneralisedCrossValidation | Rule::ExtendedBic { .. } => {
            Some(lowest)
        }
        Rule::OneStandardError => {
            let limit = curve.errors[lowest] + curve.standard_errors[lowest];
            curve.errors.iter().position(|error| *error <= limit)
        }
        Rule::Given { strength } => curve.strengths.iter().position(|tried| *tried == strength),
    }
}

/// The place of the lowest error; the first of equals, which is the largest strength.
#[must_use]
pub fn lowest(errors: &[f64]) -> Option<usize> {
    let mut best: Option<usize> = None;
    for (at, error) in errors.iter().enumerate() {
        if error.is_finite() && best.is_none_or(|best| *error < errors[best]) {
            best = Some(at);
        }
    }
    best
}

/// Generalised cross-validation of a gaussian fit; `df` counts intercept and covariates.
/// Infinite where the fit has no degrees of freedom left.
#[must_use]
pub fn generalised_cross_validation(mean_square: f64, n: f64, df: f64) -> f64 {
    let left = 1.0 - df / n;
    if left <= 1e-12 {
        f64::INFINITY
    } else {
        mean_square / left.powi(2)
    }
}

/// The extended Bayesian information criterion of a fit whose deviance is given, with `k` effective
/// degrees of freedom among `m` penalised coefficients and `n` samples (for times events). Infinite
/// where the fit is free to follow every sample.
#[must_use]
pub fn extended_bic(deviance: f64, n: f64, k: f64, m: f64, gamma: f64) -> f64 {
    if k >= n - 1.0 || !deviance.is_finite() {
        return f64::INFINITY;
    }
    deviance + k * n.ln() + 2.0 * gamma * log_choose(m, k)
}

/// log C(p, k) for real k from 0 to p, by the gamma function.
fn log_choose(p: f64, k: f64) -> f64 {
    let k = k.clamp(0.0, p);
    log_gamma(p + 1.0) - log_gamma(k + 1.0) - log_gamma(p - k + 1.0)
}

/// log Γ(x) for x ≥ 1 by Stirling's series after shifting x above 8; relative error below 1e-10.
fn log_gamma(x: f64) -> f64 {
    let mut shift = 0.0;
    let mut x = x;
    while x < 8.0 {
        shift += x.ln();
        x += 1.0;
    }
    let series = 1.0 / (12.0 * x) - 1.0 / (360.0 * x.powi(3)) + 1.0 / (1260.0 * x.powi(5))
        - 1.0 / (1680.0 * x.powi(7));
    (x - 0.5) * x.ln() - x + 0.5 * (2.0 * std::f64::consts::PI).ln() + series - shift
}

#[cfg(test)]
mod tests {
    use super::*;

    fn curve_of(errors: &[f64], standard_errors: &[f64]) -> Curve {
        Curve {
            share: 1.0,
            strengths: (0..errors.len())
                .map(|at| 0.5_f64.powi(at as i32))
                .collect(),
            errors: errors.to_vec(),
            standard_errors: standard_errors.to_vec(),
        }
    }

    #[test]
    fn one_standard_error_takes_the_largest_strength_within_it() {
        let curve = curve_of(&[9.0, 4.4, 4.0, 4.2], &[0.5; 4]);
        assert_eq!(pick(Rule::LowestError, &curve), Some(2));
        assert_eq!(pick(Rule::OneStandardError, &curve), Some(1));
    }

    #[test]
    fn equal_errors_go_to_the_larger_strength_and_nan_is_never_chosen() {
        let curve = curve_of(&[f64::NAN, 3.0, 3.0, 5.0], &[0.0; 4]);
        assert_eq!(pick(Rule::LowestError, &curve), Some(1));
        assert_eq!(
            pick(Rule::LowestError, &curve_of(&[f64::NAN], &[0.0])),
            None
        );
    }

    #[test]
    fn repeats_do_not_shrink_the_standard_error() {
        let parts = vec![vec![1.0], vec![3.0]];
        let once = curve(1.0, &[1.0], std::slice::from_ref(&parts));
        let often = curve(1.0, &[1.0], &vec![parts; 5]);
        assert_eq!(once.errors, often.errors);
        // Two parts at 1 and 3: standard deviation √2, over √2.
        assert!((once.standard_errors[0] - 1.0).abs() < 1e-12);
        assert!((often.standard_errors[0] - 1.0).abs() < 1e-12);
    }

    #[test]
    fn log_choose_agrees_with_whole_numbers() {
        // C(10, 3) = 120 and C(1107, 2) = 612,171 by counting.
        assert!((log_choose(10.0, 3.0) - 120.0_f64.ln()).abs() < 1e-9);
        assert!((log_choose(1107.0, 2.0) - 612_171.0_f64.ln()).abs() < 1e-8);
    }
}
