//! A Prose cell in format 1: lines of markdown, with `{#3: fact}` for a fact of cell 3.

use crate::store::format::place::{At, Fault, Fields};
use crate::store::format::v1::{Group, Reading, Writing};
use crate::study::cell::CellId;
use crate::study::prose::{FactReference, Piece, Prose};
use serde_json::Value;

/// Reads the text of a Prose cell: one text or a list of lines, in which a cell is called by its
/// number or its title; or a list of pieces, where the text alone would be read otherwise.
///
/// # Errors
/// The first [`Fault`].
pub fn read(fields: &mut Fields<'_>, reading: &Reading<'_>) -> Result<Prose, Fault> {
    if let Some(at) = fields.get("pieces") {
        let pieces = at.each(|entry| read_piece(&entry))?;
        return Ok(Prose { pieces });
    }
    let text = match fields.get("text") {
        None => String::new(),
        Some(at) if at.value().is_string() => at.text()?,
        Some(at) => at.each(|line| line.text())?.join("\n"),
    };
    Ok(Prose::parse_with(&text, |name| find(name, reading)))
}

/// Writes the text of a Prose cell, as lines where that says everything.
pub fn write(prose: &Prose, group: &mut Group, writing: &Writing<'_>) {
    if let Some(reading) = writing.reread {
        let text = prose.typed_with(|id| format!("#{}", id.number()));
        if Prose::parse_with(&text, |name| find(name, reading)) == *prose {
            if text.contains('\n') {
                let lines: Vec<_> = text.split('\n').map(str::to_owned).collect();
                group.put("text", lines);
            } else {
                group.put("text", text);
            }
            return;
        }
    }
    let pieces = prose.pieces.iter().map(|piece| write_piece(piece, writing));
    group.put("pieces", Value::Array(pieces.collect()));
}

fn find(name: &str, reading: &Reading<'_>) -> Option<CellId> {
    let number = name.trim().strip_prefix('#').and_then(|digits| {
        let plain = digits.bytes().all(|digit| digit.is_ascii_digit());
        plain.then(|| digits.parse().ok()).flatten()
    });
    let by_title = || (reading.titled)(name);
    number.map(CellId::new).or_else(by_title)
}

fn read_piece(at: &At<'_>) -> Result<Piece, Fault> {
    if at.value().is_string() {
        return Ok(Piece::Text(at.text()?));
    }
    let mut fields = at.fields()?;
    if let Some(inside) = fields.text("unknown")? {
        fields.done();
        return Ok(Piece::Unknown(inside));
    }
    let decimals = fields.read("decimals", |at| {
        let count = u8::try_from(at.count()?);
        count.map_err(|_| at.fault("This is too many decimals.", "Write 12 or fewer."))
    })?;
    let reference = FactReference {
        cell: CellId::new(fields.need("of")?.count()?),
        fact: fields.need("fact")?.text()?,
        decimals,
    };
    fields.done();
    Ok(Piece::Fact(reference))
}

fn write_piece(piece: &Piece, writing: &Writing<'_>) -> Value {
    let mut group = Group::default();
    match piece {
        Piece::Text(text) => return text.clone().into(),
        Piece::Fact(reference) => {
            group.put("fact", reference.fact.clone());
            group.put("of", (writing.link)(reference.cell));
            group.put_some("decimals", reference.decimals);
        }
        Piece::Unknown(inside) => group.put("unknown", inside.clone()),
    }
    group.value()
}
