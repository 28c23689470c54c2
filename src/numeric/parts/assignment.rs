//! A plan as a stored table: for every repeat the part of every row.

use crate::numeric::parts::{Split, Structure};
use std::collections::BTreeMap;
use std::sync::Arc;

/// A drawn plan: for every repeat the part in which each row is held out.
#[derive(Clone, Debug, PartialEq)]
pub struct Assignment {
    rows: Arc<[usize]>,
    table: Vec<Vec<usize>>,
    n_parts: usize,
    units: Arc<[usize]>,
}

/// Why a table is not a plan.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum TableError {
    /// There is no repeat, or no row.
    Empty,
    /// A repeat has not one entry per row.
    WrongLength {
        /// The repeat, from 0.
        repeat: usize,
        /// The number of rows.
        expected: usize,
        /// The number of entries.
        found: usize,
    },
    /// A row is named twice, or is no sample.
    WrongRow {
        /// The row.
        row: usize,
    },
    /// A part number is too large.
    NoSuchPart {
        /// The repeat, from 0.
        repeat: usize,
        /// The row.
        row: usize,
        /// The part number.
        part: usize,
    },
    /// A part holds no row.
    EmptyPart {
        /// The repeat, from 0.
        repeat: usize,
        /// The part, from 0.
        part: usize,
    },
    /// The samples of a unit are in different parts.
    UnitDivided {
        /// The repeat, from 0.
        repeat: usize,
        /// The unit.
        unit: usize,
    },
}

impl Assignment {
    pub(super) fn new(
        rows: &[usize],
        table: Vec<Vec<usize>>,
        n_parts: usize,
        units: &[usize],
    ) -> Self {
        Self {
            rows: rows.into(),
            table,
            n_parts,
            units: units.into(),
        }
    }

    /// A plan from a stored table: for every repeat the part, from 0, of each of `rows`.
    ///
    /// # Errors
    /// [`TableError`] when the table is not a plan over these rows and units.
    pub fn from_table(
        rows: &[usize],
        table: Vec<Vec<usize>>,
        n_parts: usize,
        structure: &Structure<'_>,
    ) -> Result<Self, TableError> {
        if rows.is_empty() || table.is_empty() {
            return Err(TableError::Empty);
        }
        let mut is_used = vec![false; structure.units.len()];
        for &row in rows {
            match is_used.get_mut(row) {
                Some(used) if !*used => *used = true,
                Some(_) | None => return Err(TableError::WrongRow { row }),
            }
        }
        for (repeat, parts) in table.iter().enumerate() {
            check_repeat(rows, repeat, parts, n_parts, structure.units)?;
        }
        Ok(Self::new(rows, table, n_parts, structure.units))
    }

    /// The rows that the plan divides.
    #[must_use]
    pub fn rows(&self) -> &[usize] {
        &self.rows
    }

    /// For every repeat the part, from 0, of each row.
    #[must_use]
    pub fn table(&self) -> &[Vec<usize>] {
        &self.table
    }

    /// How often the plan was drawn.
    #[must_use]
    pub fn n_repeats(&self) -> usize {
        self.table.len()
    }

    /// How many parts each repeat has.
    #[must_use]
    pub fn n_parts(&self) -> usize {
        self.n_parts
    }

    /// The splits of one repeat: part by part, this part held out, the others for training.
    ///
    /// # Panics
    /// When there is no such repeat.
    #[must_use]
    pub fn splits(&self, repeat: usize) -> Vec<Split> {
        let parts = &self.table[repeat];
        (0..self.n_parts)
            .map(|part| {
                let (held_out, training) = (0..self.rows.len())
                    .map(|at| (self.rows[at], parts[at]))
                    .partition::<Vec<_>, _>(|&(_, of)| of == part);
                let rows = |side: Vec<(usize, usize)>| side.into_iter().map(|(row, _)| row);
                Split::new(
                    rows(training).collect(),
                    rows(held_out).collect(),
                    &self.units,
                )
            })
            .collect()
    }
}

fn check_repeat(
    rows: &[usize],
    repeat: usize,
    parts: &[usize],
    n_parts: usize,
    units: &[usize],
) -> Result<(), TableError> {
    if parts.len() != rows.len() {
        return Err(TableError::WrongLength {
            repeat,
            expected: rows.len(),
            found: parts.len(),
        });
    }
    let mut part_of_unit = BTreeMap::new();
    let mut is_filled = vec![false; n_parts];
    for (&row, &part) in rows.iter().zip(parts) {
        let Some(filled) = is_filled.get_mut(part) else {
            return Err(TableError::NoSuchPart { repeat, row, part });
        };
        *filled = true;
        let unit = units[row];
        if *part_of_unit.entry(unit).or_insert(part) != part {
            return Err(TableError::UnitDivided { repeat, unit });
        }
    }
    match is_filled.iter().position(|filled| !filled) {
        Some(part) => Err(TableError::EmptyPart { repeat, part }),
        None => Ok(()),
    }
}
