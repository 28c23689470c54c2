//! Delimited text: where its records and fields begin and end.

use crate::base::layout::Delimiter;
use crate::base::work::{Cancelled, Work};
use memchr::{memchr, memchr2};
use std::borrow::Cow;

const QUOTE: u8 = b'"';

/// How many records are found between two questions whether to go on.
const BETWEEN_QUESTIONS: usize = 4096;

/// How records and fields are told apart.
#[derive(Clone, Copy, Debug)]
pub struct Dialect {
    /// What stands between fields.
    pub delimiter: Delimiter,
    /// From this byte on, quoting marks are letters like others (a quote was never closed).
    pub quotes_until: usize,
}

impl Dialect {
    /// A dialect in which every quoting mark at the start of a field opens a quoted field.
    pub fn new(delimiter: Delimiter) -> Self {
        Self {
            delimiter,
            quotes_until: usize::MAX,
        }
    }

    /// The byte between fields.
    #[inline]
    pub fn byte(self) -> u8 {
        match self.delimiter {
            Delimiter::Comma => b',',
            Delimiter::Semicolon => b';',
            Delimiter::Tab => b'\t',
            Delimiter::Bar => b'|',
            Delimiter::Blanks => b' ',
        }
    }

    /// Whether a byte is a blank around a field and not between fields.
    #[inline]
    pub fn is_padding(self, byte: u8) -> bool {
        byte == b' ' || (byte == b'\t' && self.delimiter != Delimiter::Tab)
    }
}

/// One record: a line, or several when a quoted field holds line breaks.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Record {
    /// The first byte.
    pub start: usize,
    /// The byte behind the last, line break excluded.
    pub end: usize,
    /// The line of the file on which the record begins, counted from 1.
    pub line: u32,
}

/// All records of a text.
#[derive(Debug, Default)]
pub struct Records {
    /// In order; blank lines are records too.
    pub records: Vec<Record>,
    /// Where a quote was opened and never closed: byte and line.
    pub unclosed: Option<(usize, u32)>,
    /// The lines on which quoted fields with line breaks begin.
    pub breaks: Vec<u32>,
}

/// Finds the records of a text.
pub fn records(text: &[u8], dialect: Dialect, work: &Work<'_>) -> Result<Records, Cancelled> {
    let mut found = Records::default();
    let line_break = if memchr(b'\n', text).is_none() && memchr(b'\r', text).is_some() {
        b'\r'
    } else {
        b'\n'
    };
    let push = |found: &mut Records, start: usize, end: usize, line: u32| {
        let has_return = line_break == b'\n' && end > start && text[end - 1] == b'\r';
        let end = end - usize::from(has_return);
        found.records.push(Record { start, end, line });
        if found.records.len().is_multiple_of(BETWEEN_QUESTIONS) {
            work.step(end, text.len())
        } else {
            Ok(())
        }
    };
    let mut quotes = memchr(QUOTE, text).is_some();
    let (mut start, mut at, mut line, mut first_line) = (0, 0, 1_u32, 1_u32);
    while at < text.len() {
        let next = if quotes {
            memchr2(line_break, QUOTE, &text[at..])
        } else {
            memchr(line_break, &text[at..])
        };
        let Some(next) = next.map(|next| at + next) else {
            break;
        };
        if text[next] == line_break {
            push(&mut found, start, next, first_line)?;
            line += 1;
            (start, at, first_line) = (next + 1, next + 1, line);
            continue;
        }
        if !opens_field(text, start, next, dialect) {
            at = next + 1;
            continue;
        }
        match closing(text, next + 1) {
            Some(close) => {
                let breaks = memchr::memchr_iter(line_break, &text[next..close]).count();
                if breaks > 0 {
                    found.breaks.push(line);
                    line += breaks as u32;
                }
                at = close + 1;
            }
            None => {
                // The rest of the file would vanish in one value; so the mark is a letter.
                found.unclosed = Some((next, line));
                quotes = false;
                at = next + 1;
            }
        }
    }
    if start < text.len() {
        push(&mut found, start, text.len(), first_line)?;
    }
    Ok(found)
}

