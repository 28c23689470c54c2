//! The spectrum of Z'Z: why least squares has no answer, and what a penalty does about it.

use crate::numeric::error::FitError;
use crate::numeric::matrix::{Matrix, add_outer, symmetric_eigen};

/// The eigenvalues of Z'Z, Z the predictors centred (and scaled) on the rows in use.
#[derive(Clone, Debug, PartialEq)]
pub struct Spectrum {
    /// The positive eigenvalues, falling: as many as the rank.
    pub eigenvalues: Vec<f64>,
    /// How many eigenvalues there are: the number of predictors.
    pub n_predictors: usize,
}

/// An eigenvalue below this share of the largest is zero but for rounding: n ε with n = 1,000 and
/// some room for the errors of a Gram matrix.
const ZERO: f64 = 1e-12;

/// The columns of Z: centred on the rows in use and divided by `√mean((x − mean)²)` where asked
/// for; a column that does not vary is all zero.
#[must_use]
pub fn standardised(x: &Matrix, rows: &[usize], column: usize, scale: ColumnScale) -> Vec<f64> {
    let n = x.nrows();
    let values = &x.as_slice()[column * n..(column + 1) * n];
    let m = rows.len() as f64;
    let mean = rows.iter().map(|&row| values[row]).sum::<f64>() / m;
    let mut z: Vec<f64> = rows.iter().map(|&row| values[row] - mean).collect();
    let square = z.iter().map(|v| v * v).sum::<f64>() / m;
    let sd = square.sqrt();
    let varies = sd > 1e-12 * mean.abs() && sd > 0.0;
    let factor = match (varies, scale) {
        (false, _) => 0.0,
        (true, ColumnScale::UnitVariance) => 1.0 / sd,
        (true, ColumnScale::AsGiven) => 1.0,
    };
    z.iter_mut().for_each(|v| *v *= factor);
    z
}

/// Whether columns are divided by their standard deviation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ColumnScale {
    /// Divided, divisor n.
    UnitVariance,
    /// Left.
    AsGiven,
}

/// The spectrum of Z'Z over some rows and columns, through the n × n matrix ZZ', which has the
/// same positive eigenvalues.
///
/// # Errors
/// When the eigendecomposition does not end well.
pub fn spectrum(
    x: &Matrix,
    rows: &[usize],
    columns: &[usize],
    scale: ColumnScale,
) -> Result<Spectrum, FitError> {
    // Columns by the thousand, so that the block stays in the cache.
    const BLOCK: usize = 1024;
    let n = rows.len();
    let mut gram = Matrix::zeros(n, n);
    for block in columns.chunks(BLOCK) {
        let mut values = Vec::with_capacity(n * block.len());
        for &column in block {
            values.extend(standardised(x, rows, column, scale));
        }
        add_outer(&mut gram, &values);
    }
    let (mut eigenvalues, _) = symmetric_eigen(&gram)?;
    eigenvalues.sort_by(|a, b| b.total_cmp(a));
    let largest = eigenvalues.first().copied().unwrap_or(0.0);
    eigenvalues.retain(|value| *value > ZERO * largest);
    eigenvalues.truncate(columns.len());
    Ok(Spectrum {
        eigenvalues,
        n_predictors: columns.len(),
    })
}

impl Spectrum {
    /// The rank of Z.
    #[must_use]
    pub fn rank(&self) -> usize {
        self.eigenvalues.len()
    }

    /// How many eigenvalues are zero.
    #[must_use]
    pub fn n_zero(&self) -> usize {
        self.n_predictors - self.rank()
    }

    /// The condition number of Z'Z + kI: the largest over the smallest eigenvalue, infinite when
    /// the smallest is zero.
    #[must_use]
    pub fn condition(&self, k: f64) -> f64 {
        let Some(largest) = self.eigenvalues.first() else {
            return f64::INFINITY;
        };
        let smallest = if self.n_zero() > 0 {
            0.0
        } else {
            self.eigenvalues[self.rank() - 1]
        };
        if smallest + k <= 0.0 {
            f64::INFINITY
        } else {
            (largest + k) / (smallest + k)
        }
    }

    /// The participation ratio (Σd²)²/Σd⁴ of the eigenvalues d²: how many directions really carry
    /// variation.
    #[must_use]
    pub fn participation_ratio(&self) -> f64 {
        let sum: f64 = self.eigenvalues.iter().sum();
        let squares: f64 = self.eigenvalues.iter().map(|v| v * v).sum();
        if squares > 0.0 {
            sum * sum / squares
        } else {
            0.0
        }
    }
}

/// The correlation of each of `columns` with each of `others` over some rows:
/// columns × others. A column that does not vary has correlation 0 with all.
#[must_use]
pub fn correlations(x: &Matrix, rows: &[usize], columns: &[usize], others: &[usize]) -> Matrix {
    let m = rows.len() as f64;
    let left: Vec<Vec<f64>> = columns
        .iter()
        .map(|&column| standardised(x, rows, column, ColumnScale::UnitVariance))
        .collect();
    let mut result = Matrix::zeros(columns.len(), others.len());
    for (at, &other) in others.iter().enumerate() {
        let right = standardised(x, rows, other, ColumnScale::UnitVariance);
        for (row, z) in left.iter().enumerate() {
            result[(row, at)] = z.iter().zip(&right).map(|(a, b)| a * b).sum::<f64>() / m;
        }
    }
    result
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn wide_data_have_as_many_zero_eigenvalues_as_the_samples_leave() {
        // Four samples of ten predictors: centring leaves three directions.
        let x = Matrix::from_fn(4, 10, |i, j| ((i * 7 + j * j * 3 + i * j) % 11) as f64);
        let columns: Vec<usize> = (0..10).collect();
        let spectrum = spectrum(&x, &[0, 1, 2, 3], &columns, ColumnScale::AsGiven).unwrap();
        assert_eq!((spectrum.rank(), spectrum.n_zero()), (3, 7));
        assert_eq!(spectrum.condition(0.0), f64::INFINITY);
        let k = 2.0;
        let expected = (spectrum.eigenvalues[0] + k) / k;
        assert!((spectrum.condition(k) - expected).abs() < 1e-12);
    }

    #[test]
    fn the_trace_is_that_of_the_scaled_matrix() {
        // Each scaled column has the squared length n, so the eigenvalues sum to n p.
        let x = Matrix::from_fn(5, 3, |i, j| ((i * i + 2 * j * i + j) % 7) as f64);
        let spectrum =
            spectrum(&x, &[0, 1, 2, 3, 4], &[0, 1, 2], ColumnScale::UnitVariance).unwrap();
        assert!((spectrum.eigenvalues.iter().sum::<f64>() - 15.0).abs() < 1e-9);
    }

    #[test]
    fn a_column_correlates_fully_with_its_multiple_and_not_with_a_constant() {
        let x = Matrix::from_fn(4, 3, |i, j| match j {
            0 => i as f64,
            1 => 5.0 - 2.0 * i as f64,
            _ => 7.0,
        });
        let r = correlations(&x, &[0, 1, 2, 3], &[0], &[1, 2]);
        assert!((r[(0, 0)] + 1.0).abs() < 1e-12);
        assert_eq!(r[(0, 1)], 0.0);
    }
}
