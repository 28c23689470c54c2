//! From tables and wishes to the settings of a Data cell: what nobody said is taken from the
//! tables, and said in a note.

use crate::base::number::{self, Precision};
use crate::base::problem::{Place, Problem};
use crate::eval::kind::data::{rule, with_units};
use crate::eval::start::Wishes;
use crate::eval::start::draft::Draft;
use crate::eval::start::kind::{event_column, guess_kind, rarest, with_event};
use crate::study::settings::data::{
    ColumnRange, Data, Exclusion, Join, LeadingZeros, LetterCase, OutcomeSeen, TableSource,
    UnitMaking,
};
use crate::table::Table;
use crate::table::axis;
use crate::table::column::{Column, Value, Values};
use crate::table::guess;
use crate::table::pick::{self, PickError};
use crate::table::read::{Options, Reading};
use std::collections::BTreeSet;
use std::sync::Arc;

/// A table that has been read, with how it was read written down.
pub struct ReadTable {
    /// The source.
    pub source: TableSource,
    /// The table.
    pub table: Table,
}

impl ReadTable {
    /// A table that has been read.
    pub fn new(source: &TableSource, reading: Reading) -> Self {
        Self {
            source: written_down(source, &reading.used),
            table: reading.table,
        }
    }
}

/// What of the tables decides on the rest of the study.
pub struct Shape {
    /// How many independent things there are.
    pub n_units: usize,
    /// Of how many independent samples the rarest class is, or how many had the event.
    pub n_rarest: Option<usize>,
    /// Whether values are missing.
    pub has_gaps: bool,
    /// Whether values are only known by a limit.
    pub has_limits: bool,
    /// Whether the predictors are a spectrum.
    pub is_spectrum: bool,
}

/// The source with every interpretation written down.
fn written_down(source: &TableSource, used: &Options) -> TableSource {
    TableSource {
        sheet: used.sheet.clone(),
        encoding: used.encoding,
        delimiter: used.delimiter,
        decimal: used.decimal,
        grouping: used.grouping,
        header_row: used.header_row,
        units_row: used.units_row,
        orientation: used.orientation,
        missing_codes: used.missing_codes.clone(),
        ..source.clone()
    }
}

/// The settings of the Data cell, and what of the tables decides on the rest of the study.
///
/// # Errors
/// A [`Problem`] when a column that was named does not exist, or a table cannot be joined.
pub fn settle(
    mut tables: Vec<ReadTable>,
    wishes: &Wishes,
    draft: Draft,
    notes: &mut Vec<String>,
) -> Result<(Data, Shape), Problem> {
    let Draft { mut data, kind, .. } = draft;
    let outcome = wishes.outcome.as_str();
    if data.sample_name.is_none() {
        data.sample_name = sample_names(&tables[0], &data, outcome, notes);
    }
    tables[0].table = with_units(std::mem::take(&mut tables[0].table), &data)?;
    for at in 0..tables.len() {
        let mut source = tables[at].source.clone();
        if let Some(draft) = &source.join
            && draft.left.is_empty()
        {
            source.join = Some(join(&tables[..at], &tables[at], &data, draft, notes)?);
        }
        data.tables[at] = source;
    }
    let find = |name: &str| tables.iter().find_map(|read| read.table.column(name));
    let roles = [
        Some(&wishes.outcome),
        data.sample_name.as_ref(),
        data.unit.as_ref(),
        data.batch.as_ref(),
        data.order.as_ref(),
        data.weight.as_ref(),
    ];
    let named = roles
        .into_iter()
        .flatten()
        .chain(&data.covariates)
        .chain(&data.ignored);
    for name in named {
        if find(name).is_none() {
            return Err(no_such_column(name, &tables));
        }
    }
    let column = find(outcome).expect("it was just found");
    let kind = kind.unwrap_or_else(|| guess_kind(column, notes));
    let kind = with_event(kind, column, notes);
    if let Some(event) = event_column(&kind)
        && find(event).is_none()
    {
        return Err(no_such_column(event, &tables));
    }
    let n_rarest = rarest(&kind, outcome, data.unit.as_deref(), &tables);
    if let Some(settings) = &mut data.outcome {
        settings.kind = kind;
        if settings.unit.is_none() {
            settings.unit.clone_from(&column.unit);
        }
    }
    let predictors = if wishes.predictors.is_empty() && data.predictors.is_empty() {
        predictor_columns(&tables, &taken(&data, outcome), notes)
    } else {
        chosen(&tables, &data, wishes, notes)?
    };
    if data.predictors.is_empty() {
        data.predictors = ranges(&tables, &predictors);
    }
    let shape = Shape {
        n_rarest,
        ..shape(&tables, &predictors, &data)
    };
    exclude_without_outcome(&mut data, &tables[0], notes);
    propose(&tables[0].table, &data, notes);
    Ok((data, shape))
}

