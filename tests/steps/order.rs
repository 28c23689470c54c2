//! Remarks on the order of steps.

use widefold::numeric::parts::Scheme;
use widefold::numeric::step::*;

fn remarks(steps: Vec<Step>) -> Vec<(usize, usize, OrderRule)> {
    let remark = |remark: OrderRemark| (remark.first, remark.second, remark.rule);
    order_remarks(&steps).into_iter().map(remark).collect()
}

fn log() -> Step {
    Logarithm::new(LogarithmBase::Ten, 0.0).unwrap().into()
}

fn derivative() -> Step {
    SavitzkyGolay::new(7, 2, 1).unwrap().into()
}

fn scale() -> Step {
    Scaling::new(ScalingRule::UnitVariance).into()
}

fn median() -> Step {
    ColumnImputation::new(ColumnStatistic::Median).into()
}

fn sum() -> Step {
    Normalisation::new(Divisor::Sum, 1.0).unwrap().into()
}

fn quotient() -> Step {
    ProbabilisticQuotient::new(QuotientReference::TrainingMedian).into()
}

fn spikes() -> Step {
    SpikeRemoval::new(3, 6.0).unwrap().into()
}

fn missing() -> Step {
    MissingShare::new(0.5).unwrap().into()
}

fn limits() -> Step {
    LimitFill::new(LimitRule::Half).into()
}

fn common_axis() -> Step {
    CommonAxis::new(vec![1.0, 2.0], Interpolation::Linear)
        .unwrap()
        .into()
}

fn cut() -> Step {
    CutRegions::new(vec![(1.0, 2.0)], Regions::Cut)
        .unwrap()
        .into()
}

#[test]
fn the_usual_orders_draw_no_remark() {
    let spectra = vec![
        Absorbance::of_shares().into(),
        common_axis(),
        cut(),
        spikes(),
        StandardNormalVariate.into(),
        Detrend::new(2).unwrap().into(),
        derivative(),
        missing(),
        median(),
        scale(),
    ];
    assert_eq!(remarks(spectra), []);
    let compounds = vec![
        UnitConversion::new(1000.0, 0.0).unwrap().into(),
        limits(),
        sum(),
        quotient(),
        log(),
        missing(),
        median(),
        BatchCentering.into(),
        scale(),
    ];
    assert_eq!(remarks(compounds), []);
}

#[test]
fn every_rule_is_found_with_both_places() {
    let scores = || Step::from(PrincipalScores::new(2).unwrap());
    for (steps, rule) in [
        (vec![Centering.into(), log()], OrderRule::LogAfterCentering),
        (
            vec![scale(), derivative()],
            OrderRule::DerivativeAfterScaling,
        ),
        (
            vec![scale(), StandardNormalVariate.into()],
            OrderRule::RowCorrectionAfterScaling,
        ),
        (
            vec![
                StandardNormalVariate.into(),
                ScatterCorrection::new(Reference::TrainingMean).into(),
            ],
            OrderRule::SameFamilyTwice,
        ),
        (vec![log(), limits()], OrderRule::LimitsAfterChange),
        (vec![scale(), median()], OrderRule::ImputationAfterScaling),
        (
            vec![median(), missing()],
            OrderRule::MissingFilterAfterImputation,
        ),
        (
            vec![StandardNormalVariate.into(), Absorbance::of_shares().into()],
            OrderRule::AbsorbanceAfterCorrection,
        ),
        (
            vec![derivative(), spikes()],
            OrderRule::SpikesAfterSmoothing,
        ),
        (
            vec![derivative(), common_axis()],
            OrderRule::AxisAfterDerivative,
        ),
        (vec![log(), sum()], OrderRule::NormalisationAfterLog),
        (vec![quotient(), sum()], OrderRule::TotalAfterQuotient),
        (
            vec![scores(), derivative()],
            OrderRule::AlongAxisAfterScores,
        ),
        (
            vec![scale(), BatchCentering.into()],
            OrderRule::DriftAfterScaling,
        ),
        (vec![sum(), cut()], OrderRule::CutAfterCorrection),
    ] {
        assert_eq!(remarks(steps), [(0, 1, rule)]);
    }
}

#[test]
fn a_remark_names_steps_that_are_not_neighbours() {
    let steps = vec![Centering.into(), missing(), log(), derivative()];
    let expected = [
        (0, 2, OrderRule::LogAfterCentering),
        (0, 3, OrderRule::DerivativeAfterScaling),
    ];
    assert_eq!(remarks(steps), expected);
}

#[test]
fn batch_centring_is_remarked_only_when_whole_batches_are_held_out() {
    let steps = [log(), BatchCentering.into(), Centering.into()];
    assert_eq!(batch_remarks(&steps, Scheme::WholeBatches), [1]);
    assert_eq!(batch_remarks(&steps, Scheme::Random), [] as [usize; 0]);
}
