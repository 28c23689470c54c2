//! Invented but plausible numbers for one figure of each kind.

use widefold::base::number::{Precision, text};
use widefold::base::real::Real;
use widefold::figure::shape::{
    Caption, Choice, Counts, Heading, agreement, confusion, distribution, error_curve, frequency,
    histogram, ladder, learning, profile, reliability, residual, roc, spectrum, stages, stand_ins,
    survival, trace,
};
use widefold::figure::{Figure, Meaning, Note, Scale, Tip};

/// Every kind of figure, by the name of its snapshot.
pub fn all() -> Vec<(&'static str, Figure)> {
    vec![
        ("error-curve", error_curve()),
        ("trace", trace()),
        ("agreement", agreement()),
        ("ladder", ladder()),
        ("frequency", frequency()),
        ("spectrum", spectrum()),
        ("stand-ins", stand_ins()),
        ("profile", profile()),
        ("profile-sparse", sparse_profile()),
        ("distribution", distribution()),
        ("distribution-of-strengths", strengths()),
        ("roc", roc()),
        ("confusion", confusion()),
        ("survival", survival()),
        ("reliability", reliability()),
        ("residual", residual()),
        ("learning", learning()),
        ("histogram", histogram()),
        ("stages", stages()),
    ]
}

/// Numbers that look drawn by chance and are the same every time.
pub struct Dice(u64);

impl Dice {
    pub fn new(seed: u64) -> Self {
        Self(seed.wrapping_mul(0x9E37_79B9_7F4A_7C15) | 1)
    }

    /// Evenly from 0 to 1 (Marsaglia 2003, xorshift).
    pub fn even(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 11) as f64 / (1u64 << 53) as f64
    }

    /// About normal: twelve even ones.
    pub fn normal(&mut self) -> f64 {
        (0..12).map(|_| self.even()).sum::<f64>() - 6.0
    }
}

fn thing(name: &str) -> Tip {
    Tip::new(Meaning::Thing(name.to_owned()), name)
}

fn sample(name: &str, words: String) -> Tip {
    Tip::new(Meaning::Sample(name.to_owned()), words)
}

fn predictor(name: &str, words: String) -> Tip {
    Tip::new(Meaning::Predictor(name.to_owned()), words)
}

fn strength(at: f64, words: String) -> Tip {
    let at = Real::new(at).expect("the invented strengths are finite");
    Tip::new(Meaning::Strength(at), words)
}

fn note(label: &str, value: &str) -> Note {
    Note {
        label: label.to_owned(),
        value: value.to_owned(),
    }
}

fn falling(from: f64, to: f64, count: usize) -> Vec<f64> {
    (0..count)
        .map(|at| from * (to / from).powf(at as f64 / (count - 1) as f64))
        .collect()
}

