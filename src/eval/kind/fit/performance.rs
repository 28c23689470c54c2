//! How well held-out samples were predicted.

use crate::eval::kind::data::Dataset;
use crate::eval::kind::fit::measures::{Measure, Measures, Sort};
use crate::eval::kind::fit::ranks::Basis;
use crate::eval::kind::fit::scene::{Predictions, Scene};
use crate::numeric::matrix::Matrix;
use crate::numeric::procedure::{HeldOut, OuterFit};

/// The performance of a procedure on held-out parts.
#[derive(Clone, Debug)]
pub struct Performance {
    /// The measures of each repeat, averaged over repeats. Within a repeat they are computed over
    /// all samples, except that pairs are compared within held-out parts.
    pub mean: Measures,
    /// The measures of each repeat.
    pub repeats: Vec<Measures>,
    /// The measures of the model without predictors on the same parts, averaged over repeats.
    pub baseline: Measures,
    /// The mean held-out prediction of each sample over repeats; see [`Predictions::scores`].
    pub scores: Matrix,
    /// The held-out predictions of each repeat.
    pub each: Vec<Matrix>,
    /// The loss that is compared with that of the model without predictors.
    pub errors: HeldOutErrors,
    /// The ends of 95 % intervals over units.
    pub intervals: Vec<(Measure, f64, f64)>,
    /// Which pairs were compared, where pairs are.
    pub basis: Option<Basis>,
}

/// Held-out losses, summed by unit and averaged over repeats.
#[derive(Clone, Debug)]
pub struct HeldOutErrors {
    /// How many samples each unit has.
    pub sizes: Vec<usize>,
    /// The sum of the losses of each unit's samples.
    pub model: Vec<f64>,
    /// The same for the model without predictors.
    pub baseline: Vec<f64>,
}

/// A mean with its 95 % interval.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    /// The mean.
    pub value: f64,
    /// Its standard error over units.
    pub standard_error: f64,
    /// The lower end.
    pub low: f64,
    /// The upper end.
    pub high: f64,
}

/// The normal quantile of a two-sided 95 % interval.
const QUANTILE: f64 = 1.959_963_984_540_054;

/// Gathers held-out fits of the samples of a scene.
#[must_use]
pub fn performance(scene: &Scene<'_>, data: &Dataset, held_out: &HeldOut) -> Performance {
    let n_repeats = held_out
        .fits
        .iter()
        .map(|fit| fit.repeat + 1)
        .max()
        .unwrap_or(0);
    let by_repeat: Vec<Vec<&OuterFit>> = (0..n_repeats)
        .map(|repeat| {
            let own = held_out.fits.iter();
            own.filter(|fit| fit.repeat == repeat).collect()
        })
        .collect();
    of_repeats(scene, data, &by_repeat)
}

/// The performance of a single fit on the samples that it had not seen.
#[must_use]
pub fn performance_of_one(scene: &Scene<'_>, data: &Dataset, fit: &OuterFit) -> Performance {
    of_repeats(scene, data, &[vec![fit]])
}

fn of_repeats(scene: &Scene<'_>, data: &Dataset, by_repeat: &[Vec<&OuterFit>]) -> Performance {
    let rows = scene.rows;
    let sort = scene.sort();
    let n_repeats = by_repeat.len() as f64;
    let mut gathered = Gathered::default();
    for fits in by_repeat {
        let mut own = Predictions::new(scene);
        let mut null = Predictions::new(scene);
        for (part, fit) in fits.iter().enumerate() {
            for (at, row) in fit.rows.iter().enumerate() {
                let place = rows
                    .binary_search(row)
                    .expect("held-out rows are among those that are judged");
                let linear: Vec<f64> = fit.linear.row(at).iter().copied().collect();
                let hazards = fit.hazards.as_ref();
                own.put(scene, place, part, &linear, hazards.map(|h| &h.fitted));
                null.put(
                    scene,
                    place,
                    part,
                    &fit.baseline,
                    hazards.map(|h| &h.baseline),
                );
            }
        }
        gathered.add(scene, &own, &null, n_repeats);
    }
    let errors = errors_by_unit(
        data,
        rows,
        &gathered.losses(paired_loss(sort), rows.len()),
        &gathered.null_loss,
    );
    let intervals = gathered.intervals(scene, data);
    let mut scores = Matrix::zeros(rows.len(), gathered.each.first().map_or(0, Matrix::ncols));
    for repeat in &gathered.each {
        scores += repeat / n_repeats;
    }
    Performance {
        mean: Measures::mean_of(&gathered.repeats),
        baseline: Measures::mean_of(&gathered.baselines),
        repeats: gathered.repeats,
        scores,
        each: gathered.each,
        errors,
        intervals,
        basis: gathered.basis,
    }
}

