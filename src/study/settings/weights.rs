//! What a fit may know of its predictors and samples beyond one penalty for all: penalty weights,
//! sign rules, strata; and which interval its judgement gives.

use crate::base::real::Real;
use crate::study::settings::data::ColumnRange;

/// The penalty weights of the predictors, beside the strength that they share.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Weighting {
    /// 1 for all.
    Equal,
    /// A weight for each block of predictors (an instrument, an assay, a single column), and 1 for
    /// the predictors in none of them.
    Blocks {
        /// The blocks, which share no column.
        blocks: Vec<Block>,
        /// Where the weights come from.
        choice: BlockChoice,
    },
    /// Learnt from a ridge fit in each training part: the adaptive lasso.
    Adaptive {
        /// How sharply small coefficients are penalised; above 0.
        power: Real,
    },
}

/// A block of predictors.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Block {
    /// Its columns.
    pub range: ColumnRange,
    /// Its weight by hand, above 0.
    pub weight: Real,
}

/// Where the weights of blocks come from.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum BlockChoice {
    /// Each block has its own, set by hand.
    ByHand,
    /// The best combination of these, chosen in every training part by its own inner parts.
    Chosen {
        /// The weights that each block may have, above 0, at least one.
        grid: Vec<Real>,
    },
}

/// The signs that coefficients may have.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Signs {
    /// Any.
    Any,
    /// None is below zero.
    NotNegative,
    /// None of those in these ranges is below zero.
    NotNegativeIn(Vec<ColumnRange>),
}

/// Which samples the partial likelihood compares; for times only.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Strata {
    /// All with all.
    None,
    /// Those of one batch with each other.
    Batches,
}

/// The interval that the judgement gives.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Interval {
    /// From the spread of errors over units.
    OverUnits,
    /// Beside it the careful interval of Bates, Hastie and Tibshirani (2024), for which the
    /// procedure is repeated without each pair of outer parts.
    Careful,
}

/// How many combinations of block weights are compared at most.
pub const MOST_COMBINATIONS: usize = 64;

impl Weighting {
    /// The lists of block weights that are compared, one weight for each block: all equal first.
    /// Weights count relative to each other, so a block that stands for all predictors alone would
    /// only move the strength; that is left to the reader.
    #[must_use]
    pub fn candidates(&self) -> Vec<Vec<f64>> {
        let Self::Blocks { blocks, choice } = self else {
            return Vec::new();
        };
        match choice {
            BlockChoice::ByHand => vec![blocks.iter().map(|block| block.weight.get()).collect()],
            BlockChoice::Chosen { grid } => {
                let mut lists: Vec<Vec<f64>> = vec![Vec::new()];
                for _ in blocks {
                    let longer = lists.iter().flat_map(|list| {
                        grid.iter().map(move |weight| {
                            let mut list = list.clone();
                            list.push(weight.get());
                            list
                        })
                    });
                    lists = longer.collect();
                }
                // Of equal errors the first wins, and that should be the plainest.
                let spread =
                    |list: &Vec<f64>| -> f64 { list.iter().map(|weight| weight.ln().abs()).sum() };
                lists.sort_by(|a, b| spread(a).total_cmp(&spread(b)));
                lists
            }
        }
    }

    /// How many combinations are compared.
    #[must_use]
    pub fn n_combinations(&self) -> usize {
        match self {
            Self::Equal | Self::Adaptive { .. } => 1,
            Self::Blocks { blocks, choice } => match choice {
                BlockChoice::ByHand => 1,
                BlockChoice::Chosen { grid } => {
                    let count = u32::try_from(blocks.len()).unwrap_or(u32::MAX);
                    grid.len().saturating_pow(count)
                }
            },
        }
    }
}
