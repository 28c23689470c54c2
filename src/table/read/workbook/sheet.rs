//! The filled cells of one sheet. The only file that opens workbooks.

use crate::base::work::{Cancelled, Work};
use crate::table::column::plain;
use crate::table::read::cell::trimmed;
use crate::table::read::error::ReadError;
use crate::table::read::workbook::hidden::{Hidden, hidden};
use crate::table::read::{Choices, SheetChoice, Visibility};
use calamine::{
    Data, DataRef, ExcelDateTime, Ods, OdsError, Reader, SheetType, SheetVisible, Sheets,
    open_workbook_auto_from_rs, open_workbook_from_rs,
};
use std::borrow::Cow;
use std::io::Cursor;
use std::panic::{AssertUnwindSafe, catch_unwind};

/// How many cells are read between two questions whether to go on.
const BETWEEN_QUESTIONS: usize = 10_000;

/// What a cell holds, as it is stored.
#[derive(Clone, Debug, PartialEq)]
pub enum Stuff {
    /// A number.
    Number(f64),
    /// Text.
    Text(String),
    /// A date or a time, in the form 2026-03-02 or 2026-03-02 14:30:00.
    Date(String),
    /// True or false.
    Truth(bool),
    /// An error value, such as #DIV/0!.
    Error(String),
}

impl Stuff {
    /// What is stored, as text.
    pub fn text(&self) -> Cow<'_, str> {
        match self {
            Self::Number(number) => Cow::Owned(plain(*number)),
            Self::Text(text) | Self::Date(text) | Self::Error(text) => Cow::Borrowed(text),
            Self::Truth(true) => Cow::Borrowed("true"),
            Self::Truth(false) => Cow::Borrowed("false"),
        }
    }
}

/// A filled cell.
#[derive(Clone, Debug, PartialEq)]
pub struct Cell {
    /// The column, from 0.
    pub column: u32,
    /// What it holds.
    pub stuff: Stuff,
}

/// The filled cells of a sheet.
#[derive(Clone, Debug, Default)]
pub struct Sheet {
    /// The sheet's name.
    pub name: String,
    /// All rows from the first of the sheet to the last filled one, each with its filled cells in order.
    pub rows: Vec<Vec<Cell>>,
    /// One more than the last filled column.
    pub width: usize,
    /// The first cells of merged ones: row and column, from 0.
    pub merged: Vec<(u32, u32)>,
    /// What the workbook hides of it.
    pub hidden: Hidden,
}

/// A workbook of which one sheet has been read.
pub struct Book {
    /// The sheet.
    pub sheet: Sheet,
    /// All sheets.
    pub choices: Choices,
}

enum Stop {
    Cancelled,
    Error(ReadError),
}

type Opened<'a> = Sheets<Cursor<&'a [u8]>>;

/// Opens a workbook and reads the sheet of the given name, or the first that holds a table.
pub fn open(
    bytes: &[u8],
    asked: Option<&str>,
    work: &Work<'_>,
) -> Result<Result<Book, ReadError>, Cancelled> {
    work.step(0, 1)?;
    // The reading of workbooks is not ours, and hostile bytes may make it panic. That must not
    // take the user's work along; nothing it touched is used afterwards.
    let attempt = catch_unwind(AssertUnwindSafe(|| attempt(bytes, asked, work)));
    match attempt {
        Ok(Ok(book)) => Ok(Ok(book)),
        Ok(Err(Stop::Cancelled)) => Err(Cancelled),
        Ok(Err(Stop::Error(error))) => Ok(Err(error)),
        Err(_) => Ok(Err(ReadError::DamagedArchive {
            details: "the contents of the workbook contradict each other".to_owned(),
        })),
    }
}

