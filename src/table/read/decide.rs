//! Whether a column holds numbers or labels.

use crate::table::read::assemble::Manner;
use crate::table::read::cell::{Sort, is_exponent, sort, trimmed};
use crate::table::read::raw::{Plan, Raw, Stored};
use std::collections::HashSet;

/// Names as a set to look them up in.
pub fn set(names: &[String]) -> HashSet<&str> {
    names.iter().map(String::as_str).collect()
}

/// How many values of a column are of which sort.
#[derive(Clone, Copy, Debug, Default)]
struct Census {
    labels: usize,
    zeros: usize,
    quantities: usize,
}

impl Census {
    fn add(&mut self, sort: Sort) {
        match sort {
            Sort::Text | Sort::Date => self.labels += 1,
            Sort::LeadingZeros(_) => self.zeros += 1,
            Sort::Number(_)
            | Sort::LongDigits(_)
            | Sort::Below(_)
            | Sort::Above(_)
            | Sort::OtherMark
            | Sort::Grouped(_)
            | Sort::WithUnit
            | Sort::TooLarge => self.quantities += 1,
            Sort::Blank | Sort::MissingWord | Sort::Error => {}
        }
    }

    fn of_odd(raw: &Raw<'_>) -> Self {
        let mut census = Self::default();
        for odd in &raw.odd {
            match odd.stored {
                Stored::Date | Stored::Truth => census.labels += 1,
                Stored::Error => {}
                Stored::Text | Stored::Number => census.add(odd.sort),
            }
        }
        census
    }

    fn are_labels(self, is_first: bool) -> bool {
        let labels = self.labels + self.zeros;
        let all = labels + self.quantities;
        // One number in five with leading zeros is a habit, fewer are slips of the pen. In the
        // first column names stand more often than numbers, so that a tenth of labels suffices.
        labels > self.quantities
            || (self.zeros > 0 && self.zeros * 5 >= all)
            || (is_first && self.labels > 0 && self.labels * 10 >= all)
    }
}

/// Whether a column that was read as numbers holds labels.
pub fn is_labels(raw: &Raw<'_>, is_first: bool) -> bool {
    if raw.plan == Plan::SurelyNumbers {
        return false;
    }
    let mut census = Census::of_odd(raw);
    if census.labels + census.zeros == 0 {
        return false;
    }
    census.quantities += raw.values.iter().filter(|value| !value.is_nan()).count();
    census.are_labels(is_first)
}

/// Settles a column that kept its texts: turns it into numbers if that is what it holds.
///
/// Returns whether it is one of labels.
pub fn settle(raw: &mut Raw<'_>, n_rows: usize, is_first: bool, manner: &Manner<'_>) -> bool {
    if !raw.plan.keeps_text() {
        return false;
    }
    if raw.plan == Plan::Labels {
        return true;
    }
    for odd in &mut raw.odd {
        if odd.stored == Stored::Text {
            odd.sort = sort(&odd.text, manner.mark, manner.grouping);
        }
    }
    let census = Census::of_odd(raw);
    let are_labels = if raw.plan == Plan::Names {
        // Long digits are whole by what they are.
        let is_whole = |sort: Sort| sort.plain().is_none_or(|number| number.fract() == 0.0);
        census.labels + census.zeros > 0
            || raw.odd.iter().all(|odd| is_whole(odd.sort))
            || raw.odd.iter().any(|odd| is_exponent(trimmed(&odd.text)))
    } else {
        census.are_labels(is_first)
    };
    if are_labels {
        return true;
    }
    raw.values = vec![f64::NAN; n_rows];
    let values = &mut raw.values;
    raw.odd.retain(|odd| {
        let is_value = match odd.stored {
            // A workbook's text that is a number stays, to be reported.
            Stored::Text => !manner.is_typed,
            Stored::Number => true,
            Stored::Date | Stored::Truth | Stored::Error => false,
        };
        match odd.sort.plain().filter(|_| is_value) {
            Some(number) => {
                values[odd.row as usize] = number;
                false
            }
            None => true,
        }
    });
    raw.plan = Plan::Numbers;
    false
}
