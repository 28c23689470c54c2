//! Prose: markdown with live facts in braces, which keep the cell and not its title.

use crate::study::Study;
use crate::study::cell::CellId;

/// Markdown with facts in braces: `{cheese lasso: nested error | 2 decimals}`.
///
/// A reference keeps the id of the cell, so that a renamed cell takes its references along.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub struct Prose {
    /// The text in pieces, in reading order.
    pub pieces: Vec<Piece>,
}

/// A piece of prose.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Piece {
    /// Markdown as it was typed.
    Text(String),
    /// A fact of a cell.
    Fact(FactReference),
    /// Something in braces that names no cell of the study; kept as it was typed.
    Unknown(String),
}

/// A reference to a fact of a cell.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct FactReference {
    /// The cell.
    pub cell: CellId,
    /// The fact's name. Whether the cell gives such a fact is known only when it is evaluated.
    pub fact: String,
    /// The number of decimals, where it was asked for.
    pub decimals: Option<u8>,
}

impl Prose {
    /// Reads what was typed. A cell is found by its title.
    #[must_use]
    pub fn parse(text: &str, study: &Study) -> Self {
        Self::parse_with(text, |title| {
            let cell = study.titled(title).map(|cell| cell.id);
            cell.or_else(|| removed(title, study))
        })
    }

    /// Reads what was typed, where `find` knows the cell that a name in braces means.
    pub fn parse_with(text: &str, find: impl Fn(&str) -> Option<CellId>) -> Self {
        let mut pieces = Vec::new();
        let mut rest = text;
        while let Some(first) = rest.find('{') {
            let Some(length) = rest[first..].find('}') else {
                break;
            };
            // The brace that is closed, so that a stray one before it hides no reference.
            let close = first + length;
            let open = rest[..close].rfind('{').unwrap_or(first);
            if open > 0 {
                pieces.push(Piece::Text(rest[..open].to_owned()));
            }
            let inside = &rest[open + 1..close];
            pieces.push(match parse_reference(inside, &find) {
                Some(reference) => Piece::Fact(reference),
                None => Piece::Unknown(inside.to_owned()),
            });
            rest = &rest[close + 1..];
        }
        if !rest.is_empty() {
            pieces.push(Piece::Text(rest.to_owned()));
        }
        Self { pieces }
    }

    /// The text as it would be typed today, with the cells' present titles.
    #[must_use]
    pub fn typed(&self, study: &Study) -> String {
        self.typed_with(|id| {
            study.cell(id).map_or_else(
                || format!("{REMOVED}{}", id.number()),
                |cell| cell.title.clone(),
            )
        })
    }

    /// The text as it would be typed where cells are called by `name`.
    pub fn typed_with(&self, name: impl Fn(CellId) -> String) -> String {
        let mut text = String::new();
        for piece in &self.pieces {
            match piece {
                Piece::Text(words) => text.push_str(words),
                Piece::Fact(reference) => {
                    text.push_str(&format!("{{{}: {}", name(reference.cell), reference.fact));
                    if let Some(decimals) = reference.decimals {
                        text.push_str(&format!(" | {decimals} decimals"));
                    }
                    text.push('}');
                }
                Piece::Unknown(inside) => text.push_str(&format!("{{{inside}}}")),
            }
        }
        text
    }

    /// The cells that facts are taken from, each once, in reading order.
    #[must_use]
    pub fn cells(&self) -> Vec<CellId> {
        let mut cells = Vec::new();
        for piece in &self.pieces {
            if let Piece::Fact(reference) = piece
                && !cells.contains(&reference.cell)
            {
                cells.push(reference.cell);
            }
        }
        cells
    }
}

fn parse_reference(inside: &str, find: impl Fn(&str) -> Option<CellId>) -> Option<FactReference> {
    let (reference, format) = inside
        .split_once('|')
        .map_or((inside, None), |(r, f)| (r, Some(f)));
    let (title, fact) = reference.split_once(':')?;
    let cell = find(title)?;
    let decimals = match format {
        None => None,
        Some(format) => {
            let mut words = format.split_whitespace();
            let count: u8 = words.next()?.parse().ok()?;
            let unit = words.next()?;
            (matches!(unit, "decimal" | "decimals") && words.next().is_none() && count <= 12)
                .then_some(count)?
                .into()
        }
    };
    let fact = fact.split_whitespace().collect::<Vec<_>>().join(" ");
    (!fact.is_empty()).then_some(FactReference {
        cell,
        fact,
        decimals,
    })
}

/// How a reference to a cell that has been removed reads, before the cell's number.
const REMOVED: &str = "removed cell ";

/// The removed cell that a reference names, so that editing the text around it does not lose it.
fn removed(title: &str, study: &Study) -> Option<CellId> {
    let number = title.trim().strip_prefix(REMOVED)?.parse().ok()?;
    let id = CellId::new(number);
    (id < study.next_id()).then_some(id)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::study::cell::Cell;
    use crate::study::edit::{Edit, Titled};
    use crate::study::settings::Settings;
    use crate::study::settings::fit::Fit;

    fn study_with(title: &str) -> Study {
        let mut study = Study::new("Test");
        let cell = Cell {
            id: study.next_id(),
            title: title.to_owned(),
            settings: Settings::Fit(Fit::default()),
        };
        let _ = study.apply(Edit::Insert { at: 0, cell }).unwrap();
        study
    }

    #[test]
    fn a_renamed_cell_takes_its_references_along() {
        let mut study = study_with("cheese lasso");
        let typed = "The error was {cheese lasso: nested error | 2 decimals}.";
        let prose = Prose::parse(typed, &study);
        assert_eq!(prose.typed(&study), typed);
        let id = study.cells()[0].id;
        let title = "salt lasso".to_owned();
        let _ = study
            .apply(Edit::Retitle {
                what: Titled::Cell(id),
                title,
            })
            .unwrap();
        assert_eq!(
            prose.typed(&study),
            "The error was {salt lasso: nested error | 2 decimals}."
        );
    }

    #[test]
    fn a_reference_to_a_removed_cell_survives_editing_the_text_around_it() {
        let mut study = study_with("cheese lasso");
        let prose = Prose::parse("{cheese lasso: nested rmse}", &study);
        let id = study.cells()[0].id;
        let back = study.apply(Edit::Remove { id }).unwrap();
        let edited = format!("The error: {}", prose.typed(&study));
        let again = Prose::parse(&edited, &study);
        let _ = study.apply(back).unwrap();
        assert_eq!(
            again.typed(&study),
            "The error: {cheese lasso: nested rmse}"
        );
    }

    #[test]
    fn a_stray_brace_hides_no_reference() {
        let study = study_with("cheese lasso");
        let typed = "the set {1, 2 gave {cheese lasso: nested rmse}";
        let prose = Prose::parse(typed, &study);
        assert_eq!(prose.cells(), [study.cells()[0].id]);
        assert_eq!(prose.typed(&study), typed);
    }

    #[test]
    fn braces_that_name_no_cell_are_kept_as_typed() {
        let study = study_with("cheese lasso");
        for typed in [
            "{other fit: error}",
            "{just braces}",
            "an open { brace",
            "{a | b}",
            "{}",
        ] {
            assert_eq!(Prose::parse(typed, &study).typed(&study), typed);
        }
        let prose = Prose::parse("{other fit: error}", &study);
        assert_eq!(
            prose.pieces,
            [Piece::Unknown("other fit: error".to_owned())]
        );
    }
}
