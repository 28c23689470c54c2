//! What is to be noticed about a table once the roles of its columns are known.

pub mod columns;
pub mod design;
pub mod likeness;
pub mod names;
pub mod near;
pub mod normalized;

use crate::base::thread::Threads;
use crate::base::work::{Cancelled, Work};
use crate::table::Table;
use crate::table::finding::Finding;
use std::borrow::Cow;

/// The roles of columns, by name; predictors by position; and the samples that count.
#[derive(Clone, Debug, Default)]
pub struct Roles<'a> {
    /// The rows of the table that are looked at: the ones that were not excluded.
    pub rows: &'a [usize],
    /// The column of sample names.
    pub sample_name: Option<&'a str>,
    /// The column of units (samples kept together).
    pub unit: Option<&'a str>,
    /// The column of batches.
    pub batch: Option<&'a str>,
    /// The order of measurement.
    pub order: Option<&'a str>,
    /// The outcome.
    pub outcome: Option<&'a str>,
    /// The predictors, as positions of columns.
    pub predictors: &'a [usize],
}

/// Everything that is to be noticed, in the order: samples, columns, design.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn with_roles(
    table: &Table,
    roles: &Roles<'_>,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Vec<Finding>, Cancelled> {
    let is_whole = roles.rows.iter().copied().eq(0..table.n_rows());
    let table = if is_whole {
        Cow::Borrowed(table)
    } else {
        Cow::Owned(table.take(roles.rows))
    };
    let table = table.as_ref();
    let position = |name: Option<&str>| name.and_then(|name| table.position(name));
    let mut findings = Vec::new();
    if let Some(samples) = position(roles.sample_name) {
        findings.extend(names::repeated(table, samples));
        findings.extend(names::unnamed(table, samples));
        if roles.unit.is_none() {
            findings.extend(names::repeats(table, samples));
        }
    }
    findings.extend(near::find(table, roles, threads, &work.part(0.0..0.6))?);
    findings.extend(columns::find(
        table,
        roles.predictors,
        &work.part(0.6..0.7),
    )?);
    findings.extend(normalized::find(
        table,
        roles.predictors,
        &work.part(0.7..0.8),
    )?);
    if let Some(outcome) = position(roles.outcome) {
        findings.extend(likeness::find(
            table,
            outcome,
            roles.predictors,
            &work.part(0.8..1.0),
        )?);
        if let Some(batch) = position(roles.batch) {
            findings.extend(design::batch(table, outcome, batch));
        }
        if let Some(order) = position(roles.order) {
            findings.extend(design::order(table, outcome, order));
        }
    }
    Ok(findings)
}

#[cfg(test)]
mod tests;