fn error_curve() -> Figure {
    let mut dice = Dice::new(1);
    let strengths = falling(1.0, 0.001, 100);
    let error = |s: f64| {
        let away = (s / 0.0312).log10();
        0.338
            + if away > 0.0 {
                0.215 * away.powf(1.9)
            } else {
                0.045 * away.powi(2)
            }
    };
    let errors: Vec<f64> = strengths.iter().map(|s| error(*s)).collect();
    let half = |s: f64, e: f64| 0.055 + 0.02 * (s * 20.0).min(1.0) + 0.01 * e;
    let ends = |side: f64| {
        let pairs = strengths.iter().zip(&errors);
        pairs
            .map(|(s, e)| e + side * half(*s, *e))
            .collect::<Vec<f64>>()
    };
    let counts: Vec<f64> = strengths
        .iter()
        .map(|s| (41.0 * (1.0 - (s.log10() + 3.0) / 3.0).max(0.0).powf(1.7)).round())
        .collect();
    let repeats: Vec<f64> = (0..50)
        .map(|_| 0.0312f64.log10() + 0.17 * dice.normal())
        .map(|at| 10f64.powf(at))
        .collect();
    let tell = |(s, e): (&f64, &f64)| {
        let words = format!(
            "strength {}: error {} g/100 g",
            text(*s, Precision::Significant(3)),
            text(*e, Precision::Significant(3))
        );
        strength(*s, words)
    };
    let mut caption = Caption::titled("Error, g/100 g, against penalty strength");
    caption.description = "The error is lowest at a strength of 0.0312.".to_owned();
    error_curve::ErrorCurve {
        caption,
        strength: Heading::new("penalty strength λ", "g/100 g"),
        tips: strengths.iter().zip(&errors).map(tell).collect(),
        low: ends(-1.0),
        high: ends(1.0),
        chosen: Some(Choice {
            at: 0.0312,
            label: "chosen strength 0.0312 g/100 g".to_owned(),
            tip: None,
        }),
        baseline: Some((0.79, "mean only".to_owned())),
        repeat_tips: repeats
            .iter()
            .map(|s| strength(*s, "repeat".to_owned()))
            .collect(),
        repeats,
        repeat_label: "chosen in 50 parts".to_owned(),
        counts: Counts {
            label: "predictors".to_owned(),
            values: counts,
            chosen: "12".to_owned(),
            tips: Vec::new(),
        },
        strengths,
        errors,
        ..error_curve::ErrorCurve::default()
    }
    .figure()
}

fn trace() -> Figure {
    let mut dice = Dice::new(7);
    let strengths = falling(1.0, 0.001, 80);
    let mut lines = Vec::new();
    let named = [
        ("1452 nm", 0.9, 0.62),
        ("1150 nm", 0.55, -0.38),
        ("1384 nm", 0.4, 0.27),
        ("1716 nm", 0.12, -0.16),
        ("1210 nm", 0.07, 0.11),
    ];
    let path = |enters: f64, size: f64, turn: f64, strengths: &[f64]| -> Vec<f64> {
        strengths
            .iter()
            .map(|s| {
                let depth = (enters / s).log10();
                if depth <= 0.0 {
                    0.0
                } else {
                    size * (1.0 - (-1.6 * depth).exp()) + turn * depth.powi(2)
                }
            })
            .collect()
    };
    for (name, enters, size) in named {
        lines.push(trace::TraceLine {
            name: name.to_owned(),
            values: path(enters, size, -0.02 * size, &strengths),
            standing: trace::Standing::Named,
            tip: Some(predictor(name, name.to_owned())),
        });
    }
    for at in 0..36 {
        let name = format!("{} nm", 900 + at * 22);
        let enters = 10f64.powf(-1.3 - 1.6 * dice.even());
        let size = 0.12 * dice.normal();
        lines.push(trace::TraceLine {
            values: path(enters, size, 0.01 * dice.normal(), &strengths),
            standing: trace::Standing::Quiet,
            tip: Some(predictor(&name, name.clone())),
            name,
        });
    }
    let values: Vec<f64> = (0..strengths.len())
        .map(|at| lines.iter().filter(|line| line.values[at] != 0.0).count() as f64)
        .collect();
    trace::Trace {
        caption: Caption::titled("Coefficients against penalty strength"),
        strength: Heading::new("penalty strength λ", "g/100 g"),
        coefficient: Heading::new("standardised coefficient", "g/100 g"),
        chosen: Some(Choice {
            at: 0.0312,
            label: "chosen".to_owned(),
            tip: None,
        }),
        counts: Counts {
            label: "predictors".to_owned(),
            values,
            chosen: "7".to_owned(),
            tips: Vec::new(),
        },
        lines,
        strengths,
    }
    .figure()
}

