//! `start`: makes a ready study from tables.

use crate::base::layout::Orientation;
use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::base::thread::Threads;
use crate::base::work::Work;
use crate::cli::arguments::{ChoiceName, KindName, MeasureName, PenaltyName, Start, TiesName};
use crate::eval::start::{Wishes, start};
use crate::store::{self, Record};
use crate::study::ledger::Ledger;
use crate::study::settings::Settings;
use crate::study::settings::data::{OutcomeKind, UnitMaking};
use crate::study::settings::fit::{Fit, Penalty};
use crate::study::settings::slot::fit::FitSlot;
use crate::study::settings::slot::weights::WeightSlot;
use crate::study::settings::slot::{Slot, Value};
use crate::study::source::SourceId;
use std::path::Path;
use std::process::ExitCode;
use std::sync::Arc;

/// Runs the command.
///
/// # Errors
/// When a table cannot be read, a column does not exist, or the study cannot be saved.
pub fn run(arguments: &Start) -> Result<ExitCode, Problem> {
    let mut tables = Vec::new();
    for path in &arguments.tables {
        let bytes = store::read_table(path)?;
        let name = path
            .file_name()
            .map_or_else(String::new, |name| name.to_string_lossy().into_owned());
        tables.push((name, Arc::from(bytes)));
    }
    let wishes = wishes(arguments)?;
    let started = start(&tables, &wishes, Threads::all(), &Work::unattended())
        .expect("nobody calls unattended work off")?;
    let mut shelf = started.shelf;
    for ((file, bytes), path) in tables.iter().zip(&arguments.tables) {
        // A readable study names its tables by path, so that they need not be copied beside it.
        let whole = std::path::absolute(path).unwrap_or_else(|_| path.clone());
        shelf.came_from(&SourceId::of(bytes), file, &whole);
    }
    for note in &started.notes {
        eprintln!("{note}");
    }
    let nothing = Record::default();
    store::save(
        &arguments.output,
        &started.study,
        &shelf,
        &Ledger::default(),
        &nothing,
    )?;
    eprintln!(
        "Wrote {} with {} cells. Next: widefold update {}",
        arguments.output.display(),
        started.study.cells().len(),
        arguments.output.display()
    );
    Ok(ExitCode::SUCCESS)
}

fn wishes(arguments: &Start) -> Result<Wishes, Problem> {
    let kind = match arguments.kind {
        None => match (&arguments.event, &arguments.exposure) {
            (Some(event), _) => Some(OutcomeKind::Time {
                event: event.clone(),
            }),
            (None, Some(exposure)) => Some(OutcomeKind::Count {
                exposure: Some(exposure.clone()),
            }),
            (None, None) => None,
        },
        Some(KindName::Measured) => Some(OutcomeKind::Measured),
        Some(KindName::YesNo) => Some(OutcomeKind::YesNo { event: None }),
        Some(KindName::Classes) => Some(OutcomeKind::Classes),
        Some(KindName::Count) => Some(OutcomeKind::Count {
            exposure: arguments.exposure.clone(),
        }),
        Some(KindName::Time) => Some(OutcomeKind::Time {
            event: arguments.event.clone().ok_or_else(|| {
                Problem::new(
                    "no-event",
                    "For a time it must be said which column holds the event.",
                )
                .mend("Name it with --event NAME.")
            })?,
        }),
    };
    Ok(Wishes {
        title: title(&arguments.output),
        outcome: arguments.outcome.clone(),
        kind,
        samples: arguments.samples.clone(),
        unit: match (&arguments.unit, arguments.unit_from_names) {
            (None, true) => Some("unit".to_owned()),
            (unit, _) => unit.clone(),
        },
        batch: arguments.batch.clone(),
        covariates: arguments.covariate.clone(),
        ignored: arguments.ignore.clone(),
        predictors: arguments.predictors.clone(),
        unit_making: if arguments.unit_from_names {
            UnitMaking::FromNames
        } else {
            UnitMaking::InColumn
        },
        date: Some(super::today()),
        said: arguments.set.clone(),
        orientation: arguments.sideways.then_some(Orientation::SamplesInColumns),
        sheet: arguments.sheet.clone(),
        fit: fit(arguments)?,
        ..Wishes::default()
    })
}

