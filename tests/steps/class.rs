//! The class of every kind of step, tested on the step itself; and that no step learns from a
//! held-out sample. A new kind of step does not compile here until it has an example.

use std::borrow::Cow;
use std::sync::Arc;
use widefold::base::work::{CancelSource, Work};
use widefold::numeric::matrix::Matrix;
use widefold::numeric::parts::{Split, Structure};
use widefold::numeric::random::Random;
use widefold::numeric::samples::{Companions, Limit, OutcomeValues, Samples, Side};
use widefold::numeric::step::*;

/// Rows: 14 for training, 6 held out, 4 quality-control samples beside the plan.
const TRAINING: std::ops::Range<usize> = 0..14;
const HELD_OUT: std::ops::Range<usize> = 14..20;
const ALL: usize = 24;
const COLUMNS: usize = 12;

/// The samples that an example is tested on.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Data {
    /// Positive, rising along the axis, nothing missing.
    Spectra,
    /// As spectra, with missing values, limits and columns that hardly vary.
    Gappy,
    /// Allele counts 0, 1, 2 with gaps.
    Markers,
}

/// Examples of a kind of step, at least one for each class it can have.
fn examples(kind: StepKind) -> Vec<(Step, Data)> {
    let fixed: Vec<f64> = (1..=12).map(f64::from).collect();
    match kind {
        StepKind::UnitConversion => on(Data::Gappy, [UnitConversion::new(-0.01, 2.0).unwrap()]),
        StepKind::Absorbance => on(
            Data::Gappy,
            [Absorbance::of_shares(), Absorbance::against(fixed).unwrap()],
        ),
        StepKind::CommonAxis => {
            let at = |rule| CommonAxis::new(vec![901.0, 915.5, 930.0], rule).unwrap();
            on(
                Data::Gappy,
                [at(Interpolation::Linear), at(Interpolation::CubicSpline)],
            )
        }
        StepKind::CutRegions => {
            let regions = vec![(910.0, 920.0)];
            let keep = CutRegions::new(regions.clone(), Regions::Keep).unwrap();
            on(
                Data::Gappy,
                [CutRegions::new(regions, Regions::Cut).unwrap(), keep],
            )
        }
        StepKind::SpikeRemoval => on(Data::Gappy, [SpikeRemoval::new(3, 1.0).unwrap()]),
        StepKind::LimitFill => on(Data::Gappy, [LimitFill::new(LimitRule::Half)]),
        StepKind::Normalisation => on(
            Data::Gappy,
            [
                Divisor::Sum,
                Divisor::Area,
                Divisor::Peak,
                Divisor::Length,
                Divisor::Standard(2),
            ]
            .map(|divisor| Normalisation::new(divisor, 10.0).unwrap()),
        ),
        StepKind::StandardNormalVariate => on(Data::Gappy, [StandardNormalVariate]),
        StepKind::Detrend => on(Data::Gappy, [Detrend::new(2).unwrap()]),
        StepKind::Baseline => on(
            Data::Gappy,
            [
                BaselineRule::Offset,
                BaselineRule::Line,
                BaselineRule::Asymmetric {
                    smoothness: 10.0,
                    asymmetry: 0.05,
                },
            ]
            .map(|rule| Baseline::new(rule).unwrap()),
        ),
        StepKind::SavitzkyGolay => on(
            Data::Gappy,
            [
                SavitzkyGolay::new(5, 2, 1).unwrap(),
                SavitzkyGolay::new(3, 1, 0).unwrap(),
            ],
        ),
        StepKind::Logarithm => on(
            Data::Gappy,
            [Logarithm::new(LogarithmBase::Ten, 0.5).unwrap()],
        ),
        StepKind::InverseHyperbolicSine => {
            on(Data::Gappy, [InverseHyperbolicSine::new(3.0).unwrap()])
        }
        StepKind::Power => on(Data::Gappy, [0.5, -1.0].map(|e| Power::new(e).unwrap())),
        StepKind::PowerTransform => [PowerFamily::BoxCox, PowerFamily::YeoJohnson]
            .into_iter()
            .flat_map(|family| {
                let choices = [PowerChoice::Given(0.3), PowerChoice::Fitted];
                on(
                    Data::Gappy,
                    choices.map(|choice| PowerTransform::new(family, choice).unwrap()),
                )
            })
            .collect(),
        StepKind::CenteredLogRatio => on(Data::Gappy, [CenteredLogRatio::new(0.1).unwrap()]),
        StepKind::QualityControlDrift => on(
            Data::Gappy,
            [
                (DriftTrend::Line, DriftRemoval::Ratio),
                (DriftTrend::Smooth { span: 0.8 }, DriftRemoval::Difference),
            ]
            .map(|(trend, removal)| QualityControlDrift::new(trend, removal).unwrap()),
        ),
        StepKind::ScatterCorrection => on(
            Data::Gappy,
            [Reference::TrainingMean, Reference::Fixed(fixed)].map(ScatterCorrection::new),
        ),
        StepKind::ExtendedScatterCorrection => {
            let interferent: Vec<f64> = (0..12).map(|j| f64::from(j).sin()).collect();
            let against = |reference| {
                ExtendedScatterCorrection::new(reference, 0, vec![interferent.clone()]).unwrap()
            };
            let bent = fixed.iter().map(|x| x + 0.1 * x * x).collect();
            on(
                Data::Gappy,
                [Reference::TrainingMean, Reference::Fixed(bent)].map(against),
            )
        }
        StepKind::ProbabilisticQuotient => on(
            Data::Gappy,
            [
                QuotientReference::TrainingMedian,
                QuotientReference::Fixed(fixed),
            ]
            .map(ProbabilisticQuotient::new),
        ),
        StepKind::QuantileNormalisation => on(
            Data::Gappy,
            [
                QuantileNormalisation::learned(),
                QuantileNormalisation::fixed(fixed).unwrap(),
            ],
        ),
        StepKind::ColumnImputation => {
            let mut examples = on(
                Data::Gappy,
                [ColumnImputation::new(ColumnStatistic::Median)],
            );
            examples.extend(on(
                Data::Markers,
                [ColumnImputation::new(ColumnStatistic::Mean)],
            ));
            examples
        }
        StepKind::NearestImputation => on(
            Data::Gappy,
            [NeighborWeights::Equal, NeighborWeights::InverseDistance]
                .map(|weights| NearestImputation::new(3, weights).unwrap()),
        ),
        StepKind::LowRankImputation => on(Data::Gappy, [LowRankImputation::new(2).unwrap()]),
        StepKind::MissingShare => on(Data::Gappy, [MissingShare::new(0.1).unwrap()]),
        StepKind::NearConstant => on(Data::Gappy, [NearConstant::new(0.7).unwrap()]),
        StepKind::QualityControlSpread => {
            on(Data::Gappy, [QualityControlSpread::new(0.12).unwrap()])
        }
        StepKind::MinorAllele => on(Data::Markers, [MinorAllele::new(0.2).unwrap()]),
        StepKind::OutcomeFilter => on(Data::Gappy, [OutcomeFilter::new(5).unwrap()]),
        StepKind::BatchCentering => on(Data::Gappy, [BatchCentering]),
        StepKind::CovariateRemoval => on(Data::Gappy, [CovariateRemoval]),
        StepKind::PrincipalScores => on(Data::Spectra, [PrincipalScores::new(3).unwrap()]),
        StepKind::Centering => on(Data::Gappy, [Centering]),
        StepKind::Scaling => on(
            Data::Spectra,
            [
                ScalingRule::UnitVariance,
                ScalingRule::Pareto,
                ScalingRule::Range,
                ScalingRule::Level,
                ScalingRule::Robust,
            ]
            .map(Scaling::new),
        ),
    }
}

