//! `export`: writes the hand-over workbook and the methods write-up.

use crate::base::problem::Problem;
use crate::cli::arguments::Export;
use crate::cli::today;
use crate::cli::update::{bring_up_to_date, report};
use crate::export::Occasion;
use crate::export::workbook::workbook;
use crate::export::write_up::write_up;
use crate::report::Context;
use crate::store::{self, replace};
use std::path::Path;
use std::process::ExitCode;

/// What the command line calls the reason for exporting although a stop stands.
const DESPITE: &str = "--despite REASON";

/// Runs the command. A study that is not up to date is evaluated first, and not saved.
///
/// # Errors
/// When the study cannot be opened, or an export cannot be made or written.
pub fn run(arguments: &Export) -> Result<ExitCode, Problem> {
    if arguments.workbook.is_none() && arguments.write_up.is_none() {
        return Err(Problem::new("nothing-to-export", "It was not said what to export.")
            .mend("Name a workbook with --workbook FILE.xlsx, a write-up with --write-up FILE.md, or both."));
    }
    let mut opened = store::open(&arguments.study)?;
    opened.problems.iter().for_each(super::say);
    let standings = bring_up_to_date(&mut opened);
    let context = Context {
        study: &opened.study,
        standings: &standings,
        ledger: &opened.ledger,
    };
    let occasion = Occasion {
        date: today(),
        despite: arguments.despite.clone(),
    };
    if let Some(path) = &arguments.workbook {
        let bytes = workbook(&context, &occasion).map_err(|error| error.problem(DESPITE))?;
        replace(path, &bytes)?;
        eprintln!("Wrote {}.", path.display());
    }
    if let Some(path) = &arguments.write_up {
        let folder = figure_folder(path);
        let written =
            write_up(&context, &occasion, &folder).map_err(|error| error.problem(DESPITE))?;
        let beside = path.parent().unwrap_or(Path::new("")).join(&folder);
        if !written.figures.is_empty() {
            store::make_folder(&beside)?;
        }
        for (name, bytes) in &written.figures {
            replace(&beside.join(name), bytes)?;
        }
        replace(path, written.markdown.as_bytes())?;
        eprintln!(
            "Wrote {} and {} figures.",
            path.display(),
            written.figures.len()
        );
    }
    Ok(report(&opened.study, &standings))
}

/// The folder beside a write-up that takes its figures: `methods.md` has `methods-figures`.
fn figure_folder(path: &Path) -> String {
    let stem = path
        .file_stem()
        .map_or_else(|| "write-up".into(), |stem| stem.to_string_lossy());
    format!("{stem}-figures")
}
