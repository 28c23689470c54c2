//! One sentence for every kind of finding: what is the case.

use crate::base::layout::Encoding;
use crate::base::number::{self, Precision};
use crate::eval::finding::{count, counted, examples, in_columns, list, such_as};
use crate::table::finding::{
    Association, Finding, FindingKind, Likeness, Normalized, Orienting, Treatment,
};

/// What is the case, without places.
pub fn found(finding: &Finding) -> String {
    let n = finding.count;
    let shown = examples(finding);
    let columns = in_columns(finding);
    // Most sentences are “12 values in “salt” are …, such as “ND”.”
    let such = such_as(finding);
    let things = |one: &str, many: &str, is: &str, are: &str| {
        if n == 1 {
            format!("1 {one}{columns}{shown} {is}.")
        } else {
            format!("{} {many}{columns} {are}{such}.", count(n))
        }
    };
    let values = |is: &str, are: &str| things("value", "values", is, are);
    let labels = |is: &str, are: &str| things("label", "labels", is, are);
    match &finding.kind {
        FindingKind::OtherEncoding(encoding) => format!(
            "The letters of the file are not UTF-8; they were read as {}.",
            encoding_name(*encoding)
        ),
        FindingKind::BrokenLetters => things(
            "text",
            "texts",
            "holds letters that were lost or decoded wrongly before",
            "hold letters that were lost or decoded wrongly before",
        ),
        FindingKind::UnclosedQuote => format!(
            "A quoting mark is opened and never closed{shown}; from there on, quoting marks were \
             read as letters."
        ),
        FindingKind::BreaksInQuotes => format!(
            "{} a line break inside quotes.",
            counted(n, "row holds", "rows hold")
        ),
        FindingKind::OtherSheets {
            read,
            visible,
            hidden,
        } => other_sheets(read, visible, hidden),
        FindingKind::HiddenSheet => {
            format!("The sheet that was read{shown} is hidden in the workbook.")
        }
        FindingKind::HiddenLines { rows, columns } => hidden_lines(*rows, *columns),
        FindingKind::MergedCells => format!(
            "{} merged; the value counts for the first cell only.",
            counted(n, "group of cells is", "groups of cells are")
        ),
        FindingKind::LinesAbove => format!(
            "{} above the header{shown}.",
            counted(n, "line stands", "lines stand")
        ),
        FindingKind::NoHeader => {
            "The first row holds numbers and no names, so that the columns were numbered."
                .to_owned()
        }
        FindingKind::HeaderShort => {
            "The header has one name less than the rows have values; the first column was taken to \
             be the one without a name."
                .to_owned()
        }
        FindingKind::UnitsRow => {
            if finding.places.is_empty() {
                "The second column was read as units.".to_owned()
            } else {
                format!("A row below the header was read as units{shown}.")
            }
        }
        FindingKind::BlankRows => format!(
            "{} among the samples.",
            counted(n, "blank row stands", "blank rows stand")
        ),
        FindingKind::BlankColumns => format!(
            "{} neither a name nor a value.",
            counted(n, "column has", "columns have")
        ),
        FindingKind::LinesBelow => format!(
            "{} below the last sample{shown}.",
            counted(n, "line stands", "lines stand")
        ),
        FindingKind::SummaryRows => format!(
            "{} like a summary of other rows{shown}.",
            counted(n, "row is named", "rows are named")
        ),
        FindingKind::RepeatedHeader => format!(
            "{} the header once more.",
            counted(n, "row holds", "rows hold")
        ),
        FindingKind::ShortRows { expected } => format!(
            "{} fewer values than the {} columns.",
            counted(n, "row has", "rows have"),
            count(*expected)
        ),
        FindingKind::LongRows { expected } => format!(
            "{} more values than the {} columns, so that nobody knows which value belongs to which \
             column.",
            counted(n, "row has", "rows have"),
            count(*expected)
        ),
        FindingKind::Sideways(reason) => format!(
            "The samples were taken to lie in columns, because {}.",
            orienting(*reason)
        ),
        FindingKind::PerhapsSideways(reason) => format!(
            "The samples were taken to lie in rows, but {}.",
            orienting(*reason)
        ),
        FindingKind::BlankNames => {
            let had = if n == 1 {
                "had no name and is now"
            } else {
                "had no names and are now"
            };
            format!(
                "{} {had} called {}.",
                counted(n, "column", "columns"),
                list(&finding.columns, n)
            )
        }
        FindingKind::RepeatedNames => {
            let had = if n == 1 {
                "had the name of another and is"
            } else {
                "had the names of others and are"
            };
            format!(
                "{} {had} now called {}.",
                counted(n, "column", "columns"),
                list(&finding.columns, n)
            )
        }
        FindingKind::TextAmongNumbers => values(
            "is text where numbers are expected",
            "are text where numbers are expected",
        ),
        FindingKind::NumbersAsText => values(
            "is a number that the workbook stores as text",
            "are numbers that the workbook stores as text",
        ),
        FindingKind::ErrorValues => values(
            "is an error value of a workbook",
            "are error values of a workbook",
        ),
        FindingKind::OtherDecimalMark => values(
            "has the other decimal mark than the rest of the file",
            "have the other decimal mark than the rest of the file",
        ),
        FindingKind::GroupedDigits => values(
            "has marks between groups of digits",
            "have marks between groups of digits",
        ),
        FindingKind::ValuesWithUnit => values(
            "has a unit beside the number",
            "have a unit beside the number",
        ),
        FindingKind::DatesAmongNumbers => values(
            "is a date where numbers are expected",
            "are dates where numbers are expected",
        ),
        FindingKind::BelowLimit => values("is below a limit", "are below a limit"),
        FindingKind::AboveLimit => values("is above a limit", "are above a limit"),
        FindingKind::MissingWords { words } => {
            let word = if words.len() == 1 { "word" } else { "words" };
            let words = list(words, words.len());
            let (value, is) = if n == 1 {
                ("value", "is")
            } else {
                ("values", "are")
            };
            format!(
                "{} {value}{columns} {is} said to be missing by the {word} {words}.",
                count(n)
            )
        }
        FindingKind::MissingCodes => values(
            "is a code that stands for a missing value",
            "are codes that stand for missing values",
        ),
        FindingKind::SuspectedCode { code } => {
            let (value, is) = if n == 1 {
                ("value", "is")
            } else {
                ("values", "are")
            };
            format!(
                "{} {value}{columns} {is} {}, far from all others; that is often a code for a missing value.",
                count(n),
                minus(code)
            )
        }
        FindingKind::NumbersTooLarge => values(
            "is too large to be a measured number",
            "are too large to be measured numbers",
        ),
        FindingKind::DigitsLost => values(
            "has more digits than a number can keep",
            "have more digits than a number can keep",
        ),
        FindingKind::LeadingZeros if finding.treatment == Treatment::ReadAsNumber => {
            values("begins with zeros", "begin with zeros")
        }
        FindingKind::LeadingZeros => labels("begins with zeros", "begin with zeros"),
        FindingKind::ExponentLabels => labels(
            "looks like a number with an exponent",
            "look like numbers with an exponent",
        ),
        FindingKind::DateLabels => labels("looks like a date", "look like dates"),
        FindingKind::DatesAmongLabels => labels(
            "is stored as a date by the workbook, and what was typed before cannot be known",
            "are stored as dates by the workbook, and what was typed before cannot be known",
        ),
        FindingKind::NumbersAmongLabels => labels(
            "is stored as a number by the workbook, which loses leading zeros and exponents",
            "are stored as numbers by the workbook, which loses leading zeros and exponents",
        ),
        FindingKind::BlanksAround => labels("has blanks around it", "have blanks around them"),
        FindingKind::LabelVariants => labels(
            "differs from another only by capitals, blanks or hyphens",
            "differ only by capitals, blanks or hyphens",
        ),
        FindingKind::RepeatedSamples => format!(
            "{} a name with another sample{shown}.",
            counted(n, "sample shares", "samples share")
        ),
        FindingKind::UnnamedSamples => {
            format!("{} no name.", counted(n, "sample has", "samples have"))
        }
        FindingKind::LooksLikeRepeats { n_units } => format!(
            "{} like repeats of one another{shown}; there would be {} units.",
            counted(n, "sample is named", "samples are named"),
            count(*n_units)
        ),
        FindingKind::IdenticalSamples => format!(
            "{} equal in every predictor{shown}.",
            counted(n, "pair of samples is", "pairs of samples are")
        ),
        FindingKind::NearIdenticalSamples { dimension } => format!(
            "{} far closer together than samples usually are{shown}; the predictors have about {} \
             independent dimensions.",
            counted(n, "pair of samples lies", "pairs of samples lie"),
            number::text(*dimension, Precision::Significant(2))
        ),
        FindingKind::ConstantColumns => format!(
            "{} one value only{}.",
            counted(n, "predictor has", "predictors have"),
            named(finding)
        ),
        FindingKind::EmptyColumns => format!(
            "{} no value at all{}.",
            counted(n, "predictor has", "predictors have"),
            named(finding)
        ),
        FindingKind::EqualColumns => format!(
            "{} another in every value{}.",
            counted(n, "predictor equals", "predictors equal"),
            named(finding)
        ),
        FindingKind::EqualsOutcome {
            predictor,
            likeness,
        } => equals_outcome(finding, predictor, *likeness),
        FindingKind::NamedLikeOutcome => format!(
            "{} like the outcome{}.",
            counted(n, "predictor is named", "predictors are named"),
            named(finding)
        ),
        FindingKind::BatchWithOutcome { batch, strength } => {
            format!(
                "“{batch}” and the outcome go together: {}.",
                association(*strength)
            )
        }
        FindingKind::BatchOfOneClass { batch, share } => format!(
            "{}, {} of all, stand in a “{batch}” in which the outcome has a single class.",
            counted(n, "sample", "samples"),
            number::text(*share, Precision::Percent(0))
        ),
        FindingKind::OrderWithOutcome {
            order,
            rank_correlation,
        } => format!(
            "The outcome follows “{order}”: Spearman’s rank correlation is {}.",
            number::text(*rank_correlation, Precision::Decimals(2))
        ),
        FindingKind::AlreadyNormalized(kind) => already(*kind),
        FindingKind::MissingShare { share } => format!(
            "{} of the predictors’ values are missing ({} values).",
            number::text(*share, Precision::Percent(1)),
            count(n)
        ),
        FindingKind::BelowLimitShare { largest } => format!(
            "{} {} or more of their values below a limit{}, up to {}.",
            counted(n, "predictor has", "predictors have"),
            number::text(0.3, Precision::Percent(0)),
            named(finding),
            number::text(*largest, Precision::Percent(0))
        ),
    }
}

