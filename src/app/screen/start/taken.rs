//! The tables that were taken, and how a grid shows them.

use crate::app::disk;
use crate::app::part::table::field;
use crate::app::screen::start::role::Roles;
use crate::app::widget::grid::{Align, Field, Source};
use crate::base::problem::Problem;
use crate::base::thread::Threads;
use crate::base::work::{Cancelled, Work};
use crate::eval::finding;
use crate::store;
use crate::table::Table;
use crate::table::guess::{self, Proposals};
use crate::table::read::{Options, Reading, read};
use std::borrow::Cow;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// A file that has been read.
#[derive(Debug)]
pub struct Taken {
    /// Where it lies.
    pub path: PathBuf,
    /// Its name.
    pub name: String,
    /// What it holds.
    pub bytes: Arc<[u8]>,
    /// What was asked for when it was read; everything else was guessed.
    pub asked: Options,
    /// The table, and what was noticed.
    pub reading: Reading,
    /// What its columns may be.
    pub proposals: Proposals,
}

/// Reads a file, off the window's thread.
///
/// # Errors
/// A [`Problem`] when it cannot be read or holds no table.
pub fn take(path: &Path, work: &Work<'_>) -> Result<Arc<Taken>, Problem> {
    let bytes: Arc<[u8]> = store::read_file(path)?.into();
    take_bytes(path, bytes, Options::default(), work)
}

/// Reads bytes that are known already in another way.
///
/// # Errors
/// A [`Problem`] when they hold no table.
pub fn take_bytes(
    path: &Path,
    bytes: Arc<[u8]>,
    asked: Options,
    work: &Work<'_>,
) -> Result<Arc<Taken>, Problem> {
    let name = disk::name(path);
    match read(&bytes, &name, &asked, Threads::all(), work) {
        Ok(Ok(reading)) => Ok(Arc::new(Taken {
            path: path.to_owned(),
            name,
            bytes,
            asked,
            proposals: guess::roles(&reading.table),
            reading,
        })),
        Ok(Err(error)) => Err(finding::read_problem(&error, &name)),
        Err(Cancelled) => Err(Problem::new("stopped", "Reading was stopped.")),
    }
}

/// A table that is shown, with the roles that were given.
pub struct Shown {
    /// The table.
    pub taken: Arc<Taken>,
    /// The roles.
    pub roles: Roles,
    /// Changes when anything else does.
    pub version: u64,
}

impl Shown {
    /// The table itself.
    #[must_use]
    pub fn table(&self) -> &Table {
        &self.taken.reading.table
    }

    /// The name of a column.
    #[must_use]
    pub fn name(&self, column: usize) -> &str {
        &self.table().columns()[column].name
    }
}

impl Source for Shown {
    fn n_rows(&self) -> usize {
        self.table().n_rows()
    }

    fn n_columns(&self) -> usize {
        self.table().columns().len()
    }

    fn corner(&self) -> Cow<'_, str> {
        "row".into()
    }

    fn row(&self, row: usize) -> Cow<'_, str> {
        (row + 1).to_string().into()
    }

    fn column(&self, column: usize) -> Cow<'_, str> {
        let column = &self.table().columns()[column];
        match &column.unit {
            Some(unit) => format!("{}, {unit}", column.name).into(),
            None => Cow::Borrowed(&column.name),
        }
    }

    fn remark(&self, column: usize) -> Option<Cow<'_, str>> {
        let role = self.roles.given(self.name(column))?;
        Some(Cow::Borrowed(role.word()))
    }

    fn has_remarks(&self) -> bool {
        true
    }

    fn field(&self, row: usize, column: usize) -> Field<'_> {
        field(self.table().columns()[column].value(row))
    }

    fn align(&self, column: usize) -> Align {
        if self.table().columns()[column].is_numeric() {
            Align::End
        } else {
            Align::Start
        }
    }

    fn version(&self) -> u64 {
        self.version
    }
}

/// A file's name without its ending, as a title.
#[must_use]
pub fn title(file: &str) -> String {
    let stem = file
        .split('.')
        .next()
        .unwrap_or(file)
        .replace(['-', '_'], " ");
    let mut letters = stem.chars();
    letters.next().map_or_else(
        || "Study".to_owned(),
        |first| first.to_uppercase().chain(letters).collect(),
    )
}
