//! How a table is read, in words: for Data cells and for Score cells.

use crate::base::layout::{DecimalMark, Delimiter, Encoding, Grouping, Orientation, UnitsRow};
use crate::report::noun;
use crate::report::sentence::{Editor, Sentence};
use crate::report::word;
use crate::study::settings::data::{Data, Join, LeadingZeros, LetterCase, TableSource};
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::data::DataSlot;
use crate::study::settings::slot::table::TableSlot;

const ORIENTATIONS: [(&str, &str); 3] = [
    ("rows", "rows"),
    ("columns", "columns"),
    ("as-found", "rows or columns, as found"),
];
const ENCODINGS: [(&str, &str); 5] = [
    ("as-found", "as found"),
    ("utf-8", "as UTF-8"),
    ("utf-16-le", "as UTF-16, low byte first"),
    ("utf-16-be", "as UTF-16, high byte first"),
    ("windows-1252", "as Windows-1252"),
];
const DELIMITERS: [(&str, &str); 6] = [
    ("as-found", "the mark that is found"),
    ("comma", "commas"),
    ("semicolon", "semicolons"),
    ("tab", "tabulators"),
    ("bar", "upright bars"),
    ("blanks", "blanks"),
];
const DECIMALS: [(&str, &str); 3] = [
    ("as-found", "the mark that is found"),
    ("point", "a point"),
    ("comma", "a comma"),
];
const GROUPINGS: [(&str, &str); 3] = [
    ("as-found", "as found"),
    ("absent", "never as one number"),
    ("read", "as one number"),
];
const UNITS_ROWS: [(&str, &str); 3] = [
    ("as-found", "a row of units, if there is one,"),
    ("absent", "no row of units"),
    ("below-header", "a row of units"),
];
const CASES: [(&str, &str); 2] = [("distinct", "told apart"), ("folded", "taken as the same")];
const ZEROS: [(&str, &str); 2] = [("kept", "kept"), ("ignored", "ignored")];

/// “Read **a.csv**, samples in **rows**, named by **scan**; join **b.csv** on **wheel**.”
#[must_use]
pub fn read(data: &Data) -> Sentence {
    let mut sentence = Sentence::new().text("Read ");
    if data.tables.is_empty() {
        sentence = sentence.word(
            Slot::Data(DataSlot::NextTable),
            "a table still to be chosen",
            Editor::File,
        );
    }
    for (at, table) in data.tables.iter().enumerate() {
        let slot = |slot: TableSlot| Slot::Data(DataSlot::Table(at, slot));
        if at > 0 {
            sentence = sentence.text("; join ");
        }
        sentence = file(sentence, table, &slot);
        if at == 0 {
            sentence = orientation(sentence.text(", samples in "), table, &slot);
            sentence = named(sentence, data);
        }
        if let Some(join) = &table.join {
            sentence = sentence
                .text(if table.is_workbook() { ", on " } else { " on " })
                .column(slot(TableSlot::JoinLeft), Some(&join.left), "");
        }
    }
    if data.tables.is_empty() {
        sentence = named(sentence, data);
    }
    sentence.text(".")
}

fn named(sentence: Sentence, data: &Data) -> Sentence {
    sentence.text(", named by ").column(
        Slot::Data(DataSlot::SampleName),
        data.sample_name.as_ref(),
        "no column",
    )
}

/// The file, and the sheet of a workbook.
pub fn file(sentence: Sentence, table: &TableSource, slot: &dyn Fn(TableSlot) -> Slot) -> Sentence {
    let sentence = sentence.word(slot(TableSlot::File), table.file.clone(), Editor::File);
    if !table.is_workbook() {
        return sentence;
    }
    let text = table.sheet.as_ref().map_or_else(
        || "first sheet".to_owned(),
        |sheet| format!("sheet {sheet}"),
    );
    sentence
        .text(", ")
        .word(slot(TableSlot::Sheet), text, Editor::Text)
}

/// Whether a sample is a row or a column.
pub fn orientation(
    sentence: Sentence,
    table: &TableSource,
    slot: &dyn Fn(TableSlot) -> Slot,
) -> Sentence {
    let text = match table.orientation {
        Some(Orientation::SamplesInRows) => "rows",
        Some(Orientation::SamplesInColumns) => "columns",
        None => "rows or columns, as found",
    };
    sentence.choice(slot(TableSlot::Orientation), text, &ORIENTATIONS)
}

