//! Several classes with every predictor in or out as a whole.
//!
//! ```text
//! minimise  loss  +  λ Σⱼ fⱼ ( share ‖bⱼ‖ + (1 − share)/2 ‖bⱼ‖² )        bⱼ: one value a class
//! ```
//!
//! The group lasso (Yuan & Lin 2006) over the classes of a predictor. Proximal Newton on a working
//! set as elsewhere; the second-order model is solved block by block, each block exactly by its
//! eigenvalues and one equation in its length. One certified scan proves the predictors outside.

use crate::base::work::Work;
use crate::numeric::error::Stop;
use crate::numeric::factor::Factor;
use crate::numeric::free_part::{FreePart, free_slope};
use crate::numeric::frontier::{capacity, worst};
use crate::numeric::glm::{Null, spread};
use crate::numeric::ground::Ground;
use crate::numeric::lanes;
use crate::numeric::loss::Loss;
use crate::numeric::matrix::{self, Matrix};
use crate::numeric::path::{Info, Linear, Params, Point};
use crate::numeric::response::Response;
use crate::numeric::scan::{BATCH, Bounds, Sieve};

/// Newton steps of one strength.
const STEPS: usize = 60;
/// Rounds over the blocks of one model.
const ROUNDS: usize = 2000;
/// Rounds of proving and admitting for one strength.
const PROOFS: usize = 200;
/// What rounding may add to a correlation of a loss of size about 1.
const FLOOR: f64 = 1e-13;

/// λ · share and λ · (1 − share).
#[derive(Clone, Copy)]
struct Level {
    lasso: f64,
    ridge: f64,
}

/// A predictor of the working set.
struct Member {
    predictor: usize,
    factor: f64,
    z: Vec<f64>,
    /// One coefficient a class.
    b: Vec<f64>,
}

/// The second-order model of one member: H times its columns, and its own block of curvature.
struct Block {
    hx: Vec<Vec<f64>>,
    curvature: Matrix,
    values: Vec<f64>,
    vectors: Matrix,
}

/// Where a fit stands.
#[derive(Clone, Copy)]
struct Standing {
    loss: f64,
    penalty: f64,
    /// The largest ‖c‖ over its threshold within the working set, at least 1.
    worst: f64,
    /// Σ excess²/(2 ridge).
    excess: f64,
    free_slope: f64,
}

struct Walk<'t, 'g> {
    ground: &'t Ground<'g>,
    params: &'t Params,
    share: f64,
    scale: f64,
    rank: usize,
    m: usize,
    k: usize,
    loss: Box<dyn Loss>,
    free: Vec<Vec<f64>>,
    a: Vec<f64>,
    eta: Vec<f64>,
    members: Vec<Member>,
    is_member: Vec<bool>,
    sieve: Sieve,
    /// Bounds on ‖zⱼ'r‖/fⱼ at the last accepted fit.
    bounds: Vec<f64>,
    /// λ · share of that fit.
    level: f64,
    passes: f64,
}

/// Bounds on ‖zⱼ'r‖/fⱼ over all classes, for one residual a class.
fn bounds(sieve: &Sieve, ground: &Ground<'_>, residuals: &[Vec<f64>]) -> Vec<f64> {
    let views: Vec<&[f64]> = residuals.iter().map(Vec::as_slice).collect();
    let mut parts = vec![Bounds::default(); views.len()];
    sieve.bounds(ground.predictors.panels(), &views, &mut parts);
    let mut squares = vec![0.0; ground.predictors.n_predictors()];
    for (part, g) in parts.iter().zip(residuals) {
        let length = lanes::norm(g);
        for (square, &bound) in squares.iter_mut().zip(part.each()) {
            *square += (f64::from(bound) * length).powi(2);
        }
    }
    squares.iter().map(|square| square.sqrt()).collect()
}

/// ‖zⱼ'r‖/fⱼ, exactly.
fn joint(ground: &Ground<'_>, j: usize, residuals: &[Vec<f64>]) -> f64 {
    let squares = residuals.iter().map(|g| ground.correlation(j, g).powi(2));
    squares.sum::<f64>().sqrt() / ground.factor(j)
}

