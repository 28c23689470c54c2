//! Settings of a Data cell: tables, roles, corrections, exclusions, the sealed set.

use crate::base::layout::{DecimalMark, Delimiter, Encoding, Grouping, Orientation, UnitsRow};
use crate::base::real::Real;
use crate::study::source::SourceId;
use std::sync::Arc;

/// Settings of a Data cell.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub struct Data {
    /// The tables. The first holds the samples, the others are joined to it, in this order.
    pub tables: Vec<TableSource>,
    /// What is predicted.
    pub outcome: Option<Outcome>,
    /// Which columns are predictors, as ranges by name. Empty: every numeric column without
    /// another role.
    pub predictors: Vec<ColumnRange>,
    /// The column that names the samples.
    pub sample_name: Option<String>,
    /// The column that names the independent thing a sample belongs to; kept together.
    pub unit: Option<String>,
    /// Whether the tables have that column, or it is made from the sample names.
    pub unit_making: UnitMaking,
    /// The column that names the batch.
    pub batch: Option<String>,
    /// The column with the position or time of measurement.
    pub order: Option<String>,
    /// The column with a weight for each sample.
    pub weight: Option<String>,
    /// Columns that are always in the model, unpenalised.
    pub covariates: Vec<String>,
    /// Columns that are left out although they would be predictors.
    pub ignored: Vec<String>,
    /// Columns that are read as text, letter for letter, whatever they hold.
    pub as_text: Vec<String>,
    /// Columns that are read as numbers, even if most of their values are none.
    pub as_numbers: Vec<String>,
    /// Recorded changes of single values, in the order in which they were made.
    pub corrections: Arc<Vec<Correction>>,
    /// Recorded removals of samples, in the order in which they were made.
    pub exclusions: Arc<Vec<Exclusion>>,
    /// The samples kept for one last check.
    pub sealed: Sealed,
    /// The quality-control samples, which are measured along with the others and not analysed.
    pub quality_control: Option<Arc<Marked>>,
    /// What the study's subject is, which decides on the cautions that both exports carry.
    pub subject: Subject,
}

/// One imported table and how it is read. `None` leaves a choice to the reader, which says what
/// it took; `start` and the window write the choice down.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct TableSource {
    /// The imported bytes.
    pub source: SourceId,
    /// The file's name, for people.
    pub file: String,
    /// The day on which the bytes were taken in, where somebody told it.
    pub taken_on: Option<String>,
    /// The sheet of a workbook.
    pub sheet: Option<String>,
    /// How bytes become letters.
    pub encoding: Option<Encoding>,
    /// What separates values.
    pub delimiter: Option<Delimiter>,
    /// What stands before decimals.
    pub decimal: Option<DecimalMark>,
    /// Whether marks between groups of digits are read.
    pub grouping: Option<Grouping>,
    /// The row with the column names, counted from 1.
    pub header_row: Option<usize>,
    /// Whether a row with units follows the header.
    pub units_row: Option<UnitsRow>,
    /// Whether a sample is a row or a column.
    pub orientation: Option<Orientation>,
    /// Texts that mean “missing”, beyond the blank.
    pub missing_codes: Vec<String>,
    /// How this table is joined to those before it; the first table has none.
    pub join: Option<Join>,
}

impl TableSource {
    /// A table whose every interpretation is left to the reader.
    #[must_use]
    pub fn new(source: SourceId, file: &str) -> Self {
        Self {
            source,
            file: file.to_owned(),
            taken_on: None,
            sheet: None,
            encoding: None,
            delimiter: None,
            decimal: None,
            grouping: None,
            header_row: None,
            units_row: None,
            orientation: None,
            missing_codes: Vec::new(),
            join: None,
        }
    }
}

/// Where the names of the units come from.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum UnitMaking {
    /// A column of the tables holds them.
    #[default]
    InColumn,
    /// They are what the sample names begin with: “B07” of “B07-n1”.
    FromNames,
}

/// How a table is joined: many samples may share one row of the joined table.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Join {
    /// The column of the tables before it.
    pub left: String,
    /// The column of the joined table.
    pub right: String,
    /// Whether upper and lower case are the same.
    pub case: LetterCase,
    /// Whether zeros in front of a number count.
    pub zeros: LeadingZeros,
}

/// Whether upper and lower case are told apart when names are matched.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum LetterCase {
    /// “W017” and “w017” are two names.
    Distinct,
    /// “W017” and “w017” are one name.
    Folded,
}

/// Whether zeros in front of a number are part of a name.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum LeadingZeros {
    /// “007” and “7” are two names.
    Kept,
    /// “007” and “7” are one name.
    Ignored,
}

/// What is predicted.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Outcome {
    /// The column.
    pub column: String,
    /// What sort of thing it is.
    pub kind: OutcomeKind,
    /// The unit, where it is not in the table.
    pub unit: Option<String>,
    /// The standard deviation of the reference method's own error, in the unit of the outcome.
    pub reference_error: Option<Real>,
}

/// What sort of thing is predicted.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum OutcomeKind {
    /// A measured quantity (gaussian).
    Measured,
    /// Yes or no (binomial).
    YesNo {
        /// The text that means “yes”; `None` leaves it to the reader, which says what it took.
        event: Option<String>,
    },
    /// One of several classes (multinomial).
    Classes,
    /// A count (Poisson).
    Count {
        /// A column with the exposure, whose logarithm is the offset.
        exposure: Option<String>,
    },
    /// The time to an event (Cox).
    Time {
        /// The column that says whether the event happened (1, yes) or the sample was censored.
        event: String,
    },
}

/// A range of columns in the order of the table, both ends included. One column is a range from
/// itself to itself.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct ColumnRange {
    /// The name of the first column.
    pub first: String,
    /// The name of the last column.
    pub last: String,
}

/// Whether the outcome had been seen when a decision on the data was taken.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum OutcomeSeen {
    /// Before anybody looked at the outcome.
    Before,
    /// After the outcome had been looked at.
    After,
    /// Nobody wrote it down.
    NotSaid,
}

/// A recorded change of one value.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Correction {
    /// The sample's name.
    pub sample: String,
    /// The column.
    pub column: String,
    /// The text of the value that was found, so that a changed source is noticed.
    pub from: String,
    /// The text of the value that it should be; blank for a missing value.
    pub to: String,
    /// Why.
    pub reason: String,
    /// Whether the outcome had been seen.
    pub outcome: OutcomeSeen,
}

/// A recorded removal of one sample.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Exclusion {
    /// The sample's name.
    pub sample: String,
    /// Why.
    pub reason: String,
    /// Whether the outcome had been seen.
    pub outcome: OutcomeSeen,
}

/// The samples kept for one last check.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub enum Sealed {
    /// None.
    #[default]
    Nothing,
    /// The samples whose column holds one of these texts.
    Where {
        /// The column.
        column: String,
        /// The texts.
        values: Vec<String>,
    },
    /// The units with these names, or the samples where no units are named.
    Listed(Vec<String>),
}

/// The samples whose column holds one of some texts.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Marked {
    /// The column.
    pub column: String,
    /// The texts.
    pub values: Vec<String>,
}

/// What the study's subject is.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Subject {
    /// Nothing that asks for more caution than usual.
    #[default]
    Ordinary,
    /// The health of humans or animals.
    Health,
    /// Plant, machines or food whose safety depends on the answer.
    Safety,
    /// A test for release or compliance.
    Compliance,
}
