//! The places of a Fit cell's settings.

use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::fit::{
    ErrorMeasure, Fit, Grouping, Judge, Penalty, PenaltyRange, Plan, Rule, Scaling, Scheme,
    Strength, Ties,
};
use crate::study::settings::slot::weights::WeightSlot;
use crate::study::settings::slot::{Bounds, Value, take};

/// A place in the settings of a Fit cell.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum FitSlot {
    /// The cell whose samples are fitted.
    Input,
    /// The penalty.
    Penalty,
    /// The lasso shares that are tried.
    Shares,
    /// On which scale the penalty acts.
    Scaling,
    /// How the coefficients of a predictor in several classes are penalised.
    Grouping,
    /// How equal times are counted.
    Ties,
    /// What is made small when strengths are compared.
    Measure,
    /// How the strength is chosen.
    Choice,
    /// The strength. Setting it sets the strength by hand.
    Strength,
    /// The weight of the number of possible models.
    Gamma,
    /// How many strengths are tried.
    Count,
    /// The smallest strength as a share of the largest; nothing takes the usual share.
    Ratio,
    /// How samples come into inner parts.
    InnerScheme,
    /// How many inner parts.
    InnerParts,
    /// How often the inner parts are drawn.
    InnerRepeats,
    /// Whether the procedure is judged.
    Judge,
    /// How samples come into outer parts.
    OuterScheme,
    /// How many outer parts.
    OuterParts,
    /// How often the outer parts are drawn.
    OuterRepeats,
    /// The seed.
    Seed,
    /// Penalty weights, signs, strata, the interval.
    Weight(WeightSlot),
}

#[derive(Clone, Copy, PartialEq)]
enum Sort {
    Ridge,
    Lasso,
    ElasticNet,
}

const PENALTIES: [(&str, Sort); 3] = [
    ("ridge", Sort::Ridge),
    ("lasso", Sort::Lasso),
    ("elastic-net", Sort::ElasticNet),
];
const PENALTY_NAMES: [&str; 3] = take::names(&PENALTIES);

const SCALINGS: [(&str, Scaling); 2] = [
    ("unit-variance", Scaling::UnitVariance),
    ("as-prepared", Scaling::AsPrepared),
];
const SCALING_NAMES: [&str; 2] = take::names(&SCALINGS);

const GROUPINGS: [(&str, Grouping); 2] =
    [("apart", Grouping::Apart), ("together", Grouping::Together)];
const GROUPING_NAMES: [&str; 2] = take::names(&GROUPINGS);

const TIES: [(&str, Ties); 2] = [("efron", Ties::Efron), ("breslow", Ties::Breslow)];
const TIES_NAMES: [&str; 2] = take::names(&TIES);

const MEASURES: [(&str, ErrorMeasure); 6] = [
    ("usual", ErrorMeasure::Usual),
    ("squared-error", ErrorMeasure::SquaredError),
    ("deviance", ErrorMeasure::Deviance),
    ("misclassification", ErrorMeasure::Misclassification),
    ("partial-likelihood", ErrorMeasure::PartialLikelihood),
    ("concordance", ErrorMeasure::Concordance),
];
const MEASURE_NAMES: [&str; 6] = take::names(&MEASURES);

#[derive(Clone, Copy, PartialEq)]
enum Way {
    LowestError,
    OneStandardError,
    GeneralisedCrossValidation,
    ExtendedBic,
    ByHand,
}

const WAYS: [(&str, Way); 5] = [
    ("lowest-error", Way::LowestError),
    ("one-se", Way::OneStandardError),
    ("gcv", Way::GeneralisedCrossValidation),
    ("ebic", Way::ExtendedBic),
    ("by-hand", Way::ByHand),
];
const WAY_NAMES: [&str; 5] = take::names(&WAYS);

const SCHEMES: [(&str, Scheme); 5] = [
    ("units", Scheme::Units),
    ("balanced", Scheme::Balanced),
    ("whole-batches", Scheme::WholeBatches),
    ("leave-one-unit-out", Scheme::LeaveOneUnitOut),
    ("blocks", Scheme::Blocks),
];
const SCHEME_NAMES: [&str; 5] = take::names(&SCHEMES);

#[derive(Clone, Copy, PartialEq)]
enum Judging {
    Nested,
    Declined,
}

const JUDGINGS: [(&str, Judging); 2] = [
    ("nested", Judging::Nested),
    ("not-judged", Judging::Declined),
];
const JUDGING_NAMES: [&str; 2] = take::names(&JUDGINGS);

