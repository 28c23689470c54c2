//! An ordered list of preparation steps: reorder, take away, add.

use crate::app::editor::{Action, FIELD};
use crate::app::theme::button::Look;
use crate::app::theme::{space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::eval::kind::step::{parameters, step_name};
use crate::study::settings::prepare::Step;
use crate::study::settings::slot::Value;
use iced::widget::{Column, Row, column, row};
use iced::{Alignment, Length};

/// What happens to the steps.
#[derive(Clone, Debug)]
pub enum Message {
    /// A step is taken before the one above it.
    Up(usize),
    /// A step is taken after the one below it.
    Down(usize),
    /// A step is taken away.
    Remove(usize),
    /// A step of the catalogue is added at the end.
    Add(usize),
    /// The steps are as they should be.
    Done,
}

/// Steps that are being arranged.
#[derive(Clone, Debug)]
pub struct Steps {
    steps: Vec<Step>,
    began: Vec<Step>,
    catalogue: Vec<Step>,
}

impl Steps {
    /// Begins with the steps that stand.
    #[must_use]
    pub fn new(value: Option<Value>) -> Self {
        let steps = match value {
            Some(Value::Steps(steps)) => steps,
            Some(_) | None => Vec::new(),
        };
        Self {
            began: steps.clone(),
            steps,
            catalogue: Step::catalogue(),
        }
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        let n_steps = self.steps.len();
        match message {
            Message::Up(at) if at > 0 && at < n_steps => self.steps.swap(at, at - 1),
            Message::Down(at) if at + 1 < n_steps => self.steps.swap(at, at + 1),
            Message::Remove(at) if at < n_steps => {
                let _ = self.steps.remove(at);
            }
            Message::Add(at) => self.steps.extend(self.catalogue.get(at).cloned()),
            Message::Done if self.steps == self.began => return Action::Close,
            Message::Done => return Action::Commit(Value::Steps(self.steps.clone())),
            Message::Up(_) | Message::Down(_) | Message::Remove(_) => {}
        }
        Action::None
    }

    /// The steps, and what can be added.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let n_steps = self.steps.len();
        let steps = self.steps.iter().enumerate().map(|(at, step)| {
            let details = parameters(step);
            row![
                text::quiet(format!("{}.", at + 1)).width(space::GAP + space::SMALL),
                text::body(step_name(step)),
                text::quiet(details).width(Length::Fill),
                press::words("Earlier", Message::Up(at)).only_if(at > 0),
                press::words("Later", Message::Down(at)).only_if(at + 1 < n_steps),
                press::words("Remove", Message::Remove(at)).look(Look::Attention),
            ]
            .spacing(space::SMALL)
            .align_y(Alignment::Center)
            .into()
        });
        let add = self.catalogue.iter().enumerate().map(|(at, step)| {
            press::words(step_name(step), Message::Add(at))
                .look(Look::Accent)
                .into()
        });
        column![
            Column::with_children(steps).spacing(space::TIGHT),
            text::quiet("Add as the last step:"),
            Row::with_children(add).spacing(space::TIGHT).wrap(),
            row![press::main("Set", Message::Done).id(FIELD)],
        ]
        .spacing(space::SMALL)
        .into()
    }
}
