//! A study with facts written by hand, for tests: the cellar scans, fitted and asked.

mod kind;
mod question;

use crate::base::number::Precision;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::outcome::{Gives, Outcome};
use crate::eval::standing::{Standing, Standings, State};
use crate::report::Context;
use crate::report::sample::question::question_facts;
use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::ledger::Ledger;
use crate::study::link::Link;
use crate::study::settings::Settings;
use crate::study::settings::data::{Data, Sealed};
use crate::study::settings::fit::{Fit, Judge, Penalty, Strength};
use crate::study::settings::prepare::Step;
use crate::study::settings::question::{Ask, Question};
use crate::study::settings::spread;
use crate::study::settings::weights::{BlockChoice, Interval, Signs, Weighting};
use std::sync::Arc;

const MEANING: &str = "What it is.";
const UNIT: &str = "g/100 g";

/// A study and what came of it.
pub struct Bench {
    pub study: Study,
    pub standings: Standings,
    pub ledger: Ledger,
}

impl Bench {
    /// Cells one after the other from number 1 on, with their facts.
    pub fn of(cells: Vec<(&str, Settings, Option<Facts>)>) -> Self {
        let mut standings = Standings::default();
        let mut list = Vec::new();
        for (at, (title, settings, facts)) in cells.into_iter().enumerate() {
            let id = CellId::new(at as u32 + 1);
            list.push(Cell {
                id,
                title: title.to_owned(),
                settings,
            });
            if let Some(facts) = facts {
                let outcome = Outcome {
                    gives: Gives::Facts,
                    facts,
                    caveats: Vec::new(),
                };
                let standing = Standing {
                    state: State::Current,
                    outcome: Some(Arc::new(outcome)),
                    failure: None,
                };
                standings.put(id, standing);
            }
        }
        Self {
            study: Study::restored("Cellar light", list, 1),
            standings,
            ledger: Ledger::default(),
        }
    }

    /// The study around a fit, with these questions asked of it.
    pub fn around(data: &Data, fit: &Fit, asks: &[Ask]) -> Self {
        let prepare = spread::prepare().swap_remove(3);
        let steps = prepare.steps.clone();
        let mut cells = vec![
            (
                "cellar scans",
                Settings::Data(data.clone()),
                Some(data_facts(data)),
            ),
            (
                "prepared scans",
                Settings::Prepare(prepare),
                Some(prepare_facts(&steps)),
            ),
            (
                "salt lasso",
                Settings::Fit(fit.clone()),
                Some(fit_facts(data, fit)),
            ),
            (
                "salt ridge",
                Settings::Fit(fit.clone()),
                Some(fit_facts(data, fit)),
            ),
        ];
        for ask in asks {
            let question = Question {
                fit: Link::to(spread::FIT),
                ask: ask.clone(),
            };
            cells.push((
                ask.title(),
                Settings::Question(question),
                Some(question_facts(ask)),
            ));
        }
        Self::of(cells)
    }

    /// The demo study, with every question asked.
    pub fn cellar() -> Self {
        let fit = Fit {
            input: Link::to(spread::PREPARE),
            ..Fit::default()
        };
        Self::around(&spread::cellar(), &fit, &Ask::catalogue())
    }

    pub fn context(&self) -> Context<'_> {
        Context {
            study: &self.study,
            standings: &self.standings,
            ledger: &self.ledger,
        }
    }
}

/// Pushes facts with less writing.
struct Writer(Facts);

impl Writer {
    fn counts(mut self, counts: &[(&str, usize)]) -> Self {
        for (name, value) in counts {
            self.0.push(Fact::count(name, *value, MEANING));
        }
        self
    }

    fn numbers(mut self, unit: &str, precision: Precision, numbers: &[(&str, f64)]) -> Self {
        for (name, value) in numbers {
            self.0
                .push(Fact::number(name, *value, unit, precision, MEANING));
        }
        self
    }

    fn texts(mut self, texts: &[(&str, &str)]) -> Self {
        for (name, text) in texts {
            self.0.push(Fact::text(name, *text, MEANING));
        }
        self
    }

    fn table(mut self, name: &str, columns: Vec<FactColumn>) -> Self {
        self.0.push(Fact::table(name, columns, MEANING));
        self
    }
}

