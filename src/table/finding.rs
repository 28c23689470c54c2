//! Finding: something noticed about a table, as facts; the sentences are made elsewhere.

use crate::base::layout::Encoding;
use crate::base::problem::Place;

/// How many examples a finding keeps.
pub const KEPT: usize = 20;

/// How many places a finding keeps; where there are more, they are counted.
pub const PLACES: usize = 200;

/// How many columns a finding keeps.
pub const COLUMNS: usize = 1_000;

/// What was done about a finding.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Treatment {
    /// Nothing was changed; it is only said.
    Kept,
    /// The values count as missing.
    CountedAsMissing,
    /// The values are kept as only known by their limit.
    KeptAsLimit,
    /// The values were read as the numbers that they state without doubt.
    ReadAsNumber,
    /// The values are kept as text, letter for letter.
    KeptAsText,
    /// The names were changed so that every column has its own.
    Renamed,
    /// The rows or columns are not part of the table.
    LeftOut,
    /// The rows or columns were read for what they seem to be.
    ReadAsSuch,
    /// Blanks around the text were taken off.
    BlanksTakenOff,
}

/// What was noticed. Facts that concern the whole finding are fields.
#[derive(Clone, Debug, PartialEq)]
pub enum FindingKind {
    // The file.
    /// The letters were not UTF-8; this encoding was taken.
    OtherEncoding(Encoding),
    /// Letters that no encoding gives a meaning, or that were decoded wrongly before.
    BrokenLetters,
    /// A quoting mark was opened and never closed; it was read as a letter.
    UnclosedQuote,
    /// Quoted values that hold line breaks.
    BreaksInQuotes,
    /// The workbook has other sheets.
    OtherSheets {
        /// The sheet that was read.
        read: String,
        /// The others that can be seen.
        visible: Vec<String>,
        /// The ones that are hidden in the workbook.
        hidden: Vec<String>,
    },
    /// The sheet that was read is hidden in the workbook.
    HiddenSheet,
    /// Rows or columns of the sheet are hidden in the workbook; they were read like the others.
    HiddenLines {
        /// How many rows.
        rows: usize,
        /// How many columns.
        columns: usize,
    },
    /// Cells of the sheet are merged; the value stands in the first.
    MergedCells,

    // How the table lies in the file.
    /// Lines above the header.
    LinesAbove,
    /// There is no header; the columns are numbered.
    NoHeader,
    /// The header has one name less than the rows have values; it lacks the first.
    HeaderShort,
    /// A row of units below the header.
    UnitsRow,
    /// Blank rows among the samples.
    BlankRows,
    /// Blank columns without a name.
    BlankColumns,
    /// Lines below the last sample that belong to no sample.
    LinesBelow,
    /// Rows that seem to sum up others (“mean”, “total”).
    SummaryRows,
    /// Rows that hold the header once more.
    RepeatedHeader,
    /// Rows with fewer values than the header has names.
    ShortRows {
        /// How many the header names.
        expected: usize,
    },
    /// Rows with more values than the header has names.
    LongRows {
        /// How many the header names.
        expected: usize,
    },
    /// Samples were taken to lie in columns.
    Sideways(Orienting),
    /// Samples were taken to lie in rows, with doubts.
    PerhapsSideways(Orienting),

    // Names of columns.
    /// Columns without a name.
    BlankNames,
    /// Columns with the name of another.
    RepeatedNames,

    // Values.
    /// Text where numbers are expected.
    TextAmongNumbers,
    /// A workbook's cells that hold numbers as text.
    NumbersAsText,
    /// A workbook's error values.
    ErrorValues,
    /// Numbers with the other decimal mark.
    OtherDecimalMark,
    /// Numbers with marks between groups of three digits.
    GroupedDigits,
    /// Numbers with a unit or a percent sign in the cell.
    ValuesWithUnit,
    /// Dates where numbers are expected.
    DatesAmongNumbers,
    /// Values below a limit.
    BelowLimit,
    /// Values above a limit.
    AboveLimit,
    /// Words that say a value is missing.
    MissingWords {
        /// The words, as written.
        words: Vec<String>,
    },
    /// Codes that the user named for missing values.
    MissingCodes,
    /// A number that looks like a code for a missing value.
    SuspectedCode {
        /// The number, as a label.
        code: String,
    },
    /// Numbers too large to hold, or written as infinite.
    NumbersTooLarge,
    /// Whole numbers with more digits than a number can keep.
    DigitsLost,

