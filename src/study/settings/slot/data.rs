//! The places of a Data cell's settings.

use crate::base::problem::Problem;
use crate::study::settings::data::{
    Data, Marked, Outcome, OutcomeKind, Sealed, Subject, TableSource, UnitMaking,
};
use crate::study::settings::slot::table::{TableSlot, usual_join};
use crate::study::settings::slot::{Bounds, Value, take};
use std::sync::Arc;

/// A place in the settings of a Data cell.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum DataSlot {
    /// A place of one table, counted from 0.
    Table(usize, TableSlot),
    /// Takes the file of one more table. Nothing stands there.
    NextTable,
    /// The column that is predicted; none takes the outcome away.
    Outcome,
    /// What sort of thing is predicted.
    OutcomeKind,
    /// The text that means “yes”; nothing leaves it to the reader.
    OutcomeYes,
    /// The column that says whether the event happened.
    OutcomeEvent,
    /// The column with the exposure of a count.
    Exposure,
    /// The unit of the outcome; nothing takes the table's.
    OutcomeUnit,
    /// The standard deviation of the reference method's own error.
    ReferenceError,
    /// The ranges of columns that are predictors; none takes all that have no other role.
    Predictors,
    /// The columns that are left out.
    Ignored,
    /// The columns that are always in the model, unpenalised.
    Covariates,
    /// The column that names the samples.
    SampleName,
    /// The column that names the units.
    Unit,
    /// Whether the tables have that column, or it is made from the sample names.
    UnitMaking,
    /// The column that names the batch.
    Batch,
    /// The column with the position or time of measurement.
    Order,
    /// The column with a weight for each sample.
    Weight,
    /// Which samples are sealed.
    Sealed,
    /// The column by which samples are sealed.
    SealedColumn,
    /// The texts in that column that seal a sample.
    SealedValues,
    /// The names of the sealed units.
    SealedNames,
    /// The columns that are read as text.
    AsText,
    /// The columns that are read as numbers.
    AsNumbers,
    /// The column by which quality-control samples are known; none where there are none.
    QualityControl,
    /// The texts in that column that mark one.
    QualityControlValues,
    /// The recorded changes of single values.
    Corrections,
    /// The recorded removals of samples.
    Exclusions,
    /// What the study's subject is.
    Subject,
}

/// The kinds of outcome without what belongs to them, for the table of names.
#[derive(Clone, Copy, PartialEq)]
enum Sort {
    Measured,
    YesNo,
    Classes,
    Count,
    Time,
}

const SORTS: [(&str, Sort); 5] = [
    ("measured", Sort::Measured),
    ("yes-no", Sort::YesNo),
    ("classes", Sort::Classes),
    ("count", Sort::Count),
    ("time", Sort::Time),
];
const SORT_NAMES: [&str; 5] = take::names(&SORTS);

/// The ways to seal without what belongs to them.
#[derive(Clone, Copy, PartialEq)]
enum Sealing {
    Nothing,
    Where,
    Listed,
}

const SEALINGS: [(&str, Sealing); 3] = [
    ("nothing", Sealing::Nothing),
    ("where", Sealing::Where),
    ("listed", Sealing::Listed),
];
const SEALING_NAMES: [&str; 3] = take::names(&SEALINGS);

const SUBJECTS: [(&str, Subject); 4] = [
    ("ordinary", Subject::Ordinary),
    ("health", Subject::Health),
    ("safety", Subject::Safety),
    ("compliance", Subject::Compliance),
];
const SUBJECT_NAMES: [&str; 4] = take::names(&SUBJECTS);

const MAKINGS: [(&str, UnitMaking); 2] = [
    ("in-column", UnitMaking::InColumn),
    ("from-names", UnitMaking::FromNames),
];
const MAKING_NAMES: [&str; 2] = take::names(&MAKINGS);