fn words(name: &str, texts: &[&str]) -> FactColumn {
    let texts = texts.iter().map(|text| (*text).to_owned()).collect();
    FactColumn::texts(name, texts, MEANING)
}

fn column(name: &str, unit: &str, precision: Precision, numbers: &[f64]) -> FactColumn {
    FactColumn::numbers(name, numbers.to_vec(), unit, precision, MEANING)
}

fn whole(name: &str, numbers: &[f64]) -> FactColumn {
    column(name, "", Precision::Whole, numbers)
}

pub fn data_facts(data: &Data) -> Facts {
    let has_units = data.unit.is_some();
    let mut writer = Writer(Facts::new())
        .counts(&[
            ("table count", data.tables.len()),
            ("samples read", 360),
            ("samples joined", 358),
            ("samples excluded", data.exclusions.len()),
            ("samples without outcome", 0),
            ("samples", 356),
            ("units", 119),
            ("predictors", 700),
            ("predictors ignored", data.ignored.len()),
            ("covariates", data.covariates.len()),
            ("missing values", 12),
            ("below-limit values", 0),
        ])
        .numbers(
            "",
            Precision::Percent(2),
            &[
                ("missing share", 0.000_05),
                ("largest missing share", 0.011),
            ],
        )
        .texts(&[
            ("outcome", "salt in moisture"),
            ("outcome unit", UNIT),
            ("outcome kind", "measured quantity"),
            ("predictor range", "900 nm … 1700 nm"),
        ])
        .numbers(
            UNIT,
            Precision::Decimals(2),
            &[
                ("outcome mean", 2.914),
                ("outcome standard deviation", 0.617),
                ("outcome least", 1.81),
                ("outcome most", 4.19),
            ],
        )
        .table(
            "source files",
            vec![
                words("file", &["cellar-scans.csv", "cellar-lab.xlsx"]),
                words("sheet", &["", "Wet chemistry"]),
                whole("bytes", &[2_104_331.0, 18_220.0]),
                words("sha-256", &["0a1b", "2c3d"]),
                words("orientation", &["samples in rows", "samples in rows"]),
                whole("rows read", &[360.0, 160.0]),
                whole("columns read", &[704.0, 6.0]),
            ],
        )
        .table(
            "join report",
            vec![
                words("table", &["cellar-lab.xlsx"]),
                words("key", &["wheel"]),
                whole("matched", &[358.0]),
                whole("only left", &[2.0]),
                whole("only right", &[1.0]),
                whole("repeated", &[0.0]),
            ],
        )
        .table(
            "import findings",
            vec![
                words(
                    "finding",
                    &["The column “salt_calc” nearly equals the outcome."],
                ),
                whole("count", &[1.0]),
                words("places", &["column “salt_calc”"]),
                words("treatment", &["kept"]),
            ],
        );
    if has_units {
        writer = writer
            .counts(&[("samples per unit least", 2), ("samples per unit most", 3)])
            .texts(&[("unit column", "wheel")]);
    }
    if data.batch.is_some() {
        writer = writer
            .counts(&[("batches", 4)])
            .texts(&[("batch column", "cave")]);
    }
    if !data.covariates.is_empty() {
        writer = writer.texts(&[("covariate names", "age, cellar temperature")]);
    }
    if data.sealed != Sealed::Nothing {
        writer = writer.counts(&[("sealed samples", 120), ("sealed units", 40)]);
    }
    let outcome_error = data.outcome.as_ref().and_then(|o| o.reference_error);
    if outcome_error.is_some() {
        writer = writer.numbers(UNIT, Precision::Decimals(2), &[("reference error", 0.12)]);
    }
    if !data.exclusions.is_empty() {
        writer = writer.table(
            "exclusions",
            vec![
                words("sample", &["W007-b", "W044-c"]),
                words("reason", &["probe touched the rind"; 2]),
                words("outcome seen", &["after the outcome was seen", "not said"]),
            ],
        );
    }
    if !data.corrections.is_empty() {
        writer = writer.table(
            "corrections",
            vec![
                words("sample", &["W012-a"]),
                words("column", &["salt in moisture"]),
                words("from", &["31.2"]),
                words("to", &["3.12"]),
                words("reason", &["decimal point lost"]),
                words("outcome seen", &["before the outcome was seen"]),
            ],
        );
    }
    writer.0
}

