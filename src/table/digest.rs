//! Digests of bytes, columns and tables: what tells a changed source from an unchanged one, to
//! the column.

use crate::base::thread::{Threads, in_order};
use crate::base::work::{Cancelled, Work};
use crate::table::Table;
use crate::table::column::{Column, Value, Values};
use sha2::{Digest as _, Sha256};

/// A SHA-256 digest; the same on every machine and in every version.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Digest([u8; 32]);

impl Digest {
    /// The digest of bytes, such as a file's.
    #[must_use]
    pub fn of(bytes: &[u8]) -> Self {
        Self(Sha256::digest(bytes).into())
    }

    /// The bytes of the digest.
    #[must_use]
    pub fn bytes(&self) -> &[u8; 32] {
        &self.0
    }

    /// The digest that 64 hexadecimal digits write.
    #[must_use]
    pub fn parse(text: &str) -> Option<Self> {
        if text.len() != 64 || !text.is_ascii() {
            return None;
        }
        let mut bytes = [0; 32];
        for (at, byte) in bytes.iter_mut().enumerate() {
            *byte = u8::from_str_radix(text.get(2 * at..2 * at + 2)?, 16).ok()?;
        }
        Some(Self(bytes))
    }
}

impl std::fmt::Display for Digest {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        self.0.iter().try_for_each(|byte| write!(f, "{byte:02x}"))
    }
}

impl std::fmt::Debug for Digest {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{self}")
    }
}

/// Feeds a text with its length, so that neighbours cannot run into each other.
fn feed_text(hasher: &mut Sha256, text: &str) {
    hasher.update((text.len() as u64).to_le_bytes());
    hasher.update(text.as_bytes());
}

/// The digest of a column: name, unit, and every value in its state.
///
/// Canonical form: name, then unit (0, or 1 and the unit), then for every value one byte for the
/// state (0 missing, 1 number, 2 below, 3 above, 4 label) and its content; numbers as eight
/// bytes, low byte first, with minus zero as zero; texts as their length in eight bytes and
/// UTF-8.
#[must_use]
pub fn of_column(column: &Column) -> Digest {
    let mut hasher = Sha256::new();
    feed_text(&mut hasher, &column.name);
    match &column.unit {
        None => hasher.update([0]),
        Some(unit) => {
            hasher.update([1]);
            feed_text(&mut hasher, unit);
        }
    }
    let mut piece = Vec::with_capacity(9 * 1024);
    for row in 0..column.len() {
        match column.value(row) {
            Value::Missing => piece.push(0),
            Value::Number(number) => feed_number(&mut piece, 1, number),
            Value::BelowLimit(limit) => feed_number(&mut piece, 2, limit),
            Value::AboveLimit(limit) => feed_number(&mut piece, 3, limit),
            Value::Text(text) => {
                piece.push(4);
                piece.extend((text.len() as u64).to_le_bytes());
                piece.extend(text.as_bytes());
            }
        }
        if piece.len() >= 8 * 1024 {
            hasher.update(&piece);
            piece.clear();
        }
    }
    hasher.update(&piece);
    Digest(hasher.finalize().into())
}

fn feed_number(piece: &mut Vec<u8>, state: u8, number: f64) {
    piece.push(state);
    piece.extend((number + 0.0).to_bits().to_le_bytes());
}

/// The digests of all columns in order.
#[must_use]
pub fn of_columns(table: &Table) -> Vec<(String, Digest)> {
    table
        .columns()
        .iter()
        .map(|column| (column.name.clone(), of_column(column)))
        .collect()
}

/// The digests of all columns in order, made side by side.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn of_columns_in(
    table: &Table,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Vec<(String, Digest)>, Cancelled> {
    /// Columns of a piece of work: some milliseconds.
    const PIECE: usize = 64;
    let columns = table.columns();
    let quiet = work.part(1.0..1.0);
    let pieces = in_order(threads, columns.len().div_ceil(PIECE), &quiet, |piece| {
        let from = piece * PIECE;
        let piece = &columns[from..columns.len().min(from + PIECE)];
        let mut digests = Vec::with_capacity(piece.len());
        for column in piece {
            work.check()?;
            digests.push((column.name.clone(), of_column(column)));
        }
        Ok(digests)
    })?;
    Ok(pieces.into_iter().flatten().collect())
}