/// The largest ‖zⱼ'r‖/fⱼ at the null model.
pub(crate) fn top(ground: &Ground<'_>, null: &Null) -> f64 {
    let residuals = null.residuals(ground);
    let bounds = bounds(&Sieve::new(ground), ground, &residuals);
    let mut order: Vec<usize> = (0..bounds.len()).filter(|&j| bounds[j] > 0.0).collect();
    order.sort_by(|&a, &b| bounds[b].total_cmp(&bounds[a]).then(a.cmp(&b)));
    let mut top = 0.0_f64;
    for j in order {
        if bounds[j] < top {
            break;
        }
        top = top.max(joint(ground, j, &residuals));
    }
    top
}

/// Fits all strengths, which must fall and be above zero, with a share above zero.
///
/// # Errors
/// When called off, or when the outcome cannot be fitted.
pub(crate) fn walk(
    ground: &Ground<'_>,
    response: &Response,
    share: f64,
    strengths: &[f64],
    params: &Params,
    work: &Work<'_>,
) -> Result<Vec<Point>, Stop> {
    let null = Null::new(ground, response, work)?;
    let sieve = Sieve::new(ground);
    let first = bounds(&sieve, ground, &null.residuals(ground));
    let newton = null.newton;
    let mut walk = Walk {
        ground,
        params,
        share,
        scale: null.scale,
        rank: null.rank,
        m: ground.n_rows(),
        k: newton.loss.n_linear(),
        free: newton.free,
        a: newton.a,
        eta: newton.eta,
        loss: newton.loss,
        members: Vec::new(),
        is_member: vec![false; ground.predictors.n_predictors()],
        sieve,
        level: first.iter().fold(0.0, |top, bound| bound.max(top)),
        bounds: first,
        passes: 0.125,
    };
    let mut points = Vec::with_capacity(strengths.len());
    for (at, &strength) in strengths.iter().enumerate() {
        work.step(at, strengths.len())?;
        points.push(walk.fit(strength, work)?);
    }
    Ok(points)
}

impl Walk<'_, '_> {
    fn fit(&mut self, strength: f64, work: &Work<'_>) -> Result<Point, Stop> {
        let level = Level {
            lasso: strength * self.share,
            ridge: strength * (1.0 - self.share),
        };
        // The sequential strong rule, for groups.
        let least = 2.0 * level.lasso - self.level;
        let likely = self.outside(&self.bounds, least);
        self.admit(worst(likely, capacity(self.ground)));
        for _ in 0..PROOFS {
            let standing = self.solve(level, work)?;
            let residuals = spread(self.ground, self.loss.residual());
            let bounds = bounds(&self.sieve, self.ground, &residuals);
            self.passes += 0.125 * self.k.div_ceil(BATCH) as f64;
            let contenders = self.outside(&bounds, level.lasso * (1.0 - 1e-12));
            self.passes += (contenders.len() * self.k) as f64 / bounds.len() as f64;
            let (mut violators, mut all) = (Vec::new(), standing);
            for (_, j) in contenders {
                let c = joint(self.ground, j, &residuals);
                let over = c - level.lasso;
                if over > 1e-11 * level.lasso + FLOOR {
                    violators.push((over, j));
                }
                all.worst = all.worst.max(c / level.lasso);
                if over > 0.0 && level.ridge > 0.0 {
                    all.excess += over * over * self.ground.factor(j) / (2.0 * level.ridge);
                }
            }
            let gap = self.gap(all, level);
            if violators.is_empty() || gap <= self.params.relative_gap.min(1e-10) * self.scale {
                self.bounds = bounds;
                self.level = level.lasso;
                return self.point(all, gap, level, work);
            }
            self.admit(worst(violators, 10 + self.members.len() / 4));
        }
        // Every round admits a predictor, so this is reached only by very many of them.
        let standing = self.stand(level);
        let gap = self.scale;
        self.point(standing, gap, level, work)
    }

    /// Predictors outside the working set whose bound is not below a level.
    fn outside(&self, bounds: &[f64], least: f64) -> Vec<(f64, usize)> {
        let listed = bounds.iter().copied().enumerate();
        listed
            .filter(|&(j, bound)| bound > 0.0 && bound >= least && !self.is_member[j])
            .map(|(j, bound)| (bound, j))
            .collect()
    }

    fn admit(&mut self, predictors: Vec<usize>) {
        for predictor in predictors {
            let mut z = vec![0.0; self.m];
            self.ground.standardised(predictor, &mut z);
            self.is_member[predictor] = true;
            self.members.push(Member {
                predictor,
                factor: self.ground.factor(predictor),
                z,
                b: vec![0.0; self.k],
            });
        }
    }

