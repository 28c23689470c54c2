//! A Data cell in format 1, and the tables that Data and Score cells name.

use crate::store::format::place::{At, Fault, Fields};
use crate::store::format::v1::words;
use crate::store::format::v1::{Group, Reading, Writing};
use crate::study::settings::data::{
    ColumnRange, Correction, Data, Exclusion, Join, LeadingZeros, LetterCase, Marked, Outcome,
    OutcomeKind, OutcomeSeen, Sealed, Subject, TableSource, UnitMaking,
};
use crate::study::source::SourceId;
use serde_json::Value;
use std::sync::Arc;

/// Reads the settings of a Data cell.
///
/// # Errors
/// The first [`Fault`].
pub fn read(fields: &mut Fields<'_>, reading: &Reading<'_>) -> Result<Data, Fault> {
    let each = |at: At<'_>| at.each(|entry| read_table(&entry, reading));
    Ok(Data {
        tables: fields.read("tables", each)?.unwrap_or_default(),
        outcome: fields.read("outcome", |at| read_outcome(&at))?,
        predictors: fields
            .read("predictors", |at| at.each(|entry| read_range(&entry)))?
            .unwrap_or_default(),
        sample_name: fields.text("sample-name")?,
        unit: fields.text("unit")?,
        unit_making: fields
            .read("unit-from", |at| at.one_of(words::UNIT_MAKINGS))?
            .unwrap_or_default(),
        batch: fields.text("batch")?,
        order: fields.text("order")?,
        weight: fields.text("weight")?,
        covariates: fields.texts("covariates")?,
        ignored: fields.texts("ignored")?,
        as_text: fields.texts("as-text")?,
        as_numbers: fields.texts("as-numbers")?,
        corrections: Arc::new(
            fields
                .read("corrections", |at| at.each(|entry| read_correction(&entry)))?
                .unwrap_or_default(),
        ),
        exclusions: Arc::new(
            fields
                .read("exclusions", |at| at.each(|entry| read_exclusion(&entry)))?
                .unwrap_or_default(),
        ),
        sealed: fields
            .read("sealed", |at| read_sealed(&at))?
            .unwrap_or_default(),
        quality_control: fields
            .read("quality-control", |at| read_marked(&at))?
            .map(Arc::new),
        subject: fields
            .read("subject", |at| at.one_of(words::SUBJECTS))?
            .unwrap_or_default(),
    })
}

/// Writes the settings of a Data cell. What was left to the reader or is empty is left out.
pub fn write(data: &Data, group: &mut Group, writing: &Writing<'_>) {
    let tables = data.tables.iter().map(|table| write_table(table, writing));
    group.put("tables", Value::Array(tables.collect()));
    let outcome = data.outcome.as_ref().map(write_outcome);
    group.put_some("outcome", outcome);
    group.put_list("predictors", data.predictors.iter().map(write_range));
    group.put_some("sample-name", data.sample_name.clone());
    group.put_some("unit", data.unit.clone());
    if data.unit_making != UnitMaking::InColumn {
        group.put("unit-from", words::unit_making(data.unit_making));
    }
    group.put_some("batch", data.batch.clone());
    group.put_some("order", data.order.clone());
    group.put_some("weight", data.weight.clone());
    group.put_list("covariates", data.covariates.iter().cloned());
    group.put_list("ignored", data.ignored.iter().cloned());
    group.put_list("as-text", data.as_text.iter().cloned());
    group.put_list("as-numbers", data.as_numbers.iter().cloned());
    group.put_list("corrections", data.corrections.iter().map(write_correction));
    group.put_list("exclusions", data.exclusions.iter().map(write_exclusion));
    match &data.sealed {
        Sealed::Nothing => {}
        Sealed::Where { column, values } => {
            let mut sealed = Group::default();
            sealed.put("column", column.clone());
            sealed.put("values", values.clone());
            group.put("sealed", sealed.value());
        }
        Sealed::Listed(names) => {
            let mut sealed = Group::default();
            sealed.put("names", names.clone());
            group.put("sealed", sealed.value());
        }
    }
    if let Some(marked) = &data.quality_control {
        let mut group_of = Group::default();
        group_of.put("column", marked.column.clone());
        group_of.put("values", marked.values.clone());
        group.put("quality-control", group_of.value());
    }
    if data.subject != Subject::Ordinary {
        group.put("subject", words::subject(data.subject));
    }
}