/// The lasso share of an elastic net until another is named.
const USUAL_SHARE: Real = Real::constant(0.5);
/// The strength by hand until another is named.
const USUAL_STRENGTH: Real = Real::constant(0.1);
/// The weight of the extended criterion until another is named; with 0.5 the criterion is
/// consistent while p grows more slowly than n squared (Chen and Chen, 2008).
const USUAL_GAMMA: Real = Real::constant(0.5);
/// The largest seed that a number of every sort can hold: 2^53.
const LARGEST_SEED: u64 = 9_007_199_254_740_992;

const SHARES: Bounds = Bounds::Any {
    least: 0.001,
    most: 0.999,
};
const PARTS: Bounds = Bounds::Whole {
    least: 2,
    most: 1000,
};
const REPEATS: Bounds = Bounds::Whole {
    least: 1,
    most: 1000,
};

impl FitSlot {
    /// The places that these settings have, in reading order.
    #[must_use]
    pub fn of(fit: &Fit) -> Vec<Self> {
        let mut slots = vec![Self::Penalty];
        if matches!(fit.penalty, Penalty::ElasticNet { .. }) {
            slots.push(Self::Shares);
        }
        slots.extend([Self::Input, Self::Choice]);
        match fit.strength {
            Strength::ByHand(_) => slots.push(Self::Strength),
            Strength::Chosen { rule, inner, .. } => {
                slots.push(Self::Count);
                if rule.needs_parts() {
                    slots.push(Self::InnerScheme);
                    if inner.scheme.takes_parts() {
                        slots.push(Self::InnerParts);
                    }
                    if inner.scheme.is_drawn() {
                        slots.push(Self::InnerRepeats);
                    }
                }
                match rule {
                    Rule::ExtendedBic { .. } => slots.push(Self::Gamma),
                    Rule::Given { .. } => slots.push(Self::Strength),
                    Rule::LowestError
                    | Rule::OneStandardError
                    | Rule::GeneralisedCrossValidation => {}
                }
            }
        }
        slots.push(Self::Judge);
        if let Judge::Nested(plan) = fit.judge {
            slots.push(Self::OuterScheme);
            if plan.scheme.takes_parts() {
                slots.push(Self::OuterParts);
            }
            if plan.scheme.is_drawn() {
                slots.push(Self::OuterRepeats);
            }
        }
        slots.extend([Self::Seed, Self::Scaling, Self::Grouping, Self::Ties]);
        if inner(&fit.strength).is_some() {
            slots.push(Self::Measure);
        }
        if matches!(fit.strength, Strength::Chosen { .. }) {
            slots.push(Self::Ratio);
        }
        slots.extend(WeightSlot::of(fit).into_iter().map(Self::Weight));
        slots
    }

