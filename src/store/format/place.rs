//! A place in a file that is being read: knows its way, and notes the fields nobody asked for.

use crate::base::real::Real;
use crate::study::kept::{KeptField, Step};
use serde_json::{Map, Value};
use std::cell::RefCell;
use std::collections::BTreeSet;

/// What does not fit at a place of a file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fault {
    /// The way to the place.
    pub path: Vec<Step>,
    /// What is the case; one sentence.
    pub found: String,
    /// What would mend it; one sentence.
    pub mend: String,
}

/// The fields that nobody asked for, from one reading.
#[derive(Debug, Default)]
pub struct Notes {
    fields: RefCell<Vec<KeptField>>,
}

impl Notes {
    /// The fields that were not known, in the order of the file.
    #[must_use]
    pub fn into_fields(self) -> Vec<KeptField> {
        self.fields.into_inner()
    }
}

/// A place in a file that is being read.
#[derive(Clone, Debug)]
pub struct At<'a> {
    value: &'a Value,
    path: Vec<Step>,
    notes: &'a Notes,
}

impl<'a> At<'a> {
    /// The outermost place. Ways are told from here.
    #[must_use]
    pub fn top(value: &'a Value, notes: &'a Notes) -> Self {
        Self {
            value,
            path: Vec::new(),
            notes,
        }
    }

    /// What stands here.
    #[must_use]
    pub fn value(&self) -> &'a Value {
        self.value
    }

    /// A fault at this place.
    #[must_use]
    pub fn fault(&self, found: &str, mend: &str) -> Fault {
        Fault {
            path: self.path.clone(),
            found: found.to_owned(),
            mend: mend.to_owned(),
        }
    }

    fn expected(&self, what: &str) -> Fault {
        self.fault(
            &format!("{} stands where {what} is expected.", shown(self.value)),
            &format!("Put {what} there."),
        )
    }

    /// The words that stand here.
    ///
    /// # Errors
    /// A [`Fault`] when something else stands here.
    pub fn text(&self) -> Result<String, Fault> {
        let text = self.value.as_str().map(str::to_owned);
        text.ok_or_else(|| self.expected("a text in quotation marks"))
    }

    /// The whole number that stands here, 0 or more.
    ///
    /// # Errors
    /// A [`Fault`] when something else stands here.
    pub fn whole(&self) -> Result<u64, Fault> {
        // A number such as 5.0 is whole too: some programs write all numbers with decimals.
        let exact = |number: f64| {
            let lawful = number.fract() == 0.0 && (0.0..9e15).contains(&number);
            lawful.then_some(number as u64)
        };
        let whole = self.value.as_u64();
        let whole = whole.or_else(|| self.value.as_f64().and_then(exact));
        whole.ok_or_else(|| self.expected("a whole number, 0 or more,"))
    }

    /// The count that stands here.
    ///
    /// # Errors
    /// A [`Fault`] when something else stands here.
    pub fn count(&self) -> Result<u32, Fault> {
        let count = u32::try_from(self.whole()?);
        count.map_err(|_| self.expected("a whole number below four thousand million"))
    }

    /// The number that stands here.
    ///
    /// # Errors
    /// A [`Fault`] when something else stands here.
    pub fn real(&self) -> Result<Real, Fault> {
        let real = self.value.as_f64().and_then(Real::new);
        real.ok_or_else(|| self.expected("a number"))
    }

    /// The thing that is called by the word that stands here.
    ///
    /// # Errors
    /// A [`Fault`] that lists the words that may stand here.
    pub fn one_of<T: Copy>(&self, words: &[(&str, T)]) -> Result<T, Fault> {
        let found = words
            .iter()
            .find(|(word, _)| self.value.as_str() == Some(word));
        found.map(|(_, thing)| *thing).ok_or_else(|| {
            let words: Vec<_> = words.iter().map(|(word, _)| *word).collect();
            self.not_among(&words)
        })
    }

    /// The fault that something else stands here than one of these words.
    #[must_use]
    pub fn not_among(&self, words: &[&str]) -> Fault {
        let words: Vec<_> = words.iter().map(|word| format!("“{word}”")).collect();
        self.fault(
            &format!("{} is not among the words known here.", shown(self.value)),
            &format!("Write one of {}.", words.join(", ")),
        )
    }

    /// The entries of the list that stands here.
    ///
    /// # Errors
    /// A [`Fault`] when something else stands here.
    pub fn list(&self) -> Result<Vec<At<'a>>, Fault> {
        let list = self.value.as_array();
        let list = list.ok_or_else(|| self.expected("a list in square brackets"))?;
        Ok(list
            .iter()
            .enumerate()
            .map(|(at, value)| self.inside(Step::Entry(at), value))
            .collect())
    }

    /// The entries of the list that stands here, each read.
    ///
    /// # Errors
    /// The first [`Fault`].
    pub fn each<T>(&self, read: impl Fn(At<'a>) -> Result<T, Fault>) -> Result<Vec<T>, Fault> {
        self.list()?.into_iter().map(read).collect()
    }

    /// The fields of the thing that stands here.
    ///
    /// # Errors
    /// A [`Fault`] when something else stands here.
    pub fn fields(&self) -> Result<Fields<'a>, Fault> {
        let map = self.value.as_object();
        let map = map.ok_or_else(|| self.expected("a group of fields in braces"))?;
        Ok(Fields {
            at: self.clone(),
            map,
            asked: BTreeSet::new(),
        })
    }

    fn inside(&self, step: Step, value: &'a Value) -> At<'a> {
        let mut path = self.path.clone();
        path.push(step);
        At {
            value,
            path,
            notes: self.notes,
        }
    }
}