/// Reads how one table is found and read.
///
/// # Errors
/// The first [`Fault`].
pub fn read_table(at: &At<'_>, reading: &Reading<'_>) -> Result<TableSource, Fault> {
    let mut fields = at.fields()?;
    let named = fields.need("file")?.text()?;
    let hash = fields.read("sha256", |at| {
        SourceId::parse(&at.text()?).ok_or_else(|| {
            at.fault(
                "This is not the SHA-256 of a file, which has 64 hexadecimal digits.",
                "Put the right digits there, or leave the field out.",
            )
        })
    })?;
    let (source, file) = (reading.table)(&named, hash);
    let table = TableSource {
        taken_on: fields.text("taken-on")?,
        sheet: fields.text("sheet")?,
        encoding: fields.read("encoding", |at| at.one_of(words::ENCODINGS))?,
        delimiter: fields.read("delimiter", |at| at.one_of(words::DELIMITERS))?,
        decimal: fields.read("decimal-mark", |at| at.one_of(words::DECIMAL_MARKS))?,
        grouping: fields.read("groups-of-digits", |at| at.one_of(words::DIGIT_GROUPS))?,
        header_row: fields
            .read("header-row", |at| at.count())?
            .map(|row| row as usize),
        units_row: fields.read("units-row", |at| at.one_of(words::UNITS_ROWS))?,
        orientation: fields.read("samples-in", |at| at.one_of(words::ORIENTATIONS))?,
        missing_codes: fields.texts("missing-codes")?,
        join: fields.read("join", |at| read_join(&at))?,
        ..TableSource::new(source, &file)
    };
    fields.done();
    Ok(table)
}

/// Writes how one table is found and read.
#[must_use]
pub fn write_table(table: &TableSource, writing: &Writing<'_>) -> Value {
    let mut group = Group::default();
    group.put("file", (writing.file)(table));
    if table.source.is_known() {
        group.put("sha256", table.source.hex());
    }
    group.put_some("taken-on", table.taken_on.clone());
    group.put_some("sheet", table.sheet.clone());
    group.put_some("encoding", table.encoding.map(words::encoding));
    group.put_some("delimiter", table.delimiter.map(words::delimiter));
    group.put_some("decimal-mark", table.decimal.map(words::decimal_mark));
    group.put_some("groups-of-digits", table.grouping.map(words::digit_groups));
    group.put_some("header-row", table.header_row);
    group.put_some("units-row", table.units_row.map(words::units_row));
    group.put_some("samples-in", table.orientation.map(words::orientation));
    group.put_list("missing-codes", table.missing_codes.iter().cloned());
    if let Some(join) = &table.join {
        let mut inner = Group::default();
        inner.put("left", join.left.clone());
        inner.put("right", join.right.clone());
        inner.put("letter-case", words::letter_case(join.case));
        inner.put("leading-zeros", words::leading_zeros(join.zeros));
        group.put("join", inner.value());
    }
    group.value()
}

/// A join may be written as the one column name that both sides share.
fn read_join(at: &At<'_>) -> Result<Join, Fault> {
    if at.value().is_string() {
        let column = at.text()?;
        return Ok(Join {
            left: column.clone(),
            right: column,
            case: LetterCase::Distinct,
            zeros: LeadingZeros::Kept,
        });
    }
    let mut fields = at.fields()?;
    let join = Join {
        left: fields.need("left")?.text()?,
        right: fields.need("right")?.text()?,
        case: fields
            .read("letter-case", |at| at.one_of(words::LETTER_CASES))?
            .unwrap_or(LetterCase::Distinct),
        zeros: fields
            .read("leading-zeros", |at| at.one_of(words::LEADING_ZEROS))?
            .unwrap_or(LeadingZeros::Kept),
    };
    fields.done();
    Ok(join)
}

/// An outcome may be written as the name of a column with a measured quantity.
fn read_outcome(at: &At<'_>) -> Result<Outcome, Fault> {
    if at.value().is_string() {
        return Ok(Outcome {
            column: at.text()?,
            kind: OutcomeKind::Measured,
            unit: None,
            reference_error: None,
        });
    }
    let mut fields = at.fields()?;
    let column = fields.need("column")?.text()?;
    let unit = fields.text("unit")?;
    let reference_error = fields.read("reference-error", |at| at.real())?;
    let kind = match fields.get("kind") {
        None => OutcomeKind::Measured,
        Some(at) => match at.text()?.as_str() {
            "measured" => OutcomeKind::Measured,
            "yes-no" => OutcomeKind::YesNo {
                event: fields.text("event")?,
            },
            "classes" => OutcomeKind::Classes,
            "count" => OutcomeKind::Count {
                exposure: fields.text("exposure")?,
            },
            "time" => OutcomeKind::Time {
                event: fields.need("event")?.text()?,
            },
            _ => return Err(at.not_among(&["measured", "yes-no", "classes", "count", "time"])),
        },
    };
    fields.done();
    Ok(Outcome {
        column,
        kind,
        unit,
        reference_error,
    })
}

