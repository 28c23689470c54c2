//! Penalty weights and sign rules of a Fit cell in format 1.

use crate::base::real::Real;
use crate::store::format::place::{Fault, Fields};
use crate::store::format::v1::Group;
use crate::store::format::v1::data::{read_range, write_range};
use crate::study::settings::weights::{Block, BlockChoice, Signs, Weighting};
use serde_json::Value;

// What an absent field means, fixed for format 1 for ever.
const POWER: Real = Real::constant(1.0);
const WEIGHT: Real = Real::constant(1.0);

/// Reads how the penalty weighs the predictors: absent, all alike.
///
/// # Errors
/// The first [`Fault`].
pub fn read_weighting(fields: &mut Fields<'_>) -> Result<Weighting, Fault> {
    let Some(at) = fields.get("penalty-weights") else {
        return Ok(Weighting::Equal);
    };
    let mut fields = at.fields()?;
    let weighting = if let Some(at) = fields.get("blocks") {
        let blocks = at.each(|at| {
            let mut fields = at.fields()?;
            let block = Block {
                range: read_range(&fields.need("columns")?)?,
                weight: fields.read("weight", |at| at.real())?.unwrap_or(WEIGHT),
            };
            fields.done();
            Ok(block)
        })?;
        let grid = fields.read("tried", |at| at.each(|weight| weight.real()))?;
        Weighting::Blocks {
            blocks,
            choice: grid.map_or(BlockChoice::ByHand, |grid| BlockChoice::Chosen { grid }),
        }
    } else {
        Weighting::Adaptive {
            power: fields
                .read("learnt-power", |at| at.real())?
                .unwrap_or(POWER),
        }
    };
    fields.done();
    Ok(weighting)
}

/// Reads the rule for signs: absent, none.
///
/// # Errors
/// The first [`Fault`].
pub fn read_signs(fields: &mut Fields<'_>) -> Result<Signs, Fault> {
    match fields.get("not-negative") {
        None => Ok(Signs::Any),
        Some(at) if at.value().is_string() => {
            at.one_of(&[("all", ())])?;
            Ok(Signs::NotNegative)
        }
        Some(at) => Ok(Signs::NotNegativeIn(at.each(|range| read_range(&range))?)),
    }
}

/// Writes both, where they are not the usual ones.
pub fn write(weighting: &Weighting, signs: &Signs, group: &mut Group) {
    match weighting {
        Weighting::Equal => {}
        Weighting::Blocks { blocks, choice } => {
            let mut inside = Group::default();
            let blocks: Vec<Value> = blocks
                .iter()
                .map(|block| {
                    let mut one = Group::default();
                    one.put("columns", write_range(&block.range));
                    one.put("weight", block.weight.get());
                    one.value()
                })
                .collect();
            inside.put("blocks", blocks);
            if let BlockChoice::Chosen { grid } = choice {
                let grid: Vec<f64> = grid.iter().map(|weight| weight.get()).collect();
                inside.put("tried", grid);
            }
            group.put("penalty-weights", inside.value());
        }
        Weighting::Adaptive { power } => {
            let mut inside = Group::default();
            inside.put("learnt-power", power.get());
            group.put("penalty-weights", inside.value());
        }
    }
    match signs {
        Signs::Any => {}
        Signs::NotNegative => group.put("not-negative", "all"),
        Signs::NotNegativeIn(ranges) => {
            let ranges: Vec<Value> = ranges.iter().map(write_range).collect();
            group.put("not-negative", ranges);
        }
    }
}
