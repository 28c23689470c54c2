//! How far a solution can be from the best, in plain arithmetic that shares nothing with the solvers.

use crate::numeric::error::{FitError, Ingredient};
use crate::numeric::path::{Coefficients, Grouping};
use crate::numeric::response::{Response, Ties};
use crate::numeric::task::{Scaling, Task};

/// An independent check of a solution.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Certificate {
    /// The duality gap over the loss of the model with an intercept only.
    pub gap: f64,
    /// The largest violation of the optimality conditions over all candidates, in units of the
    /// steepest slope of the penalty, λ (share + (1 − share) max|b|): |gradient| beyond what the
    /// penalty holds, or off the equation it must satisfy. Predictors and covariates without a
    /// penalty are checked too.
    pub worst_violation: f64,
    /// Where it is; `None` when it is at the intercept or a covariate.
    pub worst_predictor: Option<usize>,
}

/// Checks a solution of a task against the optimality conditions of every candidate and by its
/// duality gap, from the matrix itself, in plain double precision sums. For classes, use
/// [`certify_classes`].
///
/// # Errors
/// What is wrong with the task.
pub fn certify(
    task: &Task<'_>,
    share: f64,
    strength: f64,
    solution: &Coefficients,
) -> Result<Certificate, FitError> {
    certify_classes(task, share, strength, std::slice::from_ref(solution))
}

/// The same for a solution with one set of coefficients a class, penalised class by class.
///
/// # Errors
/// What is wrong with the task, or another number of solutions than the task has classes.
pub fn certify_classes(
    task: &Task<'_>,
    share: f64,
    strength: f64,
    solution: &[Coefficients],
) -> Result<Certificate, FitError> {
    certify_grouping(task, share, strength, solution, Grouping::Apart)
}

/// The same for classes under either grouping.
///
/// # Errors
/// What is wrong with the task, or another number of solutions than the task has classes.
pub fn certify_grouping(
    task: &Task<'_>,
    share: f64,
    strength: f64,
    solution: &[Coefficients],
    grouping: Grouping,
) -> Result<Certificate, FitError> {
    task.check()?;
    let part = Part::new(task)?;
    let expected = match task.response {
        Response::Classes { n_classes, .. } => *n_classes,
        Response::Measured(_)
        | Response::YesNo(_)
        | Response::Count { .. }
        | Response::Time { .. } => 1,
    };
    if solution.len() != expected {
        return Err(FitError::Shape {
            what: Ingredient::Outcome,
            found: solution.len(),
            expected,
        });
    }
    let eta: Vec<Vec<f64>> = solution.iter().map(|one| part.linear(one)).collect();
    let state = State::of(task.response, &part.rows, &part.v, task, &eta);
    let penalty = Penalty {
        share,
        strength,
        grouping,
    };
    Ok(examine(&part, &state, penalty, solution))
}

/// The penalty that a solution is examined under.
#[derive(Clone, Copy)]
struct Penalty {
    share: f64,
    strength: f64,
    grouping: Grouping,
}

/// Training rows and weights, taken from the task anew.
struct Part<'a> {
    task: &'a Task<'a>,
    rows: Vec<usize>,
    v: Vec<f64>,
}

/// A predictor on the training rows.
struct Column {
    z: Vec<f64>,
    /// Standard deviation, or 1 where predictors are only centred.
    scale: f64,
}

impl<'a> Part<'a> {
    fn new(task: &'a Task<'a>) -> Result<Self, FitError> {
        let rows: Vec<usize> = task
            .rows
            .iter()
            .copied()
            .filter(|&row| task.weight(row) > 0.0)
            .collect();
        if rows.is_empty() {
            return Err(FitError::NoRows);
        }
        let total: f64 = rows.iter().map(|&row| task.weight(row)).sum();
        let v = rows.iter().map(|&row| task.weight(row) / total).collect();
        Ok(Self { task, rows, v })
    }

