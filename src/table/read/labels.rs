//! Labels of samples: kept letter for letter, with what may have happened to them.

use crate::table::finding::{FindingKind, Treatment};
use crate::table::read::assemble::{Gather, Whereabouts};
use crate::table::read::cell::{
    has_leading_zeros, is_date, is_exponent, is_missing_label, trimmed,
};
use crate::table::read::letters;
use crate::table::read::raw::{Raw, Stored};
use std::collections::BTreeMap;

/// Columns with more unlike labels are names; names may well differ by capitals only.
const FEW: usize = 500;

/// The labels of a column, and what was noticed about them.
pub fn labels(
    raw: Raw<'_>,
    n_rows: usize,
    codes: &[String],
    place: &Whereabouts,
    gather: &mut Gather,
) -> Vec<Option<String>> {
    let mut labels = vec![None; n_rows];
    let is_mixed = raw.odd.iter().any(|odd| odd.stored == Stored::Text);
    for odd in raw.odd {
        let text = trimmed(&odd.text);
        let at = || place.place(odd.row, raw.line, &raw.name);
        let mut note = |kind, treatment| gather.add(kind, treatment, &raw.name, at, text);
        match odd.stored {
            Stored::Error => {
                note(FindingKind::ErrorValues, Treatment::CountedAsMissing);
                continue;
            }
            Stored::Date if is_mixed => note(FindingKind::DatesAmongLabels, Treatment::KeptAsText),
            Stored::Number if is_mixed => {
                note(FindingKind::NumbersAmongLabels, Treatment::KeptAsText);
            }
            Stored::Date | Stored::Number | Stored::Truth => {}
            Stored::Text => {
                if codes.iter().any(|code| code == text) {
                    note(FindingKind::MissingCodes, Treatment::CountedAsMissing);
                    continue;
                }
                if is_missing_label(text) {
                    let kind = FindingKind::MissingWords { words: Vec::new() };
                    note(kind, Treatment::CountedAsMissing);
                    continue;
                }
                let kept = Treatment::KeptAsText;
                if has_leading_zeros(text) {
                    note(FindingKind::LeadingZeros, kept);
                } else if is_exponent(text) {
                    note(FindingKind::ExponentLabels, kept);
                } else if is_date(text) {
                    note(FindingKind::DateLabels, kept);
                } else if letters::is_broken(text) {
                    note(FindingKind::BrokenLetters, kept);
                }
                if text.len() != odd.text.len() {
                    note(FindingKind::BlanksAround, Treatment::BlanksTakenOff);
                }
            }
        }
        labels[odd.row as usize] = Some(text.to_owned());
    }
    variants(&labels, &raw.name, place, raw.line, gather);
    labels
}

/// The same label but for capitals, blanks and hyphens.
fn folded(label: &str) -> String {
    label
        .chars()
        .filter(|letter| letter.is_alphanumeric() || matches!(letter, '+' | '<' | '>' | '.'))
        .flat_map(char::to_lowercase)
        .collect()
}

/// Finds groups that look like one group written in several ways.
fn variants(
    labels: &[Option<String>],
    name: &str,
    place: &Whereabouts,
    line: u32,
    gather: &mut Gather,
) {
    let mut counts: BTreeMap<&str, (usize, usize)> = BTreeMap::new();
    for (row, label) in labels.iter().enumerate() {
        if let Some(label) = label {
            counts.entry(label).or_insert((0, row)).0 += 1;
            if counts.len() > FEW {
                return;
            }
        }
    }
    let filled = labels.iter().flatten().count();
    // Where most labels come once they are names, not groups.
    if counts.len() * 2 > filled {
        return;
    }
    let mut groups: BTreeMap<String, Vec<(&str, usize, usize)>> = BTreeMap::new();
    for (label, (count, row)) in counts {
        groups
            .entry(folded(label))
            .or_default()
            .push((label, count, row));
    }
    for mut group in groups.into_values().filter(|group| group.len() > 1) {
        // The rarer ways of writing are the ones to look at.
        group.sort_by(|a, b| b.1.cmp(&a.1).then(a.0.cmp(b.0)));
        for (label, _, row) in group {
            gather.add(
                FindingKind::LabelVariants,
                Treatment::Kept,
                name,
                || place.place(row as u32, line, name),
                label,
            );
        }
    }
}
