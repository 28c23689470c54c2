//! How a table lies in a file: header, units, first sample, and which way round.

use crate::base::layout::{Orientation, UnitsRow};
use crate::table::axis;
use crate::table::finding::Orienting;
use crate::table::read::Options;
use crate::table::read::cell::{Sort, is_unit};

/// How many rows at the beginning are looked at; a header stands within the first forty.
pub const ROWS: usize = 80;

/// How many columns are looked at.
pub const COLUMNS: usize = 300;

/// The lowest row that can be a header.
const LAST_HEADER: usize = 40;

/// A value at the beginning of a file.
#[derive(Clone, Debug)]
pub struct HeadCell {
    /// The text without blanks around it.
    pub text: String,
    /// What it is.
    pub sort: Sort,
}

/// A row at the beginning of a file.
#[derive(Clone, Debug, Default)]
pub struct HeadRow {
    /// The first values.
    pub cells: Vec<HeadCell>,
    /// How many there are in all.
    pub n_fields: usize,
    /// How many of those behind the first ones are filled, as far as that is known.
    pub n_filled_beyond: usize,
}

impl HeadRow {
    fn sort(&self, column: usize) -> Sort {
        self.cells.get(column).map_or(Sort::Blank, |cell| cell.sort)
    }

    fn text(&self, column: usize) -> &str {
        self.cells.get(column).map_or("", |cell| &cell.text)
    }

    /// Position behind the last filled value.
    pub fn width(&self) -> usize {
        if self.n_filled_beyond > 0 {
            return self.n_fields;
        }
        self.cells
            .iter()
            .rposition(|cell| cell.sort != Sort::Blank)
            .map_or(0, |last| last + 1)
    }

    /// How many values are filled.
    pub fn n_filled(&self) -> usize {
        let seen = self.cells.iter().filter(|c| c.sort != Sort::Blank).count();
        seen + self.n_filled_beyond
    }

    fn n_unlike(&self) -> usize {
        let mut texts: Vec<&str> = self
            .cells
            .iter()
            .filter(|cell| cell.sort != Sort::Blank)
            .map(|cell| cell.text.as_str())
            .collect();
        texts.sort_unstable();
        texts.dedup();
        texts.len()
    }
}

/// How a table lies. Rows are positions among all rows of the file, from 0.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Layout {
    /// The header, if there is one.
    pub header: Option<usize>,
    /// The row (or, sideways, the column) of units.
    pub units: Option<usize>,
    /// The first row of values.
    pub first: usize,
    /// The first column that is filled.
    pub left: usize,
    /// Whether the header lacks the name of the first column.
    pub is_header_short: bool,
    /// Which way round.
    pub orientation: Orientation,
    /// Why it seems sideways.
    pub reason: Option<Orienting>,
    /// Whether the reason did not suffice.
    pub is_unsure: bool,
}

/// Finds how a table lies. `rows` are the first rows of the file, `n_rows` is how many there are.
pub fn find(rows: &[HeadRow], n_rows: usize, options: &Options) -> Layout {
    let width = common_width(rows);
    let data = (0..rows.len()).find(|&row| is_data(rows, row, width));
    let header = match options.header_row {
        Some(0) => None,
        Some(row) => Some(row - 1),
        None => guess_header(rows, data, width),
    };
    let after = header.map_or_else(
        || rows.iter().position(|row| row.n_filled() > 0).unwrap_or(0),
        |header| header + 1,
    );
    let is_header_short = header
        .and_then(|header| rows.get(header))
        .is_some_and(|head| is_short(head, rows.get(after..).unwrap_or(&[])));
    let left = left(rows, header, after, is_header_short);
    let mut layout = Layout {
        header,
        units: None,
        first: after,
        left,
        is_header_short,
        orientation: Orientation::SamplesInRows,
        reason: None,
        is_unsure: false,
    };
    let body_rows = n_rows.saturating_sub(after);
    orient(&mut layout, rows, body_rows, options);
    find_units(&mut layout, rows, options);
    layout
}

