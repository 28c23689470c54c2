//! The partial likelihood of times to an event: value, slope, Hessian products and dual bound, each
//! in one sweep over the sorted samples.
//!
//! ```text
//! f(η) = Σₖ cₖ [ log Σⱼ ωₖⱼ exp ηⱼ − aₖ'η ]
//! ```
//!
//! with one term for each event time (Breslow), or for each of the d tied events at it (Efron), at
//! which the risk set holds all samples of the stratum whose time is not earlier. cₖ is the weight of
//! the events, aₖ spreads 1 over the tied events by weight. ω is the sample weight; Efron counts the
//! tied events themselves with 1 − l/d, l = 0 … d − 1. Tied events of unequal weight share their mean
//! weight (the usual convention).

use crate::numeric::loss::Loss;
use crate::numeric::response::Ties;

/// The loss of times to an event, divided by the sum of the sample weights.
#[derive(Clone)]
pub(crate) struct Cox {
    /// Sample of each place: by stratum, then by falling time.
    order: Vec<usize>,
    groups: Vec<Group>,
    /// Weights with sum 1, by place.
    v: Vec<f64>,
    /// Sample weights, by place.
    w: Vec<f64>,
    /// Linear predictors less the largest, which changes no loss, by place.
    eta: Vec<f64>,
    /// w·exp(η − top), by place.
    risk: Vec<f64>,
    /// The diagonal part of the Hessian, by place.
    diagonal: Vec<f64>,
    /// −∇f, by sample.
    residual: Vec<f64>,
}

/// One event time of one stratum.
#[derive(Clone)]
struct Group {
    /// Where the stratum begins.
    stratum: usize,
    /// Places before this one, from the stratum's beginning, are at risk.
    end: usize,
    /// The places of the events at this time.
    events: Vec<usize>,
    /// The weight of each term.
    weight: f64,
    /// What each term takes off the tied events: 0, or l/d.
    less: Vec<f64>,
    /// The sum Σ ω exp η of each term, at the present linear predictors.
    sums: Vec<f64>,
}

impl Cox {
    /// Takes time, event and stratum of each sample, weights v of sum 1, and the sum of the sample
    /// weights.
    pub(crate) fn new(rows: &[(f64, bool, usize)], v: Vec<f64>, total: f64, ties: Ties) -> Self {
        let mut order: Vec<usize> = (0..rows.len()).collect();
        order.sort_by(|&a, &b| {
            let ((time_a, _, stratum_a), (time_b, _, stratum_b)) = (rows[a], rows[b]);
            stratum_a
                .cmp(&stratum_b)
                .then(time_b.total_cmp(&time_a))
                .then(a.cmp(&b))
        });
        let m = rows.len();
        let mut groups = Vec::new();
        let (mut stratum, mut begin) = (0, 0);
        while begin < m {
            let (time, _, name) = rows[order[begin]];
            if rows[order[stratum]].2 != name {
                stratum = begin;
            }
            // Zero and minus zero are one time.
            let same = |place: usize| {
                let (other, _, other_name) = rows[order[place]];
                other == time && other_name == name
            };
            let end = (begin..m).find(|&place| !same(place)).unwrap_or(m);
            let events: Vec<usize> = (begin..end).filter(|&at| rows[order[at]].1).collect();
            if !events.is_empty() {
                let weight: f64 = events.iter().map(|&at| v[order[at]]).sum();
                let d = events.len();
                let (weight, less) = match ties {
                    Ties::Breslow => (weight, vec![0.0]),
                    Ties::Efron => (
                        weight / d as f64,
                        (0..d).map(|l| l as f64 / d as f64).collect(),
                    ),
                };
                groups.push(Group {
                    stratum,
                    end,
                    events,
                    weight,
                    sums: vec![0.0; less.len()],
                    less,
                });
            }
            begin = end;
        }
        Self {
            v: order.iter().map(|&sample| v[sample]).collect(),
            w: order.iter().map(|&sample| v[sample] * total).collect(),
            order,
            groups,
            eta: vec![0.0; m],
            risk: vec![0.0; m],
            diagonal: vec![0.0; m],
            residual: vec![0.0; m],
        }
    }

    /// For each group, in order: Σ over the risk set and Σ over the tied events of `risk·x`.
    fn sweep(&self, x: impl Fn(usize) -> f64, mut see: impl FnMut(usize, f64, f64)) {
        let mut place = 0;
        let mut sum = 0.0;
        let mut stratum = usize::MAX;
        for (at, group) in self.groups.iter().enumerate() {
            if group.stratum != stratum {
                stratum = group.stratum;
                place = stratum;
                sum = 0.0;
            }
            while place < group.end {
                sum += self.risk[place] * x(place);
                place += 1;
            }
            let tied = group
                .events
                .iter()
                .map(|&place| self.risk[place] * x(place))
                .sum();
            see(at, sum, tied);
        }
    }

