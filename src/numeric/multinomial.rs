//! The loss of several classes, in the symmetric form: every class has coefficients.

use crate::numeric::loss::{Loss, entropy};

/// f = Σ vᵢ [ log Σₖ exp ηᵢₖ − η of the sample's class ]
#[derive(Clone)]
pub(crate) struct Multinomial {
    class: Vec<usize>,
    n_classes: usize,
    v: Vec<f64>,
    /// Probabilities, class by class.
    share: Vec<f64>,
    residual: Vec<f64>,
}

impl Multinomial {
    pub(crate) fn new(class: Vec<usize>, n_classes: usize, v: Vec<f64>) -> Self {
        let size = class.len() * n_classes;
        Self {
            class,
            n_classes,
            v,
            share: vec![0.0; size],
            residual: vec![0.0; size],
        }
    }
}

impl Loss for Multinomial {
    fn n_linear(&self) -> usize {
        self.n_classes
    }

    fn evaluate(&mut self, eta: &[f64]) -> f64 {
        let m = self.class.len();
        let mut loss = 0.0;
        for i in 0..m {
            let (own, v) = (self.class[i], self.v[i]);
            let at = |k: usize| k * m + i;
            let top = (0..self.n_classes).fold(f64::NEG_INFINITY, |top, k| top.max(eta[at(k)]));
            let sum: f64 = (0..self.n_classes).map(|k| (eta[at(k)] - top).exp()).sum();
            loss += v * (top + sum.ln() - eta[at(own)]);
            let mut others = 0.0;
            for k in 0..self.n_classes {
                let share = (eta[at(k)] - top).exp() / sum;
                self.share[at(k)] = share;
                self.residual[at(k)] = -v * share;
                if k != own {
                    others += share;
                }
            }
            // 1 − share of the own class, without losing digits where it is nearly 1.
            self.residual[at(own)] = v * others;
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
        let m = self.class.len();
        out.clear();
        out.resize(x.len(), 0.0);
        for i in 0..m {
            let mean: f64 = (0..self.n_classes)
                .map(|k| self.share[k * m + i] * x[k * m + i])
                .sum();
            for k in 0..self.n_classes {
                let at = k * m + i;
                out[at] = self.v[i] * self.share[at] * (x[at] - mean);
            }
        }
    }

    fn dual(&self, t: f64) -> f64 {
        // With aₖ = (1 − t) Yₖ + t Pₖ: −Σ v Σₖ aₖ log aₖ.
        let m = self.class.len();
        let mut sum = 0.0;
        for i in 0..m {
            for k in 0..self.n_classes {
                let own = if self.class[i] == k { 1.0 - t } else { 0.0 };
                sum -= self.v[i] * entropy(own + t * self.share[k * m + i]);
            }
        }
        sum
    }

    fn frozen(&self) -> Box<dyn Loss> {
        Box::new(self.clone())
    }
}
