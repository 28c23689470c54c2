//! Training and held-out parts: units kept together, seeded, stored as tables.

mod assign;
mod assignment;
mod halves;
mod split;
#[cfg(test)]
mod tests;

pub use assign::assign;
pub use assignment::{Assignment, TableError};
pub use halves::complementary_pairs;
pub use split::{PartOutcome, Split, TrainingPart};

use std::ops::RangeInclusive;

/// How a resampling plan is drawn.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct PartsParams {
    /// The rule by which units go to parts.
    pub scheme: Scheme,
    /// How many parts, at least 2. Not used by [`Scheme::LeaveOneUnitOut`].
    pub parts: usize,
    /// How often the plan is drawn anew, at least 1. A scheme without chance is drawn once.
    pub repeats: usize,
    /// The seed of the draw.
    pub seed: u64,
}

/// The rule by which units go to parts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Scheme {
    /// Units in random order, dealt out one by one.
    Random,
    /// As random, but one stratum (class, event) after the other, so that each part holds its
    /// share of every stratum up to one unit.
    Balanced,
    /// Whole batches go to one part.
    WholeBatches,
    /// Every unit is a part.
    LeaveOneUnitOut,
    /// Consecutive units in their order make a part.
    Blocked,
}

/// What is known about the samples that a plan must respect. Every list has one entry for each
/// of all n samples, also for those that the plan does not use.
#[derive(Clone, Copy, Debug)]
pub struct Structure<'a> {
    /// The unit of each sample. A unit is never divided.
    pub units: &'a [usize],
    /// The batch of each sample.
    pub batches: Option<&'a [usize]>,
    /// The class of each sample, or whether its event was observed. When given, at least two
    /// must occur among the rows (events are no strata where everyone had one), and every
    /// training part must hold every stratum that does.
    pub strata: Option<&'a [usize]>,
    /// The only stratum that training parts cannot do without, such as the events of times; `None`
    /// when they need every one.
    pub needed: Option<usize>,
    /// The order value (time or position of measurement) of each sample.
    pub order: Option<&'a [f64]>,
}

impl<'a> Structure<'a> {
    /// Samples of which only the units are known.
    #[must_use]
    pub fn of_units(units: &'a [usize]) -> Self {
        Self {
            units,
            batches: None,
            strata: None,
            needed: None,
            order: None,
        }
    }
}

/// Why a plan cannot be drawn.
#[derive(Clone, Debug, PartialEq)]
pub enum PlanError {
    /// A plan needs at least two parts.
    TooFewParts {
        /// The number of parts asked for.
        parts: usize,
        /// The number of units there are.
        units: usize,
    },
    /// A plan must be drawn at least once.
    NoRepeats,
    /// Each part needs at least one unit.
    TooFewUnits {
        /// The number of units there are.
        units: usize,
        /// The number of parts asked for.
        parts: usize,
    },
    /// The scheme needs batches and there are none.
    NoBatches,
    /// The scheme needs strata and there are none.
    NoStrata,
    /// The scheme needs an order and there is none.
    NoOrder,
    /// The order value of a sample is missing.
    OrderMissing {
        /// The sample.
        row: usize,
    },
    /// Each part needs at least one whole batch. Batches that share a unit count as one.
    TooFewBatches {
        /// The number of batches that can be separated.
        batches: usize,
        /// The number of parts asked for.
        parts: usize,
    },
    /// All samples are of one class, or none (or each) has its event.
    OneStratum {
        /// The only stratum.
        stratum: usize,
    },
    /// A balanced plan would have held-out parts of one stratum only.
    RareStratum {
        /// The second most frequent stratum by units.
        stratum: usize,
        /// The number of its units.
        units: usize,
        /// The number of parts asked for.
        parts: usize,
    },
    /// A training part would lack a stratum.
    TrainingLacksStratum {
        /// The part held out, from 0.
        part: usize,
        /// The stratum that occurs only there.
        stratum: usize,
        /// In how many units it occurs.
        units: usize,
    },
    /// A unit lies on both sides of a split that was given.
    UnitDivided {
        /// The unit.
        unit: usize,
    },
}

impl PlanError {
    /// The numbers of parts that would be feasible with the same scheme, if there are any.
    #[must_use]
    pub fn feasible_parts(&self) -> Option<RangeInclusive<usize>> {
        let most = match self {
            Self::TooFewParts { units, .. } | Self::TooFewUnits { units, .. } => *units,
            Self::TooFewBatches { batches, .. } => *batches,
            Self::RareStratum { units, .. } => *units,
            Self::NoRepeats
            | Self::NoBatches
            | Self::NoStrata
            | Self::NoOrder
            | Self::OrderMissing { .. }
            | Self::OneStratum { .. }
            | Self::TrainingLacksStratum { .. }
            | Self::UnitDivided { .. } => return None,
        };
        (most >= 2).then_some(2..=most)
    }
}
