//! From the settings of a fit to the procedure that is carried out.

use crate::base::problem::Problem;
use crate::eval::kind::data::Dataset;
use crate::eval::kind::fit::weights::{numeric_signs, numeric_weighting, stratify};
use crate::eval::kind::prepare::Prepared;
use crate::numeric::choose;
use crate::numeric::parts::{self, PartsParams};
use crate::numeric::path;
use crate::numeric::procedure::{self, Material, Procedure, StrengthRule};
use crate::numeric::response::{self, Response};
use crate::numeric::task;
use crate::study::settings::fit::{
    ErrorMeasure, Fit, Grouping, Plan, Rule, Scaling, Scheme, Strength, Ties,
};

/// The procedure that these settings describe.
///
/// # Errors
/// What is wrong with the settings for these samples.
pub fn numeric_procedure<'a>(
    settings: &Fit,
    prepared: &'a Prepared,
) -> Result<Procedure<'a>, Problem> {
    Ok(Procedure {
        weighting: numeric_weighting(settings, &prepared.data)?,
        signs: numeric_signs(settings, &prepared.data)?,
        chain: &prepared.chain,
        scaling: match settings.scaling {
            Scaling::UnitVariance => task::Scaling::UnitVariance,
            Scaling::AsPrepared => task::Scaling::AsGiven,
        },
        shares: settings.penalty.shares(),
        grouping: match settings.grouping {
            Grouping::Apart => path::Grouping::Apart,
            Grouping::Together => path::Grouping::Together,
        },
        measure: numeric_measure(settings.measure, &prepared.data.response),
        strength: match &settings.strength {
            Strength::ByHand(strength) => StrengthRule::Fixed(strength.get()),
            Strength::Chosen { rule, range, inner } => StrengthRule::Chosen {
                rule: match rule {
                    Rule::LowestError => choose::Rule::LowestError,
                    Rule::OneStandardError => choose::Rule::OneStandardError,
                    Rule::GeneralisedCrossValidation => choose::Rule::GeneralisedCrossValidation,
                    Rule::ExtendedBic { gamma } => choose::Rule::ExtendedBic { gamma: gamma.get() },
                    Rule::Given { strength } => choose::Rule::Given {
                        strength: strength.get(),
                    },
                },
                count: range.count as usize,
                ratio: range.ratio.map(crate::base::real::Real::get),
                inner: parts_params(*inner, settings.seed),
            },
        },
    })
}

/// The measure that these settings describe, for this outcome.
#[must_use]
pub const fn numeric_measure(
    measure: ErrorMeasure,
    response: &Response,
) -> procedure::ErrorMeasure {
    match measure {
        ErrorMeasure::Usual => procedure::ErrorMeasure::usual(response),
        ErrorMeasure::SquaredError => procedure::ErrorMeasure::SquaredError,
        ErrorMeasure::Deviance => procedure::ErrorMeasure::Deviance,
        ErrorMeasure::Misclassification => procedure::ErrorMeasure::Misclassification,
        ErrorMeasure::PartialLikelihood => procedure::ErrorMeasure::PartialLikelihood,
        ErrorMeasure::Concordance => procedure::ErrorMeasure::Concordance,
    }
}

/// The outcome as these settings have it fitted.
///
/// # Errors
/// When strata are asked for and there are none.
pub fn numeric_response(settings: &Fit, data: &Dataset) -> Result<Response, Problem> {
    let mut response = data.response.clone();
    if let Response::Time { ties, .. } = &mut response {
        *ties = match settings.ties {
            Ties::Efron => response::Ties::Efron,
            Ties::Breslow => response::Ties::Breslow,
        };
    }
    stratify(settings, data, &mut response)?;
    Ok(response)
}

/// What a procedure works on, with the outcome as it is fitted.
#[must_use]
pub fn numeric_material<'a>(prepared: &'a Prepared, response: &'a Response) -> Material<'a> {
    Material {
        response,
        ..prepared.material()
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