/// The fields of a thing that is being read.
#[derive(Debug)]
pub struct Fields<'a> {
    at: At<'a>,
    map: &'a Map<String, Value>,
    asked: BTreeSet<&'static str>,
}

impl<'a> Fields<'a> {
    /// Where the thing stands.
    #[must_use]
    pub fn at(&self) -> &At<'a> {
        &self.at
    }

    /// The field with this name; `null` is like an absent field.
    pub fn get(&mut self, name: &'static str) -> Option<At<'a>> {
        let _ = self.asked.insert(name);
        let value = self.map.get(name).filter(|value| !value.is_null())?;
        Some(self.at.inside(Step::Field(name.to_owned()), value))
    }

    /// The field with this name.
    ///
    /// # Errors
    /// A [`Fault`] when it is absent.
    pub fn need(&mut self, name: &'static str) -> Result<At<'a>, Fault> {
        self.get(name).ok_or_else(|| {
            let found = format!("The field “{name}” is missing.");
            self.at.fault(&found, "Add it.")
        })
    }

    /// The field with this name, read, if it is there.
    ///
    /// # Errors
    /// The reader's [`Fault`].
    pub fn read<T>(
        &mut self,
        name: &'static str,
        read: impl FnOnce(At<'a>) -> Result<T, Fault>,
    ) -> Result<Option<T>, Fault> {
        self.get(name).map(read).transpose()
    }

    /// The words of a field, if it is there.
    ///
    /// # Errors
    /// A [`Fault`] when the field holds something else.
    pub fn text(&mut self, name: &'static str) -> Result<Option<String>, Fault> {
        self.read(name, |at| at.text())
    }

    /// The texts of a field; none when it is absent.
    ///
    /// # Errors
    /// A [`Fault`] when the field holds something else.
    pub fn texts(&mut self, name: &'static str) -> Result<Vec<String>, Fault> {
        let texts = self.read(name, |at| at.each(|entry| entry.text()))?;
        Ok(texts.unwrap_or_default())
    }

    /// Ends the reading of this thing: fields that nobody asked for are noted.
    pub fn done(self) {
        for (name, value) in self.map {
            if !self.asked.contains(name.as_str()) {
                self.at.notes.fields.borrow_mut().push(KeptField {
                    path: self.at.path.clone(),
                    name: name.clone(),
                    value: value.to_string(),
                });
            }
        }
    }
}

/// A way as it is told to people: `choose.inner.parts`, `tables[1].file`.
#[must_use]
pub fn way(path: &[Step]) -> String {
    let mut way = String::new();
    for step in path {
        match step {
            Step::Field(name) if way.is_empty() => way.push_str(name),
            Step::Field(name) => {
                way.push('.');
                way.push_str(name);
            }
            Step::Entry(at) => way.push_str(&format!("[{at}]")),
        }
    }
    way
}

/// A value as it is named in a sentence.
fn shown(value: &Value) -> String {
    const MOST: usize = 40;
    match value {
        Value::Null => "Nothing".to_owned(),
        Value::Bool(_) | Value::Number(_) => format!("“{value}”"),
        Value::String(text) if text.chars().count() > MOST => {
            let start: String = text.chars().take(MOST).collect();
            format!("“{start}…”")
        }
        Value::String(text) => format!("“{text}”"),
        Value::Array(_) => "A list".to_owned(),
        Value::Object(_) => "A group of fields".to_owned(),
    }
}