    /// Whether the setting says anything where this kind of outcome is fitted. What does not is
    /// kept, and shown where it does.
    #[must_use]
    pub const fn is_for(self, kind: Option<&OutcomeKind>) -> bool {
        match self {
            Self::Grouping => matches!(kind, Some(OutcomeKind::Classes)),
            Self::Ties => matches!(kind, Some(OutcomeKind::Time { .. })),
            Self::Measure => match kind {
                Some(kind) => ErrorMeasure::of(kind).len() > 1,
                None => false,
            },
            Self::Weight(slot) => slot.is_for(kind),
            Self::Input
            | Self::Penalty
            | Self::Shares
            | Self::Scaling
            | Self::Choice
            | Self::Strength
            | Self::Gamma
            | Self::Count
            | Self::Ratio
            | Self::InnerScheme
            | Self::InnerParts
            | Self::InnerRepeats
            | Self::Judge
            | Self::OuterScheme
            | Self::OuterParts
            | Self::OuterRepeats
            | Self::Seed => true,
        }
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Input => "cell that is fitted",
            Self::Penalty => "penalty",
            Self::Shares => "lasso share",
            Self::Scaling => "scale of the penalty",
            Self::Grouping => "penalty of several classes",
            Self::Ties => "counting of equal times",
            Self::Measure => "measure of the error",
            Self::Choice => "choice of the penalty strength",
            Self::Strength => "penalty strength",
            Self::Gamma => "weight of the number of models",
            Self::Count => "number of penalty strengths",
            Self::Ratio => "share of the weakest strength",
            Self::InnerScheme => "scheme of the inner parts",
            Self::InnerParts => "number of inner parts",
            Self::InnerRepeats => "number of inner repeats",
            Self::Judge => "judging of the procedure",
            Self::OuterScheme => "scheme of the outer parts",
            Self::OuterParts => "number of outer parts",
            Self::OuterRepeats => "number of outer repeats",
            Self::Seed => "seed",
            Self::Weight(slot) => slot.label(),
        }
    }

    /// The stable names of the choices.
    #[must_use]
    pub const fn choices(self) -> &'static [&'static str] {
        match self {
            Self::Penalty => &PENALTY_NAMES,
            Self::Scaling => &SCALING_NAMES,
            Self::Grouping => &GROUPING_NAMES,
            Self::Ties => &TIES_NAMES,
            Self::Measure => &MEASURE_NAMES,
            Self::Choice => &WAY_NAMES,
            Self::InnerScheme | Self::OuterScheme => &SCHEME_NAMES,
            Self::Judge => &JUDGING_NAMES,
            Self::Weight(slot) => slot.choices(),
            Self::Input
            | Self::Shares
            | Self::Strength
            | Self::Gamma
            | Self::Count
            | Self::Ratio
            | Self::InnerParts
            | Self::InnerRepeats
            | Self::OuterParts
            | Self::OuterRepeats
            | Self::Seed => &[],
        }
    }

    /// The numbers that may stand there.
    #[must_use]
    pub const fn bounds(self) -> Option<Bounds> {
        match self {
            Self::Shares => Some(SHARES),
            Self::Strength => Some(Bounds::Any {
                least: 0.0,
                most: f64::INFINITY,
            }),
            Self::Gamma => Some(Bounds::Any {
                least: 0.0,
                most: 1.0,
            }),
            Self::Count => Some(Bounds::Whole {
                least: 2,
                most: 1000,
            }),
            Self::Ratio => Some(Bounds::Any {
                least: 1e-9,
                most: 0.99,
            }),
            Self::InnerParts | Self::OuterParts => Some(PARTS),
            Self::InnerRepeats | Self::OuterRepeats => Some(REPEATS),
            Self::Weight(slot) => slot.bounds(),
            Self::Seed => Some(Bounds::Whole {
                least: 0,
                most: LARGEST_SEED,
            }),
            Self::Input
            | Self::Penalty
            | Self::Scaling
            | Self::Grouping
            | Self::Ties
            | Self::Measure
            | Self::Choice
            | Self::InnerScheme
            | Self::Judge
            | Self::OuterScheme => None,
        }
    }

    /// What stands there; `None` when the settings have no such place.
    #[must_use]
    pub fn get(self, fit: &Fit) -> Option<Value> {
        Some(match self {
            Self::Input => Value::Cell(fit.input.0),
            Self::Penalty => take::named(&PENALTIES, sort(&fit.penalty)),
            Self::Shares => match &fit.penalty {
                Penalty::ElasticNet { shares } => Value::Numbers(shares.clone()),
                Penalty::Ridge | Penalty::Lasso => return None,
            },
            Self::Scaling => take::named(&SCALINGS, fit.scaling),
            Self::Grouping => take::named(&GROUPINGS, fit.grouping),
            Self::Ties => take::named(&TIES, fit.ties),
            Self::Measure => {
                let _ = inner(&fit.strength)?;
                take::named(&MEASURES, fit.measure)
            }
            Self::Choice => take::named(&WAYS, way(&fit.strength)),
            Self::Strength => match fit.strength {
                Strength::ByHand(strength)
                | Strength::Chosen {
                    rule: Rule::Given { strength },
                    ..
                } => Value::Number(strength),
                Strength::Chosen { .. } => return None,
            },
            Self::Gamma => match fit.strength {
                Strength::Chosen {
                    rule: Rule::ExtendedBic { gamma },
                    ..
                } => Value::Number(gamma),
                Strength::Chosen { .. } | Strength::ByHand(_) => return None,
            },
            Self::Count => Value::Whole(u64::from(range(&fit.strength)?.count)),
            Self::Ratio => range(&fit.strength)?
                .ratio
                .map_or(Value::Nothing, Value::Number),
            Self::InnerScheme => take::named(&SCHEMES, inner(&fit.strength)?.scheme),
            Self::InnerParts => parts(inner(&fit.strength)?)?,
            Self::InnerRepeats => repeats(inner(&fit.strength)?)?,
            Self::Judge => take::named(
                &JUDGINGS,
                match fit.judge {
                    Judge::Nested(_) => Judging::Nested,
                    Judge::Declined => Judging::Declined,
                },
            ),
            Self::OuterScheme => take::named(&SCHEMES, outer(fit.judge)?.scheme),
            Self::OuterParts => parts(outer(fit.judge)?)?,
            Self::OuterRepeats => repeats(outer(fit.judge)?)?,
            Self::Seed => Value::Whole(fit.seed),
            Self::Weight(slot) => slot.get(fit)?,
        })
    }

    /// The settings with another value there.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there.
    pub fn set(self, fit: &Fit, value: Value) -> Result<Fit, Problem> {
        let label = self.label();
        let mut fit = fit.clone();
        match self {
            Self::Input => fit.input = take::cell(label, &value)?,
            Self::Penalty => {
                let chosen = take::pick(label, &PENALTIES, &value)?;
                if chosen != sort(&fit.penalty) {
                    fit.penalty = match chosen {
                        Sort::Ridge => Penalty::Ridge,
                        Sort::Lasso => Penalty::Lasso,
                        Sort::ElasticNet => Penalty::ElasticNet {
                            shares: vec![USUAL_SHARE],
                        },
                    };
                }
            }
            Self::Shares => match &mut fit.penalty {
                Penalty::ElasticNet { shares } => *shares = take::numbers(label, SHARES, &value)?,
                Penalty::Ridge | Penalty::Lasso => {
                    return Err(take::absent(label, "the penalty is no elastic net"));
                }
            },
            Self::Scaling => fit.scaling = take::pick(label, &SCALINGS, &value)?,
            Self::Grouping => fit.grouping = take::pick(label, &GROUPINGS, &value)?,
            Self::Ties => fit.ties = take::pick(label, &TIES, &value)?,
            Self::Measure => {
                if inner(&fit.strength).is_none() {
                    let because = "the strength is not chosen on held-out parts";
                    return Err(take::absent(label, because));
                }
                fit.measure = take::pick(label, &MEASURES, &value)?;
            }
            Self::Choice => {
                let chosen = take::pick(label, &WAYS, &value)?;
                fit.strength = with_way(&fit.strength, chosen);
            }
            Self::Strength => {
                let strength = take::number(label, self.limits(), &value)?;
                fit.strength = fit.strength.set_by_hand(strength);
            }
            Self::Gamma
            | Self::Count
            | Self::Ratio
            | Self::InnerScheme
            | Self::InnerParts
            | Self::InnerRepeats => self.set_in_choice(&mut fit.strength, &value)?,
            Self::Judge => {
                fit.judge = match (take::pick(label, &JUDGINGS, &value)?, fit.judge) {
                    (Judging::Declined, _) => Judge::Declined,
                    (Judging::Nested, Judge::Nested(plan)) => Judge::Nested(plan),
                    (Judging::Nested, Judge::Declined) => Fit::default().judge,
                }
            }
            Self::OuterScheme | Self::OuterParts | Self::OuterRepeats => match &mut fit.judge {
                Judge::Nested(plan) => self.set_in_plan(plan, &value)?,
                Judge::Declined => {
                    return Err(take::absent(label, "the procedure is not judged"));
                }
            },
            Self::Seed => fit.seed = take::whole(label, self.limits(), &value)?,
            Self::Weight(slot) => slot.set(&mut fit, &value)?,
        }
        Ok(fit)
    }

    fn limits(self) -> Bounds {
        self.bounds()
            .expect("every slot for a number has its bounds")
    }

    fn set_in_choice(self, strength: &mut Strength, value: &Value) -> Result<(), Problem> {
        let label = self.label();
        let Strength::Chosen { rule, range, inner } = strength else {
            return Err(take::absent(label, "the penalty strength is set by hand"));
        };
        match self {
            Self::Gamma => match rule {
                Rule::ExtendedBic { gamma } => *gamma = take::number(label, self.limits(), value)?,
                Rule::LowestError
                | Rule::OneStandardError
                | Rule::GeneralisedCrossValidation
                | Rule::Given { .. } => {
                    let because = "the strength is not chosen by the extended criterion";
                    return Err(take::absent(label, because));
                }
            },
            Self::Count => range.count = take::count(label, self.limits(), value)?,
            Self::Ratio => range.ratio = take::optional_number(label, self.limits(), value)?,
            Self::InnerScheme | Self::InnerParts | Self::InnerRepeats => {
                if !rule.needs_parts() {
                    let because = "the rule that chooses the strength needs no parts";
                    return Err(take::absent(label, because));
                }
                self.set_in_plan(inner, value)?;
            }
            Self::Input
            | Self::Penalty
            | Self::Shares
            | Self::Scaling
            | Self::Grouping
            | Self::Ties
            | Self::Measure
            | Self::Choice
            | Self::Strength
            | Self::Judge
            | Self::OuterScheme
            | Self::OuterParts
            | Self::OuterRepeats
            | Self::Seed
            | Self::Weight(_) => {}
        }
        Ok(())
    }

    fn set_in_plan(self, plan: &mut Plan, value: &Value) -> Result<(), Problem> {
        let label = self.label();
        match self {
            Self::InnerScheme | Self::OuterScheme => {
                plan.scheme = take::pick(label, &SCHEMES, value)?;
            }
            Self::InnerParts | Self::OuterParts => {
                if !plan.scheme.takes_parts() {
                    return Err(take::absent(label, "the scheme fixes it"));
                }
                plan.parts = take::count(label, PARTS, value)?;
            }
            Self::InnerRepeats | Self::OuterRepeats => {
                if !plan.scheme.is_drawn() {
                    let because = "the scheme draws nothing at random";
                    return Err(take::absent(label, because));
                }
                plan.repeats = take::count(label, REPEATS, value)?;
            }
            Self::Input
            | Self::Penalty
            | Self::Shares
            | Self::Scaling
            | Self::Grouping
            | Self::Ties
            | Self::Measure
            | Self::Choice
            | Self::Strength
            | Self::Gamma
            | Self::Count
            | Self::Ratio
            | Self::Judge
            | Self::Seed
            | Self::Weight(_) => {}
        }
        Ok(())
    }
}

