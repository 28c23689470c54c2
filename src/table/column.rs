//! Column: a name, a unit, and one value for every sample.

/// The state of a measured value, from import to export.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Value<'a> {
    /// A number as measured.
    Number(f64),
    /// A label, exactly as written.
    Text(&'a str),
    /// Nothing is known.
    Missing,
    /// Only known to be smaller than this limit.
    BelowLimit(f64),
    /// Only known to be larger than this limit.
    AboveLimit(f64),
}

/// What is known of a value that is not a plain number.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Censored {
    /// Smaller than the limit.
    Below(f64),
    /// Larger than the limit.
    Above(f64),
}

/// Measured values: plain numbers in a row, the few others beside them.
#[derive(Clone, Debug, Default)]
pub struct Numbers {
    values: Vec<f64>,
    censored: Vec<(u32, Censored)>,
}

impl Numbers {
    /// Values of which the ones that are not finite are missing.
    #[must_use]
    pub fn new(mut values: Vec<f64>) -> Self {
        for value in &mut values {
            if !value.is_finite() {
                *value = f64::NAN;
            }
        }
        Self {
            values,
            censored: Vec::new(),
        }
    }

    /// Values (NaN where there is no plain number) of which some rows are only known to lie
    /// below or above a limit. Rows that do not exist are left out.
    #[must_use]
    pub fn with_censored(values: Vec<f64>, mut censored: Vec<(u32, Censored)>) -> Self {
        let mut numbers = Self::new(values);
        censored.retain(|(row, _)| (*row as usize) < numbers.values.len());
        censored.sort_by_key(|(row, _)| *row);
        censored.dedup_by_key(|(row, _)| *row);
        for (row, _) in &censored {
            numbers.values[*row as usize] = f64::NAN;
        }
        numbers.censored = censored;
        numbers
    }

    /// The plain numbers; NaN where a value is missing or only known by a limit.
    #[must_use]
    pub fn values(&self) -> &[f64] {
        &self.values
    }

    /// The rows whose value is only known by a limit, in order.
    #[must_use]
    pub fn censored(&self) -> &[(u32, Censored)] {
        &self.censored
    }

    /// The state of one value.
    #[must_use]
    pub fn value(&self, row: usize) -> Value<'static> {
        let number = self.values[row];
        if !number.is_nan() {
            return Value::Number(number);
        }
        match self
            .censored
            .binary_search_by_key(&row, |(row, _)| *row as usize)
        {
            Ok(at) => match self.censored[at].1 {
                Censored::Below(limit) => Value::BelowLimit(limit),
                Censored::Above(limit) => Value::AboveLimit(limit),
            },
            Err(_) => Value::Missing,
        }
    }

    fn take(&self, rows: &[usize]) -> Self {
        let values = rows.iter().map(|&row| self.values[row]).collect();
        let censored = if self.censored.is_empty() {
            Vec::new()
        } else {
            rows.iter()
                .enumerate()
                .filter_map(|(at, row)| {
                    self.censored
                        .binary_search_by_key(row, |(row, _)| *row as usize)
                        .ok()
                        .map(|found| (at as u32, self.censored[found].1))
                })
                .collect()
        };
        Self { values, censored }
    }
}

/// The values of a column: measured, or labels.
#[derive(Clone, Debug)]
pub enum Values {
    /// Measured values.
    Numbers(Numbers),
    /// Labels as written; `None` where there is none.
    Texts(Vec<Option<String>>),
}

/// A column of a table.
#[derive(Clone, Debug)]
pub struct Column {
    /// The name, unlike every other in the same table.
    pub name: String,
    /// The unit, where the file has a row of units.
    pub unit: Option<String>,
    /// One value for every sample.
    pub values: Values,
}

impl Column {
    /// A column of measured values.
    #[must_use]
    pub fn numbers(name: &str, values: Vec<f64>) -> Self {
        Self {
            name: name.to_owned(),
            unit: None,
            values: Values::Numbers(Numbers::new(values)),
        }
    }

    /// A column of labels.
    #[must_use]
    pub fn texts<T: Into<String>>(name: &str, values: Vec<Option<T>>) -> Self {
        Self {
            name: name.to_owned(),
            unit: None,
            values: Values::Texts(
                values
                    .into_iter()
                    .map(|text| text.map(Into::into))
                    .collect(),
            ),
        }
    }

