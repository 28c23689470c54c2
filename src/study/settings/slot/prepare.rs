//! The places of a Prepare cell's settings.

use crate::base::problem::Problem;
use crate::study::settings::prepare::{Prepare, Step};
use crate::study::settings::slot::{Bounds, Value, take};

/// A place in the settings of a Prepare cell.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum PrepareSlot {
    /// The cell that is prepared further.
    Input,
    /// All steps, in their order.
    Steps,
    /// A number of one step, counted from 0.
    Step(usize, StepSlot),
}

/// A number or choice of one step.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum StepSlot {
    /// What is added before the logarithm.
    Offset,
    /// Smoothing, or which derivative.
    Derivative,
    /// The number of neighbouring predictors.
    Window,
    /// The degree of the polynomial.
    Degree,
    /// The largest share that may be missing.
    MostMissing,
    /// The smallest share that must differ.
    LeastDiffering,
    /// The share of the limit.
    ShareOfLimit,
}

const DERIVATIVES: [(&str, u32); 3] = [
    ("smoothing", 0),
    ("first-derivative", 1),
    ("second-derivative", 2),
];
const DERIVATIVE_NAMES: [&str; 3] = take::names(&DERIVATIVES);

/// The widest window and the highest degree that mean anything for a local polynomial.
const WINDOW: Bounds = Bounds::Whole {
    least: 3,
    most: 501,
};
const DEGREE: Bounds = Bounds::Whole { least: 0, most: 9 };
const SHARE: Bounds = Bounds::Any {
    least: 0.0,
    most: 1.0,
};
const NOT_NEGATIVE: Bounds = Bounds::Any {
    least: 0.0,
    most: f64::INFINITY,
};

impl PrepareSlot {
    /// The places that these settings have, in reading order.
    #[must_use]
    pub fn of(prepare: &Prepare) -> Vec<Self> {
        let mut slots = vec![Self::Input, Self::Steps];
        for (at, step) in prepare.steps.iter().enumerate() {
            slots.extend(StepSlot::of(step).iter().map(|slot| Self::Step(at, *slot)));
        }
        slots
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Input => "cell that is prepared",
            Self::Steps => "preparation steps",
            Self::Step(_, slot) => slot.label(),
        }
    }

    /// The stable names of the choices.
    #[must_use]
    pub const fn choices(self) -> &'static [&'static str] {
        match self {
            Self::Step(_, StepSlot::Derivative) => &DERIVATIVE_NAMES,
            Self::Input | Self::Steps | Self::Step(..) => &[],
        }
    }

    /// The numbers that may stand there.
    #[must_use]
    pub const fn bounds(self) -> Option<Bounds> {
        match self {
            Self::Step(_, slot) => slot.bounds(),
            Self::Input | Self::Steps => None,
        }
    }

    /// What stands there; `None` when the settings have no such place.
    #[must_use]
    pub fn get(self, prepare: &Prepare) -> Option<Value> {
        match self {
            Self::Input => Some(Value::Cell(prepare.input.0)),
            Self::Steps => Some(Value::Steps(prepare.steps.clone())),
            Self::Step(at, slot) => slot.get(prepare.steps.get(at)?),
        }
    }

    /// The settings with another value there.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there.
    pub fn set(self, prepare: &Prepare, value: Value) -> Result<Prepare, Problem> {
        let label = self.label();
        let mut prepare = prepare.clone();
        match self {
            Self::Input => prepare.input = take::cell(label, &value)?,
            Self::Steps => {
                prepare.steps = match value {
                    Value::Steps(steps) => steps,
                    Value::Nothing => Vec::new(),
                    Value::Number(_)
                    | Value::Whole(_)
                    | Value::Choice(_)
                    | Value::Text(_)
                    | Value::Column(_)
                    | Value::Columns(_)
                    | Value::Cell(_)
                    | Value::File { .. }
                    | Value::Texts(_)
                    | Value::Numbers(_)
                    | Value::Corrections(_)
                    | Value::Exclusions(_)
                    | Value::Prose(_) => {
                        return Err(take::wrong_sort(label, "a list of steps", &value));
                    }
                };
                for step in &prepare.steps {
                    lawful(step)?;
                }
            }
            Self::Step(at, slot) => {
                let step = prepare
                    .steps
                    .get_mut(at)
                    .ok_or_else(|| take::absent(label, "there is no such step"))?;
                slot.set(step, &value)?;
                lawful(step)?;
            }
        }
        Ok(prepare)
    }
}

