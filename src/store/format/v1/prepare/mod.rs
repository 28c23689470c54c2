//! A Prepare cell in format 1.

mod step;

use crate::store::format::place::{Fault, Fields};
use crate::store::format::v1::{DRAWS_ON, Group, Reading, Writing, read_link};
use crate::study::settings::prepare::Prepare;
use serde_json::Value;

/// Reads the settings of a Prepare cell.
///
/// # Errors
/// The first [`Fault`].
pub fn read(fields: &mut Fields<'_>, reading: &Reading<'_>) -> Result<Prepare, Fault> {
    Ok(Prepare {
        input: read_link(fields, reading)?,
        steps: fields
            .read("steps", |at| at.each(|entry| step::read(&entry)))?
            .unwrap_or_default(),
    })
}

/// Writes the settings of a Prepare cell.
pub fn write(prepare: &Prepare, group: &mut Group, writing: &Writing<'_>) {
    group.put_some(DRAWS_ON, prepare.input.0.map(writing.link));
    let steps = prepare.steps.iter().map(step::write);
    group.put("steps", Value::Array(steps.collect()));
}