fn agreement() -> Figure {
    let mut dice = Dice::new(3);
    let (mut predictions, mut observations) = (Vec::new(), Vec::new());
    let (mut units, mut tips) = (Vec::new(), Vec::new());
    for wheel in 0..40 {
        let truth = 3.2 + 0.75 * dice.normal();
        let middle = 3.2 + 0.82 * (truth - 3.2) + 0.22 * dice.normal();
        units.push((3 * wheel..3 * wheel + 3).collect());
        for scan in 0..3 {
            let name = format!("K-{wheel:03}-{scan}");
            predictions.push(middle + 0.09 * dice.normal());
            observations.push(truth);
            tips.push(sample(&name, name.clone()));
        }
    }
    agreement::Agreement {
        caption: Caption::titled("Salt in moisture: observed against predicted, held-out wheels"),
        predicted: Heading::new("predicted", "g/100 g"),
        observed: Heading::new("observed", "g/100 g"),
        predictions,
        observations,
        units,
        tips,
        identity: "equal".to_owned(),
        line: None,
        notes: vec![
            note("R² on held-out wheels", "0.80"),
            note("root mean square error", "0.34 g/100 g"),
            note("slope of observed on predicted", "1.04"),
            note("bias", "−0.01 g/100 g"),
        ],
    }
    .figure()
}

fn ladder() -> Figure {
    let step = |name: &str, known, text: &str, held_out: &str| ladder::Step {
        name: name.to_owned(),
        known,
        text: text.to_owned(),
        cells: vec![held_out.to_owned()],
        tip: Some(thing(name)),
    };
    let honest = |value, low, high| ladder::Known::Honest {
        value,
        interval: Some((low, high)),
    };
    ladder::Ladder {
        caption: Caption::titled("How honest is each number?"),
        names: "judged on".to_owned(),
        values: "R²".to_owned(),
        columns: vec!["held out".to_owned()],
        range: Some((0.0, 1.0)),
        steps: vec![
            step(
                "apparent",
                ladder::Known::Flattering {
                    value: 0.94,
                    interval: None,
                },
                "0.94",
                "nothing",
            ),
            step(
                "tuning",
                ladder::Known::Flattering {
                    value: 0.86,
                    interval: Some((0.83, 0.89)),
                },
                "0.86",
                "wheels, but chosen by them",
            ),
            step(
                "nested",
                ladder::Known::Headline {
                    value: 0.80,
                    interval: Some((0.76, 0.84)),
                },
                "0.80",
                "wheels",
            ),
            step("whole caves", honest(0.71, 0.64, 0.78), "0.71", "caves"),
            step(
                "sealed wheels",
                ladder::Known::Closed("sealed, not opened".to_owned()),
                "–",
                "next season’s wheels",
            ),
        ],
    }
    .figure()
}

fn frequency() -> Figure {
    let rows = [
        ("1452 nm", 0.98, "98 %", "100 %", "14"),
        ("1150 nm", 0.94, "94 %", "100 %", "9"),
        ("1384 nm", 0.91, "91 %", "99 %", "11"),
        ("1716 nm", 0.42, "42 %", "93 %", "2"),
        ("1210 nm", 0.31, "31 %", "88 %", "6"),
        ("1008 nm", 0.08, "8 %", "61 %", "0"),
    ];
    let row = |(name, share, words, sign, count): &(&str, f64, &str, &str, &str)| {
        let half = 1.96 * (share * (1.0 - share) / 100.0).sqrt();
        frequency::Frequency {
            name: (*name).to_owned(),
            share: *share,
            interval: Some(((share - half).max(0.0), (share + half).min(1.0))),
            cells: vec![(*words).to_owned(), (*sign).to_owned(), (*count).to_owned()],
            tip: Some(predictor(name, format!("{name}: chosen in {words}"))),
        }
    };
    frequency::Frequencies {
        caption: Caption::titled("Would they be chosen again?"),
        names: "chosen predictor".to_owned(),
        bars: String::new(),
        columns: ["chosen again", "same sign", "stand-ins"]
            .map(str::to_owned)
            .to_vec(),
        threshold: Some((0.6, "60 %".to_owned())),
        rows: rows.iter().map(row).collect(),
        more: "{} more".to_owned(),
    }
    .figure()
}

