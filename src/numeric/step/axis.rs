//! The axis: regions cut or kept, and values read off at common positions.

use crate::base::work::Work;
use crate::numeric::matrix::Matrix;
use crate::numeric::samples::{Origin, Samples};
use crate::numeric::step::filter::keep_only;
use crate::numeric::step::local::positions;
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;
use std::sync::Arc;

/// Switches off regions of the axis that were chosen beforehand (without an axis, of the
/// predictors' places 0, 1, 2, …). Regions chosen by looking at results are not fixed, and no
/// program can tell.
#[derive(Clone, Debug, PartialEq)]
pub struct CutRegions {
    regions: Vec<(f64, f64)>,
    treatment: Regions,
}

/// What happens to the regions named.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Regions {
    /// They are switched off.
    Cut,
    /// Everything else is switched off.
    Keep,
}

impl CutRegions {
    /// Regions from the first to the second position, ends included, in either order.
    ///
    /// # Errors
    /// [`ParameterError`] when an end is not a number.
    pub fn new(regions: Vec<(f64, f64)>, treatment: Regions) -> Result<Self, ParameterError> {
        for &(from, to) in &regions {
            let _ = ParameterError::check("regions", from, f64::MIN, f64::MAX)?;
            let _ = ParameterError::check("regions", to, f64::MIN, f64::MAX)?;
        }
        Ok(Self { regions, treatment })
    }
}

impl Preparation for CutRegions {
    knows_enough!(Class::FixedReference);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        _: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let is_kept: Vec<bool> = positions(&samples)?
            .into_iter()
            .map(|t| {
                let is_named = self
                    .regions
                    .iter()
                    .any(|&(a, b)| t >= a.min(b) && t <= a.max(b));
                match self.treatment {
                    Regions::Cut => !is_named,
                    Regions::Keep => is_named,
                }
            })
            .collect();
        keep_only(samples, &is_kept)
    }
}

/// Reads every row off at given positions, between its active predictors. The columns become
/// these positions. A value between two predictors of which one is missing is missing.
#[derive(Clone, Debug, PartialEq)]
pub struct CommonAxis {
    positions: Vec<f64>,
    rule: Interpolation,
}

/// How values between predictors are found.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Interpolation {
    /// On the straight line between the two neighbours.
    Linear,
    /// On the natural cubic spline through all known predictors of the row.
    CubicSpline,
}

impl CommonAxis {
    /// These positions, rising or falling throughout, at least one.
    ///
    /// # Errors
    /// [`ParameterError`] when there is none, or one breaks the direction.
    pub fn new(positions: Vec<f64>, rule: Interpolation) -> Result<Self, ParameterError> {
        let _ = ParameterError::check_count("positions", positions.len(), 1, usize::MAX)?;
        let rises = positions.len() < 2 || positions[1] > positions[0];
        for at in 1..positions.len() {
            let (before, own) = (positions[at - 1], positions[at]);
            let (least, most) = if rises {
                (before.next_up(), f64::MAX)
            } else {
                (f64::MIN, before.next_down())
            };
            let _ = ParameterError::check("positions", own, least, most)?;
        }
        let _ = ParameterError::check("positions", positions[0], f64::MIN, f64::MAX)?;
        Ok(Self { positions, rule })
    }
}

impl Preparation for CommonAxis {
    knows_enough!(Class::RowByRow);

    fn apply<'s>(
        &self,
        (): &(),
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        if samples.axis.is_none() {
            return Err(StepError::NoAxis.into());
        }
        let axis = positions(&samples)?;
        let mut columns = samples.active_columns();
        if columns.is_empty() {
            return Err(StepError::NothingActive.into());
        }
        columns.sort_by(|&a, &b| axis[a].total_cmp(&axis[b]));
        let knots: Vec<f64> = columns.iter().map(|&column| axis[column]).collect();
        let places = self
            .positions
            .iter()
            .map(|&t| place(&knots, t))
            .collect::<Result<Vec<_>, _>>()?;
        let n = samples.n_samples();
        let mut x = Matrix::zeros(n, places.len());
        let mut row_values = vec![0.0; knots.len()];
        for row in 0..n {
            work.check()?;
            for (value, &column) in row_values.iter_mut().zip(&columns) {
                *value = samples.x[(row, column)];
            }
            let bends = match self.rule {
                Interpolation::Linear => vec![0.0; knots.len()],
                Interpolation::CubicSpline => natural_bends(&knots, &row_values),
            };
            for (at, place) in places.iter().enumerate() {
                x[(row, at)] = place.read(&knots, &row_values, &bends);
            }
        }
        let old = samples.into_owned();
        Ok(Cow::Owned(Samples {
            x: Arc::new(x),
            limits: Vec::new(),
            active: vec![true; self.positions.len()],
            axis: Some(self.positions.clone()),
            origins: Some(
                self.positions
                    .iter()
                    .map(|&t| Origin::Position(t))
                    .collect(),
            ),
            companions: old.companions,
        }))
    }
}

/// Between which knots a position lies, and which share of the way it is.
struct Place {
    below: usize,
    share: f64,
}

fn place(knots: &[f64], position: f64) -> Result<Place, StepError> {
    let last = knots.len() - 1;
    // Positions printed with a few digits may lie beyond the ends by rounding.
    let slack = 1e-9 * (knots[last] - knots[0]);
    if position < knots[0] - slack || position > knots[last] + slack {
        return Err(StepError::OutsideAxis {
            position,
            least: knots[0],
            most: knots[last],
        });
    }
    if last == 0 {
        return Ok(Place {
            below: 0,
            share: 0.0,
        });
    }
    let below = knots.partition_point(|&k| k <= position).clamp(1, last) - 1;
    let width = knots[below + 1] - knots[below];
    Ok(Place {
        below,
        share: ((position - knots[below]) / width).clamp(0.0, 1.0),
    })
}

impl Place {
    fn read(&self, knots: &[f64], values: &[f64], bends: &[f64]) -> f64 {
        let (i, b) = (self.below, self.share);
        if b == 0.0 {
            return values[i];
        }
        if b == 1.0 {
            return values[i + 1];
        }
        let (a, width) = (1.0 - b, knots[i + 1] - knots[i]);
        let bend = (a * a * a - a) * bends[i] + (b * b * b - b) * bends[i + 1];
        a * values[i] + b * values[i + 1] + bend * width * width / 6.0
    }
}

/// The second derivatives at the knots of the natural cubic spline through the known values; 0
/// where a value is missing.
fn natural_bends(knots: &[f64], values: &[f64]) -> Vec<f64> {
    let known: Vec<usize> = (0..knots.len()).filter(|&i| !values[i].is_nan()).collect();
    let n = known.len();
    let mut bends = vec![0.0; knots.len()];
    if n < 3 {
        return bends;
    }
    let t = |at: usize| knots[known[at]];
    let slope = |at: usize| (values[known[at + 1]] - values[known[at]]) / (t(at + 1) - t(at));
    // The tridiagonal equations of the inner knots, solved forward and back.
    let (mut upper, mut right) = (vec![0.0; n], vec![0.0; n]);
    for at in 1..n - 1 {
        let (before, after) = (t(at) - t(at - 1), t(at + 1) - t(at));
        let pivot = 2.0 * (before + after) - before * upper[at - 1];
        upper[at] = after / pivot;
        right[at] = (6.0 * (slope(at) - slope(at - 1)) - before * right[at - 1]) / pivot;
    }
    for at in (1..n - 1).rev() {
        right[at] -= upper[at] * right[at + 1];
        bends[known[at]] = right[at];
    }
    bends
}
