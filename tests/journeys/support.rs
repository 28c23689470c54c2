//! Dice, folders, and studies made at random.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::{AtomicU32, Ordering};
use widefold::base::layout::{
    DecimalMark, Delimiter, Encoding, Grouping as DigitGroups, Orientation, UnitsRow,
};
use widefold::base::number::Precision;
use widefold::base::problem::{Place, Problem};
use widefold::base::real::Real;
use widefold::eval::caveat::{Caveat, Origin, Severity};
use widefold::eval::fact::{Fact, FactColumn, Facts};
use widefold::eval::outcome::{Failure, Gives, Outcome as CellOutcome, Remedy};
use widefold::eval::standing::{Standing, Standings, State};
use widefold::store;
use widefold::study::Study;
use widefold::study::cell::{Cell, CellId, Kind};
use widefold::study::edit::Edit;
use widefold::study::ledger::{Ledger, Look, Opening};
use widefold::study::link::Link;
use widefold::study::prose::{FactReference, Piece, Prose};
use widefold::study::settings::Settings;
use widefold::study::settings::compare::Compare;
use widefold::study::settings::data::{
    ColumnRange, Correction, Data, Exclusion, Join, LeadingZeros, LetterCase, Marked, Outcome,
    OutcomeKind, OutcomeSeen, Sealed, Subject, TableSource, UnitMaking,
};
use widefold::study::settings::fit::{
    ErrorMeasure, Fit, Grouping, Judge, Penalty, PenaltyRange, Plan, Rule, Scaling, Scheme,
    Strength, Ties,
};
use widefold::study::settings::prepare::{Prepare, Step};
use widefold::study::settings::question::{Ask, Question, Seal};
use widefold::study::settings::score::Score;
use widefold::study::settings::slot::prepare::PrepareSlot;
use widefold::study::settings::slot::{Bounds, Value};
use widefold::study::settings::weights::{Block, BlockChoice, Interval, Signs, Strata, Weighting};
use widefold::study::source::Shelf;

/// A seeded source of choices (SplitMix64; Steele, Lea and Flood 2014).
pub struct Dice(pub u64);

impl Dice {
    pub fn roll(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    pub fn below(&mut self, count: usize) -> usize {
        (self.roll() % count.max(1) as u64) as usize
    }

    pub fn one_of<T: Clone>(&mut self, things: &[T]) -> T {
        things[self.below(things.len())].clone()
    }

    pub fn maybe<T>(&mut self, thing: impl FnOnce(&mut Self) -> T) -> Option<T> {
        (self.below(2) == 0).then(|| thing(self))
    }

    pub fn some<T>(&mut self, most: usize, thing: impl Fn(&mut Self) -> T) -> Vec<T> {
        (0..self.below(most + 1)).map(|_| thing(self)).collect()
    }

    /// A finite number of any size, with all its digits.
    pub fn real(&mut self) -> Real {
        loop {
            let number = match self.below(4) {
                0 => f64::from_bits(self.roll()),
                1 => self.below(10) as f64,
                _ => self.share(),
            };
            if let Some(real) = Real::new(number) {
                return real;
            }
        }
    }

    /// A number between 0 and 1, with all its digits.
    pub fn share(&mut self) -> f64 {
        self.roll() as f64 / u64::MAX as f64
    }

    /// A number between two others.
    pub fn between(&mut self, least: f64, most: f64) -> Real {
        Real::new(least + self.share() * (most - least)).unwrap()
    }

    /// A positive number of any size, with all its digits.
    pub fn size(&mut self) -> Real {
        Real::new(self.real().get().abs()).unwrap()
    }

    /// A whole number between two others, both ends included.
    pub fn count(&mut self, least: usize, most: usize) -> u32 {
        (least + self.below(most - least + 1)) as u32
    }

    /// Words as people write them, the awkward ones included.
    pub fn text(&mut self) -> String {
        const WORDS: [&str; 12] = [
            "salt",
            "wheel 007",
            "1E-05",
            "MAR-2",
            "",
            "“quoted” \"twice\"",
            "ÅÄÖ µg/l",
            "a\tb",
            "back\\slash",
            "{salt lasso: error}",
            "line\nbreak",
            "=SUM(A1)",
        ];
        format!("{}{}", self.one_of(&WORDS), self.below(50))
    }
}

/// A fresh folder that is removed at the end of its test.
pub struct Folder(PathBuf);

impl Folder {
    pub fn new() -> Self {
        static NEXT: AtomicU32 = AtomicU32::new(0);
        let number = NEXT.fetch_add(1, Ordering::Relaxed);
        let name = format!("widefold-journey-{}-{number}", std::process::id());
        let path = std::env::temp_dir().join(name);
        std::fs::create_dir_all(&path).unwrap();
        Self(path)
    }

