//! The objective of a fit as a formula, with what its letters mean.

use crate::report::block::Paragraph;
use crate::report::tell::Source;
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::fit::{Fit, Grouping, Penalty, Ties};
use crate::study::settings::weights::Weighting;

/// What the fit minimises.
#[must_use]
pub fn objective(fit: &Fit, kind: Option<&OutcomeKind>, source: &Source<'_>) -> Paragraph {
    let has_covariates = source.is_above_zero("covariates");
    let covariates = if has_covariates { " + zᵢ·c" } else { "" };
    match kind {
        Some(OutcomeKind::Measured) | None => {
            let loss = if has_covariates {
                "1/(2n) · Σᵢ (yᵢ − b₀ − zᵢ·c − xᵢ·b)²"
            } else {
                "1/(2n) · Σᵢ (yᵢ − b₀ − xᵢ·b)²"
            };
            letters(
                Paragraph::of("The intercept and the coefficients minimise ")
                    .formula(format!("{loss} + {}", penalty(fit)))
                    .text(", where ")
                    .formula("n")
                    .text(" is the number of samples, ")
                    .formula("yᵢ")
                    .text(" the outcome of a sample"),
            )
        }
        Some(OutcomeKind::YesNo { event }) => {
            let odds = start(
                format!("1/n · Σᵢ [ log(1 + exp ηᵢ) − yᵢ·ηᵢ ] + {}", penalty(fit)),
                format!("ηᵢ = b₀{covariates} + xᵢ·b"),
            );
            let odds = match event {
                Some(event) => odds
                    .text(" the log odds of “")
                    .name(event)
                    .text("”, where "),
                None => odds.text(" the log odds of the event, where "),
            };
            letters(
                odds.formula("n")
                    .text(" is the number of samples, ")
                    .formula("yᵢ")
                    .text(" is one with the event and zero without"),
            )
        }
        Some(OutcomeKind::Classes) => classes(fit, has_covariates),
        Some(OutcomeKind::Count { exposure }) => {
            let offset = if exposure.is_some() {
                "log eᵢ + "
            } else {
                ""
            };
            let counted = start(
                format!("1/n · Σᵢ [ exp ηᵢ − yᵢ·ηᵢ ] + {}", penalty(fit)),
                format!("ηᵢ = {offset}b₀{covariates} + xᵢ·b"),
            )
            .text(" the logarithm of the expected count, where ")
            .formula("n")
            .text(" is the number of samples, ")
            .formula("yᵢ")
            .text(" the count of a sample");
            letters(match exposure {
                Some(exposure) => counted
                    .text(", ")
                    .formula("eᵢ")
                    .text(" its exposure (“")
                    .name(exposure)
                    .text("”)"),
                None => counted,
            })
        }
        Some(OutcomeKind::Time { event }) => {
            let linear = if has_covariates {
                "ηᵢ = zᵢ·c + xᵢ·b"
            } else {
                "ηᵢ = xᵢ·b"
            };
            let ties = match fit.ties {
                Ties::Efron => {
                    "Events at equal times are counted after Efron, who takes a growing share of \
                     them out of the samples at risk."
                }
                Ties::Breslow => {
                    "Events at equal times are counted after Breslow, who leaves all of them at risk."
                }
            };
            Paragraph::of("The coefficients minimise ")
                .formula(format!(
                    "1/n · Σᵢ dᵢ [ log Σⱼ exp ηⱼ − ηᵢ ] + {}",
                    penalty(fit)
                ))
                .text(", minus the log partial likelihood over the number of samples and the \
                       penalty, with ")
                .formula(linear)
                .text(", where ")
                .formula("n")
                .text(" is the number of samples, ")
                .formula("dᵢ")
                .text(" is one where the event was seen (“")
                .name(event)
                .text(
                    "”) and zero otherwise, the inner sum runs over the samples still at risk then, ",
                )
                .formula("xᵢ")
                .text(" are the predictors of a sample, ")
                .formula("bⱼ")
                .text(" is the coefficient of a predictor and ")
                .formula("λ")
                .text(" the penalty strength. ")
                .text(ties)
        }
    }
}

/// “The intercept and the coefficients minimise A with B”.
fn start(objective: String, linear: String) -> Paragraph {
    Paragraph::of("The intercept and the coefficients minimise ")
        .formula(objective)
        .text(" with ")
        .formula(linear)
}

/// The letters that all formulas share.
fn letters(paragraph: Paragraph) -> Paragraph {
    paragraph
        .text(", ")
        .formula("xᵢ")
        .text(" its predictors, ")
        .formula("b₀")
        .text(" the intercept, ")
        .formula("bⱼ")
        .text(" the coefficient of a predictor and ")
        .formula("λ")
        .text(" the penalty strength.")
}

fn penalty(fit: &Fit) -> String {
    let plain = match &fit.penalty {
        Penalty::Ridge => "λ · Σⱼ bⱼ²/2",
        Penalty::Lasso => "λ · Σⱼ |bⱼ|",
        Penalty::ElasticNet { .. } => "λ · Σⱼ ( s·|bⱼ| + (1 − s)/2 · bⱼ² )",
    };
    weighed(fit, plain)
}

/// With the penalty weights, where they are not 1 for all.
fn weighed(fit: &Fit, plain: &str) -> String {
    match fit.weighting {
        Weighting::Equal => plain.to_owned(),
        Weighting::Blocks { .. } | Weighting::Adaptive { .. } => plain.replacen("Σⱼ ", "Σⱼ fⱼ·", 1),
    }
}

fn classes(fit: &Fit, has_covariates: bool) -> Paragraph {
    let penalty = match (&fit.penalty, fit.grouping) {
        (Penalty::Ridge, _) => "λ · Σⱼ Σₖ bⱼₖ²/2",
        (Penalty::Lasso, Grouping::Apart) => "λ · Σⱼ Σₖ |bⱼₖ|",
        (Penalty::Lasso, Grouping::Together) => "λ · Σⱼ √(Σₖ bⱼₖ²)",
        (Penalty::ElasticNet { .. }, Grouping::Apart) => "λ · Σⱼ Σₖ ( s·|bⱼₖ| + (1 − s)/2 · bⱼₖ² )",
        (Penalty::ElasticNet { .. }, Grouping::Together) => {
            "λ · Σⱼ ( s·√(Σₖ bⱼₖ²) + (1 − s)/2 · Σₖ bⱼₖ² )"
        }
    };
    let penalty = weighed(fit, penalty);
    let linear = if has_covariates {
        "ηᵢₖ = b₀ₖ + zᵢ·cₖ + xᵢ·bₖ"
    } else {
        "ηᵢₖ = b₀ₖ + xᵢ·bₖ"
    };
    let said = start(
        format!("1/n · Σᵢ [ log Σₖ exp ηᵢₖ − ηᵢ,class(i) ] + {penalty}"),
        linear.to_owned(),
    )
    .text(" for each class ")
    .formula("k")
    .text(", where ")
    .formula("n")
    .text(" is the number of samples, ")
    .formula("xᵢ")
    .text(" are the predictors of a sample, ")
    .formula("b₀ₖ")
    .text(" is the intercept of a class, ")
    .formula("bⱼₖ")
    .text(" the coefficient of a predictor in it and ")
    .formula("λ")
    .text(" the penalty strength.");
    match (&fit.penalty, fit.grouping) {
        (Penalty::Lasso | Penalty::ElasticNet { .. }, Grouping::Together) => said.text(
            " The coefficients of a predictor in all classes are penalised together, so that it is \
             in or out as a whole.",
        ),
        (Penalty::Ridge, _) | (_, Grouping::Apart) => said,
    }
}
