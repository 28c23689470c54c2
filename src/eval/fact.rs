//! A fact: a named value with unit, precision and meaning. The one source of every number.

use crate::base::number::{self, Precision};

/// A named value that a cell gives.
///
/// Window, prose, write-up, workbook and command line all read facts, and nothing else, so that
/// nothing can disagree.
#[derive(Clone, Debug, PartialEq)]
pub struct Fact {
    /// The name by which prose refers to it, in lower case: `chosen strength`.
    pub name: String,
    /// The value.
    pub value: FactValue,
    /// The unit, as it is printed behind the number; empty when there is none.
    pub unit: String,
    /// How many digits are shown.
    pub precision: Precision,
    /// What it is, for the dictionary: one sentence.
    pub meaning: String,
}

/// The value of a fact.
#[derive(Clone, Debug, PartialEq)]
pub enum FactValue {
    /// A number; NaN where it is not known.
    Number(f64),
    /// Words.
    Text(String),
    /// A table of values at full precision.
    Table(FactTable),
}

/// A table that is the value of a fact: named columns of one length.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct FactTable {
    /// The columns.
    pub columns: Vec<FactColumn>,
}

/// A column of a fact's table.
#[derive(Clone, Debug, PartialEq)]
pub struct FactColumn {
    /// The column's name.
    pub name: String,
    /// The values.
    pub values: FactValues,
    /// The unit; empty when there is none.
    pub unit: String,
    /// How many digits are shown.
    pub precision: Precision,
    /// What it is, for the dictionary: one sentence.
    pub meaning: String,
}

/// The values of a column.
#[derive(Clone, Debug, PartialEq)]
pub enum FactValues {
    /// Numbers; NaN where a number is not known.
    Numbers(Vec<f64>),
    /// Words.
    Texts(Vec<String>),
}

impl Fact {
    /// A number with a unit.
    #[must_use]
    pub fn number(name: &str, value: f64, unit: &str, precision: Precision, meaning: &str) -> Self {
        Self {
            name: name.to_owned(),
            value: FactValue::Number(value),
            unit: unit.to_owned(),
            precision,
            meaning: meaning.to_owned(),
        }
    }

    /// A count.
    #[must_use]
    pub fn count(name: &str, value: usize, meaning: &str) -> Self {
        Self::number(name, value as f64, "", Precision::Whole, meaning)
    }

    /// Words.
    #[must_use]
    pub fn text(name: &str, value: impl Into<String>, meaning: &str) -> Self {
        Self {
            name: name.to_owned(),
            value: FactValue::Text(value.into()),
            unit: String::new(),
            precision: Precision::Full,
            meaning: meaning.to_owned(),
        }
    }

    /// A table.
    #[must_use]
    pub fn table(name: &str, columns: Vec<FactColumn>, meaning: &str) -> Self {
        Self {
            name: name.to_owned(),
            value: FactValue::Table(FactTable { columns }),
            unit: String::new(),
            precision: Precision::Full,
            meaning: meaning.to_owned(),
        }
    }

    /// The value as it is shown, without its unit. A table shows its number of rows.
    #[must_use]
    pub fn shown(&self) -> String {
        match &self.value {
            FactValue::Number(value) => number::text(*value, self.precision),
            FactValue::Text(text) => text.clone(),
            FactValue::Table(table) => number::text(table.n_rows() as f64, Precision::Whole),
        }
    }

    /// The value as it is shown, with its unit.
    #[must_use]
    pub fn shown_with_unit(&self) -> String {
        with_unit(&self.shown(), &self.unit)
    }

    /// The value with a number of decimals that a reader asked for, without its unit.
    #[must_use]
    pub fn shown_with_decimals(&self, decimals: u8) -> String {
        match &self.value {
            FactValue::Number(value) => {
                let precision = match self.precision {
                    Precision::Percent(_) => Precision::Percent(decimals),
                    Precision::Whole
                    | Precision::Decimals(_)
                    | Precision::Significant(_)
                    | Precision::Full => Precision::Decimals(decimals),
                };
                number::text(*value, precision)
            }
            FactValue::Text(_) | FactValue::Table(_) => self.shown(),
        }
    }
}

/// A number's text with its unit behind it.
#[must_use]
pub fn with_unit(shown: &str, unit: &str) -> String {
    if unit.is_empty() {
        shown.to_owned()
    } else {
        format!("{shown} {unit}")
    }
}

impl FactTable {
    /// The number of rows.
    #[must_use]
    pub fn n_rows(&self) -> usize {
        self.columns.first().map_or(0, |column| column.values.len())
    }

    /// The column with this name.
    #[must_use]
    pub fn column(&self, name: &str) -> Option<&FactColumn> {
        self.columns.iter().find(|column| column.name == name)
    }

