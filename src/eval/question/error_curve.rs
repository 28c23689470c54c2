//! How does the error change with the penalty, and how firmly is the strength chosen?

use crate::base::number::Precision;
use crate::base::problem::Problem;
use crate::eval::caveat::{flat_curve, strength_at_edge, strength_unstable};
use crate::eval::fact::{Fact, Facts};
use crate::eval::kind::Ended;
use crate::eval::kind::fit::{
    Fitted, Sort, curve_error, curve_unit, error_curve, measure_words, outer_choices,
};
use crate::eval::outcome::{Gives, Outcome};
use crate::numeric::choose::{self, Rule};
use crate::numeric::measure::quantile;

/// Answers from the inner parts of the final fit and the choices of the outer training parts.
pub fn answer(fitted: &Fitted) -> Result<Outcome, Ended> {
    let last = &fitted.last;
    let Some(curve) = last.curves.get(last.share_at) else {
        return Err(Problem::new(
            "strength-by-hand",
            "The penalty strength was set by hand, so there is no curve of errors.",
        )
        .mend("Let the fit choose the strength by a rule.")
        .into());
    };
    let (unit, digits) = curve_unit(fitted);
    let strength = Precision::Significant(3);
    let mut facts = Facts::new();
    facts.push(Fact::number(
        "chosen strength",
        last.strength,
        "",
        strength,
        "The penalty strength of the final fit.",
    ));
    let lowest = choose::lowest(&curve.errors);
    if let (Some(at), false) = (lowest, curve.standard_errors.is_empty()) {
        let (error, standard_error) =
            curve_error(fitted, curve.errors[at], curve.standard_errors[at]);
        let root = if fitted.sort() == Sort::Measured {
            "root of the "
        } else {
            ""
        };
        facts.push(Fact::text(
            "error measure",
            measure_words(fitted),
            "What was compared between strengths on the inner held-out parts.",
        ));
        facts.push(Fact::number(
            "lowest error",
            error,
            &unit,
            digits,
            &format!(
                "The lowest error in the inner parts ({root}{}).",
                measure_words(fitted)
            ),
        ));
        facts.push(Fact::number(
            "lowest error standard error",
            standard_error,
            &unit,
            digits,
            "Its standard error over the parts of a repeat.",
        ));
        if let Some(one) = choose::pick(Rule::OneStandardError, curve) {
            facts.push(Fact::number(
                "one-standard-error strength",
                curve.strengths[one],
                "",
                strength,
                "The largest strength whose error is within one standard error of the lowest.",
            ));
        }
        facts.push(Fact::text(
            "flat",
            if flat_curve::is_flat(fitted, curve) {
                "yes"
            } else {
                "no"
            },
            "Whether hardly any strength does better than the strongest.",
        ));
        if let Some(gain) = flat_curve::deviance_gained(fitted, curve) {
            facts.push(Fact::number(
                "deviance gained",
                gain,
                "",
                Precision::Decimals(1),
                "How much smaller the cross-validated deviance of the partial likelihood is than at the strongest penalty, over all events.",
            ));
        } else {
            facts.push(Fact::number(
                "curve improvement",
                1.0 - curve.errors[at] / curve.errors[0],
                "",
                Precision::Percent(0),
                &format!(
                    "How much smaller the lowest {} is than that of the strongest penalty.",
                    measure_words(fitted)
                ),
            ));
            facts.push(Fact::number(
                "standard errors below the strongest",
                (curve.errors[0] - curve.errors[at]) / curve.standard_errors[at],
                "",
                Precision::Decimals(1),
                "How many standard errors the lowest error lies below that of the strongest penalty.",
            ));
        }
    }
    if let Some(judged) = &fitted.judged {
        let strengths: Vec<f64> = judged
            .held_out
            .fits
            .iter()
            .map(|fit| fit.strength)
            .collect();
        let chosen: Vec<f64> = judged
            .held_out
            .fits
            .iter()
            .map(|fit| fit.n_chosen as f64)
            .collect();
        let at = |share: f64| quantile(&strengths, share);
        let edge = judged
            .held_out
            .fits
            .iter()
            .filter(|fit| fit.at_edge)
            .count() as f64
            / strengths.len() as f64;
        let mut push = |name: &str, value: f64, precision: Precision, meaning: &str| {
            facts.push(Fact::number(name, value, "", precision, meaning));
        };
        push(
            "strength least",
            at(0.0),
            strength,
            "The smallest strength chosen in an outer training part.",
        );
        push(
            "strength most",
            at(1.0),
            strength,
            "The largest strength chosen in an outer training part.",
        );
        push(
            "strength log10 interquartile range",
            at(0.75).log10() - at(0.25).log10(),
            Precision::Decimals(2),
            "How many powers of ten the middle half of the chosen strengths spans.",
        );
        push(
            "share of outer fits at the edge",
            edge,
            Precision::Percent(0),
            "In how many outer training parts the chosen strength lay at an end of the range.",
        );
        push(
            "fewest chosen predictors",
            quantile(&chosen, 0.0),
            Precision::Whole,
            "The smallest number of predictors chosen in an outer training part.",
        );
        push(
            "most chosen predictors",
            quantile(&chosen, 1.0),
            Precision::Whole,
            "The largest number of predictors chosen in an outer training part.",
        );
    }
    facts.push(error_curve(fitted, curve));
    if let Some(judged) = &fitted.judged {
        facts.push(outer_choices(fitted, judged));
    }
    let caveats = [
        strength_at_edge::check(fitted),
        flat_curve::check(fitted),
        strength_unstable::check(fitted),
    ];
    Ok(Outcome {
        gives: Gives::Facts,
        facts,
        caveats: caveats.into_iter().flatten().collect(),
    })
}
