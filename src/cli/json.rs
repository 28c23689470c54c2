//! The stable JSON of `facts --json`.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, FactTable, FactValue, FactValues};
use crate::report::Context;
use serde_json::{Map, Value, json};

/// All facts and caveats of a study.
#[must_use]
pub fn facts(context: &Context<'_>) -> String {
    let cells: Vec<Value> = context
        .study
        .cells()
        .iter()
        .map(|cell| {
            let standing = context.standings.get(cell.id);
            let outcome = standing.outcome;
            let facts: Vec<Value> = outcome
                .iter()
                .flat_map(|o| o.facts.all())
                .map(fact)
                .collect();
            let caveats: Vec<Value> = outcome
                .iter()
                .flat_map(|o| &o.caveats)
                .map(|c| json!({"id": c.id, "severity": c.severity.word(), "text": c.text}))
                .collect();
            let mut value = json!({
                "name": cell.title,
                "kind": cell.settings.kind().name().to_lowercase(),
                "state": standing.state.word(),
                "facts": facts,
                "caveats": caveats,
            });
            if let (Some(failure), Some(object)) = (standing.failure, value.as_object_mut()) {
                let problem = &failure.problem;
                let _ = object.insert(
                    "problem".to_owned(),
                    json!({"code": problem.code.0, "found": problem.found, "mend": problem.mend}),
                );
            }
            value
        })
        .collect();
    let study = json!({
        "study": {
            "title": context.study.title(),
            "looks": context.ledger.looks().len(),
            "sealed set opened": context.ledger.openings().len(),
        },
        "cells": cells,
    });
    serde_json::to_string_pretty(&study).expect("a value of JSON can be written")
}

fn fact(fact: &Fact) -> Value {
    let value = match &fact.value {
        FactValue::Number(number) => number_value(*number, fact.precision),
        FactValue::Text(text) => Value::String(text.clone()),
        FactValue::Table(table) => Value::Array(records(table)),
    };
    json!({"name": fact.name, "value": value, "unit": fact.unit, "text": fact.shown_with_unit()})
}

fn records(table: &FactTable) -> Vec<Value> {
    (0..table.n_rows())
        .map(|row| {
            let fields: Map<String, Value> = table
                .columns
                .iter()
                .map(|column| {
                    let value = match &column.values {
                        FactValues::Numbers(numbers) => {
                            number_value(numbers[row], column.precision)
                        }
                        FactValues::Texts(texts) => Value::String(texts[row].clone()),
                    };
                    (column.name.clone(), value)
                })
                .collect();
            Value::Object(fields)
        })
        .collect()
}

/// A number at full precision, a count as a whole number; what is not known, or without limit, is
/// null.
fn number_value(number: f64, precision: Precision) -> Value {
    /// Up to here every whole number has a double of its own.
    const EXACT: f64 = 9_007_199_254_740_992.0;
    if precision == Precision::Whole && number.fract() == 0.0 && number.abs() <= EXACT {
        return Value::from(number as i64);
    }
    serde_json::Number::from_f64(number).map_or(Value::Null, Value::Number)
}
