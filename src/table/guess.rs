//! Proposed roles of columns, each with its reason. Nothing is decided here.

use crate::table::Table;
use crate::table::axis;
use crate::table::column::{Column, Values};
use crate::table::find::names::stems;
use std::collections::BTreeMap;

/// Fewer columns that are named alike are no block of measurements.
const BLOCK: usize = 3;

/// Why a role is proposed.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Reason {
    /// The column's name says so.
    Name,
    /// It holds a label of its own for every sample.
    UnlikeLabels,
    /// Its labels repeat, and the sample names begin with them.
    BeginsSampleNames,
    /// The sample names look like repeats when their last part is taken off.
    Stems,
    /// Its labels come several times each.
    RepeatedLabels,
    /// It stands apart from the block of measurements.
    OutsideBlock,
    /// It belongs to the block of measurements.
    InsideBlock,
}

/// A column and why it is proposed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Proposal {
    /// The column.
    pub column: String,
    /// Why.
    pub reason: Reason,
}

/// Columns that measure one sort of thing: an axis, or names that differ by a number.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Block {
    /// The positions of its columns, in order.
    pub columns: Vec<usize>,
    /// What their names begin with.
    pub prefix: String,
    /// The unit of the axis, if there is one.
    pub unit: Option<String>,
}

/// Proposed roles.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Proposals {
    /// The column of sample names.
    pub samples: Option<Proposal>,
    /// The column of units.
    pub unit: Option<Proposal>,
    /// Units made from the sample names, where no column names them: how many.
    pub units_from_names: Option<usize>,
    /// Candidates for the outcome, the likeliest first.
    pub outcomes: Vec<Proposal>,
    /// Candidates for batches.
    pub batches: Vec<Proposal>,
    /// The order of measurement.
    pub order: Option<Proposal>,
    /// Blocks of predictors, the largest first.
    pub blocks: Vec<Block>,
}

/// Proposes roles for the columns of a table.
#[must_use]
pub fn roles(table: &Table) -> Proposals {
    let blocks = blocks(table);
    let mut in_block = vec![false; table.columns().len()];
    for &at in blocks.iter().flat_map(|block| &block.columns) {
        in_block[at] = true;
    }
    let mut proposals = Proposals {
        samples: samples(table),
        blocks,
        ..Proposals::default()
    };
    let samples = proposals
        .samples
        .as_ref()
        .and_then(|p| table.position(&p.column));
    proposals.unit = unit(table, samples);
    if proposals.unit.is_none() {
        proposals.units_from_names = samples.and_then(|at| {
            let stems = stems(&table.columns()[at].labels())?;
            let mut unlike: Vec<&String> = stems.iter().flatten().collect();
            unlike.sort_unstable();
            unlike.dedup();
            Some(unlike.len())
        });
    }
    let unit = proposals
        .unit
        .as_ref()
        .map(|proposal| proposal.column.clone());
    let is_taken =
        |at: usize| Some(at) == samples || Some(&table.columns()[at].name) == unit.as_ref();
    let free: Vec<usize> = (0..in_block.len())
        .filter(|&at| !is_taken(at) && !in_block[at])
        .collect();
    proposals.order = free
        .iter()
        .map(|&at| &table.columns()[at])
        .find(|column| says(&column.name, ORDER))
        .map(by_name);
    for &at in &free {
        let column = &table.columns()[at];
        if says(&column.name, BATCH) && repeats(column) {
            proposals.batches.push(by_name(column));
        }
    }
    proposals.outcomes = outcomes(table, &free, &proposals);
    proposals
}

