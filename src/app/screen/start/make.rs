//! The ready study, made from what has been said.

use crate::app::run;
use crate::app::screen::start::role::Role;
use crate::app::screen::start::taken::title;
use crate::app::screen::start::{Action, Busy, Message, Start};
use crate::app::session::Opened;
use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::base::work::{CancelSource, Work};
use crate::eval::start::{Started, Wishes, start};
use crate::study::settings::data::OutcomeKind;
use crate::study::source::SourceId;
use std::path::{Path, PathBuf};
use std::sync::Arc;

impl Start {
    /// What is wished for, from what has been said.
    pub(super) fn wishes(&self) -> Result<Wishes, Problem> {
        let first = |role| self.roles.first(role).map(str::to_owned);
        let Some(outcome) = first(Role::Outcome) else {
            return Err(
                Problem::new("no-outcome", "It is not said yet what is predicted.")
                    .mend("Press the head of a column and say that it is the outcome."),
            );
        };
        let kind = match self.kind {
            None => None,
            Some("yes-no") => Some(OutcomeKind::YesNo { event: None }),
            Some("classes") => Some(OutcomeKind::Classes),
            Some("count") => Some(OutcomeKind::Count { exposure: None }),
            Some("time") => Some(OutcomeKind::Time {
                event: first(Role::Event).ok_or_else(|| {
                    Problem::new(
                        "no-event",
                        "For a time it must be said which column tells whether the event happened.",
                    )
                    .mend("Press the head of that column and say that it is the event.")
                })?,
            }),
            Some(_) => Some(OutcomeKind::Measured),
        };
        let title_from = self
            .tables
            .first()
            .map_or("study", |taken| taken.name.as_str());
        Ok(Wishes {
            title: title(title_from),
            outcome,
            kind,
            samples: first(Role::SampleName),
            unit: first(Role::Unit),
            batch: first(Role::Batch),
            order: first(Role::Order),
            weight: first(Role::Weight),
            covariates: self.roles.all(Role::Covariate),
            ignored: self.roles.all(Role::Ignored),
            date: Some(crate::app::disk::today()),
            reading: self
                .tables
                .iter()
                .map(|taken| taken.asked.clone())
                .collect(),
            ..Wishes::default()
        })
    }

    pub(super) fn make(&mut self) -> Action {
        let wishes = match self.wishes() {
            Ok(wishes) => wishes,
            Err(problem) => {
                self.problem = Some(problem);
                return Action::None;
            }
        };
        let tables: Vec<(String, Arc<[u8]>)> = self
            .tables
            .iter()
            .map(|taken| (taken.name.clone(), Arc::clone(&taken.bytes)))
            .collect();
        let cancel = CancelSource::new();
        let token = cancel.token();
        self.busy = Busy::Making { cancel };
        Action::Run(run::off_thread(move || {
            let report = |_: f32| {};
            let work = Work::new(token, &report);
            let made = match start(&tables, &wishes, Threads::all(), &work) {
                Ok(made) => made.map(Arc::new),
                Err(crate::base::work::Cancelled) => {
                    Err(Problem::new("stopped", "Making the study was stopped."))
                }
            };
            Message::Made(Box::new(made))
        }))
    }

    pub(super) fn made(&mut self, result: Result<Arc<Started>, Problem>) -> Action {
        if !matches!(self.busy, Busy::Making { .. }) {
            // It was called off meanwhile.
            return Action::None;
        }
        self.busy = Busy::No;
        match result {
            Ok(started) => {
                let mut shelf = started.shelf.clone();
                for taken in &self.tables {
                    // The readable form of a study names its tables by path.
                    let path = absolute(&taken.path);
                    shelf.came_from(&SourceId::of(&taken.bytes), &taken.name, &path);
                }
                let opened = Opened {
                    study: started.study.clone(),
                    shelf,
                    ..Opened::default()
                };
                Action::Begin(Box::new(opened), started.notes.clone())
            }
            Err(problem) => {
                self.problem = Some(problem);
                Action::None
            }
        }
    }
}

fn absolute(path: &Path) -> PathBuf {
    std::path::absolute(path).unwrap_or_else(|_| path.to_owned())
}
