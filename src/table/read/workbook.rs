//! Workbooks: one sheet, with the way in which every value is stored.

mod hidden;
mod sheet;

use crate::base::layout::{DecimalMark, Delimiter, Grouping, Orientation, UnitsRow};
use crate::base::problem::Place;
use crate::base::thread::Threads;
use crate::base::work::{Cancelled, Work};
use crate::table::finding::{Finding, FindingKind, Treatment};
use crate::table::read::below::{self, TailRow};
use crate::table::read::cell::{Sort, sort, trimmed};
use crate::table::read::error::ReadError;
use crate::table::read::layout::{self, HeadCell, HeadRow, Layout, names_samples};
use crate::table::read::raw::{Odd, Plan, Raw, RawLines, RawTable, Stored};
use crate::table::read::{Options, Outcome, Visibility, assemble, decide, names};
use sheet::{Cell, Sheet, Stuff};
use std::borrow::Cow;

/// Larger tables than this many values are refused: a few cells far apart can claim any size.
const MOST: usize = 400_000_000;

/// Whether the bytes begin like a zip archive or like an old workbook.
pub fn is_workbook(bytes: &[u8]) -> bool {
    bytes.starts_with(b"PK\x03\x04")
        || bytes.starts_with(b"PK\x05\x06")
        || bytes.starts_with(&[0xd0, 0xcf, 0x11, 0xe0, 0xa1, 0xb1, 0x1a, 0xe1])
}

/// Reads one sheet of a workbook.
pub fn read(
    bytes: &[u8],
    file_name: &str,
    options: &Options,
    work: &Work<'_>,
) -> Result<Outcome, Cancelled> {
    let book = match sheet::open(bytes, options.sheet.as_deref(), &work.part(0.0..0.7))? {
        Ok(book) => book,
        Err(error) => return Ok(Err(error)),
    };
    let sheet = book.sheet;
    if sheet.rows.is_empty() {
        return Ok(Err(ReadError::EmptySheet { sheet: sheet.name }));
    }
    let here = Place {
        file: Some(file_name.to_owned()),
        sheet: Some(sheet.name.clone()),
        ..Place::default()
    };
    let mut findings = of_book(&sheet, &book.choices, &here, options.sheet.is_some());
    let grouping = options.grouping.unwrap_or(Grouping::Absent);
    let mark = options
        .decimal
        .unwrap_or_else(|| guess_mark(&sheet, grouping));
    if let Some(row) = options.header_row.filter(|&row| row > sheet.rows.len()) {
        let rows = sheet.rows.len();
        return Ok(Err(ReadError::NoSuchRow { asked: row, rows }));
    }
    let head: Vec<HeadRow> = sheet
        .rows
        .iter()
        .take(layout::ROWS)
        .map(|row| head_row(row, sheet.width, mark, grouping))
        .collect();
    let layout = layout::find(&head, sheet.rows.len(), options);
    let used = Options {
        sheet: Some(sheet.name.clone()),
        decimal: Some(mark),
        grouping: Some(grouping),
        header_row: Some(layout.header.map_or(0, |at| at + 1)),
        units_row: Some(match layout.units {
            Some(_) => UnitsRow::BelowHeader,
            None => UnitsRow::Absent,
        }),
        orientation: Some(layout.orientation),
        delimiter: None::<Delimiter>,
        encoding: None,
        ..options.clone()
    };
    let body = body_rows(&sheet, &head, &layout, &here, &mut findings);
    if body.is_empty() {
        let columns = layout.header.map_or(0, |at| sheet.rows[at].len());
        return Ok(Err(ReadError::HeaderOnly { columns }));
    }
    if body.len().saturating_mul(sheet.width) > MOST {
        return Ok(Err(ReadError::TooLarge));
    }
    if let Some(reason) = layout.reason {
        let (kind, treatment) = if layout.is_unsure {
            (FindingKind::PerhapsSideways(reason), Treatment::Kept)
        } else {
            (FindingKind::Sideways(reason), Treatment::ReadAsSuch)
        };
        findings.push(Finding::new(kind, treatment).counting(body.len()));
    }
    let asked = used.clone();
    let grid = Grid {
        sheet: &sheet,
        layout: &layout,
        body,
        here,
        mark,
        grouping,
        options: &asked,
    };
    let raw = match layout.orientation {
        Orientation::SamplesInRows => grid.upright(findings),
        Orientation::SamplesInColumns => grid.sideways(findings),
    };
    match raw {
        Ok(raw) => {
            let work = work.part(0.7..1.0);
            assemble::assemble(raw, file_name, used, book.choices, Threads::new(1), &work)
        }
        Err(error) => Ok(Err(error)),
    }
}

