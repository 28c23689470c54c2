//! Yes or no: events told from the others, and probabilities beside shares.

use crate::figure::shape::reliability::Reliability;
use crate::figure::shape::roc::Roc;
use crate::figure::shape::{Caption, Heading};
use crate::figure::{Meaning, Tip};
use crate::report::block::{Block, NamedFigure, Paragraph};
use crate::report::chain::Chain;
use crate::report::noun;
use crate::report::question::agreement::{note, numbers, shown, tables};
use crate::report::tell::{Source, Telling};

/// The answer in one sentence.
#[must_use]
pub fn answer(chain: &Chain<'_>, source: &Source<'_>) -> Paragraph {
    let units = noun::unit(chain.settings()).many;
    let start = source.say(
        &format!(
            "On {units} that it has not seen, the model orders {{nested auc|%}} of the pairs of an \
             event and a non-event rightly (⟨AUC⟩; guessing has one half)"
        ),
        &[],
    );
    let (low, high) = (
        source.value("calibration slope low"),
        source.value("calibration slope high"),
    );
    match (low, high) {
        (Some(low), Some(high)) if low > 1.0 && high > 1.0 => start.and(source.say(
            "; its probabilities are timid (calibration slope {nested calibration slope}).",
            &[],
        )),
        (Some(low), Some(high)) if low < 1.0 && high < 1.0 => start.and(source.say(
            "; its probabilities are too extreme (calibration slope {nested calibration slope}).",
            &[],
        )),
        (Some(_), Some(_)) => start.and(source.say(
            "; the slope of the calibration of its probabilities ({nested calibration slope}) cannot \
             be told from one.",
            &[],
        )),
        (Some(_) | None, None) | (None, Some(_)) => start.text("."),
    }
}

/// The rest of the answer.
#[must_use]
pub fn blocks(source: &Source<'_>) -> Vec<Block> {
    let mut blocks: Vec<Block> = [roc(source), reliability(source)]
        .into_iter()
        .flatten()
        .map(Block::Figure)
        .collect();
    blocks.push(numbers(
        source,
        &[
            "events",
            "prevalence",
            "nested auc",
            "nested auc low",
            "nested auc high",
            "pairs compared",
            "nested brier",
            "baseline brier",
            "nested log loss",
            "baseline log loss",
            "nested deviance explained",
            "nested misclassification",
            "baseline misclassification",
            "nested calibration slope",
            "calibration slope low",
            "calibration slope high",
            "nested calibration intercept",
            "nested calibration in the large",
        ],
    ));
    blocks.extend(tables(
        source,
        &[
            ("thresholds", "Calls at stated thresholds"),
            ("reliability", "Probabilities beside shares"),
            ("held-out predictions", "Held-out predictions"),
        ],
    ));
    blocks
}

fn roc(source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("receiver operating characteristic")?;
    let curve = table
        .numbers("false alarms")
        .iter()
        .copied()
        .zip(table.numbers("hits").iter().copied())
        .collect();
    let threshold = at_prevalence(source);
    let shape = Roc {
        caption: Caption {
            title: "Hits against false alarms, on samples not seen".to_owned(),
            description: "The share of events called against the share of others called, at every \
                          threshold of the held-out probability."
                .to_owned(),
            empty: "There are no held-out predictions.".to_owned(),
        },
        false_alarms: Heading::new("others called", ""),
        hits: Heading::new("events called", ""),
        curve,
        repeats: Vec::new(),
        threshold,
        chance: "guessing".to_owned(),
        notes: [
            note(source, "nested auc", "AUC"),
            note(source, "nested auc low", "from"),
            note(source, "nested auc high", "to"),
            note(source, "events", "events"),
        ]
        .into_iter()
        .flatten()
        .collect(),
    };
    Some(NamedFigure {
        name: "roc".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(
            "The nearer to the upper left corner, the fewer events are missed for each false alarm.",
        ),
    })
}

/// The place on the curve where the prevalence is the threshold.
fn at_prevalence(source: &Source<'_>) -> Option<(f64, f64, String, Option<Tip>)> {
    let table = source.rows("receiver operating characteristic")?;
    let prevalence = source.value("prevalence")?;
    let thresholds = table.numbers("threshold");
    let row = (0..thresholds.len()).rfind(|row| thresholds[*row] >= prevalence)?;
    let (x, y) = (
        table.numbers("false alarms")[row],
        table.numbers("hits")[row],
    );
    let label = "from the prevalence on".to_owned();
    let tip = Tip::new(
        Meaning::Thing("threshold".to_owned()),
        format!(
            "from the probability {} on: {} of events and {} of others called",
            shown(table, "threshold", row),
            shown(table, "hits", row),
            shown(table, "false alarms", row)
        ),
    );
    Some((x, y, label, Some(tip)))
}

fn reliability(source: &Source<'_>) -> Option<NamedFigure> {
    let table = source.rows("reliability")?;
    let tips = (0..table.n_rows())
        .map(|row| {
            Tip::new(
                Meaning::Thing("group".to_owned()),
                format!(
                    "{} samples: predicted {}, observed {}",
                    shown(table, "samples", row),
                    shown(table, "predicted", row),
                    shown(table, "observed", row)
                ),
            )
        })
        .collect();
    let samples = source
        .rows("held-out predictions")
        .map_or_else(Vec::new, |table| table.numbers("predicted").to_vec());
    let shape = Reliability {
        caption: Caption {
            title: "Observed shares against predicted probabilities, on samples not seen"
                .to_owned(),
            description:
                "Each dot is a group of samples with similar predictions; dots on the line \
                          happen as often as predicted."
                    .to_owned(),
            empty: "There are no held-out predictions.".to_owned(),
        },
        predicted: Heading::new("predicted probability", ""),
        observed: Heading::new("observed share", ""),
        predictions: table.numbers("predicted").to_vec(),
        shares: table.numbers("observed").to_vec(),
        low: table.numbers("low").to_vec(),
        high: table.numbers("high").to_vec(),
        tips,
        identity: "observed = predicted".to_owned(),
        samples,
        sample_label: "samples".to_owned(),
        notes: [
            note(source, "nested calibration slope", "slope"),
            note(source, "nested calibration in the large", "in the large"),
            note(source, "nested brier", "Brier score"),
        ]
        .into_iter()
        .flatten()
        .collect(),
    };
    Some(NamedFigure {
        name: "reliability".to_owned(),
        figure: shape.figure(),
        reading: Paragraph::of(
            "On the line, what is predicted happens as often; a curve flatter than the line means \
             probabilities that are too extreme.",
        ),
    })
}

/// The paragraphs of the methods.
#[must_use]
pub fn methods(source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    telling.say(Paragraph::of(
        "Agreement was examined on held-out probabilities, each the mean over repeats, in groups of \
         equal size and by logistic recalibration.",
    ));
    if source.has("calibration slope low") && source.has("calibration slope high") {
        telling.say(source.say(
            "The calibration slope was {nested calibration slope} (interval {calibration slope low} to \
             {calibration slope high}, with units as the independent observations).",
            &[],
        ));
    }
    telling.say(source.say(
        "In the large, events were more frequent than predicted by {nested calibration in the large} \
         on the scale of log odds.",
        &[],
    ));
    telling.done()
}
