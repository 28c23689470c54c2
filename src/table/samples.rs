//! Joining tables on the names of samples or units.

use crate::table::column::{Column, Numbers, Values};
use crate::table::{Lines, Origin, Table};
use std::collections::{BTreeMap, BTreeSet, HashMap, HashSet};

/// Whether capitals tell keys apart.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum LetterCase {
    /// “K-1” and “k-1” are two keys.
    #[default]
    Distinct,
    /// “K-1” and “k-1” are one key.
    Folded,
}

/// Whether zeros before a number tell keys apart.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum LeadingZeros {
    /// “007” and “7” are two keys.
    #[default]
    Kept,
    /// “007” and “7” are one key, and so are “K-007” and “K-7”.
    Ignored,
}

/// When two keys are the same. Blanks around a key never matter.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub struct JoinRule {
    /// Whether capitals matter.
    pub case: LetterCase,
    /// Whether leading zeros matter.
    pub zeros: LeadingZeros,
}

impl JoinRule {
    /// The rule under which the most keys are the same.
    #[must_use]
    pub fn loosest() -> Self {
        Self {
            case: LetterCase::Folded,
            zeros: LeadingZeros::Ignored,
        }
    }

    /// The form of a key in which equal keys are equal texts.
    #[must_use]
    pub fn fold(self, key: &str) -> String {
        let key = key.trim();
        let key = match self.case {
            LetterCase::Distinct => key.to_owned(),
            LetterCase::Folded => key.to_lowercase(),
        };
        match self.zeros {
            LeadingZeros::Kept => key,
            LeadingZeros::Ignored => without_zeros(&key),
        }
    }
}

/// Takes the leading zeros off every number in a key; decimals keep theirs.
fn without_zeros(key: &str) -> String {
    let mut folded = String::with_capacity(key.len());
    let mut rest = key;
    while let Some(start) = rest.find(|letter: char| letter.is_ascii_digit()) {
        folded.push_str(&rest[..start]);
        let number = &rest[start..];
        let is_part = |letter: char| letter.is_ascii_digit() || letter == '.';
        let length = number
            .find(|letter| !is_part(letter))
            .unwrap_or(number.len());
        let (number, behind) = number.split_at(length);
        let bare = number.trim_start_matches('0');
        if !bare.starts_with(|letter: char| letter.is_ascii_digit()) {
            folded.push('0');
        }
        folded.push_str(bare);
        rest = behind;
    }
    folded.push_str(rest);
    folded
}

/// What a join did, with the keys as written.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct JoinReport {
    /// The rule that was followed.
    pub rule: JoinRule,
    /// How many rows of the left table found their values.
    pub matched: usize,
    /// Keys of the left table that the right one lacks; each once.
    pub only_left: Vec<String>,
    /// How many rows of the left table have no key.
    pub unnamed_left: usize,
    /// Keys of the right table that the left one lacks; each once.
    pub only_right: Vec<String>,
    /// Keys that come more than once in the right table with differing values: nothing is
    /// taken from them, since nobody knows which.
    pub repeated_right: Vec<String>,
    /// How many rows of the left table lack values for that reason.
    pub undecided: usize,
    /// The most rows of the left table that one row of the right one served.
    pub most_shared: usize,
    /// Columns of the right table whose name was taken: the old and the new name.
    pub renamed: Vec<(String, String)>,
    /// How many rows would match under [`JoinRule::loosest`], if that is more.
    pub loosely_matched: Option<usize>,
}

/// A table of a join.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// The one whose rows are kept.
    Left,
    /// The one that is looked up.
    Right,
}

/// Why tables cannot be joined.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum JoinError {
    /// A table lacks its key column.
    NoSuchColumn {
        /// Which table.
        side: Side,
        /// The column that was asked for.
        name: String,
    },
    /// No key of the left table is in the right one.
    NothingMatches {
        /// The first keys of the left table.
        left: Vec<String>,
        /// The first keys of the right table.
        right: Vec<String>,
        /// How many rows would match under [`JoinRule::loosest`].
        loosely: usize,
    },
}

