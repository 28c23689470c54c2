//! Every number of the hand-overs is a value of the study.

use crate::support::{memo, spectra, started, update};
use calamine::{Data, Reader, Xlsx, open_workbook_from_rs};
use std::collections::BTreeSet;
use widefold::eval::fact::{FactValue, FactValues};
use widefold::eval::standing::Standings;
use widefold::eval::start::{Started, Wishes};
use widefold::export::Occasion;
use widefold::export::workbook::workbook;
use widefold::export::write_up::write_up;
use widefold::report::Context;
use widefold::study::ledger::Ledger;

/// Words with digits that are the same in every study: a convention named in a remark, and how
/// many rows of a long table the write-up prints.
const FIXED: [&str; 3] = ["±10 points", "The first 40 of", "95 %"];

/// What a study knows: numbers, and every text of its facts, names and settings.
struct Known {
    numbers: Vec<f64>,
    words: BTreeSet<String>,
}

impl Known {
    fn of(started: &Started, standings: &Standings) -> Self {
        let mut known = Self {
            numbers: Vec::new(),
            words: BTreeSet::new(),
        };
        known.take("vats.csv");
        for cell in started.study.cells() {
            known.take(&cell.title);
            let outcome = standings.get(cell.id).outcome.unwrap();
            for fact in outcome.facts.all() {
                known.take(&fact.name);
                known.take(&fact.unit);
                known.take(&fact.meaning);
                match &fact.value {
                    FactValue::Number(value) => known.numbers.push(*value),
                    FactValue::Text(text) => known.take(text),
                    FactValue::Table(table) => {
                        known.numbers.push(table.n_rows() as f64);
                        for column in &table.columns {
                            known.take(&column.name);
                            known.take(&column.meaning);
                            match &column.values {
                                FactValues::Numbers(numbers) => known.numbers.extend(numbers),
                                FactValues::Texts(texts) => {
                                    texts.iter().for_each(|t| known.take(t));
                                }
                            }
                        }
                    }
                }
            }
            for caveat in &outcome.caveats {
                // What set a caveat off is a value of the study too, in its own digits.
                caveat
                    .trigger
                    .iter()
                    .for_each(|(_, value)| known.take(value));
                known.take(&caveat.threshold);
            }
        }
        known
    }

    fn take(&mut self, text: &str) {
        if text.chars().any(|c| c.is_ascii_digit()) {
            let _ = self.words.insert(text.to_owned());
        }
    }

    /// The numerals of a text that are no value of the study.
    fn strays(&self, text: &str) -> Vec<String> {
        let mut text = text.replace("\\", "");
        FIXED
            .iter()
            .for_each(|fixed| text = text.replace(fixed, " "));
        // Names and texts first, the longest of them first; what is left are numbers alone.
        let mut words: Vec<&String> = self
            .words
            .iter()
            .filter(|w| w.parse::<f64>().is_err())
            .collect();
        words.sort_by_key(|word| std::cmp::Reverse(word.len()));
        words
            .iter()
            .for_each(|word| text = text.replace(word.as_str(), " "));
        numerals(&text)
            .into_iter()
            .filter(|numeral| !self.knows(numeral))
            .collect()
    }

    fn knows(&self, numeral: &str) -> bool {
        if self.words.contains(numeral) {
            return true;
        }
        let percent = numeral.ends_with('%');
        let plain: String = numeral
            .chars()
            .filter(|c| c.is_ascii_digit() || *c == '.')
            .collect();
        let (mantissa, exponent) = match numeral.split_once(" × 10") {
            None => (plain, 0),
            Some((mantissa, exponent)) => {
                let digits: String = mantissa
                    .chars()
                    .filter(|c| *c != ',' && *c != '−')
                    .collect();
                (digits, superscript(exponent))
            }
        };
        let decimals = mantissa.split_once('.').map_or(0, |(_, d)| d.len()) as i32;
        let scale = 10_f64.powi(exponent) / if percent { 100.0 } else { 1.0 };
        let Ok(shown) = mantissa.parse::<f64>() else {
            return false;
        };
        // Half a unit of the last digit shown; numbers of three significant digits above a
        // thousand end in zeros that are not digits.
        let zeros = if decimals == 0 {
            mantissa.len() - mantissa.trim_end_matches('0').len()
        } else {
            0
        };
        let unit = 10_f64.powi(-decimals + zeros as i32) * scale;
        self.numbers
            .iter()
            .any(|value| (value.abs() - shown * scale).abs() <= 0.5001 * unit)
    }
}

