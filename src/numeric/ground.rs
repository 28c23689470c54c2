//! A task made ready: weights of the training rows, and the scale of every predictor on them.

use crate::base::work::Work;
use crate::numeric::basis::Basis;
use crate::numeric::error::{FitError, Ingredient, Stop};
use crate::numeric::lanes;
use crate::numeric::predictors::Predictors;
use crate::numeric::task::{Scaling, Task};

/// A predictor counts as constant on the training rows when its standard deviation is below this
/// share of its largest absolute value: thirty units in the last place, the most that rounding
/// makes of a constant.
const CONSTANT: f64 = 30.0 * f64::EPSILON;

/// A predictor whose part outside the unpenalised columns is shorter than this share of itself
/// counts as one of their combinations.
const SPANNED: f64 = 1e-9;

/// A task made ready. No copy of the matrix is made: the scale is carried beside it.
///
/// Letters: m training rows with a weight above zero; v their weights with sum 1; zⱼ the centred
/// and scaled predictor j on them.
pub(crate) struct Ground<'a> {
    pub(crate) predictors: &'a Predictors,
    /// The m training rows.
    pub(crate) rows: Vec<usize>,
    /// v, for the m rows.
    pub(crate) share: Vec<f64>,
    /// √v, for the m rows.
    pub(crate) root: Vec<f64>,
    /// The sum of the sample weights.
    pub(crate) total: f64,
    /// The mean of each predictor on the training rows.
    pub(crate) mean: Vec<f64>,
    /// 1 over the scale of each predictor; 0 for what cannot enter the fit.
    pub(crate) inverse_scale: Vec<f64>,
    factors: Option<&'a [f64]>,
    /// Predictors without a penalty.
    pub(crate) free: Vec<usize>,
    covariates: Vec<Covariate>,
}

/// A covariate on the training rows.
struct Covariate {
    mean: f64,
    scale: f64,
    values: Vec<f64>,
}

/// Which predictors go without a penalty, beside those whose penalty weight is 0.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(crate) enum Penalised {
    /// Only those with a penalty weight of 0.
    ByWeight,
    /// All: the penalty strength is 0.
    None,
}

impl<'a> Ground<'a> {
    /// Checks the task and takes means and scales.
    ///
    /// # Errors
    /// What is wrong with the task, or that the work was called off.
    pub(crate) fn new(
        task: &Task<'a>,
        penalised: Penalised,
        work: &Work<'_>,
    ) -> Result<Self, Stop> {
        task.check()?;
        let rows: Vec<usize> = task
            .rows
            .iter()
            .copied()
            .filter(|&row| task.weight(row) > 0.0)
            .collect();
        let total: f64 = rows.iter().map(|&row| task.weight(row)).sum();
        if rows.is_empty() {
            return Err(FitError::NoRows.into());
        }
        let share: Vec<f64> = rows.iter().map(|&row| task.weight(row) / total).collect();
        let root = share.iter().map(|v| v.sqrt()).collect();
        let mut ground = Self {
            predictors: task.predictors,
            covariates: covariates(task, &rows, &share),
            rows,
            share,
            root,
            total,
            mean: Vec::new(),
            inverse_scale: Vec::new(),
            factors: task.factors,
            free: Vec::new(),
        };
        ground.take_moments(task, work)?;
        let p = task.predictors.n_predictors();
        ground.free = (0..p)
            .filter(|&j| ground.inverse_scale[j] > 0.0)
            .filter(|&j| penalised == Penalised::None || ground.factor(j) == 0.0)
            .collect();
        Ok(ground)
    }

