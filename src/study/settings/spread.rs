//! Settings of every kind with every choice at least once, for tests.

use crate::base::layout::{
    DecimalMark, Delimiter, Encoding, Grouping as DigitGroups, Orientation, UnitsRow,
};
use crate::base::real::Real;
use crate::study::cell::CellId;
use crate::study::link::Link;
use crate::study::settings::Settings;
use crate::study::settings::compare::Compare;
use crate::study::settings::data::{
    ColumnRange, Correction, Data, Exclusion, Join, LeadingZeros, LetterCase, Marked, Outcome,
    OutcomeKind, OutcomeSeen, Sealed, Subject, TableSource, UnitMaking,
};
use crate::study::settings::fit::{
    ErrorMeasure, Fit, Grouping, Judge, Penalty, PenaltyRange, Plan, Rule, Scaling, Scheme,
    Strength, Ties,
};
use crate::study::settings::prepare::choice::ScaleRule;
use crate::study::settings::prepare::{Prepare, Reference, Step};
use crate::study::settings::question::{Ask, Question, Seal};
use crate::study::settings::score::Score;
use crate::study::settings::weights::{Block, BlockChoice, Interval, Signs, Strata, Weighting};
use crate::study::source::SourceId;
use std::sync::Arc;

/// The cell whose samples are taken.
pub const DATA: CellId = CellId::new(1);
/// The cell that prepares them.
pub const PREPARE: CellId = CellId::new(2);
/// The fit.
pub const FIT: CellId = CellId::new(3);
/// A second fit.
pub const OTHER_FIT: CellId = CellId::new(4);

/// Scans of cheeses with laboratory values, as in the demo study.
pub fn cellar() -> Data {
    let mut scans = TableSource::new(SourceId::of(b"scans"), "cellar-scans.csv");
    scans.orientation = Some(Orientation::SamplesInRows);
    scans.delimiter = Some(Delimiter::Semicolon);
    scans.decimal = Some(DecimalMark::Comma);
    scans.encoding = Some(Encoding::Utf8);
    scans.taken_on = Some("2026-03-02".to_owned());
    scans.header_row = Some(1);
    scans.units_row = Some(UnitsRow::BelowHeader);
    scans.missing_codes = vec!["-999".to_owned(), "NA".to_owned()];
    let mut lab = TableSource::new(SourceId::of(b"lab"), "cellar-lab.xlsx");
    lab.sheet = Some("Wet chemistry".to_owned());
    lab.orientation = Some(Orientation::SamplesInRows);
    lab.join = Some(Join {
        left: "wheel".to_owned(),
        right: "wheel".to_owned(),
        case: LetterCase::Distinct,
        zeros: LeadingZeros::Kept,
    });
    Data {
        tables: vec![scans, lab],
        outcome: Some(Outcome {
            column: "salt in moisture".to_owned(),
            kind: OutcomeKind::Measured,
            unit: Some("g/100 g".to_owned()),
            reference_error: Some(Real::constant(0.12)),
        }),
        predictors: vec![ColumnRange {
            first: "900 nm".to_owned(),
            last: "1700 nm".to_owned(),
        }],
        sample_name: Some("scan".to_owned()),
        unit: Some("wheel".to_owned()),
        batch: Some("cave".to_owned()),
        sealed: Sealed::Where {
            column: "season".to_owned(),
            values: vec!["next".to_owned()],
        },
        ..Data::default()
    }
}