    pub fn path(&self) -> &Path {
        &self.0
    }

    pub fn file(&self, name: &str) -> PathBuf {
        self.0.join(name)
    }

    /// Writes a file, with the folders above it.
    pub fn put(&self, name: &str, bytes: impl AsRef<[u8]>) -> PathBuf {
        let path = self.file(name);
        std::fs::create_dir_all(path.parent().unwrap()).unwrap();
        put(&path, bytes);
        path
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        let _ = std::fs::remove_dir_all(&self.0);
    }
}

#[expect(
    clippy::disallowed_methods,
    reason = "journeys look at files from outside"
)]
pub fn put(path: &Path, bytes: impl AsRef<[u8]>) {
    std::fs::write(path, bytes).unwrap();
}

#[expect(
    clippy::disallowed_methods,
    reason = "journeys look at files from outside"
)]
pub fn get(path: &Path) -> Vec<u8> {
    std::fs::read(path).unwrap()
}

/// Everything that is saved of a study.
pub struct Desk {
    pub study: Study,
    pub shelf: Shelf,
    pub ledger: Ledger,
    pub standings: Standings,
}

/// A study made at random by lawful edits, with every kind of setting, results and failures.
/// Its tables lie in `folder`.
pub fn any_desk(seed: u64, folder: &Folder) -> Desk {
    let mut dice = Dice(seed);
    let mut study = Study::new(&dice.text());
    let mut shelf = Shelf::default();
    let tables: Vec<TableSource> = (0..3)
        .map(|at| {
            let name = format!(
                "{}table-{at}-{seed}.csv",
                dice.one_of(&["", "below/", "a b/ü/"])
            );
            let path = folder.put(&name, format!("name;x;y\n{at};{seed};3,5\n"));
            store::take_in(&path, &mut shelf).unwrap()
        })
        .collect();
    for _ in 0..30 {
        let id = study.next_id();
        let kind = dice.one_of(&Kind::ALL);
        let cell = Cell {
            id,
            title: study.free_title(&dice.text()),
            settings: any_settings(kind, &study, &tables, &mut dice),
        };
        let at = dice.below(study.cells().len() + 1);
        drop(study.apply(Edit::Insert { at, cell }));
        if dice.below(6) == 0 && !study.cells().is_empty() {
            let id = dice.one_of(study.cells()).id;
            drop(study.apply(Edit::Remove { id }));
        }
    }
    let look = |dice: &mut Dice| Look {
        configuration: format!("{:064x}", dice.roll()),
        cell: dice.text(),
        date: "2026-03-14".to_owned(),
    };
    let opening = |dice: &mut Dice| Opening {
        cell: dice.text(),
        configuration: format!("{:064x}", dice.roll()),
        date: "2026-03-15".to_owned(),
    };
    let ledger = Ledger::restored(dice.some(4, look), dice.some(2, opening));
    let mut standings = Standings::default();
    for cell in study.cells() {
        if let Some(standing) = any_standing(cell.settings.clone(), &mut dice) {
            standings.put(cell.id, standing);
        }
    }
    Desk {
        study,
        shelf,
        ledger,
        standings,
    }
}

