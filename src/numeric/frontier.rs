//! What is known about the predictors outside the working set, and the proof that none must come in.

use crate::numeric::ground::Ground;
use crate::numeric::lanes;
use crate::numeric::path::Params;
use crate::numeric::scan::{Bounds, Sieve};
use crate::numeric::working::Working;

/// A predictor violates when its correlation exceeds its threshold by more than this share, or by
/// the size of rounding.
const SLACK: f64 = 1e-11;

/// Bounds on the correlations of all predictors, as of the last accepted fit.
pub(crate) struct Frontier {
    sieve: Sieve,
    /// For each class: bounds on |zⱼ'g|/fⱼ over the length of the class's residual.
    bounds: Vec<Bounds>,
    /// The length of each class's residual.
    lengths: Vec<f64>,
    /// λ · share of that fit, in the units of the residuals; infinite before the first.
    level: f64,
    /// Readings of the matrix since they were last asked for, in units of the whole matrix.
    passes: f64,
    /// Bounds that nobody needs any more, to be filled again.
    spare: Vec<Bounds>,
}

/// What a scan says about a solution.
pub(crate) struct Proof {
    /// Members outside the working set that must come in: excess and key.
    pub(crate) violators: Vec<(f64, usize)>,
    /// The largest correlation over its threshold, at least 1.
    pub(crate) worst: f64,
    /// Σ excess²/(2 · ridge weight), for the dual of the elastic net.
    pub(crate) excess: f64,
}

/// λ · share and λ · (1 − share), in the units of the residuals.
#[derive(Clone, Copy)]
pub(crate) struct Level {
    pub(crate) lasso: f64,
    pub(crate) ridge: f64,
}

impl Frontier {
    /// Scans the null model's residuals: one for each class, over all samples, of sum zero.
    pub(crate) fn new(ground: &Ground<'_>, residuals: &[Vec<f64>]) -> Self {
        let mut frontier = Self {
            sieve: Sieve::new(ground),
            bounds: Vec::new(),
            lengths: Vec::new(),
            level: f64::INFINITY,
            passes: 0.0,
            spare: Vec::new(),
        };
        let bounds = frontier.scan(ground, &[residuals]);
        frontier.accept(
            bounds.into_iter().next().unwrap_or_default(),
            residuals,
            f64::INFINITY,
        );
        frontier
    }

    /// Bounds for the residuals of a few fits in one reading: fits × classes × predictors.
    pub(crate) fn scan(&mut self, ground: &Ground<'_>, fits: &[&[Vec<f64>]]) -> Vec<Vec<Bounds>> {
        let n_linear = fits.first().map_or(0, |fit| fit.len());
        let views: Vec<&[f64]> = fits
            .iter()
            .flat_map(|fit| fit.iter().map(Vec::as_slice))
            .collect();
        let mut flat: Vec<Bounds> = views
            .iter()
            .map(|_| self.spare.pop().unwrap_or_default())
            .collect();
        self.sieve
            .bounds(ground.predictors.panels(), &views, &mut flat);
        // The 8-bit copy is an eighth of the matrix, read once for each batch of residuals.
        self.passes += 0.125 * views.len().div_ceil(crate::numeric::scan::BATCH) as f64;
        let mut flat = flat.into_iter();
        fits.iter()
            .map(|_| flat.by_ref().take(n_linear).collect())
            .collect()
    }

    /// Remembers the bounds of an accepted fit.
    pub(crate) fn accept(&mut self, bounds: Vec<Bounds>, residuals: &[Vec<f64>], level: f64) {
        let old = std::mem::replace(&mut self.bounds, bounds);
        self.spare.extend(old);
        self.lengths = residuals.iter().map(|g| lanes::norm(g)).collect();
        self.level = level;
    }

    /// Takes back bounds that were not accepted.
    pub(crate) fn discard(&mut self, bounds: Vec<Bounds>) {
        self.spare.extend(bounds);
    }

    /// Takes the count of readings.
    pub(crate) fn take_passes(&mut self) -> f64 {
        std::mem::take(&mut self.passes)
    }

