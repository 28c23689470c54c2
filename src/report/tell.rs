//! Builds paragraphs from patterns: words, and facts in braces.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, FactTable, Facts};
use crate::report::block::{Paragraph, Span};
use crate::study::cell::CellId;

/// A cell and the facts that it gives.
#[derive(Clone, Copy)]
pub struct Source<'a> {
    /// The cell.
    pub cell: CellId,
    /// Its facts.
    pub facts: &'a Facts,
}

impl<'a> Source<'a> {
    /// A paragraph from a pattern.
    ///
    /// | in the pattern | becomes |
    /// |---|---|
    /// | `{samples}` | the fact, number and unit |
    /// | `{nested r²\|%}` | the fact as a percentage |
    /// | `[sample\|samples]` | the first word if the last fact is one, else the second |
    /// | `‹0›` | the first of the names |
    /// | `⟨1/(2n)⟩` | fixed letters of a formula |
    ///
    /// # Panics
    /// When a bracket is not closed or a name is not given: patterns are written in this program.
    #[must_use]
    pub fn say(&self, pattern: &str, names: &[&str]) -> Paragraph {
        let mut paragraph = Paragraph::new();
        let mut rest = pattern;
        let mut last = None;
        while let Some(at) = rest.find(['{', '[', '‹', '⟨']) {
            let open = rest[at..].chars().next().expect("a bracket was found");
            let close = match open {
                '{' => '}',
                '[' => ']',
                '‹' => '›',
                _ => '⟩',
            };
            let inside_from = at + open.len_utf8();
            let length = rest[inside_from..]
                .find(close)
                .expect("every bracket of a pattern is closed");
            let inside = &rest[inside_from..inside_from + length];
            paragraph = paragraph.text(&rest[..at]);
            rest = &rest[inside_from + length + close.len_utf8()..];
            paragraph = match open {
                '{' => {
                    let (name, form) = inside.split_once('|').unwrap_or((inside, ""));
                    last = self.count(name);
                    if form == "%" {
                        paragraph.fact_as(self.cell, self.facts, name, Precision::Percent(0))
                    } else {
                        paragraph.fact(self.cell, self.facts, name)
                    }
                }
                '[' => {
                    let (one, many) = inside
                        .split_once('|')
                        .expect("a choice of words has a bar in it");
                    paragraph.text(if last == Some(1.0) { one } else { many })
                }
                '‹' => {
                    let at: usize = inside.parse().expect("names are counted from 0");
                    paragraph.name(*names.get(at).expect("every name of a pattern is given"))
                }
                _ => paragraph.formula(inside),
            };
        }
        paragraph.text(rest)
    }

    /// What decides between one and many: a number, or the number of rows of a table.
    fn count(&self, name: &str) -> Option<f64> {
        let rows = || self.facts.table(name).map(|table| table.n_rows() as f64);
        self.facts.value(name).or_else(rows)
    }

    /// Whether the cell gives this fact; a number that is not known counts as not given.
    #[must_use]
    pub fn has(&self, name: &str) -> bool {
        self.facts.value(name).is_some()
            || self.facts.words(name).is_some()
            || self.facts.table(name).is_some()
    }

    /// The number that this fact holds, if it holds one that is known.
    #[must_use]
    pub fn value(&self, name: &str) -> Option<f64> {
        self.facts.value(name)
    }

    /// The facts of this list that the cell gives, with a value that is known.
    #[must_use]
    pub fn given(&self, names: &[&str]) -> Vec<&'a Fact> {
        names
            .iter()
            .filter(|name| self.value(name).is_some() || self.facts.words(name).is_some())
            .filter_map(|name| self.facts.get(name))
            .collect()
    }

    /// Whether the fact is a number above zero.
    #[must_use]
    pub fn is_above_zero(&self, name: &str) -> bool {
        self.value(name).is_some_and(|value| value > 0.0)
    }

    /// The table that this fact holds, if it has rows.
    #[must_use]
    pub fn rows(&self, name: &str) -> Option<&'a FactTable> {
        self.facts.table(name).filter(|table| table.n_rows() > 0)
    }
}

/// Paragraphs in the making. A sentence that lacks a fact stands by itself, so that leaving it out
/// takes no other along.
#[derive(Debug, Default)]
pub struct Telling {
    paragraphs: Vec<Paragraph>,
    sentences: Vec<Paragraph>,
    apart: Vec<Paragraph>,
}

impl Telling {
    /// Nothing told yet.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// Adds a sentence to the paragraph.
    pub fn say(&mut self, sentence: Paragraph) {
        if sentence.is_incomplete() {
            self.apart.push(sentence);
        } else {
            self.sentences.push(sentence);
        }
    }

    /// Ends the paragraph.
    pub fn end(&mut self) {
        if !self.sentences.is_empty() {
            let sentences = std::mem::take(&mut self.sentences);
            self.paragraphs.push(Paragraph::joined(sentences));
        }
        self.paragraphs.append(&mut self.apart);
    }

    /// All paragraphs.
    #[must_use]
    pub fn done(mut self) -> Vec<Paragraph> {
        self.end();
        self.paragraphs
    }
}

/// What is said of a cell that has no results.
#[must_use]
pub fn without_results(title: &str) -> Paragraph {
    Paragraph::new()
        .text("“")
        .span(Span::Name(title.to_owned()))
        .text("” has not been evaluated, so that nothing is told of it here.")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_pattern_binds_its_numbers_and_chooses_its_words() {
        let mut facts = Facts::new();
        facts.push(Fact::count("samples", 1, "How many."));
        facts.push(Fact::number(
            "nested r²",
            0.804,
            "",
            Precision::Decimals(2),
            "Explained share.",
        ));
        let source = Source {
            cell: CellId::new(3),
            facts: &facts,
        };
        let said = source.say(
            "{samples} [scan was|scans were] of “‹0›”, ⟨1/(2n)⟩, {nested r²|%}, {units}.",
            &["W 12"],
        );
        assert_eq!(said.plain(), "1 scan was of “W 12”, 1/(2n), 80 %, {units}.");
        assert_eq!(said.missing(), ["units"]);
        let digits =
            |span: &&Span| matches!(span, Span::Text(text) if text.contains(char::is_numeric));
        assert_eq!(said.spans.iter().find(digits), None);
    }

    #[test]
    fn a_sentence_that_lacks_a_fact_takes_no_other_along() {
        let facts = Facts::new();
        let source = Source {
            cell: CellId::new(3),
            facts: &facts,
        };
        let mut telling = Telling::new();
        telling.say(source.say("One.", &[]));
        telling.say(source.say("{units}.", &[]));
        telling.say(source.say("Two.", &[]));
        let told: Vec<String> = telling.done().iter().map(Paragraph::plain).collect();
        assert_eq!(told, ["One. Two.", "{units}."]);
    }
}
