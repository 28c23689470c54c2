//! Reads a value as what a slot needs, or says what may stand there.

use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::study::link::Link;
use crate::study::settings::data::ColumnRange;
use crate::study::settings::slot::{Bounds, Value};

/// How a value reads in a problem: what was typed, in quotes.
fn shown(value: &Value) -> String {
    match value {
        Value::Nothing => "nothing".to_owned(),
        Value::Number(number) => format!("“{}”", number::text(number.get(), Precision::Full)),
        Value::Whole(whole) => format!("“{whole}”"),
        Value::Choice(name) | Value::Text(name) => format!("“{name}”"),
        Value::Column(Some(name)) => format!("the column “{name}”"),
        Value::Column(None) => "no column".to_owned(),
        Value::Columns(_) => "a range of columns".to_owned(),
        Value::Cell(_) => "a cell".to_owned(),
        Value::File { name, .. } => format!("the file “{name}”"),
        Value::Steps(_) => "a list of steps".to_owned(),
        Value::Texts(_) => "a list of words".to_owned(),
        Value::Numbers(_) => "a list of numbers".to_owned(),
        Value::Corrections(_) => "a list of corrections".to_owned(),
        Value::Exclusions(_) => "a list of exclusions".to_owned(),
        Value::Prose(_) => "a text".to_owned(),
    }
}

