//! A group of fields that is being written, in the order in which they are put.

use serde_json::{Map, Value};

/// A group of fields that is being written.
#[derive(Debug, Default)]
pub struct Group {
    map: Map<String, Value>,
}

impl Group {
    /// Puts a field.
    pub fn put(&mut self, name: &str, value: impl Into<Value>) {
        let _ = self.map.insert(name.to_owned(), value.into());
    }

    /// Puts a field if there is something to put.
    pub fn put_some(&mut self, name: &str, value: Option<impl Into<Value>>) {
        if let Some(value) = value {
            self.put(name, value);
        }
    }

    /// Puts a list unless it is empty.
    pub fn put_list(&mut self, name: &str, entries: impl Iterator<Item = impl Into<Value>>) {
        let list: Vec<Value> = entries.map(Into::into).collect();
        if !list.is_empty() {
            self.put(name, list);
        }
    }

    /// The whole group.
    #[must_use]
    pub fn value(self) -> Value {
        Value::Object(self.map)
    }
}
