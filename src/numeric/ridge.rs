//! Ridge fits to a measured outcome: every strength from one decomposition.
//!
//! ```text
//! minimise  ½ ‖ỹ − Z̃b‖² + λ/2 Σⱼ fⱼ bⱼ²,     Z̃ = √V Z free of the unpenalised columns
//! b = F⁻¹Z̃'α,   (K + λI) α = ỹ,   K = Z̃F⁻¹Z̃' = U D U'
//! ```
//!
//! Wide data: K is one Gram matrix over blocks of columns (m × m), with one eigendecomposition; the
//! coefficients stay in the space of the samples. Narrow or small data: the singular value
//! decomposition of Z̃ itself, which keeps the digits that squaring loses when columns are nearly
//! dependent.

use crate::base::work::Work;
use crate::numeric::basis::Basis;
use crate::numeric::dual::Dual;
use crate::numeric::error::Stop;
use crate::numeric::gaussian::NOTHING_LEFT;
use crate::numeric::ground::Ground;
use crate::numeric::lanes;
use crate::numeric::matrix::{self, Matrix};
use crate::numeric::path::{Info, Params, Point};
use crate::numeric::shortcut::Shortcuts;

/// Columns of one block of the Gram matrix: large enough for the product to run at full speed,
/// small enough to stay in the cache.
pub(crate) const BLOCK: usize = 1024;

/// Columns of one block for m rows: fewer when m is large, so that a stop is answered in time.
pub(crate) fn block_size(m: usize) -> usize {
    (1_000_000_000 / (m * m).max(1)).clamp(64, BLOCK)
}

/// Up to this many predictors a training row, the columns themselves are decomposed.
pub(crate) const NARROW: usize = 4;

/// And so they are up to this many numbers, whatever the shape: spectra are of this size, and their
/// Gram matrix has lost the small directions that count at weak penalties.
pub(crate) const SMALL: usize = 250_000;

/// A singular value below this share of the largest is rounding.
pub(crate) const NO_DIRECTION: f64 = 1e-14;

/// Directions with less than this share of the largest eigenvalue count as empty at strength 0.
pub(crate) const EMPTY: f64 = 1e-13;

/// The fits at all strengths.
pub(crate) struct Fits {
    pub(crate) points: Vec<Point>,
    pub(crate) dual: Option<Dual>,
    pub(crate) shortcuts: Shortcuts,
}

/// The spectrum of the penalised columns on the training rows.
pub(crate) struct Spectrum {
    /// Eigenvalues of K, falling, never negative.
    pub(crate) values: Vec<f64>,
    /// Their vectors, m × r, in the space of the (weighted) training rows.
    vectors: Matrix,
    /// For narrow data: the penalised predictors with the right-hand singular vectors.
    right: Option<(Vec<usize>, Matrix)>,
    /// K before the unpenalised columns were taken out, where there are more than the intercept.
    raw: Option<Matrix>,
    /// The number of penalised predictors.
    n_predictors: usize,
    /// What was decomposed: Z̃F^(−1/2) of narrow data, K of wide data.
    whole: Matrix,
}

impl Spectrum {
    /// Decomposes the penalised predictors of a task.
    ///
    /// # Errors
    /// When called off, or when a decomposition does not end.
    pub(crate) fn new(ground: &Ground<'_>, basis: &Basis, work: &Work<'_>) -> Result<Self, Stop> {
        let penalised: Vec<usize> = (0..ground.predictors.n_predictors())
            .filter(|&j| ground.reach(j) > 0.0)
            .collect();
        let m = ground.n_rows();
        if penalised.len() <= NARROW * m || penalised.len() * m <= SMALL {
            Self::narrow(ground, basis, penalised, work)
        } else {
            Self::wide(ground, basis, &penalised, work)
        }
    }