/// What is to be said of the workbook and the sheet as a whole.
fn of_book(
    sheet: &Sheet,
    choices: &crate::table::read::Choices,
    here: &Place,
    is_asked: bool,
) -> Vec<Finding> {
    let mut findings = Vec::new();
    let others = |visibility: Visibility| -> Vec<String> {
        choices
            .sheets
            .iter()
            .filter(|choice| choice.name != sheet.name && choice.visibility == visibility)
            .map(|choice| choice.name.clone())
            .collect()
    };
    let (visible, hidden) = (others(Visibility::Visible), others(Visibility::Hidden));
    let count = visible.len() + hidden.len();
    if count > 0 && (!is_asked || !hidden.is_empty()) {
        let kind = FindingKind::OtherSheets {
            read: sheet.name.clone(),
            visible,
            hidden,
        };
        findings.push(Finding::new(kind, Treatment::LeftOut).counting(count));
    }
    let is_hidden = choices
        .sheets
        .iter()
        .any(|choice| choice.name == sheet.name && choice.visibility == Visibility::Hidden);
    if is_hidden {
        let mut finding = Finding::new(FindingKind::HiddenSheet, Treatment::Kept);
        finding.add(|| here.clone(), &sheet.name);
        findings.push(finding);
    }
    // Only what holds something can be missed by somebody who looks at the workbook.
    let rows: Vec<u32> = sheet
        .hidden
        .rows
        .iter()
        .copied()
        .filter(|&row| {
            sheet
                .rows
                .get(row as usize)
                .is_some_and(|cells| !cells.is_empty())
        })
        .collect();
    let columns: Vec<u32> = sheet
        .hidden
        .columns
        .iter()
        .copied()
        .filter(|&column| {
            sheet.rows.iter().any(|cells| {
                cells
                    .binary_search_by_key(&column, |cell| cell.column)
                    .is_ok()
            })
        })
        .collect();
    if rows.len() + columns.len() > 0 {
        let kind = FindingKind::HiddenLines {
            rows: rows.len(),
            columns: columns.len(),
        };
        let mut finding = Finding::new(kind, Treatment::Kept);
        for row in rows {
            finding.add(|| here.clone().with_row(row as usize + 1), "");
        }
        for column in columns {
            let letters = letters_of(column as usize);
            finding.add(|| here.clone().with_column(&letters), &letters);
        }
        findings.push(finding);
    }
    if !sheet.merged.is_empty() {
        let mut finding = Finding::new(FindingKind::MergedCells, Treatment::Kept);
        for &(row, column) in &sheet.merged {
            let place = || {
                here.clone()
                    .with_row(row as usize + 1)
                    .with_column(&letters_of(column as usize))
            };
            finding.add(place, "");
        }
        findings.push(finding);
    }
    findings
}

/// A column as workbooks call it: A, B, …, Z, AA, …
fn letters_of(column: usize) -> String {
    let mut letters = Vec::new();
    let mut rest = column + 1;
    while rest > 0 {
        rest -= 1;
        letters.push(char::from(b'A' + (rest % 26) as u8));
        rest /= 26;
    }
    letters.iter().rev().collect()
}

/// The decimal mark of numbers that are stored as text. A few with commas among many that are
/// stored as numbers are slips; only where commas are the habit are they decimal marks.
fn guess_mark(sheet: &Sheet, grouping: Grouping) -> DecimalMark {
    let (mut points, mut commas) = (0, 0);
    for cell in sheet.rows.iter().take(layout::ROWS).flatten() {
        match &cell.stuff {
            Stuff::Number(number) => points += usize::from(number.fract() != 0.0),
            Stuff::Text(text) => {
                let is_number = |mark| matches!(sort(text, mark, grouping), Sort::Number(_));
                points += usize::from(text.contains('.') && is_number(DecimalMark::Point));
                commas += usize::from(text.contains(',') && is_number(DecimalMark::Comma));
            }
            Stuff::Date(_) | Stuff::Truth(_) | Stuff::Error(_) => {}
        }
    }
    if commas > points {
        DecimalMark::Comma
    } else {
        DecimalMark::Point
    }
}

