//! A ready study from tables: what `start` and the window begin with.
//!
//! Every interpretation that the tables left open is written down in the settings, so that it is
//! a word that can be changed, and said in a note.

mod kind;

use crate::base::layout::Orientation;
use crate::base::number::{self, Precision};
use crate::base::problem::{Place, Problem};
use crate::base::thread::Threads;
use crate::base::work::{Cancelled, Work};
use crate::eval::finding::read_problem;
use crate::eval::start::kind::{event_column, guess_kind, rarest, summary, with_event};
use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::edit::Edit;
use crate::study::link::Link;
use crate::study::prose::Prose;
use crate::study::settings::Settings;
use crate::study::settings::data::{
    ColumnRange, Data, Exclusion, Join, LeadingZeros, LetterCase, Outcome, OutcomeKind,
    OutcomeSeen, TableSource,
};
use crate::study::settings::fit::{ErrorMeasure, Fit, Judge, Penalty, Rule, Strength};
use crate::study::settings::prepare::{Prepare, Step};
use crate::study::settings::question::{Ask, Question};
use crate::study::source::{Shelf, SourceId};
use crate::table::Table;
use crate::table::axis;
use crate::table::column::{Column, Value, Values};
use crate::table::read::{Options, read};
use std::collections::BTreeSet;
use std::sync::Arc;

/// What is wished for; what is left open is taken from the tables.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Wishes {
    /// The title of the study.
    pub title: String,
    /// The column with the outcome.
    pub outcome: String,
    /// What sort of thing it is.
    pub kind: Option<OutcomeKind>,
    /// The column that names the samples.
    pub samples: Option<String>,
    /// The column that names the units.
    pub unit: Option<String>,
    /// The column that names the batches.
    pub batch: Option<String>,
    /// Unpenalised columns.
    pub covariates: Vec<String>,
    /// Columns to leave out.
    pub ignored: Vec<String>,
    /// The column with the order of measurement.
    pub order: Option<String>,
    /// The column with the weights of the samples.
    pub weight: Option<String>,
    /// How each table is read; what is not said is guessed.
    pub reading: Vec<Options>,
    /// Whether samples are columns in the first table.
    pub orientation: Option<Orientation>,
    /// The sheet of the first workbook.
    pub sheet: Option<String>,
    /// The fit.
    pub fit: Fit,
}

/// A study that is ready to be brought up to date.
#[derive(Clone, Debug)]
pub struct Started {
    /// The study.
    pub study: Study,
    /// The imported bytes.
    pub shelf: Shelf,
    /// What was taken where nothing was said, for the user to read.
    pub notes: Vec<String>,
}

