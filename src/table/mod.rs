//! Floor 1: data in columns: named columns of one length, and where each value stands in a file.

pub mod axis;
pub mod column;
pub mod correct;
pub mod digest;
pub mod find;
pub mod finding;
pub mod guess;
pub mod pick;
pub mod read;
pub mod samples;

use crate::base::problem::Place;
use crate::table::column::Column;

/// Where the samples of a table stand in their file.
#[derive(Clone, Debug, PartialEq, Eq, Default)]
pub enum Lines {
    /// Not read from a file.
    #[default]
    Unknown,
    /// The row of every sample, counted from 1; 0 where a sample is not in the file.
    Rows(Vec<u32>),
    /// A sideways table: the head of every sample's column in the file, and the row of the first
    /// and the following predictors.
    Columns(Vec<String>),
}

/// The file that columns were read from.
#[derive(Clone, Debug, PartialEq, Eq, Default)]
pub struct Origin {
    /// The file's name.
    pub file: Option<String>,
    /// The sheet of a workbook.
    pub sheet: Option<String>,
    /// Where the samples stand.
    pub lines: Lines,
}

/// Named columns of one length. Samples are rows, however they lay in the file.
#[derive(Clone, Debug, Default)]
pub struct Table {
    n_rows: usize,
    columns: Vec<Column>,
    origins: Vec<Origin>,
    /// For each column its origin and, in a sideways file, its row there (else 0).
    source: Vec<(u16, u32)>,
    /// Positions of the columns in the order of their names: a fifth of the memory of a map, which
    /// counts when there are 200,000 columns.
    by_name: Vec<u32>,
}

impl Table {
    /// A table that was not read from a file.
    ///
    /// # Panics
    /// When the columns differ in length or two have one name.
    #[must_use]
    pub fn new(columns: Vec<Column>) -> Self {
        let source = vec![(0, 0); columns.len()];
        Self::with_origin(columns, Origin::default(), source)
    }

    /// A table read from one file, with the row in the file of every column (sideways) or 0.
    pub(crate) fn with_origin(
        columns: Vec<Column>,
        origin: Origin,
        source: Vec<(u16, u32)>,
    ) -> Self {
        let n_rows = columns.first().map_or(0, Column::len);
        let mut table = Self {
            n_rows,
            origins: vec![origin],
            ..Self::default()
        };
        table.add(columns, source);
        table
    }

    /// Adds columns at the end, each with its origin and its row there.
    pub(crate) fn add(&mut self, columns: Vec<Column>, source: Vec<(u16, u32)>) {
        assert!(
            columns.iter().all(|column| column.len() == self.n_rows),
            "the columns of a table have one length"
        );
        if self.columns.is_empty() {
            self.columns = columns;
        } else {
            self.columns.extend(columns);
        }
        self.source.extend(source);
        let columns = &self.columns;
        self.by_name = (0..columns.len() as u32).collect();
        self.by_name
            .sort_unstable_by_key(|&at| columns[at as usize].name.as_str());
        assert!(
            self.by_name
                .windows(2)
                .all(|pair| { columns[pair[0] as usize].name != columns[pair[1] as usize].name }),
            "the columns of a table have unlike names"
        );
    }

    /// The number of samples.
    #[must_use]
    pub fn n_rows(&self) -> usize {
        self.n_rows
    }

    /// The columns in their order.
    #[must_use]
    pub fn columns(&self) -> &[Column] {
        &self.columns
    }

    /// The column of this name.
    #[must_use]
    pub fn column(&self, name: &str) -> Option<&Column> {
        self.position(name).map(|at| &self.columns[at])
    }

    /// The position of the column of this name.
    #[must_use]
    pub fn position(&self, name: &str) -> Option<usize> {
        self.by_name
            .binary_search_by_key(&name, |&at| self.columns[at as usize].name.as_str())
            .ok()
            .map(|found| self.by_name[found] as usize)
    }

    /// The files the columns came from.
    #[must_use]
    pub fn origins(&self) -> &[Origin] {
        &self.origins
    }

    /// Where a value stands in its file, as a person would look for it.
    #[must_use]
    pub fn place(&self, row: usize, column: usize) -> Place {
        let (origin, line) = self.source[column];
        let origin = &self.origins[usize::from(origin)];
        let mut place = Place {
            file: origin.file.clone(),
            sheet: origin.sheet.clone(),
            row: None,
            column: Some(self.columns[column].name.clone()),
        };
        match &origin.lines {
            Lines::Unknown => place.row = Some(row + 1),
            Lines::Rows(rows) => {
                place.row = rows.get(row).filter(|&&at| at > 0).map(|&at| at as usize);
            }
            Lines::Columns(heads) => {
                place.row = (line > 0).then_some(line as usize);
                place.column = heads.get(row).cloned();
            }
        }
        place
    }

    /// Puts another column of the same name and length in place of one.
    ///
    /// # Panics
    /// When name or length differ.
    pub fn replace(&mut self, at: usize, column: Column) {
        assert!(
            column.name == self.columns[at].name && column.len() == self.n_rows,
            "a column is replaced by one of the same name and length"
        );
        self.columns[at] = column;
    }

    /// The rows in the given order, with their places; rows may come more than once or not at all.
    #[must_use]
    pub fn take(&self, rows: &[usize]) -> Self {
        Self {
            n_rows: rows.len(),
            columns: self.columns.iter().map(|c| c.take(rows)).collect(),
            origins: self.origins.iter().map(|o| o.take(rows)).collect(),
            source: self.source.clone(),
            by_name: self.by_name.clone(),
        }
    }

    /// The columns at the given positions, in that order.
    ///
    /// # Panics
    /// When a position comes twice or does not exist.
    #[must_use]
    pub fn choose(&self, columns: &[usize]) -> Self {
        let mut table = Self {
            n_rows: self.n_rows,
            origins: self.origins.clone(),
            ..Self::default()
        };
        table.add(
            columns.iter().map(|&at| self.columns[at].clone()).collect(),
            columns.iter().map(|&at| self.source[at]).collect(),
        );
        table
    }
}

impl Origin {
    fn take(&self, rows: &[usize]) -> Self {
        Self {
            lines: match &self.lines {
                Lines::Unknown => Lines::Rows(rows.iter().map(|&row| row as u32 + 1).collect()),
                Lines::Rows(at) => Lines::Rows(rows.iter().map(|&row| at[row]).collect()),
                Lines::Columns(heads) => {
                    Lines::Columns(rows.iter().map(|&row| heads[row].clone()).collect())
                }
            },
            ..self.clone()
        }
    }
}
