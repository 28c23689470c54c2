//! Guessing what separates fields, and which decimal mark numbers have.

use crate::base::layout::{DecimalMark, Delimiter, Grouping};
use crate::base::work::{Cancelled, Work};
use crate::table::read::cell::{Sort, sort, trimmed};
use crate::table::read::number;
use crate::table::read::split::{self, Dialect, Record};
use std::ops::ControlFlow;

/// How many bytes at the beginning are looked at: enough for a few lines of 200,000 columns.
const LOOK: usize = 4 << 20;

/// How many lines are looked at.
const LINES: usize = 60;

/// How many fields of a line are looked at.
const FIELDS: usize = 200;

/// The beginning of a text, up to a line break if there is one.
fn beginning(text: &str) -> &str {
    let bytes = text.as_bytes();
    let mut end = bytes.len().min(LOOK);
    if end < bytes.len() {
        if let Some(line_break) = memchr::memrchr2(b'\n', b'\r', &bytes[..end]) {
            end = line_break + 1;
        }
        while !text.is_char_boundary(end) {
            end -= 1;
        }
    }
    &text[..end]
}

fn lines(text: &str, dialect: Dialect, work: &Work<'_>) -> Result<Vec<Record>, Cancelled> {
    let mut records = split::records(text.as_bytes(), dialect, &work.silent())?.records;
    records.retain(|&record| !split::is_blank(text.as_bytes(), record, dialect));
    records.truncate(LINES);
    Ok(records)
}

fn for_each_field(text: &str, record: Record, dialect: Dialect, mut each: impl FnMut(&str)) {
    let mut seen = 0;
    split::fields(text.as_bytes(), record, dialect, |field| {
        each(trimmed(&field.text(text)));
        seen += 1;
        if seen == FIELDS {
            ControlFlow::Break(())
        } else {
            ControlFlow::Continue(())
        }
    });
}

/// The delimiter that gives the most lines the same number of sensible fields.
pub fn delimiter(text: &str, work: &Work<'_>) -> Result<Delimiter, Cancelled> {
    const ORDER: [Delimiter; 4] = [
        Delimiter::Tab,
        Delimiter::Semicolon,
        Delimiter::Bar,
        Delimiter::Comma,
    ];
    let text = beginning(text);
    let mut best = (0.0, 0, Delimiter::Comma);
    for delimiter in ORDER {
        let (score, fields) = score(text, delimiter, work)?;
        if score > best.0 + 1e-9 || (score > best.0 - 1e-9 && score > 0.0 && fields > best.1) {
            best = (score, fields, delimiter);
        }
    }
    // Blanks stand inside names too, so they count only when nothing else explains the lines.
    if best.0 < 0.35 {
        let (score, _) = score(text, Delimiter::Blanks, work)?;
        if score > 0.6 && score > best.0 {
            return Ok(Delimiter::Blanks);
        }
    }
    Ok(best.2)
}

/// The share of lines with the commonest number of fields, times the share of sensible fields;
/// and that number.
fn score(text: &str, delimiter: Delimiter, work: &Work<'_>) -> Result<(f64, usize), Cancelled> {
    let dialect = Dialect::new(delimiter);
    let lines = lines(text, dialect, work)?;
    let mut counts: Vec<usize> = lines
        .iter()
        .map(|&line| split::count(text.as_bytes(), line, dialect))
        .collect();
    counts.sort_unstable();
    let mut mode = (0, 0);
    for group in counts.chunk_by(|a, b| a == b) {
        if group[0] > 1 && group.len() >= mode.1 {
            mode = (group[0], group.len());
        }
    }
    if mode.0 == 0 {
        return Ok((0.0, 0));
    }
    let (mut sensible, mut seen) = (0_usize, 0_usize);
    for &line in lines.iter().take(30) {
        for_each_field(text, line, dialect, |field| {
            seen += 1;
            sensible += usize::from(is_sensible(field));
        });
    }
    let agreeing = mode.1 as f64 / lines.len() as f64;
    let share = sensible as f64 / seen.max(1) as f64;
    Ok((agreeing * share * share, mode.0))
}

