//! Refused edits and states, in words.

use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::eval::standing::State;
use crate::study::Study;
use crate::study::cell::CellId;
use crate::study::edit::EditError;

/// A refused edit as a problem.
#[must_use]
pub fn refused(study: &Study, error: &EditError) -> Problem {
    let named = |id: &CellId| {
        study.cell(*id).map_or_else(
            || "a removed cell".to_owned(),
            |cell| format!("“{}”", cell.title),
        )
    };
    let whole = |number: usize| number::text(number as f64, Precision::Whole);
    match error {
        EditError::NoSuchCell(_) => Problem::new(
            "no-such-cell",
            "The cell is no longer part of the study.",
        )
        .mend("Undo its removal to have it back."),
        EditError::Twice(id) => Problem::new(
            "cell-twice",
            format!("{} is already part of the study.", capital_quote(&named(id))),
        )
        .mend("Duplicate it to have a second one."),
        EditError::Position { at, n_cells } => Problem::new(
            "no-such-position",
            format!(
                "The study has {} cells, so that none can stand at position {}.",
                whole(*n_cells),
                whole(at + 1)
            ),
        ),
        EditError::BlankTitle => Problem::new("blank-title", "A title needs at least one letter."),
        EditError::TitleTaken { title, .. } => Problem::new(
            "title-taken",
            format!("Another cell is called “{title}” already, so that a text could not tell them apart."),
        )
        .mend(format!("Call it “{}”.", study.free_title(title))),
        EditError::OtherKind(id) => Problem::new(
            "other-kind",
            format!("{} cannot become a cell of another kind.", capital_quote(&named(id))),
        )
        .mend("Add a new cell of that kind."),
        EditError::Circle { path } => circle(path),
    }
}

fn capital_quote(words: &str) -> String {
    crate::report::noun::capital(words)
}

/// “Second fit” cannot draw on “Score”: “Score” already draws on “Second fit”.
fn circle(path: &[String]) -> Problem {
    let quoted: Vec<String> = path.iter().map(|title| format!("“{title}”")).collect();
    let found = match quoted.as_slice() {
        [one] => format!("{one} cannot draw on itself."),
        [one, _] => format!("{one} cannot draw on itself."),
        [edited, to, rest @ ..] => {
            let mut steps = Vec::new();
            let mut from = to;
            for next in rest {
                steps.push(if next == edited {
                    format!("{from} already draws on {next}")
                } else {
                    format!("{from} draws on {next}")
                });
                from = next;
            }
            format!(
                "{edited} cannot draw on {to}: {}.",
                crate::report::noun::list(&steps)
            )
        }
        [] => "A cell cannot draw on itself.".to_owned(),
    };
    Problem::new("circle", found).mend("Choose a cell that does not depend on this one.")
}

/// What a state means, in one sentence.
#[must_use]
pub const fn state(state: State) -> &'static str {
    match state {
        State::Current => "It agrees with its settings and with what it draws on.",
        State::Due => "Something has changed, so that it needs to be brought up to date.",
        State::Working(_) => "It is being evaluated.",
        State::Waiting => "It waits for a cell that it draws on.",
        State::Stopped => "It was stopped before it was done.",
        State::Failed => "It could not be evaluated.",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn found(path: &[&str]) -> String {
        let path = path.iter().map(|title| (*title).to_owned()).collect();
        refused(&Study::new("Test"), &EditError::Circle { path }).found
    }

    #[test]
    fn a_circle_is_named_step_by_step() {
        assert_eq!(
            found(&["Second fit", "Score", "Second fit"]),
            "“Second fit” cannot draw on “Score”: “Score” already draws on “Second fit”."
        );
        assert_eq!(
            found(&["A", "B", "C", "A"]),
            "“A” cannot draw on “B”: “B” draws on “C” and “C” already draws on “A”."
        );
        assert_eq!(found(&["A", "A"]), "“A” cannot draw on itself.");
    }

    #[test]
    fn a_title_that_is_taken_comes_with_one_that_is_free() {
        let study = Study::new("Test");
        let error = EditError::TitleTaken {
            title: "salt lasso".to_owned(),
            by: CellId::new(1),
        };
        assert!(refused(&study, &error).found.contains("“salt lasso”"));
    }
}
