//! Figures from numbers and names that nobody would choose.

use widefold::figure::shape::{
    Caption, Choice, Counts, Heading, agreement, confusion, distribution, error_curve, frequency,
    histogram, ladder, learning, profile, reliability, residual, roc, spectrum, stand_ins,
    survival, trace,
};
use widefold::figure::{Figure, Meaning, Note, Scale, Tip};

use crate::sample::Dice;

/// How the numbers of one figure are drawn.
#[derive(Clone, Copy)]
enum Sort {
    Plain,
    Equal,
    Huge,
    Tiny,
    Broken,
}

struct Source {
    dice: Dice,
    sort: Sort,
    /// How many numbers each list has.
    count: usize,
}

impl Source {
    fn new(seed: u64) -> Self {
        let mut dice = Dice::new(seed + 1000);
        let sorts = [
            Sort::Plain,
            Sort::Equal,
            Sort::Huge,
            Sort::Tiny,
            Sort::Broken,
        ];
        let counts = [0, 1, 2, 3, 7, 30, 150];
        let sort = sorts[(dice.even() * 5.0) as usize];
        let count = counts[(dice.even() * 7.0) as usize];
        Self { dice, sort, count }
    }

    fn number(&mut self) -> f64 {
        match self.sort {
            Sort::Plain => self.dice.normal(),
            Sort::Equal => 0.7,
            Sort::Huge => self.dice.normal() * 10f64.powf(300.0 * self.dice.even()),
            Sort::Tiny => self.dice.normal() * 10f64.powf(-320.0 * self.dice.even()),
            Sort::Broken => {
                let odd = [
                    f64::NAN,
                    f64::INFINITY,
                    f64::NEG_INFINITY,
                    0.0,
                    -0.0,
                    f64::MAX,
                ];
                let nth = (self.dice.even() * 12.0) as usize;
                odd.get(nth).copied().unwrap_or_else(|| self.dice.normal())
            }
        }
    }

    fn numbers(&mut self) -> Vec<f64> {
        (0..self.count).map(|_| self.number()).collect()
    }

    fn ascending(&mut self) -> Vec<f64> {
        let mut numbers: Vec<f64> = self.numbers().iter().map(|x| x.abs()).collect();
        numbers.sort_by(f64::total_cmp);
        numbers
    }

    fn name(&mut self) -> String {
        let names = [
            "x",
            "",
            "salt in moisture of the rind, third measurement, corrected for the mean temperature",
            "<script>&\"",
            "水分中の塩分",
            "Ψ\u{0301}\u{200B}ø",
            "nm 1452",
            "−0.25",
        ];
        names[(self.dice.even() * names.len() as f64) as usize].to_owned()
    }

    fn heading(&mut self) -> Heading {
        Heading::new(&self.name(), &self.name())
    }

    fn caption(&mut self) -> Caption {
        Caption {
            title: self.name(),
            description: self.name(),
            empty: "Nothing to show.".to_owned(),
        }
    }

    fn choice(&mut self) -> Option<Choice> {
        Some(Choice {
            at: self.number(),
            label: self.name(),
            tip: None,
        })
    }

    fn tips(&mut self) -> Vec<Tip> {
        (0..self.count)
            .map(|_| Tip::new(Meaning::Sample(self.name()), self.name()))
            .collect()
    }

    fn counts(&mut self) -> Counts {
        Counts {
            label: self.name(),
            values: self.numbers(),
            chosen: "12".to_owned(),
            tips: self.tips(),
        }
    }

    fn names(&mut self) -> Vec<String> {
        (0..self.count).map(|_| self.name()).collect()
    }

    fn pair(&mut self) -> (f64, f64) {
        (self.number(), self.number())
    }

    fn notes(&mut self) -> Vec<Note> {
        (0..6)
            .map(|_| Note {
                label: self.name(),
                value: self.name(),
            })
            .collect()
    }
}

/// One figure of each kind from one seed.
pub fn all(seed: u64) -> Vec<(String, Figure)> {
    let mut from = Source::new(seed);
    let figures = [
        ("error-curve", curve(&mut from)),
        ("trace", path(&mut from)),
        ("agreement", dots(&mut from)),
        ("ladder", steps(&mut from)),
        ("frequency", rows(&mut from)),
        ("spectrum", values(&mut from)),
        ("tiles", tiles(&mut from)),
        ("profile", along(&mut from)),
        ("distribution", groups(&mut from)),
        ("roc", hits(&mut from)),
        ("survival", times(&mut from)),
        ("reliability", shares(&mut from)),
        ("residual", rest(&mut from)),
        ("learning", more(&mut from)),
        ("histogram", bins(&mut from)),
        ("confusion", classes(&mut from)),
    ];
    let named = |(name, figure)| (format!("nasty {name} {seed}"), figure);
    figures.into_iter().map(named).collect()
}

