//! Times: whether samples at a higher held-out risk have the event earlier.

use crate::base::number::Precision;
use crate::eval::caveat::{Caveat, calibration_slope, few_for_a_curve};
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::fit::{
    Fitted, Measure, Performance, at_times, held_out_predictions, thirds,
};
use crate::eval::question::agreement::publish;
use crate::numeric::measure::kaplan_meier;

/// The names of the groups by held-out risk.
const GROUPS: [&str; 3] = ["low risk", "middle risk", "high risk"];

/// The facts and remarks.
pub fn answer(fitted: &Fitted, held_out: &Performance) -> (Facts, Vec<Caveat>) {
    let scene = fitted.scene();
    let events = scene.events();
    let n_events = events.iter().filter(|event| **event).count();
    let mut facts = Facts::new();
    facts.push(Fact::count(
        "events",
        n_events,
        "In how many of the analysed samples the event was seen.",
    ));
    publish(&mut facts, fitted, held_out);
    if let Some(basis) = held_out.basis {
        facts.push(Fact::text(
            "pairs compared",
            basis.words(),
            "Which pairs of samples count in the concordance.",
        ));
    }
    let unit = &fitted.prepared.data.outcome.unit;
    for (name, time) in ["early time", "middle time", "late time"]
        .into_iter()
        .zip(fitted.horizons)
    {
        facts.push(Fact::number(
            name,
            time,
            unit,
            Precision::Significant(4),
            "A time at which predictions are judged: the quartiles of the event times.",
        ));
    }
    let risk: Vec<f64> = held_out.scores.column(0).iter().copied().collect();
    risk_groups(&mut facts, fitted, &scene.observed(), &events, &risk);
    facts.push(at_times(fitted, held_out));
    facts.push(held_out_predictions(fitted, held_out));
    let slope = held_out.mean.get(Measure::CalibrationSlope);
    let caveats = [
        calibration_slope::check(slope, f64::NAN),
        few_for_a_curve::check_times(n_events),
    ];
    (facts, caveats.into_iter().flatten().collect())
}

/// Thirds of the samples by held-out risk, with the survival curve of each.
///
/// The rule of the cuts is fixed beforehand and the risk comes from fits that had not seen the
/// sample; groups drawn on training samples always look well separated (Simon and others 2011).
fn risk_groups(facts: &mut Facts, fitted: &Fitted, time: &[f64], event: &[bool], risk: &[f64]) {
    let (first, second) = thirds(risk);
    let group = |risk: f64| {
        if risk <= first {
            0
        } else if risk <= second {
            1
        } else {
            2
        }
    };
    let members: Vec<Vec<usize>> = (0..3)
        .map(|of| {
            (0..risk.len())
                .filter(|at| group(risk[*at]) == of)
                .collect()
        })
        .collect();
    let present: Vec<usize> = (0..3).filter(|of| !members[*of].is_empty()).collect();
    let middle = fitted.horizons[1];
    let curves: Vec<_> = members
        .iter()
        .map(|own| {
            let times: Vec<f64> = own.iter().map(|at| time[*at]).collect();
            let events: Vec<bool> = own.iter().map(|at| event[*at]).collect();
            (kaplan_meier(&times, &events), times)
        })
        .collect();
    let number = |name: &str, values: Vec<f64>, unit: &str, digits: Precision, meaning: &str| {
        FactColumn::numbers(name, values, unit, digits, meaning)
    };
    let of_groups = |value: &dyn Fn(usize) -> f64| present.iter().map(|of| value(*of)).collect();
    let share = Precision::Percent(0);
    facts.push(Fact::table(
        "risk groups",
        vec![
            FactColumn::texts(
                "group",
                present.iter().map(|of| GROUPS[*of].to_owned()).collect(),
                "A third of the samples by held-out linear predictor.",
            ),
            number(
                "samples",
                of_groups(&|of| members[of].len() as f64),
                "",
                Precision::Whole,
                "How many samples are in the group.",
            ),
            number(
                "events",
                of_groups(&|of| members[of].iter().filter(|at| event[**at]).count() as f64),
                "",
                Precision::Whole,
                "In how many of them the event was seen.",
            ),
            number(
                "without the event at the middle time",
                of_groups(&|of| curves[of].0.at(middle)),
                "",
                share,
                "The share without the event then, by the estimate of Kaplan and Meier.",
            ),
        ],
        "Samples in thirds by the risk that fits predicted which had not seen them.",
    ));
    if let (Some(low), Some(high)) = (present.first(), present.last())
        && low != high
    {
        for (name, of) in [("low risk", low), ("high risk", high)] {
            facts.push(Fact::number(
                &format!("{name} without the event at the middle time"),
                curves[*of].0.at(middle),
                "",
                share,
                "The share of that third without the event at the middle time, by the estimate of Kaplan and Meier.",
            ));
        }
    }
    let mut groups = Vec::new();
    let (mut at, mut shares, mut low, mut high, mut at_risk) =
        (Vec::new(), Vec::new(), Vec::new(), Vec::new(), Vec::new());
    for of in &present {
        let (curve, times) = &curves[*of];
        let mut push = |time: f64, share: f64, error: f64, n: f64| {
            groups.push(GROUPS[*of].to_owned());
            at.push(time);
            shares.push(share);
            low.push((share - 1.96 * error).max(0.0));
            high.push((share + 1.96 * error).min(1.0));
            at_risk.push(n);
        };
        push(0.0, 1.0, 0.0, times.len() as f64);
        let mut last = 1.0;
        for step in &curve.steps {
            // Nobody survives the last time: Greenwood's formula has no value there.
            let error = if step.standard_error.is_finite() {
                step.standard_error
            } else {
                0.0
            };
            push(step.time, step.survival, error, step.at_risk as f64);
            last = step.survival;
        }
        let end = times.iter().copied().fold(0.0, f64::max);
        if curve.steps.last().is_some_and(|step| step.time < end) {
            let error = curve.steps.last().map_or(0.0, |step| step.standard_error);
            push(end, last, error, 0.0);
        }
    }
    let unit = &fitted.prepared.data.outcome.unit;
    facts.push(Fact::table(
        "survival by risk group",
        vec![
            FactColumn::texts("group", groups, "The group."),
            number(
                "time",
                at,
                unit,
                Precision::Significant(4),
                "A time with an event, or the end.",
            ),
            number(
                "share",
                shares,
                "",
                share,
                "The share without the event from then on (Kaplan and Meier 1958).",
            ),
            number(
                "low",
                low,
                "",
                share,
                "Lower end of its 95 % interval (Greenwood).",
            ),
            number("high", high, "", share, "Upper end of the same interval."),
            number(
                "at risk",
                at_risk,
                "",
                Precision::Whole,
                "How many were observed until just before.",
            ),
        ],
        "The share without the event along time, in thirds by held-out risk.",
    ));
}