/// Whether a field does not look like several.
fn is_sensible(field: &str) -> bool {
    let is_value = |mark| match sort(field, mark, Grouping::Absent) {
        Sort::Blank
        | Sort::Number(_)
        | Sort::LeadingZeros(_)
        | Sort::LongDigits(_)
        | Sort::Below(_)
        | Sort::Above(_)
        | Sort::MissingWord
        | Sort::Error
        | Sort::TooLarge => true,
        Sort::OtherMark | Sort::Grouped(_) | Sort::WithUnit | Sort::Date | Sort::Text => false,
    };
    if is_value(DecimalMark::Point) || is_value(DecimalMark::Comma) {
        return true;
    }
    // Letters make a label; digits with other delimiters between them are several values.
    let has_other = field.contains([';', '\t', '|']);
    let digits = field.bytes().filter(u8::is_ascii_digit).count();
    let is_row_of_numbers = field.contains(',') && digits * 2 > field.len();
    !has_other && !is_row_of_numbers
}

/// The decimal mark of most numbers that have one.
pub fn decimal(
    text: &str,
    delimiter: Delimiter,
    work: &Work<'_>,
) -> Result<DecimalMark, Cancelled> {
    let text = beginning(text);
    let dialect = Dialect::new(delimiter);
    let (mut points, mut commas, mut unclear) = (0_usize, 0_usize, 0_usize);
    for record in lines(text, dialect, work)? {
        for_each_field(text, record, dialect, |field| {
            let field = field.trim_start_matches(['<', '>', '=', ' ']);
            let is_grouped = matches!(
                sort(field, DecimalMark::Point, Grouping::Absent),
                Sort::Grouped(_)
            );
            let has = |mark: u8, decimal| {
                memchr::memchr(mark, field.as_bytes()).is_some()
                    && number::whole(field.as_bytes(), decimal).is_some()
            };
            if has(b'.', DecimalMark::Point) {
                points += 1;
            } else if has(b',', DecimalMark::Comma) {
                if is_grouped {
                    unclear += 1;
                } else {
                    commas += 1;
                }
            }
        });
    }
    let is_comma =
        commas > points || (commas + points == 0 && unclear > 0 && delimiter != Delimiter::Comma);
    Ok(if is_comma {
        DecimalMark::Comma
    } else {
        DecimalMark::Point
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn guess(text: &str) -> (Delimiter, DecimalMark) {
        let work = Work::unattended();
        let delimiter = delimiter(text, &work).unwrap();
        (delimiter, decimal(text, delimiter, &work).unwrap())
    }

    #[test]
    fn separators_and_decimal_marks_are_guessed_together() {
        use DecimalMark::{Comma as C, Point as P};
        use Delimiter::{Bar, Blanks, Comma, Semicolon, Tab};
        for (text, expected) in [
            ("a,b,c\n1.5,2,3\n4,5,6\n", (Comma, P)),
            ("a;b;c\n1,5;2,5;3\n4;5,1;6\n", (Semicolon, C)),
            ("1,5;2,5\n3,5;4,5\n", (Semicolon, C)),
            ("a\tb\n1,5\t2\n", (Tab, C)),
            ("a\tb\n1.5\t2\n", (Tab, P)),
            ("a|b|c\n1|2.5|3\n", (Bar, P)),
            ("name a b\nx 1.5 2\ny 2.5 3\n", (Blanks, P)),
            ("name, first\n\"1,5\",\"2,5\"\n\"3,5\",4\n", (Comma, C)),
            (
                "Wheel 12 of cave A,1.5,2\nWheel 13 of cave A,1.7,3\n",
                (Comma, P),
            ),
            (
                "Report of 3 March\nmade by K; M\n\nid;x\nK-1;0,123\nK-2;0,456\nK-3;1,234\n",
                (Semicolon, C),
            ),
            ("only\n1.5\n2.5\n", (Comma, P)),
            ("id;n\na;1,234\nb;2,345\n", (Semicolon, C)),
        ] {
            assert_eq!(guess(text), expected, "{text:?}");
        }
    }
}
