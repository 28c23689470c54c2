//! A list of texts or numbers, typed with commas between them.

use crate::app::editor::{Action, FIELD};
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::study::settings::slot::Value;
use iced::widget::{column, row, text_input};
use iced::{Alignment, Length};

/// What happens to the list.
#[derive(Clone, Debug)]
pub enum Message {
    /// It is being typed.
    Typed(String),
    /// It is as it should be.
    Done,
}

/// A list that is being typed.
#[derive(Clone, Debug)]
pub struct List {
    draft: String,
}

impl List {
    /// Begins with the list that stands.
    #[must_use]
    pub fn new(value: Option<Value>) -> Self {
        let draft = match value {
            Some(Value::Texts(texts)) => texts.join(", "),
            Some(Value::Numbers(numbers)) => numbers
                .iter()
                .map(|number| number.get().to_string())
                .collect::<Vec<_>>()
                .join(", "),
            Some(_) | None => String::new(),
        };
        Self { draft }
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Typed(draft) => {
                self.draft = draft;
                Action::None
            }
            Message::Done => Action::Commit(Value::Text(self.draft.clone())),
        }
    }

    /// The list on a line.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let field = text_input("", &self.draft)
            .id(FIELD)
            .font(text::SANS)
            .size(text::BODY)
            .width(Length::Fill)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Done);
        column![
            row![field, press::main("Set", Message::Done)]
                .spacing(space::SMALL)
                .align_y(Alignment::Center),
            text::quiet("Several are separated by commas."),
        ]
        .spacing(space::TIGHT)
        .into()
    }
}
