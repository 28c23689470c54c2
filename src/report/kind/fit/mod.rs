//! What a Fit cell has to say.

pub mod answer;
mod formula;
pub mod methods;
mod performed;
pub mod weights;

use crate::report::Context;
use crate::report::chain::Chain;
use crate::report::noun::{self, Noun};
use crate::report::sentence::{Editor, Sentence};
use crate::report::word;
use crate::study::settings::data::{Data, OutcomeKind};
use crate::study::settings::fit::{
    ErrorMeasure, Fit, Grouping, Judge, Penalty, Plan, Rule, Scaling, Scheme, Strength, Ties,
};
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::fit::FitSlot;

const PENALTIES: [(&str, &str); 3] = [
    ("ridge", "ridge regression"),
    ("lasso", "lasso"),
    ("elastic-net", "elastic net"),
];
const SCALINGS: [(&str, &str); 2] = [
    (
        "unit-variance",
        "predictors divided by their standard deviation",
    ),
    (
        "as-prepared",
        "predictors on the scale on which they arrive",
    ),
];
const WAYS: [(&str, &str); 5] = [
    ("lowest-error", "lowest error"),
    (
        "one-se",
        "strongest penalty within one standard error of the lowest error",
    ),
    ("gcv", "lowest generalised cross-validation value"),
    ("ebic", "lowest extended Bayesian information criterion"),
    ("by-hand", "by hand"),
];
const GROUPINGS: [(&str, &str); 2] = [
    ("apart", "in each class by itself"),
    (
        "together",
        "in all classes together, so that it is in or out as a whole",
    ),
];
const TIES: [(&str, &str); 2] = [("efron", "after Efron"), ("breslow", "after Breslow")];
const JUDGINGS: [(&str, &str); 2] = [("nested", "Judge"), ("not-judged", "Do not judge")];

/// The words of the study that sentences about a fit need.
struct Words {
    unit: Noun,
    batch: Noun,
}

impl Words {
    fn of(data: Option<&Data>) -> Self {
        Self {
            unit: noun::unit(data),
            batch: noun::batch(data),
        }
    }

