//! Settings of a Fit cell: one penalised regression, how its strength is chosen, how it is judged.

use crate::base::real::Real;
use crate::study::link::Link;
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::weights::{Interval, Signs, Strata, Weighting};

/// Settings of a Fit cell.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Fit {
    /// The Data or Prepare cell whose samples are fitted.
    pub input: Link,
    /// The penalty.
    pub penalty: Penalty,
    /// On which scale the penalty acts.
    pub scaling: Scaling,
    /// How the coefficients of a predictor in several classes are penalised; for classes only.
    pub grouping: Grouping,
    /// How equal times are counted; for times only.
    pub ties: Ties,
    /// What is made small when strengths are compared on held-out parts.
    pub measure: ErrorMeasure,
    /// How the strength comes about.
    pub strength: Strength,
    /// How the whole procedure is judged.
    pub judge: Judge,
    /// How the penalty weighs the predictors.
    pub weighting: Weighting,
    /// The signs that coefficients may have.
    pub signs: Signs,
    /// Which samples are compared; for times only.
    pub strata: Strata,
    /// The interval that the judgement gives.
    pub interval: Interval,
    /// The seed of all that is drawn at random.
    pub seed: u64,
}

impl Default for Fit {
    /// A lasso with the usual plan: the lowest error among 100 strengths by 10 parts, 5 times;
    /// judged on 5 outer parts, 10 times.
    fn default() -> Self {
        Self {
            input: Link::open(),
            penalty: Penalty::Lasso,
            scaling: Scaling::UnitVariance,
            grouping: Grouping::Apart,
            ties: Ties::Efron,
            measure: ErrorMeasure::Usual,
            strength: Strength::Chosen {
                rule: Rule::LowestError,
                range: PenaltyRange::default(),
                inner: Plan {
                    scheme: Scheme::Units,
                    parts: 10,
                    repeats: 5,
                },
            },
            judge: Judge::Nested(Plan {
                scheme: Scheme::Units,
                parts: 5,
                repeats: 10,
            }),
            weighting: Weighting::Equal,
            signs: Signs::Any,
            strata: Strata::None,
            interval: Interval::OverUnits,
            seed: 20_260_301,
        }
    }
}

impl Fit {
    /// The usual fit of this kind of outcome: where there are classes or events, they are spread
    /// evenly over the parts.
    #[must_use]
    pub fn usual_for(kind: &OutcomeKind) -> Self {
        let mut fit = Self::default();
        fit.spread_evenly(kind);
        fit
    }

    /// Spreads classes or events evenly over parts that are drawn at random, where there are any.
    pub fn spread_evenly(&mut self, kind: &OutcomeKind) {
        match kind {
            OutcomeKind::Measured | OutcomeKind::Count { .. } => return,
            OutcomeKind::YesNo { .. } | OutcomeKind::Classes | OutcomeKind::Time { .. } => {}
        }
        let even = |plan: &mut Plan| {
            if plan.scheme == Scheme::Units {
                plan.scheme = Scheme::Balanced;
            }
        };
        if let Strength::Chosen { inner, .. } = &mut self.strength {
            even(inner);
        }
        if let Judge::Nested(outer) = &mut self.judge {
            even(outer);
        }
    }
}

/// The penalty.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Penalty {
    /// Half the squared coefficients; lasso share 0.
    Ridge,
    /// The absolute coefficients; lasso share 1.
    Lasso,
    /// Between the two. Several shares: the best of them is chosen with the strength.
    ElasticNet {
        /// Lasso shares, each above 0 and below 1, rising, at least one.
        shares: Vec<Real>,
    },
}

impl Penalty {
    /// The lasso shares that are tried.
    #[must_use]
    pub fn shares(&self) -> Vec<f64> {
        match self {
            Self::Ridge => vec![0.0],
            Self::Lasso => vec![1.0],
            Self::ElasticNet { shares } => shares.iter().map(|share| share.get()).collect(),
        }
    }
}

/// On which scale the penalty acts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Scaling {
    /// Each predictor is divided by its standard deviation (divisor n) in the training part.
    UnitVariance,
    /// The predictors keep the scale on which they arrive.
    AsPrepared,
}

/// How the coefficients that a predictor has in several classes are penalised.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Grouping {
    /// Each by itself.
    Apart,
    /// As one, so that a predictor is in or out as a whole.
    Together,
}

/// How events at equal times are counted in the partial likelihood.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Ties {
    /// Efron (1977).
    Efron,
    /// Breslow (1974).
    Breslow,
}