const SAMPLE: &[&str] = &[
    "sample", "samples", "sampleid", "id", "name", "specimen", "scan", "code", "label", "barcode",
];
const UNIT: &[&str] = &[
    "unit",
    "wheel",
    "plot",
    "animal",
    "plant",
    "tree",
    "batch_unit",
    "subject",
    "lot",
    "bay",
    "family",
    "group",
    "individual",
    "field",
    "line",
    "cow",
    "well",
    "site_id",
];
const BATCH: &[&str] = &[
    "batch",
    "plate",
    "run",
    "cave",
    "site",
    "operator",
    "crew",
    "probe",
    "instrument",
    "week",
    "day",
    "season",
    "laboratory",
    "lab",
    "lane",
    "block",
    "tray",
    "session",
];
const ORDER: &[&str] = &[
    "order",
    "injection",
    "sequence",
    "position",
    "time",
    "date",
    "timestamp",
    "acquired",
    "measured",
];
const OUTCOME: &[&str] = &[
    "outcome",
    "response",
    "target",
    "y",
    "class",
    "result",
    "reference",
    "yield",
    "score",
    "status",
];

fn says(name: &str, words: &[&str]) -> bool {
    name.to_lowercase()
        .split(|letter: char| !letter.is_alphanumeric())
        .any(|word| words.contains(&word))
}

fn by_name(column: &Column) -> Proposal {
    Proposal {
        column: column.name.clone(),
        reason: Reason::Name,
    }
}

/// How many labels there are, and how many unlike ones.
fn variety(column: &Column) -> (usize, usize) {
    let labels = column.labels();
    let mut filled: Vec<&String> = labels.iter().flatten().collect();
    let all = filled.len();
    filled.sort_unstable();
    filled.dedup();
    (all, filled.len())
}

fn repeats(column: &Column) -> bool {
    let (all, unlike) = variety(column);
    unlike > 1 && unlike * 2 <= all
}

fn samples(table: &Table) -> Option<Proposal> {
    let is_own = |column: &&Column| {
        let (all, unlike) = variety(column);
        // A few repeated names are damage; half of them are not names.
        all * 10 >= table.n_rows() * 9 && unlike * 10 >= all * 9
    };
    let texts = || table.columns().iter().filter(|column| !column.is_numeric());
    let by_word = texts()
        .filter(is_own)
        .find(|column| says(&column.name, SAMPLE));
    if let Some(column) = by_word {
        return Some(by_name(column));
    }
    texts().find(is_own).map(|column| Proposal {
        column: column.name.clone(),
        reason: Reason::UnlikeLabels,
    })
}

fn unit(table: &Table, samples: Option<usize>) -> Option<Proposal> {
    let names = samples.map(|at| table.columns()[at].labels());
    let labels = || {
        table
            .columns()
            .iter()
            .enumerate()
            .filter(|(at, column)| Some(*at) != samples && !column.is_numeric())
            .map(|(_, column)| column)
    };
    let begins_names = |column: &&Column| {
        let (all, unlike) = variety(column);
        names.as_ref().is_some_and(|names| {
            unlike > 2
                && unlike < all
                && column
                    .labels()
                    .iter()
                    .zip(names)
                    .all(|(label, name)| match (label, name) {
                        (Some(label), Some(name)) => name.starts_with(label.as_str()),
                        _ => true,
                    })
        })
    };
    if let Some(column) = labels().find(begins_names) {
        return Some(Proposal {
            column: column.name.clone(),
            reason: Reason::BeginsSampleNames,
        });
    }
    labels()
        .filter(|column| {
            let (all, unlike) = variety(column);
            unlike > 2 && unlike < all
        })
        .find(|column| says(&column.name, UNIT))
        .map(by_name)
}

/// Blocks of numeric columns whose names differ by a number only.
fn blocks(table: &Table) -> Vec<Block> {
    let mut families: BTreeMap<(String, String), Vec<usize>> = BTreeMap::new();
    for (at, column) in table.columns().iter().enumerate() {
        if !column.is_numeric() {
            continue;
        }
        // Three equal names would be an axis of nothing; only the parts are wanted here.
        if let Some((prefix, suffix)) = axis::surroundings(&column.name) {
            families.entry((prefix, suffix)).or_default().push(at);
        }
    }
    let mut blocks: Vec<Block> = families
        .into_iter()
        .filter(|(_, columns)| columns.len() >= BLOCK)
        .map(|((prefix, suffix), columns)| Block {
            unit: axis::unit_of(&prefix, &suffix),
            prefix,
            columns,
        })
        .collect();
    blocks.sort_by(|a, b| {
        b.columns
            .len()
            .cmp(&a.columns.len())
            .then(a.columns.cmp(&b.columns))
    });
    // Beside a large block, a handful of columns that happen to be numbered is none.
    let largest = blocks.first().map_or(0, |block| block.columns.len());
    blocks.retain(|block| block.columns.len() * 20 >= largest);
    blocks
}

