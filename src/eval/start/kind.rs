//! What the kind of outcome decides in a study that is started: the event, the parts, the summary.

use crate::eval::start::settle::{ReadTable, key_name, key_text};
use crate::study::settings::data::OutcomeKind;
use crate::table::column::{Column, Values};
use std::collections::{BTreeMap, BTreeSet};

/// The kind that a column suggests: two values are yes or no, numbers a measured quantity.
pub(super) fn guess_kind(column: &Column, notes: &mut Vec<String>) -> OutcomeKind {
    let mut distinct = BTreeSet::new();
    for row in 0..column.len() {
        distinct.extend(key_text(column, row));
    }
    let is_number = matches!(column.values, Values::Numbers(_));
    let (kind, words) = if distinct.len() == 2 {
        (OutcomeKind::YesNo { event: None }, "yes or no")
    } else if is_number {
        (OutcomeKind::Measured, "a measured quantity")
    } else {
        (OutcomeKind::Classes, "one of several classes")
    };
    notes.push(format!("“{}” is taken as {words}.", column.name));
    kind
}

/// The column beside the outcome's that belongs to it: of times the event, of counts the exposure.
pub(super) fn event_column(kind: &OutcomeKind) -> Option<&str> {
    match kind {
        OutcomeKind::Time { event } => Some(event),
        OutcomeKind::Count { exposure } => exposure.as_deref(),
        OutcomeKind::Measured | OutcomeKind::YesNo { .. } | OutcomeKind::Classes => None,
    }
}

/// Texts that mean “yes” without being told, as the Data cell has them.
const YES: [&str; 9] = [
    "1", "yes", "y", "true", "t", "positive", "pos", "event", "present",
];

/// A yes or no with the value that counts as the event, where no value says so by itself: the rarer.
pub(super) fn with_event(
    kind: OutcomeKind,
    column: &Column,
    notes: &mut Vec<String>,
) -> OutcomeKind {
    if kind != (OutcomeKind::YesNo { event: None }) {
        return kind;
    }
    let mut counts: BTreeMap<String, usize> = BTreeMap::new();
    for row in 0..column.len() {
        if let Some(name) = key_name(column, row) {
            *counts.entry(name.trim().to_owned()).or_insert(0) += 1;
        }
    }
    let says_so = |name: &String| YES.contains(&name.to_lowercase().as_str());
    if counts.keys().any(says_so) || counts.len() != 2 {
        return kind;
    }
    let rarer = counts.iter().min_by_key(|(_, count)| **count);
    let event = rarer.map(|(name, _)| name.clone());
    if let Some(event) = &event {
        notes.push(format!(
            "“{event}” is the rarer value of “{}” and is taken as the event.",
            column.name
        ));
    }
    OutcomeKind::YesNo { event }
}

/// Of how many units the rarest class is, or in how many the event of a time was seen.
pub(super) fn rarest(
    kind: &OutcomeKind,
    outcome: &str,
    unit: Option<&str>,
    tables: &[ReadTable],
) -> Option<usize> {
    let name = match kind {
        OutcomeKind::Measured | OutcomeKind::Count { .. } => return None,
        OutcomeKind::YesNo { .. } | OutcomeKind::Classes => outcome,
        OutcomeKind::Time { event } => event,
    };
    let table = tables
        .iter()
        .find(|read| read.table.column(name).is_some())?;
    let column = table.table.column(name)?;
    let units = unit.and_then(|unit| table.table.column(unit));
    let mut of: BTreeMap<String, BTreeSet<String>> = BTreeMap::new();
    for row in 0..column.len() {
        let Some(level) = key_text(column, row) else {
            continue;
        };
        let unit = units
            .and_then(|units| key_text(units, row))
            .unwrap_or_else(|| row.to_string());
        let _ = of.entry(level).or_default().insert(unit);
    }
    let is_time = matches!(kind, OutcomeKind::Time { .. });
    of.iter()
        .filter(|(level, _)| !is_time || YES.contains(&level.as_str()))
        .map(|(_, units)| units.len())
        .min()
}

/// The summary on top of the page. Every number is a fact.
pub(super) fn summary(kind: &OutcomeKind, data: &str, fit: &str) -> String {
    let start = format!(
        "We predicted {{{data}: outcome}} from {{{data}: predictors}} predictors of {{{data}: units}} \
         independent samples by {{{fit}: penalty}} regression."
    );
    let judged = match kind {
        OutcomeKind::Measured => {
            "On samples that the fits had not seen, the root mean squared error was {FIT: nested rmse} \
             and R² was {FIT: nested r²}; on its own samples the model seemed to reach {FIT: apparent \
             r²}. The mean alone has an error of {FIT: mean-only rmse}."
        }
        OutcomeKind::YesNo { .. } => {
            "The event was seen in {FIT: events} of {FIT: samples} samples. On samples that the fits \
             had not seen, the area under the curve was {FIT: nested auc} and the Brier score {FIT: \
             nested brier}; on its own samples the model seemed to reach an area of {FIT: apparent \
             auc}. The prevalence alone has a Brier score of {FIT: baseline brier}."
        }
        OutcomeKind::Classes => {
            "Of samples that the fits had not seen, {FIT: nested accuracy} were called right; of its \
             own samples the model seemed to call {FIT: apparent accuracy} right. Always the commonest \
             class would be right in {FIT: baseline accuracy}."
        }
        OutcomeKind::Count { .. } => {
            "On samples that the fits had not seen, the share of deviance explained was {FIT: nested \
             deviance explained} and the mean absolute error {FIT: nested mae}; on its own samples the \
             model seemed to explain {FIT: apparent deviance explained}. The mean rate alone has a \
             mean absolute error of {FIT: baseline mae}."
        }
        OutcomeKind::Time { .. } => {
            "The event was seen in {FIT: events} of {FIT: samples} samples. On samples that the fits \
             had not seen, the concordance was {FIT: nested concordance}; on its own samples the model \
             seemed to reach {FIT: apparent concordance}. At {FIT: middle time} the Brier score was \
             {FIT: nested brier at the middle time}, that of one curve for all {FIT: baseline brier at \
             the middle time}."
        }
    };
    let end = "The penalty strength {FIT: chosen strength} left {FIT: chosen predictors} predictors in \
               the model.";
    format!(
        "{start} {} {}",
        judged.replace("FIT", fit),
        end.replace("FIT", fit)
    )
}