    // Labels.
    /// Labels with leading zeros.
    LeadingZeros,
    /// Labels that look like numbers with an exponent.
    ExponentLabels,
    /// Labels that look like dates.
    DateLabels,
    /// Labels that a workbook stores as dates.
    DatesAmongLabels,
    /// Labels that a workbook stores as numbers.
    NumbersAmongLabels,
    /// Labels with blanks around them.
    BlanksAround,
    /// Labels that differ only by capitals or blanks.
    LabelVariants,

    // Samples.
    /// Samples with the same name.
    RepeatedSamples,
    /// Samples without a name.
    UnnamedSamples,
    /// Names that look like repeats of one unit.
    LooksLikeRepeats {
        /// How many units there would be.
        n_units: usize,
    },
    /// Samples whose predictors are all equal.
    IdenticalSamples,
    /// Samples that lie far closer together than others do.
    NearIdenticalSamples {
        /// The effective dimension of the predictors (participation ratio).
        dimension: f64,
    },

    // Columns.
    /// Columns with one value only.
    ConstantColumns,
    /// Columns without any value.
    EmptyColumns,
    /// Columns that equal another in every value.
    EqualColumns,
    /// Predictors that nearly equal the outcome.
    EqualsOutcome {
        /// The predictor.
        predictor: String,
        /// How it resembles the outcome.
        likeness: Likeness,
    },
    /// Predictors that are named like the outcome.
    NamedLikeOutcome,
    /// The outcome goes together with a batch.
    BatchWithOutcome {
        /// The batch column.
        batch: String,
        /// How strongly.
        strength: Association,
    },
    /// Batches in which the outcome has a single class.
    BatchOfOneClass {
        /// The batch column.
        batch: String,
        /// The share of samples that stand in such batches.
        share: f64,
    },
    /// The outcome follows the order of measurement.
    OrderWithOutcome {
        /// The order column.
        order: String,
        /// Spearman's rank correlation.
        rank_correlation: f64,
    },
    /// The predictors look as if they had been normalised over all samples before.
    AlreadyNormalized(Normalized),
    /// The share of missing values among the predictors.
    MissingShare {
        /// The share.
        share: f64,
    },
    /// Predictors of which a large share lies below a limit.
    BelowLimitShare {
        /// The largest share of one predictor.
        largest: f64,
    },
}

impl FindingKind {
    /// A stable, searchable name of the kind.
    #[must_use]
    pub fn code(&self) -> &'static str {
        match self {
            Self::OtherEncoding(_) => "other-encoding",
            Self::BrokenLetters => "broken-letters",
            Self::UnclosedQuote => "unclosed-quote",
            Self::BreaksInQuotes => "breaks-in-quotes",
            Self::OtherSheets { .. } => "other-sheets",
            Self::HiddenSheet => "hidden-sheet",
            Self::HiddenLines { .. } => "hidden-lines",
            Self::MergedCells => "merged-cells",
            Self::LinesAbove => "lines-above",
            Self::NoHeader => "no-header",
            Self::HeaderShort => "header-short",
            Self::UnitsRow => "units-row",
            Self::BlankRows => "blank-rows",
            Self::BlankColumns => "blank-columns",
            Self::LinesBelow => "lines-below",
            Self::SummaryRows => "summary-rows",
            Self::RepeatedHeader => "repeated-header",
            Self::ShortRows { .. } => "short-rows",
            Self::LongRows { .. } => "long-rows",
            Self::Sideways(_) => "sideways",
            Self::PerhapsSideways(_) => "perhaps-sideways",
            Self::BlankNames => "blank-names",
            Self::RepeatedNames => "repeated-names",
            Self::TextAmongNumbers => "text-among-numbers",
            Self::NumbersAsText => "numbers-as-text",
            Self::ErrorValues => "error-values",
            Self::OtherDecimalMark => "other-decimal-mark",
            Self::GroupedDigits => "grouped-digits",
            Self::ValuesWithUnit => "values-with-unit",
            Self::DatesAmongNumbers => "dates-among-numbers",
            Self::BelowLimit => "below-limit",
            Self::AboveLimit => "above-limit",
            Self::MissingWords { .. } => "missing-words",
            Self::MissingCodes => "missing-codes",
            Self::SuspectedCode { .. } => "suspected-code",
            Self::NumbersTooLarge => "numbers-too-large",
            Self::DigitsLost => "digits-lost",
            Self::LeadingZeros => "leading-zeros",
            Self::ExponentLabels => "exponent-labels",
            Self::DateLabels => "date-labels",
            Self::DatesAmongLabels => "dates-among-labels",
            Self::NumbersAmongLabels => "numbers-among-labels",
            Self::BlanksAround => "blanks-around",
            Self::LabelVariants => "label-variants",
            Self::RepeatedSamples => "repeated-samples",
            Self::UnnamedSamples => "unnamed-samples",
            Self::LooksLikeRepeats { .. } => "looks-like-repeats",
            Self::IdenticalSamples => "identical-samples",
            Self::NearIdenticalSamples { .. } => "near-identical-samples",
            Self::ConstantColumns => "constant-columns",
            Self::EmptyColumns => "empty-columns",
            Self::EqualColumns => "equal-columns",
            Self::EqualsOutcome { .. } => "equals-outcome",
            Self::NamedLikeOutcome => "named-like-outcome",
            Self::BatchWithOutcome { .. } => "batch-with-outcome",
            Self::BatchOfOneClass { .. } => "batch-of-one-class",
            Self::OrderWithOutcome { .. } => "order-with-outcome",
            Self::AlreadyNormalized(_) => "already-normalized",
            Self::MissingShare { .. } => "missing-share",
            Self::BelowLimitShare { .. } => "below-limit-share",
        }
    }
}

