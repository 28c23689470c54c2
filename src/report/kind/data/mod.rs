//! What a Data cell has to say.

pub mod answer;
pub mod design;
pub mod methods;
pub mod table;

use crate::eval::fact::Facts;
use crate::report::noun;
use crate::report::sentence::{Editor, Sentence};
use crate::report::word;
use crate::study::settings::data::{Data, Outcome, OutcomeKind, Sealed, Subject, UnitMaking};
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::data::DataSlot;

const KINDS: [(&str, &str); 5] = [
    ("measured", "measured quantity"),
    ("yes-no", "yes/no answer"),
    ("classes", "class out of several"),
    ("count", "count"),
    ("time", "time to an event"),
];
const SEALINGS: [(&str, &str); 3] = [
    ("nothing", "no sample is sealed"),
    ("where", "those whose column holds certain words"),
    ("listed", "those that are named"),
];
const MAKINGS: [(&str, &str); 2] = [
    ("in-column", "a column of the tables"),
    ("from-names", "what the sample names begin with"),
];
const SUBJECTS: [(&str, &str); 4] = [
    ("ordinary", "nothing that asks for special caution"),
    ("health", "the health of people or animals"),
    ("safety", "the safety of plant, machines or food"),
    ("compliance", "a test for release or compliance"),
];

/// The kinds of outcome by their stable names, and how they read.
#[must_use]
pub const fn kinds() -> &'static [(&'static str, &'static str)] {
    &KINDS
}

/// How a kind of outcome reads.
#[must_use]
pub fn kind_in_words(name: &str) -> &'static str {
    reading(&KINDS, name)
}

/// How a stable name reads in a sentence.
fn reading(labels: &[(&'static str, &'static str)], name: &str) -> &'static str {
    labels
        .iter()
        .find(|(known, _)| *known == name)
        .map_or("", |(_, text)| *text)
}

/// The settings as sentences, in the present tense. Facts add what only the tables know.
#[must_use]
pub fn sentences(data: &Data, facts: Option<&Facts>) -> Vec<Sentence> {
    let mut sentences = vec![
        table::read(data),
        predict(data, facts),
        predictors(data, facts),
        together(data),
        sealed(data, facts),
    ];
    sentences.push(covariates(data));
    sentences.push(acts(data));
    for at in 0..data.tables.len() {
        sentences.push(table::details(data, at).detail());
    }
    sentences.push(as_written(data).detail());
    sentences.push(
        Sentence::new()
            .text("Join ")
            .word(
                Slot::Data(DataSlot::NextTable),
                "one more table",
                Editor::File,
            )
            .text(" where it holds something that belongs to these samples.")
            .detail(),
    );
    sentences.push(subject(data.subject).detail());
    sentences
}

fn predict(data: &Data, facts: Option<&Facts>) -> Sentence {
    let slot = Slot::Data(DataSlot::Outcome);
    let sentence = Sentence::new().text("Predict ");
    let Some(outcome) = &data.outcome else {
        return sentence
            .word(slot, "a column still to be chosen", Editor::Column)
            .text(".");
    };
    let sentence = sentence.word(slot, outcome.column.clone(), Editor::Column);
    match &outcome.kind {
        OutcomeKind::Measured => {
            let sentence = kind(unit(sentence, outcome, facts).text(", a "), "measured");
            sentence
                .text("; the standard deviation of the reference method’s own error is ")
                .optional_real(
                    Slot::Data(DataSlot::ReferenceError),
                    outcome.reference_error,
                    "not stated",
                )
                .text(".")
        }
        OutcomeKind::YesNo { event } => {
            let text = event.as_ref().map_or_else(
                || "what is found to mean yes".to_owned(),
                |word| format!("“{word}”"),
            );
            kind(sentence.text(", a "), "yes-no")
                .text("; ")
                .word(Slot::Data(DataSlot::OutcomeYes), text, Editor::Text)
                .text(" counts as yes.")
        }
        OutcomeKind::Classes => kind(sentence.text(", a "), "classes").text("."),
        OutcomeKind::Count { exposure } => kind(sentence.text(", a "), "count")
            .text(", counted over ")
            .column(
                Slot::Data(DataSlot::Exposure),
                exposure.as_ref(),
                "the same exposure everywhere",
            )
            .text("."),
        OutcomeKind::Time { event } => kind(unit(sentence, outcome, facts).text(", the "), "time")
            .text("; whether it happened is told by ")
            .column(Slot::Data(DataSlot::OutcomeEvent), Some(event), "")
            .text("."),
    }
}

