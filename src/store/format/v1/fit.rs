//! A Fit cell in format 1.

use crate::base::real::Real;
use crate::store::format::place::{At, Fault, Fields};
use crate::store::format::v1::{DRAWS_ON, Group, Reading, Writing, read_link};
use crate::store::format::v1::{weights, words};
use crate::study::settings::fit::{
    ErrorMeasure, Fit, Grouping, Judge, Penalty, PenaltyRange, Plan, Rule, Scaling, Scheme,
    Strength, Ties,
};
use crate::study::settings::weights::{Interval, Strata};
use serde_json::Value;

// What an absent field means, fixed for format 1 for ever: the usual choices of a later version
// of the program must not change what an old file says.
const SEED: u64 = 20_260_301;
const STRENGTHS: u32 = 100;
const INNER: Plan = Plan {
    scheme: Scheme::Units,
    parts: 10,
    repeats: 5,
};
const OUTER: Plan = Plan {
    scheme: Scheme::Units,
    parts: 5,
    repeats: 10,
};
const GAMMA: Real = Real::constant(0.5);

/// Reads the settings of a Fit cell.
///
/// # Errors
/// The first [`Fault`].
pub fn read(fields: &mut Fields<'_>, reading: &Reading<'_>) -> Result<Fit, Fault> {
    Ok(Fit {
        input: read_link(fields, reading)?,
        penalty: read_penalty(fields)?,
        scaling: fields
            .read("scaling", |at| at.one_of(words::SCALINGS))?
            .unwrap_or(Scaling::UnitVariance),
        grouping: fields
            .read("classes", |at| at.one_of(words::GROUPINGS))?
            .unwrap_or(Grouping::Apart),
        ties: fields
            .read("ties", |at| at.one_of(words::TIES))?
            .unwrap_or(Ties::Efron),
        measure: fields
            .read("error-measure", |at| at.one_of(words::ERROR_MEASURES))?
            .unwrap_or(ErrorMeasure::Usual),
        weighting: weights::read_weighting(fields)?,
        signs: weights::read_signs(fields)?,
        strata: fields
            .read("strata", |at| at.one_of(words::STRATA))?
            .unwrap_or(Strata::None),
        interval: fields
            .read("interval", |at| at.one_of(words::INTERVALS))?
            .unwrap_or(Interval::OverUnits),
        strength: read_strength(fields)?,
        judge: read_judge(fields)?,
        seed: fields.read("seed", |at| at.whole())?.unwrap_or(SEED),
    })
}

/// Writes the settings of a Fit cell, all of them.
pub fn write(fit: &Fit, group: &mut Group, writing: &Writing<'_>) {
    group.put_some(DRAWS_ON, fit.input.0.map(writing.link));
    match &fit.penalty {
        Penalty::Ridge => group.put("penalty", "ridge"),
        Penalty::Lasso => group.put("penalty", "lasso"),
        Penalty::ElasticNet { shares } => {
            group.put("penalty", "elastic-net");
            let shares: Vec<_> = shares.iter().map(|share| share.get()).collect();
            group.put("lasso-shares", shares);
        }
    }
    group.put("scaling", words::scaling(fit.scaling));
    // Later additions: written only where they are not the usual ones.
    if fit.grouping != Grouping::Apart {
        group.put("classes", words::grouping(fit.grouping));
    }
    if fit.ties != Ties::Efron {
        group.put("ties", words::ties(fit.ties));
    }
    if fit.measure != ErrorMeasure::Usual {
        group.put("error-measure", words::error_measure(fit.measure));
    }
    weights::write(&fit.weighting, &fit.signs, group);
    if fit.strata != Strata::None {
        group.put("strata", words::strata(fit.strata));
    }
    if fit.interval != Interval::OverUnits {
        group.put("interval", words::interval(fit.interval));
    }
    match &fit.strength {
        Strength::ByHand(strength) => group.put("strength", strength.get()),
        Strength::Chosen { rule, range, inner } => {
            let mut choose = Group::default();
            match rule {
                Rule::LowestError => choose.put("rule", "lowest-error"),
                Rule::OneStandardError => choose.put("rule", "one-standard-error"),
                Rule::GeneralisedCrossValidation => {
                    choose.put("rule", "generalised-cross-validation");
                }
                Rule::ExtendedBic { gamma } => {
                    choose.put("rule", "extended-bic");
                    choose.put("gamma", gamma.get());
                }
                Rule::Given { strength } => {
                    choose.put("rule", "by-hand");
                    choose.put("strength", strength.get());
                }
            }
            choose.put("strengths", range.count);
            choose.put_some("weakest-share", range.ratio.map(|ratio| ratio.get()));
            choose.put("inner", write_plan(*inner));
            group.put("choose", choose.value());
        }
    }
    match &fit.judge {
        Judge::Nested(outer) => group.put("judge", write_plan(*outer)),
        Judge::Declined => group.put("judge", "declined"),
    }
    group.put("seed", fit.seed);
}

