//! Commands without a window: the same engine for scripts and for machines with no display.

mod arguments;
mod clock;
mod export;
mod facts;
mod json;
mod progress;
mod reread;
mod start;
mod update;

pub use arguments::{Arguments, Command};
pub use clock::today;

use crate::base::problem::Problem;
use clap::Parser;
use std::process::ExitCode;

/// Exit status when the study could not be evaluated or does not verify.
const NOT_DONE: u8 = 1;

/// Reads the command line and does what it says. `window` opens the window, on a study if one is
/// named.
pub fn run(window: impl FnOnce(Option<std::path::PathBuf>) -> ExitCode) -> ExitCode {
    // A wrong command line ends here with status 2 and says what is right.
    let arguments = Arguments::parse();
    let done = match arguments.command {
        None => return window(arguments.study),
        Some(Command::Start(start)) => start::run(&start),
        Some(Command::Update(update)) => update::run(&update),
        Some(Command::Facts(facts)) => facts::run(&facts),
        Some(Command::Export(export)) => export::run(&export),
        Some(Command::Score(_)) => Err(not_built("Scoring new samples")),
        Some(Command::Verify(_)) => Err(not_built("Verifying a study")),
        Some(Command::Compare(_)) => Err(not_built("Comparing studies")),
    };
    match done {
        Ok(code) => code,
        Err(problem) => {
            say(&problem);
            ExitCode::from(NOT_DONE)
        }
    }
}

fn not_built(what: &str) -> Problem {
    Problem::new("not-built-yet", format!("{what} is not built yet."))
}

/// Writes a problem to standard error: place, finding, what would mend it.
fn say(problem: &Problem) {
    if problem.place.is_nowhere() {
        eprintln!("{}", problem.found);
    } else {
        eprintln!("{}: {}", problem.place, problem.found);
    }
    for instruction in &problem.mend {
        eprintln!("  → {instruction}");
    }
    if let Some(details) = &problem.details {
        eprintln!("  ({details})");
    }
}