/// The file's name without its ending, as a title: `cellar-light.widefold` is “Cellar light”.
fn title(path: &Path) -> String {
    let stem = path
        .file_stem()
        .map_or_else(String::new, |stem| stem.to_string_lossy().into_owned());
    let words = stem.replace(['-', '_'], " ");
    let mut letters = words.chars();
    letters.next().map_or_else(String::new, |first| {
        first.to_uppercase().chain(letters).collect()
    })
}

/// The fit that is wished for. Every number passes the same door as in the window, so that what
/// is written can be opened.
fn fit(arguments: &Start) -> Result<Fit, Problem> {
    let mut shares = arguments.lasso_share.clone();
    let penalty = match arguments.penalty {
        PenaltyName::Ridge => Penalty::Ridge,
        // A share given without a penalty can only mean an elastic net.
        PenaltyName::Lasso if shares.is_empty() => Penalty::Lasso,
        PenaltyName::Lasso | PenaltyName::ElasticNet => {
            if shares.is_empty() {
                shares.push(0.5);
            }
            Penalty::ElasticNet {
                shares: vec![Real::constant(0.5)],
            }
        }
    };
    let is_net = matches!(penalty, Penalty::ElasticNet { .. });
    let mut settings = Settings::Fit(Fit {
        penalty,
        ..Fit::default()
    });
    let mut set = |slot: FitSlot, value: Value| -> Result<(), Problem> {
        settings = settings.with(&Slot::Fit(slot), value)?;
        Ok(())
    };
    if is_net {
        let words: Vec<String> = shares.iter().map(f64::to_string).collect();
        set(FitSlot::Shares, Value::Text(words.join("; ")))?;
    }
    if let Some(strength) = arguments.strength {
        set(FitSlot::Strength, Value::Text(strength.to_string()))?;
    } else {
        let name = match arguments.choice {
            ChoiceName::LowestError => "lowest-error",
            ChoiceName::OneSe => "one-se",
            ChoiceName::Gcv => "gcv",
            ChoiceName::Ebic => "ebic",
        };
        set(FitSlot::Choice, Value::Choice(name.to_owned()))?;
        if matches!(
            arguments.choice,
            ChoiceName::LowestError | ChoiceName::OneSe
        ) {
            if let Some(parts) = arguments.parts {
                set(FitSlot::InnerParts, Value::Whole(parts.into()))?;
            }
            if let Some(repeats) = arguments.repeats {
                set(FitSlot::InnerRepeats, Value::Whole(repeats.into()))?;
            }
        }
    }
    if arguments.together {
        set(FitSlot::Grouping, Value::Choice("together".to_owned()))?;
    }
    if arguments.ties == TiesName::Breslow {
        set(FitSlot::Ties, Value::Choice("breslow".to_owned()))?;
    }
    if let Some(measure) = arguments.error_measure {
        let name = match measure {
            MeasureName::SquaredError => "squared-error",
            MeasureName::Deviance => "deviance",
            MeasureName::Misclassification => "misclassification",
            MeasureName::PartialLikelihood => "partial-likelihood",
            MeasureName::Concordance => "concordance",
        };
        set(FitSlot::Measure, Value::Choice(name.to_owned()))?;
    }
    let chosen = [
        (arguments.learnt_weights, WeightSlot::Weighting, "learnt"),
        (arguments.not_negative, WeightSlot::Signs, "not-negative"),
        (arguments.within_batch, WeightSlot::Strata, "batches"),
        (arguments.careful, WeightSlot::Interval, "careful"),
    ];
    for (_, slot, name) in chosen.into_iter().filter(|(is_asked, ..)| *is_asked) {
        set(FitSlot::Weight(slot), Value::Choice(name.to_owned()))?;
    }
    if let Some(parts) = arguments.outer_parts {
        set(FitSlot::OuterParts, Value::Whole(parts.into()))?;
    }
    if let Some(repeats) = arguments.outer_repeats {
        set(FitSlot::OuterRepeats, Value::Whole(repeats.into()))?;
    }
    if let Some(seed) = arguments.seed {
        set(FitSlot::Seed, Value::Whole(seed))?;
    }
    match settings {
        Settings::Fit(fit) => Ok(fit),
        Settings::Data(_)
        | Settings::Prepare(_)
        | Settings::Question(_)
        | Settings::Compare(_)
        | Settings::Score(_)
        | Settings::Prose(_) => unreachable!("a word of a fit leaves it a fit"),
    }
}
