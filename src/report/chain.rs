//! The cells that a cell draws on, down to its data.

use crate::report::Context;
use crate::study::cell::{Cell, CellId};
use crate::study::link::Link;
use crate::study::settings::Settings;
use crate::study::settings::data::Data;
use crate::study::settings::fit::Fit;
use crate::study::settings::prepare::Prepare;
use crate::study::settings::question::Question;

/// The cells that a cell draws on, one after the other, as far as the links lead.
#[derive(Clone, Debug, Default)]
pub struct Chain<'a> {
    /// The fit, if one is drawn on.
    pub fit: Option<(CellId, &'a Fit)>,
    /// The preparations, in the order in which they are taken.
    pub prepares: Vec<(CellId, &'a Prepare)>,
    /// The data.
    pub data: Option<(CellId, &'a Data)>,
}

impl<'a> Chain<'a> {
    /// The chain that begins at a link. A circle, which only an edited file can hold, ends it.
    #[must_use]
    pub fn from(context: &Context<'a>, link: Link) -> Self {
        let mut chain = Self::default();
        let mut seen = Vec::new();
        let mut next = link.0;
        while let Some(id) = next {
            if seen.contains(&id) {
                break;
            }
            seen.push(id);
            next = match context.study.cell(id).map(|cell| &cell.settings) {
                Some(Settings::Data(data)) => {
                    chain.data = Some((id, data));
                    None
                }
                Some(Settings::Prepare(prepare)) => {
                    chain.prepares.insert(0, (id, prepare));
                    prepare.input.0
                }
                Some(Settings::Fit(fit)) => {
                    chain.fit = Some((id, fit));
                    fit.input.0
                }
                Some(
                    Settings::Question(_)
                    | Settings::Compare(_)
                    | Settings::Score(_)
                    | Settings::Prose(_),
                )
                | None => None,
            };
        }
        chain
    }

    /// The settings of the data.
    #[must_use]
    pub fn settings(&self) -> Option<&'a Data> {
        self.data.map(|(_, data)| data)
    }

    /// The name of the outcome, or words that stand in for it.
    #[must_use]
    pub fn outcome(&self) -> String {
        self.settings()
            .and_then(|data| data.outcome.as_ref())
            .map_or_else(
                || "the outcome".to_owned(),
                |outcome| outcome.column.clone(),
            )
    }
}

/// The questions that are asked of a fit, in reading order.
pub fn questions_of<'a>(
    context: &Context<'a>,
    fit: CellId,
) -> impl Iterator<Item = (&'a Cell, &'a Question)> {
    let study = context.study;
    study
        .cells()
        .iter()
        .filter_map(move |cell| match &cell.settings {
            Settings::Question(question) if question.fit == Link::to(fit) => Some((cell, question)),
            Settings::Question(_)
            | Settings::Data(_)
            | Settings::Prepare(_)
            | Settings::Fit(_)
            | Settings::Compare(_)
            | Settings::Score(_)
            | Settings::Prose(_) => None,
        })
}
