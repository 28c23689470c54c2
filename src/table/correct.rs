//! Recorded corrections: one value of a table becomes another.

use crate::table::Table;
use crate::table::column::{Censored, Column, Numbers, Value, Values};

/// Sets the value of a sample in a column, if the value that is there is the expected one.
///
/// The texts are numbers with a decimal point, `<0.05` or `>12` for values only known by a limit,
/// or blank for a missing value; in a column of labels they are the labels themselves.
///
/// # Errors
/// The text of the value that is there, when it is not the expected one or the new one is no
/// value of such a column.
pub fn set(
    table: &mut Table,
    row: usize,
    column: usize,
    from: &str,
    to: &str,
) -> Result<(), String> {
    let found = shown(table.columns()[column].value(row));
    if !same(&found, from) {
        return Err(found);
    }
    let changed = with(&table.columns()[column], row, to.trim()).ok_or(found)?;
    table.replace(column, changed);
    Ok(())
}

/// The text of a value as a correction names it.
#[must_use]
pub fn shown(value: Value<'_>) -> String {
    match value {
        Value::Number(number) => number.to_string(),
        Value::Text(text) => text.to_owned(),
        Value::Missing => String::new(),
        Value::BelowLimit(limit) => format!("<{limit}"),
        Value::AboveLimit(limit) => format!(">{limit}"),
    }
}

fn same(found: &str, expected: &str) -> bool {
    let expected = expected.trim();
    found == expected
        || matches!((found.parse::<f64>(), expected.parse::<f64>()), (Ok(a), Ok(b)) if a == b)
}

fn with(column: &Column, row: usize, to: &str) -> Option<Column> {
    let values = match &column.values {
        Values::Texts(texts) => {
            let mut texts = texts.clone();
            texts[row] = (!to.is_empty()).then(|| to.to_owned());
            Values::Texts(texts)
        }
        Values::Numbers(numbers) => {
            let mut values = numbers.values().to_vec();
            let mut censored = numbers.censored().to_vec();
            censored.retain(|(at, _)| *at as usize != row);
            values[row] = f64::NAN;
            let number = |text: &str| text.trim().parse::<f64>().ok().filter(|n| n.is_finite());
            if let Some(limit) = to.strip_prefix('<') {
                censored.push((u32::try_from(row).ok()?, Censored::Below(number(limit)?)));
            } else if let Some(limit) = to.strip_prefix('>') {
                censored.push((u32::try_from(row).ok()?, Censored::Above(number(limit)?)));
            } else if !to.is_empty() {
                values[row] = number(to)?;
            }
            Values::Numbers(Numbers::with_censored(values, censored))
        }
    };
    Some(Column {
        values,
        ..column.clone()
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn table() -> Table {
        Table::new(vec![Column::numbers("dose", vec![1.5, f64::NAN, 3.0])])
    }

    #[test]
    fn a_value_is_corrected_only_if_the_expected_one_is_there() {
        let mut table = table();
        assert_eq!(set(&mut table, 0, 0, "1.50", "2"), Ok(()));
        assert_eq!(table.columns()[0].value(0), Value::Number(2.0));
        assert_eq!(set(&mut table, 0, 0, "1.5", "4"), Err("2".to_owned()));
    }

    #[test]
    fn missing_values_and_limits_can_be_corrected_to() {
        let mut table = table();
        assert_eq!(set(&mut table, 1, 0, "", "<0.05"), Ok(()));
        assert_eq!(table.columns()[0].value(1), Value::BelowLimit(0.05));
        assert_eq!(set(&mut table, 2, 0, "3", ""), Ok(()));
        assert_eq!(table.columns()[0].value(2), Value::Missing);
        assert_eq!(set(&mut table, 2, 0, "", "three"), Err(String::new()));
    }
}