/// The column of events that is taken until another is named.
const USUAL_EVENT: &str = "event";
/// What units are called that are made from the sample names until another word is chosen.
const USUAL_UNIT: &str = "unit";
/// The text that marks a quality-control sample until another is named.
const USUAL_MARK: &str = "QC";
/// The column that seals until another is named.
const USUAL_SEAL: &str = "sealed";

impl DataSlot {
    /// The places that these settings have, in reading order.
    #[must_use]
    pub fn of(data: &Data) -> Vec<Self> {
        let mut slots = Vec::new();
        for (at, table) in data.tables.iter().enumerate() {
            slots.extend(
                TableSlot::of(table)
                    .into_iter()
                    .map(|slot| Self::Table(at, slot)),
            );
        }
        slots.extend([Self::NextTable, Self::SampleName, Self::Outcome]);
        if let Some(outcome) = &data.outcome {
            slots.push(Self::OutcomeKind);
            slots.extend(match outcome.kind {
                OutcomeKind::Measured => vec![Self::OutcomeUnit, Self::ReferenceError],
                OutcomeKind::YesNo { .. } => vec![Self::OutcomeYes],
                OutcomeKind::Classes => Vec::new(),
                OutcomeKind::Count { .. } => vec![Self::Exposure],
                OutcomeKind::Time { .. } => vec![Self::OutcomeUnit, Self::OutcomeEvent],
            });
        }
        slots.extend([
            Self::Predictors,
            Self::Ignored,
            Self::Covariates,
            Self::Unit,
            Self::UnitMaking,
            Self::Batch,
            Self::Order,
            Self::Weight,
            Self::Sealed,
        ]);
        slots.extend(match data.sealed {
            Sealed::Nothing => Vec::new(),
            Sealed::Where { .. } => vec![Self::SealedColumn, Self::SealedValues],
            Sealed::Listed(_) => vec![Self::SealedNames],
        });
        slots.push(Self::QualityControl);
        if data.quality_control.is_some() {
            slots.push(Self::QualityControlValues);
        }
        slots.extend([
            Self::AsText,
            Self::AsNumbers,
            Self::Corrections,
            Self::Exclusions,
            Self::Subject,
        ]);
        slots
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Table(_, slot) => slot.label(),
            Self::NextTable => "next table",
            Self::Outcome => "outcome",
            Self::OutcomeKind => "kind of outcome",
            Self::OutcomeYes => "word for yes",
            Self::OutcomeEvent => "column of events",
            Self::Exposure => "column of exposure",
            Self::OutcomeUnit => "unit of the outcome",
            Self::ReferenceError => "error of the reference method",
            Self::Predictors => "predictors",
            Self::Ignored => "columns left out",
            Self::Covariates => "covariates",
            Self::SampleName => "column of sample names",
            Self::Unit => "unit",
            Self::UnitMaking => "making of the unit",
            Self::Batch => "batch",
            Self::Order => "order of measurement",
            Self::Weight => "weight",
            Self::Sealed => "rule for the sealed set",
            Self::SealedColumn => "column of the sealed set",
            Self::SealedValues => "values of the sealed set",
            Self::SealedNames => "names of the sealed set",
            Self::AsText => "columns of text",
            Self::AsNumbers => "columns of numbers",
            Self::QualityControl => "column of quality-control samples",
            Self::QualityControlValues => "mark of quality-control samples",
            Self::Corrections => "corrections",
            Self::Exclusions => "exclusions",
            Self::Subject => "subject of the study",
        }
    }

    /// The stable names of the choices.
    #[must_use]
    pub const fn choices(self) -> &'static [&'static str] {
        match self {
            Self::Table(_, slot) => slot.choices(),
            Self::OutcomeKind => &SORT_NAMES,
            Self::Sealed => &SEALING_NAMES,
            Self::Subject => &SUBJECT_NAMES,
            Self::UnitMaking => &MAKING_NAMES,
            Self::NextTable
            | Self::Outcome
            | Self::OutcomeYes
            | Self::OutcomeEvent
            | Self::Exposure
            | Self::OutcomeUnit
            | Self::ReferenceError
            | Self::Predictors
            | Self::Ignored
            | Self::Covariates
            | Self::SampleName
            | Self::Unit
            | Self::Batch
            | Self::Order
            | Self::Weight
            | Self::SealedColumn
            | Self::SealedValues
            | Self::SealedNames
            | Self::AsText
            | Self::AsNumbers
            | Self::QualityControl
            | Self::QualityControlValues
            | Self::Corrections
            | Self::Exclusions => &[],
        }
    }

    /// The numbers that may stand there.
    #[must_use]
    pub const fn bounds(self) -> Option<Bounds> {
        match self {
            Self::Table(_, slot) => slot.bounds(),
            Self::ReferenceError => Some(Bounds::Any {
                least: 0.0,
                most: f64::INFINITY,
            }),
            Self::NextTable
            | Self::Outcome
            | Self::OutcomeKind
            | Self::OutcomeYes
            | Self::OutcomeEvent
            | Self::Exposure
            | Self::OutcomeUnit
            | Self::Predictors
            | Self::Ignored
            | Self::Covariates
            | Self::SampleName
            | Self::Unit
            | Self::UnitMaking
            | Self::Batch
            | Self::Order
            | Self::Weight
            | Self::Sealed
            | Self::SealedColumn
            | Self::SealedValues
            | Self::SealedNames
            | Self::AsText
            | Self::AsNumbers
            | Self::QualityControl
            | Self::QualityControlValues
            | Self::Corrections
            | Self::Exclusions
            | Self::Subject => None,
        }
    }

    /// What stands there; `None` when the settings have no such place.
    #[must_use]
    pub fn get(self, data: &Data) -> Option<Value> {
        let outcome = data.outcome.as_ref();
        Some(match self {
            Self::Table(at, slot) => return slot.get(data.tables.get(at)?),
            Self::NextTable => Value::Nothing,
            Self::Outcome => Value::Column(outcome.map(|outcome| outcome.column.clone())),
            Self::OutcomeKind => take::named(&SORTS, sort(&outcome?.kind)),
            Self::OutcomeYes => match &outcome?.kind {
                OutcomeKind::YesNo { event } => event.clone().map_or(Value::Nothing, Value::Text),
                OutcomeKind::Measured
                | OutcomeKind::Classes
                | OutcomeKind::Count { .. }
                | OutcomeKind::Time { .. } => return None,
            },
            Self::OutcomeEvent => match &outcome?.kind {
                OutcomeKind::Time { event } => Value::Column(Some(event.clone())),
                OutcomeKind::Measured
                | OutcomeKind::YesNo { .. }
                | OutcomeKind::Classes
                | OutcomeKind::Count { .. } => return None,
            },
            Self::Exposure => match &outcome?.kind {
                OutcomeKind::Count { exposure } => Value::Column(exposure.clone()),
                OutcomeKind::Measured
                | OutcomeKind::YesNo { .. }
                | OutcomeKind::Classes
                | OutcomeKind::Time { .. } => return None,
            },
            Self::OutcomeUnit => outcome?.unit.clone().map_or(Value::Nothing, Value::Text),
            Self::ReferenceError => outcome?
                .reference_error
                .map_or(Value::Nothing, Value::Number),
            Self::Predictors => Value::Columns(data.predictors.clone()),
            Self::Ignored => Value::Texts(data.ignored.clone()),
            Self::Covariates => Value::Texts(data.covariates.clone()),
            Self::SampleName => Value::Column(data.sample_name.clone()),
            Self::Unit => Value::Column(data.unit.clone()),
            Self::UnitMaking => take::named(&MAKINGS, data.unit_making),
            Self::Batch => Value::Column(data.batch.clone()),
            Self::Order => Value::Column(data.order.clone()),
            Self::Weight => Value::Column(data.weight.clone()),
            Self::Sealed => take::named(
                &SEALINGS,
                match &data.sealed {
                    Sealed::Nothing => Sealing::Nothing,
                    Sealed::Where { .. } => Sealing::Where,
                    Sealed::Listed(_) => Sealing::Listed,
                },
            ),
            Self::SealedColumn => match &data.sealed {
                Sealed::Where { column, .. } => Value::Column(Some(column.clone())),
                Sealed::Nothing | Sealed::Listed(_) => return None,
            },
            Self::SealedValues => match &data.sealed {
                Sealed::Where { values, .. } => Value::Texts(values.clone()),
                Sealed::Nothing | Sealed::Listed(_) => return None,
            },
            Self::SealedNames => match &data.sealed {
                Sealed::Listed(names) => Value::Texts(names.clone()),
                Sealed::Nothing | Sealed::Where { .. } => return None,
            },
            Self::AsText => Value::Texts(data.as_text.clone()),
            Self::AsNumbers => Value::Texts(data.as_numbers.clone()),
            Self::QualityControl => {
                let marked = data.quality_control.as_ref();
                Value::Column(marked.map(|marked| marked.column.clone()))
            }
            Self::QualityControlValues => {
                Value::Texts(data.quality_control.as_ref()?.values.clone())
            }
            Self::Corrections => Value::Corrections(Arc::clone(&data.corrections)),
            Self::Exclusions => Value::Exclusions(Arc::clone(&data.exclusions)),
            Self::Subject => take::named(&SUBJECTS, data.subject),
        })
    }

    /// The settings with another value there.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there.
    pub fn set(self, data: &Data, value: Value) -> Result<Data, Problem> {
        let label = self.label();
        let mut data = data.clone();
        match self {
            Self::Table(at, slot) => set_table(&mut data, at, slot, &value)?,
            Self::NextTable => add_table(&mut data, &value)?,
            Self::Outcome => set_outcome(&mut data, &value)?,
            Self::OutcomeKind
            | Self::OutcomeYes
            | Self::OutcomeEvent
            | Self::Exposure
            | Self::OutcomeUnit
            | Self::ReferenceError => {
                let outcome = data
                    .outcome
                    .as_mut()
                    .ok_or_else(|| take::absent(label, "no outcome has been chosen"))?;
                self.set_in_outcome(outcome, &value)?;
            }
            Self::Predictors => data.predictors = take::columns(label, &value)?,
            Self::Ignored => data.ignored = take::texts(label, &value)?,
            Self::Covariates => data.covariates = take::texts(label, &value)?,
            Self::SampleName => data.sample_name = take::optional_column(label, &value)?,
            Self::Unit => set_unit(&mut data, take::optional_column(label, &value)?),
            Self::UnitMaking => {
                data.unit_making = take::pick(label, &MAKINGS, &value)?;
                if data.unit_making == UnitMaking::FromNames {
                    let _ = data.unit.get_or_insert_with(|| USUAL_UNIT.to_owned());
                }
            }
            Self::Batch => data.batch = take::optional_column(label, &value)?,
            Self::Order => data.order = take::optional_column(label, &value)?,
            Self::Weight => data.weight = take::optional_column(label, &value)?,
            Self::Sealed | Self::SealedColumn | Self::SealedValues | Self::SealedNames => {
                data.sealed = self.sealed(&data.sealed, &value)?;
            }
            Self::AsText => {
                data.as_text = take::texts(label, &value)?;
                data.as_numbers.retain(|name| !data.as_text.contains(name));
            }
            Self::AsNumbers => {
                data.as_numbers = take::texts(label, &value)?;
                data.as_text.retain(|name| !data.as_numbers.contains(name));
            }
            Self::QualityControl => {
                let column = take::optional_column(label, &value)?;
                let old = data.quality_control.take().map(Arc::unwrap_or_clone);
                data.quality_control = column.map(|column| {
                    Arc::new(Marked {
                        column,
                        values: old.map_or_else(|| vec![USUAL_MARK.to_owned()], |old| old.values),
                    })
                });
            }
            Self::QualityControlValues => match &mut data.quality_control {
                Some(marked) => Arc::make_mut(marked).values = take::texts(label, &value)?,
                None => {
                    return Err(take::absent(
                        label,
                        "no column marks quality-control samples",
                    ));
                }
            },
            Self::Corrections => {
                let Value::Corrections(corrections) = value else {
                    return Err(take::wrong_sort(label, "a list of corrections", &value));
                };
                if let Some(bare) = corrections.iter().find(|c| c.reason.trim().is_empty()) {
                    return Err(without_reason("correction", &bare.sample));
                }
                data.corrections = corrections;
            }
            Self::Exclusions => {
                let Value::Exclusions(exclusions) = value else {
                    return Err(take::wrong_sort(label, "a list of exclusions", &value));
                };
                if let Some(bare) = exclusions.iter().find(|e| e.reason.trim().is_empty()) {
                    return Err(without_reason("exclusion", &bare.sample));
                }
                data.exclusions = exclusions;
            }
            Self::Subject => data.subject = take::pick(label, &SUBJECTS, &value)?,
        }
        Ok(data)
    }

    fn set_in_outcome(self, outcome: &mut Outcome, value: &Value) -> Result<(), Problem> {
        let label = self.label();
        match self {
            Self::OutcomeKind => {
                let chosen = take::pick(label, &SORTS, value)?;
                if chosen != sort(&outcome.kind) {
                    outcome.kind = usual_kind(chosen);
                }
            }
            Self::OutcomeYes => match &mut outcome.kind {
                OutcomeKind::YesNo { event } => *event = take::optional_text(label, value)?,
                OutcomeKind::Measured
                | OutcomeKind::Classes
                | OutcomeKind::Count { .. }
                | OutcomeKind::Time { .. } => {
                    return Err(take::absent(label, "the outcome is no yes/no answer"));
                }
            },
            Self::OutcomeEvent => match &mut outcome.kind {
                OutcomeKind::Time { event } => *event = take::column(label, value)?,
                OutcomeKind::Measured
                | OutcomeKind::YesNo { .. }
                | OutcomeKind::Classes
                | OutcomeKind::Count { .. } => {
                    return Err(take::absent(label, "the outcome is no time to an event"));
                }
            },
            Self::Exposure => match &mut outcome.kind {
                OutcomeKind::Count { exposure } => *exposure = take::optional_column(label, value)?,
                OutcomeKind::Measured
                | OutcomeKind::YesNo { .. }
                | OutcomeKind::Classes
                | OutcomeKind::Time { .. } => {
                    return Err(take::absent(label, "the outcome is no count"));
                }
            },
            Self::OutcomeUnit => outcome.unit = take::optional_text(label, value)?,
            Self::ReferenceError => {
                let bounds = self.bounds().expect("an error has bounds");
                outcome.reference_error = take::optional_number(label, bounds, value)?;
            }
            Self::Table(..)
            | Self::NextTable
            | Self::Outcome
            | Self::Predictors
            | Self::Ignored
            | Self::Covariates
            | Self::SampleName
            | Self::Unit
            | Self::UnitMaking
            | Self::Batch
            | Self::Order
            | Self::Weight
            | Self::Sealed
            | Self::SealedColumn
            | Self::SealedValues
            | Self::SealedNames
            | Self::AsText
            | Self::AsNumbers
            | Self::QualityControl
            | Self::QualityControlValues
            | Self::Corrections
            | Self::Exclusions
            | Self::Subject => {}
        }
        Ok(())
    }

    fn sealed(self, sealed: &Sealed, value: &Value) -> Result<Sealed, Problem> {
        let label = self.label();
        if self == Self::Sealed {
            let chosen = take::pick(label, &SEALINGS, value)?;
            return Ok(match (chosen, sealed) {
                (Sealing::Nothing, _) => Sealed::Nothing,
                (Sealing::Where, Sealed::Where { .. }) | (Sealing::Listed, Sealed::Listed(_)) => {
                    sealed.clone()
                }
                (Sealing::Where, Sealed::Nothing | Sealed::Listed(_)) => Sealed::Where {
                    column: USUAL_SEAL.to_owned(),
                    values: vec!["yes".to_owned()],
                },
                (Sealing::Listed, Sealed::Nothing | Sealed::Where { .. }) => {
                    Sealed::Listed(Vec::new())
                }
            });
        }
        match (self, sealed) {
            (Self::SealedColumn, Sealed::Where { values, .. }) => Ok(Sealed::Where {
                column: take::column(label, value)?,
                values: values.clone(),
            }),
            (Self::SealedValues, Sealed::Where { column, .. }) => Ok(Sealed::Where {
                column: column.clone(),
                values: take::texts(label, value)?,
            }),
            (Self::SealedNames, Sealed::Listed(_)) => {
                Ok(Sealed::Listed(take::texts(label, value)?))
            }
            (_, Sealed::Nothing | Sealed::Where { .. } | Sealed::Listed(_)) => Err(take::absent(
                label,
                "the sealed set is chosen in another way",
            )),
        }
    }
}

