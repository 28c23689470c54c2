//! What can be done about a finding by one setting: words for a button, a line for a command.

use crate::base::layout::Encoding;
use crate::eval::finding::{and, list};
use crate::study::settings::data::Data;
use crate::study::settings::said::{BECAUSE, BETWEEN};
use crate::table::finding::{Finding, FindingKind, Likeness, Orienting, Treatment};
use crate::table::samples::{JoinReport, LeadingZeros, LetterCase};

/// A finding that concerns more columns than this names them nowhere, so that a line can be read.
const MOST_NAMED: usize = 300;

/// Something that can be done about a finding by one setting of the Data cell.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Offer {
    /// What the button says.
    pub label: String,
    /// The setting as it is said: `words for missing values += -9`.
    pub line: String,
}

/// What can be done about a finding by one setting, the likeliest first; empty where only the
/// file, a preparation step or a fit can mend it, which the instructions say.
#[must_use]
pub fn offers(finding: &Finding, data: &Data) -> Vec<Offer> {
    let of_table = table_prefix(finding, data);
    let table = |label: String, setting: &str| Offer {
        label,
        line: format!("{of_table}{setting}"),
    };
    let columns = || free_columns(finding, data);
    let as_text = || each(columns(), "Read", "as text", "columns of text");
    let as_numbers = || each(columns(), "Read", "as numbers", "columns of numbers");
    let leave_out = || each(columns(), "Leave out", "", "columns left out");
    match &finding.kind {
        FindingKind::OtherEncoding(encoding) => vec![match encoding {
            Encoding::Utf8 => table(
                "Read the letters as Windows-1252".to_owned(),
                "encoding = windows-1252",
            ),
            Encoding::Utf16Le | Encoding::Utf16Be | Encoding::Windows1252 => {
                table("Read the letters as UTF-8".to_owned(), "encoding = utf-8")
            }
        }],
        FindingKind::BrokenLetters if is_text(finding, data) => vec![table(
            "Read the letters as Windows-1252".to_owned(),
            "encoding = windows-1252",
        )],
        FindingKind::OtherSheets {
            visible, hidden, ..
        } => visible
            .iter()
            .chain(hidden)
            .take(3)
            .map(|sheet| {
                table(
                    format!("Read the sheet “{sheet}”"),
                    &format!("sheet = {sheet}"),
                )
            })
            .collect(),
        FindingKind::LinesAbove | FindingKind::NoHeader => {
            let row = finding
                .places
                .last()
                .and_then(|place| place.row)
                .unwrap_or(1);
            vec![table(
                format!("Take row {row} as the names"),
                &format!("row of names = {row}"),
            )]
        }
        FindingKind::UnitsRow => vec![table(
            "Take that row as a sample".to_owned(),
            "row of units = absent",
        )],
        FindingKind::SummaryRows => exclude(finding, "the row sums up others"),
        FindingKind::Sideways(_) => vec![table(
            "Take samples to lie in rows".to_owned(),
            "place of the samples = rows",
        )],
        FindingKind::PerhapsSideways(
            Orienting::RowsDifferInKind
            | Orienting::RowHeadsAreAnAxis
            | Orienting::FirstHeadNamesPredictors
            | Orienting::ManyNamedRows,
        ) => vec![table(
            "Take samples to lie in columns".to_owned(),
            "place of the samples = columns",
        )],
        FindingKind::OtherDecimalMark => {
            let (name, word) = if finding.examples.iter().any(|text| text.contains(',')) {
                ("comma", "a comma")
            } else {
                ("point", "a point")
            };
            let mut offers = Vec::new();
            if is_text(finding, data) {
                offers.push(table(
                    format!("Read {word} as the decimal mark"),
                    &format!("decimal mark = {name}"),
                ));
            }
            offers.extend(as_text());
            offers
        }
        FindingKind::GroupedDigits => vec![table(
            "Read the groups of digits".to_owned(),
            "groups of digits = read",
        )],
        FindingKind::SuspectedCode { code } => vec![table(
            format!("Count {} as missing", code.replace('-', "−")),
            &format!("words for missing values += {code}"),
        )],
        FindingKind::TextAmongNumbers
        | FindingKind::NumbersAsText
        | FindingKind::DatesAmongNumbers
        | FindingKind::MissingWords { .. }
        | FindingKind::ValuesWithUnit
        | FindingKind::DigitsLost => as_text(),
        FindingKind::LeadingZeros => match finding.treatment {
            Treatment::ReadAsNumber => as_text(),
            Treatment::Kept
            | Treatment::CountedAsMissing
            | Treatment::KeptAsLimit
            | Treatment::KeptAsText
            | Treatment::Renamed
            | Treatment::LeftOut
            | Treatment::ReadAsSuch
            | Treatment::BlanksTakenOff => as_numbers(),
        },
        FindingKind::ExponentLabels | FindingKind::NumbersAmongLabels => as_numbers(),
        FindingKind::LooksLikeRepeats { .. } => vec![Offer {
            label: "Keep the samples of one unit together".to_owned(),
            line: "making of the unit = from-names".to_owned(),
        }],
        FindingKind::RepeatedSamples => finding
            .columns
            .first()
            .map(|name| Offer {
                label: format!("Let no column name the samples, not “{name}”"),
                line: "column of sample names =".to_owned(),
            })
            .into_iter()
            .collect(),
        FindingKind::IdenticalSamples | FindingKind::NearIdenticalSamples { .. } => {
            exclude(finding, "it repeats another sample")
        }
        FindingKind::BlankNames
        | FindingKind::RepeatedNames
        | FindingKind::ErrorValues
        | FindingKind::NumbersTooLarge
        | FindingKind::ConstantColumns
        | FindingKind::EmptyColumns
        | FindingKind::EqualColumns
        | FindingKind::EqualsOutcome {
            likeness: Likeness::Correlation(_) | Likeness::Auc(_) | Likeness::SameClasses,
            ..
        }
        | FindingKind::NamedLikeOutcome
        | FindingKind::BelowLimitShare { .. } => leave_out(),
        FindingKind::BrokenLetters
        | FindingKind::UnclosedQuote
        | FindingKind::BreaksInQuotes
        | FindingKind::HiddenSheet
        | FindingKind::HiddenLines { .. }
        | FindingKind::MergedCells
        | FindingKind::HeaderShort
        | FindingKind::BlankRows
        | FindingKind::BlankColumns
        | FindingKind::LinesBelow
        | FindingKind::RepeatedHeader
        | FindingKind::ShortRows { .. }
        | FindingKind::LongRows { .. }
        | FindingKind::BelowLimit
        | FindingKind::AboveLimit
        | FindingKind::MissingCodes
        | FindingKind::DateLabels
        | FindingKind::DatesAmongLabels
        | FindingKind::BlanksAround
        | FindingKind::LabelVariants
        | FindingKind::UnnamedSamples
        | FindingKind::BatchWithOutcome { .. }
        | FindingKind::BatchOfOneClass { .. }
        | FindingKind::OrderWithOutcome { .. }
        | FindingKind::AlreadyNormalized(_)
        | FindingKind::MissingShare { .. } => Vec::new(),
    }
}

