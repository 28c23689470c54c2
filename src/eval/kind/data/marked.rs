//! Quality-control samples: known by a mark, measured along with the others, not analysed.

use crate::base::problem::{Place, Problem};
use crate::eval::kind::data::roles::{position, text_of};
use crate::study::settings::data::Data;
use crate::table::Table;

/// Which of the rows are quality-control samples.
pub fn marked(
    settings: &Data,
    table: &Table,
    rows: &[usize],
    file: &str,
) -> Result<Vec<bool>, Problem> {
    let Some(marked) = &settings.quality_control else {
        return Ok(vec![false; rows.len()]);
    };
    let column = &table.columns()[position(table, &marked.column, file)?];
    let flags: Vec<bool> = rows
        .iter()
        .map(|&row| text_of(column, row).is_some_and(|text| marked.values.contains(&text)))
        .collect();
    if flags.contains(&true) {
        return Ok(flags);
    }
    Err(Problem::new(
        "no-quality-control",
        format!(
            "No sample has “{}” in the column “{}”, which should mark quality-control samples.",
            marked.values.join("” or “"),
            marked.column
        ),
    )
    .at(Place::file(file).with_column(&marked.column))
    .mend("Choose another text or column, or mark no quality-control samples."))
}

/// Which samples are a group of their own, under their own name: quality-control samples, whose
/// names are given with the marks.
#[derive(Clone, Copy)]
pub enum Own<'a> {
    /// Whatever stands there.
    Always(&'a [String], &'a [bool]),
    /// Where nothing stands there.
    WhereBlank(&'a [String], &'a [bool]),
}

impl<'a> Own<'a> {
    /// The name of the group that a sample is by itself, if it is one.
    pub fn name(self, at: usize, text: Option<&str>) -> Option<&'a String> {
        let (names, is_marked) = match self {
            Self::Always(names, is_marked) => (names, is_marked),
            Self::WhereBlank(names, is_marked) if text.is_none() => (names, is_marked),
            Self::WhereBlank(..) => return None,
        };
        is_marked[at].then(|| &names[at])
    }
}

/// A quality-control sample without a covariate counts as an average one.
pub fn blank_is_mean(values: &mut [f64]) {
    let known = || values.iter().filter(|value| !value.is_nan());
    let mean = known().sum::<f64>() / known().count() as f64;
    for value in values.iter_mut().filter(|value| value.is_nan()) {
        *value = mean;
    }
}