/// Makes a study from tables, given as file names and bytes.
///
/// # Errors
/// [`Cancelled`] when reading was called off; a [`Problem`] when a file holds no table, or the
/// outcome or another column that was named does not exist.
pub fn start(
    tables: &[(String, Arc<[u8]>)],
    wishes: &Wishes,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Result<Started, Problem>, Cancelled> {
    let mut shelf = Shelf::default();
    let mut read_tables = Vec::new();
    for (at, (file, bytes)) in tables.iter().enumerate() {
        let id = shelf.put(Arc::clone(bytes));
        let options = first_options(wishes, at);
        let bar = work.part(at as f32 / tables.len() as f32..(at + 1) as f32 / tables.len() as f32);
        match read(bytes, file, &options, threads, &bar)? {
            Ok(reading) => read_tables.push(ReadTable {
                source: source(id, file, &reading.used),
                table: reading.table,
            }),
            Err(error) => return Ok(Err(read_problem(&error, file))),
        }
    }
    if read_tables.is_empty() {
        return Ok(Err(
            Problem::new("no-table", "No table was named.").mend("Name a file with a table.")
        ));
    }
    let mut notes = Vec::new();
    Ok(
        data_settings(read_tables, wishes, &mut notes).and_then(|(data, shape)| {
            let study = ready_study(data, &shape, wishes, &mut notes)?;
            Ok(Started {
                study,
                shelf,
                notes,
            })
        }),
    )
}

struct ReadTable {
    source: TableSource,
    table: Table,
}

/// What of the tables decides on the rest of the study.
struct Shape {
    n_units: usize,
    /// Of how many independent samples the rarest class is, or how many had the event.
    n_rarest: Option<usize>,
    has_gaps: bool,
    has_limits: bool,
    is_spectrum: bool,
}

fn first_options(wishes: &Wishes, at: usize) -> Options {
    let mut as_text: Vec<String> = Vec::new();
    as_text.extend(wishes.samples.clone());
    as_text.extend(wishes.unit.clone());
    as_text.extend(wishes.batch.clone());
    let mut options = wishes.reading.get(at).cloned().unwrap_or_default();
    options.as_text.extend(as_text);
    if at == 0 {
        options.orientation = wishes.orientation.or(options.orientation);
        options.sheet = wishes.sheet.clone().or(options.sheet);
    }
    options
}

/// The source with every interpretation written down.
fn source(id: SourceId, file: &str, used: &Options) -> TableSource {
    TableSource {
        sheet: used.sheet.clone(),
        encoding: used.encoding,
        delimiter: used.delimiter,
        decimal: used.decimal,
        header_row: used.header_row,
        units_row: used.units_row,
        orientation: used.orientation,
        missing_codes: used.missing_codes.clone(),
        ..TableSource::new(id, file)
    }
}

fn data_settings(
    tables: Vec<ReadTable>,
    wishes: &Wishes,
    notes: &mut Vec<String>,
) -> Result<(Data, Shape), Problem> {
    let mut sources = Vec::new();
    for (at, read) in tables.iter().enumerate() {
        let mut source = read.source.clone();
        if at > 0 {
            source.join = Some(join(&tables[..at], read, wishes, notes)?);
        }
        sources.push(source);
    }
    let find = |name: &str| tables.iter().find_map(|read| read.table.column(name));
    let named = [
        Some(&wishes.outcome),
        wishes.samples.as_ref(),
        wishes.unit.as_ref(),
        wishes.batch.as_ref(),
        wishes.order.as_ref(),
        wishes.weight.as_ref(),
    ];
    let also = wishes.covariates.iter().chain(&wishes.ignored);
    for name in named.into_iter().flatten().chain(also) {
        if find(name).is_none() {
            return Err(no_such_column(name, &tables));
        }
    }
    let outcome_column = find(&wishes.outcome).expect("it was just found");
    let kind = match &wishes.kind {
        Some(kind) => kind.clone(),
        None => guess_kind(outcome_column, notes),
    };
    let kind = with_event(kind, outcome_column, notes);
    if let Some(event) = event_column(&kind)
        && find(event).is_none()
    {
        return Err(no_such_column(event, &tables));
    }
    let first = &tables[0];
    let samples = wishes
        .samples
        .clone()
        .or_else(|| sample_names(first, wishes, notes));
    let taken: BTreeSet<&str> = [
        Some(wishes.outcome.as_str()),
        samples.as_deref(),
        wishes.unit.as_deref(),
        wishes.batch.as_deref(),
        wishes.order.as_deref(),
        wishes.weight.as_deref(),
        event_column(&kind),
    ]
    .into_iter()
    .flatten()
    .chain(wishes.covariates.iter().map(String::as_str))
    .chain(wishes.ignored.iter().map(String::as_str))
    .chain(
        sources
            .iter()
            .filter_map(|s| s.join.as_ref())
            .map(|join| join.left.as_str()),
    )
    .collect();
    let predictors = predictor_columns(&tables, &taken, notes);
    let mut shape = shape(&tables, &predictors, wishes, samples.as_deref());
    shape.n_rarest = rarest(&kind, &wishes.outcome, wishes.unit.as_deref(), &tables);
    let ranges = ranges(&tables, &predictors);
    let mut data = Data {
        tables: sources,
        outcome: Some(Outcome {
            column: wishes.outcome.clone(),
            kind,
            unit: outcome_column.unit.clone(),
            reference_error: None,
        }),
        predictors: ranges,
        sample_name: samples,
        unit: wishes.unit.clone(),
        batch: wishes.batch.clone(),
        order: wishes.order.clone(),
        weight: wishes.weight.clone(),
        covariates: wishes.covariates.clone(),
        ignored: wishes.ignored.clone(),
        ..Data::default()
    };
    exclude_without_outcome(&mut data, first, notes);
    Ok((data, shape))
}

fn no_such_column(name: &str, tables: &[ReadTable]) -> Problem {
    let files: Vec<&str> = tables
        .iter()
        .map(|read| read.source.file.as_str())
        .collect();
    let some: Vec<&str> = tables
        .iter()
        .flat_map(|read| read.table.columns().iter().take(6))
        .map(|column| column.name.as_str())
        .take(8)
        .collect();
    Problem::new(
        "missing-outcome",
        format!("There is no column “{name}” in the tables."),
    )
    .at(Place::file(&files.join(", ")))
    .mend(format!(
        "Name a column that is there; the first are “{}”.",
        some.join("”, “")
    ))
}

/// The columns on which a table is joined: the wished ones if it has them, else the column that
/// shares its name with one of the tables before and the most values with it.
fn join(
    before: &[ReadTable],
    table: &ReadTable,
    wishes: &Wishes,
    notes: &mut Vec<String>,
) -> Result<Join, Problem> {
    let texts = |column: &Column| -> BTreeSet<String> {
        (0..column.len())
            .filter_map(|row| key_text(column, row))
            .collect()
    };
    let mut best: Option<(usize, String)> = None;
    let wished = [wishes.unit.as_ref(), wishes.samples.as_ref()];
    let names: Vec<&String> = wished
        .into_iter()
        .flatten()
        .chain(table.table.columns().iter().map(|column| &column.name))
        .collect();
    for name in names {
        let (Some(right), Some(left)) = (
            table.table.column(name),
            before.iter().find_map(|read| read.table.column(name)),
        ) else {
            continue;
        };
        let shared = texts(left).intersection(&texts(right)).count();
        if shared > 0 && best.as_ref().is_none_or(|(most, _)| shared > *most) {
            best = Some((shared, name.clone()));
        }
    }
    let Some((_, name)) = best else {
        return Err(Problem::new(
            "no-join",
            format!(
                "“{}” shares no column of names with the tables before it.",
                table.source.file
            ),
        )
        .at(Place::file(&table.source.file))
        .mend("Give the column that names the same things the same head in both tables."));
    };
    notes.push(format!(
        "“{}” is joined on the column “{name}”; case and blanks do not count.",
        table.source.file
    ));
    Ok(Join {
        left: name.clone(),
        right: name,
        case: LetterCase::Folded,
        zeros: LeadingZeros::Kept,
    })
}

fn key_text(column: &Column, row: usize) -> Option<String> {
    match column.value(row) {
        Value::Text(text) => Some(text.trim().to_lowercase()),
        Value::Number(value) => Some(number::text(value, Precision::Full)),
        Value::Missing | Value::BelowLimit(_) | Value::AboveLimit(_) => None,
    }
}

/// The first column of labels in the first table in which every value stands once.
fn sample_names(first: &ReadTable, wishes: &Wishes, notes: &mut Vec<String>) -> Option<String> {
    let column = first.table.columns().iter().take(20).find(|column| {
        if column.name == wishes.outcome || Some(&column.name) == wishes.unit.as_ref() {
            return false;
        }
        let Values::Texts(texts) = &column.values else {
            return false;
        };
        let distinct: BTreeSet<&String> = texts.iter().flatten().collect();
        distinct.len() == texts.len()
    })?;
    notes.push(format!("Samples are named by “{}”.", column.name));
    Some(column.name.clone())
}

/// The predictors: numeric columns without another role of the table that has most of them. For
/// each the table's number and the column's position.
fn predictor_columns(
    tables: &[ReadTable],
    taken: &BTreeSet<&str>,
    notes: &mut Vec<String>,
) -> (usize, Vec<usize>) {
    let numeric = |table: &Table| -> Vec<usize> {
        table
            .columns()
            .iter()
            .enumerate()
            .filter(|(_, column)| {
                matches!(column.values, Values::Numbers(_)) && !taken.contains(column.name.as_str())
            })
            .map(|(at, _)| at)
            .collect()
    };
    let mut best = (0, numeric(&tables[0].table));
    for (at, read) in tables.iter().enumerate().skip(1) {
        let columns = numeric(&read.table);
        if columns.len() > best.1.len() {
            best = (at, columns);
        }
    }
    // A long run of columns along one axis is the spectrum; what stands beside it is not.
    let table = &tables[best.0].table;
    let runs = axis_runs(table, &best.1);
    if let Some(run) = runs.into_iter().max_by_key(Vec::len)
        && run.len() >= 30
        && run.len() * 2 > best.1.len()
        && run.len() < best.1.len()
    {
        let left: Vec<&str> = best
            .1
            .iter()
            .filter(|at| !run.contains(at))
            .map(|&at| table.columns()[at].name.as_str())
            .collect();
        notes.push(format!(
            "The predictors are “{}” to “{}”; “{}” stand beside them and are left out.",
            table.columns()[run[0]].name,
            table.columns()[run[run.len() - 1]].name,
            left.join("”, “")
        ));
        best.1 = run;
    }
    best
}

/// Runs of neighbouring columns whose names lie along one axis.
fn axis_runs(table: &Table, columns: &[usize]) -> Vec<Vec<usize>> {
    let mut runs: Vec<Vec<usize>> = Vec::new();
    let stem = |at: usize| -> (String, String) {
        let name = &table.columns()[at].name;
        let begin = name
            .find(|c: char| c.is_ascii_digit())
            .unwrap_or(name.len());
        let end = name
            .rfind(|c: char| c.is_ascii_digit())
            .map_or(begin, |end| end + 1);
        (name[..begin].to_owned(), name[end..].to_owned())
    };
    for &at in columns {
        match runs.last_mut() {
            Some(run) if run.last() == Some(&(at - 1)) && stem(at) == stem(at - 1) => run.push(at),
            Some(_) | None => runs.push(vec![at]),
        }
    }
    runs.retain(|run| {
        let names: Vec<&str> = run
            .iter()
            .map(|&at| table.columns()[at].name.as_str())
            .collect();
        run.len() >= 3 && axis::of_names(&names).is_some()
    });
    runs
}

fn ranges(tables: &[ReadTable], predictors: &(usize, Vec<usize>)) -> Vec<ColumnRange> {
    axis::ranges(&tables[predictors.0].table, &predictors.1)
        .into_iter()
        .map(|range| ColumnRange {
            first: range.first,
            last: range.last,
        })
        .collect()
}

fn shape(
    tables: &[ReadTable],
    predictors: &(usize, Vec<usize>),
    wishes: &Wishes,
    samples: Option<&str>,
) -> Shape {
    let table = &tables[predictors.0].table;
    let mut has_gaps = false;
    let mut has_limits = false;
    for &at in &predictors.1 {
        if let Values::Numbers(numbers) = &table.columns()[at].values {
            has_limits |= !numbers.censored().is_empty();
            let n_gaps = numbers
                .values()
                .iter()
                .filter(|value| value.is_nan())
                .count();
            has_gaps |= n_gaps > numbers.censored().len();
        }
    }
    let names: Vec<&str> = predictors
        .1
        .iter()
        .map(|&at| table.columns()[at].name.as_str())
        .collect();
    let is_spectrum = names.len() >= 50
        && axis::of_names(&names).is_some_and(|axis| {
            axis.is_monotone()
                && axis
                    .unit
                    .as_deref()
                    .is_some_and(|unit| LIGHT.contains(&unit))
        });
    let unit = wishes.unit.as_deref().or(samples);
    let first = &tables[0].table;
    let n_units = unit
        .and_then(|name| first.column(name))
        .map_or(first.n_rows(), |column| {
            (0..column.len())
                .filter_map(|row| key_text(column, row))
                .collect::<BTreeSet<_>>()
                .len()
        });
    Shape {
        n_units,
        n_rarest: None,
        has_gaps,
        has_limits,
        is_spectrum,
    }
}

/// Units of an axis of light: its tables are spectra.
const LIGHT: [&str; 6] = ["nm", "cm-1", "cm⁻¹", "1/cm", "µm", "um"];

/// Samples of the first table whose outcome stands there and is blank are excluded, recorded.
fn exclude_without_outcome(data: &mut Data, first: &ReadTable, notes: &mut Vec<String>) {
    let Some(outcome) = &data.outcome else { return };
    let Some(column) = first.table.column(&outcome.column) else {
        return;
    };
    let names = data
        .sample_name
        .as_ref()
        .and_then(|name| first.table.column(name));
    let name = |row: usize| match names {
        Some(names) => key_name(names, row),
        None => Some(format!("sample {}", row + 1)),
    };
    let exclusions: Vec<Exclusion> = (0..column.len())
        .filter(|&row| column.value(row) == Value::Missing)
        .filter_map(name)
        .map(|sample| Exclusion {
            sample,
            reason: "The outcome is missing.".to_owned(),
            outcome: OutcomeSeen::Before,
        })
        .collect();
    if !exclusions.is_empty() && exclusions.len() < column.len() {
        notes.push(match exclusions.len() {
            1 => "1 sample without an outcome is excluded, with that reason.".to_owned(),
            n => format!(
                "{} samples without an outcome are excluded, with that reason.",
                number::text(n as f64, Precision::Whole)
            ),
        });
        data.exclusions = Arc::new(exclusions);
    }
}

fn key_name(column: &Column, row: usize) -> Option<String> {
    match column.value(row) {
        Value::Text(text) => Some(text.to_owned()),
        Value::Number(value) => Some(number::text(value, Precision::Full)),
        Value::Missing | Value::BelowLimit(_) | Value::AboveLimit(_) => None,
    }
}

/// Data, Prepare, Fit, the questions, and a summary with live facts.
fn ready_study(
    data: Data,
    shape: &Shape,
    wishes: &Wishes,
    notes: &mut Vec<String>,
) -> Result<Study, Problem> {
    let mut study = Study::new(if wishes.title.is_empty() {
        "Study"
    } else {
        &wishes.title
    });
    let outcome = wishes.outcome.clone();
    let kind = data
        .outcome
        .as_ref()
        .map_or(OutcomeKind::Measured, |outcome| outcome.kind.clone());
    let data = add(&mut study, "Tables", Settings::Data(data))?;
    let steps = steps(shape, notes);
    let prepare = Prepare {
        input: Link::to(data),
        steps,
    };
    let prepared = add(&mut study, "Prepared samples", Settings::Prepare(prepare))?;
    let fit = fit_settings(wishes, shape, &kind, prepared, notes)?;
    let penalty = match fit.penalty {
        Penalty::Ridge => "ridge",
        Penalty::Lasso => "lasso",
        Penalty::ElasticNet { .. } => "elastic net",
    };
    let is_ridge = fit.penalty == Penalty::Ridge;
    let by_hand = matches!(fit.strength, Strength::ByHand(_));
    let fit = add(
        &mut study,
        &format!("{outcome} {penalty}"),
        Settings::Fit(fit),
    )?;
    for ask in Ask::catalogue() {
        let leave_out = match ask {
            Ask::ChosenAgain { .. } => is_ridge,
            Ask::ErrorCurve => by_hand,
            Ask::LeastSquares
            | Ask::CoefficientTrace
            | Ask::Agreement
            | Ask::Ladder { .. }
            | Ask::StandIns { .. } => false,
        };
        if !leave_out {
            let title = ask.title();
            let _ = add(
                &mut study,
                title,
                Settings::Question(Question {
                    fit: Link::to(fit),
                    ask,
                }),
            )?;
        }
    }
    let title = |id: CellId| {
        study
            .cell(id)
            .map(|cell| cell.title.clone())
            .unwrap_or_default()
    };
    let text = summary(&kind, &title(data), &title(fit));
    let prose = Prose::parse(&text, &study);
    let id = study.next_id();
    let cell = Cell {
        id,
        title: "Summary".to_owned(),
        settings: Settings::Prose(prose),
    };
    apply(&mut study, Edit::Insert { at: 0, cell })?;
    Ok(study)
}

fn add(study: &mut Study, title: &str, settings: Settings) -> Result<CellId, Problem> {
    let id = study.next_id();
    let cell = Cell {
        id,
        title: study.free_title(title),
        settings,
    };
    let at = study.cells().len();
    apply(study, Edit::Insert { at, cell })?;
    Ok(id)
}

fn apply(study: &mut Study, edit: Edit) -> Result<(), Problem> {
    study.apply(edit).map(drop).map_err(|error| {
        Problem::new("edit", "The study could not be put together.").details(format!("{error:?}"))
    })
}

fn steps(shape: &Shape, notes: &mut Vec<String>) -> Vec<Step> {
    let mut steps = Vec::new();
    for step in Step::catalogue() {
        let is_wanted = match step {
            Step::BelowLimit { .. } => shape.has_limits,
            Step::MissingShareFilter { .. } | Step::MedianImputation => shape.has_gaps,
            Step::StandardNormalVariate | Step::SavitzkyGolay { .. } => {
                shape.is_spectrum && !shape.has_gaps
            }
            Step::Center | Step::UnitVariance => true,
            Step::Log { .. }
            | Step::Detrend { .. }
            | Step::ScatterCorrection
            | Step::NearConstantFilter { .. } => false,
        };
        if is_wanted {
            steps.push(step);
        }
    }
    if shape.is_spectrum && !shape.has_gaps {
        notes.push("The predictors are a spectrum: standard normal variate and a first derivative are taken first.".to_owned());
    }
    if shape.has_limits {
        notes.push("Values below a limit are set to half the limit.".to_owned());
    }
    if shape.has_gaps {
        notes.push("Missing values are set to the median of the training part.".to_owned());
    }
    steps
}

/// The wished fit, with as many parts as there are units to fill them.
fn fit_settings(
    wishes: &Wishes,
    shape: &Shape,
    kind: &OutcomeKind,
    prepared: CellId,
    notes: &mut Vec<String>,
) -> Result<Fit, Problem> {
    let mut fit = Fit {
        input: Link::to(prepared),
        ..wishes.fit.clone()
    };
    fit.spread_evenly(kind);
    let by_gcv = matches!(
        fit.strength,
        Strength::Chosen {
            rule: Rule::GeneralisedCrossValidation,
            ..
        }
    );
    if by_gcv && *kind != OutcomeKind::Measured {
        return Err(Problem::new(
            "rule-for-measured",
            "Generalised cross-validation is defined for measured quantities only.",
        )
        .mend("Choose the strength by the lowest error, one standard error or the extended BIC."));
    }
    let usual = fit.measure == ErrorMeasure::Usual;
    if !usual && !ErrorMeasure::of(kind).contains(&fit.measure) {
        return Err(Problem::new(
            "measure-not-defined",
            "This measure of errors is not defined for this kind of outcome.",
        )
        .mend("Leave it out to take the usual one."));
    }
    let mut units = u32::try_from(shape.n_units).unwrap_or(u32::MAX);
    if let Some(rarest) = shape.n_rarest.and_then(|n| u32::try_from(n).ok())
        && rarest >= 2
    {
        // Every part gets one of the rarest; two in a held-out part are asked for below.
        units = units.min(rarest.saturating_mul(2));
    }
    if let Judge::Nested(plan) = &mut fit.judge {
        // Two units in a held-out part, so that parts can be told from single units.
        let most = (units / 2).max(2);
        if plan.parts > most {
            notes.push(format!(
                "Only {} independent samples{}: {most} outer parts are drawn.",
                shape
                    .n_rarest
                    .map_or(shape.n_units, |rarest| rarest.min(shape.n_units)),
                if shape.n_rarest.is_some() {
                    " of the rarest class"
                } else {
                    ""
                }
            ));
            plan.parts = most;
        }
        let kept = match shape.n_rarest.and_then(|n| u32::try_from(n).ok()) {
            Some(rarest) => rarest - rarest.div_ceil(plan.parts.max(1)),
            None => units - units.div_ceil(plan.parts.max(1)),
        };
        if let Strength::Chosen { rule, inner, .. } = &mut fit.strength {
            let needs = matches!(rule, Rule::LowestError | Rule::OneStandardError);
            if needs && kept < 2 {
                notes.push(
                    "A training part would be a single sample, in which no strength can be \
                     chosen: bring in more samples."
                        .to_owned(),
                );
                inner.parts = 2;
            } else if needs && inner.parts > kept {
                notes.push(format!("Only {kept} independent samples{} in a training part: {kept} inner parts are drawn.", if shape.n_rarest.is_some() { " of the rarest class" } else { "" }));
                inner.parts = kept;
            }
        }
    }
    Ok(fit)
}
