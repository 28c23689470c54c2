//! One of a few values.

use crate::app::editor::{Action, FIELD};
use crate::app::theme::button::Look;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press::Press;
use crate::report::sentence;
use crate::study::settings::slot::Value;
use iced::widget::Column;

/// What happens to the choices.
#[derive(Clone, Debug)]
pub enum Message {
    /// One was taken.
    Took(usize),
}

/// A few values of which one stands.
#[derive(Clone, Debug)]
pub struct Choice {
    choices: Vec<sentence::Choice>,
    present: Option<usize>,
}

impl Choice {
    /// The choices, and which of them stands.
    #[must_use]
    pub fn new(choices: Vec<sentence::Choice>, value: Option<&Value>) -> Self {
        let present = choices
            .iter()
            .position(|choice| Some(&choice.value) == value);
        Self { choices, present }
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Took(at) if self.present == Some(at) => Action::Close,
            Message::Took(at) => match self.choices.get(at) {
                Some(choice) => Action::Commit(choice.value.clone()),
                None => Action::None,
            },
        }
    }

    /// The choices below each other.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let first = self.present.unwrap_or(0);
        let choices = self.choices.iter().enumerate().map(|(at, choice)| {
            let look = if self.present == Some(at) {
                Look::Chosen
            } else {
                Look::Row
            };
            let row = Press::new(
                text::plain(choice.label.as_str(), text::SANS),
                Message::Took(at),
            )
            .look(look)
            .fill();
            if at == first {
                row.id(FIELD).into()
            } else {
                row.into()
            }
        });
        Column::with_children(choices)
            .spacing(space::TIGHT / 2.0)
            .into()
    }
}