fn superscript(text: &str) -> i32 {
    let digits: String = text
        .chars()
        .filter_map(|c| match c {
            '⁻' => Some('-'),
            '¹' => Some('1'),
            '²' => Some('2'),
            '³' => Some('3'),
            '⁰' | '⁴'..='⁹' => char::from_digit(c as u32 - '⁰' as u32, 10),
            _ => None,
        })
        .collect();
    digits.parse().unwrap_or(0)
}

/// The numerals of a text: digits with marks, a power of ten, a percent sign.
fn numerals(text: &str) -> Vec<String> {
    let letters: Vec<char> = text.chars().collect();
    let mut found = Vec::new();
    let mut at = 0;
    while at < letters.len() {
        if !letters[at].is_ascii_digit() {
            at += 1;
            continue;
        }
        let begin = at;
        while at < letters.len()
            && (letters[at].is_ascii_digit()
                || (matches!(letters[at], '.' | ',')
                    && letters.get(at + 1).is_some_and(char::is_ascii_digit)))
        {
            at += 1;
        }
        let rest: String = letters[at..].iter().take(12).collect();
        let mut numeral: String = letters[begin..at].iter().collect();
        if let Some(power) = rest.strip_prefix(" × 10") {
            let exponent: String = power
                .chars()
                .take_while(|c| "⁻⁰¹²³⁴⁵⁶⁷⁸⁹".contains(*c))
                .collect();
            numeral = format!("{numeral} × 10{exponent}");
            at += 5 + exponent.chars().count();
        } else if rest.starts_with(" %") {
            numeral.push('%');
        }
        found.push(numeral);
    }
    found
}

/// The part of a write-up that states values: from the methods to the caveats, without formulas.
fn stating(markdown: &str) -> String {
    let begin = markdown.find("## Methods").unwrap();
    let end = markdown
        .find("## What its authors must still supply")
        .unwrap();
    let mut text = String::new();
    for (at, piece) in markdown[begin..end].split('`').enumerate() {
        if at % 2 == 0 {
            text.push_str(piece);
        }
    }
    // Addresses of figures are made from titles.
    text.lines()
        .filter(|line| !line.starts_with("!["))
        .collect::<Vec<_>>()
        .join("\n")
}

fn evaluated() -> (Started, Standings) {
    let wishes = Wishes {
        outcome: "yield_g".to_owned(),
        unit: Some("vat".to_owned()),
        samples: Some("sample".to_owned()),
        ..Wishes::default()
    };
    let started = started(&[("vats.csv", spectra(48, 60, 3.0, 11))], wishes);
    let (standings, _) = update(&started.study, &started.shelf, &mut memo(), 2);
    (started, standings)
}

#[test]
fn every_numeral_of_both_hand_overs_is_a_value_of_the_study() {
    let (started, standings) = evaluated();
    let ledger = Ledger::default();
    let context = Context {
        study: &started.study,
        standings: &standings,
        ledger: &ledger,
    };
    let occasion = Occasion {
        date: "2026-03-14".to_owned(),
        despite: Some("a test".to_owned()),
    };
    let known = Known::of(&started, &standings);

    let written = write_up(&context, &occasion, "figures").unwrap();
    assert!(!written.figures.is_empty());
    let text = stating(&written.markdown);
    assert!(numerals(&text).len() > 300, "there is something to walk");
    assert_eq!(known.strays(&text), Vec::<String>::new(), "in the write-up");
    // The walker sees a number that nobody published.
    assert_eq!(known.strays("It fell by 77.123 points."), ["77.123"]);

    let bytes = workbook(&context, &occasion).unwrap();
    let mut book: Xlsx<_> = open_workbook_from_rs(std::io::Cursor::new(bytes)).unwrap();
    let mut n_numbers = 0;
    for name in book.sheet_names().to_vec() {
        let range = book.worksheet_range(&name).unwrap();
        for (row, column, cell) in range.cells() {
            match cell {
                Data::Float(value) => {
                    n_numbers += 1;
                    let exact = known.numbers.iter().any(|known| known == value);
                    assert!(exact, "{name}, row {row}, column {column}: {value}");
                }
                Data::String(text)
                    if !matches!(name.as_str(), "Read me" | "Methods" | "Dictionary") =>
                {
                    let strays = known.strays(text);
                    assert!(
                        strays.is_empty(),
                        "{name}, row {row}, column {column}: {strays:?} in “{text}”"
                    );
                }
                Data::String(_) | Data::Empty => {}
                other => panic!("{name}, row {row}, column {column}: {other:?}"),
            }
        }
    }
    assert!(n_numbers > 500, "there is something to walk: {n_numbers}");
}
