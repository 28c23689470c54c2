//! How the fit was made, chosen and judged, for the write-up: enough for a stranger to repeat it.

use crate::report::Context;
use crate::report::block::Paragraph;
use crate::report::chain::{Chain, questions_of};
use crate::report::kind::fit::{formula, kind, performed, weights};
use crate::report::noun::{self, Noun};
use crate::report::tell::{Source, Telling};
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::fit::{Fit, Judge, Penalty, Plan, Rule, Scaling, Scheme, Strength};
use crate::study::settings::question::Ask;

/// The paragraphs of the methods.
#[must_use]
pub fn methods(context: &Context<'_>, fit: &Fit, source: &Source<'_>) -> Vec<Paragraph> {
    let chain = Chain::from(context, fit.input);
    let unit = noun::unit(chain.settings());
    let batch = noun::batch(chain.settings());
    let mut telling = Telling::new();
    model(&mut telling, fit, source, &chain, &unit);
    weights::methods(&mut telling, fit, source, &batch);
    choice(
        &mut telling,
        fit,
        source,
        &unit,
        &batch,
        kind(chain.settings()),
    );
    chosen(&mut telling, fit, source, kind(chain.settings()));
    judged(&mut telling, fit, source, &unit, &batch);
    if matches!(fit.judge, Judge::Nested(_)) {
        match kind(chain.settings()) {
            Some(OutcomeKind::YesNo { .. }) => performed::yes_no(&mut telling, source, &unit),
            Some(OutcomeKind::Classes) => performed::classes(&mut telling, source, &unit),
            Some(OutcomeKind::Count { .. }) => performed::counts(&mut telling, source, &unit),
            Some(OutcomeKind::Time { .. }) => performed::times(&mut telling, source, &unit),
            Some(OutcomeKind::Measured) | None => performance(&mut telling, source, &unit),
        }
    }
    weights::careful(&mut telling, kind(chain.settings()), source, &unit);
    solver(&mut telling, source);
    selection(&mut telling, context, fit, source);
    telling.done()
}

fn model(telling: &mut Telling, fit: &Fit, source: &Source<'_>, chain: &Chain<'_>, unit: &Noun) {
    let outcome = chain.outcome();
    let has_units = chain.settings().is_some_and(|data| data.unit.is_some());
    let penalty = match &fit.penalty {
        Penalty::Ridge => "A ridge regression (squared penalty)",
        Penalty::Lasso => "A lasso (absolute penalty)",
        Penalty::ElasticNet { .. } => "An elastic net (absolute and squared penalty)",
    };
    let of_units = if has_units {
        format!(" of {{units}} [{}|{}]", unit.one, unit.many)
    } else {
        String::new()
    };
    telling.say(source.say(
        &format!(
            "{penalty} of “‹0›” on {{predictors}} [predictor|predictors] was fitted to {{samples}} \
             [sample|samples]{of_units}."
        ),
        &[&outcome],
    ));
    let has_covariates = source.is_above_zero("covariates");
    let kind = kind(chain.settings());
    telling.say(formula::objective(fit, kind, source));
    if let Penalty::ElasticNet { shares } = &fit.penalty {
        if shares.len() > 1 {
            telling.say(source.say(
                "The lasso share ⟨s⟩ was chosen together with the strength among {lasso shares \
                 tried} values; {lasso share} was taken.",
                &[],
            ));
        } else {
            telling.say(source.say("The lasso share ⟨s⟩ was {lasso share}.", &[]));
        }
    }
    let is_time = matches!(kind, Some(OutcomeKind::Time { .. }));
    if has_covariates && is_time {
        telling.say(source.say(
            "The coefficients ⟨c⟩ of {covariates} [covariate|covariates] ⟨zᵢ⟩ were not penalised.",
            &[],
        ));
    } else if has_covariates {
        telling.say(source.say(
            "The intercept and the coefficients ⟨c⟩ of {covariates} [covariate|covariates] ⟨zᵢ⟩ \
             were not penalised.",
            &[],
        ));
    } else if !is_time {
        telling.say(Paragraph::of("The intercept was not penalised."));
    }
    let unscaled = if matches!(kind, Some(OutcomeKind::Measured) | None) {
        "; the outcome was not scaled."
    } else {
        "."
    };
    telling.say(
        match fit.scaling {
            Scaling::UnitVariance => Paragraph::of(
                "Each predictor was centred and divided by its standard deviation (divisor ",
            )
            .formula("n")
            .text(") in the training part at hand")
            .text(unscaled),
            Scaling::AsPrepared => Paragraph::of(
                "Each predictor was centred in the training part at hand and kept the scale on \
                 which it arrived",
            )
            .text(unscaled),
        }
        .text(" Coefficients are reported on the scale that the predictors had before."),
    );
    telling.end();
}