/// Steps of one kind on the same samples.
fn on<S: Into<Step>, const N: usize>(data: Data, steps: [S; N]) -> Vec<(Step, Data)> {
    steps.map(|step| (step.into(), data)).to_vec()
}

fn samples(data: Data) -> Samples {
    let mut random = Random::new(7, "class test", 0);
    let mut x = Matrix::from_fn(ALL, COLUMNS, |i, j| {
        let level = 1.0 + 0.1 * (i % 5) as f64;
        level * (2.0 + j as f64) + 0.3 * ((i * j) as f64).sin()
    });
    for value in x.iter_mut() {
        *value += 0.2 * random.uniform();
    }
    let mut limits = Vec::new();
    match data {
        Data::Spectra => {}
        Data::Gappy => {
            for row in [1, 2, 15, 17] {
                x[(row, 3)] = f64::NAN;
            }
            for row in [0, 16, 21] {
                x[(row, 8)] = f64::NAN;
            }
            for row in 0..ALL {
                x[(row, 5)] = if row % 6 == 0 { 7.0 + row as f64 } else { 7.0 };
            }
            for row in [4, 18] {
                x[(row, 10)] = f64::NAN;
                limits.push(Limit {
                    row,
                    column: 10,
                    side: Side::Below,
                    limit: 3.0,
                });
            }
        }
        Data::Markers => {
            for (at, value) in x.iter_mut().enumerate() {
                let column = at / ALL;
                let frequency = 0.04 + 0.04 * column as f64;
                let allele = |random: &mut Random| u8::from(random.uniform() < frequency);
                *value = f64::from(allele(&mut random) + allele(&mut random));
                if random.below(12) == 0 {
                    *value = f64::NAN;
                }
            }
        }
    }
    Samples::new(x)
        .with_axis((0..COLUMNS).map(|j| 900.0 + 4.0 * j as f64).collect())
        .with_limits(limits)
        .with_companions(Companions {
            batch: Some((0..ALL).map(|row| row % 3).collect()),
            order: Some((0..ALL).map(|row| ((row * 7) % ALL) as f64).collect()),
            is_quality_control: Some((0..ALL).map(|row| row >= HELD_OUT.end).collect()),
            covariates: Some(Matrix::from_fn(ALL, 2, |i, c| {
                ((i + 1) as f64 * (c + 2) as f64).sin()
            })),
        })
}

