//! The places of a Fit cell's settings on penalty weights, signs, strata and the interval.

use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::study::settings::data::{ColumnRange, OutcomeKind};
use crate::study::settings::fit::{Fit, Judge};
use crate::study::settings::slot::{Bounds, Value, take};
use crate::study::settings::weights::{
    Block, BlockChoice, Interval, MOST_COMBINATIONS, Signs, Strata, Weighting,
};

/// A place among these settings.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum WeightSlot {
    /// How the penalty weighs the predictors.
    Weighting,
    /// The blocks of predictors.
    Blocks,
    /// The weight of each block, by hand.
    BlockWeights,
    /// The weights among which those of the blocks are chosen.
    Grid,
    /// How sharply learnt weights act.
    Power,
    /// The signs that coefficients may have.
    Signs,
    /// The predictors whose coefficients are never negative.
    SignColumns,
    /// Which samples are compared.
    Strata,
    /// The interval that the judgement gives.
    Interval,
}

#[derive(Clone, Copy, PartialEq)]
enum Weigh {
    Equal,
    ByHand,
    Chosen,
    Adaptive,
}

const WEIGHINGS: [(&str, Weigh); 4] = [
    ("equal", Weigh::Equal),
    ("blocks-by-hand", Weigh::ByHand),
    ("blocks-chosen", Weigh::Chosen),
    ("learnt", Weigh::Adaptive),
];
const WEIGHING_NAMES: [&str; 4] = take::names(&WEIGHINGS);

#[derive(Clone, Copy, PartialEq)]
enum Rule {
    Any,
    NotNegative,
    NotNegativeIn,
}

const RULES: [(&str, Rule); 3] = [
    ("any", Rule::Any),
    ("not-negative", Rule::NotNegative),
    ("not-negative-in", Rule::NotNegativeIn),
];
const RULE_NAMES: [&str; 3] = take::names(&RULES);

const STRATA: [(&str, Strata); 2] = [("together", Strata::None), ("batches", Strata::Batches)];
const STRATA_NAMES: [&str; 2] = take::names(&STRATA);

const INTERVALS: [(&str, Interval); 2] = [
    ("over-units", Interval::OverUnits),
    ("careful", Interval::Careful),
];
const INTERVAL_NAMES: [&str; 2] = take::names(&INTERVALS);

/// The power of learnt weights until another is named: that of most of the literature.
const USUAL_POWER: Real = Real::constant(1.0);
/// The weight of a block until another is named.
const ONE: Real = Real::constant(1.0);

const WEIGHTS: Bounds = Bounds::Any {
    least: 1e-3,
    most: 1e3,
};
const POWERS: Bounds = Bounds::Any {
    least: 0.1,
    most: 4.0,
};

impl WeightSlot {
    /// The places that these settings have, in reading order.
    #[must_use]
    pub fn of(fit: &Fit) -> Vec<Self> {
        let mut slots = vec![Self::Weighting];
        match &fit.weighting {
            Weighting::Equal => {}
            Weighting::Blocks { choice, .. } => slots.extend([
                Self::Blocks,
                match choice {
                    BlockChoice::ByHand => Self::BlockWeights,
                    BlockChoice::Chosen { .. } => Self::Grid,
                },
            ]),
            Weighting::Adaptive { .. } => slots.push(Self::Power),
        }
        slots.push(Self::Signs);
        if matches!(fit.signs, Signs::NotNegativeIn(_)) {
            slots.push(Self::SignColumns);
        }
        slots.push(Self::Strata);
        if matches!(fit.judge, Judge::Nested(_)) {
            slots.push(Self::Interval);
        }
        slots
    }