fn is_measured(kind: Option<&OutcomeKind>) -> bool {
    matches!(kind, Some(OutcomeKind::Measured) | None)
}

fn choice(
    telling: &mut Telling,
    fit: &Fit,
    source: &Source<'_>,
    unit: &Noun,
    batch: &Noun,
    kind: Option<&OutcomeKind>,
) {
    let (rule, inner) = match &fit.strength {
        Strength::ByHand(_) => {
            telling.say(source.say(
                "The penalty strength was set by hand to {chosen strength}.",
                &[],
            ));
            scalings(telling, source, kind);
            telling.end();
            return;
        }
        Strength::Chosen { rule, inner, .. } => (rule, *inner),
    };
    telling.say(source.say(
        "{strengths tried} strengths were tried, evenly spaced on the logarithmic scale, from \
         {strongest strength} down to {weakest strength}.",
        &[],
    ));
    telling.say(match &fit.penalty {
        Penalty::Ridge => Paragraph::of(
            "For ridge regression the strongest was set from the spectrum of the predictors’ \
             cross-products, so that the coefficients hardly differ from zero there.",
        ),
        Penalty::Lasso | Penalty::ElasticNet { .. } => Paragraph::of(
            "The strongest was the all-zero point: the weakest strength at which every penalised \
             coefficient is zero, found from all samples that the level may see.",
        ),
    });
    if source.has("range extended") {
        telling.say(source.say(
            "The range was extended because the choice had fallen on its end: {range extended}.",
            &[],
        ));
    }
    if rule.needs_parts() {
        telling.say(
            source
                .say(
                    match rule {
                        Rule::Given { .. } => {
                            "Their errors were compared by cross-validation with "
                        }
                        Rule::LowestError
                        | Rule::OneStandardError
                        | Rule::GeneralisedCrossValidation
                        | Rule::ExtendedBic { .. } => {
                            "The strength was chosen by cross-validation with "
                        }
                    },
                    &[],
                )
                .and(plan(source, inner, unit, batch, "inner"))
                .text("."),
        );
    }
    telling.say(match rule {
        Rule::LowestError if is_measured(kind) => {
            Paragraph::of("The strength with the lowest mean squared held-out error was taken.")
        }
        Rule::LowestError => source.say(
            "The strength with the lowest held-out error was taken, measured by the {error measure}.",
            &[],
        ),
        Rule::OneStandardError if is_measured(kind) => Paragraph::of(
            "The strongest penalty whose mean squared held-out error lay within one standard error \
             of the lowest was taken (one-standard-error rule); the standard error is that of the \
             mean over held-out parts.",
        ),
        Rule::OneStandardError => source.say(
            "The strongest penalty whose held-out error, the {error measure}, lay within one standard \
             error of the lowest was taken (one-standard-error rule); the standard error is that of \
             the mean over held-out parts.",
            &[],
        ),
        Rule::GeneralisedCrossValidation => Paragraph::of(
            "The strength with the lowest generalised cross-validation value was taken; this rule \
             needs no held-out parts.",
        ),
        Rule::Given { .. } => source.say(
            "The strength was then set by hand to {chosen strength}.",
            &[],
        ),
        Rule::ExtendedBic { .. } => Paragraph::of(
            "The strength with the lowest extended Bayesian information criterion was taken; this \
             rule needs no held-out parts.",
        ),
    });
    if rule.needs_parts()
        && source
            .facts
            .words("error measure")
            .is_some_and(|words| words.starts_with("partial likelihood"))
    {
        telling.say(Paragraph::of(
            "The held-out partial likelihood is that of Verweij and van Houwelingen: the deviance of \
             all samples of the level less that of the training samples, both at the coefficients of \
             the training samples, over the held-out events.",
        ));
    }
    telling.end();
}