    /// A candidate in the scale of the penalty; `None` when it cannot enter.
    fn column(&self, j: usize) -> Option<Column> {
        if self.task.columns.is_some_and(|columns| !columns[j]) {
            return None;
        }
        let raw: Vec<f64> = self
            .rows
            .iter()
            .map(|&row| self.task.predictors.x()[(row, j)])
            .collect();
        let top = raw.iter().fold(0.0_f64, |top, x| top.max(x.abs()));
        let first = raw[0];
        // Taken from the first value, so that a large common offset costs no digits.
        let shift: f64 = raw.iter().zip(&self.v).map(|(x, v)| v * (x - first)).sum();
        let z: Vec<f64> = raw.iter().map(|x| (x - first) - shift).collect();
        let size = z.iter().fold(0.0_f64, |size, x| size.max(x.abs()));
        if size <= 1e-14 * top {
            return None;
        }
        let square: f64 = z
            .iter()
            .zip(&self.v)
            .map(|(z, v)| v * (z / size) * (z / size))
            .sum();
        let scale = match self.task.scaling {
            Scaling::UnitVariance => size * square.sqrt(),
            Scaling::AsGiven => 1.0,
        };
        Some(Column {
            z: z.iter().map(|z| z / scale).collect(),
            scale,
        })
    }

    /// The largest coefficient in the scale of the penalty.
    fn largest(&self, solution: &Coefficients) -> f64 {
        solution
            .predictors
            .iter()
            .filter_map(|&(j, raw)| Some(raw.abs() * self.column(j)?.scale))
            .fold(0.0, f64::max)
    }

    /// The linear predictor of the training rows.
    fn linear(&self, solution: &Coefficients) -> Vec<f64> {
        self.rows
            .iter()
            .map(|&row| {
                let mut eta = solution.intercept;
                for (k, a) in solution.covariates.iter().enumerate() {
                    eta += self.task.covariates[(row, k)] * a;
                }
                for &(j, b) in &solution.predictors {
                    eta += self.task.predictors.x()[(row, j)] * b;
                }
                eta
            })
            .collect()
    }
}

/// The worst violation so far.
struct Worst {
    violation: f64,
    predictor: Option<usize>,
}

impl Worst {
    fn see(&mut self, violation: f64, predictor: Option<usize>) {
        if violation > self.violation {
            self.violation = violation;
            self.predictor = predictor;
        }
    }
}