    /// Whether the setting says anything where this kind of outcome is fitted.
    #[must_use]
    pub const fn is_for(self, kind: Option<&OutcomeKind>) -> bool {
        match self {
            Self::Strata => matches!(kind, Some(OutcomeKind::Time { .. })),
            Self::Weighting
            | Self::Blocks
            | Self::BlockWeights
            | Self::Grid
            | Self::Power
            | Self::Signs
            | Self::SignColumns
            | Self::Interval => true,
        }
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Weighting => "weighing of the predictors",
            Self::Blocks => "blocks of predictors",
            Self::BlockWeights => "weights of the blocks",
            Self::Grid => "weights tried for each block",
            Self::Power => "power of the learnt weights",
            Self::Signs => "rule for signs",
            Self::SignColumns => "predictors that are never negative",
            Self::Strata => "samples compared",
            Self::Interval => "interval of the judgement",
        }
    }

    /// The stable names of the choices.
    #[must_use]
    pub const fn choices(self) -> &'static [&'static str] {
        match self {
            Self::Weighting => &WEIGHING_NAMES,
            Self::Signs => &RULE_NAMES,
            Self::Strata => &STRATA_NAMES,
            Self::Interval => &INTERVAL_NAMES,
            Self::Blocks | Self::BlockWeights | Self::Grid | Self::Power | Self::SignColumns => &[],
        }
    }

    /// The numbers that may stand there.
    #[must_use]
    pub const fn bounds(self) -> Option<Bounds> {
        match self {
            Self::BlockWeights | Self::Grid => Some(WEIGHTS),
            Self::Power => Some(POWERS),
            Self::Weighting
            | Self::Blocks
            | Self::Signs
            | Self::SignColumns
            | Self::Strata
            | Self::Interval => None,
        }
    }

    /// What stands there; `None` when the settings have no such place.
    #[must_use]
    pub fn get(self, fit: &Fit) -> Option<Value> {
        Some(match self {
            Self::Weighting => take::named(&WEIGHINGS, weigh(&fit.weighting)),
            Self::Blocks => Value::Columns(
                blocks(&fit.weighting)?
                    .iter()
                    .map(|block| block.range.clone())
                    .collect(),
            ),
            Self::BlockWeights => match &fit.weighting {
                Weighting::Blocks {
                    blocks,
                    choice: BlockChoice::ByHand,
                } => Value::Numbers(blocks.iter().map(|block| block.weight).collect()),
                Weighting::Equal | Weighting::Blocks { .. } | Weighting::Adaptive { .. } => {
                    return None;
                }
            },
            Self::Grid => match &fit.weighting {
                Weighting::Blocks {
                    choice: BlockChoice::Chosen { grid },
                    ..
                } => Value::Numbers(grid.clone()),
                Weighting::Equal | Weighting::Blocks { .. } | Weighting::Adaptive { .. } => {
                    return None;
                }
            },
            Self::Power => match fit.weighting {
                Weighting::Adaptive { power } => Value::Number(power),
                Weighting::Equal | Weighting::Blocks { .. } => return None,
            },
            Self::Signs => take::named(&RULES, rule(&fit.signs)),
            Self::SignColumns => match &fit.signs {
                Signs::NotNegativeIn(ranges) => Value::Columns(ranges.clone()),
                Signs::Any | Signs::NotNegative => return None,
            },
            Self::Strata => take::named(&STRATA, fit.strata),
            Self::Interval => match fit.judge {
                Judge::Nested(_) => take::named(&INTERVALS, fit.interval),
                Judge::Declined => return None,
            },
        })
    }

    /// Puts another value there.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there.
    pub fn set(self, fit: &mut Fit, value: &Value) -> Result<(), Problem> {
        let label = self.label();
        match self {
            Self::Weighting => {
                let chosen = take::pick(label, &WEIGHINGS, value)?;
                fit.weighting = with_weighing(&fit.weighting, chosen);
            }
            Self::Blocks => {
                let Weighting::Blocks { blocks, choice } = &mut fit.weighting else {
                    return Err(no_blocks(label));
                };
                let ranges = take::columns(label, value)?;
                combinations(choice, ranges.len())?;
                // A block that was there keeps its weight.
                let weight = |range: &ColumnRange| {
                    let known = blocks.iter().find(|block| block.range == *range);
                    known.map_or(ONE, |block| block.weight)
                };
                let renewed = ranges
                    .into_iter()
                    .map(|range| Block {
                        weight: weight(&range),
                        range,
                    })
                    .collect();
                *blocks = renewed;
            }
            Self::BlockWeights => {
                let Weighting::Blocks {
                    blocks,
                    choice: BlockChoice::ByHand,
                } = &mut fit.weighting
                else {
                    return Err(no_blocks(label));
                };
                // Without blocks there are no weights, and nothing to say is right.
                let is_empty = matches!(value, Value::Numbers(given) if given.is_empty());
                if blocks.is_empty() && is_empty {
                    return Ok(());
                }
                let weights = take::ordered(label, WEIGHTS, value)?;
                if weights.len() != blocks.len() {
                    return Err(Problem::new(
                        "weights-and-blocks-differ",
                        format!(
                            "There must be one weight for each of the {} blocks; {} were given.",
                            blocks.len(),
                            weights.len()
                        ),
                    ));
                }
                for (block, weight) in blocks.iter_mut().zip(weights) {
                    block.weight = weight;
                }
            }
            Self::Grid => {
                let Weighting::Blocks {
                    blocks,
                    choice: BlockChoice::Chosen { grid },
                } = &mut fit.weighting
                else {
                    return Err(no_blocks(label));
                };
                let tried = take::numbers(label, WEIGHTS, value)?;
                let choice = BlockChoice::Chosen { grid: tried };
                combinations(&choice, blocks.len())?;
                if let BlockChoice::Chosen { grid: tried } = choice {
                    *grid = tried;
                }
            }
            Self::Power => match &mut fit.weighting {
                Weighting::Adaptive { power } => *power = take::number(label, POWERS, value)?,
                Weighting::Equal | Weighting::Blocks { .. } => {
                    return Err(take::absent(label, "no weights are learnt"));
                }
            },
            Self::Signs => {
                let chosen = take::pick(label, &RULES, value)?;
                if chosen != rule(&fit.signs) {
                    fit.signs = match chosen {
                        Rule::Any => Signs::Any,
                        Rule::NotNegative => Signs::NotNegative,
                        Rule::NotNegativeIn => Signs::NotNegativeIn(Vec::new()),
                    };
                }
            }
            Self::SignColumns => match &mut fit.signs {
                Signs::NotNegativeIn(ranges) => *ranges = take::columns(label, value)?,
                Signs::Any | Signs::NotNegative => {
                    return Err(take::absent(
                        label,
                        "the rule for signs names no predictors",
                    ));
                }
            },
            Self::Strata => fit.strata = take::pick(label, &STRATA, value)?,
            Self::Interval => {
                if fit.judge == Judge::Declined {
                    return Err(take::absent(label, "the procedure is not judged"));
                }
                fit.interval = take::pick(label, &INTERVALS, value)?;
            }
        }
        Ok(())
    }
}

