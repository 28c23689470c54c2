//! Sideways texts: every row of the file is a column of the table.

use crate::base::problem::Place;
use crate::base::thread::{Threads, in_order};
use crate::base::work::{Cancelled, Work};
use crate::table::read::Options;
use crate::table::read::cell::{Sort, sort, trimmed};
use crate::table::read::decide;
use crate::table::read::error::ReadError;
use crate::table::read::layout::{self, names_samples};
use crate::table::read::names;
use crate::table::read::raw::{Odd, Plan, Raw, RawLines, RawTable, Stored};
use crate::table::read::split;
use crate::table::read::text::Found;
use crate::table::read::text::body::{Body, Hit, Uneven, label, scan, slice, uneven_rows};
use std::borrow::Cow;

/// Samples in columns: every row of the file is a column of the table.
pub fn sideways<'a>(
    body: &Body<'a>,
    options: &Options,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Found<'a>, Cancelled> {
    let manner = body.manner;
    let first_sample = body
        .unit_column
        .map_or(body.left, |units| units.max(body.left))
        + 1;
    let mut n_samples = body.width.saturating_sub(first_sample);
    // Blank heads at the end are delimiters at the end of lines, unless values stand below.
    while n_samples > 0
        && body.names[first_sample + n_samples - 1].is_empty()
        && is_blank_column(body, first_sample + n_samples - 1)
    {
        n_samples -= 1;
    }
    if n_samples == 0 {
        return Ok(Err(ReadError::HeaderOnly {
            columns: body.records.len(),
        }));
    }
    let heads: Vec<String> = body
        .records
        .iter()
        .map(|&record| {
            let mut head = String::new();
            let mut index = 0;
            split::fields(manner.text.as_bytes(), record, manner.dialect, |field| {
                if index == body.left {
                    trimmed(&field.text(manner.text)).clone_into(&mut head);
                    return std::ops::ControlFlow::Break(());
                }
                index += 1;
                std::ops::ControlFlow::Continue(())
            });
            head
        })
        .collect();
    let corner = body.names.get(body.left).filter(|name| names_samples(name));
    let mut all = vec![corner.cloned().unwrap_or_else(|| "sample".to_owned())];
    all.extend(heads);
    let (names, of_names) = names::unlike(&all, 0, |at| {
        let record = body.records.get(at.wrapping_sub(1));
        let line = record.map_or(body.header_line, |record| record.line);
        Place::file(&body.file_name).with_row(line as usize)
    });
    let as_text = decide::set(&options.as_text);
    let as_numbers = decide::set(&options.as_numbers);
    let read = in_order(threads, body.records.len(), work, |at| {
        let name = &names[at + 1];
        let plan = if as_text.contains(name.as_str()) {
            Plan::Labels
        } else if as_numbers.contains(name.as_str()) {
            Plan::SurelyNumbers
        } else {
            Plan::Numbers
        };
        let mut read = across(body, at, plan, first_sample, n_samples);
        read.raw.name.clone_from(name);
        let is_unnamed = all[at + 1].is_empty();
        read.raw.is_unnamed = is_unnamed;
        if !plan.keeps_text() && decide::is_labels(&read.raw, false) {
            let unit = read.raw.unit.take();
            read.raw = across(body, at, Plan::Labels, first_sample, n_samples).raw;
            read.raw.unit = unit;
            read.raw.is_unnamed = is_unnamed;
            read.raw.name.clone_from(name);
        }
        Ok(read)
    })?;
    let heads = &body.names[first_sample..first_sample + n_samples];
    let mut columns = vec![Raw {
        name: names[0].clone(),
        is_unnamed: false,
        unit: None,
        line: body.header_line,
        plan: Plan::Labels,
        values: Vec::new(),
        odd: heads
            .iter()
            .enumerate()
            .filter(|(_, head)| !head.is_empty())
            .map(|(row, head)| label(row as u32, Cow::Owned(head.clone())))
            .collect(),
    }];
    let mut uneven = Uneven::default();
    for across in read {
        if across.is_short {
            uneven.short.push(across.raw.line);
        }
        if across.is_long {
            uneven.long.push(across.raw.line);
        }
        columns.push(across.raw);
    }
    let mut findings = body.findings.clone();
    findings.extend(of_names);
    findings.extend(uneven_rows(body, uneven));
    let lines = heads
        .iter()
        .enumerate()
        .map(|(at, head)| {
            if head.is_empty() {
                (first_sample + at + 1).to_string()
            } else {
                head.clone()
            }
        })
        .collect();
    Ok(Ok(RawTable {
        sheet: None,
        is_typed: false,
        columns,
        n_rows: n_samples,
        lines: RawLines::Columns(lines),
        header_line: body.header_line,
        findings,
    }))
}

fn is_blank_column(body: &Body<'_>, column: usize) -> bool {
    body.records.iter().take(layout::ROWS).all(|&record| {
        let mut is_blank = true;
        let _ = scan(body.manner, record, |index, hit| {
            if index == column {
                is_blank = match hit {
                    Hit::Number { .. } => false,
                    Hit::Other(field) => trimmed(&field.text(body.manner.text)).is_empty(),
                };
            }
        });
        is_blank
    })
}

/// A row of a sideways file.
struct Across<'a> {
    raw: Raw<'a>,
    is_short: bool,
    is_long: bool,
}

fn across<'a>(
    body: &Body<'a>,
    at: usize,
    plan: Plan,
    first_sample: usize,
    n_samples: usize,
) -> Across<'a> {
    let manner = body.manner;
    let record = body.records[at];
    let mut raw = Raw {
        name: String::new(),
        is_unnamed: false,
        unit: None,
        line: record.line,
        plan,
        values: if plan.keeps_text() {
            Vec::new()
        } else {
            vec![f64::NAN; n_samples]
        },
        odd: Vec::new(),
    };
    let mut is_long = false;
    let found = scan(manner, record, |index, hit| {
        let Some(row) = index.checked_sub(first_sample) else {
            if Some(index) == body.unit_column
                && let Hit::Other(field) = hit
            {
                let unit = field.text(manner.text);
                let unit = trimmed(&unit);
                raw.unit = (!unit.is_empty()).then(|| unit.to_owned());
            }
            return;
        };
        let (text, sort) = match hit {
            Hit::Number { value, start, end } => (
                Cow::Borrowed(slice(manner.text, start, end)),
                Sort::Number(value),
            ),
            Hit::Other(field) => {
                let text = field.text(manner.text);
                let sort = sort(&text, manner.mark, manner.grouping);
                (text, sort)
            }
        };
        if sort == Sort::Blank {
            return;
        }
        if row >= n_samples {
            is_long = true;
            return;
        }
        if let (Some(place), Some(value)) = (raw.values.get_mut(row), sort.plain()) {
            *place = value;
        } else {
            raw.odd.push(Odd {
                row: row as u32,
                sort,
                stored: Stored::Text,
                text,
            });
        }
    });
    if is_long {
        raw.values.fill(f64::NAN);
        raw.odd.clear();
    }
    Across {
        raw,
        is_short: found < first_sample + n_samples,
        is_long,
    }
}
