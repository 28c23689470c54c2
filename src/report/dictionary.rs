//! Every fact of a study with its unit and meaning.

use crate::eval::fact::FactValue;
use crate::report::Context;
use crate::study::cell::CellId;

/// A word of the dictionary: a fact, or a column of one.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Term {
    /// The cell that gives the fact.
    pub cell: CellId,
    /// The cell's title.
    pub title: String,
    /// The fact's name.
    pub fact: String,
    /// The column, where the fact is a table.
    pub column: Option<String>,
    /// The unit; empty when there is none.
    pub unit: String,
    /// What it is: one sentence.
    pub meaning: String,
}

/// All facts that the cells give, in reading order.
#[must_use]
pub fn dictionary(context: &Context<'_>) -> Vec<Term> {
    let mut terms = Vec::new();
    for cell in context.study.cells() {
        let Some(outcome) = context.outcome(cell.id) else {
            continue;
        };
        for fact in outcome.facts.all() {
            let term = |column: Option<String>, unit: &str, meaning: &str| Term {
                cell: cell.id,
                title: cell.title.clone(),
                fact: fact.name.clone(),
                column,
                unit: unit.to_owned(),
                meaning: meaning.to_owned(),
            };
            terms.push(term(None, &fact.unit, &fact.meaning));
            if let FactValue::Table(table) = &fact.value {
                terms.extend(
                    table.columns.iter().map(|column| {
                        term(Some(column.name.clone()), &column.unit, &column.meaning)
                    }),
                );
            }
        }
    }
    terms
}
