//! Remarks on preparation steps: their order, and what they cannot do.
//!
//! Order rules of spectral and general preparation (Rinnan, van den Berg & Engelsen 2009 for
//! spectra; a convention of this program elsewhere): physics of the sample first, learned
//! references next, imputation before scaling, centring and scaling last.

use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::eval::kind::prepare::Prepared;
use crate::eval::kind::step::step_name;
use crate::numeric::step::{OrderRule, order_remarks};
use crate::study::settings::prepare::Step;

/// The remarks on the steps of a cell.
#[must_use]
pub fn caveats(prepared: &Prepared) -> Vec<Caveat> {
    [
        unusual_order(prepared),
        without_axis(prepared),
        new_batches(&prepared.steps),
    ]
    .into_iter()
    .flatten()
    .collect()
}

fn unusual_order(prepared: &Prepared) -> Option<Caveat> {
    let steps = &prepared.steps;
    // Averaging is computed apart; what stands on its two sides is one list for the rules.
    let places: Vec<usize> = (0..steps.len())
        .filter(|&at| steps[at] != Step::AverageUnits)
        .collect();
    let computed: Vec<_> = prepared
        .before_averaging
        .iter()
        .flat_map(|chain| chain.steps())
        .chain(prepared.chain.steps())
        .cloned()
        .collect();
    let remarks: Vec<String> = order_remarks(&computed)
        .into_iter()
        .map(|remark| {
            let (first, second) = (places[remark.first], places[remark.second]);
            format!(
                "“{}” (step {}) comes after “{}” (step {}): {}",
                step_name(&steps[second]),
                second + 1,
                step_name(&steps[first]),
                first + 1,
                reason(remark.rule)
            )
        })
        .collect();
    if remarks.is_empty() {
        return None;
    }
    Some(Caveat {
        id: "step-order".to_owned(),
        severity: Severity::Caution,
        heading: "Unusual order of steps".to_owned(),
        text: format!("{}.", remarks.join("; ")),
        trigger: vec![(
            "pairs of steps out of order".to_owned(),
            remarks.len().to_string(),
        )],
        threshold: String::new(),
        origin: Origin::Convention,
    })
}

/// Why an order is unusual, as the end of a sentence.
const fn reason(rule: OrderRule) -> &'static str {
    match rule {
        OrderRule::LogAfterCentering => "about half of centred values have no logarithm or power",
        OrderRule::DerivativeAfterScaling => {
            "neighbouring predictors are no longer on one scale, so that differences between them \
             mean nothing"
        }
        OrderRule::RowCorrectionAfterScaling => {
            "the sample’s own shape is gone once predictors are scaled one by one"
        }
        OrderRule::SameFamilyTwice => {
            "both take away the same thing; the second finds nothing left, or undoes the first"
        }
        OrderRule::LimitsAfterChange => {
            "a limit belongs to the measured scale, and is forgotten or wrong after a change"
        }
        OrderRule::ImputationAfterScaling => {
            "means and standard deviations were taken before the gaps were filled"
        }
        OrderRule::MissingFilterAfterImputation => "nothing is missing any more",
        OrderRule::AbsorbanceAfterCorrection => {
            "absorbance belongs to the values as they were measured"
        }
        OrderRule::SpikesAfterSmoothing => "spikes have been spread over their neighbours by then",
        OrderRule::AxisAfterDerivative => "the derivatives were taken on the old axis",
        OrderRule::NormalisationAfterLog => "a sum of logarithms is no total",
        OrderRule::TotalAfterQuotient => "the dilution that the quotients took out is put back",
        OrderRule::AlongAxisAfterScores => "scores have no axis",
        OrderRule::DriftAfterScaling => "the means and scales that were set are changed again",
        OrderRule::CutAfterCorrection => {
            "what is left out has already shaped the correction of each sample"
        }
    }
}

/// Steps along the predictors take their order in the table for an axis where there is none.
fn without_axis(prepared: &Prepared) -> Option<Caveat> {
    if prepared.measured.samples.axis.is_some() {
        return None;
    }
    let along: Vec<String> = prepared
        .steps
        .iter()
        .filter(|step| {
            matches!(
                step,
                Step::SavitzkyGolay { .. }
                    | Step::Detrend { .. }
                    | Step::Baseline { .. }
                    | Step::SpikeRemoval { .. }
                    | Step::ExtendedScatterCorrection { .. }
                    | Step::CutRegions { .. }
            )
        })
        .map(|step| format!("“{}”", step_name(step)))
        .collect();
    if along.is_empty() {
        return None;
    }
    Some(Caveat {
        id: "step-without-axis".to_owned(),
        severity: Severity::Caution,
        heading: "No axis to work along".to_owned(),
        text: format!(
            "The names of the predictors give no numeric axis. {} {} them as evenly spaced in the \
             order of the table; that is right only if neighbours in the table are neighbours in \
             what was measured.",
            along.join(", "),
            if along.len() == 1 { "takes" } else { "take" }
        ),
        trigger: vec![("steps along an axis".to_owned(), along.len().to_string())],
        threshold: String::new(),
        origin: Origin::Convention,
    })
}

/// Batch centring cannot reach a batch that no training part has seen.
fn new_batches(steps: &[Step]) -> Option<Caveat> {
    if !steps.contains(&Step::BatchCentering) {
        return None;
    }
    Some(Caveat {
        id: "batch-centring-limits".to_owned(),
        severity: Severity::Note,
        heading: "What batch centring cannot do".to_owned(),
        text: "A batch that no training sample belongs to keeps its level, so this step does \
               nothing for new batches or where whole batches are held out. Where batch and outcome \
               go together it takes signal away and leaves bias behind."
            .to_owned(),
        trigger: vec![("batch centring".to_owned(), "yes".to_owned())],
        threshold: String::new(),
        origin: Origin::Published,
    })
}
