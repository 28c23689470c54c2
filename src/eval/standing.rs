//! How each cell stands: its state, and the last outcome it had.

use crate::eval::outcome::{Failure, Outcome, Verdict};
use crate::study::cell::CellId;
use std::collections::BTreeMap;
use std::sync::Arc;

/// The state of a cell.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum State {
    /// It agrees with its settings and inputs.
    Current,
    /// It needs evaluating.
    Due,
    /// It is being evaluated; how far, from 0 to 1.
    Working(f32),
    /// An input is not current.
    Waiting,
    /// The user stopped it.
    Stopped,
    /// It could not be evaluated.
    Failed,
}

impl State {
    /// The word beside the cell's name.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Current => "current",
            Self::Due => "due",
            Self::Working(_) => "working",
            Self::Waiting => "waiting",
            Self::Stopped => "stopped",
            Self::Failed => "failed",
        }
    }
}

/// How one cell stands.
#[derive(Clone, Debug)]
pub struct Standing {
    /// Its state.
    pub state: State,
    /// The last outcome it had, which stays on the page, paled, while it is not current.
    pub outcome: Option<Arc<Outcome>>,
    /// Why it failed, if it did.
    pub failure: Option<Arc<Failure>>,
}

impl Standing {
    /// A cell that has never been evaluated.
    #[must_use]
    pub const fn due() -> Self {
        Self {
            state: State::Due,
            outcome: None,
            failure: None,
        }
    }
}

/// What the worker tells while it works.
#[derive(Clone, Debug)]
pub enum Event {
    /// What each cell is before anything runs.
    Planned(Vec<(CellId, State)>),
    /// A cell is being evaluated.
    Started(CellId),
    /// How far a cell is, from 0 to 1.
    Progressed(CellId, f32),
    /// A cell has been evaluated.
    Finished {
        /// The cell.
        id: CellId,
        /// What came of it.
        verdict: Arc<Verdict>,
        /// Whether it was remembered and not run.
        remembered: bool,
    },
    /// The run is over.
    Ended {
        /// Whether it was called off.
        cancelled: bool,
    },
}

/// How all cells stand.
#[derive(Clone, Debug, Default)]
pub struct Standings {
    cells: BTreeMap<CellId, Standing>,
}

impl Standings {
    /// How a cell stands.
    #[must_use]
    pub fn get(&self, id: CellId) -> Standing {
        self.cells.get(&id).cloned().unwrap_or_else(Standing::due)
    }

    /// Takes an event in.
    pub fn absorb(&mut self, event: &Event) {
        match event {
            Event::Planned(states) => {
                for (id, state) in states {
                    self.entry(*id).state = *state;
                }
            }
            Event::Started(id) => self.entry(*id).state = State::Working(0.0),
            Event::Progressed(id, share) => self.entry(*id).state = State::Working(*share),
            Event::Finished {
                id,
                verdict,
                remembered: _,
            } => {
                let standing = self.entry(*id);
                match verdict.as_ref() {
                    Ok(outcome) => {
                        standing.state = State::Current;
                        standing.outcome = Some(Arc::new(outcome.clone()));
                        standing.failure = None;
                    }
                    Err(failure) => {
                        standing.state = State::Failed;
                        standing.failure = Some(Arc::new(failure.clone()));
                    }
                }
            }
            Event::Ended { cancelled } => {
                for standing in self.cells.values_mut() {
                    match standing.state {
                        State::Working(_) if *cancelled => standing.state = State::Stopped,
                        State::Working(_) => standing.state = State::Due,
                        State::Current
                        | State::Due
                        | State::Waiting
                        | State::Stopped
                        | State::Failed => {}
                    }
                }
            }
        }
    }

    /// Puts an outcome in place for a cell: from a record, or for a test.
    pub fn put(&mut self, id: CellId, standing: Standing) {
        let _ = self.cells.insert(id, standing);
    }

    fn entry(&mut self, id: CellId) -> &mut Standing {
        self.cells.entry(id).or_insert_with(Standing::due)
    }
}
