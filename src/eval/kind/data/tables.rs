//! Reading the tables of a Data cell and joining them.

use crate::base::problem::{Place, Problem};
use crate::base::work::Work;
use crate::eval::finding::read_problem;
use crate::eval::kind::{Ended, Inputs};
use crate::study::settings::data::{
    Data, Join, LeadingZeros, LetterCase, OutcomeKind, Sealed, TableSource, UnitMaking,
};
use crate::table::Table;
use crate::table::column::Column;
use crate::table::digest::{self, Digest};
use crate::table::find::names::unit_of;
use crate::table::finding::Finding;
use crate::table::read::{Options, read};
use crate::table::samples::{self, JoinReport, JoinRule};

/// The tables of a cell, read and joined, and all that was noticed.
#[derive(Debug)]
pub struct Joined {
    /// The joined table.
    pub table: Table,
    /// How many columns of it come from the first table.
    pub n_first: usize,
    /// What was noticed in each table, in their order.
    pub findings: Vec<Finding>,
    /// What each table was read as.
    pub sources: Vec<SourceReport>,
    /// What each join found.
    pub joins: Vec<(TableSource, JoinReport)>,
}

/// What a table was read as.
#[derive(Debug)]
pub struct SourceReport {
    /// The file's name.
    pub file: String,
    /// Its size.
    pub bytes: usize,
    /// The SHA-256 of its bytes.
    pub hash: String,
    /// The day on which the bytes were taken in, where it was told.
    pub taken_on: String,
    /// The digest of the table as read, whatever its form.
    pub table: Digest,
    /// The sheet, of a workbook.
    pub sheet: String,
    /// Every interpretation.
    pub used: Options,
    /// How many rows and columns the table has, samples down the rows.
    pub shape: (usize, usize),
}

/// Reads and joins the tables of a cell.
///
/// # Errors
/// When there is no table, a source is not on the shelf, a file holds no table, or two tables
/// have no column to be joined on.
pub fn read_and_join(
    settings: &Data,
    inputs: &Inputs<'_>,
    work: &Work<'_>,
) -> Result<Joined, Ended> {
    if settings.tables.is_empty() {
        return Err(Problem::new("no-table", "No table has been chosen yet.")
            .mend("Choose a file with a table.")
            .into());
    }
    let mut joined: Option<Joined> = None;
    let n_tables = settings.tables.len() as f32;
    for (at, source) in settings.tables.iter().enumerate() {
        let bar = work.part(at as f32 / n_tables..(at + 1) as f32 / n_tables);
        let bytes = inputs.shelf().get(&source.source).ok_or_else(|| {
            Problem::new(
                "source-missing",
                format!("The table “{}” is not in the study.", source.file),
            )
            .at(Place::file(&source.file))
            .mend("Choose the file again.")
        })?;
        let options = options(source, settings);
        let reading = read(bytes, &source.file, &options, inputs.threads, &bar)?
            .map_err(|error| read_problem(&error, &source.file))?;
        let mut reading = reading;
        for finding in &mut reading.findings {
            finding.file = Some(source.file.clone());
        }
        let report = SourceReport {
            file: source.file.clone(),
            bytes: bytes.len(),
            hash: source.source.hex().to_owned(),
            taken_on: source.taken_on.clone().unwrap_or_default(),
            table: digest::of_table(
                reading.table.n_rows(),
                &digest::of_columns_in(&reading.table, inputs.threads, &bar)?,
            ),
            sheet: reading.used.sheet.clone().unwrap_or_default(),
            used: reading.used.clone(),
            shape: (reading.table.n_rows(), reading.table.columns().len()),
        };
        joined = Some(match joined {
            None => Joined {
                n_first: reading.table.columns().len(),
                table: with_units(reading.table, settings)?,
                findings: reading.findings,
                sources: vec![report],
                joins: Vec::new(),
            },
            Some(before) => join(before, source, reading.table, reading.findings, report)?,
        });
    }
    Ok(joined.expect("there is at least one table"))
}