pub fn prepare_facts(steps: &[Step]) -> Facts {
    let texts = |text: fn(&Step) -> String| -> Vec<String> { steps.iter().map(text).collect() };
    let name = |step: &Step| {
        if matches!(step, Step::SavitzkyGolay { .. }) {
            "first derivative by local polynomials".to_owned()
        } else {
            "another step".to_owned()
        }
    };
    let parameters = |step: &Step| {
        if let Step::SavitzkyGolay { window, degree, .. } = step {
            format!("window {window}, degree {degree}")
        } else {
            String::new()
        }
    };
    let class = |step: &Step| step.class().words().to_owned();
    Writer(Facts::new())
        .counts(&[
            ("steps", steps.len()),
            ("learned steps", 2),
            ("predictors entering", 700),
            ("predictors leaving", 700),
        ])
        .table(
            "step list",
            vec![
                FactColumn::texts("step", texts(name), MEANING),
                FactColumn::texts("class", texts(class), MEANING),
                FactColumn::texts("parameters", texts(parameters), MEANING),
            ],
        )
        .0
}

pub fn fit_facts(data: &Data, fit: &Fit) -> Facts {
    let share = match &fit.penalty {
        Penalty::Ridge => 0.0,
        Penalty::Lasso => 1.0,
        Penalty::ElasticNet { .. } => 0.5,
    };
    let three = Precision::Significant(3);
    let two = Precision::Decimals(2);
    let mut writer = Writer(Facts::new())
        .numbers("", Precision::Significant(2), &[("lasso share", share)])
        .counts(&[
            ("samples", 356),
            ("units", 119),
            ("predictors", 700),
            ("covariates", data.covariates.len()),
            ("chosen predictors", 5),
            ("solutions", 104_900),
            ("unsettled solutions", 0),
        ])
        .numbers("", Precision::Full, &[("seed", fit.seed as f64)])
        .numbers(
            "",
            three,
            &[
                ("chosen strength", 0.031_2),
                ("strength times n", 11.1),
                ("strength times 2n", 22.2),
                ("inverse strength", 0.090_1),
                ("effective degrees of freedom", 31.2),
            ],
        )
        .numbers(
            UNIT,
            two,
            &[("apparent rmse", 0.151), ("apparent mae", 0.12)],
        )
        .numbers("", two, &[("apparent r²", 0.94)])
        .numbers(
            "",
            Precision::Significant(1),
            &[("worst gap", 8e-10), ("solver tolerance", 1e-9)],
        )
        .table(
            "coefficients",
            vec![
                words(
                    "predictor",
                    &["1452 nm", "1150 nm", "1384 nm", "1716 nm", "1210 nm"],
                ),
                column("coefficient", UNIT, three, &[-3.2, 1.9, 1.1, 0.3, -0.1]),
                column(
                    "standardised coefficient",
                    UNIT,
                    three,
                    &[-0.31, 0.22, 0.14, 0.05, -0.02],
                ),
            ],
        );
    if let Penalty::ElasticNet { shares } = &fit.penalty
        && shares.len() > 1
    {
        writer = writer.table(
            "lasso shares tried",
            vec![
                column(
                    "lasso share",
                    "",
                    Precision::Significant(2),
                    &[0.2, 0.5, 0.8],
                ),
                column("tuning error", UNIT, two, &[0.29, 0.28, 0.28]),
            ],
        );
    }
    if let Strength::Chosen { range, .. } = fit.strength {
        writer = writer
            .counts(&[
                ("strengths tried", range.count as usize),
                ("strength position", 51),
                ("inner parts", 10),
                ("inner repeats", 5),
            ])
            .numbers(
                "",
                three,
                &[
                    ("strongest strength", 0.994),
                    ("weakest strength", 0.000_994),
                ],
            )
            .texts(&[("strength at edge", "no")])
            .table("error curve", error_curve());
    }
    match fit.judge {
        Judge::Declined => writer = writer.texts(&[("judged", "not judged")]),
        Judge::Nested(_) => writer = nested(writer),
    }
    if let Some(outcome) = &data.outcome {
        writer = kind::facts(writer, &outcome.kind, fit);
    }
    options(writer, fit).0
}