/// The columns that have another role than predictor.
fn taken<'a>(data: &'a Data, outcome: &'a str) -> BTreeSet<&'a str> {
    let roles = [
        Some(outcome),
        data.sample_name.as_deref(),
        data.unit.as_deref(),
        data.batch.as_deref(),
        data.order.as_deref(),
        data.weight.as_deref(),
        data.outcome
            .as_ref()
            .and_then(|outcome| event_column(&outcome.kind)),
    ];
    let joins = data.tables.iter().filter_map(|table| table.join.as_ref());
    roles
        .into_iter()
        .flatten()
        .chain(data.covariates.iter().map(String::as_str))
        .chain(data.ignored.iter().map(String::as_str))
        .chain(joins.map(|join| join.left.as_str()))
        .collect()
}

/// The predictors that were asked for: the table's number and the positions of its columns.
fn chosen(
    tables: &[ReadTable],
    data: &Data,
    wishes: &Wishes,
    notes: &mut Vec<String>,
) -> Result<(usize, Vec<usize>), Problem> {
    let ranges = data.predictors.iter().map(|range| {
        if range.first == range.last {
            range.first.clone()
        } else {
            format!("{} … {}", range.first, range.last)
        }
    });
    let asked: Vec<String> = ranges.chain(wishes.predictors.iter().cloned()).collect();
    let taken = taken(data, &wishes.outcome);
    let mut refused = None;
    for (at, read) in tables.iter().enumerate() {
        let columns = read.table.columns();
        let names: Vec<&str> = columns.iter().map(|column| column.name.as_str()).collect();
        let takes = |at: usize| columns[at].is_numeric() && !taken.contains(names[at]);
        let picked: Result<Vec<usize>, PickError> = asked
            .iter()
            .map(|text| pick::columns(&names, &takes, text))
            .collect::<Result<Vec<_>, _>>()
            .map(|picked| picked.into_iter().flatten().collect());
        match picked {
            Ok(mut picked) => {
                picked.sort_unstable();
                picked.dedup();
                notes.push(format!(
                    "{} columns are predictors.",
                    number::text(picked.len() as f64, Precision::Whole)
                ));
                return Ok((at, picked));
            }
            Err(error) => refused = refused.or(Some(error)),
        }
    }
    Err(not_picked(
        &refused.expect("there is at least one table"),
        tables,
    ))
}

fn not_picked(error: &PickError, tables: &[ReadTable]) -> Problem {
    let problem = |found: String| {
        Problem::new("no-such-predictors", found).at(Place::file(&tables[0].source.file))
    };
    match error {
        PickError::Nothing(asked) => problem(format!("“{asked}” chooses no column of numbers."))
            .mend(
                "Write a name, a range (first … last), a pattern with * and ?, or a stretch of a \
                 numeric axis (900 … 1250 nm).",
            ),
        PickError::Backwards { first, last } => {
            problem(format!("“{last}” stands before “{first}” in the table."))
                .mend("Write the ends of the range the other way round.")
        }
        PickError::Several { asked, axes } => problem(format!(
            "“{asked}” fits several sorts of names: “{}”.",
            axes.join("”, “")
        ))
        .mend("Write the unit or the beginning of the names at both ends."),
    }
}

