//! The remarks on a fit, gathered from its rules.

use crate::eval::caveat::{
    Caveat, calibration_slope, censoring, declined_judgement, few_events, few_units, flat_curve,
    health, interval_is_about_the_procedure, leave_one_out, list_as_long, no_better_than_the_mean,
    not_settled, one_standard_error, optimism, pooled_pairs, separation, shrunken_weights,
    strength_at_edge, strength_unstable, too_good, wide_interval,
};
use crate::eval::fact::Facts;
use crate::eval::kind::fit::{Fitted, Sort};
use crate::study::settings::fit::{Judge, Rule, Scheme, Strength};

/// All remarks on a fit, the gravest first.
#[must_use]
pub fn caveats(fitted: &Fitted, facts: &Facts) -> Vec<Caveat> {
    let data = &fitted.prepared.data;
    let value = |name: &str| facts.value(name).unwrap_or(f64::NAN);
    let chosen = fitted.chosen().len();
    let sort = fitted.sort();
    let main = sort.main();
    let named = |which: &str| value(&format!("{which} {}", main.name()));
    let mut found = vec![
        few_units::check(data.count_units(&data.analysed)),
        few_events::check(fitted),
        few_events::imbalance(fitted),
        few_events::small_parts(fitted),
        separation::check(fitted),
        pooled_pairs::check(facts),
        censoring::check(fitted),
        strength_at_edge::check(fitted),
        flat_curve::check(fitted),
        strength_unstable::check(fitted),
        list_as_long::check(fitted.last.share, chosen, data.analysed.len()),
        not_settled::check(fitted.tally.unsettled, fitted.tally.worst_gap),
        health::check(data.subject),
        Some(shrunken_weights::always()),
    ];
    let (mut one_se, mut one_out) = (false, false);
    if let Strength::Chosen { rule, inner, .. } = &fitted.settings.strength {
        one_se = *rule == Rule::OneStandardError;
        one_out |= rule.needs_parts() && inner.scheme == Scheme::LeaveOneUnitOut;
    }
    match fitted.settings.judge {
        Judge::Declined => found.push(Some(declined_judgement::always())),
        Judge::Nested(plan) => {
            one_out |= plan.scheme == Scheme::LeaveOneUnitOut;
            found.push(Some(interval_is_about_the_procedure::always()));
            let ratio = if sort == Sort::Measured {
                value("nested rmse") / value("apparent rmse")
            } else {
                f64::NAN
            };
            found.push(optimism::check(
                main,
                named("apparent"),
                named("nested"),
                ratio,
            ));
            let improvement = match sort {
                Sort::Measured => value("improvement over the mean"),
                Sort::YesNo | Sort::Classes | Sort::Count | Sort::Time => {
                    value("improvement over the baseline")
                }
            };
            found.push(no_better_than_the_mean::check(
                sort,
                improvement,
                value("improvement low"),
            ));
            let ends = |end: &str| value(&format!("nested {} {end}", main.name()));
            found.push(wide_interval::check(main, ends("low"), ends("high")));
            if sort != Sort::Measured {
                // Its interval stands with the question that looks closer.
                found.push(calibration_slope::check(
                    value("nested calibration slope"),
                    f64::NAN,
                ));
            }
            found.push(too_good::check(
                main,
                named("nested"),
                value("nested rmse"),
                data.outcome.reference_error,
                &data.outcome.unit,
            ));
        }
    }
    found.push(one_se.then(one_standard_error::always));
    found.push(one_out.then(leave_one_out::always));
    let mut caveats: Vec<Caveat> = found.into_iter().flatten().collect();
    caveats.sort_by_key(|caveat| std::cmp::Reverse(caveat.severity));
    caveats
}