/// What is made small when strengths are compared on held-out parts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ErrorMeasure {
    /// The one that belongs to the kind of outcome.
    Usual,
    /// The mean squared error.
    SquaredError,
    /// The mean deviance.
    Deviance,
    /// The share of samples called wrong.
    Misclassification,
    /// The deviance of the partial likelihood, for each event.
    PartialLikelihood,
    /// The share of pairs ordered wrongly.
    Concordance,
}

impl ErrorMeasure {
    /// The measures that a kind of outcome has, the usual one first.
    #[must_use]
    pub const fn of(kind: &OutcomeKind) -> &'static [Self] {
        match kind {
            OutcomeKind::Measured => &[Self::SquaredError],
            OutcomeKind::YesNo { .. } => &[
                Self::Deviance,
                Self::SquaredError,
                Self::Misclassification,
                Self::Concordance,
            ],
            OutcomeKind::Classes => &[Self::Deviance, Self::Misclassification],
            OutcomeKind::Count { .. } => &[Self::Deviance, Self::SquaredError],
            OutcomeKind::Time { .. } => &[Self::PartialLikelihood, Self::Concordance],
        }
    }
}

/// How the penalty strength comes about.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Strength {
    /// Set by hand; 0 or more.
    ByHand(Real),
    /// Chosen from a range by a rule.
    Chosen {
        /// The rule.
        rule: Rule,
        /// The strengths tried.
        range: PenaltyRange,
        /// The parts by which the error of each strength is found; not used by the rules that
        /// need no parts.
        inner: Plan,
    },
}

/// The rules that choose a strength.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Rule {
    /// The strength with the lowest mean held-out error.
    LowestError,
    /// The largest strength whose error is within one standard error of the lowest.
    OneStandardError,
    /// The lowest generalised cross-validation value; needs no parts.
    GeneralisedCrossValidation,
    /// The lowest extended Bayesian information criterion; needs no parts.
    ExtendedBic {
        /// The weight of the number of possible models, from 0 to 1.
        gamma: Real,
    },
    /// Set by hand, with the range compared beside it all the same, so that it can be seen where
    /// on the curve of errors the hand chose.
    Given {
        /// The strength; 0 or more.
        strength: Real,
    },
}

impl Strength {
    /// Whether the strength was set by hand, with or without a comparison beside it.
    #[must_use]
    pub const fn is_by_hand(&self) -> bool {
        match self {
            Self::ByHand(_) => true,
            Self::Chosen { rule, .. } => matches!(rule, Rule::Given { .. }),
        }
    }

    /// The same comparison, where there is one, with the strength set by hand.
    #[must_use]
    pub fn set_by_hand(&self, strength: Real) -> Self {
        match self {
            Self::Chosen { range, inner, .. } => Self::Chosen {
                rule: Rule::Given { strength },
                range: *range,
                inner: *inner,
            },
            Self::ByHand(_) => Self::ByHand(strength),
        }
    }
}

impl Rule {
    /// Whether the rule needs inner parts.
    #[must_use]
    pub const fn needs_parts(self) -> bool {
        match self {
            Self::LowestError | Self::OneStandardError | Self::Given { .. } => true,
            Self::GeneralisedCrossValidation | Self::ExtendedBic { .. } => false,
        }
    }
}

/// The strengths that are tried: falling from the all-zero point, evenly spaced on the log scale.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct PenaltyRange {
    /// How many strengths.
    pub count: u32,
    /// The smallest strength as a share of the largest; `None` takes the usual share.
    pub ratio: Option<Real>,
}

impl Default for PenaltyRange {
    fn default() -> Self {
        Self {
            count: 100,
            ratio: None,
        }
    }
}

/// A plan of parts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Plan {
    /// How samples come into parts.
    pub scheme: Scheme,
    /// How many parts; not used where the scheme fixes the number.
    pub parts: u32,
    /// How often the parts are drawn anew.
    pub repeats: u32,
}

/// How samples come into parts. Units are never divided.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Scheme {
    /// Units at random.
    Units,
    /// Units at random, with each class or event spread evenly.
    Balanced,
    /// Whole batches.
    WholeBatches,
    /// One unit at a time.
    LeaveOneUnitOut,
    /// Blocks of units that follow each other in order.
    Blocks,
}

/// How the whole procedure, choice of strength included, is judged.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Judge {
    /// By nested cross-validation.
    Nested(Plan),
    /// Not at all; the write-up says so.
    Declined,
}
