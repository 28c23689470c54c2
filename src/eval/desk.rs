//! The worker: takes a snapshot, sends events, can be stopped.

use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::base::work::{CancelSource, CancelToken, Cancelled, Work};
use crate::eval::kind::{self, Inputs};
use crate::eval::memo::Memo;
use crate::eval::outcome::{Gives, Outcome, Verdict};
use crate::eval::plan::{Plan, plan};
use crate::eval::standing::{Event, State};
use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::source::Shelf;
use std::collections::BTreeMap;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::mpsc::{Receiver, Sender, channel};
use std::sync::{Arc, Mutex};

/// What a run works on: nothing in it changes while it runs.
#[derive(Clone, Debug)]
pub struct Snapshot {
    /// The study.
    pub study: Study,
    /// The imported bytes.
    pub shelf: Shelf,
    /// Outcomes from the record of the study file, for the cells whose record agrees. A cell that
    /// is left out is evaluated, even if its recorded outcome is remembered from an earlier run.
    pub recorded: BTreeMap<CellId, Arc<Outcome>>,
    /// How many threads may be used; the outcomes do not depend on it.
    pub threads: Threads,
}

/// Evaluates what is due, in dependency order, and tells `tell` as it goes.
///
/// # Errors
/// [`Cancelled`] when the run was called off; what was finished before is remembered.
pub fn evaluate(
    snapshot: &Snapshot,
    memo: &mut Memo,
    token: &CancelToken,
    tell: &(dyn Fn(Event) + Sync),
) -> Result<(), Cancelled> {
    memo.begin_run();
    let plan = plan(&snapshot.study);
    for (id, outcome) in &snapshot.recorded {
        if let Some(&recipe) = plan.recipes.get(id)
            && memo.get(recipe).is_none()
        {
            memo.put(recipe, Arc::new(Ok(outcome.as_ref().clone())));
        }
    }
    let fresh = needs_evaluation(snapshot, &plan, memo);
    tell(Event::Planned(first_states(&snapshot.study, &plan, &fresh)));
    for id in &plan.circular {
        let verdict = Arc::new(Err(circle(&snapshot.study, *id).into()));
        tell(Event::Finished {
            id: *id,
            verdict,
            remembered: false,
        });
    }
    let mut done: BTreeMap<CellId, Arc<Verdict>> = BTreeMap::new();
    for &id in &plan.order {
        token_check(token)?;
        let cell = snapshot
            .study
            .cell(id)
            .expect("the plan names cells of the study");
        if waits_for_failed(&snapshot.study, cell, &done) {
            tell(Event::Planned(vec![(id, State::Waiting)]));
            continue;
        }
        let recipe = plan.recipes[&id];
        let remembered = if fresh.contains(&id) {
            None
        } else {
            memo.get(recipe)
        };
        let (verdict, remembered) = match remembered {
            Some(verdict) => (verdict, true),
            None => {
                tell(Event::Started(id));
                let verdict = Arc::new(run_cell(snapshot, cell, &done, token, tell)?);
                memo.put(recipe, Arc::clone(&verdict));
                (verdict, false)
            }
        };
        let _ = done.insert(id, Arc::clone(&verdict));
        tell(Event::Finished {
            id,
            verdict,
            remembered,
        });
    }
    Ok(())
}

/// Whether a cell computes with one that failed or waits itself. It then waits, too: there is one
/// place to mend, and it is not here.
fn waits_for_failed(study: &Study, cell: &Cell, done: &BTreeMap<CellId, Arc<Verdict>>) -> bool {
    kind::computes_with(&cell.settings)
        && cell.settings.draws_on().iter().any(|input| {
            study.cell(*input).is_some()
                && done
                    .get(input)
                    .is_none_or(|verdict| verdict.as_ref().is_err())
        })
}

fn token_check(token: &CancelToken) -> Result<(), Cancelled> {
    if token.is_cancelled() {
        Err(Cancelled)
    } else {
        Ok(())
    }
}

/// The cells that must be evaluated: those that the memo does not know, and those that are known
/// only from the record although one of the former draws on them, or the record may not stand for
/// them.
fn needs_evaluation(snapshot: &Snapshot, plan: &Plan, memo: &mut Memo) -> Vec<CellId> {
    let study = &snapshot.study;
    let mut fresh = Vec::new();
    for &id in plan.order.iter().rev() {
        let known = memo.get(plan.recipes[&id]);
        let on_record = matches!(
            known.as_deref(),
            Some(Ok(Outcome {
                gives: Gives::OnRecord,
                ..
            }))
        );
        let is_wanted = !snapshot.recorded.contains_key(&id)
            || study.cells().iter().any(|cell| {
                fresh.contains(&cell.id)
                    && kind::computes_with(&cell.settings)
                    && cell.settings.draws_on().contains(&id)
            });
        if known.is_none() || (on_record && is_wanted) {
            fresh.push(id);
        }
    }
    fresh
}