fn spectrum() -> Figure {
    let eigenvalues: Vec<f64> = (0..160)
        .map(|at| {
            let at = f64::from(at);
            if at < 119.0 {
                900.0 * (-0.09 * at).exp() + 0.002
            } else {
                0.0
            }
        })
        .collect();
    let lambda = 0.4;
    let names = |at: usize| thing(&format!("direction {}", at + 1));
    spectrum::Spectrum {
        caption: Caption::titled(
            "Why least squares cannot answer: 581 of 700 eigenvalues are zero",
        ),
        direction: Heading::new("direction", ""),
        eigenvalue: Heading::new("eigenvalue of XᵀX", ""),
        own_label: "as measured".to_owned(),
        lifted: eigenvalues.iter().map(|value| value + lambda).collect(),
        lifted_label: "with the penalty".to_owned(),
        factor: "share kept".to_owned(),
        factors: eigenvalues
            .iter()
            .map(|value| value / (value + lambda))
            .collect(),
        tips: (0..eigenvalues.len()).map(names).collect(),
        eigenvalues,
    }
    .figure()
}

fn stand_ins() -> Figure {
    let chosen = ["1452 nm", "1150 nm", "1384 nm", "1716 nm", "1210 nm"]
        .map(str::to_owned)
        .to_vec();
    let names: Vec<String> = [
        1446, 1449, 1455, 1458, 1147, 1153, 1156, 1381, 1387, 1390, 1713, 1719, 1207, 1213,
    ]
    .iter()
    .map(|nm| format!("{nm} nm"))
    .collect();
    let mut dice = Dice::new(5);
    let mut correlations = Vec::new();
    for (row, center) in [1452.0, 1150.0, 1384.0, 1716.0, 1210.0].iter().enumerate() {
        for name in &names {
            let nm: f64 = name[..4].parse().expect("names begin with a wavelength");
            let near = 0.995 - 0.004 * (nm - center as &f64).abs();
            let far = if row % 2 == 0 { 0.35 } else { -0.45 } + 0.15 * dice.normal();
            correlations.push(if (nm - center).abs() < 20.0 {
                near
            } else {
                far.clamp(-0.7, 0.7)
            });
        }
    }
    let texts = correlations
        .iter()
        .map(|r| text(*r, Precision::Decimals(2)))
        .collect();
    stand_ins::StandIns {
        caption: Caption::titled("What could stand in for the chosen predictors?"),
        row_label: "chosen".to_owned(),
        column_label: "stand-in".to_owned(),
        chosen,
        stand_ins: names,
        correlations,
        texts,
        key: vec!["correlation −1".to_owned(), "1".to_owned()],
        tips: Vec::new(),
    }
    .figure()
}

fn spectrum_at(nm: f64) -> f64 {
    let peak = |at: f64, width: f64, high: f64| high * (-((nm - at) / width).powi(2)).exp();
    0.35 + 0.0002 * (nm - 900.0)
        + peak(970.0, 40.0, 0.15)
        + peak(1200.0, 55.0, 0.35)
        + peak(1450.0, 70.0, 0.9)
}

fn profile() -> Figure {
    let mut dice = Dice::new(11);
    let positions: Vec<f64> = (0..400).map(|at| 900.0 + 2.0 * f64::from(at)).collect();
    let coefficient = |nm: f64| {
        let wave = |at: f64, width: f64| (-((nm - at) / width).powi(2)).exp();
        0.12 * wave(1450.0, 35.0) - 0.08 * wave(1384.0, 25.0) + 0.05 * wave(1150.0, 30.0)
            - 0.03 * wave(1000.0, 40.0)
    };
    let coefficients: Vec<f64> = positions
        .iter()
        .map(|nm| coefficient(*nm) + 0.0015 * dice.normal())
        .collect();
    let half = |value: &f64| 0.008 + 0.25 * value.abs();
    profile::Profile {
        caption: Caption::titled("Ridge coefficients along the wavelength"),
        position: Heading::new("wavelength", "nm"),
        coefficient: Heading::new("coefficient", "g/100 g per unit of absorbance"),
        low: coefficients
            .iter()
            .map(|value| value - half(value))
            .collect(),
        high: coefficients
            .iter()
            .map(|value| value + half(value))
            .collect(),
        signal: positions.iter().map(|nm| spectrum_at(*nm)).collect(),
        signal_label: "mean scan".to_owned(),
        tips: Vec::new(),
        positions,
        coefficients,
    }
    .figure()
}

