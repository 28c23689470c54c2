//! Every preparation step through its cell: it is of the class that it says, whatever is chosen
//! among its words; roles that are missing are named; samples of a unit become one.

use crate::support::Dice;
use std::borrow::Cow;
use std::collections::BTreeMap;
use std::fmt::Write as _;
use std::sync::Arc;
use widefold::base::problem::Problem;
use widefold::base::real::Real;
use widefold::base::thread::Threads;
use widefold::base::work::Work;
use widefold::eval::kind::prepare::Prepared;
use widefold::eval::kind::{Inputs, data, prepare};
use widefold::eval::outcome::{Gives, Outcome as Evaluated};
use widefold::numeric::parts::Split;
use widefold::numeric::samples::Samples;
use widefold::numeric::step::Learned;
use widefold::study::Study;
use widefold::study::cell::{Cell, CellId};
use widefold::study::edit::Edit;
use widefold::study::link::Link;
use widefold::study::settings::Settings;
use widefold::study::settings::data::{Data, Marked, Outcome, OutcomeKind, TableSource};
use widefold::study::settings::prepare::choice::{Interpolation, ScaleRule, Treatment};
use widefold::study::settings::prepare::{Prepare, Region, Step, StepClass};
use widefold::study::settings::slot::Value;
use widefold::study::settings::slot::prepare::PrepareSlot;
use widefold::study::source::Shelf;

/// Units of two samples; the last are held out. Quality-control samples follow.
const UNITS: usize = 12;
const HELD_OUT_UNITS: usize = 3;
const CONTROLS: usize = 5;
const COLUMNS: usize = 12;

/// What the predictors are.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Values {
    /// Positive, with gaps, limits and columns that hardly vary.
    Gappy,
    /// Positive and complete.
    Complete,
    /// Allele counts with gaps.
    Markers,
}

fn number(value: f64) -> Real {
    Real::new(value).unwrap()
}

/// The text of a value: row by row, column by column. `None` is a gap.
fn values(sort: Values) -> Vec<Vec<Option<f64>>> {
    let mut dice = Dice(7);
    let rows = 2 * UNITS + CONTROLS;
    let mut table: Vec<Vec<Option<f64>>> = (0..rows)
        .map(|i| {
            (0..COLUMNS)
                .map(|j| {
                    let level = 1.0 + 0.1 * (i % 5) as f64;
                    let x = level * (2.0 + j as f64) + 0.3 * ((i * j) as f64).sin();
                    Some(x + 0.2 * dice.share())
                })
                .collect()
        })
        .collect();
    match sort {
        Values::Complete => {}
        Values::Gappy => {
            for row in [1, 2, 19, 21] {
                table[row][3] = None;
            }
            for row in [0, 20, 25] {
                table[row][8] = None;
            }
            for (row, values) in table.iter_mut().enumerate() {
                values[5] = Some(if row % 6 == 0 { 7.0 + row as f64 } else { 7.0 });
            }
        }
        Values::Markers => {
            for (i, values) in table.iter_mut().enumerate() {
                for (j, value) in values.iter_mut().enumerate() {
                    let frequency = 0.04 + 0.04 * j as f64;
                    let allele = |dice: &mut Dice| f64::from(u8::from(dice.share() < frequency));
                    let count = allele(&mut dice) + allele(&mut dice);
                    *value = ((7 * i + 5 * j) % 13 != 0).then_some(count);
                }
            }
        }
    }
    table
}

/// Other values in all rows that are not held out: columns change places, so that gaps and
/// spreads move too, and values grow (but allele counts stay counts).
fn with_other_training(sort: Values, table: &[Vec<Option<f64>>]) -> Vec<Vec<Option<f64>>> {
    let growth = if sort == Values::Markers { 0.0 } else { 0.01 };
    let held_out = 2 * (UNITS - HELD_OUT_UNITS)..2 * UNITS;
    table
        .iter()
        .enumerate()
        .map(|(row, values)| {
            if held_out.contains(&row) {
                return values.clone();
            }
            (0..COLUMNS)
                .map(|column| {
                    // Neighbours change places: spectra still rise.
                    let other = values[column ^ 1];
                    if sort == Values::Markers && column % 2 == 0 {
                        // Another share of missing calls.
                        return Some(other.unwrap_or(0.0));
                    }
                    other.map(|x| x * (1.0 + growth * (row * row) as f64))
                })
                .collect()
        })
        .collect()
}