fn attempt(bytes: &[u8], asked: Option<&str>, work: &Work<'_>) -> Result<Book, Stop> {
    let mut book =
        open_workbook_auto_from_rs(Cursor::new(bytes)).map_err(|_| Stop::Error(why_not(bytes)))?;
    let sheets: Vec<SheetChoice> = book
        .sheets_metadata()
        .iter()
        .filter(|sheet| sheet.typ == SheetType::WorkSheet)
        .map(|sheet| SheetChoice {
            name: sheet.name.clone(),
            visibility: match sheet.visible {
                SheetVisible::Visible => Visibility::Visible,
                SheetVisible::Hidden | SheetVisible::VeryHidden => Visibility::Hidden,
            },
        })
        .collect();
    let choices = Choices { sheets };
    let sheet = match asked {
        Some(asked) => {
            let same = |name: &str| trimmed(name).to_lowercase() == trimmed(asked).to_lowercase();
            let names = || choices.sheets.iter().map(|sheet| &sheet.name);
            let name = names()
                .find(|name| *name == asked)
                .or_else(|| names().find(|name| same(name)))
                .ok_or_else(|| {
                    Stop::Error(ReadError::NoSuchSheet {
                        asked: asked.to_owned(),
                        sheets: names().cloned().collect(),
                    })
                })?
                .clone();
            read(&mut book, &name, work)?
        }
        None => first_with_table(&mut book, &choices, work)?,
    };
    let mut sheet = sheet;
    if let Sheets::Xlsx(_) = &book {
        sheet.hidden = hidden(bytes, &sheet.name, work).map_err(|_| Stop::Cancelled)?;
    }
    Ok(Book { sheet, choices })
}

/// The first sheet with at least two rows and two columns; or the first that has any cell.
/// Sheets that can be seen come before hidden ones.
fn first_with_table(
    book: &mut Opened<'_>,
    choices: &Choices,
    work: &Work<'_>,
) -> Result<Sheet, Stop> {
    let mut fallback: Option<Sheet> = None;
    let of = |visibility| {
        choices
            .sheets
            .iter()
            .filter(move |sheet| sheet.visibility == visibility)
    };
    for choice in of(Visibility::Visible).chain(of(Visibility::Hidden)) {
        let sheet = read(book, &choice.name, work)?;
        let filled = sheet.rows.iter().filter(|row| !row.is_empty()).count();
        if filled > 1 && sheet.width > 1 {
            return Ok(sheet);
        }
        if fallback
            .as_ref()
            .is_none_or(|known| known.rows.is_empty() && filled > 0)
        {
            fallback = Some(sheet);
        }
    }
    fallback.ok_or(Stop::Error(ReadError::NoSheet))
}

fn why_not(bytes: &[u8]) -> ReadError {
    let contains = |text: &[u8]| memchr::memmem::find(bytes, text).is_some();
    if !bytes.starts_with(b"PK") {
        let wide: Vec<u8> = "EncryptedPackage"
            .encode_utf16()
            .flat_map(u16::to_le_bytes)
            .collect();
        return if contains(&wide) {
            ReadError::Encrypted
        } else {
            ReadError::DamagedArchive {
                details: "the old workbook cannot be followed".to_owned(),
            }
        };
    }
    // The list of contents stands at the very end of a zip archive.
    let end = &bytes[bytes.len().saturating_sub(70_000)..];
    if memchr::memmem::find(end, b"PK\x05\x06").is_none() {
        return ReadError::TruncatedArchive { unpacked: 0 };
    }
    if let Err(OdsError::Password) = open_workbook_from_rs::<Ods<_>, _>(Cursor::new(bytes)) {
        return ReadError::Encrypted;
    }
    if contains(b"xl/") || contains(b"content.xml") {
        ReadError::DamagedArchive {
            details: "the parts of the workbook cannot be read".to_owned(),
        }
    } else {
        ReadError::NotAWorkbook
    }
}

fn damaged(error: impl std::fmt::Display) -> Stop {
    Stop::Error(ReadError::DamagedArchive {
        details: error.to_string(),
    })
}

fn read(book: &mut Opened<'_>, name: &str, work: &Work<'_>) -> Result<Sheet, Stop> {
    let mut filled = Filled::default();
    match book {
        // The cells come one by one, so that two cells far apart do not claim all between them.
        Sheets::Xlsx(book) => {
            let mut cells = book.worksheet_cells_reader(name).map_err(damaged)?;
            while let Some(cell) = cells.next_cell().map_err(damaged)? {
                filled.add(cell.get_position(), from_ref(cell.get_value()), work)?;
            }
            drop(cells);
            filled.merged = book
                .merge_cells_by_sheet_name(name)
                .unwrap_or_default()
                .iter()
                .map(|merged| merged.start)
                .collect();
        }
        Sheets::Xlsb(book) => {
            let mut cells = book.worksheet_cells_reader(name).map_err(damaged)?;
            while let Some(cell) = cells.next_cell().map_err(damaged)? {
                filled.add(cell.get_position(), from_ref(cell.get_value()), work)?;
            }
        }
        Sheets::Xls(book) => {
            let range = book.worksheet_range(name).map_err(damaged)?;
            filled.add_range(&range, work)?;
            filled.merged = book
                .merge_cells_by_sheet_name(name)
                .unwrap_or_default()
                .iter()
                .map(|merged| merged.start)
                .collect();
        }
        Sheets::Ods(book) => {
            let range = book.worksheet_range(name).map_err(damaged)?;
            filled.add_range(&range, work)?;
        }
    }
    Ok(filled.into_sheet(name))
}

