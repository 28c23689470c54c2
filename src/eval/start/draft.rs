//! The Data cell as it is wished for, before a table has been read.

use crate::base::problem::Problem;
use crate::eval::start::Wishes;
use crate::study::settings::data::{
    Data, Join, LeadingZeros, LetterCase, Outcome, OutcomeKind, TableSource,
};
use crate::study::settings::said::said;

/// What is wished for, as settings.
#[derive(Debug)]
pub struct Draft {
    /// The settings. A join whose column nobody named has a blank one.
    pub data: Data,
    /// The settings by which tables are read: without an outcome whose kind is still to be seen.
    pub reading: Data,
    /// What sort of outcome is wished for.
    pub kind: Option<OutcomeKind>,
}

/// The wishes as settings.
///
/// # Errors
/// A [`Problem`] when a line says nothing that can be set.
pub fn draft(mut tables: Vec<TableSource>, wishes: &Wishes) -> Result<Draft, Problem> {
    for (table, options) in tables.iter_mut().zip(&wishes.reading) {
        table.sheet.clone_from(&options.sheet);
        table.encoding = options.encoding;
        table.delimiter = options.delimiter;
        table.decimal = options.decimal;
        table.grouping = options.grouping;
        table.header_row = options.header_row;
        table.units_row = options.units_row;
        table.orientation = options.orientation;
        table.missing_codes.clone_from(&options.missing_codes);
    }
    if let Some(first) = tables.first_mut() {
        first.orientation = wishes.orientation.or(first.orientation);
        if wishes.sheet.is_some() {
            first.sheet.clone_from(&wishes.sheet);
        }
    }
    for table in &mut tables {
        table.taken_on.clone_from(&wishes.date);
    }
    for table in tables.iter_mut().skip(1) {
        table.join = Some(Join {
            left: String::new(),
            right: String::new(),
            case: LetterCase::Folded,
            zeros: LeadingZeros::Kept,
        });
    }
    let asked = wishes.kind.clone();
    let mut data = Data {
        tables,
        outcome: Some(Outcome {
            column: wishes.outcome.clone(),
            kind: asked.clone().unwrap_or(OutcomeKind::Measured),
            unit: None,
            reference_error: None,
        }),
        sample_name: wishes.samples.clone(),
        unit: wishes.unit.clone(),
        unit_making: wishes.unit_making,
        batch: wishes.batch.clone(),
        order: wishes.order.clone(),
        weight: wishes.weight.clone(),
        covariates: wishes.covariates.clone(),
        ignored: wishes.ignored.clone(),
        ..Data::default()
    };
    for line in &wishes.said {
        data = said(&data, line)?;
    }
    let said_kind = data.outcome.as_ref().map(|outcome| &outcome.kind);
    let kind = asked.or_else(|| {
        said_kind
            .filter(|kind| **kind != OutcomeKind::Measured)
            .cloned()
    });
    let mut reading = data.clone();
    if kind.is_none() {
        reading.outcome = None;
    }
    // A blank join names no column.
    for table in &mut reading.tables {
        if table.join.as_ref().is_some_and(|join| join.left.is_empty()) {
            table.join = None;
        }
    }
    Ok(Draft {
        data,
        reading,
        kind,
    })
}
