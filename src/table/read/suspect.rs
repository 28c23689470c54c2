//! Numbers that look like codes for missing values: −9, 999 and their like.

/// The codes that files commonly use.
const CODES: [f64; 12] = [
    -9.0, -99.0, -999.0, -9999.0, -99_999.0, -8888.0, 99.0, 999.0, 9999.0, 99_999.0, 999_999.0,
    -888.0,
];

/// How many other values there must be to judge by.
const OTHERS: usize = 3;

/// The codes among a column's values that stand apart from all others.
pub fn codes(values: &[f64]) -> Vec<f64> {
    // A code that stands apart is the smallest or the largest value, or next to another code.
    let (mut least, mut most) = (f64::INFINITY, f64::NEG_INFINITY);
    for &value in values {
        least = least.min(value);
        most = most.max(value);
    }
    if !CODES.contains(&least) && !CODES.contains(&most) {
        return Vec::new();
    }
    let others: Vec<f64> = values
        .iter()
        .copied()
        .filter(|value| !value.is_nan() && !CODES.contains(value))
        .collect();
    if others.len() < OTHERS {
        return Vec::new();
    }
    let least = others.iter().copied().fold(f64::INFINITY, f64::min);
    let most = others.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let range = most - least;
    let stands_apart = |code: f64| {
        if code < 0.0 {
            // Where nothing else is negative, a negative code is strange whatever the range.
            least >= 0.0 || code < least - 3.0 * range
        } else {
            let far = if code >= 999.0 { 0.5 } else { 3.0 };
            code > most + far * range
        }
    };
    CODES
        .into_iter()
        .filter(|&code| values.contains(&code) && stands_apart(code))
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn codes_that_stand_apart_are_suspected() {
        assert_eq!(codes(&[1.2, 3.4, -9.0, 2.0, 0.5]), [-9.0]);
        assert_eq!(
            codes(&[210.0, 300.0, 999.0, 250.0, -999.0]),
            [-999.0, 999.0]
        );
        assert_eq!(codes(&[2.0, 99.0, 5.0, 3.0, f64::NAN]), [99.0]);
    }

    #[test]
    fn ordinary_values_are_not() {
        assert!(codes(&[-20.0, -9.0, 4.0, 8.0]).is_empty());
        assert!(codes(&[800.0, 999.0, 1200.0, 950.0]).is_empty());
        assert!(codes(&[10.0, 99.0, 60.0, 80.0]).is_empty());
        assert!(codes(&[999.0, 1.0]).is_empty());
    }
}
