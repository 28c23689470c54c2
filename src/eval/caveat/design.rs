//! Remarks on the design of a study, from what was found in its tables before any fit.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, Origin, Severity, few_units, health};
use crate::eval::fact::Facts;
use crate::eval::finding;
use crate::eval::kind::data::Dataset;
use crate::table::finding::{Association, Finding, FindingKind};

/// Cramér's V and η² from which on batch and outcome go together; conventions.
const CRAMERS_V: f64 = 0.3;
const ETA_SQUARED: f64 = 0.14;

/// The share of samples in batches of a single class from which on nothing can be untangled.
const ONE_CLASS: f64 = 0.8;

/// Shares of missing values from which on they are a note and a caution; conventions.
const MISSING: (f64, f64) = (0.05, 0.20);

/// Shares of one predictor below its limit from which on they are a note and a caution.
const BELOW: (f64, f64) = (0.30, 0.60);

/// All remarks on the data, the gravest first.
#[must_use]
pub fn caveats(data: &Dataset, findings: &[Finding], facts: &Facts) -> Vec<Caveat> {
    let mut caveats: Vec<Caveat> = findings
        .iter()
        .filter_map(|f| of_finding(f, data))
        .collect();
    let units = facts.value("units").unwrap_or(f64::NAN);
    caveats.extend(few_units::check(units as usize));
    caveats.extend(health::check(data.subject));
    caveats.sort_by_key(|caveat| std::cmp::Reverse(caveat.severity));
    caveats
}

/// The remark that a finding amounts to, if it does.
fn of_finding(found: &Finding, data: &Dataset) -> Option<Caveat> {
    let caveat = |id: &str, severity: Severity, heading: &str| {
        Caveat::new(id, severity, heading, finding::sentence(found)).because(
            "count",
            found.count as f64,
            Precision::Whole,
        )
    };
    let graded = |value: f64, grades: (f64, f64)| {
        if value >= grades.1 {
            Some(Severity::Caution)
        } else if value >= grades.0 {
            Some(Severity::Note)
        } else {
            None
        }
    };
    match &found.kind {
        FindingKind::LooksLikeRepeats { .. } => data.unit_column.is_none().then(|| {
            caveat("hidden-groups", Severity::Caution, "Repeats of one thing?")
                .threshold("a tenth of the names share a stem")
        }),
        FindingKind::IdenticalSamples => Some(
            caveat("identical-samples", Severity::Caution, "Identical samples")
                .threshold("any two")
                .origin(Origin::Published),
        ),
        FindingKind::NearIdenticalSamples { .. } => Some(
            caveat(
                "near-identical-samples",
                Severity::Caution,
                "Nearly identical samples",
            )
            .threshold("a tenth of the median distance to the nearest neighbour")
            .origin(Origin::Computed),
        ),
        FindingKind::BatchWithOutcome { strength, .. } => {
            let (value, threshold, words) = match strength {
                Association::CramersV(v) => (*v, CRAMERS_V, "Cramér's V of 0.3 or more"),
                Association::EtaSquared(eta) => (*eta, ETA_SQUARED, "η² of 0.14 or more"),
            };
            (value >= threshold).then(|| {
                caveat(
                    "batch-with-outcome",
                    Severity::Caution,
                    "Batch and outcome go together",
                )
                .because("association", value, Precision::Decimals(2))
                .threshold(words)
            })
        }
        FindingKind::BatchOfOneClass { share, .. } => {
            let severity = if *share >= ONE_CLASS {
                Severity::Stop
            } else {
                Severity::Caution
            };
            Some(
                caveat("batch-of-one-class", severity, "Batches of a single class")
                    .because("share of samples", *share, Precision::Percent(0))
                    .threshold("any batch; a stop from 80 % of the samples"),
            )
        }
        FindingKind::OrderWithOutcome {
            rank_correlation, ..
        } => Some(
            caveat(
                "order-with-outcome",
                Severity::Caution,
                "Order and outcome go together",
            )
            .because(
                "rank correlation",
                *rank_correlation,
                Precision::Decimals(2),
            )
            .threshold("0.3 or more"),
        ),
        FindingKind::AlreadyNormalized(_) => Some(
            caveat(
                "already-normalised",
                Severity::Caution,
                "Already normalised?",
            )
            .threshold("a signature in the values"),
        ),
        FindingKind::MissingShare { share } => graded(*share, MISSING).map(|severity| {
            caveat("missing-share", severity, "Missing values")
                .because("share", *share, Precision::Percent(0))
                .threshold("5 %; a caution from 20 %")
        }),
        FindingKind::BelowLimitShare { largest } => graded(*largest, BELOW).map(|severity| {
            caveat("below-limit-share", severity, "Values below a limit")
                .because(
                    "largest share of a predictor",
                    *largest,
                    Precision::Percent(0),
                )
                .threshold("30 % of a predictor; a caution from 60 %")
        }),
        FindingKind::EqualsOutcome { .. } => Some(
            caveat(
                "outcome-in-disguise",
                Severity::Caution,
                "The outcome in disguise?",
            )
            .threshold("a correlation or AUC of 0.98 or more"),
        ),
        FindingKind::NamedLikeOutcome => Some(caveat(
            "named-like-outcome",
            Severity::Caution,
            "Named like the outcome",
        )),
        FindingKind::OtherEncoding(_)
        | FindingKind::BrokenLetters
        | FindingKind::UnclosedQuote
        | FindingKind::BreaksInQuotes
        | FindingKind::OtherSheets { .. }
        | FindingKind::HiddenSheet
        | FindingKind::HiddenLines { .. }
        | FindingKind::MergedCells
        | FindingKind::LinesAbove
        | FindingKind::NoHeader
        | FindingKind::HeaderShort
        | FindingKind::UnitsRow
        | FindingKind::BlankRows
        | FindingKind::BlankColumns
        | FindingKind::LinesBelow
        | FindingKind::SummaryRows
        | FindingKind::RepeatedHeader
        | FindingKind::ShortRows { .. }
        | FindingKind::LongRows { .. }
        | FindingKind::Sideways(_)
        | FindingKind::PerhapsSideways(_)
        | FindingKind::BlankNames
        | FindingKind::RepeatedNames
        | FindingKind::TextAmongNumbers
        | FindingKind::NumbersAsText
        | FindingKind::ErrorValues
        | FindingKind::OtherDecimalMark
        | FindingKind::GroupedDigits
        | FindingKind::ValuesWithUnit
        | FindingKind::DatesAmongNumbers
        | FindingKind::BelowLimit
        | FindingKind::AboveLimit
        | FindingKind::MissingWords { .. }
        | FindingKind::MissingCodes
        | FindingKind::SuspectedCode { .. }
        | FindingKind::NumbersTooLarge
        | FindingKind::DigitsLost
        | FindingKind::LeadingZeros
        | FindingKind::ExponentLabels
        | FindingKind::DateLabels
        | FindingKind::DatesAmongLabels
        | FindingKind::NumbersAmongLabels
        | FindingKind::BlanksAround
        | FindingKind::LabelVariants
        | FindingKind::RepeatedSamples
        | FindingKind::UnnamedSamples
        | FindingKind::ConstantColumns
        | FindingKind::EmptyColumns
        | FindingKind::EqualColumns => None,
    }
}
