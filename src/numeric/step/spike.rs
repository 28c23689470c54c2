//! Spikes: single values that stand out from their neighbours.

use crate::base::work::Work;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::{change_rows, median_known, runs};
use crate::numeric::step::{Class, ParameterError, Preparation, StepStop};
use std::borrow::Cow;

/// Replaces a value by the median of its window when it differs from that median by more than
/// `threshold` times the robust standard deviation of the steps between neighbours, both those
/// of the whole run of neighbouring active predictors (as in Whitaker and Hayes 2018) and those
/// in the window. Slopes and peaks are made of steps like their neighbours' and stay; a value
/// far off its neighbours goes. Windows are cut at the ends of the run.
#[derive(Clone, Debug, PartialEq)]
pub struct SpikeRemoval {
    half: usize,
    threshold: f64,
}

/// Makes the median distance of normal values their standard deviation.
const NORMAL_CONSISTENCY: f64 = 1.482_602_218_505_602;

impl SpikeRemoval {
    /// A window of `half` predictors on each side, 3 to 1000 (a spike makes two of its steps), and
    /// a threshold from 1 to 1000.
    ///
    /// # Errors
    /// [`ParameterError`] when a parameter is out of its range.
    pub fn new(half: usize, threshold: f64) -> Result<Self, ParameterError> {
        let half = ParameterError::check_count("half", half, 3, 1000)?;
        let threshold = ParameterError::check("threshold", threshold, 1.0, 1000.0)?;
        Ok(Self { half, threshold })
    }
}

impl Preparation for SpikeRemoval {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        mut samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        for run in runs(&samples.active) {
            let columns: Vec<usize> = run.collect();
            samples = change_rows(samples, &columns, work, |_, values| {
                let n = values.len();
                let steps: Vec<f64> = values.windows(2).map(|pair| pair[1] - pair[0]).collect();
                let typical = median_known(steps.iter().copied()).unwrap_or(f64::NAN);
                let spread_of = |steps: &[f64], center: f64| {
                    let distances = steps.iter().map(|step| (step - center).abs());
                    NORMAL_CONSISTENCY * median_known(distances).unwrap_or(f64::NAN)
                };
                let spread = spread_of(&steps, typical);
                let mended: Vec<f64> = (0..n)
                    .map(|at| {
                        let (from, to) =
                            (at.saturating_sub(self.half), (at + self.half).min(n - 1));
                        let middle = median_known(values[from..=to].iter().copied());
                        let local = spread_of(&steps[from..to], 0.0);
                        let most = self.threshold * spread.max(local);
                        match middle {
                            // A spread of 0 says nothing about what stands out.
                            Some(middle) if most > 0.0 && (values[at] - middle).abs() > most => {
                                middle
                            }
                            Some(_) | None => values[at],
                        }
                    })
                    .collect();
                values.copy_from_slice(&mended);
                Ok(())
            })?;
        }
        Ok(samples)
    }
}