    fn take_moments(&mut self, task: &Task<'_>, work: &Work<'_>) -> Result<(), Stop> {
        let predictors = self.predictors;
        let p = predictors.n_predictors();
        let mut weight = vec![0.0; predictors.n_samples()];
        for (&row, &v) in self.rows.iter().zip(&self.share) {
            weight[row] = v;
        }
        self.mean = vec![0.0; p];
        self.inverse_scale = vec![0.0; p];
        for j in 0..p {
            if j % 4096 == 0 {
                work.check()?;
            }
            if task.columns.is_some_and(|columns| !columns[j]) {
                continue;
            }
            let half = predictors.half_range(j);
            if half == 0.0 {
                continue;
            }
            if !half.is_finite() {
                return Err(FitError::Number {
                    what: Ingredient::Predictors,
                    at: j,
                }
                .into());
            }
            let moments = Moments::of(predictors.column(j), predictors.middle(j), half, &weight);
            let top = (predictors.middle(j).abs() + half).max(moments.mean.abs());
            self.mean[j] = moments.mean;
            let is_constant = moments.sd <= CONSTANT * top || self.has_one_value(j);
            self.inverse_scale[j] = match task.scaling {
                _ if is_constant => 0.0,
                Scaling::UnitVariance => 1.0 / moments.sd,
                Scaling::AsGiven => 1.0,
            };
        }
        Ok(())
    }

    /// Whether a predictor has one value only on the training rows. Cheap: the first two rows
    /// nearly always differ.
    fn has_one_value(&self, j: usize) -> bool {
        let column = self.predictors.column(j);
        let first = column[self.rows[0]];
        self.rows.iter().all(|&row| column[row] == first)
    }

    /// The number of training rows with a weight above zero, m.
    pub(crate) fn n_rows(&self) -> usize {
        self.rows.len()
    }

    /// The penalty weight of a predictor.
    pub(crate) fn factor(&self, j: usize) -> f64 {
        self.factors.map_or(1.0, |factors| factors[j])
    }

    /// 1 over scale and penalty weight, so that |zⱼ'g|/fⱼ = |xⱼ'g| · reach; 0 for what has no
    /// penalty or cannot enter.
    pub(crate) fn reach(&self, j: usize) -> f64 {
        let factor = self.factor(j);
        if factor == 0.0 {
            0.0
        } else {
            self.inverse_scale[j] / factor
        }
    }

    /// Takes a predictor out of the fit.
    pub(crate) fn leave_out(&mut self, j: usize) {
        self.inverse_scale[j] = 0.0;
    }

    /// zⱼ on the training rows.
    pub(crate) fn standardised(&self, j: usize, out: &mut [f64]) {
        let column = self.predictors.column(j);
        let (mean, inverse) = (self.mean[j], self.inverse_scale[j]);
        for (z, &row) in out.iter_mut().zip(&self.rows) {
            *z = (column[row] - mean) * inverse;
        }
    }

    /// √v ∘ zⱼ on the training rows.
    pub(crate) fn weighted(&self, j: usize, out: &mut [f64]) {
        let column = self.predictors.column(j);
        let (mean, inverse) = (self.mean[j], self.inverse_scale[j]);
        if self.rows.len() == column.len() {
            for ((z, x), root) in out.iter_mut().zip(column).zip(&self.root) {
                *z = (x - mean) * inverse * root;
            }
            return;
        }
        for ((z, &row), root) in out.iter_mut().zip(&self.rows).zip(&self.root) {
            *z = (column[row] - mean) * inverse * root;
        }
    }

    /// zⱼ'g for a residual g over all n samples that sums to zero.
    pub(crate) fn correlation(&self, j: usize, g: &[f64]) -> f64 {
        let column = self.predictors.column(j);
        let mean = self.mean[j];
        self.inverse_scale[j]
            * lanes::dispatch(
                #[inline(always)]
                || lanes::shifted_dot_body(column, mean, g),
            )
    }

    /// Spreads values of the training rows over all n samples, less v times their sum. As the
    /// predictors are centred under v, that changes no product with them.
    pub(crate) fn spread_centered(&self, mut values: Vec<f64>) -> Vec<f64> {
        let sum: f64 = values.iter().sum();
        for (value, v) in values.iter_mut().zip(&self.share) {
            *value -= sum * v;
        }
        let mut all = Vec::new();
        self.spread(&values, &mut all);
        all
    }

