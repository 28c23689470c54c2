//! How well a fit of classes, counts or times performed, for the write-up.

use crate::report::block::Paragraph;
use crate::report::noun::Noun;
use crate::report::tell::{Source, Telling};

/// “ (95 % interval from A to B)”, where both ends are known.
fn ends(source: &Source<'_>, measure: &str) -> String {
    let (low, high) = (
        format!("nested {measure} low"),
        format!("nested {measure} high"),
    );
    if source.has(&low) && source.has(&high) {
        format!(" (⟨95 %⟩ interval over UNITS from {{{low}}} to {{{high}}})")
    } else {
        String::new()
    }
}

fn say(telling: &mut Telling, source: &Source<'_>, unit: &Noun, pattern: &str) {
    telling.say(source.say(&pattern.replace("UNITS", &unit.many), &[]));
}

/// What every kind tells: what the interval is about, the gain over no predictors, the optimism.
fn end(telling: &mut Telling, source: &Source<'_>, unit: &Noun, loss: &str, main: (&str, &str)) {
    telling.say(Paragraph::of(
        "Measures were computed over all samples of a repeat and averaged over repeats; intervals \
         describe the procedure on studies of this size, not the final fitted model itself.",
    ));
    if source.has("improvement low") && source.has("improvement high") {
        let pattern = format!(
            "The {loss} was lower than that of the model without predictors in the same parts by \
             {{improvement over the baseline}} (paired interval over UNITS from {{improvement low}} \
             to {{improvement high}})."
        );
        say(telling, source, unit, &pattern);
    }
    let (name, title) = main;
    let pattern = format!(
        "On its own training samples the final fit reached an apparent {title} of {{apparent {name}}}; \
         the optimism (apparent minus nested) was {{optimism}}."
    );
    say(telling, source, unit, &pattern);
    telling.end();
}

fn pairs(telling: &mut Telling, source: &Source<'_>) {
    if source.has("pairs compared") {
        telling.say(source.say("Compared were {pairs compared}.", &[]));
    }
}

/// Yes or no.
pub fn yes_no(telling: &mut Telling, source: &Source<'_>, unit: &Noun) {
    let pattern = format!(
        "Of the samples {{events}} [was|were] with “{{event}}” ({{prevalence}}, {{units with an \
         event}} independent [unit|units]). On held-out samples the area under the receiver operating \
         characteristic was {{nested auc}}{}.",
        ends(source, "auc")
    );
    say(telling, source, unit, &pattern);
    pairs(telling, source);
    let pattern = format!(
        "The Brier score was {{nested brier}} (without predictors {{baseline brier}}) and the mean \
         logarithmic loss {{nested log loss}}{} (without predictors {{baseline log loss}}), a share \
         of deviance explained of {{nested deviance explained}}.",
        ends(source, "log loss")
    );
    say(telling, source, unit, &pattern);
    if source.has("nested calibration slope") {
        telling.say(source.say(
            "Logistic recalibration of the held-out probabilities had the slope {nested calibration \
             slope} and the intercept {nested calibration intercept}; with the slope kept at one the \
             intercept was {nested calibration in the large}.",
            &[],
        ));
    }
    telling.say(source.say(
        "Calling the event from a probability of one half on, the sensitivity was {nested sensitivity \
         at one half} and the specificity {nested specificity at one half}; from the prevalence on \
         they were {nested sensitivity at the prevalence} and {nested specificity at the prevalence}.",
        &[],
    ));
    end(
        telling,
        source,
        unit,
        "logarithmic loss",
        ("auc", "area under the curve"),
    );
}

/// Classes.
pub fn classes(telling: &mut Telling, source: &Source<'_>, unit: &Noun) {
    let pattern = format!(
        "On held-out samples {{nested accuracy}} were called right{}, and {{nested balanced \
         accuracy}} on average over the classes; always calling the commonest class of the training \
         part would have been right in {{baseline accuracy}}.",
        ends(source, "accuracy")
    );
    say(telling, source, unit, &pattern);
    let pattern = format!(
        "The mean logarithmic loss was {{nested log loss}}{} (without predictors {{baseline log \
         loss}}), a share of deviance explained of {{nested deviance explained}}.",
        ends(source, "log loss")
    );
    say(telling, source, unit, &pattern);
    if source.has("nested auc") {
        let pattern = format!(
            "The area under the curve of each class against the rest, averaged over classes, was \
             {{nested auc}}{}.",
            ends(source, "auc")
        );
        say(telling, source, unit, &pattern);
        pairs(telling, source);
    }
    end(
        telling,
        source,
        unit,
        "logarithmic loss",
        ("accuracy", "share called right"),
    );
}

/// Counts.
pub fn counts(telling: &mut Telling, source: &Source<'_>, unit: &Noun) {
    let pattern = format!(
        "On held-out samples the mean Poisson deviance was {{nested deviance}}{} (without predictors \
         {{baseline deviance}}), a share of deviance explained of {{nested deviance explained}}; the \
         root mean squared error was {{nested rmse}} and the mean absolute error {{nested mae}}.",
        ends(source, "deviance")
    );
    say(telling, source, unit, &pattern);
    if source.has("nested calibration slope") {
        telling.say(source.say(
            "A Poisson regression of the counts on the logarithms of their held-out predictions had \
             the slope {nested calibration slope}; predicted over observed counts in all were {nested \
             expected over observed}.",
            &[],
        ));
    }
    end(
        telling,
        source,
        unit,
        "mean deviance",
        ("deviance explained", "share of deviance explained"),
    );
}

/// Times.
pub fn times(telling: &mut Telling, source: &Source<'_>, unit: &Noun) {
    let pattern = format!(
        "The event was seen in {{events}} [sample|samples] ({{units with an event}} independent \
         [unit|units]); in {{censored}} observation ended before. Harrell’s concordance on held-out \
         samples was {{nested concordance}}{}.",
        ends(source, "concordance")
    );
    say(telling, source, unit, &pattern);
    pairs(telling, source);
    telling.say(source.say(
        "At {middle time}, the median of the event times, the area under the curve was {nested auc at \
         the middle time} and the Brier score {nested brier at the middle time} (without predictors \
         {baseline brier at the middle time}), both weighed for censoring; the quartiles {early time} \
         and {late time} are in the tables.",
        &[],
    ));
    if source.has("nested calibration slope") {
        telling.say(source.say(
            "A Cox regression on the held-out linear predictor, stratified by held-out part, had the \
             slope {nested calibration slope}.",
            &[],
        ));
    }
    end(
        telling,
        source,
        unit,
        "Brier score at the middle time",
        ("concordance", "concordance"),
    );
}