/// What the tables seem to say about roles that nobody gave. It is only said.
fn propose(first: &Table, data: &Data, notes: &mut Vec<String>) {
    let proposals = guess::roles(first);
    if data.unit.is_none() {
        if let Some(unit) = &proposals.unit {
            notes.push(format!(
                "“{0}” looks like the unit to which several samples belong; to keep them \
                 together, say --unit \"{0}\".",
                unit.column
            ));
        } else if let Some(n) = proposals.units_from_names {
            notes.push(format!(
                "The sample names look like repeats of {} units; to keep them together, say \
                 --unit-from-names.",
                number::text(n as f64, Precision::Whole)
            ));
        }
    }
    if data.batch.is_none()
        && let Some(batch) = proposals.batches.first()
    {
        notes.push(format!(
            "“{0}” looks like a batch; to see what it does, say --batch \"{0}\".",
            batch.column
        ));
    }
    if data.order.is_none()
        && let Some(order) = &proposals.order
        && data.batch.as_ref() != Some(&order.column)
    {
        notes.push(format!(
            "“{0}” looks like the order of measurement; to watch for drift, say --set \"order of \
             measurement = {0}\".",
            order.column
        ));
    }
    if proposals.blocks.len() > 1 {
        let blocks: Vec<String> = proposals
            .blocks
            .iter()
            .take(4)
            .map(|block| {
                format!(
                    "“{}…” ({})",
                    block.prefix,
                    number::text(block.columns.len() as f64, Precision::Whole)
                )
            })
            .collect();
        notes.push(format!(
            "The predictors form {} blocks: {}; --predictors chooses among them, for instance by \
             \"{}*\".",
            number::text(proposals.blocks.len() as f64, Precision::Whole),
            blocks.join(", "),
            proposals.blocks[0].prefix
        ));
    }
}

fn no_such_column(name: &str, tables: &[ReadTable]) -> Problem {
    let files: Vec<&str> = tables
        .iter()
        .map(|read| read.source.file.as_str())
        .collect();
    let some: Vec<&str> = tables
        .iter()
        .flat_map(|read| read.table.columns().iter().take(6))
        .map(|column| column.name.as_str())
        .take(8)
        .collect();
    Problem::new(
        "missing-outcome",
        format!("There is no column “{name}” in the tables."),
    )
    .at(Place::file(&files.join(", ")))
    .mend(format!(
        "Name a column that is there; the first are “{}”.",
        some.join("”, “")
    ))
}

/// The columns on which a table is joined: the wished ones if it has them, else the column that
/// shares its name with one of the tables before and the most values with it.
fn join(
    before: &[ReadTable],
    table: &ReadTable,
    data: &Data,
    draft: &Join,
    notes: &mut Vec<String>,
) -> Result<Join, Problem> {
    let mut best: Option<(usize, String, LeadingZeros)> = None;
    let wished = [data.unit.as_ref(), data.sample_name.as_ref()];
    let names: Vec<&String> = wished
        .into_iter()
        .flatten()
        .chain(table.table.columns().iter().map(|column| &column.name))
        .collect();
    for name in names {
        let (Some(right), Some(left)) = (
            table.table.column(name),
            before.iter().find_map(|read| read.table.column(name)),
        ) else {
            continue;
        };
        // Zeros in front are passed over only where nothing matches with them.
        for zeros in [draft.zeros, LeadingZeros::Ignored] {
            let rule = rule(&Join {
                zeros,
                ..draft.clone()
            });
            let texts = |column: &Column| -> BTreeSet<String> {
                column
                    .labels()
                    .iter()
                    .flatten()
                    .map(|label| rule.fold(label))
                    .collect()
            };
            let shared = texts(left).intersection(&texts(right)).count();
            if shared > 0 && best.as_ref().is_none_or(|(most, ..)| shared > *most) {
                best = Some((shared, name.clone(), zeros));
            }
            if shared > 0 {
                break;
            }
        }
    }
    let Some((_, name, zeros)) = best else {
        return Err(Problem::new(
            "no-join",
            format!(
                "“{}” shares no column of names with the tables before it.",
                table.source.file
            ),
        )
        .at(Place::file(&table.source.file))
        .mend("Give the column that names the same things the same head in both tables."));
    };
    notes.push(format!(
        "“{}” is joined on the column “{name}”; blanks do not count, case {}, zeros in front {}.",
        table.source.file,
        match draft.case {
            LetterCase::Folded => "does not",
            LetterCase::Distinct => "does",
        },
        match zeros {
            LeadingZeros::Kept => "do",
            LeadingZeros::Ignored => "do not",
        }
    ));
    Ok(Join {
        left: name.clone(),
        right: name,
        case: draft.case,
        zeros,
    })
}

