//! Rows and columns that a workbook hides. The crate that reads cells does not tell of them, so
//! the sheet's own text (ECMA-376, part 1, 18.3.1.13 and 18.3.1.73) is looked through for them.

use crate::base::work::{Cancelled, Work};
use std::io::{BufRead, BufReader, Cursor, Read};
use zip::ZipArchive;

/// How many marks are looked at between two questions whether to go on.
const BETWEEN_QUESTIONS: usize = 100_000;

/// The largest list of sheets that is read.
const LARGEST_LIST: u64 = 16 * 1024 * 1024;

/// The hidden rows and columns of a sheet, from 0.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Hidden {
    /// The rows.
    pub rows: Vec<u32>,
    /// The columns.
    pub columns: Vec<u32>,
}

/// What is hidden in a sheet of a workbook of the xlsx sort. Of other sorts, and of what cannot
/// be read in this way, nothing is known.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn hidden(bytes: &[u8], sheet: &str, work: &Work<'_>) -> Result<Hidden, Cancelled> {
    let Ok(mut archive) = ZipArchive::new(Cursor::new(bytes)) else {
        return Ok(Hidden::default());
    };
    let Some(path) = path_of(&mut archive, sheet) else {
        return Ok(Hidden::default());
    };
    let Ok(file) = archive.by_name(&path) else {
        return Ok(Hidden::default());
    };
    marks(BufReader::with_capacity(1 << 16, file), work)
}

/// Goes through the marks of a sheet. An unreadable end ends the search.
fn marks(mut text: impl BufRead, work: &Work<'_>) -> Result<Hidden, Cancelled> {
    let mut hidden = Hidden::default();
    let mut mark = Vec::new();
    let mut next_row = 0_u32;
    for done in 0.. {
        if done % BETWEEN_QUESTIONS == 0 {
            work.step(0, 1)?;
        }
        mark.clear();
        match text.read_until(b'>', &mut mark) {
            Ok(0) | Err(_) => break,
            Ok(_) => {}
        }
        let Some(start) = mark.iter().rposition(|&byte| byte == b'<') else {
            continue;
        };
        let Ok(mark) = std::str::from_utf8(&mark[start + 1..]) else {
            continue;
        };
        if is_mark(mark, "row") {
            let row = number(mark, "r").map_or(next_row, |row| row.saturating_sub(1));
            if is_true(mark, "hidden") {
                hidden.rows.push(row);
            }
            next_row = row + 1;
        } else if is_mark(mark, "col")
            && is_true(mark, "hidden")
            && let (Some(first), Some(last)) = (number(mark, "min"), number(mark, "max"))
        {
            // A sheet's columns end at 16,384; “all to the right” is hidden with that as its end.
            let last = last.min(16_384);
            hidden
                .columns
                .extend(first.saturating_sub(1)..last.max(first.saturating_sub(1)));
        }
    }
    Ok(hidden)
}

/// The file of the sheet with a name.
fn path_of(archive: &mut ZipArchive<Cursor<&[u8]>>, sheet: &str) -> Option<String> {
    let book = list(archive, "xl/workbook.xml")?;
    let relations = list(archive, "xl/_rels/workbook.xml.rels")?;
    let id = book
        .split('<')
        .filter(|mark| is_mark(mark, "sheet"))
        .find(|mark| attribute(mark, "name").is_some_and(|name| unescaped(name) == sheet))
        .and_then(|mark| attribute(mark, "r:id"))?;
    let target = relations
        .split('<')
        .filter(|mark| is_mark(mark, "Relationship"))
        .find(|mark| attribute(mark, "Id") == Some(id))
        .and_then(|mark| attribute(mark, "Target"))?;
    Some(match target.strip_prefix('/') {
        Some(whole) => whole.to_owned(),
        None => format!("xl/{target}"),
    })
}

fn list(archive: &mut ZipArchive<Cursor<&[u8]>>, path: &str) -> Option<String> {
    let mut text = String::new();
    let file = archive.by_name(path).ok()?;
    let _ = file.take(LARGEST_LIST).read_to_string(&mut text).ok()?;
    Some(text)
}

/// Whether a mark is called so, whatever stands before a colon.
fn is_mark(mark: &str, name: &str) -> bool {
    let own = mark
        .split([' ', '/', '>', '\n', '\r', '\t'])
        .next()
        .unwrap_or_default();
    own == name || own.split_once(':').is_some_and(|(_, own)| own == name)
}

/// What stands in an attribute of a mark.
fn attribute<'t>(mark: &'t str, name: &str) -> Option<&'t str> {
    let mut rest = mark;
    loop {
        let at = rest.find(name)?;
        let is_whole = rest[..at].ends_with([' ', '\n', '\r', '\t']);
        rest = &rest[at + name.len()..];
        let Some(value) = rest.trim_start().strip_prefix('=').filter(|_| is_whole) else {
            continue;
        };
        let value = value.trim_start();
        let quote = value
            .chars()
            .next()
            .filter(|letter| matches!(letter, '"' | '\''))?;
        return value[1..].split(quote).next();
    }
}

fn number(mark: &str, name: &str) -> Option<u32> {
    attribute(mark, name)?.parse().ok()
}

fn is_true(mark: &str, name: &str) -> bool {
    matches!(attribute(mark, name), Some("1" | "true"))
}

fn unescaped(text: &str) -> String {
    text.replace("&lt;", "<")
        .replace("&gt;", ">")
        .replace("&quot;", "\"")
        .replace("&apos;", "'")
        .replace("&amp;", "&")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn hidden_rows_and_columns_are_found_among_the_marks_of_a_sheet() {
        let sheet = "<worksheet><cols><col min=\"2\" max=\"3\" hidden=\"1\"/><col min=\"5\" \
                     max=\"5\" width=\"9\"/></cols><sheetData><row r=\"1\"><c r=\"A1\"><v>1</v></c>\
                     </row><row r=\"4\" spans=\"1:2\" hidden=\"true\"/><row hidden='1'/></sheetData>";
        let found = marks(sheet.as_bytes(), &Work::unattended()).unwrap();
        assert_eq!(
            found,
            Hidden {
                rows: vec![3, 4],
                columns: vec![1, 2]
            }
        );
    }
}
