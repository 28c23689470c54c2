//! `start`: makes a ready study from tables.

use crate::base::layout::Orientation;
use crate::base::problem::{Place, Problem};
use crate::base::real::Real;
use crate::base::thread::Threads;
use crate::base::work::Work;
use crate::cli::arguments::{ChoiceName, KindName, PenaltyName, Start};
use crate::eval::start::{Wishes, start};
use crate::store::{self, Record};
use crate::study::ledger::Ledger;
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::fit::{Fit, Judge, Penalty, Rule, Strength};
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
    for note in &started.notes {
        eprintln!("{note}");
    }
    let nothing = Record::default();
    store::save(
        &arguments.output,
        &started.study,
        &started.shelf,
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
        None => arguments.event.as_ref().map(|event| OutcomeKind::Time {
            event: event.clone(),
        }),
        Some(KindName::Measured) => Some(OutcomeKind::Measured),
        Some(KindName::YesNo) => Some(OutcomeKind::YesNo { event: None }),
        Some(KindName::Classes) => Some(OutcomeKind::Classes),
        Some(KindName::Count) => Some(OutcomeKind::Count { exposure: None }),
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
        unit: arguments.unit.clone(),
        batch: arguments.batch.clone(),
        covariates: arguments.covariate.clone(),
        ignored: arguments.ignore.clone(),
        orientation: arguments.sideways.then_some(Orientation::SamplesInColumns),
        sheet: arguments.sheet.clone(),
        fit: fit(arguments)?,
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

fn fit(arguments: &Start) -> Result<Fit, Problem> {
    let mut fit = Fit::default();
    let share = |value: f64| {
        Real::new(value)
            .filter(|share| share.get() > 0.0 && share.get() < 1.0)
            .ok_or_else(|| {
                Problem::new(
                    "lasso-share",
                    format!("The lasso share must be above 0 and below 1; “{value}” was given."),
                )
                .at(Place::nowhere())
                .mend("Use --penalty ridge for 0 and --penalty lasso for 1.")
            })
    };
    let mut shares = arguments
        .lasso_share
        .iter()
        .map(|s| share(*s))
        .collect::<Result<Vec<_>, _>>()?;
    shares.sort();
    shares.dedup();
    fit.penalty = match arguments.penalty {
        PenaltyName::Ridge => Penalty::Ridge,
        // A share given without a penalty can only mean an elastic net.
        PenaltyName::Lasso if shares.is_empty() => Penalty::Lasso,
        PenaltyName::Lasso | PenaltyName::ElasticNet => {
            if shares.is_empty() {
                shares.push(Real::constant(0.5));
            }
            Penalty::ElasticNet { shares }
        }
    };
    if let Some(strength) = arguments.strength {
        let real = Real::new(strength)
            .filter(|s| s.get() >= 0.0)
            .ok_or_else(|| {
                Problem::new(
                    "strength",
                    format!("The penalty strength must be 0 or more; “{strength}” was given."),
                )
                .mend("Give another strength, or leave it to a rule.")
            })?;
        fit.strength = Strength::ByHand(real);
    } else if let Strength::Chosen { rule, inner, .. } = &mut fit.strength {
        *rule = match arguments.choice {
            ChoiceName::LowestError => Rule::LowestError,
            ChoiceName::OneSe => Rule::OneStandardError,
            ChoiceName::Gcv => Rule::GeneralisedCrossValidation,
            ChoiceName::Ebic => Rule::ExtendedBic {
                gamma: Real::constant(0.5),
            },
        };
        inner.parts = arguments.parts.unwrap_or(inner.parts).max(2);
        inner.repeats = arguments.repeats.unwrap_or(inner.repeats).max(1);
    }
    if let Judge::Nested(plan) = &mut fit.judge {
        plan.parts = arguments.outer_parts.unwrap_or(plan.parts).max(2);
        plan.repeats = arguments.outer_repeats.unwrap_or(plan.repeats).max(1);
    }
    fit.seed = arguments.seed.unwrap_or(fit.seed);
    Ok(fit)
}
