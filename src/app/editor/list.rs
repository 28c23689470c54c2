//! A list of texts or numbers, typed with semicolons between them: a comma may belong to a text.

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
    began: String,
    sort: Sort,
}

/// What stands in the list.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Sort {
    Texts,
    Numbers,
}

impl List {
    /// Begins with the list that stands.
    #[must_use]
    pub fn new(value: Option<Value>) -> Self {
        let (draft, sort) = match value {
            Some(Value::Numbers(numbers)) => {
                let numbers = numbers.iter().map(|number| number.get().to_string());
                (numbers.collect::<Vec<_>>().join("; "), Sort::Numbers)
            }
            Some(Value::Texts(texts)) => (texts.join("; "), Sort::Texts),
            Some(_) | None => (String::new(), Sort::Texts),
        };
        Self {
            began: draft.clone(),
            draft,
            sort,
        }
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Typed(draft) => {
                self.draft = draft;
                Action::None
            }
            Message::Done if self.draft == self.began => Action::Close,
            Message::Done => Action::Commit(self.value()),
        }
    }

    /// The list as it is typed at present.
    #[must_use]
    pub fn typed(&self) -> &str {
        &self.draft
    }

    fn value(&self) -> Value {
        match self.sort {
            // The slot reads numbers as they were typed, and says what may stand there.
            Sort::Numbers => Value::Text(self.draft.clone()),
            Sort::Texts => {
                let texts = self.draft.split(';').map(str::trim);
                let texts = texts.filter(|text| !text.is_empty());
                Value::Texts(texts.map(str::to_owned).collect())
            }
        }
    }

    /// The draft, if it differs from what it began with.
    #[must_use]
    pub fn draft(&self) -> Option<Value> {
        (self.draft != self.began).then(|| self.value())
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
            text::quiet("Several are separated by semicolons."),
        ]
        .spacing(space::TIGHT)
        .into()
    }
}
