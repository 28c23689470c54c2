//! A number or a text, typed on a line.

use crate::app::editor::{Action, FIELD};
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::base::number::{self, Precision};
use crate::report::sentence::{Wholeness, Word};
use crate::study::settings::slot::Value;
use iced::widget::{row, text_input};
use iced::{Alignment, Length};

/// What happens to the line.
#[derive(Clone, Debug)]
pub enum Message {
    /// It is being typed.
    Typed(String),
    /// It is as it should be.
    Done,
    /// The number is made larger or smaller by one.
    Stepped(i64),
}

/// A line that is being typed.
#[derive(Clone, Debug)]
pub struct Line {
    draft: String,
    began: String,
    hint: String,
    sort: Sort,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Sort {
    Whole,
    Any,
    Words,
}

impl Line {
    /// A number between two others.
    #[must_use]
    pub fn number(
        value: Option<&Value>,
        word: &Word,
        least: f64,
        most: f64,
        whole: Wholeness,
    ) -> Self {
        let shown = |number: f64| number::text(number, Precision::Full);
        let (sort, sort_words) = match whole {
            Wholeness::Whole => (Sort::Whole, "a whole number"),
            Wholeness::Any => (Sort::Any, "a number"),
        };
        let hint = match (least.is_finite(), most.is_finite() && most < 1e15) {
            (true, true) => format!("{sort_words} from {} to {}", shown(least), shown(most)),
            (true, false) => format!("{sort_words}, {} or more", shown(least)),
            (false, true) => format!("{sort_words}, {} or less", shown(most)),
            (false, false) => sort_words.to_owned(),
        };
        Self::of(typed(value, word), hint, sort)
    }

    /// Words of the user's own.
    #[must_use]
    pub fn words(value: Option<&Value>, word: &Word) -> Self {
        Self::of(typed(value, word), String::new(), Sort::Words)
    }

    fn of(draft: String, hint: String, sort: Sort) -> Self {
        Self {
            began: draft.clone(),
            draft,
            hint,
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
            Message::Done => Action::Commit(Value::Text(self.draft.clone())),
            Message::Stepped(by) => {
                if let Ok(number) = self.draft.trim().parse::<i64>() {
                    self.draft = number.saturating_add(by).to_string();
                }
                Action::None
            }
        }
    }

    /// The draft, if it differs from what it began with.
    #[must_use]
    pub fn draft(&self) -> Option<Value> {
        (self.draft != self.began).then(|| Value::Text(self.draft.clone()))
    }

    /// The line.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let width = match self.sort {
            Sort::Whole | Sort::Any => Length::Fixed(space::FIELD),
            Sort::Words => Length::Fill,
        };
        let field = text_input("", &self.draft)
            .id(FIELD)
            .font(text::SANS)
            .size(text::BODY)
            .width(width)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Done);
        let mut line = row![field].spacing(space::SMALL).align_y(Alignment::Center);
        if self.sort == Sort::Whole {
            line = line
                .push(press::words("Less", Message::Stepped(-1)))
                .push(press::words("More", Message::Stepped(1)));
        }
        line.push(press::main("Set", Message::Done))
            .push(text::quiet(self.hint.as_str()))
            .into()
    }
}

/// What stands in the slot, as it would be typed.
fn typed(value: Option<&Value>, word: &Word) -> String {
    match value {
        Some(Value::Number(number)) => format!("{}", number.get()),
        Some(Value::Whole(number)) => number.to_string(),
        Some(Value::Text(text) | Value::Choice(text)) => text.clone(),
        Some(Value::Nothing) => String::new(),
        Some(
            Value::Column(_)
            | Value::Columns(_)
            | Value::Cell(_)
            | Value::File { .. }
            | Value::Steps(_)
            | Value::Texts(_)
            | Value::Numbers(_)
            | Value::Corrections(_)
            | Value::Exclusions(_)
            | Value::Prose(_),
        )
        | None => word.text.clone(),
    }
}