fn any_link(study: &Study, dice: &mut Dice) -> Link {
    match dice.below(6) {
        0 => Link::open(),
        1 => Link::to(CellId::new(
            dice.below(study.next_id().number() as usize + 1) as u32,
        )),
        _ if study.cells().is_empty() => Link::open(),
        _ => Link::to(dice.one_of(study.cells()).id),
    }
}

pub fn any_settings(
    kind: Kind,
    study: &Study,
    tables: &[TableSource],
    dice: &mut Dice,
) -> Settings {
    match kind {
        Kind::Data => Settings::Data(any_data(tables, dice)),
        Kind::Prepare => Settings::Prepare(Prepare {
            input: any_link(study, dice),
            steps: dice.some(6, any_step),
        }),
        Kind::Fit => Settings::Fit(any_fit(study, dice)),
        Kind::Question => Settings::Question(Question {
            fit: any_link(study, dice),
            ask: match dice.below(7) {
                0 => Ask::LeastSquares,
                1 => Ask::ErrorCurve,
                2 => Ask::CoefficientTrace,
                3 => Ask::Agreement,
                4 => Ask::Ladder {
                    seal: dice.one_of(&[Seal::Closed, Seal::Opened]),
                },
                5 => Ask::ChosenAgain {
                    pairs: dice.count(5, 5000),
                    threshold: dice.between(0.51, 1.0),
                    seed: dice.roll(),
                },
                _ => Ask::StandIns {
                    correlation: dice.between(0.1, 1.0),
                },
            },
        }),
        Kind::Compare => Settings::Compare(Compare {
            fits: (0..dice.below(4)).map(|_| any_link(study, dice)).collect(),
        }),
        Kind::Score => Settings::Score(Score {
            fit: any_link(study, dice),
            table: dice.maybe(|dice| any_table(tables, dice)),
        }),
        Kind::Prose => Settings::Prose(any_prose(study, dice)),
    }
}

/// Mostly prose as it is typed, sometimes pieces that could not be typed.
fn any_prose(study: &Study, dice: &mut Dice) -> Prose {
    let piece = |dice: &mut Dice| match dice.below(5) {
        0 => Piece::Fact(FactReference {
            cell: any_link(study, dice).0.unwrap_or(CellId::new(77)),
            fact: dice.one_of(&["nested rmse", "odd | fact }"]).to_owned(),
            decimals: dice.maybe(|dice| dice.below(13) as u8),
        }),
        1 => Piece::Unknown(dice.one_of(&["", "x: y", "#3: z", "a b"]).to_owned()),
        _ => Piece::Text(dice.text()),
    };
    if dice.below(3) == 0 {
        return Prose {
            pieces: dice.some(5, piece),
        };
    }
    let mut text = String::from("# Head\n\nText {unclosed\n{stray");
    for cell in study.cells().iter().take(3) {
        text.push_str(&format!(
            " and {{{}: nested rmse | 2 decimals}}\n",
            cell.title
        ));
    }
    Prose::parse(&text, study)
}