fn hidden_lines(rows: usize, columns: usize) -> String {
    let rows_said = counted(rows, "row", "rows");
    let columns_said = counted(columns, "column", "columns");
    let (what, n) = match (rows, columns) {
        (_, 0) => (rows_said, rows),
        (0, _) => (columns_said, columns),
        (_, _) => (format!("{rows_said} and {columns_said}"), rows + columns),
    };
    let are = if n == 1 { "is" } else { "are" };
    format!(
        "{what} of the sheet {are} hidden in the workbook and {} read all the same.",
        if n == 1 { "was" } else { "were" }
    )
}

/// The columns concerned, in parentheses.
fn named(finding: &Finding) -> String {
    if finding.columns.is_empty() {
        String::new()
    } else {
        format!(" ({})", list(&finding.columns, finding.n_columns))
    }
}

/// A code as a number is typeset.
fn minus(code: &str) -> String {
    code.replace('-', "−")
}

fn encoding_name(encoding: Encoding) -> &'static str {
    match encoding {
        Encoding::Utf8 => "UTF-8",
        Encoding::Utf16Le => "UTF-16, low byte first",
        Encoding::Utf16Be => "UTF-16, high byte first",
        Encoding::Windows1252 => "Windows-1252 (which also reads Latin-1)",
    }
}