impl Scheme {
    /// Whether the number of parts is a setting; otherwise the scheme fixes it.
    #[must_use]
    pub const fn takes_parts(self) -> bool {
        match self {
            Self::Units | Self::Balanced | Self::Blocks => true,
            Self::WholeBatches | Self::LeaveOneUnitOut => false,
        }
    }

    /// Whether parts are drawn at random, so that drawing them again gives others.
    #[must_use]
    pub const fn is_drawn(self) -> bool {
        match self {
            Self::Units | Self::Balanced => true,
            Self::WholeBatches | Self::LeaveOneUnitOut | Self::Blocks => false,
        }
    }
}

fn sort(penalty: &Penalty) -> Sort {
    match penalty {
        Penalty::Ridge => Sort::Ridge,
        Penalty::Lasso => Sort::Lasso,
        Penalty::ElasticNet { .. } => Sort::ElasticNet,
    }
}

fn way(strength: &Strength) -> Way {
    match strength {
        Strength::ByHand(_) => Way::ByHand,
        Strength::Chosen { rule, .. } => match rule {
            Rule::LowestError => Way::LowestError,
            Rule::OneStandardError => Way::OneStandardError,
            Rule::GeneralisedCrossValidation => Way::GeneralisedCrossValidation,
            Rule::ExtendedBic { .. } => Way::ExtendedBic,
            Rule::Given { .. } => Way::ByHand,
        },
    }
}

