//! Least squares on a few columns, by an orthonormal basis of what they span.

/// A column keeps at least this share of its length beside the others, or it is not
/// independent of them.
const LEAST_INDEPENDENT: f64 = 1e-10;

/// What some columns of equal length span.
#[derive(Clone, Debug)]
pub(super) struct Span {
    /// Orthonormal columns.
    basis: Vec<Vec<f64>>,
    /// The given columns in terms of the basis: upper triangular, one list per given column.
    triangle: Vec<Vec<f64>>,
}

impl Span {
    /// The span of some columns; `None` when they are not independent.
    pub(super) fn new(columns: &[Vec<f64>]) -> Option<Self> {
        let mut basis: Vec<Vec<f64>> = Vec::with_capacity(columns.len());
        let mut triangle = Vec::with_capacity(columns.len());
        for column in columns {
            let mut rest = column.clone();
            let mut shares = vec![0.0; basis.len()];
            // Twice is enough (Kahan and Parlett).
            for _ in 0..2 {
                for (share, direction) in shares.iter_mut().zip(&basis) {
                    let part = dot(direction, &rest);
                    *share += part;
                    subtract(&mut rest, direction, part);
                }
            }
            let length = dot(&rest, &rest).sqrt();
            let is_independent = length > LEAST_INDEPENDENT * dot(column, column).sqrt();
            if !is_independent {
                return None;
            }
            rest.iter_mut().for_each(|x| *x /= length);
            shares.push(length);
            basis.push(rest);
            triangle.push(shares);
        }
        Some(Self { basis, triangle })
    }

    /// The coefficients of the given columns that fit `y` best.
    pub(super) fn coefficients(&self, y: &[f64]) -> Vec<f64> {
        let mut rest = y.to_vec();
        let shares: Vec<f64> = self
            .basis
            .iter()
            .map(|direction| {
                let share = dot(direction, &rest);
                subtract(&mut rest, direction, share);
                share
            })
            .collect();
        let mut coefficients = shares;
        for at in (0..coefficients.len()).rev() {
            let value = coefficients[at] / self.triangle[at][at];
            coefficients[at] = value;
            for (above, coefficient) in coefficients[..at].iter_mut().enumerate() {
                *coefficient -= value * self.triangle[at][above];
            }
        }
        coefficients
    }
}

pub(super) fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

fn subtract(from: &mut [f64], direction: &[f64], share: f64) {
    for (value, d) in from.iter_mut().zip(direction) {
        *value -= share * d;
    }
}
