//! An orthonormal basis of the columns that carry no penalty.

use crate::numeric::lanes;

/// A column counts as a combination of those before it when less than this share of its length
/// lies outside them.
const DEPENDENT: f64 = 1e-10;

/// An orthonormal basis Q of some columns, and the triangle R with `columns = Q R`. Columns that
/// depend on earlier ones are left out; their coefficient is 0.
#[derive(Clone, Debug)]
pub(crate) struct Basis {
    m: usize,
    /// m × rank.
    q: Vec<f64>,
    /// Column k of R, of length k + 1, for each kept column.
    r: Vec<Vec<f64>>,
    kept: Vec<usize>,
    n_columns: usize,
}

impl Basis {
    /// Gram–Schmidt, twice for each column ("twice is enough", Giraud et al. 2005).
    pub(crate) fn new(m: usize, columns: impl Iterator<Item = Vec<f64>>) -> Self {
        let mut basis = Self {
            m,
            q: Vec::new(),
            r: Vec::new(),
            kept: Vec::new(),
            n_columns: 0,
        };
        for mut column in columns {
            let at = basis.n_columns;
            basis.n_columns += 1;
            let before = lanes::norm(&column);
            let mut r = vec![0.0; basis.rank()];
            for _ in 0..2 {
                for (k, r) in r.iter_mut().enumerate() {
                    let along = lanes::dot(basis.vector(k), &column);
                    lanes::add_scaled(-along, basis.vector(k), &mut column);
                    *r += along;
                }
            }
            let left = lanes::norm(&column);
            if basis.rank() < m && left > DEPENDENT * before {
                basis.q.extend(column.iter().map(|value| value / left));
                r.push(left);
                basis.r.push(r);
                basis.kept.push(at);
            }
        }
        basis
    }

    /// One vector of the basis.
    pub(crate) fn vector(&self, k: usize) -> &[f64] {
        &self.q[k * self.m..(k + 1) * self.m]
    }

    /// The number of independent columns.
    pub(crate) fn rank(&self) -> usize {
        self.kept.len()
    }

    /// Takes out of a vector what lies in the span.
    pub(crate) fn project(&self, vector: &mut [f64]) {
        for k in 0..self.rank() {
            let along = lanes::dot(self.vector(k), vector);
            lanes::add_scaled(-along, self.vector(k), vector);
        }
    }

    /// The squared length of each of the m unit vectors inside the span: the diagonal of QQ'.
    pub(crate) fn leverage(&self) -> Vec<f64> {
        let mut sums = vec![0.0; self.m];
        for k in 0..self.rank() {
            for (sum, q) in sums.iter_mut().zip(self.vector(k)) {
                *sum += q * q;
            }
        }
        sums
    }

    /// The least-squares coefficients of all columns for a vector.
    pub(crate) fn coefficients(&self, vector: &[f64]) -> Vec<f64> {
        let mut along: Vec<f64> = (0..self.rank())
            .map(|k| lanes::dot(self.vector(k), vector))
            .collect();
        let mut coefficients = vec![0.0; self.n_columns];
        for k in (0..self.rank()).rev() {
            let value = along[k] / self.r[k][k];
            coefficients[self.kept[k]] = value;
            for (rest, r) in along[..k].iter_mut().zip(&self.r[k]) {
                *rest -= value * r;
            }
        }
        coefficients
    }
}