fn examine(
    part: &Part<'_>,
    state: &State<'_>,
    penalty: Penalty,
    solution: &[Coefficients],
) -> Certificate {
    let Penalty {
        share,
        strength,
        grouping,
    } = penalty;
    let task = part.task;
    let product = |column: &[f64], class: usize| -> f64 {
        column
            .iter()
            .zip(&state.slope[class])
            .map(|(x, g)| x * g)
            .sum()
    };
    let size: f64 = state.slope.iter().flatten().map(|g| g.abs()).sum();
    // Violations are in units of the penalty's slope; without a penalty, of the residual.
    let largest = solution
        .iter()
        .map(|one| part.largest(one))
        .fold(0.0, f64::max);
    let unit = if strength > 0.0 {
        strength * (share + (1.0 - share) * largest)
    } else {
        size
    };
    let unit = if unit > 0.0 { unit } else { 1.0 };
    let mut worst = Worst {
        violation: 0.0,
        predictor: None,
    };
    for class in 0..solution.len() {
        if state.has_intercept {
            worst.see(
                product(&vec![1.0; part.rows.len()], class).abs() / unit,
                None,
            );
        }
        for covariate in task.covariates.column_iter() {
            let column: Vec<f64> = part.rows.iter().map(|&row| covariate[row]).collect();
            let top = column.iter().fold(0.0_f64, |top, x| top.max(x.abs()));
            if top > 0.0 {
                worst.see(product(&column, class).abs() / (top * unit), None);
            }
        }
    }
    let mut penalty = 0.0;
    let mut shrink = 1.0_f64;
    let mut excess = 0.0;
    let mut coefficients: Vec<_> = solution
        .iter()
        .map(|one| one.predictors.iter().copied().peekable())
        .collect();
    for j in 0..task.predictors.n_predictors() {
        let column = part.column(j);
        let raw: Vec<f64> = coefficients
            .iter_mut()
            .map(|listed| listed.next_if(|(at, _)| *at == j).map_or(0.0, |(_, b)| b))
            .collect();
        let Some(column) = &column else {
            if raw.iter().any(|b| *b != 0.0) {
                worst.see(f64::INFINITY, Some(j));
            }
            continue;
        };
        let b: Vec<f64> = raw.iter().map(|b| b * column.scale).collect();
        let c: Vec<f64> = (0..b.len())
            .map(|class| product(&column.z, class))
            .collect();
        let factor = task.factors.map_or(1.0, |factors| factors[j]) * strength;
        if factor == 0.0 {
            for c in c {
                worst.see(c.abs() / unit, Some(j));
            }
            continue;
        }
        let (lasso, ridge) = (factor * share, factor * (1.0 - share));
        let groups: Vec<(&[f64], &[f64])> = match grouping {
            Grouping::Apart => b.chunks(1).zip(c.chunks(1)).collect(),
            Grouping::Together => vec![(&b, &c)],
        };
        for (b, c) in groups {
            let length = |x: &[f64]| x.iter().map(|x| x * x).sum::<f64>().sqrt();
            let (size, pull) = (length(b), length(c));
            penalty += lasso * size + 0.5 * ridge * size * size;
            let violation = if size == 0.0 {
                (pull - lasso).max(0.0)
            } else {
                let off = b
                    .iter()
                    .zip(c)
                    .map(|(b, c)| c - lasso * b / size - ridge * b);
                length(&off.collect::<Vec<f64>>())
            };
            worst.see(violation / unit, Some(j));
            let over = (pull - lasso).max(0.0);
            if ridge > 0.0 {
                excess += over * over / (2.0 * ridge);
            } else if over > 0.0 {
                shrink = shrink.min(lasso / pull);
            }
        }
    }
    // The dual point is the residual, shrunk until it is feasible. It counts as orthogonal to what
    // is not penalised; the violation says how true that is.
    let gap = state.loss + penalty - ((state.dual)(shrink) - excess);
    Certificate {
        gap: if state.null > 0.0 {
            gap.max(0.0) / state.null
        } else {
            0.0
        },
        worst_violation: worst.violation,
        worst_predictor: worst.predictor,
    }
}

/// A loss at a solution, written down as plainly as can be.
struct State<'a> {
    loss: f64,
    /// The loss of the intercept alone, less the smallest loss there can be.
    null: f64,
    /// −∂loss/∂η for each class and training row.
    slope: Vec<Vec<f64>>,
    has_intercept: bool,
    /// The dual value at `t` times the slope.
    dual: Box<dyn Fn(f64) -> f64 + 'a>,
}

fn x_log_x(x: f64) -> f64 {
    if x > 0.0 { x * x.ln() } else { 0.0 }
}

impl<'a> State<'a> {
    fn of(
        response: &'a Response,
        rows: &'a [usize],
        v: &'a [f64],
        task: &'a Task<'a>,
        eta: &'a [Vec<f64>],
    ) -> Self {
        match response {
            Response::Measured(y) => Self::measured(y, rows, v, &eta[0]),
            Response::YesNo(yes) => {
                // Two classes of which only the first has coefficients.
                let class: Vec<usize> = rows.iter().map(|&row| usize::from(!yes[row])).collect();
                let zero = vec![0.0; rows.len()];
                let mut state = Self::classes(class, v, vec![eta[0].clone(), zero]);
                state.slope.truncate(1);
                state
            }
            Response::Classes { class, .. } => {
                let class = rows.iter().map(|&row| class[row]).collect();
                Self::classes(class, v, eta.to_vec())
            }
            Response::Count { count, offset } => {
                let offset = |row: usize| offset.as_ref().map_or(0.0, |offset| offset[row]);
                let known: Vec<(f64, f64)> =
                    rows.iter().map(|&row| (count[row], offset(row))).collect();
                Self::counts(known, v, &eta[0])
            }
            Response::Time {
                time,
                event,
                strata,
                ties,
            } => {
                let known = rows
                    .iter()
                    .map(|&row| Subject {
                        time: time[row],
                        has_event: event[row],
                        stratum: strata.as_ref().map_or(0, |strata| strata[row]),
                        weight: task.weight(row),
                    })
                    .collect();
                Self::times(known, *ties, v, &eta[0])
            }
        }
    }