fn head_row(row: &[Cell], width: usize, mark: DecimalMark, grouping: Grouping) -> HeadRow {
    let n_cells = width.min(layout::COLUMNS);
    let blank = HeadCell {
        text: String::new(),
        sort: Sort::Blank,
    };
    let mut cells = vec![blank; n_cells];
    let mut n_filled_beyond = 0;
    for cell in row {
        let Some(head) = cells.get_mut(cell.column as usize) else {
            n_filled_beyond += 1;
            continue;
        };
        let text = cell.stuff.text();
        head.sort = cell_sort(cell, &text, mark, grouping);
        trimmed(&text).clone_into(&mut head.text);
    }
    HeadRow {
        cells,
        n_fields: width,
        n_filled_beyond,
    }
}

fn cell_sort(cell: &Cell, text: &str, mark: DecimalMark, grouping: Grouping) -> Sort {
    match &cell.stuff {
        Stuff::Number(number) => Sort::Number(*number),
        Stuff::Text(_) => sort(text, mark, grouping),
        Stuff::Date(_) => Sort::Date,
        Stuff::Truth(_) => Sort::Text,
        Stuff::Error(_) => Sort::Error,
    }
}

/// The rows that hold samples (sideways: predictors); what stands around them is noted.
fn body_rows(
    sheet: &Sheet,
    head: &[HeadRow],
    layout: &Layout,
    here: &Place,
    findings: &mut Vec<Finding>,
) -> Vec<usize> {
    let first_text = |row: usize| {
        sheet.rows[row]
            .first()
            .map_or(String::new(), |c| c.stuff.text().into_owned())
    };
    let place = |row: usize| here.clone().with_row(row + 1);
    let mut above = Finding::new(FindingKind::LinesAbove, Treatment::LeftOut);
    for row in (0..layout.header.unwrap_or(0)).filter(|&row| !sheet.rows[row].is_empty()) {
        above.add(|| place(row), &first_text(row));
    }
    if layout.units.is_some() {
        let mut units = Finding::new(FindingKind::UnitsRow, Treatment::ReadAsSuch);
        if layout.orientation == Orientation::SamplesInRows {
            units.add(|| place(layout.first - 1), "");
            for cell in &sheet.rows[layout.first - 1] {
                units.add_example(trimmed(&cell.stuff.text()));
            }
        } else {
            units.count = 1;
        }
        findings.push(units);
    }
    if layout.header.is_none() {
        findings.push(Finding::new(FindingKind::NoHeader, Treatment::Renamed).counting(1));
    }
    let last = sheet.rows.len();
    let common = layout::common_width(head.get(layout.first..).unwrap_or(&[]));
    let tail_first = last.saturating_sub(below::ROWS).max(layout.first);
    let tail: Vec<TailRow> = sheet.rows[tail_first.min(last)..]
        .iter()
        .map(|row| TailRow {
            n_filled: row.len(),
            text: row
                .first()
                .map_or(String::new(), |cell| cell.stuff.text().into_owned()),
            is_at_left: row
                .first()
                .is_some_and(|cell| cell.column as usize == layout.left),
        })
        .collect();
    let end = last - below::notes(&tail, common).min(last - layout.first.min(last));
    let mut notes = Finding::new(FindingKind::LinesBelow, Treatment::LeftOut);
    for row in (end..last).filter(|&row| !sheet.rows[row].is_empty()) {
        notes.add(|| place(row), &first_text(row));
    }
    let mut blank = Finding::new(FindingKind::BlankRows, Treatment::LeftOut);
    let mut again = Finding::new(FindingKind::RepeatedHeader, Treatment::LeftOut);
    let mut body: Vec<usize> = Vec::new();
    for row in layout.first..end {
        if sheet.rows[row].is_empty() {
            blank.add(|| place(row), "");
        } else if layout
            .header
            .is_some_and(|header| sheet.rows[header] == sheet.rows[row])
        {
            again.add(|| place(row), "");
        } else {
            body.push(row);
        }
    }
    findings.extend(
        [above, notes, blank, again]
            .into_iter()
            .filter(|finding| finding.count > 0),
    );
    body
}

/// A sheet of which it is known how the table lies in it.
struct Grid<'s> {
    sheet: &'s Sheet,
    layout: &'s Layout,
    body: Vec<usize>,
    here: Place,
    mark: DecimalMark,
    grouping: Grouping,
    options: &'s Options,
}

