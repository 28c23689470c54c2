//! Fits over a falling sequence of penalty strengths, each started from the last.

use crate::base::work::Work;
use crate::numeric::dual::Dual;
use crate::numeric::error::{FitError, Ingredient, Unsupported};
use crate::numeric::freedom::Freedom;
use crate::numeric::gaussian;
use crate::numeric::glm;
use crate::numeric::ground::{Ground, Penalised};
use crate::numeric::grouped;
use crate::numeric::matrix::Matrix;
use crate::numeric::penalty::Sign;
use crate::numeric::predictors::Predictors;
use crate::numeric::response::Response;
use crate::numeric::ridge;
use crate::numeric::shortcut::Shortcuts;
use crate::numeric::task::Task;

pub use crate::numeric::error::Stop;

/// How exactly a path is fitted, and under which rules.
///
/// | parameter | range | default |
/// |---|---|---|
/// | `relative_gap` | above 0 | 1e-8 |
/// | `signs` | one for each predictor, or none | none |
/// | `grouping` | apart or together; for classes only | apart |
#[derive(Clone, Debug, PartialEq)]
pub struct Params {
    /// A fit has settled when its duality gap is at most this share of the null model's loss.
    pub relative_gap: f64,
    /// The signs that coefficients may have; empty for no rule.
    pub signs: Vec<Sign>,
    /// Whether the coefficients of a predictor in several classes are chosen together.
    pub grouping: Grouping,
}

/// How the coefficients that a predictor has in several classes are penalised.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Grouping {
    /// Each by itself: Σₖ |bⱼₖ|.
    #[default]
    Apart,
    /// As one: ‖bⱼ‖, so that a predictor is in or out as a whole.
    Together,
}

impl Default for Params {
    fn default() -> Self {
        Self {
            relative_gap: 1e-8,
            signs: Vec::new(),
            grouping: Grouping::Apart,
        }
    }
}

impl Params {
    /// The sign rule of a predictor.
    pub(crate) fn sign(&self, predictor: usize) -> Sign {
        self.signs.get(predictor).copied().unwrap_or_default()
    }
}

/// How one fit ended.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Info {
    /// The duality gap over the loss of the null model (intercept, covariates and predictors
    /// without a penalty). The gap bounds how far the objective is from its minimum.
    pub relative_gap: f64,
    /// Whether the gap is as small as was asked for.
    pub settled: bool,
    /// Readings of the matrix that this strength took, in units of the whole matrix in double
    /// precision.
    pub passes: f64,
    /// Entries into and departures from the active set.
    pub events: usize,
    /// Predictors with a coefficient other than zero.
    pub n_chosen: usize,
    /// Loss plus penalty.
    pub objective: f64,
    /// The loss: 1/(2n) Σ (y − ŷ)² for a measured outcome.
    pub loss: f64,
    /// Effective degrees of freedom, with intercept and covariates: for the lasso the number of
    /// coefficients that are not zero (Zou, Hastie & Tibshirani 2007), otherwise the trace of the
    /// map from outcome to fit.
    pub effective_df: f64,
}

impl Info {
    /// A fit without a gap: a closed form.
    pub(crate) fn exact(rank: usize) -> Self {
        Self {
            settled: true,
            effective_df: rank as f64,
            ..Self::default()
        }
    }
}

/// Coefficients in the units of predictors and covariates.
#[derive(Clone, Debug, PartialEq)]
pub struct Coefficients {
    /// The intercept. For times, which have none, it makes the linear predictor zero at the means
    /// of the training rows.
    pub intercept: f64,
    /// One for each covariate.
    pub covariates: Vec<f64>,
    /// Index and value of every predictor whose coefficient is not zero, rising.
    pub predictors: Vec<(usize, f64)>,
}

/// One linear predictor of a point, with predictors in the scale that the penalty sees.
#[derive(Clone, Debug)]
pub(crate) struct Linear {
    /// At the means of the predictors, and zero covariates.
    pub(crate) intercept: f64,
    pub(crate) covariates: Vec<f64>,
    /// Not zero, rising.
    pub(crate) predictors: Vec<(usize, f64)>,
}

/// One fit of a path.
#[derive(Clone, Debug)]
pub(crate) struct Point {
    pub(crate) info: Info,
    /// One, or one for each class.
    linear: Vec<Linear>,
}

