//! The predictor matrix of all samples, with what every fit on it shares.

use crate::numeric::lanes;
use crate::numeric::matrix::Matrix;
use crate::numeric::panels::Panels;
use std::sync::{Arc, OnceLock};

/// The predictor matrix of all samples (n × p) with what every fit on it shares: facts on each
/// column, and the 8-bit copy that makes scans cheap (built when a fit first needs it).
///
/// Immutable, and cheap to clone: clones share the matrix. Parts, shares and resamples all use
/// the same one, and none of them copies it.
#[derive(Clone, Debug)]
pub struct Predictors {
    inner: Arc<Inner>,
}

#[derive(Debug)]
struct Inner {
    x: Arc<Matrix>,
    /// Middle between the smallest and the largest value of each column.
    middle: Vec<f64>,
    /// Half the distance between them; NaN for a column with a value that is not finite.
    half_range: Vec<f64>,
    panels: OnceLock<Panels>,
}

impl Predictors {
    /// Takes the predictor matrix, samples down the rows.
    ///
    /// Values that are not finite are accepted here; a fit that has such a column among its
    /// candidates answers with [`FitError::Number`](crate::numeric::error::FitError::Number).
    #[must_use]
    pub fn new(x: impl Into<Arc<Matrix>>) -> Self {
        let x: Arc<Matrix> = x.into();
        let n = x.nrows();
        let (middle, half_range) = if n == 0 {
            (vec![0.0; x.ncols()], vec![0.0; x.ncols()])
        } else {
            x.as_slice().chunks_exact(n).map(middle_and_half).unzip()
        };
        Self {
            inner: Arc::new(Inner {
                x,
                middle,
                half_range,
                panels: OnceLock::new(),
            }),
        }
    }

    /// The matrix itself.
    #[must_use]
    pub fn x(&self) -> &Matrix {
        &self.inner.x
    }

    /// The number of samples, n.
    #[must_use]
    pub fn n_samples(&self) -> usize {
        self.inner.x.nrows()
    }

    /// The number of predictors, p.
    #[must_use]
    pub fn n_predictors(&self) -> usize {
        self.inner.x.ncols()
    }

    /// All n values of one predictor.
    #[must_use]
    pub fn column(&self, predictor: usize) -> &[f64] {
        let n = self.n_samples();
        &self.inner.x.as_slice()[predictor * n..(predictor + 1) * n]
    }

    /// The middle between the smallest and largest value of a predictor.
    pub(crate) fn middle(&self, predictor: usize) -> f64 {
        self.inner.middle[predictor]
    }

    /// Half the range of a predictor over all samples; NaN when a value is not finite.
    pub(crate) fn half_range(&self, predictor: usize) -> f64 {
        self.inner.half_range[predictor]
    }

    /// The 8-bit copy, built on the first call.
    pub(crate) fn panels(&self) -> &Panels {
        self.inner
            .panels
            .get_or_init(|| Panels::new(&self.inner.x, &self.inner.middle, &self.inner.half_range))
    }
}

fn middle_and_half(column: &[f64]) -> (f64, f64) {
    let (low, high, spoilt) = lanes::dispatch(
        #[inline(always)]
        || lanes::extremes_body(column),
    );
    if spoilt == 0.0 {
        // Halved first, so that the largest numbers do not overflow.
        let middle = 0.5 * low + 0.5 * high;
        (middle, (high - middle).max(middle - low))
    } else {
        (0.0, f64::NAN)
    }
}
