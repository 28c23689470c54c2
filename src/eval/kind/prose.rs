//! Evaluates a Prose cell: it computes nothing; its facts are counted for the reader.

use crate::eval::fact::{Fact, Facts};
use crate::eval::outcome::{Gives, Outcome};
use crate::study::prose::{Piece, Prose};

/// Evaluates a Prose cell.
#[must_use]
pub fn evaluate(prose: &Prose) -> Outcome {
    let count =
        |wanted: fn(&Piece) -> bool| prose.pieces.iter().filter(|piece| wanted(piece)).count();
    let mut facts = Facts::new();
    facts.push(Fact::count(
        "facts in the text",
        count(|piece| matches!(piece, Piece::Fact(_))),
        "How many facts the text refers to.",
    ));
    facts.push(Fact::count(
        "unknown references",
        count(|piece| matches!(piece, Piece::Unknown(_))),
        "How many references in braces name no cell of the study.",
    ));
    Outcome {
        gives: Gives::Facts,
        facts,
        caveats: Vec::new(),
    }
}