impl<'s> Grid<'s> {
    fn texts(&self, row: Option<usize>) -> Vec<String> {
        let mut texts = vec![String::new(); self.sheet.width];
        for cell in row
            .and_then(|row| self.sheet.rows.get(row))
            .into_iter()
            .flatten()
        {
            trimmed(&cell.stuff.text()).clone_into(&mut texts[cell.column as usize]);
        }
        texts
    }

    /// Heads that a workbook stores as dates: names that are lost for good.
    fn dates_among_names(&self, cells: impl Iterator<Item = (usize, &'s Cell)>) -> Option<Finding> {
        let mut finding = Finding::new(FindingKind::DatesAmongLabels, Treatment::KeptAsText);
        for (row, cell) in cells {
            if let Stuff::Date(text) = &cell.stuff {
                let place = || {
                    let column = letters_of(cell.column as usize);
                    self.here.clone().with_row(row + 1).with_column(&column)
                };
                finding.add(place, text);
            }
        }
        (finding.count > 0).then_some(finding)
    }

    fn plan(&self, name: &str) -> Plan {
        if self.options.as_text.iter().any(|other| other == name) {
            Plan::Labels
        } else if self.options.as_numbers.iter().any(|other| other == name) {
            Plan::SurelyNumbers
        } else if names_samples(name) {
            Plan::Names
        } else {
            Plan::Numbers
        }
    }

    fn odd(&self, row: u32, cell: &'s Cell) -> Odd<'s> {
        let text = cell.stuff.text();
        Odd {
            row,
            sort: cell_sort(cell, &text, self.mark, self.grouping),
            stored: match &cell.stuff {
                Stuff::Number(_) => Stored::Number,
                Stuff::Text(_) => Stored::Text,
                Stuff::Date(_) => Stored::Date,
                Stuff::Truth(_) => Stored::Truth,
                Stuff::Error(_) => Stored::Error,
            },
            text,
        }
    }

    fn empty(
        &self,
        name: String,
        is_unnamed: bool,
        line: u32,
        plan: Plan,
        n_rows: usize,
    ) -> Raw<'s> {
        Raw {
            name,
            is_unnamed,
            unit: None,
            line,
            plan,
            values: if plan.keeps_text() {
                Vec::new()
            } else {
                vec![f64::NAN; n_rows]
            },
            odd: Vec::new(),
        }
    }

    fn put(&self, raw: &mut Raw<'s>, row: u32, cell: &'s Cell) {
        if let (Stuff::Number(number), Some(place)) =
            (&cell.stuff, raw.values.get_mut(row as usize))
        {
            *place = *number;
        } else {
            raw.odd.push(self.odd(row, cell));
        }
    }

    /// Turns a column of numbers into labels if that is what it holds.
    fn relabel(raw: &mut Raw<'s>, is_first: bool) {
        if raw.plan.keeps_text() || !decide::is_labels(raw, is_first) {
            return;
        }
        let numbers = std::mem::take(&mut raw.values);
        for (row, number) in numbers.into_iter().enumerate().filter(|(_, n)| !n.is_nan()) {
            raw.odd.push(Odd {
                row: row as u32,
                sort: Sort::Number(number),
                stored: Stored::Number,
                text: Cow::Owned(crate::table::column::plain(number)),
            });
        }
        raw.odd.sort_by_key(|odd| odd.row);
        raw.plan = Plan::Labels;
    }

    /// Samples in rows.
    fn upright(&self, mut findings: Vec<Finding>) -> Result<RawTable<'s>, ReadError> {
        let left = self.layout.left;
        let heads = self
            .texts(self.layout.header)
            .split_off(left.min(self.sheet.width));
        let header = self.layout.header;
        let (names, repeated) = names::unlike(&heads, left, |at| {
            let place = self.here.clone().with_column(&letters_of(left + at));
            header.map_or(place.clone(), |row| place.with_row(row + 1))
        });
        findings.extend(repeated);
        findings.extend(header.and_then(|row| {
            self.dates_among_names(self.sheet.rows[row].iter().map(|cell| (row, cell)))
        }));
        let units = self.texts(self.layout.units);
        let n_rows = self.body.len();
        let mut columns: Vec<Raw<'s>> = names
            .into_iter()
            .enumerate()
            .map(|(at, name)| {
                let plan = self.plan(&name);
                let mut raw = self.empty(name, heads[at].is_empty(), 0, plan, n_rows);
                raw.unit = units
                    .get(at + left)
                    .filter(|unit| !unit.is_empty())
                    .cloned();
                raw
            })
            .collect();
        for (at, &row) in self.body.iter().enumerate() {
            for cell in &self.sheet.rows[row] {
                if let Some(slot) = (cell.column as usize).checked_sub(left) {
                    self.put(&mut columns[slot], at as u32, cell);
                }
            }
        }
        for (at, raw) in columns.iter_mut().enumerate() {
            Self::relabel(raw, at == 0);
        }
        Ok(RawTable {
            sheet: Some(self.sheet.name.clone()),
            columns,
            n_rows,
            lines: RawLines::Rows(self.body.iter().map(|&row| row as u32 + 1).collect()),
            is_typed: true,
            header_line: header.map_or(0, |row| row as u32 + 1),
            findings,
        })
    }