impl Point {
    /// A fit with one linear predictor.
    pub(crate) fn single(
        info: Info,
        intercept: f64,
        covariates: Vec<f64>,
        predictors: Vec<(usize, f64)>,
    ) -> Self {
        Self::several(
            info,
            vec![Linear {
                intercept,
                covariates,
                predictors,
            }],
        )
    }

    /// A fit with one linear predictor for each class.
    pub(crate) fn several(info: Info, linear: Vec<Linear>) -> Self {
        Self { info, linear }
    }
}

/// Mean and scale of the predictors that a path makes use of, rising by index.
#[derive(Clone, Debug, Default)]
struct Scales(Vec<(usize, f64, f64)>);

impl Scales {
    fn of(ground: &Ground<'_>, points: &[Point]) -> Self {
        let mut used: Vec<usize> = points
            .iter()
            .flat_map(|point| &point.linear)
            .flat_map(|linear| linear.predictors.iter().map(|(j, _)| *j))
            .collect();
        used.sort_unstable();
        used.dedup();
        Self(
            used.into_iter()
                .map(|j| (j, ground.mean[j], ground.inverse_scale[j]))
                .collect(),
        )
    }

    fn get(&self, predictor: usize) -> (f64, f64) {
        let at = self
            .0
            .binary_search_by_key(&predictor, |entry| entry.0)
            .expect("every predictor of a point is listed");
        (self.0[at].1, self.0[at].2)
    }
}

/// The fits of one task at a sequence of strengths.
#[derive(Clone, Debug)]
pub struct Path {
    predictors: Predictors,
    strengths: Vec<f64>,
    points: Vec<Point>,
    scales: Scales,
    /// For ridge fits of wide data: coefficients stay in the space of the samples.
    dual: Option<Dual>,
    shortcuts: Option<Shortcuts>,
    /// For the elastic net: what its degrees of freedom are computed from.
    freedom: Option<Freedom>,
    n_linear: usize,
}

/// Fits a task at the given strengths.
///
/// ```text
/// minimise  loss(b₀, a, b)  +  λ Σⱼ fⱼ ( share |bⱼ| + (1 − share)/2 bⱼ² )
/// ```
///
/// with λ the strength, fⱼ the penalty weight of predictor j (1 unless given), and for a measured
/// outcome loss = 1/(2n) Σᵢ (yᵢ − b₀ − cᵢ'a − zᵢ'b)², n the sum of the sample weights. Intercept b₀
/// and covariate coefficients a carry no penalty; z are the predictors in the task's scaling.
///
/// A share of 0 is ridge: one decomposition gives every strength (see [`ridge`]). Otherwise see
/// [`gaussian`]. Strengths may come in any order and the fits are returned
/// in that order. At strength 0 nothing is penalised; predictors that depend on earlier ones get 0.
///
/// # Errors
/// [`Stop::Cancelled`] when called off; [`Stop::Failed`] with what is wrong with the task.
pub fn fit_path(
    task: &Task<'_>,
    share: f64,
    strengths: &[f64],
    params: &Params,
    work: &Work<'_>,
) -> Result<Path, Stop> {
    if !(0.0..=1.0).contains(&share) {
        return Err(FitError::Share(share).into());
    }
    if let Some(&bad) = strengths.iter().find(|s| !s.is_finite() || **s < 0.0) {
        return Err(FitError::Strength(bad).into());
    }
    let p = task.predictors.n_predictors();
    if !params.signs.is_empty() && params.signs.len() != p {
        return Err(FitError::Shape {
            what: Ingredient::Signs,
            found: params.signs.len(),
            expected: p,
        }
        .into());
    }
    let has_rule = params.signs.iter().any(|sign| *sign != Sign::Any);
    if share == 0.0 && has_rule {
        return Err(FitError::Unsupported(Unsupported::SignsInRidge).into());
    }
    match task.response {
        Response::Measured(y) => measured(task, y, share, strengths, params, work),
        Response::YesNo(_)
        | Response::Classes { .. }
        | Response::Count { .. }
        | Response::Time { .. } => other(task, share, strengths, params, work),
    }
}

