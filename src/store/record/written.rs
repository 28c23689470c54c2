//! One recorded result as it is written in `record/<cell>.json`.

use crate::base::number::Precision;
use crate::base::problem::{Code, Place, Problem};
use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::fact::{Fact, FactColumn, FactTable, FactValue, FactValues, Facts};
use serde::de::{self, Visitor};
use serde::{Deserialize, Deserializer, Serialize, Serializer};
use serde_json::{Map, Value};
use std::collections::BTreeSet;
use std::sync::Mutex;

/// One recorded result.
#[derive(Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub struct Written {
    pub format: u64,
    pub program: String,
    pub fingerprint: String,
    pub made_from: Map<String, Value>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub outcome: Option<WrittenOutcome>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub failure: Option<WrittenFailure>,
}

/// What came of a cell.
#[derive(Serialize, Deserialize)]
pub struct WrittenOutcome {
    facts: Vec<WrittenFact>,
    caveats: Vec<WrittenCaveat>,
}

/// Why nothing came of a cell. The settings of remedies are in the form of the study file.
#[derive(Serialize, Deserialize)]
pub struct WrittenFailure {
    pub problem: WrittenProblem,
    #[serde(default)]
    pub remedies: Vec<WrittenRemedy>,
}

/// A way out of a failure.
#[derive(Serialize, Deserialize)]
pub struct WrittenRemedy {
    pub label: String,
    pub settings: Value,
}

#[derive(Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
struct WrittenFact {
    name: String,
    #[serde(flatten)]
    value: WrittenValue,
    #[serde(default)]
    unit: String,
    shown: String,
    #[serde(default)]
    meaning: String,
}

#[derive(Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
enum WrittenValue {
    Number(Number),
    Text(String),
    Table(Vec<WrittenColumn>),
}

#[derive(Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
struct WrittenColumn {
    name: String,
    #[serde(flatten)]
    values: WrittenValues,
    #[serde(default)]
    unit: String,
    shown: String,
    #[serde(default)]
    meaning: String,
}

#[derive(Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
enum WrittenValues {
    Numbers(Vec<Number>),
    Texts(Vec<String>),
}

#[derive(Serialize, Deserialize)]
struct WrittenCaveat {
    id: String,
    severity: String,
    heading: String,
    text: String,
    trigger: Vec<(String, String)>,
    threshold: String,
    origin: String,
}

/// A problem.
#[derive(Serialize, Deserialize)]
pub struct WrittenProblem {
    code: String,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    file: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    sheet: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    row: Option<usize>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    column: Option<String>,
    found: String,
    #[serde(default)]
    mend: Vec<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    details: Option<String>,
}

/// A number at full precision. JSON has no word for what is not a number: `null` is “not known”,
/// and the infinities are spelt.
#[derive(Clone, Copy)]
struct Number(f64);

const INFINITE: &str = "infinite";
const MINUS_INFINITE: &str = "minus infinite";

impl Serialize for Number {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        if self.0.is_nan() {
            serializer.serialize_none()
        } else if self.0 == f64::INFINITY {
            serializer.serialize_str(INFINITE)
        } else if self.0 == f64::NEG_INFINITY {
            serializer.serialize_str(MINUS_INFINITE)
        } else {
            serializer.serialize_f64(self.0)
        }
    }
}

impl<'de> Deserialize<'de> for Number {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        struct Any;
        impl Visitor<'_> for Any {
            type Value = Number;

            fn expecting(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
                f.write_str("a number, null, or the word for an infinity")
            }

            fn visit_f64<E: de::Error>(self, number: f64) -> Result<Number, E> {
                Ok(Number(number))
            }

            fn visit_i64<E: de::Error>(self, number: i64) -> Result<Number, E> {
                Ok(Number(number as f64))
            }

            fn visit_u64<E: de::Error>(self, number: u64) -> Result<Number, E> {
                Ok(Number(number as f64))
            }

            fn visit_unit<E: de::Error>(self) -> Result<Number, E> {
                Ok(Number(f64::NAN))
            }

            fn visit_none<E: de::Error>(self) -> Result<Number, E> {
                Ok(Number(f64::NAN))
            }

            fn visit_str<E: de::Error>(self, word: &str) -> Result<Number, E> {
                match word {
                    INFINITE => Ok(Number(f64::INFINITY)),
                    MINUS_INFINITE => Ok(Number(f64::NEG_INFINITY)),
                    _ => Err(E::invalid_value(de::Unexpected::Str(word), &self)),
                }
            }
        }
        deserializer.deserialize_any(Any)
    }
}

impl WrittenOutcome {
    /// An outcome in writing.
    #[must_use]
    pub fn of(facts: &Facts, caveats: &[Caveat]) -> Self {
        let fact = |fact: &Fact| WrittenFact {
            name: fact.name.clone(),
            value: match &fact.value {
                FactValue::Number(number) => WrittenValue::Number(Number(*number)),
                FactValue::Text(text) => WrittenValue::Text(text.clone()),
                FactValue::Table(table) => {
                    WrittenValue::Table(table.columns.iter().map(write_column).collect())
                }
            },
            unit: fact.unit.clone(),
            shown: shown(fact.precision),
            meaning: fact.meaning.clone(),
        };
        Self {
            facts: facts.all().iter().map(fact).collect(),
            caveats: caveats.iter().map(write_caveat).collect(),
        }
    }

