//! Every number that is handed over is a value of the study.
//!
//! A numeral of the write-up or of a workbook's text must be a numeral of a fact as it is shown
//! (or of a name that the user gave, which the facts repeat); a number in a workbook's cell must
//! be a fact at full precision. What else may stand there is in [`FIXED`].

use crate::run::{run_anew, small_study, the};
use calamine::{Data, Reader, Xlsx};
use std::collections::BTreeSet;
use std::io::Cursor;
use widefold::base::number::{self, Precision};
use widefold::eval::fact::{Fact, FactValue, FactValues};
use widefold::eval::standing::Standings;
use widefold::export::workbook::workbook;
use widefold::export::write_up::write_up;
use widefold::export::{Occasion, caveats};
use widefold::report::Context;
use widefold::study::Study;
use widefold::study::cell::Kind;
use widefold::study::ledger::Ledger;

/// Phrases with numerals that are no results: what an interval or a definition is called.
const FIXED: [(&str, &str); 6] = [
    ("95 %", "the level of every interval"),
    ("SHA-256", "the name of a checksum"),
    ("R²", "a name"),
    ("r²", "a name"),
    ("n − 1", "the divisor of a standard deviation"),
    ("1 − SSE/SST", "the definition of R²"),
];

/// What may be written.
struct Known {
    /// Numerals of single facts, of their words and of names.
    single: BTreeSet<String>,
    /// Numerals in the tables of facts, too.
    all: BTreeSet<String>,
    /// Numbers at full precision, by their bits.
    full: BTreeSet<u64>,
}

impl Known {
    fn of(study: &Study, standings: &Standings, ledger: &Ledger, occasion: &Occasion) -> Self {
        let mut known = Self {
            single: BTreeSet::new(),
            all: BTreeSet::new(),
            full: BTreeSet::new(),
        };
        known.words(&occasion.date);
        known.words(env!("CARGO_PKG_VERSION"));
        known.words(study.title());
        known.number(ledger.looks().len() as f64);
        known.number(ledger.openings().len() as f64);
        for cell in study.cells() {
            known.words(&cell.title);
            let outcome = standings.get(cell.id).outcome.unwrap();
            outcome.facts.all().iter().for_each(|fact| known.fact(fact));
        }
        let context = Context {
            study,
            standings,
            ledger,
        };
        // The words of a caveat hold what set it off, and its published threshold.
        for (_, caveat) in caveats(&context) {
            for words in [&caveat.text, &caveat.heading, &caveat.threshold] {
                known.words(words);
            }
            for (name, value) in &caveat.trigger {
                known.words(name);
                known.words(value);
            }
        }
        known.all.extend(known.single.clone());
        known
    }

    fn words(&mut self, words: &str) {
        self.single.extend(numerals(words));
    }

    fn number(&mut self, value: f64) {
        self.words(&number::text(value, Precision::Whole));
        let _ = self.full.insert(value.to_bits());
    }

    fn fact(&mut self, fact: &Fact) {
        self.words(&fact.shown());
        // The dictionary repeats what a value means, and tables their units.
        self.words(&fact.meaning);
        match &fact.value {
            FactValue::Number(value) => {
                // A reader may ask for other decimals, or for a share as a percentage.
                self.words(&number::text(*value, Precision::Percent(0)));
                for decimals in 0..=3 {
                    self.words(&fact.shown_with_decimals(decimals));
                }
                let _ = self.full.insert(value.to_bits());
            }
            FactValue::Text(_) => {}
            FactValue::Table(table) => {
                let _ = self.full.insert((table.n_rows() as f64).to_bits());
                for column in &table.columns {
                    self.words(&column.name);
                    self.words(&column.meaning);
                    for row in 0..table.n_rows() {
                        self.all.extend(numerals(&column.shown(row)));
                        // The text says of every file what its row says.
                        if fact.name == "source files" {
                            self.words(&column.shown(row));
                        }
                    }
                    if let FactValues::Numbers(numbers) = &column.values {
                        self.full
                            .extend(numbers.iter().map(|value| value.to_bits()));
                    }
                }
            }
        }
    }
}