fn sort(kind: &OutcomeKind) -> Sort {
    match kind {
        OutcomeKind::Measured => Sort::Measured,
        OutcomeKind::YesNo { .. } => Sort::YesNo,
        OutcomeKind::Classes => Sort::Classes,
        OutcomeKind::Count { .. } => Sort::Count,
        OutcomeKind::Time { .. } => Sort::Time,
    }
}

fn usual_kind(sort: Sort) -> OutcomeKind {
    match sort {
        Sort::Measured => OutcomeKind::Measured,
        Sort::YesNo => OutcomeKind::YesNo { event: None },
        Sort::Classes => OutcomeKind::Classes,
        Sort::Count => OutcomeKind::Count { exposure: None },
        Sort::Time => OutcomeKind::Time {
            event: USUAL_EVENT.to_owned(),
        },
    }
}

fn set_outcome(data: &mut Data, value: &Value) -> Result<(), Problem> {
    let column = take::optional_column("outcome", value)?;
    data.outcome = match (column, data.outcome.take()) {
        (None, _) => None,
        (Some(column), Some(outcome)) if outcome.column == column => Some(outcome),
        // Another column has another unit and another error of measurement.
        (Some(column), old) => Some(Outcome {
            column,
            kind: old.map_or(OutcomeKind::Measured, |outcome| outcome.kind),
            unit: None,
            reference_error: None,
        }),
    };
    Ok(())
}

