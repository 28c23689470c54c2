//! A setting of a Data cell, said in one line: `words for missing values += -9`.
//!
//! The command line and the import report say settings in this way; every line goes through the
//! door of the slots. `SETTING = VALUE` puts something there, `SETTING += VALUE` adds to a list.
//! Settings are called what their slots are called. Those of a table stand behind its file's
//! name and a colon (`lab.csv: decimal mark = comma`); without one the first table is meant.
//! Members of a list are parted by a semicolon and a blank, ends of a range by `…` or `...`. An
//! exclusion ends with its reason: `exclusions += K-12; K-13 because the probe slipped`.

use crate::base::problem::Problem;
use crate::study::settings::data::{ColumnRange, Data, Exclusion, OutcomeSeen};
use crate::study::settings::slot::Value;
use crate::study::settings::slot::data::DataSlot;
use std::sync::Arc;

/// What stands between the members of a list.
pub const BETWEEN: &str = "; ";

/// What stands before the reason of an exclusion.
pub const BECAUSE: &str = " because ";

/// The settings with one of them changed as the line says.
///
/// # Errors
/// A [`Problem`] that says which settings there are, or what may stand there.
pub fn said(data: &Data, line: &str) -> Result<Data, Problem> {
    let (name, does_add, words) = parts(line)?;
    let slot = slot(data, name)?;
    let before = slot
        .get(data)
        .expect("a place that is listed has something in it");
    let value = value(slot, before, does_add, words, line)?;
    slot.set(data, value)
}

/// The name of the setting, whether something is added, and what.
fn parts(line: &str) -> Result<(&str, bool, &str), Problem> {
    let (name, words) = line.split_once('=').ok_or_else(|| {
        Problem::new(
            "setting-not-said",
            format!("“{line}” does not say what a setting is to be."),
        )
        .mend("Write SETTING = VALUE, or SETTING += VALUE to add to a list.")
    })?;
    let (name, does_add) = match name.trim_end().strip_suffix('+') {
        Some(name) => (name, true),
        None => (name, false),
    };
    Ok((name.trim(), does_add, words.trim()))
}

fn slot(data: &Data, name: &str) -> Result<DataSlot, Problem> {
    let of_file = data.tables.iter().enumerate().find_map(|(at, table)| {
        let rest = name.strip_prefix(table.file.as_str())?;
        Some((at, rest.strip_prefix(':')?.trim()))
    });
    let (table, name) = of_file.unwrap_or((0, name));
    let slots = || DataSlot::of(data).into_iter();
    let is_meant = |slot: &DataSlot| match slot {
        DataSlot::Table(at, inner) => *at == table && inner.label() == name,
        DataSlot::NextTable => false,
        other => of_file.is_none() && other.label() == name,
    };
    slots().find(is_meant).ok_or_else(|| {
        let mut labels: Vec<&str> = slots().map(DataSlot::label).collect();
        labels.sort_unstable();
        labels.dedup();
        Problem::new(
            "no-such-setting",
            format!("There is no setting “{name}” here."),
        )
        .mend(format!("The settings are: {}.", labels.join(", ")))
    })
}

