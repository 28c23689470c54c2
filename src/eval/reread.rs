//! What differs between a table as it was imported and a newer file of it, before that is taken.

use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::base::work::{Cancelled, Work};
use crate::eval::finding::read_problem;
use crate::eval::kind::data::options;
use crate::study::settings::data::Data;
use crate::table::Table;
use crate::table::column::{Column, Value};
use crate::table::digest::{self, Digest, Order};
use crate::table::read::read;
use std::collections::BTreeMap;

/// How many examples and names a list keeps.
const KEPT: usize = 5;

/// What differs between two versions of a table.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Changes {
    /// The file's name.
    pub file: String,
    /// The SHA-256 of the bytes, before and now.
    pub bytes: Option<(Digest, Digest)>,
    /// The digest of the table as read, before and now: equal where only its form differs.
    pub table: Option<(Digest, Digest)>,
    /// Columns whose values differ, in the order of the table.
    pub changed: Vec<Changed>,
    /// Columns that only the new version has.
    pub added: Vec<String>,
    /// Columns that only the old version has.
    pub removed: Vec<String>,
    /// Whether common columns stand in another order.
    pub order: Order,
    /// Samples that only the new version has.
    pub new_samples: Vec<String>,
    /// Samples that only the old version has.
    pub lost_samples: Vec<String>,
}

/// A column whose values differ.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Changed {
    /// Its name.
    pub column: String,
    /// How many values of samples that both have differ.
    pub count: usize,
    /// The first of them: the sample, the value before, the value now.
    pub examples: Vec<(String, String, String)>,
}

impl Changes {
    /// Whether the two are the same, byte for byte.
    #[must_use]
    pub fn is_none(&self) -> bool {
        self.bytes.is_none_or(|(old, new)| old == new)
    }

    /// Whether the table as read is the same, whatever the bytes are.
    #[must_use]
    pub fn is_form_only(&self) -> bool {
        self.table.is_some_and(|(old, new)| old == new)
    }

    /// What differs, one sentence for each thing to know.
    #[must_use]
    pub fn sentences(&self) -> Vec<String> {
        let file = &self.file;
        if self.is_none() {
            return vec![format!("“{file}” has not changed.")];
        }
        if self.is_form_only() {
            return vec![format!(
                "The bytes of “{file}” have changed, but every value is read as before."
            )];
        }
        let mut sentences = vec![format!("“{file}” has changed.")];
        let list = |names: &[String]| {
            let mut shown: Vec<String> = names
                .iter()
                .take(KEPT)
                .map(|name| format!("“{name}”"))
                .collect();
            if names.len() > KEPT {
                shown.push("…".to_owned());
            }
            shown.join(", ")
        };
        for changed in self.changed.iter().take(4 * KEPT) {
            let examples: Vec<String> = changed
                .examples
                .iter()
                .map(|(sample, old, new)| format!("{sample} from {old} to {new}"))
                .collect();
            sentences.push(format!(
                "In “{}” {}: {}{}.",
                changed.column,
                counted(changed.count, "value differs", "values differ"),
                examples.join(", "),
                if changed.count > changed.examples.len() {
                    ", …"
                } else {
                    ""
                }
            ));
        }
        if self.changed.len() > 4 * KEPT {
            sentences.push(format!(
                "{} more.",
                counted(
                    self.changed.len() - 4 * KEPT,
                    "column differs",
                    "columns differ"
                )
            ));
        }
        for (names, one, many) in [
            (&self.added, "column is new", "columns are new"),
            (&self.removed, "column is gone", "columns are gone"),
            (&self.new_samples, "sample is new", "samples are new"),
            (&self.lost_samples, "sample is gone", "samples are gone"),
        ] {
            if !names.is_empty() {
                sentences.push(format!(
                    "{}: {}.",
                    counted(names.len(), one, many),
                    list(names)
                ));
            }
        }
        if self.order == Order::Changed {
            sentences.push("The columns stand in another order.".to_owned());
        }
        if sentences.len() == 1 {
            sentences
                .push("The samples stand in another order, or a name or unit differs.".to_owned());
        }
        sentences
    }
}

fn counted(n: usize, one: &str, many: &str) -> String {
    if n == 1 {
        format!("1 {one}")
    } else {
        format!("{} {many}", number::text(n as f64, Precision::Whole))
    }
}

/// Compares the table at a position of the settings with new bytes for it, both read as the
/// settings say.
///
/// # Errors
/// [`Cancelled`] when the work was called off; a [`Problem`] when one of them holds no table.
pub fn changes(
    data: &Data,
    at: usize,
    old: &[u8],
    new: &[u8],
    threads: Threads,
    work: &Work<'_>,
) -> Result<Result<Changes, Problem>, Cancelled> {
    let source = &data.tables[at];
    let mut changes = Changes {
        file: source.file.clone(),
        bytes: Some((Digest::of(old), Digest::of(new))),
        ..Changes::default()
    };
    if changes.is_none() {
        return Ok(Ok(changes));
    }
    let options = options(source, data);
    let mut tables = Vec::new();
    for (bytes, share) in [(old, 0.0..0.5), (new, 0.5..1.0)] {
        match read(bytes, &source.file, &options, threads, &work.part(share))? {
            Ok(reading) => tables.push(reading.table),
            Err(error) => return Ok(Err(read_problem(&error, &source.file))),
        }
    }
    let (Some(new), Some(old)) = (tables.pop(), tables.pop()) else {
        unreachable!("both were read")
    };
    // Samples are told by the names that they have in this table.
    let key = match (&source.join, at) {
        (Some(join), _) => Some(&join.right),
        (None, _) => data.sample_name.as_ref(),
    };
    differ(&mut changes, &old, &new, key.map(String::as_str));
    Ok(Ok(changes))
}

