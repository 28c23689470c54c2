//! Names of samples: repeated, missing, or looking like repeats of one unit.

use crate::table::Table;
use crate::table::finding::{Finding, FindingKind, Treatment};
use std::collections::BTreeMap;

/// Of all names, at least this share must have a sibling to look like repeats (caveat 13).
const SHARE: f64 = 0.10;

/// Samples that have the name of another.
#[must_use]
pub fn repeated(table: &Table, samples: usize) -> Option<Finding> {
    let labels = table.columns()[samples].labels();
    let mut rows: BTreeMap<&str, Vec<usize>> = BTreeMap::new();
    for (row, label) in labels.iter().enumerate() {
        if let Some(label) = label {
            rows.entry(label).or_default().push(row);
        }
    }
    let mut finding = Finding::new(FindingKind::RepeatedSamples, Treatment::Kept);
    finding.add_column(&table.columns()[samples].name);
    let mut repeated: Vec<(usize, &str)> = rows
        .iter()
        .filter(|(_, rows)| rows.len() > 1)
        .flat_map(|(label, rows)| rows.iter().map(|&row| (row, *label)))
        .collect();
    repeated.sort_unstable();
    for (row, label) in repeated {
        finding.add(|| table.place(row, samples), label);
    }
    (finding.count > 0).then_some(finding)
}

/// Samples without a name.
#[must_use]
pub fn unnamed(table: &Table, samples: usize) -> Option<Finding> {
    let labels = table.columns()[samples].labels();
    let mut finding = Finding::new(FindingKind::UnnamedSamples, Treatment::Kept);
    finding.add_column(&table.columns()[samples].name);
    for (row, _) in labels
        .iter()
        .enumerate()
        .filter(|(_, label)| label.is_none())
    {
        finding.add(|| table.place(row, samples), "");
    }
    (finding.count > 0).then_some(finding)
}

/// Names that look like repeats of one unit, such as K-1_a and K-1_b.
#[must_use]
pub fn repeats(table: &Table, samples: usize) -> Option<Finding> {
    let labels = table.columns()[samples].labels();
    let stems = stems(&labels)?;
    let mut counts: BTreeMap<&str, usize> = BTreeMap::new();
    for stem in stems.iter().flatten() {
        *counts.entry(stem).or_default() += 1;
    }
    let mut finding = Finding::new(
        FindingKind::LooksLikeRepeats {
            n_units: counts.len(),
        },
        Treatment::Kept,
    );
    finding.add_column(&table.columns()[samples].name);
    for (row, (label, stem)) in labels.iter().zip(&stems).enumerate() {
        if let (Some(label), Some(stem)) = (label, stem)
            && counts[stem.as_str()] > 1
        {
            finding.add(|| table.place(row, samples), label);
        }
    }
    Some(finding)
}

/// The unit that each name stands for, if names look like repeats of units: the same names
/// without a last part such as `_1`, `-a`, ` rep 2`, `.n3`, `_day7`, where at least a tenth of
/// the names have a sibling and there are not fewer than three units.
///
/// A name that has nothing to take off is its own unit; a missing name has none.
#[must_use]
pub fn stems(labels: &[Option<String>]) -> Option<Vec<Option<String>>> {
    let stems: Vec<Option<String>> = labels
        .iter()
        .map(|label| label.as_ref().map(|label| unit_of(label).to_owned()))
        .collect();
    let mut members: BTreeMap<&str, Vec<&str>> = BTreeMap::new();
    for (label, stem) in labels.iter().zip(&stems) {
        if let (Some(label), Some(stem)) = (label, stem) {
            members.entry(stem).or_default().push(label);
        }
    }
    let named: usize = members.values().map(Vec::len).sum();
    // The same name twice is a repeated name, not a repeat of a unit.
    let with_siblings: usize = members
        .values()
        .filter(|labels| labels.iter().any(|label| label != &labels[0]))
        .map(Vec::len)
        .sum();
    // Fewer than three units: “K-1 … K-40” is a count of samples of one sort, not of repeats.
    // And a unit of more than half of all samples is a sort of samples, too.
    let largest = members.values().map(Vec::len).max().unwrap_or(0);
    let are_repeats = with_siblings as f64 >= SHARE * named as f64
        && with_siblings > 0
        && members.len() >= 3
        && largest * 2 <= named;
    are_repeats.then_some(stems)
}

/// The unit that a name stands for: the name without a last part that counts repeats.
#[must_use]
pub fn unit_of(name: &str) -> &str {
    stem(name).unwrap_or(name)
}

/// A name without its last part, if that part counts repeats.
fn stem(label: &str) -> Option<&str> {
    const WORDS: [&str; 16] = [
        "rep",
        "replicate",
        "scan",
        "day",
        "night",
        "visit",
        "n",
        "r",
        "t",
        "d",
        "s",
        "run",
        "dup",
        "copy",
        "tech",
        "v",
    ];
    let at = label.rfind(['_', '-', '.', ' ', '/', '#', ':'])?;
    let (stem, last) = (&label[..at], &label[at + 1..]);
    let stem = stem.trim_end_matches(['_', '-', '.', ' ', '/', '#', ':']);
    if stem.is_empty() || last.is_empty() {
        return None;
    }
    let small = last.to_lowercase();
    let word = small.trim_end_matches(|letter: char| letter.is_ascii_digit());
    let digits = small.len() - word.len();
    let is_counter = match word {
        // A short number; longer ones name things.
        "" => digits <= 2,
        // A single letter.
        _ if digits == 0 => small.chars().count() == 1 || WORDS.contains(&word),
        _ => digits <= 3 && WORDS.contains(&word),
    };
    if !is_counter {
        return None;
    }
    // “K-1 rep 2”: the word may stand apart from its number.
    if word.is_empty()
        && let Some(cut) = stem.rfind(['_', '-', '.', ' '])
    {
        let before = stem[cut + 1..].to_lowercase();
        if WORDS.contains(&before.as_str()) && cut > 0 {
            return Some(&stem[..cut]);
        }
    }
    Some(stem)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(labels: &[&str]) -> Option<Vec<String>> {
        let labels: Vec<_> = labels
            .iter()
            .map(|label| Some((*label).to_owned()))
            .collect();
        stems(&labels).map(|stems| stems.into_iter().flatten().collect())
    }

    #[test]
    fn repeats_of_units_are_seen_in_their_names() {
        assert_eq!(
            of(&["B07-n1", "B07-n2", "B08-n1", "B09-n1"]).unwrap(),
            ["B07", "B07", "B08", "B09"]
        );
        assert_eq!(
            of(&["W1_a", "W1_b", "W2_a", "W2_b", "W3_a", "W3_b"]).unwrap(),
            ["W1", "W1", "W2", "W2", "W3", "W3"]
        );
        assert_eq!(
            of(&["lot 4 rep 1", "lot 4 rep 2", "lot 5 rep 1", "lot 6 rep 1"]).unwrap(),
            ["lot 4", "lot 4", "lot 5", "lot 6"]
        );
    }

    #[test]
    fn a_running_number_is_no_repeat() {
        let names: Vec<String> = (1..40).map(|k| format!("K-{k}")).collect();
        let names: Vec<&str> = names.iter().map(String::as_str).collect();
        assert_eq!(of(&names), None);
        assert_eq!(
            of(&[
                "north-1", "north-2", "north-3", "south-1", "south-2", "south-3"
            ]),
            None
        );
        assert_eq!(of(&["K-001", "K-002", "L-001"]), None);
    }
}