/// Fits of outcomes that are not measured quantities.
fn other(
    task: &Task<'_>,
    share: f64,
    strengths: &[f64],
    params: &Params,
    work: &Work<'_>,
) -> Result<Path, Stop> {
    let ground = Ground::new(task, Penalised::ByWeight, work)?;
    let (order, falling) = falling(strengths);
    let n_positive = falling.partition_point(|&strength| strength > 0.0);
    let positive = &falling[..n_positive];
    let (mut points, mut dual) = (Vec::new(), None);
    let has_classes = matches!(task.response, Response::Classes { .. });
    let is_grouped = has_classes && params.grouping == Grouping::Together;
    if is_grouped && params.signs.iter().any(|sign| *sign != Sign::Any) {
        return Err(FitError::Unsupported(Unsupported::SignsWithClasses).into());
    }
    if share == 0.0 && n_positive > 0 {
        let fits = glm::ridge(&ground, task.response, positive, params, work)?;
        points = fits.points;
        dual = fits.dual;
    } else if n_positive > 0 && is_grouped {
        points = grouped::walk(&ground, task.response, share, positive, params, work)?;
    } else if n_positive > 0 {
        points = glm::walk(&ground, task.response, share, positive, params, work)?;
    }
    if n_positive < falling.len() {
        let ground = Ground::new(task, Penalised::None, work)?;
        let point = glm::unpenalised(&ground, task.response, work)?;
        points.resize(falling.len(), point);
    }
    let n_linear = points.first().map_or(1, |point| point.linear.len());
    Ok(Path {
        predictors: task.predictors.clone(),
        strengths: strengths.to_vec(),
        scales: Scales::of(&ground, &points),
        points: in_order_of(points, &order),
        dual: dual.map(|dual| dual.reordered(&order, n_linear)),
        shortcuts: None,
        freedom: None,
        n_linear,
    })
}

fn measured(
    task: &Task<'_>,
    y: &[f64],
    share: f64,
    strengths: &[f64],
    params: &Params,
    work: &Work<'_>,
) -> Result<Path, Stop> {
    let mut ground = Ground::new(task, Penalised::ByWeight, work)?;
    let basis = ground.basis();
    let outcome: Vec<f64> = ground
        .rows
        .iter()
        .zip(&ground.root)
        .map(|(&row, root)| y[row] * root)
        .collect();
    let (order, falling) = falling(strengths);
    let mut path = Path {
        predictors: task.predictors.clone(),
        strengths: strengths.to_vec(),
        points: Vec::new(),
        scales: Scales::default(),
        dual: None,
        shortcuts: None,
        freedom: None,
        n_linear: 1,
    };
    if share == 0.0 {
        let fits = ridge::fit(&ground, &basis, &outcome, strengths, params, work)?;
        path.points = fits.points;
        path.dual = fits.dual;
        path.shortcuts = Some(fits.shortcuts);
        path.scales = Scales::of(&ground, &path.points);
        return Ok(path);
    }
    let n_positive = falling.partition_point(|&strength| strength > 0.0);
    let mut points = gaussian::walk(
        &mut ground,
        &basis,
        &outcome,
        share,
        &falling[..n_positive],
        params,
        work,
    )?;
    if n_positive < falling.len() {
        let ground = Ground::new(task, Penalised::None, work)?;
        let point = gaussian::unpenalised(&ground, &ground.basis(), &outcome);
        points.resize(falling.len(), point);
    }
    path.scales = Scales::of(&ground, &points);
    path.freedom = (share < 1.0).then(|| Freedom::new(&ground, basis, share));
    path.points = in_order_of(points, &order);
    Ok(path)
}

/// The strengths falling, and where each of them stood.
fn falling(strengths: &[f64]) -> (Vec<usize>, Vec<f64>) {
    let mut order: Vec<usize> = (0..strengths.len()).collect();
    order.sort_by(|&a, &b| strengths[b].total_cmp(&strengths[a]).then(a.cmp(&b)));
    let falling = order.iter().map(|&at| strengths[at]).collect();
    (order, falling)
}

/// Puts points, listed in `order`, back to where they came from.
fn in_order_of(points: Vec<Point>, order: &[usize]) -> Vec<Point> {
    let mut placed: Vec<(usize, Point)> = order.iter().copied().zip(points).collect();
    placed.sort_by_key(|(at, _)| *at);
    placed.into_iter().map(|(_, point)| point).collect()
}

impl Path {
    /// The number of fits.
    #[must_use]
    pub fn n_points(&self) -> usize {
        self.strengths.len()
    }

    /// The strength of a fit.
    #[must_use]
    pub fn strength(&self, at: usize) -> f64 {
        self.strengths[at]
    }

    /// The number of linear predictors of each fit: the number of classes, or 1.
    #[must_use]
    pub fn n_linear(&self) -> usize {
        self.n_linear
    }