    fn gap(&self, standing: Standing, level: Level) -> f64 {
        let dual = if level.ridge > 0.0 {
            self.loss.dual(1.0) - standing.excess
        } else {
            self.loss.dual(1.0 / standing.worst)
        };
        standing.loss + standing.penalty - dual
    }

    /// zⱼ'r for each class.
    fn products(&self, z: &[f64], residual: &[f64]) -> Vec<f64> {
        let classes = residual.chunks_exact(self.m);
        classes.map(|r| lanes::dot(z, r)).collect()
    }

    fn stand(&mut self, level: Level) -> Standing {
        let loss = self.loss.evaluate(&self.eta);
        let (mut penalty, mut worst, mut excess) = (0.0, 1.0_f64, 0.0);
        for member in &self.members {
            let size = lanes::norm(&member.b);
            let (lasso, ridge) = (level.lasso * member.factor, level.ridge * member.factor);
            penalty += lasso * size + 0.5 * ridge * size * size;
            let c = lanes::norm(&self.products(&member.z, self.loss.residual()));
            if c > lasso {
                worst = worst.max(c / lasso);
                if ridge > 0.0 {
                    excess += (c - lasso) * (c - lasso) / (2.0 * ridge);
                }
            }
        }
        Standing {
            loss,
            penalty,
            worst,
            excess,
            free_slope: free_slope(&self.free, self.loss.residual()),
        }
    }

    fn solve(&mut self, level: Level, work: &Work<'_>) -> Result<Standing, Stop> {
        let goal = 0.25 * self.params.relative_gap * self.scale;
        let mut standing = self.stand(level);
        for _ in 0..STEPS {
            work.check()?;
            if self.gap(standing, level) <= goal && standing.free_slope <= 1e-10 {
                break;
            }
            let (b, a) = self.model(level, work)?;
            let Some(next) = self.take(b, a, standing, level) else {
                break;
            };
            standing = next;
        }
        Ok(standing)
    }

    /// Minimises the second-order model: coefficients of all members, change of the free ones.
    fn model(&self, level: Level, work: &Work<'_>) -> Result<(Vec<Vec<f64>>, Vec<f64>), Stop> {
        let free = FreePart::new(self.loss.as_ref(), &self.free, self.m);
        let slope = free.products(self.loss.residual());
        let mut residual = self.loss.residual().to_vec();
        free.subtract(&free.solve(slope.clone()), &mut residual);
        let mut b: Vec<Vec<f64>> = self.members.iter().map(|member| member.b.clone()).collect();
        let mut blocks: Vec<Option<Block>> = self.members.iter().map(|_| None).collect();
        let mut first = 0.0_f64;
        for round in 0..ROUNDS {
            work.check()?;
            let mut moved = 0.0_f64;
            for (at, member) in self.members.iter().enumerate() {
                let (lasso, ridge) = (level.lasso * member.factor, level.ridge * member.factor);
                let mut c = self.products(&member.z, &residual);
                let is_zero = b[at].iter().all(|b| *b == 0.0);
                if is_zero && lanes::norm(&c) <= lasso {
                    continue;
                }
                if blocks[at].is_none() {
                    blocks[at] = Some(self.block(member, &free)?);
                }
                let Some(block) = &blocks[at] else {
                    unreachable!("the block has just been made")
                };
                for (k, c) in c.iter_mut().enumerate() {
                    *c += lanes::dot(block.curvature.column(k).as_slice(), &b[at]);
                }
                let next = block.shrunk(&c, lasso, ridge);
                let step: Vec<f64> = next.iter().zip(&b[at]).map(|(n, b)| n - b).collect();
                for (hx, step) in block.hx.iter().zip(&step) {
                    lanes::add_scaled(-step, hx, &mut residual);
                }
                let top = block
                    .values
                    .iter()
                    .fold(ridge, |top, value| top.max(*value));
                moved = moved.max(top * lanes::norm(&step));
                b[at] = next;
            }
            first = if round == 0 { moved } else { first };
            if moved <= 1e-13 + 1e-6 * first {
                break;
            }
        }
        let mut along = vec![0.0; self.m * self.k];
        for (member, b) in self.members.iter().zip(&b) {
            for (class, along) in along.chunks_exact_mut(self.m).enumerate() {
                lanes::add_scaled(b[class] - member.b[class], &member.z, along);
            }
        }
        let mut push = slope;
        for (push, h) in push.iter_mut().zip(free.h_products(&along)) {
            *push -= h;
        }
        Ok((b, free.solve(push)))
    }