/// The text of a value as it is compared.
pub fn key_text(column: &Column, row: usize) -> Option<String> {
    match column.value(row) {
        Value::Text(text) => Some(text.trim().to_lowercase()),
        Value::Number(value) => Some(number::text(value, Precision::Full)),
        Value::Missing | Value::BelowLimit(_) | Value::AboveLimit(_) => None,
    }
}

/// The first column of labels in the first table in which every value stands once.
fn sample_names(
    first: &ReadTable,
    data: &Data,
    outcome: &str,
    notes: &mut Vec<String>,
) -> Option<String> {
    let column = first.table.columns().iter().take(20).find(|column| {
        let is_unit =
            Some(&column.name) == data.unit.as_ref() && data.unit_making == UnitMaking::InColumn;
        if column.name == outcome || is_unit {
            return false;
        }
        let Values::Texts(texts) = &column.values else {
            return false;
        };
        let distinct: BTreeSet<&String> = texts.iter().flatten().collect();
        distinct.len() == texts.len()
    })?;
    notes.push(format!("Samples are named by “{}”.", column.name));
    Some(column.name.clone())
}

/// The predictors: numeric columns without another role of the table that has most of them. For
/// each the table's number and the column's position.
fn predictor_columns(
    tables: &[ReadTable],
    taken: &BTreeSet<&str>,
    notes: &mut Vec<String>,
) -> (usize, Vec<usize>) {
    let numeric = |table: &Table| -> Vec<usize> {
        table
            .columns()
            .iter()
            .enumerate()
            .filter(|(_, column)| {
                matches!(column.values, Values::Numbers(_)) && !taken.contains(column.name.as_str())
            })
            .map(|(at, _)| at)
            .collect()
    };
    let mut best = (0, numeric(&tables[0].table));
    for (at, read) in tables.iter().enumerate().skip(1) {
        let columns = numeric(&read.table);
        if columns.len() > best.1.len() {
            best = (at, columns);
        }
    }
    // A long run of columns along one axis is the spectrum; what stands beside it is not.
    let table = &tables[best.0].table;
    let runs = axis_runs(table, &best.1);
    if let Some(run) = runs.into_iter().max_by_key(Vec::len)
        && run.len() >= 30
        && run.len() * 2 > best.1.len()
        && run.len() < best.1.len()
    {
        let left: Vec<&str> = best
            .1
            .iter()
            .filter(|at| !run.contains(at))
            .map(|&at| table.columns()[at].name.as_str())
            .collect();
        notes.push(format!(
            "The predictors are “{}” to “{}”; “{}” stand beside them and are left out.",
            table.columns()[run[0]].name,
            table.columns()[run[run.len() - 1]].name,
            left.join("”, “")
        ));
        best.1 = run;
    }
    best
}

/// Runs of neighbouring columns whose names lie along one axis.
fn axis_runs(table: &Table, columns: &[usize]) -> Vec<Vec<usize>> {
    let mut runs: Vec<Vec<usize>> = Vec::new();
    let stem = |at: usize| -> (String, String) {
        let name = &table.columns()[at].name;
        let begin = name
            .find(|c: char| c.is_ascii_digit())
            .unwrap_or(name.len());
        let end = name
            .rfind(|c: char| c.is_ascii_digit())
            .map_or(begin, |end| end + 1);
        (name[..begin].to_owned(), name[end..].to_owned())
    };
    for &at in columns {
        match runs.last_mut() {
            Some(run) if run.last() == Some(&(at - 1)) && stem(at) == stem(at - 1) => run.push(at),
            Some(_) | None => runs.push(vec![at]),
        }
    }
    runs.retain(|run| {
        let names: Vec<&str> = run
            .iter()
            .map(|&at| table.columns()[at].name.as_str())
            .collect();
        run.len() >= 3 && axis::of_names(&names).is_some()
    });
    runs
}