/// How one table of a Data cell is read and joined.
#[must_use]
pub fn details(data: &Data, at: usize) -> Sentence {
    let slot = |slot: TableSlot| Slot::Data(DataSlot::Table(at, slot));
    let table = &data.tables[at];
    let mut sentence = Sentence::new().text(format!("In {}, ", table.file));
    if at > 0 {
        sentence = orientation(sentence.text("samples stand in "), table, &slot).text("; ");
    }
    sentence = layout(sentence, table, &slot);
    if let Some(join) = &table.join {
        sentence = matching(sentence, join, &slot);
    }
    sentence.text(".")
}

fn matching(sentence: Sentence, join: &Join, slot: &dyn Fn(TableSlot) -> Slot) -> Sentence {
    let case = match join.case {
        LetterCase::Distinct => "told apart",
        LetterCase::Folded => "taken as the same",
    };
    let zeros = match join.zeros {
        LeadingZeros::Kept => "kept",
        LeadingZeros::Ignored => "ignored",
    };
    sentence
        .text("; it is matched by its column ")
        .column(slot(TableSlot::JoinRight), Some(&join.right), "")
        .text(", with upper and lower case ")
        .choice(slot(TableSlot::JoinCase), case, &CASES)
        .text(" and zeros in front of numbers ")
        .choice(slot(TableSlot::JoinZeros), zeros, &ZEROS)
}

/// Header, units, separators, letters, missing codes.
pub fn layout(
    sentence: Sentence,
    table: &TableSource,
    slot: &dyn Fn(TableSlot) -> Slot,
) -> Sentence {
    let header = table.header_row.map_or_else(
        || "the line that is found".to_owned(),
        |row| format!("line {}", word::whole(row as u64)),
    );
    let units = match table.units_row {
        None => "a row of units, if there is one,",
        Some(UnitsRow::Absent) => "no row of units",
        Some(UnitsRow::BelowHeader) => "a row of units",
    };
    let mut sentence = sentence
        .text("column names stand in ")
        .word(
            slot(TableSlot::HeaderRow),
            header,
            word::number_editor(slot(TableSlot::HeaderRow)),
        )
        .text(" and ")
        .choice(slot(TableSlot::UnitsRow), units, &UNITS_ROWS)
        .text(" follows; ");
    if !table.is_workbook() {
        sentence = marks(sentence, table, slot);
    }
    let grouping = match table.grouping {
        None => GROUPINGS[0].1,
        Some(Grouping::Absent) => GROUPINGS[1].1,
        Some(Grouping::Read) => GROUPINGS[2].1,
    };
    sentence = sentence
        .text("groups of digits as in 1,234 are read ")
        .choice(slot(TableSlot::Grouping), grouping, &GROUPINGS)
        .text("; ");
    let mut codes = vec!["blanks".to_owned()];
    codes.extend(table.missing_codes.iter().map(|code| format!("“{code}”")));
    sentence
        .word(
            slot(TableSlot::MissingCodes),
            noun::list(&codes),
            Editor::List,
        )
        .text(" mean missing")
}

fn marks(sentence: Sentence, table: &TableSource, slot: &dyn Fn(TableSlot) -> Slot) -> Sentence {
    let delimiter = match table.delimiter {
        None => "the mark that is found",
        Some(Delimiter::Comma) => "commas",
        Some(Delimiter::Semicolon) => "semicolons",
        Some(Delimiter::Tab) => "tabulators",
        Some(Delimiter::Bar) => "upright bars",
        Some(Delimiter::Blanks) => "blanks",
    };
    let decimal = match table.decimal {
        None => "the mark that is found",
        Some(DecimalMark::Point) => "a point",
        Some(DecimalMark::Comma) => "a comma",
    };
    let encoding = match table.encoding {
        None => "as found",
        Some(Encoding::Utf8) => "as UTF-8",
        Some(Encoding::Utf16Le) => "as UTF-16, low byte first",
        Some(Encoding::Utf16Be) => "as UTF-16, high byte first",
        Some(Encoding::Windows1252) => "as Windows-1252",
    };
    sentence
        .text("values are parted by ")
        .choice(slot(TableSlot::Delimiter), delimiter, &DELIMITERS)
        .text(", decimals follow ")
        .choice(slot(TableSlot::Decimal), decimal, &DECIMALS)
        .text(" and letters are read ")
        .choice(slot(TableSlot::Encoding), encoding, &ENCODINGS)
        .text("; ")
}
