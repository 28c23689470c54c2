//! Findings about tables in words: what is the case, what was done, what could be done.

mod found;
mod mend;
mod offer;
mod refusal;

pub use mend::mend;
pub use offer::{Offer, join_offers, offers};
pub use refusal::{join_error, join_report, join_rule, read_problem};

use crate::base::number::{self, Precision};
use crate::base::problem::{Place, Problem};
use crate::table::finding::{Finding, FindingKind, Treatment};

/// How many places a sentence names; the others are counted.
const NAMED: usize = 3;

/// What was found, where, in whole sentences.
#[must_use]
pub fn sentence(finding: &Finding) -> String {
    let what = found::found(finding);
    let places = places(finding);
    if places.is_empty() {
        what
    } else {
        format!("{what} {places}")
    }
}

/// What was done about it, in one sentence.
#[must_use]
pub fn treatment(finding: &Finding) -> &'static str {
    match finding.treatment {
        Treatment::Kept => "Nothing was changed.",
        Treatment::CountedAsMissing => "The values count as missing.",
        Treatment::KeptAsLimit => "The values are kept as known only by their limit.",
        Treatment::ReadAsNumber => "The values were read as the numbers that they state.",
        Treatment::KeptAsText => "The text is kept letter for letter.",
        Treatment::Renamed => "The columns were given names of their own.",
        Treatment::LeftOut if matches!(finding.kind, FindingKind::OtherSheets { .. }) => {
            "The other sheets were not read."
        }
        Treatment::LeftOut => "That was left out of the table.",
        Treatment::ReadAsSuch => "The table was read accordingly.",
        Treatment::BlanksTakenOff => "The blanks around the text were taken off.",
    }
}

/// A finding as a problem, with its code, its first place, what was done and what could be done.
#[must_use]
pub fn problem(finding: &Finding) -> Problem {
    let found = format!("{} {}", sentence(finding), treatment(finding));
    let mut problem = Problem::new(finding.kind.code(), found).at(finding
        .places
        .first()
        .cloned()
        .unwrap_or_else(Place::nowhere));
    for instruction in mend(finding) {
        problem = problem.mend(instruction);
    }
    problem
}

/// A count as a number for people.
fn count(n: usize) -> String {
    number::text(n as f64, Precision::Whole)
}

/// “1 value is”, “12 values are”.
fn counted(n: usize, one: &str, many: &str) -> String {
    if n == 1 {
        format!("1 {one}")
    } else {
        format!("{} {many}", count(n))
    }
}

/// The columns concerned: “ in “salt”” or “ in 12 columns (“salt”, “fat”, “pH”, …)”.
fn in_columns(finding: &Finding) -> String {
    match finding.n_columns {
        0 => String::new(),
        1 => format!(
            " in “{}”",
            finding.columns.first().map_or("", String::as_str)
        ),
        n => format!(" in {} columns ({})", count(n), list(&finding.columns, n)),
    }
}

/// The first examples of several: “, such as “ND”, “n.d.””.
fn such_as(finding: &Finding) -> String {
    if finding.examples.is_empty() {
        return String::new();
    }
    format!(
        ", such as {}",
        list(&finding.examples, finding.examples.len())
    )
}

/// The first examples in parentheses: “ (“<0.05”, “<0.1”)”.
fn examples(finding: &Finding) -> String {
    if finding.examples.is_empty() {
        return String::new();
    }
    format!(" ({})", list(&finding.examples, finding.examples.len()))
}

/// Names in quotes, the first ones only.
fn list(names: &[String], all: usize) -> String {
    let mut quoted: Vec<String> = names
        .iter()
        .take(NAMED)
        .map(|name| format!("“{name}”"))
        .collect();
    if all > quoted.len() {
        quoted.push("…".to_owned());
    }
    quoted.join(", ")
}

/// Where it stands: “It stands in row 5.” “They stand in rows 5, 9 and 12 and 3 more places.”
fn places(finding: &Finding) -> String {
    // Names of columns are named already.
    if matches!(
        finding.kind,
        FindingKind::BlankNames | FindingKind::RepeatedNames
    ) {
        return String::new();
    }
    let is_one_column = finding.n_columns == 1;
    let mut words: Vec<String> = finding
        .places
        .iter()
        .take(NAMED)
        .filter_map(|place| match (place.row, &place.column) {
            (Some(row), None) => Some(row.to_string()),
            (Some(row), Some(_)) if is_one_column => Some(row.to_string()),
            (Some(row), Some(column)) => Some(format!("row {row} of “{column}”")),
            (None, Some(column)) => Some(format!("“{column}”")),
            (None, None) => None,
        })
        .collect();
    words.dedup();
    let are_rows = words.iter().all(|word| word.parse::<usize>().is_ok());
    let verb = if finding.count == 1 {
        "It stands in"
    } else {
        "They stand in"
    };
    let rows = match (are_rows, words.len()) {
        (_, 0) => return String::new(),
        (true, 1) => "row ",
        (true, _) => "rows ",
        (false, _) => "",
    };
    match finding.count.saturating_sub(words.len()) {
        0 => format!("{verb} {rows}{}.", and(&words)),
        1 => format!("{verb} {rows}{} and one more place.", words.join(", ")),
        more => format!(
            "{verb} {rows}{} and {} more places.",
            words.join(", "),
            count(more)
        ),
    }
}

/// “5, 9 and 12”.
fn and(words: &[String]) -> String {
    match words {
        [] => String::new(),
        [one] => one.clone(),
        [first @ .., last] => format!("{} and {last}", first.join(", ")),
    }
}

#[cfg(test)]
mod tests;