    /// Spreads values of the training rows over all n samples, with zeros on the others.
    pub(crate) fn spread(&self, values: &[f64], out: &mut Vec<f64>) {
        out.clear();
        out.resize(self.predictors.n_samples(), 0.0);
        for (&row, &value) in self.rows.iter().zip(values) {
            out[row] = value;
        }
    }

    /// The unpenalised columns on the training rows, not weighted: ones, covariates (centred and
    /// scaled), predictors without a penalty (standardised).
    pub(crate) fn free_columns(&self) -> Vec<Vec<f64>> {
        let mut columns = vec![vec![1.0; self.n_rows()]];
        for covariate in &self.covariates {
            columns.push(covariate.values.clone());
        }
        for &j in &self.free {
            let mut column = vec![0.0; self.n_rows()];
            self.standardised(j, &mut column);
            columns.push(column);
        }
        columns
    }

    /// An orthonormal basis of the unpenalised columns times √v.
    pub(crate) fn basis(&self) -> Basis {
        let columns = self.free_columns().into_iter().map(|mut column| {
            for (value, root) in column.iter_mut().zip(&self.root) {
                *value *= root;
            }
            column
        });
        Basis::new(self.n_rows(), columns)
    }

    /// Whether a weighted column has nothing left after the unpenalised ones were taken out.
    pub(crate) fn is_spanned(length: f64, left: f64) -> bool {
        left <= SPANNED * length
    }

    /// From the coefficients of [`free_columns`](Self::free_columns) to those of the covariates in
    /// their own units, and the intercept at the means of all predictors.
    pub(crate) fn covariate_coefficients(&self, free: &[f64]) -> (f64, Vec<f64>) {
        let mut intercept = free[0];
        let mut raw = Vec::with_capacity(self.covariates.len());
        for (covariate, coefficient) in self.covariates.iter().zip(&free[1..]) {
            let slope = coefficient / covariate.scale;
            intercept -= slope * covariate.mean;
            raw.push(slope);
        }
        (intercept, raw)
    }

    /// The number of covariates.
    pub(crate) fn n_covariates(&self) -> usize {
        self.covariates.len()
    }
}

fn covariates(task: &Task<'_>, rows: &[usize], share: &[f64]) -> Vec<Covariate> {
    task.covariates
        .column_iter()
        .map(|column| {
            let raw: Vec<f64> = rows.iter().map(|&row| column[row]).collect();
            let top = raw.iter().fold(0.0_f64, |top, x| top.max(x.abs()));
            let mean = lanes::dot(&raw, share);
            let mut values: Vec<f64> = raw.iter().map(|x| x - mean).collect();
            let squares: Vec<f64> = values.iter().map(|x| x * x).collect();
            let sd = lanes::dot(&squares, share).sqrt();
            if sd <= CONSTANT * top || raw.iter().all(|x| *x == raw[0]) {
                // A constant covariate says nothing beside the intercept; its coefficient is 0.
                values.fill(0.0);
                return Covariate {
                    mean,
                    scale: 1.0,
                    values,
                };
            }
            for value in &mut values {
                *value /= sd;
            }
            Covariate {
                mean,
                scale: sd,
                values,
            }
        })
        .collect()
}

struct Moments {
    mean: f64,
    sd: f64,
}

impl Moments {
    /// Mean and standard deviation under weights with sum 1 that are zero off the training rows.
    fn of(column: &[f64], middle: f64, half: f64, weight: &[f64]) -> Self {
        if !(1e-140..1e140).contains(&half) {
            // Squares would over- or underflow: taken in units of half the range.
            let small: Vec<f64> = column.iter().map(|x| (x - middle) / half).collect();
            let inner = Self::of(&small, 0.0, 1.0, weight);
            return Self {
                mean: middle + half * inner.mean,
                sd: half * inner.sd,
            };
        }
        lanes::dispatch(
            #[inline(always)]
            || {
                // Shifted by the middle first, so that a large offset costs no digits.
                let off = lanes::shifted_dot_body(column, middle, weight);
                let mean = middle + off;
                let square = lanes::shifted_square_body(column, mean, weight);
                Self {
                    mean,
                    sd: square.sqrt(),
                }
            },
        )
    }
}