/// Whether a quoting mark at `at` stands at the start of a field.
fn opens_field(text: &[u8], start: usize, at: usize, dialect: Dialect) -> bool {
    if dialect.delimiter == Delimiter::Blanks {
        return at == start || matches!(text[at - 1], b' ' | b'\t');
    }
    let before = text[start..at]
        .iter()
        .rev()
        .find(|&&byte| !dialect.is_padding(byte));
    before.is_none_or(|&byte| byte == dialect.byte())
}

/// The position of the mark that closes a quoted field whose text begins at `at`.
fn closing(text: &[u8], mut at: usize) -> Option<usize> {
    loop {
        let mark = at + memchr(QUOTE, text.get(at..)?)?;
        if text.get(mark + 1) == Some(&QUOTE) {
            at = mark + 2;
        } else {
            return Some(mark);
        }
    }
}

/// One field of a record.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Field {
    /// The first byte of its text.
    pub start: usize,
    /// The byte behind the last.
    pub end: usize,
    /// Whether it was quoted and holds doubled quoting marks.
    pub is_doubled: bool,
    /// The byte behind the field, where its delimiter or the end of the record stands.
    pub next: usize,
}

impl Field {
    /// The text of the field, blanks included.
    pub fn text<'a>(&self, text: &'a str) -> Cow<'a, str> {
        let text = text.get(self.start..self.end).unwrap_or("");
        if self.is_doubled {
            Cow::Owned(text.replace("\"\"", "\""))
        } else {
            Cow::Borrowed(text)
        }
    }
}

/// The field that begins at `at` in a record that ends at `end`.
#[inline]
pub fn field(text: &[u8], at: usize, end: usize, dialect: Dialect) -> Field {
    let delimiter = dialect.byte();
    let first = text[at..end]
        .iter()
        .position(|&byte| !dialect.is_padding(byte))
        .map_or(end, |padding| at + padding);
    if first < end
        && text[first] == QUOTE
        && first < dialect.quotes_until
        && let Some(close) = closing(&text[..end], first + 1)
    {
        let next = rest(text, close + 1, end, dialect);
        let is_bare = text[close + 1..next]
            .iter()
            .all(|&byte| dialect.is_padding(byte));
        if is_bare {
            return Field {
                start: first + 1,
                end: close,
                is_doubled: memchr(QUOTE, &text[first + 1..close]).is_some(),
                next,
            };
        }
        // Letters behind the closing mark: nothing may get lost, so the marks are letters too.
        return Field {
            start: first,
            end: next,
            is_doubled: false,
            next,
        };
    }
    let next = if dialect.delimiter == Delimiter::Blanks {
        rest(text, at, end, dialect)
    } else {
        memchr(delimiter, &text[at..end]).map_or(end, |found| at + found)
    };
    Field {
        start: at,
        end: next,
        is_doubled: false,
        next,
    }
}

fn rest(text: &[u8], at: usize, end: usize, dialect: Dialect) -> usize {
    let found = if dialect.delimiter == Delimiter::Blanks {
        memchr2(b' ', b'\t', &text[at..end])
    } else {
        memchr(dialect.byte(), &text[at..end])
    };
    found.map_or(end, |found| at + found)
}

/// Where the next field begins behind one that ends at `next`; `None` at the end of the record.
#[inline]
pub fn following(text: &[u8], next: usize, end: usize, dialect: Dialect) -> Option<usize> {
    if next >= end {
        return None;
    }
    if dialect.delimiter != Delimiter::Blanks {
        return Some(next + 1);
    }
    let start = beginning(text, next, end, dialect);
    (start < end).then_some(start)
}

/// Where the first field of a record begins.
#[inline]
pub fn beginning(text: &[u8], start: usize, end: usize, dialect: Dialect) -> usize {
    if dialect.delimiter != Delimiter::Blanks {
        return start;
    }
    text[start..end]
        .iter()
        .position(|byte| !matches!(byte, b' ' | b'\t'))
        .map_or(end, |blanks| start + blanks)
}

/// Calls `each` with every field of a record, until it says to stop.
pub fn fields(
    text: &[u8],
    record: Record,
    dialect: Dialect,
    mut each: impl FnMut(Field) -> std::ops::ControlFlow<()>,
) {
    let mut at = Some(beginning(text, record.start, record.end, dialect));
    while let Some(start) = at {
        let field = field(text, start, record.end, dialect);
        if each(field).is_break() {
            return;
        }
        at = following(text, field.next, record.end, dialect);
    }
}

