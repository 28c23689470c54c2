//! Penalty weights, sign rules and strata: from the settings to what is carried out, and the facts
//! that say what was used.

use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::data::Dataset;
use crate::eval::kind::fit::Fitted;
use crate::eval::kind::fit::facts::STRENGTH;
use crate::numeric::penalty::Sign;
use crate::numeric::procedure;
use crate::numeric::response::Response;
use crate::study::settings::data::ColumnRange;
use crate::study::settings::fit::{Fit, Penalty, Strength};
use crate::study::settings::weights::{BlockChoice, MOST_COMBINATIONS, Signs, Strata, Weighting};

/// The penalty weights that these settings describe.
///
/// # Errors
/// What is wrong with the blocks.
pub fn numeric_weighting(settings: &Fit, data: &Dataset) -> Result<procedure::Weighting, Problem> {
    let (blocks, choice) = match &settings.weighting {
        Weighting::Equal => return Ok(procedure::Weighting::Equal),
        Weighting::Adaptive { power } => {
            return Ok(procedure::Weighting::Adaptive { power: power.get() });
        }
        Weighting::Blocks { blocks, choice } => (blocks, choice),
    };
    if blocks.is_empty() {
        return Err(Problem::new(
            "no-blocks",
            "The penalty is to weigh blocks of predictors, and no block is named.",
        )
        .mend("Name the blocks, or let the penalty weigh all predictors alike."));
    }
    if matches!(choice, BlockChoice::Chosen { .. })
        && matches!(settings.strength, Strength::ByHand(_))
    {
        return Err(Problem::new(
            "weights-without-choice",
            "The weights of the blocks are to be chosen by what predicts best, but the penalty \
             strength is set by hand, so nothing is compared.",
        )
        .mend("Let the strength be chosen by a rule, or set the weights by hand."));
    }
    if settings.weighting.n_combinations() > MOST_COMBINATIONS {
        return Err(Problem::new(
            "too-many-weights-to-compare",
            format!("There are more than {MOST_COMBINATIONS} combinations of block weights."),
        )
        .mend("Name fewer blocks or fewer weights."));
    }
    let mut block: Vec<Option<usize>> = vec![None; data.predictor_names.len()];
    for (at, one) in blocks.iter().enumerate() {
        for column in columns(&one.range, data)? {
            if let Some(other) = block[column] {
                return Err(Problem::new(
                    "blocks-overlap",
                    format!(
                        "The predictor “{}” stands in two blocks, “{}” and “{}”.",
                        data.predictor_names[column],
                        range_words(&blocks[other].range),
                        range_words(&one.range)
                    ),
                )
                .mend("Name each predictor in one block only."));
            }
            block[column] = Some(at);
        }
    }
    Ok(procedure::Weighting::Blocks {
        block,
        candidates: settings.weighting.candidates(),
    })
}

/// The sign rule of each predictor; empty for none.
///
/// # Errors
/// What is wrong with the rule.
pub fn numeric_signs(settings: &Fit, data: &Dataset) -> Result<Vec<Sign>, Problem> {
    let p = data.predictor_names.len();
    let signs = match &settings.signs {
        Signs::Any => return Ok(Vec::new()),
        Signs::NotNegative => vec![Sign::NotNegative; p],
        Signs::NotNegativeIn(ranges) => {
            let mut signs = vec![Sign::Any; p];
            for range in ranges {
                for column in columns(range, data)? {
                    signs[column] = Sign::NotNegative;
                }
            }
            signs
        }
    };
    if settings.penalty == Penalty::Ridge {
        return Err(Problem::new(
            "signs-in-ridge",
            "A ridge regression cannot keep coefficients from being negative here.",
        )
        .mend("Choose a lasso or an elastic net, or allow any sign."));
    }
    Ok(signs)
}

/// The predictors of a range, both ends included.
fn columns(
    range: &ColumnRange,
    data: &Dataset,
) -> Result<std::ops::RangeInclusive<usize>, Problem> {
    let place = |name: &str| {
        let known = data.predictor_names.iter().position(|known| known == name);
        known.ok_or_else(|| {
            Problem::new(
                "no-such-predictor",
                format!("There is no predictor “{name}”."),
            )
            .mend("Name a column that is a predictor in the Data cell.")
        })
    };
    let (first, last) = (place(&range.first)?, place(&range.last)?);
    Ok(first.min(last)..=first.max(last))
}

fn range_words(range: &ColumnRange) -> String {
    if range.first == range.last {
        range.first.clone()
    } else {
        format!("{} … {}", range.first, range.last)
    }
}

