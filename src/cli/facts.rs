//! `facts`: prints every fact and caveat.

use crate::base::problem::Problem;
use crate::cli::arguments::Facts;
use crate::cli::json;
use crate::cli::update::{bring_up_to_date, report};
use crate::eval::fact::FactValue;
use crate::export;
use crate::report::Context;
use crate::store;
use std::fmt::Write as _;
use std::io::Write as _;
use std::process::ExitCode;

/// Runs the command. A study that is not up to date is evaluated first, and not saved.
///
/// # Errors
/// When the study cannot be opened.
pub fn run(arguments: &Facts) -> Result<ExitCode, Problem> {
    let mut opened = store::open(&arguments.study)?;
    opened.problems.iter().for_each(super::say);
    let standings = bring_up_to_date(&mut opened);
    let context = Context {
        study: &opened.study,
        standings: &standings,
        ledger: &opened.ledger,
    };
    let printed = if arguments.json {
        json::facts(&context) + "\n"
    } else {
        text(&context)
    };
    // Whoever reads may stop reading, as “head” does; that is no reason to complain.
    let _ = std::io::stdout().write_all(printed.as_bytes());
    Ok(report(&opened.study, &standings))
}

fn text(context: &Context<'_>) -> String {
    let mut text = String::new();
    for cell in context.study.cells() {
        let standing = context.standings.get(cell.id);
        let _ = writeln!(
            text,
            "{} {} ({})",
            cell.settings.kind().name(),
            cell.title,
            standing.state.word()
        );
        let Some(outcome) = standing.outcome else {
            continue;
        };
        for fact in outcome.facts.all() {
            let shown = match &fact.value {
                FactValue::Number(_) | FactValue::Text(_) => fact.shown_with_unit(),
                FactValue::Table(table) => {
                    let columns: Vec<&str> =
                        table.columns.iter().map(|c| c.name.as_str()).collect();
                    format!("{} rows of {}", fact.shown(), columns.join(", "))
                }
            };
            let _ = writeln!(text, "  {}: {shown}", fact.name);
        }
        for caveat in &outcome.caveats {
            let _ = writeln!(
                text,
                "  [{}] {}: {}",
                caveat.severity.word(),
                caveat.heading,
                caveat.text
            );
        }
        text.push('\n');
    }
    for (_, caveat) in export::caveats(context)
        .iter()
        .filter(|(cell, _)| cell.is_none())
    {
        let _ = writeln!(
            text,
            "[{}] {}: {}",
            caveat.severity.word(),
            caveat.heading,
            caveat.text
        );
    }
    text
}
