//! From columns as found to a table, with everything noticed about their values.

use crate::base::layout::{DecimalMark, Grouping};
use crate::base::problem::Place;
use crate::base::thread::{Threads, in_order};
use crate::base::work::{Cancelled, Work};
use crate::table::column::{Censored, Column, Numbers, Values, plain};
use crate::table::finding::{COLUMNS, Finding, FindingKind, PLACES, Treatment};
use crate::table::read::cell::{Sort, trimmed};
use crate::table::read::error::ReadError;
use crate::table::read::raw::{Odd, Plan, Raw, RawLines, RawTable, Stored};
use crate::table::read::{Choices, Options, Outcome, Reading, decide, labels, suspect};
use crate::table::{Lines, Origin, Table};
use std::sync::Mutex;

/// How many columns are settled in one piece of work.
const PIECE: usize = 128;

/// Says where the values of a table stand.
pub struct Whereabouts {
    file: String,
    sheet: Option<String>,
    lines: RawLines,
}

impl Whereabouts {
    /// Where a value stands.
    pub fn place(&self, row: u32, line: u32, column: &str) -> Place {
        let mut place = Place::file(&self.file).with_column(column);
        place.sheet.clone_from(&self.sheet);
        match &self.lines {
            RawLines::Rows(rows) => place.row = Some(rows[row as usize] as usize),
            RawLines::Columns(heads) => {
                place.row = Some(line as usize).filter(|&line| line > 0);
                place.column = Some(heads[row as usize].clone());
            }
        }
        place
    }
}

/// Gathers what is noticed value by value into one finding of each kind.
#[derive(Default)]
pub struct Gather {
    findings: Vec<Finding>,
    last_columns: Vec<String>,
}

impl Gather {
    /// Adds one value.
    pub fn add(
        &mut self,
        kind: FindingKind,
        treatment: Treatment,
        column: &str,
        place: impl FnOnce() -> Place,
        example: &str,
    ) {
        let known = |f: &Finding| f.kind == kind && f.treatment == treatment;
        let at = self.findings.iter().position(known).unwrap_or_else(|| {
            self.findings.push(Finding::new(kind.clone(), treatment));
            self.last_columns.push(String::new());
            self.findings.len() - 1
        });
        self.findings[at].add(place, example);
        if self.findings[at].n_columns == 0 || self.last_columns[at] != column {
            self.findings[at].add_column(column);
            column.clone_into(&mut self.last_columns[at]);
        }
    }

    /// Takes in what was gathered from later columns.
    fn absorb(&mut self, other: Self) {
        for (finding, last) in other.findings.into_iter().zip(other.last_columns) {
            let same =
                |f: &&mut Finding| f.kind == finding.kind && f.treatment == finding.treatment;
            let Some(known) = self.findings.iter_mut().find(same) else {
                self.findings.push(finding);
                self.last_columns.push(last);
                continue;
            };
            known.count += finding.count;
            known.n_columns += finding.n_columns;
            let room = PLACES.saturating_sub(known.places.len());
            known.places.extend(finding.places.into_iter().take(room));
            let room = COLUMNS.saturating_sub(known.columns.len());
            known.columns.extend(finding.columns.into_iter().take(room));
            for example in finding.examples {
                known.add_example(&example);
            }
        }
    }

    fn into_findings(mut self) -> Vec<Finding> {
        for finding in &mut self.findings {
            if let FindingKind::MissingWords { words } = &mut finding.kind {
                words.clone_from(&finding.examples);
            }
        }
        self.findings
    }
}

/// How values are read.
pub struct Manner<'o> {
    /// The decimal mark.
    pub mark: DecimalMark,
    /// Whether marks between groups of digits are read.
    pub grouping: Grouping,
    /// Whether the file says of every value how it is stored.
    pub is_typed: bool,
    codes: &'o [String],
    numeric_codes: Vec<f64>,
}

/// A settled column.
struct Settled {
    column: Column,
    line: u32,
    was: Plan,
    is_unnamed: bool,
    is_blank: bool,
    /// Whether labels could have been numbers.
    is_close: bool,
}