fn any_table(tables: &[TableSource], dice: &mut Dice) -> TableSource {
    let (first, second) = (tables[0].clone(), dice.one_of(tables));
    TableSource {
        sheet: dice.maybe(Dice::text),
        encoding: dice.maybe(|dice| {
            dice.one_of(&[
                Encoding::Utf8,
                Encoding::Utf16Le,
                Encoding::Utf16Be,
                Encoding::Windows1252,
            ])
        }),
        delimiter: dice.maybe(|dice| {
            dice.one_of(&[
                Delimiter::Comma,
                Delimiter::Semicolon,
                Delimiter::Tab,
                Delimiter::Bar,
                Delimiter::Blanks,
            ])
        }),
        decimal: dice.maybe(|dice| dice.one_of(&[DecimalMark::Point, DecimalMark::Comma])),
        taken_on: dice.maybe(Dice::text),
        header_row: dice.maybe(|dice| dice.below(9)),
        grouping: dice.maybe(|dice| dice.one_of(&[DigitGroups::Absent, DigitGroups::Read])),
        units_row: dice.maybe(|dice| dice.one_of(&[UnitsRow::Absent, UnitsRow::BelowHeader])),
        orientation: dice.maybe(|dice| {
            dice.one_of(&[Orientation::SamplesInRows, Orientation::SamplesInColumns])
        }),
        missing_codes: dice.some(3, Dice::text),
        join: dice.maybe(|dice| Join {
            left: dice.text(),
            right: dice.text(),
            case: dice.one_of(&[LetterCase::Distinct, LetterCase::Folded]),
            zeros: dice.one_of(&[LeadingZeros::Kept, LeadingZeros::Ignored]),
        }),
        ..dice.one_of(&[first, second])
    }
}

fn any_data(tables: &[TableSource], dice: &mut Dice) -> Data {
    const SEEN: [OutcomeSeen; 3] = [
        OutcomeSeen::Before,
        OutcomeSeen::After,
        OutcomeSeen::NotSaid,
    ];
    Data {
        tables: dice.some(3, |dice| any_table(tables, dice)),
        outcome: dice.maybe(|dice| Outcome {
            column: dice.text(),
            kind: match dice.below(5) {
                0 => OutcomeKind::Measured,
                1 => OutcomeKind::YesNo {
                    event: dice.maybe(Dice::text),
                },
                2 => OutcomeKind::Classes,
                3 => OutcomeKind::Count {
                    exposure: dice.maybe(Dice::text),
                },
                _ => OutcomeKind::Time { event: dice.text() },
            },
            unit: dice.maybe(Dice::text),
            reference_error: dice.maybe(Dice::real),
        }),
        predictors: dice.some(3, |dice| ColumnRange {
            first: dice.text(),
            last: dice.text(),
        }),
        sample_name: dice.maybe(Dice::text),
        unit: dice.maybe(Dice::text),
        unit_making: dice.one_of(&[UnitMaking::InColumn, UnitMaking::FromNames]),
        batch: dice.maybe(Dice::text),
        order: dice.maybe(Dice::text),
        weight: dice.maybe(Dice::text),
        covariates: dice.some(2, Dice::text),
        ignored: dice.some(2, Dice::text),
        as_text: dice.some(2, Dice::text),
        as_numbers: dice.some(2, Dice::text),
        corrections: Arc::new(dice.some(2, |dice| Correction {
            sample: dice.text(),
            column: dice.text(),
            from: dice.text(),
            to: dice.text(),
            reason: dice.text(),
            outcome: dice.one_of(&SEEN),
        })),
        exclusions: Arc::new(dice.some(2, |dice| Exclusion {
            sample: dice.text(),
            reason: dice.text(),
            outcome: dice.one_of(&SEEN),
        })),
        sealed: match dice.below(3) {
            0 => Sealed::Nothing,
            1 => Sealed::Where {
                column: dice.text(),
                values: dice.some(3, Dice::text),
            },
            _ => Sealed::Listed(dice.some(3, Dice::text)),
        },
        quality_control: (dice.below(3) == 0).then(|| {
            Arc::new(Marked {
                column: dice.text(),
                values: dice.some(3, Dice::text),
            })
        }),
        subject: dice.one_of(&[
            Subject::Ordinary,
            Subject::Health,
            Subject::Safety,
            Subject::Compliance,
        ]),
    }
}