/// The file: names, roles, outcome and predictors. In column 10 some values lie below a limit.
fn file(sort: Values, table: &[Vec<Option<f64>>], turn: f64) -> String {
    let mut text = String::from("scan;wheel;cave;minute;sort;humidity;salt");
    for column in 0..COLUMNS {
        let _ = write!(text, ";{} nm", 900 + 4 * column);
    }
    for (row, values) in table.iter().enumerate() {
        let is_control = row >= 2 * UNITS;
        let wheel = row / 2;
        let minute = (row * 7) % table.len();
        let humidity = ((row + 1) as f64 * 2.0).sin();
        let _ = write!(text, "\ns{row};");
        if is_control {
            let _ = write!(text, ";;{minute};QC;;");
        } else {
            let salt = (wheel as f64 * 1.7 + turn).sin();
            let _ = write!(
                text,
                "W{wheel};C{};{minute};wheel;{humidity};{salt}",
                wheel % 3
            );
        }
        for (column, value) in values.iter().enumerate() {
            // Both samples of a wheel, so that they can be averaged.
            let below = sort == Values::Gappy && column == 10 && [4, 5, 18, 19].contains(&row);
            match value {
                _ if below => text.push_str(";<3"),
                Some(value) => {
                    let _ = write!(text, ";{value}");
                }
                None => text.push(';'),
            }
        }
    }
    text
}

/// A Data cell with every role, on a table.
fn data_settings(source: TableSource) -> Data {
    let named = |name: &str| Some(name.to_owned());
    Data {
        tables: vec![source],
        outcome: Some(Outcome {
            column: "salt".to_owned(),
            kind: OutcomeKind::Measured,
            unit: None,
            reference_error: None,
        }),
        sample_name: named("scan"),
        unit: named("wheel"),
        batch: named("cave"),
        order: named("minute"),
        covariates: vec!["humidity".to_owned()],
        quality_control: Some(Arc::new(Marked {
            column: "sort".to_owned(),
            values: vec!["QC".to_owned()],
        })),
        ..Data::default()
    }
}

/// What a Data cell and a Prepare cell with these steps give.
fn evaluated(text: &str, change: &dyn Fn(&mut Data), steps: &[Step]) -> Result<Evaluated, Problem> {
    let mut shelf = Shelf::default();
    let source = shelf.put(text.as_bytes().to_vec());
    let mut settings = data_settings(TableSource::new(source, "scans.csv"));
    change(&mut settings);
    let mut study = Study::new("steps");
    let mut add = |title: &str, settings: Settings| -> CellId {
        let id = study.next_id();
        let cell = Cell {
            id,
            title: title.to_owned(),
            settings,
        };
        let at = study.cells().len();
        let _ = study.apply(Edit::Insert { at, cell }).unwrap();
        id
    };
    let data_id = add("scans", Settings::Data(settings.clone()));
    let preparation = Prepare {
        input: Link::to(data_id),
        steps: steps.to_vec(),
    };
    let _ = add("prepared", Settings::Prepare(preparation.clone()));
    let mut done = BTreeMap::new();
    let work = Work::unattended();
    let verdict = {
        let inputs = Inputs::new(&study, &shelf, &done, Threads::new(2));
        data::evaluate(&settings, &inputs, &work).unwrap()
    };
    if let Err(failure) = verdict {
        return Err(failure.problem);
    }
    let _ = done.insert(data_id, Arc::new(verdict));
    let inputs = Inputs::new(&study, &shelf, &done, Threads::new(2));
    prepare::evaluate(&preparation, &inputs, &work)
        .unwrap()
        .map_err(|failure| failure.problem)
}

fn given(outcome: &Evaluated) -> Arc<Prepared> {
    match &outcome.gives {
        Gives::Prepared(prepared) => Arc::clone(prepared),
        other => panic!("a Prepare cell gives samples with steps, not {other:?}"),
    }
}

fn prepared(text: &str, steps: &[Step]) -> Arc<Prepared> {
    match evaluated(text, &|_| (), steps) {
        Ok(outcome) => given(&outcome),
        Err(problem) => panic!("{steps:?}: {problem}"),
    }
}

