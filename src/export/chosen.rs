//! The list of chosen predictors, which never appears without its selection frequencies.

use crate::eval::fact::{FactColumn, FactTable, FactValues};
use crate::report::Context;
use crate::study::cell::CellId;
use crate::study::settings::Settings;
use crate::study::settings::question::Ask;

/// The chosen predictors of a fit, joined from the fit and the questions asked of it.
#[derive(Clone, Debug, PartialEq)]
pub struct ChosenList {
    /// The table: predictor, coefficient, standardised coefficient, and, as far as they were asked
    /// for, frequency and stand-ins.
    pub table: FactTable,
    /// Whether the fit chooses predictors, and whether their frequencies are known.
    pub frequencies: Frequencies,
}

/// What is known of how often predictors are chosen.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Frequencies {
    /// They are in the table.
    Known,
    /// Nobody has asked.
    NotAsked,
    /// The fit keeps every predictor, so there is nothing to choose.
    NothingChosen,
}

/// The list of a fit.
#[must_use]
pub fn list(context: &Context<'_>, fit: CellId) -> Option<ChosenList> {
    let outcome = context.outcome(fit)?;
    let facts = &outcome.facts;
    let mut table = facts.table("coefficients")?.clone();
    let predictors = table.texts("predictor").to_vec();
    if facts.words("penalty") == Some("ridge") {
        return Some(ChosenList {
            table,
            frequencies: Frequencies::NothingChosen,
        });
    }
    let mut frequencies = Frequencies::NotAsked;
    for cell in context.study.cells() {
        let Settings::Question(question) = &cell.settings else {
            continue;
        };
        if question.fit.0 != Some(fit) {
            continue;
        }
        let Some(answer) = context.outcome(cell.id) else {
            continue;
        };
        match question.ask {
            Ask::ChosenAgain { .. } if frequencies == Frequencies::NotAsked => {
                if let Some(found) = answer.facts.table("frequencies") {
                    join(
                        &mut table,
                        &predictors,
                        found,
                        &["frequency", "low", "high", "sign consistency"],
                    );
                    frequencies = Frequencies::Known;
                }
            }
            Ask::StandIns { .. } if table.column("stand-ins").is_none() => {
                if let Some(found) = answer.facts.table("groups") {
                    join(
                        &mut table,
                        &predictors,
                        found,
                        &["stand-ins", "strongest stand-in", "strongest correlation"],
                    );
                }
            }
            Ask::ChosenAgain { .. }
            | Ask::StandIns { .. }
            | Ask::LeastSquares
            | Ask::ErrorCurve
            | Ask::CoefficientTrace
            | Ask::Agreement
            | Ask::Ladder { .. } => {}
        }
    }
    Some(ChosenList { table, frequencies })
}

/// Takes columns of another table over, matched by predictor.
fn join(table: &mut FactTable, predictors: &[String], other: &FactTable, columns: &[&str]) {
    let rows: Vec<Option<usize>> = predictors
        .iter()
        .map(|name| {
            other
                .texts("predictor")
                .iter()
                .position(|known| known == name)
        })
        .collect();
    for name in columns {
        let Some(column) = other.column(name) else {
            continue;
        };
        let values = match &column.values {
            FactValues::Numbers(numbers) => FactValues::Numbers(
                rows.iter()
                    .map(|row| row.map_or(f64::NAN, |row| numbers[row]))
                    .collect(),
            ),
            FactValues::Texts(texts) => FactValues::Texts(
                rows.iter()
                    .map(|row| row.map_or_else(String::new, |row| texts[row].clone()))
                    .collect(),
            ),
        };
        table.columns.push(FactColumn {
            values,
            ..column.clone()
        });
    }
}