fn no_blocks(label: &str) -> Problem {
    take::absent(label, "the predictors are not weighed in that way")
}

/// Refuses more combinations than can be compared.
fn combinations(choice: &BlockChoice, n_blocks: usize) -> Result<(), Problem> {
    let BlockChoice::Chosen { grid } = choice else {
        return Ok(());
    };
    let count = grid
        .len()
        .saturating_pow(u32::try_from(n_blocks).unwrap_or(u32::MAX));
    if count <= MOST_COMBINATIONS {
        return Ok(());
    }
    Err(Problem::new(
        "too-many-weights-to-compare",
        format!(
            "{} weights for each of {n_blocks} blocks are more than {MOST_COMBINATIONS} combinations.",
            grid.len()
        ),
    )
    .mend("Name fewer blocks or fewer weights."))
}

fn weigh(weighting: &Weighting) -> Weigh {
    match weighting {
        Weighting::Equal => Weigh::Equal,
        Weighting::Blocks { choice, .. } => match choice {
            BlockChoice::ByHand => Weigh::ByHand,
            BlockChoice::Chosen { .. } => Weigh::Chosen,
        },
        Weighting::Adaptive { .. } => Weigh::Adaptive,
    }
}

fn blocks(weighting: &Weighting) -> Option<&[Block]> {
    match weighting {
        Weighting::Blocks { blocks, .. } => Some(blocks),
        Weighting::Equal | Weighting::Adaptive { .. } => None,
    }
}

fn with_weighing(weighting: &Weighting, chosen: Weigh) -> Weighting {
    if weigh(weighting) == chosen {
        return weighting.clone();
    }
    let kept = blocks(weighting).map(<[Block]>::to_vec).unwrap_or_default();
    match chosen {
        Weigh::Equal => Weighting::Equal,
        Weigh::ByHand => Weighting::Blocks {
            blocks: kept,
            choice: BlockChoice::ByHand,
        },
        Weigh::Chosen => Weighting::Blocks {
            // As many as can be compared with three weights each.
            blocks: kept.into_iter().take(3).collect(),
            choice: BlockChoice::Chosen {
                grid: vec![Real::constant(0.5), ONE, Real::constant(2.0)],
            },
        },
        Weigh::Adaptive => Weighting::Adaptive { power: USUAL_POWER },
    }
}

fn rule(signs: &Signs) -> Rule {
    match signs {
        Signs::Any => Rule::Any,
        Signs::NotNegative => Rule::NotNegative,
        Signs::NotNegativeIn(_) => Rule::NotNegativeIn,
    }
}