/// The numerals of a text, as they are written: digits with their point and commas.
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
        while at < letters.len() {
            let goes_on = letters[at].is_ascii_digit()
                || (matches!(letters[at], '.' | ',')
                    && letters.get(at + 1).is_some_and(char::is_ascii_digit));
            if !goes_on {
                break;
            }
            at += 1;
        }
        found.push(letters[begin..at].iter().collect());
    }
    found
}

/// A text without what is in backticks and without the fixed phrases.
fn bare(text: &str) -> String {
    let mut bare: String = text.split('`').step_by(2).collect::<Vec<_>>().join(" ");
    for (phrase, _) in FIXED {
        bare = bare.replace(phrase, " ");
    }
    bare
}

/// The numerals of a write-up that are no value of the study, each with its line.
fn strays(markdown: &str, known: &Known) -> Vec<String> {
    let mut strays = Vec::new();
    for line in markdown.lines() {
        if line.starts_with("## References") {
            break;
        }
        // Tables of the results hold the entries of tables; a picture's path is its title.
        let may = if line.starts_with('|') {
            &known.all
        } else {
            &known.single
        };
        if line.starts_with("![") {
            continue;
        }
        for numeral in numerals(&bare(line)) {
            if !may.contains(&numeral) {
                strays.push(format!("{numeral} in: {line}"));
            }
        }
    }
    strays
}

/// The cells of a workbook that hold a number which is no value of the study.
fn strays_of_workbook(bytes: Vec<u8>, known: &Known) -> Vec<String> {
    let mut book: Xlsx<_> = Xlsx::new(Cursor::new(bytes)).unwrap();
    let mut strays = Vec::new();
    for name in book.sheet_names() {
        let range = book.worksheet_range(&name).unwrap();
        let mut references = false;
        for (row, column, cell) in range.used_cells() {
            let is_known = match cell {
                Data::Float(value) => known.full.contains(&value.to_bits()),
                Data::Int(value) => known.full.contains(&(*value as f64).to_bits()),
                Data::String(text) => {
                    references |= text.starts_with("References");
                    let unknown = numerals(&bare(text))
                        .into_iter()
                        .any(|numeral| !known.all.contains(&numeral));
                    references || !unknown
                }
                Data::Empty | Data::Bool(_) => true,
                other => panic!("{name} holds {other:?}"),
            };
            if !is_known {
                strays.push(format!("{name}, row {}, column {column}: {cell}", row + 1));
            }
        }
    }
    strays
}

#[test]
fn every_numeral_of_the_hand_over_is_a_value_of_the_study() {
    let started = small_study();
    let study = &started.study;
    let standings = run_anew(study, &started.shelf).standings;
    let mut ledger = Ledger::default();
    widefold::store::note_acts(study, &standings, &mut ledger, "2026-03-01");
    let occasion = Occasion {
        date: "2026-03-02".to_owned(),
        despite: None,
    };
    let mut known = Known::of(study, &standings, &ledger, &occasion);
    let context = Context {
        study,
        standings: &standings,
        ledger: &ledger,
    };
    let markdown = write_up(&context, &occasion, "figures").unwrap().markdown;
    let mut found = strays(&markdown, &known);
    let book = workbook(&context, &occasion).unwrap();
    found.extend(strays_of_workbook(book.clone(), &known));
    assert!(found.is_empty(), "{}", found.join("\n"));

    // A walker that finds nothing must be able to find something.
    assert!(numerals(&markdown).len() > 300);
    let sentence = "On held-out samples the root mean squared error was ";
    let planted = markdown.replace(sentence, &format!("{sentence}7.1234 and "));
    assert_eq!(strays(&planted, &known).len(), 1);
    let fit = standings.get(the(study, Kind::Fit)).outcome.unwrap();
    let error = fit.facts.value("nested rmse").unwrap();
    assert!(known.full.remove(&error.to_bits()));
    assert!(!strays_of_workbook(book, &known).is_empty());
}
