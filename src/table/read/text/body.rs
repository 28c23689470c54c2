//! The values of a delimited text: numbers straight into columns, all others listed.

use crate::base::layout::Orientation;
use crate::base::problem::Place;
use crate::base::thread::{Threads, in_order};
use crate::base::work::{Cancelled, Work};
use crate::table::finding::{Finding, FindingKind, Treatment};
use crate::table::read::Options;
use crate::table::read::cell::{Sort, sort, trimmed};
use crate::table::read::decide;
use crate::table::read::error::ReadError;
use crate::table::read::layout::names_samples;
use crate::table::read::number;
use crate::table::read::raw::{Odd, Plan, Raw, RawTable, Stored};
use crate::table::read::split::{self, Field, Record};
use crate::table::read::text::sideways::sideways;
use crate::table::read::text::{Found, Manner, row_lines};
use std::borrow::Cow;
use std::sync::Mutex;

/// How many rows are looked at to see what a column holds.
const LOOK: usize = 5;

/// How many bytes of text one piece of work reads, about: some milliseconds.
const PIECE: usize = 1 << 20;

/// Rows are shared out by eights, so that no two threads write into one line of the cache.
const EIGHT: usize = 8;

/// What is known before the values are read.
pub struct Body<'a> {
    /// How the text is read.
    pub manner: Manner<'a>,
    /// The rows of values.
    pub records: Vec<Record>,
    /// The names of the columns from `left` on; sideways: the whole header.
    pub names: Vec<String>,
    /// Which columns of the file have no name.
    pub is_unnamed: Vec<bool>,
    /// The units of all columns, or none.
    pub units: Vec<String>,
    /// The first column that is filled.
    pub left: usize,
    /// How many values a row has.
    pub width: usize,
    /// The column of units in a sideways file.
    pub unit_column: Option<usize>,
    /// The row of the header; 0 if there is none.
    pub header_line: u32,
    /// The file's name.
    pub file_name: String,
    /// What was noticed so far.
    pub findings: Vec<Finding>,
}

/// Rows of unusual length.
#[derive(Default)]
pub(super) struct Uneven {
    pub(super) short: Vec<u32>,
    pub(super) long: Vec<u32>,
}

/// Reads the values.
pub fn read<'a>(
    body: Body<'a>,
    options: &Options,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Found<'a>, Cancelled> {
    if body.records.is_empty() {
        return Ok(Err(ReadError::HeaderOnly {
            columns: body.names.len(),
        }));
    }
    match options.orientation {
        Some(Orientation::SamplesInColumns) => sideways(&body, options, threads, work),
        Some(Orientation::SamplesInRows) | None => upright(body, options, threads, work),
    }
}

/// One value of a row.
pub(super) enum Hit {
    Number {
        value: f64,
        start: usize,
        end: usize,
    },
    Other(Field),
}

/// Calls `hit` with every value of a record and its position; returns how many there are.
#[inline]
pub(super) fn scan(manner: Manner<'_>, record: Record, mut hit: impl FnMut(usize, Hit)) -> usize {
    let bytes = manner.text.as_bytes();
    let delimiter = manner.dialect.byte();
    let end = record.end;
    let mut at = split::beginning(bytes, record.start, end, manner.dialect);
    let mut index = 0;
    loop {
        let mut next = None;
        if let Some((value, length)) = number::leading(&bytes[at..end], manner.mark) {
            let stop = at + length;
            if (stop == end || bytes[stop] == delimiter) && !loses_digits(&bytes[at..stop], value) {
                hit(
                    index,
                    Hit::Number {
                        value,
                        start: at,
                        end: stop,
                    },
                );
                next = Some(stop);
            }
        }
        let next = next.unwrap_or_else(|| {
            let field = split::field(bytes, at, end, manner.dialect);
            hit(index, Hit::Other(field));
            field.next
        });
        index += 1;
        match split::following(bytes, next, end, manner.dialect) {
            Some(following) => at = following,
            None => return index,
        }
    }
}

/// Whether a number as written holds more than its value: leading zeros, too many digits.
#[inline]
fn loses_digits(written: &[u8], value: f64) -> bool {
    (written[0] == b'0' && written.len() > 1 && written[1].is_ascii_digit())
        || (written.len() > 15 && written.iter().all(u8::is_ascii_digit))
        || value.is_infinite()
}

pub(super) fn slice(text: &str, start: usize, end: usize) -> &str {
    text.get(start..end).unwrap_or("")
}

