//! Making studies from tables, running them, and running the program.

use crate::support::{Dice, get};
use std::collections::BTreeMap;
use std::fmt::Write as _;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::sync::{Arc, Mutex};
use widefold::base::problem::Problem;
use widefold::base::thread::Threads;
use widefold::base::work::{CancelToken, Work};
use widefold::eval::desk::{MEMO_BUDGET, Snapshot, evaluate};
use widefold::eval::memo::Memo;
use widefold::eval::standing::{Event, Standings};
use widefold::eval::start::{Started, Wishes, start};
use widefold::study::Study;
use widefold::study::cell::{CellId, Kind};
use widefold::study::edit::Edit;
use widefold::study::settings::fit::{Fit, Judge, Strength};
use widefold::study::source::Shelf;

/// The plan of the quick studies, as the command line says it.
pub const QUICK: [&str; 8] = [
    "--parts",
    "5",
    "--repeats",
    "1",
    "--outer-parts",
    "4",
    "--outer-repeats",
    "1",
];

/// A file of the repository.
pub fn repository(path: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join(path)
}

/// The first samples of the open near-infrared table.
pub fn meats(n_samples: usize) -> Vec<u8> {
    let text = get(&repository("tests/reference/data/meats.csv"));
    let text = String::from_utf8(text).unwrap();
    let lines: Vec<&str> = text.lines().take(n_samples + 1).collect();
    lines.join("\n").into_bytes()
}

/// A table of `n_samples` named samples with dice for an outcome `y` and predictors `x1`, `x2`, …;
/// the outcome leans on the first two of them as far as `truth` says.
pub fn dice_table(seed: u64, n_samples: usize, n_predictors: usize, truth: f64) -> String {
    let mut dice = Dice(seed);
    let mut text = String::from("name,y");
    for at in 1..=n_predictors {
        let _ = write!(text, ",x{at}");
    }
    for sample in 1..=n_samples {
        // Twelve shares less six: mean 0, variance 1.
        let mut normal = || (0..12).map(|_| dice.share()).sum::<f64>() - 6.0;
        let x: Vec<f64> = (0..n_predictors).map(|_| normal()).collect();
        let lean = x.first().unwrap_or(&0.0) + x.get(1).unwrap_or(&0.0);
        let y = truth * lean + normal();
        let _ = write!(text, "\nsample-{sample},{y:.4}");
        for value in x {
            let _ = write!(text, ",{value:.4}");
        }
    }
    text
}

/// A fit with small plans.
pub fn quick_fit() -> Fit {
    let mut fit = Fit::default();
    if let Strength::Chosen { inner, range, .. } = &mut fit.strength {
        (inner.parts, inner.repeats) = (4, 1);
        range.count = 30;
    }
    if let Judge::Nested(plan) = &mut fit.judge {
        (plan.parts, plan.repeats) = (4, 1);
    }
    fit
}

/// Wishes for an outcome, with small plans.
pub fn quick(outcome: &str) -> Wishes {
    Wishes {
        title: "Journey".to_owned(),
        outcome: outcome.to_owned(),
        fit: quick_fit(),
        ..Wishes::default()
    }
}

/// A study from tables.
pub fn try_start(tables: &[(&str, Vec<u8>)], wishes: &Wishes) -> Result<Started, Problem> {
    let tables: Vec<(String, Arc<[u8]>)> = tables
        .iter()
        .map(|(name, bytes)| ((*name).to_owned(), Arc::from(bytes.as_slice())))
        .collect();
    start(&tables, wishes, Threads::all(), &Work::unattended()).unwrap()
}

/// The study of a small table with something to find.
pub fn small_study() -> Started {
    let table = dice_table(7, 30, 40, 2.0).into_bytes();
    try_start(&[("small.csv", table)], &quick("y")).unwrap()
}

/// What a run told.
pub struct Told {
    pub standings: Standings,
    /// The cells that were evaluated and not remembered, in that order.
    pub evaluated: Vec<CellId>,
}

/// Brings a study up to date.
pub fn run(study: &Study, shelf: &Shelf, memo: &mut Memo, threads: usize) -> Told {
    let snapshot = snapshot(study, shelf, threads);
    let told = Mutex::new(Told {
        standings: Standings::default(),
        evaluated: Vec::new(),
    });
    let tell = |event: Event| {
        let mut told = told.lock().unwrap();
        told.standings.absorb(&event);
        if let Event::Finished {
            id,
            remembered: false,
            ..
        } = &event
        {
            told.evaluated.push(*id);
        }
    };
    evaluate(&snapshot, memo, &CancelToken::default(), &tell).unwrap();
    told.into_inner().unwrap()
}

pub fn snapshot(study: &Study, shelf: &Shelf, threads: usize) -> Snapshot {
    Snapshot {
        study: study.clone(),
        shelf: shelf.clone(),
        recorded: BTreeMap::new(),
        threads: Threads::new(threads),
    }
}

/// Brings a study up to date that nobody has evaluated before.
pub fn run_anew(study: &Study, shelf: &Shelf) -> Told {
    run(study, shelf, &mut Memo::new(MEMO_BUDGET), 2)
}

/// The cell of a kind of which there is one.
pub fn the(study: &Study, kind: Kind) -> CellId {
    let cell = study.cells().iter().find(|c| c.settings.kind() == kind);
    cell.unwrap().id
}

/// The study without its questions and its summary.
pub fn without_answers(study: &Study) -> Study {
    let mut study = study.clone();
    for cell in study.clone().cells() {
        if matches!(cell.settings.kind(), Kind::Question | Kind::Prose) {
            let _ = study.apply(Edit::Remove { id: cell.id }).unwrap();
        }
    }
    study
}

/// What a command answered.
pub struct Answer {
    pub status: i32,
    pub out: String,
    pub error: String,
}

/// Runs the program in a folder.
pub fn widefold(folder: &Path, arguments: &[&str]) -> Answer {
    let output = Command::new(env!("CARGO_BIN_EXE_widefold"))
        .args(arguments)
        .current_dir(folder)
        .output()
        .unwrap();
    Answer {
        status: output.status.code().unwrap(),
        out: String::from_utf8(output.stdout).unwrap(),
        error: String::from_utf8(output.stderr).unwrap(),
    }
}