fn kind(sentence: Sentence, name: &str) -> Sentence {
    sentence.choice(
        Slot::Data(DataSlot::OutcomeKind),
        reading(&KINDS, name),
        &KINDS,
    )
}

fn unit(sentence: Sentence, outcome: &Outcome, facts: Option<&Facts>) -> Sentence {
    let found = facts
        .and_then(|facts| facts.words("outcome unit"))
        .filter(|unit| !unit.is_empty());
    let text = outcome
        .unit
        .as_deref()
        .or(found)
        .unwrap_or("no unit stated");
    sentence
        .text(", ")
        .word(Slot::Data(DataSlot::OutcomeUnit), text, Editor::Text)
}

fn predictors(data: &Data, facts: Option<&Facts>) -> Sentence {
    let ranges = word::ranges(&data.predictors);
    let text = if ranges.is_empty() {
        "all columns of numbers without another role".to_owned()
    } else {
        noun::short_list(&ranges)
    };
    let mut sentence = Sentence::new().text("Predictors are ").word(
        Slot::Data(DataSlot::Predictors),
        text,
        Editor::Columns,
    );
    if let Some(count) = facts.and_then(|facts| facts.get("predictors")) {
        sentence = sentence.text(format!(" ({})", count.shown()));
    }
    sentence
        .text(", leaving out ")
        .word(
            Slot::Data(DataSlot::Ignored),
            names(&data.ignored, "nothing"),
            Editor::Names,
        )
        .text(".")
}

fn names(names: &[String], none: &str) -> String {
    if names.is_empty() {
        none.to_owned()
    } else {
        noun::short_list(names)
    }
}

fn together(data: &Data) -> Sentence {
    let samples = noun::sample(Some(data));
    let unit = Slot::Data(DataSlot::Unit);
    let sentence = match &data.unit {
        Some(column) => Sentence::new()
            .text(format!("Keep {} of one ", samples.many))
            .word(unit, column.clone(), Editor::Column)
            .text(" together, told by ")
            .choice(
                Slot::Data(DataSlot::UnitMaking),
                reading(
                    &MAKINGS,
                    match data.unit_making {
                        UnitMaking::InColumn => "in-column",
                        UnitMaking::FromNames => "from-names",
                    },
                ),
                &MAKINGS,
            ),
        None => Sentence::new()
            .text(format!("Each {} is ", samples.one))
            .word(unit, "a unit of its own", Editor::Column)
            .text("; units could be told by ")
            .choice(
                Slot::Data(DataSlot::UnitMaking),
                reading(&MAKINGS, "in-column"),
                &MAKINGS,
            ),
    };
    let sentence = sentence
        .text("; batch is ")
        .column(
            Slot::Data(DataSlot::Batch),
            data.batch.as_ref(),
            "not given",
        )
        .text(", order of measurement is ")
        .column(
            Slot::Data(DataSlot::Order),
            data.order.as_ref(),
            "not given",
        )
        .text(", weight is ")
        .column(
            Slot::Data(DataSlot::Weight),
            data.weight.as_ref(),
            "the same for all",
        )
        .text(if data.quality_control.is_some() {
            "; quality-control samples are those whose "
        } else {
            "; quality-control samples are "
        })
        .column(
            Slot::Data(DataSlot::QualityControl),
            data.quality_control.as_ref().map(|marked| &marked.column),
            "not marked",
        );
    match &data.quality_control {
        None => sentence,
        Some(marked) => sentence.text(" is ").word(
            Slot::Data(DataSlot::QualityControlValues),
            alternatives(&marked.values),
            Editor::List,
        ),
    }
    .text(".")
}

fn covariates(data: &Data) -> Sentence {
    Sentence::new()
        .text("Keep ")
        .word(
            Slot::Data(DataSlot::Covariates),
            names(&data.covariates, "no covariate"),
            Editor::Names,
        )
        .text(" in the model whatever the penalty.")
}

