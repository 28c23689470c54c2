//! Delimited text: from letters to columns, in parallel.

mod body;
mod sideways;

use crate::base::layout::{DecimalMark, Delimiter, Grouping, Orientation, UnitsRow};
use crate::base::problem::Place;
use crate::base::thread::Threads;
use crate::base::work::{Cancelled, Work};
use crate::table::finding::{Finding, FindingKind, Treatment};
use crate::table::read::below::{self, TailRow};
use crate::table::read::cell::{sort, trimmed};
use crate::table::read::error::ReadError;
use crate::table::read::layout::{self, HeadCell, HeadRow, Layout};
use crate::table::read::raw::{RawLines, RawTable};
use crate::table::read::split::{self, Dialect, Record};
use crate::table::read::{Choices, Options, Outcome, assemble, dialect, letters, names};
use body::Body;
use std::ops::ControlFlow;

/// How a text is read: everything that is settled before its values are.
#[derive(Clone, Copy)]
struct Manner<'a> {
    text: &'a str,
    dialect: Dialect,
    mark: DecimalMark,
    grouping: Grouping,
}

/// Reads a delimited text. `options.encoding` is settled already.
pub fn read(
    text: &str,
    file_name: &str,
    options: &Options,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Outcome, Cancelled> {
    if trimmed(text).is_empty() {
        return Ok(Err(ReadError::Blank));
    }
    let (text, declared) = without_declaration(text);
    let delimiter = match options.delimiter.or(declared) {
        Some(delimiter) => delimiter,
        None => dialect::delimiter(text, work)?,
    };
    let mark = match options.decimal {
        Some(mark) => mark,
        None => dialect::decimal(text, delimiter, work)?,
    };
    let mut manner = Manner {
        text,
        dialect: Dialect::new(delimiter),
        mark,
        grouping: options.grouping.unwrap_or(Grouping::Absent),
    };
    let found = split::records(text.as_bytes(), manner.dialect, &work.part(0.0..0.15))?;
    if let Some((at, _)) = found.unclosed {
        manner.dialect.quotes_until = at;
    }
    let mut findings = Vec::new();
    let place = |line: u32| Place::file(file_name).with_row(line as usize);
    if let Some((at, line)) = found.unclosed {
        let mut finding = Finding::new(FindingKind::UnclosedQuote, Treatment::Kept);
        let rest = text[at..].lines().next().unwrap_or("");
        finding.add(|| place(line), rest);
        findings.push(finding);
    }
    if !found.breaks.is_empty() {
        let mut finding = Finding::new(FindingKind::BreaksInQuotes, Treatment::Kept);
        for &line in &found.breaks {
            finding.add(|| place(line), "");
        }
        findings.push(finding);
    }
    let records = found.records;
    let head: Vec<HeadRow> = records
        .iter()
        .take(layout::ROWS)
        .map(|&record| head_row(manner, record))
        .collect();
    let mut asked = options.clone();
    if let Some(row) = options.header_row.filter(|&row| row > 0) {
        match records
            .iter()
            .position(|record| record.line as usize == row)
        {
            Some(at) => asked.header_row = Some(at + 1),
            None => {
                let rows = records.last().map_or(0, |record| record.line as usize);
                return Ok(Err(ReadError::NoSuchRow { asked: row, rows }));
            }
        }
    }
    let layout = layout::find(&head, records.len(), &asked);
    let used = Options {
        delimiter: Some(delimiter),
        decimal: Some(mark),
        grouping: Some(manner.grouping),
        header_row: Some(layout.header.map_or(0, |at| records[at].line as usize)),
        units_row: Some(match layout.units {
            Some(_) => UnitsRow::BelowHeader,
            None => UnitsRow::Absent,
        }),
        orientation: Some(layout.orientation),
        ..options.clone()
    };
    let body = plan(manner, records, &head, &layout, file_name, findings);
    drop(head);
    let raw = body::read(body, &used, threads, &work.part(0.15..0.8))?;
    let raw = match raw {
        Ok(raw) => raw,
        Err(error) => return Ok(Err(error)),
    };
    assemble::assemble(
        raw,
        file_name,
        used,
        Choices::default(),
        threads,
        &work.part(0.8..1.0),
    )
}

/// Some programs write the delimiter into a first line of its own: `sep=;`.
fn without_declaration(text: &str) -> (&str, Option<Delimiter>) {
    let known = [
        ("sep=;", Delimiter::Semicolon),
        ("sep=,", Delimiter::Comma),
        ("sep=\t", Delimiter::Tab),
        ("sep=|", Delimiter::Bar),
    ];
    for (line, delimiter) in known {
        if let Some(rest) = text.strip_prefix(line)
            && rest.starts_with(['\n', '\r'])
        {
            // The line stays, so that rows are counted as in the file; it holds no delimiter
            // of its own and is left out as a line above the header.
            return (text, Some(delimiter));
        }
    }
    (text, None)
}

fn head_row(manner: Manner<'_>, record: Record) -> HeadRow {
    let bytes = manner.text.as_bytes();
    if split::is_blank(bytes, record, manner.dialect) {
        return HeadRow::default();
    }
    let mut cells = Vec::new();
    let mut beyond = record.end;
    split::fields(bytes, record, manner.dialect, |field| {
        let text = field.text(manner.text);
        let text = trimmed(&text);
        cells.push(HeadCell {
            text: text.to_owned(),
            sort: sort(text, manner.mark, manner.grouping),
        });
        if cells.len() < layout::COLUMNS {
            ControlFlow::Continue(())
        } else {
            beyond = field.next;
            ControlFlow::Break(())
        }
    });
    let n_fields = split::count(bytes, record, manner.dialect);
    let rest = Record {
        start: beyond,
        ..record
    };
    let n_filled_beyond = if split::is_blank(bytes, rest, manner.dialect) {
        0
    } else {
        n_fields - cells.len()
    };
    HeadRow {
        cells,
        n_fields,
        n_filled_beyond,
    }
}

/// All texts of a record, without blanks around them.
fn texts(manner: Manner<'_>, record: Record) -> Vec<String> {
    let mut texts = Vec::new();
    split::fields(manner.text.as_bytes(), record, manner.dialect, |field| {
        texts.push(trimmed(&field.text(manner.text)).to_owned());
        ControlFlow::Continue(())
    });
    texts
}

/// What is known before the values are read.
fn plan<'a>(
    manner: Manner<'a>,
    mut records: Vec<Record>,
    head: &[HeadRow],
    layout: &Layout,
    file_name: &str,
    mut findings: Vec<Finding>,
) -> Body<'a> {
    let bytes = manner.text.as_bytes();
    let is_blank = |record: Record| split::is_blank(bytes, record, manner.dialect);
    let place = |record: Record| Place::file(file_name).with_row(record.line as usize);
    let line_of = |record: Record| {
        let text = manner.text.get(record.start..record.end).unwrap_or("");
        trimmed(text).to_owned()
    };
    let header = layout.header.map(|at| records[at]);
    let above = layout.header.unwrap_or(0).min(records.len());
    let mut finding = Finding::new(FindingKind::LinesAbove, Treatment::LeftOut);
    for &record in records[..above].iter().filter(|&&record| !is_blank(record)) {
        finding.add(|| place(record), &line_of(record));
    }
    findings.push(finding);

    // The width of a sample: the header's, or what most rows have.
    let mut heads = header.map_or_else(Vec::new, |record| texts(manner, record));
    let body_head = head.get(layout.first..).unwrap_or(&[]);
    let common = layout::common_width(body_head);
    if layout.is_header_short {
        heads.insert(0, "row name".to_owned());
        let mut finding = Finding::new(FindingKind::HeaderShort, Treatment::ReadAsSuch);
        if let Some(record) = header {
            finding.add(|| place(record), "");
        }
        findings.push(finding);
    }
    let width = heads.len().max(common);
    heads.resize(width, String::new());
    if header.is_none() {
        findings.push(Finding::new(FindingKind::NoHeader, Treatment::Renamed).counting(1));
    }
    let is_unnamed = heads.iter().map(String::is_empty).collect();
    let units = units(manner, &records, layout, width, &mut findings, file_name);

    // Samples: without notes below, blank rows, and the header once more.
    let _ = records.drain(..layout.first.min(records.len()));
    let mut body = records;
    let tail: Vec<TailRow> = body[body.len().saturating_sub(below::ROWS)..]
        .iter()
        .map(|&record| tail_row(manner, record))
        .collect();
    let sample_width = if common > 1 { common } else { width };
    let mut notes = Finding::new(FindingKind::LinesBelow, Treatment::LeftOut);
    let first_note = body.len() - below::notes(&tail, sample_width).min(body.len());
    for record in body.split_off(first_note) {
        if !is_blank(record) {
            notes.add(|| place(record), &line_of(record));
        }
    }
    let mut blank = Finding::new(FindingKind::BlankRows, Treatment::LeftOut);
    let mut again = Finding::new(FindingKind::RepeatedHeader, Treatment::LeftOut);
    let last = body.iter().rposition(|&record| !is_blank(record));
    body.truncate(last.map_or(0, |last| last + 1));
    let header_line = header.map(line_of);
    body.retain(|&record| {
        if is_blank(record) {
            blank.add(|| place(record), "");
            return false;
        }
        // Only a record of the same length can be the header once more.
        let is_header = header.is_some_and(|header| {
            header.end - header.start == record.end - record.start
                && Some(line_of(record)) == header_line
        });
        if is_header {
            again.add(|| place(record), "");
        }
        !is_header
    });
    findings.extend([notes, blank, again]);

    let (names, of_names) = if layout.orientation == Orientation::SamplesInRows {
        names::unlike(&heads[layout.left.min(width)..], layout.left, |at| {
            header
                .map_or_else(|| Place::file(file_name), place)
                .with_column(&(layout.left + at + 1).to_string())
        })
    } else {
        (heads, None)
    };
    findings.extend(of_names);
    let mut broken = Finding::new(FindingKind::BrokenLetters, Treatment::Kept);
    for name in names.iter().filter(|name| letters::is_broken(name)) {
        broken.add(
            || header.map_or_else(|| Place::file(file_name), place),
            name,
        );
    }
    findings.push(broken);
    if let Some(reason) = layout.reason {
        let (kind, treatment) = if layout.is_unsure {
            (FindingKind::PerhapsSideways(reason), Treatment::Kept)
        } else {
            (FindingKind::Sideways(reason), Treatment::ReadAsSuch)
        };
        findings.push(Finding::new(kind, treatment).counting(body.len()));
    }
    findings.retain(|finding| finding.count > 0);
    Body {
        manner,
        records: body,
        names,
        is_unnamed,
        units,
        left: layout.left,
        width,
        unit_column: match layout.orientation {
            Orientation::SamplesInRows => None,
            Orientation::SamplesInColumns => layout.units,
        },
        header_line: header.map_or(0, |record| record.line),
        file_name: file_name.to_owned(),
        findings,
    }
}