/// The measure by whose losses a fit is compared with the model without predictors, sample by
/// sample.
#[must_use]
pub const fn paired_loss(sort: Sort) -> Measure {
    match sort {
        Sort::Measured => Measure::Rmse,
        Sort::YesNo | Sort::Classes => Measure::LogLoss,
        Sort::Count => Measure::Deviance,
        Sort::Time => Measure::BrierMiddle,
    }
}

/// Measures that are means over samples, or follow from one.
const MEANS: [Measure; 9] = [
    Measure::Rmse,
    Measure::R2,
    Measure::LogLoss,
    Measure::Brier,
    Measure::Misclassification,
    Measure::Accuracy,
    Measure::Deviance,
    Measure::DevianceExplained,
    Measure::BrierMiddle,
];

/// What comes together over repeats.
#[derive(Default)]
struct Gathered {
    repeats: Vec<Measures>,
    baselines: Vec<Measures>,
    each: Vec<Matrix>,
    /// Mean losses over repeats, sample by sample.
    losses: Vec<(Measure, Vec<f64>)>,
    null_loss: Vec<f64>,
    /// The measure over pairs: its mean and the mean sway of each sample.
    ranked: Option<(Measure, Vec<f64>)>,
    basis: Option<Basis>,
}

impl Gathered {
    fn add(&mut self, scene: &Scene<'_>, own: &Predictions, null: &Predictions, n_repeats: f64) {
        let share = 1.0 / n_repeats;
        self.repeats.push(scene.measures(own));
        self.baselines.push(scene.measures(null));
        self.each.push(own.scores(scene));
        for measure in MEANS {
            let Some(losses) = scene.losses(measure, own) else {
                continue;
            };
            match self.losses.iter_mut().find(|(known, _)| *known == measure) {
                Some((_, sums)) => add(sums, &losses, share),
                None => {
                    let mut sums = vec![0.0; losses.len()];
                    add(&mut sums, &losses, share);
                    self.losses.push((measure, sums));
                }
            }
        }
        let paired = scene.losses(paired_loss(scene.sort()), null);
        let paired = paired.unwrap_or_else(|| vec![f64::NAN; scene.rows.len()]);
        if self.null_loss.is_empty() {
            self.null_loss = vec![0.0; paired.len()];
        }
        add(&mut self.null_loss, &paired, share);
        if let Some(ranked) = scene.ranked(own) {
            let (_, sway) = self
                .ranked
                .get_or_insert_with(|| (ranked.measure, vec![0.0; ranked.sway.len()]));
            add(sway, &ranked.sway, share);
            self.basis = Some(match self.basis {
                Some(Basis::Pooled) => Basis::Pooled,
                Some(Basis::Within) | None => ranked.basis,
            });
        }
    }

    fn losses(&self, measure: Measure, n: usize) -> Vec<f64> {
        self.losses
            .iter()
            .find(|(known, _)| *known == measure)
            .map_or_else(|| vec![f64::NAN; n], |(_, losses)| losses.clone())
    }

