//! Floor 1: data in columns: named columns of one length, and where each value stands in a file.

pub mod axis;
pub mod column;
pub mod correct;
pub mod digest;
pub mod find;
pub mod finding;
pub mod guess;
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
    /// Positions of the columns by name.
    index: std::collections::HashMap<String, usize>,
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
            columns: Vec::new(),
            origins: vec![origin],
            source: Vec::new(),
            index: std::collections::HashMap::with_capacity(columns.len()),
        };
        for (column, source) in columns.into_iter().zip(source) {
            table.push(column, source);
        }
        table
    }

    fn push(&mut self, column: Column, source: (u16, u32)) {
        assert_eq!(
            column.len(),
            self.n_rows,
            "the columns of a table have one length"
        );
        let before = self.index.insert(column.name.clone(), self.columns.len());
        assert!(before.is_none(), "the columns of a table have unlike names");
        self.columns.push(column);
        self.source.push(source);
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
        self.index.get(name).copied()
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
            index: self.index.clone(),
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
        for &at in columns {
            table.push(self.columns[at].clone(), self.source[at]);
        }
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
