//! The places of a Score cell's settings.

use crate::base::problem::Problem;
use crate::study::settings::data::TableSource;
use crate::study::settings::score::Score;
use crate::study::settings::slot::table::TableSlot;
use crate::study::settings::slot::{Bounds, Value, take};

/// A place in the settings of a Score cell.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ScoreSlot {
    /// The fit that is applied.
    Fit,
    /// A place of the table with the new samples. Its file can be set where there is none yet.
    Table(TableSlot),
}

impl ScoreSlot {
    /// The places that these settings have, in reading order.
    #[must_use]
    pub fn of(score: &Score) -> Vec<Self> {
        let mut slots = vec![Self::Fit];
        match &score.table {
            None => slots.push(Self::Table(TableSlot::File)),
            Some(table) => slots.extend(TableSlot::of(table).into_iter().map(Self::Table)),
        }
        slots
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Fit => "fit that is applied",
            Self::Table(slot) => slot.label(),
        }
    }

    /// The stable names of the choices.
    #[must_use]
    pub const fn choices(self) -> &'static [&'static str] {
        match self {
            Self::Fit => &[],
            Self::Table(slot) => slot.choices(),
        }
    }

    /// The numbers that may stand there.
    #[must_use]
    pub const fn bounds(self) -> Option<Bounds> {
        match self {
            Self::Fit => None,
            Self::Table(slot) => slot.bounds(),
        }
    }

    /// What stands there; `None` when the settings have no such place.
    #[must_use]
    pub fn get(self, score: &Score) -> Option<Value> {
        match (self, &score.table) {
            (Self::Fit, _) => Some(Value::Cell(score.fit.0)),
            (Self::Table(TableSlot::File), None) => Some(Value::Nothing),
            (Self::Table(_), None) => None,
            (Self::Table(slot), Some(table)) => slot.get(table),
        }
    }

    /// The settings with another value there.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there.
    pub fn set(self, score: &Score, value: Value) -> Result<Score, Problem> {
        let label = self.label();
        let mut score = score.clone();
        match (self, &score.table) {
            (Self::Fit, _) => score.fit = take::cell(label, &value)?,
            (Self::Table(TableSlot::File), _) if take::is_nothing(&value) => score.table = None,
            (Self::Table(TableSlot::File), None) => {
                let Value::File { source, name } = value else {
                    return Err(take::wrong_sort(label, "a file", &value));
                };
                score.table = Some(TableSource::new(source, &name));
            }
            (Self::Table(_), None) => {
                return Err(take::absent(label, "no table has been chosen"));
            }
            (Self::Table(slot), Some(table)) => score.table = Some(slot.set(table, &value)?),
        }
        Ok(score)
    }
}