/// Data settings with every choice at least once.
pub fn data() -> Vec<Data> {
    let with_kind = |kind: OutcomeKind| {
        let mut data = cellar();
        data.outcome = Some(Outcome {
            column: "leaf spot".to_owned(),
            kind,
            unit: None,
            reference_error: None,
        });
        data
    };
    let mut busy = cellar();
    busy.tables[1].join = Some(Join {
        left: "wheel".to_owned(),
        right: "Wheel no. 2".to_owned(),
        case: LetterCase::Folded,
        zeros: LeadingZeros::Ignored,
    });
    busy.tables[0].orientation = Some(Orientation::SamplesInColumns);
    busy.tables[0].units_row = Some(UnitsRow::Absent);
    busy.covariates = vec!["age".to_owned(), "cellar temperature".to_owned()];
    busy.ignored = vec!["salt_calc".to_owned()];
    busy.tables[0].grouping = Some(DigitGroups::Read);
    busy.unit_making = UnitMaking::FromNames;
    busy.as_text = vec!["lot".to_owned(), "1E-05".to_owned()];
    busy.as_numbers = vec!["iron".to_owned()];
    busy.order = Some("minute".to_owned());
    busy.weight = Some("scans averaged".to_owned());
    busy.predictors.push(ColumnRange {
        first: "2100 nm".to_owned(),
        last: "2100 nm".to_owned(),
    });
    busy.sealed = Sealed::Listed(["W101", "W102", "W103", "W104"].map(str::to_owned).to_vec());
    busy.subject = Subject::Safety;
    busy.quality_control = Some(Arc::new(Marked {
        column: "sort of scan".to_owned(),
        values: vec!["QC".to_owned(), "pool".to_owned()],
    }));
    busy.corrections = Arc::new(vec![Correction {
        sample: "W012-a".to_owned(),
        column: "salt in moisture".to_owned(),
        from: "31.2".to_owned(),
        to: "3.12".to_owned(),
        reason: "decimal point lost in the laboratory book".to_owned(),
        outcome: OutcomeSeen::Before,
    }]);
    busy.exclusions = Arc::new(
        ["W007-b", "W044-c"]
            .map(|sample| Exclusion {
                sample: sample.to_owned(),
                reason: "probe touched the rind".to_owned(),
                outcome: OutcomeSeen::After,
            })
            .to_vec(),
    );
    let mut few = cellar();
    few.tables = vec![TableSource::new(SourceId::of(b"x"), "panel.txt")];
    few.sample_name = None;
    few.unit = None;
    few.batch = None;
    few.predictors = Vec::new();
    few.sealed = Sealed::Listed(Vec::new());
    few.subject = Subject::Health;
    few.covariates = vec!["age".to_owned()];
    if let Some(outcome) = &mut few.outcome {
        outcome.unit = None;
        outcome.reference_error = None;
    }
    vec![
        Data::default(),
        cellar(),
        busy,
        few,
        with_kind(OutcomeKind::YesNo { event: None }),
        with_kind(OutcomeKind::YesNo {
            event: Some("spotted".to_owned()),
        }),
        with_kind(OutcomeKind::Classes),
        with_kind(OutcomeKind::Count { exposure: None }),
        with_kind(OutcomeKind::Count {
            exposure: Some("trap nights".to_owned()),
        }),
        with_kind(OutcomeKind::Time {
            event: "failed".to_owned(),
        }),
    ]
}

/// Preparations with every step at least once.
pub fn prepare() -> Vec<Prepare> {
    let of = |steps: Vec<Step>| Prepare {
        input: Link::to(DATA),
        steps,
    };
    vec![
        Prepare::default(),
        of(Vec::new()),
        of(vec![Step::Center]),
        of(vec![
            Step::StandardNormalVariate,
            Step::SavitzkyGolay {
                window: 15,
                degree: 2,
                derivative: 1,
            },
            Step::Center,
            Step::Scale {
                rule: ScaleRule::UnitVariance,
            },
        ]),
        of(vec![
            Step::SavitzkyGolay {
                window: 11,
                degree: 3,
                derivative: 0,
            },
            Step::ScatterCorrection {
                reference: Reference::Training,
            },
            Step::SavitzkyGolay {
                window: 21,
                degree: 2,
                derivative: 2,
            },
        ]),
        of(Step::catalogue()),
    ]
}

/// A plan of parts.
pub const fn plan(scheme: Scheme, parts: u32, repeats: u32) -> Plan {
    Plan {
        scheme,
        parts,
        repeats,
    }
}

/// A block of many columns and one of a single column.
fn blocks() -> Vec<Block> {
    let block = |first: &str, last: &str, weight: f64| Block {
        range: ColumnRange {
            first: first.to_owned(),
            last: last.to_owned(),
        },
        weight: Real::constant(weight),
    };
    vec![
        block("900 nm", "1300 nm", 2.0),
        block("1700 nm", "1700 nm", 0.5),
    ]
}

