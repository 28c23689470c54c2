//! Files that are no tables, or were damaged on their way: an answer, never a panic.

use crate::{bytes_of, read_bytes};
use widefold::table::read::{Options, ReadError};

fn error(bytes: &[u8]) -> ReadError {
    match read_bytes(bytes, "x", &Options::default(), 1) {
        Ok(reading) => panic!("{:?}", reading.table),
        Err(error) => error,
    }
}

#[test]
fn what_is_no_table_gets_its_own_answer() {
    assert_eq!(error(b""), ReadError::Empty);
    assert_eq!(error(b" \n \r\n"), ReadError::Blank);
    assert_eq!(error(b"\xef\xbb\xbf"), ReadError::Blank);
    assert_eq!(error(b"id,a,b\n"), ReadError::HeaderOnly { columns: 3 });
    assert_eq!(
        error(b"%PDF-1.7 \x00\x01"),
        ReadError::Binary {
            what: Some("a PDF document")
        }
    );
    let noise: Vec<u8> = (0..5000_u32).map(|i| (i * i * 31 % 253) as u8).collect();
    assert_eq!(error(&noise), ReadError::Binary { what: None });
    assert!(matches!(
        error(b"PK\x03\x04 and so on"),
        ReadError::TruncatedArchive { .. }
    ));
}

#[test]
fn truncated_archives_are_said_to_be_truncated() {
    for file in ["cellar.xlsx", "two-sheets.ods", "bars.txt.gz"] {
        let whole = bytes_of(file);
        for share in [3, 5, 9] {
            let error = error(&whole[..whole.len() * share / 10]);
            assert!(
                matches!(error, ReadError::TruncatedArchive { .. }),
                "{file}: {error:?}"
            );
        }
    }
}

#[test]
fn a_sheet_or_row_that_is_not_there_is_named_with_what_there_is() {
    let options = Options {
        sheet: Some("Wet chemisty".to_owned()),
        ..Options::default()
    };
    let error = read_bytes(&bytes_of("cellar.xlsx"), "cellar.xlsx", &options, 1).unwrap_err();
    let sheets = ["Read me", "Wet chemistry", "old"]
        .map(str::to_owned)
        .to_vec();
    assert_eq!(
        error,
        ReadError::NoSuchSheet {
            asked: "Wet chemisty".to_owned(),
            sheets
        }
    );
    for file in ["plain.csv", "cellar.xlsx"] {
        let options = Options {
            header_row: Some(900),
            ..Options::default()
        };
        let error = read_bytes(&bytes_of(file), file, &options, 1).unwrap_err();
        assert!(
            matches!(error, ReadError::NoSuchRow { asked: 900, .. }),
            "{error:?}"
        );
    }
}

/// A small generator of its own, so that the same bytes are tried every time.
struct Dice(u64);

impl Dice {
    fn below(&mut self, limit: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % limit.max(1) as u64) as usize
    }
}

fn mutated(bytes: &[u8], dice: &mut Dice) -> Vec<u8> {
    const LETTERS: &[u8] = b"\"\"\n\r,;\t|'<>-+.eE0 \0\xff\xc3#";
    let mut bytes = bytes.to_vec();
    for _ in 0..=dice.below(6) {
        let at = dice.below(bytes.len());
        match dice.below(6) {
            0 => bytes.truncate(at),
            1 if at < bytes.len() => bytes[at] = dice.below(256) as u8,
            2 => bytes.insert(at.min(bytes.len()), LETTERS[dice.below(LETTERS.len())]),
            3 if at < bytes.len() => drop(bytes.remove(at)),
            4 => {
                let end = (at + dice.below(40)).min(bytes.len());
                let piece = bytes[at.min(end)..end].to_vec();
                let to = dice.below(bytes.len());
                drop(bytes.splice(to..to, piece).collect::<Vec<u8>>());
            }
            _ if at < bytes.len() => bytes[at] = LETTERS[dice.below(LETTERS.len())],
            _ => {}
        }
    }
    bytes
}

#[test]
fn no_bytes_make_the_reader_panic() {
    let texts = [
        "plain.csv",
        "semicolon.csv",
        "tab-utf16.txt",
        "line-breaks.csv",
        "short-header.txt",
        "deep.csv",
        "sideways.csv",
        "sideways-axis.csv",
        "states.csv",
        "identifiers.csv",
        "names.csv",
        "uneven.csv",
        "damaged.csv",
        "no-header.txt",
        "bars.txt.gz",
        "old-breaks.csv",
    ];
    let books = ["cellar.xlsx", "cellar.xls", "two-sheets.ods"];
    let mut dice = Dice(20_260_301);
    let mut tables = 0;
    for (files, times) in [(&texts[..], 250), (&books[..], 60)] {
        for file in files {
            let whole = bytes_of(file);
            for _ in 0..times {
                let bytes = mutated(&whole, &mut dice);
                let options = Options {
                    header_row: [None, Some(0), Some(1), Some(3)][dice.below(4)],
                    ..Options::default()
                };
                let Ok(reading) = read_bytes(&bytes, file, &options, 1) else {
                    continue;
                };
                tables += 1;
                // Every value and every place can be asked for.
                for (at, column) in reading.table.columns().iter().enumerate() {
                    for row in 0..reading.table.n_rows() {
                        let _ = (column.value(row), reading.table.place(row, at));
                    }
                }
            }
        }
    }
    assert!(tables > 1000, "only {tables} were still tables");
}