/// How samples came into parts.
fn plan(source: &Source<'_>, plan: Plan, unit: &Noun, batch: &Noun, level: &str) -> Paragraph {
    let drawn = if plan.repeats > 1 {
        format!(", drawn anew {{{level} repeats}} times")
    } else {
        String::new()
    };
    let whole = |unit: &Noun| {
        if unit.one == "sample" {
            "samples".to_owned()
        } else {
            format!("whole {}", unit.many)
        }
    };
    let pattern = match plan.scheme {
        Scheme::Units => format!(
            "{{{level} parts}} {level} parts of {} at random{drawn}",
            whole(unit)
        ),
        Scheme::Balanced => format!(
            "{{{level} parts}} {level} parts of {} at random, balanced by the outcome{drawn}",
            whole(unit)
        ),
        // These schemes fix the number of parts, whatever number is written down.
        Scheme::WholeBatches => format!("each {} held out in turn as an {level} part", batch.one),
        Scheme::LeaveOneUnitOut => {
            format!("each {} held out in turn as an {level} part", unit.one)
        }
        Scheme::Blocks => format!(
            "{{{level} parts}} {level} parts of {} that follow each other in order of measurement",
            unit.many
        ),
    };
    source.say(&pattern, &[])
}

fn scalings(telling: &mut Telling, source: &Source<'_>, kind: Option<&OutcomeKind>) {
    match kind {
        Some(OutcomeKind::YesNo { .. } | OutcomeKind::Classes | OutcomeKind::Count { .. }) => {
            telling.say(source.say(
                "In other scalings of the objective this is ⟨nλ⟩ = {strength times n} (loss: minus \
                 the log likelihood), ⟨2nλ⟩ = {strength times 2n} (loss: the deviance) and ⟨1/(nλ)⟩ = \
                 {inverse strength} (inverse form).",
                &[],
            ));
            return;
        }
        Some(OutcomeKind::Time { .. }) => {
            telling.say(source.say(
                "In other scalings of the objective this is ⟨nλ⟩ = {strength times n} (loss: minus \
                 the log partial likelihood), ⟨2λ⟩ = {strength times 2} (that times ⟨2/n⟩) and \
                 ⟨1/(nλ)⟩ = {inverse strength} (inverse form).",
                &[],
            ));
            return;
        }
        Some(OutcomeKind::Measured) | None => {}
    }
    telling.say(source.say(
        "In other scalings of the objective this is ⟨nλ⟩ = {strength times n} (loss ⟨½ Σ⟩), \
         ⟨2nλ⟩ = {strength times 2n} (loss ⟨Σ⟩) and ⟨1/(nλ)⟩ = {inverse strength} (inverse form).",
        &[],
    ));
}

fn chosen(telling: &mut Telling, fit: &Fit, source: &Source<'_>, kind: Option<&OutcomeKind>) {
    if fit.strength.is_by_hand() {
        if let Strength::Chosen { .. } = fit.strength {
            scalings(telling, source, kind);
            telling.end();
        }
        return;
    }
    telling.say(source.say(
        "With all samples the chosen strength was {chosen strength}, number {strength position} \
         of those tried, counted from the strongest.",
        &[],
    ));
    scalings(telling, source, kind);
    if source.has("range cut") {
        telling.say(source.say("The range was cut short {range cut}.", &[]));
    }
    if source.facts.words("strength at edge") == Some("yes") {
        telling.say(Paragraph::of(
            "It lay at the end of the range tried, so that a better one may lie outside.",
        ));
    }
    if matches!(fit.judge, Judge::Nested(_)) {
        telling.say(source.say(
            "Over the outer training parts the chosen strength had the median {outer strength \
             median} and the quartiles {outer strength lower quartile} and {outer strength upper \
             quartile}.",
            &[],
        ));
    }
    telling.end();
}

fn judged(telling: &mut Telling, fit: &Fit, source: &Source<'_>, unit: &Noun, batch: &Noun) {
    let Judge::Nested(outer) = fit.judge else {
        telling.say(Paragraph::of(
            "The procedure was not judged on samples that it had not seen. The error that chose \
             the strength flatters the model and is not given as its performance.",
        ));
        seed(telling, source);
        telling.end();
        return;
    };
    let is_by_hand = fit.strength.is_by_hand();
    telling.say(
        Paragraph::of(if is_by_hand {
            "The whole procedure was judged by cross-validation with "
        } else {
            "The whole procedure, choice of strength included, was judged by nested \
             cross-validation with "
        })
        .and(plan(source, outer, unit, batch, "outer"))
        .text("."),
    );
    telling.say(Paragraph::of(format!(
        "The plan of parts divides no {} at either level.",
        unit.one
    )));
    // The claim is made only where the run-time check has found nothing against it.
    let holds = source.value("proof violations") == Some(0.0)
        && source.facts.words("judged") == Some("nested cross-validation");
    if holds {
        telling.say(Paragraph::of(if is_by_hand {
            "All learned steps were repeated within each outer training part."
        } else {
            "All learned steps and the choice of strength were repeated within each outer training \
             part."
        }));
        telling.say(source.say(
            "A check at run time of {learned steps checked} learned [step|steps] in {fits checked} \
             [fit|fits] found none that had been learnt from a held-out sample.",
            &[],
        ));
    }
    seed(telling, source);
    telling.end();
}

