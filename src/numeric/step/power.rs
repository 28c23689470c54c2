//! Power transforms that bring values closer to a normal distribution.

use crate::base::work::Work;
use crate::numeric::parts::TrainingPart;
use crate::numeric::samples::Samples;
use crate::numeric::step::column::known;
use crate::numeric::step::pointwise::{Direction, map_values};
use crate::numeric::step::{Class, ParameterError, Preparation, StepError, StepStop};
use std::borrow::Cow;

/// A power transform of every predictor, with one power for all that is given, or one power for
/// each that is fitted in the training part by the largest likelihood of normal values.
///
/// A fitted power lies between −5 and 5; a predictor with one value only keeps power 1.
#[derive(Clone, Debug, PartialEq)]
pub struct PowerTransform {
    family: PowerFamily,
    choice: PowerChoice,
}

/// A family of power transforms, with power λ.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum PowerFamily {
    /// Box and Cox (1964), for x > 0: (x^λ − 1)/λ; log x for λ = 0.
    BoxCox,
    /// Yeo and Johnson (2000), for any x: ((x+1)^λ − 1)/λ (log(x+1) for λ = 0) for x ≥ 0;
    /// −((1−x)^(2−λ) − 1)/(2−λ) (−log(1−x) for λ = 2) for x < 0.
    YeoJohnson,
}

/// Where the power comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum PowerChoice {
    /// This power, for every predictor.
    Given(f64),
    /// Fitted in the training part, for each predictor.
    Fitted,
}

const LARGEST_POWER: f64 = 5.0;

impl PowerTransform {
    /// A transform of this family.
    ///
    /// # Errors
    /// [`ParameterError`] when a given power is not from −5 to 5.
    pub fn new(family: PowerFamily, choice: PowerChoice) -> Result<Self, ParameterError> {
        match choice {
            PowerChoice::Fitted => {}
            PowerChoice::Given(power) => {
                let _ = ParameterError::check("power", power, -LARGEST_POWER, LARGEST_POWER)?;
            }
        }
        Ok(Self { family, choice })
    }
}

impl PowerFamily {
    /// The transformed value; `None` outside the domain.
    #[must_use]
    pub fn value(self, x: f64, power: f64) -> Option<f64> {
        match self {
            Self::BoxCox => (x > 0.0).then(|| power_of_log(x.ln(), power)),
            Self::YeoJohnson if x >= 0.0 => Some(power_of_log(x.ln_1p(), power)),
            Self::YeoJohnson => Some(-power_of_log((-x).ln_1p(), 2.0 - power)),
        }
    }

    /// The power with the largest likelihood, −n/2·log(variance) + (λ − 1)·Σ log slope.
    fn fit(self, values: &[f64]) -> f64 {
        // Every value is ±(e^(power·log) − 1)/power, with 2 − λ for λ where the sign is −.
        let logs: Vec<(f64, f64)> = values
            .iter()
            .map(|&x| match self {
                Self::BoxCox => (x.ln(), 1.0),
                Self::YeoJohnson => (x.abs().ln_1p(), if x < 0.0 { -1.0 } else { 1.0 }),
            })
            .collect();
        let slopes: f64 = logs.iter().map(|(log, sign)| sign * log).sum();
        let n = values.len() as f64;
        let mut moved = vec![0.0; values.len()];
        let mut likelihood = |power: f64| {
            for (y, &(log, sign)) in moved.iter_mut().zip(&logs) {
                let own = if sign < 0.0 { 2.0 - power } else { power };
                *y = sign * power_of_log(log, own);
            }
            let mean = moved.iter().sum::<f64>() / n;
            let variance = moved.iter().map(|y| (y - mean) * (y - mean)).sum::<f64>() / n;
            -0.5 * n * variance.ln() + (power - 1.0) * slopes
        };
        best_between(-LARGEST_POWER, LARGEST_POWER, &mut likelihood)
    }
}

/// (x^λ − 1)/λ, from log x and without loss near λ = 0.
fn power_of_log(log: f64, power: f64) -> f64 {
    if power == 0.0 {
        log
    } else {
        (power * log).exp_m1() / power
    }
}

