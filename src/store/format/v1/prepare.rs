//! A Prepare cell in format 1.

use crate::store::format::place::{At, Fault, Fields};
use crate::store::format::v1::{DRAWS_ON, Group, Reading, Writing, read_link};
use crate::study::settings::prepare::{Prepare, Step};
use serde_json::Value;

/// Reads the settings of a Prepare cell.
///
/// # Errors
/// The first [`Fault`].
pub fn read(fields: &mut Fields<'_>, reading: &Reading<'_>) -> Result<Prepare, Fault> {
    Ok(Prepare {
        input: read_link(fields, reading)?,
        steps: fields
            .read("steps", |at| at.each(|entry| read_step(&entry)))?
            .unwrap_or_default(),
    })
}

/// Writes the settings of a Prepare cell.
pub fn write(prepare: &Prepare, group: &mut Group, writing: &Writing<'_>) {
    group.put_some(DRAWS_ON, prepare.input.0.map(writing.link));
    let steps = prepare.steps.iter().map(write_step);
    group.put("steps", Value::Array(steps.collect()));
}

const NAMES: [&str; 11] = [
    "log",
    "standard-normal-variate",
    "savitzky-golay",
    "detrend",
    "scatter-correction",
    "missing-share-filter",
    "near-constant-filter",
    "median-imputation",
    "below-limit",
    "center",
    "unit-variance",
];

/// A step without numbers may be written as its name alone.
fn read_step(at: &At<'_>) -> Result<Step, Fault> {
    if at.value().is_string() {
        return match at.text()?.as_str() {
            "standard-normal-variate" => Ok(Step::StandardNormalVariate),
            "scatter-correction" => Ok(Step::ScatterCorrection),
            "median-imputation" => Ok(Step::MedianImputation),
            "center" => Ok(Step::Center),
            "unit-variance" => Ok(Step::UnitVariance),
            name if NAMES.contains(&name) => Err(at.fault(
                &format!("The step “{name}” has numbers that are not given here."),
                &format!("Write it as a group of fields, beginning with \"step\": \"{name}\"."),
            )),
            _ => Err(at.not_among(&NAMES)),
        };
    }
    let mut fields = at.fields()?;
    let name = fields.need("step")?;
    let step = match name.text()?.as_str() {
        "log" => Step::Log {
            offset: fields.need("offset")?.real()?,
        },
        "standard-normal-variate" => Step::StandardNormalVariate,
        "savitzky-golay" => Step::SavitzkyGolay {
            window: fields.need("window")?.count()?,
            degree: fields.need("degree")?.count()?,
            derivative: fields.need("derivative")?.count()?,
        },
        "detrend" => Step::Detrend {
            degree: fields.need("degree")?.count()?,
        },
        "scatter-correction" => Step::ScatterCorrection,
        "missing-share-filter" => Step::MissingShareFilter {
            most: fields.need("most")?.real()?,
        },
        "near-constant-filter" => Step::NearConstantFilter {
            least: fields.need("least")?.real()?,
        },
        "median-imputation" => Step::MedianImputation,
        "below-limit" => Step::BelowLimit {
            share: fields.need("share")?.real()?,
        },
        "center" => Step::Center,
        "unit-variance" => Step::UnitVariance,
        _ => return Err(name.not_among(&NAMES)),
    };
    fields.done();
    Ok(step)
}

fn write_step(step: &Step) -> Value {
    let mut group = Group::default();
    match step {
        Step::StandardNormalVariate => return "standard-normal-variate".into(),
        Step::ScatterCorrection => return "scatter-correction".into(),
        Step::MedianImputation => return "median-imputation".into(),
        Step::Center => return "center".into(),
        Step::UnitVariance => return "unit-variance".into(),
        Step::Log { offset } => {
            group.put("step", "log");
            group.put("offset", offset.get());
        }
        Step::SavitzkyGolay {
            window,
            degree,
            derivative,
        } => {
            group.put("step", "savitzky-golay");
            group.put("window", *window);
            group.put("degree", *degree);
            group.put("derivative", *derivative);
        }
        Step::Detrend { degree } => {
            group.put("step", "detrend");
            group.put("degree", *degree);
        }
        Step::MissingShareFilter { most } => {
            group.put("step", "missing-share-filter");
            group.put("most", most.get());
        }
        Step::NearConstantFilter { least } => {
            group.put("step", "near-constant-filter");
            group.put("least", least.get());
        }
        Step::BelowLimit { share } => {
            group.put("step", "below-limit");
            group.put("share", share.get());
        }
    }
    group.value()
}