/// What each column is taken for, by its name and its first values.
fn plans(body: &Body<'_>, options: &Options) -> Vec<Plan> {
    let manner = body.manner;
    // For each column, labels less quantities.
    let mut balance = vec![0_i8; body.names.len()];
    for &record in body.records.iter().take(LOOK) {
        let _ = scan(manner, record, |index, hit| {
            let slot = index.checked_sub(body.left);
            let Some(balance) = slot.and_then(|slot| balance.get_mut(slot)) else {
                return;
            };
            let sort = match hit {
                Hit::Number { value, .. } => Sort::Number(value),
                Hit::Other(field) => sort(&field.text(manner.text), manner.mark, manner.grouping),
            };
            if sort.is_quantity() {
                *balance -= 1;
            } else if !sort.is_nothing() {
                *balance += 1;
            }
        });
    }
    let as_text = decide::set(&options.as_text);
    let as_numbers = decide::set(&options.as_numbers);
    body.names
        .iter()
        .zip(&balance)
        .map(|(name, balance)| {
            if as_text.contains(name.as_str()) {
                Plan::Labels
            } else if as_numbers.contains(name.as_str()) {
                Plan::SurelyNumbers
            } else if names_samples(name) {
                Plan::Names
            } else if *balance > 0 {
                Plan::PerhapsLabels
            } else {
                Plan::Numbers
            }
        })
        .collect()
}

/// What is left of all columns, from which one piece of rows after the other is taken off: whoever
/// comes next gets the next rows. One slice for each column and thread, where slices for all pieces
/// beforehand would take a quarter of the memory of a wide table.
struct Tails<'s> {
    next: usize,
    columns: Vec<&'s mut [f64]>,
}

impl<'s> Tails<'s> {
    /// The number of the next piece, and its share of every column.
    fn take(&mut self, rows_each: usize) -> (usize, Vec<&'s mut [f64]>) {
        let piece = self.next;
        self.next += 1;
        let share = self
            .columns
            .iter_mut()
            .map(|tail| {
                let rows = rows_each.min(tail.len());
                let (share, rest) = std::mem::take(tail).split_at_mut(rows);
                *tail = rest;
                share
            })
            .collect();
        (piece, share)
    }
}

/// Samples in rows.
fn upright<'a>(
    mut body: Body<'a>,
    options: &Options,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Found<'a>, Cancelled> {
    let n_rows = body.records.len();
    let plans = plans(&body, options);
    let mut values: Vec<Vec<f64>> = plans
        .iter()
        .map(|plan| {
            if plan.keeps_text() {
                Vec::new()
            } else {
                vec![0.0; n_rows]
            }
        })
        .collect();
    let rows_each = rows_each(&body);
    let tails = Mutex::new(Tails {
        next: 0,
        columns: values.iter_mut().map(Vec::as_mut_slice).collect(),
    });
    let n_pieces = n_rows.div_ceil(rows_each);
    let mut pieces = in_order(threads, n_pieces, &work.part(0.0..0.9), |_| {
        let (piece, mut share) = tails
            .lock()
            .expect("nobody panics while taking a share")
            .take(rows_each);
        let first = piece * rows_each;
        let records = &body.records[first..n_rows.min(first + rows_each)];
        Ok((piece, strip(&body, records, first, &mut share, work)?))
    })?;
    drop(tails);
    // Threads take pieces in any order; what they found is put into the order of the file.
    pieces.sort_by_key(|(piece, _)| *piece);
    let mut odd: Vec<Vec<Odd<'a>>> = plans.iter().map(|_| Vec::new()).collect();
    let mut uneven = Uneven::default();
    for (_, (pieces, lines)) in pieces {
        for (column, value) in pieces {
            odd[column as usize].push(value);
        }
        uneven.short.extend(lines.short);
        uneven.long.extend(lines.long);
    }
    let mut findings = std::mem::take(&mut body.findings);
    findings.extend(uneven_rows(&body, uneven));
    let names = std::mem::take(&mut body.names);
    let mut columns: Vec<Raw<'a>> = Vec::with_capacity(names.len());
    let parts = names.into_iter().zip(plans).zip(values).zip(odd);
    for (at, (((name, plan), values), odd)) in parts.enumerate() {
        let in_file = at + body.left;
        columns.push(Raw {
            name,
            is_unnamed: body.is_unnamed.get(in_file).copied().unwrap_or(true),
            unit: body
                .units
                .get(in_file)
                .filter(|unit| !unit.is_empty())
                .cloned(),
            line: 0,
            plan,
            values,
            odd,
        });
    }
    retext(&body, &mut columns, threads, &work.part(0.9..1.0))?;
    Ok(Ok(RawTable {
        sheet: None,
        is_typed: false,
        columns,
        n_rows,
        lines: row_lines(&body.records),
        header_line: body.header_line,
        findings,
    }))
}

fn rows_each(body: &Body<'_>) -> usize {
    let first = body.records.first().map_or(0, |record| record.start);
    let last = body.records.last().map_or(0, |record| record.end);
    let per_row = ((last - first) / body.records.len().max(1)).max(1);
    (PIECE / per_row).max(1).next_multiple_of(EIGHT)
}

type Strays<'a> = (Vec<(u32, Odd<'a>)>, Uneven);

