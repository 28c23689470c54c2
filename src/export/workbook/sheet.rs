//! One sheet, filled from top to bottom. Words are always words, numbers always numbers.

use crate::base::number::{Precision, workbook_format};
use crate::eval::fact::{Fact, FactColumn, FactTable, FactValues};
use crate::export::error::ExportError;
use crate::export::workbook::number_of;
use rust_xlsxwriter::{Chart, Format, FormatAlign, Image, Workbook, Worksheet};
use std::collections::BTreeMap;

/// A sheet that is being filled.
pub(super) struct Sheet<'a> {
    sheet: &'a mut Worksheet,
    row: u32,
    /// The widths that were set, in letters, by column.
    widths: BTreeMap<u16, f64>,
}

/// The longest name that a sheet may have.
const MOST_LETTERS: usize = 31;

/// The widest column of a table, in letters; longer words are wrapped.
const WIDEST: f64 = 70.0;

/// The most characters that a cell may hold.
const MOST_TEXT: usize = 32_000;

/// A lawful name of a sheet.
pub(super) fn sheet_name(name: &str, suffix: Option<&str>) -> String {
    let wish = suffix.map_or_else(|| name.to_owned(), |suffix| format!("{name}, {suffix}"));
    let lawful = wish
        .chars()
        .map(|c| if "[]:*?/\\'".contains(c) { ' ' } else { c });
    lawful
        .take(MOST_LETTERS)
        .collect::<String>()
        .trim()
        .to_owned()
}

impl<'a> Sheet<'a> {
    /// A new sheet at the end of the book.
    pub(super) fn add(book: &'a mut Workbook, name: &str) -> Result<Self, ExportError> {
        // Cut names of several fits can be alike; the later ones are numbered.
        let mut title = name.to_owned();
        let mut number = 2;
        while book.worksheet_from_name(&title).is_ok() {
            let ending = format!(" {number}");
            let kept = MOST_LETTERS - ending.len();
            title = name.chars().take(kept).collect::<String>() + &ending;
            number += 1;
        }
        let sheet = book.add_worksheet();
        let _ = sheet.set_name(&title)?;
        // On paper a sheet is as wide as a page, however long.
        let _ = sheet.set_landscape().set_print_fit_to_pages(1, 0);
        Ok(Self {
            sheet,
            row: 0,
            widths: BTreeMap::new(),
        })
    }

    pub(super) fn width(&mut self, column: u16, width: f64) -> Result<(), ExportError> {
        let _ = self.sheet.set_column_width(column, width)?;
        let _ = self.widths.insert(column, width);
        Ok(())
    }

    pub(super) fn freeze(&mut self, rows: u32) -> Result<(), ExportError> {
        let _ = self.sheet.set_freeze_panes(rows, 0)?;
        Ok(())
    }

    pub(super) fn blank(&mut self) {
        self.row += 1;
    }

    pub(super) fn title(&mut self, text: &str) -> Result<(), ExportError> {
        self.write(0, text, &words().set_bold().set_font_size(14.0))?;
        self.row += 1;
        Ok(())
    }

    pub(super) fn strong(&mut self, text: &str) -> Result<(), ExportError> {
        self.write(0, text, &words().set_bold())?;
        self.row += 1;
        Ok(())
    }

    pub(super) fn text(&mut self, text: &str) -> Result<(), ExportError> {
        self.write(0, text, &words().set_text_wrap())?;
        self.fit_height(&[(0, text)])?;
        self.row += 1;
        Ok(())
    }

    /// Makes the present row as high as its wrapped words need. Not every program that opens a
    /// workbook does it by itself.
    fn fit_height(&mut self, texts: &[(u16, &str)]) -> Result<(), ExportError> {
        /// The height of one line, in points.
        const LINE: f64 = 15.0;
        /// More lines than this are for the reader to unfold.
        const MOST: f64 = 25.0;
        let lines = |(column, text): &(u16, &str)| {
            let width = self.widths.get(column).copied().unwrap_or(8.0);
            // A tenth to spare: words do not break where the width ends.
            (text.chars().count() as f64 * 1.1 / width).ceil()
        };
        let most = texts.iter().map(lines).fold(1.0, f64::max).min(MOST);
        if most > 1.0 {
            let _ = self.sheet.set_row_height(self.row, LINE * most)?;
        }
        Ok(())
    }

    /// A name and what it means, in one cell.
    pub(super) fn pair(&mut self, name: &str, what: &str) -> Result<(), ExportError> {
        self.text(&format!("{name}: {what}"))
    }

    pub(super) fn heads(&mut self, names: &[&str]) -> Result<(), ExportError> {
        for (column, name) in names.iter().enumerate() {
            self.write(column as u16, name, &words().set_bold())?;
        }
        self.row += 1;
        Ok(())
    }

