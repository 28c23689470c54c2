//! From the settings of a fit to the procedure that is carried out.

use crate::eval::kind::prepare::Prepared;
use crate::numeric::choose;
use crate::numeric::parts::{self, PartsParams};
use crate::numeric::procedure::{Procedure, StrengthRule};
use crate::numeric::task;
use crate::study::settings::fit::{Fit, Plan, Rule, Scaling, Scheme, Strength};

/// The procedure that these settings describe.
#[must_use]
pub fn numeric_procedure<'a>(settings: &Fit, prepared: &'a Prepared) -> Procedure<'a> {
    Procedure {
        chain: &prepared.chain,
        scaling: match settings.scaling {
            Scaling::UnitVariance => task::Scaling::UnitVariance,
            Scaling::AsPrepared => task::Scaling::AsGiven,
        },
        shares: settings.penalty.shares(),
        strength: match &settings.strength {
            Strength::ByHand(strength) => StrengthRule::Fixed(strength.get()),
            Strength::Chosen { rule, range, inner } => StrengthRule::Chosen {
                rule: match rule {
                    Rule::LowestError => choose::Rule::LowestError,
                    Rule::OneStandardError => choose::Rule::OneStandardError,
                    Rule::GeneralisedCrossValidation => choose::Rule::GeneralisedCrossValidation,
                    Rule::ExtendedBic { gamma } => choose::Rule::ExtendedBic { gamma: gamma.get() },
                },
                count: range.count as usize,
                ratio: range.ratio.map(crate::base::real::Real::get),
                inner: parts_params(*inner, settings.seed),
            },
        },
    }
}

/// The plan of parts that these settings describe.
#[must_use]
pub fn parts_params(plan: Plan, seed: u64) -> PartsParams {
    PartsParams {
        scheme: match plan.scheme {
            Scheme::Units => parts::Scheme::Random,
            Scheme::Balanced => parts::Scheme::Balanced,
            Scheme::WholeBatches => parts::Scheme::WholeBatches,
            Scheme::LeaveOneUnitOut => parts::Scheme::LeaveOneUnitOut,
            Scheme::Blocks => parts::Scheme::Blocked,
        },
        parts: plan.parts as usize,
        repeats: plan.repeats as usize,
        seed,
    }
}