/// Reads some rows into their shares of the columns.
fn strip<'a>(
    body: &Body<'a>,
    records: &[Record],
    first: usize,
    share: &mut [&mut [f64]],
    work: &Work<'_>,
) -> Result<Strays<'a>, Cancelled> {
    let manner = body.manner;
    let n_columns = share.len();
    let mut odd = Vec::new();
    let mut uneven = Uneven::default();
    for (at, &record) in records.iter().enumerate() {
        work.check()?;
        let mut is_long = false;
        let found = scan(manner, record, |index, hit| {
            let Some(slot) = index.checked_sub(body.left) else {
                return;
            };
            let Some(values) = share.get_mut(slot) else {
                // More values than names: blanks behind the last delimiter are no values.
                is_long = is_long
                    || match hit {
                        Hit::Number { .. } => true,
                        Hit::Other(field) => !trimmed(&field.text(manner.text)).is_empty(),
                    };
                return;
            };
            let (text, sort) = match hit {
                Hit::Number { value, start, end } => {
                    if let Some(place) = values.get_mut(at) {
                        *place = value;
                        return;
                    }
                    (
                        Cow::Borrowed(slice(manner.text, start, end)),
                        Sort::Number(value),
                    )
                }
                Hit::Other(field) => {
                    let text = field.text(manner.text);
                    let Some(place) = values.get_mut(at) else {
                        if !trimmed(&text).is_empty() {
                            odd.push((slot as u32, label((first + at) as u32, text)));
                        }
                        return;
                    };
                    let sort = sort(&text, manner.mark, manner.grouping);
                    *place = f64::NAN;
                    if let Some(value) = sort.plain() {
                        *place = value;
                        return;
                    }
                    if sort == Sort::Blank {
                        return;
                    }
                    (text, sort)
                }
            };
            let row = (first + at) as u32;
            odd.push((
                slot as u32,
                Odd {
                    row,
                    sort,
                    stored: Stored::Text,
                    text,
                },
            ));
        });
        for values in share.iter_mut().skip(found.saturating_sub(body.left)) {
            if let Some(place) = values.get_mut(at) {
                *place = f64::NAN;
            }
        }
        if found < body.left + n_columns {
            uneven.short.push(record.line);
        }
        if is_long {
            uneven.long.push(record.line);
            // A value too many somewhere: nobody knows which column the others belong to.
            for values in share.iter_mut().skip(1) {
                if let Some(place) = values.get_mut(at) {
                    *place = f64::NAN;
                }
            }
            let row = (first + at) as u32;
            odd.retain(|(slot, odd): &(u32, Odd<'a>)| {
                odd.row != row || *slot == 0 || share[*slot as usize].is_empty()
            });
        }
    }
    Ok((odd, uneven))
}

/// A value of a column that keeps its text.
pub(super) fn label(row: u32, text: Cow<'_, str>) -> Odd<'_> {
    Odd {
        row,
        sort: Sort::Text,
        stored: Stored::Text,
        text,
    }
}

/// Reads once more, as text, the columns that were taken for numbers and hold labels.
fn retext<'a>(
    body: &Body<'a>,
    columns: &mut [Raw<'a>],
    threads: Threads,
    work: &Work<'_>,
) -> Result<(), Cancelled> {
    let wanted: Vec<bool> = columns
        .iter()
        .enumerate()
        .map(|(at, raw)| !raw.plan.keeps_text() && decide::is_labels(raw, at == 0))
        .collect();
    let Some(last) = wanted.iter().rposition(|&is_wanted| is_wanted) else {
        return Ok(());
    };
    let rows_each = rows_each(body);
    let pieces = in_order(
        threads,
        body.records.len().div_ceil(rows_each),
        work,
        |piece| {
            let first = piece * rows_each;
            let mut texts = Vec::new();
            for (at, &record) in body.records.iter().enumerate().skip(first).take(rows_each) {
                work.check()?;
                let mut index = 0;
                split::fields(
                    body.manner.text.as_bytes(),
                    record,
                    body.manner.dialect,
                    |field| {
                        if let Some(slot) = usize::checked_sub(index, body.left) {
                            let text = field.text(body.manner.text);
                            if wanted.get(slot) == Some(&true) && !trimmed(&text).is_empty() {
                                texts.push((slot, label(at as u32, text)));
                            }
                        }
                        index += 1;
                        if index > last + body.left {
                            std::ops::ControlFlow::Break(())
                        } else {
                            std::ops::ControlFlow::Continue(())
                        }
                    },
                );
            }
            Ok(texts)
        },
    )?;
    for (raw, _) in columns
        .iter_mut()
        .zip(&wanted)
        .filter(|(_, is_wanted)| **is_wanted)
    {
        raw.values = Vec::new();
        raw.odd = Vec::new();
        raw.plan = Plan::Labels;
    }
    for (slot, odd) in pieces.into_iter().flatten() {
        columns[slot].odd.push(odd);
    }
    Ok(())
}

pub(super) fn uneven_rows(body: &Body<'_>, uneven: Uneven) -> Vec<Finding> {
    let expected = body.left + body.names.len();
    let place = |line: u32| Place::file(&body.file_name).with_row(line as usize);
    let mut short = Finding::new(
        FindingKind::ShortRows { expected },
        Treatment::CountedAsMissing,
    );
    for line in uneven.short {
        short.add(|| place(line), "");
    }
    let mut long = Finding::new(
        FindingKind::LongRows { expected },
        Treatment::CountedAsMissing,
    );
    for line in uneven.long {
        long.add(|| place(line), "");
    }
    [short, long]
        .into_iter()
        .filter(|finding| finding.count > 0)
        .collect()
}