/// Adds the columns of `right` to `left`, where the keys are the same.
///
/// Many rows of `left` may have one key (three scans of a wheel, one laboratory value). The
/// number and the order of the rows of `left` never change.
///
/// # Errors
/// [`JoinError`] when a key column does not exist, or no key matches.
pub fn join(
    left: &Table,
    left_key: &str,
    right: &Table,
    right_key: &str,
    rule: &JoinRule,
) -> Result<(Table, JoinReport), JoinError> {
    let column = |table: &Table, side, name: &str| {
        table.position(name).ok_or_else(|| JoinError::NoSuchColumn {
            side,
            name: name.to_owned(),
        })
    };
    let left_at = column(left, Side::Left, left_key)?;
    let right_at = column(right, Side::Right, right_key)?;
    let left_keys = left.columns()[left_at].labels();
    let right_keys = right.columns()[right_at].labels();

    let mut report = JoinReport {
        rule: *rule,
        ..JoinReport::default()
    };
    let index = index(&right_keys, *rule);
    let mut answer: HashMap<&str, Option<usize>> = HashMap::with_capacity(index.len());
    for (folded, rows) in &index {
        let row = all_equal(right, right_at, rows).then_some(rows[0]);
        if row.is_none() {
            report.repeated_right.extend(right_keys[rows[0]].clone());
        }
        let _ = answer.insert(folded, row);
    }
    let mut only_left = BTreeSet::new();
    let mut used = BTreeSet::new();
    let mut rows = Vec::with_capacity(left.n_rows());
    for key in &left_keys {
        let Some(key) = key else {
            report.unnamed_left += 1;
            rows.push(None);
            continue;
        };
        let folded = rule.fold(key);
        let row = answer.get(folded.as_str()).copied();
        match row {
            Some(Some(_)) => report.matched += 1,
            Some(None) => report.undecided += 1,
            None => {
                if only_left.insert(folded.clone()) {
                    report.only_left.push(key.clone());
                }
            }
        }
        rows.push(row.flatten());
        let _ = used.insert(folded);
    }
    let mut served = vec![0_usize; right.n_rows()];
    for &row in rows.iter().flatten() {
        served[row] += 1;
    }
    report.most_shared = served.into_iter().max().unwrap_or(0);
    report.only_right = index
        .iter()
        .filter(|(folded, _)| !used.contains(*folded))
        .filter_map(|(_, rows)| right_keys[rows[0]].clone())
        .collect();
    let loosely = matches_under(&left_keys, &right_keys, JoinRule::loosest());
    report.loosely_matched = (loosely > report.matched + report.undecided).then_some(loosely);
    if report.matched == 0 {
        let first = |keys: &[Option<String>]| keys.iter().flatten().take(3).cloned().collect();
        return Err(JoinError::NothingMatches {
            left: first(&left_keys),
            right: first(&right_keys),
            loosely,
        });
    }
    let table = widened(left, right, right_at, &rows, &mut report);
    Ok((table, report))
}

/// The rows of every key, by its folded form.
fn index(keys: &[Option<String>], rule: JoinRule) -> BTreeMap<String, Vec<usize>> {
    let mut index: BTreeMap<String, Vec<usize>> = BTreeMap::new();
    for (row, key) in keys.iter().enumerate() {
        if let Some(key) = key {
            index.entry(rule.fold(key)).or_default().push(row);
        }
    }
    index
}

fn matches_under(left: &[Option<String>], right: &[Option<String>], rule: JoinRule) -> usize {
    let known = index(right, rule);
    left.iter()
        .flatten()
        .filter(|key| known.contains_key(&rule.fold(key)))
        .count()
}

fn all_equal(table: &Table, key: usize, rows: &[usize]) -> bool {
    rows.iter().skip(1).all(|&row| {
        let others = table
            .columns()
            .iter()
            .enumerate()
            .filter(|(at, _)| *at != key);
        others
            .into_iter()
            .all(|(_, column)| column.value(row) == column.value(rows[0]))
    })
}