    pub(super) fn row(&mut self, texts: &[&str]) -> Result<(), ExportError> {
        for (column, text) in texts.iter().enumerate() {
            if !text.is_empty() {
                self.write(column as u16, text, &words().set_text_wrap())?;
            }
        }
        let placed: Vec<(u16, &str)> = texts
            .iter()
            .enumerate()
            .map(|(at, text)| (at as u16, *text))
            .collect();
        self.fit_height(&placed)?;
        self.row += 1;
        Ok(())
    }

    /// A scalar fact: cell, name, value, unit, meaning.
    pub(super) fn fact(&mut self, cell: &str, fact: &Fact) -> Result<(), ExportError> {
        self.write(0, cell, &words())?;
        self.write(1, &fact.name, &words())?;
        match number_of(fact) {
            Some((value, precision)) => self.number(2, value, precision)?,
            None => self.write(2, &fact.shown(), &words())?,
        }
        self.write(3, &fact.unit, &words())?;
        self.write(4, &fact.meaning, &words().set_text_wrap())?;
        self.fit_height(&[(4, &fact.meaning)])?;
        self.row += 1;
        Ok(())
    }

    /// A table that fills the sheet from its first row, heads frozen.
    pub(super) fn table(&mut self, table: &FactTable) -> Result<(), ExportError> {
        for (at, column) in table.columns.iter().enumerate() {
            let longest = (0..column.values.len().min(200))
                .map(|row| column.shown(row).chars().count())
                .chain([head(column).chars().count()])
                .max()
                .unwrap_or(8);
            self.width(at as u16, (longest as f64 + 2.0).clamp(8.0, WIDEST))?;
        }
        self.rows(table)?;
        self.freeze(1)
    }

    /// The rows of a table under their heads, at the present place.
    pub(super) fn rows(&mut self, table: &FactTable) -> Result<(), ExportError> {
        let heads: Vec<String> = table.columns.iter().map(head).collect();
        self.heads(&heads.iter().map(String::as_str).collect::<Vec<_>>())?;
        for row in 0..table.n_rows() {
            for (at, column) in table.columns.iter().enumerate() {
                match &column.values {
                    FactValues::Numbers(numbers) if numbers[row].is_finite() => {
                        self.number(at as u16, numbers[row], column.precision)?;
                    }
                    FactValues::Numbers(_) => self.write(at as u16, "not known", &words())?,
                    FactValues::Texts(texts) => {
                        self.write(at as u16, &texts[row], &words().set_text_wrap())?;
                    }
                }
            }
            let texts: Vec<(u16, &str)> = table
                .columns
                .iter()
                .enumerate()
                .filter_map(|(at, column)| match &column.values {
                    FactValues::Texts(texts) => Some((at as u16, texts[row].as_str())),
                    FactValues::Numbers(_) => None,
                })
                .collect();
            self.fit_height(&texts)?;
            self.row += 1;
        }
        Ok(())
    }

    pub(super) fn chart(
        &mut self,
        row: u32,
        column: u16,
        chart: &Chart,
    ) -> Result<(), ExportError> {
        let _ = self.sheet.insert_chart(row, column, chart)?;
        Ok(())
    }

    /// An image at the present place, with as many rows below it as it is high.
    pub(super) fn image(&mut self, png: &[u8], scale: f64, height: f64) -> Result<(), ExportError> {
        /// The height of a row in the same units as the figure's.
        const ROW: f64 = 20.0;
        let image = Image::new_from_buffer(png)?
            .set_scale_width(scale)
            .set_scale_height(scale);
        let _ = self.sheet.insert_image(self.row, 0, &image)?;
        self.row += (height / ROW).ceil() as u32 + 1;
        Ok(())
    }

    fn number(&mut self, column: u16, value: f64, precision: Precision) -> Result<(), ExportError> {
        let format = Format::new()
            .set_num_format(workbook_format(value, precision))
            .set_align(FormatAlign::Top);
        let _ = self
            .sheet
            .write_number_with_format(self.row, column, value, &format)?;
        Ok(())
    }

    /// Words are written as words, whatever they begin with: a name such as “=A1” or “MAR-2” is
    /// never read as a formula or a date, also not when the cell is edited later.
    fn write(&mut self, column: u16, text: &str, format: &Format) -> Result<(), ExportError> {
        if text.is_empty() {
            return Ok(());
        }
        let kept: String = text
            .chars()
            .filter(|c| *c != '\0')
            .take(MOST_TEXT)
            .collect();
        let _ = self
            .sheet
            .write_string_with_format(self.row, column, kept, format)?;
        Ok(())
    }
}

/// The format of words: the text format, and the mark that keeps them words when edited.
fn words() -> Format {
    Format::new()
        .set_num_format("@")
        .set_quote_prefix()
        .set_align(FormatAlign::Top)
}

fn head(column: &FactColumn) -> String {
    if column.unit.is_empty() {
        column.name.clone()
    } else {
        format!("{}, {}", column.name, column.unit)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_of_sheets_are_lawful() {
        assert_eq!(sheet_name("Samples", None), "Samples");
        let long = sheet_name("Assignments", Some("a fit with [a] very/long title indeed"));
        assert!(long.chars().count() <= MOST_LETTERS && !long.contains(['[', '/']));
    }
}
