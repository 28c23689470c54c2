//! What is counted and never undone: looks, and openings of the sealed set.

/// One configuration that was evaluated against the outcome.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Look {
    /// The SHA-256 of the configuration in the file's own form: data, preparation and fit.
    pub configuration: String,
    /// The title that the cell had.
    pub cell: String,
    /// The day, as year-month-day.
    pub date: String,
}

/// One opening of a sealed set.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Opening {
    /// The title of the data cell whose sealed set was opened.
    pub cell: String,
    /// The configuration that was judged on it.
    pub configuration: String,
    /// The day, as year-month-day.
    pub date: String,
}

/// The counted acts of a study. They are appended, saved and printed, and not part of history:
/// undo brings back settings, not innocence.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Ledger {
    looks: Vec<Look>,
    openings: Vec<Opening>,
}

impl Ledger {
    /// A ledger as it was written down.
    #[must_use]
    pub fn restored(looks: Vec<Look>, openings: Vec<Opening>) -> Self {
        Self { looks, openings }
    }

    /// Counts a look, unless this configuration has been looked at before.
    pub fn look(&mut self, look: Look) {
        if !self
            .looks
            .iter()
            .any(|known| known.configuration == look.configuration)
        {
            self.looks.push(look);
        }
    }

    /// Counts an opening of a sealed set. The same configuration opens it only once.
    pub fn open(&mut self, opening: Opening) {
        let same = |known: &Opening| {
            known.configuration == opening.configuration && known.cell == opening.cell
        };
        if !self.openings.iter().any(same) {
            self.openings.push(opening);
        }
    }

    /// All distinct configurations that were evaluated against the outcome, oldest first.
    #[must_use]
    pub fn looks(&self) -> &[Look] {
        &self.looks
    }

    /// All openings of sealed sets, oldest first.
    #[must_use]
    pub fn openings(&self) -> &[Opening] {
        &self.openings
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_same_configuration_is_one_look_however_often_it_runs() {
        let look = |configuration: &str| Look {
            configuration: configuration.to_owned(),
            cell: "salt lasso".to_owned(),
            date: "2026-03-14".to_owned(),
        };
        let mut ledger = Ledger::default();
        ledger.look(look("a"));
        ledger.look(look("b"));
        ledger.look(look("a"));
        assert_eq!(ledger.looks().len(), 2);
    }
}
