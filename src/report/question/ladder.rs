//! How honest is each number?

use crate::eval::fact::FactTable;
use crate::figure::shape::Caption;
use crate::figure::shape::ladder::{Known, Ladder, Step};
use crate::report::Context;
use crate::report::block::{Block, Grid, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::kind::fit::kind;
use crate::report::noun;
use crate::report::tell::{Source, Telling};
use crate::study::settings::data::{OutcomeKind, Sealed};

/// How the steps of a kind of outcome are compared.
struct Words {
    /// The end of the facts' names.
    fact: &'static str,
    /// How a value is told.
    form: &'static str,
    /// “the model seems to explain”, before the first value.
    verb: &'static str,
    /// What stands behind a value.
    of: &'static str,
    /// The name in figures.
    title: &'static str,
    /// What it is.
    what: &'static str,
    /// The error beside it: fact and name.
    error: (&'static str, &'static str),
    /// Whether nothing to be found gives one half.
    from_half: bool,
}

const MEASURED: Words = Words {
    fact: "r²",
    form: "|%",
    verb: "explain",
    of: "",
    title: "R²",
    what: "The share of variation explained",
    error: ("rmse", "RMSE"),
    from_half: false,
};
const YES_NO: Words = Words {
    fact: "auc",
    form: "",
    verb: "reach an area under the curve of",
    of: "",
    title: "AUC",
    what: "The area under the receiver operating characteristic",
    error: ("log loss", "log loss"),
    from_half: true,
};
const CLASSES: Words = Words {
    fact: "accuracy",
    form: "",
    verb: "call",
    of: " right",
    title: "share called right",
    what: "The share of samples called right",
    error: ("log loss", "log loss"),
    from_half: false,
};
const COUNTS: Words = Words {
    fact: "deviance explained",
    form: "|%",
    verb: "explain",
    of: " of the deviance",
    title: "share of deviance explained",
    what: "The share of deviance explained",
    error: ("deviance", "mean deviance"),
    from_half: false,
};
const TIMES: Words = Words {
    fact: "concordance",
    form: "",
    verb: "reach a concordance of",
    of: "",
    title: "concordance",
    what: "Harrell’s concordance",
    error: ("brier at the middle time", "Brier, middle time"),
    from_half: true,
};

fn words(chain: &Chain<'_>) -> &'static Words {
    match kind(chain.settings()) {
        Some(OutcomeKind::YesNo { .. }) => &YES_NO,
        Some(OutcomeKind::Classes) => &CLASSES,
        Some(OutcomeKind::Count { .. }) => &COUNTS,
        Some(OutcomeKind::Time { .. }) => &TIMES,
        Some(OutcomeKind::Measured) | None => &MEASURED,
    }
}

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, source: &Source<'_>) -> Paragraph {
    let unit = noun::unit(chain.settings());
    let batch = noun::batch(chain.settings());
    let Words {
        fact,
        form,
        verb,
        of,
        ..
    } = words(chain);
    let own = &unit.many;
    if !source.has(&format!("nested {fact}")) {
        return source.say(
            &format!(
                "On its own {own} the model seems to {verb} {{apparent {fact}{form}}}{of}, which \
                 flatters it; it was not judged on {own} that it has not seen."
            ),
            &[],
        );
    }
    let mut said = source.say(
        &format!(
            "On its own {own} the model seems to {verb} {{apparent {fact}{form}}}{of}, on {own} that \
             it has not seen {{nested {fact}{form}}}"
        ),
        &[],
    );
    if source.has(&format!("batch {fact}")) {
        said = said.and(source.say(
            &format!(
                ", on {} that it has not seen {{batch {fact}{form}}}",
                batch.many
            ),
            &[],
        ));
    }
    if source.has(&format!("sealed {fact}")) {
        said = said.and(source.say(&format!(", on the sealed set {{sealed {fact}{form}}}"), &[]));
    }
    said.text("; quote the step that is nearest to the use in mind.")
}

/// The rest of the answer.
#[must_use]
pub fn blocks(chain: &Chain<'_>, source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figure(chain, source)
        .map(Block::Figure)
        .into_iter()
        .collect();
    blocks
        .extend(Grid::of_table("The ladder", source.cell, source.facts, "ladder").map(Block::Grid));
    let sealed = source.given(&[
        "sealed rmse",
        "sealed r²",
        "sealed bias",
        "sealed slope",
        "sealed auc",
        "sealed accuracy",
        "sealed log loss",
        "sealed deviance explained",
        "sealed deviance",
        "sealed concordance",
        "sealed brier at the middle time",
        "sealed calibration slope",
        "sealed openings",
    ]);
    if !sealed.is_empty() {
        blocks.push(Block::Grid(Grid::of_facts(
            "On the sealed set",
            source.cell,
            &sealed,
        )));
    }
    blocks
}

fn figure(chain: &Chain<'_>, source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("ladder")?;
    let words = words(chain);
    let steps: Vec<Step> = (0..table.n_rows())
        .map(|row| step(table, row, chain))
        .collect();
    let error = table.column(words.error.0).map_or_else(
        || words.error.1.to_owned(),
        |column| with_comma(words.error.1, &column.unit),
    );
    let shape = Ladder {
        caption: Caption {
            title: format!("How honest is each number? ({})", words.title),
            description: format!(
                "{}, from the most flattering to the strictest way to ask.",
                words.what
            ),
            empty: "No step is known.".to_owned(),
        },
        names: String::new(),
        values: words.title.to_owned(),
        columns: vec![error],
        range: range(table, words),
        steps,
    };
    Some(NamedFigure {
        name: "ladder".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(if words.from_half {
            "Each step down is closer to real use; guessing reaches one half."
        } else {
            "Each step down is closer to real use."
        }),
    })
}

fn with_comma(name: &str, unit: &str) -> String {
    if unit.is_empty() {
        name.to_owned()
    } else {
        format!("{name}, {unit}")
    }
}

/// From zero to one, unless a step lies below zero.
fn range(table: &FactTable, words: &Words) -> Option<(f64, f64)> {
    let lowest = table
        .numbers(words.fact)
        .iter()
        .copied()
        .filter(|value| value.is_finite())
        .fold(f64::INFINITY, f64::min);
    (lowest >= 0.0 && lowest.is_finite()).then_some((0.0, 1.0))
}

fn step(table: &FactTable, row: usize, chain: &Chain<'_>) -> Step {
    let name = table.texts("step").get(row).cloned().unwrap_or_default();
    let number = |column: &str| table.numbers(column).get(row).copied().unwrap_or(f64::NAN);
    let text = |column: &str| {
        table
            .column(column)
            .map_or_else(String::new, |column| column.shown(row))
    };
    let words = words(chain);
    let value = number(words.fact);
    let ends = |end: &str| number(&format!("{} {end}", words.fact));
    let interval =
        Some((ends("low"), ends("high"))).filter(|(low, high)| low.is_finite() && high.is_finite());
    let known = if !value.is_finite() {
        let remark = text("remark");
        Known::Closed(if remark.is_empty() || remark == "–" {
            "not known".to_owned()
        } else {
            remark
        })
    } else if name.starts_with("nested") {
        Known::Headline { value, interval }
    } else if ["apparent", "tuning", "rows"]
        .iter()
        .any(|start| name.starts_with(start))
    {
        Known::Flattering { value, interval }
    } else {
        Known::Honest { value, interval }
    };
    let error = table
        .column(words.error.0)
        .map_or_else(String::new, |column| column.shown(row));
    Step {
        name: in_words(&name, chain),
        known,
        text: text(words.fact),
        cells: vec![error],
        tip: None,
    }
}

/// The name of a step in the study's own words.
fn in_words(name: &str, chain: &Chain<'_>) -> String {
    let unit = noun::unit(chain.settings());
    match name {
        "whole batches held out" => {
            format!("whole {} held out", noun::batch(chain.settings()).many)
        }
        "rows split" => format!("{} split between parts", unit.many),
        "sealed set" => format!("sealed {}", unit.many),
        other => other.to_owned(),
    }
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(context: &Context<'_>, chain: &Chain<'_>, source: &Source<'_>) -> Vec<Paragraph> {
    let unit = noun::unit(chain.settings());
    let batch = noun::batch(chain.settings());
    let Words {
        fact, what, error, ..
    } = words(chain);
    let has = |step: &str| source.has(&format!("{step} {fact}"));
    let mut telling = Telling::new();
    let mut say = |pattern: String| telling.say(source.say(&pattern, &[]));
    say(format!(
        "{what} was {{apparent {fact}}} on the samples that the model was fitted to (apparent), which \
         flatters."
    ));
    if has("tuning") {
        say(format!(
            "On the inner held-out parts that chose the strength it was {{tuning {fact}}} (tuning), \
             which flatters too."
        ));
    }
    if has("nested") {
        let together = if chain.settings().is_some_and(|data| data.unit.is_some()) {
            format!(" with {} kept together", unit.many)
        } else {
            String::new()
        };
        say(format!(
            "On outer held-out parts{together} it was {{nested {fact}}} (nested)."
        ));
    }
    if has("ungrouped") {
        say(format!(
            "Had samples of one {} been split between parts, {{ungrouped {fact}}} would have been \
             claimed.",
            unit.one
        ));
    }
    if has("batch") {
        say(format!(
            "With whole {} held out it was {{batch {fact}}} ({} {{batch {}}}).",
            batch.many,
            if error.0 == "rmse" { "error" } else { error.1 },
            error.0
        ));
    }
    if has("sealed") {
        if *fact == "r²" {
            say(
                "On the sealed set it was {sealed r²} (error {sealed rmse}, average difference \
                 {sealed bias}, slope {sealed slope})."
                    .to_owned(),
            );
        } else {
            say(format!(
                "On the sealed set it was {{sealed {fact}}} ({} {{sealed {}}}).",
                error.1, error.0
            ));
        }
        if let Some(said) = openings(context, chain) {
            telling.say(said);
        }
    } else if chain
        .settings()
        .is_some_and(|data| data.sealed != Sealed::Nothing)
    {
        telling.say(Paragraph::of("The sealed set was not opened for this."));
    }
    telling.done()
}

/// How often the sealed set has been opened, from what was counted.
fn openings(context: &Context<'_>, chain: &Chain<'_>) -> Option<Paragraph> {
    let title = chain.data.map(|(id, _)| context.title(id));
    let count = context
        .ledger
        .openings()
        .iter()
        .filter(|opening| Some(&opening.cell) == title.as_ref())
        .count();
    (count > 0).then(|| {
        Paragraph::of("Openings of the sealed set counted so far: ")
            .counted("openings of the sealed set", count)
            .text(".")
    })
}