    fn measured(y: &[f64], rows: &'a [usize], v: &'a [f64], eta: &'a [f64]) -> Self {
        let y: Vec<f64> = rows.iter().map(|&row| y[row]).collect();
        let mean: f64 = y.iter().zip(v).map(|(y, v)| y * v).sum();
        let sum =
            |term: &dyn Fn(usize) -> f64| -> f64 { (0..y.len()).map(|i| v[i] * term(i)).sum() };
        let null = sum(&|i| 0.5 * (y[i] - mean) * (y[i] - mean));
        let size = sum(&|i| (y[i] - eta[i]) * (y[i] - eta[i]));
        let along = sum(&|i| (y[i] - mean) * (y[i] - eta[i]));
        Self {
            loss: 0.5 * size,
            null,
            slope: vec![(0..y.len()).map(|i| v[i] * (y[i] - eta[i])).collect()],
            has_intercept: true,
            // ½‖y‖² − ½‖y − tr‖² = t y'r − t²/2 ‖r‖²
            dual: Box::new(move |t| t * along - 0.5 * t * t * size),
        }
    }

    fn classes(class: Vec<usize>, v: &'a [f64], eta: Vec<Vec<f64>>) -> Self {
        let (m, k) = (class.len(), eta.len());
        let mut share = vec![vec![0.0; m]; k];
        let mut loss = 0.0;
        for i in 0..m {
            let top = (0..k).map(|c| eta[c][i]).fold(f64::NEG_INFINITY, f64::max);
            let sum: f64 = (0..k).map(|c| (eta[c][i] - top).exp()).sum();
            loss += v[i] * (top + sum.ln() - eta[class[i]][i]);
            for c in 0..k {
                share[c][i] = (eta[c][i] - top).exp() / sum;
            }
        }
        let of_class = |c: usize| -> f64 {
            let weights = class.iter().zip(v).filter(|(own, _)| **own == c);
            weights.map(|(_, v)| v).sum()
        };
        let null = -(0..k).map(|c| x_log_x(of_class(c))).sum::<f64>();
        let own = |c: usize, i: usize| f64::from(u8::from(class[i] == c));
        let slope = (0..k)
            .map(|c| (0..m).map(|i| v[i] * (own(c, i) - share[c][i])).collect())
            .collect();
        Self {
            loss,
            null,
            slope,
            has_intercept: true,
            dual: Box::new(move |t| {
                let mut sum = 0.0;
                for i in 0..m {
                    for (c, share) in share.iter().enumerate() {
                        let own = f64::from(u8::from(class[i] == c));
                        sum -= v[i] * x_log_x((1.0 - t) * own + t * share[i]);
                    }
                }
                sum
            }),
        }
    }

    fn counts(known: Vec<(f64, f64)>, v: &'a [f64], eta: &'a [f64]) -> Self {
        let m = known.len();
        let mean: Vec<f64> = (0..m).map(|i| (eta[i] + known[i].1).exp()).collect();
        let loss = (0..m)
            .map(|i| v[i] * (mean[i] - known[i].0 * (eta[i] + known[i].1)))
            .sum();
        let total: f64 = (0..m).map(|i| v[i] * known[i].0).sum();
        let exposed: f64 = (0..m).map(|i| v[i] * known[i].1.exp()).sum();
        let rate = (total / exposed).ln();
        let null: f64 = (0..m)
            .map(|i| {
                let (y, offset) = known[i];
                v[i] * ((rate + offset).exp() - y * (rate + offset) - y + x_log_x(y))
            })
            .sum();
        Self {
            loss,
            null,
            slope: vec![(0..m).map(|i| v[i] * (known[i].0 - mean[i])).collect()],
            has_intercept: true,
            dual: Box::new(move |t| {
                let mut sum = 0.0;
                for i in 0..m {
                    let (y, offset) = known[i];
                    let a = (1.0 - t) * y + t * mean[i];
                    sum -= v[i] * (x_log_x(a) - a + t * (y - mean[i]) * offset);
                }
                sum
            }),
        }
    }

