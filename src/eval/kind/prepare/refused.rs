//! Orders of steps that mean nothing, and are refused with the reason.

use crate::base::problem::Problem;
use crate::eval::kind::step::step_name;
use crate::study::settings::prepare::{Step, StepClass};

/// The first order that is refused.
#[must_use]
pub fn order(steps: &[Step]) -> Option<Problem> {
    let pairs = (0..steps.len()).flat_map(|later| (0..later).map(move |earlier| (earlier, later)));
    pairs.into_iter().find_map(|(earlier, later)| {
        let reason = reason(&steps[earlier], &steps[later])?;
        Some(
            Problem::new(
                "step-order-refused",
                format!(
                    "Step {} ({}) cannot come after step {} ({}): {}.",
                    later + 1,
                    step_name(&steps[later]),
                    earlier + 1,
                    step_name(&steps[earlier]),
                    reason
                ),
            )
            .mend("Change their places in the list of steps, or take one of them off it."),
        )
    })
}

/// Why `later` cannot come after `earlier`, if so.
fn reason(earlier: &Step, later: &Step) -> Option<&'static str> {
    let averages = *later == Step::AverageUnits;
    if averages && *earlier == Step::AverageUnits {
        return Some("there is one sample of each unit by then");
    }
    if averages
        && matches!(
            earlier.class(),
            StepClass::Learned | StepClass::LearnedWithOutcome
        )
    {
        return Some(
            "what is learnt belongs to one training part, and averaging changes the samples of all \
             parts alike",
        );
    }
    let scores = matches!(earlier, Step::PrincipalScores { .. });
    let along_axis = matches!(
        later,
        Step::CommonAxis { .. }
            | Step::CutRegions { .. }
            | Step::SpikeRemoval { .. }
            | Step::SavitzkyGolay { .. }
            | Step::Detrend { .. }
            | Step::Baseline { .. }
            | Step::ScatterCorrection { .. }
            | Step::ExtendedScatterCorrection { .. }
    );
    if scores && along_axis {
        return Some("scores have no axis and no neighbours");
    }
    if scores && matches!(later, Step::PrincipalScores { .. }) {
        return Some("scores of scores are the same scores");
    }
    if scores
        && matches!(
            later,
            Step::MinorAlleleFilter { .. } | Step::CallRateFilter { .. }
        )
    {
        return Some("scores are no allele counts");
    }
    if later_needs_limits(later) && scores {
        return Some("scores have no limits");
    }
    None
}

fn later_needs_limits(later: &Step) -> bool {
    matches!(later, Step::BelowLimit { .. })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn averaging_after_a_learned_step_is_refused_and_before_it_is_not() {
        let refused = order(&[Step::Center, Step::AverageUnits]).expect("refused");
        assert!(refused.found.contains("step 1 (centring)"), "{refused}");
        assert!(refused.found.contains("training part"), "{refused}");
        assert_eq!(order(&[Step::AverageUnits, Step::Center]), None);
        assert!(order(&[Step::AverageUnits, Step::AverageUnits]).is_some());
    }

    #[test]
    fn a_derivative_of_scores_is_refused_and_scores_of_a_derivative_are_not() {
        let scores = Step::PrincipalScores { components: 3 };
        let derivative = Step::SavitzkyGolay {
            window: 5,
            degree: 2,
            derivative: 1,
        };
        assert!(order(&[scores.clone(), derivative.clone()]).is_some());
        assert_eq!(order(&[derivative, scores]), None);
    }
}