impl StepSlot {
    /// The places that a step has, in reading order.
    #[must_use]
    pub const fn of(step: &Step) -> &'static [Self] {
        match step {
            Step::Log { .. } => &[Self::Offset],
            Step::SavitzkyGolay { .. } => &[Self::Derivative, Self::Window, Self::Degree],
            Step::Detrend { .. } => &[Self::Degree],
            Step::MissingShareFilter { .. } => &[Self::MostMissing],
            Step::NearConstantFilter { .. } => &[Self::LeastDiffering],
            Step::BelowLimit { .. } => &[Self::ShareOfLimit],
            Step::StandardNormalVariate
            | Step::ScatterCorrection
            | Step::MedianImputation
            | Step::Center
            | Step::UnitVariance => &[],
        }
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Offset => "number added before the logarithm",
            Self::Derivative => "derivative",
            Self::Window => "window",
            Self::Degree => "degree",
            Self::MostMissing => "largest share missing",
            Self::LeastDiffering => "smallest share differing",
            Self::ShareOfLimit => "share of the limit",
        }
    }

    const fn bounds(self) -> Option<Bounds> {
        match self {
            Self::Offset => Some(NOT_NEGATIVE),
            Self::Window => Some(WINDOW),
            Self::Degree => Some(DEGREE),
            Self::MostMissing | Self::LeastDiffering | Self::ShareOfLimit => Some(SHARE),
            Self::Derivative => None,
        }
    }

    fn get(self, step: &Step) -> Option<Value> {
        let whole = |number: u32| Some(Value::Whole(u64::from(number)));
        match (self, step) {
            (Self::Offset, Step::Log { offset }) => Some(Value::Number(*offset)),
            (Self::Derivative, Step::SavitzkyGolay { derivative, .. }) => DERIVATIVES
                .iter()
                .find(|(_, order)| order == derivative)
                .map(|(name, _)| Value::choice(name)),
            (Self::Window, Step::SavitzkyGolay { window, .. }) => whole(*window),
            (Self::Degree, Step::SavitzkyGolay { degree, .. } | Step::Detrend { degree }) => {
                whole(*degree)
            }
            (Self::MostMissing, Step::MissingShareFilter { most }) => Some(Value::Number(*most)),
            (Self::LeastDiffering, Step::NearConstantFilter { least }) => {
                Some(Value::Number(*least))
            }
            (Self::ShareOfLimit, Step::BelowLimit { share }) => Some(Value::Number(*share)),
            (
                Self::Offset
                | Self::Derivative
                | Self::Window
                | Self::Degree
                | Self::MostMissing
                | Self::LeastDiffering
                | Self::ShareOfLimit,
                _,
            ) => None,
        }
    }

    fn set(self, step: &mut Step, value: &Value) -> Result<(), Problem> {
        let label = self.label();
        match (self, step) {
            (Self::Offset, Step::Log { offset }) => {
                *offset = take::number(label, NOT_NEGATIVE, value)?;
            }
            (Self::Derivative, Step::SavitzkyGolay { derivative, .. }) => {
                *derivative = take::pick(label, &DERIVATIVES, value)?;
            }
            (Self::Window, Step::SavitzkyGolay { window, .. }) => {
                *window = take::count(label, WINDOW, value)?;
            }
            (Self::Degree, Step::SavitzkyGolay { degree, .. } | Step::Detrend { degree }) => {
                *degree = take::count(label, DEGREE, value)?;
            }
            (Self::MostMissing, Step::MissingShareFilter { most }) => {
                *most = take::number(label, SHARE, value)?;
            }
            (Self::LeastDiffering, Step::NearConstantFilter { least }) => {
                *least = take::number(label, SHARE, value)?;
            }
            (Self::ShareOfLimit, Step::BelowLimit { share }) => {
                *share = take::number(label, SHARE, value)?;
            }
            (
                Self::Offset
                | Self::Derivative
                | Self::Window
                | Self::Degree
                | Self::MostMissing
                | Self::LeastDiffering
                | Self::ShareOfLimit,
                _,
            ) => return Err(take::absent(label, "the step has no such number")),
        }
        Ok(())
    }
}

/// Whether the numbers of a step go together.
fn lawful(step: &Step) -> Result<(), Problem> {
    let Step::SavitzkyGolay {
        window,
        degree,
        derivative,
    } = step
    else {
        return Ok(());
    };
    if window % 2 == 0 {
        return Err(Problem::new(
            "setting-out-of-range",
            format!("The window must be an odd number; “{window}” was typed."),
        )
        .mend(format!("Take {} or {}.", window - 1, window + 1)));
    }
    if window <= degree {
        return Err(Problem::new(
            "setting-out-of-range",
            format!(
                "The window must be wider than the degree of the polynomial; the window is \
                 {window} and the degree {degree}."
            ),
        )
        .mend("Widen the window, or lower the degree."));
    }
    if derivative > degree {
        return Err(Problem::new(
            "setting-out-of-range",
            format!(
                "A polynomial of degree {degree} has no derivative of order {derivative} to take."
            ),
        )
        .mend("Raise the degree, or take a lower derivative."));
    }
    Ok(())
}