fn curve(from: &mut Source) -> Figure {
    error_curve::ErrorCurve {
        caption: from.caption(),
        strength: from.heading(),
        error: from.heading(),
        strengths: from.ascending(),
        errors: from.numbers(),
        low: from.numbers(),
        high: from.numbers(),
        spread_low: from.numbers(),
        spread_high: from.numbers(),
        tips: from.tips(),
        baseline: Some((from.number(), from.name())),
        chosen: from.choice(),
        repeats: from.numbers(),
        repeat_tips: from.tips(),
        repeat_label: from.name(),
        counts: from.counts(),
    }
    .figure()
}

fn path(from: &mut Source) -> Figure {
    let strengths = from.ascending();
    let lines = (0..from.count.min(40))
        .map(|at| trace::TraceLine {
            name: from.name(),
            values: from.numbers(),
            standing: if at % 3 == 0 {
                trace::Standing::Named
            } else {
                trace::Standing::Quiet
            },
            tip: Some(Tip::new(Meaning::Predictor(from.name()), from.name())),
        })
        .collect();
    trace::Trace {
        caption: from.caption(),
        strength: from.heading(),
        coefficient: from.heading(),
        strengths,
        lines,
        chosen: from.choice(),
        counts: from.counts(),
    }
    .figure()
}

fn dots(from: &mut Source) -> Figure {
    agreement::Agreement {
        caption: from.caption(),
        predicted: from.heading(),
        observed: from.heading(),
        predictions: from.numbers(),
        observations: from.numbers(),
        units: vec![vec![0, 1, 2], vec![900, 1]],
        tips: from.tips(),
        identity: from.name(),
        line: Some((from.number(), from.number(), from.name())),
        notes: from.notes(),
    }
    .figure()
}

fn steps(from: &mut Source) -> Figure {
    let steps = (0..from.count.min(60))
        .map(|at| ladder::Step {
            name: from.name(),
            known: match at % 4 {
                0 => ladder::Known::Flattering {
                    value: from.number(),
                    interval: Some(from.pair()),
                },
                1 => ladder::Known::Honest {
                    value: from.number(),
                    interval: None,
                },
                2 => ladder::Known::Headline {
                    value: from.number(),
                    interval: Some(from.pair()),
                },
                _ => ladder::Known::Closed(from.name()),
            },
            text: from.name(),
            cells: vec![from.name()],
            tip: None,
        })
        .collect();
    ladder::Ladder {
        caption: from.caption(),
        names: from.name(),
        values: from.name(),
        columns: vec![from.name()],
        range: None,
        steps,
    }
    .figure()
}

fn rows(from: &mut Source) -> Figure {
    let rows = (0..from.count)
        .map(|_| frequency::Frequency {
            name: from.name(),
            share: from.number(),
            interval: Some(from.pair()),
            cells: vec![from.name(), from.name()],
            tip: None,
        })
        .collect();
    frequency::Frequencies {
        caption: from.caption(),
        names: from.name(),
        bars: from.name(),
        columns: vec![from.name(), from.name()],
        threshold: Some((from.number(), from.name())),
        rows,
        more: "{} more".to_owned(),
    }
    .figure()
}

fn values(from: &mut Source) -> Figure {
    spectrum::Spectrum {
        caption: from.caption(),
        direction: from.heading(),
        eigenvalue: from.heading(),
        eigenvalues: from.numbers(),
        own_label: from.name(),
        lifted: from.numbers(),
        lifted_label: from.name(),
        factor: from.name(),
        factors: from.numbers(),
        tips: from.tips(),
    }
    .figure()
}

fn tiles(from: &mut Source) -> Figure {
    let (chosen, stand_ins) = (from.names(), from.names());
    let count = chosen.len() * stand_ins.len();
    stand_ins::StandIns {
        caption: from.caption(),
        row_label: from.name(),
        column_label: from.name(),
        correlations: (0..count).map(|_| from.number()).collect(),
        texts: (0..count).map(|_| from.name()).collect(),
        chosen,
        stand_ins,
        key: vec![from.name(), from.name()],
        tips: Vec::new(),
    }
    .figure()
}

fn along(from: &mut Source) -> Figure {
    profile::Profile {
        caption: from.caption(),
        position: from.heading(),
        coefficient: from.heading(),
        positions: from.ascending(),
        coefficients: from.numbers(),
        low: from.numbers(),
        high: from.numbers(),
        signal: from.numbers(),
        signal_label: from.name(),
        tips: from.tips(),
    }
    .figure()
}

fn groups(from: &mut Source) -> Figure {
    let groups = (0..from.count.min(30))
        .map(|_| distribution::Group {
            name: from.name(),
            values: from.numbers(),
            middle: Some(from.number()),
            cells: vec![from.name()],
            tip: None,
        })
        .collect();
    distribution::Distributions {
        caption: from.caption(),
        names: from.name(),
        values: from.name(),
        scale: [
            Scale::Linear,
            Scale::Log10,
            Scale::Log10AndZero,
            Scale::Percent,
        ][from.count % 4]
            .clone(),
        columns: vec![from.name()],
        rule: Some((from.number(), from.name())),
        groups,
        more: "{} more".to_owned(),
    }
    .figure()
}