fn differ(changes: &mut Changes, old: &Table, new: &Table, key: Option<&str>) {
    let (before, now) = (digest::of_columns(old), digest::of_columns(new));
    let difference = digest::difference(&before, &now);
    changes.table = Some((
        digest::of_table(old.n_rows(), &before),
        digest::of_table(new.n_rows(), &now),
    ));
    changes.added = difference.added;
    changes.removed = difference.removed;
    changes.order = difference.order;
    let (old_names, new_names) = (names(old, key), names(new, key));
    let at_old: BTreeMap<&str, usize> = first_rows(&old_names);
    let at_new: BTreeMap<&str, usize> = first_rows(&new_names);
    let only = |names: &[String], others: &BTreeMap<&str, usize>| {
        names
            .iter()
            .filter(|name| !others.contains_key(name.as_str()))
            .cloned()
            .collect::<Vec<String>>()
    };
    changes.new_samples = only(&new_names, &at_old);
    changes.lost_samples = only(&old_names, &at_new);
    for name in difference.changed {
        let (Some(before), Some(now)) = (old.column(&name), new.column(&name)) else {
            continue;
        };
        let mut changed = Changed {
            column: name,
            count: 0,
            examples: Vec::new(),
        };
        for (row, sample) in new_names.iter().enumerate() {
            let Some(&from) = at_old.get(sample.as_str()) else {
                continue;
            };
            if at_new[sample.as_str()] != row || before.value(from) == now.value(row) {
                continue;
            }
            changed.count += 1;
            if changed.examples.len() < KEPT {
                changed
                    .examples
                    .push((sample.clone(), shown(before, from), shown(now, row)));
            }
        }
        if changed.count > 0 {
            changes.changed.push(changed);
        }
    }
}

/// The names of the samples; where no column holds them their rows.
fn names(table: &Table, key: Option<&str>) -> Vec<String> {
    let labels = key
        .and_then(|key| table.column(key))
        .map(Column::labels)
        .unwrap_or_default();
    (0..table.n_rows())
        .map(|row| match labels.get(row) {
            Some(Some(label)) => label.clone(),
            Some(None) | None => format!("row {}", row + 1),
        })
        .collect()
}

fn first_rows(names: &[String]) -> BTreeMap<&str, usize> {
    let mut rows = BTreeMap::new();
    for (row, name) in names.iter().enumerate() {
        let _ = rows.entry(name.as_str()).or_insert(row);
    }
    rows
}

fn shown(column: &Column, row: usize) -> String {
    match column.value(row) {
        Value::Missing => "missing".to_owned(),
        Value::Number(number) => number::text(number, Precision::Full),
        Value::BelowLimit(limit) => format!("<{}", number::text(limit, Precision::Full)),
        Value::AboveLimit(limit) => format!(">{}", number::text(limit, Precision::Full)),
        Value::Text(text) => format!("“{text}”"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::study::settings::data::TableSource;
    use crate::study::source::SourceId;

    const OLD: &str = "id,fat,iron\nK-1,30.5,<0.1\nK-2,31.0,0.4\nK-3,32.5,0.5\n";

    fn compared(new: &str) -> Changes {
        let data = Data {
            tables: vec![TableSource::new(SourceId::of(OLD.as_bytes()), "lab.csv")],
            sample_name: Some("id".to_owned()),
            ..Data::default()
        };
        let work = Work::unattended();
        changes(
            &data,
            0,
            OLD.as_bytes(),
            new.as_bytes(),
            Threads::new(1),
            &work,
        )
        .unwrap()
        .unwrap()
    }

    #[test]
    fn a_change_is_located_to_the_column_and_the_sample_whatever_the_order() {
        let found = compared("id,fat,iron\nK-3,32.5,0.5\nK-2,31.5,0.4\nK-1,30.5,0.1\n");
        let told: Vec<(&str, usize)> = found
            .changed
            .iter()
            .map(|changed| (changed.column.as_str(), changed.count))
            .collect();
        assert_eq!(told, [("fat", 1), ("iron", 1)]);
        let example = |name: &str, old: &str, new: &str| {
            vec![(name.to_owned(), old.to_owned(), new.to_owned())]
        };
        assert_eq!(found.changed[0].examples, example("K-2", "31", "31.5"));
        assert_eq!(found.changed[1].examples, example("K-1", "<0.1", "0.1"));
    }

    #[test]
    fn samples_and_columns_that_come_and_go_are_named() {
        let found = compared("id,fat,zinc\nK-1,30.5,1\nK-2,31.0,2\nK-4,32.5,3\n");
        assert_eq!(
            (found.added, found.removed),
            (vec!["zinc".to_owned()], vec!["iron".to_owned()])
        );
        assert_eq!(found.new_samples, ["K-4"]);
        assert_eq!(found.lost_samples, ["K-3"]);
    }

    #[test]
    fn another_form_of_the_same_values_is_told_from_a_change() {
        assert!(compared(OLD).is_none());
        let quoted = OLD.replace("K-1", "\"K-1\"");
        let found = compared(&quoted);
        assert!(!found.is_none() && found.is_form_only());
        assert!(!compared(&OLD.replace("31.0", "31.1")).is_form_only());
    }
}