fn with_way(strength: &Strength, chosen: Way) -> Strength {
    if way(strength) == chosen {
        return strength.clone();
    }
    let rule = match chosen {
        Way::ByHand => return strength.set_by_hand(USUAL_STRENGTH),
        Way::LowestError => Rule::LowestError,
        Way::OneStandardError => Rule::OneStandardError,
        Way::GeneralisedCrossValidation => Rule::GeneralisedCrossValidation,
        Way::ExtendedBic => Rule::ExtendedBic { gamma: USUAL_GAMMA },
    };
    let (range, inner) = match strength {
        Strength::Chosen { range, inner, .. } => (*range, *inner),
        Strength::ByHand(_) => (
            PenaltyRange::default(),
            Plan {
                scheme: Scheme::Units,
                parts: 10,
                repeats: 5,
            },
        ),
    };
    Strength::Chosen { rule, range, inner }
}

fn range(strength: &Strength) -> Option<PenaltyRange> {
    match strength {
        Strength::Chosen { range, .. } => Some(*range),
        Strength::ByHand(_) => None,
    }
}

fn inner(strength: &Strength) -> Option<Plan> {
    match strength {
        Strength::Chosen { rule, inner, .. } => rule.needs_parts().then_some(*inner),
        Strength::ByHand(_) => None,
    }
}

fn outer(judge: Judge) -> Option<Plan> {
    match judge {
        Judge::Nested(plan) => Some(plan),
        Judge::Declined => None,
    }
}

fn parts(plan: Plan) -> Option<Value> {
    plan.scheme
        .takes_parts()
        .then_some(Value::Whole(u64::from(plan.parts)))
}

fn repeats(plan: Plan) -> Option<Value> {
    plan.scheme
        .is_drawn()
        .then_some(Value::Whole(u64::from(plan.repeats)))
}