    /// Spreads a value of each group to all places of its risk set, and another to its events:
    /// `out[place] = risk · (Σ all − Σ tied)`.
    fn spread(&self, all: &[f64], tied: &[f64], out: &mut [f64]) {
        let m = self.order.len();
        out.fill(0.0);
        // From the earliest time on, a stratum's places are at risk at every group before.
        let mut sum = 0.0;
        let mut place = m;
        let mut stratum = usize::MAX;
        for (at, group) in self.groups.iter().enumerate().rev() {
            if group.stratum != stratum {
                while place > group.end {
                    place -= 1;
                    let is_inside = stratum != usize::MAX && place >= stratum;
                    out[place] += if is_inside {
                        self.risk[place] * sum
                    } else {
                        0.0
                    };
                }
                stratum = group.stratum;
                sum = 0.0;
            }
            while place > group.end {
                place -= 1;
                out[place] += self.risk[place] * sum;
            }
            sum += all[at];
            for &event in &group.events {
                out[event] -= self.risk[event] * tied[at];
            }
        }
        while stratum != usize::MAX && place > stratum {
            place -= 1;
            out[place] += self.risk[place] * sum;
        }
    }
}

impl Loss for Cox {
    fn has_intercept(&self) -> bool {
        false
    }

    fn evaluate(&mut self, eta: &[f64]) -> f64 {
        let top = eta.iter().fold(f64::NEG_INFINITY, |top, eta| top.max(*eta));
        for (place, &sample) in self.order.iter().enumerate() {
            self.eta[place] = eta[sample] - top;
            self.risk[place] = self.w[place] * self.eta[place].exp();
        }
        let mut sums = vec![(0.0, 0.0); self.groups.len()];
        self.sweep(|_| 1.0, |at, all, tied| sums[at] = (all, tied));
        let mut loss = 0.0;
        let mut all = vec![0.0; self.groups.len()];
        let mut tied = vec![0.0; self.groups.len()];
        for (at, group) in self.groups.iter_mut().enumerate() {
            let (whole, events) = sums[at];
            for (sum, less) in group.sums.iter_mut().zip(&group.less) {
                // Far-off linear predictors can underflow; a sum is never quite nothing.
                *sum = (whole - less * events).max(f64::MIN_POSITIVE);
                loss += group.weight * sum.ln();
                all[at] += group.weight / *sum;
                tied[at] += less * group.weight / *sum;
            }
            for &event in &group.events {
                loss -= self.v[event] * self.eta[event];
            }
        }
        let mut diagonal = std::mem::take(&mut self.diagonal);
        self.spread(&all, &tied, &mut diagonal);
        self.diagonal = diagonal;
        for (place, &sample) in self.order.iter().enumerate() {
            self.residual[sample] = -self.diagonal[place];
        }
        for group in &self.groups {
            for &event in &group.events {
                self.residual[self.order[event]] += self.v[event];
            }
        }
        loss
    }

    fn residual(&self) -> &[f64] {
        &self.residual
    }

    fn curvature(&self) -> Option<&[f64]> {
        None
    }

    fn product(&self, x: &[f64], out: &mut Vec<f64>) {
        let mut all = vec![0.0; self.groups.len()];
        let mut tied = vec![0.0; self.groups.len()];
        self.sweep(
            |place| x[self.order[place]],
            |at, whole, events| {
                let group = &self.groups[at];
                for (sum, less) in group.sums.iter().zip(&group.less) {
                    let mean = (whole - less * events) / sum;
                    all[at] += group.weight * mean / sum;
                    tied[at] += less * group.weight * mean / sum;
                }
            },
        );
        let mut placed = vec![0.0; x.len()];
        self.spread(&all, &tied, &mut placed);
        out.clear();
        out.resize(x.len(), 0.0);
        for (place, &sample) in self.order.iter().enumerate() {
            out[sample] = self.diagonal[place] * x[sample] - placed[place];
        }
    }

    /// u = t·r splits as u = Σₖ cₖ (aₖ − π'ₖ) with π'ₖ = t πₖ + (1 − t) aₖ, πₖ the probabilities
    /// in the risk set. f is a sum of convex functions, so its conjugate is at most the sum of
    /// theirs: f*(−u) ≤ Σₖ cₖ Σⱼ π'ₖⱼ log(π'ₖⱼ/ωₖⱼ). At t = 1 this is an equality.
    fn dual(&self, t: f64) -> f64 {
        let mut linear = vec![(0.0, 0.0); self.groups.len()];
        self.sweep(
            |place| self.eta[place],
            |at, all, tied| linear[at] = (all, tied),
        );
        let mut plain = vec![(0.0, 0.0); self.groups.len()];
        self.sweep(|_| 1.0, |at, all, tied| plain[at] = (all, tied));
        let log_t = if t > 0.0 { t.ln() } else { 0.0 };
        let mut dual = 0.0;
        for (at, group) in self.groups.iter().enumerate() {
            let spread: f64 = group.events.iter().map(|&event| self.w[event]).sum();
            for (sum, less) in group.sums.iter().zip(&group.less) {
                // Those at risk that are not among the events.
                let others = (plain[at].0 - plain[at].1) / sum;
                let along = (linear[at].0 - linear[at].1) / sum;
                let mut kept = t * (others * (log_t - sum.ln()) + along);
                for &event in &group.events {
                    let share = self.risk[event] * (1.0 - less) / sum;
                    let mixed = t * share + (1.0 - t) * self.w[event] / spread;
                    if mixed > 0.0 {
                        kept += mixed * (mixed / (self.w[event] * (1.0 - less))).ln();
                    }
                }
                dual -= group.weight * kept;
            }
        }
        dual
    }

    fn frozen(&self) -> Box<dyn Loss> {
        Box::new(self.clone())
    }
}
