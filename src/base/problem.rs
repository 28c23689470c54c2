//! What went wrong, where, and what would mend it.

/// A stable, searchable name of a sort of problem, such as `missing-outcome`.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Code(pub &'static str);

impl std::fmt::Display for Code {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(self.0)
    }
}

/// Where something is, as far as there is a place. Rows and columns count from 1, as people do.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub struct Place {
    /// The file's name.
    pub file: Option<String>,
    /// The sheet of a workbook.
    pub sheet: Option<String>,
    /// The row in the file, counted from 1 and including header rows.
    pub row: Option<usize>,
    /// The column: its name, or its letter or number where it has no name.
    pub column: Option<String>,
}

impl Place {
    /// No place at all.
    #[must_use]
    pub fn nowhere() -> Self {
        Self::default()
    }

    /// A whole file.
    #[must_use]
    pub fn file(name: &str) -> Self {
        Self {
            file: Some(name.to_owned()),
            ..Self::default()
        }
    }

    /// The same place, in the given row.
    #[must_use]
    pub fn with_row(mut self, row: usize) -> Self {
        self.row = Some(row);
        self
    }

    /// The same place, in the given column.
    #[must_use]
    pub fn with_column(mut self, column: &str) -> Self {
        self.column = Some(column.to_owned());
        self
    }

    /// Whether no place is known.
    #[must_use]
    pub fn is_nowhere(&self) -> bool {
        *self == Self::default()
    }
}

impl std::fmt::Display for Place {
    /// `cellar-lab.xlsx, sheet “Wet chemistry”, row 214, column “salt”`
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        let mut parts = Vec::new();
        parts.extend(self.file.clone());
        parts.extend(self.sheet.as_ref().map(|sheet| format!("sheet “{sheet}”")));
        parts.extend(self.row.map(|row| format!("row {row}")));
        parts.extend(
            self.column
                .as_ref()
                .map(|column| format!("column “{column}”")),
        );
        f.write_str(&parts.join(", "))
    }
}

/// A problem as it is told to people.
///
/// Whole sentences with a full stop; names the user gave in “quotes”; no blame, no exclamation
/// mark, no words of the programming language.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Problem {
    /// Stable, tested, searchable.
    pub code: Code,
    /// File, sheet, row, column: whichever there are.
    pub place: Place,
    /// What is the case; one sentence, enough by itself.
    pub found: String,
    /// What would mend it; each an instruction of one sentence.
    pub mend: Vec<String>,
    /// For a copy to send to somebody: causes, versions.
    pub details: Option<String>,
}

impl Problem {
    /// A problem with a code and one sentence.
    #[must_use]
    pub fn new(code: &'static str, found: impl Into<String>) -> Self {
        Self {
            code: Code(code),
            place: Place::nowhere(),
            found: found.into(),
            mend: Vec::new(),
            details: None,
        }
    }

    /// The same problem, at a place.
    #[must_use]
    pub fn at(mut self, place: Place) -> Self {
        self.place = place;
        self
    }

    /// The same problem, with one more way to mend it.
    #[must_use]
    pub fn mend(mut self, instruction: impl Into<String>) -> Self {
        self.mend.push(instruction.into());
        self
    }

    /// The same problem, with details to copy.
    #[must_use]
    pub fn details(mut self, details: impl Into<String>) -> Self {
        self.details = Some(details.into());
        self
    }
}

impl std::fmt::Display for Problem {
    /// The place, what was found, and what would mend it, in running text.
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        if !self.place.is_nowhere() {
            write!(f, "{}: ", self.place)?;
        }
        f.write_str(&self.found)?;
        for instruction in &self.mend {
            write!(f, " {instruction}")?;
        }
        Ok(())
    }
}

impl std::error::Error for Problem {}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_problem_reads_as_place_finding_and_mending() {
        let problem = Problem::new(
            "ragged",
            "6 values were found, but the header names 7 columns.",
        )
        .at(Place::file("cellar-lab.csv").with_row(214))
        .mend("Add the missing value, or choose another delimiter.");
        assert_eq!(
            problem.to_string(),
            "cellar-lab.csv, row 214: 6 values were found, but the header names 7 columns. \
             Add the missing value, or choose another delimiter."
        );
    }
}