/// Penalty weights, signs and the careful interval, where they were set.
fn options(mut writer: Writer, fit: &Fit) -> Writer {
    let three = Precision::Significant(3);
    match &fit.weighting {
        Weighting::Equal => {}
        Weighting::Blocks { choice, .. } => {
            writer = writer.texts(&[("block weights", "900 nm … 1300 nm: 2; 1700 nm: 0.5")]);
            if matches!(choice, BlockChoice::Chosen { .. }) {
                writer = writer.counts(&[("block weights tried", 4)]).numbers(
                    "",
                    Precision::Percent(0),
                    &[("outer parts with the same block weights", 0.62)],
                );
            }
        }
        Weighting::Adaptive { power } => {
            writer = writer.numbers(
                "",
                three,
                &[
                    ("learnt weights power", power.get()),
                    ("first-stage strength", 1.24),
                ],
            );
        }
    }
    if fit.signs != Signs::Any {
        writer = writer.counts(&[("predictors never negative", 401)]);
    }
    if fit.interval == Interval::Careful && matches!(fit.judge, Judge::Nested(_)) {
        let numbers = [
            ("careful error", 0.281),
            ("careful error low", 0.23),
            ("careful error high", 0.33),
        ];
        writer = writer
            .numbers(UNIT, Precision::Decimals(2), &numbers)
            .numbers("", three, &[("careful interval widening", 1.31)])
            .counts(&[("careful refits", 100)]);
    }
    writer
}

fn nested(writer: Writer) -> Writer {
    let three = Precision::Significant(3);
    let two = Precision::Decimals(2);
    writer
        .texts(&[("judged", "nested cross-validation")])
        .counts(&[
            ("outer parts", 5),
            ("outer repeats", 10),
            ("fits checked", 2_550),
            ("learned steps checked", 5_100),
            ("proof violations", 0),
            ("chosen predictors outer median", 6),
            ("chosen predictors outer least", 3),
            ("chosen predictors outer most", 14),
        ])
        .numbers(
            UNIT,
            two,
            &[
                ("nested rmse", 0.276),
                ("nested mae", 0.221),
                ("nested bias", -0.01),
                ("nested rmse spread", 0.011),
                ("nested rmse low", 0.24),
                ("nested rmse high", 0.31),
                ("mean-only rmse", 0.618),
                ("mean-only mae", 0.52),
            ],
        )
        .numbers(
            "",
            two,
            &[
                ("nested r²", 0.80),
                ("nested r² low", 0.75),
                ("nested r² high", 0.85),
                ("nested slope", 1.03),
                ("optimism", 0.14),
            ],
        )
        .numbers(
            "",
            Precision::Percent(0),
            &[
                ("improvement over the mean", 0.80),
                ("improvement low", 0.72),
                ("improvement high", 0.87),
            ],
        )
        .numbers(
            "",
            three,
            &[
                ("outer strength median", 0.0307),
                ("outer strength lower quartile", 0.0251),
                ("outer strength upper quartile", 0.0402),
            ],
        )
        .table(
            "outer choices",
            vec![
                whole("repeat", &[1.0, 1.0]),
                whole("part", &[1.0, 2.0]),
                column("strength", "", three, &[0.0307, 0.0402]),
                whole("chosen predictors", &[6.0, 5.0]),
            ],
        )
}

fn error_curve() -> Vec<FactColumn> {
    let two = Precision::Decimals(2);
    vec![
        column(
            "strength",
            "",
            Precision::Significant(3),
            &[0.994, 0.1, 0.0312, 0.01, 0.000_994],
        ),
        column("error", UNIT, two, &[0.62, 0.34, 0.27, 0.29, 0.36]),
        column("standard error", UNIT, two, &[0.03, 0.02, 0.02, 0.02, 0.03]),
        column("low", UNIT, two, &[0.59, 0.32, 0.25, 0.27, 0.33]),
        column("high", UNIT, two, &[0.65, 0.36, 0.29, 0.31, 0.39]),
        whole("chosen predictors", &[0.0, 3.0, 5.0, 19.0, 118.0]),
    ]
}
