//! The command line, word for word.

use clap::{Args, Parser, Subcommand, ValueEnum};
use std::path::PathBuf;

/// A study document for wide data: from tables to an honest error, a workbook and a write-up.
#[derive(Debug, Parser)]
#[command(name = "widefold", version, args_conflicts_with_subcommands = true)]
pub struct Arguments {
    /// What to do; without it the window opens.
    #[command(subcommand)]
    pub command: Option<Command>,
    /// The study to open in the window.
    pub study: Option<PathBuf>,
}

/// What to do.
#[derive(Debug, Subcommand)]
pub enum Command {
    /// Makes a ready study from tables
    Start(Box<Start>),
    /// Brings a study up to date and saves it
    Update(Update),
    /// Prints every fact and caveat
    Facts(Facts),
    /// Writes the hand-over workbook and the methods write-up
    Export(Export),
    /// Predicts new samples (not built yet)
    Score(Score),
    /// Evaluates afresh and holds it against the record (not built yet)
    Verify(Verify),
    /// Says what differs between two studies (not built yet)
    Compare(Compare),
}

/// Makes a ready study from tables.
#[derive(Debug, Args)]
pub struct Start {
    /// The tables; the first holds the samples, the others are joined to it
    #[arg(required = true)]
    pub tables: Vec<PathBuf>,
    /// The column with the outcome
    #[arg(long, value_name = "NAME")]
    pub outcome: String,
    /// The study to write (.widefold, or .json for the readable form)
    #[arg(short, long, value_name = "STUDY")]
    pub output: PathBuf,
    /// The column that names the samples
    #[arg(long, value_name = "NAME")]
    pub samples: Option<String>,
    /// The column that names the independent thing a sample belongs to
    #[arg(long, value_name = "NAME")]
    pub unit: Option<String>,
    /// Make the units from what the sample names begin with (“B07” of “B07-n1”)
    #[arg(long)]
    pub unit_from_names: bool,
    /// The column that names the batch
    #[arg(long, value_name = "NAME")]
    pub batch: Option<String>,
    /// A column that is always in the model, unpenalised; may be given more than once
    #[arg(long, value_name = "NAME")]
    pub covariate: Vec<String>,
    /// The column that says whether the event happened, for times
    #[arg(long, value_name = "NAME")]
    pub event: Option<String>,
    /// A column to leave out; may be given more than once
    #[arg(long, value_name = "NAME")]
    pub ignore: Vec<String>,
    /// Predictors: a name, a range ("900 nm ... 1700 nm"), a pattern ("MAR-2*") or a stretch of a
    /// numeric axis ("900 ... 1250 nm"); may be given more than once; all that are left otherwise
    #[arg(long, value_name = "COLUMNS")]
    pub predictors: Vec<String>,
    /// Any other setting of the Data cell, as the import report names it: "SETTING = VALUE", or
    /// "SETTING += VALUE" to add to a list; "FILE: SETTING = VALUE" for a table beyond the first;
    /// may be given more than once
    #[arg(long, value_name = "LINE")]
    pub set: Vec<String>,
    /// What sort of thing is predicted; guessed when left out
    #[arg(long, value_enum)]
    pub kind: Option<KindName>,
    /// The penalty
    #[arg(long, value_enum, default_value = "lasso")]
    pub penalty: PenaltyName,
    /// The lasso share of an elastic net; may be given more than once
    #[arg(long, value_name = "S")]
    pub lasso_share: Vec<f64>,
    /// The rule that chooses the penalty strength
    #[arg(long, value_enum, default_value = "lowest-error")]
    pub choice: ChoiceName,
    /// What is compared between strengths; the measure that belongs to the kind when left out
    #[arg(long, value_enum, value_name = "MEASURE")]
    pub error_measure: Option<MeasureName>,
    /// How events at equal times are counted, for times
    #[arg(long, value_enum, default_value = "efron")]
    pub ties: TiesName,
    /// Penalise the coefficients of a predictor in all classes together, for classes
    #[arg(long)]
    pub together: bool,
    /// Weigh the predictors in the penalty by a first ridge fit to each training part
    #[arg(long)]
    pub learnt_weights: bool,
    /// Keep coefficients from being negative
    #[arg(long)]
    pub not_negative: bool,
    /// Compare times within their batch only
    #[arg(long, requires = "batch")]
    pub within_batch: bool,
    /// Give the careful interval of the error beside the plain one; takes several times as long
    #[arg(long)]
    pub careful: bool,
    /// The column with the exposure of counts
    #[arg(long, value_name = "NAME")]
    pub exposure: Option<String>,
    /// A penalty strength set by hand
    #[arg(long, value_name = "L", conflicts_with = "choice")]
    pub strength: Option<f64>,
    /// How many inner parts
    #[arg(long, value_name = "K")]
    pub parts: Option<u32>,
    /// How often the inner parts are drawn
    #[arg(long, value_name = "R")]
    pub repeats: Option<u32>,
    /// How many outer parts
    #[arg(long, value_name = "K")]
    pub outer_parts: Option<u32>,
    /// How often the outer parts are drawn
    #[arg(long, value_name = "R")]
    pub outer_repeats: Option<u32>,
    /// The seed of all that is drawn at random
    #[arg(long, value_name = "N")]
    pub seed: Option<u64>,
    /// Samples are columns in the first table
    #[arg(long)]
    pub sideways: bool,
    /// The sheet of the first workbook
    #[arg(long, value_name = "NAME")]
    pub sheet: Option<String>,
}