fn other_sheets(read: &str, visible: &[String], hidden: &[String]) -> String {
    let sheets = |names: &[String]| list(names, names.len());
    let others = match (visible.is_empty(), hidden.is_empty()) {
        (false, true) => format!("it also has {}", sheets(visible)),
        (true, false) => format!("it also has {}, hidden", sheets(hidden)),
        (false, false) => format!(
            "it also has {} and, hidden, {}",
            sheets(visible),
            sheets(hidden)
        ),
        (true, true) => "it has no other".to_owned(),
    };
    format!("The sheet “{read}” of the workbook was read; {others}.")
}

fn orienting(reason: Orienting) -> &'static str {
    match reason {
        Orienting::RowsDifferInKind => "some rows hold only labels and the others numbers",
        Orienting::RowHeadsAreAnAxis => "the heads of the rows are a numeric axis",
        Orienting::FirstHeadNamesPredictors => "the first head names predictors",
        Orienting::ManyNamedRows => {
            "there are many more rows than columns, and every row has a name of its own"
        }
    }
}

fn equals_outcome(finding: &Finding, predictor: &str, likeness: Likeness) -> String {
    let decimals = |value: f64| number::text(value, Precision::Decimals(4));
    let how = match likeness {
        Likeness::Correlation(r) => format!("its correlation with the outcome is {}", decimals(r)),
        Likeness::Auc(area) => {
            format!(
                "it tells the two classes apart with an area under the ROC curve of {}",
                decimals(area)
            )
        }
        Likeness::SameClasses => "every class of the outcome has a value of its own".to_owned(),
    };
    let others = match finding.count.saturating_sub(1) {
        0 => String::new(),
        1 => ", and one more predictor does so too".to_owned(),
        more => format!(", and {} more predictors do so too", count(more)),
    };
    format!("“{predictor}” nearly equals the outcome: {how}{others}.")
}

fn association(strength: Association) -> String {
    match strength {
        Association::CramersV(v) => {
            format!("Cramér’s V is {}", number::text(v, Precision::Decimals(2)))
        }
        Association::EtaSquared(eta) => format!(
            "{} of the outcome’s variance lies between its groups",
            number::text(eta, Precision::Percent(0))
        ),
    }
}

fn already(kind: Normalized) -> String {
    match kind {
        Normalized::Columns => "Every predictor has mean 0 and standard deviation 1: the values look \
                                normalised over all samples before import."
            .to_owned(),
        Normalized::RowSums => {
            "The predictors of every sample have the same sum: the values look normalised before import."
                .to_owned()
        }
        Normalized::SortedRows => "Every sample holds the same values in another order: the values look \
                                   normalised over all samples before import."
            .to_owned(),
    }
}