/// What can be done about a join in which more names would match under another rule.
#[must_use]
pub fn join_offers(file: &str, report: &JoinReport) -> Vec<Offer> {
    if report.loosely_matched.is_none() {
        return Vec::new();
    }
    let mut offers = Vec::new();
    if report.rule.case == LetterCase::Distinct {
        offers.push(Offer {
            label: format!("Match “{file}” whatever the case"),
            line: format!("{file}: rule for upper and lower case = folded"),
        });
    }
    if report.rule.zeros == LeadingZeros::Kept {
        offers.push(Offer {
            label: format!("Match “{file}” without zeros in front"),
            line: format!("{file}: rule for zeros in front = ignored"),
        });
    }
    offers
}

fn position(finding: &Finding, data: &Data) -> usize {
    let file = finding.file.as_deref();
    data.tables
        .iter()
        .position(|table| Some(table.file.as_str()) == file)
        .unwrap_or(0)
}

/// The file's name and a colon, where the finding is not about the first table.
fn table_prefix(finding: &Finding, data: &Data) -> String {
    match position(finding, data) {
        0 => String::new(),
        at => format!("{}: ", data.tables[at].file),
    }
}

fn is_text(finding: &Finding, data: &Data) -> bool {
    data.tables
        .get(position(finding, data))
        .is_some_and(|table| !table.is_workbook())
}

/// The columns concerned that have no role that decides how they are read; none when not all of
/// them are known.
fn free_columns(finding: &Finding, data: &Data) -> Vec<String> {
    if finding.columns.len() < finding.n_columns || finding.n_columns > MOST_NAMED {
        return Vec::new();
    }
    let outcome = data.outcome.as_ref().map(|outcome| &outcome.column);
    let joins = data.tables.iter().filter_map(|table| table.join.as_ref());
    let keys: Vec<&String> = joins.flat_map(|join| [&join.left, &join.right]).collect();
    let roles = [
        data.sample_name.as_ref(),
        data.unit.as_ref(),
        data.batch.as_ref(),
        data.order.as_ref(),
        data.weight.as_ref(),
        outcome,
    ];
    finding
        .columns
        .iter()
        .filter(|name| !roles.contains(&Some(name)) && !keys.contains(name))
        .cloned()
        .collect()
}

/// One offer for all the columns.
fn each(columns: Vec<String>, verb: &str, how: &str, setting: &str) -> Vec<Offer> {
    if columns.is_empty() {
        return Vec::new();
    }
    let label = format!("{verb} {} {how}", list(&columns, columns.len()));
    vec![Offer {
        label: label.trim_end().to_owned(),
        line: format!("{setting} += {}", columns.join(BETWEEN)),
    }]
}

/// Excludes the samples of a finding: of a pair the second. None when not all are known.
fn exclude(finding: &Finding, reason: &str) -> Vec<Offer> {
    let names: Vec<String> = finding
        .examples
        .iter()
        .map(|example| match example.split_once(" and ") {
            Some((_, second)) => second.to_owned(),
            None => example.clone(),
        })
        .collect();
    let mut unlike = names.clone();
    unlike.sort_unstable();
    unlike.dedup();
    // A shortened name is no name.
    if names.is_empty()
        || names.len() < finding.count
        || names.iter().any(|name| name.ends_with('…'))
    {
        return Vec::new();
    }
    let quoted: Vec<String> = unlike.iter().take(3).map(|n| format!("“{n}”")).collect();
    let label = if unlike.len() > quoted.len() {
        format!("Exclude {}, …", quoted.join(", "))
    } else {
        format!("Exclude {}", and(&quoted))
    };
    vec![Offer {
        label,
        line: format!("exclusions += {}{BECAUSE}{reason}", unlike.join(BETWEEN)),
    }]
}