    fn narrow(
        ground: &Ground<'_>,
        basis: &Basis,
        penalised: Vec<usize>,
        work: &Work<'_>,
    ) -> Result<Self, Stop> {
        let m = ground.n_rows();
        let mut columns = Matrix::zeros(m, penalised.len());
        for (at, &j) in penalised.iter().enumerate() {
            let column = &mut columns.as_mut_slice()[at * m..(at + 1) * m];
            ground.weighted(j, column);
            basis.project(column);
            basis.project(column);
            let root = ground.factor(j).sqrt();
            for value in column {
                *value /= root;
            }
        }
        let (vectors, values, right) = matrix::stoppable_svd(&columns, work)?;
        // Empty directions have arbitrary vectors, which may reach into the unpenalised ones.
        let least = NO_DIRECTION * values.first().copied().unwrap_or(0.0);
        let size = values.partition_point(|s| *s > least).min(m - basis.rank());
        Ok(Self {
            values: values[..size].iter().map(|s| s * s).collect(),
            vectors: vectors.columns(0, size).into_owned(),
            n_predictors: penalised.len(),
            right: Some((penalised, right.columns(0, size).into_owned())),
            raw: None,
            whole: columns,
        })
    }

    fn wide(
        ground: &Ground<'_>,
        basis: &Basis,
        penalised: &[usize],
        work: &Work<'_>,
    ) -> Result<Self, Stop> {
        let m = ground.n_rows();
        let mut gram = Matrix::zeros(m, m);
        let mut block = vec![0.0; m * block_size(m).min(penalised.len())];
        for some in penalised.chunks(block_size(m)) {
            work.check()?;
            let block = &mut block[..m * some.len()];
            for (column, &j) in block.chunks_exact_mut(m).zip(some) {
                ground.weighted(j, column);
                let factor = ground.factor(j);
                if factor != 1.0 {
                    let root = factor.sqrt();
                    for value in column {
                        *value /= root;
                    }
                }
            }
            matrix::add_outer(&mut gram, block);
        }
        gram.fill_upper_triangle_with_lower_triangle();
        let raw = (basis.rank() > 1).then(|| gram.clone());
        for _ in 0..2 {
            for column in gram.as_mut_slice().chunks_exact_mut(m) {
                basis.project(column);
            }
            gram.transpose_mut();
        }
        let turns = Turns::new(m, basis);
        let mut turned = gram.clone();
        turns.turn_both_sides(&mut turned);
        let rank = basis.rank();
        let inner = turned.view((rank, rank), (m - rank, m - rank)).into_owned();
        let (values, vectors) = matrix::stoppable_eigen(inner, work)?;
        let size = values.len();
        let mut full = Matrix::zeros(m, size);
        for at in 0..size {
            let from = size - 1 - at;
            full.view_mut((rank, at), (size, 1))
                .copy_from(&vectors.column(from));
        }
        for column in full.as_mut_slice().chunks_exact_mut(m) {
            turns.back(column);
        }
        Ok(Self {
            values: values.iter().rev().map(|d| d.max(0.0)).collect(),
            vectors: full,
            n_predictors: penalised.len(),
            right: None,
            raw,
            whole: gram,
        })
    }
    /// The duality gaps of coefficients √f·b, p × strengths: Σ (zⱼ'r − λfⱼbⱼ)²/(2λfⱼ), the dual
    /// point being the residual. At strength 0: what of the residual a better fit could remove.
    fn narrow_gaps(&self, target: &Matrix, b: &Matrix, strengths: &[f64]) -> Vec<f64> {
        let mut residuals = matrix::product(&self.whole, b);
        for mut column in residuals.column_iter_mut() {
            column.zip_apply(&target.column(0), |fitted, y| *fitted = y - *fitted);
        }
        let correlations = matrix::transposed_product(&self.whole, &residuals);
        let reducible = matrix::transposed_product(&self.vectors, &residuals);
        let gap = |(at, &strength): (usize, &f64)| {
            if strength == 0.0 {
                return 0.5 * reducible.column(at).norm_squared();
            }
            let apart = correlations.column(at) - strength * b.column(at);
            apart.norm_squared() / (2.0 * strength)
        };
        strengths.iter().enumerate().map(gap).collect()
    }

    /// One step of iterative refinement of (K + λI) α = ỹ, which makes good what the decomposition
    /// has lost when the spectrum is wide.
    fn refine(&self, target: &Matrix, alpha: &mut Matrix, strengths: &[f64]) {
        let fitted = matrix::product(&self.whole, alpha);
        let mut off = Matrix::from_fn(alpha.nrows(), alpha.ncols(), |i, at| {
            target[(i, 0)] - fitted[(i, at)] - strengths[at] * alpha[(i, at)]
        });
        off = matrix::transposed_product(&self.vectors, &off);
        for (mut column, &strength) in off.column_iter_mut().zip(strengths) {
            for (value, d) in column.iter_mut().zip(&self.values) {
                *value = if strength > 0.0 {
                    *value / (d + strength)
                } else {
                    0.0
                };
            }
        }
        *alpha += matrix::product(&self.vectors, &off);
    }