/// The steps of the catalogue, fitted to the small tables.
fn fitted(step: Step) -> Step {
    match step {
        Step::CommonAxis { .. } => Step::CommonAxis {
            first: number(901.0),
            last: number(940.0),
            distance: number(3.0),
            between: Interpolation::Linear,
        },
        Step::CutRegions { .. } => Step::CutRegions {
            regions: vec![Region {
                from: number(910.0),
                to: number(921.0),
            }],
            treatment: Treatment::Cut,
        },
        Step::SpikeRemoval { .. } => Step::SpikeRemoval {
            half: 3,
            threshold: number(1.0),
        },
        Step::SavitzkyGolay {
            degree, derivative, ..
        } => Step::SavitzkyGolay {
            window: 5,
            degree,
            derivative,
        },
        // The spectra are nearly straight: with a trend in the model nothing is left to refer to.
        Step::ExtendedScatterCorrection { reference, .. } => Step::ExtendedScatterCorrection {
            reference,
            degree: 0,
            interferent: Arc::new((0..COLUMNS).map(|j| number((j as f64).sin())).collect()),
        },
        Step::UnitConversion { offset, .. } => Step::UnitConversion {
            factor: number(-0.01),
            offset,
        },
        Step::Baseline { .. } => Step::Baseline {
            baseline: widefold::study::settings::prepare::Baseline::Asymmetric {
                smoothness: number(10.0),
                asymmetry: number(0.05),
            },
        },
        Step::QualityControlSpread { .. } => Step::QualityControlSpread { most: number(0.12) },
        Step::MissingShareFilter { .. } => Step::MissingShareFilter { most: number(0.1) },
        Step::NearConstantFilter { .. } => Step::NearConstantFilter { least: number(0.3) },
        Step::MinorAlleleFilter { .. } => Step::MinorAlleleFilter { least: number(0.2) },
        Step::OutcomeFilter { .. } => Step::OutcomeFilter { keep: 5 },
        Step::PrincipalScores { .. } => Step::PrincipalScores { components: 3 },
        other => other,
    }
}

/// Every step of the catalogue with every choice of each of its words, and the table for it.
fn examples() -> Vec<(Step, Values)> {
    let mut examples: Vec<(Step, Values)> = Vec::new();
    for step in Step::catalogue().into_iter().map(fitted) {
        let mut found = vec![step.clone()];
        let settings = Prepare {
            input: Link::open(),
            steps: vec![step],
        };
        for slot in PrepareSlot::of(&settings) {
            for choice in slot.choices() {
                let mut chosen = slot.set(&settings, Value::choice(choice)).unwrap();
                give_numbers(&mut chosen);
                found.push(chosen.steps.remove(0));
            }
        }
        for step in found {
            let sort = match step {
                Step::MinorAlleleFilter { .. } | Step::CallRateFilter { .. } => Values::Markers,
                Step::PrincipalScores { .. } => Values::Complete,
                // The scale of a constant column is 0, and of a mean of 0 too.
                Step::Scale { .. } => Values::Complete,
                _ => Values::Gappy,
            };
            if !examples.contains(&(step.clone(), sort)) {
                examples.push((step, sort));
            }
        }
    }
    examples
}

/// What a choice asks for and cannot take from anywhere: a reference, an internal standard.
fn give_numbers(settings: &mut Prepare) {
    let reference = (1..=COLUMNS)
        .map(|j| number(j as f64 + 0.1 * (j * j) as f64))
        .collect();
    for slot in PrepareSlot::of(settings) {
        let value = match slot.get(settings) {
            Some(Value::Numbers(numbers)) if numbers.is_empty() => {
                Value::Numbers(Vec::clone(&reference))
            }
            Some(Value::Column(None)) => Value::Column(Some("924 nm".to_owned())),
            Some(_) | None => continue,
        };
        *settings = slot.set(settings, value).unwrap();
    }
}

/// The rows of the held-out wheels, and of the others, among the samples of a preparation.
fn sides(prepared: &Prepared) -> (Vec<usize>, Vec<usize>) {
    let data = &prepared.data;
    let is_held_out = |row: &&usize| {
        let name = &data.unit_names[data.units[**row]];
        (UNITS - HELD_OUT_UNITS..UNITS).any(|wheel| *name == format!("W{wheel}"))
    };
    let rows = &data.analysed;
    (
        rows.iter()
            .filter(|row| !is_held_out(row))
            .copied()
            .collect(),
        rows.iter().filter(is_held_out).copied().collect(),
    )
}

/// Every computed step as learnt from the training samples, the last ones included that a fit
/// leaves to its solver.
fn learned(prepared: &Prepared) -> Vec<Learned> {
    let (training, held_out) = sides(prepared);
    let data = &prepared.data;
    let split = Split::with_held_out(&training, &held_out, &data.structure()).unwrap();
    let mut samples = Cow::Borrowed(&data.samples);
    let mut all = Vec::new();
    for step in prepared.chain.steps() {
        let part = split
            .training_part(&samples)
            .with_outcome(data.response.values());
        let known = step.learn(&part, &Work::unattended()).unwrap();
        samples = known.apply(samples, &Work::unattended()).unwrap();
        all.push(known);
    }
    all
}

fn apply(steps: &[Learned], samples: Samples) -> Samples {
    let mut samples = Cow::Owned(samples);
    for step in steps {
        samples = step.apply(samples, &Work::unattended()).unwrap();
    }
    samples.into_owned()
}