fn outcome() -> Vec<f64> {
    let mut random = Random::new(8, "class test outcome", 0);
    (0..ALL).map(|_| random.normal()).collect()
}

fn split() -> Split {
    let units: Vec<usize> = (0..ALL).collect();
    let structure = Structure::of_units(&units);
    let rows = |range: std::ops::Range<usize>| range.collect::<Vec<_>>();
    Split::with_held_out(&rows(TRAINING), &rows(HELD_OUT), &structure).unwrap()
}

fn learn(step: &Step, samples: &Samples, outcome: &[f64]) -> Learned {
    let split = split();
    let part = split
        .training_part(samples)
        .with_outcome(Some(OutcomeValues::Numbers(outcome)));
    step.learn(&part, &Work::unattended()).unwrap()
}

/// The held-out rows as the step leaves them.
fn held_out(learned: &Learned, samples: &Samples) -> Samples {
    let rows: Vec<usize> = HELD_OUT.collect();
    apply(learned, &samples.select(&rows))
}

fn apply(learned: &Learned, samples: &Samples) -> Samples {
    learned
        .apply(Cow::Borrowed(samples), &Work::unattended())
        .unwrap()
        .into_owned()
}

/// The same bits, missing values included, and the same columns switched on.
fn is_same(a: &Samples, b: &Samples) -> bool {
    let bits = |s: &Samples| s.x.iter().map(|x| x.to_bits()).collect::<Vec<_>>();
    bits(a) == bits(b) && a.active == b.active && a.x.shape() == b.x.shape()
}

/// Other values in some rows: columns change places, so that gaps and spreads move too.
fn with_other_rows(samples: &Samples, rows: impl Iterator<Item = usize>) -> Samples {
    // Allele counts must stay counts.
    let is_counts = samples.x.iter().all(|x| x.is_nan() || x.fract() == 0.0);
    let growth = if is_counts { 0.0 } else { 0.01 };
    let mut other = samples.clone();
    let x = Arc::make_mut(&mut other.x);
    for row in rows {
        for column in 0..COLUMNS {
            let from = (5 * column + 4) % COLUMNS;
            x[(row, column)] = samples.x[(row, from)] * (1.0 + growth * (row * row) as f64);
        }
    }
    other
        .limits
        .retain(|limit| x[(limit.row, limit.column)].is_nan());
    other
}