    /// The duality gaps of coefficients Z̃'α: ½‖ỹ − Kα − λα‖², the dual point being λα.
    fn wide_gaps(&self, target: &Matrix, alpha: &Matrix, strengths: &[f64]) -> Vec<f64> {
        let fitted = matrix::product(&self.whole, alpha);
        let gap = |(at, &strength): (usize, &f64)| {
            let apart = target.column(0) - fitted.column(at) - strength * alpha.column(at);
            0.5 * apart.norm_squared()
        };
        strengths.iter().enumerate().map(gap).collect()
    }
}

/// Householder reflections that turn the unpenalised directions onto the first axes.
struct Turns {
    /// Unit vectors v of the reflections I − 2vv', in the order of use.
    mirrors: Vec<Vec<f64>>,
}

impl Turns {
    fn new(m: usize, basis: &Basis) -> Self {
        let mut turns = Self {
            mirrors: Vec::new(),
        };
        for k in 0..basis.rank() {
            let mut v = basis.vector(k).to_vec();
            turns.forth(&mut v);
            v[..k].fill(0.0);
            let sign = if v[k] < 0.0 { -1.0 } else { 1.0 };
            v[k] += sign * lanes::norm(&v);
            let length = lanes::norm(&v);
            debug_assert!(length > 0.0 && v.len() == m);
            for value in &mut v {
                *value /= length;
            }
            turns.mirrors.push(v);
        }
        turns
    }

    fn forth(&self, vector: &mut [f64]) {
        for v in &self.mirrors {
            lanes::add_scaled(-2.0 * lanes::dot(v, vector), v, vector);
        }
    }

    fn back(&self, vector: &mut [f64]) {
        for v in self.mirrors.iter().rev() {
            lanes::add_scaled(-2.0 * lanes::dot(v, vector), v, vector);
        }
    }

    fn turn_both_sides(&self, symmetric: &mut Matrix) {
        let m = symmetric.nrows();
        for _ in 0..2 {
            for column in symmetric.as_mut_slice().chunks_exact_mut(m) {
                self.forth(column);
            }
            symmetric.transpose_mut();
        }
    }
}