/// The same bits, gaps included, and the same columns switched on.
fn is_same(a: &Samples, b: &Samples) -> bool {
    let bits = |s: &Samples| s.x.iter().map(|x| x.to_bits()).collect::<Vec<_>>();
    a.x.shape() == b.x.shape() && a.active == b.active && bits(a) == bits(b)
}

#[test]
fn held_out_samples_come_out_of_a_cell_the_same_one_at_a_time_and_together() {
    for (step, sort) in examples() {
        let prepared = prepared(&file(sort, &values(sort), 0.0), std::slice::from_ref(&step));
        let (_, held_out) = sides(&prepared);
        let steps = learned(&prepared);
        let together = apply(&steps, prepared.data.samples.select(&held_out));
        for (at, row) in held_out.iter().enumerate() {
            let alone = apply(&steps, prepared.data.samples.select(&[*row]));
            assert!(is_same(&alone, &together.select(&[at])), "{step:?}, {row}");
        }
    }
}

#[test]
fn other_training_samples_change_what_a_cell_learns_and_nothing_else() {
    for (step, sort) in examples() {
        let table = values(sort);
        let steps = std::slice::from_ref(&step);
        let before = prepared(&file(sort, &table, 0.0), steps);
        let other = with_other_training(sort, &table);
        let after = prepared(&file(sort, &other, 0.0), steps);
        let (_, held_out) = sides(&before);
        let samples = before.data.samples.select(&held_out);
        // What is averaged, and what else is done to single samples, is the same for these.
        let unchanged = after.data.samples.select(&sides(&after).1);
        assert!(is_same(&samples, &unchanged), "{step:?}");
        let is_learned = match step.class() {
            StepClass::RowByRow | StepClass::FixedReference => false,
            StepClass::Learned | StepClass::LearnedWithOutcome => true,
        };
        let same = is_same(
            &apply(&learned(&before), samples.clone()),
            &apply(&learned(&after), samples),
        );
        assert_eq!(!same, is_learned, "{step:?}");
    }
}

#[test]
fn another_outcome_changes_what_is_learned_with_it_and_nothing_else() {
    for (step, sort) in examples() {
        let table = values(sort);
        let steps = std::slice::from_ref(&step);
        let before = prepared(&file(sort, &table, 0.0), steps);
        let after = prepared(&file(sort, &table, 2.0), steps);
        let samples = before.data.samples.select(&sides(&before).1);
        let same = is_same(
            &apply(&learned(&before), samples.clone()),
            &apply(&learned(&after), samples),
        );
        let expected = step.class() == StepClass::LearnedWithOutcome;
        assert_eq!(!same, expected, "{step:?}");
    }
}

#[test]
fn every_class_of_step_is_told_in_the_list_of_steps() {
    for (step, sort) in examples() {
        let text = file(sort, &values(sort), 0.0);
        let outcome = evaluated(&text, &|_| (), std::slice::from_ref(&step)).unwrap();
        let list = outcome.facts.table("step list").unwrap();
        assert_eq!(list.texts("class"), [step.class().words()], "{step:?}");
        let effects = outcome.facts.table("step effects").unwrap();
        assert_eq!(effects.n_rows(), 2, "{step:?}");
        let left = list.numbers("predictors after")[0];
        assert_eq!(outcome.facts.value("predictors leaving"), Some(left));
    }
}

/// The problem of a step where a role is not given.
fn without(change: &dyn Fn(&mut Data), step: Step) -> Problem {
    let text = file(Values::Complete, &values(Values::Complete), 0.0);
    evaluated(&text, change, &[step]).expect_err("a role is missing")
}

fn usual(name: fn(&Step) -> bool) -> Step {
    Step::catalogue().into_iter().find(name).unwrap()
}

#[test]
fn a_role_that_is_missing_is_named_with_what_would_mend_it() {
    let says = |problem: &Problem, found: &str, mend: &str| {
        let text = problem.mend.join(" ");
        assert!(problem.found.contains(found), "{problem:?}");
        assert!(
            text.contains("Data cell") && text.contains(mend),
            "{problem:?}"
        );
    };
    // Unmarked, these samples lack what every other sample has.
    let without_marks = |data: &mut Data| {
        *data = Data {
            quality_control: None,
            unit: None,
            batch: None,
            covariates: Vec::new(),
            outcome: data.outcome.clone().map(|outcome| Outcome {
                column: "minute".to_owned(),
                ..outcome
            }),
            ..data.clone()
        };
    };
    let drift = || usual(|step| matches!(step, Step::QualityControlDrift { .. }));
    says(
        &without(&|data| data.batch = None, Step::BatchCentering),
        "no column has the role of a batch",
        "in which batch",
    );
    says(
        &without(&|data| data.order = None, drift()),
        "no column has the role of an order",
        "order or time of measurement",
    );
    says(
        &without(&without_marks, drift()),
        "needs 3 quality-control samples and has 0",
        "quality-control samples are known",
    );
    says(
        &without(&|data| data.covariates.clear(), Step::CovariateRemoval),
        "no column has the role of a covariate",
        "covariates",
    );
    says(
        &without(&|data| data.unit = None, Step::AverageUnits),
        "no column has the role of a unit",
        "belong together",
    );
}

