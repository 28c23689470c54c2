//! Floor 3: what a cell has to say, once for all readers.
//!
//! Settings and facts go in; sentences and blocks come out. Page, reading view, write-up, workbook
//! and command line are painters of them.

pub mod block;
pub mod chain;
pub mod dictionary;
pub mod kind;
pub mod noun;
pub mod problem;
pub mod question;
pub mod sentence;
pub mod tell;
pub mod word;

#[cfg(test)]
mod sample;
#[cfg(test)]
mod tests;

use crate::eval::fact::Facts;
use crate::eval::outcome::{Failure, Outcome};
use crate::eval::standing::{Standings, State};
use crate::report::block::{Block, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::sentence::Sentence;
use crate::report::tell::Source;
use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::ledger::Ledger;
use crate::study::settings::Settings;
use std::sync::Arc;

/// What a report is made from.
#[derive(Clone, Copy)]
pub struct Context<'a> {
    /// The study.
    pub study: &'a Study,
    /// How its cells stand.
    pub standings: &'a Standings,
    /// What was counted.
    pub ledger: &'a Ledger,
}

impl Context<'_> {
    /// The last outcome of a cell.
    #[must_use]
    pub fn outcome(&self, id: CellId) -> Option<Arc<Outcome>> {
        self.standings.get(id).outcome
    }

    /// The title of a cell, or words that say that it was removed.
    #[must_use]
    pub fn title(&self, id: CellId) -> String {
        self.study
            .cell(id)
            .map_or_else(|| "a removed cell".to_owned(), |cell| cell.title.clone())
    }
}

/// Everything one cell has to say.
#[derive(Clone, Debug)]
pub struct CellReport {
    /// The cell.
    pub id: CellId,
    /// The settings as sentences with editable words, in the present tense.
    pub sentences: Vec<Sentence>,
    /// The settings and what came of them, in the past tense, for the write-up's methods.
    pub methods: Vec<Paragraph>,
    /// The answer in one plain sentence.
    pub answer: Option<Paragraph>,
    /// The rest of the answer.
    pub blocks: Vec<Block>,
    /// The state.
    pub state: State,
    /// Why there is no answer, if the cell failed.
    pub failure: Option<Arc<Failure>>,
}

/// Everything a cell has to say.
///
/// A cell that is not part of the study says nothing and is due.
#[must_use]
pub fn cell(context: &Context<'_>, id: CellId) -> CellReport {
    let standing = context.standings.get(id);
    let mut report = CellReport {
        id,
        sentences: Vec::new(),
        methods: Vec::new(),
        answer: None,
        blocks: Vec::new(),
        state: standing.state,
        failure: standing.failure,
    };
    let Some(cell) = context.study.cell(id) else {
        return report;
    };
    let facts = standing.outcome.as_ref().map(|outcome| &outcome.facts);
    report.sentences = sentences(context, cell, facts);
    match (facts, &cell.settings) {
        // A text needs no evaluation; its facts come from other cells.
        (_, Settings::Prose(prose)) => report.blocks = kind::prose::blocks(context, prose),
        (Some(facts), _) => tell(context, cell, facts, &mut report),
        (None, _) => report.methods = vec![tell::without_results(&cell.title)],
    }
    report
}

/// What every cell has to say, in reading order.
#[must_use]
pub fn study(context: &Context<'_>) -> Vec<CellReport> {
    context
        .study
        .cells()
        .iter()
        .map(|known| cell(context, known.id))
        .collect()
}

/// How many distinct configurations have been evaluated against the outcome, for the write-up.
#[must_use]
pub fn looks(context: &Context<'_>) -> Paragraph {
    Paragraph::of("Distinct configurations that had been evaluated against the outcome: ")
        .counted("looks", context.ledger.looks().len())
        .text(".")
}

/// The settings of a cell as sentences with editable words, in the present tense.
#[must_use]
pub fn sentences(context: &Context<'_>, cell: &Cell, facts: Option<&Facts>) -> Vec<Sentence> {
    match &cell.settings {
        Settings::Data(data) => kind::data::sentences(data, facts),
        Settings::Prepare(prepare) => kind::prepare::sentences(context, prepare),
        Settings::Fit(fit) => kind::fit::sentences(context, fit),
        Settings::Question(question) => kind::question::sentences(context, question),
        Settings::Compare(compare) => kind::compare::sentences(context, compare),
        Settings::Score(score) => kind::score::sentences(context, score),
        // The text of a Prose cell is its own sentence and is edited in place.
        Settings::Prose(_) => Vec::new(),
    }
}

/// The figures of a cell, for texts that show them.
#[must_use]
pub fn figures(context: &Context<'_>, id: CellId) -> Vec<NamedFigure> {
    match context.study.cell(id).map(|cell| &cell.settings) {
        // A text shows the figures of others and has none, so that no circle can arise.
        Some(Settings::Prose(_)) | None => Vec::new(),
        Some(
            Settings::Data(_)
            | Settings::Prepare(_)
            | Settings::Fit(_)
            | Settings::Question(_)
            | Settings::Compare(_)
            | Settings::Score(_),
        ) => cell(context, id)
            .blocks
            .into_iter()
            .filter_map(|block| match block {
                Block::Figure(figure) => Some(figure),
                Block::Heading(_)
                | Block::Section { .. }
                | Block::Paragraph(_)
                | Block::List(_)
                | Block::Items(_)
                | Block::Quote(_)
                | Block::Code(_)
                | Block::Rule
                | Block::Tabular { .. }
                | Block::Grid(_)
                | Block::Offers(_) => None,
            })
            .collect(),
    }
}

/// The answer, the rest of it, and the methods, from the facts.
fn tell(context: &Context<'_>, cell: &Cell, facts: &Facts, report: &mut CellReport) {
    let source = Source {
        cell: cell.id,
        facts,
    };
    match &cell.settings {
        Settings::Data(data) => {
            report.answer = Some(kind::data::answer::answer(data, &source));
            report.blocks = kind::data::answer::blocks(&source);
            report.methods = kind::data::methods::methods(data, &source);
        }
        Settings::Prepare(_) => {
            report.answer = Some(kind::prepare::answer(&source));
            report.blocks = kind::prepare::blocks(&source);
            report.methods = kind::prepare::methods(&source);
        }
        Settings::Fit(fit) => {
            report.answer = Some(kind::fit::answer::answer(context, fit, &source));
            report.blocks = kind::fit::answer::blocks(context, fit, &source);
            report.methods = kind::fit::methods::methods(context, fit, &source);
        }
        Settings::Question(question) => {
            let chain = Chain::from(context, question.fit);
            report.answer = Some(kind::question::answer(&chain, question, &source));
            report.blocks = kind::question::blocks(&chain, question, &source);
            report.methods = kind::question::methods(context, &chain, question, &source);
        }
        // Their answers come with their evaluation.
        Settings::Compare(_) | Settings::Score(_) => {}
        Settings::Prose(_) => {}
    }
}