fn widened(
    left: &Table,
    right: &Table,
    right_key: usize,
    rows: &[Option<usize>],
    report: &mut JoinReport,
) -> Table {
    let mut table = left.clone();
    let first_origin = table.origins.len() as u16;
    table
        .origins
        .extend(right.origins.iter().map(|origin| looked_up(origin, rows)));
    let mut taken: HashSet<String> = left.columns().iter().map(|c| c.name.clone()).collect();
    let (mut columns, mut sources) = (Vec::new(), Vec::new());
    for (at, column) in right.columns().iter().enumerate() {
        if at == right_key {
            continue;
        }
        let name = free_name(&taken, right, &column.name);
        let _ = taken.insert(name.clone());
        if name != column.name {
            report.renamed.push((column.name.clone(), name.clone()));
        }
        let (origin, line) = right.source[at];
        columns.push(Column {
            name,
            unit: column.unit.clone(),
            values: values(column, rows),
        });
        sources.push((first_origin + origin, line));
    }
    table.add(columns, sources);
    table
}

fn free_name(taken: &HashSet<String>, right: &Table, name: &str) -> String {
    let is_free = |name: &str| !taken.contains(name);
    if is_free(name) {
        return name.to_owned();
    }
    (1..)
        .map(|count: usize| match count {
            1 => format!("{name} (joined)"),
            _ => format!("{name} (joined {count})"),
        })
        .find(|name| is_free(name) && right.position(name).is_none())
        .expect("the numbers do not end")
}

fn looked_up(origin: &Origin, rows: &[Option<usize>]) -> Origin {
    let lines = match &origin.lines {
        Lines::Unknown => Lines::Rows(
            rows.iter()
                .map(|row| row.map_or(0, |row| row as u32 + 1))
                .collect(),
        ),
        Lines::Rows(at) => Lines::Rows(
            rows.iter()
                .map(|row| row.map_or(0, |row| at[row]))
                .collect(),
        ),
        Lines::Columns(heads) => Lines::Columns(
            rows.iter()
                .map(|row| row.map_or(String::new(), |row| heads[row].clone()))
                .collect(),
        ),
    };
    Origin {
        lines,
        ..origin.clone()
    }
}

