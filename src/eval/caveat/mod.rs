//! Remarks computed from outcomes: one rule, one file.

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