/// Fits with every choice at least once.
pub fn fit() -> Vec<Fit> {
    let usual = || Fit {
        input: Link::to(PREPARE),
        ..Fit::default()
    };
    let net = |shares: &[f64]| Penalty::ElasticNet {
        shares: shares
            .iter()
            .filter_map(|share| Real::new(*share))
            .collect(),
    };
    let chosen = |rule: Rule, inner: Plan| Strength::Chosen {
        rule,
        range: PenaltyRange {
            count: 60,
            ratio: Some(Real::constant(0.001)),
        },
        inner,
    };
    let mut fits = vec![usual()];
    for (penalty, scaling) in [
        (Penalty::Ridge, Scaling::UnitVariance),
        (net(&[0.5]), Scaling::AsPrepared),
        (net(&[0.2, 0.5, 0.8]), Scaling::UnitVariance),
    ] {
        fits.push(Fit {
            penalty,
            scaling,
            ..usual()
        });
    }
    for (rule, scheme, repeats) in [
        (Rule::OneStandardError, Scheme::Balanced, 1),
        (Rule::LowestError, Scheme::WholeBatches, 1),
        (Rule::LowestError, Scheme::LeaveOneUnitOut, 1),
        (Rule::OneStandardError, Scheme::Blocks, 1),
        (Rule::GeneralisedCrossValidation, Scheme::Units, 2),
        (
            Rule::ExtendedBic {
                gamma: Real::constant(0.5),
            },
            Scheme::Units,
            2,
        ),
    ] {
        fits.push(Fit {
            strength: chosen(rule, plan(scheme, 10, repeats)),
            judge: Judge::Nested(plan(scheme, 5, repeats)),
            ..usual()
        });
    }
    for measure in [
        ErrorMeasure::SquaredError,
        ErrorMeasure::Deviance,
        ErrorMeasure::Misclassification,
        ErrorMeasure::PartialLikelihood,
        ErrorMeasure::Concordance,
    ] {
        fits.push(Fit { measure, ..usual() });
    }
    fits.push(Fit {
        grouping: Grouping::Together,
        ..usual()
    });
    fits.push(Fit {
        ties: Ties::Breslow,
        ..usual()
    });
    fits.push(Fit {
        strata: Strata::Batches,
        interval: Interval::Careful,
        signs: Signs::NotNegative,
        weighting: Weighting::Adaptive {
            power: Real::constant(0.5),
        },
        ..usual()
    });
    for choice in [
        BlockChoice::ByHand,
        BlockChoice::Chosen {
            grid: vec![Real::constant(0.25), Real::constant(1.0)],
        },
    ] {
        fits.push(Fit {
            weighting: Weighting::Blocks {
                blocks: blocks(),
                choice,
            },
            signs: Signs::NotNegativeIn(vec![blocks()[0].range.clone()]),
            ..usual()
        });
    }
    fits.push(Fit {
        strength: Fit::default().strength.set_by_hand(Real::constant(0.04)),
        ..usual()
    });
    fits.push(Fit {
        strength: Strength::ByHand(Real::constant(0.03)),
        judge: Judge::Declined,
        ..usual()
    });
    fits.push(Fit::default());
    fits
}

/// Every question, and the choices within them.
pub fn question() -> Vec<Question> {
    let mut asks = Ask::catalogue();
    asks.push(Ask::Ladder { seal: Seal::Opened });
    let mut questions: Vec<Question> = asks
        .into_iter()
        .map(|ask| Question {
            fit: Link::to(FIT),
            ask,
        })
        .collect();
    questions.push(Question {
        fit: Link::open(),
        ask: Ask::Agreement,
    });
    questions
}

/// Comparisons of none, one, two and three fits.
pub fn compare() -> Vec<Compare> {
    [
        Vec::new(),
        vec![Link::to(FIT)],
        vec![Link::to(FIT), Link::to(OTHER_FIT)],
        vec![
            Link::to(FIT),
            Link::to(OTHER_FIT),
            Link::to(CellId::new(99)),
        ],
    ]
    .map(|fits| Compare { fits })
    .to_vec()
}

/// Scores without a table, with a text and with a workbook.
pub fn score() -> Vec<Score> {
    let of = |table: Option<&str>| Score {
        fit: Link::to(FIT),
        table: table.map(|name| TableSource::new(SourceId::of(b"new"), name)),
    };
    vec![
        Score::default(),
        of(None),
        of(Some("new-wheels.csv")),
        of(Some("new-wheels.ods")),
    ]
}

/// All of them, with the kinds in their order.
pub fn all() -> Vec<Settings> {
    let mut all: Vec<Settings> = data().into_iter().map(Settings::Data).collect();
    all.extend(prepare().into_iter().map(Settings::Prepare));
    all.extend(fit().into_iter().map(Settings::Fit));
    all.extend(question().into_iter().map(Settings::Question));
    all.extend(compare().into_iter().map(Settings::Compare));
    all.extend(score().into_iter().map(Settings::Score));
    all
}
