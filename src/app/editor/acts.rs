//! Recorded acts: corrections and exclusions, to look at and take back.

use crate::app::editor::Action;
use crate::app::theme::button::Look;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::study::settings::data::{Correction, Exclusion, OutcomeSeen};
use crate::study::settings::slot::Value;
use iced::widget::{Column, column, row};
use iced::{Alignment, Length};
use std::sync::Arc;

/// What happens to the acts.
#[derive(Clone, Debug)]
pub enum Message {
    /// One is taken back.
    TakeBack(usize),
}

/// Recorded acts.
#[derive(Clone, Debug)]
pub enum Acts {
    /// Changes of single values.
    Corrections(Arc<Vec<Correction>>),
    /// Removals of samples.
    Exclusions(Arc<Vec<Exclusion>>),
}

impl Acts {
    /// The acts that stand.
    #[must_use]
    pub fn new(value: Option<Value>) -> Self {
        match value {
            Some(Value::Corrections(corrections)) => Self::Corrections(corrections),
            Some(Value::Exclusions(exclusions)) => Self::Exclusions(exclusions),
            Some(_) | None => Self::Exclusions(Arc::default()),
        }
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        let Message::TakeBack(at) = message;
        match self {
            Self::Corrections(corrections) if at < corrections.len() => {
                let mut left = corrections.as_ref().clone();
                let _ = left.remove(at);
                Action::Commit(Value::Corrections(Arc::new(left)))
            }
            Self::Exclusions(exclusions) if at < exclusions.len() => {
                let mut left = exclusions.as_ref().clone();
                let _ = left.remove(at);
                Action::Commit(Value::Exclusions(Arc::new(left)))
            }
            Self::Corrections(_) | Self::Exclusions(_) => Action::None,
        }
    }

    /// The acts below each other.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let acts: Vec<(String, &str, OutcomeSeen)> = match self {
            Self::Corrections(corrections) => corrections
                .iter()
                .map(|act| {
                    let to = if act.to.is_empty() {
                        "missing"
                    } else {
                        &act.to
                    };
                    let what = format!("{}, {}: {} to {to}", act.sample, act.column, act.from);
                    (what, act.reason.as_str(), act.outcome)
                })
                .collect(),
            Self::Exclusions(exclusions) => exclusions
                .iter()
                .map(|act| (act.sample.clone(), act.reason.as_str(), act.outcome))
                .collect(),
        };
        if acts.is_empty() {
            return text::quiet(
                "There are none. They are recorded in the table of the samples: open the table \
                 below, press a value twice to correct it, or a sample’s name to exclude it.",
            )
            .into();
        }
        let rows = acts
            .into_iter()
            .enumerate()
            .map(|(at, (what, reason, seen))| {
                let seen = match seen {
                    OutcomeSeen::Before => "before the outcome was seen",
                    OutcomeSeen::After => "after the outcome had been seen",
                    OutcomeSeen::NotSaid => "it is not said whether the outcome had been seen",
                };
                row![
                    column![text::body(what), text::quiet(format!("{reason} ({seen})"))]
                        .width(Length::Fill),
                    press::words("Take back", Message::TakeBack(at)).look(Look::Attention),
                ]
                .spacing(space::SMALL)
                .align_y(Alignment::Center)
                .into()
            });
        Column::with_children(rows).spacing(space::SMALL).into()
    }
}