    fn block(&self, member: &Member, free: &FreePart) -> Result<Block, Stop> {
        let mut hx = Vec::with_capacity(self.k);
        let mut curvature = Matrix::zeros(self.k, self.k);
        for class in 0..self.k {
            let mut x = vec![0.0; self.m * self.k];
            x[class * self.m..(class + 1) * self.m].copy_from_slice(&member.z);
            let mut product = Vec::new();
            self.loss.product(&x, &mut product);
            free.reduce(&x, &mut product);
            let column = self.products(&member.z, &product);
            curvature.column_mut(class).copy_from_slice(&column);
            hx.push(product);
        }
        let (values, vectors) = matrix::symmetric_eigen(&curvature)?;
        Ok(Block {
            hx,
            curvature,
            values: values.iter().map(|value| value.max(0.0)).collect(),
            vectors,
        })
    }

    fn linear(&self) -> Vec<f64> {
        let mut eta = vec![0.0; self.m * self.k];
        for (class, eta) in eta.chunks_exact_mut(self.m).enumerate() {
            for (column, a) in self.free.iter().zip(&self.a[class * self.free.len()..]) {
                lanes::add_scaled(*a, column, eta);
            }
            for member in &self.members {
                if member.b[class] != 0.0 {
                    lanes::add_scaled(member.b[class], &member.z, eta);
                }
            }
        }
        eta
    }

    /// Takes a step, halved until the objective does not rise; `None` when it cannot be lowered.
    fn take(
        &mut self,
        goal: Vec<Vec<f64>>,
        change: Vec<f64>,
        before: Standing,
        level: Level,
    ) -> Option<Standing> {
        let (a, eta) = (self.a.clone(), self.eta.clone());
        let b: Vec<Vec<f64>> = self.members.iter().map(|member| member.b.clone()).collect();
        let height = before.loss + before.penalty;
        let gap = self.gap(before, level);
        let mut share = 1.0;
        for _ in 0..40 {
            self.a = a.iter().zip(&change).map(|(a, d)| a + share * d).collect();
            for (member, (goal, b)) in self.members.iter_mut().zip(goal.iter().zip(&b)) {
                let mixed = goal.iter().zip(b).map(|(goal, b)| b + share * (goal - b));
                member.b = if share == 1.0 {
                    goal.clone()
                } else {
                    mixed.collect()
                };
            }
            self.eta = self.linear();
            let standing = self.stand(level);
            let now = standing.loss + standing.penalty;
            let rounding = 4.0 * f64::EPSILON * height.abs();
            let is_better =
                self.gap(standing, level) < gap || standing.free_slope < before.free_slope;
            if now < height - rounding || (now <= height + rounding && is_better) {
                return Some(standing);
            }
            share *= 0.5;
        }
        self.a = a;
        self.eta = eta;
        for (member, b) in self.members.iter_mut().zip(b) {
            member.b = b;
        }
        let _ = self.loss.evaluate(&self.eta);
        None
    }

    /// The degrees of freedom of the penalised coefficients at the present fit: the trace of
    /// G(G + P)⁻¹ for the chosen predictors, G their curvature and P that of the penalty, which is
    /// λf share (I − bb'/‖b‖²)/‖b‖ + λf (1 − share) I for each (Vaiter, Deledalle, Peyré, Fadili &
    /// Dossal 2012, for a measured outcome; here with the Hessian of the loss in its place).
    fn freedom(&self, level: Level, work: &Work<'_>) -> Result<f64, Stop> {
        let free = FreePart::new(self.loss.as_ref(), &self.free, self.m);
        let (mut x, mut hx) = (Vec::new(), Vec::new());
        let chosen: Vec<&Member> = self
            .members
            .iter()
            .filter(|member| member.b.iter().any(|b| *b != 0.0))
            .collect();
        for member in &chosen {
            work.check()?;
            for class in 0..self.k {
                let mut column = vec![0.0; self.m * self.k];
                column[class * self.m..(class + 1) * self.m].copy_from_slice(&member.z);
                let mut product = Vec::new();
                self.loss.product(&column, &mut product);
                free.reduce(&column, &mut product);
                x.extend_from_slice(&column);
                hx.extend_from_slice(&product);
            }
        }
        let curvature = matrix::lower_product(&x, &hx, self.m * self.k);
        let mut whole = curvature.clone();
        for (at, member) in chosen.iter().enumerate() {
            let size = lanes::norm(&member.b);
            let bend = level.lasso * member.factor / size;
            for i in 0..self.k {
                for j in 0..=i {
                    let along = member.b[i] * member.b[j] / (size * size);
                    let unit = f64::from(u8::from(i == j));
                    whole[(at * self.k + i, at * self.k + j)] +=
                        bend * (unit - along) + unit * level.ridge * member.factor;
                }
            }
        }
        let count = whole.nrows();
        let Some(factor) = Factor::of(whole, 1e-14) else {
            // Chosen predictors that depend on each other: what they span is all there is.
            return Ok(count.min((self.m - 1) * (self.k - 1)) as f64);
        };
        let mut trace = 0.0;
        for at in 0..count {
            if at % 64 == 0 {
                work.check()?;
            }
            let mut column: Vec<f64> = (0..count)
                .map(|row| curvature[(row.max(at), row.min(at))])
                .collect();
            factor.solve(&mut column);
            trace += column[at];
        }
        Ok(trace)
    }

