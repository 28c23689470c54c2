//! One pure function per kind of cell: settings and inputs in, verdict out. No disk, no clock.

pub mod data;
pub mod fit;
pub mod prepare;
pub mod prose;
pub mod step;

use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::base::work::{Cancelled, Work};
use crate::eval::kind::fit::Fitted;
use crate::eval::kind::prepare::Prepared;
use crate::eval::outcome::{Failure, Gives, Outcome, Verdict};
use crate::eval::question;
use crate::study::Study;
use crate::study::cell::{CellId, Kind};
use crate::study::link::Link;
use crate::study::settings::Settings;
use crate::study::source::Shelf;
use std::collections::BTreeMap;
use std::sync::Arc;

/// What a cell is evaluated with.
#[derive(Clone, Copy, Debug)]
pub struct Inputs<'a> {
    study: &'a Study,
    shelf: &'a Shelf,
    done: &'a BTreeMap<CellId, Arc<Verdict>>,
    /// How many threads may be used; the verdict does not depend on it.
    pub threads: Threads,
}

impl<'a> Inputs<'a> {
    /// Inputs from the cells that are done.
    #[must_use]
    pub const fn new(
        study: &'a Study,
        shelf: &'a Shelf,
        done: &'a BTreeMap<CellId, Arc<Verdict>>,
        threads: Threads,
    ) -> Self {
        Self {
            study,
            shelf,
            done,
            threads,
        }
    }

    /// The imported bytes.
    #[must_use]
    pub const fn shelf(&self) -> &'a Shelf {
        self.shelf
    }

    /// The samples and steps of the Data or Prepare cell that a link leads to.
    ///
    /// # Errors
    /// When the link leads nowhere, or to a cell of another kind.
    pub fn prepared(&self, link: Link) -> Result<Arc<Prepared>, Failure> {
        let outcome = self.outcome(link, "a Data or Prepare cell")?;
        match &outcome.gives {
            Gives::Data(data) => Ok(Arc::new(Prepared::unprepared(data))),
            Gives::Prepared(prepared) => Ok(Arc::clone(prepared)),
            Gives::Facts | Gives::OnRecord | Gives::Fit(_) => {
                Err(self.wrong_kind(link, "a Data or Prepare cell"))
            }
        }
    }

    /// The fit that a link leads to.
    ///
    /// # Errors
    /// When the link leads nowhere, or to a cell of another kind.
    pub fn fit(&self, link: Link) -> Result<Arc<Fitted>, Failure> {
        let outcome = self.outcome(link, "a fit")?;
        match &outcome.gives {
            Gives::Fit(fitted) => Ok(Arc::clone(fitted)),
            Gives::Facts | Gives::OnRecord | Gives::Data(_) | Gives::Prepared(_) => {
                Err(self.wrong_kind(link, "a Fit cell"))
            }
        }
    }

    fn outcome(&self, link: Link, wanted: &str) -> Result<&'a Outcome, Failure> {
        let Some(id) = link.0 else {
            return Err(Problem::new(
                "nothing-to-draw-on",
                "No cell to draw on has been chosen yet.",
            )
            .mend(format!("Choose {wanted}."))
            .into());
        };
        let Some(verdict) = self.done.get(&id) else {
            return Err(Problem::new(
                "drawn-on-cell-removed",
                "The cell that this one drew on has been removed.",
            )
            .mend(format!("Undo the removal, or choose {wanted}."))
            .into());
        };
        verdict.as_ref().as_ref().map_err(|_| {
            let title = self.title(id);
            Problem::new(
                "drawn-on-cell-failed",
                format!("“{title}” could not be evaluated, so there is nothing to draw on."),
            )
            .mend(format!("Mend “{title}”, or choose another cell."))
            .into()
        })
    }

    fn wrong_kind(&self, link: Link, wanted: &str) -> Failure {
        let title = link.0.map_or_else(String::new, |id| self.title(id));
        Problem::new("wrong-kind", format!("“{title}” is not {wanted}."))
            .mend(format!("Choose {wanted}."))
            .into()
    }

    fn title(&self, id: CellId) -> String {
        self.study
            .cell(id)
            .map_or_else(String::new, |cell| cell.title.clone())
    }
}

/// Whether cells with these settings compute with what they draw on, and do not only read facts.
#[must_use]
pub const fn computes_with(settings: &Settings) -> bool {
    match settings.kind() {
        Kind::Data | Kind::Prepare | Kind::Fit | Kind::Question | Kind::Compare | Kind::Score => {
            true
        }
        Kind::Prose => false,
    }
}

/// Evaluates a cell.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn evaluate(
    settings: &Settings,
    inputs: &Inputs<'_>,
    work: &Work<'_>,
) -> Result<Verdict, Cancelled> {
    match settings {
        Settings::Data(data) => data::evaluate(data, inputs, work),
        Settings::Prepare(prepare) => prepare::evaluate(prepare, inputs, work),
        Settings::Fit(fit) => fit::evaluate(fit, inputs, work),
        Settings::Question(question) => question::evaluate(question, inputs, work),
        Settings::Compare(_) => Ok(Err(not_built("Comparing fits"))),
        Settings::Score(_) => Ok(Err(not_built("Scoring new samples"))),
        Settings::Prose(prose) => Ok(Ok(prose::evaluate(prose))),
    }
}

fn not_built(what: &str) -> Failure {
    Problem::new("not-built-yet", format!("{what} is not built yet.")).into()
}

/// A computation that was called off, or could not be done and says why.
#[derive(Debug)]
pub enum Ended {
    /// Called off; not an error.
    Cancelled,
    /// It could not be done.
    Failed(Failure),
}

impl From<Cancelled> for Ended {
    fn from(Cancelled: Cancelled) -> Self {
        Self::Cancelled
    }
}

impl From<Failure> for Ended {
    fn from(failure: Failure) -> Self {
        Self::Failed(failure)
    }
}

impl From<Problem> for Ended {
    fn from(problem: Problem) -> Self {
        Self::Failed(problem.into())
    }
}

/// Turns the end of a computation into a verdict.
///
/// # Errors
/// [`Cancelled`] when it was called off.
pub fn verdict(result: Result<Outcome, Ended>) -> Result<Verdict, Cancelled> {
    match result {
        Ok(outcome) => Ok(Ok(outcome)),
        Err(Ended::Cancelled) => Err(Cancelled),
        Err(Ended::Failed(failure)) => Ok(Err(failure)),
    }
}