fn units(
    manner: Manner<'_>,
    records: &[Record],
    layout: &Layout,
    width: usize,
    findings: &mut Vec<Finding>,
    file_name: &str,
) -> Vec<String> {
    let Some(at) = layout.units else {
        return Vec::new();
    };
    let mut finding = Finding::new(FindingKind::UnitsRow, Treatment::ReadAsSuch);
    if layout.orientation == Orientation::SamplesInColumns {
        findings.push(finding.counting(1));
        return Vec::new();
    }
    let Some(&record) = records.get(at) else {
        return Vec::new();
    };
    let mut units = texts(manner, record);
    units.resize(width, String::new());
    finding.add(|| Place::file(file_name).with_row(record.line as usize), "");
    for unit in &units {
        finding.add_example(unit);
    }
    findings.push(finding);
    units
}

fn tail_row(manner: Manner<'_>, record: Record) -> TailRow {
    let mut row = TailRow::default();
    let mut at = 0;
    split::fields(manner.text.as_bytes(), record, manner.dialect, |field| {
        let text = field.text(manner.text);
        let text = trimmed(&text);
        if !matches!(text, "" | "\u{1a}") {
            if row.n_filled == 0 {
                text.clone_into(&mut row.text);
                row.is_at_left = at == 0;
            }
            row.n_filled += 1;
        }
        at += 1;
        ControlFlow::Continue(())
    });
    row
}

/// A table as found, before it is settled what its columns hold.
type Found<'a> = Result<RawTable<'a>, ReadError>;

/// Where samples stand when every one is a row.
fn row_lines(records: &[Record]) -> RawLines {
    RawLines::Rows(records.iter().map(|record| record.line).collect())
}
