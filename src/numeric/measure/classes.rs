//! One of several classes: probabilities against what was.

use crate::numeric::matrix::Matrix;
use crate::numeric::measure::area_under_curve;

/// Measures of n × K class probabilities.
#[derive(Clone, Debug, PartialEq)]
pub struct ClassMeasures {
    /// How many samples.
    pub n: usize,
    /// Mean of −log of the probability given to the class that was.
    pub log_loss: f64,
    /// Mean over samples of Σ over classes of (p − y)².
    pub brier: f64,
    /// Share of samples whose most probable class (the first among equals) was theirs.
    pub accuracy: f64,
    /// Mean over the classes that occur of the share of their samples called right.
    pub balanced_accuracy: f64,
    /// Counts: rows the class that was, columns the class that was called.
    pub confusion: Vec<Vec<usize>>,
    /// Mean over classes of 2·TP/(2·TP + FP + FN); a class that is neither called nor there
    /// counts 0.
    pub macro_f1: f64,
    /// Mean over classes of the area under the curve of this class against the rest. `None`
    /// when a class does not occur, or no other does.
    pub area_one_against_rest: Option<f64>,
}

/// The most probable class of a sample; the first among equally probable ones.
#[must_use]
pub fn predicted_class(probability: &[f64]) -> usize {
    let mut best = 0;
    for (class, p) in probability.iter().enumerate() {
        if *p > probability[best] {
            best = class;
        }
    }
    best
}

impl ClassMeasures {
    /// Compares an n × K matrix of probabilities with the classes that were; `None` when there
    /// is no sample or a probability is not from 0 to 1.
    ///
    /// # Panics
    /// When there are not as many rows as classes given, or a class is beyond the columns.
    #[must_use]
    pub fn of(class: &[usize], probability: &Matrix) -> Option<Self> {
        assert_eq!(class.len(), probability.nrows(), "one row each");
        let is_sound = probability.iter().all(|p| (0.0..=1.0).contains(p));
        if class.is_empty() || !is_sound {
            return None;
        }
        let (n, k) = (class.len() as f64, probability.ncols());
        let mut confusion = vec![vec![0; k]; k];
        let (mut log_loss, mut brier) = (0.0, 0.0);
        for (at, &own) in class.iter().enumerate() {
            let row: Vec<f64> = probability.row(at).iter().copied().collect();
            confusion[own][predicted_class(&row)] += 1;
            // As for two classes: a certain prediction that is wrong has a large finite cost.
            log_loss -= row[own].max(1e-15).ln();
            brier += row
                .iter()
                .enumerate()
                .map(|(of, p)| (p - if of == own { 1.0 } else { 0.0 }).powi(2))
                .sum::<f64>();
        }
        let right: usize = (0..k).map(|of| confusion[of][of]).sum();
        let areas: Option<Vec<f64>> = (0..k)
            .map(|of| {
                let is_event: Vec<bool> = class.iter().map(|&own| own == of).collect();
                area_under_curve(&is_event, probability.column(of).as_slice())
            })
            .collect();
        Some(Self {
            n: class.len(),
            log_loss: log_loss / n,
            brier: brier / n,
            accuracy: right as f64 / n,
            balanced_accuracy: balanced_accuracy(&confusion),
            macro_f1: macro_f1(&confusion),
            confusion,
            area_one_against_rest: areas.map(|areas| areas.iter().sum::<f64>() / k as f64),
        })
    }
}

fn balanced_accuracy(confusion: &[Vec<usize>]) -> f64 {
    let shares: Vec<f64> = confusion
        .iter()
        .enumerate()
        .filter_map(|(class, row)| {
            let whole: usize = row.iter().sum();
            (whole > 0).then(|| row[class] as f64 / whole as f64)
        })
        .collect();
    shares.iter().sum::<f64>() / shares.len() as f64
}

fn macro_f1(confusion: &[Vec<usize>]) -> f64 {
    let k = confusion.len();
    let f1 = |class: usize| {
        let right = confusion[class][class];
        let there: usize = confusion[class].iter().sum();
        let called: usize = confusion.iter().map(|row| row[class]).sum();
        if there + called == 0 {
            0.0
        } else {
            2.0 * right as f64 / (there + called) as f64
        }
    };
    (0..k).map(f1).sum::<f64>() / k as f64
}
