//! What a Score cell has to say.

use crate::report::Context;
use crate::report::kind::data::table;
use crate::report::sentence::{Editor, Sentence};
use crate::report::word;
use crate::study::cell::Kind;
use crate::study::settings::score::Score;
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::score::ScoreSlot;
use crate::study::settings::slot::table::TableSlot;

/// The settings as sentences, in the present tense.
#[must_use]
pub fn sentences(context: &Context<'_>, score: &Score) -> Vec<Sentence> {
    let slot = |slot: TableSlot| Slot::Score(ScoreSlot::Table(slot));
    let apply = Sentence::new()
        .text("Apply ")
        .cell(
            Slot::Score(ScoreSlot::Fit),
            word::cell(context, score.fit, "a fit still to be chosen"),
            &[Kind::Fit],
        )
        .text(", with all its preparation, to ");
    let Some(source) = &score.table else {
        return vec![
            apply
                .word(
                    slot(TableSlot::File),
                    "a table still to be chosen",
                    Editor::File,
                )
                .text("."),
        ];
    };
    let apply = table::file(apply, source, &slot).text(", samples in ");
    let details = Sentence::new().text(format!("In {}, ", source.file));
    vec![
        table::orientation(apply, source, &slot).text("."),
        table::layout(details, source, &slot).text(".").detail(),
    ]
}
