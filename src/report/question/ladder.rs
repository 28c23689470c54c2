//! How honest is each number?

use crate::eval::fact::FactTable;
use crate::figure::shape::Caption;
use crate::figure::shape::ladder::{Known, Ladder, Step};
use crate::report::Context;
use crate::report::block::{Block, Grid, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::noun;
use crate::report::tell::{Source, Telling};
use crate::study::settings::data::Sealed;

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, source: &Source<'_>) -> Paragraph {
    let unit = noun::unit(chain.settings());
    let batch = noun::batch(chain.settings());
    if !source.has("nested r²") {
        return source.say(
            &format!(
                "On its own {} the model seems to explain {{apparent r²|%}}, which flatters it; it \
                 was not judged on {} that it has not seen.",
                unit.many, unit.many
            ),
            &[],
        );
    }
    let mut said = source.say(
        &format!(
            "On its own {} the model seems to explain {{apparent r²|%}}, on {} that it has not \
             seen {{nested r²|%}}",
            unit.many, unit.many
        ),
        &[],
    );
    if source.has("batch r²") {
        said = said.and(source.say(
            &format!(", on {} that it has not seen {{batch r²|%}}", batch.many),
            &[],
        ));
    }
    if source.has("sealed r²") {
        said = said.and(source.say(", on the sealed set {sealed r²|%}", &[]));
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
    let steps: Vec<Step> = (0..table.n_rows())
        .map(|row| step(table, row, chain))
        .collect();
    let error = table
        .column("rmse")
        .map_or_else(|| "RMSE".to_owned(), |column| with_comma(&column.unit));
    let shape = Ladder {
        caption: Caption {
            title: "How honest is each number? (R²)".to_owned(),
            description: "The share of variation explained, from the most flattering to the \
                          strictest way to ask."
                .to_owned(),
            empty: "No step is known.".to_owned(),
        },
        names: String::new(),
        values: "R²".to_owned(),
        columns: vec![error],
        range: range(table),
        steps,
    };
    Some(NamedFigure {
        name: "ladder".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of("Each step down is closer to real use."),
    })
}

fn with_comma(unit: &str) -> String {
    if unit.is_empty() {
        "RMSE".to_owned()
    } else {
        format!("RMSE, {unit}")
    }
}

/// From zero to one, unless a step lies below zero.
fn range(table: &FactTable) -> Option<(f64, f64)> {
    let lowest = table
        .numbers("r²")
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
    let value = number("r²");
    let interval = Some((number("r² low"), number("r² high")))
        .filter(|(low, high)| low.is_finite() && high.is_finite());
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
    let rmse = table
        .column("rmse")
        .map_or_else(String::new, |column| column.shown(row));
    Step {
        name: in_words(&name, chain),
        known,
        text: text("r²"),
        cells: vec![rmse],
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
    let mut telling = Telling::new();
    telling.say(source.say(
        "The share of variation explained was {apparent r²} on the samples that the model was \
         fitted to (apparent), which flatters.",
        &[],
    ));
    if source.has("tuning r²") {
        telling.say(source.say(
            "On the inner held-out parts that chose the strength it was {tuning r²} (tuning), which \
             flatters too.",
            &[],
        ));
    }
    if source.has("nested r²") {
        let together = if chain.settings().is_some_and(|data| data.unit.is_some()) {
            format!(" with {} kept together", unit.many)
        } else {
            String::new()
        };
        telling.say(source.say(
            &format!("On outer held-out parts{together} it was {{nested r²}} (nested)."),
            &[],
        ));
    }
    if source.has("ungrouped r²") {
        telling.say(source.say(
            &format!(
                "Had samples of one {} been split between parts, {{ungrouped r²}} would have been \
                 claimed.",
                unit.one
            ),
            &[],
        ));
    }
    if source.has("batch r²") {
        telling.say(source.say(
            &format!(
                "With whole {} held out it was {{batch r²}} (error {{batch rmse}}).",
                batch.many
            ),
            &[],
        ));
    }
    if source.has("sealed r²") {
        telling.say(source.say(
            "On the sealed set it was {sealed r²} (error {sealed rmse}, average difference {sealed \
             bias}, slope {sealed slope}).",
            &[],
        ));
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