    /// The outcome; `None` when a word in it is not known or a fact is given twice.
    #[must_use]
    pub fn read(self) -> Option<(Facts, Vec<Caveat>)> {
        let mut facts = Facts::new();
        for fact in self.facts {
            let value = match fact.value {
                WrittenValue::Number(number) => FactValue::Number(number.0),
                WrittenValue::Text(text) => FactValue::Text(text),
                WrittenValue::Table(columns) => {
                    let columns: Option<Vec<_>> = columns.into_iter().map(read_column).collect();
                    let columns = columns?;
                    let n_rows = columns.first().map_or(0, |column| column.values.len());
                    if columns.iter().any(|column| column.values.len() != n_rows) {
                        return None;
                    }
                    FactValue::Table(FactTable { columns })
                }
            };
            if facts.all().iter().any(|known| known.name == fact.name)
                || facts.get(&fact.name).is_some()
            {
                return None;
            }
            facts.push(Fact {
                name: fact.name,
                value,
                unit: fact.unit,
                precision: precision(&fact.shown)?,
                meaning: fact.meaning,
            });
        }
        let caveats: Option<Vec<_>> = self.caveats.into_iter().map(read_caveat).collect();
        Some((facts, caveats?))
    }
}

fn write_column(column: &FactColumn) -> WrittenColumn {
    WrittenColumn {
        name: column.name.clone(),
        values: match &column.values {
            FactValues::Numbers(numbers) => {
                WrittenValues::Numbers(numbers.iter().copied().map(Number).collect())
            }
            FactValues::Texts(texts) => WrittenValues::Texts(texts.clone()),
        },
        unit: column.unit.clone(),
        shown: shown(column.precision),
        meaning: column.meaning.clone(),
    }
}

fn read_column(column: WrittenColumn) -> Option<FactColumn> {
    Some(FactColumn {
        name: column.name,
        values: match column.values {
            WrittenValues::Numbers(numbers) => {
                FactValues::Numbers(numbers.into_iter().map(|number| number.0).collect())
            }
            WrittenValues::Texts(texts) => FactValues::Texts(texts),
        },
        unit: column.unit,
        precision: precision(&column.shown)?,
        meaning: column.meaning,
    })
}

/// How a number is shown: `whole`, `3 decimals`, `4 significant`, `1 percent`, `full`.
fn shown(precision: Precision) -> String {
    match precision {
        Precision::Whole => "whole".to_owned(),
        Precision::Decimals(count) => format!("{count} decimals"),
        Precision::Significant(count) => format!("{count} significant"),
        Precision::Percent(count) => format!("{count} percent"),
        Precision::Full => "full".to_owned(),
    }
}

fn precision(shown: &str) -> Option<Precision> {
    match shown {
        "whole" => return Some(Precision::Whole),
        "full" => return Some(Precision::Full),
        _ => {}
    }
    let (count, unit) = shown.split_once(' ')?;
    let count: u8 = count.parse().ok()?;
    match unit {
        "decimals" => Some(Precision::Decimals(count)),
        "significant" => Some(Precision::Significant(count)),
        "percent" => Some(Precision::Percent(count)),
        _ => None,
    }
}

fn write_caveat(caveat: &Caveat) -> WrittenCaveat {
    WrittenCaveat {
        id: caveat.id.clone(),
        severity: caveat.severity.word().to_owned(),
        heading: caveat.heading.clone(),
        text: caveat.text.clone(),
        trigger: caveat.trigger.clone(),
        threshold: caveat.threshold.clone(),
        origin: caveat.origin.word().to_owned(),
    }
}

fn read_caveat(caveat: WrittenCaveat) -> Option<Caveat> {
    const SEVERITIES: [Severity; 3] = [Severity::Note, Severity::Caution, Severity::Stop];
    const ORIGINS: [Origin; 3] = [Origin::Published, Origin::Convention, Origin::Computed];
    let severity = |severity: &Severity| severity.word() == caveat.severity;
    let origin = |origin: &Origin| origin.word() == caveat.origin;
    Some(Caveat {
        severity: SEVERITIES.into_iter().find(severity)?,
        origin: ORIGINS.into_iter().find(origin)?,
        id: caveat.id,
        heading: caveat.heading,
        text: caveat.text,
        trigger: caveat.trigger,
        threshold: caveat.threshold,
    })
}

impl WrittenProblem {
    /// A problem in writing.
    #[must_use]
    pub fn of(problem: &Problem) -> Self {
        Self {
            code: problem.code.0.to_owned(),
            file: problem.place.file.clone(),
            sheet: problem.place.sheet.clone(),
            row: problem.place.row,
            column: problem.place.column.clone(),
            found: problem.found.clone(),
            mend: problem.mend.clone(),
            details: problem.details.clone(),
        }
    }

    /// The problem.
    #[must_use]
    pub fn read(self) -> Problem {
        Problem {
            code: Code(lasting(&self.code)),
            place: Place {
                file: self.file,
                sheet: self.sheet,
                row: self.row,
                column: self.column,
            },
            found: self.found,
            mend: self.mend,
            details: self.details,
        }
    }
}

/// The same text for as long as the program runs, as a code is. Codes are few and short; a file
/// that pretends otherwise gets one common code.
fn lasting(code: &str) -> &'static str {
    const MOST: usize = 1000;
    static KNOWN: Mutex<BTreeSet<&'static str>> = Mutex::new(BTreeSet::new());
    let mut known = KNOWN.lock().expect("nothing panics under this lock");
    if let Some(code) = known.get(code) {
        return code;
    }
    if known.len() >= MOST || code.len() > 64 {
        return "recorded-problem";
    }
    let code: &'static str = Box::leak(code.to_owned().into_boxed_str());
    let _ = known.insert(code);
    code
}