/// The kinds of outcome.
#[derive(Clone, Copy, Debug, ValueEnum)]
pub enum KindName {
    /// A measured quantity
    Measured,
    /// Yes or no
    YesNo,
    /// One of several classes
    Classes,
    /// A count
    Count,
    /// The time to an event
    Time,
}

/// The penalties.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum PenaltyName {
    /// Squared coefficients
    Ridge,
    /// Absolute coefficients
    Lasso,
    /// Between the two
    ElasticNet,
}

/// The rules.
#[derive(Clone, Copy, Debug, ValueEnum)]
pub enum ChoiceName {
    /// The lowest held-out error
    LowestError,
    /// The strongest penalty within one standard error of it
    OneSe,
    /// Generalised cross-validation
    Gcv,
    /// Extended Bayesian information criterion
    Ebic,
}

/// The measures of errors.
#[derive(Clone, Copy, Debug, ValueEnum)]
pub enum MeasureName {
    /// The mean squared error
    SquaredError,
    /// The mean deviance
    Deviance,
    /// The share called wrong
    Misclassification,
    /// The deviance of the partial likelihood
    PartialLikelihood,
    /// The share of pairs ordered wrongly
    Concordance,
}

/// How events at equal times are counted.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum TiesName {
    /// Efron (1977)
    Efron,
    /// Breslow (1974)
    Breslow,
}

/// Brings a study up to date and saves it.
#[derive(Debug, Args)]
pub struct Update {
    /// The study
    pub study: PathBuf,
    /// Where to save it; in its own place when left out
    #[arg(short, long, value_name = "STUDY")]
    pub output: Option<PathBuf>,
    /// A setting of the Data cell, as the import report names it: "SETTING = VALUE", or
    /// "SETTING += VALUE" to add to a list; may be given more than once
    #[arg(long, value_name = "LINE")]
    pub set: Vec<String>,
    /// A newer file for the table of this name: says what differs, and leaves the study as it is
    /// unless --accept is given; may be given more than once
    #[arg(long, value_name = "FILE")]
    pub reread: Vec<PathBuf>,
    /// Take the tables that have changed
    #[arg(long)]
    pub accept: bool,
}

/// Prints every fact and caveat.
#[derive(Debug, Args)]
pub struct Facts {
    /// The study
    pub study: PathBuf,
    /// Print JSON
    #[arg(long)]
    pub json: bool,
}

/// Writes the hand-over workbook and the methods write-up.
#[derive(Debug, Args)]
pub struct Export {
    /// The study
    pub study: PathBuf,
    /// The workbook to write
    #[arg(long, value_name = "FILE.xlsx")]
    pub workbook: Option<PathBuf>,
    /// The write-up to write; figures go to a folder beside it
    #[arg(long, value_name = "FILE.md")]
    pub write_up: Option<PathBuf>,
    /// The reason for exporting although a stop stands; printed in the export
    #[arg(long, value_name = "REASON")]
    pub despite: Option<String>,
}

/// Predicts new samples.
#[derive(Debug, Args)]
pub struct Score {
    /// The study
    pub study: PathBuf,
    /// The fit
    #[arg(long, value_name = "NAME")]
    pub fit: String,
    /// The table with the new samples
    pub table: PathBuf,
    /// Where the predictions go
    #[arg(short, long, value_name = "FILE.csv")]
    pub output: PathBuf,
}

/// Evaluates afresh and holds it against the record.
#[derive(Debug, Args)]
pub struct Verify {
    /// The study
    pub study: PathBuf,
}

/// Says what differs between two studies.
#[derive(Debug, Args)]
pub struct Compare {
    /// One study
    pub first: PathBuf,
    /// The other
    pub second: PathBuf,
}