    /// The numbers of a column; empty when there is no such column or it holds words.
    #[must_use]
    pub fn numbers(&self, name: &str) -> &[f64] {
        match self.column(name).map(|column| &column.values) {
            Some(FactValues::Numbers(numbers)) => numbers,
            Some(FactValues::Texts(_)) | None => &[],
        }
    }

    /// The words of a column; empty when there is no such column or it holds numbers.
    #[must_use]
    pub fn texts(&self, name: &str) -> &[String] {
        match self.column(name).map(|column| &column.values) {
            Some(FactValues::Texts(texts)) => texts,
            Some(FactValues::Numbers(_)) | None => &[],
        }
    }
}

impl FactColumn {
    /// A column of numbers.
    #[must_use]
    pub fn numbers(
        name: &str,
        values: Vec<f64>,
        unit: &str,
        precision: Precision,
        meaning: &str,
    ) -> Self {
        Self {
            name: name.to_owned(),
            values: FactValues::Numbers(values),
            unit: unit.to_owned(),
            precision,
            meaning: meaning.to_owned(),
        }
    }

    /// A column of words.
    #[must_use]
    pub fn texts(name: &str, values: Vec<String>, meaning: &str) -> Self {
        Self {
            name: name.to_owned(),
            values: FactValues::Texts(values),
            unit: String::new(),
            precision: Precision::Full,
            meaning: meaning.to_owned(),
        }
    }

    /// The value in a row as it is shown.
    #[must_use]
    pub fn shown(&self, row: usize) -> String {
        match &self.values {
            FactValues::Numbers(numbers) => {
                let value = numbers.get(row).copied().unwrap_or(f64::NAN);
                if value.is_nan() {
                    "–".to_owned()
                } else {
                    number::text(value, self.precision)
                }
            }
            FactValues::Texts(texts) => texts.get(row).cloned().unwrap_or_default(),
        }
    }
}

impl FactValues {
    /// The number of values.
    #[must_use]
    pub fn len(&self) -> usize {
        match self {
            Self::Numbers(numbers) => numbers.len(),
            Self::Texts(texts) => texts.len(),
        }
    }

    /// Whether there are no values.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }
}

/// The facts of one cell, in the order in which they are printed.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Facts(Vec<Fact>);

impl Facts {
    /// No facts yet.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// Adds a fact.
    ///
    /// # Panics
    /// When the cell gives a fact of this name already: names are what prose refers to.
    pub fn push(&mut self, fact: Fact) {
        assert!(
            self.get(&fact.name).is_none(),
            "the fact “{}” is given twice",
            fact.name
        );
        self.0.push(fact);
    }

    /// All facts.
    #[must_use]
    pub fn all(&self) -> &[Fact] {
        &self.0
    }

    /// The fact with this name; case and extra blanks do not count.
    #[must_use]
    pub fn get(&self, name: &str) -> Option<&Fact> {
        self.0.iter().find(|fact| fact.name == name).or_else(|| {
            let wanted = name
                .split_whitespace()
                .collect::<Vec<_>>()
                .join(" ")
                .to_lowercase();
            self.0
                .iter()
                .find(|fact| fact.name.to_lowercase() == wanted)
        })
    }

    /// The number that this fact holds, if it holds one that is known.
    #[must_use]
    pub fn value(&self, name: &str) -> Option<f64> {
        match self.get(name).map(|fact| &fact.value) {
            Some(FactValue::Number(value)) if value.is_finite() => Some(*value),
            Some(FactValue::Number(_) | FactValue::Text(_) | FactValue::Table(_)) | None => None,
        }
    }

    /// The words that this fact holds.
    #[must_use]
    pub fn words(&self, name: &str) -> Option<&str> {
        match self.get(name).map(|fact| &fact.value) {
            Some(FactValue::Text(text)) => Some(text),
            Some(FactValue::Number(_) | FactValue::Table(_)) | None => None,
        }
    }

    /// The table that this fact holds.
    #[must_use]
    pub fn table(&self, name: &str) -> Option<&FactTable> {
        match self.get(name).map(|fact| &fact.value) {
            Some(FactValue::Table(table)) => Some(table),
            Some(FactValue::Number(_) | FactValue::Text(_)) | None => None,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_fact_is_found_by_its_name_whatever_the_case_and_blanks() {
        let mut facts = Facts::new();
        facts.push(Fact::count(
            "chosen predictors",
            5,
            "How many predictors were chosen.",
        ));
        assert_eq!(
            facts.get(" Chosen  predictors").map(Fact::shown),
            Some("5".to_owned())
        );
    }

    #[test]
    fn a_reader_may_ask_for_other_decimals() {
        let fact = Fact::number(
            "nested r²",
            0.8041,
            "",
            Precision::Percent(0),
            "Explained share.",
        );
        assert_eq!(fact.shown(), "80 %");
        assert_eq!(fact.shown_with_decimals(1), "80.4 %");
    }
}