    /// Samples in columns.
    fn sideways(&self, mut findings: Vec<Finding>) -> Result<RawTable<'s>, ReadError> {
        let left = self.layout.left;
        let first = self.layout.units.map_or(left, |units| units.max(left)) + 1;
        let header_line = self.layout.header.map_or(0, |row| row as u32 + 1);
        let head_texts = self.texts(self.layout.header);
        let used = self
            .body
            .iter()
            .filter_map(|&row| self.sheet.rows[row].last())
            .map(|cell| cell.column as usize + 1)
            .max()
            .unwrap_or(0);
        let named = head_texts
            .iter()
            .rposition(|head| !head.is_empty())
            .map_or(0, |at| at + 1);
        let n_samples = used.max(named).saturating_sub(first);
        if n_samples == 0 {
            return Err(ReadError::HeaderOnly {
                columns: self.body.len(),
            });
        }
        let head_of = |row: usize| {
            self.sheet.rows[row]
                .iter()
                .find(|cell| cell.column as usize == left)
        };
        let corner = head_texts.get(left).filter(|name| names_samples(name));
        let mut all = vec![corner.cloned().unwrap_or_else(|| "sample".to_owned())];
        all.extend(self.body.iter().map(|&row| {
            head_of(row).map_or(String::new(), |cell| trimmed(&cell.stuff.text()).to_owned())
        }));
        let (names, repeated) = names::unlike(&all, 0, |at| {
            let row = at
                .checked_sub(1)
                .map_or(header_line as usize, |at| self.body[at] + 1);
            self.here.clone().with_row(row)
        });
        findings.extend(repeated);
        let heads = self
            .body
            .iter()
            .filter_map(|&row| head_of(row).map(|cell| (row, cell)));
        findings.extend(self.dates_among_names(heads));
        let mut samples = self.empty(
            names[0].clone(),
            false,
            header_line,
            Plan::Labels,
            n_samples,
        );
        for cell in self
            .layout
            .header
            .iter()
            .flat_map(|&row| &self.sheet.rows[row])
        {
            if let Some(at) = (cell.column as usize).checked_sub(first) {
                samples.odd.push(self.odd(at as u32, cell));
            }
        }
        let mut columns = vec![samples];
        for (at, &row) in self.body.iter().enumerate() {
            let name = names[at + 1].clone();
            let plan = self.plan(&name);
            let plan = if plan == Plan::Names {
                Plan::Numbers
            } else {
                plan
            };
            let mut raw = self.empty(
                name,
                all[at + 1].is_empty(),
                row as u32 + 1,
                plan,
                n_samples,
            );
            for cell in &self.sheet.rows[row] {
                if Some(cell.column as usize) == self.layout.units {
                    raw.unit = Some(trimmed(&cell.stuff.text()).to_owned());
                } else if let Some(at) = (cell.column as usize).checked_sub(first) {
                    self.put(&mut raw, at as u32, cell);
                }
            }
            Self::relabel(&mut raw, false);
            columns.push(raw);
        }
        let lines = (first..first + n_samples)
            .map(|at| match head_texts.get(at) {
                Some(head) if !head.is_empty() => head.clone(),
                _ => letters_of(at),
            })
            .collect();
        Ok(RawTable {
            sheet: Some(self.sheet.name.clone()),
            columns,
            n_rows: n_samples,
            lines: RawLines::Columns(lines),
            is_typed: true,
            header_line,
            findings,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_are_lettered_as_in_workbooks() {
        let letters: Vec<_> = [0, 25, 26, 701, 702, 16383].map(letters_of).into();
        assert_eq!(letters, ["A", "Z", "AA", "ZZ", "AAA", "XFD"]);
    }
}