/// A step of the catalogue, each of its words set to something that may stand there.
fn any_step(dice: &mut Dice) -> Step {
    let catalogue = Step::catalogue();
    let step = catalogue[dice.below(catalogue.len())].clone();
    let mut settings = Prepare {
        input: Link::open(),
        steps: vec![step],
    };
    // A choice can bring a word that was not there before, so that words are asked for anew.
    for round in 0..2 {
        for slot in PrepareSlot::of(&settings) {
            let choices = slot.choices();
            let is_given = matches!(slot.get(&settings), Some(Value::Numbers(_)));
            let value = if !choices.is_empty() && round == 0 {
                Value::choice(choices[dice.below(choices.len())])
            } else if is_given {
                let ends = [dice.size(), dice.size()];
                Value::Numbers(vec![ends[0].min(ends[1]), ends[0].max(ends[1])])
            } else {
                match slot.bounds() {
                    Some(Bounds::Whole { least, most }) => {
                        Value::Whole(least + dice.below((most - least).min(40) as usize) as u64)
                    }
                    Some(Bounds::Any { least, most }) => {
                        Value::Number(dice.between(least.max(-20.0), most.min(20.0)))
                    }
                    None => continue,
                }
            };
            // Settings that do not go together are refused, and the old ones stand.
            if let Ok(changed) = slot.set(&settings, value) {
                settings = changed;
            }
        }
    }
    settings.steps.remove(0)
}

fn any_fit(study: &Study, dice: &mut Dice) -> Fit {
    let plan = |dice: &mut Dice| Plan {
        scheme: dice.one_of(&[
            Scheme::Units,
            Scheme::Balanced,
            Scheme::WholeBatches,
            Scheme::LeaveOneUnitOut,
            Scheme::Blocks,
        ]),
        parts: dice.count(2, 1000),
        repeats: dice.count(1, 1000),
    };
    Fit {
        input: any_link(study, dice),
        penalty: match dice.below(3) {
            0 => Penalty::Ridge,
            1 => Penalty::Lasso,
            _ => Penalty::ElasticNet {
                shares: {
                    let mut shares = dice.some(4, |dice| dice.between(0.001, 0.999));
                    shares.push(Real::constant(0.5));
                    shares.sort();
                    shares
                },
            },
        },
        scaling: dice.one_of(&[Scaling::UnitVariance, Scaling::AsPrepared]),
        grouping: dice.one_of(&[Grouping::Apart, Grouping::Together]),
        ties: dice.one_of(&[Ties::Efron, Ties::Breslow]),
        measure: dice.one_of(&[
            ErrorMeasure::Usual,
            ErrorMeasure::SquaredError,
            ErrorMeasure::Deviance,
            ErrorMeasure::Misclassification,
            ErrorMeasure::PartialLikelihood,
            ErrorMeasure::Concordance,
        ]),
        strength: match dice.below(3) {
            0 => Strength::ByHand(dice.size()),
            _ => Strength::Chosen {
                rule: match dice.below(4) {
                    0 => Rule::LowestError,
                    1 => Rule::OneStandardError,
                    2 => Rule::GeneralisedCrossValidation,
                    _ => Rule::ExtendedBic {
                        gamma: dice.between(0.0, 1.0),
                    },
                },
                range: PenaltyRange {
                    count: dice.count(2, 1000),
                    ratio: dice.maybe(|dice| dice.between(1e-9, 0.99)),
                },
                inner: plan(dice),
            },
        },
        judge: match dice.below(3) {
            0 => Judge::Declined,
            _ => Judge::Nested(plan(dice)),
        },
        weighting: any_weighting(dice),
        signs: match dice.below(3) {
            0 => Signs::Any,
            1 => Signs::NotNegative,
            _ => Signs::NotNegativeIn(dice.some(3, any_range)),
        },
        strata: dice.one_of(&[Strata::None, Strata::Batches]),
        interval: dice.one_of(&[Interval::OverUnits, Interval::Careful]),
        seed: dice.roll(),
    }
}

fn any_range(dice: &mut Dice) -> ColumnRange {
    ColumnRange {
        first: dice.text(),
        last: dice.text(),
    }
}

