//! Ways through the values that several steps share: by column, by row, by run of neighbours.

use crate::base::work::Work;
use crate::numeric::samples::Samples;
use crate::numeric::step::{StepError, StepStop};
use std::borrow::Cow;
use std::ops::Range;
use std::sync::Arc;

/// How many values are worked through between two looks at whether to go on: some milliseconds.
const VALUES_PER_LOOK: usize = 1 << 20;

/// Changes the values of each active column. `change` gets the column's index and its values.
pub(super) fn change_columns<'s>(
    mut samples: Cow<'s, Samples>,
    work: &Work<'_>,
    mut change: impl FnMut(usize, &mut [f64]) -> Result<(), StepError>,
) -> Result<Cow<'s, Samples>, StepStop> {
    let active = samples.active_columns();
    let n = samples.n_samples();
    if active.is_empty() || n == 0 {
        return Ok(samples);
    }
    let looks = (VALUES_PER_LOOK / n).max(1);
    let samples_mut = samples.to_mut();
    forget_limits(samples_mut);
    let x = Arc::make_mut(&mut samples_mut.x).as_mut_slice();
    for (at, &column) in active.iter().enumerate() {
        if at % looks == 0 {
            work.check()?;
        }
        change(column, &mut x[column * n..(column + 1) * n])?;
    }
    Ok(samples)
}

/// Changes the values of each row in the given columns. `change` gets the row's index and its
/// values in the order of the columns.
pub(super) fn change_rows<'s>(
    mut samples: Cow<'s, Samples>,
    columns: &[usize],
    work: &Work<'_>,
    mut change: impl FnMut(usize, &mut [f64]) -> Result<(), StepError>,
) -> Result<Cow<'s, Samples>, StepStop> {
    // Eight rows at a time, because eight values of a column share a line of the cache.
    const BLOCK: usize = 8;
    let n = samples.n_samples();
    if columns.is_empty() || n == 0 {
        return Ok(samples);
    }
    let samples_mut = samples.to_mut();
    forget_limits(samples_mut);
    let x = Arc::make_mut(&mut samples_mut.x).as_mut_slice();
    let width = columns.len();
    let mut buffer = vec![0.0; BLOCK * width];
    for start in (0..n).step_by(BLOCK) {
        let rows = BLOCK.min(n - start);
        for (place, &column) in columns.iter().enumerate() {
            for at in 0..rows {
                buffer[at * width + place] = x[column * n + start + at];
            }
        }
        for at in 0..rows {
            work.check()?;
            change(start + at, &mut buffer[at * width..(at + 1) * width])?;
        }
        for (place, &column) in columns.iter().enumerate() {
            for at in 0..rows {
                x[column * n + start + at] = buffer[at * width + place];
            }
        }
    }
    Ok(samples)
}

/// The limits of active columns mean nothing once the values are on another scale; the values
/// themselves stay missing.
pub(super) fn forget_limits(samples: &mut Samples) {
    let active = &samples.active;
    samples.limits.retain(|limit| !active[limit.column]);
}

/// Runs of neighbouring active columns. A region that was cut out divides its neighbours.
pub(super) fn runs(active: &[bool]) -> Vec<Range<usize>> {
    let mut runs = Vec::new();
    let mut start = None;
    for column in 0..=active.len() {
        match (start, active.get(column).copied().unwrap_or(false)) {
            (None, true) => start = Some(column),
            (Some(from), false) => {
                runs.push(from..column);
                start = None;
            }
            (None, false) | (Some(_), true) => {}
        }
    }
    runs
}

/// The known values among some.
pub(super) fn known(values: impl Iterator<Item = f64>) -> impl Iterator<Item = f64> {
    values.filter(|value| !value.is_nan())
}

/// The mean of the known values; `None` when there is none.
pub(super) fn mean_known(values: impl Iterator<Item = f64>) -> Option<f64> {
    let (sum, count) = known(values).fold((0.0, 0_usize), |(sum, count), value| {
        (sum + value, count + 1)
    });
    (count > 0).then(|| sum / count as f64)
}

/// The median of the known values (the mean of the middle two of an even number); `None` when
/// there is none.
pub(super) fn median_known(values: impl Iterator<Item = f64>) -> Option<f64> {
    let mut values: Vec<f64> = known(values).collect();
    median_of(&mut values)
}

/// The median of some numbers, none of them missing, which are put into another order.
pub(super) fn median_of(values: &mut [f64]) -> Option<f64> {
    let n = values.len();
    if n == 0 {
        return None;
    }
    let (below, &mut upper, _) = values.select_nth_unstable_by(n / 2, f64::total_cmp);
    if n % 2 == 1 {
        return Some(upper);
    }
    let lower = below
        .iter()
        .copied()
        .max_by(f64::total_cmp)
        .expect("an even number of values has one below the upper middle");
    Some(0.5 * (lower + upper))
}
