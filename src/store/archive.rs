//! The packed form: a zip with the study, its tables and its record.

use crate::base::problem::{Place, Problem};
use std::collections::BTreeMap;
use std::io::{Cursor, Read, Write};
use zip::result::ZipResult;
use zip::write::SimpleFileOptions;
use zip::{CompressionMethod, DateTime, ZipArchive, ZipWriter};

/// The name of the study's own entry.
pub const STUDY: &str = "study.json";

/// The plain-text description of the format, which lies in every packed study.
pub const ABOUT: &str = include_str!("about.txt");

/// No entry of a study is larger than this. A damaged or hostile file could otherwise claim more
/// memory than there is.
const MOST_BYTES: u64 = 4 << 30;

/// An entry on its way into the archive.
#[derive(Debug)]
pub struct Entry<'a> {
    /// Its name.
    pub name: String,
    /// Its bytes.
    pub bytes: &'a [u8],
}

/// Packs entries in the order in which they are given. Nothing but names and bytes has an
/// influence: the same entries give the same archive.
///
/// # Errors
/// A [`Problem`] when they do not fit into an archive.
pub fn pack(entries: &[Entry<'_>]) -> Result<Vec<u8>, Problem> {
    let write = || -> ZipResult<Vec<u8>> {
        let mut writer = ZipWriter::new(Cursor::new(Vec::new()));
        for entry in entries {
            let is_packed = [".gz", ".xlsx", ".xlsm", ".xlsb", ".ods", ".zip"]
                .iter()
                .any(|end| entry.name.ends_with(end));
            let method = if is_packed {
                CompressionMethod::Stored
            } else {
                CompressionMethod::Deflated
            };
            let options = SimpleFileOptions::default()
                .compression_method(method)
                .last_modified_time(DateTime::default())
                .unix_permissions(0o644)
                .large_file(entry.bytes.len() as u64 >= u64::from(u32::MAX));
            writer.start_file(entry.name.as_str(), options)?;
            writer.write_all(entry.bytes)?;
        }
        Ok(writer.finish()?.into_inner())
    };
    write().map_err(|error| {
        Problem::new("not-packed", "The study could not be packed into one file.")
            .mend("Save it in its readable form, which ends in .json.")
            .details(error.to_string())
    })
}

/// What came out of an archive.
#[derive(Debug, Default)]
pub struct Unpacked {
    /// The entries that could be read, by name.
    pub entries: BTreeMap<String, Vec<u8>>,
    /// The names of entries that are there but could not be read.
    pub broken: Vec<String>,
    /// Whether the end of the file is missing, so that the entries were found one by one.
    pub is_cut_off: bool,
}

/// Unpacks the entries that `is_wanted`. Where the end of the file is missing, the entries before
/// it are rescued; the study itself stands first for that reason.
///
/// # Errors
/// A [`Problem`] when not even one entry can be read.
pub fn unpack(
    bytes: &[u8],
    file: &str,
    is_wanted: &dyn Fn(&str) -> bool,
) -> Result<Unpacked, Problem> {
    let damaged = |details: String| {
        Problem::new(
            "archive-damaged",
            "The file is damaged, and nothing in it can be read.",
        )
        .at(Place::file(file))
        .mend("Take an earlier copy of the study.")
        .details(details)
    };
    match ZipArchive::new(Cursor::new(bytes)) {
        Ok(archive) => Ok(by_directory(archive, is_wanted)),
        Err(error) => {
            let rescued = one_by_one(bytes, is_wanted);
            if rescued.entries.is_empty() && rescued.broken.is_empty() {
                Err(damaged(error.to_string()))
            } else {
                Ok(rescued)
            }
        }
    }
}

fn by_directory(
    mut archive: ZipArchive<Cursor<&[u8]>>,
    is_wanted: &dyn Fn(&str) -> bool,
) -> Unpacked {
    let mut unpacked = Unpacked::default();
    for at in 0..archive.len() {
        let named = |archive: &ZipArchive<_>| {
            let name = archive.name_for_index(at)?;
            name.ok().map(|name| name.into_owned())
        };
        let Some(name) = named(&archive).filter(|name| is_wanted(name)) else {
            continue;
        };
        let read = archive.by_index(at).ok().and_then(whole);
        match read {
            // Of two entries with one name the first counts.
            Some(bytes) => drop(unpacked.entries.entry(name).or_insert(bytes)),
            None => unpacked.broken.push(name),
        }
    }
    unpacked
}

fn one_by_one(bytes: &[u8], is_wanted: &dyn Fn(&str) -> bool) -> Unpacked {
    let mut unpacked = Unpacked {
        is_cut_off: true,
        ..Unpacked::default()
    };
    let mut rest = Cursor::new(bytes);
    while let Ok(Some(entry)) = zip::read::read_zipfile_from_stream(&mut rest) {
        let Some(name) = entry.name().ok().map(|name| name.into_owned()) else {
            continue;
        };
        if !is_wanted(&name) {
            continue;
        }
        match whole(entry) {
            Some(bytes) => drop(unpacked.entries.entry(name).or_insert(bytes)),
            None => {
                unpacked.broken.push(name);
                break;
            }
        }
    }
    unpacked
}

/// All bytes of an entry whose checksum holds.
fn whole(entry: impl Read) -> Option<Vec<u8>> {
    let mut bytes = Vec::new();
    let read = entry.take(MOST_BYTES + 1).read_to_end(&mut bytes).ok()?;
    (read as u64 <= MOST_BYTES).then_some(bytes)
}
