//! Measures that compare pairs of samples, with how much each sample sways them.
//!
//! Pairs are compared within a held-out part, where both samples were predicted by the same fit. A
//! pooled measure would also compare predictions of fits with different training parts, whose levels
//! differ against what was held out: that pushes it below one half when nothing is to be found
//! (Airola and others 2010). Where no part holds a pair, as with one unit held out at a time, pairs
//! are pooled after all, and it is said.

use crate::eval::kind::fit::measures::Measure;

/// A measure over pairs.
#[derive(Clone, Debug, PartialEq)]
pub struct Ranked {
    /// Which one it is.
    pub measure: Measure,
    /// The share of pairs that are ordered rightly, ties one half.
    pub value: f64,
    /// How much each sample sways it: the sum of squares is its variance (the projection of Hájek;
    /// DeLong, DeLong & Clarke-Pearson 1988, for the area under the curve).
    pub sway: Vec<f64>,
    /// Which pairs were compared.
    pub basis: Basis,
}

/// Which pairs were compared.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Basis {
    /// Those within held-out parts.
    Within,
    /// All.
    Pooled,
}

impl Basis {
    /// In words.
    #[must_use]
    pub const fn words(self) -> &'static str {
        match self {
            Self::Within => "pairs within held-out parts",
            Self::Pooled => "pairs of all parts pooled, because no held-out part holds a pair",
        }
    }
}

/// Compares all pairs for which `order` knows which should be higher.
fn compare(
    score: &[f64],
    part: &[usize],
    should_be_higher: impl Fn(usize, usize) -> bool,
) -> Option<(f64, Vec<f64>, Basis)> {
    let n = score.len();
    let count = |basis: Basis| {
        let mut pairs = 0.0;
        let mut right = vec![0.0; n];
        let mut total = vec![0.0; n];
        for a in 0..n {
            for b in 0..n {
                if a == b || (basis == Basis::Within && part[a] != part[b]) {
                    continue;
                }
                if should_be_higher(a, b) {
                    let won = match score[a].total_cmp(&score[b]) {
                        std::cmp::Ordering::Greater => 1.0,
                        std::cmp::Ordering::Equal => 0.5,
                        std::cmp::Ordering::Less => 0.0,
                    };
                    pairs += 1.0;
                    for sample in [a, b] {
                        right[sample] += won;
                        total[sample] += 1.0;
                    }
                }
            }
        }
        (pairs, right, total)
    };
    let mut basis = Basis::Within;
    let (mut pairs, mut right, mut total) = count(basis);
    if pairs == 0.0 {
        basis = Basis::Pooled;
        (pairs, right, total) = count(basis);
    }
    if pairs == 0.0 {
        return None;
    }
    // Each pair stands in the sums of both of its samples.
    let value = right.iter().sum::<f64>() / 2.0 / pairs;
    let sway = right
        .iter()
        .zip(&total)
        .map(|(right, total)| (right - value * total) / pairs)
        .collect();
    Some((value, sway, basis))
}

/// The area under the curve.
#[must_use]
pub fn area(events: &[bool], score: &[f64], part: &[usize]) -> Option<Ranked> {
    let (value, sway, basis) = compare(score, part, |a, b| events[a] && !events[b])?;
    Some(Ranked {
        measure: Measure::Area,
        value,
        sway,
        basis,
    })
}

/// The mean of the areas of each class against the rest.
#[must_use]
pub fn areas(class: &[usize], scores: &[Vec<f64>], part: &[usize]) -> Option<Ranked> {
    let k = scores.len() as f64;
    let mut mean = Ranked {
        measure: Measure::Area,
        value: 0.0,
        sway: vec![0.0; class.len()],
        basis: Basis::Within,
    };
    for (own, score) in scores.iter().enumerate() {
        let (value, sway, basis) = compare(score, part, |a, b| class[a] == own && class[b] != own)?;
        mean.value += value / k;
        for (mean, sway) in mean.sway.iter_mut().zip(&sway) {
            *mean += sway / k;
        }
        if basis == Basis::Pooled {
            mean.basis = basis;
        }
    }
    Some(mean)
}

/// Harrell's concordance (Harrell and others 1982, 1996).
#[must_use]
pub fn concordance(
    time: &[f64],
    event: &[bool],
    risk: &[f64],
    part: &[usize],
    stratum: &[usize],
) -> Option<Ranked> {
    let (value, sway, basis) = compare(risk, part, |first, later| {
        event[first]
            && stratum[first] == stratum[later]
            && (time[later] > time[first] || (time[later] == time[first] && !event[later]))
    })?;
    Some(Ranked {
        measure: Measure::Concordance,
        value,
        sway,
        basis,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numeric::measure;

    #[test]
    fn within_one_part_the_measures_are_the_usual_ones() {
        let events = [true, false, true, false, false, true, false];
        let score = [0.9, 0.2, 0.4, 0.4, 0.1, 0.3, 0.35];
        let found = area(&events, &score, &[0; 7]).unwrap();
        assert_eq!(
            Some(found.value),
            measure::area_under_curve(&events, &score)
        );
        let time = [4.0, 9.0, 2.0, 4.0, 7.0, 5.0, 5.0];
        let found = concordance(&time, &events, &score, &[0; 7], &[0; 7]).unwrap();
        let counts = measure::concordance(&time, &events, &score);
        assert!((found.value - counts.value().unwrap()).abs() < 1e-15);
    }

    #[test]
    fn the_sway_of_samples_is_the_variance_of_delong() {
        // Structural components by hand: events 0.8, 0.4 against others 0.5, 0.3, 0.1 give
        // V10 = (1, 2/3) and V01 = (1/2, 1, 1), the area 5/6.
        let events = [true, true, false, false, false];
        let score = [0.8, 0.4, 0.5, 0.3, 0.1];
        let found = area(&events, &score, &[0; 5]).unwrap();
        assert!((found.value - 5.0 / 6.0).abs() < 1e-15);
        let square: f64 = found.sway.iter().map(|sway| sway * sway).sum();
        let v10 = 2.0 * (1.0_f64 / 6.0).powi(2) / 4.0;
        let v01 = ((1.0_f64 / 3.0).powi(2) + 2.0 * (1.0_f64 / 6.0).powi(2)) / 9.0;
        assert!((square - v10 - v01).abs() < 1e-15);
    }

    #[test]
    fn predictions_of_different_fits_are_compared_only_where_nothing_else_is_left() {
        // Two empty models at different levels: within parts all is tied, pooled it seems worse.
        let events = [true, false, false, true, true, false];
        let score = [0.3, 0.3, 0.3, 0.6, 0.6, 0.6];
        let within = area(&events, &score, &[0, 0, 0, 1, 1, 1]).unwrap();
        assert_eq!((within.value, within.basis), (0.5, Basis::Within));
        let alone = area(&events, &score, &[0, 1, 2, 3, 4, 5]).unwrap();
        assert_eq!(alone.basis, Basis::Pooled);
        assert_eq!(area(&[true; 3], &score[..3], &[0; 3]), None);
    }
}