    fn point(
        &mut self,
        standing: Standing,
        gap: f64,
        level: Level,
        work: &Work<'_>,
    ) -> Result<Point, Stop> {
        let freedom = self.freedom(level, work)?;
        let relative_gap = (gap / self.scale).max(0.0);
        let n_free = self.free.len();
        let mut linear = Vec::with_capacity(self.k);
        let mut n_chosen = 0;
        for class in 0..self.k {
            // Only differences between classes count: the symmetric form has sum zero.
            let free: Vec<f64> = (0..n_free)
                .map(|at| {
                    let sum: f64 = (0..self.k).map(|k| self.a[k * n_free + at]).sum();
                    self.a[class * n_free + at] - sum / self.k as f64
                })
                .collect();
            let (intercept, covariates) = self.ground.covariate_coefficients(&free);
            let mut predictors: Vec<(usize, f64)> = self
                .members
                .iter()
                .map(|member| (member.predictor, member.b[class]))
                .collect();
            let rest = &free[1 + self.ground.n_covariates()..];
            predictors.extend(self.ground.free.iter().copied().zip(rest.iter().copied()));
            predictors.retain(|(_, b)| *b != 0.0);
            predictors.sort_by_key(|(j, _)| *j);
            n_chosen += predictors.len();
            linear.push(Linear {
                intercept,
                covariates,
                predictors,
            });
        }
        let info = Info {
            relative_gap,
            settled: relative_gap <= self.params.relative_gap,
            passes: std::mem::take(&mut self.passes),
            events: 0,
            n_chosen,
            objective: standing.loss + standing.penalty,
            loss: standing.loss,
            effective_df: freedom + self.rank as f64,
        };
        Ok(Point::several(info, linear))
    }
}

impl Block {
    /// Minimises ½ d'Gd − c'd + lasso ‖d‖ + ½ ridge ‖d‖².
    ///
    /// d is zero if ‖c‖ ≤ lasso. Otherwise (G + ridge + lasso/ρ) d = c with ρ = ‖d‖, and ρ is the
    /// root of Σ (qₖ'c)²/((gₖ + ridge) ρ + lasso)² = 1, which falls in ρ.
    fn shrunk(&self, c: &[f64], lasso: f64, ridge: f64) -> Vec<f64> {
        let k = c.len();
        if lanes::norm(c) <= lasso {
            return vec![0.0; k];
        }
        let along: Vec<f64> = (0..k)
            .map(|at| lanes::dot(self.vectors.column(at).as_slice(), c))
            .collect();
        let square = |rho: f64| -> f64 {
            let terms = along.iter().zip(&self.values);
            terms
                .map(|(a, g)| (a / ((g + ridge) * rho + lasso)).powi(2))
                .sum()
        };
        let (mut low, mut high) = (0.0, 1.0);
        // A direction without curvature has no part in c; 200 doublings reach any length.
        for _ in 0..200 {
            if square(high) <= 1.0 {
                break;
            }
            low = high;
            high *= 2.0;
        }
        for _ in 0..200 {
            let middle = 0.5 * (low + high);
            if middle <= low || middle >= high {
                break;
            }
            if square(middle) > 1.0 {
                low = middle;
            } else {
                high = middle;
            }
        }
        let mut d = vec![0.0; k];
        for (at, along) in along.iter().enumerate() {
            let size = along * high / ((self.values[at] + ridge) * high + lasso);
            lanes::add_scaled(size, self.vectors.column(at).as_slice(), &mut d);
        }
        d
    }
}