fn sparse_profile() -> Figure {
    let positions: Vec<f64> = (0..400).map(|at| 900.0 + 2.0 * f64::from(at)).collect();
    let coefficients = positions
        .iter()
        .map(|nm| match *nm as i64 {
            1452 => 0.62,
            1150 => -0.38,
            1384 => 0.27,
            1210 => 0.11,
            1690 => -0.16,
            _ => 0.0,
        })
        .collect();
    profile::Profile {
        caption: Caption::titled("Lasso coefficients along the wavelength"),
        position: Heading::new("wavelength", "nm"),
        coefficient: Heading::new("standardised coefficient", "g/100 g"),
        signal: positions.iter().map(|nm| spectrum_at(*nm)).collect(),
        signal_label: "mean scan".to_owned(),
        tips: positions
            .iter()
            .map(|nm| predictor(&format!("{nm} nm"), format!("{nm} nm")))
            .collect(),
        positions,
        coefficients,
        ..profile::Profile::default()
    }
    .figure()
}

fn distribution() -> Figure {
    let mut dice = Dice::new(13);
    let mut group = |name: &str, middle: f64, spread: f64, words: &str| distribution::Group {
        name: name.to_owned(),
        values: (0..50).map(|_| middle + spread * dice.normal()).collect(),
        middle: Some(middle),
        cells: vec![words.to_owned()],
        tip: Some(thing(name)),
    };
    distribution::Distributions {
        caption: Caption::titled("Nested error of each outer part"),
        names: "fit".to_owned(),
        values: "error, g/100 g".to_owned(),
        scale: Scale::Linear,
        columns: vec!["mean".to_owned()],
        rule: Some((0.79, "mean only".to_owned())),
        groups: vec![
            group("salt lasso", 0.34, 0.045, "0.34"),
            group("salt ridge", 0.37, 0.05, "0.37"),
            group("salt elastic net", 0.33, 0.042, "0.33"),
        ],
        more: "{} more".to_owned(),
    }
    .figure()
}

fn strengths() -> Figure {
    let mut dice = Dice::new(37);
    let mut group = |name: &str, middle: f64, spread: f64, words: &str| distribution::Group {
        name: name.to_owned(),
        values: (0..50)
            .map(|_| middle * 10f64.powf(spread * dice.normal()))
            .collect(),
        middle: Some(middle),
        cells: vec![words.to_owned()],
        tip: Some(thing(name)),
    };
    distribution::Distributions {
        caption: Caption::titled("How firmly is the strength chosen?"),
        names: "rule".to_owned(),
        values: "penalty strength λ, g/100 g".to_owned(),
        scale: Scale::Log10,
        columns: vec!["median".to_owned()],
        groups: vec![
            group("lowest error", 0.0312, 0.2, "0.0312"),
            group("one standard error", 0.121, 0.12, "0.121"),
        ],
        ..distribution::Distributions::default()
    }
    .figure()
}

fn roc() -> Figure {
    let mut dice = Dice::new(17);
    let mut curve = |power: f64, steps: usize| -> Vec<(f64, f64)> {
        let mut best: f64 = 0.0;
        (0..=steps)
            .map(|at| {
                let x = at as f64 / steps as f64;
                let wobble = 0.05 * dice.normal() * (x * (1.0 - x)).sqrt();
                best = best.max((x.powf(power) + wobble).clamp(0.0, 1.0));
                (x, best)
            })
            .collect()
    };
    roc::Roc {
        caption: Caption::titled("Seed lots that germinate: hits against false alarms"),
        false_alarms: Heading::new("false alarms", ""),
        hits: Heading::new("hits", ""),
        curve: curve(0.22, 60),
        repeats: (0..10).map(|_| curve(0.22, 40)).collect(),
        threshold: Some((0.12, 0.12f64.powf(0.22), "threshold 0.35".to_owned(), None)),
        chance: "chance".to_owned(),
        notes: vec![
            note("area under the curve", "0.82"),
            note("lots that germinate", "61 of 150"),
        ],
    }
    .figure()
}