fn write_outcome(outcome: &Outcome) -> Value {
    let mut group = Group::default();
    group.put("column", outcome.column.clone());
    match &outcome.kind {
        OutcomeKind::Measured => group.put("kind", "measured"),
        OutcomeKind::YesNo { event } => {
            group.put("kind", "yes-no");
            group.put_some("event", event.clone());
        }
        OutcomeKind::Classes => group.put("kind", "classes"),
        OutcomeKind::Count { exposure } => {
            group.put("kind", "count");
            group.put_some("exposure", exposure.clone());
        }
        OutcomeKind::Time { event } => {
            group.put("kind", "time");
            group.put("event", event.clone());
        }
    }
    group.put_some("unit", outcome.unit.clone());
    group.put_some("reference-error", outcome.reference_error.map(|e| e.get()));
    group.value()
}

/// A range may be written as the name of its only column.
pub(super) fn read_range(at: &At<'_>) -> Result<ColumnRange, Fault> {
    if at.value().is_string() {
        let name = at.text()?;
        return Ok(ColumnRange {
            first: name.clone(),
            last: name,
        });
    }
    let mut fields = at.fields()?;
    let range = ColumnRange {
        first: fields.need("first")?.text()?,
        last: fields.need("last")?.text()?,
    };
    fields.done();
    Ok(range)
}

pub(super) fn write_range(range: &ColumnRange) -> Value {
    let mut group = Group::default();
    group.put("first", range.first.clone());
    group.put("last", range.last.clone());
    group.value()
}

fn read_correction(at: &At<'_>) -> Result<Correction, Fault> {
    let mut fields = at.fields()?;
    let correction = Correction {
        sample: fields.need("sample")?.text()?,
        column: fields.need("column")?.text()?,
        from: fields.need("from")?.text()?,
        to: fields.need("to")?.text()?,
        reason: fields.need("reason")?.text()?,
        outcome: read_seen(&mut fields)?,
    };
    fields.done();
    Ok(correction)
}

fn write_correction(correction: &Correction) -> Value {
    let mut group = Group::default();
    group.put("sample", correction.sample.clone());
    group.put("column", correction.column.clone());
    group.put("from", correction.from.clone());
    group.put("to", correction.to.clone());
    group.put("reason", correction.reason.clone());
    group.put("outcome-seen", words::outcome_seen(correction.outcome));
    group.value()
}

fn read_exclusion(at: &At<'_>) -> Result<Exclusion, Fault> {
    let mut fields = at.fields()?;
    let exclusion = Exclusion {
        sample: fields.need("sample")?.text()?,
        reason: fields.need("reason")?.text()?,
        outcome: read_seen(&mut fields)?,
    };
    fields.done();
    Ok(exclusion)
}

fn write_exclusion(exclusion: &Exclusion) -> Value {
    let mut group = Group::default();
    group.put("sample", exclusion.sample.clone());
    group.put("reason", exclusion.reason.clone());
    group.put("outcome-seen", words::outcome_seen(exclusion.outcome));
    group.value()
}

fn read_seen(fields: &mut Fields<'_>) -> Result<OutcomeSeen, Fault> {
    let seen = fields.read("outcome-seen", |at| at.one_of(words::OUTCOME_SEEN))?;
    Ok(seen.unwrap_or(OutcomeSeen::NotSaid))
}

fn read_marked(at: &At<'_>) -> Result<Marked, Fault> {
    let mut fields = at.fields()?;
    let marked = Marked {
        column: fields.need("column")?.text()?,
        values: fields.need("values")?.each(|value| value.text())?,
    };
    fields.done();
    Ok(marked)
}

fn read_sealed(at: &At<'_>) -> Result<Sealed, Fault> {
    let mut fields = at.fields()?;
    let sealed = match fields.read("names", |at| at.each(|name| name.text()))? {
        Some(names) => Sealed::Listed(names),
        None => Sealed::Where {
            column: fields.need("column")?.text()?,
            values: fields.need("values")?.each(|value| value.text())?,
        },
    };
    fields.done();
    Ok(sealed)
}
