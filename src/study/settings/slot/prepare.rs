//! The places of a Prepare cell's settings.

use crate::base::problem::Problem;
use crate::study::settings::prepare::Prepare;
use crate::study::settings::slot::step::lawful;
use crate::study::settings::slot::{Bounds, Value, take};

pub use crate::study::settings::slot::step::StepSlot;

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

impl PrepareSlot {
    /// The places that these settings have, in reading order.
    #[must_use]
    pub fn of(prepare: &Prepare) -> Vec<Self> {
        let mut slots = vec![Self::Input, Self::Steps];
        for (at, step) in prepare.steps.iter().enumerate() {
            slots.extend(
                StepSlot::of(step)
                    .into_iter()
                    .map(|slot| Self::Step(at, slot)),
            );
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
            Self::Step(_, slot) => slot.choices(),
            Self::Input | Self::Steps => &[],
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