fn outcomes(table: &Table, free: &[usize], proposals: &Proposals) -> Vec<Proposal> {
    let is_other = |column: &Column| {
        proposals
            .batches
            .iter()
            .any(|batch| batch.column == column.name)
            || proposals
                .order
                .as_ref()
                .is_some_and(|order| order.column == column.name)
    };
    let can_be = |column: &&Column| {
        let (all, unlike) = variety(column);
        let is_varied = unlike > 1 && all * 2 > table.n_rows();
        is_varied
            && match &column.values {
                Values::Numbers(_) => true,
                // Classes, not names.
                Values::Texts(_) => unlike * 3 <= all,
            }
    };
    let mut candidates: Vec<Proposal> = free
        .iter()
        .map(|&at| &table.columns()[at])
        .filter(|column| !is_other(column))
        .filter(can_be)
        .map(|column| Proposal {
            column: column.name.clone(),
            reason: if says(&column.name, OUTCOME) {
                Reason::Name
            } else {
                Reason::OutsideBlock
            },
        })
        .collect();
    candidates.sort_by_key(|proposal| proposal.reason != Reason::Name);
    // Without a block everything stands outside it, which says nothing.
    if proposals.blocks.is_empty() {
        candidates.retain(|proposal| proposal.reason == Reason::Name);
    }
    candidates
}

#[cfg(test)]
mod tests {
    use super::*;

    fn numbers(name: &str, n: usize) -> Column {
        Column::numbers(
            name,
            (0..n).map(|row| (row * 7 % 11) as f64 + 0.5).collect(),
        )
    }

    fn texts(name: &str, n: usize, label: impl Fn(usize) -> String) -> Column {
        Column::texts(name, (0..n).map(|row| Some(label(row))).collect())
    }

    #[test]
    fn roles_are_proposed_with_their_reasons() {
        let n = 12;
        let mut columns = vec![
            texts("scan", n, |row| format!("K-{:02}_{}", row / 3, row % 3)),
            texts("wheel", n, |row| format!("K-{:02}", row / 3)),
            texts("cave", n, |row| ["north", "south"][row / 6].to_owned()),
            numbers("order", n),
            numbers("salt in moisture", n),
        ];
        columns.extend((0..20).map(|at| numbers(&format!("{} nm", 900 + 2 * at), n)));
        let proposals = roles(&Table::new(columns));
        assert_eq!(
            proposals.samples,
            Some(Proposal {
                column: "scan".to_owned(),
                reason: Reason::Name
            })
        );
        assert_eq!(
            proposals.unit,
            Some(Proposal {
                column: "wheel".to_owned(),
                reason: Reason::BeginsSampleNames
            })
        );
        assert_eq!(proposals.batches[0].column, "cave");
        assert_eq!(proposals.order.unwrap().column, "order");
        let outcomes: Vec<_> = proposals
            .outcomes
            .iter()
            .map(|p| p.column.as_str())
            .collect();
        assert_eq!(outcomes, ["salt in moisture"]);
        assert_eq!(proposals.blocks.len(), 1);
        assert_eq!(proposals.blocks[0].columns, (5..25).collect::<Vec<_>>());
        assert_eq!(proposals.blocks[0].unit.as_deref(), Some("nm"));
    }

    #[test]
    fn units_are_counted_from_the_names_where_no_column_has_them() {
        let n = 12;
        let mut columns = vec![texts("name", n, |row| {
            format!("B{:02}-n{}", row / 2, row % 2)
        })];
        columns.extend((0..5).map(|at| numbers(&format!("x{at}"), n)));
        let proposals = roles(&Table::new(columns));
        assert_eq!(
            (proposals.unit, proposals.units_from_names),
            (None, Some(6))
        );
        assert!(proposals.outcomes.is_empty());
    }
}