/// Another column is one of the tables until it is said to be made.
fn set_unit(data: &mut Data, column: Option<String>) {
    if column != data.unit {
        data.unit_making = UnitMaking::InColumn;
    }
    data.unit = column;
}

fn set_table(data: &mut Data, at: usize, slot: TableSlot, value: &Value) -> Result<(), Problem> {
    let Some(table) = data.tables.get(at) else {
        return Err(take::absent(slot.label(), "there is no such table"));
    };
    if slot == TableSlot::File && take::is_nothing(value) {
        let _ = data.tables.remove(at);
        if let Some(first) = data.tables.first_mut() {
            first.join = None;
        }
        return Ok(());
    }
    let changed = slot.set(table, value)?;
    data.tables[at] = changed;
    Ok(())
}

fn add_table(data: &mut Data, value: &Value) -> Result<(), Problem> {
    if take::is_nothing(value) {
        return Ok(());
    }
    let Value::File { source, name } = value else {
        return Err(take::wrong_sort("next table", "a file", value));
    };
    let mut table = TableSource::new(source.clone(), name);
    if !data.tables.is_empty() {
        let key = data.unit.as_deref().or(data.sample_name.as_deref());
        table.join = Some(usual_join(key));
    }
    data.tables.push(table);
    Ok(())
}

fn without_reason(act: &str, sample: &str) -> Problem {
    Problem::new(
        "act-without-reason",
        format!("The {act} of “{sample}” gives no reason."),
    )
    .mend("Write down why it was made.")
}
