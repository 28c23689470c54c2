//! JSON as people like to read it: one field a line, and short things on one line.

use serde_json::Value;

/// The longest line on which a group or a list is kept together.
const WIDTH: usize = 96;

/// A value as text, with a line break at its end.
#[must_use]
pub fn print(value: &Value) -> String {
    let mut text = String::new();
    lay(value, 0, 0, &mut text);
    text.push('\n');
    text
}

fn lay(value: &Value, depth: usize, column: usize, text: &mut String) {
    if let Some(line) = one_line(value, depth)
        && column + line.chars().count() <= WIDTH
    {
        text.push_str(&line);
        return;
    }
    match value {
        Value::Array(list) => {
            text.push('[');
            for (at, entry) in list.iter().enumerate() {
                new_line(at, depth + 1, text);
                lay(entry, depth + 1, indent(depth + 1), text);
            }
            close(']', depth, text);
        }
        Value::Object(map) => {
            text.push('{');
            for (at, (name, entry)) in map.iter().enumerate() {
                new_line(at, depth + 1, text);
                let name = Value::from(name.as_str()).to_string();
                text.push_str(&name);
                text.push_str(": ");
                let column = indent(depth + 1) + name.chars().count() + 2;
                lay(entry, depth + 1, column, text);
            }
            close('}', depth, text);
        }
        Value::Null | Value::Bool(_) | Value::Number(_) | Value::String(_) => {
            text.push_str(&value.to_string());
        }
    }
}

/// A scalar, or a group or list of scalars below the outermost two levels, on one line.
fn one_line(value: &Value, depth: usize) -> Option<String> {
    let scalar = |value: &Value| !matches!(value, Value::Array(_) | Value::Object(_));
    match value {
        Value::Array(list) if list.is_empty() => Some("[]".to_owned()),
        Value::Object(map) if map.is_empty() => Some("{}".to_owned()),
        Value::Array(list) if depth > 1 && list.iter().all(scalar) => {
            let entries: Vec<_> = list.iter().map(Value::to_string).collect();
            Some(format!("[{}]", entries.join(", ")))
        }
        Value::Object(map) if depth > 1 && map.values().all(scalar) => {
            let fields = map.iter().map(|(name, value)| {
                let name = Value::from(name.as_str());
                format!("{name}: {value}")
            });
            Some(format!("{{ {} }}", fields.collect::<Vec<_>>().join(", ")))
        }
        Value::Array(_) | Value::Object(_) => None,
        Value::Null | Value::Bool(_) | Value::Number(_) | Value::String(_) => {
            Some(value.to_string())
        }
    }
}

fn indent(depth: usize) -> usize {
    2 * depth
}

fn new_line(at: usize, depth: usize, text: &mut String) {
    text.push_str(if at == 0 { "\n" } else { ",\n" });
    text.push_str(&" ".repeat(indent(depth)));
}

fn close(bracket: char, depth: usize, text: &mut String) {
    text.push('\n');
    text.push_str(&" ".repeat(indent(depth)));
    text.push(bracket);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_printed_reads_back_as_the_same_value() {
        let text =
            r#"{"a": [], "b": {"c": {"d": [1.5, -0.0, "x\ny"], "e": {}}}, "f": [[1, [2]], null]}"#;
        let value: Value = serde_json::from_str(text).unwrap();
        let printed = print(&value);
        assert_eq!(serde_json::from_str::<Value>(&printed).unwrap(), value);
        assert!(printed.contains(r#""d": [1.5, -0.0, "x\ny"]"#), "{printed}");
    }
}