    /// The number of samples.
    #[must_use]
    pub fn len(&self) -> usize {
        match &self.values {
            Values::Numbers(numbers) => numbers.values.len(),
            Values::Texts(texts) => texts.len(),
        }
    }

    /// Whether there are no samples.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// Whether the values are measured.
    #[must_use]
    pub fn is_numeric(&self) -> bool {
        matches!(self.values, Values::Numbers(_))
    }

    /// The measured values, if they are.
    #[must_use]
    pub fn as_numbers(&self) -> Option<&Numbers> {
        match &self.values {
            Values::Numbers(numbers) => Some(numbers),
            Values::Texts(_) => None,
        }
    }

    /// The state of one value.
    #[must_use]
    pub fn value(&self, row: usize) -> Value<'_> {
        match &self.values {
            Values::Numbers(numbers) => numbers.value(row),
            Values::Texts(texts) => texts[row].as_deref().map_or(Value::Missing, Value::Text),
        }
    }

    /// The value as a label: for names, units, batches and joining, whatever the column holds.
    ///
    /// A number is written with the digits that read back as the same number. Limits are written
    /// as “<0.05” and “>12”.
    #[must_use]
    pub fn label(&self, row: usize) -> Option<String> {
        match self.value(row) {
            Value::Number(number) => Some(plain(number)),
            Value::Text(text) => Some(text.to_owned()),
            Value::Missing => None,
            Value::BelowLimit(limit) => Some(format!("<{}", plain(limit))),
            Value::AboveLimit(limit) => Some(format!(">{}", plain(limit))),
        }
    }

    /// All values as labels.
    #[must_use]
    pub fn labels(&self) -> Vec<Option<String>> {
        (0..self.len()).map(|row| self.label(row)).collect()
    }

    /// The rows in the given order; rows may come more than once or not at all.
    #[must_use]
    pub fn take(&self, rows: &[usize]) -> Self {
        Self {
            name: self.name.clone(),
            unit: self.unit.clone(),
            values: match &self.values {
                Values::Numbers(numbers) => Values::Numbers(numbers.take(rows)),
                Values::Texts(texts) => {
                    Values::Texts(rows.iter().map(|&row| texts[row].clone()).collect())
                }
            },
        }
    }
}

/// The shortest digits that read back as the same number: a label, not a number shown to people.
pub(crate) fn plain(number: f64) -> String {
    let size = number.abs();
    if size != 0.0 && !(1e-4..1e16).contains(&size) {
        format!("{number:e}")
    } else {
        format!("{}", number + 0.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_value_has_one_of_four_states_and_keeps_it_when_rows_are_chosen() {
        let mut column = Column::numbers("iron", vec![1.5, f64::NAN, 0.0, 9.0]);
        column.values = Values::Numbers(Numbers::with_censored(
            vec![1.5, f64::NAN, 0.0, 9.0],
            vec![(2, Censored::Below(0.05)), (3, Censored::Above(8.0))],
        ));
        let column = column.take(&[3, 2, 1, 0, 2]);
        let states: Vec<_> = (0..5).map(|row| column.value(row)).collect();
        assert_eq!(
            states,
            [
                Value::AboveLimit(8.0),
                Value::BelowLimit(0.05),
                Value::Missing,
                Value::Number(1.5),
                Value::BelowLimit(0.05),
            ]
        );
    }

    #[test]
    fn an_infinity_is_no_measured_value() {
        let column = Column::numbers("x", vec![f64::INFINITY, 1.0]);
        assert_eq!(column.value(0), Value::Missing);
    }

    #[test]
    fn labels_of_numbers_read_back_as_the_same_number() {
        let numbers = [7.0, 0.1, 1e-7, 123_456_789.0, 1e22, -0.0];
        let column = Column::numbers("id", numbers.to_vec());
        let labels: Vec<_> = column.labels().into_iter().flatten().collect();
        assert_eq!(labels, ["7", "0.1", "1e-7", "123456789", "1e22", "0"]);
        for (label, number) in labels.iter().zip(numbers) {
            assert_eq!(label.parse::<f64>(), Ok(number));
        }
    }
}