/// Fits all strengths (0 or more, in any order). `outcome` is √v ∘ y.
///
/// # Errors
/// When called off, or when a decomposition does not end.
pub(crate) fn fit(
    ground: &Ground<'_>,
    basis: &Basis,
    outcome: &[f64],
    strengths: &[f64],
    params: &Params,
    work: &Work<'_>,
) -> Result<Fits, Stop> {
    let m = ground.n_rows();
    let spectrum = Spectrum::new(ground, basis, work)?;
    let rank = spectrum.values.len();
    let mut centered = outcome.to_vec();
    basis.project(&mut centered);
    basis.project(&mut centered);
    if lanes::norm(&centered) <= NOTHING_LEFT * lanes::norm(outcome) {
        centered.fill(0.0);
    }
    let null = 0.5 * lanes::dot(&centered, &centered);
    let target = Matrix::from_column_slice(m, 1, &centered);
    let along = matrix::transposed_product(&spectrum.vectors, &target);
    let least = EMPTY * spectrum.values.first().copied().unwrap_or(0.0);
    // 1/(d + λ), and nothing in empty directions at strength 0.
    let inverse = |d: f64, strength: f64| {
        if d + strength > least || (strength > 0.0 && d + strength > 0.0) {
            1.0 / (d + strength)
        } else {
            0.0
        }
    };
    let scaled = Matrix::from_fn(rank, strengths.len(), |k, at| {
        along[k] * inverse(spectrum.values[k], strengths[at])
    });
    let kept = Matrix::from_fn(rank, strengths.len(), |k, at| {
        spectrum.values[k] * inverse(spectrum.values[k], strengths[at])
    });
    // What lies in no direction of the spectrum, for narrow data: residual whatever the strength.
    let outside = {
        let inside = matrix::product(&spectrum.vectors, &along);
        &target - inside
    };
    let mut residuals = matrix::product(
        &spectrum.vectors,
        &Matrix::from_fn(rank, strengths.len(), |k, at| {
            along[k] * (1.0 - kept[(k, at)])
        }),
    );
    for mut column in residuals.column_iter_mut() {
        column += outside.column(0);
    }
    let slack = slack(&spectrum, basis, &kept);
    let mut points = Vec::with_capacity(strengths.len());
    let mut alpha = matrix::product(&spectrum.vectors, &scaled);
    if spectrum.right.is_none() {
        spectrum.refine(&target, &mut alpha, strengths);
    }
    let unprojected = spectrum
        .raw
        .as_ref()
        .map(|raw| matrix::product(raw, &alpha));
    let direct = spectrum.right.as_ref().map(|(predictors, right)| {
        let along = Matrix::from_fn(rank, strengths.len(), |k, at| {
            scaled[(k, at)] * spectrum.values[k].sqrt()
        });
        (predictors, matrix::product(right, &along))
    });
    let gaps = match &direct {
        Some((_, b)) => spectrum.narrow_gaps(&target, b, strengths),
        None => spectrum.wide_gaps(&target, &alpha, strengths),
    };
    let n_dual = if direct.is_some() || null == 0.0 {
        0
    } else {
        spectrum.n_predictors
    };
    for (at, &strength) in strengths.iter().enumerate() {
        let residual = residuals.column(at);
        let loss = 0.5 * residual.norm_squared();
        // Σ fⱼbⱼ² = α'Kα = Σ d (u'ỹ)²/(d + λ)².
        let size: f64 = (0..rank)
            .map(|k| spectrum.values[k] * scaled[(k, at)] * scaled[(k, at)])
            .sum();
        let df: f64 = kept.column(at).sum() + basis.rank() as f64;
        let mut predictors: Vec<(usize, f64)> = Vec::new();
        let mut rest = outcome.to_vec();
        if let Some((listed, b)) = &direct {
            let mut column = vec![0.0; m];
            for (k, &j) in listed.iter().enumerate() {
                let value = b[(k, at)] / ground.factor(j).sqrt();
                predictors.push((j, value));
                if basis.rank() > 1 {
                    ground.weighted(j, &mut column);
                    lanes::add_scaled(-value, &column, &mut rest);
                }
            }
        } else if let Some(fitted) = &unprojected {
            for (rest, fitted) in rest.iter_mut().zip(fitted.column(at).iter()) {
                *rest -= fitted;
            }
        }
        let free = basis.coefficients(&rest);
        let (intercept, covariates) = ground.covariate_coefficients(&free);
        predictors.extend(
            ground
                .free
                .iter()
                .copied()
                .zip(free[1 + ground.n_covariates()..].iter().copied()),
        );
        predictors.retain(|(_, b)| *b != 0.0);
        predictors.sort_by_key(|(j, _)| *j);
        let relative_gap = if null > 0.0 { gaps[at] / null } else { 0.0 };
        let info = Info {
            relative_gap,
            settled: relative_gap <= params.relative_gap,
            passes: 0.0,
            events: 0,
            n_chosen: predictors.len() + n_dual,
            objective: loss + 0.5 * strength * size,
            loss,
            effective_df: df,
        };
        points.push(Point::single(info, intercept, covariates, predictors));
    }
    let mut plain = residuals;
    for mut column in plain.column_iter_mut() {
        for (e, root) in column.iter_mut().zip(&ground.root) {
            *e /= root;
        }
    }
    let dual = direct.is_none().then(|| {
        for mut column in alpha.column_iter_mut() {
            for (a, root) in column.iter_mut().zip(&ground.root) {
                *a *= root;
            }
        }
        Dual::new(ground, alpha)
    });
    Ok(Fits {
        points,
        dual,
        shortcuts: Shortcuts::new(&plain, &slack, &ground.share),
    })
}

/// 1 − hat for every training row and strength.
fn slack(spectrum: &Spectrum, basis: &Basis, kept: &Matrix) -> Matrix {
    let squares = spectrum.vectors.map(|u| u * u);
    let lost = kept.map(|share| 1.0 - share);
    let mut slack = matrix::product(&squares, &lost);
    if spectrum.right.is_some() {
        let leverage = basis.leverage();
        for row in 0..slack.nrows() {
            let outside = 1.0 - leverage[row] - squares.row(row).sum();
            for at in 0..slack.ncols() {
                slack[(row, at)] += outside.max(0.0);
            }
        }
    }
    slack
}