fn first_states(study: &Study, plan: &Plan, fresh: &[CellId]) -> Vec<(CellId, State)> {
    let state = |id: CellId| {
        if !fresh.contains(&id) {
            return State::Current;
        }
        let cell = study.cell(id).expect("the plan names cells of the study");
        let waits = cell
            .settings
            .draws_on()
            .iter()
            .any(|input| fresh.contains(input));
        if waits { State::Waiting } else { State::Due }
    };
    plan.order.iter().map(|&id| (id, state(id))).collect()
}

fn run_cell(
    snapshot: &Snapshot,
    cell: &Cell,
    done: &BTreeMap<CellId, Arc<Verdict>>,
    token: &CancelToken,
    tell: &(dyn Fn(Event) + Sync),
) -> Result<Verdict, Cancelled> {
    // A thousand steps are as fine as anybody can see; more would only fill the queue.
    let last = Mutex::new(-1.0_f32);
    let report = |share: f32| {
        let mut last = last
            .lock()
            .expect("nobody panics while holding the last share");
        if share - *last >= 0.001 || share >= 1.0 && *last < 1.0 {
            *last = share;
            tell(Event::Progressed(cell.id, share));
        }
    };
    let work = Work::new(token.clone(), &report);
    let inputs = Inputs::new(&snapshot.study, &snapshot.shelf, done, snapshot.threads);
    let run = AssertUnwindSafe(|| kind::evaluate(&cell.settings, &inputs, &work));
    match catch_unwind(run) {
        Ok(verdict) => verdict,
        Err(panic) => Ok(Err(fault(panic.as_ref()).into())),
    }
}

fn fault(panic: &(dyn std::any::Any + Send)) -> Problem {
    let words = panic
        .downcast_ref::<String>()
        .cloned()
        .or_else(|| {
            panic
                .downcast_ref::<&str>()
                .map(|words| (*words).to_owned())
        })
        .unwrap_or_else(|| "no words".to_owned());
    Problem::new(
        "fault-of-the-program",
        "This cell could not be evaluated. This is a fault of the program, not of your data.",
    )
    .mend("Change a setting of the cell, or send the details to the makers.")
    .details(format!("widefold {}: {words}", env!("CARGO_PKG_VERSION")))
}

fn circle(study: &Study, id: CellId) -> Problem {
    let title = study.cell(id).map_or("", |cell| cell.title.as_str());
    Problem::new(
        "circle",
        format!("“{title}” draws on itself, directly or through other cells."),
    )
    .mend("Choose another cell for it to draw on.")
}

/// A worker thread with a memo of its own. Dropping the desk stops it.
#[derive(Debug)]
pub struct Desk {
    orders: Sender<Order>,
}

#[derive(Debug)]
struct Order {
    snapshot: Snapshot,
    token: CancelToken,
    events: Sender<Event>,
}

/// A run under way. Dropping it calls the run off.
#[derive(Debug)]
pub struct Run {
    /// What the worker tells; ends with [`Event::Ended`].
    pub events: Receiver<Event>,
    /// Calls the run off.
    pub cancel: CancelSource,
}

/// How many bytes of outcomes are remembered: undo is instant as far back as this reaches.
pub const MEMO_BUDGET: usize = 2 << 30;

impl Desk {
    /// Starts a worker.
    #[must_use]
    #[expect(
        clippy::disallowed_methods,
        reason = "the desk is where the worker thread lives"
    )]
    pub fn start() -> Self {
        let (orders, inbox) = channel::<Order>();
        let _worker = std::thread::spawn(move || {
            let mut memo = Memo::new(MEMO_BUDGET);
            while let Ok(order) = inbox.recv() {
                let events = Mutex::new(order.events);
                let tell = |event: Event| {
                    // Nobody listens any more when the run was replaced; the work then stops at
                    // its next step.
                    let _ = events
                        .lock()
                        .expect("nobody panics while telling")
                        .send(event);
                };
                let ended = evaluate(&order.snapshot, &mut memo, &order.token, &tell);
                tell(Event::Ended {
                    cancelled: ended.is_err(),
                });
            }
        });
        Self { orders }
    }

    /// Starts a run. A run that is under way should be dropped before, so that it stops.
    #[must_use]
    pub fn run(&self, snapshot: Snapshot) -> Run {
        let cancel = CancelSource::new();
        let (sender, events) = channel();
        let order = Order {
            snapshot,
            token: cancel.token(),
            events: sender,
        };
        // The worker lives as long as the desk; if it does not, the receiver just ends.
        let _ = self.orders.send(order);
        Run { events, cancel }
    }
}