/// How many fields a record has.
pub fn count(text: &[u8], record: Record, dialect: Dialect) -> usize {
    let span = &text[record.start..record.end];
    if dialect.delimiter != Delimiter::Blanks && memchr(QUOTE, span).is_none() {
        return memchr::memchr_iter(dialect.byte(), span).count() + 1;
    }
    let mut count = 0;
    fields(text, record, dialect, |_| {
        count += 1;
        std::ops::ControlFlow::Continue(())
    });
    count
}

/// Whether a record holds nothing but blanks, delimiters and empty quotes.
pub fn is_blank(text: &[u8], record: Record, dialect: Dialect) -> bool {
    text[record.start..record.end]
        .iter()
        .all(|&byte| byte == dialect.byte() || matches!(byte, b' ' | b'\t' | QUOTE | 0x1a | b'\r'))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn split(text: &str, delimiter: Delimiter) -> Vec<Vec<String>> {
        let mut dialect = Dialect::new(delimiter);
        let found = records(text.as_bytes(), dialect, &Work::unattended()).unwrap();
        if let Some((at, _)) = found.unclosed {
            dialect.quotes_until = at;
        }
        found
            .records
            .iter()
            .map(|&record| {
                let mut row = Vec::new();
                fields(text.as_bytes(), record, dialect, |field| {
                    row.push(field.text(text).into_owned());
                    std::ops::ControlFlow::Continue(())
                });
                row
            })
            .collect()
    }

    /// Small texts of the letters that matter, in a fixed random order.
    fn random_text(seed: u64, length: usize) -> String {
        let mut state = seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) | 1;
        (0..length)
            .map(|_| {
                state ^= state << 13;
                state ^= state >> 7;
                state ^= state << 17;
                *[b'a', b'1', b',', b',', b'\n', b'"', b'"', b'.']
                    .get((state % 8) as usize)
                    .unwrap() as char
            })
            .collect()
    }

    #[test]
    fn properly_quoted_texts_are_split_as_the_csv_crate_splits_them() {
        // Written by that crate from random fields, so that quotes are where they belong.
        for seed in 1..400 {
            let rows: Vec<Vec<String>> = (0..5)
                .map(|row| {
                    (0..4)
                        .map(|column| {
                            random_text(seed * 100 + row * 10 + column, (seed % 7) as usize)
                        })
                        .collect()
                })
                .collect();
            let mut writer = csv::WriterBuilder::new().from_writer(Vec::new());
            for row in &rows {
                writer.write_record(row).unwrap();
            }
            let text = String::from_utf8(writer.into_inner().unwrap()).unwrap();
            assert_eq!(split(&text, Delimiter::Comma), rows, "{text:?}");
        }
    }

    #[test]
    fn no_text_is_lost_whatever_the_quotes() {
        for seed in 1..2000 {
            let text = random_text(seed, 30);
            let letters = |text: &str| {
                text.chars()
                    .filter(|c| matches!(c, 'a' | '1' | '.'))
                    .count()
            };
            let kept: usize = split(&text, Delimiter::Comma)
                .iter()
                .flatten()
                .map(|field| letters(field))
                .sum();
            assert_eq!(kept, letters(&text), "{text:?}");
        }
    }

    #[test]
    fn lines_are_counted_through_quoted_breaks() {
        let text = b"a,b\n\"x\ny\",1\nz,2";
        let found = records(text, Dialect::new(Delimiter::Comma), &Work::unattended()).unwrap();
        let lines: Vec<_> = found.records.iter().map(|record| record.line).collect();
        assert_eq!((lines, found.breaks), (vec![1, 2, 4], vec![2]));
    }

    #[test]
    fn an_unclosed_quote_is_a_letter_and_said() {
        let text = "a,b\n\"x,1\ny,2\n";
        assert_eq!(
            split(text, Delimiter::Comma),
            [["a", "b"], ["\"x", "1"], ["y", "2"]]
        );
    }

    #[test]
    fn blanks_separate_however_many_there_are() {
        assert_eq!(
            split("  a  b\tc \r\n 1 2   \"x y\"\n", Delimiter::Blanks),
            [["a", "b", "c"], ["1", "2", "x y"]]
        );
    }

    #[test]
    fn old_line_breaks_are_line_breaks() {
        assert_eq!(
            split("a;b\r1;2\r", Delimiter::Semicolon),
            [["a", "b"], ["1", "2"]]
        );
    }
}
