//! The answers to the questions, each in one file.

pub mod agreement;
pub mod chosen_again;
pub mod coefficient_trace;
pub mod error_curve;
pub mod ladder;
pub mod least_squares;
pub mod stand_ins;

use crate::base::number::{self, Precision};
use crate::base::real::Real;
use crate::eval::fact::FactTable;
use crate::figure::shape::Choice;
use crate::figure::{Meaning, Tip};
use crate::report::tell::Source;

/// The chosen strength of a figure, with its words.
fn choice(source: &Source<'_>) -> Option<Choice> {
    let fact = source.facts.get("chosen strength")?;
    let at = source.value("chosen strength")?;
    let label = format!("chosen strength {}", fact.shown_with_unit());
    Some(Choice {
        at,
        tip: strength_tip(at, label.clone()),
        label,
    })
}

/// What the pointer is told about a strength.
fn strength_tip(strength: f64, text: String) -> Option<Tip> {
    Real::new(strength).map(|strength| Tip::new(Meaning::Strength(strength), text))
}

/// Tips for each strength of a table, from the texts of its columns.
fn strength_tips(table: &FactTable, columns: &[(&str, &str)]) -> Vec<Tip> {
    let strengths = table.numbers("strength");
    let tip = |(row, strength): (usize, &f64)| {
        let mut text = format!(
            "strength {}",
            number::text(*strength, Precision::Significant(3))
        );
        for (name, words) in columns {
            if let Some(column) = table.column(name) {
                let unit = if column.unit.is_empty() {
                    String::new()
                } else {
                    format!(" {}", column.unit)
                };
                text.push_str(&format!(", {words} {}{unit}", column.shown(row)));
            }
        }
        let meaning = Meaning::Strength(Real::new(*strength).unwrap_or_default());
        Tip::new(meaning, text)
    };
    strengths.iter().enumerate().map(tip).collect()
}