fn ranges(tables: &[ReadTable], predictors: &(usize, Vec<usize>)) -> Vec<ColumnRange> {
    axis::ranges(&tables[predictors.0].table, &predictors.1)
        .into_iter()
        .map(|range| ColumnRange {
            first: range.first,
            last: range.last,
        })
        .collect()
}

fn shape(tables: &[ReadTable], predictors: &(usize, Vec<usize>), data: &Data) -> Shape {
    let table = &tables[predictors.0].table;
    let mut has_gaps = false;
    let mut has_limits = false;
    for &at in &predictors.1 {
        if let Values::Numbers(numbers) = &table.columns()[at].values {
            has_limits |= !numbers.censored().is_empty();
            let n_gaps = numbers
                .values()
                .iter()
                .filter(|value| value.is_nan())
                .count();
            has_gaps |= n_gaps > numbers.censored().len();
        }
    }
    let names: Vec<&str> = predictors
        .1
        .iter()
        .map(|&at| table.columns()[at].name.as_str())
        .collect();
    let is_spectrum = names.len() >= 50
        && axis::of_names(&names).is_some_and(|axis| {
            axis.is_monotone()
                && axis
                    .unit
                    .as_deref()
                    .is_some_and(|unit| LIGHT.contains(&unit))
        });
    let unit = data.unit.as_deref().or(data.sample_name.as_deref());
    let first = &tables[0].table;
    let n_units = unit
        .and_then(|name| first.column(name))
        .map_or(first.n_rows(), |column| {
            (0..column.len())
                .filter_map(|row| key_text(column, row))
                .collect::<BTreeSet<_>>()
                .len()
        });
    Shape {
        n_units,
        n_rarest: None,
        has_gaps,
        has_limits,
        is_spectrum,
    }
}

/// Units of an axis of light: its tables are spectra.
const LIGHT: [&str; 6] = ["nm", "cm-1", "cm⁻¹", "1/cm", "µm", "um"];

/// Samples of the first table whose outcome stands there and is blank are excluded, recorded.
fn exclude_without_outcome(data: &mut Data, first: &ReadTable, notes: &mut Vec<String>) {
    let Some(outcome) = &data.outcome else { return };
    let Some(column) = first.table.column(&outcome.column) else {
        return;
    };
    let names = data
        .sample_name
        .as_ref()
        .and_then(|name| first.table.column(name));
    let name = |row: usize| match names {
        Some(names) => key_name(names, row),
        None => Some(format!("sample {}", row + 1)),
    };
    let exclusions: Vec<Exclusion> = (0..column.len())
        .filter(|&row| column.value(row) == Value::Missing)
        .filter_map(name)
        .map(|sample| Exclusion {
            sample,
            reason: "The outcome is missing.".to_owned(),
            outcome: OutcomeSeen::Before,
        })
        .collect();
    if !exclusions.is_empty() && exclusions.len() < column.len() {
        notes.push(match exclusions.len() {
            1 => "1 sample without an outcome is excluded, with that reason.".to_owned(),
            n => format!(
                "{} samples without an outcome are excluded, with that reason.",
                number::text(n as f64, Precision::Whole)
            ),
        });
        let mut all = data.exclusions.to_vec();
        all.extend(exclusions.into_iter().filter(|new| {
            !data
                .exclusions
                .iter()
                .any(|known| known.sample == new.sample)
        }));
        data.exclusions = Arc::new(all);
    }
}

/// The text of a value as a name.
pub fn key_name(column: &Column, row: usize) -> Option<String> {
    match column.value(row) {
        Value::Text(text) => Some(text.to_owned()),
        Value::Number(value) => Some(number::text(value, Precision::Full)),
        Value::Missing | Value::BelowLimit(_) | Value::AboveLimit(_) => None,
    }
}
