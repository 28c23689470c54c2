//! Text of the exports that is the same for every study.

use crate::eval::kind::step::source;
use crate::study::Study;
use crate::study::settings::Settings;
use crate::study::settings::fit::{Penalty, Rule, Strength};
use crate::study::settings::prepare::Step;
use crate::study::settings::question::Ask;

/// What only the user can tell, from the items of TRIPOD+AI (Collins et al. 2024).
pub const TO_SUPPLY: [&str; 12] = [
    "the context, the intended purpose and the intended users of the model",
    "where, when and how the samples came about, and which were eligible",
    "how the outcome was determined, by whom, and whether blind to the predictors",
    "how the predictors were measured: instrument, protocol, storage",
    "the reference method and its own error",
    "why this type of model was chosen",
    "how the number of samples was decided on",
    "why samples were excluded, beyond the reasons recorded",
    "what was done to the data before they were imported",
    "ethics, consent, permissions, as far as they apply",
    "funding, interests, protocol, and where data and study file are available",
    "the interpretation, the limits, and what should be done next",
];

/// What no document of this sort can know.
pub const NOT_KNOWABLE: [&str; 8] = [
    "whether values were normalised, filtered or corrected jointly before they were imported",
    "which analyses were tried elsewhere, and whether somebody had seen the outcome before",
    "whether the held-out parts resemble the samples of future use, other sites, seasons or instruments",
    "groups and batches that nobody recorded",
    "whether a predictor is a cause, a consequence or a disguise of the outcome",
    "whether missing means not measured or not detected, if the file does not say",
    "whether the number of samples was planned",
    "whether the reference value is itself right",
];

/// The statement of the exports on what they are.
pub const STATUS: &str = "This text states what the study file holds. Every number in it is a \
    value of the study; passages in square brackets must be supplied by its authors.";

/// The references of the methods that a study uses, in alphabetical order.
#[must_use]
pub fn references(study: &Study) -> Vec<&'static str> {
    let mut used: Vec<&'static str> = Vec::new();
    for cell in study.cells() {
        match &cell.settings {
            Settings::Prepare(prepare) => used.extend(prepare.steps.iter().flat_map(of_step)),
            Settings::Fit(fit) => {
                used.push(match fit.penalty {
                    Penalty::Ridge => HOERL,
                    Penalty::Lasso => TIBSHIRANI,
                    Penalty::ElasticNet { .. } => ZOU,
                });
                used.push(VARMA);
                used.push(BATES);
                if let Strength::Chosen { rule, .. } = &fit.strength {
                    used.extend(match rule {
                        Rule::LowestError | Rule::Given { .. } => None,
                        Rule::OneStandardError => Some(BREIMAN),
                        Rule::GeneralisedCrossValidation => Some(GOLUB),
                        Rule::ExtendedBic { .. } => Some(CHEN),
                    });
                }
            }
            Settings::Question(question) => used.extend(of_question(&question.ask)),
            Settings::Data(_) | Settings::Compare(_) | Settings::Score(_) | Settings::Prose(_) => {}
        }
    }
    used.sort_unstable();
    used.dedup();
    used
}

const HOERL: &str = "Hoerl, A. E. & Kennard, R. W. (1970). Ridge regression: biased estimation for nonorthogonal problems. Technometrics 12, 55–67.";
const TIBSHIRANI: &str = "Tibshirani, R. (1996). Regression shrinkage and selection via the lasso. Journal of the Royal Statistical Society B 58, 267–288.";
const ZOU: &str = "Zou, H. & Hastie, T. (2005). Regularization and variable selection via the elastic net. Journal of the Royal Statistical Society B 67, 301–320.";
const VARMA: &str = "Varma, S. & Simon, R. (2006). Bias in error estimation when using cross-validation for model selection. BMC Bioinformatics 7, 91.";
const BATES: &str = "Bates, S., Hastie, T. & Tibshirani, R. (2024). Cross-validation: what does it estimate and how well does it do it? Journal of the American Statistical Association 119, 1434–1445.";
const BREIMAN: &str = "Breiman, L., Friedman, J. H., Olshen, R. A. & Stone, C. J. (1984). Classification and Regression Trees. Wadsworth.";
const GOLUB: &str = "Golub, G. H., Heath, M. & Wahba, G. (1979). Generalized cross-validation as a method for choosing a good ridge parameter. Technometrics 21, 215–223.";
const CHEN: &str = "Chen, J. & Chen, Z. (2008). Extended Bayesian information criteria for model selection with large model spaces. Biometrika 95, 759–771.";
const SHAH: &str = "Shah, R. D. & Samworth, R. J. (2013). Variable selection with error control: another look at stability selection. Journal of the Royal Statistical Society B 75, 55–80.";
const MEINSHAUSEN: &str = "Meinshausen, N. & Bühlmann, P. (2010). Stability selection. Journal of the Royal Statistical Society B 72, 417–473.";
const NOGUEIRA: &str = "Nogueira, S., Sechidis, K. & Brown, G. (2018). On the stability of feature selection algorithms. Journal of Machine Learning Research 18(174), 1–54.";
const MANDOZZI: &str = "Mandozzi, J. & Bühlmann, P. (2016). Hierarchical testing in the high-dimensional setting with correlated variables. Journal of the American Statistical Association 111, 331–343.";

fn of_step(step: &Step) -> Option<&'static str> {
    source(step).map(|source| source.full)
}

fn of_question(ask: &Ask) -> Vec<&'static str> {
    match ask {
        Ask::ChosenAgain { .. } => vec![SHAH, MEINSHAUSEN, NOGUEIRA],
        Ask::StandIns { .. } => vec![MANDOZZI],
        Ask::LeastSquares => vec![HOERL],
        Ask::ErrorCurve | Ask::CoefficientTrace | Ask::Agreement | Ask::Ladder { .. } => Vec::new(),
    }
}