fn confusion() -> Figure {
    let counts = [46.0, 3.0, 1.0, 5.0, 38.0, 7.0, 0.0, 9.0, 41.0];
    confusion::Confusion {
        caption: Caption::titled("Which cave? Observed and predicted, held-out wheels"),
        row_label: "observed".to_owned(),
        column_label: "predicted".to_owned(),
        classes: ["north", "quarry", "old mill"].map(str::to_owned).to_vec(),
        counts: counts.to_vec(),
        texts: counts
            .iter()
            .map(|count| text(*count, Precision::Whole))
            .collect(),
    }
    .figure()
}

fn survival() -> Figure {
    let mut dice = Dice::new(19);
    let mut group = |name: &str, rate: f64, at_risk: [&str; 5]| {
        let (mut times, mut shares) = (vec![0.0], vec![1.0]);
        let mut time = 0.0;
        while times.len() < 40 {
            time += -dice.even().max(1e-9).ln() / (rate * 40.0);
            if time > 24.0 {
                break;
            }
            times.push(time);
            shares.push(shares[shares.len() - 1] * (1.0 - 1.0 / 40.0));
        }
        let half = |share: &f64| 1.96 * (share * (1.0 - share) / 45.0).sqrt();
        survival::Group {
            name: name.to_owned(),
            low: shares
                .iter()
                .map(|share| (share - half(share)).max(0.0))
                .collect(),
            high: shares
                .iter()
                .map(|share| (share + half(share)).min(1.0))
                .collect(),
            times,
            shares,
            at_risk: at_risk.map(str::to_owned).to_vec(),
        }
    };
    survival::Survival {
        caption: Caption::titled("Vines without mildew, by held-out risk"),
        time: Heading::new("weeks after planting", ""),
        share: Heading::new("without mildew", ""),
        groups: vec![
            group("low risk", 0.012, ["63", "60", "55", "51", "49"]),
            group("middle", 0.035, ["63", "52", "44", "35", "29"]),
            group("high risk", 0.09, ["64", "38", "22", "13", "8"]),
        ],
        times: vec![0.0, 6.0, 12.0, 18.0, 24.0],
        at_risk: "at risk".to_owned(),
    }
    .figure()
}

fn reliability() -> Figure {
    let mut dice = Dice::new(23);
    let predictions: Vec<f64> = (0..8).map(|at| 0.06 + 0.125 * f64::from(at)).collect();
    let shares: Vec<f64> = predictions
        .iter()
        .map(|p| (p + 0.08 * (p - 0.5) + 0.03 * dice.normal()).clamp(0.0, 1.0))
        .collect();
    let samples = (0..150)
        .map(|_| (0.42 + 0.22 * dice.normal()).clamp(0.01, 0.99))
        .collect();
    reliability::Reliability {
        caption: Caption::titled("Does a predicted share come true?"),
        predicted: Heading::new("predicted", ""),
        observed: Heading::new("germinated", ""),
        low: shares.iter().map(|share| (share - 0.13).max(0.0)).collect(),
        high: shares.iter().map(|share| (share + 0.13).min(1.0)).collect(),
        predictions,
        shares,
        tips: Vec::new(),
        identity: "as predicted".to_owned(),
        samples,
        sample_label: "lots".to_owned(),
        notes: vec![
            note("slope", "1.08"),
            note("intercept", "−0.03"),
            note("mean squared error of the shares", "0.161"),
        ],
    }
    .figure()
}