    /// The labels of the schemes, in the study's own words.
    fn schemes(&self) -> [(&'static str, String); 5] {
        [
            ("units", "parts".to_owned()),
            ("balanced", "balanced parts".to_owned()),
            (
                "whole-batches",
                format!("holding out whole {} in turn", self.batch.many),
            ),
            (
                "leave-one-unit-out",
                format!("leaving out one {} at a time", self.unit.one),
            ),
            ("blocks", "blocks in order of measurement".to_owned()),
        ]
    }
}

/// The settings as sentences, in the present tense.
#[must_use]
pub fn sentences(context: &Context<'_>, fit: &Fit) -> Vec<Sentence> {
    let chain = Chain::from(context, fit.input);
    let words = Words::of(chain.settings());
    let kind = kind(chain.settings());
    let mut sentences = vec![model(context, fit, &chain.outcome())];
    if FitSlot::Grouping.is_for(kind) {
        sentences.push(grouping(fit));
    }
    sentences.extend([
        strength(fit, &words, kind),
        judge(fit, &words),
        Sentence::new()
            .text("Seed ")
            .whole(Slot::Fit(FitSlot::Seed), fit.seed)
            .text("."),
        scaling(fit),
    ]);
    if FitSlot::Ties.is_for(kind) {
        let text = match fit.ties {
            Ties::Efron => TIES[0].1,
            Ties::Breslow => TIES[1].1,
        };
        let sentence = Sentence::new()
            .text("Events at equal times are counted ")
            .choice(Slot::Fit(FitSlot::Ties), text, &TIES)
            .text(".");
        sentences.push(sentence.detail());
    }
    if let Strength::Chosen { range, .. } = fit.strength {
        let sentence = Sentence::new()
            .text("The weakest strength tried is ")
            .optional_real(Slot::Fit(FitSlot::Ratio), range.ratio, "the usual share")
            .text(match range.ratio {
                Some(_) => " times the strongest.",
                None => " of the strongest.",
            });
        sentences.push(sentence.detail());
    }
    sentences.extend(weights::sentences(fit, kind, &words.batch));
    sentences
}

/// What sort of outcome is predicted, as far as it has been said.
#[must_use]
pub fn kind(data: Option<&Data>) -> Option<&OutcomeKind> {
    data.and_then(|data| data.outcome.as_ref())
        .map(|outcome| &outcome.kind)
}

fn grouping(fit: &Fit) -> Sentence {
    let text = match fit.grouping {
        Grouping::Apart => GROUPINGS[0].1,
        Grouping::Together => GROUPINGS[1].1,
    };
    Sentence::new()
        .text("A predictor is penalised ")
        .choice(Slot::Fit(FitSlot::Grouping), text, &GROUPINGS)
        .text(".")
}

/// The stable name of a measure of errors, and its words.
#[must_use]
pub const fn measure_words(
    measure: ErrorMeasure,
    kind: &OutcomeKind,
) -> (&'static str, &'static str) {
    match measure {
        ErrorMeasure::Usual => ("usual", measure_words(ErrorMeasure::of(kind)[0], kind).1),
        ErrorMeasure::SquaredError => match kind {
            OutcomeKind::YesNo { .. } => {
                ("squared-error", "the mean squared error of the probability")
            }
            OutcomeKind::Measured
            | OutcomeKind::Classes
            | OutcomeKind::Count { .. }
            | OutcomeKind::Time { .. } => ("squared-error", "the mean squared error"),
        },
        ErrorMeasure::Deviance => ("deviance", "the deviance"),
        ErrorMeasure::Misclassification => ("misclassification", "the share called wrong"),
        ErrorMeasure::PartialLikelihood => (
            "partial-likelihood",
            "the deviance of the partial likelihood",
        ),
        ErrorMeasure::Concordance => ("concordance", "the share of pairs ordered wrongly"),
    }
}

/// “, measured by **the deviance**”, where there is a choice.
fn measured_by(sentence: Sentence, fit: &Fit, kind: Option<&OutcomeKind>) -> Sentence {
    let Some(kind) = kind.filter(|kind| FitSlot::Measure.is_for(Some(kind))) else {
        return sentence;
    };
    let mut offered: Vec<ErrorMeasure> = ErrorMeasure::of(kind).to_vec();
    if fit.measure == ErrorMeasure::Usual {
        offered[0] = ErrorMeasure::Usual;
    } else if !offered.contains(&fit.measure) {
        offered.push(fit.measure);
    }
    let labels: Vec<(&str, &str)> = offered
        .iter()
        .map(|measure| measure_words(*measure, kind))
        .collect();
    sentence.text(", measured by ").choice(
        Slot::Fit(FitSlot::Measure),
        measure_words(fit.measure, kind).1,
        &labels,
    )
}

/// The rules that this kind of outcome has, and the one that stands there.
fn ways(fit: &Fit, kind: Option<&OutcomeKind>) -> Vec<(&'static str, &'static str)> {
    let is_measured = matches!(kind, Some(OutcomeKind::Measured) | None);
    let is_gcv = matches!(
        fit.strength,
        Strength::Chosen {
            rule: Rule::GeneralisedCrossValidation,
            ..
        }
    );
    WAYS.into_iter()
        .filter(|(name, _)| *name != "gcv" || is_measured || is_gcv)
        .collect()
}

fn model(context: &Context<'_>, fit: &Fit, outcome: &str) -> Sentence {
    let slot = Slot::Fit(FitSlot::Penalty);
    let mut lasso_shares = None;
    let sentence = match &fit.penalty {
        Penalty::Ridge => {
            Sentence::new()
                .text("Fit a ")
                .choice(slot, "ridge regression", &PENALTIES)
        }
        Penalty::Lasso => Sentence::new()
            .text("Fit a ")
            .choice(slot, "lasso", &PENALTIES),
        Penalty::ElasticNet { shares } => {
            let texts: Vec<String> = shares.iter().map(|share| word::real(*share)).collect();
            lasso_shares = Some((shares.len(), noun::list(&texts)));
            Sentence::new()
                .text("Fit an ")
                .choice(slot, "elastic net", &PENALTIES)
        }
    };
    let sentence = sentence.text(format!(" of {outcome} on ")).cell(
        Slot::Fit(FitSlot::Input),
        word::cell(context, fit.input, "samples still to be chosen"),
        &word::SAMPLES,
    );
    let Some((count, texts)) = lasso_shares else {
        return sentence.text(".");
    };
    sentence
        .text(if count == 1 {
            ", with the lasso share "
        } else {
            ", with the best of the lasso shares "
        })
        .word(Slot::Fit(FitSlot::Shares), texts, Editor::List)
        .text(".")
}

fn strength(fit: &Fit, words: &Words, kind: Option<&OutcomeKind>) -> Sentence {
    let choice = Slot::Fit(FitSlot::Choice);
    let ways = ways(fit, kind);
    let (rule, range, inner) = match &fit.strength {
        Strength::ByHand(strength) => {
            return Sentence::new()
                .text("Set the penalty strength ")
                .choice(choice, "by hand", &ways)
                .text(" to ")
                .real(Slot::Fit(FitSlot::Strength), *strength)
                .text(".");
        }
        Strength::Chosen { rule, range, inner } => (*rule, *range, *inner),
    };
    let (before, after) = match rule {
        Rule::Given { .. } => ("Compare ", " penalty strengths by "),
        Rule::LowestError
        | Rule::OneStandardError
        | Rule::GeneralisedCrossValidation
        | Rule::ExtendedBic { .. } => ("Choose the penalty strength among ", " values by "),
    };
    let sentence = Sentence::new()
        .text(before)
        .whole(Slot::Fit(FitSlot::Count), u64::from(range.count))
        .text(after);
    let parts = |sentence: Sentence| {
        let slots = [
            FitSlot::InnerScheme,
            FitSlot::InnerParts,
            FitSlot::InnerRepeats,
        ];
        plan(sentence, inner, words, "", slots)
    };
    match rule {
        Rule::LowestError => {
            let taking = parts(sentence).text(", taking the ");
            measured_by(taking.choice(choice, "lowest error", &ways), fit, kind)
        }
        Rule::OneStandardError => {
            let taking = parts(sentence).text(", taking the ").choice(
                choice,
                "strongest penalty within one standard error of the lowest error",
                &ways,
            );
            measured_by(taking, fit, kind)
        }
        Rule::GeneralisedCrossValidation => {
            sentence
                .text("the ")
                .choice(choice, "lowest generalised cross-validation value", &ways)
        }
        Rule::Given { strength } => {
            let set = measured_by(parts(sentence), fit, kind)
                .text("; set it ")
                .choice(choice, "by hand", &ways)
                .text(" to ");
            set.real(Slot::Fit(FitSlot::Strength), strength)
        }
        Rule::ExtendedBic { gamma } => sentence
            .text("the ")
            .choice(
                choice,
                "lowest extended Bayesian information criterion",
                &ways,
            )
            .text(", with the weight ")
            .real(Slot::Fit(FitSlot::Gamma), gamma)
            .text(" for the number of possible models"),
    }
    .text(".")
}

/// “**10** **parts**, repeated **5** times”, or the words of a scheme that fixes its parts.
fn plan(
    sentence: Sentence,
    plan: Plan,
    words: &Words,
    level: &str,
    [scheme, parts, repeats]: [FitSlot; 3],
) -> Sentence {
    let schemes = words.schemes();
    let labels: Vec<(&str, &str)> = schemes
        .iter()
        .map(|(name, label)| (*name, label.as_str()))
        .collect();
    let text = labels[match plan.scheme {
        Scheme::Units => 0,
        Scheme::Balanced => 1,
        Scheme::WholeBatches => 2,
        Scheme::LeaveOneUnitOut => 3,
        Scheme::Blocks => 4,
    }]
    .1;
    let mut sentence = sentence;
    if plan.scheme.takes_parts() {
        sentence = sentence
            .whole(Slot::Fit(parts), u64::from(plan.parts))
            .text(format!(" {level}"));
    }
    sentence = sentence.choice(Slot::Fit(scheme), text, &labels);
    if !plan.scheme.is_drawn() {
        return sentence;
    }
    let slot = Slot::Fit(repeats);
    if plan.repeats == 1 {
        sentence
            .text(", drawn ")
            .word(slot, "once", word::number_editor(slot))
    } else {
        sentence
            .text(", repeated ")
            .whole(slot, u64::from(plan.repeats))
            .text(" times")
    }
}

fn judge(fit: &Fit, words: &Words) -> Sentence {
    let slot = Slot::Fit(FitSlot::Judge);
    match fit.judge {
        Judge::Declined => Sentence::new()
            .choice(slot, "Do not judge", &JUDGINGS)
            .text(" the procedure on samples that it has not seen."),
        Judge::Nested(outer) => {
            let sentence = Sentence::new()
                .choice(slot, "Judge", &JUDGINGS)
                .text(" the whole procedure ")
                .text(if outer.scheme.takes_parts() {
                    "on "
                } else {
                    "by "
                });
            let slots = [
                FitSlot::OuterScheme,
                FitSlot::OuterParts,
                FitSlot::OuterRepeats,
            ];
            plan(sentence, outer, words, "outer ", slots).text(".")
        }
    }
}

fn scaling(fit: &Fit) -> Sentence {
    let text = match fit.scaling {
        Scaling::UnitVariance => "predictors divided by their standard deviation",
        Scaling::AsPrepared => "predictors on the scale on which they arrive",
    };
    Sentence::new()
        .text("The penalty acts on ")
        .choice(Slot::Fit(FitSlot::Scaling), text, &SCALINGS)
        .text(".")
        .detail()
}
