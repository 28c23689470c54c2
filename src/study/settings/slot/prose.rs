//! The one place of a Prose cell: its text.

use crate::base::problem::Problem;
use crate::study::prose::{Piece, Prose};
use crate::study::settings::slot::{Value, take};

/// A place in a Prose cell.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ProseSlot {
    /// The text. References to cells are found by [`Prose::parse`], which needs the study.
    Text,
}

impl ProseSlot {
    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Text => "text",
        }
    }

    /// What stands there.
    #[must_use]
    pub fn get(self, prose: &Prose) -> Value {
        match self {
            Self::Text => Value::Prose(prose.clone()),
        }
    }

    /// The text that is given. Words without a study around them refer to no cell.
    ///
    /// # Errors
    /// A [`Problem`] when something other than a text is given.
    pub fn set(self, value: Value) -> Result<Prose, Problem> {
        match value {
            Value::Prose(prose) => Ok(prose),
            Value::Text(words) => Ok(Prose {
                pieces: vec![Piece::Text(words)],
            }),
            Value::Nothing => Ok(Prose::default()),
            Value::Number(_)
            | Value::Whole(_)
            | Value::Choice(_)
            | Value::Column(_)
            | Value::Columns(_)
            | Value::Cell(_)
            | Value::File { .. }
            | Value::Steps(_)
            | Value::Texts(_)
            | Value::Numbers(_)
            | Value::Corrections(_)
            | Value::Exclusions(_) => Err(take::wrong_sort(self.label(), "a text", &value)),
        }
    }
}