fn hits(from: &mut Source) -> Figure {
    let count = from.count;
    let mut curve = || (0..count).map(|_| from.pair()).collect::<Vec<(f64, f64)>>();
    let (own, repeats) = (curve(), vec![curve(), curve()]);
    roc::Roc {
        caption: from.caption(),
        false_alarms: from.heading(),
        hits: from.heading(),
        curve: own,
        repeats,
        threshold: Some((from.number(), from.number(), from.name(), None)),
        chance: from.name(),
        notes: from.notes(),
    }
    .figure()
}

fn times(from: &mut Source) -> Figure {
    let groups = (0..4)
        .map(|_| survival::Group {
            name: from.name(),
            times: from.ascending(),
            shares: from.numbers(),
            low: from.numbers(),
            high: from.numbers(),
            at_risk: from.names(),
        })
        .collect();
    survival::Survival {
        caption: from.caption(),
        time: from.heading(),
        share: from.heading(),
        groups,
        times: from.ascending(),
        at_risk: from.name(),
    }
    .figure()
}

fn shares(from: &mut Source) -> Figure {
    reliability::Reliability {
        caption: from.caption(),
        predicted: from.heading(),
        observed: from.heading(),
        predictions: from.numbers(),
        shares: from.numbers(),
        low: from.numbers(),
        high: from.numbers(),
        tips: from.tips(),
        identity: from.name(),
        samples: from.numbers(),
        sample_label: from.name(),
        notes: from.notes(),
    }
    .figure()
}

fn rest(from: &mut Source) -> Figure {
    residual::Residuals {
        caption: from.caption(),
        against: from.heading(),
        residual: from.heading(),
        positions: from.numbers(),
        residuals: from.numbers(),
        tips: from.tips(),
        smooth: vec![from.pair(), from.pair()],
        limits: vec![(from.number(), from.name()), (from.number(), from.name())],
        walls: vec![(from.number(), from.name())],
        pointed: vec![(0, from.name()), (1, from.name()), (999, from.name())],
    }
    .figure()
}

fn more(from: &mut Source) -> Figure {
    learning::Learning {
        caption: from.caption(),
        units: from.heading(),
        error: from.heading(),
        counts: from.ascending(),
        errors: from.numbers(),
        low: from.numbers(),
        high: from.numbers(),
        baseline: Some((from.number(), from.name())),
        tips: from.tips(),
    }
    .figure()
}

fn bins(from: &mut Source) -> Figure {
    histogram::Histogram {
        caption: from.caption(),
        value: from.heading(),
        count: from.heading(),
        values: from.numbers(),
        bins: 0,
        observed: from.choice(),
    }
    .figure()
}

fn classes(from: &mut Source) -> Figure {
    let classes = from.names();
    let count = classes.len() * classes.len();
    confusion::Confusion {
        caption: from.caption(),
        row_label: from.name(),
        column_label: from.name(),
        counts: (0..count).map(|_| from.number()).collect(),
        texts: (0..count).map(|_| from.name()).collect(),
        classes,
    }
    .figure()
}

/// Figures with as much data as a wide table has.
pub fn large() -> Vec<(&'static str, Figure)> {
    let mut dice = Dice::new(41);
    let strengths: Vec<f64> = (0..100)
        .map(|at| 10f64.powf(-f64::from(at) / 33.0))
        .collect();
    let lines = (0..20_000)
        .map(|at| {
            let enters = if at % 40 == 0 {
                (dice.even() * 90.0) as usize
            } else {
                100
            };
            let size = dice.normal();
            trace::TraceLine {
                name: format!("marker {at}"),
                values: (0..100)
                    .map(|k| {
                        if k < enters {
                            0.0
                        } else {
                            size * (k - enters) as f64 / 100.0
                        }
                    })
                    .collect(),
                standing: trace::Standing::Quiet,
                tip: Some(Tip::new(
                    Meaning::Predictor(format!("marker {at}")),
                    String::new(),
                )),
            }
        })
        .collect();
    let path = trace::Trace {
        strengths,
        lines,
        ..trace::Trace::default()
    };
    let many = |dice: &mut Dice| (0..50_000).map(|_| dice.normal()).collect::<Vec<f64>>();
    let cloud = agreement::Agreement {
        predictions: many(&mut dice),
        observations: many(&mut dice),
        ..agreement::Agreement::default()
    };
    let along = profile::Profile {
        positions: (0..200_000).map(f64::from).collect(),
        coefficients: (0..200_000).map(|_| dice.normal()).collect(),
        ..profile::Profile::default()
    };
    let spread = distribution::Distributions {
        groups: vec![distribution::Group {
            name: "all".to_owned(),
            values: many(&mut dice),
            middle: None,
            cells: Vec::new(),
            tip: None,
        }],
        ..distribution::Distributions::default()
    };
    vec![
        ("trace", path.figure()),
        ("agreement", cloud.figure()),
        ("profile", along.figure()),
        ("distribution", spread.figure()),
    ]
}
