//! The steps that can be added, each with its usual settings.

use crate::base::real::Real;
use crate::study::settings::prepare::choice::{
    DriftRemoval, Interpolation, LogBase, NeighborWeights, PowerFamily, ScaleRule, Statistic,
    Treatment,
};
use crate::study::settings::prepare::{
    Baseline, Divisor, LimitValue, Reference, Region, Step, Trend,
};
use std::sync::Arc;

/// Steps that serve one purpose.
#[derive(Clone, Debug, PartialEq)]
pub struct Shelf {
    /// The purpose, in a few words.
    pub purpose: &'static str,
    /// The steps.
    pub steps: Vec<Step>,
}

impl Step {
    /// The steps that can be added, each with its usual settings, purpose by purpose. Purposes
    /// and steps stand about in the order in which they are taken.
    #[must_use]
    pub fn shelves() -> Vec<Shelf> {
        let shelf = |purpose, steps: Vec<Self>| Shelf { purpose, steps };
        vec![
            shelf(
                "Samples, units of measurement",
                vec![
                    Self::AverageUnits,
                    Self::UnitConversion {
                        factor: Real::constant(1.0),
                        offset: Real::constant(0.0),
                    },
                ],
            ),
            shelf("Along an axis", along_an_axis()),
            shelf("Scatter and baselines", scatter_and_baselines()),
            shelf(
                "Limits and missing values",
                vec![
                    Self::BelowLimit {
                        value: LimitValue::Share(Real::constant(0.5)),
                    },
                    Self::ColumnImputation {
                        statistic: Statistic::Median,
                    },
                    Self::NearestImputation {
                        neighbors: 5,
                        weights: NeighborWeights::Equal,
                    },
                    Self::LowRankImputation { rank: 2 },
                ],
            ),
            shelf("Totals and compositions", totals_and_compositions()),
            shelf("Logarithms and powers", logarithms_and_powers()),
            shelf(
                "Quality control, batches, covariates",
                vec![
                    Self::QualityControlDrift {
                        trend: Trend::Smooth {
                            span: Real::constant(0.75),
                        },
                        removal: DriftRemoval::Ratio,
                    },
                    Self::QualityControlSpread {
                        most: Real::constant(0.3),
                    },
                    Self::BatchCentering,
                    Self::CovariateRemoval,
                ],
            ),
            shelf("Leaving predictors out", filters()),
            shelf(
                "Centre, scale, compress",
                vec![
                    Self::Center,
                    Self::Scale {
                        rule: ScaleRule::UnitVariance,
                    },
                    Self::PrincipalScores { components: 10 },
                ],
            ),
        ]
    }

    /// The same steps in one list.
    #[must_use]
    pub fn catalogue() -> Vec<Self> {
        Self::shelves()
            .into_iter()
            .flat_map(|shelf| shelf.steps)
            .collect()
    }
}

fn along_an_axis() -> Vec<Step> {
    vec![
        Step::Absorbance { reference: None },
        Step::CommonAxis {
            first: Real::constant(900.0),
            last: Real::constant(1_700.0),
            distance: Real::constant(2.0),
            between: Interpolation::Linear,
        },
        Step::CutRegions {
            regions: vec![Region {
                from: Real::constant(900.0),
                to: Real::constant(950.0),
            }],
            treatment: Treatment::Cut,
        },
        Step::SpikeRemoval {
            half: 3,
            threshold: Real::constant(8.0),
        },
        Step::SavitzkyGolay {
            window: 15,
            degree: 2,
            derivative: 1,
        },
    ]
}

fn scatter_and_baselines() -> Vec<Step> {
    vec![
        Step::StandardNormalVariate,
        Step::Detrend { degree: 2 },
        Step::Baseline {
            baseline: Baseline::Asymmetric {
                smoothness: Real::constant(100_000.0),
                asymmetry: Real::constant(0.01),
            },
        },
        Step::ScatterCorrection {
            reference: Reference::Training,
        },
        Step::ExtendedScatterCorrection {
            reference: Reference::Training,
            degree: 2,
            interferent: Arc::default(),
        },
    ]
}

fn totals_and_compositions() -> Vec<Step> {
    vec![
        Step::Normalisation {
            divisor: Divisor::Sum,
            target: Real::constant(1.0),
        },
        Step::ProbabilisticQuotient {
            reference: Reference::Training,
        },
        Step::QuantileNormalisation {
            reference: Reference::Training,
        },
        Step::CenteredLogRatio {
            pseudo_count: Real::constant(0.5),
        },
    ]
}

fn logarithms_and_powers() -> Vec<Step> {
    vec![
        Step::Log {
            base: LogBase::Natural,
            offset: Real::constant(0.0),
        },
        Step::InverseHyperbolicSine {
            scale: Real::constant(1.0),
        },
        Step::Power {
            exponent: Real::constant(0.5),
        },
        Step::PowerTransform {
            family: PowerFamily::YeoJohnson,
            power: None,
        },
    ]
}

fn filters() -> Vec<Step> {
    vec![
        Step::MissingShareFilter {
            most: Real::constant(0.2),
        },
        Step::NearConstantFilter {
            least: Real::constant(0.05),
        },
        Step::CallRateFilter {
            least: Real::constant(0.95),
        },
        Step::MinorAlleleFilter {
            least: Real::constant(0.05),
        },
        Step::OutcomeFilter { keep: 50 },
    ]
}