fn values(column: &Column, rows: &[Option<usize>]) -> Values {
    match &column.values {
        Values::Texts(texts) => Values::Texts(
            rows.iter()
                .map(|row| row.and_then(|row| texts[row].clone()))
                .collect(),
        ),
        Values::Numbers(numbers) => {
            let values = rows
                .iter()
                .map(|row| row.map_or(f64::NAN, |row| numbers.values()[row]))
                .collect();
            let censored = rows
                .iter()
                .enumerate()
                .filter_map(|(at, row)| {
                    let known = numbers.censored();
                    let found = known.binary_search_by_key(&(*row)?, |(row, _)| *row as usize);
                    Some((at as u32, known[found.ok()?].1))
                })
                .collect();
            Values::Numbers(Numbers::with_censored(values, censored))
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::table::column::{Censored, Value};

    fn scans() -> Table {
        Table::new(vec![
            Column::texts(
                "scan",
                ["a-1", "a-2", "b-1", "c-1", "x-1"].map(Some).to_vec(),
            ),
            Column::texts(
                "wheel",
                vec![
                    Some("K-01"),
                    Some("K-01"),
                    Some("k-02"),
                    Some(" K-3 "),
                    None,
                ],
            ),
            Column::numbers("fat", vec![1.0, 2.0, 3.0, 4.0, 5.0]),
        ])
    }

    fn laboratory() -> Table {
        let mut iron = Column::numbers("iron", vec![0.5, f64::NAN, 2.5, 9.0]);
        iron.values = Values::Numbers(Numbers::with_censored(
            vec![0.5, f64::NAN, 2.5, 9.0],
            vec![(1, Censored::Below(0.1))],
        ));
        Table::new(vec![
            Column::texts("id", ["K-1", "K-02", "K-03", "K-9"].map(Some).to_vec()),
            iron,
            Column::numbers("fat", vec![30.0, 31.0, 32.0, 33.0]),
        ])
    }

    #[test]
    fn a_join_keeps_the_rows_and_lists_who_did_not_match() {
        let (table, report) =
            join(&scans(), "wheel", &laboratory(), "id", &JoinRule::loosest()).unwrap();
        assert_eq!(table.n_rows(), 5);
        assert_eq!((report.matched, report.unnamed_left), (4, 1));
        assert_eq!(report.only_right, ["K-9"]);
        assert!(report.only_left.is_empty());
        assert_eq!(
            report.renamed,
            [("fat".to_owned(), "fat (joined)".to_owned())]
        );
        let iron = table.column("iron").unwrap();
        let states: Vec<_> = (0..5).map(|row| iron.value(row)).collect();
        assert_eq!(
            states,
            [
                Value::Number(0.5),
                Value::Number(0.5),
                Value::BelowLimit(0.1),
                Value::Number(2.5),
                Value::Missing
            ]
        );
        assert_eq!(table.place(2, table.position("iron").unwrap()).row, Some(2));
    }

    #[test]
    fn a_strict_rule_says_how_many_a_loose_one_would_match() {
        let mut right = laboratory();
        right = right.take(&[1, 3]);
        let left = Table::new(vec![Column::texts(
            "wheel",
            vec![Some("K-02"), Some("K-2"), Some("k-09")],
        )]);
        let (_, report) = join(&left, "wheel", &right, "id", &JoinRule::default()).unwrap();
        assert_eq!((report.matched, report.loosely_matched), (1, Some(3)));
        assert_eq!(report.only_left, ["K-2", "k-09"]);
    }

    #[test]
    fn keys_that_come_twice_with_differing_values_give_none() {
        let right = laboratory().take(&[0, 0, 1, 2]);
        let left = Table::new(vec![Column::texts(
            "wheel",
            vec![Some("K-1"), Some("K-02")],
        )]);
        // The same row twice is no contradiction.
        let (table, report) = join(&left, "wheel", &right, "id", &JoinRule::default()).unwrap();
        assert_eq!(report.repeated_right, Vec::<String>::new());
        assert_eq!(table.column("iron").unwrap().value(0), Value::Number(0.5));
        let mut columns = right.columns().to_vec();
        columns[2] = Column::numbers("fat", vec![30.0, 30.5, 31.0, 32.0]);
        let right = Table::new(columns);
        let (table, report) = join(&left, "wheel", &right, "id", &JoinRule::default()).unwrap();
        assert_eq!(
            (report.repeated_right, report.undecided),
            (vec!["K-1".to_owned()], 1)
        );
        assert_eq!(table.column("iron").unwrap().value(0), Value::Missing);
        assert_eq!(table.n_rows(), 2);
    }

    #[test]
    fn a_join_of_strangers_is_refused_with_both_sorts_of_keys() {
        let left = Table::new(vec![Column::texts("wheel", vec![Some("W1"), Some("W2")])]);
        let error = join(&left, "wheel", &laboratory(), "id", &JoinRule::default()).unwrap_err();
        assert_eq!(
            error,
            JoinError::NothingMatches {
                left: vec!["W1".to_owned(), "W2".to_owned()],
                right: vec!["K-1".to_owned(), "K-02".to_owned(), "K-03".to_owned()],
                loosely: 0
            }
        );
        assert!(join(&left, "wheels", &laboratory(), "id", &JoinRule::default()).is_err());
    }

    #[test]
    fn zeros_are_taken_off_numbers_and_not_off_decimals() {
        let fold = |key| JoinRule::loosest().fold(key);
        assert_eq!(fold("007"), "7");
        assert_eq!(fold("K-007b"), "k-7b");
        assert_eq!(fold("0"), "0");
        assert_eq!(fold("000"), "0");
        assert_eq!(fold("100"), "100");
        assert_eq!(fold("10.05"), "10.05");
        assert_eq!(fold("P01-W02"), "p1-w2");
    }
}
