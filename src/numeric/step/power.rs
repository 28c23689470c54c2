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
            Self::BoxCox => (x > 0.0).then(|| power_of(x, power)),
            Self::YeoJohnson if x >= 0.0 => Some(power_of(x + 1.0, power)),
            Self::YeoJohnson => Some(-power_of(1.0 - x, 2.0 - power)),
        }
    }

    /// The logarithm of the derivative, up to its factor (λ − 1).
    fn log_slope(self, x: f64) -> f64 {
        match self {
            Self::BoxCox => x.ln(),
            Self::YeoJohnson => x.signum() * x.abs().ln_1p(),
        }
    }

    /// The power with the largest likelihood, −n/2·log(variance) + (λ − 1)·Σ log slope.
    fn fit(self, values: &[f64]) -> f64 {
        let slopes: f64 = values.iter().map(|&x| self.log_slope(x)).sum();
        let n = values.len() as f64;
        let likelihood = |power: f64| {
            let moved = || values.iter().filter_map(|&x| self.value(x, power));
            let mean = moved().sum::<f64>() / n;
            let variance = moved().map(|y| (y - mean) * (y - mean)).sum::<f64>() / n;
            -0.5 * n * variance.ln() + (power - 1.0) * slopes
        };
        best_between(-LARGEST_POWER, LARGEST_POWER, likelihood)
    }
}

/// (x^λ − 1)/λ without loss near λ = 0.
fn power_of(x: f64, power: f64) -> f64 {
    let log = x.ln();
    if power == 0.0 {
        log
    } else {
        (power * log).exp_m1() / power
    }
}

/// The place of the largest value of a function with one peak, by golden-section search
/// (Kiefer 1953) after a look at 40 places.
fn best_between(low: f64, high: f64, f: impl Fn(f64) -> f64) -> f64 {
    const PLACES: usize = 40;
    const GOLDEN: f64 = 0.618_033_988_749_894_8;
    let at = |i: usize| low + (high - low) * i as f64 / PLACES as f64;
    let best = (0..=PLACES)
        .max_by(|&i, &j| f(at(i)).total_cmp(&f(at(j))))
        .expect("there are places");
    let (mut a, mut b) = (at(best.saturating_sub(1)), at((best + 1).min(PLACES)));
    for _ in 0..48 {
        let (left, right) = (b - GOLDEN * (b - a), a + GOLDEN * (b - a));
        if f(left) > f(right) {
            b = right;
        } else {
            a = left;
        }
    }
    0.5 * (a + b)
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