/// Whether it was typed, for the verb of a problem.
fn given(value: &Value) -> String {
    let verb = match value {
        Value::Number(_) | Value::Whole(_) | Value::Text(_) | Value::Choice(_) => "was typed",
        Value::Nothing
        | Value::Column(_)
        | Value::Columns(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => "was given",
    };
    format!("{} {verb}", shown(value))
}

/// The problem of a value of the wrong sort.
pub fn wrong_sort(label: &str, needed: &str, value: &Value) -> Problem {
    Problem::new(
        "setting-of-another-sort",
        format!("The {label} must be {needed}; {}.", given(value)),
    )
}

/// The problem of a slot that the settings do not have at present.
pub fn absent(label: &str, because: &str) -> Problem {
    Problem::new(
        "setting-does-not-apply",
        format!("There is no {label} to set, because {because}."),
    )
}

/// The numbers that may stand in a slot, in words.
fn range(bounds: Bounds) -> String {
    let text = |value: f64| number::text(value, Precision::Full);
    match bounds {
        Bounds::Whole { least, most } => format!(
            "a whole number from {} to {}",
            number::text(least as f64, Precision::Whole),
            number::text(most as f64, Precision::Whole)
        ),
        Bounds::Any { least, most } if most.is_infinite() => format!("{} or more", text(least)),
        Bounds::Any { least, most } => format!("a number from {} to {}", text(least), text(most)),
    }
}

fn outside(label: &str, bounds: Bounds, value: &Value) -> Problem {
    Problem::new(
        "setting-out-of-range",
        format!("The {label} must be {}; {}.", range(bounds), given(value)),
    )
}

/// Reads a typed number. A comma may stand before decimals, a typographic minus before the number.
fn parse(typed: &str) -> Option<f64> {
    let clean = typed.trim().replace('−', "-");
    // One comma and no point is a decimal comma; “20,000” is refused rather than read as 20.
    let clean = match (clean.matches(',').count(), clean.contains('.')) {
        (0, _) => clean,
        (1, false) => {
            let (whole, decimals) = clean.split_once(',').unwrap_or((&clean, ""));
            if decimals.len() == 3 && !whole.trim_start_matches('-').starts_with('0') {
                return None;
            }
            clean.replace(',', ".")
        }
        (_, _) => return None,
    };
    clean
        .parse::<f64>()
        .ok()
        .filter(|number| number.is_finite())
}

/// A whole number within bounds.
pub fn whole(label: &str, bounds: Bounds, value: &Value) -> Result<u64, Problem> {
    let Bounds::Whole { least, most } = bounds else {
        unreachable!("a slot for whole numbers has whole bounds")
    };
    let number = match value {
        Value::Whole(whole) => Some(*whole),
        Value::Number(number) => whole_of(number.get()),
        Value::Text(typed) => {
            let plain = typed.trim();
            plain
                .parse::<u64>()
                .ok()
                .or_else(|| parse(plain).and_then(whole_of))
        }
        Value::Nothing
        | Value::Choice(_)
        | Value::Column(_)
        | Value::Columns(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => None,
    };
    number
        .filter(|number| (least..=most).contains(number))
        .ok_or_else(|| outside(label, bounds, value))
}

fn whole_of(number: f64) -> Option<u64> {
    // Up to 2^53 every whole number has a float of its own.
    let lawful = number.fract() == 0.0 && (0.0..=9_007_199_254_740_992.0).contains(&number);
    lawful.then_some(number as u64)
}

/// A whole number within bounds that fits a `u32`, as all bounds of counts do.
pub fn count(label: &str, bounds: Bounds, value: &Value) -> Result<u32, Problem> {
    let number = whole(label, bounds, value)?;
    u32::try_from(number).map_err(|_| outside(label, bounds, value))
}

/// A number within bounds.
pub fn number(label: &str, bounds: Bounds, value: &Value) -> Result<Real, Problem> {
    let number = match value {
        Value::Number(number) => Some(*number),
        Value::Whole(whole) => Real::new(*whole as f64),
        Value::Text(typed) => parse(typed).and_then(Real::new),
        Value::Nothing
        | Value::Choice(_)
        | Value::Column(_)
        | Value::Columns(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => None,
    };
    number
        .filter(|number| within(bounds, number.get()))
        .ok_or_else(|| outside(label, bounds, value))
}

fn within(bounds: Bounds, number: f64) -> bool {
    match bounds {
        Bounds::Whole { least, most } => {
            whole_of(number).is_some_and(|whole| (least..=most).contains(&whole))
        }
        Bounds::Any { least, most } => (least..=most).contains(&number),
    }
}

/// A number within bounds, or nothing.
pub fn optional_number(
    label: &str,
    bounds: Bounds,
    value: &Value,
) -> Result<Option<Real>, Problem> {
    if is_nothing(value) {
        Ok(None)
    } else {
        number(label, bounds, value).map(Some)
    }
}

/// Several numbers within bounds, rising, each once, at least one.
pub fn numbers(label: &str, bounds: Bounds, value: &Value) -> Result<Vec<Real>, Problem> {
    let mut list = ordered(label, bounds, value)?;
    list.sort();
    list.dedup();
    Ok(list)
}

/// Several numbers within bounds, in the order given, at least one.
pub fn ordered(label: &str, bounds: Bounds, value: &Value) -> Result<Vec<Real>, Problem> {
    let list: Vec<Real> = match value {
        Value::Numbers(list) => list.clone(),
        Value::Number(number) => vec![*number],
        Value::Text(typed) => typed
            .split([';', ' ', '\t'])
            .map(|part| part.trim().trim_end_matches(','))
            .filter(|part| !part.is_empty())
            .map(|part| parse(part).and_then(Real::new))
            .collect::<Option<Vec<Real>>>()
            .unwrap_or_default(),
        Value::Nothing
        | Value::Whole(_)
        | Value::Choice(_)
        | Value::Column(_)
        | Value::Columns(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => Vec::new(),
    };
    if list.is_empty() {
        return Err(outside(label, bounds, value));
    }
    if let Some(strange) = list.iter().find(|number| !within(bounds, number.get())) {
        return Err(outside(label, bounds, &Value::Number(*strange)));
    }
    Ok(list)
}

/// Numbers in the order in which they are given; none where nothing is.
pub fn series(label: &str, value: &Value) -> Result<Vec<Real>, Problem> {
    let wrong = || {
        wrong_sort(label, "numbers", value)
            .mend("Separate the numbers by blanks or semicolons, or by commas and a blank.")
    };
    match value {
        Value::Numbers(list) => Ok(list.clone()),
        Value::Number(number) => Ok(vec![*number]),
        Value::Whole(whole) => Real::new(*whole as f64)
            .map(|number| vec![number])
            .ok_or_else(wrong),
        Value::Nothing => Ok(Vec::new()),
        Value::Text(typed) => typed
            .split(|c: char| c == ';' || c.is_whitespace())
            .map(|part| part.trim().trim_end_matches(','))
            .filter(|part| !part.is_empty())
            .map(|part| parse(part).and_then(Real::new))
            .collect::<Option<Vec<Real>>>()
            .ok_or_else(wrong),
        Value::Choice(_)
        | Value::Column(_)
        | Value::Columns(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => Err(wrong()),
    }
}

/// The stable names of a table of choices.
pub const fn names<T: Copy, const N: usize>(table: &[(&'static str, T); N]) -> [&'static str; N] {
    let mut names = [""; N];
    let mut at = 0;
    while at < N {
        names[at] = table[at].0;
        at += 1;
    }
    names
}

/// One of a table of choices, by its stable name.
pub fn pick<T: Copy>(
    label: &str,
    table: &'static [(&'static str, T)],
    value: &Value,
) -> Result<T, Problem> {
    let wanted = match value {
        Value::Choice(name) | Value::Text(name) => Some(name.trim().to_lowercase()),
        Value::Nothing
        | Value::Number(_)
        | Value::Whole(_)
        | Value::Column(_)
        | Value::Columns(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => None,
    };
    table
        .iter()
        .find(|(name, _)| wanted.as_deref() == Some(*name))
        .map(|(_, choice)| *choice)
        .ok_or_else(|| {
            let names: Vec<&str> = table.iter().map(|(name, _)| *name).collect();
            Problem::new(
                "setting-unknown-choice",
                format!(
                    "The {label} must be one of {}; {}.",
                    names.join(", "),
                    given(value)
                ),
            )
        })
}

/// The value that stands for one of a table of choices.
pub fn named<T: Copy + PartialEq>(table: &'static [(&'static str, T)], choice: T) -> Value {
    let name = table
        .iter()
        .find(|(_, known)| *known == choice)
        .map(|(name, _)| *name)
        .expect("every choice has a name in its table");
    Value::choice(name)
}

/// Words, or nothing.
pub fn optional_text(label: &str, value: &Value) -> Result<Option<String>, Problem> {
    match value {
        Value::Text(words) | Value::Choice(words) => {
            let words = words.trim();
            Ok((!words.is_empty()).then(|| words.to_owned()))
        }
        Value::Nothing | Value::Column(None) => Ok(None),
        Value::Column(Some(name)) => Ok(Some(name.clone())),
        Value::Number(number) => Ok(Some(number::text(number.get(), Precision::Full))),
        Value::Whole(whole) => Ok(Some(whole.to_string())),
        Value::Columns(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => Err(wrong_sort(label, "words", value)),
    }
}

/// A column's name, or none.
pub fn optional_column(label: &str, value: &Value) -> Result<Option<String>, Problem> {
    match value {
        // A column's name is kept letter by letter, with its blanks.
        Value::Column(Some(name)) | Value::Text(name) if !name.trim().is_empty() => {
            Ok(Some(name.clone()))
        }
        Value::Column(_) | Value::Text(_) | Value::Nothing => Ok(None),
        Value::Number(_)
        | Value::Whole(_)
        | Value::Choice(_)
        | Value::Columns(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => Err(wrong_sort(label, "a column", value)),
    }
}

/// A column's name.
pub fn column(label: &str, value: &Value) -> Result<String, Problem> {
    optional_column(label, value)?.ok_or_else(|| wrong_sort(label, "a column", value))
}

/// Ranges of columns.
pub fn columns(label: &str, value: &Value) -> Result<Vec<ColumnRange>, Problem> {
    match value {
        Value::Columns(ranges) => Ok(ranges.clone()),
        Value::Nothing => Ok(Vec::new()),
        Value::Texts(names) => Ok(names
            .iter()
            .map(|name| ColumnRange {
                first: name.clone(),
                last: name.clone(),
            })
            .collect()),
        Value::Number(_)
        | Value::Whole(_)
        | Value::Choice(_)
        | Value::Text(_)
        | Value::Column(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => Err(wrong_sort(label, "ranges of columns", value)),
    }
}

/// A list of words: blank ones left out, each once, in the order given.
pub fn texts(label: &str, value: &Value) -> Result<Vec<String>, Problem> {
    let given: Vec<String> = match value {
        Value::Texts(words) => words.clone(),
        Value::Text(word) => vec![word.clone()],
        Value::Nothing => Vec::new(),
        Value::Number(_)
        | Value::Whole(_)
        | Value::Choice(_)
        | Value::Column(_)
        | Value::Columns(_)
        | Value::Cell(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => return Err(wrong_sort(label, "a list of words", value)),
    };
    let mut list: Vec<String> = Vec::new();
    for word in given {
        if !word.trim().is_empty() && !list.contains(&word) {
            list.push(word);
        }
    }
    Ok(list)
}

/// A cell, or none.
pub fn cell(label: &str, value: &Value) -> Result<Link, Problem> {
    match value {
        Value::Cell(id) => Ok(Link(*id)),
        Value::Nothing => Ok(Link::open()),
        Value::Number(_)
        | Value::Whole(_)
        | Value::Choice(_)
        | Value::Text(_)
        | Value::Column(_)
        | Value::Columns(_)
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => Err(wrong_sort(label, "a cell", value)),
    }
}

/// Whether nothing was given: nothing at all, no column, or blank words.
pub fn is_nothing(value: &Value) -> bool {
    match value {
        Value::Nothing | Value::Column(None) | Value::Cell(None) => true,
        Value::Text(words) => words.trim().is_empty(),
        Value::Number(_)
        | Value::Whole(_)
        | Value::Choice(_)
        | Value::Column(Some(_))
        | Value::Columns(_)
        | Value::Cell(Some(_))
        | Value::File { .. }
        | Value::Steps(_)
        | Value::Texts(_)
        | Value::Numbers(_)
        | Value::Corrections(_)
        | Value::Exclusions(_)
        | Value::Prose(_) => false,
    }
}