fn residual() -> Figure {
    let mut dice = Dice::new(29);
    let positions: Vec<f64> = (0..120).map(f64::from).collect();
    let mut residuals: Vec<f64> = positions
        .iter()
        .map(|at| 0.30 * dice.normal() + 0.12 * (at / 19.0).sin())
        .collect();
    residuals[87] = 1.38;
    let name = |at: usize| format!("K-{at:03}");
    residual::Residuals {
        caption: Caption::titled("Residuals in the order of measurement"),
        against: Heading::new("order of measurement", ""),
        residual: Heading::new("observed less predicted", "g/100 g"),
        tips: (0..120).map(|at| sample(&name(at), name(at))).collect(),
        smooth: positions
            .iter()
            .map(|at| (*at, 0.12 * (at / 19.0).sin()))
            .collect(),
        positions,
        residuals,
        limits: vec![
            (1.02, "three standard deviations".to_owned()),
            (-1.02, String::new()),
        ],
        walls: Vec::new(),
        pointed: vec![(87, "K-087".to_owned())],
    }
    .figure()
}

fn learning() -> Figure {
    let counts: Vec<f64> = (5..=10).map(|tenth| f64::from(tenth) * 12.0).collect();
    let error = |n: &f64| 0.27 + 8.0 / n;
    learning::Learning {
        caption: Caption::titled("Would more wheels help?"),
        units: Heading::new("wheels", ""),
        error: Heading::new("nested error", "g/100 g"),
        errors: counts.iter().map(error).collect(),
        low: counts.iter().map(|n| error(n) - 2.0 / n).collect(),
        high: counts.iter().map(|n| error(n) + 2.0 / n).collect(),
        counts,
        baseline: None,
        tips: Vec::new(),
    }
    .figure()
}

fn histogram() -> Figure {
    let mut dice = Dice::new(31);
    histogram::Histogram {
        caption: Caption::titled("Could chance do as well? R² of 200 shuffles"),
        value: Heading::new("nested R²", ""),
        count: Heading::new("shuffles", ""),
        values: (0..200).map(|_| -0.06 + 0.07 * dice.normal()).collect(),
        bins: 0,
        observed: Some(Choice {
            at: 0.80,
            label: "observed 0.80".to_owned(),
            tip: None,
        }),
    }
    .figure()
}

/// Four spectra as measured and after two steps.
fn stages() -> Figure {
    let mut dice = Dice::new(77);
    let axis: Vec<f64> = (0..60).map(|j| 900.0 + 13.0 * f64::from(j)).collect();
    let shapes: Vec<(f64, f64)> = (0..4)
        .map(|_| (0.2 + 0.3 * dice.even(), 0.8 + 0.4 * dice.even()))
        .collect();
    let peak = |x: f64| (-((x - 1_300.0) / 120.0).powi(2)).exp();
    let curves = |of: &dyn Fn(f64, f64, f64) -> f64| {
        let curve = |(at, &(level, slope)): (usize, &(f64, f64))| stages::Curve {
            sort: u8::from(at > 1),
            label: match at {
                0 => "training".to_owned(),
                2 => "held-out".to_owned(),
                _ => String::new(),
            },
            positions: axis.clone(),
            values: axis.iter().map(|&x| of(x, level, slope)).collect(),
            tip: Some(thing("a scan")),
        };
        shapes.iter().enumerate().map(curve).collect::<Vec<_>>()
    };
    let stage = |label: &str, curves: Vec<stages::Curve>| stages::Stage {
        label: label.to_owned(),
        position: Heading::new("", "nm"),
        course: stages::Course::Line,
        curves,
    };
    stages::Stages {
        caption: Caption::titled("A few samples before and after the steps"),
        stages: vec![
            stage(
                "as measured",
                curves(&|x, level, slope| level + slope * peak(x)),
            ),
            stage(
                "1. standard normal variate",
                curves(&|x, level, _| 2.5 * peak(x) - 0.8 + 0.1 * level),
            ),
            stage(
                "2. centring",
                curves(&|x, level, slope| 0.3 * (level + slope - 1.3) * peak(x)),
            ),
        ],
    }
    .figure()
}
