//! Yes or no: how well events are told from the others, and whether probabilities are right.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, calibration_slope, few_for_a_curve};
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::fit::{
    Fitted, Measure, Performance, held_out_predictions, reliability, thresholds,
};
use crate::eval::question::agreement::{publish, publish_slope_ends, recalibration_error, units};
use crate::numeric::measure::calibration;

/// The facts and remarks.
pub fn answer(fitted: &Fitted, held_out: &Performance) -> (Facts, Vec<Caveat>) {
    let scene = fitted.scene();
    let events = scene.events();
    let n_events = events.iter().filter(|event| **event).count();
    let p: Vec<f64> = held_out.scores.column(0).iter().copied().collect();
    let mut facts = Facts::new();
    facts.push(Fact::count(
        "events",
        n_events,
        "How many of the analysed samples had the event.",
    ));
    facts.push(Fact::number(
        "prevalence",
        n_events as f64 / events.len() as f64,
        "",
        Precision::Percent(0),
        "Their share.",
    ));
    publish(&mut facts, fitted, held_out);
    if let Some(basis) = held_out.basis {
        facts.push(Fact::text(
            "pairs compared",
            basis.words(),
            "Which pairs of samples count in the area under the curve.",
        ));
    }
    let slope = held_out.mean.get(Measure::CalibrationSlope);
    let error = slope_error(&events, &p, &units(fitted));
    publish_slope_ends(&mut facts, slope, error);
    facts.push(roc(&events, &p));
    facts.push(reliability(fitted, held_out));
    facts.push(thresholds(fitted, held_out));
    facts.push(held_out_predictions(fitted, held_out));
    let caveats = [
        calibration_slope::check(slope, error),
        few_for_a_curve::check(n_events, events.len() - n_events),
    ];
    (facts, caveats.into_iter().flatten().collect())
}

/// The standard error of the slope of the logistic recalibration of the mean predictions.
fn slope_error(events: &[bool], p: &[f64], units: &[usize]) -> f64 {
    let Some(line) = calibration(events, p) else {
        return f64::NAN;
    };
    let logits: Vec<f64> = p
        .iter()
        .map(|p| {
            let p = p.clamp(1e-15, 1.0 - 1e-15);
            (p / (1.0 - p)).ln()
        })
        .collect();
    let at = |x: &f64| {
        let mean = 1.0 / (1.0 + (-(line.intercept + line.slope * x)).exp());
        (mean, mean * (1.0 - mean))
    };
    let fitted: Vec<(f64, f64)> = logits.iter().map(at).collect();
    let observed: Vec<f64> = events
        .iter()
        .map(|event| f64::from(u8::from(*event)))
        .collect();
    recalibration_error(&logits, &observed, &fitted, units)
}

/// The corners of the receiver operating characteristic of the mean held-out probabilities.
fn roc(events: &[bool], p: &[f64]) -> Fact {
    let n_events = events.iter().filter(|event| **event).count() as f64;
    let n_others = events.len() as f64 - n_events;
    let mut order: Vec<usize> = (0..p.len()).collect();
    order.sort_by(|a, b| p[*b].total_cmp(&p[*a]).then(a.cmp(b)));
    let (mut threshold, mut alarms, mut hits) = (vec![f64::NAN], vec![0.0], vec![0.0]);
    let (mut false_calls, mut true_calls) = (0.0, 0.0);
    for same in order.chunk_by(|a, b| p[*a] == p[*b]) {
        for at in same {
            if events[*at] {
                true_calls += 1.0;
            } else {
                false_calls += 1.0;
            }
        }
        threshold.push(p[same[0]]);
        alarms.push(false_calls / n_others);
        hits.push(true_calls / n_events);
    }
    let column = |name: &str, values: Vec<f64>, digits: Precision, meaning: &str| {
        FactColumn::numbers(name, values, "", digits, meaning)
    };
    Fact::table(
        "receiver operating characteristic",
        vec![
            column(
                "threshold",
                threshold,
                Precision::Decimals(3),
                "Yes is called from this mean held-out probability on.",
            ),
            column(
                "false alarms",
                alarms,
                Precision::Percent(0),
                "The share of non-events that are called.",
            ),
            column(
                "hits",
                hits,
                Precision::Percent(0),
                "The share of events that are called.",
            ),
        ],
        "Hits against false alarms at every threshold, all held-out samples together.",
    )
}
