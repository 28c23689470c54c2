//! Remarks computed from outcomes: one rule, one file.

pub mod agreement_slope;
pub mod batches_are_harder;
pub mod calibration_slope;
pub mod censoring;
pub mod declined_judgement;
pub mod design;
pub mod few_events;
pub mod few_for_a_curve;
pub mod few_units;
pub mod flat_curve;
pub mod health;
pub mod interval_is_about_the_procedure;
pub mod judgement;
pub mod leave_one_out;
pub mod list_as_long;
pub mod looks;
pub mod no_better_than_the_mean;
pub mod not_settled;
pub mod one_standard_error;
pub mod optimism;
pub mod order;
pub mod pooled_pairs;
pub mod selection_unstable;
pub mod separation;
pub mod shrunken_weights;
pub mod stand_ins;
pub mod strength_at_edge;
pub mod strength_unstable;
pub mod too_good;
pub mod ungrouped_flatters;
pub mod wide_interval;

use crate::base::number::{self, Precision};

/// How much a caveat weighs.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Severity {
    /// Printed.
    Note,
    /// Printed, and set in the margin in the colour of caution.
    Caution,
    /// Blocks the named export until resolved or overridden with a printed reason.
    Stop,
}

impl Severity {
    /// The word in the margin.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Note => "note",
            Self::Caution => "caution",
            Self::Stop => "stop",
        }
    }
}

/// Where a threshold comes from.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Origin {
    /// Published; the source is named in the rule's file.
    Published,
    /// A convention of this program, and called one.
    Convention,
    /// Computed for this program.
    Computed,
}

impl Origin {
    /// The word in the exports.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Published => "published",
            Self::Convention => "convention",
            Self::Computed => "computed",
        }
    }
}

/// A remark computed from outcomes.
///
/// It keeps what set it off, so that it can be audited.
#[derive(Clone, Debug, PartialEq)]
pub struct Caveat {
    /// A stable name, such as `tuning-error-as-performance`.
    pub id: String,
    /// How much it weighs.
    pub severity: Severity,
    /// The heading in the margin: a few words.
    pub heading: String,
    /// One or two sentences for somebody who does not program.
    pub text: String,
    /// What set it off: a name and a value for each quantity, as printed.
    pub trigger: Vec<(String, String)>,
    /// The threshold, as printed; empty when the caveat always applies.
    pub threshold: String,
    /// Where the threshold comes from.
    pub origin: Origin,
}

impl Caveat {
    /// A caveat that always applies, a convention until said otherwise.
    #[must_use]
    pub fn new(id: &str, severity: Severity, heading: &str, text: impl Into<String>) -> Self {
        Self {
            id: id.to_owned(),
            severity,
            heading: heading.to_owned(),
            text: text.into(),
            trigger: Vec::new(),
            threshold: String::new(),
            origin: Origin::Convention,
        }
    }

    /// The same caveat, with a quantity that set it off.
    #[must_use]
    pub fn because(mut self, quantity: &str, value: f64, precision: Precision) -> Self {
        self.trigger
            .push((quantity.to_owned(), number::text(value, precision)));
        self
    }

    /// The same caveat, with its threshold in words.
    #[must_use]
    pub fn threshold(mut self, words: &str) -> Self {
        words.clone_into(&mut self.threshold);
        self
    }

    /// The same caveat, with the origin of its threshold.
    #[must_use]
    pub fn origin(mut self, origin: Origin) -> Self {
        self.origin = origin;
        self
    }
}