/// The commonest width of rows with more than one value; the larger of two equally common ones.
pub fn common_width(rows: &[HeadRow]) -> usize {
    let mut widths: Vec<usize> = rows.iter().map(HeadRow::width).filter(|&w| w > 1).collect();
    widths.sort_unstable();
    let mut best = (1, 0);
    for group in widths.chunk_by(|a, b| a == b) {
        if group.len() >= best.1 {
            best = (group[0], group.len());
        }
    }
    best.0
}

fn is_wide(row: &HeadRow, width: usize) -> bool {
    let filled = row.n_filled();
    if width > 1 {
        filled * 2 >= width && filled >= 2
    } else {
        filled > 0
    }
}

/// Whether a row holds values: a number with numbers below it.
fn is_data(rows: &[HeadRow], row: usize, width: usize) -> bool {
    let here = &rows[row];
    if !is_wide(here, width) {
        return false;
    }
    let below: Vec<&HeadRow> = rows[row + 1..]
        .iter()
        .filter(|row| row.n_filled() > 0)
        .take(2)
        .collect();
    (0..here.cells.len()).any(|column| {
        let goes_on = |row: &&HeadRow| {
            let sort = row.sort(column);
            sort.is_quantity() || sort.is_nothing()
        };
        // A name such as “900 nm” is a number with a unit, and no value.
        let sort = here.sort(column);
        sort.is_quantity() && sort != Sort::WithUnit && below.iter().all(goes_on)
    })
}

fn guess_header(rows: &[HeadRow], data: Option<usize>, width: usize) -> Option<usize> {
    let wide = |row: &usize| is_wide(&rows[*row], width);
    let Some(data) = data else {
        return (0..rows.len().min(LAST_HEADER)).find(wide);
    };
    let above = (0..data.min(LAST_HEADER))
        .filter(wide)
        // The most unlike names; of two, the upper, since units repeat.
        .max_by_key(|&row| (rows[row].n_unlike(), std::cmp::Reverse(row)));
    if above.is_some() {
        return above;
    }
    (is_axis_row(rows, data) || is_row_of_names(rows, data)).then_some(data)
}

/// Whether a row that holds some numbers is a header all the same: names such as 1E-05 or 007
/// stand among names that are text, above numbers.
fn is_row_of_names(rows: &[HeadRow], row: usize) -> bool {
    let here = &rows[row];
    let Some(below) = rows[row + 1..].iter().find(|row| row.n_filled() > 0) else {
        return false;
    };
    let names_above_numbers = (0..here.cells.len())
        .filter(|&column| {
            let sort = here.sort(column);
            below.sort(column).is_quantity() && !sort.is_quantity() && !sort.is_nothing()
        })
        .count();
    names_above_numbers > 0 && here.n_unlike() == here.cells.len().min(here.width())
}

/// Whether a row of numbers is an axis (wavelengths, masses) and the row below is not.
fn is_axis_row(rows: &[HeadRow], row: usize) -> bool {
    let steady = |row: &HeadRow| {
        let numbers: Vec<f64> = row
            .cells
            .iter()
            .filter_map(|cell| cell.sort.plain())
            .collect();
        let rises = numbers.windows(2).all(|pair| pair[0] < pair[1]);
        let falls = numbers.windows(2).all(|pair| pair[0] > pair[1]);
        numbers.len() >= 4 && numbers.len() * 2 > row.cells.len() && (rises || falls)
    };
    steady(&rows[row]) && rows.get(row + 1).is_none_or(|below| !steady(below))
}

/// Whether the rows below have one value more than the header has names, none of it at the end.
fn is_short(header: &HeadRow, body: &[HeadRow]) -> bool {
    let expected = header.n_fields + 1;
    let rows: Vec<&HeadRow> = body.iter().filter(|row| row.n_filled() > 1).collect();
    let longer = rows.iter().filter(|row| row.n_fields == expected).count();
    let filled_at_end = rows.iter().filter(|row| row.width() == expected).count();
    header.width() == header.n_fields
        && !rows.is_empty()
        && longer * 10 >= rows.len() * 9
        && filled_at_end * 2 > rows.len()
}

