//! Facts written by hand of a fit to an outcome that is no measured quantity.

use crate::base::number::Precision;
use crate::eval::kind::fit::{Measure, Sort};
use crate::report::sample::Writer;
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::fit::{Fit, Judge};

/// The sort of a kind of outcome; `None` for a measured quantity, whose facts stand elsewhere.
fn sort(kind: &OutcomeKind) -> Option<Sort> {
    match kind {
        OutcomeKind::Measured => None,
        OutcomeKind::YesNo { .. } => Some(Sort::YesNo),
        OutcomeKind::Classes => Some(Sort::Classes),
        OutcomeKind::Count { .. } => Some(Sort::Count),
        OutcomeKind::Time { .. } => Some(Sort::Time),
    }
}

/// Adds what a fit to such an outcome tells beyond the facts of every fit.
pub(super) fn facts(writer: Writer, kind: &OutcomeKind, fit: &Fit) -> Writer {
    let Some(sort) = sort(kind) else {
        return writer;
    };
    let two = Precision::Decimals(2);
    let mut writer = writer
        .texts(&[
            ("kind of outcome", sort.word()),
            ("error measure", "mean deviance"),
        ])
        .counts(&[
            ("events", 61),
            ("censored", 58),
            ("units with an event", 30),
        ])
        .numbers(
            "",
            Precision::Significant(3),
            &[("strength times 2", 0.0624)],
        );
    writer = measures(writer, "apparent", sort.always(), 0.91);
    match sort {
        Sort::YesNo => {
            writer = writer.texts(&[("event", "spotted")]).numbers(
                "",
                Precision::Percent(0),
                &[("prevalence", 0.24)],
            );
        }
        Sort::Time => {
            writer = writer.numbers(
                "weeks",
                two,
                &[
                    ("early time", 8.0),
                    ("middle time", 21.0),
                    ("late time", 40.0),
                ],
            );
        }
        Sort::Measured | Sort::Classes | Sort::Count => {}
    }
    if matches!(fit.judge, Judge::Nested(_)) {
        writer = measures(writer, "nested", sort.always(), 0.74);
        writer = measures(writer, "nested", sort.held_out(), 0.83);
        writer = measures(writer, "baseline", sort.baselines(), 0.52);
        let main = sort.main().name();
        writer = writer
            .texts(&[("pairs compared", "pairs within held-out parts")])
            .numbers(
                "",
                Precision::Percent(0),
                &[("improvement over the baseline", 0.21)],
            )
            .numbers(
                "",
                two,
                &[
                    (&format!("nested {main} low"), 0.66),
                    (&format!("nested {main} high"), 0.82),
                ],
            );
    }
    writer
}

fn measures(mut writer: Writer, which: &str, list: &[Measure], value: f64) -> Writer {
    for measure in list {
        let name = format!("{which} {}", measure.name());
        if writer.0.get(&name).is_none() {
            let digits = measure.digits(Precision::Decimals(2));
            writer = writer.numbers("", digits, &[(name.as_str(), value)]);
        }
    }
    writer
}