/// Why samples seem to lie in columns, or might.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Orienting {
    /// Some rows hold only labels, others only numbers.
    RowsDifferInKind,
    /// The heads of the rows are a numeric axis, such as wavelengths.
    RowHeadsAreAnAxis,
    /// The first head names predictors (“peak”, “marker”).
    FirstHeadNamesPredictors,
    /// There are many more rows than columns, and they have names.
    ManyNamedRows,
}

/// How a predictor resembles the outcome.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Likeness {
    /// Pearson's correlation.
    Correlation(f64),
    /// The area under the ROC curve, at least one half.
    Auc(f64),
    /// Every class of the outcome has a value of its own.
    SameClasses,
}

/// How strongly the outcome goes together with a batch.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Association {
    /// Cramér's V, for classes.
    CramersV(f64),
    /// The share of the outcome's variance between batches (η²), for quantities.
    EtaSquared(f64),
}

/// What makes values look normalised.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Normalized {
    /// Every column has mean 0 and standard deviation 1.
    Columns,
    /// Every row has the same sum.
    RowSums,
    /// Every row holds the same values in another order.
    SortedRows,
}

/// Something noticed about a table.
#[derive(Clone, Debug, PartialEq)]
pub struct Finding {
    /// What it is.
    pub kind: FindingKind,
    /// The file that it is about; `None` where it is about the samples as joined.
    pub file: Option<String>,
    /// How many values, rows, columns or names it concerns.
    pub count: usize,
    /// The first places.
    pub places: Vec<Place>,
    /// The first texts or names concerned, as written.
    pub examples: Vec<String>,
    /// The first columns concerned.
    pub columns: Vec<String>,
    /// How many columns are concerned.
    pub n_columns: usize,
    /// What was done.
    pub treatment: Treatment,
}

impl Finding {
    /// A finding that concerns nothing yet.
    #[must_use]
    pub fn new(kind: FindingKind, treatment: Treatment) -> Self {
        Self {
            kind,
            file: None,
            count: 0,
            places: Vec::new(),
            examples: Vec::new(),
            columns: Vec::new(),
            n_columns: 0,
            treatment,
        }
    }

    /// The same finding with a count.
    #[must_use]
    pub fn counting(mut self, count: usize) -> Self {
        self.count = count;
        self
    }

    /// Adds one more of its kind; only the first places and unlike examples are kept.
    pub fn add(&mut self, place: impl FnOnce() -> Place, example: &str) {
        self.count += 1;
        if self.places.len() < PLACES {
            self.places.push(place());
        }
        self.add_example(example);
    }

    /// Adds an example that is not yet among the first ones.
    pub fn add_example(&mut self, example: &str) {
        if !example.is_empty()
            && self.examples.len() < KEPT
            && !self.examples.iter().any(|known| known == example)
        {
            self.examples.push(shortened(example));
        }
    }

    /// Adds a column that is concerned.
    pub fn add_column(&mut self, name: &str) {
        self.n_columns += 1;
        if self.columns.len() < COLUMNS {
            self.columns.push(name.to_owned());
        }
    }
}

/// A text of which at most 60 letters are kept, without line breaks.
pub(crate) fn shortened(text: &str) -> String {
    let mut letters = text
        .chars()
        .map(|letter| if letter.is_control() { ' ' } else { letter });
    let mut short: String = letters.by_ref().take(60).collect();
    if letters.next().is_some() {
        short.push('…');
    }
    short
}
