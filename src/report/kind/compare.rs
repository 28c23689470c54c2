//! What a Compare cell has to say.

use crate::report::Context;
use crate::report::sentence::Sentence;
use crate::report::word;
use crate::study::cell::Kind;
use crate::study::settings::compare::Compare;
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::compare::CompareSlot;

/// The settings as sentences, in the present tense.
#[must_use]
pub fn sentences(context: &Context<'_>, compare: &Compare) -> Vec<Sentence> {
    let next = |text: &str, sentence: Sentence| {
        sentence.cell(
            Slot::Compare(CompareSlot::NextFit),
            text.to_owned(),
            &[Kind::Fit],
        )
    };
    let mut sentence = Sentence::new().text("Set ");
    let count = compare.fits.len();
    for (at, link) in compare.fits.iter().enumerate() {
        if at > 0 {
            sentence = sentence.text(if at + 1 == count { " and " } else { ", " });
        }
        sentence = sentence.cell(
            Slot::Compare(CompareSlot::Fit(at)),
            word::cell(context, *link, "a fit still to be chosen"),
            &[Kind::Fit],
        );
    }
    if count < 2 {
        if count == 1 {
            sentence = sentence.text(" and ");
        }
        let wanted = if count == 1 {
            "another fit still to be chosen"
        } else {
            "fits still to be chosen"
        };
        return vec![next(wanted, sentence).text(" side by side on the same parts.")];
    }
    vec![
        sentence.text(" side by side on the same parts."),
        next("one more fit", Sentence::new().text("Add ")).text(" to compare with."),
    ]
}
