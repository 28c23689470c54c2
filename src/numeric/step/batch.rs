//! Batches: their level taken out, predictor by predictor.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::change_columns;
use crate::numeric::step::{Class, Preparation, StepError, StepStop};
use std::borrow::Cow;
use std::collections::BTreeMap;

/// The fewest training samples from which the level of a batch is learnt.
const FEWEST: usize = 2;

/// Takes from each value the mean of its batch and adds the mean of all, both over the training
/// part. A batch with fewer than two known training values of a predictor, or none at all, such
/// as a whole batch that is held out, keeps its level. The outcome is not used; where batch and
/// outcome go together, centring takes signal away and leaves bias (Soneson et al. 2014).
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct BatchCentering;

/// For each batch what is taken from each column.
pub(crate) type Shifts = BTreeMap<usize, Vec<f64>>;

impl Preparation for BatchCentering {
    must_learn!(Shifts, Class::Learned);

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Shifts, StepStop> {
        let batches = part.batches().ok_or(StepError::NoBatches)?;
        let mut shifts: Shifts = batches
            .iter()
            .map(|&batch| (batch, vec![0.0; part.n_columns()]))
            .collect();
        for column in part.active_columns() {
            if column % 256 == 0 {
                work.check()?;
            }
            let mut sums: BTreeMap<usize, (f64, usize)> = BTreeMap::new();
            let (mut sum, mut count) = (0.0, 0);
            for (x, &batch) in part.column(column).zip(&batches) {
                if !x.is_nan() {
                    let own = sums.entry(batch).or_insert((0.0, 0));
                    own.0 += x;
                    own.1 += 1;
                    sum += x;
                    count += 1;
                }
            }
            for (batch, (own, n)) in sums {
                if n >= FEWEST {
                    let shift = own / n as f64 - sum / f64::from(count);
                    let of_batch = shifts.get_mut(&batch).expect("every batch has its shifts");
                    of_batch[column] = shift;
                }
            }
        }
        Ok(shifts)
    }

    fn apply<'s>(
        &self,
        shifts: &Shifts,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let batches = samples
            .companions
            .batch
            .clone()
            .ok_or(StepError::NoBatches)?;
        let of_row: Vec<Option<&Vec<f64>>> =
            batches.iter().map(|batch| shifts.get(batch)).collect();
        change_columns(samples, work, |column, values| {
            for (x, shifts) in values.iter_mut().zip(&of_row) {
                *x -= shifts.map_or(0.0, |shifts| shifts[column]);
            }
            Ok(())
        })
    }
}