    /// Leaves a predictor out of all later bounds.
    pub(crate) fn forget(&mut self, j: usize) {
        self.sieve.forget(j);
    }

    /// The largest bound, in units of the residuals.
    fn top(&self) -> f64 {
        let tops = self
            .bounds
            .iter()
            .zip(&self.lengths)
            .map(|(bounds, length)| f64::from(bounds.largest()) * length);
        tops.fold(0.0, f64::max)
    }

    /// Members that the sequential strong rule (Tibshirani et al. 2012) expects at a weaker level:
    /// bound and key.
    pub(crate) fn likely(&self, working: &Working, weakest: f64) -> Vec<(f64, usize)> {
        let from = if self.level.is_finite() {
            self.level
        } else {
            self.top()
        };
        let threshold = 2.0 * weakest - from;
        let n_linear = working.n_linear;
        let mut likely = Vec::new();
        for (class, (bounds, &length)) in self.bounds.iter().zip(&self.lengths).enumerate() {
            let least = (threshold / length) as f32;
            bounds.not_below(least, |j, bound| {
                let key = j * n_linear + class;
                if !working.holds(key) {
                    likely.push((f64::from(bound) * length, key));
                }
            });
        }
        likely
    }

    /// Looks for members outside the working set that the bounds cannot exclude. `within` is what the
    /// working set itself has to say.
    pub(crate) fn prove(
        &mut self,
        ground: &Ground<'_>,
        working: &Working,
        params: &Params,
        residuals: &[Vec<f64>],
        bounds: &[Bounds],
        within: Within,
    ) -> Proof {
        let Level { lasso, ridge } = within.level;
        let mut proof = Proof {
            violators: Vec::new(),
            worst: within.worst,
            excess: within.excess,
        };
        let p = ground.predictors.n_predictors();
        let mut read = 0_usize;
        for (class, (g, bounds)) in residuals.iter().zip(bounds).enumerate() {
            let length = lanes::norm(g);
            // Rounded down, so that the comparison in single precision errs on the safe side.
            let least = (lasso / length) as f32 * (1.0 - 2.0 * f32::EPSILON);
            bounds.not_below(least, |j, _| {
                let key = j * working.n_linear + class;
                if working.holds(key) {
                    return;
                }
                read += 1;
                let c = ground.correlation(j, g);
                let factor = ground.factor(j);
                let over = c.abs() - lasso * factor;
                if over <= 0.0 || !params.sign(j).allows(c) {
                    return;
                }
                if over > SLACK * lasso * factor + within.floor {
                    proof.violators.push((over / factor, key));
                }
                proof.worst = proof.worst.max(c.abs() / (lasso * factor));
                if ridge > 0.0 {
                    proof.excess += over * over / (2.0 * ridge * factor);
                }
            });
        }
        self.passes += read as f64 / p as f64;
        proof
    }
}

/// What the working set says about its own members.
#[derive(Clone, Copy)]
pub(crate) struct Within {
    /// The penalty.
    pub(crate) level: Level,
    /// The largest correlation over its threshold, at least 1.
    pub(crate) worst: f64,
    /// Σ excess²/(2 · ridge weight).
    pub(crate) excess: f64,
    /// The size of a correlation that is rounding only.
    pub(crate) floor: f64,
}

/// How many members may come into the working set at once.
pub(crate) fn capacity(ground: &Ground<'_>) -> usize {
    100 + ground.n_rows() / 4
}

/// The `limit` worst of the candidates, ties by key, in the order of their keys.
pub(crate) fn worst(mut candidates: Vec<(f64, usize)>, limit: usize) -> Vec<usize> {
    let order = |a: &(f64, usize), b: &(f64, usize)| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1));
    if candidates.len() > limit {
        let (_, _, _) = candidates.select_nth_unstable_by(limit - 1, order);
        candidates.truncate(limit);
    }
    let mut keys: Vec<usize> = candidates.into_iter().map(|(_, key)| key).collect();
    keys.sort_unstable();
    keys
}
