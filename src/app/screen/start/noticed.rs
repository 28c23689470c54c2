//! What stands beside the preview: what the columns may be, and what was noticed on reading.

use crate::app::screen::start::role::{Role, Roles};
use crate::app::screen::start::taken::Taken;
use crate::app::screen::start::{Message, Start};
use crate::app::theme::button::Look;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::base::number::{self, Precision};
use crate::eval::finding;
use crate::table::guess::{Proposal, Reason};
use iced::widget::{Column, Row, column};

/// How many candidates for a role are named.
const NAMED: usize = 4;

impl Start {
    /// What the columns of a table may be, then its import report.
    pub(super) fn noticed<'a>(&'a self, taken: &'a Taken) -> Element<'a, Message> {
        let mut parts = Column::new().spacing(space::GAP);
        if let Some(proposed) = proposed(&self.roles, taken) {
            parts = parts.push(proposed);
        }
        parts.push(report(taken)).into()
    }
}

/// The import report: what was noticed, how it was treated, and what could be done.
fn report(taken: &Taken) -> Element<'_, Message> {
    let findings = &taken.reading.findings;
    let mut parts = Column::new()
        .spacing(space::SMALL + space::TIGHT)
        .push(text::heading("What was noticed on reading"));
    if findings.is_empty() {
        parts = parts.push(text::quiet("Nothing out of the ordinary."));
    }
    for found in findings {
        parts = parts.push(column![
            text::body(finding::sentence(found)),
            text::quiet(finding::treatment(found)),
        ]);
    }
    parts.into()
}

/// What the columns may be, with the reason; candidates can be pressed.
fn proposed<'a>(roles: &Roles, taken: &'a Taken) -> Option<Element<'a, Message>> {
    let proposals = &taken.proposals;
    let mut parts = Vec::new();
    let settled = [
        (&proposals.samples, Role::SampleName),
        (&proposals.unit, Role::Unit),
    ];
    for (proposal, role) in settled {
        let Some(proposal) = proposal else { continue };
        if roles.given(&proposal.column) == Some(role) {
            let words = format!(
                "“{}” was taken as the {}: {}.",
                proposal.column,
                role.word(),
                reason(proposal.reason)
            );
            parts.push(text::body(words).into());
        }
    }
    if let Some(count) = proposals.units_from_names
        && roles.first(Role::Unit).is_none()
    {
        let words = format!(
            "The sample names look like repeats of {} units, but no column names the units.",
            number::text(count as f64, Precision::Whole)
        );
        parts.push(text::body(words).into());
    }
    if roles.first(Role::Outcome).is_none() {
        parts.extend(offered(
            "Is this predicted?",
            &proposals.outcomes,
            Role::Outcome,
        ));
    }
    if roles.first(Role::Batch).is_none() {
        parts.extend(offered(
            "Does this name the batches?",
            &proposals.batches,
            Role::Batch,
        ));
    }
    if roles.first(Role::Order).is_none() {
        let order: Vec<Proposal> = proposals.order.iter().cloned().collect();
        parts.extend(offered(
            "Is this the order of measurement?",
            &order,
            Role::Order,
        ));
    }
    if parts.is_empty() {
        return None;
    }
    let heading = text::heading("What the columns may be").into();
    let all = std::iter::once(heading).chain(parts);
    Some(Column::with_children(all).spacing(space::SMALL).into())
}

/// Candidates for a role, as words to press.
fn offered<'a>(
    question: &'static str,
    proposals: &[Proposal],
    role: Role,
) -> Option<Element<'a, Message>> {
    if proposals.is_empty() {
        return None;
    }
    let words = proposals.iter().take(NAMED).map(|proposal| {
        let message = Message::Propose(proposal.column.clone(), role);
        press::words(proposal.column.clone(), message)
            .look(Look::Accent)
            .into()
    });
    let words = Row::with_children(words).spacing(space::TIGHT).wrap();
    Some(column![text::quiet(question), words].into())
}

/// Why a role was taken.
const fn reason(reason: Reason) -> &'static str {
    match reason {
        Reason::Name => "its name says so",
        Reason::UnlikeLabels => "every label stands once",
        Reason::BeginsSampleNames => "the sample names begin with its labels",
        Reason::Stems => "the sample names differ in their last part only",
        Reason::RepeatedLabels => "its labels come several times each",
        Reason::OutsideBlock => "it stands apart from the measurements",
        Reason::InsideBlock => "it belongs to the measurements",
    }
}