fn seed(telling: &mut Telling, source: &Source<'_>) {
    telling.say(source.say(
        "Everything that was drawn at random followed from the seed {seed}; the assignment of \
         samples to parts is kept in the study.",
        &[],
    ));
}

fn performance(telling: &mut Telling, source: &Source<'_>, unit: &Noun) {
    let spread = if source.has("nested rmse spread") {
        " (standard deviation over repeats {nested rmse spread})"
    } else {
        ""
    };
    telling.say(source.say(
        &format!(
            "On held-out samples the root mean squared error was {{nested rmse}}{spread} and the \
             mean absolute error {{nested mae}}, over all samples of a repeat and averaged over \
             repeats."
        ),
        &[],
    ));
    telling.say(source.say(
        "⟨R²⟩ was {nested r²}, defined as ⟨1 − SSE/SST⟩: the squared errors of held-out predictions \
         over the squared deviations of the outcome from the mean of the samples analysed.",
        &[],
    ));
    if source.has("nested rmse low") && source.has("nested rmse high") {
        telling.say(source.say(
            &format!(
                "The ⟨95 %⟩ interval for the root mean squared error, over {}, runs from {{nested rmse \
                 low}} to {{nested rmse high}}",
                unit.many
            ),
            &[],
        )
        .and(if source.has("nested r² low") && source.has("nested r² high") {
            source.say(", that for ⟨R²⟩ from {nested r² low} to {nested r² high}", &[])
        } else {
            Paragraph::new()
        })
        .text(
            "; it describes the procedure on studies of this size, not the final fitted model \
             itself.",
        ));
    }
    if source.has("nested slope") {
        telling.say(source.say(
            "The slope of observed on predicted values was {nested slope}, the average difference \
             (predicted minus observed) {nested bias}.",
            &[],
        ));
    }
    telling.say(source.say(
        "Predicting the mean of the training part for every sample gave an error of {mean-only \
         rmse} in the same parts.",
        &[],
    ));
    if source.has("improvement low") && source.has("improvement high") {
        telling.say(source.say(
            "The squared error of the fit was lower by {improvement over the mean} (paired \
             interval from {improvement low} to {improvement high}).",
            &[],
        ));
    }
    telling.say(source.say(
        "On its own training samples the final fit reached an apparent ⟨R²⟩ of {apparent r²}; the \
         optimism (apparent minus nested) was {optimism}.",
        &[],
    ));
    telling.end();
}

fn solver(telling: &mut Telling, source: &Source<'_>) {
    telling.say(source.say(
        "Every solution carries a certificate, a bound on how far its objective can lie above the \
         lowest possible one: the worst of {solutions} solutions was {worst gap}, with {solver \
         tolerance} asked for.",
        &[],
    ));
    if source.is_above_zero("unsettled solutions") {
        telling.say(source.say(
            "{unsettled solutions} [solution|solutions] had not settled to that.",
            &[],
        ));
    }
    telling.end();
}

fn selection(telling: &mut Telling, context: &Context<'_>, fit: &Fit, source: &Source<'_>) {
    if matches!(fit.penalty, Penalty::Ridge) {
        telling.say(source.say(
            "Ridge regression keeps every predictor; at the chosen strength the model had \
             {effective degrees of freedom} effective degrees of freedom.",
            &[],
        ));
        telling.end();
        return;
    }
    telling.say(source.say(
        "The final fit chose {chosen predictors} [predictor|predictors].",
        &[],
    ));
    if matches!(fit.judge, Judge::Nested(_)) {
        telling.say(source.say(
            "Over the outer training parts the number chosen had the median {chosen predictors \
             outer median} and lay between {chosen predictors outer least} and {chosen predictors \
             outer most}.",
            &[],
        ));
    }
    if !is_asked_again(context, source) {
        telling.say(Paragraph::of(
            "How often these predictors would be chosen again was not examined.",
        ));
    }
    telling.end();
}

/// Whether a question asks if the same predictors would be chosen again.
fn is_asked_again(context: &Context<'_>, source: &Source<'_>) -> bool {
    questions_of(context, source.cell)
        .any(|(_, question)| matches!(question.ask, Ask::ChosenAgain { .. }))
}
