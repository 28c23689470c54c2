//! What a result was made from: settings in the file's own form, with links replaced by what
//! they lead to.

use crate::store::format::v1::{Group, Writing, kind_word, write_settings};
use crate::study::Study;
use crate::study::cell::CellId;
use crate::study::settings::data::TableSource;
use crate::study::source;
use serde_json::Value;
use std::collections::BTreeMap;
use std::collections::btree_map::Entry;

/// The configuration of one cell and of all that it draws on.
#[derive(Clone, Debug, PartialEq)]
pub struct Configuration {
    /// The SHA-256 of the cell's own part, which holds those of all parts it draws on.
    pub fingerprint: String,
    /// Each part under its fingerprint: first what nothing is drawn from, last the cell itself.
    pub parts: Vec<(String, Value)>,
}

/// How far a cell has been described.
enum Described {
    /// On the way; a link that leads here closes a circle.
    Begun,
    /// Its fingerprint.
    Done(String),
}

/// Describes what the result of a cell is made from; `None` when there is no such cell.
///
/// Numbers, titles and positions of cells are not part of it, nor is the version of the program:
/// a newer program shows recorded results as recorded.
#[must_use]
pub fn configuration(study: &Study, id: CellId) -> Option<Configuration> {
    let mut described: BTreeMap<CellId, Described> = BTreeMap::new();
    let mut parts: Vec<(String, Value)> = Vec::new();
    let mut open = vec![(id, false)];
    // Depth first with a stack of its own: a file can chain more cells than the program's stack
    // has room for.
    while let Some((at, is_leaving)) = open.pop() {
        let Some(cell) = study.cell(at) else {
            continue;
        };
        if is_leaving {
            let part = describe(study, at, &described);
            let fingerprint = source::fingerprint(part.to_string().as_bytes());
            let _ = described.insert(at, Described::Done(fingerprint.clone()));
            if parts.iter().all(|(known, _)| *known != fingerprint) {
                parts.push((fingerprint, part));
            }
        } else if let Entry::Vacant(place) = described.entry(at) {
            let _ = place.insert(Described::Begun);
            open.push((at, true));
            let upstream = cell.settings.draws_on().into_iter().rev();
            open.extend(upstream.map(|id| (id, false)));
        }
    }
    match described.remove(&id)? {
        Described::Done(fingerprint) => Some(Configuration { fingerprint, parts }),
        Described::Begun => None,
    }
}

fn describe(study: &Study, id: CellId, described: &BTreeMap<CellId, Described>) -> Value {
    let Some(cell) = study.cell(id) else {
        return Value::Null;
    };
    // A cell that this version does not know counts as it stands in the file.
    if let Some(whole) = study.kept().whole(id, &cell.settings)
        && let Ok(value) = serde_json::from_str(whole)
    {
        return value;
    }
    let link = |id: CellId| match described.get(&id) {
        Some(Described::Done(fingerprint)) => Value::from(fingerprint.as_str()),
        Some(Described::Begun) => Value::from("closes a circle"),
        None => Value::from("removed"),
    };
    let file = |table: &TableSource| table.file.clone();
    let writing = Writing {
        link: &link,
        file: &file,
        reread: None,
    };
    let mut group = Group::default();
    group.put("kind", kind_word(cell.settings.kind()));
    write_settings(&cell.settings, &mut group, &writing);
    group.value()
}