/// The first column in which the header or a value stands.
fn left(rows: &[HeadRow], header: Option<usize>, after: usize, is_short: bool) -> usize {
    let first_filled = |row: &HeadRow| row.cells.iter().position(|c| c.sort != Sort::Blank);
    let of_body = rows
        .get(after..)
        .unwrap_or(&[])
        .iter()
        .filter(|row| row.n_filled() > 1 || row.n_fields == 1)
        .filter_map(first_filled)
        .min();
    let of_header = header
        .and_then(|header| rows.get(header))
        .filter(|_| !is_short)
        .and_then(first_filled);
    [of_body, of_header]
        .into_iter()
        .flatten()
        .min()
        .unwrap_or(0)
}

fn find_units(layout: &mut Layout, rows: &[HeadRow], options: &Options) {
    let asked = match options.units_row {
        Some(UnitsRow::Absent) => return,
        Some(UnitsRow::BelowHeader) => true,
        None => false,
    };
    let Some(header) = layout.header else { return };
    let line: Vec<HeadCell> = match layout.orientation {
        Orientation::SamplesInRows => rows
            .get(layout.first)
            .map_or_else(Vec::new, |row| row.cells.clone()),
        Orientation::SamplesInColumns => {
            let named = rows[header].text(layout.left + 1).to_lowercase();
            if !asked && !matches!(named.as_str(), "unit" | "units" | "einheit") {
                return;
            }
            layout.units = Some(layout.left + 1);
            return;
        }
    };
    let filled = line.iter().filter(|cell| cell.sort != Sort::Blank);
    let units = filled.clone().filter(|cell| is_unit(&cell.text)).count();
    let has_number = filled.clone().any(|cell| cell.sort.is_quantity());
    if asked || (units > 0 && units * 2 >= filled.count().saturating_sub(1).max(1) && !has_number) {
        layout.units = Some(layout.first);
        layout.first += 1;
    }
}

fn orient(layout: &mut Layout, rows: &[HeadRow], n_body: usize, options: &Options) {
    if let Some(orientation) = options.orientation {
        layout.orientation = orientation;
        return;
    }
    let Some(header) = layout.header.and_then(|header| rows.get(header)) else {
        return;
    };
    let body: Vec<&HeadRow> = rows[layout.first..]
        .iter()
        .filter(|row| row.n_filled() > 1)
        .collect();
    let names = layout.left;
    if body.len() < 2 || header.n_fields < 3 || layout.is_header_short {
        return;
    }
    let (reason, is_sure) = if rows_differ_in_kind(header, &body, names) {
        (Orienting::RowsDifferInKind, true)
    } else if names_samples(header.text(names)) || has_axis(header, names) {
        return;
    } else if heads_are_an_axis(header, &body, names) {
        (Orienting::RowHeadsAreAnAxis, true)
    } else if names_predictors(header.text(names)) && are_labels(&body, names) {
        (Orienting::FirstHeadNamesPredictors, true)
    } else if n_body >= 200
        && n_body >= 5 * header.n_fields
        && are_labels(&body, names)
        && is_numeric(&body, names)
    {
        (Orienting::ManyNamedRows, false)
    } else {
        return;
    };
    layout.reason = Some(reason);
    if is_sure {
        layout.orientation = Orientation::SamplesInColumns;
    } else {
        layout.is_unsure = true;
    }
}

