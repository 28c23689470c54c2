//! What could be done about a finding.

use crate::table::finding::{Finding, FindingKind, Treatment};

/// What could be done about it; each an instruction of one sentence. The instructions name
/// settings of the Data cell or the file itself.
#[must_use]
pub fn mend(finding: &Finding) -> Vec<&'static str> {
    const FILE: &str = "Correct the file, or record a correction with its reason.";
    match &finding.kind {
        FindingKind::OtherEncoding(_) => vec!["Choose another encoding if letters look wrong."],
        FindingKind::BrokenLetters => vec![
            "Choose another encoding if the file has one.",
            "Save the file anew from where the letters were whole.",
        ],
        FindingKind::UnclosedQuote => vec!["Close the quote in the file, or take the mark out."],
        FindingKind::BreaksInQuotes => {
            vec!["Look at these rows if quotes were not meant to hold several lines."]
        }
        FindingKind::OtherSheets { .. } => vec!["Choose another sheet if this is not the one."],
        FindingKind::HiddenSheet => vec!["Choose another sheet if this is not the one."],
        FindingKind::HiddenLines { .. } => {
            vec![
                "Exclude samples with a reason, or leave columns out, if they were hidden for one.",
            ]
        }
        FindingKind::MergedCells => {
            vec!["Undo the merging in the workbook if every cell should have the value."]
        }
        FindingKind::LinesAbove => {
            vec!["Choose another row as the header if a line above belongs to the table."]
        }
        FindingKind::NoHeader => vec!["Say in which row the header stands, if there is one."],
        FindingKind::HeaderShort => {
            vec!["Add the missing name to the header if another column lacks it."]
        }
        FindingKind::UnitsRow => vec!["Say that there are no units if the row is a sample."],
        FindingKind::BlankRows | FindingKind::BlankColumns => {
            vec!["Nothing needs to be done; take them out of the file if they should not be there."]
        }
        FindingKind::LinesBelow => {
            vec!["Take out the blank row in the file if these lines are samples."]
        }
        FindingKind::SummaryRows => {
            vec!["Exclude these rows with a reason if they are no samples."]
        }
        FindingKind::RepeatedHeader => {
            vec!["Nothing needs to be done; look whether two files were put together here."]
        }
        FindingKind::ShortRows { .. } => {
            vec!["Add the missing values to the file, or choose another delimiter."]
        }
        FindingKind::LongRows { .. } => vec![
            "Put values that hold the delimiter into quotes, or choose another delimiter or decimal mark.",
        ],
        FindingKind::Sideways(_) => vec!["Say that samples lie in rows if they do."],
        FindingKind::PerhapsSideways(_) => vec!["Say that samples lie in columns if they do."],
        FindingKind::BlankNames => vec!["Name the columns in the file."],
        FindingKind::RepeatedNames => vec!["Give the columns different names in the file."],
        FindingKind::TextAmongNumbers
        | FindingKind::ErrorValues
        | FindingKind::ValuesWithUnit
        | FindingKind::NumbersTooLarge => vec![FILE],
        FindingKind::NumbersAsText => vec![
            "Nothing needs to be done if they measure something; read the column as text if they name something.",
        ],
        FindingKind::OtherDecimalMark => vec![
            "Choose the other decimal mark if the whole file has it.",
            FILE,
        ],
        FindingKind::GroupedDigits => vec!["Say that groups of digits are to be read.", FILE],
        FindingKind::DatesAmongNumbers => vec![
            "Restore what a workbook program may have turned into dates.",
            "Keep the column as text if it holds dates.",
        ],
        FindingKind::BelowLimit | FindingKind::AboveLimit => {
            vec!["Choose in a Prepare cell what stands in for these values."]
        }
        FindingKind::MissingWords { .. } => vec!["Keep the column as text if the word is a label."],
        FindingKind::MissingCodes => {
            vec!["Take the code off the words for missing values if it is a measured value."]
        }
        FindingKind::SuspectedCode { .. } => {
            vec!["Name it as a code for missing values if it is one."]
        }
        FindingKind::DigitsLost => vec!["Keep the column as text if it names something."],
        FindingKind::LeadingZeros => match finding.treatment {
            Treatment::ReadAsNumber => vec!["Keep the column as text if it names something."],
            Treatment::Kept
            | Treatment::CountedAsMissing
            | Treatment::KeptAsLimit
            | Treatment::KeptAsText
            | Treatment::Renamed
            | Treatment::LeftOut
            | Treatment::ReadAsSuch
            | Treatment::BlanksTakenOff => {
                vec!["Read the column as numbers if it measures something."]
            }
        },
        FindingKind::ExponentLabels => vec!["Read the column as numbers if it measures something."],
        FindingKind::DateLabels => {
            vec!["Nothing needs to be done: they stand as they were written."]
        }
        FindingKind::DatesAmongLabels | FindingKind::NumbersAmongLabels => {
            vec!["Restore the labels in the workbook and store them as text."]
        }
        FindingKind::BlanksAround => {
            vec!["Nothing needs to be done; take the blanks out of the file if others read it."]
        }
        FindingKind::LabelVariants => vec!["Write them alike if they mean the same."],
        FindingKind::RepeatedSamples => vec![
            "Give every sample its own name.",
            "If they are repeats of one unit, name the unit in a column and keep it together.",
        ],
        FindingKind::UnnamedSamples => {
            vec!["Name the samples in the file, or choose another column of names."]
        }
        FindingKind::LooksLikeRepeats { .. } => {
            vec![
                "Keep samples of one unit together, or say that every sample is a unit of its own.",
            ]
        }
        FindingKind::IdenticalSamples | FindingKind::NearIdenticalSamples { .. } => {
            vec!["Keep them together as one unit, or exclude one of each pair with a reason."]
        }
        FindingKind::ConstantColumns | FindingKind::EmptyColumns => {
            vec!["Leave them out of the predictors; they cannot tell samples apart."]
        }
        FindingKind::EqualColumns => vec!["Leave one of each pair out of the predictors."],
        FindingKind::EqualsOutcome { .. } | FindingKind::NamedLikeOutcome => {
            vec!["Leave out what would not be known when a prediction is made."]
        }
        FindingKind::BatchWithOutcome { .. } | FindingKind::BatchOfOneClass { .. } => vec![
            "Judge the fit with whole batches held out; removing the batch effect first does not cure this.",
        ],
        FindingKind::OrderWithOutcome { .. } => {
            vec!["Hold out samples in blocks of the order of measurement."]
        }
        FindingKind::AlreadyNormalized(_) => {
            vec!["Bring in the values as they were measured, if they can be had."]
        }
        FindingKind::MissingShare { .. } => {
            vec!["Choose in a Prepare cell how missing values are filled in."]
        }
        FindingKind::BelowLimitShare { .. } => {
            vec![
                "Choose in a Prepare cell what stands in for these values, or leave these predictors out.",
            ]
        }
    }
}
