//! `update`: brings a study up to date and saves it.

use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::base::work::CancelToken;
use crate::cli::arguments::Update;
use crate::cli::progress::Progress;
use crate::cli::reread::{self, Taking};
use crate::cli::{NOT_DONE, today};
use crate::eval::desk::{MEMO_BUDGET, Snapshot, evaluate};
use crate::eval::memo::Memo;
use crate::eval::standing::{Event, Standings, State};
use crate::store::{self, Opened};
use crate::study::Study;
use crate::study::ledger::Ledger;
use std::process::ExitCode;
use std::sync::Mutex;

/// Runs the command.
///
/// # Errors
/// When the study cannot be opened or saved.
pub fn run(arguments: &Update) -> Result<ExitCode, Problem> {
    let mut opened = store::open(&arguments.study)?;
    opened.problems.iter().for_each(super::say);
    let taking = if arguments.accept {
        Taking::Accepted
    } else {
        Taking::Asked
    };
    // A table beside a readable study that is not the one it was saved with is a newer file too.
    let has_changed = opened
        .problems
        .iter()
        .any(|problem| problem.code.0 == "table-changed");
    if has_changed && taking == Taking::Asked {
        eprintln!("Nothing was taken: the study stays as it is until --accept is given.");
        return Ok(ExitCode::from(NOT_DONE));
    }
    if reread::reread(&mut opened, &arguments.reread, taking)? {
        return Ok(ExitCode::from(NOT_DONE));
    }
    reread::set(&mut opened, &arguments.set)?;
    let standings = bring_up_to_date(&mut opened);
    let path = arguments.output.as_ref().unwrap_or(&arguments.study);
    let record = opened.record.updated(&opened.study, &standings);
    store::save(path, &opened.study, &opened.shelf, &opened.ledger, &record)?;
    Ok(report(&opened.study, &standings))
}

/// Evaluates what is due, notes looks and openings, and returns how all cells stand.
pub fn bring_up_to_date(opened: &mut Opened) -> Standings {
    let progress = Progress::new(&opened.study);
    let standings = Mutex::new(Standings::default());
    let snapshot = Snapshot {
        study: opened.study.clone(),
        shelf: opened.shelf.clone(),
        recorded: opened.record.outcomes(&opened.study),
        threads: Threads::all(),
    };
    let tell = |event: Event| {
        progress.tell(&event);
        standings
            .lock()
            .expect("nobody panics while absorbing")
            .absorb(&event);
    };
    let mut memo = Memo::new(MEMO_BUDGET);
    // Nobody can call this run off: the process is stopped instead, and the file is then as before.
    let _ = evaluate(&snapshot, &mut memo, &CancelToken::default(), &tell);
    progress.done();
    let standings = standings
        .into_inner()
        .expect("nobody panics while absorbing");
    note_acts(&opened.study, &standings, &mut opened.ledger);
    standings
}

/// Counts the configurations that were evaluated against the outcome, and the sealed sets opened.
pub fn note_acts(study: &Study, standings: &Standings, ledger: &mut Ledger) {
    store::note_acts(study, standings, ledger, &today());
}

/// Says which cells could not be evaluated, and gives the exit status.
pub fn report(study: &Study, standings: &Standings) -> ExitCode {
    let mut all_done = true;
    for cell in study.cells() {
        let standing = standings.get(cell.id);
        match standing.state {
            State::Current => {}
            State::Failed => {
                all_done = false;
                if let Some(failure) = &standing.failure {
                    eprintln!("“{}” could not be evaluated.", cell.title);
                    super::say(&failure.problem);
                }
            }
            State::Waiting => {
                all_done = false;
                eprintln!(
                    "“{}” waits: a cell that it draws on could not be evaluated.",
                    cell.title
                );
            }
            State::Due | State::Working(_) | State::Stopped => {
                all_done = false;
                eprintln!("“{}” has not been evaluated.", cell.title);
            }
        }
    }
    if all_done {
        ExitCode::SUCCESS
    } else {
        ExitCode::from(NOT_DONE)
    }
}