    /// The 95 % intervals of the measures that have one.
    fn intervals(&self, scene: &Scene<'_>, data: &Dataset) -> Vec<(Measure, f64, f64)> {
        let mut intervals = Vec::new();
        let null = scene.null_loss();
        for (measure, losses) in &self.losses {
            let errors = errors_by_unit(data, scene.rows, losses, losses);
            let mean = interval(&errors.model, &errors.sizes);
            let low = mean.low.max(0.0);
            let explained = [Measure::R2, Measure::DevianceExplained].contains(measure);
            let (low, high) = if *measure == Measure::Rmse {
                (low.sqrt(), mean.high.sqrt())
            } else if explained {
                (1.0 - mean.high / null, 1.0 - low / null)
            } else if *measure == Measure::Accuracy {
                (1.0 - mean.high.min(1.0), 1.0 - low)
            } else if *measure == Measure::Misclassification {
                (low, mean.high.min(1.0))
            } else {
                (low, mean.high)
            };
            intervals.push((*measure, low, high));
        }
        if let Some((measure, sway)) = &self.ranked {
            let repeats: Vec<f64> = self
                .repeats
                .iter()
                .map(|repeat| repeat.get(*measure))
                .filter(|value| value.is_finite())
                .collect();
            let value = repeats.iter().sum::<f64>() / repeats.len() as f64;
            let error = error_of_sums(data, scene.rows, sway);
            let reach = QUANTILE * error;
            intervals.push((*measure, (value - reach).max(0.0), (value + reach).min(1.0)));
        }
        intervals
    }
}

fn add(sums: &mut [f64], values: &[f64], share: f64) {
    for (sum, value) in sums.iter_mut().zip(values) {
        *sum += value * share;
    }
}

/// The standard error of a measure over pairs from how much each sample sways it, the samples of a
/// unit taken together (Obuchowski 1997 for the area under the curve), with the factor m/(m − 1) for
/// m units.
#[must_use]
pub fn error_of_sums(data: &Dataset, rows: &[usize], sway: &[f64]) -> f64 {
    let mut units = std::collections::BTreeMap::new();
    for (row, sway) in rows.iter().zip(sway) {
        *units.entry(data.units[*row]).or_insert(0.0) += sway;
    }
    let m = units.len() as f64;
    let square: f64 = units.values().map(|sway: &f64| sway * sway).sum();
    if m > 1.0 {
        (square * m / (m - 1.0)).sqrt()
    } else {
        f64::NAN
    }
}

/// Sums losses by unit.
#[must_use]
pub fn errors_by_unit(
    data: &Dataset,
    rows: &[usize],
    model: &[f64],
    baseline: &[f64],
) -> HeldOutErrors {
    let mut units: Vec<usize> = rows.iter().map(|&row| data.units[row]).collect();
    units.sort_unstable();
    units.dedup();
    let mut errors = HeldOutErrors {
        sizes: vec![0; units.len()],
        model: vec![0.0; units.len()],
        baseline: vec![0.0; units.len()],
    };
    for (at, &row) in rows.iter().enumerate() {
        let unit = units
            .binary_search(&data.units[row])
            .expect("every row has a unit");
        errors.sizes[unit] += 1;
        errors.model[unit] += model[at];
        errors.baseline[unit] += baseline[at];
    }
    errors
}

/// The mean of values over samples with its standard error over units: the sums of a unit's
/// deviations count as one observation (linearised ratio estimate for samples in clusters,
/// Cochran 1977, chapter 9), so that repeats of one unit do not make it better known.
#[must_use]
pub fn interval(sums: &[f64], sizes: &[usize]) -> Interval {
    let n: f64 = sizes.iter().map(|&size| size as f64).sum();
    let m = sums.len() as f64;
    let value = sums.iter().sum::<f64>() / n;
    let square: f64 = sums
        .iter()
        .zip(sizes)
        .map(|(sum, &size)| (sum - value * size as f64).powi(2))
        .sum();
    let standard_error = if m > 1.0 {
        (square * m / (m - 1.0)).sqrt() / n
    } else {
        f64::NAN
    };
    Interval {
        value,
        standard_error,
        low: value - QUANTILE * standard_error,
        high: value + QUANTILE * standard_error,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn repeats_of_one_unit_do_not_narrow_the_interval() {
        let single = interval(&[1.0, 2.0, 4.0, 5.0], &[1, 1, 1, 1]);
        let thrice = interval(&[3.0, 6.0, 12.0, 15.0], &[3, 3, 3, 3]);
        assert!((single.value - 3.0).abs() < 1e-12);
        assert!((single.standard_error - thrice.standard_error).abs() < 1e-12);
        // The usual standard error of a mean: √(Σ(x − x̄)²/(n − 1)/n) = √(10/3/4).
        assert!((single.standard_error - (10.0_f64 / 12.0).sqrt()).abs() < 1e-12);
    }
}