fn as_written(data: &Data) -> Sentence {
    Sentence::new()
        .text("Read ")
        .word(
            Slot::Data(DataSlot::AsText),
            names(&data.as_text, "no column"),
            Editor::Names,
        )
        .text(" as text, letter for letter, and ")
        .word(
            Slot::Data(DataSlot::AsNumbers),
            names(&data.as_numbers, "no column"),
            Editor::Names,
        )
        .text(" as numbers, whatever they hold; of the others, as found.")
}

fn sealed(data: &Data, facts: Option<&Facts>) -> Sentence {
    let slot = Slot::Data(DataSlot::Sealed);
    let units = noun::unit(Some(data));
    let mut sentence = match &data.sealed {
        Sealed::Nothing => {
            return Sentence::new()
                .text("For one last check, ")
                .choice(slot, "no sample is sealed", &SEALINGS)
                .text(".");
        }
        Sealed::Where { column, values } => Sentence::new()
            .text(format!("The {} whose ", noun::sample(Some(data)).many))
            .column(Slot::Data(DataSlot::SealedColumn), Some(column), "")
            .text(" is ")
            .word(
                Slot::Data(DataSlot::SealedValues),
                alternatives(values),
                Editor::List,
            )
            .text(" are "),
        Sealed::Listed(names) => Sentence::new()
            .text(format!("The {} ", units.many))
            .word(
                Slot::Data(DataSlot::SealedNames),
                self::names(names, "still to be named"),
                Editor::List,
            )
            .text(" are "),
    };
    sentence = sentence
        .choice(slot, "sealed", &SEALINGS)
        .text(" for one last check");
    if let Some(count) = facts.and_then(|facts| facts.get("sealed units")) {
        let word = if facts.and_then(|facts| facts.value("sealed units")) == Some(1.0) {
            units.one
        } else {
            units.many
        };
        sentence = sentence.text(format!(" ({} {word})", count.shown()));
    }
    sentence.text(".")
}

fn alternatives(values: &[String]) -> String {
    match values {
        [] => "a word still to be named".to_owned(),
        [one] => one.clone(),
        [most @ .., last] => format!("{} or {last}", most.join(", ")),
    }
}

fn acts(data: &Data) -> Sentence {
    let counted = |count: usize, one: &str, many: &str| match count {
        0 => format!("no {one}"),
        1 => format!("1 {one}"),
        count => format!("{} {many}", word::whole(count as u64)),
    };
    let verb = |count: usize| if count > 1 { "are" } else { "is" };
    let (n_corrections, n_exclusions) = (data.corrections.len(), data.exclusions.len());
    Sentence::new()
        .word(
            Slot::Data(DataSlot::Corrections),
            noun::capital(&counted(n_corrections, "value", "values")),
            Editor::Acts,
        )
        .text(format!(" {} corrected and ", verb(n_corrections)))
        .word(
            Slot::Data(DataSlot::Exclusions),
            counted(n_exclusions, "sample", "samples"),
            Editor::Acts,
        )
        .text(format!(" {} excluded", verb(n_exclusions)))
        .text(if n_corrections + n_exclusions > 0 {
            ", each with a reason."
        } else {
            "."
        })
}

/// The plain statement that both exports carry where more than a number may hang on the study.
#[must_use]
pub const fn caution(subject: Subject) -> Option<&'static str> {
    match subject {
        Subject::Ordinary => None,
        Subject::Health => Some(
            "The model was developed on the samples described and has not been evaluated \
             elsewhere. It is not by itself a basis for decisions about people or animals. Local \
             rules and licensed practice come first.",
        ),
        Subject::Safety => Some(
            "The model was developed on the samples described and has not been evaluated \
             elsewhere. It is not by itself a basis for decisions about plant, machines or food. \
             Local rules and licensed practice come first.",
        ),
        Subject::Compliance => Some(
            "The model was developed on the samples described and has not been evaluated \
             elsewhere. What it is worth holds for the material, range and instrument described; \
             the procedure or authority in charge decides whether it may replace the reference \
             method.",
        ),
    }
}

fn subject(subject: Subject) -> Sentence {
    let name = match subject {
        Subject::Ordinary => "ordinary",
        Subject::Health => "health",
        Subject::Safety => "safety",
        Subject::Compliance => "compliance",
    };
    Sentence::new()
        .text("What hangs on this study is ")
        .choice(
            Slot::Data(DataSlot::Subject),
            reading(&SUBJECTS, name),
            &SUBJECTS,
        )
        .text(".")
}