/// Cells in the order in which a workbook stores them.
#[derive(Default)]
struct Filled {
    cells: Vec<(u32, Cell)>,
    merged: Vec<(u32, u32)>,
    seen: usize,
}

impl Filled {
    fn add(
        &mut self,
        (row, column): (u32, u32),
        stuff: Option<Stuff>,
        work: &Work<'_>,
    ) -> Result<(), Stop> {
        self.seen += 1;
        if self.seen.is_multiple_of(BETWEEN_QUESTIONS) {
            work.check().map_err(|_| Stop::Cancelled)?;
        }
        // No kind of workbook has more rows or columns.
        if row >= 1 << 20 || column >= 1 << 14 {
            return Ok(());
        }
        if let Some(stuff) = stuff {
            self.cells.push((row, Cell { column, stuff }));
        }
        Ok(())
    }

    fn add_range(&mut self, range: &calamine::Range<Data>, work: &Work<'_>) -> Result<(), Stop> {
        let (top, left) = range.start().unwrap_or((0, 0));
        for (row, column, data) in range.used_cells() {
            let place = (
                top.saturating_add(row as u32),
                left.saturating_add(column as u32),
            );
            self.add(place, from_owned(data), work)?;
        }
        Ok(())
    }

    fn into_sheet(mut self, name: &str) -> Sheet {
        self.cells.sort_by_key(|(row, cell)| (*row, cell.column));
        self.cells.dedup_by_key(|(row, cell)| (*row, cell.column));
        let n_rows = self.cells.last().map_or(0, |(row, _)| *row as usize + 1);
        let mut sheet = Sheet {
            name: name.to_owned(),
            rows: vec![Vec::new(); n_rows],
            width: 0,
            hidden: Hidden::default(),
            merged: self.merged,
        };
        for (row, cell) in self.cells {
            sheet.width = sheet.width.max(cell.column as usize + 1);
            sheet.rows[row as usize].push(cell);
        }
        sheet
    }
}

fn from_text(text: &str) -> Option<Stuff> {
    (!trimmed(text).is_empty()).then(|| Stuff::Text(text.to_owned()))
}

fn from_number(number: f64) -> Option<Stuff> {
    Some(if number.is_finite() {
        Stuff::Number(number)
    } else {
        Stuff::Error("#NUM!".to_owned())
    })
}

fn from_date(date: &ExcelDateTime) -> Stuff {
    let text = match date.as_datetime() {
        Some(time) if date.is_datetime() => {
            let text = time.to_string();
            text.strip_suffix(" 00:00:00")
                .map_or(text.clone(), str::to_owned)
        }
        _ => plain(date.as_f64()),
    };
    Stuff::Date(text)
}

fn from_iso(text: &str) -> Stuff {
    Stuff::Date(text.trim_end_matches("T00:00:00").replace('T', " "))
}

fn from_owned(data: &Data) -> Option<Stuff> {
    match data {
        Data::Int(number) => from_number(*number as f64),
        Data::Float(number) => from_number(*number),
        Data::String(text) => from_text(text),
        Data::Bool(truth) => Some(Stuff::Truth(*truth)),
        Data::DateTime(date) => Some(from_date(date)),
        Data::DateTimeIso(text) | Data::DurationIso(text) => Some(from_iso(text)),
        Data::Error(error) => Some(Stuff::Error(error.to_string())),
        Data::Empty => None,
    }
}

fn from_ref(data: &DataRef<'_>) -> Option<Stuff> {
    match data {
        DataRef::Int(number) => from_number(*number as f64),
        DataRef::Float(number) => from_number(*number),
        DataRef::String(text) => from_text(text),
        DataRef::SharedString(text) => from_text(text),
        DataRef::Bool(truth) => Some(Stuff::Truth(*truth)),
        DataRef::DateTime(date) => Some(from_date(date)),
        DataRef::DateTimeIso(text) | DataRef::DurationIso(text) => Some(from_iso(text)),
        DataRef::Error(error) => Some(Stuff::Error(error.to_string())),
        DataRef::Empty => None,
    }
}