/// Settles all columns and builds the table.
pub fn assemble(
    raw: RawTable<'_>,
    file_name: &str,
    mut used: Options,
    choices: Choices,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Outcome, Cancelled> {
    let whereabouts = Whereabouts {
        file: file_name.to_owned(),
        sheet: raw.sheet,
        lines: raw.lines,
    };
    let n_rows = raw.n_rows;
    let mark = used.decimal.unwrap_or(DecimalMark::Point);
    let manner = Manner {
        mark,
        grouping: used.grouping.unwrap_or(Grouping::Absent),
        is_typed: raw.is_typed,
        codes: &used.missing_codes,
        numeric_codes: used
            .missing_codes
            .iter()
            .filter_map(|code| crate::table::read::number::whole(code.as_bytes(), mark))
            .collect(),
    };
    let mut pieces: Vec<Mutex<Vec<Raw<'_>>>> = Vec::new();
    let mut columns = raw.columns.into_iter().peekable();
    while columns.peek().is_some() {
        pieces.push(Mutex::new(columns.by_ref().take(PIECE).collect()));
    }
    let settled = in_order(threads, pieces.len(), work, |piece| {
        let columns = std::mem::take(
            &mut *pieces[piece]
                .lock()
                .expect("nobody panics while taking columns"),
        );
        let mut gather = Gather::default();
        let mut done = Vec::with_capacity(columns.len());
        for (at, raw) in columns.into_iter().enumerate() {
            work.check()?;
            let is_first = piece == 0 && at == 0;
            done.push(settle(
                raw,
                n_rows,
                is_first,
                &manner,
                &whereabouts,
                &mut gather,
            ));
        }
        Ok((done, gather))
    })?;
    let mut gather = Gather::default();
    let mut findings = raw.findings;
    let mut blank = Finding::new(FindingKind::BlankColumns, Treatment::LeftOut);
    let mut unnamed = Finding::new(FindingKind::BlankNames, Treatment::Renamed);
    let mut table_columns = Vec::new();
    let mut source = Vec::new();
    for (done, gathered) in settled {
        gather.absorb(gathered);
        for settled in done {
            let name = &settled.column.name;
            if settled.is_unnamed && settled.is_blank {
                blank.count += 1;
                continue;
            }
            if settled.is_unnamed {
                let line = if settled.line > 0 {
                    settled.line
                } else {
                    raw.header_line
                };
                let mut place = Place::file(file_name).with_column(name);
                place.sheet.clone_from(&whereabouts.sheet);
                place.row = Some(line as usize).filter(|&line| line > 0);
                unnamed.add(|| place, name);
                unnamed.add_column(name);
            }
            remember(&mut used, &settled);
            source.push((0, settled.line));
            table_columns.push(settled.column);
        }
    }
    if table_columns.is_empty() {
        return Ok(Err(ReadError::Blank));
    }
    // Without a header no column has a name, which is one finding and not thousands.
    let has_header = used.header_row != Some(0);
    findings.extend([blank, unnamed].into_iter().filter(|finding| {
        finding.count > 0 && (has_header || finding.kind != FindingKind::BlankNames)
    }));
    findings.extend(gather.into_findings());
    findings.extend(summary_rows(&table_columns, &whereabouts));
    let origin = Origin {
        file: Some(file_name.to_owned()),
        sheet: whereabouts.sheet,
        lines: match whereabouts.lines {
            RawLines::Rows(rows) => Lines::Rows(rows),
            RawLines::Columns(heads) => Lines::Columns(heads),
        },
    };
    Ok(Ok(Reading {
        table: Table::with_origin(table_columns, origin, source),
        findings,
        used,
        choices,
    }))
}

/// Makes a decision about a column explicit, where there was one to make.
fn remember(used: &mut Options, settled: &Settled) {
    let name = &settled.column.name;
    let list = match settled.column.values {
        Values::Texts(_) if settled.is_close => &mut used.as_text,
        Values::Numbers(_) if settled.was.keeps_text() => &mut used.as_numbers,
        Values::Texts(_) | Values::Numbers(_) => return,
    };
    if !list.contains(name) {
        list.push(name.clone());
    }
}

fn settle(
    mut raw: Raw<'_>,
    n_rows: usize,
    is_first: bool,
    manner: &Manner<'_>,
    place: &Whereabouts,
    gather: &mut Gather,
) -> Settled {
    let was = raw.plan;
    let are_labels = decide::settle(&mut raw, n_rows, is_first, manner);
    let is_blank = raw.odd.is_empty() && raw.values.iter().all(|value| value.is_nan());
    let (name, unit, line, is_unnamed) =
        (raw.name.clone(), raw.unit.clone(), raw.line, raw.is_unnamed);
    let is_close = are_labels && raw.odd.iter().any(|odd| looks_numeric(odd));
    let values = if are_labels {
        Values::Texts(labels::labels(raw, n_rows, manner.codes, place, gather))
    } else {
        Values::Numbers(numbers(raw, manner, place, gather))
    };
    Settled {
        column: Column { name, unit, values },
        line,
        was,
        is_unnamed,
        is_blank,
        is_close,
    }
}

fn looks_numeric(odd: &Odd<'_>) -> bool {
    odd.stored == Stored::Number || odd.text.bytes().next().is_some_and(|b| b.is_ascii_digit())
}

/// The numbers of a column, and what was noticed about the values that are none.
fn numbers(raw: Raw<'_>, manner: &Manner<'_>, place: &Whereabouts, gather: &mut Gather) -> Numbers {
    let mut values = raw.values;
    let mut censored = Vec::new();
    let (name, line) = (&raw.name, raw.line);
    for &code in &manner.numeric_codes {
        for (row, value) in values
            .iter_mut()
            .enumerate()
            .filter(|(_, value)| **value == code)
        {
            *value = f64::NAN;
            let at = || place.place(row as u32, line, name);
            let kind = FindingKind::MissingCodes;
            gather.add(kind, Treatment::CountedAsMissing, name, at, &plain(code));
        }
    }
    for odd in raw.odd {
        let text = trimmed(&odd.text);
        let at = || place.place(odd.row, line, name);
        let mut note = |kind, treatment| gather.add(kind, treatment, name, at, text);
        let missing = Treatment::CountedAsMissing;
        let is_code = manner.codes.iter().any(|code| code == text);
        match (odd.stored, odd.sort) {
            _ if is_code => note(FindingKind::MissingCodes, missing),
            (Stored::Error, _) | (_, Sort::Error) => note(FindingKind::ErrorValues, missing),
            (Stored::Date, _) | (_, Sort::Date) => note(FindingKind::DatesAmongNumbers, missing),
            (Stored::Truth, _) | (_, Sort::Text) => note(FindingKind::TextAmongNumbers, missing),
            (_, Sort::Blank) => {}
            (_, Sort::Number(value)) => {
                if manner.numeric_codes.contains(&value) {
                    note(FindingKind::MissingCodes, missing);
                    continue;
                }
                values[odd.row as usize] = value;
                note(FindingKind::NumbersAsText, Treatment::ReadAsNumber);
            }
            (_, Sort::LeadingZeros(value)) => {
                values[odd.row as usize] = value;
                note(FindingKind::LeadingZeros, Treatment::ReadAsNumber);
            }
            (_, Sort::LongDigits(value)) => {
                values[odd.row as usize] = value;
                note(FindingKind::DigitsLost, Treatment::ReadAsNumber);
            }
            (_, Sort::Below(limit)) => {
                censored.push((odd.row, Censored::Below(limit)));
                note(FindingKind::BelowLimit, Treatment::KeptAsLimit);
            }
            (_, Sort::Above(limit)) => {
                censored.push((odd.row, Censored::Above(limit)));
                note(FindingKind::AboveLimit, Treatment::KeptAsLimit);
            }
            (_, Sort::MissingWord) => {
                note(FindingKind::MissingWords { words: Vec::new() }, missing);
            }
            (_, Sort::OtherMark) => note(FindingKind::OtherDecimalMark, missing),
            (_, Sort::Grouped(_)) => note(FindingKind::GroupedDigits, missing),
            (_, Sort::WithUnit) => note(FindingKind::ValuesWithUnit, missing),
            (_, Sort::TooLarge) => note(FindingKind::NumbersTooLarge, missing),
        }
    }
    for code in suspect::codes(&values) {
        let kind = FindingKind::SuspectedCode { code: plain(code) };
        for (row, _) in values
            .iter()
            .enumerate()
            .filter(|(_, value)| **value == code)
        {
            let at = || place.place(row as u32, line, name);
            gather.add(kind.clone(), Treatment::Kept, name, at, &plain(code));
        }
    }
    Numbers::with_censored(values, censored)
}

/// Rows near the end whose first label names a summary.
fn summary_rows(columns: &[Column], place: &Whereabouts) -> Option<Finding> {
    const WORDS: [&str; 19] = [
        "mean",
        "average",
        "avg",
        "sd",
        "std",
        "stdev",
        "std dev",
        "total",
        "sum",
        "median",
        "min",
        "max",
        "minimum",
        "maximum",
        "cv",
        "rsd",
        "count",
        "mittelwert",
        "summe",
    ];
    const NEAR_END: usize = 12;
    let RawLines::Rows(_) = place.lines else {
        return None;
    };
    let column = columns.iter().find(|column| !column.is_numeric())?;
    let Values::Texts(labels) = &column.values else {
        return None;
    };
    let mut finding = Finding::new(FindingKind::SummaryRows, Treatment::Kept);
    let first = labels.len().saturating_sub(NEAR_END);
    for (row, label) in labels.iter().enumerate().skip(first) {
        let Some(label) = label else { continue };
        let small = label.to_lowercase();
        let bare = small.trim_end_matches([':', '.', ' ']);
        let is_alone = labels
            .iter()
            .flatten()
            .filter(|other| *other == label)
            .count()
            == 1;
        if is_alone && WORDS.contains(&bare) {
            finding.add(|| place.place(row as u32, 0, &column.name), label);
        }
    }
    (finding.count > 0).then_some(finding)
}