fn for_every_example(test: impl Fn(&Step, &Samples)) {
    for &kind in StepKind::ALL {
        let examples = examples(kind);
        assert!(!examples.is_empty(), "{kind:?} has no example");
        for (step, data) in examples {
            assert_eq!(step.kind(), kind);
            test(&step, &samples(data));
        }
    }
}

#[test]
fn held_out_samples_come_out_the_same_one_at_a_time_and_together() {
    for_every_example(|step, samples| {
        let learned = learn(step, samples, &outcome());
        let together = apply(&learned, samples);
        for row in HELD_OUT {
            let alone = apply(&learned, &samples.select(&[row]));
            assert!(is_same(&alone, &together.select(&[row])), "{step:?}, {row}");
        }
    });
}

#[test]
fn other_training_samples_change_learned_steps_and_no_others() {
    for_every_example(|step, samples| {
        let outcome = outcome();
        let before = held_out(&learn(step, samples, &outcome), samples);
        let other = with_other_rows(samples, TRAINING.chain(HELD_OUT.end..ALL));
        let after = held_out(&learn(step, &other, &outcome), samples);
        let is_learned = match step.class() {
            Class::RowByRow | Class::FixedReference => false,
            Class::Learned | Class::LearnedWithOutcome => true,
        };
        assert_eq!(!is_same(&before, &after), is_learned, "{step:?}");
        assert_eq!(step.given().is_none(), is_learned, "{step:?}");
    });
}

#[test]
fn another_outcome_changes_steps_learned_with_it_and_no_others() {
    for_every_example(|step, samples| {
        let before = held_out(&learn(step, samples, &outcome()), samples);
        let turned: Vec<f64> = outcome().iter().rev().map(|y| y.sin()).collect();
        let after = held_out(&learn(step, samples, &turned), samples);
        let expected = step.class() == Class::LearnedWithOutcome;
        assert_eq!(!is_same(&before, &after), expected, "{step:?}");
    });
}

#[test]
fn held_out_samples_and_their_outcome_change_nothing_that_is_learned() {
    for_every_example(|step, samples| {
        let before = held_out(&learn(step, samples, &outcome()), samples);
        let other = with_other_rows(samples, HELD_OUT);
        let mut outcome = outcome();
        for row in HELD_OUT {
            outcome[row] = 100.0;
        }
        let after = held_out(&learn(step, &other, &outcome), samples);
        assert!(is_same(&before, &after), "{step:?}");
    });
}

#[test]
fn every_example_changes_its_samples() {
    for_every_example(|step, samples| {
        let changed = apply(&learn(step, samples, &outcome()), samples);
        assert!(!is_same(&changed, samples), "{step:?}");
    });
}

#[test]
fn work_that_was_called_off_ends_every_step() {
    let source = CancelSource::new();
    let report = |_: f32| ();
    let work = Work::new(source.token(), &report);
    source.cancel();
    for_every_example(|step, samples| {
        let split = split();
        let outcome = outcome();
        let part = split
            .training_part(samples)
            .with_outcome(Some(OutcomeValues::Numbers(&outcome)));
        let end = step
            .learn(&part, &work)
            .and_then(|learned| learned.apply(Cow::Borrowed(samples), &work).map(drop));
        // Cutting regions is one look at the axis, over before anyone could call it off.
        if step.kind() != StepKind::CutRegions {
            assert_eq!(end, Err(StepStop::Cancelled), "{step:?}");
        }
    });
}

#[test]
fn learned_steps_say_what_they_were_learned_from() {
    for_every_example(|step, samples| {
        let learned = learn(step, samples, &outcome());
        let rows: Vec<usize> = TRAINING.collect();
        let expected = step.given().is_none().then_some(rows.as_slice());
        assert_eq!(learned.learned_from(), expected, "{step:?}");
    });
}

#[test]
fn samples_with_other_columns_are_refused() {
    for_every_example(|step, samples| {
        let learned = learn(step, samples, &outcome());
        if learned.learned_from().is_some() {
            let narrow = Samples::new(Matrix::from_element(2, 5, 1.0));
            let stop = learned.apply(Cow::Owned(narrow), &Work::unattended());
            let expected = StepError::WrongColumns {
                expected: COLUMNS,
                found: 5,
            };
            assert_eq!(stop.unwrap_err(), StepStop::Failed(expected), "{step:?}");
        }
    });
}
