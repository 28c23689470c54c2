//! Times: survival in groups by held-out risk.

use crate::eval::fact::FactTable;
use crate::figure::shape::survival::{Group, Survival};
use crate::figure::shape::{Caption, Heading};
use crate::report::block::{Block, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::noun;
use crate::report::question::agreement::{numbers, shown, tables};
use crate::report::tell::{Source, Telling};

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, source: &Source<'_>) -> Paragraph {
    let units = noun::unit(chain.settings()).many;
    let start = source.say(
        &format!(
            "Of two {units} that it has not seen, the model says rightly in {{nested concordance|%}} \
             of pairs which has the event earlier (guessing has one half)"
        ),
        &[],
    );
    let low = "low risk without the event at the middle time";
    let high = "high risk without the event at the middle time";
    if source.has(low) && source.has(high) {
        start.and(source.say(
            &format!(
                "; at {{middle time}} {{{low}}} of the third at the lowest risk and {{{high}}} of that \
                 at the highest were without it."
            ),
            &[],
        ))
    } else {
        start.text(".")
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(chain: &Chain<'_>, source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = figure(chain, source)
        .map(Block::Figure)
        .into_iter()
        .collect();
    blocks.push(numbers(
        source,
        &[
            "events",
            "nested concordance",
            "nested concordance low",
            "nested concordance high",
            "pairs compared",
            "nested deviance explained",
            "nested calibration slope",
            "early time",
            "middle time",
            "late time",
            "nested auc at the middle time",
            "nested brier at the middle time",
            "baseline brier at the middle time",
        ],
    ));
    blocks.extend(tables(
        source,
        &[
            ("risk groups", "Thirds by held-out risk"),
            ("at stated times", "At stated times"),
            ("held-out predictions", "Held-out predictions"),
        ],
    ));
    blocks
}

/// At most so many times carry numbers at risk.
const TIMES: usize = 5;

fn figure(chain: &Chain<'_>, source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("survival by risk group")?;
    let unit = table
        .column("time")
        .map_or_else(String::new, |column| column.unit.clone());
    let last = table.numbers("time").iter().copied().fold(0.0, f64::max);
    let times = written(last);
    let mut names: Vec<&String> = table.texts("group").iter().collect();
    names.dedup();
    let groups = names
        .into_iter()
        .map(|name| group(table, name, &times))
        .collect();
    let shape = Survival {
        caption: Caption {
            title: format!(
                "Share without the event by {}, on samples not seen",
                chain.outcome()
            ),
            description:
                "One curve for each third of the samples by held-out risk, with its interval."
                    .to_owned(),
            empty: "There are no held-out predictions.".to_owned(),
        },
        time: Heading::new(&chain.outcome(), &unit),
        share: Heading::new("without the event", ""),
        groups,
        times,
        at_risk: "at risk".to_owned(),
    };
    Some(NamedFigure {
        name: "survival".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(
            "The groups come from fits that had not seen the sample; the wider apart the curves, the \
             better the order.",
        ),
    })
}

/// Round times from zero on, at which numbers at risk are written.
fn written(last: f64) -> Vec<f64> {
    if !(last.is_finite() && last > 0.0) {
        return vec![0.0];
    }
    let rough = last / TIMES as f64;
    let power = 10_f64.powf(rough.log10().floor());
    let step = [1.0, 2.0, 5.0, 10.0]
        .into_iter()
        .map(|factor| factor * power)
        .find(|step| *step >= rough)
        .unwrap_or(10.0 * power);
    (0..=TIMES)
        .map(|at| at as f64 * step)
        .filter(|time| *time <= last)
        .collect()
}

fn group(table: &FactTable, name: &str, times: &[f64]) -> Group {
    let rows: Vec<usize> = (0..table.n_rows())
        .filter(|row| table.texts("group")[*row] == name)
        .collect();
    let of =
        |column: &str| -> Vec<f64> { rows.iter().map(|row| table.numbers(column)[*row]).collect() };
    // The number at risk at a time is that of the first step from then on.
    let at_risk = times
        .iter()
        .map(|time| {
            rows.iter()
                .find(|row| table.numbers("time")[**row] >= *time)
                .map_or_else(String::new, |row| shown(table, "at risk", *row))
        })
        .collect();
    Group {
        name: name.to_owned(),
        times: of("time"),
        shares: of("share"),
        low: of("low"),
        high: of("high"),
        at_risk,
    }
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    telling.say(Paragraph::of(
        "Samples were put into thirds by their held-out linear predictor, the mean over repeats, by a \
         rule fixed beforehand; curves are those of Kaplan and Meier with intervals by Greenwood’s \
         formula. No test between the groups is given.",
    ));
    if source.has("high risk without the event at the middle time") {
        telling.say(source.say(
            "At {middle time} the share without the event was {low risk without the event at the \
             middle time} in the third at the lowest and {high risk without the event at the middle \
             time} in that at the highest risk.",
            &[],
        ));
    }
    telling.done()
}
