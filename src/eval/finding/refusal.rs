//! Why there is no table, or no join, in words; and what a join did.

use crate::base::problem::{Place, Problem};
use crate::eval::finding::{count, counted, list};
use crate::table::read::ReadError;
use crate::table::samples::{JoinError, JoinReport, JoinRule, LeadingZeros, LetterCase, Side};

/// The problem of a file that gave no table.
#[must_use]
pub fn read_problem(error: &ReadError, file: &str) -> Problem {
    let problem = |code, found: String| Problem::new(code, found).at(Place::file(file));
    match error {
        ReadError::Empty => problem("empty-file", "The file is empty.".to_owned())
            .mend("Choose another file, or save it anew where it comes from."),
        ReadError::Blank => problem(
            "blank-file",
            "The file holds nothing but blanks.".to_owned(),
        )
        .mend("Choose another file, or save it anew where it comes from."),
        ReadError::Binary { what } => {
            let what = what.map_or_else(
                || "The file is neither text nor a workbook.".to_owned(),
                |what| format!("The file is {what}, not a table."),
            );
            problem("no-table", what)
                .mend("Save the table as delimited text or as a workbook, and choose that file.")
        }
        ReadError::TruncatedArchive { unpacked } => {
            let how_far = match unpacked {
                0 => String::new(),
                bytes => format!(" after {} unpacked bytes", count(*bytes)),
            };
            problem(
                "truncated-archive",
                format!("The compressed file ends too early{how_far}."),
            )
            .mend("Copy or download the file again; it was probably cut off on its way.")
        }
        ReadError::DamagedArchive { details } => problem(
            "damaged-archive",
            "The compressed file is damaged and cannot be read.".to_owned(),
        )
        .mend("Copy or download the file again, or save it anew where it comes from.")
        .details(details.clone()),
        ReadError::NotAWorkbook => problem(
            "not-a-workbook",
            "The file is a zip archive, but not a workbook.".to_owned(),
        )
        .mend("Unpack the archive and choose the table in it."),
        ReadError::Encrypted => problem(
            "encrypted",
            "The workbook is protected by a password.".to_owned(),
        )
        .mend("Save it without a password, and choose that file."),
        ReadError::NoSuchSheet { asked, sheets } => {
            let have = format!("it has {}", list(sheets, sheets.len()));
            problem(
                "no-such-sheet",
                format!("The workbook has no sheet “{asked}”; {have}."),
            )
            .mend("Choose one of its sheets.")
        }
        ReadError::NoSheet => problem(
            "no-sheet",
            "The workbook has no sheet with cells.".to_owned(),
        )
        .mend("Choose another file."),
        ReadError::EmptySheet { sheet } => problem(
            "empty-sheet",
            format!("The sheet “{sheet}” has no filled cell."),
        )
        .mend("Choose another sheet."),
        ReadError::NoSuchRow { asked, rows } => problem(
            "no-such-row",
            format!(
                "Row {} was named as the header, but the file has {}.",
                count(*asked),
                counted(*rows, "row", "rows")
            ),
        )
        .mend("Choose a row of the file as the header."),
        ReadError::HeaderOnly { columns } => problem(
            "no-samples",
            format!(
                "The file names {}, but no sample stands below the header.",
                counted(*columns, "column", "columns")
            ),
        )
        .mend("Choose another row as the header, or a file with samples."),
        ReadError::TooLarge => problem(
            "too-large",
            "The table is larger than can be held.".to_owned(),
        )
        .mend("Cut the table down before it is read."),
    }
}

/// Why two tables cannot be joined, in one sentence.
#[must_use]
pub fn join_error(error: &JoinError) -> String {
    match error {
        JoinError::NoSuchColumn { side, name } => {
            let table_has = match side {
                Side::Left => "the tables before have",
                Side::Right => "the joined table has",
            };
            format!("{table_has} no column “{name}” to join on.")
        }
        JoinError::NothingMatches {
            left,
            right,
            loosely,
        } => {
            let hint = if *loosely > 0 {
                format!(
                    "; without regard to capitals and leading zeros, {} would",
                    counted(*loosely, "row", "rows")
                )
            } else {
                String::new()
            };
            format!(
                "no key matches: on one side they are like {}, on the other like {}{hint}.",
                list(left, left.len()),
                list(right, right.len())
            )
        }
    }
}

/// When two names are taken as the same.
#[must_use]
pub fn join_rule(rule: &JoinRule) -> String {
    let case = match rule.case {
        LetterCase::Distinct => "upper and lower case are told apart",
        LetterCase::Folded => "upper and lower case are taken as the same",
    };
    let zeros = match rule.zeros {
        LeadingZeros::Kept => "zeros in front of numbers count",
        LeadingZeros::Ignored => "zeros in front of numbers do not count",
    };
    format!("blanks around a name do not count, {case}, {zeros}")
}

/// What a join did, one sentence for each thing to know.
#[must_use]
pub fn join_report(report: &JoinReport) -> Vec<String> {
    let mut sentences = vec![format!(
        "{} their values in the joined table.",
        counted(report.matched, "row found", "rows found")
    )];
    let mut say = |names: &[String], one: &str, many: &str, rest: &str| {
        if !names.is_empty() {
            let found = counted(names.len(), one, many);
            sentences.push(format!("{found} {rest}: {}.", list(names, names.len())));
        }
    };
    say(
        &report.only_left,
        "key stands",
        "keys stand",
        "only in the tables before, with no value to add",
    );
    say(
        &report.only_right,
        "key stands",
        "keys stand",
        "only in the joined table",
    );
    say(
        &report.repeated_right,
        "key comes",
        "keys come",
        "more than once in the joined table with differing values, so that none was taken",
    );
    if report.unnamed_left > 0 {
        sentences.push(format!(
            "{} no key.",
            counted(report.unnamed_left, "row has", "rows have")
        ));
    }
    for (old, new) in &report.renamed {
        sentences.push(format!(
            "“{old}” of the joined table is called “{new}”, because the name was taken."
        ));
    }
    if let Some(loosely) = report.loosely_matched {
        sentences.push(format!(
            "Without regard to capitals and leading zeros, {} match.",
            counted(loosely, "row would", "rows would")
        ));
    }
    sentences
}