fn any_weighting(dice: &mut Dice) -> Weighting {
    match dice.below(3) {
        0 => Weighting::Equal,
        1 => Weighting::Adaptive {
            power: dice.between(0.1, 4.0),
        },
        _ => Weighting::Blocks {
            blocks: dice.some(3, |dice| Block {
                range: any_range(dice),
                weight: dice.between(0.001, 1000.0),
            }),
            choice: match dice.below(2) {
                0 => BlockChoice::ByHand,
                _ => BlockChoice::Chosen {
                    grid: vec![dice.between(0.001, 0.9), Real::constant(1.0)],
                },
            },
        },
    }
}

/// Facts of every sort, with the numbers that JSON has no words for.
pub fn any_facts(dice: &mut Dice) -> Facts {
    let number = |dice: &mut Dice| match dice.below(6) {
        0 => dice.one_of(&[f64::NAN, f64::INFINITY, f64::NEG_INFINITY, -0.0, 5e-324]),
        1 => dice.below(100) as f64,
        _ => dice.real().get(),
    };
    let precision = |dice: &mut Dice| match dice.below(5) {
        0 => Precision::Whole,
        1 => Precision::Decimals(dice.roll() as u8),
        2 => Precision::Significant(dice.roll() as u8),
        3 => Precision::Percent(dice.roll() as u8),
        _ => Precision::Full,
    };
    let mut facts = Facts::new();
    for at in 0..dice.below(6) {
        let name = format!("fact {at}");
        let meaning = dice.text();
        facts.push(match dice.below(3) {
            0 => {
                let (number, precision) = (number(dice), precision(dice));
                Fact::number(&name, number, &dice.text(), precision, &meaning)
            }
            1 => Fact::text(&name, dice.text(), &meaning),
            _ => {
                let n_rows = dice.below(5);
                let columns = dice.some(3, |dice| match dice.below(2) {
                    0 => {
                        let numbers = (0..n_rows).map(|_| number(dice)).collect();
                        let precision = precision(dice);
                        FactColumn::numbers(&dice.text(), numbers, "g", precision, "A number.")
                    }
                    _ => {
                        let texts = (0..n_rows).map(|_| dice.text()).collect();
                        FactColumn::texts(&dice.text(), texts, "A word.")
                    }
                });
                Fact::table(&name, columns, &meaning)
            }
        });
    }
    facts
}

/// A result, a failure, or nothing.
fn any_standing(settings: Settings, dice: &mut Dice) -> Option<Standing> {
    let caveat = |dice: &mut Dice| Caveat {
        id: "tuning-error-as-performance".to_owned(),
        severity: dice.one_of(&[Severity::Note, Severity::Caution, Severity::Stop]),
        heading: dice.text(),
        text: dice.text(),
        trigger: dice.some(2, |dice| (dice.text(), dice.text())),
        threshold: dice.text(),
        origin: dice.one_of(&[Origin::Published, Origin::Convention, Origin::Computed]),
    };
    match dice.below(4) {
        0 => None,
        1 => Some(Standing {
            state: State::Failed,
            outcome: None,
            failure: Some(Arc::new(Failure {
                problem: Problem::new("missing-outcome", dice.text())
                    .at(Place::file("a.csv").with_row(3).with_column("x"))
                    .mend(dice.text())
                    .details(dice.text()),
                remedies: vec![Remedy {
                    label: dice.text(),
                    settings,
                }],
            })),
        }),
        _ => Some(current(any_facts(dice), dice.some(2, caveat))),
    }
}

/// How a cell stands that has these facts.
pub fn current(facts: Facts, caveats: Vec<Caveat>) -> Standing {
    Standing {
        state: State::Current,
        outcome: Some(Arc::new(CellOutcome {
            gives: Gives::Facts,
            facts,
            caveats,
        })),
        failure: None,
    }
}