/// Puts the batches into the outcome as strata, where the settings say so.
///
/// # Errors
/// When there are no batches.
pub fn stratify(settings: &Fit, data: &Dataset, response: &mut Response) -> Result<(), Problem> {
    let Response::Time { strata, .. } = response else {
        return Ok(());
    };
    match (settings.strata, &data.batches) {
        (Strata::None, _) => Ok(()),
        (Strata::Batches, Some(batches)) => {
            *strata = Some(batches.clone());
            Ok(())
        }
        (Strata::Batches, None) => Err(Problem::new(
            "strata-without-batches",
            "Times are to be compared within batches only, and no column names the batches.",
        )
        .mend("Give the batch in the Data cell, or compare all with all.")),
    }
}

/// A list of block weights in words: `900 nm … 1300 nm: 2; 1700 nm: 0.5`.
fn weight_words(settings: &Fit, weights: &[f64]) -> String {
    let Weighting::Blocks { blocks, .. } = &settings.weighting else {
        return String::new();
    };
    let each = blocks.iter().zip(weights).map(|(block, weight)| {
        let weight = number::text(*weight, Precision::Full);
        format!("{}: {weight}", range_words(&block.range))
    });
    each.collect::<Vec<_>>().join("; ")
}

/// Publishes what was used. Nothing is published where nothing was set.
pub(super) fn publish(facts: &mut Facts, fitted: &Fitted) {
    let settings = &fitted.settings;
    match &settings.weighting {
        Weighting::Equal => {}
        Weighting::Blocks { choice, .. } => blocks(facts, fitted, choice),
        Weighting::Adaptive { power } => {
            facts.push(Fact::number(
                "learnt weights power",
                power.get(),
                "",
                Precision::Full,
                "How sharply the penalty weights learnt from a ridge fit act: (mean |b| / |b|) to this power.",
            ));
            if let Some(strength) = fitted.last.first_strength {
                facts.push(Fact::number(
                    "first-stage strength",
                    strength,
                    "",
                    STRENGTH,
                    "The strength of the ridge fit to all analysed samples from which their penalty weights were learnt; every training part learnt its own.",
                ));
            }
        }
    }
    if settings.signs != Signs::Any
        && let Ok(signs) = numeric_signs(settings, &fitted.prepared.data)
    {
        let held = signs.iter().filter(|sign| **sign != Sign::Any).count();
        facts.push(Fact::count(
            "predictors never negative",
            held,
            "How many predictors were not allowed a coefficient below zero.",
        ));
    }
    if let Response::Time {
        strata: Some(strata),
        event,
        ..
    } = &fitted.response
        && settings.strata == Strata::Batches
    {
        let rows = &fitted.prepared.data.analysed;
        let mut all: Vec<usize> = rows.iter().map(|&row| strata[row]).collect();
        all.sort_unstable();
        all.dedup();
        facts.push(Fact::count(
            "strata",
            all.len(),
            "How many batches there are, within each of which times were compared.",
        ));
        let without = all.iter().filter(|&&name| {
            let mut own = rows.iter().filter(|&&row| strata[row] == name);
            !own.any(|&row| event[row])
        });
        facts.push(Fact::count(
            "strata without events",
            without.count(),
            "How many of these batches have no event and so say nothing about the coefficients.",
        ));
    }
}

fn blocks(facts: &mut Facts, fitted: &Fitted, choice: &BlockChoice) {
    let weights = &fitted.last.block_weights;
    facts.push(Fact::text(
        "block weights",
        weight_words(&fitted.settings, weights),
        "The penalty weight of each block of predictors in the final fit; predictors in no block have the weight 1.",
    ));
    if !matches!(choice, BlockChoice::Chosen { .. }) {
        return;
    }
    let tried = &fitted.last.weights_tried;
    facts.push(Fact::count(
        "block weights tried",
        tried.len(),
        "How many combinations of block weights were compared on the inner parts.",
    ));
    let words = |list: &Vec<f64>| weight_words(&fitted.settings, list);
    facts.push(Fact::table(
        "block weights compared",
        vec![
            FactColumn::texts(
                "weights",
                tried.iter().map(|(list, _)| words(list)).collect(),
                "The penalty weight of each block.",
            ),
            FactColumn::numbers(
                "lowest error",
                tried.iter().map(|(_, error)| *error).collect(),
                "",
                Precision::Significant(4),
                "The lowest error of the curve with these weights.",
            ),
        ],
        "The combinations of block weights that were compared for the final fit.",
    ));
    if let Some(judged) = &fitted.judged {
        let fits = &judged.held_out.fits;
        let same = fits.iter().filter(|fit| fit.block_weights == *weights);
        facts.push(Fact::number(
            "outer parts with the same block weights",
            same.count() as f64 / fits.len() as f64,
            "",
            Precision::Percent(0),
            "In how many outer training parts the same block weights were chosen as for the final fit.",
        ));
    }
}
