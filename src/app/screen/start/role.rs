//! What the columns of the tables are, as far as it has been said.

/// The role of a column.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// What is predicted.
    Outcome,
    /// What it is predicted from, unless it is text.
    Predictor,
    /// It names the samples.
    SampleName,
    /// It names what is kept together.
    Unit,
    /// It names the batches.
    Batch,
    /// It is always in the model.
    Covariate,
    /// It says whether the event happened, where a time is predicted.
    Event,
    /// It weighs the samples.
    Weight,
    /// It is the position or time of measurement.
    Order,
    /// It is left out.
    Ignored,
}

impl Role {
    /// All of them, in the order in which they are offered.
    pub const ALL: [Self; 10] = [
        Self::Outcome,
        Self::Predictor,
        Self::SampleName,
        Self::Unit,
        Self::Batch,
        Self::Covariate,
        Self::Event,
        Self::Weight,
        Self::Order,
        Self::Ignored,
    ];

    /// What it is called.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Outcome => "outcome",
            Self::Predictor => "predictor",
            Self::SampleName => "sample name",
            Self::Unit => "unit",
            Self::Batch => "batch",
            Self::Covariate => "covariate",
            Self::Event => "event",
            Self::Weight => "weight",
            Self::Order => "order",
            Self::Ignored => "ignored",
        }
    }

    /// What it means, for somebody who reads the word for the first time.
    #[must_use]
    pub const fn meaning(self) -> &'static str {
        match self {
            Self::Outcome => "what is predicted",
            Self::Predictor => {
                "what it is predicted from; columns of words are left out by themselves"
            }
            Self::SampleName => "names each row, and joins the tables",
            Self::Unit => {
                "names the independent thing that samples belong to; its samples are never parted"
            }
            Self::Batch => "names what was measured together: a plate, a day, an instrument",
            Self::Covariate => "always in the model, whatever the penalty",
            Self::Event => "says whether the event happened, where a time to it is predicted",
            Self::Weight => "says how much each sample counts",
            Self::Order => "the position or time of measurement",
            Self::Ignored => "left out",
        }
    }

    /// Whether only one column can have it.
    #[must_use]
    pub const fn is_single(self) -> bool {
        match self {
            Self::Outcome
            | Self::SampleName
            | Self::Unit
            | Self::Batch
            | Self::Event
            | Self::Weight
            | Self::Order => true,
            Self::Predictor | Self::Covariate | Self::Ignored => false,
        }
    }
}

/// The roles that have been given; every other column is a predictor, unless it is text.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Roles(Vec<(String, Role)>);

impl Roles {
    /// The role of a column, if one was given.
    #[must_use]
    pub fn given(&self, column: &str) -> Option<Role> {
        self.0
            .iter()
            .find(|(known, _)| known == column)
            .map(|(_, role)| *role)
    }

    /// The first column that has a role.
    #[must_use]
    pub fn first(&self, role: Role) -> Option<&str> {
        self.0
            .iter()
            .find(|(_, had)| *had == role)
            .map(|(name, _)| name.as_str())
    }

    /// Every column that has a role, in the order in which it was given.
    #[must_use]
    pub fn all(&self, role: Role) -> Vec<String> {
        self.0
            .iter()
            .filter(|(_, had)| *had == role)
            .map(|(name, _)| name.clone())
            .collect()
    }

    /// Gives a column a role in place of the one that it had. A role that only one column can
    /// have is taken from the other.
    pub fn give(&mut self, column: &str, role: Role) {
        self.0
            .retain(|(known, had)| known != column && !(role.is_single() && *had == role));
        if role != Role::Predictor {
            self.0.push((column.to_owned(), role));
        }
    }

    /// Takes a role from every column that has it.
    pub fn clear(&mut self, role: Role) {
        self.0.retain(|(_, had)| *had != role);
    }

    /// Forgets the roles of columns that are no longer there.
    pub fn keep_only(&mut self, is_there: impl Fn(&str) -> bool) {
        self.0.retain(|(name, _)| is_there(name));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_one_column_is_the_outcome_and_a_column_has_only_one_role() {
        let mut roles = Roles::default();
        roles.give("salt", Role::Outcome);
        roles.give("cave", Role::Covariate);
        roles.give("maker", Role::Covariate);
        roles.give("water", Role::Outcome);
        roles.give("cave", Role::Batch);
        assert_eq!(roles.given("salt"), None);
        assert_eq!(roles.first(Role::Outcome), Some("water"));
        assert_eq!(roles.all(Role::Covariate), ["maker"]);
        roles.give("water", Role::Predictor);
        assert_eq!(roles.first(Role::Outcome), None);
    }
}