/// The place of the largest value of a function with one peak: a look at five places, then
/// parabolas through the best three values, with golden sections where a parabola does not help
/// (Brent 1973, chapter 5). Ends when the place is known to 1e-7.
fn best_between(low: f64, high: f64, f: &mut dyn FnMut(f64) -> f64) -> f64 {
    const PLACES: usize = 4;
    const GOLDEN: f64 = 0.381_966_011_250_105_1;
    const TOLERANCE: f64 = 1e-7;
    let at = |i: usize| low + (high - low) * i as f64 / PLACES as f64;
    let looks: Vec<f64> = (0..=PLACES).map(|i| f(at(i))).collect();
    let first = (0..=PLACES)
        .max_by(|&i, &j| looks[i].total_cmp(&looks[j]))
        .expect("there are places");
    let (mut a, mut b) = (at(first.saturating_sub(1)), at((first + 1).min(PLACES)));
    // The best place x, the second best w, the one before v; the last step and the one before.
    let (mut x, mut of_x) = (at(first), looks[first]);
    let (mut w, mut of_w, mut v, mut of_v) = (x, of_x, x, of_x);
    let (mut step, mut before) = (0.0_f64, 0.0_f64);
    for _ in 0..100 {
        let middle = 0.5 * (a + b);
        if (x - middle).abs() + 0.5 * (b - a) <= 2.0 * TOLERANCE {
            break;
        }
        let r = (x - w) * (of_x - of_v);
        let q = (x - v) * (of_x - of_w);
        let top = (x - v) * q - (x - w) * r;
        let below = 2.0 * (r - q);
        let parabola = -top / below;
        let lands_inside = x + parabola > a && x + parabola < b;
        let helps = before.abs() > TOLERANCE && parabola.abs() < 0.5 * before.abs();
        before = step;
        step = if below != 0.0 && helps && lands_inside {
            parabola
        } else {
            before = if x < middle { b - x } else { a - x };
            GOLDEN * before
        };
        let u = x + if step.abs() >= TOLERANCE {
            step
        } else {
            TOLERANCE.copysign(step)
        };
        let of_u = f(u);
        if of_u >= of_x {
            if u < x {
                b = x;
            } else {
                a = x;
            }
            (v, of_v, w, of_w, x, of_x) = (w, of_w, x, of_x, u, of_u);
        } else {
            if u < x {
                a = u;
            } else {
                b = u;
            }
            if of_u >= of_w || w == x {
                (v, of_v, w, of_w) = (w, of_w, u, of_u);
            } else if of_u >= of_v || v == x || v == w {
                (v, of_v) = (u, of_u);
            }
        }
    }
    x
}

impl Preparation for PowerTransform {
    /// One power for every column, or one for each.
    type Found = Vec<f64>;

    fn class(&self) -> Class {
        match self.choice {
            PowerChoice::Given(_) => Class::RowByRow,
            PowerChoice::Fitted => Class::Learned,
        }
    }

    fn given(&self) -> Option<Vec<f64>> {
        match self.choice {
            PowerChoice::Given(power) => Some(vec![power]),
            PowerChoice::Fitted => None,
        }
    }

    fn learn(&self, part: &TrainingPart<'_>, work: &Work<'_>) -> Result<Vec<f64>, StepStop> {
        let mut powers = vec![1.0; part.n_columns()];
        for column in part.active_columns() {
            work.check()?;
            let values: Vec<f64> = known(part.column(column)).collect();
            if let Some(at) = values
                .iter()
                .position(|&x| self.family.value(x, 1.0).is_none())
            {
                let row = part.rows()[part
                    .column(column)
                    .position(|x| x == values[at])
                    .expect("the value comes from this column")];
                let value = values[at];
                return Err(StepError::OutOfDomain { row, column, value }.into());
            }
            if values.iter().any(|&x| x != values[0]) {
                powers[column] = self.family.fit(&values);
            }
        }
        Ok(powers)
    }

    fn apply<'s>(
        &self,
        powers: &Vec<f64>,
        samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        map_values(samples, work, Direction::Rising, |column, x| {
            let power = powers.get(column).copied().unwrap_or(powers[0]);
            self.family.value(x, power)
        })
    }
}
