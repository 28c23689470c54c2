//! The places of a Question cell's settings.

use crate::base::problem::Problem;
use crate::study::settings::question::{Ask, Question, Seal};
use crate::study::settings::slot::{Bounds, Value, take};

/// A place in the settings of a Question cell.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum QuestionSlot {
    /// The fit that is asked.
    Fit,
    /// What is asked.
    Ask,
    /// Whether the sealed set is opened.
    Seal,
    /// How many pairs of halves are drawn.
    Pairs,
    /// From which selection frequency on a predictor counts as chosen again.
    Threshold,
    /// The seed of the halves.
    Seed,
    /// From which absolute correlation on a predictor is a stand-in.
    Correlation,
}

#[derive(Clone, Copy, PartialEq)]
enum Sort {
    LeastSquares,
    ErrorCurve,
    CoefficientTrace,
    Agreement,
    Ladder,
    ChosenAgain,
    StandIns,
}

const SORTS: [(&str, Sort); 7] = [
    ("least-squares", Sort::LeastSquares),
    ("error-curve", Sort::ErrorCurve),
    ("coefficient-trace", Sort::CoefficientTrace),
    ("agreement", Sort::Agreement),
    ("ladder", Sort::Ladder),
    ("chosen-again", Sort::ChosenAgain),
    ("stand-ins", Sort::StandIns),
];
const SORT_NAMES: [&str; 7] = take::names(&SORTS);

const SEALS: [(&str, Seal); 2] = [("closed", Seal::Closed), ("opened", Seal::Opened)];
const SEAL_NAMES: [&str; 2] = take::names(&SEALS);

impl QuestionSlot {
    /// The places that these settings have, in reading order.
    #[must_use]
    pub fn of(question: &Question) -> Vec<Self> {
        let mut slots = vec![Self::Fit, Self::Ask];
        slots.extend(match question.ask {
            Ask::LeastSquares | Ask::ErrorCurve | Ask::CoefficientTrace | Ask::Agreement => {
                Vec::new()
            }
            Ask::Ladder { .. } => vec![Self::Seal],
            Ask::ChosenAgain { .. } => vec![Self::Pairs, Self::Threshold, Self::Seed],
            Ask::StandIns { .. } => vec![Self::Correlation],
        });
        slots
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Fit => "fit that is asked",
            Self::Ask => "question",
            Self::Seal => "seal of the sealed set",
            Self::Pairs => "number of pairs",
            Self::Threshold => "selection frequency that counts",
            Self::Seed => "seed",
            Self::Correlation => "correlation of a stand-in",
        }
    }

    /// The stable names of the choices.
    #[must_use]
    pub const fn choices(self) -> &'static [&'static str] {
        match self {
            Self::Ask => &SORT_NAMES,
            Self::Seal => &SEAL_NAMES,
            Self::Fit | Self::Pairs | Self::Threshold | Self::Seed | Self::Correlation => &[],
        }
    }

    /// The numbers that may stand there.
    #[must_use]
    pub const fn bounds(self) -> Option<Bounds> {
        match self {
            Self::Pairs => Some(Bounds::Whole {
                least: 5,
                most: 5000,
            }),
            // The bounds on low-selection predictors hold from one half on (Shah and Samworth,
            // 2013).
            Self::Threshold => Some(Bounds::Any {
                least: 0.51,
                most: 1.0,
            }),
            Self::Seed => Some(Bounds::Whole {
                least: 0,
                most: 9_007_199_254_740_992,
            }),
            Self::Correlation => Some(Bounds::Any {
                least: 0.1,
                most: 1.0,
            }),
            Self::Fit | Self::Ask | Self::Seal => None,
        }
    }

    /// What stands there; `None` when the settings have no such place.
    #[must_use]
    pub fn get(self, question: &Question) -> Option<Value> {
        match (self, &question.ask) {
            (Self::Fit, _) => Some(Value::Cell(question.fit.0)),
            (Self::Ask, ask) => Some(take::named(&SORTS, sort(ask))),
            (Self::Seal, Ask::Ladder { seal }) => Some(take::named(&SEALS, *seal)),
            (Self::Pairs, Ask::ChosenAgain { pairs, .. }) => Some(Value::Whole(u64::from(*pairs))),
            (Self::Threshold, Ask::ChosenAgain { threshold, .. }) => {
                Some(Value::Number(*threshold))
            }
            (Self::Seed, Ask::ChosenAgain { seed, .. }) => Some(Value::Whole(*seed)),
            (Self::Correlation, Ask::StandIns { correlation }) => Some(Value::Number(*correlation)),
            (
                Self::Seal | Self::Pairs | Self::Threshold | Self::Seed | Self::Correlation,
                Ask::LeastSquares
                | Ask::ErrorCurve
                | Ask::CoefficientTrace
                | Ask::Agreement
                | Ask::Ladder { .. }
                | Ask::ChosenAgain { .. }
                | Ask::StandIns { .. },
            ) => None,
        }
    }

    /// The settings with another value there.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there.
    pub fn set(self, question: &Question, value: Value) -> Result<Question, Problem> {
        let label = self.label();
        let mut question = question.clone();
        let limits = || self.bounds().expect("a slot for a number has bounds");
        match (self, &mut question.ask) {
            (Self::Fit, _) => question.fit = take::cell(label, &value)?,
            (Self::Ask, ask) => {
                let chosen = take::pick(label, &SORTS, &value)?;
                if chosen != sort(ask) {
                    *ask = Ask::catalogue()
                        .into_iter()
                        .find(|usual| sort(usual) == chosen)
                        .expect("the catalogue holds every question");
                }
            }
            (Self::Seal, Ask::Ladder { seal }) => *seal = take::pick(label, &SEALS, &value)?,
            (Self::Pairs, Ask::ChosenAgain { pairs, .. }) => {
                *pairs = take::count(label, limits(), &value)?;
            }
            (Self::Threshold, Ask::ChosenAgain { threshold, .. }) => {
                *threshold = take::number(label, limits(), &value)?;
            }
            (Self::Seed, Ask::ChosenAgain { seed, .. }) => {
                *seed = take::whole(label, limits(), &value)?;
            }
            (Self::Correlation, Ask::StandIns { correlation }) => {
                *correlation = take::number(label, limits(), &value)?;
            }
            (
                Self::Seal | Self::Pairs | Self::Threshold | Self::Seed | Self::Correlation,
                Ask::LeastSquares
                | Ask::ErrorCurve
                | Ask::CoefficientTrace
                | Ask::Agreement
                | Ask::Ladder { .. }
                | Ask::ChosenAgain { .. }
                | Ask::StandIns { .. },
            ) => return Err(take::absent(label, "another question is asked")),
        }
        Ok(question)
    }
}

fn sort(ask: &Ask) -> Sort {
    match ask {
        Ask::LeastSquares => Sort::LeastSquares,
        Ask::ErrorCurve => Sort::ErrorCurve,
        Ask::CoefficientTrace => Sort::CoefficientTrace,
        Ask::Agreement => Sort::Agreement,
        Ask::Ladder { .. } => Sort::Ladder,
        Ask::ChosenAgain { .. } => Sort::ChosenAgain,
        Ask::StandIns { .. } => Sort::StandIns,
    }
}

impl Ask {
    /// The stable name of the question: `chosen-again`.
    #[must_use]
    pub fn name(&self) -> &'static str {
        SORTS
            .iter()
            .find(|(_, known)| *known == sort(self))
            .map(|(name, _)| *name)
            .expect("every question has a name")
    }
}