/// The table with a column of units made from the sample names, where that is wished for.
///
/// # Errors
/// When the names are in no column, or the column to be made is there already.
pub fn with_units(mut table: Table, settings: &Data) -> Result<Table, Problem> {
    let (Some(unit), UnitMaking::FromNames) = (&settings.unit, settings.unit_making) else {
        return Ok(table);
    };
    let Some(names) = settings
        .sample_name
        .as_ref()
        .and_then(|name| table.column(name))
    else {
        return Err(Problem::new(
            "units-without-names",
            format!("“{unit}” should be made from the sample names, but no column names them."),
        )
        .mend("Choose the column that names the samples."));
    };
    if table.column(unit).is_some() {
        return Err(Problem::new(
            "unit-is-there",
            format!("“{unit}” should be made from the sample names, but the table has it."),
        )
        .mend("Take the unit from the table, or call the one that is made otherwise."));
    }
    let units = names
        .labels()
        .iter()
        .map(|name| name.as_deref().map(|name| unit_of(name).to_owned()))
        .collect();
    table.add(vec![Column::texts(unit, units)], vec![(0, 0)]);
    Ok(table)
}

fn join(
    mut before: Joined,
    source: &TableSource,
    table: Table,
    findings: Vec<Finding>,
    report: SourceReport,
) -> Result<Joined, Ended> {
    let Some(keys) = &source.join else {
        return Err(Problem::new(
            "no-join",
            format!(
                "It is not said on which column “{}” is joined.",
                source.file
            ),
        )
        .at(Place::file(&source.file))
        .mend("Choose a column of each table that names the same things.")
        .into());
    };
    let missing = |column: &str, file: &str| {
        Problem::new(
            "no-such-column",
            format!("The column “{column}” to join on is not in the table."),
        )
        .at(Place::file(file))
        .mend("Choose a column of this table.")
    };
    if before.table.column(&keys.left).is_none() {
        return Err(missing(&keys.left, &before.sources[0].file).into());
    }
    if table.column(&keys.right).is_none() {
        return Err(missing(&keys.right, &source.file).into());
    }
    let (table, join_report) =
        samples::join(&before.table, &keys.left, &table, &keys.right, &rule(keys)).map_err(
            |error| {
                Problem::new(
                    "join",
                    format!(
                        "“{}” cannot be joined: {}",
                        source.file,
                        crate::eval::finding::join_error(&error)
                    ),
                )
                .at(Place::file(&source.file))
                .mend("Choose other columns to join on, or mend the table.")
            },
        )?;
    before.table = table;
    before.findings.extend(findings);
    before.sources.push(report);
    before.joins.push((source.clone(), join_report));
    Ok(before)
}

/// The rule by which names are matched.
#[must_use]
pub fn rule(join: &Join) -> JoinRule {
    JoinRule {
        case: match join.case {
            LetterCase::Distinct => samples::LetterCase::Distinct,
            LetterCase::Folded => samples::LetterCase::Folded,
        },
        zeros: match join.zeros {
            LeadingZeros::Kept => samples::LeadingZeros::Kept,
            LeadingZeros::Ignored => samples::LeadingZeros::Ignored,
        },
    }
}

/// How a table is read: what the settings say, and which columns are names or numbers because of
/// their roles.
pub fn options(source: &TableSource, settings: &Data) -> Options {
    let mut as_text: Vec<String> = settings.as_text.clone();
    as_text.extend(settings.sample_name.clone());
    as_text.extend(settings.unit.clone());
    as_text.extend(settings.batch.clone());
    for join in settings
        .tables
        .iter()
        .filter_map(|table| table.join.as_ref())
    {
        as_text.push(join.left.clone());
        as_text.push(join.right.clone());
    }
    if let Sealed::Where { column, .. } = &settings.sealed {
        as_text.push(column.clone());
    }
    let mut as_numbers: Vec<String> = settings.as_numbers.clone();
    as_numbers.extend(settings.order.clone());
    as_numbers.extend(settings.weight.clone());
    if let Some(outcome) = &settings.outcome {
        match &outcome.kind {
            OutcomeKind::Measured => as_numbers.push(outcome.column.clone()),
            OutcomeKind::Count { exposure } => {
                as_numbers.push(outcome.column.clone());
                as_numbers.extend(exposure.clone());
            }
            OutcomeKind::Time { event } => {
                as_numbers.push(outcome.column.clone());
                as_text.push(event.clone());
            }
            OutcomeKind::YesNo { .. } | OutcomeKind::Classes => {
                as_text.push(outcome.column.clone());
            }
        }
    }
    // A column may have two roles, such as batch and order; then it is kept as it is written.
    as_numbers.retain(|name| !as_text.contains(name));
    Options {
        sheet: source.sheet.clone(),
        encoding: source.encoding,
        delimiter: source.delimiter,
        decimal: source.decimal,
        grouping: source.grouping,
        header_row: source.header_row,
        units_row: source.units_row,
        orientation: source.orientation,
        missing_codes: source.missing_codes.clone(),
        as_text,
        as_numbers,
    }
}