    /// The coefficients of a fit, in the units of predictors and covariates. With classes, those
    /// of the first class; see [`class_coefficients`](Self::class_coefficients).
    #[must_use]
    pub fn coefficients(&self, at: usize) -> Coefficients {
        self.raw(&self.linear(at, 0))
    }

    /// The coefficients of a fit, one set for each class.
    #[must_use]
    pub fn class_coefficients(&self, at: usize) -> Vec<Coefficients> {
        (0..self.n_linear)
            .map(|class| self.raw(&self.linear(at, class)))
            .collect()
    }

    /// The coefficients of a fit in the scale that the penalty sees: index and value of those
    /// that are not zero, rising. With classes, those of the first class.
    #[must_use]
    pub fn standardised(&self, at: usize) -> Vec<(usize, f64)> {
        self.linear(at, 0).predictors
    }

    /// The same for one class.
    #[must_use]
    pub fn class_standardised(&self, at: usize, class: usize) -> Vec<(usize, f64)> {
        self.linear(at, class).predictors
    }

    fn linear(&self, at: usize, class: usize) -> Linear {
        let mut linear = self.points[at].linear[class].clone();
        if let Some(dual) = &self.dual {
            linear
                .predictors
                .extend(dual.standardised(&self.predictors, at * self.n_linear + class));
            linear.predictors.sort_by_key(|(j, _)| *j);
        }
        linear
    }

    fn scale(&self, predictor: usize) -> (f64, f64) {
        match &self.dual {
            Some(dual) => dual.scale(predictor),
            None => self.scales.get(predictor),
        }
    }

    fn raw(&self, linear: &Linear) -> Coefficients {
        let mut intercept = linear.intercept;
        let mut predictors = Vec::with_capacity(linear.predictors.len());
        for &(j, b) in &linear.predictors {
            let (mean, inverse_scale) = self.scale(j);
            let value = b * inverse_scale;
            intercept -= value * mean;
            predictors.push((j, value));
        }
        Coefficients {
            intercept,
            covariates: linear.covariates.clone(),
            predictors,
        }
    }

    /// The linear predictors of any rows of the task's matrices, rows × fits (with classes: rows ×
    /// (fits · classes), the classes of one fit side by side). Offsets are not part of it.
    #[must_use]
    pub fn predict(&self, task: &Task<'_>, rows: &[usize]) -> Matrix {
        let mut all = Matrix::zeros(rows.len(), self.points.len() * self.n_linear);
        for (at, point) in self.points.iter().enumerate() {
            for (class, linear) in point.linear.iter().enumerate() {
                let mut column = all.column_mut(at * self.n_linear + class);
                column.fill(linear.intercept);
                for (covariate, a) in task.covariates.column_iter().zip(&linear.covariates) {
                    for (eta, &row) in column.iter_mut().zip(rows) {
                        *eta += covariate[row] * a;
                    }
                }
                for &(j, b) in &linear.predictors {
                    let (mean, inverse_scale) = self.scale(j);
                    let values = self.predictors.column(j);
                    for (eta, &row) in column.iter_mut().zip(rows) {
                        *eta += (values[row] - mean) * inverse_scale * b;
                    }
                }
            }
        }
        if let Some(dual) = &self.dual {
            all += dual.predict(&self.predictors, rows);
        }
        all
    }

    /// The relative duality gap of a fit, and whether it is as small as was asked for. Unlike
    /// [`Path::info`] this never computes anything.
    #[must_use]
    pub fn gap(&self, at: usize) -> (f64, bool) {
        let info = &self.points[at].info;
        (info.relative_gap, info.settled)
    }

    /// How a fit ended. For the elastic net this computes the effective degrees of freedom, which
    /// takes a small decomposition.
    #[must_use]
    pub fn info(&self, at: usize) -> Info {
        let mut info = self.points[at].info;
        if let Some(freedom) = &self.freedom
            && self.strengths[at] > 0.0
        {
            let chosen = &self.points[at].linear[0].predictors;
            let scaled = chosen.iter().map(|(j, _)| (*j, self.scale(*j)));
            info.effective_df = freedom.effective(&self.predictors, scaled, self.strengths[at]);
        }
        info
    }

    /// For ridge fits to a measured outcome: exact leave-one-out and GCV at every strength.
    #[must_use]
    pub fn shortcuts(&self) -> Option<&Shortcuts> {
        self.shortcuts.as_ref()
    }
}

#[cfg(test)]
mod tests;