fn read_penalty(fields: &mut Fields<'_>) -> Result<Penalty, Fault> {
    let Some(at) = fields.get("penalty") else {
        return Ok(Penalty::Lasso);
    };
    match at.text()?.as_str() {
        "ridge" => Ok(Penalty::Ridge),
        "lasso" => Ok(Penalty::Lasso),
        "elastic-net" => Ok(Penalty::ElasticNet {
            shares: fields.need("lasso-shares")?.each(|share| share.real())?,
        }),
        _ => Err(at.not_among(&["ridge", "lasso", "elastic-net"])),
    }
}

fn read_strength(fields: &mut Fields<'_>) -> Result<Strength, Fault> {
    let choose = fields.get("choose");
    if let Some(at) = fields.get("strength") {
        if choose.is_some() {
            return Err(at.fault(
                "The strength is set by hand here and chosen by a rule beside.",
                "Leave out either “strength” or “choose”.",
            ));
        }
        return Ok(Strength::ByHand(at.real()?));
    }
    let mut rule = Rule::LowestError;
    let mut range = PenaltyRange {
        count: STRENGTHS,
        ratio: None,
    };
    let mut inner = INNER;
    if let Some(at) = choose {
        let mut fields = at.fields()?;
        if let Some(at) = fields.get("rule") {
            rule = read_rule(&at, &mut fields)?;
        }
        range.count = fields
            .read("strengths", |at| at.count())?
            .unwrap_or(STRENGTHS);
        range.ratio = fields.read("weakest-share", |at| at.real())?;
        inner = fields
            .read("inner", |at| read_plan(&at, INNER))?
            .unwrap_or(INNER);
        fields.done();
    }
    Ok(Strength::Chosen { rule, range, inner })
}

fn read_rule(at: &At<'_>, fields: &mut Fields<'_>) -> Result<Rule, Fault> {
    match at.text()?.as_str() {
        "lowest-error" => Ok(Rule::LowestError),
        "one-standard-error" => Ok(Rule::OneStandardError),
        "generalised-cross-validation" => Ok(Rule::GeneralisedCrossValidation),
        "extended-bic" => Ok(Rule::ExtendedBic {
            gamma: fields.read("gamma", |at| at.real())?.unwrap_or(GAMMA),
        }),
        "by-hand" => Ok(Rule::Given {
            strength: fields.need("strength")?.real()?,
        }),
        _ => Err(at.not_among(&[
            "lowest-error",
            "one-standard-error",
            "generalised-cross-validation",
            "extended-bic",
            "by-hand",
        ])),
    }
}

fn read_judge(fields: &mut Fields<'_>) -> Result<Judge, Fault> {
    match fields.get("judge") {
        None => Ok(Judge::Nested(OUTER)),
        Some(at) if at.value().is_string() => at.one_of(&[("declined", Judge::Declined)]),
        Some(at) => Ok(Judge::Nested(read_plan(&at, OUTER)?)),
    }
}

fn read_plan(at: &At<'_>, absent: Plan) -> Result<Plan, Fault> {
    let mut fields = at.fields()?;
    let scheme = fields.read("scheme", |at| at.one_of(words::SCHEMES))?;
    let plan = Plan {
        scheme: scheme.unwrap_or(absent.scheme),
        parts: fields
            .read("parts", |at| at.count())?
            .unwrap_or(absent.parts),
        repeats: fields
            .read("repeats", |at| at.count())?
            .unwrap_or(absent.repeats),
    };
    fields.done();
    Ok(plan)
}

fn write_plan(plan: Plan) -> Value {
    let mut group = Group::default();
    group.put("scheme", words::scheme(plan.scheme));
    group.put("parts", plan.parts);
    group.put("repeats", plan.repeats);
    group.value()
}
