//! A ready study from tables: what `start` and the window begin with.
//!
//! Every interpretation that the tables left open is written down in the settings, so that it is
//! a word that can be changed, and said in a note.

mod draft;
mod kind;
mod settle;

use crate::base::layout::Orientation;
use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::base::thread::Threads;
use crate::base::work::{Cancelled, Work};
use crate::eval::finding::read_problem;
use crate::eval::kind::data::options;
use crate::eval::start::kind::summary;
use crate::eval::start::settle::{ReadTable, Shape, settle};
use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::edit::Edit;
use crate::study::link::Link;
use crate::study::prose::Prose;
use crate::study::settings::Settings;
use crate::study::settings::data::{Data, OutcomeKind, TableSource, UnitMaking};
use crate::study::settings::fit::{ErrorMeasure, Fit, Judge, Penalty, Rule, Strength};
use crate::study::settings::prepare::choice::{ScaleRule, Statistic};
use crate::study::settings::prepare::{LimitValue, Prepare, Step};
use crate::study::settings::question::{Ask, Question};
use crate::study::source::Shelf;
use crate::table::read::{Options, read};
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
    /// The predictors: names, ranges, patterns, stretches of an axis. None: all that are left.
    pub predictors: Vec<String>,
    /// Whether the units are made from the sample names.
    pub unit_making: UnitMaking,
    /// The day, for the record of what was taken in.
    pub date: Option<String>,
    /// Further settings of the Data cell, each as it is said in one line.
    pub said: Vec<String>,
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
    let ids = tables.iter().map(|(file, bytes)| {
        let id = shelf.put(Arc::clone(bytes));
        TableSource::new(id, file)
    });
    let draft = match draft::draft(ids.collect(), wishes) {
        Ok(draft) => draft,
        Err(problem) => return Ok(Err(problem)),
    };
    let mut read_tables = Vec::new();
    for (at, (file, bytes)) in tables.iter().enumerate() {
        let source = &draft.data.tables[at];
        let mut options = options(source, &draft.reading);
        if let Some(wished) = wishes.reading.get(at) {
            options.as_text.extend(wished.as_text.iter().cloned());
            options.as_numbers.extend(wished.as_numbers.iter().cloned());
        }
        let bar = work.part(at as f32 / tables.len() as f32..(at + 1) as f32 / tables.len() as f32);
        match read(bytes, file, &options, threads, &bar)? {
            Ok(reading) => read_tables.push(ReadTable::new(source, reading)),
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
        settle(read_tables, wishes, draft, &mut notes).and_then(|(data, shape)| {
            let study = ready_study(data, &shape, wishes, &mut notes)?;
            Ok(Started {
                study,
                shelf,
                notes,
            })
        }),
    )
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
    if shape.has_limits {
        steps.push(Step::BelowLimit {
            value: LimitValue::Share(Real::constant(0.5)),
        });
    }
    if shape.is_spectrum && !shape.has_gaps {
        steps.push(Step::StandardNormalVariate);
        steps.push(Step::SavitzkyGolay {
            window: 15,
            degree: 2,
            derivative: 1,
        });
    }
    if shape.has_gaps {
        steps.push(Step::MissingShareFilter {
            most: Real::constant(0.2),
        });
        steps.push(Step::ColumnImputation {
            statistic: Statistic::Median,
        });
    }
    steps.push(Step::Center);
    steps.push(Step::Scale {
        rule: ScaleRule::UnitVariance,
    });
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