/// Whether some rows hold labels from left to right and most others numbers.
fn rows_differ_in_kind(header: &HeadRow, body: &[&HeadRow], names: usize) -> bool {
    let (mut labels, mut numbers) = (0, 0);
    for row in body {
        let cells = row.cells.iter().skip(names + 1);
        let filled: Vec<&HeadCell> = cells.filter(|cell| !cell.sort.is_nothing()).collect();
        if filled.len() < 3 {
            continue;
        }
        let quantities = filled.iter().filter(|cell| cell.sort.is_quantity()).count();
        let repeats_header = filled
            .iter()
            .filter(|cell| header.cells.iter().any(|name| name.text == cell.text))
            .count()
            * 2
            > filled.len();
        let units = filled.iter().filter(|cell| is_unit(&cell.text)).count();
        if quantities * 10 >= filled.len() * 9 {
            numbers += 1;
        } else if quantities == 0
            && units * 2 < filled.len()
            && !repeats_header
            && row.sort(names) == Sort::Text
        {
            let mut texts: Vec<&str> = filled.iter().map(|cell| cell.text.as_str()).collect();
            texts.sort_unstable();
            texts.dedup();
            labels += usize::from(texts.len() * 2 <= filled.len() || texts.len() == filled.len());
        }
    }
    labels > 0 && numbers > labels && (labels + numbers) * 10 >= body.len() * 9
}

fn small_words(text: &str) -> Vec<String> {
    text.to_lowercase()
        .split(|letter: char| !letter.is_alphanumeric() && letter != '/')
        .filter(|word| !word.is_empty())
        .map(str::to_owned)
        .collect()
}

fn names_predictors(text: &str) -> bool {
    const WORDS: [&str; 26] = [
        "peak",
        "peaks",
        "feature",
        "features",
        "marker",
        "markers",
        "snp",
        "probe",
        "channel",
        "variable",
        "variables",
        "predictor",
        "predictors",
        "wavelength",
        "wavenumber",
        "mz",
        "m/z",
        "analyte",
        "compound",
        "taxon",
        "otu",
        "band",
        "gene",
        "protein",
        "metabolite",
        "wellenlänge",
    ];
    small_words(text)
        .iter()
        .any(|word| WORDS.contains(&word.as_str()))
}

/// Whether a head says that samples are named below it.
pub fn names_samples(text: &str) -> bool {
    const WORDS: [&str; 17] = [
        "sample",
        "samples",
        "sampleid",
        "sampleno",
        "id",
        "name",
        "names",
        "specimen",
        "lot",
        "code",
        "label",
        "barcode",
        "subject",
        "accession",
        "probe-id",
        "scan",
        "key",
    ];
    small_words(text)
        .iter()
        .any(|word| WORDS.contains(&word.as_str()))
}

fn has_axis(header: &HeadRow, names: usize) -> bool {
    let heads: Vec<&str> = header
        .cells
        .iter()
        .skip(names + 1)
        .map(|cell| cell.text.as_str())
        .collect();
    axis::of_names(&heads).is_some_and(|axis| axis.is_physical())
}

fn heads_are_an_axis(header: &HeadRow, body: &[&HeadRow], names: usize) -> bool {
    let heads: Vec<&str> = body.iter().map(|row| row.text(names)).collect();
    let Some(axis) = axis::of_names(&heads) else {
        return false;
    };
    let is_named = names_predictors(header.text(names)) || is_unit(header.text(names));
    body.len() >= 4 && (axis.is_physical() || is_named)
}

fn are_labels(body: &[&HeadRow], names: usize) -> bool {
    let mut heads: Vec<&str> = body.iter().map(|row| row.text(names)).collect();
    let labels = body
        .iter()
        .filter(|row| !row.sort(names).is_quantity())
        .count();
    heads.sort_unstable();
    heads.dedup();
    heads.len() == body.len() && labels * 2 > body.len()
}

fn is_numeric(body: &[&HeadRow], names: usize) -> bool {
    let cells = || body.iter().flat_map(|row| row.cells.iter().skip(names + 1));
    let quantities = cells().filter(|cell| cell.sort.is_quantity()).count();
    quantities * 10 > cells().filter(|cell| !cell.sort.is_nothing()).count() * 9
}