/// The digest of a table: the number of samples, then the digests of its columns in order.
#[must_use]
pub fn of_table(n_rows: usize, columns: &[(String, Digest)]) -> Digest {
    let mut hasher = Sha256::new();
    hasher.update((n_rows as u64).to_le_bytes());
    for (_, digest) in columns {
        hasher.update(digest.0);
    }
    Digest(hasher.finalize().into())
}

/// What differs between two versions of a table, by their columns.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Difference {
    /// Columns whose values or unit differ.
    pub changed: Vec<String>,
    /// Columns that only the new version has.
    pub added: Vec<String>,
    /// Columns that only the old version has.
    pub removed: Vec<String>,
    /// Whether common columns stand in another order.
    pub order: Order,
}

/// Whether common columns stand in the order they had.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Order {
    /// They do.
    #[default]
    Kept,
    /// They do not.
    Changed,
}

impl Difference {
    /// Whether nothing differs.
    #[must_use]
    pub fn is_none(&self) -> bool {
        *self == Self::default()
    }
}

/// What differs between an old and a new version, from the digests of their columns.
#[must_use]
pub fn difference(old: &[(String, Digest)], new: &[(String, Digest)]) -> Difference {
    let by_name = |columns: &[(String, Digest)]| {
        columns
            .iter()
            .cloned()
            .collect::<std::collections::HashMap<_, _>>()
    };
    let (known, current) = (by_name(old), by_name(new));
    let names = |columns: &[(String, Digest)], keep: &dyn Fn(&str) -> bool| {
        columns
            .iter()
            .map(|(name, _)| name.clone())
            .filter(|name| keep(name))
            .collect::<Vec<_>>()
    };
    let common_old = names(old, &|name| current.contains_key(name));
    let common_new = names(new, &|name| known.contains_key(name));
    Difference {
        changed: names(new, &|name| {
            known
                .get(name)
                .is_some_and(|digest| Some(digest) != current.get(name))
        }),
        added: names(new, &|name| !known.contains_key(name)),
        removed: names(old, &|name| !current.contains_key(name)),
        order: if common_old == common_new {
            Order::Kept
        } else {
            Order::Changed
        },
    }
}

/// How two columns of one name differ: the rows whose values are not the same.
#[must_use]
pub fn differing_rows(old: &Column, new: &Column) -> Vec<usize> {
    let same = |row: usize| row < old.len() && row < new.len() && old.value(row) == new.value(row);
    let is_same_kind = matches!(
        (&old.values, &new.values),
        (Values::Numbers(_), Values::Numbers(_)) | (Values::Texts(_), Values::Texts(_))
    );
    (0..old.len().max(new.len()))
        .filter(|&row| !is_same_kind || !same(row))
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn table() -> Table {
        Table::new(vec![
            Column::texts("id", vec![Some("a"), None]),
            Column::numbers("x", vec![1.0, -0.0]),
            Column::numbers("y", vec![f64::NAN, 2.5]),
        ])
    }

    #[test]
    fn a_digest_is_the_published_one() {
        // FIPS 180-2, appendix B.1.
        let digest = Digest::of(b"abc");
        let text = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";
        assert_eq!(digest.to_string(), text);
        assert_eq!(Digest::parse(text), Some(digest));
        assert_eq!(Digest::parse("ba78"), None);
    }

    #[test]
    fn a_column_has_the_digest_of_its_canonical_form() {
        // Python: hashlib.sha256(struct.pack("<Q", 1) + b"x" + b"\0" + b"\1" +
        //   struct.pack("<d", 1.0) + b"\1" + struct.pack("<d", 0.0)).hexdigest()
        assert_eq!(
            of_column(&table().columns()[1]).to_string(),
            "f4f408f53ae7e0692833a4177aa044c409d4b95e5c74cf7fe29bfa41a9bf679b"
        );
    }

    #[test]
    fn a_change_is_located_to_the_column_and_the_row() {
        let old = of_columns(&table());
        let mut columns = table().columns().to_vec();
        columns[2] = Column::numbers("y", vec![f64::NAN, 2.6]);
        columns.swap(0, 1);
        columns.push(Column::numbers("z", vec![1.0, 2.0]));
        let changed = Table::new(columns);
        let new = of_columns(&changed);
        let difference = difference(&old, &new);
        assert_eq!(difference.changed, ["y"]);
        assert_eq!(difference.added, ["z"]);
        assert_eq!(difference.order, Order::Changed);
        assert_ne!(of_table(2, &old), of_table(2, &new));
        let (before, after) = (table(), changed);
        let rows = differing_rows(before.column("y").unwrap(), after.column("y").unwrap());
        assert_eq!(rows, [1]);
    }
}
