//! Would the same predictors be chosen again?

use crate::eval::fact::FactTable;
use crate::figure::shape::Caption;
use crate::figure::shape::frequency::{Frequencies, Frequency};
use crate::figure::{Meaning, Tip};
use crate::report::block::{Block, Grid, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::noun;
use crate::report::tell::{Source, Telling};

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, source: &Source<'_>) -> Paragraph {
    let units = noun::unit(chain.settings()).many;
    if source.value("chosen predictors") == Some(0.0) {
        return source.say(
            "The fit chose no predictor, so that there is none to be chosen again.",
            &[],
        );
    }
    source.say(
        &format!(
            "On half the {units}, {{chosen again}} of {{chosen predictors}} \
             [predictor|predictors] come back most of the time; the lists agree to {{stability \
             index}}, where one would be the same list each time and zero no more than luck."
        ),
        &[],
    )
}

/// The rest of the answer.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figure(source).map(Block::Figure).into_iter().collect();
    let numbers = source.given(&[
        "chosen predictors",
        "chosen again",
        "threshold",
        "stability index",
        "stability low",
        "stability high",
        "null stability index",
        "null highest frequency",
        "mean chosen per half",
        "null chosen per half",
        "expected low-selection predictors worst case",
        "expected low-selection predictors unimodal",
        "expected low-selection predictors r-concave",
        "pairs",
        "resamples",
        "strength used",
    ]);
    blocks.push(Block::Grid(Grid::of_facts(
        "How sure is the list",
        source.cell,
        &numbers,
    )));
    blocks.extend(
        Grid::of_table(
            "Selection frequencies",
            source.cell,
            source.facts,
            "frequencies",
        )
        .map(Block::Grid),
    );
    blocks
}

fn figure(source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("frequencies")?;
    let threshold = source
        .value("threshold")
        .map(|threshold| (threshold, "counts as chosen again".to_owned()));
    let shape = Frequencies {
        caption: Caption {
            title: "How often each predictor is chosen on half the samples".to_owned(),
            description:
                "One bar for each predictor: the share of resamples in which it is chosen."
                    .to_owned(),
            empty: "No predictor is ever chosen.".to_owned(),
        },
        names: "predictor".to_owned(),
        bars: "chosen again".to_owned(),
        columns: vec!["frequency".to_owned(), "in the list".to_owned()],
        threshold,
        rows: rows(table),
        more: "and {} more in the table".to_owned(),
    };
    Some(NamedFigure {
        name: "frequencies".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of("A full bar is almost always chosen; half a bar is a coin toss."),
    })
}

fn rows(table: &FactTable) -> Vec<Frequency> {
    let number =
        |column: &str, row: usize| table.numbers(column).get(row).copied().unwrap_or(f64::NAN);
    let text = |column: &str, row: usize| {
        table
            .column(column)
            .map_or_else(String::new, |column| column.shown(row))
    };
    let names = table.texts("predictor");
    let mut order: Vec<usize> = (0..names.len()).collect();
    order.sort_by(|a, b| {
        number("frequency", *b)
            .total_cmp(&number("frequency", *a))
            .then(a.cmp(b))
    });
    order
        .into_iter()
        .map(|row| Frequency {
            name: names[row].clone(),
            share: number("frequency", row),
            interval: Some((number("low", row), number("high", row)))
                .filter(|(low, high)| low.is_finite() && high.is_finite()),
            cells: vec![text("frequency", row), text("in the final list", row)],
            tip: Some(Tip::new(
                Meaning::Predictor(names[row].clone()),
                format!(
                    "{}: chosen in {} of the halves",
                    names[row],
                    text("frequency", row)
                ),
            )),
        })
        .collect()
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(chain: &Chain<'_>, source: &Source<'_>) -> Vec<Paragraph> {
    let units = noun::unit(chain.settings()).many;
    let mut telling = Telling::new();
    telling.say(source.say(
        &format!(
            "Selection stability was examined on {{pairs}} complementary pairs of halves of the \
             {units} ({{resamples}} resamples; Shah and Samworth), with all learned steps and the \
             penalty strength {{strength used}}; a half chose {{mean chosen per half}} predictors \
             on average."
        ),
        &[],
    ));
    telling.say(source.say(
        "{chosen again} of the {chosen predictors} predictors of the final fit were chosen in a \
         share of at least {threshold} of the halves.",
        &[],
    ));
    telling.say(source.say(
        "The stability index of the lists (Nogueira and others; one for the same list each time, \
         zero for lists that agree no more than by chance) was {stability index} (interval \
         {stability low} to {stability high}).",
        &[],
    ));
    if source.has("expected low-selection predictors unimodal") {
        telling.say(source.say(
            "At this threshold the expected number of predictors of low selection probability \
             among those chosen is at most {expected low-selection predictors worst case} in the \
             worst case, {expected low-selection predictors unimodal} if the frequencies have one \
             peak and {expected low-selection predictors r-concave} under the stricter shape of \
             the published bound; the bound says nothing about causes.",
            &[],
        ));
    }
    if source.has("null stability index") {
        telling.say(source.say(
            "The same procedure on a shuffled outcome had the stability index {null stability \
             index}, chose {null chosen per half} predictors per half, and its highest frequency \
             was {null highest frequency}.",
            &[],
        ));
    }
    telling.done()
}