#[test]
fn the_samples_of_a_unit_become_their_mean_with_the_unit_for_a_name() {
    let table = values(Values::Complete);
    let prepared = prepared(
        &file(Values::Complete, &table, 0.0),
        &[Step::AverageUnits, Step::Center],
    );
    let data = &prepared.data;
    let names: Vec<String> = data
        .analysed
        .iter()
        .map(|&row| data.names[row].clone())
        .collect();
    let expected: Vec<String> = (0..UNITS).map(|wheel| format!("W{wheel}")).collect();
    assert_eq!(names, expected);
    assert_eq!(data.count_units(&data.analysed), UNITS);
    for (wheel, &row) in data.analysed.iter().enumerate() {
        let of_wheel = table[2 * wheel].iter().zip(&table[2 * wheel + 1]);
        for (column, (first, second)) in of_wheel.enumerate() {
            let two = [*first, *second];
            let mean = 0.5 * (two[0].unwrap() + two[1].unwrap());
            let found = data.samples.x[(row, column)];
            assert!((found - mean).abs() <= 1e-12, "{found} is not {mean}");
        }
    }
    // Quality-control samples are no unit and stay as they are.
    let controls = data.quality_control();
    assert_eq!(controls.len(), CONTROLS);
    let found: Vec<f64> = controls
        .iter()
        .map(|&row| data.samples.x[(row, 3)])
        .collect();
    let measured: Vec<f64> = table[2 * UNITS..]
        .iter()
        .map(|row| row[3].unwrap())
        .collect();
    assert_eq!(found, measured);
}

#[test]
fn samples_that_differ_in_what_a_unit_has_one_of_are_not_averaged() {
    let table = values(Values::Complete);
    let text = file(Values::Complete, &table, 0.0).replacen("W0;C0", "W0;C1", 1);
    let problem = evaluated(&text, &|_| (), &[Step::AverageUnits]).expect_err("two batches");
    assert_eq!(problem.code.0, "unit-differs");
    assert!(
        problem.found.contains("“W0”") && problem.found.contains("C1"),
        "{problem}"
    );
    // A value that is known once and below a limit once has no known mean.
    let gappy = values(Values::Gappy);
    let text = file(Values::Gappy, &gappy, 0.0).replacen("<3", "3.5", 1);
    let problem = evaluated(&text, &|_| (), &[Step::AverageUnits]).expect_err("no mean");
    assert_eq!(problem.code.0, "average-beyond-limit");
    let filled = Step::catalogue()
        .into_iter()
        .find(|step| matches!(step, Step::BelowLimit { .. }))
        .unwrap();
    assert!(evaluated(&text, &|_| (), &[filled, Step::AverageUnits]).is_ok());
}

#[test]
fn orders_that_mean_nothing_are_refused_and_unusual_ones_are_remarked_on() {
    let text = file(Values::Complete, &values(Values::Complete), 0.0);
    let scores = Step::PrincipalScores { components: 3 };
    let derivative = Step::SavitzkyGolay {
        window: 5,
        degree: 2,
        derivative: 1,
    };
    let refused = evaluated(&text, &|_| (), &[scores, derivative.clone()]).expect_err("refused");
    assert!(refused.found.contains("scores have no axis"), "{refused}");
    let unit = Step::Scale {
        rule: ScaleRule::UnitVariance,
    };
    let unusual = evaluated(&text, &|_| (), &[unit.clone(), derivative.clone()]).unwrap();
    let caveat = &unusual.caveats[0];
    assert_eq!(caveat.id, "step-order");
    assert!(
        caveat.text.contains("(step 2) comes after"),
        "{}",
        caveat.text
    );
    assert!(
        caveat.text.contains("no longer on one scale"),
        "{}",
        caveat.text
    );
    let usual = evaluated(&text, &|_| (), &[derivative, unit]).unwrap();
    assert!(usual.caveats.is_empty(), "{:?}", usual.caveats);
}
