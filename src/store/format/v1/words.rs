//! The words by which format 1 calls the choices of the settings.

use crate::base::layout::{
    DecimalMark, Delimiter, Encoding, Grouping as DigitGroups, Orientation, UnitsRow,
};
use crate::study::settings::data::{LeadingZeros, LetterCase, OutcomeSeen, Subject, UnitMaking};
use crate::study::settings::fit::{ErrorMeasure, Grouping, Scaling, Scheme, Ties};
use crate::study::settings::question::Seal;
use crate::study::settings::weights::{Interval, Strata};

/// Declares the words of a set of choices: the list for reading, and the function for writing.
macro_rules! words {
    ($list:ident, $word:ident, $type:ident { $($variant:ident => $text:literal),+ $(,)? }) => {
        #[doc = concat!("The words for ", stringify!($type), ".")]
        pub const $list: &[(&str, $type)] = &[$(($text, $type::$variant)),+];

        #[doc = concat!("The word for one ", stringify!($type), ".")]
        #[must_use]
        pub const fn $word(choice: $type) -> &'static str {
            match choice {
                $($type::$variant => $text),+
            }
        }
    };
}

words!(STRATA, strata, Strata {
    None => "none",
    Batches => "batches",
});
words!(INTERVALS, interval, Interval {
    OverUnits => "over-units",
    Careful => "careful",
});
words!(ENCODINGS, encoding, Encoding {
    Utf8 => "utf-8",
    Utf16Le => "utf-16-low-byte-first",
    Utf16Be => "utf-16-high-byte-first",
    Windows1252 => "windows-1252",
});
words!(DELIMITERS, delimiter, Delimiter {
    Comma => "comma",
    Semicolon => "semicolon",
    Tab => "tab",
    Bar => "bar",
    Blanks => "blanks",
});
words!(DECIMAL_MARKS, decimal_mark, DecimalMark {
    Point => "point",
    Comma => "comma",
});
words!(ORIENTATIONS, orientation, Orientation {
    SamplesInRows => "rows",
    SamplesInColumns => "columns",
});
words!(UNITS_ROWS, units_row, UnitsRow {
    Absent => "absent",
    BelowHeader => "below-header",
});
words!(DIGIT_GROUPS, digit_groups, DigitGroups {
    Absent => "absent",
    Read => "read",
});
words!(UNIT_MAKINGS, unit_making, UnitMaking {
    InColumn => "column",
    FromNames => "sample-names",
});
words!(LETTER_CASES, letter_case, LetterCase {
    Distinct => "distinct",
    Folded => "folded",
});
words!(LEADING_ZEROS, leading_zeros, LeadingZeros {
    Kept => "kept",
    Ignored => "ignored",
});
words!(OUTCOME_SEEN, outcome_seen, OutcomeSeen {
    Before => "before",
    After => "after",
    NotSaid => "not-said",
});
words!(SUBJECTS, subject, Subject {
    Ordinary => "ordinary",
    Health => "health",
    Safety => "safety",
    Compliance => "compliance",
});
words!(SCALINGS, scaling, Scaling {
    UnitVariance => "unit-variance",
    AsPrepared => "as-prepared",
});
words!(SCHEMES, scheme, Scheme {
    Units => "units",
    Balanced => "balanced",
    WholeBatches => "whole-batches",
    LeaveOneUnitOut => "leave-one-unit-out",
    Blocks => "blocks",
});
words!(SEALS, seal, Seal {
    Closed => "closed",
    Opened => "opened",
});
words!(GROUPINGS, grouping, Grouping {
    Apart => "apart",
    Together => "together",
});
words!(TIES, ties, Ties {
    Efron => "efron",
    Breslow => "breslow",
});
words!(ERROR_MEASURES, error_measure, ErrorMeasure {
    Usual => "usual",
    SquaredError => "squared-error",
    Deviance => "deviance",
    Misclassification => "misclassification",
    PartialLikelihood => "partial-likelihood",
    Concordance => "concordance",
});
