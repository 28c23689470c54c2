//! Tails and quantiles of the two distributions that intervals and tests need.

/// P(Z > z) for a normal Z with mean 0 and standard deviation 1; relative error below 1e-13.
#[must_use]
pub fn normal_tail(z: f64) -> f64 {
    if z.is_nan() {
        return f64::NAN;
    }
    if z < 0.0 {
        return 1.0 - normal_tail(-z);
    }
    // erfc(x) = Γ(1/2, x²)/√π.
    0.5 * gamma_upper(0.5, 0.5 * z * z)
}

/// The z with P(Z ≤ z) = `share` for a normal Z: bisection on [`normal_tail`] sharpened by
/// Newton's method. Infinite at 0 and 1, not a number outside.
#[must_use]
pub fn normal_quantile(share: f64) -> f64 {
    if !(0.0..=1.0).contains(&share) {
        return f64::NAN;
    }
    if share == 0.0 || share == 1.0 {
        return if share == 0.0 {
            f64::NEG_INFINITY
        } else {
            f64::INFINITY
        };
    }
    if share < 0.5 {
        return -normal_quantile_of_tail(share);
    }
    normal_quantile_of_tail(1.0 - share)
}

/// The z ≥ 0 whose tail is `tail`, at most 1/2.
fn normal_quantile_of_tail(tail: f64) -> f64 {
    let (mut low, mut high) = (0.0, 40.0);
    for _ in 0..30 {
        let middle = 0.5 * (low + high);
        if normal_tail(middle) > tail {
            low = middle;
        } else {
            high = middle;
        }
    }
    let mut z: f64 = 0.5 * (low + high);
    for _ in 0..3 {
        let density = (-0.5 * z * z).exp() / (2.0 * std::f64::consts::PI).sqrt();
        if density > 0.0 {
            z += (normal_tail(z) - tail) / density;
        }
    }
    z.max(0.0)
}

/// P(X > x) for a chi-squared X with `degrees` of freedom.
#[must_use]
pub fn chi_squared_tail(x: f64, degrees: usize) -> f64 {
    if degrees == 0 || x.is_nan() {
        return f64::NAN;
    }
    if x <= 0.0 {
        return 1.0;
    }
    gamma_upper(0.5 * degrees as f64, 0.5 * x)
}

/// The regularised upper incomplete gamma function Q(a, x), by its series for small x and its
/// continued fraction (Lentz's method) for large x. `a` is a multiple of 1/2.
fn gamma_upper(a: f64, x: f64) -> f64 {
    if x == 0.0 {
        return 1.0;
    }
    let log_front = a * x.ln() - x - ln_gamma_of_halves(a);
    if x < a + 1.0 {
        let mut term = 1.0 / a;
        let mut sum = term;
        let mut n = a;
        while term > sum * 1e-17 {
            n += 1.0;
            term *= x / n;
            sum += term;
        }
        return (1.0 - log_front.exp() * sum).max(0.0);
    }
    const TINY: f64 = 1e-300;
    let mut b = x + 1.0 - a;
    let mut c = 1.0 / TINY;
    let mut d = 1.0 / b;
    let mut fraction = d;
    for i in 1..10_000 {
        let an = -f64::from(i) * (f64::from(i) - a);
        b += 2.0;
        d = 1.0 / non_zero(an * d + b, TINY);
        c = non_zero(b + an / c, TINY);
        let factor = d * c;
        fraction *= factor;
        if (factor - 1.0).abs() < 1e-16 {
            break;
        }
    }
    log_front.exp() * fraction
}

fn non_zero(value: f64, tiny: f64) -> f64 {
    if value.abs() < tiny { tiny } else { value }
}

/// ln Γ(a) for a multiple of 1/2, by the product from Γ(1/2) = √π or Γ(1) = 1.
fn ln_gamma_of_halves(a: f64) -> f64 {
    let mut at = if a.fract() == 0.0 { 1.0 } else { 0.5 };
    let mut log = if at == 1.0 {
        0.0
    } else {
        0.5 * std::f64::consts::PI.ln()
    };
    while at < a {
        log += f64::ln(at);
        at += 1.0;
    }
    log
}