    /// Term by term over every event and everybody at risk: slow, and with nothing to get wrong.
    fn times(known: Vec<Subject>, ties: Ties, v: &'a [f64], eta: &'a [f64]) -> Self {
        let m = known.len();
        let top = eta.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let eta: Vec<f64> = eta.iter().map(|eta| eta - top).collect();
        let terms = terms(&known, ties, v);
        let mut slope = vec![0.0; m];
        let (mut loss, mut null) = (0.0, 0.0);
        for term in &terms {
            let sum: f64 = term.risk.iter().map(|&(j, w)| w * eta[j].exp()).sum();
            let plain: f64 = term.risk.iter().map(|&(_, w)| w).sum();
            loss += term.weight * sum.ln();
            null += term.weight * plain.ln();
            for &(j, w) in &term.risk {
                slope[j] -= term.weight * w * eta[j].exp() / sum;
            }
            for &(j, a) in &term.own {
                loss -= term.weight * a * eta[j];
                slope[j] += term.weight * a;
            }
        }
        Self {
            loss,
            null,
            slope: vec![slope],
            has_intercept: false,
            dual: Box::new(move |t| {
                let mut dual = 0.0;
                for term in &terms {
                    let sum: f64 = term.risk.iter().map(|&(j, w)| w * eta[j].exp()).sum();
                    for &(j, w) in &term.risk {
                        let own = term.own.iter().find(|(i, _)| *i == j).map_or(0.0, |o| o.1);
                        let mixed = t * w * eta[j].exp() / sum + (1.0 - t) * own;
                        if mixed > 0.0 {
                            dual -= term.weight * mixed * (mixed / w).ln();
                        }
                    }
                }
                dual
            }),
        }
    }
}

/// What is known of a training row with a time.
struct Subject {
    time: f64,
    has_event: bool,
    stratum: usize,
    weight: f64,
}

/// One logarithm of the partial likelihood.
struct Term {
    weight: f64,
    /// Who is at risk, with the weight in the sum.
    risk: Vec<(usize, f64)>,
    /// The events, with shares of sum 1.
    own: Vec<(usize, f64)>,
}

fn terms(known: &[Subject], ties: Ties, v: &[f64]) -> Vec<Term> {
    let mut terms = Vec::new();
    for (i, subject) in known.iter().enumerate() {
        let is_tied = |other: &Subject| {
            other.has_event && other.stratum == subject.stratum && other.time == subject.time
        };
        // Each group of tied events is taken up at its first member.
        if !subject.has_event || known[..i].iter().any(is_tied) {
            continue;
        }
        let tied: Vec<usize> = (i..known.len()).filter(|&j| is_tied(&known[j])).collect();
        let all: f64 = tied.iter().map(|&j| known[j].weight).sum();
        let total: f64 = tied.iter().map(|&j| v[j]).sum();
        let d = tied.len();
        let steps = match ties {
            Ties::Breslow => 1,
            Ties::Efron => d,
        };
        for l in 0..steps {
            let at_risk =
                |j: &usize| known[*j].stratum == subject.stratum && known[*j].time >= subject.time;
            let kept = 1.0 - l as f64 / d as f64;
            terms.push(Term {
                weight: total / steps as f64,
                risk: (0..known.len())
                    .filter(at_risk)
                    .map(|j| {
                        let share = if tied.contains(&j) { kept } else { 1.0 };
                        (j, known[j].weight * share)
                    })
                    .collect(),
                own: tied.iter().map(|&j| (j, known[j].weight / all)).collect(),
            });
        }
    }
    terms
}