fn value(
    slot: DataSlot,
    before: Value,
    does_add: bool,
    words: &str,
    line: &str,
) -> Result<Value, Problem> {
    let members = || {
        words
            .split(BETWEEN)
            .map(|word| word.trim().to_owned())
            .filter(|word| !word.is_empty())
    };
    let is_list = match &before {
        Value::Texts(_) | Value::Columns(_) | Value::Exclusions(_) => true,
        Value::Nothing
        | Value::Number(_)
        | Value::Whole(_)
        | Value::Choice(_)
        | Value::Text(_)
        | Value::Column(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Prose(_) => false,
    };
    if does_add && !is_list {
        return Err(Problem::new(
            "setting-is-no-list",
            format!("Nothing can be added to the {}.", slot.label()),
        )
        .mend("Write = in place of +=."));
    }
    Ok(match before {
        Value::Texts(mut list) => {
            if !does_add {
                list.clear();
            }
            list.extend(members());
            Value::Texts(list)
        }
        Value::Columns(mut list) => {
            if !does_add {
                list.clear();
            }
            list.extend(members().map(|range| ends(&range)));
            Value::Columns(list)
        }
        Value::Exclusions(list) => Value::Exclusions(excluded(
            if does_add { list.to_vec() } else { Vec::new() },
            words,
            line,
        )?),
        Value::Column(_) => Value::Column((!words.is_empty()).then(|| words.to_owned())),
        Value::Nothing
        | Value::Number(_)
        | Value::Whole(_)
        | Value::Choice(_)
        | Value::Text(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Prose(_) => {
            if words.is_empty() {
                Value::Nothing
            } else if slot.choices().is_empty() {
                Value::Text(words.to_owned())
            } else {
                Value::choice(words)
            }
        }
    })
}

/// “900 nm … 1700 nm”, or one name.
fn ends(range: &str) -> ColumnRange {
    let (first, last) = range
        .split_once('…')
        .or_else(|| range.split_once("..."))
        .unwrap_or((range, range));
    ColumnRange {
        first: first.trim().to_owned(),
        last: last.trim().to_owned(),
    }
}

fn excluded(
    mut list: Vec<Exclusion>,
    words: &str,
    line: &str,
) -> Result<Arc<Vec<Exclusion>>, Problem> {
    if words.is_empty() {
        return Ok(Arc::new(list));
    }
    let (names, reason) = words.rsplit_once(BECAUSE).ok_or_else(|| {
        Problem::new(
            "act-without-reason",
            format!("“{line}” gives no reason for the exclusion."),
        )
        .mend("End with: because REASON")
    })?;
    for sample in names.split(BETWEEN).map(str::trim) {
        if !sample.is_empty() && !list.iter().any(|known| known.sample == sample) {
            list.push(Exclusion {
                sample: sample.to_owned(),
                reason: reason.trim().to_owned(),
                outcome: OutcomeSeen::NotSaid,
            });
        }
    }
    Ok(Arc::new(list))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::base::layout::{DecimalMark, Orientation};
    use crate::study::settings::spread;

    fn after(line: &str) -> Data {
        said(&spread::cellar(), line).unwrap_or_else(|problem| panic!("{line}: {problem}"))
    }

    #[test]
    fn a_line_sets_what_it_names_and_nothing_else() {
        let before = spread::cellar();
        let mut wanted = before.clone();
        wanted.tables[0].missing_codes.push("999".to_owned());
        assert_eq!(after("words for missing values += 999"), wanted);
        let mut wanted = before.clone();
        wanted.tables[1].orientation = Some(Orientation::SamplesInColumns);
        assert_eq!(
            after("cellar-lab.xlsx: place of the samples = columns"),
            wanted
        );
        let mut wanted = before.clone();
        wanted.tables[0].decimal = Some(DecimalMark::Point);
        assert_eq!(after("decimal mark=point"), wanted);
        let mut wanted = before.clone();
        wanted.ignored = vec!["salt_calc".to_owned(), "MAR-2 a".to_owned()];
        assert_eq!(after("columns left out += salt_calc; MAR-2 a"), wanted);
        let mut wanted = before.clone();
        wanted.predictors = vec![ends("900 nm … 950 nm"), ends("1000 nm")];
        assert_eq!(after("predictors = 900 nm ... 950 nm; 1000 nm"), wanted);
        let mut wanted = before;
        wanted.unit = None;
        assert_eq!(after("unit ="), wanted);
    }

    #[test]
    fn an_exclusion_needs_a_reason() {
        let data = after("exclusions += W001-a; W002-b because the probe slipped");
        let names: Vec<_> = data.exclusions.iter().map(|e| e.sample.as_str()).collect();
        assert_eq!(names, ["W001-a", "W002-b"]);
        assert_eq!(data.exclusions[0].reason, "the probe slipped");
        let problem = said(&spread::cellar(), "exclusions += W001-a").unwrap_err();
        assert_eq!(problem.code.0, "act-without-reason");
    }

    #[test]
    fn what_cannot_be_set_is_answered_with_what_can() {
        let answer = |line: &str| said(&spread::cellar(), line).unwrap_err();
        assert!(answer("flavour = 3").mend[0].contains("columns left out"));
        assert_eq!(answer("unit += cave").code.0, "setting-is-no-list");
        assert!(answer("decimal mark = dot").found.contains("point"));
        assert_eq!(answer("unit").code.0, "setting-not-said");
    }
}
