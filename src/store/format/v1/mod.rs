//! Format 1 of a study file: how settings and links are written and read.

pub mod data;
pub mod fit;
mod group;
mod kept;
pub mod prepare;
pub mod prose;
pub mod question;
pub mod study;
pub mod weights;
pub mod words;

use crate::base::problem::Problem;
use crate::store::format::FindTable;
use crate::store::format::place::{At, Fault, Fields};
use crate::study::cell::{CellId, Kind};
use crate::study::link::Link;
use crate::study::settings::Settings;
use crate::study::settings::compare::Compare;
use crate::study::settings::data::TableSource;
use crate::study::settings::score::Score;
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::fit::FitSlot;
use crate::study::settings::slot::question::QuestionSlot;
use serde_json::Value;

pub use crate::store::format::v1::group::Group;

/// The field that says what a cell draws on.
pub const DRAWS_ON: &str = "draws-on";

/// What settings need to know to be read.
#[derive(Clone, Copy)]
pub struct Reading<'a> {
    /// The cell with a title.
    pub titled: &'a dyn Fn(&str) -> Option<CellId>,
    /// The bytes and the file name of a table, from the name and the hash in the file.
    pub table: &'a FindTable<'a>,
}

/// What settings need to know to be written.
#[derive(Clone, Copy)]
pub struct Writing<'a> {
    /// How a cell is called.
    pub link: &'a dyn Fn(CellId) -> Value,
    /// How a table's file is called.
    pub file: &'a dyn Fn(&TableSource) -> String,
    /// How what is written will be read, where prose may be written as it is typed.
    pub reread: Option<&'a Reading<'a>>,
}

/// The word for a kind of cell.
#[must_use]
pub const fn kind_word(kind: Kind) -> &'static str {
    match kind {
        Kind::Data => "data",
        Kind::Prepare => "prepare",
        Kind::Fit => "fit",
        Kind::Question => "question",
        Kind::Compare => "compare",
        Kind::Score => "score",
        Kind::Prose => "prose",
    }
}

/// The kind of cell that a word means.
#[must_use]
pub fn kind_of(word: &str) -> Option<Kind> {
    Kind::ALL.into_iter().find(|kind| kind_word(*kind) == word)
}

/// Reads the settings of a cell of a kind.
///
/// # Errors
/// The first [`Fault`].
pub fn read_settings(
    kind: Kind,
    fields: &mut Fields<'_>,
    reading: &Reading<'_>,
) -> Result<Settings, Fault> {
    Ok(match kind {
        Kind::Data => Settings::Data(data::read(fields, reading)?),
        Kind::Prepare => Settings::Prepare(prepare::read(fields, reading)?),
        Kind::Fit => Settings::Fit(fit::read(fields, reading)?),
        Kind::Question => Settings::Question(question::read(fields, reading)?),
        Kind::Compare => Settings::Compare(Compare {
            fits: fields
                .read(DRAWS_ON, |at| at.each(|entry| link_at(&entry, reading)))?
                .unwrap_or_default(),
        }),
        Kind::Score => Settings::Score(Score {
            fit: read_link(fields, reading)?,
            table: fields.read("table", |at| data::read_table(&at, reading))?,
        }),
        Kind::Prose => Settings::Prose(prose::read(fields, reading)?),
    })
}

/// The first number in settings that lies outside what the one door to settings takes.
///
/// Counts without bounds could ask for more memory or time than there is. Seeds are spared: each
/// is as good as any other. So are the settings of tables, which the reader of tables judges.
#[must_use]
pub fn out_of_bounds(settings: &Settings) -> Option<Problem> {
    let is_judged = |slot: &Slot| match slot {
        Slot::Fit(FitSlot::Seed) | Slot::Question(QuestionSlot::Seed) => false,
        Slot::Prepare(_) | Slot::Fit(_) | Slot::Question(_) => slot.bounds().is_some(),
        Slot::Data(_) | Slot::Compare(_) | Slot::Score(_) | Slot::Prose(_) => false,
    };
    settings
        .slots()
        .iter()
        .filter(|slot| is_judged(slot))
        .find_map(|slot| {
            let value = settings.value(slot)?;
            settings.with(slot, value).err()
        })
}

/// Writes settings into the group of their cell.
///
/// What is written also says what a recorded result was made from. A setting that a later version
/// adds is therefore written only where it is not the usual one; else every record would be due.
pub fn write_settings(settings: &Settings, group: &mut Group, writing: &Writing<'_>) {
    match settings {
        Settings::Data(data) => data::write(data, group, writing),
        Settings::Prepare(prepare) => prepare::write(prepare, group, writing),
        Settings::Fit(fit) => fit::write(fit, group, writing),
        Settings::Question(question) => question::write(question, group, writing),
        Settings::Compare(compare) => {
            let link = |link: &Link| link.0.map_or(Value::Null, writing.link);
            let fits: Vec<Value> = compare.fits.iter().map(link).collect();
            group.put(DRAWS_ON, fits);
        }
        Settings::Score(score) => {
            group.put_some(DRAWS_ON, score.fit.0.map(writing.link));
            let table = score.table.as_ref();
            group.put_some(
                "table",
                table.map(|table| data::write_table(table, writing)),
            );
        }
        Settings::Prose(prose) => prose::write(prose, group, writing),
    }
}

/// Reads what a cell draws on; nothing when the field is absent.
///
/// # Errors
/// A [`Fault`] when no cell is meant.
pub fn read_link(fields: &mut Fields<'_>, reading: &Reading<'_>) -> Result<Link, Fault> {
    let link = fields.read(DRAWS_ON, |at| link_at(&at, reading))?;
    Ok(link.unwrap_or_default())
}

/// A cell is called by its number or, in a file written by hand, by its title.
fn link_at(at: &At<'_>, reading: &Reading<'_>) -> Result<Link, Fault> {
    if at.value().is_null() {
        return Ok(Link::open());
    }
    if at.value().is_string() {
        let title = at.text()?;
        return (reading.titled)(&title).map(Link::to).ok_or_else(|| {
            at.fault(
                &format!("No cell is called “{title}”."),
                "Write the title or the number of a cell of this study.",
            )
        });
    }
    Ok(Link::to(CellId::new(at.count()?)))
}
