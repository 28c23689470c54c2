//! One file per question. A question asks one thing of a fit and answers with facts.

mod agreement;
mod chosen_again;
mod coefficient_trace;
mod error_curve;
mod ladder;
mod least_squares;
mod stand_ins;

use crate::base::work::{Cancelled, Work};
use crate::eval::kind::fit::Fitted;
use crate::eval::kind::{Ended, Inputs, verdict};
use crate::eval::outcome::{Outcome, Verdict};
use crate::numeric::spectrum::ColumnScale;
use crate::study::settings::fit::Scaling;
use crate::study::settings::prepare::Step;
use crate::study::settings::prepare::choice::ScaleRule;
use crate::study::settings::question::{Ask, Question};

/// Evaluates a Question cell.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn evaluate(
    settings: &Question,
    inputs: &Inputs<'_>,
    work: &Work<'_>,
) -> Result<Verdict, Cancelled> {
    verdict(answer(settings, inputs, work))
}

fn answer(settings: &Question, inputs: &Inputs<'_>, work: &Work<'_>) -> Result<Outcome, Ended> {
    let fitted = inputs.fit(settings.fit)?;
    match &settings.ask {
        Ask::LeastSquares => least_squares::answer(&fitted),
        Ask::ErrorCurve => error_curve::answer(&fitted),
        Ask::CoefficientTrace => coefficient_trace::answer(&fitted),
        Ask::Agreement => agreement::answer(&fitted),
        Ask::Ladder { seal } => ladder::answer(&fitted, *seal, inputs.threads, work),
        Ask::ChosenAgain {
            pairs,
            threshold,
            seed,
        } => chosen_again::answer(
            &fitted,
            *pairs,
            threshold.get(),
            *seed,
            inputs.threads,
            work,
        ),
        Ask::StandIns { correlation } => stand_ins::answer(&fitted, correlation.get(), work),
    }
}

/// The prepared columns that can be chosen, rising.
fn active_columns(fitted: &Fitted) -> Vec<usize> {
    let active = &fitted.last.samples.active;
    (0..active.len()).filter(|&column| active[column]).collect()
}

const UNIT_VARIANCE: Step = Step::Scale {
    rule: ScaleRule::UnitVariance,
};

/// On which scale the penalty of a fit acts.
fn scale(fitted: &Fitted) -> ColumnScale {
    let scales = fitted
        .prepared
        .steps
        .iter()
        .rev()
        .take_while(|step| **step == Step::Center || **step == UNIT_VARIANCE);
    let by_steps = scales.into_iter().any(|step| *step == UNIT_VARIANCE);
    match fitted.settings.scaling {
        Scaling::UnitVariance => ColumnScale::UnitVariance,
        Scaling::AsPrepared if by_steps => ColumnScale::UnitVariance,
        Scaling::AsPrepared => ColumnScale::AsGiven,
    }
}
